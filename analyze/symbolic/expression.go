package symbolic

import (
	"math/big"
	"strconv"
	"strings"

	"portlight/analyze/exact"
)

// expression is what is shown: a sum of fractions, mostly of one.
type expression []fraction

type fraction struct{ num, den product }

// product is ± number · powers of symbols · powers of sums.
type product struct {
	negative bool
	number   int64 // at least 1
	symbols  []power
	sums     []sumPower
}

type power struct{ place, exponent int }

type sumPower struct {
	sum      sum
	exponent int
}

// sum is two or more products added up.
type sum []product

// terms counts the products without sums that an expression is made of; one
// over or under a fraction line is easily read and does not count.
func (e expression) terms() int {
	n := 0
	for _, f := range e {
		n += max(1, f.num.terms()+f.den.terms())
	}
	return n
}

func (p product) terms() int {
	n := 0
	for _, s := range p.sums {
		for _, t := range s.sum {
			n += max(1, t.terms())
		}
	}
	return n
}

func (p product) isOne() bool {
	return !p.negative && p.number == 1 && len(p.symbols)+len(p.sums) == 0
}

// minus is the sign U+2212.
const minus = "−"

// text writes an expression.
func (sp *Space) text(e expression) string {
	var b strings.Builder
	for i, f := range e {
		sign := ""
		if f.num.negative {
			sign = minus
		}
		switch {
		case i > 0 && f.num.negative:
			b.WriteString(" " + minus + " ")
		case i > 0:
			b.WriteString(" + ")
		default:
			b.WriteString(sign)
		}
		num := sp.items(f.num)
		switch {
		case f.den.isOne() && len(num) == 1 && len(f.num.sums) == 1 && f.num.sums[0].exponent == 1 && sign == "" && len(e) == 1:
			b.WriteString(sp.sumText(f.num.sums[0].sum)) // alone, a sum needs no brackets
		default:
			b.WriteString(strings.Join(num, "·"))
		}
		if f.den.isOne() {
			continue
		}
		den := sp.items(f.den)
		if len(den) == 1 {
			b.WriteString("/" + den[0])
		} else {
			b.WriteString("/(" + strings.Join(den, "·") + ")")
		}
	}
	return b.String()
}

// items are the factors of a product, sign aside.
func (sp *Space) items(p product) []string {
	var out []string
	if p.number != 1 {
		out = append(out, strconv.FormatInt(p.number, 10))
	}
	for _, s := range p.symbols {
		out = append(out, sp.symbols[s.place].name+superscript(s.exponent))
	}
	for _, s := range p.sums {
		out = append(out, "("+sp.sumText(s.sum)+")"+superscript(s.exponent))
	}
	if len(out) == 0 {
		out = append(out, "1")
	}
	return out
}

func (sp *Space) sumText(s sum) string {
	var b strings.Builder
	for i, p := range s {
		switch {
		case i > 0 && p.negative:
			b.WriteString(" " + minus + " ")
		case i > 0:
			b.WriteString(" + ")
		case p.negative:
			b.WriteString(minus)
		}
		b.WriteString(strings.Join(sp.items(p), "·"))
	}
	return b.String()
}

// superscript writes an exponent, 1 not at all.
func superscript(n int) string {
	if n == 1 {
		return ""
	}
	const digits = "⁰¹²³⁴⁵⁶⁷⁸⁹"
	var b strings.Builder
	for _, d := range strconv.Itoa(n) {
		b.WriteRune([]rune(digits)[d-'0'])
	}
	return b.String()
}

// values are element values by place.
type values []*big.Rat

// function puts values into an expression.
func (e expression) function(v values) (exact.Ratio, bool) {
	var total exact.Ratio
	for _, f := range e {
		r, err := exact.NewRatio(f.num.value(v), f.den.value(v))
		if err != nil {
			return total, false
		}
		total = total.Add(r)
	}
	return total, true
}

func (p product) value(v values) exact.Poly {
	c := big.NewRat(p.number, 1)
	if p.negative {
		c.Neg(c)
	}
	shift := 0
	for _, s := range p.symbols {
		for range s.exponent {
			if s.place == sPlace {
				shift++
			} else {
				c.Mul(c, v[s.place])
			}
		}
	}
	out := exact.Monomial(c, shift)
	for _, s := range p.sums {
		out = out.Mul(s.sum.value(v).Pow(s.exponent))
	}
	return out
}

// value adds up products; those without sums are collected first, as most are.
func (s sum) value(v values) exact.Poly {
	var total exact.Poly
	for _, p := range s {
		total = total.Add(p.value(v))
	}
	return total
}

// proves tells whether a function is the ratio found by other means.
func proves(num, den exact.Poly, r exact.Ratio) bool {
	if den.IsZero() {
		return false
	}
	if r.Den.IsZero() { // the zero value of a Ratio is the function 0
		return num.IsZero()
	}
	return num.Mul(r.Den).Equal(den.Mul(r.Num))
}

// proves tells whether an expression is a ratio, for the given values.
func (e expression) proves(v values, r exact.Ratio) bool {
	if len(e) == 1 {
		return proves(e[0].num.value(v), e[0].den.value(v), r)
	}
	f, ok := e.function(v)
	return ok && proves(f.Num, f.Den, r)
}
