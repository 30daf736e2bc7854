package analyze

import (
	"math/big"
	"strconv"
	"strings"

	"portlight/dialect"
	"portlight/dialect/number"
)

// Figures for people: at most shownDigits significant digits, every one of
// them decided by the ball, with an SI prefix and unit.

// shownDigits is how many significant digits a person is shown.
const shownDigits = 4

// figurePrecision is the working precision, in bits, of what a view derives
// from an answer's own balls (a corner frequency from a root, a level from a
// magnitude): far more than the digits it shows.
const figurePrecision = 192

// minus is the sign of negative figures (U+2212), which the notation reads too.
const minus = "−"

// prefixSymbols are the SI prefixes of powers of 1000, from quecto to quetta.
const prefixSymbols = "qryzafpnµm kMGTPEZYRQ"

// figure writes a number with its unit, and says so where fewer than four
// digits are sure. Numbers without any sure digit are given by their bound.
func figure(b number.Ball, unit string) string {
	text, sure := bareFigure(b, unit)
	switch {
	case sure >= shownDigits:
		return text
	case sure == 0:
		return text
	case sure == 1:
		return text + " (1 sure digit)"
	}
	return text + " (" + strconv.Itoa(sure) + " sure digits)"
}

// bareFigure writes a number with its unit, and tells how many digits are
// sure, at most shownDigits; 0 when only a bound is known.
func bareFigure(b number.Ball, unit string) (text string, sure int) {
	if !b.IsFinite() {
		return "unknown", 0
	}
	if b.IsExact() && b.ContainsZero() {
		return joinUnit("0", "", unit), shownDigits
	}
	for n := shownDigits; n > 0; n-- {
		mantissa, exponent, ok := b.Decimal(n)
		if !ok {
			continue
		}
		if short, e := trimZeros(mantissa, exponent); b.Contains(decimalRat(short, e)) {
			// The ball holds the short decimal itself: its zeros say nothing.
			return place(short, e, unit), shownDigits
		}
		return place(mantissa, exponent, unit), n
	}
	if b.ContainsZero() {
		bound, _ := bareFigure(number.BallFromFloat(oneDigitUp(b), number.MinPrecision), unit)
		return "0 to within " + bound, 0
	}
	mantissa, exponent, ok := number.BallFromFloat(b.Mid(), b.Prec()).Decimal(shownDigits)
	if !ok {
		return "unknown", 0
	}
	off := b.Sub(number.BallFromRat(decimalRat(mantissa, exponent), b.Prec()))
	bound, _ := bareFigure(number.BallFromFloat(oneDigitUp(off), number.MinPrecision), unit)
	return place(mantissa, exponent, unit) + " ± " + bound, 0
}

// oneDigitUp is the least d·10^k, d a digit, that no number of the ball
// exceeds in size.
func oneDigitUp(b number.Ball) *big.Float {
	upper := new(big.Float).Abs(b.Upper())
	if lower := new(big.Float).Abs(b.Lower()); lower.Cmp(upper) > 0 {
		upper = lower
	}
	mantissa, exponent, ok := number.BallFromFloat(upper, number.MinPrecision).Decimal(1)
	if !ok {
		return upper
	}
	d, _ := strconv.Atoi(mantissa)
	bound := decimalRat(strconv.Itoa(d), exponent)
	if exact, _ := upper.Rat(nil); exact != nil && bound.Cmp(exact) < 0 {
		bound = decimalRat(strconv.Itoa(d+1), exponent)
	}
	return new(big.Float).SetPrec(128).SetMode(big.AwayFromZero).SetRat(bound)
}

// decimalRat is mantissa·10^exponent.
func decimalRat(mantissa string, exponent int) *big.Rat {
	r, _ := new(big.Rat).SetString(mantissa + "e" + strconv.Itoa(exponent))
	return r
}

func trimZeros(mantissa string, exponent int) (string, int) {
	for len(mantissa) > 1 && strings.HasSuffix(mantissa, "0") {
		mantissa, exponent = mantissa[:len(mantissa)-1], exponent+1
	}
	return mantissa, exponent
}

// takesPrefix tells whether a unit's first symbol can bear an SI prefix.
func takesPrefix(unit string) bool {
	switch unit {
	case "", "dB", "°", "%":
		return false
	}
	first := unit
	if i := strings.IndexAny(unit, "*/^"); i >= 0 {
		first = unit[:i]
		if unit[i] == '^' {
			return false // k(V²) is not (kV)²
		}
	}
	return first != "1" && first != "kg"
}

// place writes mantissa·10^exponent with the prefix that leaves one to three
// digits before the point, or as a plain decimal or with a power of ten where
// the unit takes none.
func place(mantissa string, exponent int, unit string) string {
	sign := ""
	if mantissa[0] == '-' {
		sign, mantissa = minus, mantissa[1:]
	}
	leading := exponent + len(mantissa) - 1
	if !takesPrefix(unit) {
		if leading >= -4 && leading < 7 {
			return joinUnit(sign+point(mantissa, leading), "", unit)
		}
		return joinUnit(sign+point(mantissa, 0)+"·10"+superscript(leading), "", unit)
	}
	group := floorDiv(leading, 3)
	if group < -10 || group > 10 {
		return joinUnit(sign+point(mantissa, 0)+"·10"+superscript(leading), "", unit)
	}
	prefix := strings.TrimSpace(string([]rune(prefixSymbols)[group+10]))
	return joinUnit(sign+point(mantissa, leading-3*group), prefix, unit)
}

func joinUnit(number, prefix, unit string) string {
	switch unit {
	case "":
		return number
	case "°":
		return number + unit
	}
	return number + " " + prefix + unit
}

// point puts the decimal point after the digit of weight 10^0, the first
// digit having the weight 10^leading.
func point(mantissa string, leading int) string {
	switch {
	case leading < 0:
		return "0." + strings.Repeat("0", -leading-1) + mantissa
	case leading >= len(mantissa)-1:
		return mantissa + strings.Repeat("0", leading-len(mantissa)+1)
	}
	return mantissa[:leading+1] + "." + mantissa[leading+1:]
}

func floorDiv(a, b int) int {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

// raised and lowered write integers as superscripts and subscripts.
func superscript(n int) string {
	return translateDigits(strconv.Itoa(n), "⁰¹²³⁴⁵⁶⁷⁸⁹", "⁻")
}
func subscript(n int) string {
	return translateDigits(strconv.Itoa(n), "₀₁₂₃₄₅₆₇₈₉", "₋")
}

func translateDigits(s, digits, sign string) string {
	runes := []rune(digits)
	var b strings.Builder
	for _, c := range s {
		if c == '-' {
			b.WriteString(sign)
			continue
		}
		b.WriteRune(runes[c-'0'])
	}
	return b.String()
}

// ratFigure writes an exact rational.
func ratFigure(r *big.Rat, unit string) string {
	return figure(number.BallFromRat(r, figurePrecision), unit)
}

// exactFigure writes an exact value or stand-in.
func exactFigure(x number.Exact, unit string) string {
	return figure(number.BallFromExact(x, figurePrecision), unit)
}

// quantity writes a value of a dimension: angles in degrees, frequencies in
// hertz.
func quantity(b number.Ball, d dialect.Dimension) string {
	switch {
	case d.Frequency:
		return figure(hertz(b), "Hz")
	case d.Angle:
		return figure(b.MulInt(180).Quo(number.PiBall(max(b.Prec(), figurePrecision))), "°")
	}
	return figure(b, d.Unit())
}

// hertz is ω/2π.
func hertz(omega number.Ball) number.Ball {
	return omega.Quo(number.PiBall(max(omega.Prec(), figurePrecision)).MulInt(2))
}

// decibels is 20·log10 of a magnitude.
func decibels(magnitude number.Ball) number.Ball {
	return magnitude.WithPrecision(max(magnitude.Prec(), figurePrecision)).Log10().MulInt(20)
}
