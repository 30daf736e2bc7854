package response

import "portlight/analyze/exact"

// base is a list of pairwise coprime, square-free, primitive polynomials.
// Every polynomial inserted is a product of powers of members, so roots that
// two denominators share are the roots of one member, found once and known to
// be equal.
type base struct {
	members []exact.Poly
}

// equal tells whether two bases have the same members in the same order.
func (b base) equal(c base) bool {
	if len(b.members) != len(c.members) {
		return false
	}
	for i, m := range b.members {
		if !m.Equal(c.members[i]) {
			return false
		}
	}
	return true
}

// insert refines the base so that p, square-free, becomes a product of members.
func (b *base) insert(p exact.Poly) {
	p = p.Primitive()
	for i := 0; i < len(b.members) && p.Degree() > 0; i++ {
		m := b.members[i]
		if m.Equal(p) {
			return
		}
		g := exact.GCD(m, p)
		if g.Degree() <= 0 {
			continue
		}
		if g.Degree() < m.Degree() {
			b.members[i] = g
			b.members = append(b.members, m.Quo(g).Primitive())
		}
		p = p.Quo(g).Primitive()
	}
	if p.Degree() > 0 {
		b.members = append(b.members, p)
	}
}

// insertFactors inserts every square-free factor.
func (b *base) insertFactors(factors []exact.Factor) {
	for _, f := range factors {
		b.insert(f.Poly)
	}
}

// exponents tells to which power each member divides the product of factors,
// all of which must have been inserted.
func (b *base) exponents(factors []exact.Factor) []int {
	out := make([]int, len(b.members))
	for i, m := range b.members {
		for _, f := range factors {
			if divides(m, f.Poly) {
				out[i] = f.Multiplicity
				break
			}
		}
	}
	return out
}

// divides tells whether a member of a base divides p, when p is a product of
// members or coprime to them.
func divides(member, p exact.Poly) bool {
	return member.Degree() <= p.Degree() && (member.Equal(p) || exact.GCD(member, p).Degree() > 0)
}
