package network

import "portlight/dialect/number"

// feedback reports ideal op amps whose output cannot reach their inputs.
//
// Let R be what the output influences. The equations that hold no quantity of
// R hold one unknown less than there are of them: the output's own current is
// in R, while the condition v(plus) = v(minus) is not. So the equations are
// singular whenever this reports.
func (f *frame) feedback() []Problem {
	var out []Problem
	var flow *influence
	for i := range f.Elements {
		if e := &f.Elements[i]; e.Kind != OpAmp || !e.ideal() {
			continue
		}
		if flow == nil {
			flow = newInfluence(f)
		}
		if !flow.feedsBack(i) {
			e := &f.Elements[i]
			out = append(out, Problem{Kind: OpAmpNoFeedback, Elements: []int{i}, Nodes: []int{e.Output, e.Plus, e.Minus}, Singular: true})
		}
	}
	return out
}

// influence walks from quantities to the quantities that depend on them,
// erring towards dependence. Nodes held by independent voltage sources to the
// reference stop it.
type influence struct {
	*frame
	at          incidence // branches at nodes; indices into edges
	edges       []edge
	held        []bool  // nodes held by sources
	holders     []int   // the elements that hold them
	byVoltage   [][]int // elements that sense each node
	byCurrent   [][]int // elements that sense each element's current
	coupledWith [][]int // coils coupled with each coil

	seenNode, seenElement []int // the walk in which each was last seen
	walk                  int
	heldSeen              bool
	queue                 []int // nodes, and elements complemented
	plus, minus           int   // the inputs looked for
	found                 bool
}

func newInfluence(f *frame) *influence {
	w := &influence{
		frame: f, byVoltage: make([][]int, f.Nodes), byCurrent: make([][]int, len(f.Elements)),
		coupledWith: make([][]int, len(f.Elements)),
		seenNode:    make([]int, f.Nodes), seenElement: make([]int, len(f.Elements)),
	}
	for i, b := range f.branches {
		if !f.kinds[i].currentDefined() && f.kinds[i] != OpAmp {
			w.edges = append(w.edges, edge{b.from, b.to, b.element})
		}
	}
	w.at = newIncidence(f.Nodes, w.edges)
	w.held, w.holders = f.heldNodes()
	for i := range f.Elements {
		e := &f.Elements[i]
		e.probes(func(p Probe) {
			if p.Quantity == NodePair {
				w.byVoltage[p.Plus] = append(w.byVoltage[p.Plus], i)
				w.byVoltage[p.Minus] = append(w.byVoltage[p.Minus], i)
			} else {
				w.byCurrent[p.Element] = append(w.byCurrent[p.Element], i)
			}
		})
		if e.Kind == Coupling {
			a, b := e.Coils[0], e.Coils[1]
			w.coupledWith[a] = append(w.coupledWith[a], b)
			w.coupledWith[b] = append(w.coupledWith[b], a)
		}
	}
	return w
}

// heldNodes returns the nodes that independent voltage sources and shorts
// join to the reference, and these elements.
func (f *frame) heldNodes() (held []bool, holders []int) {
	held = make([]bool, f.Nodes)
	if f.Ground < 0 {
		return held, nil
	}
	s := newSets(f.Nodes)
	holds := func(k Kind) bool { return k == VoltageSource || k == Short }
	for _, e := range f.edgesOf(holds) {
		s.join(e.from, e.to)
	}
	ground := s.find(f.Ground)
	for v := range held {
		held[v] = s.find(v) == ground
	}
	for _, e := range f.edgesOf(holds) {
		if held[e.from] {
			holders = append(holders, f.branches[e.id].element)
		}
	}
	return held, holders
}

// feedsBack tells whether op amp u's output influences an input of it. The walk
// is breadth first, so that feedback close by is found at once.
func (w *influence) feedsBack(u int) bool {
	w.walk++
	w.heldSeen, w.found = false, false
	w.queue = w.queue[:0]
	e := &w.Elements[u]
	w.plus, w.minus = e.Plus, e.Minus
	w.touchElement(u)
	w.touchNode(e.Output)
	for k := 0; k < len(w.queue) && !w.found; k++ {
		if v := w.queue[k]; v >= 0 {
			for _, b := range w.at.at(v) {
				w.touchElement(w.edges[b].id)
			}
			for _, d := range w.byVoltage[v] {
				w.touchElement(d)
			}
		} else {
			w.spread(^v)
		}
	}
	return w.found
}

// spread goes from an element, whose current or drive depends on the output,
// to what depends on it.
func (w *influence) spread(d int) {
	e := &w.Elements[d]
	switch {
	case e.Kind == OpAmp:
		w.touchNode(e.Output)
	default:
		e.terminals(w.touchNode)
	}
	for _, s := range w.byCurrent[d] {
		w.touchElement(s)
	}
	for _, c := range w.coupledWith[d] {
		w.touchElement(c)
	}
}

func (w *influence) touchNode(v int) {
	if w.held[v] || v == w.Ground {
		if !w.heldSeen {
			w.heldSeen = true
			for _, h := range w.holders {
				w.touchElement(h)
			}
		}
		return
	}
	if w.seenNode[v] != w.walk {
		w.seenNode[v] = w.walk
		w.queue = append(w.queue, v)
		w.found = w.found || v == w.plus || v == w.minus
	}
}

func (w *influence) touchElement(d int) {
	if w.seenElement[d] != w.walk {
		w.seenElement[d] = w.walk
		w.queue = append(w.queue, ^d)
	}
}

// order returns the lowest power of s with a coefficient that is not zero, -1
// for none.
func order(coeffs []number.Exact) int {
	for i, c := range coeffs {
		if c.Rat().Sign() != 0 {
			return i
		}
	}
	return -1
}
