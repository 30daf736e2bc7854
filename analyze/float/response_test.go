package float

import (
	"context"
	"math"
	"testing"
	"time"

	"portlight/analyze/network"
)

func voltage(node int) func(*network.System) (network.Output, error) {
	return func(s *network.System) (network.Output, error) {
		o, p := s.NodeVoltage(node, 0)
		if p != nil {
			return o, ErrSource
		}
		return o, nil
	}
}

func current(element int) func(*network.System) (network.Output, error) {
	return func(s *network.System) (network.Output, error) {
		o, p := s.ElementCurrent(element)
		if p != nil {
			return o, ErrSource
		}
		return o, nil
	}
}

func step(v float64) Wave { return Wave{Pieces: []Piece{{Terms: []Term{{Cosine: v}}}}} }

// TestLowpassStep: v = 1 − e^{−t/RC}, i = e^{−t/RC}/R.
func TestLowpassStep(t *testing.T) {
	b := build(t)
	in, out := b.nodes(1), b.nodes(1)
	src := b.two(network.VoltageSource, in, 0, "")
	r := b.two(network.Resistor, in, out, "1e3")
	c := b.two(network.Capacitor, out, 0, "1e-6")
	s, _ := b.solver()
	resp, err := NewResponse(Setup{Intervals: []Interval{{0, s}}, Sources: []Source{{src, step(1)}}})
	if err != nil {
		t.Fatal(err)
	}
	times := []float64{0, 1e-9, 1e-5, 1e-4, 1e-3, 2e-3, 3e-3, 0.1, 1}
	got, err := resp.Values(context.Background(), times, voltage(out), current(r), current(c))
	if err != nil {
		t.Fatal(err)
	}
	for k, x := range times {
		e := math.Exp(-x / 1e-3)
		for i, want := range []float64{-math.Expm1(-x / 1e-3), e / 1e3, e / 1e3} {
			v := got[i][k]
			t.Logf("t=%g output %d: %.17g ± %.2g, want %.17g, off %.2g", x, i, v.Total, v.TotalRadius, want, v.Total-want)
			if !(math.Abs(v.Total-want) <= v.TotalRadius) {
				t.Errorf("t=%g output %d: %.17g ± %.2g, want %.17g", x, i, v.Total, v.TotalRadius, want)
			}
		}
	}
}

// TestRinging: series RLC of Q 1000 after a step, 2000 periods on.
func TestRinging(t *testing.T) {
	const l, c, q = 1e-3, 1e-9, 1000
	w0 := 1 / math.Sqrt(l*c)
	b := build(t)
	in, mid, out := b.nodes(1), b.nodes(1), b.nodes(1)
	src := b.two(network.VoltageSource, in, 0, "")
	b.two(network.Resistor, in, mid, "1")
	b.two(network.Inductor, mid, out, "1e-3")
	b.two(network.Capacitor, out, 0, "1e-9")
	s, _ := b.solver()
	resp, _ := NewResponse(Setup{Intervals: []Interval{{0, s}}, Sources: []Source{{src, step(1)}}})
	var times []float64
	for k := range 50 {
		times = append(times, float64(k)*250e-6)
	}
	begin := time.Now()
	got, err := resp.Values(context.Background(), times, voltage(out))
	if err != nil {
		t.Fatal(err)
	}
	t.Log(time.Since(begin))
	a := 1.0 / (2 * l)
	wd := math.Sqrt(w0*w0 - a*a)
	worst, widest := 0.0, 0.0
	for k, x := range times {
		want := 1 - math.Exp(-a*x)*(math.Cos(wd*x)+a/wd*math.Sin(wd*x))
		v := got[0][k]
		worst, widest = max(worst, math.Abs(v.Total-want)), max(widest, v.TotalRadius)
		if !(math.Abs(v.Total-want) <= v.TotalRadius+1e-11) {
			t.Errorf("t=%g: %.17g ± %.2g, want %.17g", x, v.Total, v.TotalRadius, want)
		}
	}
	t.Log(worst, widest)
}

// TestMeshDischarge: a unit charge on the corner of a square of resistors with a
// capacitor at every node spreads as the product of two chains; a chain's
// motions are cosines that decay at the rates 4·sin²(kπ/2n)/RC.
func TestMeshDischarge(t *testing.T) {
	const side, tau = 30, 1e-6
	b := build(t)
	first := b.nodes(side * side)
	for i := range side {
		for j := range side {
			v := first + i*side + j
			if j+1 < side {
				b.two(network.Resistor, v, v+1, "1e3")
			}
			if i+1 < side {
				b.two(network.Resistor, v, v+side, "1e3")
			}
			b.two(network.Capacitor, v, 0, "1e-9")
		}
	}
	corner := 0
	for b.Elements[corner].Kind != network.Capacitor {
		corner++
	}
	s, _ := b.solver()
	r, err := NewResponse(Setup{Intervals: []Interval{{0, s}}, Initial: []Initial{{corner, 0, 1}}})
	if err != nil {
		t.Fatal(err)
	}
	chain := func(node int, x float64) float64 {
		sum := 1.0 / side
		for k := 1; k < side; k++ {
			w := math.Pi * float64(k) / side
			rate := 4 * math.Pow(math.Sin(w/2), 2) / tau
			sum += 2.0 / side * math.Cos(w/2) * math.Cos(w*(float64(node)+0.5)) * math.Exp(-rate*x)
		}
		return sum
	}
	times := []float64{0, 1e-8, 1e-6, 1e-5, 1e-4, 3e-4, 1e-2}
	places := [][2]int{{0, 0}, {1, 2}, {10, 3}, {29, 29}}
	var outputs []func(*network.System) (network.Output, error)
	for _, p := range places {
		outputs = append(outputs, voltage(first+p[0]*side+p[1]))
	}
	got, err := r.Values(context.Background(), times, outputs...)
	if err != nil {
		t.Fatal(err)
	}
	for i, p := range places {
		for k, x := range times {
			want, v := chain(p[0], x)*chain(p[1], x), got[i][k]
			// The sum of cosines is itself rounded.
			if d := math.Abs(v.Total - want); !(d <= v.TotalRadius+1e-14) || v.TotalRadius > 1e-8 {
				t.Errorf("node %v at %g: %.17g ± %.3g, want %.17g", p, x, v.Total, v.TotalRadius, want)
			}
		}
	}
}

// TestLosslessLadder: equal inductors in series and capacitors across ring for
// ever; the step response of the first current is a sum of sines at
// 2/√(LC)·sin((2k−1)π/(4n+2)).
func TestLosslessLadder(t *testing.T) {
	const n, l, c = 60, 1e-3, 1e-9
	b := build(t)
	in := b.nodes(1)
	src := b.two(network.VoltageSource, in, 0, "")
	last, coil := in, -1
	for range n {
		next := b.nodes(1)
		i := b.two(network.Inductor, last, next, "1e-3")
		if coil < 0 {
			coil = i
		}
		b.two(network.Capacitor, next, 0, "1e-9")
		last = next
	}
	s, _ := b.solver()
	r, err := NewResponse(Setup{Intervals: []Interval{{0, s}}, Sources: []Source{{src, step(1)}}})
	if err != nil {
		t.Fatal(err)
	}
	var times []float64
	for k := range 40 {
		times = append(times, float64(k)*50e-6)
	}
	got, err := r.Values(context.Background(), times, current(coil))
	if err != nil {
		t.Fatal(err)
	}
	for k, x := range times {
		want := 0.0
		for m := 1; m <= n; m++ {
			angle := math.Pi * float64(2*m-1) / (4*n + 2)
			w := 2 / math.Sqrt(l*c) * math.Sin(angle)
			// Modal shape cos((2m−1)π(j+½)/(2n+1)) at the first coil, normed.
			shape := math.Pow(math.Cos(angle), 2) * 4 / (2*n + 1)
			want += shape / l * math.Sin(w*x) / w
		}
		v := got[0][k]
		if d := math.Abs(v.Total - want); !(d <= v.TotalRadius+1e-16) || v.TotalRadius > 1e-9 {
			t.Errorf("t = %g: %.17g ± %.3g, want %.17g", x, v.Total, v.TotalRadius, want)
		}
	}
}

// TestSteady: a divider at direct current with a capacitor, and an RC low-pass
// under 3·cos ωt + 4·sin ωt with ωRC = 1, whose answer is half the source's
// phasor turned back by 45°: (3 − 4j)/(1 + j) = −½ − 7/2·j.
func TestSteady(t *testing.T) {
	b := build(t)
	in, out := b.nodes(1), b.nodes(1)
	src := b.two(network.VoltageSource, in, 0, "")
	b.two(network.Resistor, in, out, "1e3")
	c := b.two(network.Capacitor, out, 0, "1e-6")
	s, _ := b.solver()
	ctx := context.Background()
	for _, k := range []struct {
		term Term
		want float64
	}{
		{Term{Cosine: 5}, 5},
		{Term{Omega: 1e3, Cosine: 3, Sine: 4}, -0.5},
		{Term{Omega: 1e3, Cosine: 2}, 1},
		{Term{Omega: 1e3, Sine: 2}, -1},
	} {
		got, err := s.Steady(ctx, []Source{{src, Wave{Always: []Term{k.term}}}})
		if err != nil || len(got) != 1 || got[0].Element != c || math.Abs(got[0].Value-k.want) > 1e-15*5 {
			t.Errorf("%+v: %v, %v, want %g", k.term, got, err, k.want)
		}
	}
	if _, err := s.Steady(ctx, []Source{{src, Wave{Always: []Term{{Power: 1, Cosine: 1}}}}}); err != ErrUnsteady {
		t.Error(err)
	}
	// From the steady state on nothing changes: the response is the sinusoid.
	wave := Wave{Always: []Term{{Omega: 1e3, Cosine: 3, Sine: 4}}}
	start, _ := s.Steady(ctx, []Source{{src, wave}})
	r, err := NewResponse(Setup{Intervals: []Interval{{0, s}}, Sources: []Source{{src, wave}}, Initial: start})
	if err != nil {
		t.Fatal(err)
	}
	times := []float64{0, 1e-4, 1e-3, 1e-2}
	got, err := r.Values(ctx, times, voltage(out))
	if err != nil {
		t.Fatal(err)
	}
	for k, x := range times {
		want := -0.5*math.Cos(1e3*x) + 3.5*math.Sin(1e3*x)
		if v := got[0][k]; math.Abs(v.Total-want) > v.TotalRadius {
			t.Errorf("t = %g: %g ± %g, want %g", x, v.Total, v.TotalRadius, want)
		}
	}
}

// TestSetupsThatCannotBe names what is wrong.
func TestSetupsThatCannotBe(t *testing.T) {
	b := build(t)
	v := b.nodes(1)
	r := b.two(network.Resistor, v, 0, "1")
	b.two(network.Capacitor, v, 0, "1")
	s, _ := b.solver()
	for _, c := range []struct {
		setup Setup
		want  error
	}{
		{Setup{}, ErrIntervals},
		{Setup{Intervals: []Interval{{1, s}}}, ErrIntervals},
		{Setup{Intervals: []Interval{{0, s}, {0, s}}}, ErrIntervals},
		{Setup{Intervals: []Interval{{0, nil}}}, ErrIntervals},
		{Setup{Intervals: []Interval{{0, s}}, Sources: []Source{{r, step(1)}}}, ErrSource},
		{Setup{Intervals: []Interval{{0, s}}, Sources: []Source{{99, step(1)}}}, ErrSource},
		{Setup{Intervals: []Interval{{0, s}}, Initial: []Initial{{r, 0, 1}}}, ErrMemoryValue},
	} {
		if _, err := NewResponse(c.setup); err != c.want {
			t.Errorf("%+v: %v, want %v", c.setup, err, c.want)
		}
	}
	ok, err := NewResponse(Setup{Intervals: []Interval{{0, s}}})
	if err != nil {
		t.Fatal(err)
	}
	for _, x := range []float64{-1, math.NaN(), math.Inf(1)} {
		if _, err := ok.Values(context.Background(), []float64{x}, voltage(v)); err != ErrTime {
			t.Errorf("at %g: %v", x, err)
		}
	}
	if got, err := ok.Values(context.Background(), nil, voltage(v)); err != nil || len(got) != 1 || len(got[0]) != 0 {
		t.Error(got, err)
	}
	if got, err := ok.Values(context.Background(), []float64{0, 1}, voltage(v)); err != nil || got[0][1].Total != 0 {
		t.Error("nothing acts, but:", got, err)
	}
}

// TestImpulsiveStart: a charged capacitor is switched onto an empty one. Charge
// is kept, C₁·V/(C₁+C₂) at once, and the output current has gone by.
func TestImpulsiveStart(t *testing.T) {
	b := build(t)
	v, w := b.nodes(1), b.nodes(1)
	first := b.two(network.Capacitor, v, 0, "3e-6")
	b.two(network.Capacitor, w, 0, "1e-6")
	b.two(network.Resistor, w, 0, "1e3")
	open := b.two(network.Open, v, w, "")
	before, _ := b.solver()
	b.Elements[open].Kind = network.Short
	after, _ := b.solver()
	r, err := NewResponse(Setup{Intervals: []Interval{{0, before}, {1e-3, after}}, Initial: []Initial{{first, 0, 8}}})
	if err != nil {
		t.Fatal(err)
	}
	times := []float64{0, 0.9e-3, 1e-3, 2e-3, 6e-3}
	got, err := r.Values(context.Background(), times, voltage(v), voltage(w))
	if err != nil {
		t.Fatal(err)
	}
	for k, want := range [][2]float64{{8, 0}, {8, 0}, {6, 6}, {6 * math.Exp(-0.25), 6 * math.Exp(-0.25)}, {6 * math.Exp(-1.25), 6 * math.Exp(-1.25)}} {
		for i := range want {
			if x := got[i][k]; math.Abs(x.Total-want[i]) > x.TotalRadius || x.TotalRadius > 1e-7 {
				t.Errorf("t = %g, output %d: %.15g ± %g, want %.15g", times[k], i, x.Total, x.TotalRadius, want[i])
			}
		}
	}
}
