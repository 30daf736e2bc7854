package exact

import "math/big"

// kroneckerTerms is the number of terms from which on packing both factors
// into one long integer each (Kronecker substitution; see von zur Gathen and
// Gerhard, Modern Computer Algebra, §8.4) beats the schoolbook product.
const kroneckerTerms = 8

// mulKronecker multiplies integer polynomials by evaluating both at a power
// of two large enough that the coefficients of the product do not overlap.
func mulKronecker(a, b []*big.Int) []*big.Int {
	abits, bbits := maxBits(a), maxBits(b)
	width := abits + bbits + bitsOf(min(len(a), len(b))) + 2
	words := (width + wordBits - 1) / wordBits
	x, y := packInts(a, words), packInts(b, words)
	return unpackInts(x.Mul(x, y), len(a)+len(b)-1, words)
}

const wordBits = 32 << (^big.Word(0) >> 63)

func bitsOf(n int) int {
	k := 0
	for ; n > 0; n >>= 1 {
		k++
	}
	return k
}

// maxBits returns the largest bit length among the coefficients.
func maxBits(c []*big.Int) int {
	m := 0
	for _, v := range c {
		m = max(m, v.BitLen())
	}
	return m
}

// packInts returns Σ c[i]·2^(i·words·wordBits) for |c[i]| < 2^(words·wordBits−1).
func packInts(c []*big.Int, words int) *big.Int {
	pos := make([]big.Word, len(c)*words)
	var neg []big.Word
	for i, v := range c {
		dst := pos
		if v.Sign() < 0 {
			if neg == nil {
				neg = make([]big.Word, len(c)*words)
			}
			dst = neg
		}
		copy(dst[i*words:(i+1)*words], v.Bits())
	}
	x := new(big.Int).SetBits(pos)
	if neg != nil {
		x.Sub(x, new(big.Int).SetBits(neg))
	}
	return x
}

// unpackInts is the inverse of packInts for n coefficients.
func unpackInts(x *big.Int, n, words int) []*big.Int {
	negative := x.Sign() < 0
	bits := x.Bits()
	c := newInts(n)
	digits := make([]big.Word, n*words)
	half := big.Word(1) << (wordBits - 1)
	carry := big.Word(0) // one borrowed by the digit below
	for i := range c {
		digit := digits[i*words : (i+1)*words : (i+1)*words]
		if lo := i * words; lo < len(bits) {
			copy(digit, bits[lo:min(len(bits), lo+words)])
		}
		for k := 0; carry != 0 && k < words; k++ {
			digit[k]++
			if digit[k] != 0 {
				carry = 0
			}
		}
		// A carry left here means the digit wrapped to 0: it goes on.
		minus := false
		if digit[words-1]&half != 0 {
			minus = true
			carry = 1
			borrow := big.Word(1)
			for k := range digit {
				digit[k] = ^digit[k] + borrow
				if digit[k] != 0 {
					borrow = 0
				}
			}
		}
		c[i].SetBits(digit)
		if minus != negative {
			c[i].Neg(c[i])
		}
	}
	return c
}
