package network

import (
	"context"
	"math/big"
	"slices"
)

// Diagnose says why the equations have no unique solution; it returns nothing
// when they have one. Structure is blamed first (loops of prescribed voltages,
// cutsets of prescribed currents, missing feedback). Only when nothing of the
// kind explains it, SingularEquations names the owners of a smallest set of
// equations that depend on one another: their elements, and for balances of
// currents the nodes and what carries current there. Pieces that cannot
// influence one another are diagnosed each for itself. The error is the
// context's.
func (s *System) Diagnose(ctx context.Context) ([]Problem, error) {
	if problems := s.structural(); problems != nil {
		return problems, nil
	}
	p := s.network.Partition()
	var out []Problem
	if len(p.Groups) == 1 {
		return s.diagnose(ctx)
	}
	for g := range p.Groups {
		piece := s.network.Extract(p, g)
		part, problems := Assemble(piece.Network)
		if part != nil {
			var err error
			if problems, err = part.diagnose(ctx); err != nil {
				return nil, err
			}
		}
		for _, problem := range problems {
			out = append(out, piece.Whole(problem))
		}
	}
	return out, nil
}

// diagnose is Diagnose for a network in one piece.
func (s *System) diagnose(ctx context.Context) ([]Problem, error) {
	det, err := s.Determinant(ctx)
	if err != nil || !det.IsZero() {
		return nil, err
	}
	rows, cols, err := s.nullVectors(ctx)
	if err != nil {
		return nil, err
	}
	if p, ok := s.doubtful(rows, cols); ok {
		return []Problem{p}, nil
	}
	return []Problem{s.atFault(rows)}, nil
}

// structural returns the problems of structure that make the equations
// singular.
func (s *System) structural() []Problem {
	var out []Problem
	for _, p := range s.network.Inspect() {
		if p.Singular {
			out = append(out, p)
		}
	}
	return out
}

// denseLimit is the number of unknowns up to which the dense elimination of
// Pencil.Kernel is used, whose time grows with the cube.
const denseLimit = 400

// nullVectors returns the equations and the unknowns of smallest null vectors,
// in ascending order.
func (s *System) nullVectors(ctx context.Context) (rows, cols []int, err error) {
	if s.Size() <= denseLimit {
		rows, cols = s.pencil.Kernel(ctx)
		return rows, cols, ctx.Err()
	}
	// At a point that is no special value of a network with round figures.
	point := big.NewRat(1299709, 104729)
	cells := make([][]cell, s.Size())
	for e := range s.pencil.Entries() {
		v := new(big.Rat).Mul(e.C, point)
		cells[e.Row] = append(cells[e.Row], cell{col: e.Col, re: v.Add(v, e.G)})
	}
	matrix := make([]row, s.Size())
	for i := range matrix {
		matrix[i] = newRow(cells[i])
	}
	if rows, err = smallestNull(ctx, transpose(matrix, s.Size()), s.Size()); err != nil {
		return nil, nil, err
	}
	cols, err = smallestNull(ctx, matrix, s.Size())
	return rows, cols, err
}

// smallestNull returns the smallest support of a basis of null vectors.
func smallestNull(ctx context.Context, rows []row, cols int) ([]int, error) {
	e, err := eliminate(ctx, rows, cols)
	if err != nil {
		return nil, err
	}
	var best []int
	for _, x := range e.kernel() {
		var support []int
		for i, v := range x {
			if !v.zero() {
				support = append(support, i)
			}
		}
		if best == nil || len(support) < len(best) {
			best = support
		}
	}
	return best, nil
}

// doubtful returns a loop or cutset with a dependent source in it that the
// null vectors show to be at fault.
func (s *System) doubtful(rows, cols []int) (Problem, bool) {
	_, loops := s.frame.voltageLoops()
	for _, p := range loops {
		if s.all(cols, p.Elements, s.current) {
			p.Singular = true
			return p, true
		}
	}
	_, cutsets := s.frame.currentCutsets()
	for _, p := range cutsets {
		if s.all(rows, p.Nodes, s.node) {
			p.Singular = true
			return p, true
		}
	}
	return Problem{}, false
}

// all tells whether the unknowns of all members are in the sorted set.
func (s *System) all(set, members, unknown []int) bool {
	for _, m := range members {
		if _, ok := slices.BinarySearch(set, unknown[m]); !ok {
			return false
		}
	}
	return true
}

// atFault names the owners of equations.
func (s *System) atFault(rows []int) Problem {
	p := Problem{Kind: SingularEquations, Singular: true, WithinBound: s.standIns}
	for _, r := range rows {
		o := s.owners[r]
		if o.Element >= 0 {
			p.Elements = append(p.Elements, o.Element)
			continue
		}
		p.Nodes = append(p.Nodes, o.Node)
		for _, e := range s.frame.wiredTo(o.Node) {
			if k := s.network.Elements[e].Kind; k != CurrentSource && k != Open {
				p.Elements = append(p.Elements, e)
			}
		}
	}
	slices.Sort(p.Nodes)
	slices.Sort(p.Elements)
	p.Elements = slices.Compact(p.Elements)
	return p
}
