package dialect

import "fmt"

// pathAhead says that the statement is a wiring path, well-formed or not.
func (p *parser) pathAhead() bool {
	first, second, third := p.peek(), p.peekAt(1), p.peekAt(2)
	switch {
	case second.kind == tOpenBox && (first.kind == tWord || first.kind == tDigits || first.kind == tNumber):
		return true
	case second.kind == tMinus && third.kind == tOpen && first.kind != tString:
		return true // in - [R1] - out
	case second.kind == tOpen && first.kind == tWord && first.end < second.start && !isStatementWord(p.read(first)):
		return true // in [R1]- out
	case first.kind == tWord && (isStatementWord(p.read(first)) || beginsKind(p.read(first))):
		return false
	}
	for _, t := range p.tokens {
		if t.kind == tOpenBox {
			return true
		}
	}
	return false
}

// path reads: NODE -[BOX]- NODE -[BOX]- NODE …
func (p *parser) path(head Head) Statement {
	s := fresh(&p.slabs.paths)
	s.Head = head
	p.begin(&s.Head)
	s.Nodes = p.twoWords(p.node())
	if p.failed && !p.skipToBox() {
		return s
	}
	for {
		open, ok := p.openBox()
		if !ok {
			break
		}
		chain, more := p.chain(open)
		s.Chains = add(&p.slabs.chainRoom, s.Chains, chain)
		if !more {
			s.Nodes = append(s.Nodes, p.holeWord(WantNode))
			break
		}
		s.Nodes = append(s.Nodes, p.node())
	}
	if len(s.Chains) == 0 && p.is(tEnd) {
		p.missing(WantMark, "a box -[…]-")
		p.hole(WantMark, markBox)
	}
	if len(s.Chains) > 0 && !p.failed && p.bareJoin() {
		p.at = len(p.tokens) - 1
	}
	p.finish()
	return s
}

var (
	markBox   = []string{"-["}
	markClose = []string{"]"}
	markBars  = []string{"||", "]"}
)

// twoWords makes a list with one word and room for another.
func (p *parser) twoWords(w Word) []Word {
	if len(p.slabs.wordRoom) < 2 {
		p.slabs.wordRoom = make([]Word, 2*slabSize)
	}
	list := p.slabs.wordRoom[:1:2]
	p.slabs.wordRoom = p.slabs.wordRoom[2:]
	list[0] = w
	return list
}

// skipToBox drops what cannot be a node, up to the first box.
func (p *parser) skipToBox() bool {
	for !p.is(tEnd) && !p.is(tOpenBox) {
		p.at++
	}
	p.failed = p.failed && p.is(tEnd)
	return !p.is(tEnd)
}

// openBox reads "-[", and the slips that stand for it.
func (p *parser) openBox() (Span, bool) {
	t, next := p.peek(), p.peekAt(1)
	both := Span{t.start, next.end}
	switch {
	case t.kind == tOpenBox:
		return p.take().span(), true
	case t.kind == tMinus && next.kind == tOpen:
		p.fail(both, "`-[` is one sign, without a space between", p.only("write `-[`", both, "-["))
	case t.kind == tMinus && next.kind == tOpenBox:
		p.fail(both, "a box opens with one `-`: -[", p.only("write `-[`", both, "-["))
	case t.kind == tOpen:
		p.fail(t.span(), "a box opens with `-[`", p.only("write `-[`", t.span(), "-["))
		p.failed = false
		return p.take().span(), true
	default:
		p.want(WantMark, markBox)
		return Span{}, false
	}
	p.failed = false
	p.take()
	p.take()
	return both, true
}

// chain reads boxes in series up to the "-" before the next node. It says
// whether a node follows.
func (p *parser) chain(open Span) (*Chain, bool) {
	c := fresh(&p.slabs.chains)
	c.Span = open
	for {
		g := p.group(open)
		c.Groups = add(&p.slabs.groupRoom, c.Groups, g)
		c.Span.End = g.Span.End
		if p.is(tMinus) && p.peekAt(1).kind != tOpen && p.peekAt(1).kind != tOpenBox {
			break
		}
		next, ok := p.openBox()
		if !ok {
			break
		}
		open = next
	}
	return c, p.dash(c)
}

// dash reads the "-" that closes a chain and says whether a node follows.
func (p *parser) dash(c *Chain) bool {
	if p.is(tMinus) {
		c.Dash = p.take().span()
		c.Span.End = c.Dash.End
		if p.is(tMinus) && (p.touches(0) || !p.touches(1)) {
			extra := p.peek().span()
			p.fail(extra, "one `-` closes a box: ]-", p.only("remove it", extra, ""))
			p.failed = false
			for p.is(tMinus) {
				p.take()
			}
		}
		return true
	}
	at := p.last()
	c.Dash = Span{at, at}
	if p.foreignAs("-") {
		return true
	}
	if p.is(tEnd) {
		p.fail(Span{at, at}, "a path ends in a node: `-` and a node's name are missing here")
		p.hole(WantMark, []string{"-", "-["})
		return false
	}
	if t := p.peek(); t.kind == tWord || t.kind == tDigits || t.kind == tNumber {
		p.fail(t.span(), "`-` is missing between the box and the node", p.only("insert `-`", Span{at, at}, "-"))
		p.failed = false
		return true
	}
	return false
}

// group reads one box with its parallel parts, after its "-[".
func (p *parser) group(open Span) *Group {
	g := fresh(&p.slabs.groups)
	g.Span, g.Open = open, open
	for {
		g.Boxes = add(&p.slabs.boxRoom, g.Boxes, p.box())
		if !p.is(tBars) && !p.is(tClose) && !p.is(tEnd) {
			p.boxJunk()
		}
		if !p.is(tBars) {
			break
		}
		g.Bars = append(g.Bars, p.take().span())
	}
	if p.is(tEnd) {
		p.want(WantMark, markBars)
	}
	g.Close = p.closeBox(open)
	g.Span.End = max(p.last(), g.Span.End)
	return g
}

// closeBox reads "]".
func (p *parser) closeBox(open Span) Span {
	if p.is(tClose) {
		p.failed = false
		return p.take().span()
	}
	at := p.last()
	p.fail(Span{open.Start, max(at, open.End)}, "this box is not closed: `]` is missing (a path stands on one line)")
	p.hole(WantMark, markClose)
	return Span{at, at}
}

// boxJunk deals with what stands between a part in a box and the next "||"
// or "]".
func (p *parser) boxJunk() {
	t := p.peek()
	switch {
	case t.kind == tSlashes || t.kind == tBar || t.kind == tSlash:
		p.fail(t.span(), fmt.Sprintf("`%s` has no meaning here; parts in parallel are written `||`", p.read(t)), p.only("write `||`", t.span(), " || "))
		p.become(tBars)
		return
	case t.kind == tComma || t.kind == tPlus:
		p.fail(t.span(), "parts in parallel are separated by `||`; parts in series stand in boxes that touch, -[R1]-[C1]-",
			p.repair("write `||`", t.span(), " || "))
	case t.kind == tForeign && p.foreignMeans(t) == "||":
		p.foreign(t)
		p.become(tBars)
		return
	case t.kind == tMinus && p.peekAt(1).kind == tWord:
		p.fail(Span{p.last(), p.last()}, "`]` is missing here", p.only("insert `]`", Span{p.last(), p.last()}, "]"))
		p.failed = false
		p.insert(tClose)
		return
	default:
		if !p.failed {
			p.leftover()
		}
	}
	p.skipTo(tBars, tClose)
}

// become makes the current token one of another kind, where it was reported
// as such.
func (p *parser) become(kind tokenKind) {
	p.tokens[p.at].kind = kind
	p.failed = false
}

// insert puts a missing token, already reported, before the current one.
func (p *parser) insert(kind tokenKind) {
	at := p.last()
	p.tokens = append(p.tokens, token{})
	copy(p.tokens[p.at+1:], p.tokens[p.at:])
	p.tokens[p.at] = token{kind, at, at}
}

// foreignMeans is what a foreign character stands for.
func (p *parser) foreignMeans(t token) string {
	for _, r := range p.read(t) {
		return foreignMarks[r]
	}
	return ""
}

// box reads one part in a box: a name, a part statement or a use.
func (p *parser) box() Box {
	p.want(WantBox, nil)
	kind, words := p.kindAhead()
	if kind != NoKind {
		after := p.peekAt(words).kind
		if after == tWord || after == tEquals || after == tDigits || after == tEnd && p.record != nil {
			return p.inlinePart(kind, words)
		}
	}
	t := p.peek()
	if t.kind == tWord {
		after := p.peekAt(1).kind
		if p.read(t) == "part" && (after == tWord || after == tEnd && p.record != nil) {
			return p.inlineUse()
		}
		if after == tWord || after == tEquals {
			return p.badKind()
		}
		b := fresh(&p.slabs.boxes)
		b.Name = p.word(p.take())
		if p.closeAhead() { // otherwise the "]" is missing
			p.touching(b.Name)
		}
		return b
	}
	if t.kind == tDigits || t.kind == tNumber {
		p.fail(t.span(), "a box holds a part by name, or a whole part statement: -[resistor R1 = 4k7]-")
	} else if t.kind == tParen {
		p.fail(t.span(), "a box holds no brackets, only a part or parts in parallel: a branch with several parts is a path of its own between the same nodes, a -[R4]-[C1]- b")
	} else {
		p.missing(WantBox, "a part")
	}
	h := p.hole(WantBox, nil)
	if !p.is(tBars) && !p.is(tClose) && !p.is(tEnd) {
		p.skipTo(tBars, tClose)
		h.Span.End = max(p.last(), h.Span.Start)
	}
	return h
}

// badKind reports a box that starts like a part statement of no kind.
func (p *parser) badKind() Box {
	p.unknownKind(p.peek())
	h := p.hole(WantBox, nil)
	p.skipTo(tBars, tClose)
	h.Span.End = max(p.last(), h.Span.Start)
	return h
}

// inline reads a statement inside a box with a head of its own.
func (p *parser) inline(h *Head, read func()) {
	outer, kind, unit := p.head, p.kind, p.unit
	p.head = h
	read()
	p.head, p.kind, p.unit, p.inValue = outer, kind, unit, false
	h.Span.End = max(p.last(), h.Span.Start)
	outer.Broken = outer.Broken || h.Broken
	outer.Holes = append(outer.Holes, h.Holes...)
}

// inlinePart reads a part statement in a box.
func (p *parser) inlinePart(kind Kind, words int) Box {
	t := p.peek()
	s := fresh(&p.slabs.parts)
	s.Kind = kind
	s.Head = Head{Span: t.span(), Inline: true, Keyword: Word{Span{t.start, p.peekAt(words - 1).end}, kind.String()}}
	p.at += words
	p.inline(&s.Head, func() { p.part(s) })
	return s
}

// inlineUse reads a subnetwork's use in a box.
func (p *parser) inlineUse() Box {
	t := p.take()
	s := &UsePartStatement{Head: Head{Span: t.span(), Inline: true, Keyword: p.word(t)}}
	p.inline(&s.Head, func() { p.usePart(s) })
	return s
}

// node reads a node's name, which may begin with a digit.
func (p *parser) node() Word {
	t := p.peek()
	switch t.kind {
	case tWord:
		p.take()
	case tDigits, tNumber:
		p.take()
		if !plainDigits(p.read(t)) {
			p.fail(t.span(), fmt.Sprintf("`%s` cannot name a node: names are letters, digits and _", p.read(t)))
			p.failed = false
		}
	case tPlus, tMinus, tPlusMinus:
		return p.signedNode(t)
	default:
		p.missing(WantNode, "a node's name")
		return p.holeWord(WantNode)
	}
	if s := p.peek(); (s.kind == tPlus || s.kind == tMinus || s.kind == tDot || s.kind == tUnitMark) && p.touches(0) && !p.boxAfterSign() {
		return p.tailedNode(t)
	}
	return p.word(t)
}

// boxAfterSign says that a "-" after a node begins a box or the slip of one.
func (p *parser) boxAfterSign() bool {
	next := p.peekAt(1).kind
	return p.is(tMinus) && (next == tOpen || next == tOpenBox)
}

// signedNode reads "+5V" or "-12V" where a node's name must stand.
func (p *parser) signedNode(sign token) Word {
	next := p.peekAt(1)
	if next.kind != tWord && next.kind != tDigits && next.kind != tNumber {
		p.missing(WantNode, "a node's name")
		return p.holeWord(WantNode)
	}
	p.take()
	p.take()
	name := p.read(next)
	span := Span{sign.start, next.end}
	other := "p" + name
	if sign.kind == tMinus {
		other = "n" + name
	}
	plain := p.repair("write `"+name+"`", span, name)
	marked := p.repair("write `"+other+"`", span, other)
	message := fmt.Sprintf("`%s` cannot name a node: names are letters, digits and _", p.text[span.Start:span.End])
	if sign.kind == tPlus {
		plain.Preferred = true
		p.fail(span, message, plain, marked)
	} else {
		marked.Preferred = true
		p.fail(span, message, marked)
	}
	p.failed = false
	return Word{span, p.text[span.Start:span.End]}
}

// tailedNode reads "A+", "A-", "5.0" or "50%" where a node's name must stand.
func (p *parser) tailedNode(first token) Word {
	sign := p.take()
	span := Span{first.start, sign.end}
	name := p.read(first)
	write := name + map[tokenKind]string{tPlus: "_plus", tMinus: "_minus", tDot: "_", tUnitMark: ""}[sign.kind]
	if t := p.peek(); p.touches(0) && (t.kind == tWord || t.kind == tDigits || t.kind == tNumber) {
		span.End = p.take().end
		write = name + "_" + p.read(t)
	}
	text := p.text[span.Start:span.End]
	p.fail(span, fmt.Sprintf("`%s` cannot name a node: names are letters, digits and _", text), p.only("write `"+write+"`", span, write))
	p.failed = false
	return Word{span, text}
}

// plainDigits says that a digit-led token holds only what a name may hold.
func plainDigits(s string) bool {
	for i := range len(s) {
		if s[i] == '.' || s[i] == '+' || s[i] == '-' || s[i] == 0xE2 {
			return false
		}
	}
	return true
}
