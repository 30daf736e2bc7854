package dialect

import (
	"strings"

	"portlight/dialect/number"
)

// evaluator works out expressions in one setting of one instance.
type evaluator struct {
	b    *builder
	inst *instance
	in   setting
	what string // "the value of resistor R1", for messages
	file *File  // where the text is, when it is not the instance's file
}

// maxSize bounds the tree that an expression becomes when its lets are put in.
const maxSize = 50000

func (e *evaluator) origin(span Span) Origin {
	if e.file != nil {
		return Origin{File: e.file, Span: span}
	}
	return e.inst.origin(span)
}

func (e *evaluator) text() *File {
	if e.file != nil {
		return e.file
	}
	return e.inst.scope.unit.file
}

// report adds a finding at a place of the expression's text.
func (e *evaluator) report(span Span, code Code, format string, args ...any) *reported {
	return e.b.c.reportAt(e.origin(span), code, format, args...)
}

// written is the text of a span, shortened.
func (e *evaluator) written(span Span) string {
	text := e.text().Text
	if span.Start < 0 || span.End > len(text) || span.Start > span.End {
		return ""
	}
	return shorten(strings.TrimSpace(text[span.Start:span.End]))
}

// eval works out an expression. Findings are reported where they arise; the
// result is then not ok and stays silent.
func (e *evaluator) eval(x Expr, depth int) operand {
	if depth > maxDepth {
		e.report(x.Extent(), "too-large", "the expression is nested too deeply")
		return operand{}
	}
	o := e.evalNode(x, depth)
	if o.ok {
		o.span = x.Extent()
		if o.constant && !o.value.InRange() {
			e.report(o.span, "no-value", "%s: %s", e.written(o.span), failure(number.ErrRange))
			return operand{}
		}
		if o.size > maxSize {
			e.report(o.span, "too-large", "the expression becomes too large once its constants are put in")
			return operand{}
		}
	}
	return o
}

func (e *evaluator) evalNode(x Expr, depth int) operand {
	switch x := x.(type) {
	case *NumberExpr:
		return e.number(x)
	case *NameExpr:
		return e.name(x)
	case *SubscriptExpr:
		return e.quantity(x)
	case *CallExpr:
		return e.call(x, depth)
	case *UnaryExpr:
		return e.unary(x, depth)
	case *BinaryExpr:
		a := e.eval(x.X, depth+1)
		b := e.eval(x.Y, depth+1)
		if !a.ok || !b.ok {
			return operand{}
		}
		return e.binary(x, a, b)
	case *ParenExpr:
		return e.eval(x.X, depth+1)
	case *ConvertExpr:
		return e.convert(x, depth)
	}
	return operand{} // a hole or a misplaced code: reported by the parser
}

// number works out a number with its unit.
func (e *evaluator) number(x *NumberExpr) operand {
	if x.Unit != nil && len(x.Unit.Factors) > 1 && !e.checkNameLikeUnit(x) {
		return operand{}
	}
	key := x.Number.Text
	if x.Unit != nil {
		text := e.text().Text
		key = text[x.Number.Span.Start:x.Unit.Span.End]
	}
	if known, ok := e.b.c.numbers[key]; ok {
		return known
	}
	value, err := number.Parse(x.Number.Text)
	if err != nil {
		if x.Number.Present() {
			e.report(x.Number.Span, "no-value", "%s: %s", e.written(x.Number.Span), failure(err))
		}
		return operand{}
	}
	o := constantOperand(value, DimensionNumber, x.Span)
	o.bare = x.Unit == nil
	if x.Unit != nil && !e.applyUnit(&o, x.Unit) {
		return operand{}
	}
	e.b.c.numbers[key] = o
	return o
}

// applyUnit multiplies a number by its unit.
func (e *evaluator) applyUnit(o *operand, u *UnitExpr) bool {
	m, problem := u.meaning()
	switch problem {
	case unitReported:
		return false
	case unitLevelPart:
		e.report(u.Span, "unit-mismatch", "a level in dB stands alone: %s is no unit", u.Text())
		return false
	case unitTooHigh:
		e.report(u.Span, "no-value", "the powers in the unit %s are too high", u.Text())
		return false
	}
	o.dim, o.hz, o.rad = m.dimension, int8(m.hertz), int8(m.radian)
	if m.level != nil {
		return m.level.sort == unitLevel || e.absoluteLevel(o, m.level, u)
	}
	if m.factor.Num().BitLen() != 1 || m.factor.Denom().BitLen() != 1 {
		o.value = o.value.Mul(number.FromRat(m.factor))
	}
	for range max(m.degrees, -m.degrees) {
		degree, _ := number.Pi().Quo(number.FromInt(180))
		if m.degrees > 0 {
			o.value = o.value.Mul(degree)
			continue
		}
		inverse, _ := degree.Inv()
		o.value = o.value.Mul(inverse)
	}
	return true
}

// absoluteLevel turns dBV and its like into a voltage.
func (e *evaluator) absoluteLevel(o *operand, unit *UnitInfo, u *UnitExpr) bool {
	ratio, err := number.FromDecibel(o.value)
	if err != nil {
		e.report(u.Span, "no-value", "this level: %s", failure(err))
		return false
	}
	reference, err := number.Sqrt(number.FromRat(unit.factor))
	if err != nil {
		return false
	}
	o.value = ratio.Mul(reference)
	return true
}

// checkNameLikeUnit reports a chained unit symbol that is also a constant, a
// function or a part with a value.
func (e *evaluator) checkNameLikeUnit(x *NumberExpr) bool {
	for i, f := range x.Unit.Factors {
		if i == 0 || !f.Known {
			continue
		}
		sym := e.inst.scope.visible(f.Symbol.Text)
		if sym == nil || !sym.hasValue() {
			continue
		}
		before := x.Unit.Factors[i-1].Span.End
		mark := "*"
		if f.Divide {
			mark = "/"
		}
		r := e.report(f.Span, "name-like-unit",
			"%s is read as a unit here, but it is also the %s %s: say which is meant", f.Symbol.Text, sym.describe(), sym.Name)
		r.relate(sym.File, sym.Span, "the %s %s", sym.describe(), sym.Name)
		file, rest := e.text(), e.written(f.Span)
		r.repair(file, Span{before, f.Span.End}, " "+mark+" "+rest, "the "+sym.describe()+" "+sym.Name)
		r.repair(file, Span{before, f.Span.End}, mark+"(1 "+rest+")", "the unit "+f.Prefix+f.Base)
		r.choose()
		return false
	}
	return true
}

// hasValue says that the name can stand in an expression.
func (s *Symbol) hasValue() bool {
	switch s.Sort {
	case LetSymbol, ParameterSymbol, FunctionSymbol:
		return true
	case PartSymbol:
		return s.Kind == Resistor || s.Kind == Inductor || s.Kind == Capacitor
	}
	return false
}

// unary works out a sign. A minus before a number in dBV belongs to the level.
func (e *evaluator) unary(x *UnaryExpr, depth int) operand {
	if n, ok := x.X.(*NumberExpr); ok && x.Op == '-' && isAbsoluteLevel(n) {
		negative := *n
		negative.Number.Text = "-" + n.Number.Text
		value, err := number.Parse(negative.Number.Text)
		if err != nil {
			return e.number(n)
		}
		o := constantOperand(value, DimensionNumber, x.Span)
		if !e.applyUnit(&o, n.Unit) {
			return operand{}
		}
		return o
	}
	o := e.eval(x.X, depth+1)
	if !o.ok || !e.isValue(&o, x.X.Extent()) || x.Op != '-' {
		return o
	}
	if o.constant {
		o.value = o.value.Neg()
		return o
	}
	o.size++
	o.span = x.Span
	o.x = &Negate{Typed: o.typed(), X: o.x}
	return o
}

func isAbsoluteLevel(n *NumberExpr) bool {
	if n.Unit == nil || len(n.Unit.Factors) != 1 {
		return false
	}
	info := unitIndex()[n.Unit.Factors[0].Base]
	return info != nil && info.sort == unitAbsoluteLevel
}

// isValue reports a fact or an equivalent where a value is needed.
func (e *evaluator) isValue(o *operand, span Span) bool {
	switch o.shape {
	case ShapeFact:
		e.report(span, "wrong-sort", "%s is true or false and cannot be calculated with", e.written(span))
		return false
	case ShapeEquivalent:
		e.report(span, "wrong-sort", "%s is a pair of a source and an impedance: it can be asked, not calculated with", e.written(span))
		return false
	}
	return true
}

// convert works out "in Hz" and "in rad/s".
func (e *evaluator) convert(x *ConvertExpr, depth int) operand {
	o := e.eval(x.X, depth+1)
	if !o.ok || x.Unit == nil || len(x.Unit.Factors) == 0 || !e.isValue(&o, x.X.Extent()) {
		return operand{}
	}
	if o.dim != DimensionRate {
		e.report(x.X.Extent(), "unit-mismatch", "only a frequency converts to %s, and %s is %s",
			x.Unit.Text(), e.written(x.X.Extent()), e.describe(&o))
		return operand{}
	}
	toHertz := x.Unit.Factors[0].Base == "Hz"
	switch {
	case toHertz && o.isRadian():
		o = e.overTwoPi(o)
		o.hz, o.rad = 1, 0
	case toHertz:
		o.hz, o.rad = 1, 0
	case o.isHertz():
		o = e.timesTwoPi(o)
		o.hz, o.rad = 0, 1
	default:
		o.hz, o.rad = 0, 1
	}
	o.pi, o.either = false, false
	return o
}

func (e *evaluator) overTwoPi(o operand) operand {
	if o.constant {
		o.value, _ = o.value.Quo(twoPi)
		return o
	}
	o.size += 2
	o.x = &Binary{Typed: Typed{Dimension: o.dim, Form: o.shape, Span: o.span}, Op: '/', X: o.x, Y: twoPiConstant}
	return o
}

func (e *evaluator) timesTwoPi(o operand) operand {
	if o.constant {
		o.value = o.value.Mul(twoPi)
		return o
	}
	if b, ok := o.x.(*Binary); ok && b.Op == '/' && b.Y == Expression(twoPiConstant) {
		o.x = b.X
		return o
	}
	o.size += 2
	o.x = &Binary{Typed: Typed{Dimension: o.dim, Form: o.shape, Span: o.span}, Op: '*', X: o.x, Y: twoPiConstant}
	return o
}

// describe puts what an operand is into words.
func (e *evaluator) describe(o *operand) string {
	switch {
	case o.isHertz(), o.isRadian():
		return DimensionFrequency.String()
	}
	return o.sorted().String()
}
