package dialect

import "strings"

// subnetwork reads: subnetwork NAME (TERMINAL, …) [with …] { … }, with the
// statements up to its "}".
func (p *parser) subnetwork(head Head, line int) Statement {
	s := &SubnetworkStatement{Head: head}
	p.begin(&s.Head)
	p.subnetworkHead(s)
	open := s.BraceOpen.End > s.BraceOpen.Start
	if open && !p.is(tEnd) {
		p.afterBrace(s)
		if s.BraceClose.End > s.BraceClose.Start {
			return s
		}
	}
	p.finish()
	if p.record != nil {
		return s
	}
	if !open && !p.bodyFollows(line) {
		s.BodyStart, s.BodyStop = s.Head.Span.End, s.Head.Span.End
		s.BraceClose = Span{s.Head.Span.End, s.Head.Span.End}
		return s
	}
	p.body(s, line)
	return s
}

// subnetworkHead reads up to and with the "{".
func (p *parser) subnetworkHead(s *SubnetworkStatement) {
	s.Name = p.name("a subnetwork")
	s.Open = p.expect(tParen, "(", "the terminals are missing here: subnetwork NAME (TERMINAL, …)")
	for p.is(tWord) || p.is(tDigits) || p.is(tNumber) || p.is(tComma) {
		if p.is(tWord) {
			s.Terminals = append(s.Terminals, p.word(p.take()))
		} else {
			s.Terminals = append(s.Terminals, p.name("a terminal"))
		}
		if p.is(tComma) {
			p.take()
			continue
		}
		if !p.is(tWord) || p.isWord("with") {
			break
		}
		p.fail(p.blame(), "a comma is missing between the terminals", p.only("insert `,`", Span{p.last(), p.last()}, ","))
		p.failed = false
	}
	if len(s.Terminals) == 0 {
		p.missing(WantNewName, "a terminal's name")
		p.hole(WantNewName, nil)
	}
	s.Close = p.expect(tParenClose, ")", "`)` is missing after the terminals")
	if p.want(WantKeyword, withWord); p.isWord("with") {
		s.With = p.word(p.take())
		s.Parameters = p.parameters("a parameter", "")
	}
	s.BraceOpen = p.expect(tBrace, " {", "`{` is missing at the end of a subnetwork's first line")
}

var withWord = []string{"with"}

// parameters reads NAME = EXPR {, NAME = EXPR}; the list goes on only at
// ", NAME =".
func (p *parser) parameters(what, subnetwork string) []*Parameter {
	var list []*Parameter
	for {
		list = append(list, p.parameter(what, subnetwork))
		if !p.is(tComma) {
			return list
		}
		next := p.peekAt(1)
		if next.kind == tEnd {
			p.wantParameter(subnetwork)
			return list
		}
		if next.kind != tWord || p.peekAt(2).kind != tEquals {
			return list
		}
		p.take()
	}
}

// parameter reads NAME = EXPR.
func (p *parser) parameter(what, subnetwork string) *Parameter {
	q := &Parameter{Span: Span{p.peek().start, p.peek().end}}
	if subnetwork != "" && p.is(tEnd) {
		p.wantParameter(subnetwork)
	}
	q.Name = p.name(what)
	q.Equals = p.equals()
	q.Value = p.expr()
	q.Span.End = max(p.last(), q.Span.Start)
	return q
}

// afterBrace reports what stands after the "{" on its line.
func (p *parser) afterBrace(s *SubnetworkStatement) {
	t := p.peek()
	last := p.tokens[len(p.tokens)-2]
	message := "`{` ends its line; what the subnetwork holds starts on the next"
	if last.kind == tBraceClose {
		s.BodyStart, s.BodyStop = s.BraceOpen.End, last.start
		s.BraceClose = last.span()
		if t.kind == tBraceClose && p.at == len(p.tokens)-2 {
			p.fail(t.span(), "`}` stands alone on its line", p.only("move it to the next line", Span{s.BraceOpen.End, t.start}, "\n"))
		}
	}
	p.fail(Span{t.start, last.end}, message)
	p.at = len(p.tokens) - 1
}

// bodyFollows says that a subnetwork without "{" is followed by a body all
// the same: deeper lines and a "}".
func (p *parser) bodyFollows(line int) bool {
	stop, found := p.bodyEnd(line)
	return found && stop >= p.line
}

// bodyEnd looks for the line with the "}" of the subnetwork that starts on a
// line. Where there is none, the body ends at the first line that is no
// deeper than the subnetwork's own.
func (p *parser) bodyEnd(line int) (int, bool) {
	base := p.indent(line)
	inner := 0
	shallow := -1
	for i := p.line; i < p.file.Lines.Count(); i++ {
		span := p.file.Lines.Span(i)
		text := trimSpaces(p.text[span.Start:span.End])
		if text == "" || text[0] == '#' {
			continue
		}
		deeper := p.indent(i) > base
		if !deeper && shallow < 0 {
			shallow = i
		}
		switch {
		case text[0] == '}':
			if inner == 0 {
				return i, true
			}
			inner--
		case strings.HasPrefix(text, "subnetwork ") && !strings.Contains(text, "-["):
			if !deeper {
				return shallow, false
			}
			inner++
		}
	}
	if shallow < 0 {
		shallow = p.file.Lines.Count()
	}
	return shallow, false
}

// body reads the statements of a subnetwork and its "}".
func (p *parser) body(s *SubnetworkStatement, line int) {
	s.BodyStart = p.last()
	stop, closed := p.bodyEnd(line)
	if p.bodies >= maxBodies {
		p.fail(s.Keyword.Span, "subnetworks are nested too deep here")
		p.line = stop
	}
	p.bodies++
	s.Statements = p.statements(stop)
	p.bodies--
	p.begin(&s.Head)
	p.pending = nil
	if !closed {
		end := s.BodyStart
		if n := len(s.Statements); n > 0 {
			end = s.Statements[n-1].Extent().End
		}
		s.BodyStop, s.BraceClose, s.Span.End = end, Span{end, end}, end
		p.failed, p.told = false, false
		p.fail(s.BraceOpen, "this `{` is never closed; a `}` on a line of its own ends the subnetwork",
			p.only("insert `}`", Span{end, end}, "\n"+strings.Repeat(" ", p.indent(line))+"}"))
		s.Holes = append(s.Holes, &Hole{Span: Span{end, end}, Want: WantMark, Words: []string{"}"}})
		return
	}
	p.closeBrace(s)
}

// closeBrace reads the line with the "}".
func (p *parser) closeBrace(s *SubnetworkStatement) {
	p.tokens = p.tokens[:0]
	p.scan(p.file.Lines.Span(p.line))
	p.line++
	brace := p.tokens[0]
	last := p.tokens[len(p.tokens)-1]
	s.BodyStop, s.BraceClose, s.Span.End = brace.start, brace.span(), last.end
	p.tokens = append(p.tokens, token{tEnd, last.end, last.end})
	p.at, p.failed, p.told = 1, false, false
	if !p.is(tEnd) {
		p.fail(Span{p.peek().start, last.end}, "`}` stands alone on its line", p.repair("start a new line", Span{brace.end, p.peek().start}, "\n"))
	}
}

// usePart reads what follows "part": NAME = SUBNETWORK [with …]
// {, TERMINAL at NODE}. In a box there are no terminals.
func (p *parser) usePart(s *UsePartStatement) {
	s.Name = p.name("a part")
	s.Equals = p.equals()
	if p.is(tWord) {
		s.Subnetwork = p.word(p.take())
	} else {
		p.missing(WantSubnetwork, "a subnetwork's name")
		s.Subnetwork = p.holeWord(WantSubnetwork)
	}
	if p.want(WantKeyword, withWord); p.isWord("with") {
		s.With = p.word(p.take())
		s.Arguments = p.parameters("a parameter", s.Subnetwork.Text)
	}
	for p.is(tComma) {
		comma := p.take()
		if s.Inline {
			p.fail(comma.span(), "in a box the path wires the terminals; nothing can follow here")
			p.skipTo(tBars, tClose)
			return
		}
		s.Terminals = append(s.Terminals, p.terminal(s))
		if p.failed && !p.skipTo(tComma) {
			return
		}
	}
}

// terminal reads TERMINAL at NODE.
func (p *parser) terminal(s *UsePartStatement) *TerminalClause {
	c := &TerminalClause{Span: p.blame()}
	if p.is(tWord) {
		c.Terminal = p.word(p.take())
	} else {
		p.missing(WantTerminal, "a terminal's name")
		h := p.hole(WantTerminal, nil)
		h.Name = s.Subnetwork.Text
		c.Terminal = Word{Span: h.Span}
	}
	c.At = p.keyword("at", atWord)
	c.Node = p.node()
	c.Span.End = max(p.last(), c.Span.Start)
	return c
}
