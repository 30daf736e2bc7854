package analyze_test

import (
	"math"
	"strings"
	"testing"

	"portlight/analyze"
)

// switched is a network that is switched several times, driven late, with
// poles that are real, complex and at the origin.
const switched = `ground hull
voltage source Vbus = 24 V * u(t) - 6 V * u(t - 3 ms)
switch Sa = closes at 1 ms, opens at 2 ms, closes at 5 ms
switch Sb = opens at 4 ms
bus -[Vbus]- hull
bus -[resistor Ra = 10 Ω]- a -[Sa]- b
a -[resistor Rd = 220 Ω]- hull
b -[resistor Rb = 50 Ω]-[inductor Lb = 2 mH, initially 5 mA]- c
b -[resistor Re = 470 Ω]- hull
c -[capacitor Cc = 1 uF, initially 3 V]- hull
c -[Sb]-[resistor Rc = 100 Ω]- hull
`

// TestTermsAddUp checks what the JSON form of a signal promises: the value is
// the sum of the terms that have begun, also after switching.
func TestTermsAddUp(t *testing.T) {
	a := &asker{ctx: t.Context(), analysis: analysisOf("switched.plight", switched)}
	for _, output := range []string{"v[c]", "i[Lb]", "v[a]", "v[c,a]"} {
		form, err := a.ask("%s", output)
		if err != nil {
			t.Fatal(err)
		}
		for _, ms := range []float64{0.1, 0.9, 1.001, 1.7, 2.02, 2.9, 3.3, 4.001, 4.6, 5.1, 9} {
			v, err := a.ask("%s at %g ms", output, ms)
			if err != nil {
				t.Fatal(err)
			}
			zi, sizeZI, err := termsAt(form.ZeroInput, ms/1e3)
			if err != nil {
				t.Fatal(err)
			}
			zs, sizeZS, err := termsAt(form.ZeroState, ms/1e3)
			if err != nil {
				t.Fatal(err)
			}
			for _, part := range []struct {
				name            string
				got, want, size float64
			}{{"zero-input", zi, float(text(v.ZeroInput)), sizeZI}, {"zero-state", zs, float(text(v.ZeroState)), sizeZS}} {
				if !(math.Abs(part.got-part.want) <= 1e-10*(math.Abs(part.want)+part.size)) {
					t.Errorf("%s at %g ms: the terms of the %s part add up to %g, want %g", output, ms, part.name, part.got, part.want)
				}
			}
		}
	}
}

// TestSignalWords checks the wording against the closed forms of first- and
// second-order circuits.
func TestSignalWords(t *testing.T) {
	for _, c := range []struct {
		network, question string
		want              []string
	}{
		{
			"ground hull\nvoltage source Vin = 5 V * u(t)\nin -[Vin]- hull\nin -[resistor R = 1 kΩ]- out -[capacitor C = 1 uF, initially 2 V]- hull\n",
			"v[out]",
			[]string{"total: 5 V − 3 V·e^(−t/1 ms)", "zero-input part: 2 V·e^(−t/1 ms)", "zero-state part: 5 V − 5 V·e^(−t/1 ms)"},
		},
		{
			"ground hull\ncapacitor C = 1 uF, initially 3 V\na -[C]- hull\na -[inductor L = 1 H]- hull\n",
			"v[a]",
			[]string{"zero-input part: 3 V·cos(2π·159.2 Hz·t)", "zero-state part: 0"},
		},
		{
			"ground hull\nvoltage source Vin = 2 V/ms * t * u(t - 1 ms)\nin -[Vin]- hull\nin -[resistor R = 1 kΩ]- hull\n",
			"v[in]",
			[]string{"zero-state part: from 1 ms on: 2 V + 2 kV/s·t′, t′ = t − 1 ms", "zero-input part: 0"},
		},
		{
			"ground hull\nvoltage source Vin = 1 V * u(t)\nin -[Vin]- hull\nin -[capacitor C = 1 uF || resistor R = 1 kΩ]- hull\n",
			"i[C]",
			[]string{"zero-state part: 1 µC·δ(t)", "zero-input part: 0"},
		},
	} {
		answer, err := analysisOf("a.plight", c.network).Ask(t.Context(), c.question)
		if err != nil {
			t.Fatal(err)
		}
		if got := analyze.Words(answer); strings.Join(got, "\n") != strings.Join(c.want, "\n") {
			t.Errorf("%s is told\n%s\nwant\n%s", c.question, strings.Join(got, "\n"), strings.Join(c.want, "\n"))
		}
	}
}

// TestMarkdownIsPlain checks that what a network's names and figures contain
// is not read as marks.
func TestMarkdownIsPlain(t *testing.T) {
	a := analysisOf("a.plight", "ground hull\na_b_c -[resistor R_1_2 = 1 kΩ || resistor R_3 = 1 kΩ]- hull\n")
	answer, err := a.Ask(t.Context(), "z[a_b_c]")
	if err != nil {
		t.Fatal(err)
	}
	if got, want := analyze.Markdown(answer), "**z\\[a\\_b\\_c\\]**\n\n- z\\[a\\_b\\_c\\] = R\\_1\\_2·R\\_3/(R\\_1\\_2 + R\\_3)\n- 500 Ω\n"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

// TestPictureOverRange checks that a question over a range is drawn from the
// signal, finer than its table, and that the curve jumps where the signal does.
func TestPictureOverRange(t *testing.T) {
	a := analysisOf("switched.plight", switched)
	p, answer, err := a.Picture(t.Context(), "v[a] from 0.5 ms to 1.5 ms")
	if err != nil {
		t.Fatal(err)
	}
	if _, ok := answer.(*analyze.TableAnswer); !ok {
		t.Errorf("the answer is a %T", answer)
	}
	x, y := p.Panels[0].X, p.Panels[0].Y[0]
	if len(x) < 400 || x[0] != 0.5e-3 || math.Abs(x[len(x)-1]-1.5e-3) > 1e-15 {
		t.Fatalf("%d points from %g to %g", len(x), x[0], x[len(x)-1])
	}
	steepest := 0.0
	for i := 1; i < len(x); i++ {
		if x[i]-x[i-1] < 1e-9 {
			steepest = math.Max(steepest, math.Abs(y[i]-y[i-1]))
		}
	}
	// Closing Sa at 1 ms joins a, behind 10 Ω ∥ 220 Ω from 24 V, to b.
	before, after := 24.0*220/230, y[len(y)-1]
	if steepest < 0.1 || !(after < before) {
		t.Errorf("the largest jump is %g V", steepest)
	}
}
