package exact

import (
	"errors"
	"math/big"
)

// ErrZeroDenominator is returned where a rational function would get the
// denominator zero.
var ErrZeroDenominator = errors.New("the denominator of a rational function is zero")

// Ratio is an immutable rational function of s over the rational numbers in
// lowest terms with a monic denominator; build it with NewRatio. The zero
// value is the function 0 (its Den is read as 1).
type Ratio struct{ Num, Den Poly }

// NewRatio returns num/den in lowest terms, or ErrZeroDenominator.
func NewRatio(num, den Poly) (Ratio, error) {
	if den.IsZero() {
		return Ratio{}, ErrZeroDenominator
	}
	return reduced(num, den), nil
}

// PolyRatio returns p/1.
func PolyRatio(p Poly) Ratio { return Ratio{p, PolyFromInt64s(1)} }

// ConstantRatio returns the constant function r.
func ConstantRatio(r *big.Rat) Ratio { return PolyRatio(Constant(r)) }

// reduced cancels the common factor; den is not zero.
func reduced(num, den Poly) Ratio {
	if num.IsZero() {
		return PolyRatio(Poly{})
	}
	if den.Degree() > 0 {
		if g := GCD(num, den); g.Degree() > 0 {
			num, den = num.Quo(g), den.Quo(g)
		}
	}
	return normalized(num, den)
}

// normalized makes the denominator of a fraction in lowest terms monic.
func normalized(num, den Poly) Ratio {
	l := den.Leading()
	return Ratio{num.Scale(l.Inv(l)), den.Monic()}
}

func (f Ratio) den() Poly {
	if f.Den.IsZero() {
		return PolyFromInt64s(1)
	}
	return f.Den
}

// IsZero reports whether f is the zero function.
func (f Ratio) IsZero() bool { return f.Num.IsZero() }

// IsConstant reports whether f does not depend on s.
func (f Ratio) IsConstant() bool { return f.Num.IsConstant() && f.den().IsConstant() }

// Equal reports whether f and g are the same function.
func (f Ratio) Equal(g Ratio) bool { return f.Num.Equal(g.Num) && f.den().Equal(g.den()) }

// Add returns f + g.
func (f Ratio) Add(g Ratio) Ratio { return f.combine(g, Poly.Add) }

// Sub returns f − g.
func (f Ratio) Sub(g Ratio) Ratio { return f.combine(g, Poly.Sub) }

// combine adds or subtracts over the least common denominator. Common factors
// of the result can only come from the common factor of the denominators
// (P. Henrici, Journal of the ACM 3 (1956) 6–9).
func (f Ratio) combine(g Ratio, op func(Poly, Poly) Poly) Ratio {
	a, b := f.den(), g.den()
	if a.Equal(b) {
		return reduced(op(f.Num, g.Num), a)
	}
	d := GCD(a, b)
	if d.Degree() <= 0 {
		num := op(f.Num.Mul(b), g.Num.Mul(a))
		if num.IsZero() {
			return PolyRatio(num)
		}
		return normalized(num, a.Mul(b))
	}
	a1, b1 := a.Quo(d), b.Quo(d)
	num := op(f.Num.Mul(b1), g.Num.Mul(a1))
	if num.IsZero() {
		return PolyRatio(num)
	}
	h := GCD(num, d)
	return normalized(num.Quo(h), a1.Mul(b.Quo(h)))
}

// Neg returns −f.
func (f Ratio) Neg() Ratio { return Ratio{f.Num.Neg(), f.den()} }

// Mul returns f·g.
func (f Ratio) Mul(g Ratio) Ratio {
	if f.IsZero() || g.IsZero() {
		return PolyRatio(Poly{})
	}
	x, y := GCD(f.Num, g.den()), GCD(g.Num, f.den())
	return normalized(f.Num.Quo(x).Mul(g.Num.Quo(y)), f.den().Quo(y).Mul(g.den().Quo(x)))
}

// Inv returns 1/f, or ErrZeroDenominator if f is zero.
func (f Ratio) Inv() (Ratio, error) {
	if f.IsZero() {
		return Ratio{}, ErrZeroDenominator
	}
	return normalized(f.den(), f.Num), nil
}

// Quo returns f/g, or ErrZeroDenominator if g is zero.
func (f Ratio) Quo(g Ratio) (Ratio, error) {
	inv, err := g.Inv()
	if err != nil {
		return Ratio{}, err
	}
	return f.Mul(inv), nil
}

// ScaleBy returns r·f.
func (f Ratio) ScaleBy(r *big.Rat) Ratio {
	if r.Sign() == 0 {
		return PolyRatio(Poly{})
	}
	return Ratio{f.Num.Scale(r), f.den()}
}

// ScaleArgument returns f(r·s) for r ≠ 0.
func (f Ratio) ScaleArgument(r *big.Rat) Ratio {
	if r.Sign() == 0 {
		panic("exact: argument of a rational function scaled by zero")
	}
	return normalized(f.Num.ScaleArgument(r), f.den().ScaleArgument(r))
}

// Eval returns f(r) and whether r is no pole of f.
func (f Ratio) Eval(r *big.Rat) (*big.Rat, bool) {
	d := f.den().Eval(r)
	if d.Sign() == 0 {
		return nil, false
	}
	return d.Quo(f.Num.Eval(r), d), true
}

// EvalGaussian returns the real and imaginary parts of f(re + j·im) and
// whether that point is no pole of f.
func (f Ratio) EvalGaussian(re, im *big.Rat) (*big.Rat, *big.Rat, bool) {
	nr, ni := f.Num.EvalGaussian(re, im)
	dr, di := f.den().EvalGaussian(re, im)
	if dr.Sign() == 0 && di.Sign() == 0 {
		return nil, nil, false
	}
	qr, qi := quoGaussian(nr, ni, dr, di)
	return qr, qi, true
}

// quoGaussian returns (ar + j·ai)/(br + j·bi); the divisor is not zero.
func quoGaussian(ar, ai, br, bi *big.Rat) (*big.Rat, *big.Rat) {
	var t, u, n big.Rat
	n.Add(t.Mul(br, br), u.Mul(bi, bi))
	re := new(big.Rat).Add(t.Mul(ar, br), u.Mul(ai, bi))
	im := new(big.Rat).Sub(t.Mul(ai, br), u.Mul(ar, bi))
	return re.Quo(re, &n), im.Quo(im, &n)
}

// Derivative returns df/ds.
func (f Ratio) Derivative() Ratio {
	// f = n/d; with g = gcd(d, d'), (n'·(d/g) − n·(d'/g)) / (d·(d/g)) is in
	// lowest terms up to factors of g.
	d := f.den()
	dd := d.Derivative()
	if dd.IsZero() {
		return Ratio{f.Num.Derivative(), d}
	}
	g := GCD(d, dd)
	w := d.Quo(g)
	return reduced(f.Num.Derivative().Mul(w).Sub(f.Num.Mul(dd.Quo(g))), d.Mul(w))
}

// ProperPart splits f = polynomial + rest with rest strictly proper.
func (f Ratio) ProperPart() (polynomial Poly, rest Ratio) {
	q, r := f.Num.DivMod(f.den())
	if r.IsZero() {
		return q, PolyRatio(r)
	}
	return q, Ratio{r, f.den()}
}

// String returns f as numerator and denominator, for messages and tests.
func (f Ratio) String() string {
	if f.den().IsOne() {
		return f.Num.String()
	}
	return "(" + f.Num.String() + ")/(" + f.den().String() + ")"
}
