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
