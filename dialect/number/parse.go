package number

import (
	"fmt"
	"math/big"
	"strings"
)

const (
	// parseDigits is the longest accepted string of digits.
	parseDigits = 4000
	// parseExponent bounds the decimal exponent of the leading digit.
	parseExponent = 400
)

// Parse reads a decimal number: an optional sign, digits with at most one
// point, and an optional exponent "e-9" or "E+3". At least one digit must stand
// beside the point. The value is taken exactly. It fails with [ErrSyntax], and
// with [ErrRange] where the value is not 0 and not within 1e-400 … 1e400 or has
// more than 4000 digits.
func Parse(text string) (Exact, error) {
	body := text
	negative := false
	if body != "" && (body[0] == '+' || body[0] == '-') {
		negative = body[0] == '-'
		body = body[1:]
	}
	digits, fraction, rest, ok := splitDigits(body)
	if !ok {
		return Exact{}, fmt.Errorf("%w: %.40q", ErrSyntax, text)
	}
	exponent, ok := readExponent(rest)
	if !ok {
		return Exact{}, fmt.Errorf("%w: %.40q", ErrSyntax, text)
	}
	all := strings.TrimLeft(digits+fraction, "0")
	trimmed := strings.TrimRight(all, "0")
	if trimmed == "" {
		return Exact{}, nil
	}
	// value = trimmed·10^scale
	scale := exponent - int64(len(fraction)) + int64(len(all)-len(trimmed))
	leading := scale + int64(len(trimmed)) - 1
	if len(trimmed) > parseDigits || leading >= parseExponent || leading < -parseExponent {
		return Exact{}, fmt.Errorf("%w: %.40q", ErrRange, text)
	}
	n, _ := new(big.Int).SetString(trimmed, 10)
	if negative {
		n.Neg(n)
	}
	power := new(big.Int).Exp(big.NewInt(10), big.NewInt(max(scale, -scale)), nil)
	if scale >= 0 {
		return Exact{value: new(big.Rat).SetInt(n.Mul(n, power))}, nil
	}
	return Exact{value: new(big.Rat).SetFrac(n, power)}, nil
}

// splitDigits cuts "12.34e5" into "12", "34" and "e5".
func splitDigits(s string) (whole, fraction, rest string, ok bool) {
	i := countDigits(s)
	whole, rest = s[:i], s[i:]
	if strings.HasPrefix(rest, ".") {
		j := countDigits(rest[1:])
		fraction, rest = rest[1:1+j], rest[1+j:]
	}
	return whole, fraction, rest, whole != "" || fraction != ""
}

func countDigits(s string) int {
	i := 0
	for i < len(s) && s[i] >= '0' && s[i] <= '9' {
		i++
	}
	return i
}

// readExponent reads "", "e5", "E-9"; values beyond any use are cut to 2^40.
func readExponent(s string) (exponent int64, ok bool) {
	if s == "" {
		return 0, true
	}
	if s[0] != 'e' && s[0] != 'E' {
		return 0, false
	}
	s = s[1:]
	negative := false
	if s != "" && (s[0] == '+' || s[0] == '-') {
		negative = s[0] == '-'
		s = s[1:]
	}
	if s == "" || countDigits(s) != len(s) {
		return 0, false
	}
	for i := range len(s) {
		exponent = min(exponent*10+int64(s[i]-'0'), 1<<40)
	}
	if negative {
		exponent = -exponent
	}
	return exponent, true
}
