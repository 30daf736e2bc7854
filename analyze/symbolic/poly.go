package symbolic

import "slices"

// poly is a polynomial with integer coefficients: terms in descending order
// of monomials, none with coefficient 0. It is never changed once made.
type poly []term

type term struct {
	m monomial
	c int64
}

func constant(c int64) poly {
	if c == 0 {
		return nil
	}
	return poly{{c: c}}
}

func symbolPoly(place int) poly { return poly{{unit(place, 1), 1}} }

func (p poly) isZero() bool { return len(p) == 0 }

// isConstant tells whether p is a number.
func (p poly) isConstant() bool { return len(p) == 0 || len(p) == 1 && p[0].m == monomial{} }

func (p poly) isOne() bool { return len(p) == 1 && p[0] == term{c: 1} }

// support is the set of the symbols that occur.
func (p poly) support() set {
	var all monomial
	for _, t := range p {
		all[0] |= t.m[0]
		all[1] |= t.m[1]
	}
	return all.support()
}

// degree is the highest power of a symbol.
func (p poly) degree(place int) int {
	d := 0
	for _, t := range p {
		d = max(d, t.m.power(place))
	}
	return d
}

func (p poly) neg() poly {
	out := slices.Clone(p)
	for i := range out {
		out[i].c = -out[i].c
	}
	return out
}

func (p poly) equal(q poly) bool { return slices.Equal(p, q) }

// add returns p + q.
func (w *work) add(p, q poly) poly { return w.addScaled(p, q, term{c: 1}) }

// sub returns p − q.
func (w *work) sub(p, q poly) poly { return w.addScaled(p, q, term{c: -1}) }

// addScaled returns p + t·q.
func (w *work) addScaled(p, q poly, t term) poly {
	if !w.spend(len(p)+len(q)) || len(q) == 0 {
		return p
	}
	out := make(poly, 0, len(p)+len(q))
	for _, u := range q {
		m, ok := u.m.times(t.m)
		if !ok {
			w.failed = true
			return nil
		}
		for len(p) > 0 && p[0].m.compare(m) > 0 {
			out, p = append(out, p[0]), p[1:]
		}
		c := w.product(u.c, t.c)
		if len(p) > 0 && p[0].m == m {
			c += p[0].c
			p = p[1:]
		}
		if c != 0 {
			out = append(out, term{m, c})
		}
	}
	out = append(out, p...)
	if len(out) > mostTerms {
		w.failed = true
	}
	return out
}

// mul returns p·q.
func (w *work) mul(p, q poly) poly {
	if len(p) > len(q) {
		p, q = q, p
	}
	if p.isOne() {
		return q
	}
	var out poly
	for _, t := range p {
		out = w.addScaled(out, q, t)
		if w.failed {
			return nil
		}
	}
	return out
}

// quotient divides where d divides p; ok is false where it does not.
func (w *work) quotient(p, d poly) (poly, bool) {
	if d.isOne() {
		return p, true
	}
	if len(d) == 0 {
		return nil, false
	}
	var out poly
	for len(p) > 0 {
		m, ok := p[0].m.over(d[0].m)
		if !ok || p[0].c%d[0].c != 0 || w.failed {
			return nil, false
		}
		t := term{m, p[0].c / d[0].c}
		out = append(out, t)
		p = w.addScaled(p, d, term{t.m, -t.c})
	}
	return out, true
}

// content splits p = number·monomial·rest with rest free of common numbers
// and symbols and its first coefficient positive.
func (p poly) content() (number int64, m monomial, rest poly) {
	if len(p) == 0 {
		return 0, monomial{}, nil
	}
	number, m = 0, p[0].m
	for _, t := range p {
		number, m = gcdInt(number, t.c), m.common(t.m)
	}
	if p[0].c < 0 {
		number = -number
	}
	if number == 1 && m == (monomial{}) {
		return number, m, p
	}
	rest = make(poly, len(p))
	for i, t := range p {
		low, _ := t.m.over(m)
		rest[i] = term{low, t.c / number}
	}
	return number, m, rest
}

// coefficients are p's coefficients as a polynomial in one symbol, ascending.
func (p poly) coefficients(place int) []poly {
	out := make([]poly, p.degree(place)+1)
	for _, t := range p {
		k := t.m.power(place)
		out[k] = append(out[k], term{t.m.without(place), t.c})
	}
	return out
}

// groups are p's coefficients as a polynomial in the symbols outside a set, in
// the order of their first terms.
func (p poly) groups(inside set) []poly {
	index := map[monomial]int{}
	var out []poly
	for _, t := range p {
		in := t.m.part(inside)
		outside, _ := t.m.over(in)
		k, seen := index[outside]
		if !seen {
			k = len(out)
			index[outside] = k
			out = append(out, nil)
		}
		out[k] = append(out[k], term{in, t.c})
	}
	return out
}
