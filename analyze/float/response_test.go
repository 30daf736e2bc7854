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
