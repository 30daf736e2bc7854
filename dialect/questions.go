package dialect

import (
	"math/big"
	"strings"

	"portlight/dialect/number"
)

// trimQuestion is the text of a question or limit, comments left out, with
// one space where lines were joined.
func trimQuestion(text string) string {
	lines := strings.Split(text, "\n")
	for i, line := range lines {
		if at := strings.IndexByte(line, '#'); at >= 0 {
			line = line[:at]
		}
		lines[i] = strings.TrimSpace(line)
	}
	return strings.TrimSpace(strings.Join(lines, " "))
}

// question reads a question from outside the file.
func (b *builder) question(main *unit, file *File, st *TellStatement) (*Question, []Finding) {
	c := &checker{
		byFile: map[*File]*unit{}, table: &symbolTable{silent: true},
		seen: map[findingKey]bool{}, expectations: map[*File][]Expectation{}, numbers: map[string]operand{}, harmless: true,
		tolerances: map[toleranceKey]*Tolerance{}, angular: map[*big.Rat]number.Exact{}, blame: b.c.blame,
	}
	// The names are looked up in the main file's scope; what is reported lies
	// in the question's own text.
	outside := *main.scope
	outside.unit = &unit{file: file, main: true, scope: main.scope}
	c.linkAsked(&outside, st.What)
	c.linkQualifiers(&outside, st.Qualifiers)
	own := b.c
	b.c = c
	defer func() { b.c = own }()
	e := &evaluator{b: b, inst: main.static, in: inSignal, what: "a question", file: file}
	c.blame.culprit = nil
	q, _ := b.ask(e, st)
	var findings []Finding
	for _, f := range c.findings {
		findings = append(findings, *f)
	}
	if q == nil {
		if len(findings) == 0 {
			findings = append(findings, Finding{
				Code: "unknown-name", Severity: Error,
				Message: leftOutWhy(c.blame),
				Origin:  Origin{File: file, Span: Span{0, len(file.Text)}},
			})
		}
		return nil, findings
	}
	q.Text = trimQuestion(file.Text)
	q.Origin = Origin{File: file, Span: st.Span}
	return q, findings
}

// leftOutWhy tells why a sound question from outside has no answer.
func leftOutWhy(m *blame) string {
	if m.culprit != nil {
		return m.why(false)
	}
	return "what the question names was left out of the network because of the file's errors"
}

// ask reads what tell asks.
func (b *builder) ask(e *evaluator, st *TellStatement) (*Question, bool) {
	q := &Question{Ports: [2]int{-1, -1}}
	whole := operand{ok: true, shape: ShapeNumber}
	switch what := st.What.(type) {
	case Expr:
		o := e.eval(what, 0)
		if !o.ok {
			return nil, false
		}
		whole = o
		if quantity, ok := o.x.(*Quantity); ok && o.shape == ShapeEquivalent {
			q.Sort, q.Ports[0] = AskThevenin, quantity.Probe.Port
			if quantity.Probe.Letter == 'n' {
				q.Sort = AskNorton
			}
			break
		}
		q.What = o.finish()
		if convert, ok := what.(*ConvertExpr); ok {
			q.Unit = convert.Unit.Text()
		}
	case *InitialQuestion:
		q.Sort = AskInitial
	case *RootsQuestion:
		if !b.askRoots(e, q, what) {
			return nil, false
		}
		whole.shape = ShapeFunction
	case *MatrixQuestion:
		if !b.askMatrix(e, q, what) {
			return nil, false
		}
		whole.shape = ShapeFunction
	default:
		return nil, false
	}
	var ok bool
	q.Qualifiers, ok = b.qualifiers(e, st.Qualifiers, &whole, q.Sort, q.What, nil)
	return q, ok
}

func (b *builder) askRoots(e *evaluator, q *Question, what *RootsQuestion) bool {
	q.Sort = AskPoles
	if what.Word.Text == "zeros" {
		q.Sort = AskZeros
	}
	if what.X == nil {
		if q.Sort == AskZeros {
			e.report(what.Span, "arguments", "zeros are those of a function: zeros of H")
			return false
		}
		return true
	}
	o := e.eval(what.X, 0)
	if !o.ok || !e.isValue(&o, what.X.Extent()) {
		return false
	}
	if o.shape != ShapeFunction || o.bent {
		e.report(what.X.Extent(), "wrong-sort", "%s are those of a network function, and %s is %s", what.Word.Text,
			e.written(what.X.Extent()), pickWord(o.bent, "not rational in s", e.shapeWords(&o)))
		return false
	}
	q.What = o.finish()
	return true
}

func (b *builder) askMatrix(e *evaluator, q *Question, what *MatrixQuestion) bool {
	q.Sort, q.Set = AskMatrix, what.Set.Text
	for i, w := range [...]Word{what.First, what.Second} {
		sym := e.inst.scope.names[w.Text]
		if sym == nil || sym.Sort != PortSymbol {
			return false
		}
		q.Ports[i] = e.inst.slots[sym.index]
	}
	if q.Ports[0] == q.Ports[1] {
		e.report(what.Second.Span, "wrong-sort", "a matrix is between two different ports, and both are %s", what.First.Text)
		return false
	}
	if what.Reference == nil {
		if what.Set.Text == "s" {
			r := e.report(what.Span, "arguments", "scattering parameters need a reference resistance: reference 50 Ω")
			r.repair(e.text(), Span{what.Span.End, what.Span.End}, " reference 50 Ω", "add reference 50 Ω")
			return false
		}
		return true
	}
	if what.Set.Text != "s" {
		e.report(Span{what.ReferenceWord.Span.Start, what.Reference.Extent().End}, "arguments",
			"only scattering parameters (matrix s) have a reference resistance")
		return false
	}
	const name = "the reference resistance"
	inner := &evaluator{b: b, inst: e.inst, in: inConstant, what: name, file: e.file}
	o := inner.eval(what.Reference, 0)
	if !o.ok || !inner.fits(what.Reference, &o, DimensionResistance, name) || !inner.mustBeConstant(what.Reference, &o) ||
		!inner.positive(what.Reference, &o, name) {
		return false
	}
	q.Reference = &o.value
	return true
}

// qualifiers reads what restricts a question or limit.
func (b *builder) qualifiers(e *evaluator, list []*Qualifier, whole *operand, sort QuestionSort, left, right Expression) (Qualifiers, bool) {
	var q Qualifiers
	ok := true
	seen := map[string]*Qualifier{}
	for _, item := range list {
		word := item.Keyword.Text
		if word == "to" {
			word = "from"
		}
		if earlier := seen[word]; earlier != nil && word != "with" && word != "without" {
			e.report(item.Span, "qualifier", "%s is given twice", word).relate(e.text(), earlier.Span, "here already")
			ok = false
			continue
		}
		seen[word] = item
		ok = b.qualifier(e, item, whole, sort, &q, left, right) && ok
	}
	if q.At != nil && (q.From != nil || q.To != nil || q.Before != nil) {
		e.report(seen["at"].Span, "qualifier", "at names one point, which leaves no room for a range or a second point")
		return q, false
	}
	if q.Before != nil && (q.From != nil || q.To != nil) {
		e.report(seen["before"].Span, "qualifier", "before names one instant, which leaves no room for a range")
		return q, false
	}
	if q.From != nil && q.To != nil {
		if order, decided := q.From.Value.Cmp(q.To.Value); decided && order >= 0 {
			e.report(seen["from"].Span, "qualifier", "the range is empty: it ends before it begins")
			return q, false
		}
	}
	return q, ok
}

func (b *builder) qualifier(e *evaluator, item *Qualifier, whole *operand, sort QuestionSort, q *Qualifiers, left, right Expression) bool {
	switch item.Keyword.Text {
	case "with":
		return b.withSwitch(e, item, whole, q)
	case "without":
		return b.without(e, item, q)
	}
	want, what, ok := b.pointOf(e, item, whole, sort, left, right)
	if !ok {
		return false
	}
	point := func(x Expr) (*Constant, bool) {
		if x == nil {
			return nil, true
		}
		if e.file == nil {
			b.expect(e.inst, x.Extent(), want, what)
		}
		inner := &evaluator{b: b, inst: e.inst, in: inConstant, what: what, file: e.file}
		o := inner.eval(x, 0)
		if !o.ok || !inner.fits(x, &o, want, what) || !inner.mustBeConstant(x, &o) || !inner.notNegative(x, &o, what) {
			return nil, false
		}
		return e.point(&o), true
	}
	var ok2 bool
	switch item.Keyword.Text {
	case "at":
		q.At, ok = point(item.Value)
	case "before":
		q.Before, ok = point(item.Value)
	case "to":
		q.To, ok = point(item.To)
	case "from":
		q.From, ok = point(item.Value)
		q.To, ok2 = point(item.To)
		ok = ok && ok2
	}
	return ok
}

// pointOf says whether a question takes a frequency or a time, or neither.
func (b *builder) pointOf(e *evaluator, item *Qualifier, whole *operand, sort QuestionSort, left, right Expression) (Dimension, string, bool) {
	word := item.Keyword.Text
	shape := whole.shape
	if shape == ShapeNumber || shape == ShapeFact {
		shape = innerShape(left, right)
		if shape == ShapeSignal && (word == "at" || word == "before") {
			shape = ShapeNumber
		}
		if shape == ShapeFunction && word != "at" {
			shape = ShapeNumber
		}
		if shape == ShapeFunction { // a measure of a function has no frequency
			shape = ShapeNumber
		}
	}
	switch {
	case sort == AskPoles, sort == AskZeros, sort == AskInitial, shape == ShapeNumber, shape == ShapeFact:
		e.report(item.Span, "qualifier", "%s has no effect here: this is one number or fact, not a function or signal", word)
		return Dimension{}, "", false
	case sort == AskThevenin, sort == AskNorton:
		if word == "at" {
			return DimensionFrequency, "the frequency asked about", true
		}
		e.report(item.Span, "qualifier", "%s has no place here: ask for the open-circuit voltage or the impedance on its own", word)
		return Dimension{}, "", false
	case shape == ShapeSignal:
		return DimensionTime, "the time asked about", true
	case word == "before":
		e.report(item.Span, "qualifier", "before is a left limit in time, and this is a function of frequency")
		return Dimension{}, "", false
	}
	return DimensionFrequency, "the frequency asked about", true
}

// innerShape says whether a number is a measure of a signal or of a function.
func innerShape(list ...Expression) Shape {
	for _, x := range list {
		switch x := x.(type) {
		case *Call:
			info := callTable[x.Name]
			switch {
			case info == nil:
			case info.Group == signalMeasure, info.Group == partMeasure:
				return ShapeSignal
			case info.Group == functionMeasure:
				return ShapeFunction
			default:
				if s := innerShape(x.Args...); s != ShapeNumber {
					return s
				}
			}
		case *Negate:
			if s := innerShape(x.X); s != ShapeNumber {
				return s
			}
		case *Binary:
			if s := innerShape(x.X, x.Y); s != ShapeNumber {
				return s
			}
		}
	}
	return ShapeNumber
}

// withSwitch reads with SWITCH open|closed.
func (b *builder) withSwitch(e *evaluator, item *Qualifier, whole *operand, q *Qualifiers) bool {
	if len(item.Names) == 0 {
		return false
	}
	part, ok := e.namedPart(item.Names[0], "a switch", func(k Kind) bool { return k == Switch })
	if !ok {
		return false
	}
	if whole.shape == ShapeSignal || whole.shape == ShapeNumber && whole.has&hasQuantity != 0 && signalInside(whole) {
		e.report(item.Span, "qualifier", "a signal in time follows the events of the switch: with … is for functions, z, y and poles")
		return false
	}
	for _, s := range q.Switches {
		if s.Part == part {
			e.report(item.Span, "qualifier", "the state of %s is given twice", b.d.Parts[part].Name)
			return false
		}
	}
	q.Switches = append(q.Switches, SwitchState{Part: part, Closed: item.State.Text == "closed"})
	return true
}

func signalInside(o *operand) bool { return o.x != nil && innerShape(o.x) == ShapeSignal }

// without reads without PART, …
func (b *builder) without(e *evaluator, item *Qualifier, q *Qualifiers) bool {
	good := true
	for _, n := range item.Names {
		if inst, sym := e.find(n); sym != nil && sym.Sort == UseSymbol {
			if child := inst.child(sym); child != nil {
				for i := child.firstPart; i < child.lastPart; i++ {
					q.Without = append(q.Without, i)
				}
			}
			continue
		}
		part, ok := e.namedPart(n, "a part", func(Kind) bool { return true })
		if good = good && ok; ok {
			q.Without = append(q.Without, part)
		}
	}
	return good
}

// point is a constant frequency or time; equal frequencies share their value
// in rad/s.
func (e *evaluator) point(o *operand) *Constant {
	if !o.isHertz() {
		return o.finish().(*Constant)
	}
	value, known := e.b.c.angular[o.value.Rat()]
	if !known {
		value = o.radians()
		e.b.c.angular[o.value.Rat()] = value
	}
	return &Constant{Typed: Typed{Dimension: DimensionFrequency, Form: ShapeNumber, Span: o.span}, Value: value, Hertz: true}
}
