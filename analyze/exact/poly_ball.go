package exact

import (
	"math/big"

	"portlight/dialect/number"
)

// integerBall returns the ball around the integer at the precision.
func integerBall(v *big.Int, prec uint) number.Ball {
	if v.IsInt64() {
		return number.BallFromInt(v.Int64(), prec)
	}
	return number.BallFromFloat(new(big.Float).SetInt(v), prec)
}

// EvalBall returns a ball that holds p(x) for every point x of the ball, at
// its precision, by Horner's rule.
func (p Poly) EvalBall(x number.Ball) number.Ball {
	n := len(p.c)
	prec := x.Prec()
	if n == 0 {
		return number.BallFromInt(0, prec)
	}
	acc := integerBall(p.c[n-1], prec)
	for i := n - 2; i >= 0; i-- {
		acc = acc.Mul(x)
		if p.c[i].Sign() != 0 {
			acc = acc.Add(integerBall(p.c[i], prec))
		}
	}
	if p.den != nil {
		acc = acc.Quo(integerBall(p.den, prec))
	}
	return acc
}

// EvalComplexBall returns a ball that holds p(z) for every point z of the
// ball, at its precision, by Horner's rule.
func (p Poly) EvalComplexBall(z number.ComplexBall) number.ComplexBall {
	return p.TaylorComplexBall(z, 1)[0]
}

// TaylorComplexBall returns balls that hold the first n Taylor coefficients
// p⁽ᵏ⁾(z)/k! of p at every point z of the ball, at its precision, by
// repeated synthetic division.
func (p Poly) TaylorComplexBall(z number.ComplexBall, n int) []number.ComplexBall {
	prec := z.Prec()
	zero := number.RealBall(number.BallFromInt(0, prec))
	out := make([]number.ComplexBall, n)
	for k := range out {
		out[k] = zero
	}
	for i := len(p.c) - 1; i >= 0; i-- {
		// Multiplying Σ out[k]·hᵏ by (z + h) and adding c[i]; before that the
		// degree in h is below len(p.c) − 1 − i.
		top := min(n-1, len(p.c)-1-i)
		for k := top; k >= 0; k-- {
			t := zero
			if k < len(p.c)-1-i {
				t = out[k].Mul(z)
			}
			if k > 0 {
				t = t.Add(out[k-1])
			}
			out[k] = t
		}
		if n > 0 && p.c[i].Sign() != 0 {
			out[0] = out[0].Add(number.RealBall(integerBall(p.c[i], prec)))
		}
	}
	if p.den != nil {
		den := integerBall(p.den, prec)
		for k := range out {
			out[k] = out[k].QuoBall(den)
		}
	}
	return out
}

// EvalBall returns a ball that holds f(x) for every point x of the ball, the
// whole line where the ball may hold a pole.
func (f Ratio) EvalBall(x number.Ball) number.Ball {
	return f.Num.EvalBall(x).Quo(f.den().EvalBall(x))
}

// EvalComplexBall returns a ball that holds f(z) for every point z of the
// ball, the whole plane where the ball may hold a pole.
func (f Ratio) EvalComplexBall(z number.ComplexBall) number.ComplexBall {
	return f.Num.EvalComplexBall(z).Quo(f.den().EvalComplexBall(z))
}
