package network

import "slices"

// Inspect returns everything about the network that its structure shows,
// without solving anything: references to what is not there, values an
// element cannot have, islands, loops and cutsets, op amps without feedback,
// and couplings out of range. Problems come kind by kind in the order of the
// ProblemKind constants, within a kind in the order of elements and nodes.
// Apart from the inductance matrices its time is linear in the size of the
// network and of the result.
//
// Every VoltageLoop and CurrentCutset it returns makes the equations singular.
// Loops and cutsets in which a dependent source may save them are left to
// System.Diagnose.
func (n *Network) Inspect() []Problem {
	f := newFrame(n)
	problems := append([]Problem(nil), f.bad...)
	problems = append(problems, f.values()...)
	problems = append(problems, f.ground()...)
	problems = append(problems, f.floating()...)
	problems = append(problems, f.islands()...)
	problems = append(problems, f.across()...)
	problems = append(problems, f.selfLoops()...)
	sure, _ := f.voltageLoops()
	problems = append(problems, sure...)
	cutsets, _ := f.currentCutsets()
	problems = append(problems, cutsets...)
	problems = append(problems, f.capacitorLoops()...)
	problems = append(problems, f.inductorCutsets()...)
	problems = append(problems, f.noDCPath(cutsets)...)
	problems = append(problems, f.feedback()...)
	problems = append(problems, f.couplings()...)
	return problems
}

// ground reports what is wrong with the reference.
func (f *frame) ground() []Problem {
	if f.Ground >= 0 {
		if f.connections[f.Ground] == 0 && len(f.branches) > 0 && !f.onlyOutputs() {
			return []Problem{{Kind: GroundUnused, Nodes: []int{f.Ground}}}
		}
		return nil
	}
	p := Problem{Kind: NoGround, Singular: true}
	for i := range f.Elements {
		if f.Elements[i].Kind == OpAmp {
			p.Elements = append(p.Elements, i)
		}
	}
	if p.Elements == nil {
		return nil
	}
	return []Problem{p}
}

// onlyOutputs tells whether an op amp's output returns to the reference, so
// that it is used without being written.
func (f *frame) onlyOutputs() bool { return slices.Contains(f.kinds, OpAmp) }

// floating reports nodes with a single connection.
func (f *frame) floating() []Problem {
	var out []Problem
	for v, c := range f.connections {
		if c != 1 || v == f.Ground || f.ported(v) || f.senses[v] > f.opAmpInputs(v) {
			continue
		}
		out = append(out, Problem{Kind: FloatingNode, Nodes: []int{v}, Elements: f.wiredTo(v)})
	}
	return out
}

// opAmpInputs counts the op amp inputs at v when only one thing is wired
// there: that thing itself, if it is an op amp.
func (f *frame) opAmpInputs(v int) int {
	count := 0
	for _, e := range f.wiredTo(v) {
		if el := &f.Elements[e]; el.Kind == OpAmp {
			if el.Plus == v {
				count++
			}
			if el.Minus == v {
				count++
			}
		}
	}
	return count
}

// wiredTo lists the elements wired to v, each once.
func (f *frame) wiredTo(v int) []int {
	if f.wired == nil {
		f.wired = make([][]int, f.Nodes)
		for i := range f.Elements {
			f.Elements[i].terminals(func(w int) {
				if l := f.wired[w]; len(l) == 0 || l[len(l)-1] != i {
					f.wired[w] = append(l, i)
				}
			})
		}
	}
	return f.wired[v]
}

// selfLoops reports elements with both ends at one node. A source or
// dependent source of voltage there contradicts itself or fixes nothing.
func (f *frame) selfLoops() []Problem {
	var out []Problem
	sensed := f.sensed()
	for i := range f.Elements {
		e := &f.Elements[i]
		node := -1
		singular := false
		switch {
		case e.Kind.twoTerminal() || e.Kind == Open:
			if e.From == e.To {
				node = e.From
				singular = e.Kind == VoltageSource || e.Kind == Short
			}
		case e.Kind == OpAmp:
			if e.Plus == e.Minus {
				node, singular = e.Plus, e.ideal()
			} else if e.Output == f.Ground {
				node, singular = e.Output, !sensed[i]
			}
		case e.Kind == Transformer:
			for _, w := range e.Windings {
				if w.Plus == w.Minus {
					node = w.Plus
				}
			}
		}
		if node >= 0 {
			out = append(out, Problem{Kind: SelfLoop, Elements: []int{i}, Nodes: []int{node}, Singular: singular})
		}
	}
	return out
}
