package network

import "slices"

// islands reports the parts that no branch joins to the reference (without a
// reference: to the largest part).
func (f *frame) islands() []Problem {
	main := f.mainIsland()
	if main < 0 {
		return nil
	}
	links := f.islandLinks()
	reached := reach(len(f.roots), main, links)
	nodes := make([][]int, len(f.roots))
	for v, i := range f.island {
		nodes[i] = append(nodes[i], v)
	}
	through := make([][]int, len(f.roots))
	for _, l := range links {
		for _, i := range []int{l.from, l.to} {
			through[i] = append(through[i], l.id)
		}
	}
	for i := range f.Elements {
		if e := &f.Elements[i]; e.Kind == Open && f.island[e.From] != f.island[e.To] {
			through[f.island[e.From]] = append(through[f.island[e.From]], i)
			through[f.island[e.To]] = append(through[f.island[e.To]], i)
		}
	}
	var out []Problem
	for i := range f.roots {
		if i == main || f.alone(nodes[i]) {
			continue
		}
		t := through[i]
		slices.Sort(t)
		out = append(out, Problem{Kind: Island, Nodes: nodes[i], Coupled: reached[i], Through: slices.Compact(t)})
	}
	return out
}

// mainIsland is the ground's, or the largest one with a branch.
func (f *frame) mainIsland() int {
	if f.Ground >= 0 {
		return 0
	}
	if len(f.branches) == 0 {
		return -1
	}
	size := make([]int, len(f.roots))
	for _, i := range f.island {
		size[i]++
	}
	best := f.island[f.branches[0].from]
	for i := range size {
		if size[i] > size[best] {
			best = i
		}
	}
	return best
}

// alone tells whether the island is a node that nothing is wired to and
// nothing asks for, or one that FloatingNode already reports.
func (f *frame) alone(nodes []int) bool {
	if len(nodes) != 1 {
		return false
	}
	v := nodes[0]
	switch f.connections[v] {
	case 0:
		return !f.ported(v) && f.senses[v] == 0
	case 1:
		return !f.ported(v) && f.senses[v] <= f.opAmpInputs(v)
	}
	return false
}

// islandLinks lists pairs of islands that influence one another through an
// element that does not join their potentials; the edge's id is the element.
func (f *frame) islandLinks() []edge {
	var links []edge
	link := func(a, b, element int) {
		if f.island[a] != f.island[b] {
			links = append(links, edge{f.island[a], f.island[b], element})
		}
	}
	for i := range f.Elements {
		e := &f.Elements[i]
		switch e.Kind {
		case Transformer:
			for _, w := range e.Windings[1:] {
				link(e.Windings[0].Plus, w.Plus, i)
			}
		case Coupling:
			link(f.Elements[e.Coils[0]].From, f.Elements[e.Coils[1]].From, i)
		case DependentVoltage, DependentCurrent:
			e.probes(func(p Probe) {
				if v := f.anyNode(p); v >= 0 {
					link(v, e.From, i)
				}
			})
		}
	}
	return links
}

// anyNode returns a node that what p senses belongs to, -1 for none.
func (f *frame) anyNode(p Probe) int {
	if p.Quantity == NodePair {
		return p.Plus
	}
	e := &f.Elements[p.Element]
	switch e.Kind {
	case OpAmp:
		return e.Output
	case Transformer:
		return e.Windings[p.Winding].Plus
	}
	return e.From
}

// reach tells which vertices are joined to the start.
func reach(vertices, start int, edges []edge) []bool {
	s := newSets(vertices)
	for _, e := range edges {
		s.join(e.from, e.to)
	}
	out := make([]bool, vertices)
	for v := range out {
		out[v] = s.find(v) == s.find(start)
	}
	return out
}

// across reports elements that sense a voltage between two islands.
func (f *frame) across() []Problem {
	var out []Problem
	for i := range f.Elements {
		done := false
		f.Elements[i].probes(func(p Probe) {
			if done || p.Quantity != NodePair || f.island[p.Plus] == f.island[p.Minus] {
				return
			}
			done = true
			out = append(out, Problem{Kind: AcrossIslands, Elements: []int{i}, Nodes: []int{p.Plus, p.Minus}, Singular: true})
		})
	}
	return out
}
