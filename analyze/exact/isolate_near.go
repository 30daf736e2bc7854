package exact

import (
	"math"
	"math/big"
	"math/bits"
)

// nearVariations counts sign variations of a polynomial on intervals with
// coefficients of limited length and a bound on their errors.
//
// For an interval from lo to hi ≤ 2·lo with ρ = (hi − lo)/lo it forms
//
//	aᵢ = cᵢ·loⁱ            rounded to integer multiples of one unit,
//	b  = a shifted by one   (q(lo·(1+y)) = Σ bₖ·yᵏ),
//	b′ₖ = bₖ·ρᵏ             rounded,
//	d  = b′ reversed and shifted by one,
//
// whose signs are those that Descartes' rule looks at. The shifts are exact
// additions, so if |errors of a| ≤ e in every place, the errors of d are at
// most what the same shifts, scalings and roundings make of e in place of
// the coefficients. That bound is computed alongside in float64 and enlarged
// by 2^-20 of itself, far beyond what rounding in fewer than 2^11 additions
// and products of positive numbers does.
type nearVariations struct {
	q     Poly
	guard int // by how many bits the largest aᵢ exceeds 2ⁿ units
	n     int
	prec  uint
	limbs int
	c     []*big.Float // the coefficients, rounded to prec
	work  []uint64     // n+1 numbers of limbs words, two's complement
	bound []float64    // errors
}

const (
	// nearGuard is the guard to begin with.
	nearGuard = 100
	// nearMaxDegree keeps the error bounds, below 3ⁿ·2, in the range of
	// float64.
	nearMaxDegree = 600
	// nearSlack is the relative enlargement of the error bounds.
	nearSlack = 1 + 1.0/(1<<20)
)

// newNearVariations prepares a polynomial.
func newNearVariations(q Poly, guard int) *nearVariations {
	n := max(q.Degree(), 0)
	w := n + guard
	v := &nearVariations{
		q:     q,
		guard: guard,
		n:     n,
		prec:  uint(w + 32),
		// |d| ≤ 3ⁿ·2^w, and a sign.
		limbs: (w+int(1.585*float64(n))+4)/64 + 1,
	}
	if n > nearMaxDegree {
		return v
	}
	v.c = make([]*big.Float, len(q.c))
	for i, x := range q.c {
		v.c[i] = new(big.Float).SetPrec(v.prec).SetInt(x)
	}
	v.work = make([]uint64, (n+1)*v.limbs)
	v.bound = make([]float64, n+1)
	return v
}

// longer doubles the guard and reports success; it fails where exact
// arithmetic would not be longer.
func (v *nearVariations) longer() bool {
	guard := 2*v.guard + v.n/2
	if v.n > nearMaxDegree || v.n+guard > maxBits(v.q.c) {
		return false
	}
	*v = *newNearVariations(v.q, guard)
	return true
}

// count returns min(2, variations) on the interval from lo to hi, and whether
// the limited arithmetic decides it.
func (v *nearVariations) count(lo, hi *big.Rat) (int, bool) {
	if v.n > nearMaxDegree || v.n == 0 {
		return 0, v.n == 0
	}
	ratio := new(big.Rat).Sub(hi, lo)
	ratio.Quo(ratio, lo)
	if ratio.Cmp(big.NewRat(1, 1)) > 0 {
		return 0, false
	}
	v.load(lo)
	v.shift()
	v.scale(ratio)
	v.reverse()
	v.shift()
	return v.variations()
}

// load sets the numbers to cᵢ·loⁱ in units that make the largest just below
// 2^(n+guard), with errors of at most 2 units: one of rounding, the other
// covers the relative errors, at most (2i+2)·2^-prec, of the products.
func (v *nearVariations) load(lo *big.Rat) {
	a := make([]*big.Float, v.n+1)
	x := new(big.Float).SetPrec(v.prec).SetRat(lo)
	power := new(big.Float).SetPrec(v.prec).SetInt64(1)
	top := math.MinInt
	for i, c := range v.c {
		a[i] = new(big.Float).SetPrec(v.prec).Mul(c, power)
		power.Mul(power, x)
		if a[i].Sign() != 0 {
			top = max(top, a[i].MantExp(nil))
		}
	}
	shift := v.n + v.guard - top
	var t big.Int
	for i, f := range a {
		f.SetMantExp(f, shift)
		f.Int(&t)
		v.set(i, &t)
		v.bound[i] = 2
	}
}

// set stores an integer.
func (v *nearVariations) set(i int, x *big.Int) {
	w := v.number(i)
	clear(w)
	for k, d := range x.Bits() {
		w[k*wordBits/64] |= uint64(d) << (k * wordBits % 64)
	}
	if x.Sign() < 0 {
		negateWords(w)
	}
}

// number returns the words of number i.
func (v *nearVariations) number(i int) []uint64 { return v.work[i*v.limbs : (i+1)*v.limbs] }

// shift replaces the coefficients by those of the polynomial at x + 1.
func (v *nearVariations) shift() {
	for i := range v.n {
		for j := v.n - 1; j >= i; j-- {
			addWords(v.number(j), v.number(j+1))
			v.bound[j] += v.bound[j+1]
		}
	}
	for i := range v.bound {
		v.bound[i] *= nearSlack
	}
}

// addWords adds b to a.
func addWords(a, b []uint64) {
	b = b[:len(a)]
	var carry uint64
	for i := range a {
		a[i], carry = bits.Add64(a[i], b[i], carry)
	}
}

// scale multiplies number k by ρᵏ ≤ 1. The power is rounded to 64·limbs bits,
// more than any number has, so the product is off by less than a unit, and
// by one more when it is cut to an integer.
func (v *nearVariations) scale(ratio *big.Rat) {
	prec := uint(64*v.limbs + 32)
	x := new(big.Float).SetPrec(prec).SetRat(ratio)
	power := new(big.Float).SetPrec(prec).SetInt64(1)
	f := new(big.Float).SetPrec(prec)
	bound := 1.0
	rho, _ := ratio.Float64()
	var t big.Int
	for k := range v.n + 1 {
		if k > 0 {
			power.Mul(power, x)
			bound *= rho * nearSlack
			f.Mul(f.SetInt(v.integer(k, &t)), power)
			f.Int(&t)
			v.set(k, &t)
		}
		v.bound[k] = v.bound[k]*bound*nearSlack + 2
	}
}

// integer returns number i in t.
func (v *nearVariations) integer(i int, t *big.Int) *big.Int {
	w := v.number(i)
	if w[len(w)-1]>>63 == 0 {
		return t.Set(bigFromWords64(w))
	}
	abs := append([]uint64(nil), w...)
	negateWords(abs)
	return t.Neg(bigFromWords64(abs))
}

// reverse turns the order of the coefficients around.
func (v *nearVariations) reverse() {
	for i, j := 0, v.n; i < j; i, j = i+1, j-1 {
		a, b := v.number(i), v.number(j)
		for k := range a {
			a[k], b[k] = b[k], a[k]
		}
		v.bound[i], v.bound[j] = v.bound[j], v.bound[i]
	}
}

// variations counts the changes among the signs that are certain. Uncertain
// ones can only add to them.
func (v *nearVariations) variations() (int, bool) {
	count, last, certain := 0, 0, true
	for i := range v.n + 1 {
		s := v.sign(i)
		if s == 0 {
			certain = false
			continue
		}
		if s == -last {
			if count++; count == 2 {
				return 2, true
			}
		}
		last = s
	}
	return count, certain
}

// sign returns the sign of number i where its error leaves no doubt, else 0.
func (v *nearVariations) sign(i int) int {
	w := v.number(i)
	s := 1
	if w[len(w)-1]>>63 != 0 {
		s = -1
	}
	// |number| ≥ 2^k with k the place of the highest bit that differs from
	// the sign, less one to stay below for negative powers of two.
	fill := uint64(0)
	if s < 0 {
		fill = ^fill
	}
	for k := len(w) - 1; k >= 0; k-- {
		if x := w[k] ^ fill; x != 0 {
			if math.Ldexp(1, 64*k+bits.Len64(x)-1) > v.bound[i] {
				return s
			}
			return 0
		}
	}
	return 0
}
