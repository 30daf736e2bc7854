package float

import (
	"math"
	"math/big"
)

// double is an unevaluated sum hi + lo of two float64 with |lo| ≤ ulp(hi)/2:
// a number of about 106 bits (T. J. Dekker, A floating-point technique for
// extending the available precision, Numer. Math. 18 (1971)).
type double struct{ hi, lo float64 }

// unit is half the distance from 1 to the next float64: the relative error of
// a rounded operation.
const unit = 1.0 / (1 << 53)

// unit2 bounds the relative error of the operations on doubles below. The
// sharp bounds are below 2^-102 (M. Joldes, J.-M. Muller, V. Popescu, Tight and
// rigorous error bounds for basic building blocks of double-word arithmetic,
// ACM Trans. Math. Softw. 44 (2017)).
const unit2 = 1.0 / (1 << 50) / (1 << 50)

// doubleOf rounds a rational number; ok is false where it is out of the range
// in which the pair keeps its precision. A number too small for it becomes 0.
func doubleOf(r *big.Rat) (d double, ok bool) {
	num, den := r.Num(), r.Denom()
	if num.BitLen() <= 53 && den.BitLen() <= 53 {
		// The remainder num − hi·den is a float64.
		a, b := float64(num.Int64()), float64(den.Int64())
		hi := a / b
		return double{hi, math.FMA(-hi, b, a) / b}, true
	}
	hi, whole := r.Float64()
	if math.Abs(hi) > largest {
		return double{}, false
	}
	if whole || math.Abs(hi) < smallest {
		return double{hi, 0}, true
	}
	rest := new(big.Rat).SetFloat64(hi)
	lo, _ := rest.Sub(r, rest).Float64()
	return double{hi, lo}, true
}

// Values beyond largest are refused, and what is below smallest carries no
// relative bound: absolute bounds never go below floor.
const (
	largest  = 1e150
	smallest = 1e-200
	floor    = 1e-280
)

// twoSum returns a + b and its rounding error (D. E. Knuth, The Art of Computer
// Programming, vol. 2).
func twoSum(a, b float64) (s, e float64) {
	s = a + b
	t := s - a
	return s, (a - (s - t)) + (b - t)
}

// twoProduct returns a·b and its rounding error.
func twoProduct(a, b float64) (p, e float64) {
	p = a * b
	return p, math.FMA(a, b, -p)
}

// quickTwoSum is twoSum for |a| ≥ |b|.
func quickTwoSum(a, b float64) (s, e float64) {
	s = a + b
	return s, b - (s - a)
}

func (d double) plus(e double) double {
	s, t := twoSum(d.hi, e.hi)
	u, v := twoSum(d.lo, e.lo)
	t += u
	s, t = quickTwoSum(s, t)
	t += v
	s, t = quickTwoSum(s, t)
	return double{s, t}
}

func (d double) neg() double { return double{-d.hi, -d.lo} }

func (d double) times(e double) double {
	p, t := twoProduct(d.hi, e.hi)
	t += d.hi*e.lo + d.lo*e.hi
	p, t = quickTwoSum(p, t)
	return double{p, t}
}

// scaled returns d·x.
func (d double) scaled(x float64) double {
	p, t := twoProduct(d.hi, x)
	t += d.lo * x
	p, t = quickTwoSum(p, t)
	return double{p, t}
}

func (d double) value() float64 { return d.hi + d.lo }
