package response

import (
	"context"
	"math"
	"math/big"
	"testing"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// handPlant is a network given by its transfers, for tests that need no network.
type handPlant struct {
	names []memory
	rows  []*row
}

func (p *handPlant) memories() []memory { return p.names }

func (p *handPlant) memoryRows(context.Context, bool) ([]*row, error) { return p.rows, nil }

func poly(c ...int64) exact.Poly { return exact.PolyFromInt64s(c...) }

func ratio(t testing.TB, num, den exact.Poly) exact.Ratio {
	t.Helper()
	r, err := exact.NewRatio(num, den)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func rat(t testing.TB, s string) *big.Rat {
	t.Helper()
	r, ok := new(big.Rat).SetString(s)
	if !ok {
		t.Fatalf("bad rational %q", s)
	}
	return r
}

func num(t testing.TB, s string) number.Exact {
	t.Helper()
	return number.FromRat(rat(t, s))
}

// step, sine, … are the waves of tests.
func step(x number.Exact) Wave {
	return Wave{Pieces: []WavePiece{{Terms: []WaveTerm{{Cosine: x}}}}}
}

func delayedStep(x, from number.Exact) Wave {
	return Wave{Pieces: []WavePiece{{From: from, Terms: []WaveTerm{{Cosine: x}}}}}
}

// transferSignal is the answer to one source through a transfer h.
func transferSignal(t testing.TB, h exact.Ratio, w Wave) *Signal {
	t.Helper()
	s, err := newSolution([]*big.Rat{new(big.Rat)}, []plant{&handPlant{}}, []driven{{0, w}})
	if err != nil {
		t.Fatal(err)
	}
	comps, err := s.components(context.Background(), 0, &row{sources: map[int]exact.Ratio{0: h}})
	if err != nil {
		t.Fatal(err)
	}
	return newSignal(s, comps, nil)
}

func valueOf(t testing.TB, s *Signal, at string) float64 {
	t.Helper()
	b, err := s.Value(context.Background(), rat(t, at), Right, 17)
	if err != nil {
		t.Fatal(err)
	}
	return b.MidFloat64()
}

func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Max(math.Abs(want), 1e-300)) {
		t.Errorf("%s: got %.17g, want %.17g", what, got, want)
	}
}

// The closed forms are the textbook ones of first- and second-order networks;
// they follow from the differential equation by hand.
func TestClosedForms(t *testing.T) {
	h1 := ratio(t, poly(1), poly(1, 1)) // 1/(s+1)
	t.Run("first order", func(t *testing.T) {
		s := transferSignal(t, h1, step(num(t, "5")))
		near(t, "v(2)", valueOf(t, s, "2"), 5*(1-math.Exp(-2)), 1e-15)
	})
	t.Run("critically damped", func(t *testing.T) {
		s := transferSignal(t, ratio(t, poly(1), poly(1, 2, 1)), step(num(t, "1")))
		near(t, "v(2)", valueOf(t, s, "2"), 1-3*math.Exp(-2), 1e-15)
	})
	t.Run("resonance", func(t *testing.T) {
		// 1/(s²+1) driven by sin t: (sin t − t cos t)/2.
		w := Wave{Always: []WaveTerm{{Omega: num(t, "1"), Sine: num(t, "1")}}}
		s := transferSignal(t, ratio(t, poly(1), poly(1, 0, 1)), w)
		near(t, "v(3)", valueOf(t, s, "3"), (math.Sin(3)-3*math.Cos(3))/2, 1e-15)
		if !s.Coincides() || !s.Natural().IsZero() && valueOf(t, s.Natural(), "3") != 0 {
			t.Error("resonance is not told")
		}
	})
	t.Run("delayed step", func(t *testing.T) {
		s := transferSignal(t, h1, delayedStep(num(t, "2"), num(t, "1")))
		near(t, "v(1/2)", valueOf(t, s, "1/2"), 0, 0)
		near(t, "v(3)", valueOf(t, s, "3"), 2*(1-math.Exp(-2)), 1e-15)
	})
	t.Run("impulses", func(t *testing.T) {
		// s²/(s+1) = s − 1 + 1/(s+1), driven by a step: δ − … = 1 + (−1/(s+1))·…
		s := transferSignal(t, ratio(t, poly(0, 0, 1), poly(1, 1)), step(num(t, "1")))
		g, err := s.Impulses(context.Background(), 17)
		if err != nil || len(g) != 1 || len(g[0].Exact) != 1 || g[0].Exact[0].Cmp(big.NewRat(1, 1)) != 0 {
			t.Fatalf("impulses %v %v", g, err)
		}
		near(t, "v(1)", valueOf(t, s, "1"), -math.Exp(-1), 1e-15)
	})
	t.Run("ramp times exponential", func(t *testing.T) {
		// 1/(s+1) driven by t·e^{−t}: t²/2·e^{−t}.
		w := Wave{Always: []WaveTerm{{Power: 1, Rate: num(t, "-1"), Cosine: num(t, "1")}}}
		s := transferSignal(t, h1, w)
		near(t, "v(3)", valueOf(t, s, "3"), 4.5*math.Exp(-3), 1e-15)
	})
}
