package dialect

import (
	"fmt"
	"strings"
)

// number reads a number with its unit, and the many ways to write one wrong.
func (p *parser) number() Expr {
	t := p.take()
	text := p.read(t)
	split := len(text)
	if t.kind == tDigits {
		split = scanMantissa(text, 0)
	}
	n := fresh(&p.slabs.numbers)
	*n = NumberExpr{Span: t.span(), Number: Word{Span{t.start, t.start + split}, text[:split]}}
	if t.kind == tDigits {
		return p.lettered(n, text[split:])
	}
	if p.pointAgain(n) || p.decimalComma(n) || p.grouped(n) {
		p.unitAfter(n)
		return n
	}
	return p.unitAfter(n)
}

// lettered reads a digit-led token with letters in an expression: a unit that
// touches its number, or a slip.
func (p *parser) lettered(n *NumberExpr, rest string) Expr {
	symbol := Word{Span{n.Number.Span.End, n.Span.End}, rest}
	if f := knownFactor(symbol); f.Known {
		return p.unitFrom(n, f)
	}
	switch {
	case rest == "e" || rest == "E":
		p.exponent(n)
		return n
	case rest == "pi" || rest == "π" || rest == "t":
		return p.timesWord(n, symbol)
	}
	if number, letter, ok := splitCode(p.text[n.Span.Start:n.Span.End]); ok && !strings.HasSuffix(rest, letter) {
		return p.strayCode(n, number, letter)
	}
	return p.badUnit(n, symbol)
}

// exponent reports an exponent without digits.
func (p *parser) exponent(n *NumberExpr) {
	p.fail(n.Span, fmt.Sprintf("the exponent of `%s` has no digits", p.text[n.Span.Start:n.Span.End]),
		p.repair("write `"+n.Number.Text+"`", n.Span, n.Number.Text))
	p.hole(WantMark, nil)
	p.failed = false
	p.unitAfter(n)
}

// timesWord reads "2pi" as 2*pi, and reports it.
func (p *parser) timesWord(n *NumberExpr, w Word) Expr {
	whole := Span{n.Number.Span.Start, w.Span.End}
	write := n.Number.Text + "*" + w.Text
	p.fail(whole, fmt.Sprintf("multiplication is written: `%s`", write), p.only("write `"+write+"`", whole, write))
	p.failed = false
	n.Span = n.Number.Span
	at := n.Span.End
	return &BinaryExpr{Span: whole, Op: '*', Mark: Span{at, at}, X: n, Y: oneWord(w)}
}

// strayCode reports a code of IEC 60062 that is not the whole value of a part.
func (p *parser) strayCode(n *NumberExpr, number, letter string) Expr {
	unit := p.unit
	if unit == "" {
		unit = "Ω"
		if strings.Contains("pnuµ\u03bcF", letter) {
			unit = "F"
		}
	}
	meant := number + " " + canonicalPrefix(letter) + unit
	p.fail(n.Span, fmt.Sprintf("a code such as `%s` stands only as the whole value of a resistor, inductor or capacitor; write number and unit", p.text[n.Span.Start:n.Span.End]),
		p.only("write `"+meant+"`", n.Span, meant))
	p.failed = false
	return &CodeExpr{CodeValue{Span: n.Span, Text: p.text[n.Span.Start:n.Span.End], Number: number, Prefix: canonicalPrefix(letter)}}
}

// pointAgain reports a number with two decimal points.
func (p *parser) pointAgain(n *NumberExpr) bool {
	t := p.peek()
	if !p.touches(0) || t.kind != tNumber && t.kind != tDigits && t.kind != tDot {
		return false
	}
	for p.touches(0) && (p.is(tNumber) || p.is(tDigits) || p.is(tDot)) {
		n.Span.End = p.take().end
	}
	text := p.text[n.Span.Start:n.Span.End]
	var repairs []Repair
	if trimmed := strings.TrimRight(text, "."); plainDigits(strings.Replace(trimmed, ".", "", 1)) {
		repairs = append(repairs, p.only("write `"+trimmed+"`", n.Span, trimmed))
	}
	p.fail(n.Span, fmt.Sprintf("`%s` is no number: one decimal point, with a digit after it", text), repairs...)
	p.failed = false
	n.Number.Span.End = n.Span.End
	return true
}

// decimalComma reports "1,5" where a comma separates nothing.
func (p *parser) decimalComma(n *NumberExpr) bool {
	next := p.peekAt(1)
	if !p.is(tComma) || !p.touches(0) || !p.touches(1) || p.commas > 0 || next.kind != tNumber && next.kind != tDigits {
		return false
	}
	if p.thousands(n) {
		return true
	}
	p.take()
	p.take()
	text := p.read(next)
	split := scanMantissa(text, 0)
	span := Span{n.Span.Start, next.start + split}
	write := n.Number.Text + "." + text[:split]
	p.fail(span, "the decimal sign is a point", p.only("write `"+write+"`", span, write))
	p.failed = false
	n.Number = Word{span, write}
	n.Span.End = next.end
	p.unitInside(n, next, split)
	return true
}

// grouped reports digits in groups: "10 000".
func (p *parser) grouped(n *NumberExpr) bool {
	if !p.threeDigits(n) {
		return false
	}
	write := n.Number.Text
	for p.threeDigits(n) {
		t := p.take()
		text := p.read(t)
		write += text[:3]
		n.Span.End = t.start + 3
		n.Number = Word{n.Span, write}
	}
	p.fail(n.Span, "digits are not grouped", p.only("write `"+write+"`", n.Span, write))
	p.failed = false
	return true
}

// threeDigits says that three digits follow a group of digits after a space.
func (p *parser) threeDigits(n *NumberExpr) bool {
	t := p.peek()
	return p.spaces(0) == 1 && t.kind == tNumber && t.end-t.start == 3 && scanDigits(p.read(t), 0) == 3 &&
		scanDigits(n.Number.Text, 0) == len(n.Number.Text) && (len(n.Number.Text) <= 3 || strings.Contains(p.text[n.Span.Start:n.Span.End], " "))
}

// unitAfter reads the unit after a number, if one follows.
func (p *parser) unitAfter(n *NumberExpr) Expr {
	t := p.peek()
	gap := p.spaces(0)
	switch {
	case t.kind == tEnd:
		p.want(WantUnit, nil)
		return n
	case t.kind == tNumber && gap == 1 && p.reciprocalAhead():
		return p.reciprocal(n)
	case t.kind == tNumber || t.kind == tDigits:
		if !p.failed {
			p.missingOperator(t)
		}
		return n
	case t.kind == tUnitMark && gap <= 1:
		p.take()
		return p.unitFrom(n, knownFactor(p.word(t)))
	case t.kind != tWord || gap > 1<<10:
		return n
	}
	symbol := p.word(t)
	f := knownFactor(symbol)
	switch {
	case f.Known && gap > 1:
		p.fail(Span{n.Span.Start, t.end}, "a unit follows its number with at most one space", p.only("write one space", Span{n.Span.End, t.start}, " "))
		p.failed = false
	case !f.Known && (gap > 1 || isQualifierWord(symbol.Text) || p.kind != NoKind && isOptionWord(symbol.Text)):
		return n
	}
	p.take()
	if !f.Known {
		return p.badUnit(n, symbol)
	}
	return p.unitFrom(n, f)
}

// reciprocalAhead says that "1/" and a symbol follow, which make a unit.
func (p *parser) reciprocalAhead() bool {
	if p.read(p.peek()) != "1" || p.peekAt(1).kind != tSlash || p.peekAt(2).kind != tWord || !p.touches(1) || !p.touches(2) {
		return false
	}
	_, _, ok := lookupUnit(p.read(p.peekAt(2)))
	return ok
}

// reciprocal reads a unit that begins with "1/".
func (p *parser) reciprocal(n *NumberExpr) Expr {
	one := p.take()
	p.take()
	n.Unit = &UnitExpr{Span: one.span(), Reciprocal: true}
	f := knownFactor(p.word(p.take()))
	f.Divide = true
	return p.factors(n, f)
}

// unitFrom reads a unit whose first symbol is consumed.
func (p *parser) unitFrom(n *NumberExpr, f UnitFactor) Expr {
	n.Unit = fresh(&p.slabs.units)
	n.Unit.Span = f.Span
	return p.factors(n, f)
}

// factors reads the rest of a unit: powers, and symbols chained by * and /.
func (p *parser) factors(n *NumberExpr, f UnitFactor) Expr {
	n.Unit.Factors = one(&p.slabs.factorRoom, f)
	p.unitPower(&n.Unit.Factors[0])
	for (p.is(tStar) || p.is(tSlash)) && p.touches(0) && p.touches(1) && p.symbolAt(1) {
		divide := p.take().kind == tSlash
		f := knownFactor(p.word(p.take()))
		f.Divide = divide
		p.unitPower(&f)
		n.Unit.Factors = append(n.Unit.Factors, f)
	}
	n.Unit.Span.End = p.last()
	n.Span.End = p.last()
	p.want(WantUnit, nil)
	p.unitAgain(n)
	return n
}

// symbolAt says that the token n places on is a unit symbol that is not
// called, subscripted or qualified.
func (p *parser) symbolAt(n int) bool {
	t := p.peekAt(n)
	if t.kind != tWord && t.kind != tUnitMark {
		return false
	}
	if _, _, ok := lookupUnit(p.read(t)); !ok {
		return false
	}
	switch p.peekAt(n + 1).kind {
	case tParen, tOpen, tDot:
		return !p.touches(n + 1)
	}
	return true
}

// unitPower reads ^ and an integer that touch a symbol.
func (p *parser) unitPower(f *UnitFactor) {
	if p.is(tForeign) && p.touches(0) && strings.HasPrefix(p.foreignMeans(p.peek()), "^") {
		t := p.take()
		f.Power = int(p.foreignMeans(t)[1] - '0')
		f.Caret = t.span()
		f.Span.End = t.end
		p.at--
		p.foreign(p.take())
		p.failed = false
		return
	}
	if !p.is(tCaret) || !p.touches(0) || !p.touches(1) {
		return
	}
	at, sign := 1, 1
	if p.peekAt(1).kind == tMinus && p.touches(2) {
		at, sign = 2, -1
	}
	t := p.peekAt(at)
	text := p.read(t)
	if t.kind != tNumber || len(text) > 2 || scanDigits(text, 0) != len(text) {
		return
	}
	f.Caret = p.peek().span()
	f.Power = 0
	for _, d := range text {
		f.Power = f.Power*10 + int(d-'0')
	}
	f.Power *= sign
	f.Span.End = t.end
	p.at += at + 1
}

// unitAgain reports a second unit after a unit: "10 ohm ohm", "5 V s".
func (p *parser) unitAgain(n *NumberExpr) {
	t := p.peek()
	if t.kind != tWord && t.kind != tUnitMark || p.spaces(0) > 1 {
		return
	}
	if _, _, ok := lookupUnit(p.read(t)); !ok {
		return
	}
	first, second := p.text[n.Unit.Span.Start:n.Unit.Span.End], p.read(t)
	both := Span{n.Unit.Span.Start, t.end}
	drop := p.repair("write `"+first+"`", both, first)
	join := p.repair("write `"+first+"*"+second+"`", both, first+"*"+second)
	if first == second {
		drop.Preferred = true
		p.fail(both, "one unit follows a number", drop)
	} else {
		p.fail(both, "one unit follows a number; a product of units is written with *", join, drop)
	}
	p.failed = false
	p.take()
	n.Span.End = t.end
}

// badUnit reports a word after a number that is no unit.
func (p *parser) badUnit(n *NumberExpr, symbol Word) Expr {
	if p.prefixApart(n, symbol) {
		return n
	}
	if suggestions := suggestUnits(symbol.Text, p.unit); len(suggestions) > 0 {
		return p.nearUnit(n, symbol, suggestions)
	}
	if _, prefix := unitPrefixes[symbol.Text]; prefix && !p.nextIs(tParen, tOpen, tDot) {
		p.complain(unitUnknownCode, symbol.Span, fmt.Sprintf("`%s` is a prefix; the unit after it is missing", symbol.Text))
		return p.unknownFactor(n, symbol)
	}
	if meaning, unit := valueWord(symbol.Text); meaning != "" && !p.defines(symbol.Text) {
		t := token{tWord, symbol.Span.Start, symbol.Span.End}
		p.explainValueWord(t, meaning, unit)
		p.failed = false
		return n
	}
	if namelike(symbol.Text) || p.nextIs(tParen, tOpen, tDot) {
		return p.timesName(n, symbol)
	}
	if !p.defines(symbol.Text) {
		p.complain(unitUnknownCode, symbol.Span, fmt.Sprintf("`%s` is no unit (a product with a name is written with *)", symbol.Text))
		return p.unknownFactor(n, symbol)
	}
	whole := Span{n.Number.Span.Start, symbol.Span.End}
	write := n.Number.Text + "*" + symbol.Text
	p.complain(unitUnknownCode, symbol.Span, fmt.Sprintf("`%s` is no unit (and a product with a name is written `%s`)", symbol.Text, write),
		p.repair("write `"+write+"`", whole, write))
	return p.unknownFactor(n, symbol)
}

// nextIs says that the current token touches the last and is of a kind.
func (p *parser) nextIs(kinds ...tokenKind) bool {
	if !p.touches(0) {
		return false
	}
	for _, k := range kinds {
		if p.is(k) {
			return true
		}
	}
	return false
}

// prefixApart reports a prefix that stands apart from its symbol: "10 u F".
func (p *parser) prefixApart(n *NumberExpr, symbol Word) bool {
	q, ok := unitPrefixes[symbol.Text]
	t := p.peek()
	if !ok || t.kind != tWord || p.spaces(0) != 1 {
		return false
	}
	base, ok := unitSymbols[p.read(t)]
	if !ok || !base.prefixable {
		return false
	}
	p.take()
	span := Span{symbol.Span.Start, t.end}
	write := q.canonical + base.canonical
	p.fail(span, "a prefix and its unit are one word", p.only("write `"+write+"`", span, write))
	p.failed = false
	f := knownFactor(Word{span, write})
	n.Unit = &UnitExpr{Span: span}
	p.factors(n, f)
	return true
}

// nearUnit reports a unit that is spelled wrong, with what was meant.
func (p *parser) nearUnit(n *NumberExpr, symbol Word, suggestions []string) Expr {
	var repairs []Repair
	for _, s := range suggestions {
		text := s
		if n.Number.Span.End == symbol.Span.Start {
			text = " " + s
		}
		repairs = append(repairs, p.repair("write `"+n.Number.Text+" "+s+"`", symbol.Span, text))
	}
	repairs[0].Preferred = len(repairs) == 1
	message := fmt.Sprintf("`%s` is no unit; `%s` may be meant", symbol.Text, strings.Join(suggestions, "` or `"))
	if _, prefix := unitPrefixes[symbol.Text]; prefix {
		message = fmt.Sprintf("`%s` is a prefix without a unit; `%s` may be meant", symbol.Text, suggestions[0])
	}
	p.complain(unitUnknownCode, symbol.Span, message, repairs...)
	return p.unknownFactor(n, symbol)
}

// unknownFactor keeps a word that is no unit, already reported, as one.
func (p *parser) unknownFactor(n *NumberExpr, symbol Word) Expr {
	n.Unit = &UnitExpr{Span: symbol.Span}
	n.Unit.Factors = []UnitFactor{{Span: symbol.Span, Symbol: symbol, Power: 1}}
	n.Span.End = symbol.Span.End
	return n
}

// namelike says that a word after a number is a name rather than a unit.
func namelike(s string) bool {
	if s == "pi" || s == "t" || s == "π" {
		return true
	}
	return strings.ContainsAny(s, "_0123456789")
}

// timesName reads "2 pi" or "10 R1" as products, and reports them.
func (p *parser) timesName(n *NumberExpr, w Word) Expr {
	whole := Span{n.Number.Span.Start, w.Span.End}
	write := n.Number.Text + "*" + w.Text
	if p.defines(w.Text) || p.nextIs(tParen, tOpen, tDot) {
		p.fail(whole, fmt.Sprintf("multiplication is written: `%s`", write), p.only("write `"+write+"`", whole, write))
	} else {
		p.fail(whole, fmt.Sprintf("multiplication is written `%s`", write))
	}
	p.failed = false
	n.Span = n.Number.Span
	at := n.Span.End
	p.at--
	if p.is(tDigits) { // "2R1(": the rest of the token is consumed
		p.at++
		return &BinaryExpr{Span: whole, Op: '*', Mark: Span{at, at}, X: n, Y: oneWord(w)}
	}
	y := p.reference()
	return &BinaryExpr{Span: Span{whole.Start, y.Extent().End}, Op: '*', Mark: Span{at, at}, X: n, Y: y}
}
