package frequency

import (
	"math/big"

	"portlight/analyze/exact"
)

// Stability is where the roots of a polynomial lie, decided exactly.
type Stability int

// The outcomes, best first.
const (
	// Stable: every root has a negative real part.
	Stable Stability = iota
	// Marginal: none is in the right half-plane, and those on the imaginary axis are simple.
	Marginal
	// Unstable: a root is in the right half-plane, or repeated on the imaginary axis.
	Unstable
)

// Decide tells where the roots of p lie by the Routh–Hurwitz criterion on
// exact coefficients, after the factor with roots on the imaginary axis (or
// symmetric about it) is split off as gcd of even and odd part.
func Decide(p exact.Poly) Stability {
	if p.Degree() < 1 {
		return Stable
	}
	k := p.Order()
	q := p
	if k > 0 {
		q = p.Quo(exact.Monomial(big.NewRat(1, 1), k))
	}
	even, odd := q.EvenOdd()
	axis := exact.GCD(even, odd) // in x = s²: symmetric roots
	rest := q
	if axis.Degree() > 0 {
		rest = q.Quo(spread(axis))
	}
	if !hurwitz(rest) {
		return Unstable
	}
	if k == 0 && axis.Degree() < 1 {
		return Stable
	}
	if k > 1 || !simpleNegative(axis) {
		return Unstable
	}
	return Marginal
}

// simpleNegative tells whether all roots of p in x = s² are real, negative
// and simple: then s = ±jω, each once.
func simpleNegative(p exact.Poly) bool {
	if p.Degree() < 1 {
		return true
	}
	if exact.GCD(p, p.Derivative()).Degree() > 0 {
		return false
	}
	return exact.CountRealRoots(p, nil, new(big.Rat)) == p.Degree()
}

// hurwitz tells whether every root of p has a negative real part, by Routh's
// array; p has no roots symmetric about the imaginary axis.
func hurwitz(p exact.Poly) bool {
	n := p.Degree()
	if n < 1 {
		return true
	}
	prim := p.Primitive()
	upper, lower := alternate(prim, n), alternate(prim, n-1)
	first := upper[0].Sign()
	for len(lower) > 0 {
		if lower[0].Sign() != first {
			return false
		}
		upper, lower = lower, routhRow(upper, lower)
	}
	return true
}

// alternate takes every second coefficient downwards from index i.
func alternate(p exact.Poly, i int) []*big.Rat {
	var out []*big.Rat
	for ; i >= 0; i -= 2 {
		out = append(out, p.Coeff(i))
	}
	return out
}

// routhRow is the next row of Routh's array, scaled to keep numbers small:
// only the signs of first elements count.
func routhRow(a, b []*big.Rat) []*big.Rat {
	q := new(big.Rat).Quo(a[0], b[0])
	out := make([]*big.Rat, 0, len(b))
	for i := 1; i < len(a); i++ {
		v := new(big.Rat).Set(a[i])
		if i < len(b) {
			v.Sub(v, new(big.Rat).Mul(q, b[i]))
		}
		out = append(out, v)
	}
	return out
}
