package dialect

import (
	"fmt"
	"strings"
)

// tell reads: tell WHAT {QUALIFIER}.
func (p *parser) tell(head Head) Statement {
	s := &TellStatement{Head: head}
	p.begin(&s.Head)
	s.What = p.what()
	s.Qualifiers = p.qualifiers()
	p.finish()
	return s
}

// question reads the one question of ParseQuestion.
func (p *parser) question() {
	f := p.file
	for p.line < f.Lines.Count() && len(p.tokens) == 0 {
		p.scan(f.Lines.Span(p.line))
		p.line++
	}
	if len(p.tokens) == 0 {
		s := &BrokenStatement{Head{Span: Span{0, 0}, Broken: true}}
		f.Statements = []Statement{s}
		p.begin(&s.Head)
		p.fail(Span{0, len(p.text)}, "a question is missing")
		return
	}
	last := p.tokens[len(p.tokens)-1]
	head := Head{Span: Span{p.tokens[0].start, last.end}}
	p.tokens = append(p.tokens, token{tEnd, last.end, last.end})
	if p.isWord("tell") && p.peekAt(1).kind != tEnd {
		head.Keyword = p.word(p.take())
	}
	if head.Span.End-head.Span.Start > maxStatement {
		f.Statements = []Statement{p.oversized(head.Span)}
		return
	}
	f.Statements = []Statement{p.tell(head)}
	for ; p.line < f.Lines.Count(); p.line++ {
		if !p.blank(p.line) && !p.commentOnly(p.line) {
			p.failed = false
			p.fail(f.Lines.Span(p.line), "a question is one line")
			return
		}
	}
}

// what reads what tell asks.
func (p *parser) what() Asked {
	p.want(WantQuestion, nil)
	next := p.peekAt(1)
	alone := next.kind == tEnd || next.kind == tWord
	switch {
	case p.isWord("initial") && alone:
		return &InitialQuestion{p.word(p.take())}
	case (p.isWord("poles") || p.isWord("zeros")) && alone:
		return p.roots()
	case p.isWord("matrix") && (alone || next.kind == tOpen):
		return p.matrix()
	}
	return p.expr()
}

// roots reads: (poles|zeros) [of EXPR].
func (p *parser) roots() Asked {
	t := p.take()
	q := &RootsQuestion{Span: t.span(), Word: p.word(t)}
	if p.want(WantKeyword, ofWord); p.isWord("of") {
		q.Of = p.word(p.take())
		q.X = p.expr()
		q.Span.End = max(p.last(), q.Span.End)
	}
	return q
}

var ofWord = []string{"of"}

// matrix reads: matrix SET [ PORT , PORT ] [reference EXPR].
func (p *parser) matrix() Asked {
	t := p.take()
	q := &MatrixQuestion{Span: t.span(), Word: p.word(t)}
	q.Set = p.choice(WantMatrixSet, matrixSets, "a set of two-port parameters")
	q.Open = p.expect(tOpen, "[", "the two ports are missing here: matrix z[in,out]")
	q.First = p.matrixPort()
	q.Comma = p.expect(tComma, ",", "a matrix takes two ports, separated by a comma")
	q.Second = p.matrixPort()
	q.Close = p.expect(tClose, "]", "`]` is missing here")
	if p.want(WantKeyword, referenceWord); p.isWord("reference") {
		q.ReferenceWord = p.word(p.take())
		p.unit = "Ω"
		q.Reference = p.expr()
		p.unit = ""
	}
	q.Span.End = max(p.last(), q.Span.End)
	return q
}

var referenceWord = []string{"reference"}

// matrixPort reads a port's name.
func (p *parser) matrixPort() Word {
	if p.is(tWord) {
		return p.word(p.take())
	}
	p.missing(WantPort, "a port's name")
	return p.holeWord(WantPort)
}

// require reads: require EXPR [REL EXPR] {QUALIFIER} [nominal].
func (p *parser) require(head Head) Statement {
	s := &RequireStatement{Head: head}
	p.begin(&s.Head)
	s.Left = p.expr()
	var chained Span
	if p.isWord("between") {
		p.between(s)
	} else if rel, ok := p.relation(); ok {
		s.Relation = rel
		s.Right = p.expr()
		if p.relationAhead() {
			chained = p.chained()
		}
	}
	s.Qualifiers = p.qualifiers()
	if p.want(WantKeyword, nominalWord); p.isWord("nominal") {
		s.Nominal = p.word(p.take())
	}
	p.finish()
	if chained.End > 0 && !p.failed {
		p.splitLimit(s, chained)
	}
	return s
}

var nominalWord = []string{"nominal"}

// relationAhead says that the current token is a relation.
func (p *parser) relationAhead() bool {
	switch p.peek().kind {
	case tLess, tLessEq, tGreater, tGreaterEq:
		return true
	}
	return false
}

// relation reads <= >= < >, and slips of them.
func (p *parser) relation() (Word, bool) {
	t := p.peek()
	switch t.kind {
	case tLess, tLessEq, tGreater, tGreaterEq:
		w := p.word(p.take())
		if p.is(tEquals) && p.touches(0) {
			p.fail(Span{t.start, p.peek().end}, "relations are <= >= < >")
			p.failed = false
			p.take()
		}
		return w, true
	case tForeign:
		for _, r := range relations[:2] {
			if p.foreignAs(r) {
				return Word{t.span(), r}, true
			}
		}
	case tEquals:
		return p.equality(), true
	}
	p.want(WantRelation, relations)
	return Word{}, false
}

// equality reports =, == , =< and => where a relation must stand.
func (p *parser) equality() Word {
	t := p.take()
	span, write := t.span(), ""
	for p.touches(0) && (p.is(tEquals) || p.is(tLess) || p.is(tGreater)) {
		n := p.take()
		span.End = n.end
		switch n.kind {
		case tLess:
			write = "<="
		case tGreater:
			write = ">="
		}
	}
	if write != "" {
		p.fail(span, fmt.Sprintf("this relation is written `%s`", write), p.only("write `"+write+"`", span, write))
	} else {
		p.fail(span, "a limit is a relation <= >= < >; for a value with a tolerance write abs(x - value) <= tolerance")
		write = "<="
	}
	p.failed = false
	return Word{span, write}
}

// chained reads "REL EXPR" after a limit, and gives its span.
func (p *parser) chained() Span {
	start := p.take().start
	p.expr()
	return Span{start, p.last()}
}

// splitLimit reports a limit with two relations, and offers two limits.
func (p *parser) splitLimit(s *RequireStatement, chained Span) {
	left, middle := s.Left.Extent(), s.Right.Extent()
	indent := p.text[p.file.Lines.Span(p.file.Lines.Line(s.Span.Start)).Start:s.Span.Start]
	rest := p.text[chained.End:s.Span.End]
	write := fmt.Sprintf("%s%s\n%srequire %s %s%s", p.text[left.Start:middle.End], rest, indent,
		p.text[middle.Start:middle.End], p.text[chained.Start:chained.End], rest)
	p.fail(Span{left.Start, chained.End}, "a limit has one relation; write two limits",
		p.only("write two limits", Span{left.Start, s.Span.End}, write))
}

// qualifiers reads {QUALIFIER}.
func (p *parser) qualifiers() []*Qualifier {
	var list []*Qualifier
	for {
		t := p.peek()
		if t.kind != tWord {
			p.want(WantQualifier, nil)
			return list
		}
		word := p.read(t)
		if !startsQualifier(word) {
			return list
		}
		q := fresh(&p.slabs.qualifiers)
		q.Span, q.Keyword = t.span(), p.word(t)
		switch word {
		case "at", "before":
			p.take()
			q.Value = p.expr()
		case "from":
			p.take()
			q.Value = p.expr()
			if p.want(WantKeyword, toWord); p.isWord("to") {
				q.ToWord = p.word(p.take())
				q.To = p.expr()
			}
		case "to":
			p.take()
			q.To = p.expr()
		case "with":
			p.take()
			q.Names = []*NameExpr{p.qualifierName(WantSwitch, "a switch's name")}
			q.State = p.choice(WantKeyword, switchWords, "the state of the switch")
		case "without":
			p.take()
			p.without(q)
		}
		q.Span.End = max(p.last(), q.Span.End)
		list = add(&p.slabs.qualifierRoom, list, q)
	}
}

var toWord = []string{"to"}

// startsQualifier says that a word begins a qualifier.
func startsQualifier(s string) bool {
	switch s {
	case "at", "before", "from", "to", "with", "without":
		return true
	}
	return false
}

// without reads NAME {"," NAME}.
func (p *parser) without(q *Qualifier) {
	q.Names = append(q.Names, p.qualifierName(WantPart, "a part's name"))
	for p.is(tComma) {
		p.take()
		q.Names = append(q.Names, p.qualifierName(WantPart, "a part's name"))
	}
}

// qualifierName reads a part's name in a qualifier, inner ones with dots.
func (p *parser) qualifierName(want Want, what string) *NameExpr {
	if p.is(tWord) {
		return p.qualified()
	}
	p.missing(want, what)
	return oneWord(p.holeWord(want))
}

// unknown reports a line that begins no statement.
func (p *parser) unknown(head Head) Statement {
	s := &BrokenStatement{head}
	p.begin(&s.Head)
	p.head.Broken = true
	t := p.peek()
	switch {
	case p.commentAhead():
		p.otherComment(t)
	case t.kind == tBad || t.kind == tForeign:
		p.foreign(t)
	case t.kind == tWord && p.peekAt(1).kind == tMinus:
		p.bareBoxes()
	case t.kind == tWord && p.peekAt(1).kind == tEquals:
		p.fail(t.span(), fmt.Sprintf("`let` is missing before a constant, or the kind before a part: let %s = …, resistor %s = …", p.read(t), p.read(t)),
			p.repair("insert `let`", Span{t.start, t.start}, "let "))
	case t.kind == tWord && isOptionWord(p.read(t)):
		p.fail(t.span(), fmt.Sprintf("`%s` begins an option, which goes on a statement whose line above ends in a comma", p.read(t)))
	case t.kind == tWord:
		p.unknownKind(t)
	case t.kind == tBrace:
		p.fail(t.span(), "`{` stands at the end of a subnetwork's first line")
	default:
		p.fail(t.span(), fmt.Sprintf("no statement starts with %s", p.describe()))
	}
	h := p.hole(WantStatement, nil)
	h.Span = Span{t.start, t.end}
	p.at = len(p.tokens) - 1
	return s
}

// commentAhead says that the line starts with the sign of a comment in some
// other notation.
func (p *parser) commentAhead() bool {
	t := p.peek()
	switch t.kind {
	case tSlashes, tStar, tUnitMark:
		return true
	case tSlash, tMinus:
		return p.touches(1) && (p.peekAt(1).kind == tStar || p.peekAt(1).kind == tMinus)
	}
	return t.kind == tBad && p.text[t.start] == ';'
}

// otherComment reports the sign of a comment in some other notation.
func (p *parser) otherComment(t token) {
	end := t.end
	for p.peekAt(1).kind != tEnd && p.touches(1) && p.peekAt(1).kind == t.kind {
		end = p.peekAt(1).end
		p.take()
	}
	span := Span{t.start, end}
	p.fail(span, "a comment starts with `#`", p.only("write `#`", span, "#"))
}

// bareBoxes reports a path whose parts stand in no boxes: in - R1 - out.
func (p *parser) bareBoxes() {
	last := p.tokens[len(p.tokens)-2]
	span := Span{p.peek().start, last.end}
	var b strings.Builder
	for i, t := range p.tokens[:len(p.tokens)-1] {
		named := t.kind == tWord || i > 0 && (t.kind == tDigits || t.kind == tNumber)
		switch {
		case (i%2 == 0) != named, i%2 == 1 && t.kind != tMinus:
			b.Reset()
			b.WriteByte('!')
		case i%4 == 1:
			b.WriteString(" -[")
		case i%4 == 3:
			b.WriteString("]- ")
		default:
			b.WriteString(p.read(t))
		}
	}
	message := "a part in a path stands in a box: in -[R1]- out"
	if len(p.tokens) == 4 && !strings.Contains(b.String(), "!") {
		from, to := p.tokens[0].end, p.tokens[2].start
		p.joinNodes(Span{from, to}, span, " ", " ")
		return
	}
	if write := b.String(); len(p.tokens)%4 == 2 && !strings.Contains(write, "!") {
		p.fail(span, message, p.only("write `"+shorten(write)+"`", span, write))
		return
	}
	p.fail(span, message)
}

// otherWorlds explains words for things that these networks do not hold, or
// hold under another word.
var otherWorlds = map[string]string{
	"diode":    nonlinear + "; a conducting or blocking diode is a switch",
	"zener":    nonlinear + "; a conducting or blocking diode is a switch",
	"led":      nonlinear + "; a conducting diode is a voltage source and a resistor in series",
	"varistor": nonlinear, "thermistor": nonlinear + "; around one temperature it is a resistor",
	"transistor": nonlinear + "; around its bias it is a current source that depends on a voltage: current source f = 40 mS * v[b,e]",
	"mosfet":     nonlinear + "; as a switch it is a switch, around its bias a current source that depends on a voltage",
	"thyristor":  nonlinear + "; conducting or blocking it is a switch", "triac": nonlinear + "; conducting or blocking it is a switch",
	"relay": "a relay is an inductor (with the coil's resistor) and a switch", "fuse": "a fuse is a resistor, or a switch that opens at a time",
	"battery":       "a battery is a voltage source, with a resistor in series",
	"potentiometer": "a potentiometer is two resistors in series",
	"crystal":       "a crystal is an inductor, a capacitor and a resistor in series, in parallel with a capacitor",
	"gyrator":       "a gyrator is two current sources, each depending on the other side's voltage",
	"coil":          "a coil is written `inductor`",
	"condenser":     "it is written `capacitor`",
	"relais":        "a relay is an inductor (with the coil's resistor) and a switch",
}

const nonlinear = "the networks here are linear"

// meantWords are words for which the notation has another.
var meantWords = map[string]string{
	"opamp": "op amp", "amplifier": "op amp", "voltage": "voltage source", "current": "current source", "op": "op amp",
	"source": "voltage source", "coil": "inductor", "choke": "inductor", "condenser": "capacitor",
	"reference": "ground", "earth": "ground", "print": "tell", "show": "tell", "ask": "tell",
	"const": "let", "set": "let", "include": "use", "import": "use", "assert": "require", "limit": "require",
	"subcircuit": "subnetwork", "define": "let", "short": "wire", "coupled": "coupling",
}

// unknownKind reports a word that is no kind and begins no statement.
func (p *parser) unknownKind(t token) {
	word := p.read(t)
	folded := strings.ToLower(word)
	if why, ok := otherWorlds[folded]; ok {
		p.fail(t.span(), fmt.Sprintf("no part is `%s`: %s", word, why))
		return
	}
	meant := meantWords[folded]
	if meant == "" {
		for _, list := range [][]string{statementWords, kindWords} {
			if contains(list, folded) {
				meant = folded
			}
		}
	}
	if meant == "" {
		meant = nearest(word, append(append([]string{}, kindWords...), statementWords...))
	}
	if meant != "" {
		p.fail(t.span(), fmt.Sprintf("`%s` begins no statement; `%s` may be meant", word, meant), p.only("write `"+meant+"`", t.span(), meant))
		return
	}
	p.fail(t.span(), fmt.Sprintf("`%s` begins no statement: it is no keyword, no kind of part, and no path such as in -[R1]- out", shorten(word)))
}

// contains says that a list holds a word.
func contains(list []string, word string) bool {
	for _, w := range list {
		if w == word {
			return true
		}
	}
	return false
}
