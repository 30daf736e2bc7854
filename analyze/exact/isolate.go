package exact

import (
	"context"
	"math/big"
)

// Interval holds exactly one real root of a polynomial: either the root
// itself, where Lo and Hi are equal, or the open interval from Lo to Hi whose
// ends are no roots.
type Interval struct{ Lo, Hi *big.Rat }

// IsPoint reports whether the root is known to be the rational number Lo.
func (v Interval) IsPoint() bool { return v.Lo.Cmp(v.Hi) == 0 }

// Width returns Hi − Lo.
func (v Interval) Width() *big.Rat { return new(big.Rat).Sub(v.Hi, v.Lo) }

// Midpoint returns the middle of the interval.
func (v Interval) Midpoint() *big.Rat {
	m := new(big.Rat).Add(v.Lo, v.Hi)
	return m.Mul(m, big.NewRat(1, 2))
}

// IsolateRealRoots returns disjoint intervals, in ascending order, for the
// distinct real roots of p in the closed range from lo to hi; a nil end is
// infinite. It returns nil for the zero polynomial. The intervals lie within
// the range.
//
// Roots are separated by Descartes' rule of signs on divided intervals
// (G. E. Collins and A. G. Akritas, Proceedings of SYMSAC 1976, 272–275),
// in exact arithmetic.
func IsolateRealRoots(p Poly, lo, hi *big.Rat) []Interval {
	roots, err := IsolateRealRootsContext(context.Background(), p, lo, hi)
	if err != nil {
		panic("exact: the background context ended")
	}
	return roots
}

// CountRealRoots returns the number of distinct real roots of p in the closed
// range from lo to hi, a nil end being infinite; 0 for the zero polynomial.
func CountRealRoots(p Poly, lo, hi *big.Rat) int { return len(IsolateRealRoots(p, lo, hi)) }

// IsolateRealRootsContext is IsolateRealRoots with a way to stop it; the
// error is the context's.
func IsolateRealRootsContext(ctx context.Context, p Poly, lo, hi *big.Rat) ([]Interval, error) {
	if p.Degree() < 1 || lo != nil && hi != nil && lo.Cmp(hi) > 0 {
		return nil, ctx.Err()
	}
	q := p.Radical()
	zero := new(big.Rat)
	var roots []Interval
	if lo == nil || lo.Sign() < 0 {
		// The negative part mirrored; the root 0 comes with the other part.
		to := zero
		if hi != nil && hi.Sign() < 0 {
			to = new(big.Rat).Neg(hi)
		}
		mirrored, err := isolatePositive(ctx, q.ScaleArgument(big.NewRat(-1, 1)).Primitive(), to, negated(lo))
		if err != nil {
			return nil, err
		}
		for k := len(mirrored) - 1; k >= 0; k-- {
			v := Interval{negated(mirrored[k].Hi), negated(mirrored[k].Lo)}
			if v.Lo.Sign() != 0 {
				roots = append(roots, v)
			}
		}
		lo = zero
	}
	if hi == nil || hi.Sign() >= 0 {
		right, err := isolatePositive(ctx, q, lo, hi)
		if err != nil {
			return nil, err
		}
		roots = append(roots, right...)
	}
	for i, v := range roots {
		if !v.IsPoint() {
			roots[i] = clearEnds(q, v)
		}
	}
	return roots, ctx.Err()
}

// negated returns −r, nil for nil.
func negated(r *big.Rat) *big.Rat {
	if r == nil {
		return nil
	}
	return new(big.Rat).Neg(r)
}

// clearEnds moves the ends of an open interval with one root of a square-free
// q away from other roots of q.
func clearEnds(q Poly, v Interval) Interval {
	loRoot, hiRoot := q.EvalSign(v.Lo) == 0, q.EvalSign(v.Hi) == 0
	if loRoot {
		q = divideRoot(q, v.Lo)
	}
	if hiRoot {
		q = divideRoot(q, v.Hi)
	}
	sign := q.EvalSign(v.Lo)
	for loRoot || hiRoot {
		mid := v.Midpoint()
		switch q.EvalSign(mid) {
		case 0:
			return Interval{mid, mid}
		case sign:
			v.Lo, loRoot = mid, false
		default:
			v.Hi, hiRoot = mid, false
		}
	}
	return v
}

// isolatePositive isolates the roots of a square-free q in [lo, hi] with
// 0 ≤ lo; hi may be nil.
func isolatePositive(ctx context.Context, q Poly, lo, hi *big.Rat) ([]Interval, error) {
	var out, last []Interval
	if q.EvalSign(lo) == 0 {
		out = append(out, Interval{lo, lo})
		q = divideRoot(q, lo)
	}
	if hi != nil && hi.Cmp(lo) > 0 && q.EvalSign(hi) == 0 {
		last = append(last, Interval{hi, hi})
		q = divideRoot(q, hi)
	}
	q = q.Shift(-q.Order())
	above, ok := positiveBound(q)
	if !ok || hi != nil && hi.Cmp(lo) == 0 {
		return append(out, last...), ctx.Err()
	}
	below, _ := positiveBound(q.Reverse())
	lo = maxRat(lo, below.Inv(below))
	if hi == nil || hi.Cmp(above) > 0 {
		hi = above
	}
	switch {
	case lo.Cmp(hi) >= 0:
	case coefficientVariations(q.c) == 1: // one positive root
		if q.EvalSign(lo) != q.EvalSign(hi) {
			out = append(out, Interval{lo, hi})
		}
	default:
		z := newIsolator(ctx, q)
		if err := z.spread(lo, hi); err != nil {
			return nil, err
		}
		out = append(out, z.found...)
	}
	return append(out, last...), ctx.Err()
}

func maxRat(a, b *big.Rat) *big.Rat {
	if a.Cmp(b) < 0 {
		return b
	}
	return a
}

// floorLog2 returns the integer k with 2^k ≤ r < 2^(k+1), for r > 0.
func floorLog2(r *big.Rat) int {
	k := r.Num().BitLen() - r.Denom().BitLen() // 2^(k−1) < r < 2^(k+1)
	if r.Cmp(powerOfTwo(k)) < 0 {
		k--
	}
	return k
}

// divideRoot returns q/(s − r), primitive.
func divideRoot(q Poly, r *big.Rat) Poly {
	return q.Quo(NewPoly(new(big.Rat).Neg(r), big.NewRat(1, 1))).Primitive()
}

// positiveBound returns a power of two greater than every positive root of p,
// which is not zero, and whether there can be any: twice the largest
// |c[n−k]/c[n]|^(1/k) over the coefficients of the sign opposite to that of
// c[n] (J. B. Kioustelidis, Journal of Computational and Applied Mathematics
// 16 (1986) 241–244), with exponents rounded up.
func positiveBound(p Poly) (*big.Rat, bool) {
	n := p.Degree()
	sign := p.c[n].Sign()
	top := p.c[n].BitLen() - 1 // |c[n]| ≥ 2^top
	best, any := 0, false
	for k := 1; k <= n; k++ {
		if v := p.c[n-k]; v.Sign() == -sign {
			e := ceilDiv(v.BitLen()-top, k) // |c[n−k]/c[n]| < 2^(k·e)
			if !any || e > best {
				best, any = e, true
			}
		}
	}
	return powerOfTwo(best + 1), any
}

// ceilDiv returns ⌈a/b⌉ for b > 0.
func ceilDiv(a, b int) int {
	q := a / b
	if a%b > 0 {
		q++
	}
	return q
}

// powerOfTwo returns 2^e.
func powerOfTwo(e int) *big.Rat {
	x := new(big.Int).Lsh(bigOne, uint(max(e, -e)))
	if e < 0 {
		return new(big.Rat).SetFrac(bigOne, x)
	}
	return new(big.Rat).SetInt(x)
}
