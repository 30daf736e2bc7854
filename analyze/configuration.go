package analyze

import (
	"context"
	"fmt"
	"sort"
	"strings"
	"sync"

	"portlight/analyze/network"
	"portlight/dialect"
	"portlight/dialect/number"
)

// configuration is one state of the described network that questions are
// asked of: which switches are closed, which parts are taken out, and which
// ideal sources are put at node pairs to drive them. The zero value is the
// network as its switches stand after their last event.
type configuration struct {
	switches []dialect.SwitchState // set by hand; the others stand as after their last event
	without  []int
	drives   []drive
}

// drive is an ideal source or a short put between two nodes for one question.
type drive struct {
	kind        network.Kind // VoltageSource, CurrentSource or Short
	plus, minus int
}

// key tells configurations apart in the cache.
func (c configuration) key() string {
	var b strings.Builder
	states := append([]dialect.SwitchState(nil), c.switches...)
	sort.Slice(states, func(i, j int) bool { return states[i].Part < states[j].Part })
	without := append([]int(nil), c.without...)
	sort.Ints(without)
	fmt.Fprint(&b, states, without, c.drives)
	return b.String()
}

// with returns the configuration with further drives.
func (c configuration) with(drives ...drive) configuration {
	c.drives = append(append([]drive(nil), c.drives...), drives...)
	return c
}

// lacking returns the configuration with further parts taken out.
func (c configuration) lacking(parts ...int) configuration {
	c.without = append(append([]int(nil), c.without...), parts...)
	return c
}

// element is the index of the k-th drive in the network's elements.
func (c configuration) element(d *dialect.Description, k int) int { return len(d.Parts) + k }

// switchClosed tells how a switch stands: by hand, or just after a time, nil
// for after its last event.
func (c configuration) switchClosed(d *dialect.Description, part int, at *number.Exact) bool {
	for _, s := range c.switches {
		if s.Part == part {
			return s.Closed
		}
	}
	return closedAfter(&d.Parts[part], at)
}

// closedAfter tells how a switch stands just after time t, nil for the end of time.
func closedAfter(p *dialect.Part, t *number.Exact) bool {
	closed := p.ClosedAt0
	for _, e := range p.Events {
		if t != nil {
			if order, _ := e.At.Cmp(*t); order > 0 {
				break
			}
		}
		closed = e.Closes
	}
	return closed
}

// model is a configuration made into equations.
type model struct {
	network  *network.Network
	system   *network.System // nil when the equations have no solution
	problems []network.Problem

	once  sync.Once
	parts network.Partition
}

// partition is the pieces that cannot influence one another, found once.
func (m *model) partition() network.Partition {
	m.once.Do(func() { m.parts = m.network.Partition() })
	return m.parts
}

// models keeps the models of one analysis by configuration.
type models struct {
	mu   sync.Mutex
	made map[string]*onceModel
}

type onceModel struct {
	once  sync.Once
	model *model
}

// model returns the equations of a configuration, made at most once.
func (a *Analysis) model(_ context.Context, c configuration) *model {
	key := c.key()
	a.shared().models.mu.Lock()
	if a.shared().models.made == nil {
		a.shared().models.made = map[string]*onceModel{}
	}
	o := a.shared().models.made[key]
	if o == nil {
		o = &onceModel{}
		a.shared().models.made[key] = o
	}
	a.shared().models.mu.Unlock()
	o.once.Do(func() {
		net := a.build(c, nil)
		system, problems := network.Assemble(net)
		o.model = &model{network: net, system: system, problems: problems}
	})
	return o.model
}

// build makes the network of a configuration. Elements have the indices of
// the description's parts; the drives follow. At gives the time for which the
// switches not set by hand are taken; nil is after their last event.
func (a *Analysis) build(c configuration, at *number.Exact) *network.Network {
	d := a.description
	n := &network.Network{
		Nodes: len(d.Nodes), Ground: d.Ground, Ported: make([]bool, len(d.Nodes)),
		Elements: make([]network.Element, 0, len(d.Parts)+len(c.drives)),
	}
	for i := range d.Nodes {
		n.Ported[i] = d.Nodes[i].Ported
	}
	out := map[int]bool{}
	for _, p := range c.without {
		out[p] = true
	}
	for i := range d.Parts {
		e := network.Element{Name: d.Parts[i].Name, Kind: network.Absent}
		if !out[i] {
			e = elementOf(d, i, c.switchClosed(d, i, at))
		}
		n.Elements = append(n.Elements, e)
	}
	for _, drive := range c.drives {
		n.Elements = append(n.Elements, network.Element{
			Name: "drive", Kind: drive.kind, From: drive.plus, To: drive.minus,
		})
		n.Ported[drive.plus], n.Ported[drive.minus] = true, true
	}
	a.dropOrphans(n)
	return n
}

// dropOrphans takes out couplings of coils that are taken out.
func (a *Analysis) dropOrphans(n *network.Network) {
	for i := range a.description.Parts {
		e := &n.Elements[i]
		if e.Kind != network.Coupling {
			continue
		}
		for _, coil := range e.Coils {
			if coil < 0 || n.Elements[coil].Kind != network.Inductor {
				e.Kind = network.Absent
			}
		}
	}
}

// kinds that carry over as they are.
var kindOf = map[dialect.Kind]network.Kind{
	dialect.Resistor:    network.Resistor,
	dialect.Inductor:    network.Inductor,
	dialect.Capacitor:   network.Capacitor,
	dialect.Impedance:   network.Immittance,
	dialect.Admittance:  network.Immittance,
	dialect.OpAmp:       network.OpAmp,
	dialect.Transformer: network.Transformer,
	dialect.Coupling:    network.Coupling,
	dialect.Wire:        network.Short,
}

// elementOf turns one part into an element.
func elementOf(d *dialect.Description, index int, closed bool) network.Element {
	p := &d.Parts[index]
	e := network.Element{
		Name: p.Name, Kind: kindOf[p.Kind], From: p.From, To: p.To,
		Value: p.Value, Mutual: p.Mutual, Coils: p.Coils,
		Plus: p.Plus, Minus: p.Minus, Output: p.Output,
		GainBandwidth: p.GainBandwidth, DCGain: p.DCGain,
	}
	switch p.Kind {
	case dialect.Impedance, dialect.Admittance:
		e.Admittance = p.Kind == dialect.Admittance
		if p.Rational != nil {
			e.Numerator, e.Denominator = p.Rational.Numerator, p.Rational.Denominator
		}
	case dialect.VoltageSource, dialect.CurrentSource:
		e.Kind, e.Controls = sourceKind(p), controlsOf(d, p)
	case dialect.Switch:
		e.Kind = network.Open
		if closed {
			e.Kind = network.Short
			if p.Resistance != nil {
				e.Kind, e.Value = network.Resistor, *p.Resistance
			}
		}
	case dialect.Transformer:
		for _, w := range p.Windings {
			e.Windings = append(e.Windings, network.Winding{Plus: w.Plus, Minus: w.Minus, Turns: w.Turns})
		}
	}
	if !wired(p) {
		e.Kind = network.Absent
	}
	return e
}

// wired tells whether every terminal of a part has a node.
func wired(p *dialect.Part) bool {
	switch p.Kind {
	case dialect.OpAmp:
		return p.Plus >= 0 && p.Minus >= 0 && p.Output >= 0
	case dialect.Transformer:
		for _, w := range p.Windings {
			if w.Plus < 0 || w.Minus < 0 {
				return false
			}
		}
		return len(p.Windings) > 1
	case dialect.Coupling:
		return p.Coils[0] >= 0 && p.Coils[1] >= 0
	case dialect.NoKind:
		return false
	}
	return p.From >= 0 && p.To >= 0
}

func sourceKind(p *dialect.Part) network.Kind {
	switch {
	case p.Kind == dialect.VoltageSource && p.Dependent == nil:
		return network.VoltageSource
	case p.Kind == dialect.VoltageSource:
		return network.DependentVoltage
	case p.Dependent == nil:
		return network.CurrentSource
	}
	return network.DependentCurrent
}

func controlsOf(d *dialect.Description, p *dialect.Part) []network.Control {
	var out []network.Control
	for _, c := range p.Dependent {
		out = append(out, network.Control{
			Numerator: c.Coefficient.Numerator, Denominator: c.Coefficient.Denominator,
			Of: probesOf(d, c.Probe),
		})
	}
	return out
}

// probesOf turns a quantity that a dependent source senses into a signed sum
// of elementary ones.
func probesOf(d *dialect.Description, q dialect.Probe) []network.Probe {
	switch q.Of {
	case dialect.OfNodes:
		return []network.Probe{{Quantity: network.NodePair, Plus: q.Plus, Minus: q.Minus}}
	case dialect.OfPort:
		p := d.Ports[q.Port]
		return []network.Probe{{Quantity: network.NodePair, Plus: p.Plus, Minus: p.Minus}}
	case dialect.OfInflow:
		var out []network.Probe
		for _, end := range q.Inflow {
			probe := currentProbe(d, end.Part, end.Terminal)
			probe.Negative = end.Sign < 0
			out = append(out, probe)
		}
		return out
	case dialect.OfTerminal:
		return []network.Probe{currentProbe(d, q.Part, q.Terminal)}
	}
	if q.Letter == 'v' {
		p := d.Parts[q.Part]
		return []network.Probe{{Quantity: network.NodePair, Plus: p.From, Minus: p.To}}
	}
	return []network.Probe{currentProbe(d, q.Part, "")}
}

func currentProbe(d *dialect.Description, part int, terminal string) network.Probe {
	p := &d.Parts[part]
	switch p.Kind {
	case dialect.OpAmp:
		return network.Probe{Quantity: network.TerminalCurrent, Element: part}
	case dialect.Transformer:
		return network.Probe{Quantity: network.TerminalCurrent, Element: part, Winding: windingIndex(p, terminal)}
	}
	return network.Probe{Quantity: network.ElementFlow, Element: part}
}

func windingIndex(p *dialect.Part, name string) int {
	for i, w := range p.Windings {
		if w.Name == name {
			return i
		}
	}
	return 0
}
