package network

import (
	"math/big"
	"slices"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// add puts value into G; rows and columns of references are left out.
func (a *assembler) add(row, col int, value *big.Rat) {
	if row >= 0 && col >= 0 && value.Sign() != 0 {
		a.static = append(a.static, entry{row, col, value})
	}
}

// addForm puts factor·form into an equation.
func (a *assembler) addForm(row int, form exact.Vector, factor *big.Rat) {
	for _, c := range form {
		a.add(row, c.Index, new(big.Rat).Mul(factor, c.Value))
	}
}

// leave lets the current given by a form flow out of node from and into node
// to.
func (a *assembler) leave(from, to int, form exact.Vector) {
	a.addForm(a.node[from], form, one)
	a.addForm(a.node[to], form, minusOne)
}

// flow lets the unknown current i flow out of node from and into node to.
func (a *assembler) flow(from, to, i int) { a.leave(from, to, exact.Unit(i)) }

// across returns the voltage between two nodes as a form.
func (s *System) across(plus, minus int) exact.Vector {
	if s.node[plus] == s.node[minus] {
		return nil
	}
	return exact.Difference(s.node[plus], s.node[minus])
}

// memorise makes a memory with the given form.
func (a *assembler) memorise(element int, form exact.Vector) *memory {
	if a.first[element] < 0 {
		a.first[element] = len(a.memories)
	}
	index := len(a.memories) - a.first[element]
	a.memories = append(a.memories, memory{Memory: Memory{element, index}, form: form})
	return &a.memories[len(a.memories)-1]
}

// term adds s·value·form to an equation.
func (m *memory) term(row int, value *big.Rat) {
	if row >= 0 && value.Sign() != 0 {
		m.rows = append(m.rows, exact.Component{Index: row, Value: value})
	}
}

// polynomial puts Σ sⁱ·f[i] = 0 into an equation of an element, with the
// least number of memories, m = the highest power. With z[m] = f[m] it is
// unrolled as z[i] = f[i] + s·z[i+1] down to 0 = f[0] + s·z[1] (the observer
// form of linear system theory), so the pencil stays linear in s and its
// determinant is that of the equation as written.
func (a *assembler) polynomial(row, element int, f []exact.Vector) {
	for i := range f {
		f[i] = combine(f[i])
	}
	m := len(f) - 1
	for m > 0 && len(f[m]) == 0 {
		m--
	}
	a.addForm(row, f[0], one)
	for i := 1; i <= m; i++ {
		z, next := f[m], -1
		if i < m {
			next = a.unknown(Owner{-1, element})
			z = exact.Unit(next)
			a.add(next, next, minusOne)
			a.addForm(next, f[i], one)
		}
		a.memorise(element, z).term(row, one)
		row = next
	}
}

// combine adds components with equal indices up and drops zeros.
func combine(v exact.Vector) exact.Vector {
	v = slices.Clone(v)
	slices.SortStableFunc(v, func(a, b exact.Component) int { return a.Index - b.Index })
	out := v[:0]
	for _, c := range v {
		if k := len(out) - 1; k >= 0 && out[k].Index == c.Index {
			out[k].Value = new(big.Rat).Add(out[k].Value, c.Value)
		} else {
			out = append(out, c)
		}
	}
	return slices.DeleteFunc(out, func(c exact.Component) bool { return c.Value.Sign() == 0 })
}

// plus returns v + factor·w.
func plus(v, w exact.Vector, factor *big.Rat) exact.Vector {
	if factor.Sign() == 0 {
		return v
	}
	for _, c := range w {
		v = append(v, exact.Component{Index: c.Index, Value: new(big.Rat).Mul(factor, c.Value)})
	}
	return v
}

// poly takes a list of coefficients into the equations; an empty one is 1 when
// it is a denominator.
func (a *assembler) poly(coeffs []number.Exact, denominator bool) exact.Poly {
	if len(coeffs) == 0 && denominator {
		return exact.PolyFromInt64s(1)
	}
	c := make([]*big.Rat, len(coeffs))
	for i, x := range coeffs {
		c[i] = a.rat(x)
	}
	return exact.NewPoly(c...)
}

// fraction takes a rational function in, with common factors removed.
func (a *assembler) fraction(numerator, denominator []number.Exact) (num, den exact.Poly) {
	num, den = a.poly(numerator, false), a.poly(denominator, true)
	if num.IsZero() {
		return num, exact.PolyFromInt64s(1)
	}
	if g := exact.GCD(num, den); g.Degree() > 0 {
		num, den = num.Quo(g), den.Quo(g)
	}
	return num, den
}

var (
	one      = big.NewRat(1, 1)
	minusOne = big.NewRat(-1, 1)
)
