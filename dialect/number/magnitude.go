package number

import (
	"math"
	"math/big"
	"math/bits"
)

// magnitude is a non-negative number m·2^e used for radii and error bounds:
// m is 0 or has exactly 32 significant bits. Functions named …Up return a value
// that is not less than the true result, functions named …Down one that is not
// greater.
type magnitude struct {
	m uint64
	e int64
}

const (
	magnitudeBits = 32
	// Exponents at or above infiniteExponent mean "no bound".
	infiniteExponent = int64(1) << 60
	// Smaller exponents are rounded up to this one.
	leastExponent = -(int64(1) << 58)
)

var infiniteMagnitude = magnitude{1 << 31, infiniteExponent}

func (a magnitude) isZero() bool     { return a.m == 0 }
func (a magnitude) isInfinite() bool { return a.e >= infiniteExponent-64 }

// powerOfTwo returns 2^e.
func powerOfTwo(e int64) magnitude { return settle(magnitude{1 << 31, e - 31}) }

// wholeUp returns n·2^e, rounded up.
func wholeUp(n uint64, e int64) magnitude {
	if n == 0 {
		return magnitude{}
	}
	shift := bits.Len64(n) - magnitudeBits
	if shift <= 0 {
		return settle(magnitude{n << uint(-shift), e + int64(shift)})
	}
	m := n >> uint(shift)
	if m<<uint(shift) != n {
		m++
	}
	return carry(m, e+int64(shift))
}

// carry mends a mantissa that has been rounded up to 2^32.
func carry(m uint64, e int64) magnitude {
	if m == 1<<32 {
		return settle(magnitude{1 << 31, e + 1})
	}
	return settle(magnitude{m, e})
}

// settle keeps the exponent within its limits, rounding up.
func settle(a magnitude) magnitude {
	if a.m == 0 {
		return magnitude{}
	}
	if a.isInfinite() {
		return infiniteMagnitude
	}
	if a.e < leastExponent {
		return magnitude{1 << 31, leastExponent}
	}
	return a
}

func (a magnitude) addUp(b magnitude) magnitude {
	if a.m == 0 {
		return b
	}
	if b.m == 0 {
		return a
	}
	if a.e < b.e {
		a, b = b, a
	}
	if a.isInfinite() {
		return infiniteMagnitude
	}
	d := a.e - b.e
	var sum uint64
	if d >= magnitudeBits {
		sum = a.m + 1 // b < 2^(b.e+32) ≤ 2^a.e
	} else {
		sum = a.m + (b.m+(1<<uint(d))-1)>>uint(d)
	}
	if sum >= 1<<32 {
		return carry((sum+1)>>1, a.e+1)
	}
	return magnitude{sum, a.e}
}

// addDown returns a lower bound of a+b.
func (a magnitude) addDown(b magnitude) magnitude {
	if a.m == 0 {
		return b
	}
	if b.m == 0 {
		return a
	}
	if a.e < b.e {
		a, b = b, a
	}
	d := a.e - b.e
	if d >= magnitudeBits || a.isInfinite() {
		return a
	}
	sum := a.m + b.m>>uint(d)
	if sum >= 1<<32 {
		return magnitude{sum >> 1, a.e + 1}
	}
	return magnitude{sum, a.e}
}

// subDown returns a lower bound of a−b, or zero where that may be negative.
func (a magnitude) subDown(b magnitude) magnitude {
	if b.m == 0 {
		return a
	}
	if a.m == 0 || b.isInfinite() {
		return magnitude{}
	}
	d := a.e - b.e
	var diff uint64
	var e int64
	switch {
	case d >= magnitudeBits:
		diff, e = (a.m<<1)-1, a.e-1 // b < 2^a.e; the bound a.m−1 is coarse, half a unit is enough for d > 32
		if d == magnitudeBits {
			diff, e = a.m-1, a.e
		}
	case d >= 0:
		left := a.m << uint(d)
		if left <= b.m {
			return magnitude{}
		}
		diff, e = left-b.m, b.e
	case d > -magnitudeBits:
		right := b.m << uint(-d)
		if a.m <= right {
			return magnitude{}
		}
		diff, e = a.m-right, a.e
	default:
		return magnitude{}
	}
	if diff == 0 {
		return magnitude{}
	}
	shift := bits.Len64(diff) - magnitudeBits
	if shift > 0 {
		diff >>= uint(shift)
	} else {
		diff <<= uint(-shift)
	}
	if e+int64(shift) < leastExponent {
		return magnitude{}
	}
	return magnitude{diff, e + int64(shift)}
}

func (a magnitude) mulUp(b magnitude) magnitude {
	if a.m == 0 || b.m == 0 {
		return magnitude{}
	}
	if a.isInfinite() || b.isInfinite() {
		return infiniteMagnitude
	}
	p := a.m * b.m // in [2^62, 2^64)
	if p >= 1<<63 {
		return carry(p>>32+roundUpBit(p, 32), a.e+b.e+32)
	}
	return carry(p>>31+roundUpBit(p, 31), a.e+b.e+31)
}

// roundUpBit is 1 when any of the low n bits of p is set.
func roundUpBit(p uint64, n uint) uint64 {
	if p&(1<<n-1) != 0 {
		return 1
	}
	return 0
}

// divUp returns an upper bound of a/b, where b is a lower bound of the divisor.
func (a magnitude) divUp(b magnitude) magnitude {
	if a.m == 0 && b.m != 0 {
		return magnitude{}
	}
	if b.m == 0 || a.isInfinite() {
		return infiniteMagnitude
	}
	if b.isInfinite() {
		return magnitude{1 << 31, leastExponent}
	}
	numerator := a.m << 32
	q := numerator / b.m // in (2^31, 2^33)
	inexact := q*b.m != numerator
	e := a.e - b.e - 32
	if q >= 1<<32 {
		inexact = inexact || q&1 != 0
		q >>= 1
		e++
	}
	if inexact {
		q++
	}
	return carry(q, e)
}

// scale returns a·2^k.
func (a magnitude) scale(k int64) magnitude {
	if a.m == 0 || a.isInfinite() {
		return a
	}
	return settle(magnitude{a.m, a.e + k})
}

func (a magnitude) sqrtUp() magnitude {
	if a.m == 0 || a.isInfinite() {
		return a
	}
	root, rest, e := a.sqrtParts()
	if rest {
		root++
	}
	return carry(root, e)
}

func (a magnitude) sqrtDown() magnitude {
	if a.m == 0 || a.isInfinite() {
		return a
	}
	root, _, e := a.sqrtParts()
	return magnitude{root, e}
}

// sqrtParts returns the floor of the square root of a scaled to an even
// exponent, whether something was cut off, and the exponent of the root.
func (a magnitude) sqrtParts() (root uint64, rest bool, e int64) {
	shift := uint(32)
	if (a.e-32)&1 != 0 {
		shift = 31
	}
	n := a.m << shift // in [2^62, 2^64)
	root = uint64(math.Sqrt(float64(n)))
	for root > math.MaxUint32 || root*root > n {
		root--
	}
	for root < math.MaxUint32 && (root+1)*(root+1) <= n {
		root++
	}
	return root, root*root != n, (a.e - int64(shift)) / 2
}

func (a magnitude) cmp(b magnitude) int {
	switch {
	case a.m == 0 && b.m == 0:
		return 0
	case a.m == 0:
		return -1
	case b.m == 0:
		return 1
	case a.e != b.e:
		if a.e < b.e {
			return -1
		}
		return 1
	case a.m < b.m:
		return -1
	case a.m > b.m:
		return 1
	}
	return 0
}

func (a magnitude) max(b magnitude) magnitude {
	if a.cmp(b) < 0 {
		return b
	}
	return a
}

func (a magnitude) min(b magnitude) magnitude {
	if a.cmp(b) > 0 {
		return b
	}
	return a
}

// expm1Up bounds e^a − 1. For a ≤ 1 the series gives
// a + a²(1/2 + 1/6 + …) ≤ a + a²(e−2) ≤ a + a²; above, e^a ≤ 2^⌈1.4427 a + …⌉.
func (a magnitude) expm1Up() magnitude {
	if a.cmp(powerOfTwo(0)) <= 0 {
		return a.addUp(a.mulUp(a))
	}
	if a.cmp(powerOfTwo(40)) > 0 {
		return infiniteMagnitude
	}
	return powerOfTwo(int64(math.Ceil(math.Ldexp(float64(a.m), int(a.e))*1.4426950408889637)) + 1)
}

// magnitudeOf returns bounds of |x|; x must be finite. No allocation: the
// shallow copy shares the mantissa, and changing the exponent leaves the
// mantissa alone because precisions are multiples of the word size.
func magnitudeOf(x *big.Float) (lower, upper magnitude) {
	if x.Sign() == 0 {
		return magnitude{}, magnitude{}
	}
	if x.Prec()%64 != 0 {
		return magnitudeOfAny(x)
	}
	e := x.MantExp(nil)
	scaled := *x
	scaled.SetMantExp(&scaled, 64-e)
	if scaled.Signbit() {
		scaled.Neg(&scaled)
	}
	top, accuracy := scaled.Uint64() // the 64 leading bits
	m := top >> 32
	lower = magnitude{m, int64(e) - 32}
	if accuracy == big.Exact && top&(1<<32-1) == 0 {
		return lower, lower
	}
	return lower, carry(m+1, int64(e)-32)
}

func magnitudeOfAny(x *big.Float) (lower, upper magnitude) {
	if x.Sign() == 0 {
		return magnitude{}, magnitude{}
	}
	var mantissa big.Float
	e := x.MantExp(&mantissa)
	mantissa.SetMantExp(&mantissa, 64)
	mantissa.Abs(&mantissa)
	top, _ := mantissa.Uint64()
	return magnitude{top >> 32, int64(e) - 32}, carry(top>>32+1, int64(e)-32)
}

// magnitudeOfInt returns bounds of |n|·2^e.
func magnitudeOfInt(n *big.Int, e int64) (lower, upper magnitude) {
	size := n.BitLen()
	if size == 0 {
		return magnitude{}, magnitude{}
	}
	if size <= 64 {
		a := new(big.Int).Abs(n).Uint64()
		upper = wholeUp(a, e)
		shift := bits.Len64(a) - magnitudeBits
		if shift <= 0 {
			return upper, upper
		}
		return magnitude{a >> uint(shift), e + int64(shift)}, upper
	}
	shift := uint(size - magnitudeBits)
	top := new(big.Int).Rsh(new(big.Int).Abs(n), shift).Uint64()
	return magnitude{top, e + int64(shift)}, carry(top+1, e+int64(shift))
}

// magnitudeOfRat returns bounds of |r|.
func magnitudeOfRat(r *big.Rat) (lower, upper magnitude) {
	if r.Sign() == 0 {
		return magnitude{}, magnitude{}
	}
	nl, nu := magnitudeOfInt(r.Num(), 0)
	dl, du := magnitudeOfInt(r.Denom(), 0)
	return nl.divDown(du), nu.divUp(dl)
}

// divDown returns a lower bound of a/b, where b is an upper bound of the divisor.
func (a magnitude) divDown(b magnitude) magnitude {
	if a.m == 0 || b.m == 0 || b.isInfinite() {
		return magnitude{}
	}
	q := a.m << 32 / b.m
	e := a.e - b.e - 32
	if q >= 1<<32 {
		q >>= 1
		e++
	}
	return magnitude{q, e}
}

// ratExponent keeps the rationals made of magnitudes to a reasonable length.
const ratExponent = 1 << 20

// rat returns the exact value, or an upper bound where that is below
// 2^-ratExponent; the magnitude must be finite.
func (a magnitude) rat() *big.Rat {
	if a.m == 0 {
		return new(big.Rat)
	}
	if a.e < -ratExponent {
		a = magnitude{1 << 31, -ratExponent}
	}
	n := new(big.Int).SetUint64(a.m)
	if a.e >= 0 {
		return new(big.Rat).SetInt(n.Lsh(n, uint(a.e)))
	}
	return new(big.Rat).SetFrac(n, new(big.Int).Lsh(big.NewInt(1), uint(-a.e)))
}

// float returns the exact value as a big.Float, or +Inf.
func (a magnitude) float() *big.Float {
	z := new(big.Float).SetPrec(64).SetUint64(a.m)
	switch {
	case a.m == 0:
		return z
	case a.e > math.MaxInt32-64:
		return z.SetInf(false)
	case a.e < math.MinInt32+64:
		return z.SetMantExp(big.NewFloat(1), math.MinInt32+64)
	}
	return z.SetMantExp(z, int(a.e))
}
