package response

import (
	"errors"
	"math"
	"math/big"
	"testing"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// A source at 2π·50 Hz and a lossless circuit whose resonance is given to 70
// digits cannot be told apart: the answer is t·sin, not the difference of two
// sines of size 10^70.
func TestNearCoincidence(t *testing.T) {
	omega := number.Pi().Mul(number.FromInt(100))
	square := new(big.Rat).Mul(omega.Rat(), omega.Rat())
	scale := new(big.Int).Exp(big.NewInt(10), big.NewInt(65), nil)
	cut := new(big.Rat).Mul(square, new(big.Rat).SetInt(scale))
	whole := new(big.Int).Quo(cut.Num(), cut.Denom())
	square = new(big.Rat).SetFrac(whole, scale)
	w := Wave{Always: []WaveTerm{{Omega: omega, Sine: num(t, "1")}}}
	h := ratio(t, exact.Constant(square), exact.NewPoly(square, new(big.Rat), big.NewRat(1, 1)))
	for _, h := range []exact.Ratio{h, h.Mul(ratio(t, poly(1), poly(1000, 0, 1)))} {
		s := transferSignal(t, h, w)
		if !s.NearCoincidence() || !s.Coincides() {
			t.Error("the coincidence is not told")
		}
		p, err := s.Pieces(background, 17)
		if err != nil {
			t.Fatal(err)
		}
		for _, x := range p[0].Terms {
			if x.Coefficient.Abs().MidFloat64() > 1e3 {
				t.Errorf("term %+v", x)
			}
		}
		_, err = s.Curve().Peak(background, Range{})
		wantUndefined(t, "peak", err, "grows")
	}
	// (sin ωt − ωt·cos ωt)/2 at 1.0025 s, half a turn and 50 turns.
	s := transferSignal(t, h, w)
	x := 100 * math.Pi * 1.0025
	near(t, "value", valueOf(t, s, "1.0025"), (math.Sin(x)-x*math.Cos(x))/2, 1e-11)
}

func TestGrowth(t *testing.T) {
	resonant := func(extra exact.Ratio) *Curve {
		// 1/(s²+1) driven by δ' … : t·sin t is 2s/(s²+1)².
		f := ratio(t, poly(0, 2), poly(1, 0, 1).Pow(2)).Add(extra)
		return transferSignal(t, f, Wave{Pieces: []WavePiece{{Impulses: []number.Exact{num(t, "1")}}}}).Curve()
	}
	zero := exact.PolyRatio(poly())
	_, err := resonant(zero).Peak(background, Range{})
	wantUndefined(t, "t sin t", err, "grows")
	_, err = resonant(ratio(t, poly(-1), poly(0, 0, 1))).Peak(background, Range{}) // t sin t − t
	if !errors.Is(err, ErrUndecided) {
		t.Errorf("t sin t − t: %v", err)
	}
	e, err := resonant(ratio(t, poly(-2), poly(0, 0, 0, 1))).Peak(background, Range{}) // t sin t − t²
	// It begins with −t⁴/6, too flat for the place, but not for the value.
	if err != nil || !e.Value.ContainsZero() || e.Value.Abs().Upper().Cmp(big.NewFloat(1e-11)) > 0 {
		t.Errorf("t sin t − t²: %s %v", e.Value, err)
	}
	_, err = resonant(zero).Abs().Peak(background, Range{})
	wantUndefined(t, "|t sin t|", err, "grows")
	e, err = resonant(zero).Peak(background, Range{To: rat(t, "3")}) // tan t = −t
	ballNear(t, "its instant", e.At, err, 2.0287578381104342)
	ramp := through(t, poly(1), poly(0, 1), step(num(t, "-2")))
	e, err = ramp.Abs().Trough(background, Range{From: rat(t, "1/2")})
	ballNear(t, "trough of |ramp|", e.Value, err, 1)
	e, err = ramp.Peak(background, Range{})
	ballNear(t, "peak of a falling ramp", e.Value, err, 0)
	wantOutcome(t, ramp, "<=", "0", Range{}, Holds)
	wantOutcome(t, ramp, ">=", "-100", Range{}, Broken)
}

func TestRanges(t *testing.T) {
	c := through(t, poly(1), poly(1, 1), step(num(t, "1")))
	one := rat(t, "1")
	e, err := c.Peak(background, Range{one, one})
	ballNear(t, "an instant", e.Value, err, 1-math.Exp(-1))
	if _, err := c.Peak(background, Range{rat(t, "2"), one}); !errors.Is(err, ErrRange) {
		t.Errorf("an empty range: %v", err)
	}
	if _, err := c.Mean(background, Range{one, one}); !errors.Is(err, ErrRange) {
		t.Errorf("the mean over an instant: %v", err)
	}
	if _, err := c.Peak(background, Range{From: rat(t, "-1")}); !errors.Is(err, ErrRange) {
		t.Errorf("before 0: %v", err)
	}
	b, err := c.Bound(background, Range{To: one})
	if err != nil || b.Contains(rat(t, "0.7")) || !b.Contains(rat(t, "0.63")) || !b.Contains(rat(t, "0.01")) {
		t.Errorf("bound %s %v", b, err)
	}
	s, _ := c.Signal()
	x, err := s.AddConstant(num(t, "3")).Before(background)
	if err != nil || x.Float() != 3 {
		t.Errorf("a constant at 0−: %v %v", x, err)
	}
	zero := s.Sub(s).Curve()
	e, err = zero.Peak(background, Range{})
	if err != nil || e.Exact == nil || e.Exact.Sign() != 0 {
		t.Errorf("zero: %+v %v", e, err)
	}
	wantOutcome(t, zero, "<=", "0", Range{}, Holds)
	wantOutcome(t, zero, "<", "0", Range{}, Broken)
	constant := zero.AddConstant(num(t, "2"))
	e, err = constant.Peak(background, Range{})
	if err != nil || e.Exact == nil || e.Exact.Cmp(rat(t, "2")) != 0 || !e.HasAt {
		t.Errorf("a constant: %+v %v", e, err)
	}
	wantOutcome(t, constant, ">", "2", Range{}, Broken)
	v, err := constant.RMS(background, Range{To: one})
	ballNear(t, "rms of a constant", v, err, 2)
	v, err = constant.Settle(background, num(t, "1/100"))
	ballNear(t, "a constant settles", v, err, 0)
}

// Poles twelve decades apart: the fast one shapes the beginning, the slow one the
// end, and neither is lost.
func TestWideSpread(t *testing.T) {
	fast, slow := rat(t, "1e9"), rat(t, "1e-3")
	d := exact.NewPoly(fast, big.NewRat(1, 1)).Mul(exact.NewPoly(slow, big.NewRat(1, 1)))
	c := transferSignal(t, ratio(t, exact.NewPoly(new(big.Rat), fast), d), step(num(t, "1"))).Curve()
	e, err := c.Peak(background, Range{})
	at := math.Log(1e12) / (1e9 - 1e-3)
	ballNear(t, "peak", e.Value, err, 1/(1-1e-12)*(math.Exp(-1e-3*at)-1e-12))
	if math.Abs(e.At.MidFloat64()/at-1) > 1e-12 {
		t.Errorf("peak at %s", e.At)
	}
	v, err := c.LastAbove(background, num(t, "1/1000"), Range{})
	ballNear(t, "last above", v, err, (math.Log(1000)-math.Log1p(-1e-12))*1000)
	wantOutcome(t, c, "<", "1", Range{}, Holds)
	wantOutcome(t, c, ">", "0", Range{From: rat(t, "1e-12")}, Holds)
}

// A burst of one whole period of a sine, its phase a stand-in: after it the two
// sines cancel, and what remains is the transient alone.
func TestBurst(t *testing.T) {
	omega := number.Pi().Mul(number.FromInt(100))
	burst := func(sign int64, from string) WavePiece {
		return WavePiece{From: num(t, from), Terms: []WaveTerm{{Omega: omega, Sine: number.FromInt(sign)}}}
	}
	w := Wave{Pieces: []WavePiece{burst(1, "0"), burst(-1, "1/50")}}
	s := transferSignal(t, ratio(t, poly(100), poly(100, 1)), w)
	final, exactly, err := s.Curve().Final(background)
	ballNear(t, "final", final, err, 0)
	if exactly != nil {
		t.Error("a final value that hinges on a stand-in is not exact")
	}
	// ∫ sin ωτ·100·e^{−100(t−τ)} dτ over the period is 100ω(1 − e^{2})/(100²+ω²)·e^{−100t}.
	x := 100 * math.Pi
	c := 100 * x * (1 - math.Exp(2)) / (1e4 + x*x)
	near(t, "after the burst", valueOf(t, s, "1/20"), c*math.Exp(-5), 1e-13)
	v, err := s.Curve().LastBelow(background, num(t, "-1/10"), Range{})
	ballNear(t, "last below", v, err, math.Log(-c*10)/100)
	direct := transferSignal(t, ratio(t, poly(1), poly(1)), w)
	b, err := direct.Value(background, rat(t, "10"), Right, 17)
	if err != nil || !b.ContainsZero() || b.Abs().Upper().Cmp(big.NewFloat(1e-50)) > 0 {
		t.Errorf("the burst itself, later: %s %v", b, err)
	}
	wantOutcome(t, direct.Curve(), "<=", "1000001/1000000", Range{}, Holds)
}
