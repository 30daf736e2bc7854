package exact

import (
	"math/big"
	"math/bits"
	"sync"
)

// Primes are taken just below 2^61 and congruent to 1 modulo fieldOrder, so
// that every ℤ/p holds the roots of unity for short Fourier transforms, and
// a square root of −1. Below 2^61, 64 products of residues fit in 128 bits.
const (
	fieldOrder = 1 << 12 * 9 * 5 * 7
	primeLimit = 1 << 61
)

// fieldOrderPrimes are the prime divisors of fieldOrder.
var fieldOrderPrimes = [...]uint64{2, 3, 5, 7}

// modulus is a prime with what Montgomery's multiplication needs
// (P. L. Montgomery, Mathematics of Computation 44 (1985) 519–521). Residues
// are kept in Montgomery form a·2^64 mod p, reduced to [0, p), everywhere in
// the package unless a comment says plain.
type modulus struct {
	p    uint64
	inv  uint64 // p⁻¹ mod 2^64
	one  uint64 // 2^64 mod p, the Montgomery form of 1
	r2   uint64 // 2^128 mod p, converts into Montgomery form
	root uint64 // of order fieldOrder, in Montgomery form
}

// montgomery returns a·b/2^64 mod p for a·b < p·2^64.
func montgomery(a, b, p, inv uint64) uint64 {
	hi, lo := bits.Mul64(a, b)
	h, _ := bits.Mul64(lo*inv, p)
	t := hi - h
	if hi < h {
		t += p
	}
	return t
}

func (m *modulus) mul(a, b uint64) uint64 { return montgomery(a, b, m.p, m.inv) }

func (m *modulus) add(a, b uint64) uint64 {
	t := a + b
	if t >= m.p {
		t -= m.p
	}
	return t
}

func (m *modulus) sub(a, b uint64) uint64 {
	t := a - b
	if a < b {
		t += m.p
	}
	return t
}

func (m *modulus) neg(a uint64) uint64 {
	if a == 0 {
		return 0
	}
	return m.p - a
}

// pow returns a^e.
func (m *modulus) pow(a, e uint64) uint64 {
	r := m.one
	for ; e > 0; e >>= 1 {
		if e&1 == 1 {
			r = m.mul(r, a)
		}
		a = m.mul(a, a)
	}
	return r
}

// inverse returns 1/a for a ≠ 0, by Euclid's algorithm on plain integers.
func (m *modulus) inverse(a uint64) uint64 {
	// a is x·R; the inverse of that integer is x⁻¹·R⁻¹, and two
	// multiplications by R² bring it back to x⁻¹·R.
	r0, r1 := m.p, a
	var t0, t1 int64 = 0, 1
	for r1 != 0 {
		q := r0 / r1
		r0, r1 = r1, r0-q*r1
		t0, t1 = t1, t0-int64(q)*t1
	}
	u := uint64(t0)
	if t0 < 0 {
		u += m.p
	}
	return m.mul(m.mul(u, m.r2), m.r2)
}

// plain returns the integer in [0, p) that a stands for.
func (m *modulus) plain(a uint64) uint64 { return m.mul(a, 1) }

// fromUint returns the residue of v.
func (m *modulus) fromUint(v uint64) uint64 { return m.mul(v%m.p, m.r2) }

// fromInt64 returns the residue of v.
func (m *modulus) fromInt64(v int64) uint64 {
	if v < 0 {
		return m.neg(m.fromUint(-uint64(v)))
	}
	return m.fromUint(uint64(v))
}

// fromBig returns the residue of v.
func (m *modulus) fromBig(v *big.Int) uint64 {
	r := m.fromWords(v.Bits())
	if v.Sign() < 0 {
		return m.neg(r)
	}
	return r
}

func (m *modulus) fromWords(words []big.Word) uint64 {
	// Horner in base 2^64: r ← r·2^64 + w, which in Montgomery form is a
	// product by 2^128.
	var r uint64
	if wordBits == 64 {
		for i := len(words) - 1; i >= 0; i-- {
			r = m.add(m.mul(r, m.r2), m.reduce(uint64(words[i])))
		}
		return m.mul(r, m.r2)
	}
	for i := len(words) - 1; i >= 0; i-- {
		r = m.add(m.mul(r, m.fromUint(1<<32)), m.fromUint(uint64(words[i])))
	}
	return r
}

// reduce returns v mod p for any v, plain to plain.
func (m *modulus) reduce(v uint64) uint64 {
	if v < m.p {
		return v
	}
	return v % m.p
}

// sqrtMinusOne returns a square root of −1.
func (m *modulus) sqrtMinusOne() uint64 { return m.pow(m.root, fieldOrder/4) }

// rootOfUnity returns a primitive n-th root of unity for n dividing
// fieldOrder.
func (m *modulus) rootOfUnity(n int) uint64 { return m.pow(m.root, uint64(fieldOrder/n)) }

// newModulus prepares the prime p ≡ 1 mod fieldOrder.
func newModulus(p uint64) *modulus {
	m := &modulus{p: p}
	m.inv = p // correct to 3 bits; every step doubles them
	for range 5 {
		m.inv *= 2 - p*m.inv
	}
	_, m.one = bits.Div64(1, 0, p)
	_, m.r2 = bits.Div64(m.one, 0, p)
	cofactor := (p - 1) / fieldOrder
	for g := uint64(2); ; g++ {
		r := m.pow(m.fromUint(g), cofactor)
		primitive := true
		for _, q := range fieldOrderPrimes {
			if m.pow(r, fieldOrder/q) == m.one {
				primitive = false
				break
			}
		}
		if primitive {
			m.root = r
			return m
		}
	}
}

// moduli is the sequence of primes in use, longest so far.
var moduli struct {
	sync.Mutex
	list []*modulus
	next uint64 // the next candidate
}

// takeModuli returns the first n primes of the sequence.
func takeModuli(n int) []*modulus {
	moduli.Lock()
	defer moduli.Unlock()
	for len(moduli.list) < n {
		i := len(moduli.list)
		if i < len(primeMultipliers) {
			moduli.next = uint64(primeMultipliers[i])*fieldOrder + 1
		} else {
			moduli.next = primeBelow(moduli.next)
		}
		moduli.list = append(moduli.list, newModulus(moduli.next))
	}
	return moduli.list[:n:n]
}

// primeBelow returns the largest prime below p in the residue class 1 modulo
// fieldOrder. big.Int.ProbablyPrime is a proof for numbers below 2^64.
func primeBelow(p uint64) uint64 {
	q := (p-2)/fieldOrder*fieldOrder + 1
	for ; q > 1; q -= fieldOrder {
		if new(big.Int).SetUint64(q).ProbablyPrime(0) {
			return q
		}
	}
	panic("exact: the primes are used up")
}
