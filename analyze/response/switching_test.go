package response

import (
	"fmt"
	"math"
	"math/big"
	"testing"

	"portlight/analyze/network"
	"portlight/dialect/number"
)

// circuit builds a network by hand: node 0 is the reference.
type circuit struct {
	t        testing.TB
	elements []network.Element
	nodes    int
	setup    Setup
	systems  map[string]*network.System
}

func newCircuit(t testing.TB, nodes int) *circuit { return &circuit{t: t, nodes: nodes} }

func (c *circuit) add(kind network.Kind, from, to int, value string) int {
	e := network.Element{Kind: kind, From: from, To: to}
	if value != "" {
		e.Value = num(c.t, value)
	}
	c.elements = append(c.elements, e)
	return len(c.elements) - 1
}

func (c *circuit) source(kind network.Kind, from, to int, w Wave) int {
	i := c.add(kind, from, to, "")
	c.setup.Sources = append(c.setup.Sources, Source{i, w})
	return i
}

func (c *circuit) initially(element int, value string) {
	c.setup.Initial = append(c.setup.Initial, Initial{Element: element, Value: num(c.t, value)})
}

// system assembles the network with its switches closed or open.
func (c *circuit) system(closed map[int]bool) *network.System {
	c.t.Helper()
	n := &network.Network{Nodes: c.nodes, Elements: append([]network.Element(nil), c.elements...)}
	for i, yes := range closed {
		n.Elements[i].Kind = network.Open
		if yes {
			n.Elements[i].Kind = network.Short
		}
	}
	s, problems := network.Assemble(n)
	if s == nil {
		c.t.Fatal(problems)
	}
	return s
}

func (c *circuit) from(start string, closed map[int]bool) {
	key := fmt.Sprint(closed)
	if c.systems == nil {
		c.systems = map[string]*network.System{}
	}
	if c.systems[key] == nil {
		c.systems[key] = c.system(closed)
	}
	c.setup.Intervals = append(c.setup.Intervals, Interval{Start: num(c.t, start), System: c.systems[key]})
}

func (c *circuit) solve() *Solution {
	c.t.Helper()
	s, err := Solve(background, c.setup)
	if err != nil {
		c.t.Fatal(err)
	}
	return s
}

func signalOf(t testing.TB, s *Solution, f func(*network.System) (network.Output, *network.Problem)) *Signal {
	t.Helper()
	sig, err := s.Signal(background, func(sys *network.System) (network.Output, error) {
		out, p := f(sys)
		if p != nil {
			t.Fatal(p)
		}
		return out, nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return sig
}

func voltage(t testing.TB, s *Solution, a, b int) *Signal {
	return signalOf(t, s, func(sys *network.System) (network.Output, *network.Problem) { return sys.NodeVoltage(a, b) })
}

func current(t testing.TB, s *Solution, element int) *Signal {
	return signalOf(t, s, func(sys *network.System) (network.Output, *network.Problem) { return sys.ElementCurrent(element) })
}

func at(t testing.TB, s *Signal, when string, side Side) float64 {
	t.Helper()
	b, err := s.Value(background, rat(t, when), side, 17)
	if err != nil {
		t.Errorf("at %s: %v", when, err)
	}
	return b.MidFloat64()
}

// Two capacitors put in parallel at t = 1 ms keep their charge: (C1·v1 + C2·v2)
// divided by C1 + C2 (any textbook on circuits with initial-value conflicts), and
// the charge goes over in an impulse of current.
func TestParalleledCapacitors(t *testing.T) {
	c := newCircuit(t, 3)
	c1 := c.add(network.Capacitor, 1, 0, "2e-6")
	c.add(network.Resistor, 1, 0, "1000")
	sw := c.add(network.Open, 1, 2, "")
	c2 := c.add(network.Capacitor, 2, 0, "3e-6")
	c.add(network.Resistor, 2, 0, "1000000")
	c.initially(c1, "10")
	c.initially(c2, "-4")
	c.from("0", map[int]bool{sw: false})
	c.from("1e-3", map[int]bool{sw: true})
	s := c.solve()
	v1, v2 := voltage(t, s, 1, 0), voltage(t, s, 2, 0)
	before1, before2 := 10*math.Exp(-0.5), -4*math.Exp(-1.0/3000)
	near(t, "v1 before", at(t, v1, "1e-3", Left), before1, 1e-15)
	near(t, "v2 before", at(t, v2, "1e-3", Left), before2, 1e-15)
	after := (2*before1 + 3*before2) / 5
	near(t, "v1 after", at(t, v1, "1e-3", Right), after, 1e-14)
	near(t, "v2 after", at(t, v2, "1e-3", Right), after, 1e-14)
	g := 1e-3 + 1e-6
	near(t, "v2 later", at(t, v2, "3e-3", Right), after*math.Exp(-2e-3*g/5e-6), 1e-14)
	i := current(t, s, sw)
	list, err := i.Impulses(background, 17)
	if err != nil || len(list) != 1 || len(list[0].Weights) != 1 {
		t.Fatalf("impulses %v %v", list, err)
	}
	near(t, "charge", list[0].Weights[0].MidFloat64(), 2e-6*(before1-after), 1e-14)
	if list, err := v1.Impulses(background, 17); err != nil || len(list) != 0 {
		t.Errorf("impulses of the voltage: %v %v", list, err)
	}
	e, err := v2.Curve().Peak(background, Range{})
	ballNear(t, "peak", e.Value, err, after)
	ballNear(t, "its instant", e.At, err, 1e-3)
	e, err = v1.Curve().Peak(background, Range{})
	if err != nil || e.Exact == nil || e.Exact.Cmp(big.NewRat(10, 1)) != 0 {
		t.Errorf("peak %+v %v", e, err)
	}
	wantUndefinedMeasure(t, i)
	p, err := v1.Pieces(background, 17)
	if err != nil || len(p) != 2 || p[0].Until == nil || p[1].Until != nil {
		t.Errorf("pieces %+v %v", p, err)
	}
}

func wantUndefinedMeasure(t *testing.T, i *Signal) {
	t.Helper()
	_, err := i.Curve().Peak(background, Range{})
	wantUndefined(t, "peak with an impulse", err, "impulse")
	d, err := i.Curve().Decide(background, "<=", num(t, "1"), Range{})
	if err != nil || d.Outcome != Broken {
		t.Errorf("a limit on an impulse: %v %v", d, err)
	}
	if d, err = i.Curve().Decide(background, "<=", num(t, "1"), Range{From: rat(t, "2e-3")}); err != nil || d.Outcome != Holds {
		t.Errorf("a limit after an impulse: %v %v", d, err)
	}
}

// An inductor that carries current is put in series with one that does not by
// the opening of a switch: flux is kept, L1·i1 = (L1+L2)·i.
func TestOpenedInductor(t *testing.T) {
	c := newCircuit(t, 4)
	c.source(network.VoltageSource, 1, 0, Wave{Always: []WaveTerm{{Cosine: num(t, "12")}}})
	c.add(network.Resistor, 1, 2, "6")
	l1 := c.add(network.Inductor, 2, 3, "0.2")
	sw := c.add(network.Short, 3, 0, "")
	l2 := c.add(network.Inductor, 3, 0, "0.1")
	_ = l2
	c.initially(l1, "2")
	c.from("0", map[int]bool{sw: true})
	c.from("0.5", map[int]bool{sw: false})
	c.setup.Steady = true
	s := c.solve()
	i1 := current(t, s, l1)
	near(t, "before", at(t, i1, "0.5", Left), 2, 1e-15)
	near(t, "after", at(t, i1, "0.5", Right), 2*0.2/0.3, 1e-15)
	near(t, "l2 after", at(t, current(t, s, l2), "0.5", Right), 2*0.2/0.3, 1e-15)
	near(t, "later", at(t, i1, "0.6", Right), 2+(2*0.2/0.3-2)*math.Exp(-0.1*6/0.3), 1e-15)
	list, err := voltage(t, s, 3, 0).Impulses(background, 17)
	if err != nil || len(list) != 1 {
		t.Fatalf("impulses %v %v", list, err)
	}
	near(t, "flux", list[0].Weights[0].MidFloat64(), 0.1*2*0.2/0.3, 1e-14)
	x, err := i1.Before(background)
	if err != nil || x.Float() != 2 {
		t.Errorf("i1 at 0−: %v %v", x, err)
	}
	v, err := voltage(t, s, 1, 0).Before(background)
	if err != nil || v.Float() != 12 {
		t.Errorf("the source at 0−: %v %v", v, err)
	}
	near(t, "due to the source", at(t, i1.Due(0), "0.25", Right), 2*(1-math.Exp(-0.25*6/0.2)), 1e-14)
	near(t, "zero input", at(t, i1.ZeroInput(), "0.25", Right), 2*math.Exp(-0.25*6/0.2), 1e-14)
}

// A switched supply: a capacitor charged for 1 ms and left to its load for 1 ms,
// twenty times. The recursion v ← a·v + b, v ← c·v is the network solved by hand.
func TestManyIntervals(t *testing.T) {
	c := newCircuit(t, 4)
	c.source(network.VoltageSource, 1, 0, Wave{Always: []WaveTerm{{Cosine: num(t, "10")}}})
	sw := c.add(network.Short, 1, 2, "")
	c.add(network.Resistor, 2, 3, "100")
	c.add(network.Capacitor, 3, 0, "10e-6")
	c.add(network.Resistor, 3, 0, "400")
	for k := range 40 {
		c.from(number.FromRat(big.NewRat(int64(k), 1000)).Rat().RatString(), map[int]bool{sw: k%2 == 0})
	}
	s := c.solve()
	v := voltage(t, s, 3, 0)
	want := 0.0
	for k := range 39 {
		if k%2 == 0 { // 80 Ω · 10 µF = 0.8 ms towards 8 V
			want = 8 + (want-8)*math.Exp(-1/0.8)
		} else { // 400 Ω · 10 µF = 4 ms
			want *= math.Exp(-1.0 / 4)
		}
		near(t, "v", at(t, v, number.FromRat(big.NewRat(int64(k+1), 1000)).Rat().RatString(), Right), want, 1e-14)
	}
	e, err := v.Curve().Peak(background, Range{})
	if err != nil || !e.HasAt || math.Abs(e.At.MidFloat64()-0.039) > 1e-15 {
		t.Errorf("peak %+v %v", e, err)
	}
	values, bound := sampler(t, v).Uniform(0, 1e-4, 400)
	for i, x := range values {
		exactly := at(t, v, big.NewRat(int64(i), 10000).RatString(), Right)
		if math.Abs(x-exactly) > bound+1e-16 || bound > 1e-12 {
			t.Fatalf("sample %d: %g, want %g ± %g", i, x, exactly, bound)
		}
	}
}

func sampler(t testing.TB, s *Signal) *Sampler {
	t.Helper()
	p, err := s.Sampler(background)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// A coil's release with a snubber, against a Runge–Kutta integration of its
// differential equations: R·i + L·di/dt + v + Rs·i = 0, C·dv/dt = i.
func TestReleaseAgainstIntegration(t *testing.T) {
	const r, l, rs, cap = 48.0, 0.12, 330.0, 220e-9
	c := newCircuit(t, 6)
	c.source(network.VoltageSource, 1, 0, Wave{Always: []WaveTerm{{Cosine: num(t, "12")}}})
	sw := c.add(network.Short, 1, 2, "")
	c.add(network.Resistor, 2, 3, "48")
	coil := c.add(network.Inductor, 3, 0, "0.12")
	c.add(network.Resistor, 2, 4, "330")
	snub := c.add(network.Capacitor, 4, 0, "220e-9")
	c.add(network.Resistor, 5, 0, "1")
	c.initially(coil, "1/4")
	c.initially(snub, "12")
	before := c.system(map[int]bool{sw: true})
	c.from("0", map[int]bool{sw: false})
	c.setup.Before, c.setup.Steady = before, true
	s := c.solve()
	v := voltage(t, s, 2, 0)
	if x, err := v.Before(background); err != nil || x.Float() != 12 {
		t.Errorf("at 0−: %v %v", x, err)
	}
	near(t, "at 0+", at(t, v, "0", Right), 12-330.0/4, 1e-15)
	i, u := 0.25, 12.0
	derive := func(i, u float64) (float64, float64) { return (-(r+rs)*i + u) / l, -i / cap }
	const h, n = 1e-8, 100000
	for range n {
		i1, u1 := derive(i, u)
		i2, u2 := derive(i+h/2*i1, u+h/2*u1)
		i3, u3 := derive(i+h/2*i2, u+h/2*u2)
		i4, u4 := derive(i+h*i3, u+h*u3)
		i, u = i+h/6*(i1+2*i2+2*i3+i4), u+h/6*(u1+2*u2+2*u3+u4)
	}
	near(t, "v at 1 ms", at(t, v, "1e-3", Right), u-rs*i, 1e-10)
	near(t, "i at 1 ms", at(t, current(t, s, coil), "1e-3", Right), i, 1e-10)
	e, err := v.Curve().Trough(background, Range{})
	if err != nil {
		t.Fatal(err)
	}
	low := math.Inf(1)
	values, _ := sampler(t, v).Uniform(0, 1e-7, 30000)
	for _, x := range values {
		low = math.Min(low, x)
	}
	if m := e.Value.MidFloat64(); m > low || m < low-1e-3 {
		t.Errorf("trough %g, samples reach %g", m, low)
	}
}
