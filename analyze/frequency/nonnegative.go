package frequency

import (
	"math/big"

	"portlight/analyze/exact"
)

// NonNegative decides whether p(x) ≥ 0 for every x ≥ 0: the polynomial may
// touch zero there but not cross it, and must be positive somewhere (or be
// the zero polynomial).
func NonNegative(p exact.Poly) bool {
	if p.IsZero() {
		return true
	}
	if p.Leading().Sign() < 0 {
		return false
	}
	crossing := exact.PolyFromInt64s(1)
	for _, f := range exact.SquareFree(p) {
		if f.Multiplicity%2 == 1 {
			crossing = crossing.Mul(f.Poly)
		}
	}
	if k := crossing.Order(); k > 0 {
		crossing = crossing.Quo(exact.Monomial(big.NewRat(1, 1), k))
	}
	return crossing.Degree() < 1 || exact.CountRealRoots(crossing, new(big.Rat), nil) == 0
}

// NonNegativeRatio decides whether p(x)/q(x) ≥ 0 for every x ≥ 0 where it is
// defined.
func NonNegativeRatio(r exact.Ratio) bool { return NonNegative(r.Num.Mul(r.Den)) }

// MagnitudeRatio is |H(jω)|² as a rational function of x = ω².
func MagnitudeRatio(h exact.Ratio) exact.Ratio {
	r, err := exact.NewRatio(h.Num.MagnitudeSquared(), h.Den.MagnitudeSquared())
	if err != nil {
		return exact.Ratio{}
	}
	return r
}
