package frequency

import (
	"context"
	"errors"
	"math"
	"math/big"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

func ratio(t testing.TB, num, den []int64) exact.Ratio {
	t.Helper()
	h, err := exact.NewRatio(exact.PolyFromInt64s(num...), exact.PolyFromInt64s(den...))
	if err != nil {
		t.Fatal(err)
	}
	return h
}

func near(t *testing.T, what string, got number.Ball, want float64) {
	t.Helper()
	if math.Abs(got.MidFloat64()-want) > 1e-12*(1+math.Abs(want)) {
		t.Errorf("%s: %v, want %v", what, got.MidFloat64(), want)
	}
}

// The half-power frequency of 1/(1 + s/ω) is ω; that of the second-order
// section with ζ = 1/√2 is ω0 (Butterworth); a band-pass s·(ω0/Q)/(s² + s·ω0/Q + ω0²)
// has the bandwidth ω0/Q exactly.
func TestBandwidth(t *testing.T) {
	ctx := context.Background()
	for _, c := range []struct {
		name     string
		num, den []int64
		width    float64
	}{
		{"first order", []int64{7}, []int64{7, 1}, 7},
		{"band-pass ω0=10 Q=5", []int64{0, 2}, []int64{100, 2, 1}, 2},
		{"fourth of a gain", []int64{3}, []int64{12, 4}, 3},
	} {
		b, err := Bandwidth(ctx, ratio(t, c.num, c.den), 192)
		if err != nil {
			t.Fatal(c.name, err)
		}
		near(t, c.name, b.Width(), c.width)
	}
	if _, err := Bandwidth(ctx, ratio(t, []int64{0, 1}, []int64{1, 1}), 192); !errors.Is(err, ErrNoPassband) {
		t.Errorf("a high-pass has no upper end of its band: %v", err)
	}
	if _, err := Bandwidth(ctx, ratio(t, []int64{1}, []int64{2}), 192); !errors.Is(err, ErrFlat) {
		t.Errorf("a constant has no bandwidth: %v", err)
	}
}

func TestCrossoverAndDamping(t *testing.T) {
	ctx := context.Background()
	w, err := Crossover(ctx, ratio(t, []int64{1000}, []int64{0, 1}), 192)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "integrator", w, 1000)
	// s² + 2ζω0·s + ω0² with ω0 = 5, ζ = 0.3.
	p, err := LeastDamped(ctx, ratio(t, []int64{25}, []int64{25, 3, 1}), 192)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "ω0", p.Natural, 5)
	near(t, "ζ", p.Damping, 0.3)
	near(t, "Q", p.Quality(192), 1/0.6)
	// Two real poles at −1 and −4: ω0 = 2, ζ = 5/4.
	p, err = LeastDamped(ctx, ratio(t, []int64{1}, []int64{4, 5, 1}), 192)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "overdamped ζ", p.Damping, 1.25)
}

// Extremes must find a resonance of Q = 10⁵ far from any grid: the magnitude
// of ω0²/(s² + s·ω0/Q + ω0²) peaks at Q/√(1 − 1/4Q²) (any text on
// second-order systems).
func TestNarrowResonance(t *testing.T) {
	q := int64(100000)
	h := ratio(t, []int64{q}, []int64{q, 1, q}) // ω0 = 1
	from, to := number.FromRat(big.NewRat(1, 1000)), number.FromInt(1000)
	points, err := MagnitudeSquared(h).Extremes(context.Background(), Range{From: from, To: &to}, 256)
	if err != nil {
		t.Fatal(err)
	}
	best := 0.0
	for _, p := range points {
		best = math.Max(best, math.Sqrt(p.Value.MidFloat64()))
	}
	f := float64(q)
	if want := f / math.Sqrt(1-1/(4*f*f)); math.Abs(best-want) > 1e-9*want {
		t.Errorf("peak %v, want %v", best, want)
	}
}

// polynomial draws one with small integer coefficients.
func polynomial(t *rapid.T, label string, degree int) []int64 {
	c := make([]int64, degree+1)
	for i := range c {
		c[i] = int64(rapid.IntRange(-9, 9).Draw(t, label))
	}
	if c[degree] == 0 {
		c[degree] = 1
	}
	return c
}

func evaluate(c []int64, s complex128) complex128 {
	sum := complex(0, 0)
	for i := len(c) - 1; i >= 0; i-- {
		sum = sum*s + complex(float64(c[i]), 0)
	}
	return sum
}

// The curves are compared with direct evaluation in complex128, the phase by
// its derivative's sign-free property: it differs from the principal value by whole turns.
func TestCurvesAgainstEvaluation(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		num := polynomial(t, "num", rapid.IntRange(0, 4).Draw(t, "n"))
		den := polynomial(t, "den", rapid.IntRange(1, 4).Draw(t, "d"))
		h, err := exact.NewRatio(exact.PolyFromInt64s(num...), exact.PolyFromInt64s(den...))
		if err != nil || h.IsZero() {
			return
		}
		w := float64(rapid.IntRange(1, 60).Draw(t, "w")) / 8
		n, d := evaluate(num, complex(0, w)), evaluate(den, complex(0, w))
		if cmplx.Abs(d) < 1e-6 || cmplx.Abs(n) < 1e-6 {
			return
		}
		want := n / d
		x := number.BallFromFloat64(w, 192)
		tolerance := 1e-9 * (1 + cmplx.Abs(want))
		at := func(c Curve) float64 {
			y := x
			if c.Squared {
				y = x.Mul(x)
			}
			return c.Num.EvalBall(y).Quo(c.Den.EvalBall(y)).MidFloat64()
		}
		if got := at(MagnitudeSquared(h)); math.Abs(math.Sqrt(got)-cmplx.Abs(want)) > tolerance {
			t.Fatalf("|H| %v, want %v", math.Sqrt(got), cmplx.Abs(want))
		}
		if got := at(RealPart(h)); math.Abs(got-real(want)) > tolerance {
			t.Fatalf("Re H %v, want %v", got, real(want))
		}
		if got := at(ImaginaryPart(h)); math.Abs(got-imag(want)) > tolerance {
			t.Fatalf("Im H %v, want %v", got, imag(want))
		}
		p, err := NewPhase(context.Background(), h, 192)
		if err != nil {
			t.Fatal(err)
		}
		turns := (p.At(x).MidFloat64() - cmplx.Phase(want)) / (2 * math.Pi)
		if math.Abs(turns-math.Round(turns)) > 1e-9 {
			t.Fatalf("phase %v is not %v up to whole turns", p.At(x).MidFloat64(), cmplx.Phase(want))
		}
		step := 1e-5
		delay := -(p.At(number.BallFromFloat64(w+step, 192)).MidFloat64() - p.At(number.BallFromFloat64(w-step, 192)).MidFloat64()) / (2 * step)
		if got := at(Delay(h)); math.Abs(got) < 1e3 && math.Abs(got-delay) > 1e-3*(1+math.Abs(got)) {
			t.Fatalf("delay %v, want %v", got, delay)
		}
	})
}

// Decide is compared with the roots from which the polynomial is made.
func TestDecide(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := exact.PolyFromInt64s(1)
		worst := Stable
		seen := map[int]bool{}
		for range rapid.IntRange(1, 5).Draw(t, "factors") {
			a := int64(rapid.IntRange(-3, 1).Draw(t, "a"))
			b := rapid.IntRange(0, 3).Draw(t, "b")
			if b == 0 {
				p = p.Mul(exact.PolyFromInt64s(-a, 1))
			} else {
				p = p.Mul(exact.PolyFromInt64s(a*a+int64(b*b), -2*a, 1))
			}
			switch {
			case a > 0 || a == 0 && seen[b]:
				worst = Unstable
			case a == 0:
				worst = max(worst, Marginal)
				seen[b] = true
			}
		}
		if got := Decide(p); got != worst {
			t.Fatalf("%v: %v, want %v", p, got, worst)
		}
	})
}

func TestNonNegative(t *testing.T) {
	for _, c := range []struct {
		p    []int64
		want bool
	}{
		{nil, true}, {[]int64{3}, true}, {[]int64{-3}, false},
		{[]int64{1, -2, 1}, true},      // (x−1)²
		{[]int64{-1, 3, -3, 1}, false}, // (x−1)³
		{[]int64{0, 1}, true},          // x
		{[]int64{2, 3, 1}, true},       // roots −1, −2
		{[]int64{2, -3, 1}, false},     // roots 1, 2
	} {
		if got := NonNegative(exact.PolyFromInt64s(c.p...)); got != c.want {
			t.Errorf("%v: %v", c.p, got)
		}
	}
}
