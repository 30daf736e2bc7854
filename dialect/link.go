package dialect

// This file resolves names: every use of a name is recorded with the symbol it
// refers to, and names that stand for nothing are reported, once per place of
// the text. Evaluation later looks the same names up in silence.

// maxDepth bounds the nesting of an expression that is looked into.
const maxDepth = 5000

func (c *checker) link(s *scope) {
	if s.body == nil {
		c.linkGround(s)
	}
	if s.body != nil {
		for _, p := range s.body.Parameters {
			c.linkExpr(s, p.Value, 0)
		}
	}
	for _, st := range s.statements {
		c.linkStatement(s, st)
	}
	c.checkWired(s)
	harmless := c.harmless
	c.harmless = true
	for _, b := range s.bodies {
		c.link(b)
	}
	c.harmless = harmless
}

func (c *checker) linkGround(s *scope) {
	if s.groundSeen == nil || !s.groundSeen.Node.Present() {
		return
	}
	s.ground = c.existingNode(s, s.groundSeen.Node, s.groundSeen, "no part is connected to the reference node %s")
}

// existingNode finds a node that only wiring makes; an unknown one is
// reported and made, so that its other uses are not reported too.
func (c *checker) existingNode(s *scope, name Word, st Statement, format string) *Symbol {
	if !name.Present() {
		return nil
	}
	if sym := s.nodes[name.Text]; sym != nil {
		c.table.record(sym, s.unit.file, name.Span, false)
		return sym
	}
	if c.lostName(s.unit, name.Text) {
		return c.add(s, NodeSymbol, name, st)
	}
	f := c.report(s.unit.file, name.Span, "unknown-name", format, name.Text)
	c.offerNames(f, s, name, func(sym *Symbol) bool { return sym.Sort == NodeSymbol })
	return c.add(s, NodeSymbol, name, st)
}

// linkPort resolves the nodes of a port.
func (c *checker) linkPort(s *scope, st *PortStatement) {
	plus, minus := s.nodes[st.Plus.Text], s.nodes[st.Minus.Text]
	lost := c.lostName(s.unit, st.Plus.Text) || c.lostName(s.unit, st.Minus.Text)
	if plus == nil && minus == nil && !lost && st.Plus.Present() && st.Minus.Present() {
		span := Span{st.Plus.Span.Start, st.Minus.Span.End}
		c.report(s.unit.file, span, "unknown-name", "no part is connected to %s or %s", st.Plus.Text, st.Minus.Text)
		c.add(s, NodeSymbol, st.Plus, st)
		if st.Minus.Text != st.Plus.Text {
			c.add(s, NodeSymbol, st.Minus, st)
		}
		return
	}
	c.existingNode(s, st.Plus, st, "no part is connected to %s")
	c.existingNode(s, st.Minus, st, "no part is connected to %s")
}

// offerNames adds the repair that a misspelt name suggests.
func (c *checker) offerNames(f *reported, s *scope, name Word, fits func(*Symbol) bool) {
	if f.f == nil || c.suggested > 200 {
		return
	}
	c.suggested++
	if best, ok := Nearest(name.Text, s.candidates(fits)); ok {
		f.f.Message += "; did you mean " + best + "?"
		f.repair(s.unit.file, name.Span, best, "write "+best)
	}
}

func (c *checker) linkStatement(s *scope, st Statement) {
	if st.Headline().Misplaced {
		return
	}
	switch st := st.(type) {
	case *PartStatement:
		c.linkPart(s, st)
		return
	case *PathStatement:
		c.linkPath(s, st)
		return
	case *UsePartStatement:
		c.linkUse(s, st)
		return
	}
	harmless := c.harmless
	c.harmless = true // missed only by those who name it
	defer func() { c.harmless = harmless }()
	switch st := st.(type) {
	case *LetStatement:
		c.linkExpr(s, st.Value, 0)
	case *FunctionStatement:
		c.linkExpr(s, st.Value, 0)
	case *PortStatement:
		c.linkPort(s, st)
	case *TellStatement:
		c.linkAsked(s, st.What)
		c.linkQualifiers(s, st.Qualifiers)
	case *RequireStatement:
		c.linkExpr(s, st.Left, 0)
		c.linkExpr(s, st.Right, 0)
		c.linkQualifiers(s, st.Qualifiers)
	}
}

func (c *checker) linkPart(s *scope, st *PartStatement) {
	switch v := st.Value.(type) {
	case Expr:
		c.linkExpr(s, v, 0)
	case *EventsValue:
		for _, e := range v.Events {
			c.linkExpr(s, e.Time, 0)
		}
	case *RatioValue:
		for _, e := range v.Terms {
			c.linkExpr(s, e, 0)
		}
	}
	for _, o := range st.Options {
		if o.Keyword.Text == "between" {
			for _, n := range o.Nodes {
				c.linkWord(s, n, "inductor", func(sym *Symbol) bool { return sym.Sort == PartSymbol && sym.Kind == Inductor })
			}
		}
		if o.Value != nil {
			c.linkExpr(s, o.Value, 0)
		}
	}
}

// linkWord resolves a name that must be of a certain sort.
func (c *checker) linkWord(s *scope, name Word, what string, fits func(*Symbol) bool) *Symbol {
	if !name.Present() {
		return nil
	}
	sym := s.visible(name.Text)
	if sym == nil {
		sym = s.nodes[name.Text]
	}
	if sym == nil && c.lostName(s.unit, name.Text) {
		c.fault()
		return nil
	}
	if sym == nil {
		f := c.report(s.unit.file, name.Span, "unknown-name", "there is no %s named %s", what, name.Text)
		c.offerNames(f, s, name, fits)
		return nil
	}
	c.table.record(sym, s.unit.file, name.Span, false)
	if !fits(sym) {
		f := c.report(s.unit.file, name.Span, "wrong-sort", "%s is a %s; an %s", name.Text, sym.describe(), what)
		if f.f != nil {
			f.f.Message = name.Text + " is " + article(sym.describe()) + ", where " + article(what) + " is needed"
		}
		f.relate(sym.File, sym.Span, "%s, the %s", sym.Name, sym.describe())
		return nil
	}
	return sym
}

// article sets "a" or "an" before a word.
func article(word string) string {
	if word != "" {
		switch word[0] {
		case 'a', 'e', 'i', 'o':
			return "an " + word
		}
	}
	return "a " + word
}

func (c *checker) linkPath(s *scope, st *PathStatement) {
	for i, chain := range st.Chains {
		for _, g := range chain.Groups {
			for _, b := range g.Boxes {
				sym := c.linkBox(s, b)
				if sym != nil && len(chain.Groups) == 1 && i+1 < len(st.Nodes) {
					c.checkSelfLoop(s, sym, b, st.Nodes[i], st.Nodes[i+1])
				}
			}
		}
	}
}

// linkBox resolves what stands in a box and notes that it is wired there.
func (c *checker) linkBox(s *scope, b Box) *Symbol {
	var sym *Symbol
	var name Word
	switch b := b.(type) {
	case *NameBox:
		name = b.Name
		sym = c.linkWord(s, name, "part", func(sym *Symbol) bool { return sym.Sort == PartSymbol || sym.Sort == UseSymbol })
	case *PartStatement:
		name, sym = b.Name, s.inline(b)
		c.linkPart(s, b)
	case *UsePartStatement:
		name, sym = b.Name, s.inline(b)
		c.linkUse(s, b)
	}
	if sym == nil {
		return nil
	}
	switch sym.Kind {
	case OpAmp, Transformer, Coupling:
		c.reportNotTwoTerminal(s, sym, b.Extent())
		return nil
	}
	c.linkTwice(s, sym, name.Span)
	sym.boxes = append(sym.boxes, wiring{span: b.Extent(), present: true})
	return sym
}

func (c *checker) reportNotTwoTerminal(s *scope, sym *Symbol, span Span) {
	how := map[Kind]string{
		OpAmp:       "wire it with \", + at …, - at …, output at …\"",
		Transformer: "wire it with \", primary at … …, secondary at … …\"",
		Coupling:    "it joins two inductors with \", between … …\" and stands in no path",
	}[sym.Kind]
	f := c.report(s.unit.file, span, "not-two-terminal", "%s is %s and cannot stand in a box: %s",
		sym.Name, article(sym.Kind.String()), how)
	f.relate(sym.File, sym.Span, "%s is defined here", sym.Name)
}

// linkTwice reports a part that is wired a second time.
func (c *checker) linkTwice(s *scope, sym *Symbol, span Span) {
	earlier := sym.options
	if len(sym.boxes) > 0 {
		earlier = sym.boxes[0]
	}
	if !earlier.present {
		return
	}
	f := c.report(s.unit.file, span, "wired-twice", "%s is wired already: a part stands in one place of the network", sym.Name)
	f.relate(s.unit.file, earlier.span, "%s is wired here", sym.Name)
}

// inline finds the symbol of a part or use statement.
func (s *scope) inline(st Statement) *Symbol {
	name := ""
	switch st := st.(type) {
	case *PartStatement:
		name = st.Name.Text
	case *UsePartStatement:
		name = st.Name.Text
	}
	if sym := s.names[name]; sym != nil && sym.Statement == st {
		return sym
	}
	return s.taken[st]
}

func (c *checker) linkUse(s *scope, st *UsePartStatement) {
	use := s.inline(st)
	sub := c.linkWord(s, st.Subnetwork, "subnetwork", func(sym *Symbol) bool { return sym.Sort == SubnetworkSymbol })
	if use != nil {
		use.Of = sub
	}
	for i, a := range st.Arguments {
		c.linkExpr(s, a.Value, 0)
		for _, earlier := range st.Arguments[:i] {
			if earlier.Name.Text == a.Name.Text && a.Name.Present() {
				f := c.report(s.unit.file, a.Span, "given-twice", "the parameter %s is given already", a.Name.Text)
				f.relate(s.unit.file, earlier.Span, "here")
				break
			}
		}
		if sub != nil {
			c.linkInside(s, sub.body.names, a.Name, sub, "parameter", ParameterSymbol)
		}
	}
	if sub == nil {
		return
	}
	seen := map[string]Span{}
	for _, t := range st.Terminals {
		c.linkInside(s, sub.body.nodes, t.Terminal, sub, "terminal", NodeSymbol)
		if first, twice := seen[t.Terminal.Text]; twice && t.Terminal.Present() {
			f := c.report(s.unit.file, t.Terminal.Span, "wired-twice", "terminal %s is connected already", t.Terminal.Text)
			f.relate(s.unit.file, first, "%s is connected here", t.Terminal.Text)
		}
		seen[t.Terminal.Text] = t.Span
	}
}

// linkInside resolves a parameter or terminal of a subnetwork.
func (c *checker) linkInside(s *scope, names map[string]*Symbol, name Word, sub *Symbol, what string, sort SymbolSort) {
	if !name.Present() {
		return
	}
	sym := names[name.Text]
	if sym != nil && sym.Sort == sort && (sort != NodeSymbol || sym.Terminal) {
		c.table.record(sym, s.unit.file, name.Span, false)
		return
	}
	if sym != nil && sym.Sort == LetSymbol && sort == ParameterSymbol {
		f := c.report(s.unit.file, name.Span, "unknown-name", "%s is a let inside %s, not a parameter: parameters stand in its first line, after with: subnetwork %s (…) with %s = …",
			name.Text, sub.Name, sub.Name, name.Text)
		f.relate(sym.File, sym.Span, "the let %s", name.Text)
		return
	}
	f := c.report(s.unit.file, name.Span, "unknown-name", "%s has no %s %s", sub.Name, what, name.Text)
	f.relate(sub.File, sub.Span, "%s is defined here", sub.Name)
	if f.f == nil {
		return
	}
	list := sub.Parameters
	if sort == NodeSymbol {
		list = sub.Terminals
	}
	var candidates []string
	for _, p := range list {
		candidates = append(candidates, p.Name)
	}
	if best, ok := Nearest(name.Text, candidates); ok {
		f.f.Message += "; did you mean " + best + "?"
		f.repair(s.unit.file, name.Span, best, "write "+best)
	}
}
