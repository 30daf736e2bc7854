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
// Roots are separated by Descartes' rule of signs on halved intervals
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
	var roots []Interval
	var err error
	if lo != nil && lo.Sign() >= 0 || hi != nil && hi.Sign() <= 0 {
		roots, err = isolateRange(ctx, q, lo, hi)
	} else {
		roots, err = isolateBothSigns(ctx, q, lo, hi)
	}
	if err != nil {
		return nil, err
	}
	for i, v := range roots {
		if !v.IsPoint() {
			roots[i] = clearEnds(q, v)
		}
	}
	return roots, nil
}

// isolateBothSigns splits the range at 0, so that small and large roots are
// reached from powers of two on either side.
func isolateBothSigns(ctx context.Context, q Poly, lo, hi *big.Rat) ([]Interval, error) {
	zero := new(big.Rat)
	left, err := isolateRange(ctx, q, lo, zero)
	if err != nil {
		return nil, err
	}
	if n := len(left); n > 0 && left[n-1].Hi.Sign() == 0 && left[n-1].IsPoint() {
		left = left[:n-1] // the root 0 comes with the right half
	}
	right, err := isolateRange(ctx, q, zero, hi)
	return append(left, right...), err
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

// isolateRange isolates the roots of a square-free q in [lo, hi], which does
// not reach to both sides of 0.
func isolateRange(ctx context.Context, q Poly, lo, hi *big.Rat) ([]Interval, error) {
	if hi == nil && lo.Cmp(rootBound(q)) > 0 || lo == nil && new(big.Rat).Neg(hi).Cmp(rootBound(q)) > 0 {
		return nil, ctx.Err()
	}
	if hi == nil {
		hi = rootBound(q)
	}
	if lo == nil {
		lo = rootBound(q)
		lo.Neg(lo)
	}
	var out, last []Interval
	if q.EvalSign(lo) == 0 {
		out = append(out, Interval{lo, lo})
		q = divideRoot(q, lo)
	}
	if lo.Cmp(hi) == 0 {
		return out, ctx.Err()
	}
	if q.EvalSign(hi) == 0 {
		last = append(last, Interval{hi, hi})
		q = divideRoot(q, hi)
	}
	width := new(big.Rat).Sub(hi, lo)
	d := descartes{ctx: ctx, lo: lo, width: width}
	if err := d.search(onUnitInterval(q, lo, width)); err != nil {
		return nil, err
	}
	return append(append(out, d.found...), last...), nil
}

// divideRoot returns q/(s − r), primitive.
func divideRoot(q Poly, r *big.Rat) Poly {
	return q.Quo(NewPoly(new(big.Rat).Neg(r), big.NewRat(1, 1))).Primitive()
}

// rootBound returns a power of two greater than the absolute value of every
// root of p, which has degree at least 1: twice the largest
// |c[n−k]/c[n]|^(1/k) (M. Fujiwara, Tôhoku Mathematical Journal 10 (1916)
// 167–171), with exponents rounded up.
func rootBound(p Poly) *big.Rat {
	n := p.Degree()
	top := p.c[n].BitLen() - 1 // |c[n]| ≥ 2^top
	best := -1 << 62
	for k := 1; k <= n; k++ {
		if v := p.c[n-k]; v.Sign() != 0 {
			e := v.BitLen() - top // |c[n−k]/c[n]| < 2^e
			best = max(best, ceilDiv(e, k))
		}
	}
	if best == -1<<62 {
		best = 0 // p = c·sⁿ
	}
	return powerOfTwo(best + 1)
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

// onUnitInterval returns the primitive integer coefficients of
// q(lo + width·x).
func onUnitInterval(q Poly, lo, width *big.Rat) []*big.Int {
	// With lo = a/d: q(y/d), shifted by a, then y = d·width·x.
	d := new(big.Rat).SetInt(lo.Denom())
	t := q.ScaleArgument(new(big.Rat).Inv(d)).Primitive()
	t = Poly{c: taylorShift(t.c, lo.Num())}
	t = t.ScaleArgument(d.Mul(d, width)).Primitive()
	c := make([]*big.Int, len(t.c))
	for i, v := range t.c {
		c[i] = new(big.Int).Set(v)
	}
	return c
}

// taylorShift returns the coefficients of f(x + a) in fresh integers.
func taylorShift(f []*big.Int, a *big.Int) []*big.Int {
	c := make([]*big.Int, len(f))
	for i, v := range f {
		c[i] = new(big.Int).Set(v)
	}
	switch {
	case a.Sign() == 0:
	case isOne(a):
		shiftByOne(c)
	default:
		t := new(big.Int)
		for i := range len(c) - 1 {
			for j := len(c) - 2; j >= i; j-- {
				c[j].Add(c[j], t.Mul(a, c[j+1]))
			}
		}
	}
	return c
}

// shiftByOne replaces f(x) by f(x + 1).
func shiftByOne(c []*big.Int) {
	for i := range len(c) - 1 {
		for j := len(c) - 2; j >= i; j-- {
			c[j].Add(c[j], c[j+1])
		}
	}
}

// descartes searches (lo, lo + width) for the roots of a polynomial that is
// given on the unit interval.
type descartes struct {
	ctx       context.Context
	lo, width *big.Rat
	found     []Interval
}

// node is the interval from index/2^depth to (index+1)/2^depth with the
// polynomial moved onto the unit interval.
type node struct {
	index *big.Int
	depth uint
	c     []*big.Int
	point bool // the single point index/2^depth, which is a root
}

func (d *descartes) search(c []*big.Int) error {
	stack := []node{{index: new(big.Int), c: c}}
	for len(stack) > 0 {
		if err := d.ctx.Err(); err != nil {
			return err
		}
		top := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		if top.point {
			x := d.place(top.index, top.depth)
			d.found = append(d.found, Interval{x, x})
			continue
		}
		switch signVariations(top.c) {
		case 0:
		case 1:
			next := new(big.Int).Add(top.index, bigOne)
			d.found = append(d.found, Interval{d.place(top.index, top.depth), d.place(next, top.depth)})
		default:
			stack = append(stack, halves(top)...)
		}
	}
	return nil
}

// place returns lo + width·index/2^depth.
func (d *descartes) place(index *big.Int, depth uint) *big.Rat {
	x := new(big.Rat).SetFrac(index, new(big.Int).Lsh(bigOne, depth))
	x.Mul(x, d.width)
	return x.Add(x, d.lo)
}

// halves returns the right half, the middle where it is a root, and the left
// half, for a stack. Roots at the ends are divided out.
func halves(v node) []node {
	n := len(v.c) - 1
	left := v.c // 2ⁿ·c(x/2)
	for i, a := range left {
		a.Lsh(a, uint(n-i))
	}
	right := make([]*big.Int, n+1)
	for i, a := range left {
		right[i] = new(big.Int).Set(a)
	}
	shiftByOne(right)
	index := new(big.Int).Lsh(v.index, 1)
	mid := new(big.Int).Add(index, bigOne)
	if right[0].Sign() != 0 {
		return []node{
			{index: mid, depth: v.depth + 1, c: thin(right)},
			{index: index, depth: v.depth + 1, c: thin(left)},
		}
	}
	// Divide the right half by x and the left one by x − 1.
	right = right[1:]
	for i := n - 1; i >= 0; i-- {
		left[i].Add(left[i], left[i+1])
	}
	left = left[1:]
	return []node{
		{index: mid, depth: v.depth + 1, c: thin(right)},
		{index: mid, depth: v.depth + 1, point: true},
		{index: index, depth: v.depth + 1, c: thin(left)},
	}
}

// thin divides the coefficients by their common power of two.
func thin(c []*big.Int) []*big.Int {
	k := ^uint(0)
	for _, v := range c {
		if v.Sign() != 0 {
			k = min(k, v.TrailingZeroBits())
		}
	}
	if k > 0 && k != ^uint(0) {
		for _, v := range c {
			v.Rsh(v, k)
		}
	}
	return c
}

// signVariations returns a bound on the number of roots in the open unit
// interval: the sign changes in the coefficients of (1+x)ⁿ·c(1/(1+x)). The
// bound is exact when it is 0 or 1. Counting stops at 2.
func signVariations(c []*big.Int) int {
	count, last := 0, 0
	for _, v := range c { // no change of sign in c itself: no positive root
		if s := v.Sign(); s != 0 {
			if s == -last {
				count++
			}
			last = s
		}
	}
	if count == 0 {
		return 0
	}
	r := make([]*big.Int, len(c))
	for i, v := range c {
		r[len(c)-1-i] = new(big.Int).Set(v)
	}
	// After step i of the shift coefficient i is final.
	count, last = 0, 0
	for i := range r {
		for j := len(r) - 2; j >= i; j-- {
			r[j].Add(r[j], r[j+1])
		}
		if s := r[i].Sign(); s != 0 {
			if s == -last {
				if count++; count == 2 {
					return 2
				}
			}
			last = s
		}
	}
	return count
}
