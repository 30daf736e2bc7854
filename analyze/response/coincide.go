package response

import (
	"math/big"

	"portlight/analyze/exact"
)

// coincidenceBits is how near, relative to it, a source's frequency that is a
// stand-in for an irrational one must come to an undamped natural frequency to
// count as the same: stand-ins have 249 bits, less what the arithmetic on them
// loses.
const coincidenceBits = 200

// tuned returns the wave with those frequencies that cannot be told from an
// undamped natural frequency of a transfer replaced by it, and whether there
// are any. Without this, a source at 2π·f in resonance with a network computed
// for f would be two frequencies 10^-75 apart.
func (w Wave) tuned(h exact.Ratio) (Wave, bool) {
	if !w.inexactFrequency() {
		return w, false
	}
	squares := undamped(denominator(h))
	if squares.Degree() < 1 {
		return w, false
	}
	out, any := Wave{}, false
	tune := func(list []WaveTerm) []WaveTerm {
		var terms []WaveTerm
		for _, t := range list {
			if sq, ok := t.coincidence(squares); ok {
				t.square, any = sq, true
			}
			terms = append(terms, t)
		}
		return terms
	}
	out.Always = tune(w.Always)
	for _, p := range w.Pieces {
		p.Terms = tune(p.Terms)
		out.Pieces = append(out.Pieces, p)
	}
	return out, any
}

// inexactFrequency tells whether a frequency of the wave is a stand-in.
func (w Wave) inexactFrequency() bool {
	for _, t := range w.Always {
		if !t.Omega.IsExact() {
			return true
		}
	}
	for _, p := range w.Pieces {
		for _, t := range p.Terms {
			if !t.Omega.IsExact() {
				return true
			}
		}
	}
	return false
}

// undamped is the polynomial in x = ω² whose positive roots are the squares of
// the natural frequencies on the imaginary axis: those common to the even and
// the odd part of the denominator.
func undamped(den exact.Poly) exact.Poly {
	a, b := den.OnImaginaryAxis()
	return exact.GCD(a, b).Radical()
}

// coincidence finds the rational root of p(x) that ω² cannot be told from. The
// denominator of a rational root divides the leading coefficient l of the
// primitive p, so it is the multiple of 1/l nearest to ω², if it is one at all.
func (t WaveTerm) coincidence(p exact.Poly) (*big.Rat, bool) {
	omega := t.Omega.Rat()
	if t.Omega.IsExact() || omega.Sign() == 0 || t.Rate.Rat().Sign() != 0 {
		return nil, false
	}
	square := new(big.Rat).Mul(omega, omega)
	l := p.Primitive().Leading()
	n := new(big.Rat).Mul(square, l)
	n.Add(n, big.NewRat(1, 2))
	whole := new(big.Int).Div(n.Num(), n.Denom())
	x := new(big.Rat).SetInt(whole)
	x.Quo(x, l)
	if p.Degree() == 1 {
		x = p.Coeff(0)
		x.Neg(x.Quo(x, p.Coeff(1)))
	}
	return x, nearRat(x, square) && p.EvalSign(x) == 0
}

// nearRat tells whether x and y agree to coincidenceBits bits.
func nearRat(x, y *big.Rat) bool {
	d := new(big.Rat).Sub(x, y)
	d.Abs(d)
	limit := new(big.Rat).SetFrac(big.NewInt(1), new(big.Int).Lsh(big.NewInt(1), coincidenceBits))
	return d.Cmp(limit.Mul(limit, y)) <= 0
}
