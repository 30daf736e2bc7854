package symbolic

import (
	"context"
	"fmt"
	"testing"

	"portlight/analyze/network"
)

// buffered is a cascade of second-order low-passes without interaction.
var buffered = []string{
	"V1 in 0",
	"R1 in a1 1000", "R2 a1 b1 2000", "C1 a1 o1 1/1000000", "C2 b1 0 1/2000000", "U1 b1 o1 o1",
	"R3 o1 a2 1000", "R4 a2 b2 2000", "C3 a2 o2 1/3000000", "C4 b2 0 1/4000000", "U2 b2 o2 o2",
	"R5 o2 a3 1000", "R6 a3 b3 2000", "C5 a3 o3 1/5000000", "C6 b3 0 1/6000000", "U3 b3 o3 o3",
}

// ladder is a chain of RC sections.
func ladder(n int) []string {
	out := []string{"V1 n0 0"}
	for k := 1; k <= n; k++ {
		out = append(out, fmt.Sprintf("R%d n%d n%d %d", k, k-1, k, 1000+k), fmt.Sprintf("C%d n%d 0 1/%d", k, k, 1000000+k))
	}
	return out
}

// mesh is a square grid of resistors with capacitors to the reference.
func mesh(n int) []string {
	out := []string{"V1 in 0", "R1000 in n0.0 1"}
	for x := range n {
		for y := range n {
			k := n*x + y
			if x+1 < n {
				out = append(out, fmt.Sprintf("R%d n%d.%d n%d.%d %d", k+1, x, y, x+1, y, k+1))
			}
			if y+1 < n {
				out = append(out, fmt.Sprintf("R%d n%d.%d n%d.%d %d", k+100, x, y, x, y+1, k+100))
			}
			out = append(out, fmt.Sprintf("C%d n%d.%d 0 1/%d", k+1, x, y, k+1))
		}
	}
	return out
}

// parallel is one resistor before many.
func parallel(n int) []string {
	out := []string{"V1 in 0", "R1 in out 1"}
	for k := range n {
		out = append(out, fmt.Sprintf("R%d out 0 %d", k+2, k+1))
	}
	return out
}

// TestBudget: what has no readable formula is given up within the budget, and
// an ended context ends the work.
func TestBudget(t *testing.T) {
	for _, c := range []struct {
		name string
		net  []string
		ask  string
	}{
		{"long ladder", ladder(60), "v:n60 / V1"},
		{"mesh", mesh(6), "v:n2.2 / V1"},
		{"large mesh", mesh(12), "v:n2.2 / V1"},
		{"cascade", buffered, "v:o3 / V1"},
		{"many in parallel", parallel(450), "v:out / V1"},
		{"thousands in parallel", parallel(5000), "v:out / V1"},
	} {
		b := build(t, c.net...)
		q := b.ask(t, c.ask)
		sp := NewSpace(context.Background())
		f, ok := sp.Transfer(&b.Network, []network.Probe{q.output}, q.by)
		if ok {
			if len(f.num)+len(f.den) < mostProducts {
				t.Errorf("%s: an unexpectedly short function", c.name)
			}
		}
		if used := budget - sp.left; used > budget+10*mostTerms {
			t.Errorf("%s: %d steps", c.name, used)
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	b := build(t, mesh(6)...)
	q := b.ask(t, "v:n2.2 / V1")
	sp := NewSpace(ctx)
	if _, ok := sp.Transfer(&b.Network, []network.Probe{q.output}, q.by); ok || budget-sp.left > 2000 {
		t.Errorf("an ended context let it go on for %d steps", budget-sp.left)
	}
}
