package network

import (
	"context"
	"math/big"
	"slices"

	"portlight/dialect/number"
)

// Sinusoid is Cosine·cos(Omega·t) + Sine·sin(Omega·t), a part of a source that
// has acted for ever; Omega is in rad/s and 0 for a constant.
type Sinusoid struct {
	Omega, Cosine, Sine number.Exact
}

// Steady is the state at 0− of a network in its steady state.
type Steady struct {
	// Values is the value of every memory at 0−. It is complete only when
	// there are no problems.
	Values map[Memory]*big.Rat
	// Exact tells whether no stand-in went into the values.
	Exact bool
}

// SteadyState finds the state at t = 0− of a network whose sources have acted
// for ever: a solution of the equations at s = jω for every frequency of the
// sources (by element; those left out are zero), added up. given holds
// initial voltages of capacitors and currents of inductors by element; they
// fix what direct current leaves free. The problems are those of Assemble,
// NoSteadyState, IndeterminateState, ResonantSource and InitialNotFree. That
// the natural responses have died away is taken for granted. The error is the
// context's.
//
// Pieces of the network that cannot influence one another are solved apart, by
// sparse elimination over the (Gaussian) rationals.
func (n *Network) SteadyState(ctx context.Context, sources map[int][]Sinusoid, given map[int]number.Exact) (*Steady, []Problem, error) {
	out := &Steady{Values: map[Memory]*big.Rat{}, Exact: true}
	p := n.Partition()
	var problems []Problem
	for g, elements := range p.Groups {
		if !slices.ContainsFunc(elements, func(i int) bool { return n.Elements[i].remembers() }) {
			continue
		}
		piece := n.Extract(p, g)
		s, found := Assemble(piece.Network)
		if s != nil {
			t := &settling{System: s, piece: piece, out: out, sources: sources, given: given}
			if err := t.run(ctx); err != nil {
				return nil, nil, err
			}
			found = t.problems
		}
		for _, problem := range found {
			problems = append(problems, piece.Whole(problem))
		}
	}
	return out, problems, nil
}

// remembers tells whether the element may carry a memory.
func (e *Element) remembers() bool {
	switch e.Kind {
	case Capacitor, Inductor, Immittance, OpAmp, DependentVoltage, DependentCurrent:
		return true
	}
	return false
}

// settling finds the steady state of one piece.
type settling struct {
	*System
	piece    *Piece
	out      *Steady
	sources  map[int][]Sinusoid   // by the whole network's numbers
	given    map[int]number.Exact // likewise
	values   []*big.Rat           // of the memories, added up over the frequencies so far
	problems []Problem
}

// run goes through the frequencies, direct current last, because given values
// fix what is then left of the sum.
func (t *settling) run(ctx context.Context) error {
	if len(t.memories) == 0 {
		return nil
	}
	t.values = make([]*big.Rat, len(t.memories))
	for k := range t.values {
		t.values[k] = new(big.Rat)
	}
	t.out.Exact = t.out.Exact && !t.standIns
	for _, omega := range t.frequencies() {
		if err := t.at(ctx, omega); err != nil {
			return err
		}
	}
	for k, m := range t.memories {
		whole := Memory{t.piece.ElementOf[m.Element], m.Index}
		t.out.Values[whole] = t.values[k]
	}
	return nil
}

// frequencies lists the sources' frequencies, highest first, 0 always.
func (t *settling) frequencies() []number.Exact {
	out := []number.Exact{{}}
	for i := range t.network.Elements {
		for _, w := range t.sources[t.piece.ElementOf[i]] {
			if !slices.ContainsFunc(out, w.Omega.Equal) {
				out = append(out, w.Omega)
			}
		}
	}
	slices.SortFunc(out, func(a, b number.Exact) int { return b.Rat().Cmp(a.Rat()) })
	return out
}

// at adds the part at one frequency.
func (t *settling) at(ctx context.Context, omega number.Exact) error {
	rows, drive := t.equations(omega)
	original := slices.Clone(rows)
	e, err := eliminate(ctx, rows, t.Size())
	if err != nil {
		return err
	}
	if len(e.free) == 0 {
		t.addUp(e.back(nil, t.Size()))
		if omega.Rat().Sign() == 0 {
			t.notFree(func(int) bool { return false })
		}
		return nil
	}
	contradiction, err := t.contradictions(ctx, original, drive, omega)
	if err != nil || contradiction {
		return err
	}
	return t.choose(ctx, e, omega)
}

// equations returns the rows of (G + jω·C)·x = b with b as column Size, and
// for each source at this frequency its part of b.
func (t *settling) equations(omega number.Exact) ([]row, map[int][]cell) {
	n := t.Size()
	cells := make([][]cell, n)
	dc := omega.Rat().Sign() == 0
	for e := range t.pencil.Entries() {
		c := cell{col: e.Col, re: e.G}
		if !dc && e.C.Sign() != 0 {
			c.im = new(big.Rat).Mul(omega.Rat(), e.C)
		}
		cells[e.Row] = append(cells[e.Row], c)
	}
	drive := map[int][]cell{}
	for i := range t.network.Elements {
		for _, w := range t.sources[t.piece.ElementOf[i]] {
			if !w.Omega.Equal(omega) {
				continue
			}
			column, problem := t.InputColumn(i)
			if problem != nil {
				continue
			}
			t.out.Exact = t.out.Exact && w.Omega.IsExact() && w.Cosine.IsExact() && w.Sine.IsExact()
			u := cell{re: w.Cosine.Rat()}
			if !dc && w.Sine.Rat().Sign() != 0 {
				u.im = new(big.Rat).Neg(w.Sine.Rat())
			}
			for _, c := range column.RHS {
				b := cell{col: n, re: c.Value}.times(u)
				cells[c.Index] = append(cells[c.Index], b)
				drive[i] = append(drive[i], cell{c.Index, b.re, b.im})
			}
		}
	}
	rows := make([]row, n)
	for i := range rows {
		rows[i] = newRow(cells[i])
	}
	return rows, drive
}

// addUp adds the memories' values in a solution, at t = 0.
func (t *settling) addUp(x []cell) {
	for k := range t.memories {
		t.values[k].Add(t.values[k], t.value(k, x).re)
	}
}

// value is memory k in a solution or direction.
func (t *settling) value(k int, x []cell) cell {
	sum := cell{re: new(big.Rat)}
	for _, c := range t.memories[k].form {
		sum = sum.minus(cell{re: new(big.Rat).Neg(c.Value)}.times(x[c.Index]))
	}
	return sum
}

// contradictions reports combinations of equations without a left-hand side
// that the sources do not cancel in: something grows without bound.
func (t *settling) contradictions(ctx context.Context, rows []row, drive map[int][]cell, omega number.Exact) (bool, error) {
	e, err := eliminate(ctx, transpose(rows, t.Size()), t.Size())
	if err != nil {
		return false, err
	}
	found := false
	for _, y := range e.kernel() {
		sum := cell{re: new(big.Rat)}
		var sources []int
		for i, b := range drive {
			part := cell{re: new(big.Rat)}
			for _, c := range b {
				part = part.minus(cell{re: minusOne}.times(c).times(y[c.col]))
			}
			if !part.zero() {
				sources = append(sources, i)
				sum = sum.minus(cell{re: minusOne}.times(part))
			}
		}
		if sum.zero() {
			continue
		}
		found = true
		t.problems = append(t.problems, t.growing(y, sources, omega))
	}
	return found, nil
}

// growing names the sources, the memories that grow, and the other owners of
// the contradicting equations.
func (t *settling) growing(y []cell, sources []int, omega number.Exact) Problem {
	p := Problem{Kind: NoSteadyState, WithinBound: t.standIns || !omega.IsExact()}
	if omega.Rat().Sign() != 0 {
		p.Kind, p.Omega = ResonantSource, omega.Rat()
	}
	slices.Sort(sources)
	p.Elements = sources
	name := func(i int) {
		if !slices.Contains(p.Elements, i) {
			p.Elements = append(p.Elements, i)
		}
	}
	for _, m := range t.memories {
		sum := cell{re: new(big.Rat)}
		for _, c := range m.rows {
			sum = sum.minus(cell{re: new(big.Rat).Neg(c.Value)}.times(y[c.Index]))
		}
		if !sum.zero() {
			name(m.Element)
		}
	}
	for r, o := range t.owners {
		switch {
		case y[r].zero():
		case o.Element >= 0:
			name(o.Element)
		default:
			p.Nodes = append(p.Nodes, o.Node)
		}
	}
	slices.Sort(p.Nodes)
	return p
}
