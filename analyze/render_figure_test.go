package analyze

import (
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"

	"portlight/dialect"
	"portlight/dialect/number"
)

func ratBall(s string) number.Ball {
	r, ok := new(big.Rat).SetString(s)
	if !ok {
		panic(s)
	}
	return number.BallFromRat(r, 128)
}

func TestFigure(t *testing.T) {
	wide := func(mid, rad string) number.Ball {
		r, _ := new(big.Float).SetString(rad)
		return ratBall(mid).WithRadius(r)
	}
	for _, c := range []struct {
		ball       number.Ball
		unit, want string
	}{
		{ratBall("4700"), "Ω", "4.7 kΩ"},
		{ratBall("1/10"), "Ω", "100 mΩ"},
		{ratBall("47001/10"), "Ω", "4.700 kΩ"},
		{ratBall("-187.654"), "V", "−187.7 V"},
		{ratBall("0"), "A", "0 A"},
		{ratBall("22e-12"), "F", "22 pF"},
		{ratBall("1/3"), "", "0.3333"},
		{ratBall("999996/10"), "V", "100.0 kV"},
		{ratBall("12345678"), "", "1.235·10⁷"},
		{ratBall("2.5e-40"), "A", "2.5·10⁻⁴⁰ A"},
		{ratBall("-3.0103"), "dB", "−3.010 dB"},
		{ratBall("-45"), "°", "−45°"},
		{ratBall("2e6"), "V^2", "2000000 V^2"},
		{ratBall("5000"), "V/s", "5 kV/s"},
		{ratBall("1/7"), "1/s", "0.1429 1/s"},
		{wide("4711.26", "0.8"), "Ω", "4.71 kΩ (3 sure digits)"},
		{wide("4711.26", "200"), "Ω", "5 kΩ (1 sure digit)"},
		{wide("0", "2.4e-19"), "V", "0 to within 300 zV"},
		{wide("2.5", "0.4"), "V", "2.500 V ± 500 mV"},
	} {
		if got := figure(c.ball, c.unit); got != c.want {
			t.Errorf("figure(%v, %q) = %q, want %q", c.ball, c.unit, got, c.want)
		}
	}
	if got := quantity(ratBall("6283.185307179586476925286766559"), dialect.DimensionFrequency); got != "1.000 kHz" {
		t.Errorf("2000π rad/s is shown as %q", got)
	}
}

// TestFiguresAreRight compares what is shown with the number itself: no
// figure may be off by more than half a unit of its last digit.
func TestFiguresAreRight(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		r := new(big.Rat).SetFrac64(random.Int64N(1<<40)-1<<39, random.Int64N(1<<30)+1)
		text := ratFigure(r, "V")
		digits, unit, _ := strings.Cut(text, " ")
		shown, ok := new(big.Rat).SetString(strings.Replace(digits, minus, "-", 1))
		if !ok {
			t.Fatalf("%s is shown as %q", r, text)
		}
		scale := map[string]string{"QV": "1e30", "GV": "1e9", "MV": "1e6", "kV": "1e3", "V": "1", "mV": "1e-3", "µV": "1e-6", "nV": "1e-9", "pV": "1e-12", "fV": "1e-15", "aV": "1e-18"}[unit]
		if r.Sign() == 0 {
			continue
		}
		factor, ok := new(big.Rat).SetString(scale)
		if !ok {
			t.Fatalf("%s is shown as %q", r, text)
		}
		_, fraction, _ := strings.Cut(digits, ".")
		half := new(big.Rat).SetFrac(big.NewInt(1), new(big.Int).Mul(big.NewInt(2), new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(len(fraction))), nil)))
		off := new(big.Rat).Sub(new(big.Rat).Quo(r, factor), shown)
		if off.Abs(off).Cmp(half) > 0 {
			t.Fatalf("%s is shown as %q", r, text)
		}
	}
}
