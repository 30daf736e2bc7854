package exact

import (
	"math/big"
	"math/bits"
	"sync"
)

// reconstruction turns residues modulo k primes into integers of absolute
// value below half their product M.
type reconstruction struct {
	moduli  []*modulus
	words   int        // length of every number below in 64-bit words
	basis   [][]uint64 // M/pᵢ
	weights []uint64   // (M/pᵢ)⁻¹ mod pᵢ, in plain form, so that mul gives plain
	product []uint64   // M
	half    []uint64   // ⌊M/2⌋

	// For many primes: the reconstructions from the first and the last half,
	// combined by integer(first) + M₁·((second − first)/M₁ mod M₂).
	first, second *reconstruction
	m1, m2, inv   *big.Int // M₁, M₂ and 1/M₁ mod M₂
}

// directReconstruction is the number of primes up to which the terms are
// added up one by one; from there on long products pay.
const directReconstruction = 48

// newReconstruction prepares the moduli.
func newReconstruction(list []*modulus) *reconstruction {
	k := len(list)
	if k > directReconstruction {
		c := &reconstruction{
			moduli: list,
			first:  newReconstruction(list[:k/2]), second: newReconstruction(list[k/2:]),
			m1: productOfModuli(list[:k/2]), m2: productOfModuli(list[k/2:]),
		}
		c.inv = new(big.Int).ModInverse(c.m1, c.m2)
		return c
	}
	c := &reconstruction{moduli: list, words: k + 1}
	// Prefix products from the left and from the right give M/pᵢ.
	left := make([]*big.Int, k+1)
	left[0] = bigOne
	for i, m := range list {
		left[i+1] = new(big.Int).Mul(left[i], new(big.Int).SetUint64(m.p))
	}
	right := big.NewInt(1)
	c.basis = make([][]uint64, k)
	c.weights = make([]uint64, k)
	for i := k - 1; i >= 0; i-- {
		m := list[i]
		b := new(big.Int).Mul(left[i], right)
		c.basis[i] = words64(b, c.words)
		c.weights[i] = m.plain(m.inverse(m.fromBig(b)))
		right.Mul(right, new(big.Int).SetUint64(m.p))
	}
	c.product = words64(left[k], c.words)
	c.half = words64(new(big.Int).Rsh(left[k], 1), c.words)
	return c
}

// productOfModuli returns the product of the primes.
func productOfModuli(list []*modulus) *big.Int {
	switch len(list) {
	case 0:
		return big.NewInt(1)
	case 1:
		return new(big.Int).SetUint64(list[0].p)
	}
	a, b := productOfModuli(list[:len(list)/2]), productOfModuli(list[len(list)/2:])
	return a.Mul(a, b)
}

// integer returns the integer with the residues r[0], r[stride], …
func (c *reconstruction) integer(r []uint64, stride int) *big.Int {
	if c.first == nil {
		return c.direct(r, stride)
	}
	x := c.first.integer(r, stride)
	t := c.second.integer(r[len(c.first.moduli)*stride:], stride)
	t.Sub(t, x)
	t.Mod(t.Mul(t, c.inv), c.m2)
	if t.Cmp(new(big.Int).Rsh(c.m2, 1)) > 0 {
		t.Sub(t, c.m2)
	}
	return x.Add(x, t.Mul(t, c.m1))
}

// direct is integer for few primes.
func (c *reconstruction) direct(r []uint64, stride int) *big.Int {
	acc := make([]uint64, c.words)
	// x = Σ (rᵢ·wᵢ mod pᵢ)·M/pᵢ, less a multiple of M that the fractions tell:
	// x/M = Σ (rᵢ·wᵢ mod pᵢ)/pᵢ.
	fraction := 0.0
	for i, m := range c.moduli {
		v := m.mul(r[i*stride], c.weights[i])
		if v == 0 {
			continue
		}
		fraction += float64(v) / float64(m.p)
		addMulWords(acc, c.basis[i], v)
	}
	subMulWords(acc, c.product, uint64(fraction))
	// The fraction may be off by a rounding: one step either way.
	if acc[len(acc)-1]>>63 != 0 {
		addMulWords(acc, c.product, 1)
	} else if compareWords(acc, c.product) >= 0 {
		subMulWords(acc, c.product, 1)
	}
	negative := compareWords(acc, c.half) > 0
	if negative {
		subMulWords(acc, c.product, 1)
		negateWords(acc)
	}
	x := bigFromWords64(acc)
	if negative {
		x.Neg(x)
	}
	return x
}

// addMulWords adds f·b to a, modulo 2^(64·len(a)); b is as long as a.
func addMulWords(a, b []uint64, f uint64) {
	b = b[:len(a)]
	var carry uint64
	for i := range a {
		hi, lo := bits.Mul64(b[i], f)
		var c uint64
		lo, c = bits.Add64(lo, carry, 0)
		hi += c
		a[i], c = bits.Add64(a[i], lo, 0)
		carry = hi + c
	}
}

// subMulWords subtracts f·b from a, modulo 2^(64·len(a)).
func subMulWords(a, b []uint64, f uint64) {
	b = b[:len(a)]
	var carry uint64
	for i := range a {
		hi, lo := bits.Mul64(b[i], f)
		var c uint64
		lo, c = bits.Add64(lo, carry, 0)
		hi += c
		a[i], c = bits.Sub64(a[i], lo, 0)
		carry = hi + c
	}
}

func negateWords(a []uint64) {
	carry := uint64(1)
	for i := range a {
		a[i], carry = bits.Add64(^a[i], 0, carry)
	}
}

func compareWords(a, b []uint64) int {
	for i := len(a) - 1; i >= 0; i-- {
		if a[i] != b[i] {
			if a[i] < b[i] {
				return -1
			}
			return 1
		}
	}
	return 0
}

// words64 returns x ≥ 0 as n 64-bit words, the lowest first.
func words64(x *big.Int, n int) []uint64 {
	w := make([]uint64, n)
	for i, d := range x.Bits() {
		w[i*wordBits/64] |= uint64(d) << (i * wordBits % 64)
	}
	return w
}

// bigFromWords64 is the inverse of words64.
func bigFromWords64(w []uint64) *big.Int {
	for len(w) > 0 && w[len(w)-1] == 0 {
		w = w[:len(w)-1]
	}
	digits := make([]big.Word, len(w)*64/wordBits)
	for i := range digits {
		digits[i] = big.Word(w[i*wordBits/64] >> (i * wordBits % 64))
	}
	return new(big.Int).SetBits(digits)
}

// keptReconstructions is the number of primes up to which tables are kept;
// together they take about half a megabyte.
const keptReconstructions = directReconstruction

var reconstructions [keptReconstructions + 1]struct {
	sync.Mutex
	table *reconstruction
}

// reconstructionFor returns the table for the moduli, a kept one where the
// moduli are the beginning of the sequence of primes.
func reconstructionFor(list []*modulus) *reconstruction {
	k := len(list)
	if k > keptReconstructions {
		return newReconstruction(list)
	}
	for i, m := range takeModuli(k) {
		if m != list[i] {
			return newReconstruction(list)
		}
	}
	slot := &reconstructions[k]
	slot.Lock()
	defer slot.Unlock()
	if slot.table == nil {
		slot.table = newReconstruction(list)
	}
	return slot.table
}
