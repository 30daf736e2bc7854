package dialect

// checkWired reports parts that no wiring reaches, and uses whose terminals
// are not all connected.
func (c *checker) checkWired(s *scope) {
	for _, sym := range s.symbols {
		switch {
		case sym.Name == "" || sym.Kind == Coupling:
		case sym.Sort == PartSymbol:
			c.checkPartWired(s, sym)
		case sym.Sort == UseSymbol && sym.Of != nil:
			c.checkUseWired(s, sym)
		}
	}
}

func (c *checker) checkPartWired(s *scope, sym *Symbol) {
	if len(sym.boxes) > 0 || sym.options.present {
		return
	}
	if st := sym.Statement.Headline(); st.Broken {
		return // what is missing has been told
	}
	switch sym.Kind {
	case OpAmp, Transformer, NoKind:
		return // told as options that are missing
	}
	if c.lostName(s.unit, sym.Name) {
		return
	}
	f := c.report(s.unit.file, sym.Span, "never-wired", "%s %s is not wired: no path leads through it", sym.Kind, sym.Name)
	f.remove(s.unit.file, sym.Statement.Headline().Span, "remove "+sym.Name)
	f.choose()
}

func (c *checker) checkUseWired(s *scope, sym *Symbol) {
	st := sym.Statement.(*UsePartStatement)
	if st.Headline().Broken {
		return
	}
	terminals := sym.Of.Terminals
	if len(sym.boxes) > 0 {
		if len(terminals) != 2 {
			f := c.report(s.unit.file, sym.boxes[0].span, "not-two-terminal",
				"%s has %s and cannot stand in a box: connect them with \"TERMINAL at NODE\"",
				sym.Of.Name, counted(len(terminals), "terminal", "terminals"))
			f.relate(sym.Of.File, sym.Of.Span, "%s is defined here", sym.Of.Name)
		}
		if sym.options.present {
			f := c.report(s.unit.file, sym.options.span, "wired-twice", "%s stands in a box already, which connects its terminals", sym.Name)
			f.relate(s.unit.file, sym.boxes[0].span, "%s is wired here", sym.Name)
		}
		return
	}
	if len(st.Terminals) == 0 {
		c.report(s.unit.file, sym.Span, "never-wired",
			"%s is not wired: give its terminals nodes, or set it in a path's box", sym.Name)
		return
	}
	for _, t := range terminals {
		if !st.connectsTerminal(t.Name) {
			f := c.report(s.unit.file, sym.Span, "option-missing", "terminal %s of %s is connected to nothing", t.Name, sym.Name)
			f.relate(t.File, t.Span, "the terminal %s of %s", t.Name, sym.Of.Name)
			f.repair(s.unit.file, Span{st.Span.End, st.Span.End}, ", "+t.Name+" at NODE", "connect "+t.Name)
		}
	}
}

func (st *UsePartStatement) connectsTerminal(name string) bool {
	for _, t := range st.Terminals {
		if t.Terminal.Text == name {
			return true
		}
	}
	return false
}

// checkSelfLoop warns of a part with both ends at one node.
func (c *checker) checkSelfLoop(s *scope, sym *Symbol, b Box, left, right Word) {
	if !left.Present() || left.Text != right.Text {
		return
	}
	f := c.report(s.unit.file, b.Extent(), "self-loop",
		"both ends of %s are at %s: it has no effect on the rest of the network", sym.Name, left.Text)
	f.relate(s.unit.file, left.Span, "one end")
	f.relate(s.unit.file, right.Span, "the other end")
}
