package exact

import (
	"context"
	"math/big"
	"slices"
)

// Kernel tells which equations and unknowns are at fault in a pencil that is
// singular for every s: rows supports a combination of equations whose
// left-hand side vanishes, cols a combination of unknowns that no equation
// determines. Each is minimal: no proper subset of it will do. Both are nil
// for a pencil that is not singular, and when the context ends.
//
// The null vectors are computed modulo a prime at one point; that the
// pencil is singular at all is not proved here but by Determinant.
func (p *Pencil) Kernel(ctx context.Context) (rows, cols []int) {
	m := takeModuli(1)[0]
	return p.kernelMod(ctx, m, m.fromUint(0x9e3779b97f4a7c15), 0, 0)
}

// kernelAt is Kernel at the point re + j·im.
func (p *Pencil) kernelAt(ctx context.Context, re, im *big.Rat) (rows, cols []int) {
	for _, m := range takeModuli(64) {
		x, okX := m.fromRat(re)
		y, okY := m.fromRat(im)
		if okX && okY {
			return p.kernelMod(ctx, m, x, y, m.sqrtMinusOne())
		}
	}
	return nil, nil
}

// fromRat returns the residue of r and whether p does not divide its
// denominator.
func (m *modulus) fromRat(r *big.Rat) (uint64, bool) {
	num := m.fromBig(r.Num())
	if r.IsInt() {
		return num, true
	}
	den := m.fromBig(r.Denom())
	if den == 0 {
		return 0, false
	}
	return m.mul(num, m.inverse(den)), true
}

// kernelMod returns the smallest supports of left and right null vectors of
// the pencil at s = x + j·y with j the given square root of −1.
func (p *Pencil) kernelMod(ctx context.Context, m *modulus, x, y, j uint64) (rows, cols []int) {
	s := m.add(x, m.mul(y, j))
	n := p.Size()
	a, t := make([][]uint64, n), make([][]uint64, n)
	for i := range a {
		a[i], t[i] = make([]uint64, n), make([]uint64, n)
	}
	for e := range p.Entries() {
		g, _ := m.fromRat(e.G)
		c, _ := m.fromRat(e.C)
		v := m.add(g, m.mul(c, s))
		a[e.Row][e.Col], t[e.Col][e.Row] = v, v
	}
	rows, cols = m.smallestCircuit(ctx, t), m.smallestCircuit(ctx, a)
	if ctx.Err() != nil {
		return nil, nil
	}
	return rows, cols
}

// smallestCircuit returns the smallest support among the basis null vectors
// of a that the reduced echelon form gives, nil if a is regular. Each such
// support is minimal under inclusion: it has one column outside a basis of
// the column space, and the combination of that basis is unique. It returns
// nil when the context ends.
func (m *modulus) smallestCircuit(ctx context.Context, a [][]uint64) []int {
	n := len(a)
	pivotRow := make([]int, n)
	row := 0
	for c := range n {
		if ctx.Err() != nil {
			return nil
		}
		pivotRow[c] = -1
		i := row
		for i < n && a[i][c] == 0 {
			i++
		}
		if i == n {
			continue
		}
		a[row], a[i] = a[i], a[row]
		inv := m.inverse(a[row][c])
		for k := c; k < n; k++ {
			a[row][k] = m.mul(a[row][k], inv)
		}
		for i := range n {
			f := a[i][c]
			if i == row || f == 0 {
				continue
			}
			for k := c; k < n; k++ {
				a[i][k] = m.sub(a[i][k], m.mul(f, a[row][k]))
			}
		}
		pivotRow[c] = row
		row++
	}
	var best []int
	for c := range n {
		if pivotRow[c] >= 0 {
			continue
		}
		support := []int{c}
		for k := range n {
			if pivotRow[k] >= 0 && a[pivotRow[k]][c] != 0 {
				support = append(support, k)
			}
		}
		if best == nil || len(support) < len(best) {
			best = support
		}
	}
	slices.Sort(best)
	return best
}
