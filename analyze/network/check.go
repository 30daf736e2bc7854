package network

// checked returns the network with every element taken out that refers to
// what is not there, and a BadReference for each. Elements that sense a bad
// element go too.
func (n *Network) checked() (*Network, []Problem) {
	var bad []Problem
	out := n
	remove := func(i int, detail string, others ...int) {
		if out == n {
			c := *n
			c.Elements = append([]Element(nil), n.Elements...)
			out = &c
		}
		out.Elements[i] = Element{Name: n.Elements[i].Name}
		bad = append(bad, Problem{Kind: BadReference, Elements: append([]int{i}, others...), Detail: detail})
	}
	for again := true; again; {
		again = false
		for i := range out.Elements {
			if detail, other := out.fault(i); detail != "" {
				again = true
				if other >= 0 {
					remove(i, detail, other)
				} else {
					remove(i, detail)
				}
			}
		}
	}
	return out, bad
}

// fault says what is wrong with element i's references, and which element it
// refers to wrongly (-1 for none).
func (n *Network) fault(i int) (detail string, other int) {
	e := &n.Elements[i]
	if e.Kind < Absent || e.Kind > Open {
		return "no such kind", -1
	}
	outside := false
	node := func(v int) {
		if v < 0 || v >= n.Nodes {
			outside = true
		}
	}
	e.terminals(node)
	if outside {
		return "a node that does not exist", -1
	}
	if e.Kind == Coupling {
		for _, c := range e.Coils {
			if c < 0 || c >= len(n.Elements) {
				return "a coil that does not exist", -1
			}
			if n.Elements[c].Kind != Inductor {
				return "couples something other than an inductor", c
			}
		}
		if e.Coils[0] == e.Coils[1] {
			return "couples an inductor with itself", e.Coils[0]
		}
	}
	if e.Kind == Transformer && len(e.Windings) < 2 {
		return "fewer than two windings", -1
	}
	other = -1
	e.probes(func(p Probe) {
		if detail == "" {
			detail, other = n.probeFault(p)
		}
	})
	return detail, other
}

// probeFault says what is wrong with a probe.
func (n *Network) probeFault(p Probe) (detail string, other int) {
	if p.Quantity == NodePair {
		if min(p.Plus, p.Minus) < 0 || max(p.Plus, p.Minus) >= n.Nodes {
			return "senses a node that does not exist", -1
		}
		return "", -1
	}
	if p.Element < 0 || p.Element >= len(n.Elements) {
		return "senses an element that does not exist", -1
	}
	e := &n.Elements[p.Element]
	switch {
	case p.Quantity == ElementFlow && (e.Kind.twoTerminal() || e.Kind == Open):
	case p.Quantity == TerminalCurrent && e.Kind == OpAmp:
	case p.Quantity == TerminalCurrent && e.Kind == Transformer && p.Winding >= 0 && p.Winding < len(e.Windings):
	default:
		return "senses a current that the element does not have", p.Element
	}
	return "", -1
}
