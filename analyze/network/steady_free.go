package network

import (
	"context"
	"math/big"
	"slices"

	"portlight/dialect/number"
)

// choose picks among the solutions at one frequency the one that the given
// values fix, and reports what they leave open.
func (t *settling) choose(ctx context.Context, e *echelon, omega number.Exact) error {
	t.addUp(e.back(nil, t.Size()))
	directions := e.kernel()
	if omega.Rat().Sign() != 0 {
		for _, d := range directions {
			t.open(d, omega)
		}
		return nil
	}
	moves := make([][]cell, len(t.memories)) // of each memory in each direction
	for k := range t.memories {
		for c, d := range directions {
			if v := t.value(k, d); !v.zero() {
				v.col = c
				moves[k] = append(moves[k], v)
			}
		}
	}
	t.notFree(func(k int) bool { return len(moves[k]) > 0 })
	var fixed []int
	var rows []row
	for k, m := range t.memories {
		if g, ok := t.givenFor(m); ok && len(moves[k]) > 0 {
			fixed = append(fixed, k)
			wanted := new(big.Rat).Sub(g.Rat(), t.values[k])
			rows = append(rows, newRow(append(slices.Clone(moves[k]), cell{col: len(directions), re: wanted})))
		}
	}
	f, err := eliminate(ctx, rows, len(directions))
	if err != nil {
		return err
	}
	for _, r := range f.rest {
		if left := f.rows[r].at(len(directions)); !left.zero() {
			t.problems = append(t.problems, Problem{
				Kind: InitialNotFree, Elements: []int{t.memories[fixed[r]].Element}, Mismatch: left.re,
			})
		}
	}
	amounts := f.back(nil, len(directions))
	for c, d := range directions {
		for i := range d {
			d[i] = d[i].times(amounts[c])
		}
		t.addUp(d)
	}
	// What is left open: the null vectors of the fixing equations, as
	// combinations of the directions.
	for _, c := range f.kernel() {
		t.open(t.mix(e.kernel(), c), omega)
	}
	return nil
}

// mix combines directions.
func (t *settling) mix(directions [][]cell, amounts []cell) []cell {
	out := make([]cell, t.Size())
	for i := range out {
		out[i] = cell{re: new(big.Rat)}
	}
	for c, d := range directions {
		minus := cell{re: minusOne}.times(amounts[c])
		if minus.zero() {
			continue
		}
		for i := range out {
			out[i] = out[i].minus(d[i].times(minus))
		}
	}
	return out
}

// open reports a direction in which the state may move; one that moves no
// memory is a matter of Diagnose.
func (t *settling) open(d []cell, omega number.Exact) {
	p := Problem{Kind: IndeterminateState, WithinBound: t.standIns || !omega.IsExact()}
	if omega.Rat().Sign() != 0 {
		p.Omega = omega.Rat()
	}
	for k, m := range t.memories {
		if !t.value(k, d).zero() && !slices.Contains(p.Elements, m.Element) {
			p.Elements = append(p.Elements, m.Element)
		}
	}
	if p.Elements == nil {
		return
	}
	for v, u := range t.node {
		if u >= 0 && !d[u].zero() {
			p.Nodes = append(p.Nodes, v)
		}
	}
	t.problems = append(t.problems, p)
}

// givenFor returns the initial value given for a memory.
func (t *settling) givenFor(m memory) (number.Exact, bool) {
	k := t.network.Elements[m.Element].Kind
	if k != Capacitor && k != Inductor {
		return number.Exact{}, false
	}
	g, ok := t.given[t.piece.ElementOf[m.Element]]
	return g, ok
}

// notFree reports values given for memories that are not free, with how far
// they are off the steady state.
func (t *settling) notFree(free func(k int) bool) {
	for k, m := range t.memories {
		if g, ok := t.givenFor(m); ok && !free(k) {
			t.problems = append(t.problems, Problem{
				Kind: InitialNotFree, Elements: []int{m.Element},
				Mismatch: new(big.Rat).Sub(g.Rat(), t.values[k]),
			})
		}
	}
}
