package number

import (
	"math"
	"math/big"
)

// Ball is a real interval: all numbers within a radius of a midpoint. It is
// immutable. The zero value is exactly 0. Where an operation has no bounded
// result (division by a ball that holds 0, the logarithm of one that reaches 0)
// the ball is the whole real line, which [Ball.IsFinite] tells.
//
// A ball carries the working precision of its midpoint in bits; the result of
// an operation has the larger precision of its operands.
type Ball struct {
	mid big.Float // precision 0 stands for the zero value
	rad magnitude
}

// MinPrecision is the least working precision in bits; precisions are rounded
// up to multiples of it.
const MinPrecision = 64

// maxPrecision bounds the working precision: no ball asked for with more gets
// more than this many bits.
const maxPrecision = 1 << 24

// Midpoints with binary exponents beyond ±midExponent become the whole line or
// a ball around zero, so that big.Float neither overflows nor panics.
const midExponent = 1 << 29

func clampPrecision(prec uint) uint {
	return (min(max(prec, MinPrecision), maxPrecision) + 63) &^ 63
}

// BallFromRat returns a ball around r itself.
func BallFromRat(r *big.Rat, prec uint) Ball {
	var z Ball
	z.mid.SetPrec(clampPrecision(prec))
	if r.IsInt() {
		z.mid.SetInt(r.Num())
	} else {
		z.mid.SetRat(r) // one rounding: the quotient of two integers taken whole
	}
	return z.rounded()
}

// BallFromExact returns a ball that holds the true value of x: its radius
// includes the bound of a stand-in.
func BallFromExact(x Exact, prec uint) Ball {
	z := BallFromRat(x.Rat(), prec)
	z.rad = z.rad.addUp(x.bound)
	return z
}

// BallFromInt returns the ball that holds n alone.
func BallFromInt(n int64, prec uint) Ball {
	var z Ball
	z.mid.SetPrec(clampPrecision(prec)).SetInt64(n)
	return z
}

// BallFromFloat returns the ball that holds f alone, rounded to prec where it
// is longer; the whole line where f is infinite.
func BallFromFloat(f *big.Float, prec uint) Ball {
	if f.IsInf() {
		return wholeLine(prec)
	}
	var z Ball
	z.mid.SetPrec(clampPrecision(prec)).Set(f)
	return z.rounded()
}

// BallFromFloat64 returns the ball that holds f alone; the whole line where f is
// infinite or not a number.
func BallFromFloat64(f float64, prec uint) Ball {
	if math.IsNaN(f) || math.IsInf(f, 0) {
		return wholeLine(prec)
	}
	var z Ball
	z.mid.SetPrec(clampPrecision(prec)).SetFloat64(f)
	return z
}

// WithRadius returns the ball widened by a radius of at least |r|.
func (b Ball) WithRadius(r *big.Float) Ball {
	if r.IsInf() {
		return wholeLine(b.Prec())
	}
	_, upper := magnitudeOfAny(r)
	b.rad = b.rad.addUp(upper)
	return b.widthChecked()
}

// WithBound returns the ball widened by the radius r.Abs().Upper().
func (b Ball) WithBound(r Ball) Ball {
	b.rad = b.rad.addUp(r.magnitudeUp())
	return b.widthChecked()
}

// WithPrecision returns the ball with its midpoint rounded to prec bits, and
// results computed from it at least at that precision.
func (b Ball) WithPrecision(prec uint) Ball {
	if !b.IsFinite() {
		return wholeLine(prec)
	}
	z := Ball{rad: b.rad}
	z.mid.SetPrec(clampPrecision(prec)).Set(&b.mid)
	return z.rounded()
}

// Prec returns the working precision in bits.
func (b Ball) Prec() uint { return max(b.mid.Prec(), MinPrecision) }

// IsFinite tells whether the ball is bounded.
func (b Ball) IsFinite() bool { return !b.rad.isInfinite() }

// IsExact tells whether the ball is a single point.
func (b Ball) IsExact() bool { return b.rad.isZero() }

// wholeLine is the ball that holds every real number.
func wholeLine(prec uint) Ball {
	z := Ball{rad: infiniteMagnitude}
	z.mid.SetPrec(clampPrecision(prec))
	return z
}

// ulp returns one unit in the last place of x, 2^(e-p), and 0 for 0.
func ulp(x *big.Float) magnitude {
	if x.Sign() == 0 {
		return magnitude{}
	}
	return powerOfTwo(int64(x.MantExp(nil)) - int64(x.Prec()))
}

// rounded adds the rounding error of the operation that has just set the
// midpoint, and keeps its exponent within limits.
func (b Ball) rounded() Ball {
	if b.mid.IsInf() {
		return wholeLine(b.mid.Prec())
	}
	if e := b.mid.MantExp(nil); e > midExponent {
		return wholeLine(b.mid.Prec())
	} else if e < -midExponent {
		b.rad = b.rad.addUp(powerOfTwo(-midExponent))
		var zero big.Float
		b.mid = *zero.SetPrec(b.mid.Prec())
		return b.widthChecked()
	}
	if b.mid.Acc() != big.Exact {
		b.rad = b.rad.addUp(ulp(&b.mid).scale(-1))
	}
	return b.widthChecked()
}

// widthChecked makes a ball without a bound the whole line around 0.
func (b Ball) widthChecked() Ball {
	if b.rad.isInfinite() {
		return wholeLine(b.Prec())
	}
	return b
}

func resultPrecision(x, y *Ball) uint { return max(x.mid.Prec(), y.mid.Prec(), MinPrecision) }

// Neg returns −b.
func (b Ball) Neg() Ball {
	z := Ball{rad: b.rad}
	z.mid.Neg(&b.mid)
	return z
}

// Abs returns the ball of the absolute values.
func (b Ball) Abs() Ball {
	if sign, decided := b.Sign(); decided {
		if sign < 0 {
			return b.Neg()
		}
		return b
	}
	if !b.IsFinite() {
		return b
	}
	// The values lie in [0, upper]; half of that is midpoint and radius.
	half := b.magnitudeUp().scale(-1)
	z := Ball{rad: half}
	z.mid.SetPrec(b.Prec()).Set(half.float())
	return z.rounded()
}

// Add returns x+y.
func (b Ball) Add(y Ball) Ball {
	if b.swallows(&y) {
		return b.widenedBy(&y)
	}
	if y.swallows(&b) {
		return y.widenedBy(&b)
	}
	var z Ball
	z.mid.SetPrec(resultPrecision(&b, &y)).Add(&b.mid, &y.mid)
	z.rad = b.rad.addUp(y.rad)
	return z.rounded()
}

// farApart is by how many powers of two beyond the precision the midpoints of a
// sum may differ: aligning them would need that many bits.
const farApart = 4096

// swallows tells whether y is nothing beside b at the precision of the sum.
func (b *Ball) swallows(y *Ball) bool {
	if b.mid.Sign() == 0 || y.mid.Sign() == 0 || b.mid.IsInf() || y.mid.IsInf() {
		return false
	}
	return b.mid.MantExp(nil)-y.mid.MantExp(nil) > int(resultPrecision(b, y))+farApart
}

// widenedBy is b ± |y| at the precision of the sum.
func (b Ball) widenedBy(y *Ball) Ball {
	z := Ball{rad: b.rad.addUp(y.magnitudeUp())}
	z.mid.SetPrec(resultPrecision(&b, y)).Set(&b.mid)
	return z.rounded()
}

// Sub returns x−y.
func (b Ball) Sub(y Ball) Ball {
	if b.swallows(&y) {
		return b.widenedBy(&y)
	}
	if y.swallows(&b) {
		return y.Neg().widenedBy(&b)
	}
	var z Ball
	z.mid.SetPrec(resultPrecision(&b, &y)).Sub(&b.mid, &y.mid)
	z.rad = b.rad.addUp(y.rad)
	return z.rounded()
}

// Mul returns x·y: the radius is |mx|ry + |my|rx + rx ry.
func (b Ball) Mul(y Ball) Ball {
	var z Ball
	z.mid.SetPrec(resultPrecision(&b, &y)).Mul(&b.mid, &y.mid)
	if b.rad.m|y.rad.m != 0 {
		if b.isPointZero() || y.isPointZero() {
			return z
		}
		z.rad = mulRadius(&b, &y)
	}
	return z.rounded()
}

func (b *Ball) isPointZero() bool { return b.rad.m == 0 && b.mid.Sign() == 0 }

func mulRadius(x, y *Ball) (rad magnitude) {
	if y.rad.m != 0 {
		_, xu := magnitudeOf(&x.mid)
		rad = xu.addUp(x.rad).mulUp(y.rad)
	}
	if x.rad.m != 0 {
		_, yu := magnitudeOf(&y.mid)
		rad = rad.addUp(yu.mulUp(x.rad))
	}
	return rad
}

// Quo returns x/y, the whole line where y holds 0. For |mx'−mx| ≤ rx and
// |my'−my| ≤ ry, |mx'/my' − mx/my| ≤ (rx + |mx/my| ry)/(|my|−ry).
func (b Ball) Quo(y Ball) Ball {
	prec := resultPrecision(&b, &y)
	lower, _ := magnitudeOf(&y.mid)
	rest := lower.subDown(y.rad)
	if rest.isZero() || !b.IsFinite() || !y.IsFinite() {
		return wholeLine(prec)
	}
	var z Ball
	z.mid.SetPrec(prec).Quo(&b.mid, &y.mid)
	if b.rad.m|y.rad.m != 0 {
		_, xu := magnitudeOf(&b.mid)
		z.rad = b.rad.addUp(xu.divUp(lower).mulUp(y.rad)).divUp(rest)
	}
	return z.rounded()
}

// Inv returns 1/b.
func (b Ball) Inv() Ball { return BallFromInt(1, b.Prec()).Quo(b) }

// MulInt returns n·b.
func (b Ball) MulInt(n int64) Ball { return b.Mul(BallFromInt(n, MinPrecision)) }

// MulRat returns r·b.
func (b Ball) MulRat(r *big.Rat) Ball {
	if r.IsInt() {
		return b.Mul(BallFromRat(r, b.Prec()))
	}
	var n, d Ball
	n.mid.SetPrec(b.Prec()).SetInt(r.Num())
	d.mid.SetPrec(b.Prec()).SetInt(r.Denom())
	return b.Mul(n.rounded()).Quo(d.rounded())
}

// MulPow2 returns b·2^k without rounding.
func (b Ball) MulPow2(k int) Ball {
	if !b.IsFinite() {
		return b
	}
	if k > midExponent || k < -midExponent {
		if b.isPointZero() {
			return b
		}
		if k > 0 {
			return wholeLine(b.Prec())
		}
		z := Ball{rad: b.magnitudeUp().scale(int64(k))}
		z.mid.SetPrec(b.Prec())
		return z
	}
	z := Ball{rad: b.rad.scale(int64(k))}
	z.mid.SetPrec(b.Prec()).SetMantExp(&b.mid, k)
	return z.rounded()
}

// Sqr returns b²; unlike b.Mul(b) it is never negative where b holds 0.
func (b Ball) Sqr() Ball {
	if _, decided := b.Sign(); decided || !b.IsFinite() {
		return b.Mul(b)
	}
	z := b.Abs()
	return z.Mul(z).notNegative()
}

// notNegative returns the part of the ball that is ≥ 0 as a ball, for values
// known to be so.
func (b Ball) notNegative() Ball {
	if !b.IsFinite() || b.Lower().Sign() >= 0 {
		return b
	}
	half := b.magnitudeUp().scale(-1)
	z := Ball{rad: half}
	z.mid.SetPrec(b.Prec()).Set(half.float())
	return z.rounded()
}

// PowInt returns b^n, with b^0 = 1.
func (b Ball) PowInt(n int) Ball {
	if n < 0 {
		m := uint64(-(int64(n) + 1)) + 1
		return b.powUint(m).Inv()
	}
	return b.powUint(uint64(n))
}

func (b Ball) powUint(n uint64) Ball {
	z := BallFromInt(1, b.Prec())
	for square := b; ; square = square.Sqr() {
		if n&1 != 0 {
			z = z.Mul(square)
		}
		if n >>= 1; n == 0 {
			return z
		}
	}
}

// Sqrt returns the square root of the ball's points; negative points of a ball
// that also holds others are left out, as rounding puts them there. A ball of
// negative points gives the whole line.
//
// The midpoint is ⌊√(m·4^k)⌋/2^k, less than one unit below the root, which has
// at least p+2 bits. For the radius, |√(m+d)−√m| ≤ |d|/(√m + √(m−r)).
func (b Ball) Sqrt() Ball {
	if b.isPointZero() {
		return b
	}
	prec := b.Prec()
	if !b.IsFinite() || b.Upper().Sign() < 0 {
		return wholeLine(prec)
	}
	lower, upper := magnitudeOf(&b.mid)
	rest := lower.subDown(b.rad)
	if b.mid.Sign() <= 0 || rest.isZero() {
		half := b.rad.addUp(upper).sqrtUp().scale(-1)
		z := Ball{rad: half}
		z.mid.SetPrec(prec).Set(half.float())
		return z.rounded()
	}
	// Bring the midpoint to an integer n of 2(p+2) or 2(p+2)+1 bits, with an
	// even exponent; that takes nothing off it.
	shift := 2*int(prec+2) - b.mid.MantExp(nil)
	shift += shift & 1
	var scaled big.Float
	n, _ := scaled.SetPrec(prec).SetMantExp(&b.mid, shift).Int(nil)
	root := new(big.Int).Sqrt(n)
	var z Ball
	z.mid.SetPrec(prec).SetInt(root)
	if z.mid.Acc() != big.Exact {
		z.rad = ulp(&z.mid).scale(-1)
	}
	if new(big.Int).Mul(root, root).Cmp(n) != 0 {
		z.rad = z.rad.addUp(powerOfTwo(0))
	}
	z.rad = z.rad.scale(int64(-shift / 2))
	z.mid.SetMantExp(&z.mid, -shift/2)
	if b.rad.m != 0 {
		divisor := lower.sqrtDown().addDown(rest.sqrtDown())
		z.rad = z.rad.addUp(b.rad.divUp(divisor))
	}
	return z.widthChecked()
}
