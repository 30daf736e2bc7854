package symbolic

import (
	"math/big"
	"slices"
)

// A coupling given by its coefficient k stands in the equations as a mutual
// inductance M = k·√(L₁·L₂). A formula is better off with k: M² is k²·L₁·L₂,
// and only an odd power leaves the root.

// hasCoefficients tells whether such a coupling takes part.
func (sp *Space) hasCoefficients(f Function) bool {
	for _, at := range f.num.support().or(f.den.support()).list() {
		if sp.symbols[at].coupled != nil {
			return true
		}
	}
	return false
}

// withCoefficients arranges a function with coefficients in place of mutual
// inductances. That is proved for its values; the new expression is compared
// with it for values whose roots are rational.
func (sp *Space) withCoefficients(f Function) (e expression, ok bool) {
	g := Function{sp.coefficients(f.num), sp.coefficients(f.den)}
	if sp.failed {
		return nil, false
	}
	e = sp.arrange(sp.reduced(g.num, g.den))
	if sp.failed {
		return nil, false
	}
	for round := range 2 {
		v := sp.trial(round)
		if r, fine := e.function(v); !fine || !proves(f.num.value(v), f.den.value(v), r) {
			return nil, false
		}
	}
	return e, true
}

// coefficients replaces the mutual inductances in a polynomial.
func (sp *Space) coefficients(p poly) poly {
	for _, at := range p.support().list() {
		c := sp.symbols[at].coupled
		if c == nil {
			continue
		}
		k, root, square := sp.coefficientParts(at)
		var out poly
		for _, t := range p {
			n := t.m.power(at)
			q := poly{{t.m.without(at), t.c}}
			for range n {
				q = sp.mul(q, k)
			}
			for range n / 2 {
				q = sp.mul(q, square)
			}
			if n%2 == 1 {
				q = sp.mul(q, root)
			}
			out = sp.add(out, q)
		}
		p = out
	}
	return p
}

// coefficientParts are k, √(L₁·L₂) and L₁·L₂ for a mutual inductance.
func (sp *Space) coefficientParts(at int) (k, root, square poly) {
	s := sp.symbols[at]
	c := s.coupled
	self := func(i int) int {
		key := elementKey(c.coils[i])
		return sp.place(key, symbol{name: c.names[i], value: c.self[i], order: key})
	}
	a, b := self(0), self(1)
	square = sp.mul(symbolPoly(a), symbolPoly(b))
	coupling := s.order / 3
	if isUnity(c.value) {
		k = constant(c.value.Num().Int64())
	} else {
		k = symbolPoly(sp.place(coefficientKey(coupling), symbol{name: s.name, value: c.value, order: s.order}))
	}
	names := slices.Clone(c.names[:])
	if c.coils[0] > c.coils[1] {
		slices.Reverse(names)
	}
	root = symbolPoly(sp.place(rootKey(coupling), symbol{name: "√(" + names[0] + "·" + names[1] + ")", order: rootKey(coupling)}))
	return k, root, square
}

// trial gives every symbol a rational value such that inductances are squares
// and mutual inductances follow from coefficients. It is nil for a symbol that
// cannot be reached so.
func (sp *Space) trial(round int) values {
	v := make(values, len(sp.symbols))
	root := func(place int) *big.Rat { // of the value of place
		return big.NewRat(int64(sample(place+round*places)%997)+2, 1)
	}
	for i, s := range sp.symbols {
		v[i] = root(i)
		if s.coupled == nil && s.value != nil {
			v[i] = new(big.Rat).Mul(v[i], v[i])
		}
	}
	for i, s := range sp.symbols {
		c := s.coupled
		if c == nil {
			continue
		}
		coupling := s.order / 3
		a, b := sp.places[elementKey(c.coils[0])], sp.places[elementKey(c.coils[1])]
		r := new(big.Rat).Mul(root(a), root(b))
		k := c.value
		if at, there := sp.places[coefficientKey(coupling)]; there {
			k = v[at]
		}
		v[i] = new(big.Rat).Mul(k, r)
		if at, there := sp.places[rootKey(coupling)]; there {
			v[at] = r
		}
	}
	return v
}
