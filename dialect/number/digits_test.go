package number

import (
	"math/big"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestDigits(t *testing.T) {
	exact := func(text string) Ball {
		r, _ := new(big.Rat).SetString(text)
		b := BallFromRat(r, 256)
		return b
	}
	for _, c := range []struct {
		b    Ball
		n    int
		want string // "" for not decided
	}{
		{exact("0"), 4, "0"},
		{exact("1"), 4, "1.000"},
		{exact("-12345"), 4, "-1.234e4"}, // tie to even
		{exact("12355"), 4, "1.236e4"},   // tie to even
		{exact("12345"), 5, "12345"},
		{exact("1/1024"), 3, "0.000977"},
		{exact("1/3"), 5, "0.33333"},
		{exact("2/3"), 5, "0.66667"},
		{exact("1/3").Neg(), 1, "-0.3"},
		{exact("9999.96"), 5, "10000"},
		{exact("9999.96"), 4, "1.000e4"},
		{exact("9999.96"), 6, "9999.96"},
		{exact("1e-30"), 2, "1.0e-30"},
		{exact("1e30"), 1, "1e30"},
		{exact("0.00012"), 2, "0.00012"},
		{exact("0.000012"), 2, "1.2e-5"},
		{exact("100").WithRadius(big.NewFloat(0.001)), 4, "100.0"},
		{exact("100").WithRadius(big.NewFloat(0.001)), 5, ""}, // 99.999 or 100.00
		{exact("100").WithRadius(big.NewFloat(0.001)), 6, ""},
		{exact("0.5").WithRadius(big.NewFloat(1e-9)), 1, "0.5"},
		{exact("2.5").WithRadius(big.NewFloat(1e-9)), 1, ""}, // straddles a tie
		{exact("1").WithRadius(big.NewFloat(2)), 1, ""},
		{exact("0").WithRadius(big.NewFloat(1e-9)), 1, ""},
		{PiBall(256), 50, "3.1415926535897932384626433832795028841971693993751"}, // OEIS A000796
	} {
		got, ok := c.b.Digits(c.n)
		if !ok {
			got = ""
		}
		if got != c.want {
			t.Errorf("%v to %d digits: %q, want %q", c.b, c.n, got, c.want)
		}
	}
	if m, e, ok := PiBall(128).Decimal(4); m != "3142" || e != -3 || !ok {
		t.Errorf("Decimal(4) of π: %s e%d %v", m, e, ok)
	}
}

func TestErrorText(t *testing.T) {
	for _, c := range []struct {
		rad  string
		want string
	}{{"1e-18", "2e-18"}, {"1", "1e0"}, {"1024", "2e3"}, {"9.5", "1e1"}, {"1/4", "3e-1"}, {"3", "3e0"}} {
		r, _ := new(big.Rat).SetString(c.rad)
		_, upper := magnitudeOfRat(r)
		if got := (Ball{rad: upper}).ErrorText(); got != c.want {
			t.Errorf("radius %s: %s, want %s", c.rad, got, c.want)
		}
	}
	if got := (Ball{}).ErrorText(); got != "0" {
		t.Error(got)
	}
}

// The digits shown are those of every number in the ball: the decimal is within
// half a unit of its last digit of both ends; and the radius text is not below
// the radius and below twice it and a digit.
func TestDigitsAreRight(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r := drawRat(t, "x")
		b := around(t, r, "x")
		n := rapid.IntRange(1, 30).Draw(t, "n")
		if text, ok := b.Digits(n); ok {
			shown, valid := new(big.Rat).SetString(text)
			if !valid {
				t.Fatalf("%q is no number", text)
			}
			mantissa, exponent, _ := b.Decimal(n)
			if strings.TrimLeft(mantissa, "-0") != "" && len(strings.TrimPrefix(mantissa, "-")) != n {
				t.Fatalf("mantissa %q for %d digits", mantissa, n)
			}
			half := new(big.Rat).SetInt(powerOfTen(max(exponent, -exponent)))
			if exponent < 0 {
				half.Inv(half)
			}
			half.Mul(half, halfRat)
			shown.Sub(shown, r)
			if shown.Abs(shown).Cmp(half) > 0 {
				t.Fatalf("%v shown as %s", r, text)
			}
		}
		if !b.IsExact() {
			shown, _ := new(big.Rat).SetString(b.ErrorText())
			if rad := b.rad.rat(); shown.Cmp(rad) < 0 || shown.Cmp(rad.Mul(rad, big.NewRat(21, 10))) > 0 {
				t.Fatalf("radius %v shown as %s", b.rad, b.ErrorText())
			}
		}
	})
}
