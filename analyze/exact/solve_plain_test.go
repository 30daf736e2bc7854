package exact

import (
	"context"
	"math/big"
)

// gaussian is a complex number with rational parts.
type gaussian struct{ re, im *big.Rat }

func (a gaussian) isZero() bool { return a.re.Sign() == 0 && a.im.Sign() == 0 }

// subMul sets a to a − f·b in fresh numbers.
func (a gaussian) subMul(f, b gaussian) gaussian {
	var t, u big.Rat
	re := new(big.Rat).Sub(t.Mul(f.re, b.re), u.Mul(f.im, b.im))
	im := new(big.Rat).Add(t.Mul(f.re, b.im), u.Mul(f.im, b.re))
	return gaussian{re.Sub(a.re, re), im.Sub(a.im, im)}
}

func (a gaussian) quo(b gaussian) gaussian {
	if b.im.Sign() == 0 {
		return gaussian{new(big.Rat).Quo(a.re, b.re), new(big.Rat).Quo(a.im, b.re)}
	}
	re, im := quoGaussian(a.re, a.im, b.re, b.im)
	return gaussian{re, im}
}

// plainSolveAt is SolveAt by elimination with Gaussian rationals.
func plainSolveAt(ctx context.Context, p *Pencil, re, im *big.Rat, rhs Vector) (xre, xim []*big.Rat, err error) {
	n := p.Size()
	rows := make([]map[int]gaussian, n)
	for i := range rows {
		rows[i] = map[int]gaussian{}
	}
	var t big.Rat
	for e := range p.Entries() {
		v := gaussian{new(big.Rat).Add(e.G, t.Mul(e.C, re)), new(big.Rat).Mul(e.C, im)}
		if !v.isZero() {
			rows[e.Row][e.Col] = v
		}
	}
	for _, v := range rhs {
		if v.Value == nil || v.Value.Sign() == 0 {
			continue
		}
		b, ok := rows[v.Index][n]
		if !ok {
			b = gaussian{new(big.Rat), new(big.Rat)}
		}
		rows[v.Index][n] = gaussian{new(big.Rat).Add(b.re, v.Value), b.im}
	}
	order, err := eliminateGaussian(ctx, rows, n)
	if err != nil {
		return nil, nil, err
	}
	if len(order) < n {
		return nil, nil, errSingular
	}
	x := make([]gaussian, n)
	for k := n - 1; k >= 0; k-- {
		row := rows[order[k].row]
		v, ok := row[n]
		if !ok {
			v = gaussian{new(big.Rat), new(big.Rat)}
		}
		for c, a := range row {
			if c != n && c != order[k].col {
				v = v.subMul(a, x[c])
			}
		}
		x[order[k].col] = v.quo(row[order[k].col])
	}
	xre, xim = make([]*big.Rat, n), make([]*big.Rat, n)
	for i, v := range x {
		xre[i], xim[i] = v.re, v.im
	}
	return xre, xim, nil
}

type pivot struct{ row, col int }

// eliminateGaussian brings the rows into triangular form by Markowitz's
// choice of pivots and returns the pivots in order; column n is the
// right-hand side.
func eliminateGaussian(ctx context.Context, rows []map[int]gaussian, n int) ([]pivot, error) {
	done := make([]bool, n)
	var order []pivot
	for range n {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		counts := make([]int, n)
		for i, r := range rows {
			if !done[i] {
				for c := range r {
					if c < n {
						counts[c]++
					}
				}
			}
		}
		best, bestCost := pivot{-1, -1}, 0
		for i, r := range rows {
			if done[i] {
				continue
			}
			for c := range r {
				if c == n {
					continue
				}
				cost := (len(r) - 1) * (counts[c] - 1)
				if best.row < 0 || cost < bestCost || cost == bestCost && (i < best.row || i == best.row && c < best.col) {
					best, bestCost = pivot{i, c}, cost
				}
			}
		}
		if best.row < 0 {
			return order, nil
		}
		done[best.row] = true
		order = append(order, best)
		piv := rows[best.row]
		for i, r := range rows {
			a, ok := r[best.col]
			if done[i] || !ok {
				continue
			}
			f := a.quo(piv[best.col])
			delete(r, best.col)
			for c, b := range piv {
				if c == best.col {
					continue
				}
				v, ok := r[c]
				if !ok {
					v = gaussian{new(big.Rat), new(big.Rat)}
				}
				if v = v.subMul(f, b); v.isZero() {
					delete(r, c)
				} else {
					r[c] = v
				}
			}
		}
	}
	return order, nil
}
