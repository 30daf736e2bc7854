package response

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"math/rand"
	"os"
	"testing"
	"time"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// reference is a greatest or least value and its instant, at 25 digits.
type reference struct{ Value, At string }

func peakReferences(t testing.TB, name string, into any) {
	t.Helper()
	data, err := os.ReadFile("testdata/peaks.json")
	if err != nil {
		t.Fatal(err)
	}
	var all map[string]json.RawMessage
	if err := json.Unmarshal(data, &all); err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(all[name], into); err != nil {
		t.Fatal(name, err)
	}
}

// within wants a ball that holds the reference to so many bits, and is as good.
func within(t *testing.T, what string, got number.Ball, want string, bits int) {
	t.Helper()
	w := number.BallFromRat(rat(t, want), 256)
	if got.Sub(w).Abs().Upper().Cmp(w.Abs().MulPow2(-bits).Upper()) > 0 {
		t.Errorf("%s: got %s, want %s", what, got, want)
	}
}

// found wants a greatest value that is taken at an instant.
func found(t *testing.T, what string, e Extreme, err error, want reference) {
	t.Helper()
	if err != nil || !e.HasAt || !e.Attained || !e.Proved {
		t.Errorf("%s: %+v %v", what, e, err)
		return
	}
	within(t, what, e.Value, want.Value, 76)
	within(t, what+", instant", e.At, want.At, 70)
}

// approached wants a least upper bound that is never reached.
func approached(t *testing.T, what string, e Extreme, err error, want string, bits int) {
	t.Helper()
	if err != nil || e.HasAt || !e.Proved {
		t.Errorf("%s: %+v %v", what, e, err)
		return
	}
	within(t, what, e.Value, want, bits)
}

// frontEnd is the buoy's hydrophone front end: a tone through a ceramic element
// with a slow high-pass (15 ms), a low-pass and op amps of 10 MHz. Nodes: 1
// ceramic, 2 cable, 3 buf, 4 a, 5 b, 6 out; element 1 is the ceramic's capacitance.
func frontEnd(t testing.TB) *Solution {
	c := newCircuit(t, 7)
	turn := number.FromRat(number.PiBall(400).MulPow2(1).MidRat()) // 2π to 400 bits
	omega, wide, gain := turn.Mul(num(t, "5e3")), turn.Mul(num(t, "10e6")), num(t, "1e6")
	c.source(network.VoltageSource, 1, 0, Wave{Always: []WaveTerm{{Omega: omega, Sine: num(t, "1e-3")}}})
	c.add(network.Capacitor, 1, 2, "12e-9")
	c.add(network.Capacitor, 2, 0, "3.3e-9")
	c.add(network.Resistor, 2, 0, "1e6")
	for _, amp := range [][2]int{{2, 3}, {5, 6}} {
		c.elements = append(c.elements, network.Element{
			Kind: network.OpAmp, Plus: amp[0], Minus: amp[1], Output: amp[1], GainBandwidth: &wide, DCGain: &gain,
		})
	}
	c.add(network.Resistor, 3, 4, "6800")
	c.add(network.Resistor, 4, 5, "6800")
	c.add(network.Capacitor, 5, 0, "680e-12")
	c.add(network.Capacitor, 4, 6, "1.5e-9")
	c.from("0", nil)
	return c.solve()
}

// A tone beside a transient of 75 periods and poles three thousand times faster:
// where the transient only lowers the peaks, the greatest value is the steady
// amplitude, and no instant has it.
func TestSlowTransientBesideATone(t *testing.T) {
	var want struct {
		Out     string    `json:"out never above"`
		A       string    `json:"a never above"`
		Ceramic string    `json:"ceramic never below minus"`
		Trough  reference `json:"out trough"`
		Soon    reference `json:"out peak to 30 ms"`
	}
	peakReferences(t, "front end", &want)
	s := frontEnd(t)
	out := voltage(t, s, 6, 0).Curve()
	e, err := out.Peak(background, Range{})
	approached(t, "out", e, err, want.Out, 76)
	e, err = voltage(t, s, 4, 0).Curve().Peak(background, Range{})
	approached(t, "a", e, err, want.A, 76)
	e, err = voltage(t, s, 1, 2).Curve().Trough(background, Range{})
	approached(t, "ceramic", e.negated(), err, want.Ceramic, 76)
	e, err = out.Trough(background, Range{})
	found(t, "trough of out", e, err, want.Trough)
	e, err = out.Peak(background, Range{To: rat(t, "3/100")})
	found(t, "out to 30 ms", e, err, want.Soon)
	e, err = out.Abs().Peak(background, Range{})
	e.Value = e.Value.Neg()
	found(t, "|out|", e, err, want.Trough)

	wantOutcome(t, out, "<=", "0.7870015619e-3", Range{}, Holds)
	wantOutcome(t, out, "<=", "0.7870015618e-3", Range{}, Broken)
	wantOutcome(t, out, "<=", "0.78676964e-3", Range{To: rat(t, "3/100")}, Holds)
	wantOutcome(t, out, "<=", "0.78676963e-3", Range{To: rat(t, "3/100")}, Broken)
	wantOutcome(t, out, ">=", "-0.7886173555e-3", Range{}, Holds)
}

// Long after everything has decayed a value is beyond the range of float64, and
// still right.
func TestLongDecayed(t *testing.T) {
	var want map[string]reference
	peakReferences(t, "bank", &want)
	c := newCircuit(t, 3)
	store := c.add(network.Capacitor, 1, 0, "2e-3")
	c.add(network.Resistor, 1, 2, "10e-3")
	c.add(network.Inductor, 2, 0, "13.5e-6")
	c.initially(store, "900")
	c.from("0", nil)
	v := voltage(t, c.solve(), 1, 0).Curve()
	late := Range{From: rat(t, "5")}
	e, err := v.Abs().Peak(background, late)
	found(t, "after 5 s", e, err, want["after 5 s"])
	wantOutcome(t, v.Abs(), "<=", "60", late, Holds)
	wantOutcome(t, v.Abs(), ">", "60", late, Broken)
	wantOutcome(t, v.Abs(), "<=", "1e-803", late, Broken)
}

// Resonances, beats and a slow tone beside a fast one.
func TestDrivenOscillations(t *testing.T) {
	var want map[string]reference
	peakReferences(t, "driven", &want)
	second := func(q string) exact.Poly {
		return exact.NewPoly(rat(t, "1000000"), new(big.Rat).Quo(rat(t, "1000"), rat(t, q)), rat(t, "1"))
	}
	e, err := through(t, poly(0, 1000), second("50"), sineWave(t, "1", "1000")).Peak(background, Range{To: rat(t, "1")})
	found(t, "at resonance to 1 s", e, err, want["at resonance to 1 s"])
	e, err = through(t, poly(0, 1000), second("1000"), sineWave(t, "1", "1010")).Peak(background, Range{})
	found(t, "near resonance", e, err, want["near resonance"])
	e, err = through(t, poly(1000000), second("50"), sineWave(t, "1", "730")).Peak(background, Range{})
	found(t, "below resonance", e, err, want["below resonance"])
	tones := Wave{Always: []WaveTerm{{Omega: num(t, "10"), Sine: num(t, "1")}, {Omega: num(t, "10001"), Sine: num(t, "1/3")}}}
	e, err = through(t, poly(1), poly(1, 1), tones).Peak(background, Range{})
	found(t, "two tones", e, err, want["two tones"])
	// Driven exactly at resonance 1000s/(s²+1000s/Q+10⁶) tends to Q from below:
	// at s = 1000j it is Q.
	for _, q := range []string{"5", "50", "1000", "100000"} {
		e, err = through(t, poly(0, 1000), second(q), sineWave(t, "1", "1000")).Peak(background, Range{})
		approached(t, "resonance Q = "+q, e, err, q, 40)
	}
}

// Random networks with poles over many decades, driven by tones: never below
// dense samples, and never above the greater of these and the steady amplitude.
func TestTonesAgainstSamples(t *testing.T) {
	r := rand.New(rand.NewSource(5))
	for k := range 60 {
		den := poly(1)
		slowest := math.Inf(1)
		for range 1 + r.Intn(3) {
			rate := int64(math.Pow(10, 6*r.Float64()))
			slowest = math.Min(slowest, float64(rate))
			if r.Intn(2) == 0 {
				den = den.Mul(poly(rate, 1))
				continue
			}
			den = den.Mul(poly(26*rate*rate, 2*rate, 1))
		}
		above := poly(1)
		for range den.Degree() {
			above = above.Mul(poly(int64(r.Intn(3000)), 1))
		}
		omega := int64(10 + r.Intn(20000))
		h := ratio(t, above, den)
		s := transferSignal(t, h, sineWave(t, "1", fmt.Sprint(omega)))
		at := func(p exact.Poly) complex128 {
			var v complex128
			for i := p.Degree(); i >= 0; i-- {
				c, _ := p.Coeff(i).Float64()
				v = v*complex(0, float64(omega)) + complex(c, 0)
			}
			return v
		}
		steady := cmplx.Abs(at(h.Num) / at(h.Den))
		most := math.Inf(-1)
		for end := 1e-8; end < 40/slowest+10/float64(omega); end *= 2 {
			values, _ := sampler(t, s).Uniform(0, end/4000, 4000)
			for _, v := range values {
				most = math.Max(most, v)
			}
		}
		e, err := s.Curve().Peak(background, Range{})
		high := math.Max(most, steady)
		if v := e.Value.MidFloat64(); err != nil || v < high*(1-1e-9) || v > high+0.02*math.Abs(high) {
			t.Errorf("%d: %v/%v at %d rad/s: peak %s (%v), samples say %g, steady %g", k, above, den, omega, e.Value, err, most, steady)
		}
	}
}

// A curve is the greatest of its branches.
func TestBranches(t *testing.T) {
	c := through(t, poly(0, 1), poly(1, 1), sineWave(t, "1", "1000"))
	top, err := c.Peak(background, Range{})
	if err != nil {
		t.Fatal(err)
	}
	// |c| + c is 2c or 0; the high-pass has sup = 1000/√(1+10⁶) there.
	e, err := c.Abs().Add(c).Peak(background, Range{})
	if twice := top.Value.MulPow2(1); err != nil || e.HasAt || !twice.Sub(e.Value).ContainsZero() {
		t.Errorf("|c|+c: %s %v, want %s", e.Value, err, twice)
	}
	within(t, "the high-pass", top.Value, "0.9999995000003749996875002734372539060288", 76)
	e, err = c.Abs().Neg().Peak(background, Range{})
	if err != nil || e.Value.Abs().MidFloat64() > 1e-12 {
		t.Errorf("-|c|: %s %v, want 0", e.Value, err)
	}
	d := Greatest(c, Least(c.Neg(), c)).Neg().Neg()
	if n := len(d.branches()); n != 2 {
		t.Errorf("%d branches", n)
	}
}

// Searches stop soon after their context ends, whatever they are at.
func TestPeaksStop(t *testing.T) {
	second := exact.NewPoly(rat(t, "1000000"), rat(t, "1/100"), rat(t, "1"))
	c := through(t, poly(1000000), second, sineWave(t, "1", "2000"))
	for _, curve := range []*Curve{c, Least(c, c.Neg()), ladderSignal(t, 10).Curve().Abs()} {
		if _, err := curve.Value(background, rat(t, "1"), Right, 10); err != nil {
			t.Fatal(err)
		}
		for _, after := range []time.Duration{0, time.Millisecond, 10 * time.Millisecond} {
			ctx, cancel := context.WithTimeout(background, after)
			_, err := curve.Peak(ctx, Range{})
			<-ctx.Done()
			if err != nil && !errors.Is(err, context.DeadlineExceeded) {
				t.Errorf("stopped after %v: %v", after, err)
			}
			cancel()
		}
	}
}

// The power of a resistor is nowhere below zero, and zero where its voltage passes
// zero: 3 V at 250 Hz on 12 Ω pass zero every 2 ms and give 9/12 W at most.
func TestPowerReachesZero(t *testing.T) {
	c := newCircuit(t, 2)
	turn := number.FromRat(number.PiBall(400).MulPow2(1).MidRat())
	c.source(network.VoltageSource, 1, 0, Wave{Always: []WaveTerm{{Omega: turn.Mul(num(t, "250")), Sine: num(t, "3")}}})
	load := c.add(network.Resistor, 1, 0, "12")
	c.from("0", nil)
	s := c.solve()
	v := voltage(t, s, 1, 0)
	p := v.Times(current(t, s, load), num(t, "1"))
	e, err := p.Trough(background, Range{From: rat(t, "1/1000")})
	if err != nil || e.Exact == nil || e.Exact.Sign() != 0 || !e.HasAt {
		t.Errorf("least power: %+v %v", e, err)
	}
	within(t, "its instant", e.At, "0.002", 200)
	e, err = p.Peak(background, Range{})
	if err != nil || !e.HasAt {
		t.Errorf("greatest power: %+v %v", e, err)
	}
	within(t, "greatest power", e.Value, "3/4", 200)
	e, err = p.Trough(background, Range{})
	if err != nil || e.Exact == nil || e.Exact.Sign() != 0 || !e.HasAt || !e.At.IsExact() || !e.At.ContainsZero() {
		t.Errorf("least power from 0: %+v %v", e, err)
	}
	e, err = p.Trough(background, Range{From: rat(t, "1/2000"), To: rat(t, "1/1000")})
	if err != nil || e.Value.MidFloat64() < 0.1 {
		t.Errorf("least power within the half: %+v %v", e, err)
	}
	wantOutcome(t, p, ">=", "0", Range{}, Holds)
	wantOutcome(t, p, ">", "0", Range{}, Broken)
	wantOutcome(t, p, ">=", "1e-9", Range{}, Broken)
	e, err = v.Curve().Abs().Trough(background, Range{From: rat(t, "1/1000")})
	if err != nil || e.Exact == nil || e.Exact.Sign() != 0 {
		t.Errorf("least |v|: %+v %v", e, err)
	}
	if _, ok := v.multipleOf(v.AddConstant(num(t, "1"))); ok {
		t.Error("v is no multiple of v + 1")
	}
}
