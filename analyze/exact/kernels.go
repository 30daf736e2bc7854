package exact

import "math/bits"

// The kernels work on vectors of residues, one element per evaluation point.
// They compute dst = g − Σ aₖ·bₖ with one Montgomery reduction per element:
// up to seven products below p² < p·2^61 add up to less than p·2^64, which is
// what a reduction accepts. All slices have the length of dst.

// chunkPoints is how many points are worked on together: short enough that
// the factors of a mid-sized network stay in the cache, long enough to hide
// the cost of a call.
const chunkPoints = 64

// dot1 is the kernel for 1 product.
func dot1(dst, a0, b0 []uint64, g, p, inv uint64) {
	a0, b0 = a0[:len(dst)], b0[:len(dst)]
	for i := range dst {
		hi, lo := bits.Mul64(a0[i], b0[i])
		q, _ := bits.Mul64(lo*inv, p)
		t, borrow := bits.Sub64(hi, q, 0)
		t += p & -borrow
		t, borrow = bits.Sub64(g, t, 0)
		dst[i] = t + p&-borrow
	}
}

// dot2 is the kernel for 2 products.
func dot2(dst, a0, b0, a1, b1 []uint64, g, p, inv uint64) {
	a0, b0 = a0[:len(dst)], b0[:len(dst)]
	a1, b1 = a1[:len(dst)], b1[:len(dst)]
	for i := range dst {
		hi, lo := bits.Mul64(a0[i], b0[i])
		h1, l1 := bits.Mul64(a1[i], b1[i])
		var c uint64
		lo, c = bits.Add64(lo, l1, 0)
		hi, _ = bits.Add64(hi, h1, c)
		q, _ := bits.Mul64(lo*inv, p)
		t, borrow := bits.Sub64(hi, q, 0)
		t += p & -borrow
		t, borrow = bits.Sub64(g, t, 0)
		dst[i] = t + p&-borrow
	}
}

// dot3 is the kernel for 3 products.
func dot3(dst, a0, b0, a1, b1, a2, b2 []uint64, g, p, inv uint64) {
	a0, b0 = a0[:len(dst)], b0[:len(dst)]
	a1, b1 = a1[:len(dst)], b1[:len(dst)]
	a2, b2 = a2[:len(dst)], b2[:len(dst)]
	for i := range dst {
		hi, lo := bits.Mul64(a0[i], b0[i])
		h1, l1 := bits.Mul64(a1[i], b1[i])
		var c uint64
		lo, c = bits.Add64(lo, l1, 0)
		hi, _ = bits.Add64(hi, h1, c)
		h2, l2 := bits.Mul64(a2[i], b2[i])
		lo, c = bits.Add64(lo, l2, 0)
		hi, _ = bits.Add64(hi, h2, c)
		q, _ := bits.Mul64(lo*inv, p)
		t, borrow := bits.Sub64(hi, q, 0)
		t += p & -borrow
		t, borrow = bits.Sub64(g, t, 0)
		dst[i] = t + p&-borrow
	}
}

// dot4 is the kernel for 4 products.
func dot4(dst, a0, b0, a1, b1, a2, b2, a3, b3 []uint64, g, p, inv uint64) {
	a0, b0 = a0[:len(dst)], b0[:len(dst)]
	a1, b1 = a1[:len(dst)], b1[:len(dst)]
	a2, b2 = a2[:len(dst)], b2[:len(dst)]
	a3, b3 = a3[:len(dst)], b3[:len(dst)]
	for i := range dst {
		hi, lo := bits.Mul64(a0[i], b0[i])
		h1, l1 := bits.Mul64(a1[i], b1[i])
		var c uint64
		lo, c = bits.Add64(lo, l1, 0)
		hi, _ = bits.Add64(hi, h1, c)
		h2, l2 := bits.Mul64(a2[i], b2[i])
		lo, c = bits.Add64(lo, l2, 0)
		hi, _ = bits.Add64(hi, h2, c)
		h3, l3 := bits.Mul64(a3[i], b3[i])
		lo, c = bits.Add64(lo, l3, 0)
		hi, _ = bits.Add64(hi, h3, c)
		q, _ := bits.Mul64(lo*inv, p)
		t, borrow := bits.Sub64(hi, q, 0)
		t += p & -borrow
		t, borrow = bits.Sub64(g, t, 0)
		dst[i] = t + p&-borrow
	}
}

// dotConstant fills dst with g.
func dotConstant(dst []uint64, g uint64) {
	for i := range dst {
		dst[i] = g
	}
}

// accumulate4 adds four products to the 128-bit sums hi:lo and keeps them
// below p·2^64.
func accumulate4(hi, lo, a0, b0, a1, b1, a2, b2, a3, b3 []uint64, p uint64) {
	lo = lo[:len(hi)]
	a0, b0 = a0[:len(hi)], b0[:len(hi)]
	a1, b1 = a1[:len(hi)], b1[:len(hi)]
	a2, b2 = a2[:len(hi)], b2[:len(hi)]
	a3, b3 = a3[:len(hi)], b3[:len(hi)]
	for i := range hi {
		h, l := bits.Mul64(a0[i], b0[i])
		h1, l1 := bits.Mul64(a1[i], b1[i])
		var c uint64
		l, c = bits.Add64(l, l1, 0)
		h, _ = bits.Add64(h, h1, c)
		h1, l1 = bits.Mul64(a2[i], b2[i])
		l, c = bits.Add64(l, l1, 0)
		h, _ = bits.Add64(h, h1, c)
		h1, l1 = bits.Mul64(a3[i], b3[i])
		l, c = bits.Add64(l, l1, 0)
		h, _ = bits.Add64(h, h1, c)
		l, c = bits.Add64(l, lo[i], 0)
		h, _ = bits.Add64(h, hi[i], c)
		lo[i] = l
		// hi:lo < p·2^64 + 4p² < 1.5·p·2^64: one subtraction restores it.
		t, borrow := bits.Sub64(h, p, 0)
		hi[i] = t + p&-borrow
	}
}

// accumulate1 adds one product to the sums as accumulate4 does.
func accumulate1(hi, lo, a, b []uint64, p uint64) {
	lo, a, b = lo[:len(hi)], a[:len(hi)], b[:len(hi)]
	for i := range hi {
		h, l := bits.Mul64(a[i], b[i])
		var c uint64
		l, c = bits.Add64(l, lo[i], 0)
		h, _ = bits.Add64(h, hi[i], c)
		lo[i] = l
		t, borrow := bits.Sub64(h, p, 0)
		hi[i] = t + p&-borrow
	}
}

// finish sets dst = g − hi:lo / 2^64.
func finish(dst, hi, lo []uint64, g, p, inv uint64) {
	hi, lo = hi[:len(dst)], lo[:len(dst)]
	for i := range dst {
		q, _ := bits.Mul64(lo[i]*inv, p)
		t, borrow := bits.Sub64(hi[i], q, 0)
		t += p & -borrow
		t, borrow = bits.Sub64(g, t, 0)
		dst[i] = t + p&-borrow
	}
}

// mulInto sets dst = a·b; dst may be a or b.
func mulInto(dst, a, b []uint64, p, inv uint64) {
	a, b = a[:len(dst)], b[:len(dst)]
	for i := range dst {
		dst[i] = montgomery(a[i], b[i], p, inv)
	}
}

// negInto sets dst = −a.
func negInto(dst, a []uint64, p uint64) {
	a = a[:len(dst)]
	for i := range dst {
		if v := a[i]; v != 0 {
			v = p - v
			dst[i] = v
		} else {
			dst[i] = 0
		}
	}
}

// addInto sets dst = dst + a.
func addInto(dst, a []uint64, p uint64) {
	a = a[:len(dst)]
	for i := range dst {
		t, borrow := bits.Sub64(dst[i]+a[i], p, 0)
		dst[i] = t + p&-borrow
	}
}

// inverseLanes is the number of independent product chains in inverseInto,
// which hide the latency of the multiplications.
const inverseLanes = 4

// inverseInto sets dst = 1/a elementwise and reports whether no element is
// zero: one inversion per call, with products of prefixes (P. L. Montgomery,
// Mathematics of Computation 48 (1987) 243–264, §10.3.1). dst and a differ.
func (m *modulus) inverseInto(dst, a []uint64) bool {
	p, inv := m.p, m.inv
	n := len(a)
	dst = dst[:n]
	if n == 0 {
		return true
	}
	var lane [inverseLanes]uint64
	for k := range lane {
		lane[k] = m.one
	}
	// dst[i] = product of the earlier elements of the same lane.
	for i, v := range a {
		k := i % inverseLanes
		dst[i] = lane[k]
		lane[k] = montgomery(lane[k], v, p, inv)
	}
	m01, m23 := m.mul(lane[0], lane[1]), m.mul(lane[2], lane[3])
	all := m.mul(m01, m23)
	if all == 0 {
		return false
	}
	all = m.inverse(all)
	i01, i23 := m.mul(all, m23), m.mul(all, m01)
	lane[0], lane[1] = m.mul(i01, lane[1]), m.mul(i01, lane[0])
	lane[2], lane[3] = m.mul(i23, lane[3]), m.mul(i23, lane[2])
	for i := n - 1; i >= 0; i-- {
		k := i % inverseLanes
		dst[i] = montgomery(dst[i], lane[k], p, inv)
		lane[k] = montgomery(lane[k], a[i], p, inv)
	}
	return true
}
