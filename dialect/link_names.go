package dialect

// This file resolves the names of expressions and questions.

func (c *checker) linkAsked(s *scope, what Asked) {
	switch q := what.(type) {
	case Expr:
		c.linkExpr(s, q, 0)
	case *RootsQuestion:
		c.linkExpr(s, q.X, 0)
	case *MatrixQuestion:
		isPort := func(sym *Symbol) bool { return sym.Sort == PortSymbol }
		c.linkWord(s, q.First, "port", isPort)
		c.linkWord(s, q.Second, "port", isPort)
		c.linkExpr(s, q.Reference, 0)
	}
}

func (c *checker) linkQualifiers(s *scope, list []*Qualifier) {
	for _, q := range list {
		c.linkExpr(s, q.Value, 0)
		c.linkExpr(s, q.To, 0)
		for _, n := range q.Names {
			c.linkName(s, n, nil)
		}
	}
}

// linkExpr resolves the names of an expression; e may be nil.
func (c *checker) linkExpr(s *scope, e Expr, depth int) {
	if depth > maxDepth {
		return
	}
	switch e := e.(type) {
	case *NameExpr:
		c.linkName(s, e, nil)
	case *SubscriptExpr:
		c.linkSubscripts(s, e)
	case *CallExpr:
		if name, ok := e.Callee.(*NameExpr); ok {
			if _, builtin := callTable[name.Text()]; !builtin || s.visible(name.Text()) != nil && callsUser(s, name) {
				c.linkCallee(s, name, e)
			}
		} else {
			c.linkExpr(s, e.Callee, depth+1)
		}
		for _, a := range e.Args {
			c.linkExpr(s, a, depth+1)
		}
	case *UnaryExpr:
		c.linkExpr(s, e.X, depth+1)
	case *BinaryExpr:
		c.linkExpr(s, e.X, depth+1)
		c.linkExpr(s, e.Y, depth+1)
	case *ParenExpr:
		c.linkExpr(s, e.X, depth+1)
	case *ConvertExpr:
		c.linkExpr(s, e.X, depth+1)
	}
}

// callsUser says that a call of a name which is also a word of the notation
// means the file's own function.
func callsUser(s *scope, name *NameExpr) bool {
	sym := s.visible(name.Text())
	return sym != nil && sym.Sort == FunctionSymbol
}

func (c *checker) linkSubscripts(s *scope, e *SubscriptExpr) {
	port := e.Letter.Text == "thevenin" || e.Letter.Text == "norton"
	for _, n := range e.Subscripts {
		if port {
			if len(n.Words) == 1 {
				c.linkWord(s, n.Words[0], "port", func(sym *Symbol) bool { return sym.Sort == PortSymbol })
			}
			continue
		}
		c.linkName(s, n, &e.Letter)
	}
}

// linkName resolves a name with its dots. letter is the quantity it is a
// subscript of, nil for a name in an expression.
func (c *checker) linkName(s *scope, n *NameExpr, letter *Word) {
	if len(n.Words) == 0 {
		return
	}
	first := n.Words[0]
	if letter == nil && len(n.Words) == 1 && (first.Text == "s" || first.Text == "t" || first.Text == "pi") {
		return
	}
	at := s
	for i, w := range n.Words {
		if !w.Present() {
			return
		}
		sym := at.lookup(w.Text, letter != nil, i > 0)
		if sym == nil {
			c.reportUnknown(s, at, n, i, letter)
			return
		}
		c.table.record(sym, s.unit.file, w.Span, false)
		if port, ok := sym.Statement.(*PortStatement); ok && sym.Sort == PortSymbol && letter != nil {
			if node := at.nodes[w.Text]; node != nil && port.Plus.Text == w.Text {
				c.table.record(node, s.unit.file, w.Span, false)
			}
		}
		if i+1 == len(n.Words) {
			return
		}
		if at = c.linkInto(s, sym, n, i); at == nil {
			return
		}
	}
}

// lookup finds a name: in subscripts nodes count too and files' constants do
// not matter; inside a use only the body's own names count.
func (s *scope) lookup(name string, subscript, inner bool) *Symbol {
	if inner {
		if sym := s.names[name]; sym != nil {
			return sym
		}
		return s.nodes[name]
	}
	if sym := s.names[name]; sym != nil && subscript {
		switch sym.Sort {
		case PartSymbol, PortSymbol, UseSymbol:
			return sym
		}
	}
	if node := s.nodes[name]; subscript && node != nil {
		return node
	}
	if sym := s.visible(name); sym != nil {
		return sym
	}
	return s.nodes[name]
}

// linkInto steps into what a dot follows. It is nil where there is no further
// scope: a part's terminal is resolved, anything else reported.
func (c *checker) linkInto(s *scope, sym *Symbol, n *NameExpr, i int) *scope {
	next := n.Words[i+1]
	switch {
	case sym.Sort == UseSymbol:
		if sym.Of == nil {
			c.linkUseOf(sym)
		}
		if sym.Of == nil {
			return nil // told at the use
		}
		return sym.Of.body
	case sym.Sort == PartSymbol && (sym.Kind == OpAmp || sym.Kind == Transformer) && i+2 == len(n.Words):
		if !hasTerminal(sym, next.Text) {
			terminals := "output"
			if sym.Kind == Transformer {
				terminals = "primary or secondary"
			}
			c.report(s.unit.file, next.Span, "unknown-name", "%s %s has no terminal %s: write %s.%s",
				sym.Kind, sym.Name, next.Text, sym.Name, terminals)
		}
		return nil
	}
	c.report(s.unit.file, Span{n.Words[0].Span.Start, next.Span.End}, "wrong-sort",
		"%s is %s and has nothing inside: a dot follows the name of a subnetwork's use, of an op amp or of a transformer",
		sym.Name, article(sym.describe()))
	return nil
}

// linkUseOf resolves the subnetwork of a use that stands later in the text,
// without recording.
func (c *checker) linkUseOf(sym *Symbol) {
	st, ok := sym.Statement.(*UsePartStatement)
	if !ok {
		return
	}
	if sub := sym.scope.visible(st.Subnetwork.Text); sub != nil && sub.Sort == SubnetworkSymbol {
		sym.Of = sub
	}
}

func hasTerminal(sym *Symbol, name string) bool {
	st, ok := sym.Statement.(*PartStatement)
	if !ok {
		return false
	}
	if sym.Kind == OpAmp {
		return name == "output"
	}
	secondaries := 0
	for _, o := range st.Options {
		if o.Keyword.Text == "secondary" {
			secondaries++
			if name == windingName(secondaries) {
				return true
			}
		}
	}
	return name == "primary"
}

func (c *checker) reportUnknown(s, at *scope, n *NameExpr, i int, letter *Word) {
	w := n.Words[i]
	if i > 0 {
		use := n.Words[i-1].Text
		f := c.report(s.unit.file, w.Span, "unknown-name", "there is nothing named %s inside %s (a %s)", w.Text, use, at.symbol.Name)
		f.relate(at.symbol.File, at.symbol.Span, "%s is defined here", at.symbol.Name)
		c.offerNamesIn(f, s, at, w)
		return
	}
	if c.lostName(s.unit, w.Text) {
		c.fault()
		return
	}
	if _, word := callTable[w.Text]; word && letter == nil {
		c.reportUncalled(s, w)
		return
	}
	what := "nothing named"
	if letter != nil {
		what = map[string]string{
			"v": "no node, part or port named", "z": "no node, part or port named", "y": "no node, part or port named",
			"i": "no part or port named", "p": "no part named",
		}[letter.Text]
		if what == "" {
			what = "nothing named"
		}
	}
	f := c.report(s.unit.file, w.Span, "unknown-name", "there is %s %s", what, w.Text)
	if sym := s.unit.scope.lookup(w.Text, true, false); sym != nil && s.body != nil && f.f != nil {
		f.f.Message += ": " + article(sym.describe()) + " of the file is not seen inside a subnetwork"
		f.relate(sym.File, sym.Span, "the %s %s of the file", sym.describe(), sym.Name)
		return
	}
	c.offerNames(f, s, w, func(sym *Symbol) bool {
		if letter == nil {
			return sym.Sort != NodeSymbol && sym.Sort != SubnetworkSymbol && sym.Sort != PortSymbol
		}
		switch letter.Text {
		case "i", "p":
			return sym.Sort == PartSymbol || sym.Sort == UseSymbol || sym.Sort == PortSymbol && letter.Text == "i"
		}
		return sym.Sort == NodeSymbol || sym.Sort == PartSymbol || sym.Sort == UseSymbol || sym.Sort == PortSymbol
	})
}

func (c *checker) offerNamesIn(f *reported, s, at *scope, w Word) {
	if f.f == nil || c.suggested > 200 {
		return
	}
	c.suggested++
	var names []string
	for _, sym := range at.symbols {
		names = append(names, sym.Name)
	}
	if best, ok := Nearest(w.Text, names); ok {
		f.f.Message += "; did you mean " + best + "?"
		f.repair(s.unit.file, w.Span, best, "write "+best)
	}
}
