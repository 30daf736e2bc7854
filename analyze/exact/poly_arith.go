package exact

import "math/big"

// Add returns p + q.
func (p Poly) Add(q Poly) Poly { return combine(p, q, false) }

// Sub returns p − q.
func (p Poly) Sub(q Poly) Poly { return combine(p, q, true) }

// combine returns p ± q over the least common denominator.
func combine(p, q Poly, subtract bool) Poly {
	if q.IsZero() {
		return p
	}
	if p.IsZero() && !subtract {
		return q
	}
	pd, qd := p.denominator(), q.denominator()
	den, pf, qf := pd, bigOne, bigOne
	if pd.Cmp(qd) != 0 {
		g := new(big.Int).GCD(nil, nil, pd, qd)
		pf = new(big.Int).Quo(qd, g)
		qf = new(big.Int).Quo(pd, g)
		den = new(big.Int).Mul(pd, pf)
	}
	n := max(len(p.c), len(q.c))
	c := newInts(n)
	t := new(big.Int)
	for i, v := range c {
		if i < len(p.c) {
			v.Mul(p.c[i], pf)
		}
		if i < len(q.c) {
			t.Mul(q.c[i], qf)
			if subtract {
				v.Sub(v, t)
			} else {
				v.Add(v, t)
			}
		}
	}
	return makePoly(c, den)
}

// Neg returns −p.
func (p Poly) Neg() Poly {
	c := newInts(len(p.c))
	for i, v := range p.c {
		c[i].Neg(v)
	}
	return Poly{c: c, den: p.den}
}

// Scale returns r·p.
func (p Poly) Scale(r *big.Rat) Poly {
	if r.Sign() == 0 || p.IsZero() {
		return Poly{}
	}
	c := newInts(len(p.c))
	for i, v := range p.c {
		c[i].Mul(v, r.Num())
	}
	return makePoly(c, new(big.Int).Mul(p.denominator(), r.Denom()))
}

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly {
	if p.IsZero() || q.IsZero() {
		return Poly{}
	}
	var den *big.Int
	if p.den != nil || q.den != nil {
		den = new(big.Int).Mul(p.denominator(), q.denominator())
	}
	return makePoly(mulInts(p.c, q.c), den)
}

// mulInts returns the product of two integer polynomials, both non-empty.
func mulInts(a, b []*big.Int) []*big.Int {
	if min(len(a), len(b)) >= kroneckerTerms {
		return mulKronecker(a, b)
	}
	c := newInts(len(a) + len(b) - 1)
	t := new(big.Int)
	for i, x := range a {
		if x.Sign() == 0 {
			continue
		}
		for j, y := range b {
			c[i+j].Add(c[i+j], t.Mul(x, y))
		}
	}
	return c
}

// Pow returns pⁿ for n ≥ 0; p⁰ is 1, also for the zero polynomial.
func (p Poly) Pow(n int) Poly {
	if n < 0 {
		panic("exact: negative power of a polynomial")
	}
	out := PolyFromInt64s(1)
	for base := p; n > 0; n >>= 1 {
		if n&1 == 1 {
			out = out.Mul(base)
		}
		if n > 1 {
			base = base.Mul(base)
		}
	}
	return out
}

// Derivative returns dp/ds.
func (p Poly) Derivative() Poly {
	if len(p.c) <= 1 {
		return Poly{}
	}
	c := newInts(len(p.c) - 1)
	for i := range c {
		c[i].Mul(p.c[i+1], big.NewInt(int64(i+1)))
	}
	return makePoly(c, p.den)
}

// Shift returns p·s^k. With negative k it divides by s^−k and panics unless
// s^−k divides p.
func (p Poly) Shift(k int) Poly {
	if k == 0 || p.IsZero() {
		return p
	}
	if k < 0 {
		if p.Order() < -k {
			panic("exact: polynomial is not divisible by that power of s")
		}
		return Poly{c: p.c[-k:], den: p.den}
	}
	c := make([]*big.Int, len(p.c)+k)
	for i := range k {
		c[i] = bigZero
	}
	copy(c[k:], p.c)
	return Poly{c: c, den: p.den}
}

// ScaleArgument returns p(r·s).
func (p Poly) ScaleArgument(r *big.Rat) Poly {
	if r.Sign() == 0 {
		return NewPoly(p.Coeff(0))
	}
	n := len(p.c)
	if n <= 1 {
		return p
	}
	// c[i]·aⁱ·bⁿ⁻ⁱ over den·bⁿ, for r = a/b.
	c := newInts(n)
	power := big.NewInt(1)
	for i := range c {
		c[i].Mul(p.c[i], power)
		power.Mul(power, r.Num())
	}
	den := p.denominator()
	if !r.IsInt() {
		power.SetInt64(1)
		for i := n - 1; i >= 0; i-- {
			c[i].Mul(c[i], power)
			if i > 0 {
				power.Mul(power, r.Denom())
			}
		}
		den = new(big.Int).Mul(den, power)
	}
	return makePoly(c, den)
}

// Reverse returns s^n·p(1/s) with n the degree of p: the coefficients in
// opposite order.
func (p Poly) Reverse() Poly {
	n := len(p.c)
	c := make([]*big.Int, n)
	for i, v := range p.c {
		c[n-1-i] = v
	}
	return makePoly(c, p.den)
}

// Monic returns p divided by its leading coefficient; the zero polynomial
// stays zero.
func (p Poly) Monic() Poly {
	if p.IsZero() {
		return p
	}
	c := make([]*big.Int, len(p.c))
	copy(c, p.c)
	return makePoly(c, c[len(c)-1])
}

// Primitive returns the integer polynomial without common factor and with a
// positive leading coefficient that is a rational multiple of p; the zero
// polynomial stays zero.
func (p Poly) Primitive() Poly {
	if p.IsZero() {
		return p
	}
	g := contentWith(p.c, bigZero)
	if p.c[len(p.c)-1].Sign() < 0 {
		g.Neg(g)
	}
	if isOne(g) {
		return Poly{c: p.c}
	}
	c := newInts(len(p.c))
	for i, v := range p.c {
		c[i].Quo(v, g)
	}
	return Poly{c: c}
}

// DivMod returns quotient and remainder of p divided by d:
// p = quotient·d + remainder, degree(remainder) < degree(d). It panics if d
// is zero.
func (p Poly) DivMod(d Poly) (quotient, remainder Poly) {
	if d.IsZero() {
		panic("exact: division by the zero polynomial")
	}
	steps := len(p.c) - len(d.c) + 1
	if steps <= 0 {
		return Poly{}, p
	}
	// Pseudo-division of the integer parts: l^k·a = q·b + r, where only as
	// many factors l are spent as there are nonzero steps.
	l := d.c[len(d.c)-1]
	r := make([]*big.Int, len(p.c))
	for i, v := range p.c {
		r[i] = new(big.Int).Set(v)
	}
	q := make([]*big.Int, steps)
	scale := big.NewInt(1)
	t := new(big.Int)
	rem := new(big.Int)
	for k := steps - 1; k >= 0; k-- {
		top := r[k+len(d.c)-1]
		q[k] = new(big.Int)
		if top.Sign() == 0 {
			continue
		}
		quo, _ := t.QuoRem(top, l, rem)
		if rem.Sign() == 0 {
			q[k].Set(quo)
		} else {
			// Multiply everything by l / gcd(l, top).
			g := new(big.Int).GCD(nil, nil, new(big.Int).Abs(l), new(big.Int).Abs(top))
			f := new(big.Int).Quo(l, g)
			q[k].Quo(top, g)
			for i := range k + len(d.c) {
				r[i].Mul(r[i], f)
			}
			for i := k + 1; i < steps; i++ {
				q[i].Mul(q[i], f)
			}
			scale.Mul(scale, f)
		}
		for i, v := range d.c {
			r[k+i].Sub(r[k+i], t.Mul(q[k], v))
		}
	}
	// p.c/pd = (q·d.c + r)/(scale·pd), and d.c = d·dd.
	den := new(big.Int).Mul(scale, p.denominator())
	for i := range q {
		q[i].Mul(q[i], d.denominator())
	}
	return makePoly(q, den), makePoly(r, new(big.Int).Set(den))
}

// Quo returns the exact quotient p/d and panics if d is zero or does not
// divide p.
func (p Poly) Quo(d Poly) Poly {
	q, ok := p.divide(d)
	if !ok {
		panic("exact: inexact division of polynomials")
	}
	return q
}

// divide returns p/d and whether the division is exact. By Gauss's lemma the
// quotient of primitive integer polynomials is an integer polynomial, so the
// first inexact integer quotient settles the question.
func (p Poly) divide(d Poly) (Poly, bool) {
	if d.IsZero() {
		panic("exact: division by the zero polynomial")
	}
	if p.IsZero() {
		return p, true
	}
	pc := contentWith(p.c, bigZero)
	dc := contentWith(d.c, bigZero)
	a := make([]*big.Int, len(p.c))
	for i, v := range p.c {
		a[i] = new(big.Int).Quo(v, pc)
	}
	b := make([]*big.Int, len(d.c))
	for i, v := range d.c {
		b[i] = new(big.Int).Quo(v, dc)
	}
	q, ok := divideInts(a, b)
	if !ok {
		return Poly{}, false
	}
	// (pc/pd)·a over (dc/dd)·b.
	num := pc.Mul(pc, d.denominator())
	den := dc.Mul(dc, p.denominator())
	return makePoly(q, bigOne).Scale(new(big.Rat).SetFrac(num, den)), true
}

// divideInts divides integer polynomials; a is overwritten. It reports
// failure when the quotient is not an integer polynomial.
func divideInts(a, b []*big.Int) ([]*big.Int, bool) {
	steps := len(a) - len(b) + 1
	if steps <= 0 {
		return nil, false
	}
	q := make([]*big.Int, steps)
	l := b[len(b)-1]
	t, rem := new(big.Int), new(big.Int)
	for k := steps - 1; k >= 0; k-- {
		q[k] = new(big.Int)
		top := a[k+len(b)-1]
		if top.Sign() == 0 {
			continue
		}
		if q[k].QuoRem(top, l, rem); rem.Sign() != 0 {
			return nil, false
		}
		for i, v := range b {
			a[k+i].Sub(a[k+i], t.Mul(q[k], v))
		}
	}
	for i := range len(b) - 1 {
		if a[i].Sign() != 0 {
			return nil, false
		}
	}
	return q, true
}
