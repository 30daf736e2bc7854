package response

import (
	"context"
	"errors"
	"math"
	"math/big"
	"strings"
	"testing"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

var background = context.Background()

func sineWave(t testing.TB, amplitude, omega string) Wave {
	return Wave{Always: []WaveTerm{{Omega: num(t, omega), Sine: num(t, amplitude)}}}
}

// through is the answer of num/den to a wave.
func through(t testing.TB, n, d exact.Poly, w Wave) *Curve {
	return transferSignal(t, ratio(t, n, d), w).Curve()
}

func ballNear(t *testing.T, what string, got number.Ball, err error, want float64) {
	t.Helper()
	if err != nil {
		t.Errorf("%s: %v", what, err)
		return
	}
	if got.RelativeBits() < 40 && want != 0 {
		t.Errorf("%s: %s has only %d bits", what, got, got.RelativeBits())
	}
	if m := got.MidFloat64(); math.Abs(m-want) > 1e-14*math.Abs(want)+1e-300 {
		t.Errorf("%s: got %.17g, want %.17g", what, m, want)
	}
}

func wantUndefined(t *testing.T, what string, err error, words string) {
	t.Helper()
	if !errors.Is(err, ErrUndefined) || !strings.Contains(err.Error(), words) {
		t.Errorf("%s: got %v, want undefined because %q", what, err, words)
	}
}

func wantOutcome(t *testing.T, c *Curve, relation, level string, r Range, want Outcome) {
	t.Helper()
	d, err := c.Decide(background, relation, num(t, level), r)
	if err != nil || d.Outcome != want {
		t.Errorf("%s %s: got %v (%s, worst %s) %v, want %v", relation, level, d.Outcome, d.Why, d.Worst.Value, err, want)
	}
}

// A first-order step answer: the textbook figures are ln 9 for the rise time and
// −ln(band) for the settling time, in time constants.
func TestFirstOrderMeasures(t *testing.T) {
	c := through(t, poly(1), poly(1, 1), step(num(t, "5")))
	final, exactly, err := c.Final(background)
	ballNear(t, "final", final, err, 5)
	if exactly == nil || exactly.Cmp(big.NewRat(5, 1)) != 0 {
		t.Errorf("final is not exact: %v", exactly)
	}
	e, err := c.Peak(background, Range{})
	if err != nil || e.Exact == nil || e.Exact.Cmp(big.NewRat(5, 1)) != 0 || e.HasAt || e.Attained {
		t.Errorf("peak %+v %v", e, err)
	}
	e, err = c.Trough(background, Range{})
	if err != nil || e.Exact == nil || e.Exact.Sign() != 0 || !e.HasAt {
		t.Errorf("trough %+v %v", e, err)
	}
	v, err := c.Settle(background, num(t, "1/100"))
	ballNear(t, "settle", v, err, math.Log(100))
	rise, start, err := c.Rise(background)
	ballNear(t, "rise", rise, err, math.Log(9))
	ballNear(t, "rise from", start, err, -math.Log(0.9))
	over, _, err := c.Overshoot(background)
	if err != nil || over.MidFloat64() != 0 || !over.IsExact() {
		t.Errorf("overshoot %s %v", over, err)
	}
	wantOutcome(t, c, "<=", "5", Range{}, Holds)
	wantOutcome(t, c, "<", "5", Range{}, Holds)
	wantOutcome(t, c, "<=", "49999999999/10000000000", Range{}, Broken)
	wantOutcome(t, c, "<=", "4", Range{To: rat(t, "3/2")}, Holds)
	wantOutcome(t, c, "<=", "4", Range{To: rat(t, "2")}, Broken)
	wantOutcome(t, c, ">=", "0", Range{}, Holds)
	wantOutcome(t, c, ">", "0", Range{}, Broken)
	wantOutcome(t, c, ">", "0", Range{From: rat(t, "1/1000000")}, Holds)
	v, err = c.Mean(background, Range{To: rat(t, "2")})
	ballNear(t, "mean", v, err, 5*(1-(1-math.Exp(-2))/2))
	v, err = c.RMS(background, Range{})
	ballNear(t, "rms in the long run", v, err, 5)
	v, err = c.LastBelow(background, num(t, "4"), Range{})
	ballNear(t, "last below 4", v, err, math.Log(5))
	_, err = c.LastAbove(background, num(t, "4"), Range{})
	wantUndefined(t, "last above 4", err, "stays")
	_, err = c.LastAbove(background, num(t, "6"), Range{})
	wantUndefined(t, "last above 6", err, "never")
	_, err = c.LastAbove(background, num(t, "5"), Range{})
	wantUndefined(t, "last above 5", err, "never")
	_, err = c.LastBelow(background, num(t, "5"), Range{})
	wantUndefined(t, "last below 5", err, "stays")
}

// A decaying exponential has its greatest value at its beginning, exactly.
func TestDecay(t *testing.T) {
	w := Wave{Pieces: []WavePiece{{Impulses: []number.Exact{num(t, "5")}}}}
	c := through(t, poly(1), poly(1, 1), w)
	e, err := c.Peak(background, Range{})
	if err != nil || e.Exact == nil || e.Exact.Cmp(big.NewRat(5, 1)) != 0 || !e.HasAt || e.At.MidFloat64() != 0 {
		t.Errorf("peak %+v %v", e, err)
	}
	wantOutcome(t, c, "<=", "5", Range{}, Holds)
	wantOutcome(t, c, "<", "5", Range{}, Broken)
	wantOutcome(t, c, ">", "0", Range{}, Holds)
	_, err = c.Settle(background, num(t, "1/100"))
	wantUndefined(t, "settle", err, "final value is 0")
	v, err := c.LastAbove(background, num(t, "1"), Range{})
	ballNear(t, "last above 1", v, err, math.Log(5))
	v, err = c.Integral(background, Range{})
	ballNear(t, "integral", v, err, 5)
	v, err = c.Abs().RMS(background, Range{To: rat(t, "1")})
	ballNear(t, "rms", v, err, 5*math.Sqrt((1-math.Exp(-2))/2))
}

// The step answer of 1/(s² + 2ζs + 1) peaks at π/√(1−ζ²) with the overshoot
// exp(−πζ/√(1−ζ²)).
func TestSecondOrder(t *testing.T) {
	c := through(t, poly(25), poly(25, 10, 25), step(num(t, "-2"))) // ζ = 1/5
	zeta := 0.2
	wd := math.Sqrt(1 - zeta*zeta)
	over, e, err := c.Overshoot(background)
	ballNear(t, "overshoot", over, err, math.Exp(-math.Pi*zeta/wd))
	ballNear(t, "instant", e.At, err, math.Pi/wd)
	e, err = c.Trough(background, Range{})
	ballNear(t, "trough", e.Value, err, -2*(1+math.Exp(-math.Pi*zeta/wd)))
	e, err = c.Abs().Peak(background, Range{})
	ballNear(t, "peak of abs", e.Value, err, 2*(1+math.Exp(-math.Pi*zeta/wd)))
	e, err = c.Peak(background, Range{From: rat(t, "3")})
	// The second extremum, at 2π/ωd.
	ballNear(t, "peak from 3", e.Value, err, -2*(1-math.Exp(-2*math.Pi*zeta/wd)))
	ballNear(t, "its instant", e.At, err, 2*math.Pi/wd)
	wantOutcome(t, c, ">=", "-3053/1000", Range{}, Broken)
	wantOutcome(t, c, ">=", "-3054/1000", Range{}, Holds)
}

func TestSustained(t *testing.T) {
	one, tenth := poly(1), poly(10)
	t.Run("one sine", func(t *testing.T) {
		c := through(t, one, one, sineWave(t, "3", "7"))
		e, err := c.Peak(background, Range{})
		ballNear(t, "peak", e.Value, err, 3)
		ballNear(t, "at", e.At, err, math.Pi/14)
		e, err = c.Trough(background, Range{})
		ballNear(t, "trough", e.Value, err, -3)
		ballNear(t, "at", e.At, err, 3*math.Pi/14)
		v, err := c.RMS(background, Range{})
		ballNear(t, "rms", v, err, 3/math.Sqrt2)
		v, err = c.Abs().Mean(background, Range{})
		ballNear(t, "mean of abs", v, err, 6/math.Pi)
		v, err = c.Mean(background, Range{})
		ballNear(t, "mean", v, err, 0)
		_, _, err = c.Final(background)
		wantUndefined(t, "final", err, "oscillates")
		e, err = c.Abs().Trough(background, Range{From: rat(t, "1/10")})
		if err != nil || e.Value.Abs().Upper().Cmp(big.NewFloat(1e-9)) > 0 {
			t.Errorf("trough of abs: %s %v", e.Value, err)
		}
		wantOutcome(t, c.Abs(), "<=", "3000001/1000000", Range{}, Holds)
		wantOutcome(t, c.Abs(), "<=", "2999999/1000000", Range{}, Broken)
	})
	t.Run("two sines", func(t *testing.T) {
		w := sineWave(t, "1", "1")
		w.Always = append(w.Always, sineWave(t, "1", "3").Always...)
		c := through(t, one, one, w)
		e, err := c.Peak(background, Range{}) // 8/(3√3), where cos² t = 1/3
		ballNear(t, "peak", e.Value, err, 8/(3*math.Sqrt(3)))
	})
	t.Run("with a transient", func(t *testing.T) {
		// 10/(s+10) with sin t: amplitude 10/√101, and the transient adds.
		c := through(t, tenth, poly(10, 1), sineWave(t, "1", "1"))
		e, err := c.Peak(background, Range{})
		if d := e.Value.MidFloat64() - 10/math.Sqrt(101); err != nil || d < 5e-9 || d > 6e-9 {
			t.Errorf("peak %s %v", e.Value, err)
		}
		_, err = c.LastAbove(background, num(t, "1/2"), Range{})
		wantUndefined(t, "last above", err, "comes back")
	})
	t.Run("growing", func(t *testing.T) {
		c := through(t, one, poly(0, 1), step(num(t, "1")))
		_, err := c.Peak(background, Range{})
		wantUndefined(t, "peak", err, "grows")
		e, err := c.Trough(background, Range{})
		if err != nil || e.Exact == nil || e.Exact.Sign() != 0 {
			t.Errorf("trough %+v %v", e, err)
		}
		wantOutcome(t, c, "<=", "10", Range{}, Broken)
		wantOutcome(t, c, "<=", "10", Range{To: rat(t, "10")}, Holds)
		v, err := c.LastBelow(background, num(t, "3"), Range{})
		ballNear(t, "last below", v, err, 3)
	})
}

// A pulse: up at 1, down at 3, through a first order with time constant 1.
func TestPulse(t *testing.T) {
	w := delayedStep(num(t, "1"), num(t, "1"))
	w.Pieces = append(w.Pieces, delayedStep(num(t, "-1"), num(t, "3")).Pieces...)
	c := through(t, poly(1), poly(1, 1), w)
	e, err := c.Peak(background, Range{})
	ballNear(t, "peak", e.Value, err, 1-math.Exp(-2))
	ballNear(t, "at", e.At, err, 3)
	final, exactly, err := c.Final(background)
	ballNear(t, "final", final, err, 0)
	if exactly == nil || exactly.Sign() != 0 {
		t.Error("the final value is not exactly 0")
	}
	v, err := c.Integral(background, Range{})
	_ = v
	if err != nil {
		t.Error(err)
	}
	ballNear(t, "area", v, err, 2)
	v, err = c.LastAbove(background, num(t, "1/10"), Range{})
	ballNear(t, "last above", v, err, 3+math.Log((1-math.Exp(-2))*10))
	direct := through(t, poly(1), poly(1), w)
	v, err = direct.LastAbove(background, num(t, "1/2"), Range{})
	ballNear(t, "last above of the pulse itself", v, err, 3)
	v, err = direct.FirstAbove(background, num(t, "1/2"), Range{})
	ballNear(t, "first above of the pulse itself", v, err, 1)
	e, err = direct.Peak(background, Range{From: rat(t, "2")})
	if err != nil || e.Exact == nil || e.Exact.Cmp(big.NewRat(1, 1)) != 0 {
		t.Errorf("peak of the pulse itself %+v %v", e, err)
	}
}

// A ringing of Q = 10^5: ω = 1000, 1% left after ln(100)·2Q/ω.
func TestHighQ(t *testing.T) {
	w := Wave{Pieces: []WavePiece{{Impulses: []number.Exact{num(t, "1000")}}}}
	c := transferSignal(t, ratio(t, poly(1), exact.NewPoly(rat(t, "1000000"), rat(t, "1/100"), rat(t, "1"))), w).Curve()
	wd := math.Sqrt(1e6 - 0.25e-4)
	e, err := c.Peak(background, Range{})
	at := math.Atan(wd/0.005) / wd
	ballNear(t, "peak", e.Value, err, 1000/wd*math.Exp(-0.005*at)*math.Sin(wd*at))
	v, err := c.Abs().LastAbove(background, num(t, "1/100"), Range{})
	if want := math.Log(100) / 0.005; err != nil || math.Abs(v.MidFloat64()-want) > 2*math.Pi/wd {
		t.Errorf("last above: %s %v, want about %g", v, err, want)
	}
	wantOutcome(t, c, "<=", "999993/1000000", Range{}, Holds)
}

// Critical damping by way of an irrational value: the two poles are 10^-37
// apart, and the coefficients 10^37 in size.
func TestNearlyDoublePole(t *testing.T) {
	eps := rat(t, "1/1000000000000000000000000000000000000000000000000000000000000000000000000000")
	d := exact.NewPoly(new(big.Rat).Sub(big.NewRat(1, 1), eps), big.NewRat(2, 1), big.NewRat(1, 1))
	c := transferSignal(t, ratio(t, poly(1), d), step(num(t, "1"))).Curve()
	v, err := c.Value(background, rat(t, "2"), Right, 17)
	ballNear(t, "value", v, err, 1-3*math.Exp(-2))
	e, err := c.Peak(background, Range{To: rat(t, "2")})
	ballNear(t, "peak", e.Value, err, 1-3*math.Exp(-2))
	e, err = c.Peak(background, Range{})
	ballNear(t, "peak for ever", e.Value, err, 1)
	s, err := c.Settle(background, num(t, "1/100"))
	// (1+t)e^{−t} = 1/100.
	if x := s.MidFloat64(); err != nil || math.Abs((1+x)*math.Exp(-x)-0.01) > 1e-15 {
		t.Errorf("settle %s %v", s, err)
	}
}

// The energy that a resistor R takes from a capacitor is C·V²/2.
func TestEnergy(t *testing.T) {
	w := Wave{Pieces: []WavePiece{{Impulses: []number.Exact{num(t, "10")}}}}
	v := transferSignal(t, ratio(t, poly(1), poly(1, 1)), w) // 10 V across 1 F, discharged through 1 Ω
	p := v.Times(v, num(t, "1"))
	e, err := p.Integral(background, Range{})
	ballNear(t, "energy", e, err, 50)
	e, err = p.Integral(background, Range{From: rat(t, "1"), To: rat(t, "2")})
	ballNear(t, "energy from 1 to 2", e, err, 50*(math.Exp(-2)-math.Exp(-4)))
	x, err := p.Peak(background, Range{})
	ballNear(t, "peak power", x.Value, err, 100)
	s := transferSignal(t, ratio(t, poly(1), poly(1)), sineWave(t, "3", "7"))
	m, err := s.Times(s, num(t, "2")).Mean(background, Range{})
	ballNear(t, "mean power", m, err, 9)
	x, err = s.Times(s, num(t, "2")).Peak(background, Range{})
	ballNear(t, "peak power of a sine", x.Value, err, 18)
}

func TestGreatestAndLeast(t *testing.T) {
	a := through(t, poly(1), poly(1, 1), step(num(t, "1")))
	b := transferSignal(t, ratio(t, poly(1), poly(1, 1)), Wave{Pieces: []WavePiece{{Impulses: []number.Exact{num(t, "1")}}}}).Curve()
	e, err := Least(a, b).Peak(background, Range{}) // they cross at ln 2, at 1/2
	if err != nil || math.Abs(e.Value.MidFloat64()-0.5) > 1e-7 || math.Abs(e.At.MidFloat64()-math.Ln2) > 1e-6 {
		t.Errorf("least: %s at %s %v", e.Value, e.At, err)
	}
	e, err = Greatest(a, b).Trough(background, Range{})
	if err != nil || math.Abs(e.Value.MidFloat64()-0.5) > 1e-7 {
		t.Errorf("greatest: %s %v", e.Value, err)
	}
	v, err := Least(a, b).Integral(background, Range{To: rat(t, "1")})
	if want := math.Ln2 - 0.5 + 0.5 - math.Exp(-1); err != nil || math.Abs(v.MidFloat64()-want) > 1e-12 {
		t.Errorf("integral of the least: %s %v, want %g", v, err, want)
	}
}

// The turning points of 1 − e^{−ζt}(…) are half periods apart.
func TestTurns(t *testing.T) {
	c := through(t, poly(25), poly(25, 10, 25), step(num(t, "1")))
	wd := math.Sqrt(0.96)
	times, complete, err := c.Turns(background, Range{To: rat(t, "20")}, 1000)
	if err != nil || !complete {
		t.Fatal(times, complete, err)
	}
	want := []float64{0, 0}
	for k := 1; float64(k)*math.Pi/wd < 20; k++ {
		want = append(want, float64(k)*math.Pi/wd)
	}
	want = append(want, 20)
	if len(times) != len(want) {
		t.Fatalf("turns %v, want %v", times, want)
	}
	for i := range times {
		if math.Abs(times[i]-want[i]) > 1e-5 {
			t.Errorf("turn %d at %g, want %g", i, times[i], want[i])
		}
	}
	if times, complete, err = c.Turns(background, Range{To: rat(t, "20")}, 4); err != nil || complete || len(times) != 4 {
		t.Errorf("cut list %v %v %v", times, complete, err)
	}
	h, err := c.Horizon(background, 0.01)
	if err != nil || h < 20 || h > 40 { // e^{−h/5} = 1/100
		t.Errorf("horizon %g %v", h, err)
	}
}
