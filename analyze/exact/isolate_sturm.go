package exact

import "math/big"

// SturmCount returns the number of distinct real roots of p in the closed
// range from lo to hi, a nil end being infinite, by Sturm's theorem (J. C. F.
// Sturm, 1829; see Basu, Pollack and Roy, Algorithms in Real Algebraic
// Geometry, §2.2). The coefficients of the sequence grow so quickly that
// CountRealRoots is much faster; this is the independent check.
func SturmCount(p Poly, lo, hi *big.Rat) int {
	if p.Degree() < 1 || lo != nil && hi != nil && lo.Cmp(hi) > 0 {
		return 0
	}
	p = p.Radical()
	seq := []Poly{p, p.Derivative()}
	for {
		a, b := seq[len(seq)-2], seq[len(seq)-1]
		_, r := a.DivMod(b)
		if r.IsZero() {
			break
		}
		next := r.Primitive()
		if r.Leading().Sign() > 0 {
			next = next.Neg()
		}
		seq = append(seq, next)
	}
	// Variations at lo minus variations at hi count the roots in (lo, hi].
	count := sturmVariations(seq, lo, -1) - sturmVariations(seq, hi, +1)
	if lo != nil && p.EvalSign(lo) == 0 {
		count++
	}
	return count
}

// sturmVariations counts sign changes at x, or at the infinity of the given
// sign where x is nil.
func sturmVariations(seq []Poly, x *big.Rat, infinity int) int {
	count, last := 0, 0
	for _, f := range seq {
		var s int
		switch {
		case x != nil:
			s = f.EvalSign(x)
		case infinity < 0 && f.Degree()%2 == 1:
			s = -f.c[f.Degree()].Sign()
		default:
			s = f.c[f.Degree()].Sign()
		}
		if s != 0 {
			if s == -last {
				count++
			}
			last = s
		}
	}
	return count
}
