package symbolic

import (
	"slices"
)

// arrange makes an expression of a function: factors where there are any,
// sums in ascending powers of s, symbols in the order of the text.
func (sp *Space) arrange(f Function) expression {
	num, den := sp.product(f.num), sp.product(f.den)
	num.negative, den.negative = num.negative != den.negative, false
	g := gcdInt(num.number, den.number)
	num.number, den.number = num.number/g, den.number/g
	if num.negative && (num.turnOne() || den.turnOne()) {
		num.negative = false
	}
	for _, p := range []*product{&num, &den} {
		for _, s := range p.sums {
			sp.order(s.sum)
		}
	}
	whole := expression{{num, den}}
	if parts, ok := sp.apart(f, whole[0]); ok {
		return parts
	}
	return whole
}

// product writes a polynomial as a product of factors.
func (sp *Space) product(p poly) product {
	number, m, factors := sp.factors(p)
	out := sp.monomialProduct(term{m, number})
	for _, f := range factors {
		s, turned := sp.sumOf(f)
		out.negative = out.negative != turned
		out.multiply(s)
	}
	slices.SortStableFunc(out.sums, func(a, b sumPower) int {
		return slices.Compare(sp.orders(a.sum), sp.orders(b.sum))
	})
	return out
}

// multiply multiplies by a sum, as a power where it is there already.
func (p *product) multiply(s sum) {
	for i := range p.sums {
		if equalSums(p.sums[i].sum, s) {
			p.sums[i].exponent++
			return
		}
	}
	p.sums = append(p.sums, sumPower{s, 1})
}

func equalSums(a, b sum) bool {
	return slices.EqualFunc(a, b, func(p, q product) bool {
		return p.negative == q.negative && p.number == q.number && slices.Equal(p.symbols, q.symbols) &&
			slices.EqualFunc(p.sums, q.sums, func(x, y sumPower) bool {
				return x.exponent == y.exponent && equalSums(x.sum, y.sum)
			})
	})
}

// monomialProduct is a single term as a product.
func (sp *Space) monomialProduct(t term) product {
	p := product{negative: t.c < 0, number: int64(magnitude(t.c))}
	for _, place := range t.m.support().list() {
		p.symbols = append(p.symbols, power{place, t.m.power(place)})
	}
	slices.SortFunc(p.symbols, func(a, b power) int {
		return sp.symbols[a.place].order - sp.symbols[b.place].order
	})
	return p
}

// sumOf writes an irreducible polynomial as a sum in ascending powers of s,
// each coefficient in factors. It is turned around when its lowest
// coefficient is negative throughout.
func (sp *Space) sumOf(p poly) (s sum, turned bool) {
	list := p.coefficients(sPlace)
	for _, c := range list {
		if len(c) > 0 {
			turned = !slices.ContainsFunc(c, func(t term) bool { return t.c > 0 })
			break
		}
	}
	for k, c := range list {
		if len(c) == 0 {
			continue
		}
		if turned {
			c = c.neg()
		}
		s = append(s, sp.coefficient(c, k)...)
	}
	sp.order(s)
	return s, turned
}

// coefficient writes one coefficient of a sum, times s to its power.
func (sp *Space) coefficient(c poly, k int) []product {
	number, m, factors := sp.factors(c)
	outer := term{m, number}
	if k == 0 && len(factors) == 1 && (m == monomial{}) && magnitude(number) == 1 {
		out := make([]product, len(c))
		for i, t := range c {
			out[i] = sp.monomialProduct(t)
		}
		return out
	}
	outer.m, _ = m.times(unit(sPlace, k))
	p := sp.monomialProduct(outer)
	for _, f := range factors {
		s, turned := sp.sumOf(f)
		p.negative = p.negative != turned
		p.multiply(s)
	}
	if p.negative {
		p.negative = !p.turnOne()
	}
	for _, s := range p.sums {
		sp.order(s.sum)
	}
	return []product{p}
}

// turnOne changes the signs inside one sum whose lowest terms have both, so
// that a product needs no sign of its own.
func (p *product) turnOne() bool {
	for i := range p.sums {
		s := &p.sums[i]
		if s.exponent%2 == 1 && s.sum.mixed() {
			turned := slices.Clone(s.sum)
			for k := range turned {
				turned[k].negative = !turned[k].negative
			}
			s.sum = turned
			return true
		}
	}
	return false
}

// mixed tells whether the terms of the lowest power of s have both signs.
func (s sum) mixed() bool {
	low := s[0].sPower()
	for _, p := range s {
		low = min(low, p.sPower())
	}
	var signs [2]bool
	for _, p := range s {
		if p.sPower() == low {
			signs[boolIndex(p.negative)] = true
		}
	}
	return signs[0] && signs[1]
}

func boolIndex(b bool) int {
	if b {
		return 1
	}
	return 0
}

func (p product) sPower() int {
	if len(p.symbols) > 0 && p.symbols[0].place == sPlace {
		return p.symbols[0].exponent
	}
	return 0
}

// order sorts a sum: ascending powers of s, what is added before what is
// taken away, symbols as in the text.
func (sp *Space) order(s sum) {
	slices.SortStableFunc(s, func(a, b product) int {
		if c := a.sPower() - b.sPower(); c != 0 {
			return c
		}
		if a.negative != b.negative {
			return boolIndex(a.negative) - boolIndex(b.negative)
		}
		return slices.Compare(sp.productOrders(a), sp.productOrders(b))
	})
}

// productOrders are the places in the text of a product's symbols.
func (sp *Space) productOrders(p product) []int {
	var out []int
	for _, x := range p.symbols {
		for range x.exponent {
			out = append(out, sp.symbols[x.place].order)
		}
	}
	for _, s := range p.sums {
		out = append(out, sp.orders(s.sum)...)
	}
	return out
}

// orders are the places in the text of a sum's symbols, ascending, s aside.
func (sp *Space) orders(s sum) []int {
	var out []int
	for _, p := range s {
		out = append(out, sp.productOrders(p)...)
	}
	slices.Sort(out)
	out = slices.Compact(out)
	if len(out) > 0 && out[0] == sp.symbols[sPlace].order {
		out = out[1:]
	}
	return out
}

// mostParts is into how many parts a fraction is taken apart.
const mostParts = 4

// apart divides a sum by a single product where that gives what one would
// write without a fraction: R1 + s·L1 + 1/(s·C1), 1 + R2/R1. Something left
// over that would be a plain inverse of element values (1/R1) keeps it whole.
func (sp *Space) apart(f Function, whole fraction) (expression, bool) {
	if len(whole.den.sums) > 0 || whole.den.isOne() || whole.num.negative || len(f.num) > mostParts || len(f.num) < 2 {
		return nil, false
	}
	den := f.den[0]
	type piece struct {
		fraction
		power int
	}
	var pieces []piece
	plain := false
	for _, t := range f.num {
		c := t.m.common(den.m)
		top, _ := t.m.over(c)
		bottom, _ := den.m.over(c)
		g := gcdInt(t.c, den.c)
		p := piece{fraction{sp.monomialProduct(term{top, t.c / g}), sp.monomialProduct(term{bottom, den.c / g})},
			top.power(sPlace) - bottom.power(sPlace)}
		if p.num.negative || p.den.negative {
			return nil, false
		}
		if p.den.isOne() {
			plain = true
		} else if p.num.isOne() && p.power == 0 {
			return nil, false
		}
		pieces = append(pieces, p)
	}
	if !plain {
		return nil, false
	}
	slices.SortStableFunc(pieces, func(a, b piece) int {
		if c := rank(a.power) - rank(b.power); c != 0 {
			return c
		}
		if a.den.isOne() != b.den.isOne() {
			return boolIndex(!a.den.isOne()) - boolIndex(!b.den.isOne())
		}
		return slices.Compare(sp.productOrders(a.num), sp.productOrders(b.num))
	})
	out := make(expression, len(pieces))
	for i, p := range pieces {
		out[i] = p.fraction
	}
	return out, true
}

// rank orders the powers of s in a sum of fractions: 0, 1, 2, …, −1, −2, ….
func rank(power int) int {
	if power < 0 {
		return 100 - power
	}
	return power
}
