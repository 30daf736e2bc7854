package network

// Partition splits a network into groups of elements that cannot influence
// one another. What hangs between the reference and rails that independent
// voltage sources hold falls apart into one group for each piece.
type Partition struct {
	// Groups lists the elements of each group in ascending order; groups are
	// in the order of their first elements.
	Groups [][]int
	// Held lists the independent voltage sources and shorts that hold the
	// rails. Their voltages are those of every group; their own currents are
	// sums over all groups.
	Held []int
	// GroupOf is the group of each element, -1 for one in Held or absent.
	GroupOf []int
}

// Partition finds the groups in linear time. The voltages and currents of a
// group's elements in the whole network are those in the network that
// [Network.Extract] makes of the group.
func (n *Network) Partition() Partition {
	f := newFrame(n)
	held, holders := f.heldNodes()
	sensed := f.sensed()
	for _, h := range holders {
		if sensed[h] {
			// The current of a rail is the sum over what hangs on it, so
			// sensing it ties all of that together.
			held, holders = make([]bool, f.Nodes), nil
			break
		}
	}
	if f.Ground >= 0 {
		held[f.Ground] = true
	}
	p := Partition{Held: holders, GroupOf: make([]int, len(f.Elements))}
	holder := make([]bool, len(f.Elements))
	for _, h := range holders {
		holder[h] = true
	}
	s := f.tie(held, holder)
	number := make([]int, len(f.Elements)+f.Nodes)
	for i := range f.Elements {
		p.GroupOf[i] = -1
		if holder[i] || f.Elements[i].Kind == Absent {
			continue
		}
		r := s.find(i)
		if number[r] == 0 {
			p.Groups = append(p.Groups, nil)
			number[r] = len(p.Groups)
		}
		g := number[r] - 1
		p.GroupOf[i] = g
		p.Groups[g] = append(p.Groups[g], i)
	}
	return p
}

// tie joins elements (numbers from 0) with the free nodes they touch or sense
// (numbers after the elements).
func (f *frame) tie(held, holder []bool) *sets {
	s := newSets(len(f.Elements) + f.Nodes)
	for i := range f.Elements {
		if holder[i] {
			continue
		}
		e := &f.Elements[i]
		node := func(v int) {
			if !held[v] {
				s.join(i, len(f.Elements)+v)
			}
		}
		e.terminals(node)
		e.probes(func(p Probe) {
			if p.Quantity == NodePair {
				node(p.Plus)
				node(p.Minus)
			} else {
				s.join(i, p.Element)
			}
		})
		if e.Kind == Coupling {
			s.join(i, e.Coils[0])
			s.join(i, e.Coils[1])
		}
	}
	return s
}
