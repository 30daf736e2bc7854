package number

import (
	"math/big"
)

// Mid returns the midpoint, as a copy.
func (b Ball) Mid() *big.Float { return new(big.Float).SetPrec(b.Prec()).Set(&b.mid) }

// MidRat returns the midpoint as a rational.
func (b Ball) MidRat() *big.Rat {
	r, _ := b.mid.Rat(nil)
	if r == nil {
		return new(big.Rat)
	}
	return r
}

// MidFloat64 returns the nearest float64 to the midpoint, for starting values
// and display heuristics.
func (b Ball) MidFloat64() float64 {
	f, _ := b.mid.Float64()
	return f
}

// Rad returns the radius, or +Inf.
func (b Ball) Rad() *big.Float { return b.rad.float() }

// RadExponent returns the least e known with radius ≤ 2^e, and false where the
// radius is 0 or infinite.
func (b Ball) RadExponent() (e int64, ok bool) {
	if b.rad.isZero() || b.rad.isInfinite() {
		return 0, false
	}
	if b.rad.m == 1<<31 {
		return b.rad.e + 31, true
	}
	return b.rad.e + 32, true
}

// Upper returns a number not less than any in the ball, or +Inf.
func (b Ball) Upper() *big.Float {
	z := new(big.Float).SetPrec(b.Prec() + 64).SetMode(big.ToPositiveInf)
	return z.Add(&b.mid, b.rad.float())
}

// Lower returns a number not greater than any in the ball, or −Inf.
func (b Ball) Lower() *big.Float {
	z := new(big.Float).SetPrec(b.Prec() + 64).SetMode(big.ToNegativeInf)
	return z.Sub(&b.mid, b.rad.float())
}

// magnitudeUp bounds |x| for every x in the ball from above, magnitudeDown from
// below.
func (b Ball) magnitudeUp() magnitude {
	_, upper := magnitudeOf(&b.mid)
	return upper.addUp(b.rad)
}

func (b Ball) magnitudeDown() magnitude {
	lower, _ := magnitudeOf(&b.mid)
	return lower.subDown(b.rad)
}

// Sign returns the sign of every number in the ball: −1, 0 or 1, and whether
// they all have it.
func (b Ball) Sign() (sign int, decided bool) {
	s := b.mid.Sign()
	if b.rad.isZero() {
		return s, true
	}
	if s == 0 {
		return 0, false
	}
	lower, upper := magnitudeOf(&b.mid)
	if lower.cmp(b.rad) > 0 {
		return s, true
	}
	if upper.cmp(b.rad) < 0 || b.rad.isInfinite() {
		return 0, false
	}
	var abs big.Float
	if abs.Abs(&b.mid).Cmp(b.rad.float()) > 0 {
		return s, true
	}
	return 0, false
}

// ContainsZero tells whether 0 lies in the ball.
func (b Ball) ContainsZero() bool {
	sign, decided := b.Sign()
	return !decided || sign == 0
}

// Cmp compares every number of b with every number of y: the sign of the
// difference, and whether it is the same for all.
func (b Ball) Cmp(y Ball) (order int, decided bool) {
	if !b.IsFinite() || !y.IsFinite() {
		return 0, false
	}
	switch {
	case b.rad.isZero() && y.rad.isZero():
		return b.mid.Cmp(&y.mid), true
	case b.Upper().Cmp(y.Lower()) < 0:
		return -1, true
	case b.Lower().Cmp(y.Upper()) > 0:
		return 1, true
	}
	return 0, false
}

// Overlaps tells whether b and y may have a number in common.
func (b Ball) Overlaps(y Ball) bool {
	order, decided := b.Cmp(y)
	return !decided || order == 0
}

// Contains tells whether r lies in the ball.
func (b Ball) Contains(r *big.Rat) bool {
	if !b.IsFinite() {
		return true
	}
	d := b.MidRat()
	d.Sub(r, d)
	return d.Abs(d).Cmp(b.rad.rat()) <= 0
}

// ContainsBall tells whether every number of y lies in b.
func (b Ball) ContainsBall(y Ball) bool {
	if !b.IsFinite() {
		return true
	}
	if !y.IsFinite() {
		return false
	}
	d := b.MidRat()
	d.Sub(y.MidRat(), d)
	d.Abs(d)
	d.Add(d, y.rad.rat())
	return d.Cmp(b.rad.rat()) <= 0
}

// Union returns a ball that holds both b and y: the hull.
func (b Ball) Union(y Ball) Ball {
	prec := resultPrecision(&b, &y)
	if !b.IsFinite() || !y.IsFinite() {
		return wholeLine(prec)
	}
	lower, upper := b.Lower(), b.Upper()
	if l := y.Lower(); l.Cmp(lower) < 0 {
		lower = l
	}
	if u := y.Upper(); u.Cmp(upper) > 0 {
		upper = u
	}
	return hull(lower, upper, prec)
}

// Hull returns a ball that holds every number from lower to upper.
func Hull(lower, upper *big.Float, prec uint) Ball {
	if lower.IsInf() || upper.IsInf() {
		return wholeLine(prec)
	}
	if lower.Cmp(upper) > 0 {
		lower, upper = upper, lower
	}
	return hull(lower, upper, clampPrecision(prec))
}

// hull sets the midpoint near the middle and measures the radius from there.
func hull(lower, upper *big.Float, prec uint) Ball {
	var z Ball
	z.mid.SetPrec(prec).Add(lower, upper)
	z.mid.SetMantExp(&z.mid, -1)
	up := new(big.Float).SetPrec(MinPrecision).SetMode(big.ToPositiveInf)
	_, above := magnitudeOfAny(up.Sub(upper, &z.mid))
	_, below := magnitudeOfAny(new(big.Float).SetPrec(MinPrecision).SetMode(big.ToPositiveInf).Sub(&z.mid, lower))
	z.rad = above.max(below)
	if z.mid.IsInf() {
		return wholeLine(prec)
	}
	return z.widthChecked()
}

// RelativeBits returns how many leading bits of the ball's numbers are decided:
// the floor of log2(|midpoint|/radius), a very large number for an exact ball
// and 0 or less for one that may hold zero.
func (b Ball) RelativeBits() int64 {
	if b.rad.isZero() {
		return 1 << 40
	}
	lower, _ := magnitudeOf(&b.mid)
	if lower.isZero() || b.rad.isInfinite() {
		return 0
	}
	return lower.e - b.rad.e - 1
}
