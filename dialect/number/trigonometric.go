package number

import (
	"math"
	"math/big"
)

const (
	sineStep  = 6
	sineTable = 52 // covers |t| ≤ 0.8125, above π/4 = 0.7854
)

// sineCosine holds sin(i/64) and cos(i/64) in fixed point.
type sineCosine struct{ sin, cos *big.Int }

var sineTables = constantCache[[]sineCosine]{compute: computeSineTable}

// computeSineTable turns step by step by 1/64 with 64 bits to spare. One step
// adds to the error of each part at most that of the step's sine and cosine
// (2w+8 spare ulps each) and 2: below 52·(4w+20)·2 spare ulps in the end, less
// than one ulp, and rounding half of one: the entries are within two ulps.
func computeSineTable(w uint) []sineCosine {
	const spare = 64
	wide := w + spare
	u := big.NewInt(1)
	step, _ := sineSeries(u.Lsh(u, wide-sineStep), wide)
	s, c := new(big.Int), new(big.Int).Lsh(big.NewInt(1), wide)
	table := make([]sineCosine, sineTable+1)
	for i := range table {
		table[i] = sineCosine{roundShift(s, spare), roundShift(c, spare)}
		turned := turn(sineCosine{s, c}, step, wide)
		s, c = turned.sin, turned.cos
	}
	return table
}

// turn returns sine and cosine of the sum of two angles, each off by at most
// the sum of the four errors of the parts (all parts being at most 1 in
// magnitude), and one ulp for rounding.
func turn(a, b sineCosine, w uint) sineCosine {
	x, y := new(big.Int).Mul(a.sin, b.cos), new(big.Int).Mul(a.cos, b.sin)
	s := x.Rsh(x.Add(x, y), w)
	x2, y2 := new(big.Int).Mul(a.cos, b.cos), y.Mul(a.sin, b.sin)
	return sineCosine{s, x2.Rsh(x2.Sub(x2, y2), w)}
}

// sineSeries returns sin u and cos u for 0 ≤ |u| ≤ 2^-6 and a bound of the error
// of each in ulps beside that of u. u² is off by 1 ulp; a term is
// ⌊term·u²·2^-w⌋ over j(j+1), off by less than 2 ulps as for the exponential.
// The series alternate with falling terms, so that the remainder is below the
// first term left out, which is below 2 ulps. N terms: 2N+3.
func sineSeries(u *big.Int, w uint) (value sineCosine, errors uint64) {
	scratch := new(big.Int)
	square := mulShift(new(big.Int), u, u, scratch, w)
	sum := func(first *big.Int, j int64) (*big.Int, uint64) {
		total, term, divisor := new(big.Int).Set(first), new(big.Int).Abs(first), new(big.Int)
		negative := first.Sign() < 0
		count := uint64(1)
		for flip := !negative; ; flip = !flip {
			mulShift(term, term, square, scratch, w)
			term.Quo(term, divisor.SetInt64(j*(j+1)))
			if term.Sign() == 0 {
				return total, 2*count + 3
			}
			if flip {
				total.Sub(total, term)
			} else {
				total.Add(total, term)
			}
			j += 2
			count++
		}
	}
	var es, ec uint64
	value.sin, es = sum(u, 2)
	value.cos, ec = sum(new(big.Int).Lsh(big.NewInt(1), w), 1)
	return value, max(es, ec)
}

// Sin returns the sine.
func (b Ball) Sin() Ball { s, _ := b.SinCos(); return s }

// Cos returns the cosine.
func (b Ball) Cos() Ball { _, c := b.SinCos(); return c }

// SinCos returns sine and cosine. For the radius, |sin(m+d) − sin m| is at most
// r, and at most |cos m| r + r²/2; likewise for the cosine. The values never
// leave [−1, 1].
func (b Ball) SinCos() (sin, cos Ball) {
	prec := b.Prec()
	if b.isPointZero() {
		return BallFromInt(0, prec), BallFromInt(1, prec)
	}
	e := int64(b.mid.MantExp(nil))
	if !b.IsFinite() || b.rad.cmp(powerOfTwo(1)) > 0 || (e > sineExponent && e > 4*int64(prec)) {
		unit := Ball{rad: powerOfTwo(0)}
		unit.mid.SetPrec(prec)
		return unit, unit
	}
	sin, cos = sinCosMidpoint(&b.mid, prec)
	if b.rad.m != 0 {
		half := b.rad.mulUp(b.rad).scale(-1)
		sinRad := cos.magnitudeUp().mulUp(b.rad).addUp(half).min(b.rad)
		cosRad := sin.magnitudeUp().mulUp(b.rad).addUp(half).min(b.rad)
		sin.rad = sin.rad.addUp(sinRad)
		cos.rad = cos.rad.addUp(cosRad)
	}
	return sin, cos
}

// sineExponent: arguments beyond 2^sineExponent and 2^(4·precision) are not
// reduced; their sine is only known to lie in [−1, 1].
const sineExponent = 4096

// sinCosMidpoint returns balls around sin m and cos m with relative radii near
// 2^-prec, also next to the zeros of either.
//
// Write m = kπ/2 + t. Errors in ulps of 2^-w: with W = w+max(e,0)+2 bits for m
// and π/2, cutting m costs 1 and k·π/2 costs |k|/2+… ≤ 0.64·2^e+1 ulps of 2^-W:
// below one ulp; cutting t another: 2. The table entry is within 2, the series
// within E: turn adds 2·2 + 2·E + 1; with the 2 of t: 2E + 7. If t has lost
// bits (m next to a multiple of π/2), the work is repeated with that many more.
func sinCosMidpoint(m *big.Float, prec uint) (sin, cos Ball) {
	e := m.MantExp(nil)
	if 2*e <= -int(prec)-8 {
		// |sin m − m| ≤ |m|³/6 and |cos m − 1| ≤ m²/2, with |m| < 2^e.
		sin.mid.SetPrec(prec).Set(m)
		sin.rad = powerOfTwo(3*int64(e) - 2)
		cos = BallFromInt(1, prec)
		cos.rad = powerOfTwo(2*int64(e) - 1)
		return sin, cos
	}
	for extra, tries := uint(0), 0; ; tries++ {
		w := roundWords(prec + guardBits(prec) + extra)
		k, t := reduceHalfPi(m, e, w)
		lost := w - uint(min(t.BitLen(), int(w)))
		if tries < 3 && lost > extra+8 && extra < 8*prec+256 {
			extra = lost + uint(tries)*prec
			continue
		}
		negative := t.Sign() < 0
		t.Abs(t)
		i := nearestStep(t, w, sineStep)
		step := big.NewInt(i)
		t.Sub(t, step.Lsh(step, w-sineStep))
		value, errors := sineSeries(t, w)
		value = turn(sineTables.at(w)[i], value, w)
		if negative {
			value.sin.Neg(value.sin)
		}
		s := ballFromFixed(value.sin, w, 2*errors+7, prec)
		c := ballFromFixed(value.cos, w, 2*errors+7, prec)
		switch k {
		case 0:
			return s, c
		case 1:
			return c, s.Neg()
		case 2:
			return s.Neg(), c.Neg()
		}
		return c.Neg(), s
	}
}

// reduceHalfPi returns k modulo 4 and t with m = kπ/2 + t·2^-w, |t·2^-w| ≤ π/4
// and a little.
func reduceHalfPi(m *big.Float, e int, w uint) (quadrant uint, t *big.Int) {
	wide := w + uint(max(e, 0)) + 2
	t = fixed(m, wide)
	if e < 0 { // |m| < 1/2
		return 0, t.Rsh(t, wide-w)
	}
	pi := fixedPi(wide) // also 2·(π/2)
	// k = round(2t/π) = ⌊(4t + π)/(2π)⌋
	k := new(big.Int).Lsh(t, 2)
	k.Add(k, pi)
	k.Div(k, new(big.Int).Lsh(pi, 1))
	t.Lsh(t, 1)
	t.Sub(t, new(big.Int).Mul(k, pi))
	t.Rsh(t, wide-w+1)
	return uint(new(big.Int).And(k, big.NewInt(3)).Int64()), t
}

// Tan returns the tangent; the whole line where the cosine may be zero.
func (b Ball) Tan() Ball {
	s, c := b.SinCos()
	return s.Quo(c)
}

// Atan returns the angle from −π/2 to π/2 whose tangent is b.
func (b Ball) Atan() Ball { return b.Atan2(BallFromInt(1, b.Prec())) }

// halfPiUp is above π/2 = 3373259426.27…·2^-31.
var halfPiUp = magnitude{3373259427, -31}

// Atan2 returns the angle of the point (x, b), b being the ordinate, in
// (−π, π]. If the two balls may hold the origin the answer is [−π, π], and also
// if they touch both sides of the negative real axis, where the angle jumps.
//
// With r = √(rx²+ry²) ≤ rx+ry and the midpoint at the distance ρ, the angle
// changes by at most asin(r/ρ) ≤ (π/2)·r/ρ.
func (b Ball) Atan2(x Ball) Ball {
	prec := resultPrecision(&b, &x)
	if !b.IsFinite() || !x.IsFinite() {
		return anyAngle(prec)
	}
	if b.ContainsZero() {
		sign, decided := x.Sign()
		if !decided || sign == 0 || (sign < 0 && !b.isPointZero()) {
			return anyAngle(prec)
		}
	}
	z := atan2Midpoint(&b.mid, &x.mid, prec)
	if b.rad.m|x.rad.m != 0 {
		yl, _ := magnitudeOf(&b.mid)
		xl, _ := magnitudeOf(&x.mid)
		r := b.rad.max(x.rad)
		if b.rad.m != 0 && x.rad.m != 0 {
			r = b.rad.mulUp(b.rad).addUp(x.rad.mulUp(x.rad)).sqrtUp()
		}
		turned := r.divUp(yl.max(xl)).mulUp(halfPiUp)
		if turned.cmp(halfPiUp) >= 0 { // r/ρ may reach 1
			return anyAngle(prec)
		}
		z.rad = z.rad.addUp(turned)
	}
	return z
}

// anyAngle is a ball that holds [−π, π].
func anyAngle(prec uint) Ball {
	z := Ball{rad: halfPiUp.scale(1)}
	z.mid.SetPrec(prec)
	return z
}

// atan2Midpoint returns a ball around the angle of (x, y) ≠ (0, 0).
//
// Where one part is below 2^-24 of the other the series of atan is used on the
// quotient. Else the float64 angle θ next to the true one is taken as exact, the
// point turned back by it, and the small angle that is left, atan of
// (y cos θ − x sin θ)/(x cos θ + y sin θ), added. All with balls.
func atan2Midpoint(ym, xm *big.Float, prec uint) Ball {
	wide := clampPrecision(prec + 40)
	var y, x Ball
	y.mid.SetPrec(wide).Set(ym)
	x.mid.SetPrec(wide).Set(xm)
	switch {
	case ym.Sign() == 0 && xm.Sign() > 0:
		return BallFromInt(0, prec)
	case ym.Sign() == 0:
		return PiBall(prec)
	case xm.Sign() == 0:
		return withSign(PiBall(prec).MulPow2(-1), ym.Sign())
	}
	ye, xe := ym.MantExp(nil), xm.MantExp(nil)
	switch {
	case ye < xe-24:
		z := y.Quo(x).atanhSeries(-1)
		if xm.Sign() < 0 {
			z = z.Add(withSign(PiBall(wide), ym.Sign()))
		}
		return z.WithPrecision(prec)
	case xe < ye-24:
		quarter := withSign(PiBall(wide).MulPow2(-1), ym.Sign())
		return quarter.Sub(x.Quo(y).atanhSeries(-1)).WithPrecision(prec)
	}
	y, x = y.MulPow2(-ye), x.MulPow2(-ye)
	yf, _ := y.mid.Float64()
	xf, _ := x.mid.Float64()
	theta := BallFromFloat64(math.Atan2(yf, xf), wide)
	s, c := theta.SinCos()
	across := y.Mul(c).Sub(x.Mul(s))
	along := x.Mul(c).Add(y.Mul(s))
	return theta.Add(across.Quo(along).atanhSeries(-1)).WithPrecision(prec)
}

func withSign(b Ball, sign int) Ball {
	if sign < 0 {
		return b.Neg()
	}
	return b
}
