package exact

import (
	"context"
	"errors"
	"math/big"
	"slices"
)

// Numerators returns N[i][j] = out[i]ᵀ·adj(G + s·C)·rhs[j], so that
// N[i][j]/det is the response of out[i] to rhs[j]. Together with the
// numerators the determinants of the pieces involved are computed and kept,
// so asking for the determinant afterwards costs nothing more. The error is
// the context's.
func (f *Prepared) Numerators(ctx context.Context, rhs []Vector, out []Vector) ([][]Poly, error) {
	if f.form == nil {
		return f.borderedNumerators(ctx, rhs, out)
	}
	n, err := f.regularNumerators(ctx, rhs, out)
	if errors.Is(err, errSingular) {
		return f.borderedNumerators(ctx, rhs, out)
	}
	return n, err
}

// Responses returns H[i][j] = out[i]ᵀ·(G + s·C)⁻¹·rhs[j] in lowest terms.
// Only the pieces between rhs and out are solved. Where one of these is
// singular for every s the error is a *SingularError, otherwise the
// context's.
func (f *Prepared) Responses(ctx context.Context, rhs []Vector, out []Vector) ([][]Ratio, error) {
	if f.form == nil {
		return nil, f.fault(ctx)
	}
	h := make([][]Ratio, len(out))
	for i := range out {
		h[i] = make([]Ratio, len(rhs))
		for j := range h[i] {
			h[i][j] = PolyRatio(Poly{})
		}
	}
	err := f.eachGroup(ctx, rhs, out, func(g *group) error {
		den := productOf(g.dets)
		for k, i := range g.outs {
			for j := range rhs {
				// Common factors are cancelled while the numbers are short.
				num, den := g.nums[k*len(rhs)+j], den
				if num.IsZero() {
					continue
				}
				if common := GCD(num, den); common.Degree() > 0 {
					num, den = num.Quo(common), den.Quo(common)
				}
				one := big.NewRat(1, 1)
				h[i][j] = normalized(f.inTime(num, g.scale(k, j)), f.inTime(den, one))
			}
		}
		return ctx.Err()
	})
	if errors.Is(err, errSingular) {
		return nil, f.fault(ctx)
	}
	if err != nil {
		return nil, err
	}
	return h, nil
}

// fault returns the *SingularError of a singular pencil.
func (f *Prepared) fault(ctx context.Context) error {
	rows, cols := f.pencil.Kernel(ctx)
	if err := ctx.Err(); err != nil {
		return err
	}
	return &SingularError{rows, cols}
}

// regularNumerators works with the inverse; errSingular if there is none.
func (f *Prepared) regularNumerators(ctx context.Context, rhs []Vector, out []Vector) ([][]Poly, error) {
	n := make([][]Poly, len(out))
	for i := range out {
		n[i] = make([]Poly, len(rhs))
	}
	factor := f.factor()
	err := f.eachGroup(ctx, rhs, out, func(g *group) error {
		others := make([]bool, len(f.dets))
		for b := range others {
			others[b] = !slices.Contains(g.blocks, b)
		}
		rest, err := f.blockDeterminants(ctx, others)
		if err != nil {
			return err
		}
		var list []Poly
		for b, d := range rest {
			if others[b] {
				list = append(list, d)
			}
		}
		common := productOf(list)
		for k, i := range g.outs {
			for j := range rhs {
				num := g.nums[k*len(rhs)+j]
				if !common.IsOne() {
					num = num.Mul(common)
				}
				scale := g.scale(k, j)
				n[i][j] = f.inTime(num, scale.Mul(scale, factor))
			}
		}
		return ctx.Err()
	})
	return n, err
}

// borderedNumerators is for singular pencils: every numerator is minus the
// determinant of the pencil with a border.
func (f *Prepared) borderedNumerators(ctx context.Context, rhs []Vector, out []Vector) ([][]Poly, error) {
	n := make([][]Poly, len(out))
	for i := range out {
		n[i] = make([]Poly, len(rhs))
		for j := range rhs {
			g, err := f.pencil.bordered(rhs[j], out[i]).Prepare(ctx)
			if err != nil {
				return nil, err
			}
			d, err := g.DeterminantContext(ctx)
			if err != nil {
				return nil, err
			}
			n[i][j] = d.Neg()
		}
	}
	return n, nil
}

// group is a set of questions that involve the same pieces, solved.
type group struct {
	blocks   []int // ascending
	outs     []int // indices of the outs that belong to it
	dets     []Poly
	nums     []Poly // out·len(rhs) + rhs
	rhs, out []border
}

// scale returns what a numerator of the scaled system is multiplied by.
func (g *group) scale(out, rhs int) *big.Rat {
	t := new(big.Rat).Mul(g.rhs[rhs].scale, g.out[out].scale)
	return t.Inv(t)
}

// eachGroup sorts the questions into groups by the blocks that lie between
// rhs and out, solves each group and hands it to visit. Questions without
// blocks in between have the answer 0 and are left out.
func (f *Prepared) eachGroup(ctx context.Context, rhs, out []Vector, visit func(*group) error) error {
	reached := f.reachedFrom(rhs)
	for _, g := range f.groupOuts(out, reached) {
		if err := f.solveGroup(ctx, g, rhs, out); err != nil {
			return f.note(err)
		}
		if err := visit(g); err != nil {
			return err
		}
	}
	return nil
}

// groupOuts sorts the outputs into groups. Outputs with the same pieces are
// solved together, and so are those that need at least half of the pieces of
// a group and no others: along a cascade that is cheaper than beginning anew
// for every stage.
func (f *Prepared) groupOuts(out []Vector, reached []bool) []*group {
	var all []*group
	for i, v := range out {
		blocks := f.neededFor(v, reached)
		if len(blocks) == 0 {
			continue
		}
		k := slices.IndexFunc(all, func(g *group) bool { return slices.Equal(g.blocks, blocks) })
		if k < 0 {
			k = len(all)
			all = append(all, &group{blocks: blocks})
		}
		all[k].outs = append(all[k].outs, i)
	}
	slices.SortStableFunc(all, func(a, b *group) int { return len(b.blocks) - len(a.blocks) })
	var merged []*group
	for _, g := range all {
		k := slices.IndexFunc(merged, func(m *group) bool {
			return len(m.blocks) <= 2*len(g.blocks) && isSubset(g.blocks, m.blocks)
		})
		if k < 0 {
			merged = append(merged, g)
			continue
		}
		merged[k].outs = append(merged[k].outs, g.outs...)
	}
	return merged
}

// isSubset reports whether every element of a is in b; both are ascending.
func isSubset(a, b []int) bool {
	for _, x := range a {
		if _, ok := slices.BinarySearch(b, x); !ok {
			return false
		}
	}
	return true
}

// reachedFrom tells for every block whether a right-hand side acts on it,
// itself or through earlier blocks.
func (f *Prepared) reachedFrom(rhs []Vector) []bool {
	reached := make([]bool, len(f.dets))
	for _, v := range rhs {
		for _, c := range v {
			if c.Value != nil && c.Value.Sign() != 0 {
				reached[f.form.blockOfRow[c.Index]] = true
			}
		}
	}
	for b, needs := range f.form.needs {
		for _, e := range needs {
			reached[b] = reached[b] || reached[e]
		}
	}
	return reached
}

// neededFor returns the reached blocks that the output depends on, ascending.
func (f *Prepared) neededFor(out Vector, reached []bool) []int {
	needed := make([]bool, len(f.dets))
	for _, c := range out {
		if c.Value != nil && c.Value.Sign() != 0 {
			needed[f.form.blockOfCol[c.Index]] = true
		}
	}
	var list []int
	for b := len(needed) - 1; b >= 0; b-- {
		if !needed[b] || !reached[b] {
			continue
		}
		list = append(list, b)
		for _, e := range f.form.needs[b] {
			needed[e] = true
		}
	}
	slices.Reverse(list)
	return list
}

// solveGroup computes the group's numerators and those determinants that are
// not known yet.
func (f *Prepared) solveGroup(ctx context.Context, g *group, rhs, out []Vector) error {
	rowAt, colAt := f.positions(g.blocks)
	for _, v := range rhs {
		g.rhs = append(g.rhs, f.rhsBorder(v, rowAt))
	}
	for _, i := range g.outs {
		g.out = append(g.out, f.outBorder(out[i], colAt))
	}
	y := f.system(g.blocks, g.rhs, g.out)
	g.dets = make([]Poly, len(g.blocks))
	want := make([]bool, len(g.blocks))
	f.mu.Lock()
	for k, b := range g.blocks {
		if f.dets[b] != nil {
			g.dets[k] = *f.dets[b]
		} else {
			want[k] = true
		}
	}
	f.mu.Unlock()
	dets, nums, err := y.solve(ctx, want)
	if err != nil {
		return err
	}
	for k, b := range g.blocks {
		if want[k] {
			g.dets[k] = dets[k]
			f.keep(b, &g.dets[k])
		}
	}
	g.nums = nums
	return nil
}

// positions returns, for every row and column, its place in the system of
// the blocks, or −1.
func (f *Prepared) positions(list []int) (rowAt, colAt []int) {
	n := f.pencil.Size()
	rowAt, colAt = make([]int, n), make([]int, n)
	for i := range n {
		rowAt[i], colAt[i] = -1, -1
	}
	count := 0
	for _, b := range list {
		start := 0
		if b > 0 {
			start = f.form.end[b-1]
		}
		for k := start; k < f.form.end[b]; k++ {
			rowAt[f.form.rows[k]], colAt[f.form.cols[k]] = count, count
			count++
		}
	}
	return rowAt, colAt
}
