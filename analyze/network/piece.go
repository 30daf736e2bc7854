package network

import "slices"

// Piece is a part of a network as a network of its own, with numbers of its
// own. It holds a group of a Partition and what holds the rails.
type Piece struct {
	*Network
	// ElementOf and NodeOf are the whole network's numbers of the piece's
	// elements and nodes, in ascending order.
	ElementOf, NodeOf []int
}

// Extract makes a group of the partition a network of its own. Its time is
// that of the piece and does not depend on the size of the whole.
func (n *Network) Extract(p Partition, group int) *Piece {
	q := &Piece{Network: &Network{Ground: -1}}
	q.ElementOf = append(n.holding(p, group), p.Groups[group]...)
	slices.Sort(q.ElementOf)
	note := func(v int) {
		if v >= 0 && v < n.Nodes {
			q.NodeOf = append(q.NodeOf, v)
		}
	}
	note(n.Ground)
	for _, i := range q.ElementOf {
		e := &n.Elements[i]
		e.terminals(note)
		e.probes(func(p Probe) {
			if p.Quantity == NodePair {
				note(p.Plus)
				note(p.Minus)
			}
		})
	}
	slices.Sort(q.NodeOf)
	q.NodeOf = slices.Compact(q.NodeOf)
	q.Nodes = len(q.NodeOf)
	q.Ground = q.Node(n.Ground)
	q.Ported = make([]bool, q.Nodes)
	for v, whole := range q.NodeOf {
		q.Ported[v] = n.ported(whole)
	}
	for _, i := range q.ElementOf {
		q.Elements = append(q.Elements, q.renumbered(n.Elements[i]))
	}
	return q
}

// Element returns the piece's number of an element of the whole, -1 when it is
// not in the piece.
func (q *Piece) Element(whole int) int { return position(q.ElementOf, whole) }

// Node returns the piece's number of a node of the whole, -1 when it is not in
// the piece.
func (q *Piece) Node(whole int) int { return position(q.NodeOf, whole) }

func position(sorted []int, x int) int {
	if i, ok := slices.BinarySearch(sorted, x); ok {
		return i
	}
	return -1
}

// renumbered returns an element of the whole with the piece's numbers.
func (q *Piece) renumbered(e Element) Element {
	e.From, e.To = q.Node(e.From), q.Node(e.To)
	e.Plus, e.Minus, e.Output = q.Node(e.Plus), q.Node(e.Minus), q.Node(e.Output)
	e.Coils = [2]int{q.Element(e.Coils[0]), q.Element(e.Coils[1])}
	e.Windings = slices.Clone(e.Windings)
	for k := range e.Windings {
		w := &e.Windings[k]
		w.Plus, w.Minus = q.Node(w.Plus), q.Node(w.Minus)
	}
	e.Controls = slices.Clone(e.Controls)
	for k := range e.Controls {
		c := &e.Controls[k]
		c.Of = slices.Clone(c.Of)
		for j := range c.Of {
			p := &c.Of[j]
			p.Plus, p.Minus, p.Element = q.Node(p.Plus), q.Node(p.Minus), q.Element(p.Element)
		}
	}
	return e
}

// Whole returns a problem of the piece with the whole network's numbers.
func (q *Piece) Whole(p Problem) Problem {
	number := func(list []int, of []int) []int {
		if list == nil {
			return nil
		}
		out := make([]int, len(list))
		for i, x := range list {
			out[i] = of[x]
		}
		return out
	}
	p.Elements = number(p.Elements, q.ElementOf)
	p.Through = number(p.Through, q.ElementOf)
	p.Nodes = number(p.Nodes, q.NodeOf)
	return p
}

// holding lists those of the sources and shorts that hold rails which hold a
// rail that the group touches, followed back to the reference.
func (n *Network) holding(p Partition, group int) []int {
	at := map[int][]int{} // holders by node
	for _, h := range p.Held {
		e := &n.Elements[h]
		at[e.From], at[e.To] = append(at[e.From], h), append(at[e.To], h)
	}
	seen := map[int]bool{n.Ground: true}
	var queue []int
	visit := func(v int) {
		if !seen[v] && len(at[v]) > 0 {
			seen[v] = true
			queue = append(queue, v)
		}
	}
	for _, i := range p.Groups[group] {
		e := &n.Elements[i]
		e.terminals(visit)
		e.probes(func(q Probe) {
			if q.Quantity == NodePair {
				visit(q.Plus)
				visit(q.Minus)
			}
		})
	}
	var out []int
	for len(queue) > 0 {
		v := queue[0]
		queue = queue[1:]
		for _, h := range at[v] {
			if !slices.Contains(out, h) {
				out = append(out, h)
			}
			visit(n.Elements[h].From)
			visit(n.Elements[h].To)
		}
	}
	return out
}
