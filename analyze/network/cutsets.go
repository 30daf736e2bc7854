package network

// contracted is the graph that is left when all branches but some are shrunk
// to points.
type contracted struct {
	of    []int   // the vertex of each node
	nodes [][]int // the nodes of each vertex
	root  int     // the vertex of the reference, -1 without one
}

// contract shrinks the branches for which keep is false.
func (f *frame) contract(keep func(branch int) bool) contracted {
	s := newSets(f.Nodes)
	for i, b := range f.branches {
		if !keep(i) {
			s.join(b.from, b.to)
		}
	}
	c := contracted{of: make([]int, f.Nodes), root: -1}
	number := make([]int, f.Nodes)
	for v := range f.Nodes {
		r := s.find(v)
		if number[r] == 0 {
			c.nodes = append(c.nodes, nil)
			number[r] = len(c.nodes)
		}
		c.of[v] = number[r] - 1
		c.nodes[c.of[v]] = append(c.nodes[c.of[v]], v)
	}
	if f.Ground >= 0 {
		c.root = c.of[f.Ground]
	}
	return c
}

// currentDefined tells whether a branch's current is prescribed.
func (k Kind) currentDefined() bool { return k == CurrentSource || k == DependentCurrent }

// currentCutsets reports nodes that are reached through current sources (and
// open switches) only. The balance of currents there contains no unknown, so
// the equations are singular, unless one of the sources is dependent; those
// cutsets are returned apart.
func (f *frame) currentCutsets() (sure, doubtful []Problem) {
	c := f.contract(func(i int) bool { return f.kinds[i].currentDefined() })
	for _, p := range f.cutsets(CurrentCutset, c, f.kept(c, Kind.currentDefined, true)) {
		sources, dependent := false, false
		for _, e := range p.Elements {
			sources = sources || f.Elements[e].Kind.currentDefined()
			dependent = dependent || f.Elements[e].Kind == DependentCurrent
		}
		switch {
		case !sources: // only open switches: an island
		case dependent:
			doubtful = append(doubtful, p)
		default:
			p.Singular = true
			sure = append(sure, p)
		}
	}
	return sure, doubtful
}

// inductorCutsets reports nodes reached through inductors and current sources
// only, with at least one inductor. Each lowers the order by one.
func (f *frame) inductorCutsets() []Problem {
	kept := func(k Kind) bool { return k == Inductor || k.currentDefined() }
	c := f.contract(func(i int) bool { return kept(f.kinds[i]) })
	var out []Problem
	for _, p := range f.cutsets(InductorCutset, c, f.kept(c, kept, false)) {
		for _, e := range p.Elements {
			if f.Elements[e].Kind == Inductor {
				out = append(out, p)
				break
			}
		}
	}
	return out
}

// kept lists the elements of the chosen kinds as edges between vertices; ids
// are elements. Open switches come too when asked for.
func (f *frame) kept(c contracted, chosen func(Kind) bool, open bool) []edge {
	var out []edge
	for i := range f.Elements {
		e := &f.Elements[i]
		if chosen(e.Kind) || open && e.Kind == Open {
			out = append(out, edge{c.of[e.From], c.of[e.To], i})
		}
	}
	return out
}

// cutsets turns the stars of a contracted graph into problems; the signs are
// those of currents that leave the nodes, with the first member positive.
func (f *frame) cutsets(kind ProblemKind, c contracted, edges []edge) []Problem {
	var out []Problem
	stars(len(c.nodes), c.root, edges, func(v int, ids []int) {
		p := Problem{Kind: kind, Nodes: c.nodes[v], Elements: append([]int(nil), ids...)}
		for _, id := range p.Elements {
			p.Signs = append(p.Signs, sign(c.of[f.Elements[id].From] == v))
		}
		if p.Signs[0] < 0 {
			for i := range p.Signs {
				p.Signs[i] = -p.Signs[i]
			}
		}
		out = append(out, p)
	})
	return out
}

// noDCPath reports nodes without a path for direct current to the reference,
// with the capacitors and current sources around them. What the given current
// cutsets or a single connection explain is left out.
func (f *frame) noDCPath(known []Problem) []Problem {
	blocks := func(i int) bool {
		k := f.kinds[i]
		return k == Capacitor || k.currentDefined() ||
			k == Immittance && f.Elements[f.branches[i].element].blocksDC()
	}
	c := f.contract(blocks)
	explained := make([]bool, len(c.nodes))
	for _, p := range known {
		explained[c.of[p.Nodes[0]]] = true
	}
	around := make([][]int, len(c.nodes))
	for i, b := range f.branches {
		if blocks(i) && c.of[b.from] != c.of[b.to] {
			around[c.of[b.from]] = append(around[c.of[b.from]], b.element)
			around[c.of[b.to]] = append(around[c.of[b.to]], b.element)
		}
	}
	reference := f.referenceParts(c)
	var out []Problem
	for v, nodes := range c.nodes {
		if reference[f.island[nodes[0]]] == v || len(around[v]) == 0 || explained[v] {
			continue
		}
		if len(nodes) == 1 && f.connections[nodes[0]] == 1 && !f.ported(nodes[0]) && f.senses[nodes[0]] == 0 {
			continue
		}
		out = append(out, Problem{Kind: NoDCPath, Nodes: nodes, Elements: around[v]})
	}
	return out
}

// referenceParts returns for each island the vertex that counts as its
// reference: the ground's, or the largest.
func (f *frame) referenceParts(c contracted) []int {
	out := make([]int, len(f.roots))
	for i := range out {
		out[i] = -1
	}
	for v, nodes := range c.nodes {
		i := f.island[nodes[0]]
		if out[i] < 0 || len(nodes) > len(c.nodes[out[i]]) {
			out[i] = v
		}
	}
	if c.root >= 0 {
		out[0] = c.root
	}
	return out
}

// blocksDC tells whether an immittance passes no direct current: its
// admittance vanishes at s = 0.
func (e *Element) blocksDC() bool {
	num, den := order(e.Numerator), order(e.Denominator)
	if len(e.Denominator) == 0 {
		den = 0
	}
	if e.Admittance {
		return num < 0 || num > den
	}
	return num >= 0 && num < den
}
