package float

import (
	"context"
	"math/cmplx"
	"testing"

	"portlight/analyze/network"
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
