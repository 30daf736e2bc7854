package exact

import (
	"math"
	"math/bits"
)

// The arithmetic of evaluate: two's-complement integers of any number of 64-bit
// words, low word first.

// rotate replaces re + j·im by its product with (u + j·v)·2^(1−64Z−shift),
// rounded down.
func rotate(re, im []uint64, z *fixedPoint, shift int, real bool, s *scratch) {
	switch {
	case len(z.u) > 1:
		rotateLong(re, im, z, shift, real, s)
	case real:
		rotateReal(re, z.u[0], uint(1-shift))
	case len(re) == 2:
		rotateTwo((*[2]uint64)(re), (*[2]uint64)(im), z.u[0], z.v[0], uint(1-shift))
	default:
		rotateShort(re, im, z.u[0], z.v[0], uint(1-shift))
	}
}

// rotateReal is rotate for one word and a real factor; left = 1 − shift.
func rotateReal(re []uint64, u uint64, left uint) {
	var carry, before uint64
	last := len(re) - 1
	sign := uint64(int64(re[last]) >> 63)
	for i, a := range re {
		h, l := bits.Mul64(a, u)
		var c uint64
		l, c = bits.Add64(l, carry, 0)
		carry = h + c
		if i > 0 {
			re[i-1] = l<<left | before>>(64-left)
		}
		before = l
	}
	re[last] = (carry-u&sign)<<left | before>>(64-left)
}

// rotateShort is rotate for one word. The four products run side by side; a
// negative operand is taken modulo 2^64W and mended at the top.
func rotateShort(re, im []uint64, u, v uint64, left uint) {
	last := len(re) - 1
	im = im[:len(re)]
	signRe, signIm := uint64(int64(re[last])>>63), uint64(int64(im[last])>>63)
	var c1, c2, c3, c4, borrow, carry, beforeRe, beforeIm, c uint64
	for i := range re {
		a, b := re[i], im[i]
		h1, l1 := bits.Mul64(a, u)
		h2, l2 := bits.Mul64(b, v)
		h3, l3 := bits.Mul64(a, v)
		h4, l4 := bits.Mul64(b, u)
		l1, c = bits.Add64(l1, c1, 0)
		c1 = h1 + c
		l2, c = bits.Add64(l2, c2, 0)
		c2 = h2 + c
		l3, c = bits.Add64(l3, c3, 0)
		c3 = h3 + c
		l4, c = bits.Add64(l4, c4, 0)
		c4 = h4 + c
		l1, borrow = bits.Sub64(l1, l2, borrow)
		l3, carry = bits.Add64(l3, l4, carry)
		if i > 0 {
			re[i-1] = l1<<left | beforeRe>>(64-left)
			im[i-1] = l3<<left | beforeIm>>(64-left)
		}
		beforeRe, beforeIm = l1, l3
	}
	topRe := c1 - u&signRe - (c2 - v&signIm) - borrow
	topIm := c3 - v&signRe + c4 - u&signIm + carry
	re[last] = topRe<<left | beforeRe>>(64-left)
	im[last] = topIm<<left | beforeIm>>(64-left)
}

// rotateTwo is rotateShort for W = 2, written out.
func rotateTwo(re, im *[2]uint64, u, v uint64, left uint) {
	a0, a1, b0, b1 := re[0], re[1], im[0], im[1]
	signRe, signIm := uint64(int64(a1)>>63), uint64(int64(b1)>>63)
	var c uint64
	p1, p0 := bits.Mul64(a0, u)
	p2, t := bits.Mul64(a1, u)
	p1, c = bits.Add64(p1, t, 0)
	p2 += c - u&signRe
	q1, q0 := bits.Mul64(b0, v)
	q2, t := bits.Mul64(b1, v)
	q1, c = bits.Add64(q1, t, 0)
	q2 += c - v&signIm
	p0, c = bits.Sub64(p0, q0, 0)
	p1, c = bits.Sub64(p1, q1, c)
	p2, _ = bits.Sub64(p2, q2, c)
	r1, r0 := bits.Mul64(a0, v)
	r2, t := bits.Mul64(a1, v)
	r1, c = bits.Add64(r1, t, 0)
	r2 += c - v&signRe
	s1, s0 := bits.Mul64(b0, u)
	s2, t := bits.Mul64(b1, u)
	s1, c = bits.Add64(s1, t, 0)
	s2 += c - u&signIm
	r0, c = bits.Add64(r0, s0, 0)
	r1, c = bits.Add64(r1, s1, c)
	r2, _ = bits.Add64(r2, s2, c)
	re[0] = p1<<left | p0>>(64-left)
	re[1] = p2<<left | p1>>(64-left)
	im[0] = r1<<left | r0>>(64-left)
	im[1] = r2<<left | r1>>(64-left)
}

// rotateLong is rotate for several words.
func rotateLong(re, im []uint64, z *fixedPoint, shift int, real bool, s *scratch) {
	left := uint(1 - shift)
	n := len(z.u)
	mulSigned(s.t1, re, z.u)
	if real {
		shiftInto(re, s.t1, n-1, left)
		return
	}
	mulSigned(s.t2, im, z.v)
	mulSigned(s.t3, re, z.v)
	mulSigned(s.t4, im, z.u)
	subFixed(s.t1, s.t2)
	addFixed(s.t3, s.t4)
	shiftInto(re, s.t1, n-1, left)
	shiftInto(im, s.t3, n-1, left)
}

// shiftInto sets dst to the words of t from skip on, shifted left by left bits
// with what comes up from the word before.
func shiftInto(dst, t []uint64, skip int, left uint) {
	for i := range dst {
		dst[i] = t[skip+i+1]<<left | t[skip+i]>>(64-left)
	}
}

// mulSigned sets t to the product of the two's-complement a and the unsigned u.
func mulSigned(t, a, u []uint64) {
	clear(t)
	w := len(a)
	for j, m := range u {
		if m == 0 {
			continue
		}
		var carry uint64
		row := t[j : j+w+1]
		for i, x := range a {
			h, l := bits.Mul64(x, m)
			var c uint64
			l, c = bits.Add64(l, carry, 0)
			h += c
			row[i], c = bits.Add64(row[i], l, 0)
			carry = h + c
		}
		row[w] = carry
	}
	if int64(a[w-1]) < 0 {
		subFixed(t[w:], u)
	}
}

func addFixed(x, y []uint64) {
	var c uint64
	y = y[:len(x)]
	for i := range x {
		x[i], c = bits.Add64(x[i], y[i], c)
	}
}

func subFixed(x, y []uint64) {
	var c uint64
	y = y[:len(x)]
	for i := range x {
		x[i], c = bits.Sub64(x[i], y[i], c)
	}
}

func isZeroWords(x []uint64) bool {
	for _, w := range x {
		if w != 0 {
			return false
		}
	}
	return true
}

// complexWords returns floats a, b and an exponent e with re = a·2^e and
// im = b·2^e up to 2^-52 of the larger.
func complexWords(re, im []uint64) (a, b float64, e int) {
	i := len(re) - 1
	// The leading word that says something: not all sign bits in both parts.
	for i > 0 && plainSign(re[i], re[i-1]) && plainSign(im[i], im[i-1]) {
		i--
	}
	if i == 0 {
		return float64(int64(re[0])), float64(int64(im[0])), 0
	}
	a = math.Ldexp(float64(int64(re[i])), 64) + float64(re[i-1])
	b = math.Ldexp(float64(int64(im[i])), 64) + float64(im[i-1])
	if i > 1 {
		// The leading word may hold as little as its sign bit.
		a += math.Ldexp(float64(re[i-2]), -64)
		b += math.Ldexp(float64(im[i-2]), -64)
	}
	return a, b, 64 * (i - 1)
}

// plainSign tells whether the word high only repeats the sign bit of low.
func plainSign(high, low uint64) bool { return high == uint64(int64(low)>>63) }
