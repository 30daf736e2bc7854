package exact

import (
	"math"
	"math/cmplx"
)

// wide is x·2^k: a complex128 whose exponent does not end at ±1022. Corrections
// are as small as the precision asked for and their inverses as large.
type wide struct {
	x complex128
	k int
}

// normal brings the larger part of x into ±[½, 1), but for 0 and what is not
// finite.
func (a wide) normal() wide {
	size := math.Max(math.Abs(real(a.x)), math.Abs(imag(a.x)))
	if size == 0 || math.IsNaN(size) || math.IsInf(size, 0) {
		return a
	}
	_, e := math.Frexp(size)
	return wide{complex(math.Ldexp(real(a.x), -e), math.Ldexp(imag(a.x), -e)), a.k + e}
}

// float returns the number as a complex128, 0 or infinite where it is out of
// range.
func (a wide) float() complex128 {
	return complex(math.Ldexp(real(a.x), a.k), math.Ldexp(imag(a.x), a.k))
}

// log returns log2 of the magnitude.
func (a wide) log() float64 { return math.Log2(cmplx.Abs(a.x)) + float64(a.k) }

// add returns a + b, either being normal.
func (a wide) add(b wide) wide {
	switch {
	case a.x == 0:
		return b
	case b.x == 0:
		return a
	}
	if a.k < b.k {
		a, b = b, a
	}
	b.k -= a.k
	return wide{a.x + b.float(), a.k}.normal()
}

// inverse returns 1/a.
func (a wide) inverse() wide { return wide{1 / a.x, -a.k}.normal() }

func (a wide) neg() wide { return wide{-a.x, a.k} }
