package exact

import (
	"fmt"
	"math/big"
	"strings"
)

// Poly is an immutable polynomial in one variable s with rational
// coefficients. The zero value is the zero polynomial. Polys are safe to copy
// and to share between goroutines.
//
// Inside, a polynomial is Σ c[i]·sⁱ / den with integer c, no trailing zero
// and gcd(c[0], …, c[n], den) = 1, so equal polynomials have equal
// representations.
type Poly struct {
	c   []*big.Int // ascending; the last entry is not zero
	den *big.Int   // positive; nil stands for 1
}

var (
	bigOne  = big.NewInt(1)
	bigZero = new(big.Int)
)

// isOne reports whether x is 1 (nil counts as 1).
func isOne(x *big.Int) bool {
	return x == nil || (x.IsInt64() && x.Int64() == 1)
}

// NewPoly returns the polynomial with the given coefficients in ascending
// order; nil stands for zero.
func NewPoly(coeffs ...*big.Rat) Poly {
	den := big.NewInt(1)
	g, t := new(big.Int), new(big.Int)
	for _, r := range coeffs {
		if r == nil || r.IsInt() {
			continue
		}
		g.GCD(nil, nil, den, r.Denom())
		den.Mul(den, t.Quo(r.Denom(), g))
	}
	ints := make([]*big.Int, len(coeffs))
	for i, r := range coeffs {
		v := new(big.Int)
		if r != nil {
			v.Mul(r.Num(), t.Quo(den, r.Denom()))
		}
		ints[i] = v
	}
	return makePoly(ints, den)
}

// PolyFromInts returns Σ ints[i]·sⁱ / den. A nil den stands for 1, nil
// integers for 0. It panics if den is zero. The arguments are copied.
func PolyFromInts(ints []*big.Int, den *big.Int) Poly {
	c := make([]*big.Int, len(ints))
	for i, v := range ints {
		c[i] = new(big.Int)
		if v != nil {
			c[i].Set(v)
		}
	}
	if den == nil {
		return makePoly(c, nil)
	}
	return makePoly(c, new(big.Int).Set(den))
}

// PolyFromInt64s returns the polynomial with the given integer coefficients
// in ascending order.
func PolyFromInt64s(coeffs ...int64) Poly {
	c := make([]*big.Int, len(coeffs))
	for i, v := range coeffs {
		c[i] = big.NewInt(v)
	}
	return makePoly(c, nil)
}

// Constant returns the polynomial of degree 0 with value r, or the zero
// polynomial if r is zero.
func Constant(r *big.Rat) Poly { return NewPoly(r) }

// Monomial returns r·s^degree. It panics if degree is negative.
func Monomial(r *big.Rat, degree int) Poly { return NewPoly(r).Shift(degree) }

// newInts returns n zeros that lie together in memory.
func newInts(n int) []*big.Int {
	buf := make([]big.Int, n)
	c := make([]*big.Int, n)
	for i := range c {
		c[i] = &buf[i]
	}
	return c
}

// makePoly owns the slice c, but may share its integers and den: it trims,
// makes the denominator positive and removes the common factor of numerators
// and denominator.
func makePoly(c []*big.Int, den *big.Int) Poly {
	n := len(c)
	for n > 0 && c[n-1].Sign() == 0 {
		n--
	}
	c = c[:n]
	if den != nil && den.Sign() == 0 {
		panic("exact: polynomial with denominator zero")
	}
	if n == 0 {
		return Poly{}
	}
	if isOne(den) {
		return Poly{c: c}
	}
	g := contentWith(c, den)
	if den.Sign() < 0 {
		g.Neg(g)
	}
	if !isOne(g) {
		den = new(big.Int).Quo(den, g)
		q := newInts(n)
		for i := range c {
			q[i].Quo(c[i], g)
		}
		c = q
	}
	if isOne(den) {
		den = nil
	}
	return Poly{c: c, den: den}
}

// contentWith returns gcd(start, c[0], c[1], …) ≥ 0.
func contentWith(c []*big.Int, start *big.Int) *big.Int {
	g := new(big.Int).Abs(start)
	var t big.Int
	// The leading and the lowest coefficients are the likeliest to end the
	// search early, so walk from the top.
	for i := len(c) - 1; i >= 0 && !isOne(g); i-- {
		switch {
		case c[i].Sign() == 0:
		case g.Sign() == 0:
			g.Abs(c[i])
		default:
			// A remainder first: the terms are often much longer than g.
			if c[i].CmpAbs(g) > 0 {
				t.Rem(c[i], g)
			} else {
				t.Set(c[i])
			}
			if t.Sign() != 0 {
				g.GCD(nil, nil, g, t.Abs(&t))
			}
		}
	}
	return g
}

// denominator returns the positive common denominator.
func (p Poly) denominator() *big.Int {
	if p.den == nil {
		return bigOne
	}
	return p.den
}

// Degree returns the degree, -1 for the zero polynomial.
func (p Poly) Degree() int { return len(p.c) - 1 }

// IsZero reports whether p is the zero polynomial.
func (p Poly) IsZero() bool { return len(p.c) == 0 }

// IsConstant reports whether p has degree at most 0.
func (p Poly) IsConstant() bool { return len(p.c) <= 1 }

// IsOne reports whether p is the constant 1.
func (p Poly) IsOne() bool { return len(p.c) == 1 && isOne(p.den) && isOne(p.c[0]) }

// Order returns the multiplicity of the root s = 0 (the lowest power of s
// with a nonzero coefficient), -1 for the zero polynomial.
func (p Poly) Order() int {
	for i, v := range p.c {
		if v.Sign() != 0 {
			return i
		}
	}
	return -1
}

// Coeff returns a copy of the coefficient of sⁱ, zero outside the range.
func (p Poly) Coeff(i int) *big.Rat {
	if i < 0 || i >= len(p.c) {
		return new(big.Rat)
	}
	return new(big.Rat).SetFrac(p.c[i], p.denominator())
}

// Coefficients returns a copy of the coefficients in ascending order, empty
// for the zero polynomial.
func (p Poly) Coefficients() []*big.Rat {
	out := make([]*big.Rat, len(p.c))
	for i := range p.c {
		out[i] = p.Coeff(i)
	}
	return out
}

// Leading returns a copy of the leading coefficient, zero for the zero
// polynomial.
func (p Poly) Leading() *big.Rat { return p.Coeff(len(p.c) - 1) }

// Ints returns integers and a positive denominator with
// p = Σ ints[i]·sⁱ / den and no factor common to all of them. The results are
// copies.
func (p Poly) Ints() ([]*big.Int, *big.Int) {
	c := make([]*big.Int, len(p.c))
	for i, v := range p.c {
		c[i] = new(big.Int).Set(v)
	}
	return c, new(big.Int).Set(p.denominator())
}

// Equal reports whether p and q are the same polynomial.
func (p Poly) Equal(q Poly) bool {
	if len(p.c) != len(q.c) || p.denominator().Cmp(q.denominator()) != 0 {
		return false
	}
	for i := range p.c {
		if p.c[i].Cmp(q.c[i]) != 0 {
			return false
		}
	}
	return true
}

// String returns p in descending powers, for messages and tests.
func (p Poly) String() string {
	if p.IsZero() {
		return "0"
	}
	var b strings.Builder
	for i := len(p.c) - 1; i >= 0; i-- {
		if p.c[i].Sign() == 0 {
			continue
		}
		r := p.Coeff(i)
		switch {
		case b.Len() == 0 && r.Sign() < 0:
			b.WriteString("-")
		case b.Len() > 0 && r.Sign() < 0:
			b.WriteString(" - ")
		case b.Len() > 0:
			b.WriteString(" + ")
		}
		r.Abs(r)
		one := r.IsInt() && isOne(r.Num())
		if i == 0 || !one {
			b.WriteString(r.RatString())
			if i > 0 {
				b.WriteString("·")
			}
		}
		switch {
		case i == 1:
			b.WriteString("s")
		case i > 1:
			fmt.Fprintf(&b, "s^%d", i)
		}
	}
	return b.String()
}
