package network

import "portlight/dialect/number"

// Kind is the kind of an element.
type Kind int

// The kinds of elements. Absent is an element that has been taken out: it
// keeps its index and takes part in nothing. Open is an ideal open switch: it
// carries no current, but it is wired and can be named.
const (
	Absent Kind = iota
	Resistor
	Inductor
	Capacitor
	Immittance
	VoltageSource
	CurrentSource
	DependentVoltage
	DependentCurrent
	OpAmp
	Transformer
	Coupling
	Short
	Open
)

var kindNames = [...]string{
	"absent", "resistor", "inductor", "capacitor", "immittance",
	"voltage source", "current source", "dependent voltage source",
	"dependent current source", "op amp", "transformer", "coupling",
	"short", "open",
}

// String returns the kind in words.
func (k Kind) String() string {
	if k < 0 || int(k) >= len(kindNames) {
		return "unknown kind"
	}
	return kindNames[k]
}

// Element is one element. Two-terminal kinds use From and To: the voltage is
// that of From minus that of To, the current flows from From through the
// element to To. All values are in coherent SI units, frequencies in rad/s.
type Element struct {
	Name     string
	Kind     Kind
	From, To int

	// Value is the resistance, inductance or capacitance; of a coupling the
	// coefficient k, or the mutual inductance when Mutual is set.
	Value  number.Exact
	Mutual bool
	Coils  [2]int // coupling: the indices of two inductors, dots at From

	// Numerator and Denominator, ascending in s, are an immittance's
	// impedance, or its admittance when Admittance is set. An empty
	// denominator is 1.
	Numerator, Denominator []number.Exact
	Admittance             bool

	// Controls are what a dependent source's voltage or current is the sum of.
	Controls []Control

	// Plus, Minus and Output are an op amp's nodes; its output current returns
	// to the reference node. With neither GainBandwidth nor DCGain the op amp
	// is ideal: no voltage and no current at its input. Otherwise
	// v(Output) = A(s)·(v(Plus) − v(Minus)) with 1/A = 1/DCGain + s/GainBandwidth,
	// where a nil figure adds nothing. GainBandwidth is in rad/s.
	Plus, Minus, Output   int
	GainBandwidth, DCGain *number.Exact

	// Windings of an ideal transformer: voltages in the ratio of turns,
	// ampere-turns summing to zero.
	Windings []Winding
}

// Winding is one winding of an ideal transformer; its voltage is Plus minus
// Minus and its current flows in at Plus.
type Winding struct {
	Plus, Minus int
	Turns       number.Exact
}

// Control is one term of a dependent source: a coefficient that may be
// rational in s, times a sum of quantities.
type Control struct {
	// Numerator and Denominator are ascending in s; an empty denominator is 1.
	Numerator, Denominator []number.Exact
	Of                     []Probe
}

// Quantity says what a Probe senses.
type Quantity int

// What can be sensed.
const (
	NodePair        Quantity = iota // the voltage of Plus minus that of Minus
	ElementFlow                     // the current of a two-terminal element
	TerminalCurrent                 // the current into an op amp's output or a winding's Plus
)

// Probe is an elementary quantity, or its negative.
type Probe struct {
	Quantity    Quantity
	Plus, Minus int  // NodePair
	Element     int  // ElementFlow and TerminalCurrent
	Winding     int  // TerminalCurrent at a transformer
	Negative    bool // the quantity counts negatively
}

// Network is a linear lumped network with nodes 0 … Nodes−1. Indices into
// Elements are the only names used here. Switches stand as they are at the
// moment looked at: Short, Open, or a Resistor.
type Network struct {
	Nodes    int
	Ground   int    // the reference node, -1 for none
	Ported   []bool // nodes where a port ends; nil for none
	Elements []Element
}

// twoTerminal tells whether the element is a branch from From to To that can
// carry a current.
func (k Kind) twoTerminal() bool {
	switch k {
	case Resistor, Inductor, Capacitor, Immittance, VoltageSource,
		CurrentSource, DependentVoltage, DependentCurrent, Short:
		return true
	}
	return false
}

// ideal tells whether an op amp keeps its inputs at the same voltage.
func (e *Element) ideal() bool { return e.GainBandwidth == nil && e.DCGain == nil }

// ported tells whether a port ends at node.
func (n *Network) ported(node int) bool { return node < len(n.Ported) && n.Ported[node] }

// dependent tells whether the kind is a dependent source.
func (k Kind) dependent() bool { return k == DependentVoltage || k == DependentCurrent }

// terminals calls f for every node the element is wired to, once for each
// connection.
func (e *Element) terminals(f func(node int)) {
	switch {
	case e.Kind.twoTerminal() || e.Kind == Open:
		f(e.From)
		f(e.To)
	case e.Kind == OpAmp:
		f(e.Plus)
		f(e.Minus)
		f(e.Output)
	case e.Kind == Transformer:
		for _, w := range e.Windings {
			f(w.Plus)
			f(w.Minus)
		}
	}
}

// probes calls f for every quantity the element senses; the input voltage of
// an op amp is one.
func (e *Element) probes(f func(p Probe)) {
	switch {
	case e.Kind.dependent():
		for _, c := range e.Controls {
			for _, p := range c.Of {
				f(p)
			}
		}
	case e.Kind == OpAmp:
		f(Probe{Quantity: NodePair, Plus: e.Plus, Minus: e.Minus})
	}
}

// sensed returns for every element whether a dependent source senses its
// current.
func (n *Network) sensed() []bool {
	out := make([]bool, len(n.Elements))
	for i := range n.Elements {
		n.Elements[i].probes(func(p Probe) {
			if p.Quantity != NodePair && p.Element >= 0 && p.Element < len(out) {
				out[p.Element] = true
			}
		})
	}
	return out
}

// Touches tells whether the element has a connection at a node.
func (e *Element) Touches(node int) bool {
	found := false
	e.terminals(func(n int) { found = found || n == node })
	return found
}
