package number

import (
	"math"
	"math/big"
	"strconv"
	"strings"
)

// Decimal returns the ball's numbers rounded to n significant digits, as an
// integer mantissa of n digits (with a sign) times a power of ten: the value is
// mantissa·10^exponent. ok is false unless every number in the ball rounds to
// the same digits. A tie goes to the even digit. Exactly zero is "0", 0; a ball
// that holds zero beside other numbers has no digits.
func (b Ball) Decimal(n int) (mantissa string, exponent int, ok bool) {
	if n < 1 || !b.IsFinite() {
		return "", 0, false
	}
	if b.isPointZero() {
		return "0", 0, true
	}
	if _, decided := b.Sign(); !decided {
		return "", 0, false
	}
	if e := b.mid.MantExp(nil); e > ratExponent || e < -ratExponent {
		return "", 0, false
	}
	mid := b.MidRat()
	if b.rad.isZero() {
		m, e := roundDecimal(mid, n)
		return m, e, true
	}
	// Rounding is monotone: where both ends agree, everything between does.
	rad := b.rad.rat()
	m1, e1 := roundDecimal(new(big.Rat).Sub(mid, rad), n)
	m2, e2 := roundDecimal(new(big.Rat).Add(mid, rad), n)
	if m1 != m2 || e1 != e2 {
		return "", 0, false
	}
	return m1, e1, true
}

// roundDecimal rounds a nonzero r to n significant digits, ties to even.
func roundDecimal(r *big.Rat, n int) (mantissa string, exponent int) {
	bits := r.Num().BitLen() - r.Denom().BitLen() // log2|r| is within 1 of it
	leading := int(math.Floor(float64(bits-1) * math.Log10(2)))
	num, den := new(big.Int).Abs(r.Num()), r.Denom()
	limit := powerOfTen(n)
	for {
		// leading is at most the exponent of the leading digit: raise it until
		// the rounded mantissa has n digits and not n+1.
		exponent = leading - n + 1
		q := divideRounded(num, den, exponent)
		if q.Cmp(limit) < 0 {
			return sign(r) + q.String(), exponent
		}
		leading++
	}
}

func sign(r *big.Rat) string {
	if r.Sign() < 0 {
		return "-"
	}
	return ""
}

// divideRounded returns num/(den·10^exponent) rounded to the nearest integer,
// ties to even.
func divideRounded(num, den *big.Int, exponent int) *big.Int {
	if exponent >= 0 {
		den = new(big.Int).Mul(den, powerOfTen(exponent))
	} else {
		num = new(big.Int).Mul(num, powerOfTen(-exponent))
	}
	q, rest := new(big.Int).QuoRem(num, den, new(big.Int))
	switch c := rest.Lsh(rest, 1).Cmp(den); {
	case c > 0, c == 0 && q.Bit(0) == 1:
		q.Add(q, big.NewInt(1))
	}
	return q
}

func powerOfTen(n int) *big.Int {
	return new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(n)), nil)
}

// Digits returns the ball's numbers rounded to n significant digits, under the
// conditions of [Ball.Decimal]: plain ("0.001250", "12.50") where the exponent
// of the leading digit is from −4 to n−1, else with a power of ten ("1.250e7").
// Trailing zeros are kept, as they are decided too.
func (b Ball) Digits(n int) (text string, ok bool) {
	mantissa, exponent, ok := b.Decimal(n)
	if !ok || mantissa == "0" {
		return mantissa, ok
	}
	return placePoint(mantissa, exponent, n), true
}

func placePoint(mantissa string, exponent, n int) string {
	sign := ""
	if mantissa[0] == '-' {
		sign, mantissa = "-", mantissa[1:]
	}
	leading := exponent + len(mantissa) - 1
	switch {
	case leading < -4 || leading >= n:
		text := sign + mantissa[:1]
		if len(mantissa) > 1 {
			text += "." + mantissa[1:]
		}
		return text + "e" + strconv.Itoa(leading)
	case leading < 0:
		return sign + "0." + strings.Repeat("0", -leading-1) + mantissa
	case leading == len(mantissa)-1:
		return sign + mantissa
	}
	return sign + mantissa[:leading+1] + "." + mantissa[leading+1:]
}

// MaxDigits returns the decided digits of the ball's numbers, up to most of
// them, as [Ball.Digits] writes them; ok is false where not even one digit is
// decided.
func (b Ball) MaxDigits(most int) (text string, ok bool) {
	n := most
	if !b.rad.isZero() {
		n = min(most, int(float64(max(b.RelativeBits(), 0)+2)*math.Log10(2))+1)
	}
	// A string of nines or zeros, or a tie, may cost a digit or a few.
	for ; n >= 1; n-- {
		if text, ok = b.Digits(n); ok {
			return text, true
		}
	}
	return "", false
}

// ErrorText returns the radius rounded up to one significant digit, such as
// "1e-18"; "0" for an exact ball and "infinite" for an unbounded one.
func (b Ball) ErrorText() string {
	switch {
	case b.rad.isZero():
		return "0"
	case b.rad.isInfinite():
		return "infinite"
	case b.rad.e > ratExponent:
		return "infinite"
	}
	r := b.rad.rat()
	bits := r.Num().BitLen() - r.Denom().BitLen()
	leading := int(math.Floor(float64(bits-1) * math.Log10(2)))
	for {
		num, den := r.Num(), r.Denom()
		if leading >= 0 {
			den = new(big.Int).Mul(den, powerOfTen(leading))
		} else {
			num = new(big.Int).Mul(num, powerOfTen(-leading))
		}
		q, rest := new(big.Int).QuoRem(num, den, new(big.Int))
		if rest.Sign() != 0 {
			q.Add(q, big.NewInt(1))
		}
		if q.Cmp(big.NewInt(10)) < 0 {
			return q.String() + "e" + strconv.Itoa(leading)
		}
		leading++
	}
}

// String returns the decided digits and the radius, for messages of tests.
func (b Ball) String() string {
	text, ok := b.MaxDigits(40)
	if !ok {
		text = b.mid.Text('g', 10)
	}
	return text + " ± " + b.ErrorText()
}
