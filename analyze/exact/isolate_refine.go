package exact

import "math/big"

// RefineRoot returns an interval of at most the given width around the root
// of p that the interval holds; it returns a point if it meets the root. It
// panics if width is not positive.
//
// The interval is cut by evaluating p where the secant meets zero, with the
// number of parts squared on success (J. Abbott, Quadratic interval
// refinement for real roots, 2006), so the digits double with every step.
func RefineRoot(p Poly, v Interval, width *big.Rat) Interval {
	if width.Sign() <= 0 {
		panic("exact: refining a root to a width that is not positive")
	}
	if v.IsPoint() || v.Width().Cmp(width) <= 0 {
		return v
	}
	if p.EvalSign(v.Lo)*p.EvalSign(v.Hi) >= 0 {
		p = p.Radical()
	}
	r := refinement{p: p, lo: v.Lo, hi: v.Hi, flo: p.Eval(v.Lo), fhi: p.Eval(v.Hi), logParts: 2}
	for !r.exact && new(big.Rat).Sub(r.hi, r.lo).Cmp(width) > 0 {
		r.step()
	}
	return Interval{r.lo, r.hi}
}

type refinement struct {
	p        Poly
	lo, hi   *big.Rat
	flo, fhi *big.Rat // of opposite signs
	logParts uint
	exact    bool
}

// step cuts the interval into 2^logParts parts and tries the one where the
// secant meets zero; it halves the interval if the root is elsewhere.
func (r *refinement) step() {
	width := new(big.Rat).Sub(r.hi, r.lo)
	parts := new(big.Int).Lsh(bigOne, r.logParts)
	// k = round(parts·flo/(flo − fhi)), within 1 … parts−1.
	t := new(big.Rat).Sub(r.flo, r.fhi)
	t.Quo(r.flo, t)
	t.Mul(t, new(big.Rat).SetInt(parts))
	k := new(big.Int).Quo(t.Num(), t.Denom())
	if k.Sign() == 0 {
		k.SetInt64(1)
	}
	if k.Cmp(parts) >= 0 {
		k.Sub(parts, bigOne)
	}
	lo, hi := r.lo, r.hi
	at := func(k *big.Int) *big.Rat {
		x := new(big.Rat).SetFrac(k, parts)
		return x.Add(x.Mul(x, width), lo)
	}
	x := at(k)
	r.cut(x)
	if r.exact {
		return
	}
	// The neighbour on the side of the root.
	if r.lo == x {
		k.Add(k, bigOne)
	} else {
		k.Sub(k, bigOne)
	}
	if k.Sign() > 0 && k.Cmp(parts) < 0 {
		y := at(k)
		r.cut(y)
		if r.exact {
			return
		}
	}
	part := new(big.Rat).Quo(width, new(big.Rat).SetInt(parts))
	if new(big.Rat).Sub(r.hi, r.lo).Cmp(part) <= 0 {
		r.logParts = min(2*r.logParts, 1<<20)
		return
	}
	r.logParts = max(r.logParts/2, 1)
	mid := new(big.Rat).Add(lo, hi)
	mid.Mul(mid, big.NewRat(1, 2))
	if mid.Cmp(r.lo) > 0 && mid.Cmp(r.hi) < 0 {
		r.cut(mid)
	}
}

// cut keeps the side of x that holds the root.
func (r *refinement) cut(x *big.Rat) {
	f := r.p.Eval(x)
	switch f.Sign() {
	case 0:
		r.lo, r.hi, r.exact = x, x, true
	case r.flo.Sign():
		r.lo, r.flo = x, f
	default:
		r.hi, r.fhi = x, f
	}
}

// SignAtRoot returns the sign of q at the root of p that the interval holds:
// −1, 0 or +1, decided exactly.
func SignAtRoot(q, p Poly, v Interval) int {
	if q.IsZero() {
		return 0
	}
	if v.IsPoint() {
		return q.EvalSign(v.Lo)
	}
	p = p.Radical()
	// g divides p, so it has at most the one root in the interval, a simple
	// one, and no root at the ends.
	if g := GCD(p, q); g.Degree() > 0 && g.EvalSign(v.Lo) != g.EvalSign(v.Hi) {
		return 0
	}
	for !rootFree(q, v) {
		w := v.Width()
		v = RefineRoot(p, v, w.Mul(w, big.NewRat(1, 16)))
		if v.IsPoint() {
			return q.EvalSign(v.Lo)
		}
	}
	return q.EvalSign(v.Lo)
}

// rootFree reports whether Descartes' rule excludes roots of q in the closed
// interval; it does so in every interval small enough.
func rootFree(q Poly, v Interval) bool {
	if q.Degree() == 0 {
		return true
	}
	s := q.EvalSign(v.Lo)
	if s == 0 || s != q.EvalSign(v.Hi) {
		return false
	}
	return signVariations(onUnitInterval(q, v.Lo, v.Width())) == 0
}
