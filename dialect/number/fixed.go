package number

import (
	"math/big"
	"math/bits"
	"sync"
)

// Fixed point: the integer T stands for T·2^-w; one ulp is 2^-w. Right shifts
// of big.Int round towards −∞ and Quo truncates: each is off by less than an
// ulp.

// fixed returns x·2^w truncated towards zero: off by less than an ulp, and not
// at all where x has no bits below 2^-w.
func fixed(x *big.Float, w uint) *big.Int {
	var scaled big.Float
	scaled.SetPrec(x.Prec())
	n, _ := scaled.SetMantExp(x, int(w)).Int(nil)
	return n
}

// mulShift sets z to ⌊x·y·2^-w⌋; scratch holds the product.
func mulShift(z, x, y, scratch *big.Int, w uint) *big.Int {
	return z.Rsh(scratch.Mul(x, y), w)
}

// ballFromFixed returns the ball around t·2^-w with a radius of errors ulps, its
// midpoint rounded to prec bits.
func ballFromFixed(t *big.Int, w uint, errors uint64, prec uint) Ball {
	var z Ball
	z.mid.SetPrec(prec).SetInt(t)
	if z.mid.Acc() != big.Exact {
		z.rad = ulp(&z.mid).scale(-1 - int64(w))
	}
	z.mid.SetMantExp(&z.mid, -int(w))
	z.rad = z.rad.addUp(wholeUp(errors, -int64(w)))
	return z
}

// guardBits is the number of extra bits that absorbs the ulps of a series of
// at most w terms, w ≥ 64: the counts below stay under 16·w.
func guardBits(w uint) uint { return 8 + uint(bits.Len(w)) }

// roundWords rounds a working precision up to whole words, so that caches of
// constants and tables are shared.
func roundWords(w uint) uint { return (w + 63) &^ 63 }

// constantCache keeps values that depend on a working precision alone. Each is
// computed on its own, so that no result depends on what was asked before. It
// may be used concurrently.
type constantCache[T any] struct {
	values  sync.Map // uint → T
	compute func(w uint) T
}

// cachedPrecision is the largest working precision whose values are kept.
const cachedPrecision = 1 << 14

func (c *constantCache[T]) at(w uint) T {
	if v, ok := c.values.Load(w); ok {
		return v.(T)
	}
	v := c.compute(w)
	if w <= cachedPrecision {
		kept, _ := c.values.LoadOrStore(w, v)
		return kept.(T)
	}
	return v
}

var (
	piCache  = constantCache[*big.Int]{compute: computePi}
	ln2Cache = constantCache[*big.Int]{compute: computeLn2}
)

// fixedPi returns π·2^w to within one ulp. It must not be modified.
func fixedPi(w uint) *big.Int { return piCache.at(w) }

// fixedLn2 returns ln 2·2^w to within one ulp. It must not be modified.
func fixedLn2(w uint) *big.Int { return ln2Cache.at(w) }

// computePi uses Machin's formula π = 16 atan(1/5) − 4 atan(1/239) with 64 bits
// to spare: the two series are off by less than 2^40·20 ulps of the wider
// fixed point (see inverseSeries), less than half an ulp of the result, and
// cutting the spare bits off costs less than an ulp. Rounding to nearest
// instead of cutting keeps the sum within one.
func computePi(w uint) *big.Int {
	const spare = 64
	a := inverseSeries(5, w+spare, -1)
	b := inverseSeries(239, w+spare, -1)
	a.Lsh(a, 4)
	b.Lsh(b, 2)
	return roundShift(a.Sub(a, b), spare)
}

// computeLn2 uses ln 2 = 4 atanh(1/7) + 2 atanh(1/17), since the two are half
// the logarithms of 4/3 and 9/8. Errors as for π.
func computeLn2(w uint) *big.Int {
	const spare = 64
	a := inverseSeries(7, w+spare, 1)
	b := inverseSeries(17, w+spare, 1)
	a.Lsh(a, 2)
	b.Lsh(b, 1)
	return roundShift(a.Add(a, b), spare)
}

// roundShift returns t·2^-k rounded to the nearest integer: off by at most half.
func roundShift(t *big.Int, k uint) *big.Int {
	half := new(big.Int).Lsh(big.NewInt(1), k-1)
	return half.Rsh(half.Add(t, half), k)
}

// inverseSeries returns atan(1/n) for sign −1 and atanh(1/n) for sign +1 in
// fixed point: the sum over j of sign^j/((2j+1) n^(2j+1)). Each power is a
// truncated quotient of the one before and each term a truncated quotient of a
// power: a term is off by less than 2 ulps, the sum of w/4 terms or fewer by
// less than w/2+1 with the remainder.
func inverseSeries(n int64, w uint, sign int) *big.Int {
	square := big.NewInt(n * n)
	power := new(big.Int).Lsh(big.NewInt(1), w)
	power.Quo(power, big.NewInt(n))
	sum, term, k := new(big.Int), new(big.Int), new(big.Int)
	for j := int64(0); power.Sign() != 0; j++ {
		term.Quo(power, k.SetInt64(2*j+1))
		if sign < 0 && j&1 == 1 {
			sum.Sub(sum, term)
		} else {
			sum.Add(sum, term)
		}
		power.Quo(power, square)
	}
	return sum
}

// PiBall returns a ball that holds π.
func PiBall(prec uint) Ball {
	prec = clampPrecision(prec)
	return ballFromFixed(fixedPi(prec), prec, 1, prec)
}

// ln2Ball returns a ball that holds ln 2.
func ln2Ball(prec uint) Ball {
	prec = clampPrecision(prec)
	return ballFromFixed(fixedLn2(prec), prec, 1, prec)
}
