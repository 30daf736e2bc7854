package exact

import (
	"context"
	"math"
	"math/big"
)

// plainDeterminant evaluates the determinant at degree + 1 points modulo as
// many primes as Hadamard's bound asks for.
func plainDeterminant(ctx context.Context, p *Pencil) (Poly, error) {
	n := p.Size()
	scale := big.NewInt(1)
	bound := 1.0 // log2 of the bound, plus the sign
	g := make([][]*big.Int, n)
	c := make([][]*big.Int, n)
	for i, r := range p.rows {
		l := big.NewInt(1)
		for _, e := range r {
			for _, x := range []*big.Rat{e.G, e.C} {
				l.Mul(l, new(big.Int).Quo(x.Denom(), new(big.Int).GCD(nil, nil, l, x.Denom())))
			}
		}
		scale.Mul(scale, l)
		g[i], c[i] = make([]*big.Int, n), make([]*big.Int, n)
		sum := new(big.Int)
		for _, e := range r {
			lr := new(big.Rat).SetInt(l)
			g[i][e.Col] = new(big.Int).Set(new(big.Rat).Mul(e.G, lr).Num())
			c[i][e.Col] = new(big.Int).Set(new(big.Rat).Mul(e.C, lr).Num())
			sum.Add(sum, new(big.Int).Abs(g[i][e.Col]))
			sum.Add(sum, new(big.Int).Abs(c[i][e.Col]))
		}
		if sum.Sign() == 0 {
			return Poly{}, nil
		}
		bound += float64(sum.BitLen())
	}
	var acc []*big.Int
	var mod *big.Int
	primes := int(math.Ceil(bound/60)) + 1
	for _, m := range takeModuli(primes) {
		points := make([]uint64, n+1)
		values := make([]uint64, n+1)
		for k := range points {
			if err := ctx.Err(); err != nil {
				return Poly{}, err
			}
			points[k] = m.fromInt64(int64(k))
			a := make([][]uint64, n)
			for i := range a {
				a[i] = make([]uint64, n)
				for j := range a[i] {
					if g[i][j] != nil {
						a[i][j] = m.add(m.fromBig(g[i][j]), m.mul(points[k], m.fromBig(c[i][j])))
					}
				}
			}
			values[k] = m.denseDeterminant(a)
		}
		acc, mod, _ = m.extendCRT(acc, mod, m.lagrange(points, values))
	}
	return PolyFromInts(acc, scale), nil
}

// denseDeterminant overwrites a.
func (m *modulus) denseDeterminant(a [][]uint64) uint64 {
	d := m.one
	for k := range a {
		piv := k
		for piv < len(a) && a[piv][k] == 0 {
			piv++
		}
		if piv == len(a) {
			return 0
		}
		if piv != k {
			a[k], a[piv] = a[piv], a[k]
			d = m.neg(d)
		}
		d = m.mul(d, a[k][k])
		inv := m.inverse(a[k][k])
		for i := k + 1; i < len(a); i++ {
			f := m.mul(a[i][k], inv)
			if f == 0 {
				continue
			}
			for j := k; j < len(a); j++ {
				a[i][j] = m.sub(a[i][j], m.mul(f, a[k][j]))
			}
		}
	}
	return d
}

// lagrange returns the coefficients of the polynomial of degree below
// len(x) with the given values.
func (m *modulus) lagrange(x, y []uint64) []uint64 {
	n := len(x)
	coef := append([]uint64(nil), y...)
	for k := 1; k < n; k++ { // divided differences
		for i := n - 1; i >= k; i-- {
			coef[i] = m.mul(m.sub(coef[i], coef[i-1]), m.inverse(m.sub(x[i], x[i-k])))
		}
	}
	for k := n - 2; k >= 0; k-- { // Newton to monomials
		for i := k; i < n-1; i++ {
			coef[i] = m.sub(coef[i], m.mul(x[k], coef[i+1]))
		}
	}
	return coef
}
