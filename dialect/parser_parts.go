package dialect

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

// part reads what follows a part's kind: NAME = VALUE [TOLERANCE] {, OPTION}.
func (p *parser) part(s *PartStatement) {
	p.kind, p.unit = s.Kind, kindUnit(s.Kind)
	s.Name = p.name("a part")
	if s.Kind == Wire {
		p.noValue()
	} else {
		s.Equals = p.equals()
		s.Value = p.partValue(s.Kind)
		if p.toleranceAhead() {
			s.Tolerance = p.tolerance()
		} else if s.Kind == Resistor || s.Kind == Inductor || s.Kind == Capacitor || s.Kind == Coupling {
			p.want(WantTolerance, nil)
		}
	}
	p.options(s)
}

// noValue reports a value of a kind that has none.
func (p *parser) noValue() {
	if !p.is(tEquals) {
		return
	}
	start := p.peek().start
	p.skipTo(tComma, tBars, tClose)
	p.failed = false
	p.fail(Span{start, p.last()}, "a wire is an ideal connection and has no value", p.only("remove the value", Span{start, p.last()}, ""))
	p.failed = false
}

// partValue reads the value of a part by its kind.
func (p *parser) partValue(kind Kind) Value {
	switch kind {
	case Resistor, Inductor, Capacitor:
		if v := p.codeValue(kind); v != nil {
			return v
		}
	case OpAmp:
		p.want(WantKeyword, idealWord)
		if p.isWord("ideal") {
			return &IdealValue{p.word(p.take())}
		}
	case Switch:
		return p.events()
	case Transformer:
		return p.ratio()
	}
	return p.valueExpr()
}

var idealWord = []string{"ideal"}

// valueExpr reads an expression that a tolerance may end.
func (p *parser) valueExpr() Expr {
	p.inValue = true
	if p.is(tEnd) {
		p.want(WantValue, nil)
	}
	x := p.expr()
	p.inValue = false
	if h, ok := x.(*Hole); ok && h.Want == WantExpression {
		h.Want = WantValue
	}
	return x
}

// codeValue reads a code of IEC 60062 as the whole value; nil if there is
// none.
func (p *parser) codeValue(kind Kind) Value {
	t := p.peek()
	if t.kind != tDigits {
		return nil
	}
	text := p.read(t)
	number, letter, ok := splitCode(text)
	if !ok {
		return nil
	}
	prefix, fits := codePrefix(letter, kind)
	if !fits && !strings.HasSuffix(text, letter) {
		return p.codeOfOtherKind(number, letter, kind)
	}
	if !fits || strings.HasSuffix(text, "F") || strings.HasSuffix(text, "H") {
		return nil // "10m", "5H": a number with what may be a unit
	}
	unit := prefix + kindUnit(kind)
	next := p.peekAt(1)
	if next.kind == tWord && p.spaces(1) <= 1 {
		if _, _, isUnit := lookupUnit(p.read(next)); isUnit {
			p.take()
			p.take()
			p.fail(Span{t.start, next.end}, "no unit follows a code of IEC 60062, which has its kind's",
				p.only("write `"+text+"`", Span{t.start, next.end}, text),
				p.repair("write `"+number+" "+unit+"`", Span{t.start, next.end}, number+" "+unit))
			p.failed = false
			return &CodeValue{t.span(), text, number, prefix}
		}
	}
	if !p.valueEndsAt(1) {
		return nil
	}
	p.take()
	return &CodeValue{t.span(), text, number, prefix}
}

// codeOfOtherKind reports a code with a letter that means nothing here.
func (p *parser) codeOfOtherKind(number, letter string, kind Kind) Value {
	t := p.take()
	meant := number + " " + strings.TrimSuffix(canonicalPrefix(letter), "R") + kindUnit(kind)
	if kind == Inductor && letter == "R" {
		meant = number + " µH"
	}
	p.fail(t.span(), fmt.Sprintf("`%s` is no letter of %s's code in IEC 60062; write number and unit", letter, kind.withArticle()),
		p.only("write `"+meant+"`", t.span(), meant))
	p.failed = false
	return &CodeExpr{CodeValue{Span: t.span(), Text: p.read(t), Number: number}}
}

// canonicalPrefix spells a code letter as an SI prefix.
func canonicalPrefix(letter string) string {
	if letter == "K" {
		return "k"
	}
	if q, ok := unitPrefixes[letter]; ok {
		return q.canonical
	}
	return ""
}

// valueEndsAt says that the token n places on ends a part's value.
func (p *parser) valueEndsAt(n int) bool {
	switch p.peekAt(n).kind {
	case tEnd, tComma, tBars, tClose, tPlusMinus, tWord, tNumber:
		return true
	case tPlus, tMinus:
		after := p.peekAt(n + 1).kind
		return p.percentAt(n) || after == tEnd || after == tUnitMark
	}
	return false
}

// splitCode splits a code of IEC 60062 into its decimal and its letter. The
// letter stands for the decimal point: "4k7" is 4.7, "k"; "100n" is 100, "n".
func splitCode(text string) (number, letter string, ok bool) {
	at := scanDigits(text, 0)
	if at == 0 || at == len(text) {
		return "", "", false
	}
	_, size := utf8.DecodeRuneInString(text[at:])
	letter = text[at : at+size]
	rest := text[at+size:]
	if scanDigits(rest, 0) != len(rest) || !isCodeLetter(letter) {
		return "", "", false
	}
	if rest == "" {
		return text[:at], letter, true
	}
	return text[:at] + "." + rest, letter, true
}

// isCodeLetter says that a letter stands in some code.
func isCodeLetter(letter string) bool {
	switch letter {
	case "R", "K", "k", "M", "G", "T", "p", "n", "u", "µ", "\u03bc", "m", "F", "H":
		return true
	}
	return false
}

// codePrefix is the SI prefix that a code letter means for a kind: R K M G T
// for resistance and p n µ m F for capacitance as in IEC 60062:2016 (from
// memory), k for K and H for F with inductors as is common practice.
func codePrefix(letter string, kind Kind) (string, bool) {
	switch letter {
	case "K", "k":
		return "k", kind == Resistor
	case "M", "G", "T":
		return letter, kind == Resistor
	case "R":
		return "", kind == Resistor
	case "p", "n", "m":
		return letter, kind != Resistor
	case "u", "µ", "\u03bc":
		return "µ", kind != Resistor
	case "F":
		return "", kind == Capacitor
	case "H":
		return "", kind == Inductor
	}
	return "", false
}

// events reads: (opens|closes) at TIME {, (opens|closes) at TIME}.
func (p *parser) events() Value {
	if !p.is(tWord) {
		p.missing(WantValue, "`opens at` or `closes at` and a time")
		h := p.hole(WantValue, eventWords)
		p.skipTo(tComma, tBars, tClose)
		return h
	}
	v := &EventsValue{Span: p.peek().span()}
	for {
		e := &EventClause{Span: p.peek().span()}
		e.Action = p.choice(WantKeyword, eventWords, "what the switch does")
		e.At = p.keyword("at", atWord)
		e.Time = p.expr()
		e.Span.End = max(p.last(), e.Span.Start)
		v.Events = append(v.Events, e)
		v.Span.End = e.Span.End
		next := p.peekAt(1)
		if !p.is(tComma) || next.kind != tWord || !isEventWord(p.read(next)) {
			return v
		}
		p.failed = false
		p.take()
	}
}

// isEventWord recognises opens and closes, and slips of them.
func isEventWord(s string) bool {
	return s == "opens" || s == "closes" || s == "open" || s == "close" || s == "closed" || s == "opened"
}

// ratio reads: N : M {: K}.
func (p *parser) ratio() Value {
	first := p.valueExpr()
	v := &RatioValue{Span: first.Extent(), Terms: []Expr{first}}
	for p.is(tColon) {
		v.Colons = append(v.Colons, p.take().span())
		v.Terms = append(v.Terms, p.valueExpr())
	}
	if len(v.Terms) == 1 {
		at := p.last()
		if _, hole := first.(*Hole); hole {
			return first
		}
		p.fail(Span{v.Span.Start, at}, "a transformer's value is the ratio of its turns, such as 10 : 1", p.repair("add `: 1`", Span{at, at}, " : 1"))
		p.failed = p.is(tEnd)
		p.hole(WantMark, markColon)
	}
	v.Span.End = max(p.last(), v.Span.Start)
	return v
}

var markColon = []string{":"}

// toleranceAhead says that a tolerance starts at the current token.
func (p *parser) toleranceAhead() bool {
	switch p.peek().kind {
	case tPlusMinus:
		return true
	case tPlus, tMinus:
		return p.percentAt(0)
	}
	return false
}

// percentAt says that the token n places on is a sign before a number in %
// or ppm.
func (p *parser) percentAt(n int) bool {
	number, unit := p.peekAt(n+1), p.peekAt(n+2)
	switch number.kind {
	case tDigits:
		return strings.HasSuffix(p.read(number), "ppm")
	case tNumber:
		if unit.kind == tUnitMark {
			return p.read(unit) == "%"
		}
		return unit.kind == tWord && p.read(unit) == "ppm"
	}
	return false
}

// tolerance reads ±X, +-X, or one or two signed percentages.
func (p *parser) tolerance() *ToleranceClause {
	c := fresh(&p.slabs.tolerances)
	c.Span = p.peek().span()
	both := p.is(tPlusMinus)
	c.Bound = one(&p.slabs.boundRoom, p.bound())
	if !both && (p.is(tPlus) || p.is(tMinus)) && p.percentAt(0) {
		c.Bound = append(c.Bound, p.bound())
	}
	c.Span.End = max(p.last(), c.Span.End)
	t := p.peek()
	switch {
	case p.toleranceAhead():
		p.fail(t.span(), "a value has one tolerance: ±5 %, or +20 % -10 %")
		p.skipTo(tComma, tBars, tClose)
	case t.kind == tPlus || t.kind == tMinus || t.kind == tStar || t.kind == tSlash || t.kind == tCaret:
		p.fail(c.Span, "this is a tolerance, which ends the value; to calculate with a signed percentage, put it in brackets")
		p.skipTo(tComma, tBars, tClose)
	}
	return c
}

// bound reads a sign with its quantity.
func (p *parser) bound() ToleranceBound {
	sign := p.take()
	b := ToleranceBound{Sign: sign.span(), Signs: "±"}
	p.slashedTolerance(sign)
	switch sign.kind {
	case tPlus:
		b.Signs = "+"
	case tMinus:
		b.Signs = "-"
	}
	p.want(WantTolerance, nil)
	if p.is(tNumber) || p.is(tDigits) {
		if n, ok := p.number().(*NumberExpr); ok {
			b.Value = n
			return b
		}
	} else {
		p.missing(WantTolerance, "a tolerance such as 5 %")
	}
	h := p.hole(WantTolerance, nil)
	b.Value = &NumberExpr{Span: h.Span, Number: Word{Span: h.Span}}
	return b
}

// options reads {, OPTION}.
func (p *parser) options(s *PartStatement) {
	for p.is(tComma) || p.failed {
		if p.failed && !p.skipOption(s) {
			return
		}
		comma := p.take().span()
		if p.is(tEnd) || p.is(tClose) || p.is(tBars) {
			p.danglingComma(s, comma)
			return
		}
		o := p.option(s)
		o.Comma = comma
		s.Options = add(&p.slabs.optionRoom, s.Options, o)
	}
}

// skipOption goes on at the next comma after a broken place.
func (p *parser) skipOption(s *PartStatement) bool {
	if s.Inline {
		return p.skipTo(tComma, tBars, tClose) && p.is(tComma)
	}
	return p.skipTo(tComma)
}

// danglingComma reports a comma that no option follows.
func (p *parser) danglingComma(s *PartStatement, comma Span) {
	p.fail(comma, "an option is missing after the comma (a line that goes on is indented further)", p.only("remove the comma", comma, ""))
	p.hole(WantOption, unusedOptions(s))
}

// unusedOptions lists the options that a part may still take.
func unusedOptions(s *PartStatement) []string {
	var list []string
	for _, o := range kindOptions(s.Kind) {
		used := 0
		for _, have := range s.Options {
			if have.Keyword.Text == o {
				used++
			}
		}
		if used == 0 || o == "secondary" || o == "rated" && s.Kind == Resistor && used < 2 {
			list = append(list, o)
		}
	}
	return list
}

// option reads one option after its comma.
func (p *parser) option(s *PartStatement) *PartOption {
	t := p.peek()
	o := fresh(&p.slabs.options)
	o.Span = t.span()
	if t.kind != tPlus && t.kind != tMinus && (t.kind != tWord || !isOptionWord(p.read(t))) {
		p.badOption(s, o)
		return o
	}
	o.Keyword = p.word(p.take())
	if t.kind == tMinus {
		o.Keyword.Text = "-"
	}
	p.checkOption(s, o)
	switch o.Keyword.Text {
	case "rated", "initially", "gain", "resistance":
		unit := p.unit
		p.unit = optionUnit(o.Keyword.Text, s.Kind)
		o.Value = p.expr()
		p.unit = unit
	case "+", "-", "output":
		o.At = p.keyword("at", atWord)
		o.Nodes = one(&p.slabs.wordRoom, p.node())
	case "primary", "secondary":
		o.At = p.keyword("at", atWord)
		o.Nodes = []Word{p.node(), p.node()}
	case "between":
		o.Nodes = []Word{p.inductorName(), p.inductorName()}
	}
	o.Span.End = max(p.last(), o.Span.End)
	return o
}

// inductorName reads the name of a coupled inductor.
func (p *parser) inductorName() Word {
	if p.is(tWord) {
		return p.word(p.take())
	}
	p.missing(WantInductor, "an inductor's name")
	return p.holeWord(WantInductor)
}

// checkOption reports an option that the kind does not take, or has already.
func (p *parser) checkOption(s *PartStatement, o *PartOption) {
	name := o.Keyword.Text
	takes := kindOptions(s.Kind)
	for _, t := range takes {
		if t != name {
			continue
		}
		for _, used := range unusedOptions(s) {
			if used == name {
				return
			}
		}
		p.complain(syntaxCode, o.Keyword.Span, fmt.Sprintf("the option `%s` is given twice", name))
		return
	}
	if len(takes) == 0 {
		p.complain(syntaxCode, o.Keyword.Span, fmt.Sprintf("%s takes no options", s.Kind.withArticle()))
		return
	}
	p.complain(syntaxCode, o.Keyword.Span, fmt.Sprintf("%s has no option `%s`; it takes %s", s.Kind.withArticle(), name, orList(takes)))
}

// badOption reports what is no option.
func (p *parser) badOption(s *PartStatement, o *PartOption) {
	t := p.peek()
	takes := kindOptions(s.Kind)
	if t.kind == tWord {
		if near := nearest(p.read(t), takes); near != "" {
			p.fail(t.span(), fmt.Sprintf("`%s` is no option; `%s` may be meant", p.read(t), near), p.only("write `"+near+"`", t.span(), near))
			p.hole(WantOption, unusedOptions(s))
			return
		}
	}
	switch {
	case t.kind == tBad || t.kind == tForeign:
		p.foreign(t)
	case t.kind == tNumber || t.kind == tDigits:
		p.fail(t.span(), "an option starts with a word: "+orList(takes))
	case len(takes) == 0:
		p.fail(t.span(), fmt.Sprintf("%s takes no options", s.Kind.withArticle()))
	default:
		p.fail(t.span(), fmt.Sprintf("an option of %s is expected here (%s), not %s", s.Kind.withArticle(), orList(takes), p.describe()))
	}
	p.hole(WantOption, unusedOptions(s))
}

// isOptionWord says that a word begins an option.
func isOptionWord(s string) bool {
	switch s {
	case "rated", "initially", "gain", "resistance", "output", "primary", "secondary", "between":
		return true
	}
	return false
}

// optionUnit is the unit that an option's value expects.
func optionUnit(option string, kind Kind) string {
	switch {
	case option == "rated" && kind == Resistor:
		return "W"
	case option == "rated" && kind == Inductor, option == "initially" && kind == Inductor:
		return "A"
	case option == "rated" || option == "initially":
		return "V"
	case option == "gain":
		return "dB"
	}
	return "Ω"
}
