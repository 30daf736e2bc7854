package dialect

import "strings"

// put prints the text for what stands at a span of the source, after a
// separator. Where the source has a line break there, the break and the
// comments before it take the separator's place.
func (p *printer) put(sep string, span Span, text string) {
	if span.Start > p.last && strings.ContainsAny(p.file.Text[p.last:span.Start], "\n\r") {
		p.lineBreak(span.Start)
	} else {
		p.out = append(p.out, sep...)
	}
	p.out = append(p.out, text...)
	p.last = max(p.last, span.End)
}

// lineBreak prints the comments up to a source offset and a new line.
func (p *printer) lineBreak(to int) {
	comments := p.file.Comments
	for p.next < len(comments) && comments[p.next].Span.Start < to {
		c := comments[p.next]
		p.next++
		if c.Own {
			p.newLine()
		} else {
			p.out = append(p.out, "  "...)
		}
		p.out = append(p.out, trimRight(c.Text)...)
	}
	p.newLine()
}

// newLine starts a line that continues the statement.
func (p *printer) newLine() {
	p.out = append(p.out, '\n')
	p.out = append(p.out, p.indent...)
	p.out = append(p.out, bodyIndent...)
}

// word prints a name or keyword.
func (p *printer) word(sep string, w Word) { p.put(sep, w.Span, w.Text) }

// comma prints a comma directly after what was printed.
func (p *printer) comma() { p.out = append(p.out, ',') }

// listed prints an element of a list, with the comma before it.
func (p *printer) listed(i int, first string, w Word) {
	if i > 0 {
		p.comma()
		first = " "
	}
	p.word(first, w)
}

// print prints one statement that is not broken.
func (p *printer) print(s Statement) {
	switch s := s.(type) {
	case *GroundStatement:
		p.word("", s.Keyword)
		p.word(" ", s.Node)
	case *LetStatement:
		p.named(s.Keyword, s.Name, s.Equals, s.Value)
	case *FunctionStatement:
		p.named(s.Keyword, s.Name, s.Equals, s.Value)
	case *PartStatement:
		p.part("", s)
	case *UsePartStatement:
		p.use("", s)
	case *PathStatement:
		p.path(s)
	case *PortStatement:
		p.word("", s.Keyword)
		p.word(" ", s.Name)
		p.word(" ", s.At)
		p.word(" ", s.Plus)
		p.word(" ", s.Minus)
	case *TellStatement:
		if s.Keyword.Present() {
			p.word("", s.Keyword)
		}
		p.asked(s.What)
		p.qualifiers(s.Qualifiers)
	case *RequireStatement:
		p.require(s)
	case *StartStatement:
		p.word("", s.Keyword)
		p.word(" ", s.State)
	case *PreferStatement:
		p.word("", s.Keyword)
		p.word(" ", s.KindName)
		p.word(" ", s.Series)
	case *AllowStatement:
		p.word("", s.Keyword)
		p.word(" ", s.Code)
		p.word(" ", s.Because)
		p.quoted(s.Reason)
	case *UseFileStatement:
		p.word("", s.Keyword)
		p.quoted(s.Path)
	}
}

// quoted prints a text in quotes as it is.
func (p *printer) quoted(s StringLiteral) {
	p.put(" ", s.Span, p.file.Text[s.Span.Start:s.Span.End])
}

// named prints KEYWORD NAME = EXPR.
func (p *printer) named(keyword, name Word, equals Span, value Expr) {
	p.word("", keyword)
	p.word(" ", name)
	p.put(" ", equals, "=")
	p.expr(" ", value)
}

// require prints a limit.
func (p *printer) require(s *RequireStatement) {
	p.word("", s.Keyword)
	p.expr(" ", s.Left)
	if s.Right != nil {
		p.word(" ", s.Relation)
		p.expr(" ", s.Right)
	}
	p.qualifiers(s.Qualifiers)
	if s.Nominal.Present() {
		p.word(" ", s.Nominal)
	}
}

// path prints wiring: nodes apart, boxes tight.
func (p *printer) path(s *PathStatement) {
	for i, node := range s.Nodes {
		sep := " "
		if i == 0 {
			sep = ""
		}
		p.word(sep, node)
		if i == len(s.Chains) {
			return
		}
		sep = " "
		for _, g := range s.Chains[i].Groups {
			p.put(sep, g.Open, "-[")
			for j, b := range g.Boxes {
				if j > 0 {
					p.put(" ", g.Bars[j-1], "||")
				}
				p.box(j > 0, b)
			}
			p.put("", g.Close, "]")
			sep = ""
		}
		p.put("", s.Chains[i].Dash, "-")
	}
}

// box prints what stands in a box.
func (p *printer) box(spaced bool, b Box) {
	sep := ""
	if spaced {
		sep = " "
	}
	switch b := b.(type) {
	case *NameBox:
		p.word(sep, b.Name)
	case *PartStatement:
		p.part(sep, b)
	case *UsePartStatement:
		p.use(sep, b)
	}
}

// part prints a part statement.
func (p *printer) part(sep string, s *PartStatement) {
	p.word(sep, s.Keyword)
	p.word(" ", s.Name)
	if s.Value != nil {
		p.put(" ", s.Equals, "=")
		p.value(s.Value)
	}
	if s.Tolerance != nil {
		for _, b := range s.Tolerance.Bound {
			p.put(" ", b.Sign, b.Signs)
			p.expr("", b.Value)
		}
	}
	for _, o := range s.Options {
		p.option(o)
	}
}

// value prints a part's value.
func (p *printer) value(v Value) {
	switch v := v.(type) {
	case Expr:
		p.expr(" ", v)
	case *CodeValue:
		p.put(" ", v.Span, v.Text)
	case *IdealValue:
		p.word(" ", v.Word)
	case *EventsValue:
		for i, e := range v.Events {
			p.listed(i, " ", e.Action)
			p.word(" ", e.At)
			p.expr(" ", e.Time)
		}
	case *RatioValue:
		for i, t := range v.Terms {
			if i > 0 {
				p.put(" ", v.Colons[i-1], ":")
			}
			p.expr(" ", t)
		}
	}
}

// option prints one option with its comma.
func (p *printer) option(o *PartOption) {
	p.put("", o.Comma, ",")
	p.word(" ", o.Keyword)
	if o.Value != nil {
		p.expr(" ", o.Value)
		return
	}
	if o.At.Present() {
		p.word(" ", o.At)
	}
	for _, n := range o.Nodes {
		p.word(" ", n)
	}
}

// use prints a subnetwork's use.
func (p *printer) use(sep string, s *UsePartStatement) {
	p.word(sep, s.Keyword)
	p.word(" ", s.Name)
	p.put(" ", s.Equals, "=")
	p.word(" ", s.Subnetwork)
	if s.With.Present() {
		p.word(" ", s.With)
		p.parameters(s.Arguments)
	}
	for _, t := range s.Terminals {
		p.comma()
		p.word(" ", t.Terminal)
		p.word(" ", t.At)
		p.word(" ", t.Node)
	}
}

// parameters prints NAME = EXPR, …
func (p *printer) parameters(list []*Parameter) {
	for i, q := range list {
		p.listed(i, " ", q.Name)
		p.put(" ", q.Equals, "=")
		p.expr(" ", q.Value)
	}
}

// asked prints what tell asks. Without the keyword it is a question on its
// own and stands at the start.
func (p *printer) asked(a Asked) {
	sep := " "
	if len(p.out) == 0 {
		sep = ""
	}
	switch a := a.(type) {
	case Expr:
		p.expr(sep, a)
	case *InitialQuestion:
		p.word(sep, a.Word)
	case *RootsQuestion:
		p.word(sep, a.Word)
		if a.Of.Present() {
			p.word(" ", a.Of)
			p.expr(" ", a.X)
		}
	case *MatrixQuestion:
		p.word(sep, a.Word)
		p.word(" ", a.Set)
		p.put("", a.Open, "[")
		p.word("", a.First)
		p.put("", a.Comma, ",")
		p.word("", a.Second)
		p.put("", a.Close, "]")
		if a.ReferenceWord.Present() {
			p.word(" ", a.ReferenceWord)
			p.expr(" ", a.Reference)
		}
	}
}

// qualifiers prints the qualifiers of a question or limit.
func (p *printer) qualifiers(list []*Qualifier) {
	for _, q := range list {
		p.word(" ", q.Keyword)
		if q.Value != nil {
			p.expr(" ", q.Value)
		}
		if q.ToWord.Present() {
			p.word(" ", q.ToWord)
		}
		if q.To != nil {
			p.expr(" ", q.To)
		}
		for i, n := range q.Names {
			if i > 0 {
				p.comma()
			}
			p.expr(" ", n)
		}
		if q.State.Present() {
			p.word(" ", q.State)
		}
	}
}
