package number

import "math/big"

// ComplexBall is a rectangle of complex numbers: a ball for the real and one for
// the imaginary part. The zero value is exactly 0.
type ComplexBall struct{ Re, Im Ball }

// RealBall returns re + 0i.
func RealBall(re Ball) ComplexBall { return ComplexBall{Re: re, Im: BallFromInt(0, re.Prec())} }

// Prec returns the larger working precision of the parts.
func (z ComplexBall) Prec() uint { return max(z.Re.Prec(), z.Im.Prec()) }

// IsFinite tells whether both parts are bounded.
func (z ComplexBall) IsFinite() bool { return z.Re.IsFinite() && z.Im.IsFinite() }

// IsExact tells whether z is a single point.
func (z ComplexBall) IsExact() bool { return z.Re.IsExact() && z.Im.IsExact() }

// WithPrecision returns z with both midpoints rounded to prec bits.
func (z ComplexBall) WithPrecision(prec uint) ComplexBall {
	return ComplexBall{z.Re.WithPrecision(prec), z.Im.WithPrecision(prec)}
}

// Neg returns −z.
func (z ComplexBall) Neg() ComplexBall { return ComplexBall{z.Re.Neg(), z.Im.Neg()} }

// Conj returns the conjugate.
func (z ComplexBall) Conj() ComplexBall { return ComplexBall{z.Re, z.Im.Neg()} }

// Add returns z+y.
func (z ComplexBall) Add(y ComplexBall) ComplexBall {
	return ComplexBall{z.Re.Add(y.Re), z.Im.Add(y.Im)}
}

// Sub returns z−y.
func (z ComplexBall) Sub(y ComplexBall) ComplexBall {
	return ComplexBall{z.Re.Sub(y.Re), z.Im.Sub(y.Im)}
}

// Mul returns z·y.
func (z ComplexBall) Mul(y ComplexBall) ComplexBall {
	switch {
	case y.Im.isPointZero():
		return z.MulBall(y.Re)
	case z.Im.isPointZero():
		return y.MulBall(z.Re)
	}
	return ComplexBall{
		z.Re.Mul(y.Re).Sub(z.Im.Mul(y.Im)),
		z.Re.Mul(y.Im).Add(z.Im.Mul(y.Re)),
	}
}

// Sqr returns z².
func (z ComplexBall) Sqr() ComplexBall {
	if z.Im.isPointZero() {
		return ComplexBall{z.Re.Sqr(), z.Im}
	}
	return ComplexBall{
		z.Re.Add(z.Im).Mul(z.Re.Sub(z.Im)),
		z.Re.Mul(z.Im).MulPow2(1),
	}
}

// MulBall returns b·z.
func (z ComplexBall) MulBall(b Ball) ComplexBall { return ComplexBall{z.Re.Mul(b), z.Im.Mul(b)} }

// MulRat returns r·z.
func (z ComplexBall) MulRat(r *big.Rat) ComplexBall {
	return ComplexBall{z.Re.MulRat(r), z.Im.MulRat(r)}
}

// MulPow2 returns z·2^k without rounding.
func (z ComplexBall) MulPow2(k int) ComplexBall {
	return ComplexBall{z.Re.MulPow2(k), z.Im.MulPow2(k)}
}

// MulI returns i·z.
func (z ComplexBall) MulI() ComplexBall { return ComplexBall{z.Im.Neg(), z.Re} }

// Abs2 returns |z|².
func (z ComplexBall) Abs2() Ball { return z.Re.Sqr().Add(z.Im.Sqr()).notNegative() }

// Abs returns |z|.
func (z ComplexBall) Abs() Ball {
	switch {
	case z.Im.isPointZero():
		return z.Re.Abs()
	case z.Re.isPointZero():
		return z.Im.Abs()
	}
	return z.Abs2().Sqrt()
}

// Arg returns the angle in (−π, π], or [−π, π] as a ball where z may be zero or
// touches both sides of the negative real axis.
func (z ComplexBall) Arg() Ball { return z.Im.Atan2(z.Re) }

// Inv returns 1/z; both parts are the whole line where z holds zero.
func (z ComplexBall) Inv() ComplexBall {
	if z.Im.isPointZero() {
		return ComplexBall{z.Re.Inv(), z.Im}
	}
	return z.Conj().QuoBall(z.Abs2())
}

// QuoBall returns z/b.
func (z ComplexBall) QuoBall(b Ball) ComplexBall { return ComplexBall{z.Re.Quo(b), z.Im.Quo(b)} }

// Quo returns z/y; both parts are the whole line where y holds zero.
func (z ComplexBall) Quo(y ComplexBall) ComplexBall {
	if y.Im.isPointZero() {
		return z.QuoBall(y.Re)
	}
	return z.Mul(y.Conj()).QuoBall(y.Abs2())
}

// Exp returns e^z.
func (z ComplexBall) Exp() ComplexBall {
	scale := z.Re.Exp()
	if z.Im.isPointZero() {
		return ComplexBall{scale, z.Im}
	}
	sin, cos := z.Im.SinCos()
	return ComplexBall{scale.Mul(cos), scale.Mul(sin)}
}

// PowInt returns z^n, with z^0 = 1.
func (z ComplexBall) PowInt(n int) ComplexBall {
	if n < 0 {
		return z.powUint(uint64(-(int64(n) + 1)) + 1).Inv()
	}
	return z.powUint(uint64(n))
}

func (z ComplexBall) powUint(n uint64) ComplexBall {
	power := RealBall(BallFromInt(1, z.Prec()))
	for square := z; ; square = square.Sqr() {
		if n&1 != 0 {
			power = power.Mul(square)
		}
		if n >>= 1; n == 0 {
			return power
		}
	}
}

// ContainsZero tells whether 0 lies in the rectangle.
func (z ComplexBall) ContainsZero() bool { return z.Re.ContainsZero() && z.Im.ContainsZero() }

// Overlaps tells whether the rectangles may have a number in common.
func (z ComplexBall) Overlaps(y ComplexBall) bool { return z.Re.Overlaps(y.Re) && z.Im.Overlaps(y.Im) }
