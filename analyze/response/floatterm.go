package response

import (
	"math"
	"math/big"

	"portlight/dialect/number"
)

// unit is the relative error of one rounding in float64.
const unit = 1.0 / (1 << 53)

// floatSum is a sum in float64 with bounds of what that leaves out. Poles are
// kept as unevaluated sums of two float64 so that their product with a time
// has no more than a rounding of its own size, however many cycles have passed.
type floatSum struct {
	terms []floatTerm
	// rate is the largest |p|; slow the largest real part of the terms that
	// are neither constant nor on the axis.
	rate float64
}

// floatTerm is Re(Σ c[m]·τ^m·e^{pτ}), the factor two of conjugate pairs in c.
type floatTerm struct {
	real, zero, axis bool
	sigma, sigmaLow  float64
	omega, omegaLow  float64
	re, im           []float64
	size             []float64 // upper bounds of |c[m]|
	rate             float64   // upper bound of |p|
	sigmaUpper       float64   // upper bound of Re p
	frequency        *big.Rat  // rational ω on the axis, when known
}

// rangeError: a coefficient or pole is outside the range of float64.
type rangeError struct{}

func (rangeError) Error() string { return "a pole or coefficient is outside the range of float64" }

// toFloat rounds a sum to float64.
func (x *sum) toFloat() (*floatSum, error) {
	out := &floatSum{}
	for _, t := range x.terms {
		f := floatTerm{real: t.pole.real, zero: t.pole.zero, axis: t.pole.axis, frequency: t.pole.omega}
		f.sigma, f.sigmaLow = twoFloats(t.pole.p.Re)
		f.omega, f.omegaLow = twoFloats(t.pole.p.Im)
		if f.axis {
			f.sigma, f.sigmaLow = 0, 0
		}
		if !f.zero {
			f.rate = upperFloat(t.pole.p.Abs())
		}
		f.sigmaUpper = f.sigma
		if !f.axis {
			up, _ := t.pole.p.Re.Upper().Float64()
			f.sigmaUpper = math.Nextafter(up, math.Inf(1))
		}
		for _, c := range t.c {
			if !t.pole.real {
				c = c.MulPow2(1)
			}
			f.re = append(f.re, c.Re.MidFloat64())
			f.im = append(f.im, c.Im.MidFloat64())
			f.size = append(f.size, upperFloat(c.Abs()))
		}
		if !f.usable() {
			return nil, rangeError{}
		}
		out.rate = math.Max(out.rate, f.rate)
		out.terms = append(out.terms, f)
	}
	return out, nil
}

// usable tells whether everything is well inside float64's range.
func (f *floatTerm) usable() bool {
	ok := f.rate < 1e250
	for _, s := range f.size {
		ok = ok && s < 1e250
	}
	return ok
}

// twoFloats splits a midpoint into two float64.
func twoFloats(b number.Ball) (hi, lo float64) {
	mid := b.Mid()
	hi, _ = mid.Float64()
	lo, _ = mid.Sub(mid, new(big.Float).SetFloat64(hi)).Float64()
	return hi, lo
}

// upperFloat is an upper bound of the numbers of a non-negative ball.
func upperFloat(b number.Ball) float64 {
	if b.IsExact() && b.ContainsZero() {
		return 0
	}
	f, _ := b.Upper().Float64()
	return math.Nextafter(f, math.Inf(1))
}

// exponential returns e^{pτ} for τ = t + low. Its relative error is below
// exponentialUnits units: the products are exact up to 2^-100 of themselves
// (FMA), e^x and the sine and cosine are right to one unit each in size, the
// first-order corrections add one each.
func (f *floatTerm) exponential(t, low float64) (re, im float64) {
	re = 1
	if f.sigma != 0 {
		x := f.sigma * t
		rest := math.FMA(f.sigma, t, -x) + f.sigmaLow*t + f.sigma*low
		re = math.Exp(x)
		re += re * rest
	}
	if f.real {
		return re, 0
	}
	x := f.omega * t
	rest := math.FMA(f.omega, t, -x) + f.omegaLow*t + f.omega*low
	sin, cos := math.Sincos(x)
	if math.Abs(rest) < 1e-8 {
		sin, cos = sin+rest*cos, cos-rest*sin
	} else {
		s, c := math.Sincos(rest)
		sin, cos = sin*c+s*cos, cos*c-s*sin
	}
	return re * cos, re * sin
}

// exponentialUnits bounds the relative error of exponential in units of 2^-53.
// The library's exponential, sine and cosine are right to one unit in the last
// place, two units of the value; each correction adds one rounding, the products
// one more: 3 + 3 + 1, and one for terms of second order. A test compares with
// balls.
const exponentialUnits = 8

// phaseUnits is what a long time adds to exponentialUnits: the low parts of the
// products are themselves off by two units each, which matters from about 10^15
// radians on.
func (f *floatTerm) phaseUnits(tau float64) float64 {
	x := f.rate * tau * unit
	return 8 * x
}

// coefficient is Σ c[m]·τ^m.
func (f *floatTerm) coefficient(tau float64) (re, im float64) {
	n := len(f.re) - 1
	re, im = f.re[n], f.im[n]
	for m := n - 1; m >= 0; m-- {
		re, im = re*tau+f.re[m], im*tau+f.im[m]
	}
	return re, im
}

// bound is an upper bound of |Σ c[m] τ^m e^{pτ}| for τ in [a, b]; b may be
// infinite. Each τ^m·e^{στ} rises until m/(−σ) and falls from there.
func (f *floatTerm) bound(a, b float64) float64 {
	total := 0.0
	for m, size := range f.size {
		if size == 0 {
			continue
		}
		at := b
		if f.sigmaUpper < 0 {
			at = math.Min(b, math.Max(a, -float64(m)/f.sigmaUpper))
		} else if f.sigmaUpper == 0 && m == 0 {
			at = a
		}
		total += size * powerExp(at, m, f.sigmaUpper)
	}
	return total*(1+4096*unit) + leastBound
}

// leastBound stands for what underflows in a bound.
const leastBound = 1e-300

// powerExp is τ^m·e^{στ} to 4000 units: the rounding of the exponent, at most
// 745 in size where the result does not underflow, counts most.
func powerExp(tau float64, m int, sigma float64) float64 {
	if math.IsInf(tau, 1) {
		switch {
		case sigma < 0:
			return 0
		case sigma == 0 && m == 0:
			return 1
		}
		return tau
	}
	p := 1.0
	for range m {
		p *= tau
	}
	if sigma == 0 {
		return p
	}
	return p * math.Exp(sigma*tau)
}
