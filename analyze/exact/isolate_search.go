package exact

import (
	"context"
	"math/big"
	"slices"
)

// isolator searches ranges of positive numbers for the roots of a square-free
// polynomial.
type isolator struct {
	ctx   context.Context
	q     Poly // roots met at ends of ranges are divided out
	near  *nearVariations
	found []Interval
}

func newIsolator(ctx context.Context, q Poly) *isolator {
	return &isolator{ctx: ctx, q: q, near: newNearVariations(q, nearGuard)}
}

// Ranges of more than manyOctaves octaves are split at their geometric
// middle, so that roots many decades apart are separated in few steps;
// narrower ones go octave by octave, where short arithmetic serves.
const manyOctaves = 40

// spread isolates the roots in the open range from lo to hi, which are
// positive and no roots.
func (z *isolator) spread(lo, hi *big.Rat) error {
	first, last := floorLog2(lo), floorLog2(hi)
	if last-first > manyOctaves {
		switch z.exactVariations(lo, hi) {
		case 0:
			return z.ctx.Err()
		case 1:
			z.found = append(z.found, Interval{lo, hi})
			return z.ctx.Err()
		}
		return z.splitAt(powerOfTwo((first+last+1)/2), lo, hi, z.spread)
	}
	for k := first + 1; k <= last; k++ {
		if mid := powerOfTwo(k); mid.Cmp(lo) > 0 && mid.Cmp(hi) < 0 {
			return z.splitAt(mid, lo, hi, func(a, b *big.Rat) error {
				if a == lo {
					return z.bisect(a, b)
				}
				return z.spread(a, b)
			})
		}
	}
	return z.bisect(lo, hi)
}

// splitAt searches below mid and above it; the root mid itself is found and
// divided out.
func (z *isolator) splitAt(mid, lo, hi *big.Rat, search func(lo, hi *big.Rat) error) error {
	root := z.q.EvalSign(mid) == 0
	if root {
		z.q = divideRoot(z.q, mid)
		z.near = newNearVariations(z.q, z.near.guard)
	}
	if err := search(lo, mid); err != nil {
		return err
	}
	if root {
		z.found = append(z.found, Interval{mid, mid})
	}
	return search(mid, hi)
}

// bisect isolates the roots in a range of at most an octave.
func (z *isolator) bisect(lo, hi *big.Rat) error {
	if err := z.ctx.Err(); err != nil {
		return err
	}
	count, decided := z.near.count(lo, hi)
	for !decided && z.near.longer() {
		if err := z.ctx.Err(); err != nil {
			return err
		}
		count, decided = z.near.count(lo, hi)
	}
	if !decided {
		count = z.exactVariations(lo, hi)
	}
	switch count {
	case 0:
		return nil
	case 1:
		z.found = append(z.found, Interval{lo, hi})
		return nil
	}
	mid := new(big.Rat).Add(lo, hi)
	return z.splitAt(mid.Mul(mid, big.NewRat(1, 2)), lo, hi, z.bisect)
}

// exactVariations is signVariations on an interval.
func (z *isolator) exactVariations(lo, hi *big.Rat) int {
	return signVariations(onUnitInterval(z.q, lo, new(big.Rat).Sub(hi, lo)))
}

// onUnitInterval returns integer coefficients of a positive multiple of
// q(lo + width·x).
func onUnitInterval(q Poly, lo, width *big.Rat) []*big.Int {
	c := newInts(len(q.c))
	for i, v := range q.c {
		c[i].Set(v)
	}
	if lo.Sign() == 0 {
		return thin(scaleInts(c, width))
	}
	// q(lo·(1 + y)) with y = (width/lo)·x.
	scaleInts(c, lo)
	shiftByOne(thin(c))
	return thin(scaleInts(c, new(big.Rat).Quo(width, lo)))
}

// scaleInts replaces the coefficients by those of vⁿ·f(r·x) for r = u/v, v > 0.
func scaleInts(c []*big.Int, r *big.Rat) []*big.Int {
	u, v := r.Num(), r.Denom()
	scalePowers(c, u)
	slices.Reverse(c)
	scalePowers(c, v)
	slices.Reverse(c)
	return c
}

// scalePowers multiplies c[i] by uⁱ.
func scalePowers(c []*big.Int, u *big.Int) {
	if isOne(u) {
		return
	}
	if k := u.TrailingZeroBits(); u.Sign() > 0 && u.BitLen() == int(k)+1 {
		for i, v := range c {
			v.Lsh(v, uint(i)*k)
		}
		return
	}
	power := big.NewInt(1)
	for i, v := range c {
		if i > 0 {
			v.Mul(v, power)
		}
		if i+1 < len(c) {
			power.Mul(power, u)
		}
	}
}

// shiftByOne replaces f(x) by f(x + 1).
func shiftByOne(c []*big.Int) {
	for i := range len(c) - 1 {
		for j := len(c) - 2; j >= i; j-- {
			c[j].Add(c[j], c[j+1])
		}
	}
}

// thin divides the coefficients by their common power of two.
func thin(c []*big.Int) []*big.Int {
	k := ^uint(0)
	for _, v := range c {
		if v.Sign() != 0 {
			k = min(k, v.TrailingZeroBits())
		}
	}
	if k > 0 && k != ^uint(0) {
		for _, v := range c {
			v.Rsh(v, k)
		}
	}
	return c
}

// signVariations returns a bound on the number of roots in the open unit
// interval: the sign changes in the coefficients of (1+x)ⁿ·c(1/(1+x)). The
// bound is exact when it is 0 or 1. Counting stops at 2.
func signVariations(c []*big.Int) int {
	if coefficientVariations(c) == 0 { // no positive root
		return 0
	}
	r := make([]*big.Int, len(c))
	for i, v := range c {
		r[len(c)-1-i] = new(big.Int).Set(v)
	}
	// After step i of the shift coefficient i is final.
	count, last := 0, 0
	for i := range r {
		for j := len(r) - 2; j >= i; j-- {
			r[j].Add(r[j], r[j+1])
		}
		if s := r[i].Sign(); s != 0 {
			if s == -last {
				if count++; count == 2 {
					return 2
				}
			}
			last = s
		}
	}
	return count
}

// coefficientVariations returns the number of sign changes in the
// coefficients, a bound on the number of positive roots that is exact when it
// is 0 or 1 (Descartes).
func coefficientVariations(c []*big.Int) int {
	count, last := 0, 0
	for _, v := range c {
		if s := v.Sign(); s != 0 {
			if s == -last {
				count++
			}
			last = s
		}
	}
	return count
}
