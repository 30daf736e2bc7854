package network

import (
	"context"
	"math/big"

	"portlight/analyze/exact"
)

// Prepared returns the pencil made ready for questions. It is computed once
// and shared; concurrent callers wait for one another. The error is the
// context's.
func (s *System) Prepared(ctx context.Context) (*exact.Prepared, error) {
	select {
	case s.preparing <- struct{}{}:
		defer func() { <-s.preparing }()
	case <-ctx.Done():
		return nil, ctx.Err()
	}
	if s.prepared == nil {
		p, err := s.pencil.Prepare(ctx)
		if err != nil {
			return nil, err
		}
		s.prepared = p
	}
	return s.prepared, nil
}

// Determinant returns det(G + s·C), whose roots are the natural frequencies;
// it is the zero polynomial when the equations have no unique solution. The
// error is the context's.
func (s *System) Determinant(ctx context.Context) (exact.Poly, error) {
	p, err := s.Prepared(ctx)
	if err != nil {
		return exact.Poly{}, err
	}
	return p.DeterminantContext(ctx)
}

// Transfer returns the exact responses of outputs to columns: num[i][j]/det is
// the transform of outs[i] when cols[j] alone drives the network. No common
// factors are removed. Where det is the zero polynomial the numerators mean
// nothing. The error is the context's.
func (s *System) Transfer(ctx context.Context, outs []Output, cols []Column) (num [][]exact.Poly, det exact.Poly, err error) {
	p, err := s.Prepared(ctx)
	if err != nil {
		return nil, exact.Poly{}, err
	}
	var rhs []exact.Vector
	for _, c := range cols {
		rhs = append(rhs, c.RHS)
	}
	vectors, parts := functionals(outs)
	n, err := p.Numerators(ctx, rhs, vectors)
	if err != nil {
		return nil, exact.Poly{}, err
	}
	// After the numerators, which bring the determinant along.
	if det, err = p.DeterminantContext(ctx); err != nil {
		return nil, exact.Poly{}, err
	}
	num = make([][]exact.Poly, len(outs))
	for i, o := range outs {
		num[i] = make([]exact.Poly, len(cols))
		for j, c := range cols {
			if d := direct(o, c); d.Sign() != 0 {
				num[i][j] = det.Scale(d)
			}
		}
	}
	for k, q := range parts {
		for j := range cols {
			num[q.output][j] = num[q.output][j].Add(n[k][j].Shift(q.shift))
		}
	}
	return num, det, nil
}

// Responses returns the responses of outputs to columns in lowest terms:
// h[i][j] is the transform of outs[i] when cols[j] alone drives the network.
// Only the pieces between the columns and the outputs are solved, so that in
// a large description a question costs what its own piece costs. The error is
// an *exact.SingularError where one of those pieces has no unique solution,
// otherwise the context's.
func (s *System) Responses(ctx context.Context, outs []Output, cols []Column) ([][]exact.Ratio, error) {
	p, err := s.Prepared(ctx)
	if err != nil {
		return nil, err
	}
	rhs := make([]exact.Vector, len(cols))
	for j, c := range cols {
		rhs[j] = c.RHS
	}
	vectors, parts := functionals(outs)
	n, err := p.Responses(ctx, rhs, vectors)
	if err != nil {
		return nil, err
	}
	h := make([][]exact.Ratio, len(outs))
	for i, o := range outs {
		h[i] = make([]exact.Ratio, len(cols))
		for j, c := range cols {
			h[i][j] = exact.ConstantRatio(direct(o, c))
		}
	}
	s1 := exact.PolyRatio(exact.PolyFromInt64s(0, 1))
	for k, q := range parts {
		for j := range cols {
			part := n[k][j]
			if q.shift == 1 {
				part = part.Mul(s1)
			}
			h[q.output][j] = h[q.output][j].Add(part)
		}
	}
	return h, nil
}

// Blocks returns polynomials whose product is the determinant, one for each
// piece of the equations and a constant; the zero polynomial alone when the
// equations have no unique solution. The error is the context's.
func (s *System) Blocks(ctx context.Context) ([]exact.Poly, error) {
	p, err := s.Prepared(ctx)
	if err != nil {
		return nil, err
	}
	return p.BlockDeterminants(ctx)
}

// functional says which output a vector belongs to, and whether it counts
// times s.
type functional struct{ output, shift int }

// functionals lists the vectors that outputs consist of.
func functionals(outs []Output) (vectors []exact.Vector, parts []functional) {
	for i, o := range outs {
		if len(o.G) > 0 {
			vectors, parts = append(vectors, o.G), append(parts, functional{i, 0})
		}
		if len(o.C) > 0 {
			vectors, parts = append(vectors, o.C), append(parts, functional{i, 1})
		}
	}
	return vectors, parts
}

// direct is what an output holds of a column without the network's doing.
func direct(o Output, c Column) *big.Rat {
	sum := new(big.Rat)
	for _, pair := range [][2]map[int]*big.Rat{{o.Input, c.Input}, {o.State, c.State}} {
		for k, v := range pair[0] {
			if w := pair[1][k]; w != nil {
				sum.Add(sum, new(big.Rat).Mul(v, w))
			}
		}
	}
	return sum
}
