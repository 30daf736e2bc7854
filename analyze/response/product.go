package response

import (
	"context"
	"math/big"
	"sort"
	"strings"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

var polyS = exact.PolyFromInt64s(0, 1)

func constantPoly(r *big.Rat) exact.Poly { return exact.Constant(r) }

// product is the product of two signals and a factor: a power, an energy.
type product struct {
	a, b   *Signal
	factor *big.Rat
}

// Times returns k·s·t at each instant, for instance the power of a voltage and
// a current. Impulses have no product: a measure over a range that holds one is
// undefined.
func (s *Signal) Times(t *Signal, k number.Exact) *Curve {
	kin := append(append([]component(nil), s.comps...), t.comps...)
	a := &Signal{solution: s.solution, comps: s.comps, before: s.before, kin: kin}
	b := a
	if t != s {
		b = &Signal{solution: t.solution, comps: t.comps, before: t.before, kin: kin}
	}
	return &Curve{leaf: &product{a, b, k.Rat()}}
}

// Breakpoints implements form.
func (p *product) Breakpoints() []*big.Rat {
	return sortedInstants(append(append([]*big.Rat(nil), p.a.Breakpoints()...), p.b.Breakpoints()...))
}

// ExactAt implements form.
func (p *product) ExactAt(ctx context.Context, t *big.Rat, side Side) (*big.Rat, bool, error) {
	x, ok, err := p.a.ExactAt(ctx, t, side)
	if !ok || err != nil {
		return nil, false, err
	}
	y, ok, err := p.b.ExactAt(ctx, t, side)
	if !ok || err != nil {
		return nil, false, err
	}
	z := new(big.Rat).Mul(x, y)
	return z.Mul(z, p.factor), true, nil
}

// impulseAt implements form.
func (p *product) impulseAt(ctx context.Context, t *big.Rat) (bool, error) {
	if p.a.IsZero() || p.b.IsZero() {
		return false, nil
	}
	yes, err := p.a.impulseAt(ctx, t)
	if yes || err != nil {
		return yes, err
	}
	return p.b.impulseAt(ctx, t)
}

func (p *product) valueAt(ctx context.Context, t *big.Rat, side Side, prec uint) (value, size number.Ball, err error) {
	x, sx, err := p.a.valueAt(ctx, t, side, prec)
	if err != nil {
		return value, size, err
	}
	y, sy, err := p.b.valueAt(ctx, t, side, prec)
	if err != nil {
		return value, size, err
	}
	return x.Mul(y).MulRat(p.factor), sx.Mul(sy).MulRat(p.factor).Abs(), nil
}

// sumFrom implements form: terms multiply, poles add.
func (p *product) sumFrom(ctx context.Context, origin *big.Rat, prec uint) (*sum, error) {
	if p.factor.Sign() == 0 {
		return &sum{}, nil
	}
	x, err := p.a.sumFrom(ctx, origin, prec)
	if err != nil {
		return nil, err
	}
	y := x
	if p.b != p.a {
		if y, err = p.b.sumFrom(ctx, origin, prec); err != nil {
			return nil, err
		}
	}
	return multiplySums(x, y, p.factor, prec), nil
}

// multiplySums multiplies two sums and a factor.
func multiplySums(x, y *sum, factor *big.Rat, prec uint) *sum {
	acc := map[string]*term{}
	var order []string
	put := func(t term) {
		old, ok := acc[t.pole.id]
		if !ok {
			acc[t.pole.id] = &t
			order = append(order, t.pole.id)
			return
		}
		for len(old.c) < len(t.c) {
			old.c = append(old.c, number.ComplexBall{})
		}
		for m := range t.c {
			old.c[m] = old.c[m].Add(t.c[m])
		}
	}
	for _, s := range x.terms {
		for _, t := range y.terms {
			for _, u := range multiplyTerms(s, t) {
				for m := range u.c {
					u.c[m] = u.c[m].MulRat(factor)
				}
				put(u)
			}
		}
	}
	out := &sum{dropped: x.dropped || y.dropped}
	for _, id := range order {
		out.terms = append(out.terms, *acc[id])
	}
	out.constant = multiplyConstants(x, y, factor)
	if out.constant != nil {
		out.setConstant(prec)
	}
	return out
}

// multiplyConstants is the exact part at s = 0 when only constants give it.
func multiplyConstants(x, y *sum, factor *big.Rat) []*big.Rat {
	if x.constant == nil || y.constant == nil || x.couples(y) {
		return nil
	}
	out := make([]*big.Rat, len(x.constant)+len(y.constant)-1)
	for i := range out {
		out[i] = new(big.Rat)
	}
	for i, a := range x.constant {
		for j, b := range y.constant {
			v := new(big.Rat).Mul(a, b)
			out[i+j].Add(out[i+j], v.Mul(v, factor))
		}
	}
	return out
}

// couples tells whether poles of x and y other than 0 may add to 0.
func (x *sum) couples(y *sum) bool {
	for _, s := range x.terms {
		for _, t := range y.terms {
			if !s.pole.zero && !t.pole.zero && (s.pole.axis && t.pole.axis || s.pole.p.Re.Add(t.pole.p.Re).ContainsZero()) {
				return true
			}
		}
	}
	return false
}

// setConstant rounds the exact part again.
func (x *sum) setConstant(prec uint) {
	for i := range x.terms {
		if x.terms[i].pole.zero {
			for m := range x.terms[i].c {
				x.terms[i].c[m] = realBall(number.BallFromRat(x.constant[m], prec))
			}
		}
	}
}

// multiplyTerms multiplies two terms that stand for themselves and their
// conjugates: p+q and, when both are complex, p+q̄.
func multiplyTerms(s, t term) []term {
	c := multiplyPolys(s.c, t.c)
	if s.pole.real || t.pole.real {
		return []term{{addPoles(s.pole, t.pole, false), c}}
	}
	conj := make([]number.ComplexBall, len(t.c))
	for i := range conj {
		conj[i] = t.c[i].Conj()
	}
	return []term{
		{addPoles(s.pole, t.pole, false), c},
		upper(term{addPoles(s.pole, t.pole, true), multiplyPolys(s.c, conj)}),
	}
}

func multiplyPolys(a, b []number.ComplexBall) []number.ComplexBall {
	out := make([]number.ComplexBall, len(a)+len(b)-1)
	for i := range a {
		for j := range b {
			out[i+j] = out[i+j].Add(a[i].Mul(b[j]))
		}
	}
	return out
}

// addPoles adds poles, the second conjugated when said. Equal multisets of
// poles get equal ids; the conjugate of a pole is written with a bar.
func addPoles(p, q termPole, conj bool) termPole {
	b := q.p
	if conj {
		b = b.Conj()
	}
	out := termPole{p: p.p.Add(b), index: -1, real: p.real && q.real, axis: p.axis && q.axis}
	if p.zero {
		q.index = -1
		return q
	}
	if q.zero {
		p.index = -1
		return p
	}
	if p.real && q.real {
		out.id = joinIDs(p.id, q.id)
		r, ok := new(big.Rat).SetString(p.id)
		s, also := new(big.Rat).SetString(q.id)
		if ok && also {
			r.Add(r, s)
			out.id, out.zero = r.RatString(), r.Sign() == 0
			out.axis = out.zero
		}
		return out
	}
	if conj {
		if p.id == q.id { // p + p̄ is real
			out.real, out.zero = true, p.axis
			out.p.Im = number.Ball{}
			out.id = "2Re " + p.id
			if p.axis {
				out.p, out.id = number.ComplexBall{}, "0"
			}
			return out
		}
		out.id = joinIDs(p.id, barred(q.id))
	} else {
		out.id = joinIDs(p.id, q.id)
	}
	if out.axis && p.omega != nil && q.omega != nil {
		out.omega = new(big.Rat).Set(q.omega)
		if conj {
			out.omega.Neg(out.omega)
		}
		out.omega.Add(p.omega, out.omega)
		if out.omega.Sign() == 0 {
			return termPole{real: true, axis: true, zero: true, id: "0", index: -1}
		}
	}
	return out
}

func joinIDs(a, b string) string {
	parts := append(strings.Split(a, " + "), strings.Split(b, " + ")...)
	sort.Strings(parts)
	return strings.Join(parts, " + ")
}

func barred(id string) string {
	parts := strings.Split(id, " + ")
	for i := range parts {
		if strings.HasPrefix(parts[i], "~") {
			parts[i] = parts[i][1:]
		} else {
			parts[i] = "~" + parts[i]
		}
	}
	sort.Strings(parts) // as joinIDs does: equal multisets have equal ids
	return strings.Join(parts, " + ")
}

// upper makes a term's pole the one of its conjugate pair with positive
// imaginary part, and a real term of one whose pole turned out real: both
// halves then add up to twice the real part.
func upper(t term) term {
	if t.pole.real {
		for m := range t.c {
			t.c[m] = realBall(t.c[m].Re.MulPow2(1))
		}
		return t
	}
	if sign, decided := t.pole.p.Im.Sign(); decided && sign < 0 {
		t.pole.p = t.pole.p.Conj()
		t.pole.id = barred(t.pole.id)
		if t.pole.omega != nil {
			t.pole.omega = new(big.Rat).Neg(t.pole.omega)
		}
		for m := range t.c {
			t.c[m] = t.c[m].Conj()
		}
	}
	return t
}
