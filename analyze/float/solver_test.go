package float

import (
	"context"
	"errors"
	"math"
	"math/big"
	"math/cmplx"
	"sync"
	"testing"

	"portlight/analyze/network"
	"portlight/dialect/number"
)

// TestMeshOf2500 compares with values found with an extended-precision sparse
// solution and, independently, by diagonalisation of the grid with a rank-one
// update, both outside this project.
func TestMeshOf2500(t *testing.T) {
	s, sys := rcMesh(t, 50).solver()
	near, col := drivingPoint(t, sys, 1)
	far, _ := transferImpedance(t, sys, 2500, 1)
	for _, c := range []struct {
		hertz     string
		near, far complex128
	}{
		{"10", 4990.5899890299827295 - 5214.4588456177819665i, 1969.5557843156396614 - 4148.0178863077723392i},
		{"1e3", 1902.888535606153152 - 496.91554043953949952i, -8.6970795523973729532 + 19.328880969960765672i},
		{"1e5", 472.93878293080504509 - 402.5908451326156206i, -1.8173894002338520686e-16 - 1.4969927143671518699e-15i},
		{"1e6", 40.8288520186185437 - 141.1283555774149179i, 0},
	} {
		r, err := s.AtRat(context.Background(), hertz(t, c.hertz), []network.Output{near, far}, []network.Column{col})
		if err != nil {
			t.Fatal(err)
		}
		t.Logf("%s: %v ± %v, condition %.3g", c.hertz, r.Values, r.Radius, r.Condition)
		for i, want := range []complex128{c.near, c.far} {
			if want == 0 {
				continue
			}
			if d := cmplx.Abs(r.Values[i][0] - want); d > 1e-15*cmplx.Abs(want)+r.Radius[i][0] || r.Radius[i][0] > 1e-12*cmplx.Abs(want) {
				t.Errorf("%s, output %d: %v ± %g, want %v", c.hertz, i, r.Values[i][0], r.Radius[i][0], want)
			}
		}
	}
}

// TestGoldenLadder: a long ladder of equal resistors has the golden ratio for
// its impedance.
func TestGoldenLadder(t *testing.T) {
	b := build(t)
	last := b.nodes(1)
	for range 1000 {
		next := b.nodes(1)
		b.two(network.Resistor, last, next, "1")
		b.two(network.Resistor, next, 0, "1")
		last = next
	}
	s, sys := b.solver()
	o, c := drivingPoint(t, sys, 1)
	r, err := s.At(context.Background(), 0, []network.Output{o}, []network.Column{c})
	if err != nil {
		t.Fatal(err)
	}
	const golden = 1.6180339887498948482
	if d := cmplx.Abs(r.Values[0][0] - golden); d > r.Radius[0][0] || r.Radius[0][0] > 1e-15 {
		t.Errorf("%v ± %g", r.Values[0][0], r.Radius[0][0])
	}
}

// TestSingularFrequencies: a loop of L = 1 H and C = 1 F has no unique solution
// at exactly 1 rad/s, and a capacitor none at direct current.
func TestSingularFrequencies(t *testing.T) {
	ctx := context.Background()
	b := build(t)
	v := b.nodes(1)
	b.two(network.Inductor, v, 0, "1")
	b.two(network.Capacitor, v, 0, "1")
	s, sys := b.solver()
	o, c := drivingPoint(t, sys, v)
	if _, err := s.At(ctx, 1, []network.Output{o}, []network.Column{c}); !errors.Is(err, ErrSingular) {
		t.Errorf("at resonance: %v", err)
	}
	r, err := s.Sweep(ctx, []float64{0.5, 1, 2}, []network.Output{o}, []network.Column{c})
	if err != nil || r[0] == nil || r[1] != nil || r[2] == nil {
		t.Fatalf("%v, %v", r, err)
	}
	// z = jω/(1 − ω²)
	for k, want := range map[int]complex128{0: complex(0, 2.0/3), 2: complex(0, -2.0/3)} {
		if d := cmplx.Abs(r[k].Values[0][0] - want); d > r[k].Radius[0][0] {
			t.Errorf("%v ± %g, want %v", r[k].Values[0][0], r[k].Radius[0][0], want)
		}
	}
	b = build(t)
	v = b.nodes(1)
	b.two(network.Capacitor, v, 0, "1")
	s, sys = b.solver()
	o, c = drivingPoint(t, sys, v)
	if _, err := s.At(ctx, 0, []network.Output{o}, []network.Column{c}); !errors.Is(err, ErrSingular) {
		t.Errorf("a capacitor at direct current: %v", err)
	}
}

// TestSharpResonance: Q = 10⁸, at a frequency that is no float64, to full
// precision: z = R at √2 rad/s for L = C⁻¹/2.
func TestSharpResonance(t *testing.T) {
	b := build(t)
	in, mid := b.nodes(1), b.nodes(1)
	b.two(network.Resistor, in, mid, "1e-8")
	out := b.nodes(1)
	b.two(network.Inductor, mid, out, "0.5")
	b.two(network.Capacitor, out, 0, "1")
	s, sys := b.solver()
	o, c := drivingPoint(t, sys, in)
	root, err := number.Sqrt(number.FromInt(2))
	if err != nil {
		t.Fatal(err)
	}
	r, err := s.AtRat(context.Background(), root.Rat(), []network.Output{o}, []network.Column{c})
	if err != nil {
		t.Fatal(err)
	}
	v, radius := r.Values[0][0], r.Radius[0][0]
	if d := cmplx.Abs(v - 1e-8); d > radius || radius > 1e-22 {
		t.Errorf("%v ± %g", v, radius)
	}
	if a := r.Amplification[0][0]; a < 1e7 || a > 1e9 {
		t.Errorf("amplification %g, want about 10⁸", a)
	}
}

func TestOutOfRange(t *testing.T) {
	ctx := context.Background()
	b := build(t)
	v := b.nodes(1)
	b.two(network.Resistor, v, 0, "1e-200")
	if _, err := New(b.system()); !errors.Is(err, ErrRange) {
		t.Errorf("a conductance of 1e200 S: %v", err)
	}
	b = build(t)
	v = b.nodes(1)
	b.two(network.Resistor, v, 0, "1")
	s, sys := b.solver()
	o, c := drivingPoint(t, sys, v)
	for _, w := range []float64{math.NaN(), math.Inf(1), 1e300} {
		if _, err := s.At(ctx, w, []network.Output{o}, []network.Column{c}); !errors.Is(err, ErrRange) {
			t.Errorf("ω = %g: %v", w, err)
		}
		if _, err := s.Sweep(ctx, []float64{1, w}, []network.Output{o}, []network.Column{c}); !errors.Is(err, ErrRange) {
			t.Errorf("ω = %g in a sweep: %v", w, err)
		}
	}
	huge, _ := new(big.Rat).SetString("1e400")
	if _, err := s.AtRat(ctx, huge, []network.Output{o}, []network.Column{c}); !errors.Is(err, ErrRange) {
		t.Errorf("ω = 1e400: %v", err)
	}
	// Nothing asked is nothing answered.
	if r, err := s.At(ctx, 1, nil, nil); err != nil || len(r.Values) != 0 {
		t.Error(r, err)
	}
}

func TestStops(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	s, sys := rcMesh(t, 12).solver()
	o, c := drivingPoint(t, sys, 1)
	outs, cols := []network.Output{o}, []network.Column{c}
	if _, err := s.At(ctx, 1e5, outs, cols); err != nil {
		t.Fatal(err)
	}
	cancel()
	if _, err := s.At(ctx, 1e5, outs, cols); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
	if _, err := s.Sweep(ctx, make([]float64, 100), outs, cols); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
	if _, err := NewContext(ctx, sys); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
	if _, err := TooLargeContext(ctx, sys); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
	r, err := NewResponse(Setup{Intervals: []Interval{{0, s}}, Initial: []Initial{{1, 0, 1}}})
	if errors.Is(err, ErrMemoryValue) { // element 1 is a resistor
		k := sys.Memories()[0].Element
		r, err = NewResponse(Setup{Intervals: []Interval{{0, s}}, Initial: []Initial{{k, 0, 1}}})
	}
	if err != nil {
		t.Fatal(err)
	}
	if _, err := r.Values(ctx, []float64{1}, voltage(1)); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
}

// TestConcurrentUse: one solver, many goroutines; the values do not depend on
// what else is asked.
func TestConcurrentUse(t *testing.T) {
	ctx := context.Background()
	s, sys := rlcLadder(t, 40).solver()
	o, c := transferImpedance(t, sys, 30, 1)
	var omegas []float64
	for k := range 64 {
		omegas = append(omegas, 1e3*math.Pow(1.2, float64(k)))
	}
	swept, err := s.Sweep(ctx, omegas, []network.Output{o}, []network.Column{c})
	if err != nil {
		t.Fatal(err)
	}
	var wg sync.WaitGroup
	for k, w := range omegas {
		wg.Go(func() {
			r, err := s.At(ctx, w, []network.Output{o}, []network.Column{c})
			if err != nil {
				t.Error(err)
				return
			}
			if d := cmplx.Abs(r.Values[0][0] - swept[k].Values[0][0]); d > r.Radius[0][0]+swept[k].Radius[0][0] {
				t.Errorf("ω = %g: %v and, swept, %v ± %g", w, r.Values[0][0], swept[k].Values[0][0], swept[k].Radius[0][0])
			}
		})
	}
	wg.Wait()
}

// TestWhatIsTooLarge: what exact polynomials answer in two seconds is left to
// them.
func TestWhatIsTooLarge(t *testing.T) {
	resistors := build(t)
	last := resistors.nodes(1)
	for range 1000 {
		next := resistors.nodes(1)
		resistors.two(network.Resistor, last, next, "1")
		resistors.two(network.Resistor, next, 0, "1")
		last = next
	}
	for _, c := range []struct {
		name string
		b    *builder
		want bool
	}{
		{"ladder of 100 sections", rlcLadder(t, 100), false},
		{"ladder of 2000 sections", rlcLadder(t, 2000), true},
		{"mesh of 14²", rcMesh(t, 14), false},
		{"mesh of 50²", rcMesh(t, 50), true},
		{"1000 sections of resistors", resistors, false},
	} {
		if got := TooLarge(c.b.system()); got != c.want {
			t.Errorf("%s: %v, estimate %g s", c.name, got, EstimateExact(c.b.system()))
		}
	}
}
