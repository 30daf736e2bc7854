package symbolic

import (
	"fmt"
	"math/big"
	"strings"
)

// reader evaluates a formula as a person would read it, knowing nothing of how
// it was made: sums, products with ·, fractions whose denominator is one
// factor or a bracket, superscripts, and √ of a bracket.
type reader struct {
	rest   string
	values map[string]*big.Float
}

const readPrecision = 400

func evaluate(text string, values map[string]*big.Float) (result *big.Float, err error) {
	defer func() {
		if p := recover(); p != nil {
			err = fmt.Errorf("%v", p)
		}
	}()
	r := &reader{text, values}
	result = r.sum()
	if r.rest != "" {
		return nil, fmt.Errorf("%q is left over", r.rest)
	}
	return result, nil
}

func real400() *big.Float { return new(big.Float).SetPrec(readPrecision) }

func (r *reader) take(prefix string) bool {
	rest, ok := strings.CutPrefix(r.rest, prefix)
	if ok {
		r.rest = rest
	}
	return ok
}

func (r *reader) sum() *big.Float {
	negative := r.take("−")
	total := r.fraction()
	if negative {
		total.Neg(total)
	}
	for {
		switch {
		case r.take(" + "):
			total = real400().Add(total, r.fraction())
		case r.take(" − "):
			total = real400().Sub(total, r.fraction())
		default:
			return total
		}
	}
}

func (r *reader) fraction() *big.Float {
	x := r.factor()
	for r.take("·") {
		x = real400().Mul(x, r.factor())
	}
	if r.take("/") {
		x = real400().Quo(x, r.factor())
	}
	return x
}

func (r *reader) factor() *big.Float {
	x := r.atom()
	exponent := 0
	for {
		digit := strings.IndexRune("⁰¹²³⁴⁵⁶⁷⁸⁹", firstRune(r.rest))
		if digit < 0 {
			break
		}
		exponent = 10*exponent + len([]rune("⁰¹²³⁴⁵⁶⁷⁸⁹"[:digit]))
		r.rest = r.rest[len(string(firstRune(r.rest))):]
	}
	if exponent == 0 {
		return x
	}
	out := real400().SetInt64(1)
	for range exponent {
		out.Mul(out, x)
	}
	return out
}

func firstRune(s string) rune {
	for _, c := range s {
		return c
	}
	return ' '
}

func (r *reader) atom() *big.Float {
	root := r.take("√")
	if r.take("(") {
		x := r.sum()
		if !r.take(")") {
			panic("a bracket is not closed before " + r.rest)
		}
		if root {
			x = real400().Sqrt(x)
		}
		return x
	}
	end := strings.IndexFunc(r.rest, func(c rune) bool {
		return !(c >= '0' && c <= '9' || c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c == '.')
	})
	if end < 0 {
		end = len(r.rest)
	}
	word := r.rest[:end]
	r.rest = r.rest[end:]
	if x, ok := r.values[word]; ok {
		return real400().Set(x)
	}
	x, ok := real400().SetString(word)
	if !ok {
		panic(fmt.Sprintf("%q is neither a name nor a number", word))
	}
	return x
}
