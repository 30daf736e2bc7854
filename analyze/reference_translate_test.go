package analyze_test

import (
	"fmt"
	"slices"
	"strings"
)

// A translation is a case's network in the notation, with the names that its
// questions need. Statements are added as questions ask for them.
type translation struct {
	network   *caseNetwork
	lines     []string
	nodes     map[string]string // the case's node → the notation's
	parts     map[string]string // the case's element → the notation's
	functions map[string]string // expression → name
	ports     map[[2]string]string
	bare      bool // ports of a network without ground-tied questions only
}

// kindWords names each two-terminal kind of the collection in the notation.
var kindWords = map[string]string{
	"resistor": "resistor", "inductor": "inductor", "capacitor": "capacitor",
	"voltage_source": "voltage source", "current_source": "current source",
	"vcvs": "voltage source", "ccvs": "voltage source",
	"vccs": "current source", "cccs": "current source", "switch": "switch",
}

// translate writes the network of a case in the notation. Elements at nodes
// that the case does not list are left out: the notation has no list of nodes
// that a wire could miss, so such a node is one that nothing reaches.
func translate(n *caseNetwork) *translation {
	t := &translation{
		network: n, nodes: map[string]string{}, parts: map[string]string{},
		functions: map[string]string{}, ports: map[[2]string]string{},
	}
	taken := map[string]bool{}
	for _, e := range n.Elements {
		name := e.Name
		switch e.Kind {
		case "vcvs", "vccs", "ccvs", "cccs":
			name = "driven_" + e.Name
		case "mutual":
			name = "linked_" + e.Name
		}
		t.parts[e.Name] = name
		taken[name] = true
	}
	for _, node := range n.Nodes {
		t.nameNode(node, taken)
	}
	t.nameNode(n.Ground, taken)
	t.add("ground %s", t.node(n.Ground))
	if n.InitialState == "dc_before_switching" {
		t.add("start steady")
	}
	for _, e := range n.Elements {
		t.element(e)
	}
	return t
}

// nameNode gives a node its own name, with a prefix where a part has it.
func (t *translation) nameNode(node string, taken map[string]bool) {
	name := node
	if taken[name] {
		name = "at_" + name
	}
	t.nodes[node] = name
}

func (t *translation) add(format string, args ...any) {
	t.lines = append(t.lines, fmt.Sprintf(format, args...))
}

// text is the whole file.
func (t *translation) text() string { return strings.Join(t.lines, "\n") + "\n" }

func (t *translation) node(name string) string {
	if known, ok := t.nodes[name]; ok {
		return known
	}
	return name
}

func (t *translation) part(name string) string {
	if known, ok := t.parts[name]; ok {
		return known
	}
	return name
}

// listed tells whether the case lists every node of an element.
func (t *translation) listed(nodes ...string) bool {
	for _, n := range nodes {
		if n != t.network.Ground && !slices.Contains(t.network.Nodes, n) {
			return false
		}
	}
	return true
}

// element writes one element and its wiring.
func (t *translation) element(e caseElement) {
	name := t.part(e.Name)
	if e.From != "" && !t.listed(e.From, e.To) {
		return
	}
	switch e.Kind {
	case "mutual":
		value := e.K
		if value == "" {
			value = e.Value + " H"
		}
		t.add("coupling %s = %s, between %s %s", name, value, t.part(e.Inductors[0]), t.part(e.Inductors[1]))
		return
	case "ideal_transformer":
		t.add("transformer %s = %s : 1, primary at %s %s, secondary at %s %s", name, e.Ratio,
			t.node(e.Primary.From), t.node(e.Primary.To), t.node(e.Secondary.From), t.node(e.Secondary.To))
		return
	case "ideal_opamp":
		t.add("op amp %s = ideal, + at %s, - at %s, output at %s", name, t.node(e.Plus), t.node(e.Minus), t.node(e.Out))
		return
	case "single_pole_opamp":
		// The gain-bandwidth product is gain times pole, in rad/s.
		t.add("op amp %s = (%s)*(%s rad/s), gain %s, + at %s, - at %s, output at %s", name,
			e.DCGain, e.Pole, e.DCGain, t.node(e.Plus), t.node(e.Minus), t.node(e.Out))
		return
	}
	t.add("%s %s = %s", kindWords[e.Kind], name, t.value(e))
	t.add("%s -[%s]- %s", t.node(e.From), name, t.node(e.To))
}

// value writes what follows the equals sign of a two-terminal element.
func (t *translation) value(e caseElement) string {
	initially := func(unit string) string {
		if e.Initial == "" || e.Initial == "0" {
			return ""
		}
		return ", initially " + e.Initial + " " + unit
	}
	switch e.Kind {
	case "resistor":
		return e.Value + " Ω"
	case "inductor":
		return e.Value + " H" + initially("A")
	case "capacitor":
		return e.Value + " F" + initially("V")
	case "voltage_source":
		return waveform(e.Waveform, "V")
	case "current_source":
		return waveform(e.Waveform, "A")
	case "vcvs":
		return e.Value + " * " + t.voltage(e.Control.From, e.Control.To)
	case "vccs":
		return e.Value + " S * " + t.voltage(e.Control.From, e.Control.To)
	case "ccvs":
		return e.Value + " Ω * i[" + t.part(e.Control.Element) + "]"
	case "cccs":
		return e.Value + " * i[" + t.part(e.Control.Element) + "]"
	case "switch":
		if e.After == "closed" {
			return "closes at 0 s"
		}
		return "opens at 0 s"
	}
	return ""
}

// waveform writes a source as mathematics.
func waveform(w map[string]string, unit string) string {
	switch w["type"] {
	case "dc":
		return w["value"] + " " + unit
	case "step":
		return w["value"] + " " + unit + " * u(t)"
	case "impulse":
		return w["value"] + " " + unit + "*s * delta(t)"
	case "ramp":
		return w["slope"] + " " + unit + "/s * t * u(t)"
	case "sine":
		return fmt.Sprintf("%s %s * sin(%s rad/s * t) * u(t)", w["amplitude"], unit, w["omega"])
	case "cosine":
		return fmt.Sprintf("%s %s * cos(%s rad/s * t) * u(t)", w["amplitude"], unit, w["omega"])
	case "exponential":
		return fmt.Sprintf("%s %s * exp(-t * (%s 1/s)) * u(t)", w["amplitude"], unit, w["rate"])
	}
	return "no waveform " + w["type"]
}

// voltage names a difference, or a node's voltage to the reference.
func (t *translation) voltage(plus, minus string) string {
	if minus == t.network.Ground {
		return "v[" + t.node(plus) + "]"
	}
	return "v[" + t.node(plus) + "," + t.node(minus) + "]"
}

// output names what a question looks at.
func (t *translation) output(o *caseOutput) string {
	if len(o.Voltage) == 2 {
		return t.voltage(o.Voltage[0], o.Voltage[1])
	}
	return "i[" + t.part(o.Current) + "]"
}

// function gives an expression in s a name, once.
func (t *translation) function(expression string) string {
	if name, ok := t.functions[expression]; ok {
		return name
	}
	name := fmt.Sprintf("H_%d", len(t.functions)+1)
	t.functions[expression] = name
	t.add("function %s = %s", name, expression)
	return name
}

// port declares a node pair as a port, once.
func (t *translation) port(pair []string) string {
	key := [2]string{pair[0], pair[1]}
	if name, ok := t.ports[key]; ok {
		return name
	}
	name := fmt.Sprintf("pair_%d", len(t.ports)+1)
	t.ports[key] = name
	t.add("port %s at %s %s", name, t.node(pair[0]), t.node(pair[1]))
	return name
}

// impedance is the driving-point impedance of a node pair with every
// independent source at zero, those across the pair too.
func (t *translation) impedance(pair []string) string {
	if pair[1] == t.network.Ground {
		return "z[" + t.node(pair[0]) + "]"
	}
	return "z[" + t.node(pair[0]) + "," + t.node(pair[1]) + "]"
}

// declare adds the ports and functions that a question needs.
func (t *translation) declare(q *caseQuestion) {
	if len(q.Port) == 2 {
		t.port(q.Port)
	}
	if len(q.Port1) == 2 {
		t.port(q.Port1)
		t.port(q.Port2)
	}
	switch q.What {
	case "network_function":
		t.function(t.transfer(q))
	case "impedance":
		t.function(t.impedance(q.Port))
	}
	if q.Of != nil {
		t.declare(q.Of)
	}
}

// transfer is a network function as response over excitation.
func (t *translation) transfer(q *caseQuestion) string {
	return t.output(q.Output) + " / " + t.part(q.Input)
}
