package dialect

import "strconv"

// This file wires the parts of an instance.

// slot is the index of a node's name in an instance, −1 when it has none.
func (inst *instance) slot(name Word) int {
	if sym := inst.scope.nodes[name.Text]; sym != nil && name.Present() {
		return inst.slots[sym.index]
	}
	return -1
}

// joint makes an unnamed node between two boxes that touch.
func (b *builder) joint(inst *instance, span Span) int {
	b.d.Nodes = append(b.d.Nodes, Node{Joint: true, Places: []Origin{inst.origin(span)}})
	return len(b.d.Nodes) - 1
}

// end is one end of a box: the node, and the terminal it is by name.
type end struct {
	node int
	name string // "" for a joint
}

// wire gives the parts in paths and those with "at" their nodes. It returns
// the nodes at the terminals of the uses.
func (b *builder) wire(inst *instance) map[int][]end {
	terminals := map[int][]end{}
	for _, st := range inst.scope.statements {
		if path, ok := st.(*PathStatement); ok {
			b.wirePath(inst, path, terminals)
		}
	}
	for _, sym := range inst.scope.parts {
		b.wireOptions(inst, sym)
	}
	for _, use := range inst.scope.uses {
		st := use.Statement.(*UsePartStatement)
		if use.Of == nil || len(st.Terminals) == 0 {
			continue
		}
		ends := make([]end, len(use.Of.Terminals))
		for i, t := range use.Of.Terminals {
			ends[i] = end{node: -1}
			for _, clause := range st.Terminals {
				if clause.Terminal.Text == t.Name {
					ends[i] = end{inst.slot(clause.Node), clause.Node.Text}
				}
			}
		}
		terminals[use.index] = ends
	}
	return terminals
}

func (b *builder) wirePath(inst *instance, path *PathStatement, terminals map[int][]end) {
	for i, chain := range path.Chains {
		if i+1 >= len(path.Nodes) {
			return
		}
		left := end{inst.slot(path.Nodes[i]), path.Nodes[i].Text}
		last := end{inst.slot(path.Nodes[i+1]), path.Nodes[i+1].Text}
		for j, g := range chain.Groups {
			right := last
			if j+1 < len(chain.Groups) {
				right = end{node: b.joint(inst, Span{g.Close.Start, chain.Groups[j+1].Open.End})}
			}
			for _, box := range g.Boxes {
				b.wireBox(inst, box, left, right, terminals)
			}
			left = right
		}
	}
}

func (b *builder) wireBox(inst *instance, box Box, left, right end, terminals map[int][]end) {
	var sym *Symbol
	switch box := box.(type) {
	case *NameBox:
		sym = inst.scope.names[box.Name.Text]
	case *PartStatement, *UsePartStatement:
		sym = inst.scope.inline(box.(Statement))
	}
	switch {
	case sym == nil:
		b.c.fault() // unknown, or a hole
	case sym.Sort == UseSymbol:
		if terminals[sym.index] == nil && sym.Of != nil && len(sym.Of.Terminals) == 2 {
			terminals[sym.index] = []end{left, right}
		}
	case sym.Sort == PartSymbol:
		p := &b.d.Parts[inst.slots[sym.index]]
		if p.From >= 0 || p.To >= 0 || !p.Kind.twoTerminal() {
			b.c.fault() // wired twice, or not to be wired so
			return
		}
		p.From, p.To, p.Wired = left.node, right.node, inst.origin(box.Extent())
		inst.attach(left, PartEnd{Part: inst.slots[sym.index], Sign: 1})
		inst.attach(right, PartEnd{Part: inst.slots[sym.index], Sign: -1})
	}
}

// twoTerminal says that parts of the kind stand in a path.
func (k Kind) twoTerminal() bool {
	switch k {
	case NoKind, OpAmp, Transformer, Coupling:
		return false
	}
	return true
}

// attach notes that a part's end is connected to a terminal of the body, for
// the current into that terminal.
func (inst *instance) attach(e end, p PartEnd) {
	if inst.scope.body == nil || e.name == "" {
		return
	}
	if sym := inst.scope.nodes[e.name]; sym != nil && sym.Terminal {
		if inst.inflow == nil {
			inst.inflow = map[int][]PartEnd{}
		}
		inst.inflow[sym.index] = append(inst.inflow[sym.index], p)
	}
}

// wireOptions gives op amps and transformers their nodes.
func (b *builder) wireOptions(inst *instance, sym *Symbol) {
	st, index := sym.Statement.(*PartStatement), inst.slots[sym.index]
	p := &b.d.Parts[index]
	secondaries := 0
	for _, o := range st.Options {
		if !o.connects() {
			continue
		}
		node := func(i int) int {
			if i < len(o.Nodes) {
				return inst.slot(o.Nodes[i])
			}
			return -1
		}
		switch word := o.Keyword.Text; {
		case p.Kind == OpAmp && word == "+":
			p.Plus = node(0)
		case p.Kind == OpAmp && word == "-":
			p.Minus = node(0)
		case p.Kind == OpAmp && word == "output":
			p.Output = node(0)
			if len(o.Nodes) > 0 {
				inst.attach(end{p.Output, o.Nodes[0].Text}, PartEnd{Part: index, Terminal: "output", Sign: 1})
			}
		case p.Kind == Transformer && (word == "primary" || word == "secondary"):
			name := word
			if word == "secondary" {
				secondaries++
				name = windingName(secondaries)
			}
			p.Windings = append(p.Windings, Winding{Name: name, Plus: node(0), Minus: node(1)})
			for i, sign := range [...]int{1, -1} {
				if i < len(o.Nodes) {
					inst.attach(end{node(i), o.Nodes[i].Text}, PartEnd{Part: index, Terminal: name, Sign: sign})
				}
			}
		default:
			continue
		}
		p.Wired = inst.origin(st.Span)
	}
}

// windingName is the name of the n-th secondary winding.
func windingName(n int) string {
	if n == 1 {
		return "secondary"
	}
	return "secondary" + strconv.Itoa(n)
}

func (b *builder) wirePorts(inst *instance) {
	for _, sym := range inst.scope.symbols {
		st, ok := sym.Statement.(*PortStatement)
		if !ok || sym.Sort != PortSymbol {
			continue
		}
		p := &b.d.Ports[inst.slots[sym.index]]
		p.Plus, p.Minus = inst.slot(st.Plus), inst.slot(st.Minus)
		for _, n := range [...]int{p.Plus, p.Minus} {
			if n >= 0 {
				b.d.Nodes[n].Ported = true
			}
		}
		if p.Plus == p.Minus && p.Plus >= 0 {
			harmless := b.c.harmless
			b.c.harmless = true
			b.report(inst, Span{st.Plus.Span.Start, st.Minus.Span.End}, "port-shorted",
				"both ends of port %s are at %s", sym.Name, st.Plus.Text)
			b.c.harmless = harmless
		}
	}
}
