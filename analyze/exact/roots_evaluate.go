package exact

import (
	"math"
	"math/big"
	"math/bits"
	"math/cmplx"
)

// evaluator computes p(z) and z·p'(z) for complex z in fixed point of any
// length, with a proved bound of the error, for an integer polynomial p of
// degree n with p(0) ≠ 0.
//
// # The scheme
//
// Let z = x·2^k with |x| in [1/2, √2) and φ the fractional, b the integral part
// of log2|x|. Horner's rule b_i = a_i + z·b_(i+1) is run on scaled values
// B_i = b_i·2^(κ_i−M), κ_i = i(k+b) + ⌊iφ⌋, so that
//
//	B_i = c_i + x·2^(−s_i)·B_(i+1),  c_i = a_i·2^(κ_i−M),  s_i = b or b+1,
//
// and M is the least integer that makes every |c_i| < 1. κ_i is within 1 of
// i·log2|z|, so the c_i follow the sizes of the terms a_i·z^i; the scheme loses
// no more than ordinary floating point with an unlimited exponent would. The
// derivative comes from D_i = B_i + x·2^(−s_i)·D_(i+1), and z·p'(z)·2^−M is
// x·2^(−s_0)·D_1; p(z)·2^−M is B_0.
//
// # The error
//
// Values are two's-complement integers in units of 2^-F, F = 64W − H. The
// product of the factors |x|·2^(−s) over any stretch of indices is at most
// 2.01: it is 2^(m·log2|x| − (⌊(i+m)φ⌋ − ⌊iφ⌋) − m·b) ≤ 2^(1 + m·2^-50), φ
// being a float64 within 2^-50 of the truth. z is exact. One step cuts c_i
// (below 1 unit, real part only) and the product (below 1 unit in each part):
// |error| < √5 units. Hence
//
//	|B_0 − p(z)·2^−M|      ≤ 2.01·√5·(n+1) < 5(n+1) units
//	|D_1·x… − z·p'(z)·2^−M| ≤ 2.01·(n+1)·(5(n+1) + √2) < 15(n+1)² units
//
// The values stay below 2.01·(n+1) for B and (2.01·(n+1))² for D, which H
// covers with a sign bit.
type evaluator struct {
	n        int
	size     [][]uint64 // magnitudes of the coefficients, low word first
	negative []bool
	bits     []int
	headroom int // H
	mantissa []float64
	rim      *rim
}

func newEvaluator(p Poly) *evaluator {
	c, _ := p.Ints()
	n := len(c) - 1
	v := &evaluator{n: n, size: make([][]uint64, n+1), negative: make([]bool, n+1), bits: make([]int, n+1), mantissa: make([]float64, n+1)}
	for i, a := range c {
		v.negative[i] = a.Sign() < 0
		v.bits[i] = a.BitLen()
		v.size[i] = wordsOf(a)
		v.mantissa[i] = topFraction(a)
	}
	v.headroom = 2 + 2*bits.Len(uint(3*(n+1)))
	v.rim = v.startingPoints()
	return v
}

// wordsOf returns |a| in 64-bit words, low word first.
func wordsOf(a *big.Int) []uint64 {
	raw := a.Bits()
	if bits.UintSize == 64 {
		words := make([]uint64, len(raw))
		for i, w := range raw {
			words[i] = uint64(w)
		}
		return words
	}
	words := make([]uint64, (len(raw)+1)/2)
	for i, w := range raw {
		words[i/2] |= uint64(w) << (32 * uint(i%2))
	}
	return words
}

// topFraction returns a/2^bitlen(a), in ±[1/2, 1), or 0.
func topFraction(a *big.Int) float64 {
	n := a.BitLen()
	if n == 0 {
		return 0
	}
	if n > 64 {
		a = new(big.Int).Quo(a, new(big.Int).Lsh(bigOne, uint(n-64)))
		n = 64
	}
	f := new(big.Float).SetInt(a)
	f.SetMantExp(f, -n)
	v, _ := f.Float64()
	return v
}

// fixedPoint is z = (±u ± j·v)·2^(k−64Z+1), u and v of Z words; the larger of
// them has its second-highest bit as leading bit.
type fixedPoint struct {
	u, v       []uint64
	uneg, vneg bool
	k          int
	log        float64 // log2|x|, in [−1, ½)
}

// evaluation is the outcome: the logarithms are base 2 and relative to 2^M.
type evaluation struct {
	ratio          wide    // z·p'(z)/p(z); meaningless where p is 0
	logP, logD     float64 // of the computed |p| and |z p'|, −Inf for 0
	logEP, logED   float64 // of the error bounds
	words          int
	pr, pi, dr, di []uint64 // B_0 and z·p' as computed (shared scratch)
	fraction       int      // F
}

// scratch is the working space of one evaluation.
type scratch struct {
	re, im, dr, di, t1, t2, t3, t4 []uint64
}

func (s *scratch) resize(w, z int) {
	grow := func(x []uint64, n int) []uint64 {
		if cap(x) < n {
			return make([]uint64, n)
		}
		x = x[:n]
		clear(x)
		return x
	}
	s.re, s.im = grow(s.re, w), grow(s.im, w)
	s.dr, s.di = grow(s.dr, w), grow(s.di, w)
	s.t1, s.t2 = grow(s.t1, w+z), grow(s.t2, w+z)
	s.t3, s.t4 = grow(s.t3, w+z), grow(s.t4, w+z)
}

// evaluate runs the scheme with W = w words, w ≥ 2.
//
// By p(z̄) = conj p(z) and p(−s) having the coefficients ±a_i it is enough to
// work in the first quadrant.
func (e *evaluator) evaluate(z *fixedPoint, w int, s *scratch) evaluation {
	s.resize(w, len(z.u))
	base := int(math.Floor(z.log))
	step := phaseStep(z.log)
	phase := uint64(e.n) * step               // the fraction of nφ
	whole, _ := bits.Mul64(uint64(e.n), step) // ⌊nφ⌋
	top := e.top(z.k+base, step)              // M
	kappa := e.n*(z.k+base) + int(whole)
	fraction := 64*w - e.headroom
	real := isZeroWords(z.v)

	e.addCoefficient(s.re, e.n, kappa-top+fraction, z.uneg && e.n&1 == 1)
	before := 0 // s_(i+1)
	for i := e.n - 1; i >= 0; i-- {
		next, borrow := bits.Sub64(phase, step, 0)
		phase = next
		shift := base + int(borrow) // s_i
		kappa -= z.k + shift
		if i < e.n-1 {
			rotate(s.dr, s.di, z, before, real, s)
		}
		addFixed(s.dr, s.re)
		if !real {
			addFixed(s.di, s.im)
		}
		rotate(s.re, s.im, z, shift, real, s)
		e.addCoefficient(s.re, i, kappa-top+fraction, z.uneg && i&1 == 1)
		before = shift
	}
	rotate(s.dr, s.di, z, before, real, s)
	return e.conclude(z, w, fraction, s)
}

// phaseStep returns φ·2^64 for the fractional part φ ≤ 1 − 2^-53 of log.
func phaseStep(log float64) uint64 {
	phi := log - math.Floor(log)
	if phi >= 1 {
		return math.MaxUint64
	}
	return uint64(math.Ldexp(phi, 64))
}

// top returns M: the largest bit length of a_i·2^κ_i.
func (e *evaluator) top(whole int, step uint64) int {
	m := math.MinInt
	var phase, carry uint64
	kappa := 0
	for i := range e.n + 1 {
		if b := e.bits[i]; b > 0 && b+kappa > m {
			m = b + kappa
		}
		phase, carry = bits.Add64(phase, step, 0)
		kappa += whole + int(carry)
	}
	return m
}

func (e *evaluator) conclude(z *fixedPoint, w, fraction int, s *scratch) evaluation {
	n := float64(e.n + 1)
	pr, pi, pe := complexWords(s.re, s.im)
	dr, di, de := complexWords(s.dr, s.di)
	out := evaluation{words: w, fraction: fraction, pr: s.re, pi: s.im, dr: s.dr, di: s.di}
	out.logP = logHypot(pr, pi) + float64(pe-fraction)
	out.logD = logHypot(dr, di) + float64(de-fraction)
	out.logEP = math.Log2(5*n) - float64(fraction)
	out.logED = math.Log2(15*n*n) - float64(fraction)
	if pr != 0 || pi != 0 {
		r := complex(dr, di) / complex(pr, pi)
		if z.vneg != z.uneg { // back from the first quadrant
			r = cmplx.Conj(r)
		}
		out.ratio = wide{r, de - pe}.normal()
	}
	return out
}

func logHypot(a, b float64) float64 {
	if a == 0 && b == 0 {
		return math.Inf(-1)
	}
	return math.Log2(math.Hypot(a, b))
}

// addCoefficient adds ±a_i·2^shift, cut to an integer, to x.
func (e *evaluator) addCoefficient(x []uint64, i, shift int, flip bool) {
	words := e.size[i]
	if len(words) == 0 {
		return
	}
	// Word j of the shifted number holds bits 64j−shift … of a_i.
	var c uint64
	first := -shift >> 6 // floor
	low := uint(-shift) & 63
	subtract := e.negative[i] != flip
	at := func(j int) uint64 {
		if j < 0 || j >= len(words) {
			return 0
		}
		return words[j]
	}
	current := at(first)
	for j := range x {
		next := at(first + j + 1)
		word := current>>low | next<<(64-low)
		current = next
		if subtract {
			x[j], c = bits.Sub64(x[j], word, c)
		} else {
			x[j], c = bits.Add64(x[j], word, c)
		}
	}
}
