package analyze

import (
	"context"
	"encoding/json"
	"math/big"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"portlight/analyze/exact"
	"portlight/dialect"
	"portlight/dialect/number"
)

// functionOf makes an answer from coefficients in ascending powers of s.
func functionOf(t *testing.T, d dialect.Dimension, num, den []string) *FunctionAnswer {
	t.Helper()
	poly := func(list []string) exact.Poly {
		var c []*big.Rat
		for _, s := range list {
			r, ok := new(big.Rat).SetString(s)
			if !ok {
				t.Fatalf("%q is not a number", s)
			}
			c = append(c, r)
		}
		return exact.NewPoly(c...)
	}
	roots := func(p exact.Poly) []exact.Root {
		if p.IsZero() {
			return nil
		}
		set, err := exact.Roots(context.Background(), p)
		if err != nil {
			t.Fatal(err)
		}
		list, err := set.At(100)
		if err != nil {
			t.Fatal(err)
		}
		return list
	}
	f, err := exact.NewRatio(poly(num), poly(den))
	if err != nil {
		t.Fatal(err)
	}
	return &FunctionAnswer{
		Question: Question{Text: "H"}, Dimension: d, Ratio: f, Exact: true,
		Zeros: roots(f.Num), Poles: roots(f.Den),
	}
}

func TestFunctionWords(t *testing.T) {
	for _, c := range []struct {
		name     string
		d        dialect.Dimension
		num, den []string
		want     []string
	}{
		{"a constant", dialect.DimensionNumber, []string{"1"}, []string{"10"}, []string{"0.1"}},
		{"an inductance", dialect.DimensionResistance, []string{"0", "47/10000"}, []string{"1"},
			[]string{"s·4.7 mH", "at DC 0, at high frequency without bound"}},
		{"a capacitance", dialect.DimensionResistance, []string{"1"}, []string{"0", "22/1000000000"},
			[]string{"1/(s·22 nF)", "at DC without bound, at high frequency 0"}},
		{"a lag", dialect.DimensionNumber, []string{"1"}, []string{"1", "3/20000"},
			[]string{"1 / (1 + s/ω₁)", "with ω₁ = 2π·1.061 kHz", "at DC 1, at high frequency 0"}},
		// ζ = 40/2·√(1e-6/10e-3) = 0.2 (any text on second-order circuits).
		{"a resonance", dialect.DimensionNumber, []string{"100000000"}, []string{"100000000", "4000", "1"},
			[]string{"1 / (1 + 2ζ₁·s/ω₁ + (s/ω₁)²)", "with ω₁ = 2π·1.592 kHz, ζ₁ = 0.2 (quality 2.5)", "at DC 1, at high frequency 0"}},
		{"a triple pole", dialect.DimensionNumber, []string{"1000000000"}, []string{"1000000000", "3000000", "3000", "1"},
			[]string{"1 / (1 + s/ω₁)³", "with ω₁ = 2π·159.2 Hz", "at DC 1, at high frequency 0"}},
		{"an all-pass", dialect.DimensionNumber, []string{"1000", "-1"}, []string{"1000", "1"},
			[]string{"(1 − s/ω₁) / (1 + s/ω₂)", "with ω₁ = 2π·159.2 Hz", "with ω₂ = 2π·159.2 Hz", "at DC 1, at high frequency −1"}},
		{"zero", dialect.DimensionVoltage, []string{"0"}, []string{"1"}, []string{"0"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if diff := cmp.Diff(c.want, Words(functionOf(t, c.d, c.num, c.den))); diff != "" {
				t.Error(diff)
			}
		})
	}
}

func TestFunctionJSON(t *testing.T) {
	f := functionOf(t, dialect.DimensionNumber, []string{"100000000"}, []string{"100000000", "4000", "1"})
	data, err := json.Marshal(JSON(f))
	if err != nil {
		t.Fatal(err)
	}
	text := string(data)
	for _, part := range []string{
		`{"question":"H","kind":"function","unit":"","exact":true,"numerator":["1"],"denominator":["1","1/25000","1/100000000"],"zeros":[],"poles":[{"re":"-2000.00000000000000000000","im":"-9797.95897113271239278914"`,
		`"multiplicity":1,"radius":"`, `"hidden":[]}`,
	} {
		if !strings.Contains(text, part) {
			t.Errorf("%s\nlacks %s", text, part)
		}
	}
}

func TestValueWords(t *testing.T) {
	kilohertz := &dialect.Constant{Value: number.FromInt(1000)} // rad/s
	z := func(re, im string) *ValueAnswer {
		v := number.ComplexBall{Re: ratBall(re), Im: ratBall(im)}
		return &ValueAnswer{
			Question: Question{Text: "z[a]"}, Dimension: dialect.DimensionResistance, Complex: true, Value: v,
			Magnitude: v.Abs(), Phase: v.Arg().MulInt(180).Quo(number.PiBall(128)), Proved: true, At: kilohertz,
		}
	}
	for _, c := range []struct {
		answer *ValueAnswer
		want   []string
	}{
		{z("3", "4"), []string{"5 Ω ∠ 53.13°", "3 Ω + j·4 Ω", "like 3 Ω in series with 4 mH at this frequency"}},
		{z("3", "-4"), []string{"5 Ω ∠ −53.13°", "3 Ω − j·4 Ω", "like 3 Ω in series with 250 µF at this frequency"}},
	} {
		if diff := cmp.Diff(c.want, Words(c.answer)); diff != "" {
			t.Error(diff)
		}
	}
	y := z("1/2", "1/4")
	y.Dimension = dialect.DimensionConductance
	if got, want := Words(y)[2], "like 2 Ω in parallel with 250 µF at this frequency"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

// TestDecimalsAreRight checks that what JSON says, with the error beside it,
// holds the number.
func TestDecimalsAreRight(t *testing.T) {
	for _, s := range []string{"1/3", "-2/7", "1", "0", "123456789012345678901234567890", "1/1024", "-2000", "5e-19", "22/7000000"} {
		b := ratBall(s)
		shown, ok := new(big.Rat).SetString(decimal(b))
		if !ok {
			t.Fatalf("%s is written %q", s, decimal(b))
		}
		bound, ok := new(big.Rat).SetString(errorOf(b))
		if !ok {
			t.Fatalf("the error of %s is written %q", s, errorOf(b))
		}
		truth, _ := new(big.Rat).SetString(s)
		if off := new(big.Rat).Sub(truth, shown); off.Abs(off).Cmp(bound) > 0 {
			t.Errorf("%s is written %s within %s", s, decimal(b), errorOf(b))
		}
	}
	if got := decimal(ratBall("-2000")); got != "-2000" {
		t.Errorf("an exact number is written %q", got)
	}
}
