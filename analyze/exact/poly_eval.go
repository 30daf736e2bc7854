package exact

import "math/big"

// Eval returns p(r).
func (p Poly) Eval(r *big.Rat) *big.Rat {
	n := len(p.c)
	if n == 0 {
		return new(big.Rat)
	}
	a, b := r.Num(), r.Denom()
	acc := new(big.Int).Set(p.c[n-1])
	if isOne(b) {
		for i := n - 2; i >= 0; i-- {
			acc.Add(acc.Mul(acc, a), p.c[i])
		}
		return new(big.Rat).SetFrac(acc, p.denominator())
	}
	// Homogeneous Horner: Σ c[i]·aⁱ·bⁿ⁻¹⁻ⁱ.
	power, t := big.NewInt(1), new(big.Int)
	for i := n - 2; i >= 0; i-- {
		power.Mul(power, b)
		acc.Add(acc.Mul(acc, a), t.Mul(p.c[i], power))
	}
	return new(big.Rat).SetFrac(acc, power.Mul(power, p.denominator()))
}

// EvalSign returns the sign of p(r): −1, 0 or +1.
func (p Poly) EvalSign(r *big.Rat) int { return p.Eval(r).Sign() }

// EvalGaussian returns the real and imaginary parts of p(re + j·im).
func (p Poly) EvalGaussian(re, im *big.Rat) (*big.Rat, *big.Rat) {
	if im.Sign() == 0 {
		return p.Eval(re), new(big.Rat)
	}
	n := len(p.c)
	if n == 0 {
		return new(big.Rat), new(big.Rat)
	}
	// Common denominator b: the point is (x + j·y)/b.
	g := new(big.Int).GCD(nil, nil, re.Denom(), im.Denom())
	fr := new(big.Int).Quo(im.Denom(), g)
	fi := new(big.Int).Quo(re.Denom(), g)
	b := new(big.Int).Mul(re.Denom(), fr)
	x, y := fr.Mul(fr, re.Num()), fi.Mul(fi, im.Num())
	ar, ai := new(big.Int).Set(p.c[n-1]), new(big.Int)
	power := big.NewInt(1)
	t, u := new(big.Int), new(big.Int)
	for i := n - 2; i >= 0; i-- {
		power.Mul(power, b)
		t.Mul(ar, x)
		t.Sub(t, u.Mul(ai, y))
		ai.Mul(ai, x)
		ai.Add(ai, u.Mul(ar, y))
		ar.Add(t, u.Mul(p.c[i], power))
	}
	den := power.Mul(power, p.denominator())
	return new(big.Rat).SetFrac(ar, den), new(big.Rat).SetFrac(ai, den)
}

// EvenOdd returns the polynomials E and O with p(s) = E(s²) + s·O(s²).
func (p Poly) EvenOdd() (even, odd Poly) {
	var e, o []*big.Int
	for i, v := range p.c {
		if i%2 == 0 {
			e = append(e, v)
		} else {
			o = append(o, v)
		}
	}
	return makePoly(e, p.den), makePoly(o, p.den)
}

// OnImaginaryAxis returns the polynomials A and B in x = ω² with
// p(jω) = A(ω²) + jω·B(ω²).
func (p Poly) OnImaginaryAxis() (a, b Poly) {
	e, o := p.EvenOdd()
	minus := big.NewRat(-1, 1)
	return e.ScaleArgument(minus), o.ScaleArgument(minus)
}

// MagnitudeSquared returns the polynomial M in x = ω² with
// M(ω²) = |p(jω)|².
func (p Poly) MagnitudeSquared() Poly {
	a, b := p.OnImaginaryAxis()
	return a.Mul(a).Add(b.Mul(b).Shift(1))
}
