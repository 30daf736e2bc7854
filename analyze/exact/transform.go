package exact

import (
	"slices"
	"sync"
)

// transformSizes are the divisors of fieldOrder, ascending: the lengths of
// Fourier transforms that exist modulo every prime in use.
var transformSizes = sync.OnceValue(func() []int {
	var list []int
	for n := 1; n*n <= fieldOrder; n++ {
		if fieldOrder%n == 0 {
			list = append(list, n)
			if n*n != fieldOrder {
				list = append(list, fieldOrder/n)
			}
		}
	}
	slices.Sort(list)
	return list
})

// transformSize returns the least transform length of at least n.
func transformSize(n int) int {
	sizes := transformSizes()
	i, _ := slices.BinarySearch(sizes, n)
	if i == len(sizes) {
		panic("exact: the degree is too large for the evaluation points")
	}
	return sizes[i]
}

// points are evaluation points x·ωⁱ, i < n, modulo a prime, with ω a
// primitive n-th root of unity, and what is needed to interpolate on them.
type points struct {
	m       *modulus
	x       []uint64
	twiddle []uint64 // ω⁻ⁱ
	unscale []uint64 // x⁻ⁱ/n
	scratch []uint64
}

// newPoints prepares n points on the coset of start ≠ 0.
func (m *modulus) newPoints(n int, start uint64) *points {
	buf := make([]uint64, 4*n)
	q := &points{m: m, x: buf[:n], twiddle: buf[n : 2*n], unscale: buf[2*n : 3*n], scratch: buf[3*n:]}
	w := m.rootOfUnity(n)
	back, down := m.pow(w, uint64(n-1)), m.inverse(start)
	q.x[0], q.twiddle[0], q.unscale[0] = start, m.one, m.inverse(m.fromUint(uint64(n)))
	for i := 1; i < n; i++ {
		q.x[i] = m.mul(q.x[i-1], w)
		q.twiddle[i] = m.mul(q.twiddle[i-1], back)
		q.unscale[i] = m.mul(q.unscale[i-1], down)
	}
	return q
}

// interpolate overwrites the values at the points with the coefficients, in
// ascending order, of the polynomial of degree below n that takes them.
func (q *points) interpolate(values []uint64) {
	n := len(q.x)
	src := q.scratch
	copy(src, values)
	q.inverseDFT(values, src, n, 1)
	for i := range values {
		values[i] = q.m.mul(values[i], q.unscale[i])
	}
}

// inverseDFT sets dst[k] = Σ src[i·stride]·ω⁻ⁱᵏ over i < n for ω of order n:
// decimation in time (J. W. Cooley and J. W. Tukey, Mathematics of Computation
// 19 (1965) 297–301) with the radices 2, 3, 5 and 7.
func (q *points) inverseDFT(dst, src []uint64, n, stride int) {
	if n == 1 {
		dst[0] = src[0]
		return
	}
	r := radix(n)
	size := n / r
	for k := range r {
		q.inverseDFT(dst[k*size:(k+1)*size], src[k*stride:], size, stride*r)
	}
	m := q.m
	if r == 2 {
		for k := range size {
			a := dst[k]
			b := m.mul(dst[k+size], q.twiddle[k*stride])
			dst[k], dst[k+size] = m.add(a, b), m.sub(a, b)
		}
		return
	}
	var a [7]uint64
	total := len(q.twiddle)
	step := total / r // ω⁻ˢᵗᵉᵖ has order r
	for k := range size {
		for t := range r {
			a[t] = m.mul(dst[k+t*size], q.twiddle[t*k*stride%total])
		}
		for t := range r {
			sum := a[0]
			for u := 1; u < r; u++ {
				sum = m.add(sum, m.mul(a[u], q.twiddle[t*u%r*step]))
			}
			dst[k+t*size] = sum
		}
	}
}

// radix returns the least prime divisor of n, which divides fieldOrder.
func radix(n int) int {
	for _, r := range fieldOrderPrimes {
		if n%int(r) == 0 {
			return int(r)
		}
	}
	panic("exact: transform length with a large prime divisor")
}
