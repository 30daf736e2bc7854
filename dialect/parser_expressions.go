package dialect

import "fmt"

// expr reads: sum ["in" ("Hz"|"rad/s")].
func (p *parser) expr() Expr {
	x := p.sum()
	if p.isWord("in") && !p.failed {
		return p.convert(x)
	}
	return x
}

// convert reads what follows an expression from its "in".
func (p *parser) convert(x Expr) Expr {
	c := &ConvertExpr{Span: x.Extent(), X: x, In: p.word(p.take()), Unit: &UnitExpr{}}
	t := p.peek()
	switch {
	case p.isWord("Hz"):
		p.take()
		c.Unit.Factors = []UnitFactor{knownFactor(p.word(t))}
	case p.isWord("rad") && p.peekAt(1).kind == tSlash && p.peekAt(2).kind == tWord && p.read(p.peekAt(2)) == "s":
		p.take()
		p.take()
		second := knownFactor(p.word(p.take()))
		second.Divide = true
		c.Unit.Factors = []UnitFactor{knownFactor(p.word(t)), second}
	case t.kind == tWord && p.conversion(c, t):
		return c
	default:
		p.missing(WantFrequencyUnit, "`Hz` or `rad/s`, the two ways to give a frequency,")
		c.Unit.Span = p.hole(WantFrequencyUnit, frequencyUnits).Span
		if t.kind == tWord {
			p.take()
		}
		c.Span.End = max(p.last(), c.Span.End)
		return c
	}
	c.Unit.Span = Span{t.start, p.last()}
	c.Span.End = p.last()
	return c
}

// conversion reports a unit after "in" that is none of the two: with a prefix,
// or of another quantity. It says whether it did.
func (p *parser) conversion(c *ConvertExpr, t token) bool {
	_, base, ok := lookupUnit(p.read(t))
	if !ok || base == "rad" {
		return false
	}
	if base == "Hz" {
		p.fail(t.span(), "a frequency is given in Hz or in rad/s; the answer chooses the prefix itself", p.only("write `Hz`", t.span(), "Hz"))
		p.take()
		c.Unit.Factors = []UnitFactor{{Span: t.span(), Symbol: Word{t.span(), "Hz"}, Power: 1, Known: true, Base: "Hz"}}
		c.Unit.Span = t.span()
	} else {
		whole := Span{c.X.Extent().End, t.end}
		p.fail(Span{c.In.Span.Start, t.end}, "only frequencies are converted, to Hz or rad/s; every other answer chooses its unit and prefix itself",
			p.only("remove it", whole, ""))
		c.Unit.Span = p.hole(WantFrequencyUnit, frequencyUnits).Span
		p.take()
	}
	p.failed = false
	c.Span.End = max(p.last(), c.Span.End)
	return true
}

var frequencyUnits = []string{"Hz", "rad/s"}

// knownFactor makes a factor of a symbol that is in the table.
func knownFactor(w Word) UnitFactor {
	f := UnitFactor{Span: w.Span, Symbol: w, Power: 1}
	f.Prefix, f.Base, f.Known = lookupUnit(w.Text)
	return f
}

// sum reads: term { ("+"|"-") term }.
func (p *parser) sum() Expr {
	x := p.term()
	for {
		t := p.peek()
		switch t.kind {
		case tPlus, tMinus:
			if p.inValue && p.percentAt(0) {
				return x
			}
			p.take()
			x = p.binary(t, p.read(t)[0], x, p.term())
		case tPlusMinus:
			if p.inValue || t.end-t.start == len("±") && p.text[t.start] != '+' {
				return x
			}
			p.take()
			x = p.plusMinus(t, x)
		case tForeign:
			if !p.foreignAs("-") {
				return x
			}
			x = p.binary(t, '-', x, p.term())
		default:
			return x
		}
	}
}

// plusMinus reads what follows "+-" where it is an addition of a negative.
func (p *parser) plusMinus(t token, x Expr) Expr {
	p.slashedTolerance(t)
	plus := token{tPlus, t.start, t.start + 1}
	minus := token{tMinus, t.start + 1, t.end}
	return p.binary(plus, '+', x, p.termFrom(p.unary(minus, p.power())))
}

// binary joins two operands. The signs of a minus are one byte in the tree.
func (p *parser) binary(t token, op byte, x, y Expr) Expr {
	if t.kind == tMinus {
		op = '-'
	}
	b := fresh(&p.slabs.binaries)
	*b = BinaryExpr{Span: Span{x.Extent().Start, y.Extent().End}, Op: op, Mark: t.span(), X: x, Y: y}
	return b
}

// unary puts a sign before an operand.
func (p *parser) unary(t token, x Expr) Expr {
	op := byte('+')
	if t.kind == tMinus {
		op = '-'
	}
	return &UnaryExpr{Span: Span{t.start, x.Extent().End}, Op: op, Mark: t.span(), X: x}
}

// term reads: signed { ("*"|"/") signed }.
func (p *parser) term() Expr { return p.termFrom(p.signed()) }

// termFrom reads a term whose first operand is read.
func (p *parser) termFrom(x Expr) Expr {
	for {
		t := p.peek()
		switch t.kind {
		case tStar:
			p.take()
			if p.is(tStar) && p.touches(0) {
				both := Span{t.start, p.peek().end}
				p.fail(both, "a power is written `^`", p.only("write `^`", both, "^"))
				p.failed = false
				p.take()
				x = p.binary(t, '^', x, p.signed())
				continue
			}
			x = p.binary(t, '*', x, p.signed())
		case tSlash:
			p.take()
			x = p.binary(t, '/', x, p.signed())
		case tSlashes:
			if p.proseAhead() {
				p.fail(t.span(), "a comment starts with `#`", p.only("write `#`", t.span(), "#"))
				p.at = len(p.tokens) - 1
				return x
			}
			p.fail(t.span(), "`//` has no meaning in an expression: the resistance of two in parallel is 1/(1/R1 + 1/R2)",
				p.repair("write `/`", t.span(), "/"))
			p.failed = false
			p.take()
			x = p.binary(t, '/', x, p.signed())
		case tForeign:
			switch {
			case p.foreignAs("*"):
				x = p.binary(t, '*', x, p.signed())
			case p.foreignAs("/"):
				x = p.binary(t, '/', x, p.signed())
			case p.foreignMeans(t) == "^2":
				p.foreign(t)
				p.failed = false
				p.take()
				x = &BinaryExpr{Span: Span{x.Extent().Start, t.end}, Op: '^', Mark: t.span(), X: x, Y: &NumberExpr{Span: t.span(), Number: Word{t.span(), "2"}}}
			default:
				return x
			}
		default:
			return x
		}
	}
}

// proseAhead says that words follow the current token rather than an operand.
func (p *parser) proseAhead() bool {
	if p.peekAt(1).kind != tWord {
		return false
	}
	next := p.peekAt(2)
	return next.kind == tWord && !isQualifierWord(p.read(next))
}

// signed reads: ["-"|"+"] power. Two signs are an error.
func (p *parser) signed() Expr {
	t := p.peek()
	switch t.kind {
	case tMinus, tPlus:
		p.take()
		if k := p.peek().kind; k == tMinus || k == tPlus || k == tPlusMinus {
			p.signs(t)
		}
		return p.unary(t, p.power())
	case tPlusMinus:
		p.take()
		p.fail(t.span(), "a tolerance comes after a value; two signs in a row have no meaning",
			p.repair("write `-`", t.span(), "-"), p.repair("write no sign", t.span(), ""))
		p.failed = false
		return p.unary(token{tMinus, t.start, t.end}, p.power())
	case tForeign:
		if p.foreignAs("-") {
			return p.unary(token{tMinus, t.start, t.end}, p.power())
		}
	}
	return p.power()
}

// signs reports a row of signs and drops all but the first.
func (p *parser) signs(first token) {
	for k := p.peek().kind; k == tMinus || k == tPlus || k == tPlusMinus; k = p.peek().kind {
		p.take()
	}
	span := Span{first.start, p.last()}
	p.fail(span, "one sign may stand before a value",
		p.repair("write `-`", span, "-"), p.repair("write no sign", span, ""))
	p.failed = false
}

// power reads: primary ["^" signed].
func (p *parser) power() Expr {
	x := p.primary()
	if !p.is(tCaret) {
		return x
	}
	t := p.take()
	if !p.enter() {
		p.leave()
		return x
	}
	y := p.signed()
	p.leave()
	return p.binary(t, '^', x, y)
}

// primary reads: quantity | "(" expr ")" | ref ["(" expr {"," expr} ")"].
func (p *parser) primary() Expr {
	t := p.peek()
	switch t.kind {
	case tNumber, tDigits:
		return p.number()
	case tWord:
		return p.reference()
	case tParen:
		return p.paren()
	}
	return p.noOperand(t)
}

// noOperand reports that an operand is missing. What closes or separates is
// left to whoever opened; all else is skipped up to it.
func (p *parser) noOperand(t token) Expr {
	switch t.kind {
	case tEnd:
		p.fail(p.blame(), "an expression is missing here")
	case tForeign, tBad:
		p.foreign(t)
	case tString:
		p.fail(t.span(), "a text in quotes has no value")
	case tOpen:
		p.fail(t.span(), "brackets in an expression are round: ( )")
	default:
		p.fail(t.span(), fmt.Sprintf("an expression is expected here, not %s", p.describe()))
	}
	h := p.hole(WantExpression, nil)
	if t.kind == tForeign || t.kind == tBad {
		p.take()
		h.Span = t.span()
	}
	return h
}

// bracketed reads inside brackets, where a tolerance does not end anything.
func (p *parser) bracketed(read func()) {
	if !p.enter() {
		p.leave()
		return
	}
	inValue := p.inValue
	p.inValue = false
	read()
	p.inValue = inValue
	p.leave()
}

// paren reads a bracketed expression.
func (p *parser) paren() Expr {
	open := p.take()
	x := fresh(&p.slabs.parens)
	*x = ParenExpr{Span: open.span(), Open: open.span(), Close: Span{open.end, open.end}}
	p.bracketed(func() {
		commas := p.commas
		p.commas = 0
		x.X = p.expr()
		p.commas = commas
		x.Close = p.closeParen(open)
	})
	if x.X == nil {
		x.X = p.hole(WantExpression, nil)
	}
	x.Span.End = max(x.Close.End, x.X.Extent().End)
	return x
}

// closeParen reads ")" and reports what stands before it or that it is
// missing.
func (p *parser) closeParen(open token) Span {
	if p.is(tParenClose) {
		p.failed = false
		return p.take().span()
	}
	if !p.is(tEnd) && !p.failed && !p.is(tComma) && !p.is(tBars) && !p.is(tClose) && !p.relationAhead() {
		p.leftover()
	}
	if p.failed && p.parenCloseAhead() {
		p.skipTo(tParenClose)
		return p.take().span()
	}
	at := p.last()
	p.fail(Span{open.start, at}, "this bracket is not closed: `)` is missing", p.only("insert `)`", Span{at, at}, ")"))
	p.hole(WantMark, markParen)
	return Span{at, at}
}

var markParen = []string{")"}

// parenCloseAhead says that a ")" closes the current bracket further on.
func (p *parser) parenCloseAhead() bool {
	open := 0
	for i := p.at; i < len(p.tokens); i++ {
		switch p.tokens[i].kind {
		case tParen:
			open++
		case tParenClose:
			if open == 0 {
				return true
			}
			open--
		}
	}
	return false
}

// reference reads a name, a letter with subscripts, or a call of either.
func (p *parser) reference() Expr {
	p.want(WantExpression, nil)
	var x Expr
	if p.peekAt(1).kind == tOpen {
		x = p.subscript()
	} else {
		x = p.qualified()
	}
	if p.is(tParen) {
		return p.call(x)
	}
	return x
}

// isQuantityLetter says that a word takes subscripts.
func isQuantityLetter(s string) bool {
	switch s {
	case "v", "i", "z", "y", "p", "thevenin", "norton":
		return true
	}
	return false
}

// subscript reads: LETTER "[" qname ["," qname] "]".
func (p *parser) subscript() Expr {
	letter := p.word(p.take())
	if !isQuantityLetter(letter.Text) {
		p.badLetter(letter)
	}
	x := fresh(&p.slabs.subscripts)
	x.Letter, x.Open = letter, p.take().span()
	x.Subscripts = one(&p.slabs.nameRoom, p.subscriptName(letter.Text))
	if p.is(tComma) {
		x.Comma = p.take().span()
		x.Subscripts = append(x.Subscripts, p.subscriptName(letter.Text))
	}
	if p.is(tComma) && !p.failed {
		p.fail(p.blame(), "a quantity has one or two subscripts")
	}
	x.Close = p.closeSubscript(x)
	x.Span = Span{letter.Span.Start, max(x.Close.End, p.last())}
	return x
}

// badLetter reports a subscript after what is no quantity.
func (p *parser) badLetter(letter Word) {
	folded := string(letter.Text[0] | 0x20)
	if len(letter.Text) == 1 && isQuantityLetter(folded) {
		p.fail(letter.Span, fmt.Sprintf("quantities are written with small letters: %s[…]", folded), p.only("write `"+folded+"`", letter.Span, folded))
	} else if contains(matrixSets, letter.Text) {
		p.fail(letter.Span, fmt.Sprintf("two-port parameters are asked as a matrix: matrix %s[…]", letter.Text),
			p.repair("write `matrix "+letter.Text+"`", letter.Span, "matrix "+letter.Text))
	} else if near := nearest(letter.Text, []string{"thevenin", "norton"}); near != "" {
		p.fail(letter.Span, fmt.Sprintf("`%s` takes no subscripts; `%s` may be meant", letter.Text, near), p.only("write `"+near+"`", letter.Span, near))
	} else {
		p.fail(letter.Span, fmt.Sprintf("`%s` takes no subscripts; v i z y p, thevenin and norton do", letter.Text))
	}
	p.failed = false
}

// subscriptName reads a node, part, port or terminal, with dots for inner
// ones.
func (p *parser) subscriptName(letter string) *NameExpr {
	t := p.peek()
	if t.kind != tWord && t.kind != tDigits && t.kind != tNumber && t.kind != tPlus && t.kind != tMinus {
		p.missing(WantSubscript, "a node, part or port")
		h := p.hole(WantSubscript, nil)
		h.Name = letter
		return oneWord(Word{Span: h.Span})
	}
	if t.kind == tWord && !p.signTail() {
		return p.qualified()
	}
	return oneWord(p.node())
}

// signTail says that a sign sticks to the current word and ends the
// subscript: "A+".
func (p *parser) signTail() bool {
	sign, after := p.peekAt(1).kind, p.peekAt(2).kind
	return (sign == tPlus || sign == tMinus) && p.touches(1) && (after == tClose || after == tComma)
}

// oneWord makes a name of a single word.
func oneWord(w Word) *NameExpr {
	n := &NameExpr{Span: w.Span}
	n.first[0] = w
	n.Words = n.first[:]
	return n
}

// qualified reads: node { "." node }, from a word on.
func (p *parser) qualified() *NameExpr {
	n := fresh(&p.slabs.names)
	w := p.word(p.take())
	n.Span, n.first[0] = w.Span, w
	n.Words = n.first[:]
	for p.touches(0) {
		t := p.peek()
		switch {
		case t.kind == tDot:
			p.take()
			n.Words = append(n.Words, p.inner(n))
		case (t.kind == tNumber || t.kind == tDigits) && p.text[t.start] == '.' && plainDigits(p.text[t.start+1:t.end]):
			p.take()
			n.Words = append(n.Words, Word{Span{t.start + 1, t.end}, p.text[t.start+1 : t.end]})
		default:
			n.Span.End = p.last()
			return n
		}
	}
	if p.is(tDot) {
		p.fail(p.blame(), "a dot joins an inner name without spaces: v[F1.mid]")
		p.take()
	}
	n.Span.End = p.last()
	return n
}

// inner reads the word after a dot.
func (p *parser) inner(n *NameExpr) Word {
	if k := p.peek().kind; (k == tWord || k == tDigits || k == tNumber) && p.touches(0) {
		return p.word(p.take())
	}
	n.Span.End = p.last()
	p.missing(WantSubscript, "the inner name after the dot")
	h := p.hole(WantSubscript, nil)
	h.Name = n.Text()
	return Word{Span: h.Span}
}

// closeSubscript reads "]".
func (p *parser) closeSubscript(x *SubscriptExpr) Span {
	if p.is(tClose) {
		p.failed = false
		return p.take().span()
	}
	if !p.is(tEnd) && !p.failed && p.closeAhead() {
		p.leftover()
	}
	if p.failed && p.closeAhead() {
		p.skipTo(tClose)
		return p.take().span()
	}
	at := p.last()
	p.fail(Span{x.Letter.Span.Start, at}, "this subscript is not closed: `]` is missing", p.only("insert `]`", Span{at, at}, "]"))
	p.hole(WantMark, markClose)
	return Span{at, at}
}

// closeAhead says that a "]" follows before anything opens.
func (p *parser) closeAhead() bool {
	for i := p.at; i < len(p.tokens); i++ {
		switch p.tokens[i].kind {
		case tClose:
			return true
		case tOpen, tOpenBox, tParen:
			return false
		}
	}
	return false
}

// call reads the arguments of a call.
func (p *parser) call(callee Expr) Expr {
	open := p.take()
	x := fresh(&p.slabs.calls)
	*x = CallExpr{Callee: callee, Open: open.span(), Close: Span{open.end, open.end}}
	p.bracketed(func() {
		p.commas++
		x.Args = one(&p.slabs.exprRoom, p.expr())
		for p.is(tComma) || p.failed && p.commaAhead() {
			if p.failed {
				p.skipTo(tComma)
			}
			x.Commas = append(x.Commas, p.take().span())
			x.Args = append(x.Args, p.expr())
		}
		p.commas--
		x.Close = p.closeParen(open)
	})
	x.Span = Span{callee.Extent().Start, max(x.Close.End, p.last())}
	return x
}

// commaAhead says that a comma follows before the current bracket closes.
func (p *parser) commaAhead() bool {
	open := 0
	for i := p.at; i < len(p.tokens); i++ {
		switch p.tokens[i].kind {
		case tParen, tOpen, tOpenBox:
			open++
		case tParenClose, tClose:
			open--
		case tComma:
			if open == 0 {
				return true
			}
		}
		if open < 0 {
			return false
		}
	}
	return false
}
