package network

// voltageDefined tells whether a branch's voltage is prescribed: the branch
// of a source, a short or an op amp's output.
func (k Kind) voltageDefined() bool {
	return k == VoltageSource || k == DependentVoltage || k == Short || k == OpAmp
}

// voltageLoops reports the loops of branches with prescribed voltages: one
// minimal loop for every branch that closes one.
//
// A current circulating in such a loop appears in no equation, so the
// equations are singular, unless a dependent source senses the current of a
// member. Those loops are returned apart: whether they are at fault shows in
// the equations only.
func (f *frame) voltageLoops() (sure, doubtful []Problem) {
	edges := f.edgesOf(Kind.voltageDefined)
	forest := newForest(f.Nodes, f.Ground, edges)
	sensed := f.sensed()
	for _, chord := range forest.chords {
		p := f.loopProblem(VoltageLoop, forest, chord)
		p.Singular = true
		for _, e := range p.Elements {
			p.Singular = p.Singular && !sensed[e]
		}
		if p.Singular {
			sure = append(sure, p)
		} else {
			doubtful = append(doubtful, p)
		}
	}
	return sure, doubtful
}

// capacitorLoops reports the loops of capacitors and branches with prescribed
// voltages that hold at least one capacitor. Each lowers the order by one.
func (f *frame) capacitorLoops() []Problem {
	edges := append(f.edgesOf(Kind.voltageDefined), f.edgesOf(func(k Kind) bool { return k == Capacitor })...)
	forest := newForest(f.Nodes, f.Ground, edges)
	var out []Problem
	for _, chord := range forest.chords {
		if f.kinds[edges[chord].id] == Capacitor {
			out = append(out, f.loopProblem(CapacitorLoop, forest, chord))
		}
	}
	return out
}

// edgesOf lists the branches whose element's kind is chosen, in order,
// self-loops left out.
func (f *frame) edgesOf(chosen func(Kind) bool) []edge {
	var out []edge
	for i, b := range f.branches {
		if chosen(f.kinds[i]) && b.from != b.to {
			out = append(out, edge{b.from, b.to, i})
		}
	}
	return out
}

// loopProblem names the loop's members in order, the chord first.
func (f *frame) loopProblem(kind ProblemKind, forest *forest, chord int) Problem {
	ids, signs := forest.loop(chord)
	p := Problem{Kind: kind, Signs: signs}
	for k, id := range ids {
		b := f.branches[id]
		p.Elements = append(p.Elements, b.element)
		v := b.from
		if signs[k] < 0 {
			v = b.to
		}
		p.Nodes = append(p.Nodes, v) // where the loop enters the member
	}
	return p
}
