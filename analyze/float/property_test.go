package float

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// randomNetwork joins nodes at random with elements of every kind, values over
// so many decades. reciprocal leaves dependent sources and op amps out.
func randomNetwork(t testing.TB, r *rand.Rand, nodes, mostDecades int, reciprocal bool) *builder {
	b := build(t)
	b.nodes(nodes)
	any := func() int { return r.IntN(nodes + 1) }
	pair := func() (int, int) {
		x, y := any(), any()
		for x == y {
			y = any()
		}
		return x, y
	}
	decades := 1 + r.IntN(mostDecades)
	value := func(centre int) string {
		return fmt.Sprintf("%d.%de%d", 1+r.IntN(9), r.IntN(10), centre+r.IntN(decades)-decades/2)
	}
	passive := func(x, y int) {
		switch r.IntN(4) {
		case 0:
			b.two(network.Inductor, x, y, value(-3))
		case 1:
			b.two(network.Capacitor, x, y, value(-8))
		default:
			b.two(network.Resistor, x, y, value(3))
		}
	}
	for v := 1; v <= nodes; v++ { // a tree, so that there is one island
		passive(r.IntN(v), v)
	}
	for range nodes + r.IntN(2*nodes) {
		passive(pair())
	}
	b.voltageSources(r, nodes)
	if r.IntN(3) == 0 {
		b.transformer(r, any)
	}
	if r.IntN(3) == 0 {
		b.coupled(r, pair)
	}
	if r.IntN(3) == 0 {
		b.immittance(r, pair)
	}
	if !reciprocal {
		for range 1 + r.IntN(4) {
			b.dependent(r, pair)
		}
		if r.IntN(2) == 0 {
			g := b.value(value(6))
			e := network.Element{Kind: network.OpAmp, Plus: any(), Minus: any(), Output: 1 + r.IntN(nodes)}
			if r.IntN(2) == 0 {
				e.GainBandwidth = &g
			}
			b.put(e)
		}
	}
	return b
}

// voltageSources hangs some sources on nodes of their own behind a resistor.
func (b *builder) voltageSources(r *rand.Rand, nodes int) {
	for range r.IntN(3) {
		v := b.nodes(1)
		b.two(network.VoltageSource, v, 0, "")
		b.two(network.Resistor, v, 1+r.IntN(nodes), "50")
	}
	b.two(network.CurrentSource, 1+r.IntN(nodes), 0, "")
}

func (b *builder) transformer(r *rand.Rand, any func() int) {
	var windings []network.Winding
	for range 2 + r.IntN(2) {
		windings = append(windings, network.Winding{Plus: any(), Minus: 0, Turns: number.FromInt(int64(1 + r.IntN(20)))})
	}
	b.put(network.Element{Kind: network.Transformer, Windings: windings})
}

func (b *builder) coupled(r *rand.Rand, pair func() (int, int)) {
	x, y := pair()
	first := b.two(network.Inductor, x, y, "1e-3")
	x, y = pair()
	second := b.two(network.Inductor, x, y, "4e-3")
	b.put(network.Element{Kind: network.Coupling, Coils: [2]int{first, second}, Value: b.value(fmt.Sprintf("0.%d", 1+r.IntN(9)))})
}

func (b *builder) immittance(r *rand.Rand, pair func() (int, int)) {
	x, y := pair()
	b.put(network.Element{
		Kind: network.Immittance, From: x, To: y, Admittance: r.IntN(2) == 0,
		Numerator:   []number.Exact{number.FromInt(int64(1 + r.IntN(100))), b.value("1e-3"), b.value("2e-8")},
		Denominator: []number.Exact{number.FromInt(1), b.value(fmt.Sprintf("%de-4", 1+r.IntN(9)))},
	})
}

func (b *builder) dependent(r *rand.Rand, pair func() (int, int)) {
	x, y := pair()
	e := network.Element{Kind: network.DependentCurrent, From: x, To: y}
	probe := network.Probe{Quantity: network.ElementFlow, Element: r.IntN(5)}
	gain := "2.5"
	if r.IntN(2) == 0 {
		p, m := pair()
		probe = network.Probe{Quantity: network.NodePair, Plus: p, Minus: m}
		gain = "3e-3"
	}
	e.Controls = []network.Control{{Numerator: []number.Exact{b.value(gain)}, Of: []network.Probe{probe}}}
	if r.IntN(3) == 0 {
		e.Controls[0].Denominator = []number.Exact{number.FromInt(1), b.value("1e-5")}
	}
	b.put(e)
}

// quantities picks outputs and columns of a network.
func quantities(r *rand.Rand, sys *network.System) (outs []network.Output, cols []network.Column) {
	n := sys.Network()
	for range 3 {
		if o, p := sys.NodeVoltage(1+r.IntN(n.Nodes-1), 0); p == nil {
			outs = append(outs, o)
		}
		if o, p := sys.ElementCurrent(r.IntN(len(n.Elements))); p == nil {
			outs = append(outs, o)
		}
	}
	if c, p := sys.InjectColumn(1+r.IntN(n.Nodes-1), 0); p == nil {
		cols = append(cols, c)
	}
	for i, e := range n.Elements {
		if e.Kind == network.VoltageSource || e.Kind == network.CurrentSource {
			if c, p := sys.InputColumn(i); p == nil {
				cols = append(cols, c)
			}
		}
	}
	if k := len(sys.Memories()); k > 0 {
		cols = append(cols, sys.StateColumn(r.IntN(k)))
	}
	return outs, cols
}

// exactSolution is the rational solution for a column.
func exactSolution(ctx context.Context, sys *network.System, omega *big.Rat, c network.Column) (xr, xi []*big.Rat, err error) {
	return sys.Pencil().SolveAt(ctx, new(big.Rat), omega, c.RHS)
}

// exactValue is what an output shows of an exact solution.
func exactValue(omega *big.Rat, o network.Output, c network.Column, xr, xi []*big.Rat) (re, im *big.Rat) {
	re, im = direct(o, c), new(big.Rat)
	var t big.Rat
	for _, g := range o.G {
		re.Add(re, t.Mul(g.Value, xr[g.Index]))
		im.Add(im, t.Mul(g.Value, xi[g.Index]))
	}
	for _, g := range o.C {
		w := new(big.Rat).Mul(g.Value, omega)
		re.Sub(re, t.Mul(w, xi[g.Index]))
		im.Add(im, t.Mul(w, xr[g.Index]))
	}
	return re, im
}

// distance is the modulus of v − (re + j·im), in about 53 bits.
func distance(v complex128, re, im *big.Rat) float64 {
	return math.Hypot(differ(real(v), re), differ(imag(v), im))
}

func differ(x float64, r *big.Rat) float64 {
	d, _ := new(big.Rat).Sub(new(big.Rat).SetFloat64(x), r).Float64()
	return d
}

// TestBoundsCoverTheError compares with exact rational solutions on random
// networks over many decades: every error must be within its radius, and the
// radius must not be idle.
func TestBoundsCoverTheError(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	ctx := context.Background()
	singular, wide, answers := 0, 0, 0
	used := map[string]int{}
	const networks = 200
	for seed := range uint64(networks) {
		r := rand.New(rand.NewPCG(seed, 7))
		b := randomNetwork(t, r, 2+r.IntN(14), 8, seed%2 == 0)
		sys, _ := network.Assemble(&b.Network)
		if sys == nil {
			continue
		}
		s, err := New(sys)
		if err != nil {
			t.Fatal(err)
		}
		outs, cols := quantities(r, sys)
		for range 3 {
			w := math.Exp(r.Float64()*25 - 3)
			omega := new(big.Rat).SetFloat64(w)
			got, err := s.AtRat(ctx, omega, outs, cols)
			swept, sweepErr := s.Sweep(ctx, []float64{w}, outs, cols)
			if sweepErr != nil || (swept[0] == nil) != (err != nil) {
				t.Fatalf("seed %d: %v, swept %v", seed, err, sweepErr)
			}
			for j, c := range cols {
				xr, xi, exactErr := exactSolution(ctx, sys, omega, c)
				var singularErr *exact.SingularError
				if errors.As(exactErr, &singularErr) && errors.Is(err, ErrSingular) {
					singular += len(outs)
					continue
				}
				if err != nil || exactErr != nil {
					t.Fatalf("seed %d: %v, exact %v", seed, err, exactErr)
				}
				for i, o := range outs {
					re, im := exactValue(omega, o, c, xr, xi)
					answers++
					d := distance(got.Values[i][j], re, im)
					if !(d <= got.Radius[i][j]) {
						t.Errorf("seed %d output %d column %d: off by %g, radius %g, value %v, condition %g", seed, i, j, d, got.Radius[i][j], got.Values[i][j], got.Condition)
					}
					if d := distance(swept[0].Values[i][j], re, im); !(d <= swept[0].Radius[i][j]) {
						t.Errorf("seed %d output %d column %d: swept, off by %g, radius %g", seed, i, j, d, swept[0].Radius[i][j])
					}
					used[got.Method]++
					// Where parts cancel to nothing there is no digit to know.
					if got.Amplification[i][j] < 1e14 && got.Radius[i][j] > 1e-12*modulus(got.Values[i][j])+1e-250 {
						wide++
					}
				}
			}
		}
	}
	t.Logf("%d answers, %d singular, %d with a radius above 1e-12 of the value, %v", answers, singular, wide, used)
	if used["LU"] < answers/8 || used["LDLᵀ"] < answers/8 {
		t.Errorf("%v", used)
	}
	if answers < networks*10 || singular > answers/4 || wide > answers/20 {
		t.Errorf("%d answers, %d singular, %d with wide radius", answers, singular, wide)
	}
}
