package response

import (
	"encoding/json"
	"os"
	"testing"

	"portlight/analyze/network"
	"portlight/dialect/number"
)

// The buoy's networks against the matrix exponential of their state equations,
// written by hand and evaluated at 60 digits: see testdata/reference.py.
func TestReferenceNetworks(t *testing.T) {
	data, err := os.ReadFile("testdata/reference.json")
	if err != nil {
		t.Fatal(err)
	}
	var want map[string][]struct {
		T         string
		ZeroInput string `json:"zero_input"`
		ZeroState string `json:"zero_state"`
	}
	if err := json.Unmarshal(data, &want); err != nil {
		t.Fatal(err)
	}
	signals := map[string]*Signal{
		"supply filter": supplyFilter(t), "bus discharge": busDischarge(t), "hydrophone": hydrophone(t),
	}
	if len(want) != len(signals) {
		t.Fatalf("%d references for %d networks", len(want), len(signals))
	}
	for name, rows := range want {
		for _, row := range rows {
			agree(t, name+" zero-input", signals[name].ZeroInput(), row.T, row.ZeroInput)
			agree(t, name+" zero-state", signals[name].ZeroState(), row.T, row.ZeroState)
		}
	}
}

// agree compares a value to 28 digits.
func agree(t *testing.T, what string, s *Signal, when, want string) {
	t.Helper()
	got, err := s.Value(background, rat(t, when), Right, 32)
	if err != nil {
		t.Errorf("%s at %s: %v", what, when, err)
		return
	}
	w := number.BallFromRat(rat(t, want), 256)
	if got.Sub(w).Abs().Upper().Cmp(w.Abs().MulPow2(-93).Upper()) > 0 {
		t.Errorf("%s at %s: got %s, want %s", what, when, got, want)
	}
}

func supplyFilter(t testing.TB) *Signal {
	c := newCircuit(t, 5)
	c.source(network.VoltageSource, 1, 0, step(num(t, "12")))
	c.add(network.Resistor, 1, 2, "0.5")
	l := c.add(network.Inductor, 2, 3, "47e-6")
	v := c.add(network.Capacitor, 3, 0, "100e-6")
	c.add(network.Resistor, 3, 4, "1")
	d := c.add(network.Capacitor, 4, 0, "470e-6")
	c.add(network.Resistor, 3, 0, "24")
	c.initially(l, "0.3")
	c.initially(v, "2")
	c.initially(d, "-1")
	c.from("0", nil)
	return voltage(t, c.solve(), 3, 0)
}

func busDischarge(t testing.TB) *Signal {
	c := newCircuit(t, 4)
	v := c.add(network.Capacitor, 1, 0, "2.2e-3")
	c.add(network.Resistor, 1, 2, "0.2")
	l1 := c.add(network.Inductor, 2, 0, "1e-3")
	l2 := c.add(network.Inductor, 3, 0, "0.4e-3")
	c.add(network.Resistor, 3, 0, "3")
	c.elements = append(c.elements, network.Element{Kind: network.Coupling, Mutual: true, Value: num(t, "0.5e-3"), Coils: [2]int{l1, l2}})
	c.initially(v, "48")
	c.initially(l1, "1.5")
	c.initially(l2, "-0.25")
	c.from("0", nil)
	return current(t, c.solve(), l2)
}

func hydrophone(t testing.TB) *Signal {
	c := newCircuit(t, 5)
	c.source(network.VoltageSource, 1, 0, sineWave(t, "2e-3", "20e3"))
	in := c.add(network.Capacitor, 1, 2, "220e-12")
	c.add(network.Resistor, 2, 0, "1e6")
	gb, gain := num(t, "6e6"), num(t, "1e5")
	c.elements = append(c.elements, network.Element{Kind: network.OpAmp, Plus: 2, Minus: 3, Output: 4, GainBandwidth: &gb, DCGain: &gain})
	c.add(network.Resistor, 4, 3, "99e3")
	c.add(network.Resistor, 3, 0, "1e3")
	c.initially(in, "1e-3")
	c.from("0", nil)
	return voltage(t, c.solve(), 4, 0)
}

// The combination-wave generator of IEC 61000-4-5:2014 figure 1, open circuit,
// with element values from M. Hesterman and D. Powell, "Introduction to voltage
// surge immunity testing" (2011), from memory. The standard's table 2 (from
// memory) wants a front of 1.2 µs ± 30 % and a duration of 50 µs ± 20 %.
func TestCombinationWave(t *testing.T) {
	c := newCircuit(t, 4)
	store := c.add(network.Capacitor, 1, 0, "6.038e-6")
	c.add(network.Resistor, 1, 0, "25.105")
	c.add(network.Inductor, 1, 2, "10.37e-6")
	c.add(network.Resistor, 2, 3, "0.941")
	c.add(network.Resistor, 3, 0, "19.80")
	c.initially(store, "1082")
	c.from("0", nil)
	v := voltage(t, c.solve(), 3, 0).Curve()
	e, err := v.Peak(background, Range{})
	ballNear(t, "peak", e.Value, err, 1000.0335595016494704)
	ballNear(t, "its instant", e.At, err, 2.484611708301835094e-6)
	level := func(part string) number.Exact { return number.FromRat(e.Value.MidRat()).Mul(num(t, part)) }
	t30, err := v.FirstAbove(background, level("3/10"), Range{})
	if err != nil {
		t.Fatal(err)
	}
	t90, err := v.FirstAbove(background, level("9/10"), Range{})
	if err != nil {
		t.Fatal(err)
	}
	last, err := v.LastAbove(background, level("1/2"), Range{})
	if err != nil {
		t.Fatal(err)
	}
	first, err := v.FirstAbove(background, level("1/2"), Range{})
	if err != nil {
		t.Fatal(err)
	}
	if front := 1.67 * t90.Sub(t30).MidFloat64(); front < 0.7*1.2e-6 || front > 1.3*1.2e-6 {
		t.Errorf("front %g s", front)
	}
	if width := last.Sub(first).MidFloat64(); width < 40e-6 || width > 60e-6 {
		t.Errorf("duration %g s", width)
	}
}
