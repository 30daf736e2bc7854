package number

import (
	"math"
	"math/big"
)

// expStep is the spacing exponent of the table of exponentials: 2^-6.
const (
	expStep  = 6
	expTable = 24 // covers |t| ≤ 0.375, above ln 2/2 = 0.3466
)

// expTables holds exp(i/64) for |i| ≤ expTable at index i+expTable, in fixed
// point, to within two ulps.
var expTables = constantCache[[]*big.Int]{compute: computeExpTable}

// computeExpTable multiplies exp(±1/64) up with 64 bits to spare: the error
// after i steps is at most 1.5^i·(i·(2w+8)) < 2^14·24·(2w+8) spare ulps, less
// than one ulp for w below 2^40.
func computeExpTable(w uint) []*big.Int {
	const spare = 64
	wide := w + spare
	table := make([]*big.Int, 2*expTable+1)
	for _, sign := range []int64{1, -1} {
		u := big.NewInt(sign)
		u.Lsh(u, wide-expStep)
		step, _ := expSeries(u, wide)
		value := new(big.Int).Lsh(big.NewInt(1), wide)
		scratch := new(big.Int)
		for i := int64(0); i <= expTable; i++ {
			table[expTable+sign*i] = roundShift(value, spare)
			mulShift(value, value, step, scratch, wide)
		}
	}
	return table
}

// expSeries returns exp(u) in fixed point for |u| ≤ 2^-6, and a bound of its
// error in ulps beside that of u. Term j is ⌊term·u·2^-w⌋ quotient j: with an
// error below 2 ulps in the term before, (2·2^-6+1)/j+1 ≤ 2. The loop ends when
// a term is zero; then the true term is below 2 ulps and the rest of the series
// below a fiftieth of it. N terms: 2N+3 ulps.
func expSeries(u *big.Int, w uint) (sum *big.Int, errors uint64) {
	sum = new(big.Int).Lsh(big.NewInt(1), w)
	sum.Add(sum, u)
	term, scratch, divisor := new(big.Int).Set(u), new(big.Int), new(big.Int)
	j := int64(2)
	for ; ; j++ {
		mulShift(term, term, u, scratch, w)
		if term.BitLen() <= 1 && term.Sign() <= 0 { // 0, or −1 from rounding down
			break
		}
		term.Quo(term, divisor.SetInt64(j))
		if term.Sign() == 0 {
			break
		}
		sum.Add(sum, term)
	}
	return sum, 2*uint64(j) + 3
}

// Exp returns e^b. The midpoint m is written k ln 2 + i/64 + u and e^m taken as
// 2^k·E_i·exp(u); for the radius, |e^(m+d) − e^m| ≤ e^m (e^r − 1).
func (b Ball) Exp() Ball {
	prec := b.Prec()
	if !b.IsFinite() {
		return wholeLine(prec)
	}
	z := expMidpoint(&b.mid, prec)
	if b.rad.m != 0 {
		z.rad = z.rad.addUp(z.magnitudeUp().mulUp(b.rad.expm1Up()))
	}
	return z.widthChecked()
}

// expMidpoint returns a ball around e^m for the number m, with a relative radius
// near 2^-prec.
//
// Errors, in ulps of 2^-w: m is cut to W = w+max(e,0)+2 bits (1 ulp of 2^-W) and
// k ln 2 subtracted (|k| ulps of 2^-W); as |k| ≤ 1.45·2^e+1 that is below one
// ulp, and cutting t to w bits costs another: 2. The series adds 2N+3 to
// e^u ≤ 1.02, the table 2 to E_i ≤ 1.46, the product 1:
// 1.46·(2N+3+2·1.02) + 1.02·2 + 1 + slack ≤ 3N + 12.
func expMidpoint(m *big.Float, prec uint) Ball {
	e := m.MantExp(nil)
	switch {
	case m.Sign() == 0:
		return BallFromInt(1, prec)
	case e < -int(prec)-1:
		// |e^m − 1| ≤ 2|m| < 2^(e+1)
		z := BallFromInt(1, prec)
		z.rad = powerOfTwo(int64(e) + 1)
		return z
	case e > 29 && m.Sign() > 0: // e^m ≥ 2^(2^29)
		return wholeLine(prec)
	case e > 29:
		z := Ball{rad: powerOfTwo(-midExponent)}
		z.mid.SetPrec(prec)
		return z
	}
	w := roundWords(prec + guardBits(prec))
	wide := w + uint(max(e, 0)) + 2
	t := fixed(m, wide)
	approximate, _ := m.Float64()
	k := math.Round(approximate / math.Ln2)
	if k != 0 {
		multiple := big.NewInt(int64(k))
		t.Sub(t, multiple.Mul(multiple, fixedLn2(wide)))
	}
	t.Rsh(t, wide-w)
	i := nearestStep(t, w, expStep)
	step := big.NewInt(i)
	t.Sub(t, step.Lsh(step, w-expStep))
	sum, errors := expSeries(t, w)
	value := mulShift(t, sum, expTables.at(w)[expTable+i], new(big.Int), w)
	z := ballFromFixed(value, w, 2*errors+12, prec)
	return z.MulPow2(int(k))
}

// nearestStep returns the integer i nearest to t·2^(step−w).
func nearestStep(t *big.Int, w, step uint) int64 {
	top := new(big.Int).Rsh(t, w-step-1)
	return (top.Int64() + 1) >> 1
}

// Log returns the natural logarithm of the ball's points. A ball that reaches 0
// or below gives the whole line. For the radius,
// |log(m+d) − log m| ≤ r/(m−r).
func (b Ball) Log() Ball {
	prec := b.Prec()
	lower, _ := magnitudeOf(&b.mid)
	rest := lower.subDown(b.rad)
	if b.mid.Sign() <= 0 || rest.isZero() || !b.IsFinite() {
		return wholeLine(prec)
	}
	z := logMidpoint(&b.mid, prec)
	if b.rad.m != 0 {
		z.rad = z.rad.addUp(b.rad.divUp(rest))
	}
	return z.widthChecked()
}

// logMidpoint returns a ball around log m with a relative radius near 2^-prec.
// m = f·2^e with √½ ≤ f < √2 (nearly). Near f = 1 with e = 0 the series of
// 2 atanh((f−1)/(f+1)) is used at once; else log f = y + log(f·e^-y) with the
// float64 y next to log f, where f·e^-y − 1 = d is below 2^-40 or so and
// log(1+d) = 2 atanh(d/(2+d)). All steps are done with balls at a precision
// that leaves room for the loss in d, so nothing is assumed about y.
func logMidpoint(m *big.Float, prec uint) Ball {
	var f Ball
	f.mid.SetPrec(prec)
	e := m.MantExp(&f.mid)
	leading, _ := f.mid.Float64()
	if leading < math.Sqrt2/2 {
		f.mid.SetMantExp(&f.mid, 1)
		leading *= 2
		e--
	}
	wide := clampPrecision(prec + 32)
	one := BallFromInt(1, wide)
	if e == 0 && math.Abs(leading-1) < 1.0/(1<<20) {
		d := f.Sub(BallFromInt(1, prec)).WithPrecision(wide) // exact: ½ ≤ f ≤ 2
		return d.Quo(d.Add(one).Add(one)).atanhSeries(1).MulPow2(1).WithPrecision(prec)
	}
	y := BallFromFloat64(math.Log(leading), wide)
	// |log f| ≥ 2^-21 unless e ≠ 0, so 32 bits more keep the relative error.
	d := f.Mul(y.Neg().Exp()).Sub(one)
	z := d.Quo(d.Add(one).Add(one)).atanhSeries(1).MulPow2(1).Add(y)
	if e != 0 {
		z = z.Add(ln2Ball(wide + 32).MulInt(int64(e)))
	}
	return z.WithPrecision(prec)
}

// atanhSeries returns Σ sign^j b^(2j+1)/(2j+1): atanh for sign 1 and atan for
// sign −1. For |b| = q ≤ 1/2 the terms from j = J on amount to less than
// 2·q^(2J+1)/(2J+1), as each is at most a quarter of the one before. Beyond 1/2
// the whole line is returned; the callers see to small arguments.
func (b Ball) atanhSeries(sign int) Ball {
	prec := b.Prec()
	q := b.magnitudeUp()
	if q.cmp(powerOfTwo(-1)) > 0 {
		return wholeLine(prec)
	}
	if b.isPointZero() {
		return b
	}
	square := b.Mul(b)
	power, sum := b, b
	bound, squareBound := q, q.mulUp(q)
	least := b.magnitudeUp().scale(-int64(prec) - 2)
	for j := int64(1); ; j++ {
		bound = bound.mulUp(squareBound)
		if rest := bound.scale(1).divUp(wholeUp(uint64(2*j+1), 0)); rest.cmp(least) < 0 || j > int64(prec) {
			sum.rad = sum.rad.addUp(rest)
			return sum.widthChecked()
		}
		power = power.Mul(square)
		term := power.Quo(BallFromInt(2*j+1, MinPrecision))
		if sign < 0 && j&1 == 1 {
			term = term.Neg()
		}
		sum = sum.Add(term)
	}
}

// Log10 returns the decimal logarithm.
func (b Ball) Log10() Ball {
	return b.Log().Quo(BallFromInt(10, b.Prec()+MinPrecision).Log()).WithPrecision(b.Prec())
}
