package exact

import "math/big"

// GCD returns the greatest common divisor of a and b as a primitive integer
// polynomial with positive leading coefficient; GCD(0, 0) is 0.
//
// It is computed from images modulo primes (W. S. Brown, Journal of the ACM
// 18 (1971) 478–504) and accepted only after dividing both arguments exactly,
// which proves it: an image has at least the true degree, so a common divisor
// of the least degree seen is the greatest.
func GCD(a, b Poly) Poly {
	if a.IsZero() {
		return b.Primitive()
	}
	if b.IsZero() {
		return a.Primitive()
	}
	// The power of s is common and cheap; without it the images are smaller.
	k := min(a.Order(), b.Order())
	a, b = a.Shift(-a.Order()).Primitive(), b.Shift(-b.Order()).Primitive()
	return modularGCD(a, b).Shift(k)
}

// modularGCD is GCD for primitive polynomials without the factor s.
func modularGCD(a, b Poly) Poly {
	if a.Degree() == 0 || b.Degree() == 0 {
		return PolyFromInt64s(1)
	}
	lead := new(big.Int).GCD(nil, nil, new(big.Int).Abs(a.c[a.Degree()]), new(big.Int).Abs(b.c[b.Degree()]))
	var (
		acc    []*big.Int // CRT image of lead·gcd, symmetric residues
		mod    *big.Int
		degree = min(a.Degree(), b.Degree()) + 1
	)
	for i := 0; ; i++ {
		m := takeModuli(i + 1)[i]
		if m.fromBig(a.c[a.Degree()]) == 0 || m.fromBig(b.c[b.Degree()]) == 0 {
			continue
		}
		g := m.gcd(m.polyFrom(a.c), m.polyFrom(b.c))
		if len(g) == 1 {
			return PolyFromInt64s(1)
		}
		if len(g)-1 > degree {
			continue // unlucky prime
		}
		l := m.fromBig(lead)
		for j := range g {
			g[j] = m.mul(g[j], l)
		}
		if len(g)-1 < degree { // everything before was unlucky
			degree = len(g) - 1
			acc, mod = nil, nil
		}
		var changed bool
		acc, mod, changed = m.extendCRT(acc, mod, g)
		if changed {
			continue
		}
		candidate := PolyFromInts(acc, nil).Primitive()
		if _, ok := a.divide(candidate); !ok {
			continue
		}
		if _, ok := b.divide(candidate); ok {
			return candidate
		}
	}
}

// extendCRT combines residues modulo mod (symmetric, nil at the start) with
// the image g modulo m and reports whether any value changed.
func (m *modulus) extendCRT(acc []*big.Int, mod *big.Int, g []uint64) ([]*big.Int, *big.Int, bool) {
	p := new(big.Int).SetUint64(m.p)
	if acc == nil {
		acc = make([]*big.Int, len(g))
		half := m.p / 2
		for i, v := range g {
			acc[i] = new(big.Int).SetUint64(m.plain(v))
			if m.plain(v) > half {
				acc[i].Sub(acc[i], p)
			}
		}
		return acc, p, true
	}
	changed := false
	inv := m.inverse(m.fromBig(mod))
	next := new(big.Int).Mul(mod, p)
	t := new(big.Int)
	for i, v := range g {
		d := m.plain(m.mul(m.sub(v, m.fromBig(acc[i])), inv))
		if d == 0 {
			continue
		}
		changed = true
		t.SetUint64(d)
		if d > m.p/2 {
			t.Sub(t, p)
		}
		acc[i].Add(acc[i], t.Mul(t, mod))
	}
	return acc, next, changed
}

// polyFrom returns the residues of an integer polynomial, without trailing
// zeros.
func (m *modulus) polyFrom(c []*big.Int) []uint64 {
	f := make([]uint64, len(c))
	for i, v := range c {
		f[i] = m.fromBig(v)
	}
	return trimResidues(f)
}

func trimResidues(f []uint64) []uint64 {
	for len(f) > 0 && f[len(f)-1] == 0 {
		f = f[:len(f)-1]
	}
	return f
}

// gcd returns the monic greatest common divisor of two nonzero polynomials
// over ℤ/p; the arguments are overwritten.
func (m *modulus) gcd(f, g []uint64) []uint64 {
	if len(f) < len(g) {
		f, g = g, f
	}
	for len(g) > 0 {
		f, g = g, m.remainder(f, g)
	}
	inv := m.inverse(f[len(f)-1])
	for i := range f {
		f[i] = m.mul(f[i], inv)
	}
	return f
}

// remainder returns f mod g, in f's memory.
func (m *modulus) remainder(f, g []uint64) []uint64 {
	n := len(g)
	inv := m.inverse(g[n-1])
	p, pinv := m.p, m.inv
	for len(f) >= n {
		q := m.mul(f[len(f)-1], inv)
		top := f[len(f)-n:]
		for i, v := range g[:n-1] {
			t := montgomery(q, v, p, pinv)
			u := top[i] - t
			if top[i] < t {
				u += p
			}
			top[i] = u
		}
		f = trimResidues(f[:len(f)-1])
	}
	return f
}
