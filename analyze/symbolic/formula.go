package symbolic

import (
	"unicode/utf8"

	"portlight/analyze/exact"
)

// What a readable formula has at most: products of symbols in numerator and
// denominator together, and characters.
const (
	mostProducts   = 12
	mostCharacters = 120
)

// Formula writes a function whose values must be those of r. There is none,
// ok is false, when it would not be readable, when no element takes part, or
// when the element values put into what would be shown do not give r exactly.
func (sp *Space) Formula(f Function, r exact.Ratio) (text string, ok bool) {
	if sp.failed || f.num.isZero() || sp.long(f) {
		return "", false
	}
	if f.num.support().or(f.den.support()).minus(only(sPlace)).empty() {
		return "", false
	}
	values := sp.values()
	var e expression
	if sp.hasCoefficients(f) {
		if !proves(f.num.value(values), f.den.value(values), r) {
			return "", false
		}
		e, ok = sp.withCoefficients(f)
	} else {
		e = sp.arrange(f)
		ok = !sp.failed && e.terms() <= mostProducts && e.proves(values, r)
	}
	if !ok || sp.failed || e.terms() > mostProducts {
		return "", false
	}
	text = sp.text(e)
	return text, utf8.RuneCountInString(text) <= mostCharacters
}

// long tells early that a function cannot be arranged into few enough terms:
// with at most mostProducts terms in all, a product of sums has at most as many
// terms as 3 to the power of a third of them.
func (sp *Space) long(f Function) bool {
	const most = 81
	return len(f.num) > most || len(f.den) > most
}

// values lists the values of the symbols by place.
func (sp *Space) values() values {
	v := make(values, len(sp.symbols))
	for i, s := range sp.symbols {
		v[i] = s.value
	}
	return v
}

// value puts values into a polynomial.
func (p poly) value(v values) exact.Poly {
	var total exact.Poly
	for _, t := range p {
		q := product{negative: t.c < 0, number: int64(magnitude(t.c))}
		for _, place := range t.m.support().list() {
			q.symbols = append(q.symbols, power{place, t.m.power(place)})
		}
		total = total.Add(q.value(v))
	}
	return total
}
