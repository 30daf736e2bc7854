package analyze

import (
	"context"
	"fmt"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/analyze/symbolic"
	"portlight/dialect"
)

// system gives the equations of a configuration, or refuses: because they
// cannot be written, or because they have no unique solution.
func (a *Analysis) system(ctx context.Context, c configuration) (*network.System, error) {
	m := a.model(ctx, c)
	if m.system == nil {
		return nil, a.refuseProblems(m.problems)
	}
	return m.system, nil
}

// refuseProblems turns the gravest problem into a refusal.
func (a *Analysis) refuseProblems(problems []network.Problem) error {
	for _, p := range problems {
		if f, ok := a.findingOf(p, ""); ok {
			return &refusal{f.Code, f.Message, &p}
		}
	}
	return refuse("singular", "the equations have no unique solution")
}

// determinants are polynomials whose product is det(G + sC) of a
// configuration, one for each piece of the equations; none is zero.
func (a *Analysis) determinants(ctx context.Context, c configuration) ([]exact.Poly, error) {
	sys, err := a.system(ctx, c)
	if err != nil {
		return nil, err
	}
	if a.large(ctx, c) {
		return nil, errLarge
	}
	blocks, err := sys.Blocks(ctx)
	if err != nil {
		return nil, err
	}
	for _, b := range blocks {
		if b.IsZero() {
			return nil, a.refuseSingular(ctx, sys)
		}
	}
	return blocks, nil
}

func (a *Analysis) refuseSingular(ctx context.Context, sys *network.System) error {
	problems, err := sys.Diagnose(ctx)
	if err != nil {
		return err
	}
	return a.refuseProblems(problems)
}

// ratio solves one output for one column.
func (a *Analysis) ratio(ctx context.Context, c configuration, sys *network.System, out network.Output, col network.Column) (form, error) {
	if a.large(ctx, c) {
		return form{}, &largeError{c, sys, out, col}
	}
	// A function of one piece of a network that is undetermined elsewhere would
	// be right only by chance: what is undetermined counts as not excited there.
	if err := a.solvable(ctx, sys); err != nil {
		return form{}, err
	}
	h, err := sys.Responses(ctx, []network.Output{out}, []network.Column{col})
	if err != nil {
		return form{}, err
	}
	f := constantForm(h[0][0], sys.Exact())
	f.of = &c
	return f, nil
}

// transfer is the network function from an excitation to a quantity.
func (a *Analysis) transfer(ctx context.Context, p dialect.Probe, by excitation) (form, error) {
	key := fmt.Sprintf("transfer %v %v %s", probeKey(p), by, by.configuration.key())
	return recall(ctx, &a.shared().memo, key, func(ctx context.Context) (form, error) {
		sys, err := a.system(ctx, by.configuration)
		if err != nil {
			return form{}, err
		}
		out, err := a.output(sys, p, by)
		if err != nil {
			return form{}, err
		}
		col, problem := sys.InputColumn(by.element)
		if problem != nil {
			return form{}, a.refuseProblems([]network.Problem{*problem})
		}
		f, err := a.ratio(ctx, by.configuration, sys, out, col)
		if err != nil {
			return f, err
		}
		if probes, ok := a.sensedBy(p, by); ok {
			f.names = &naming{of: by.configuration, output: probes, by: symbolic.Drive{Element: by.element}}
		}
		if by.negative {
			f = f.negated()
		}
		return f, nil
	})
}

func probeKey(p dialect.Probe) string {
	return fmt.Sprintf("%c %d %d,%d %d.%s %d %v", p.Letter, p.Of, p.Plus, p.Minus, p.Part, p.Terminal, p.Port, p.Inflow)
}

// output is a quantity as a functional of the unknowns. The excitation tells
// what drives a port; use none for signals in time.
func (a *Analysis) output(sys *network.System, p dialect.Probe, by excitation) (network.Output, error) {
	if p.Letter == 'v' {
		return a.voltageOutput(sys, p)
	}
	out, problem, err := a.currentOutput(sys, p, by)
	if err != nil {
		return out, err
	}
	if problem != nil {
		return out, a.refuseProblems([]network.Problem{*problem})
	}
	return out, nil
}

// noExcitation is for signals in time, where nothing but the sources drives.
var noExcitation = excitation{element: -1, port: -1}

// voltageNodes are the two nodes of a voltage.
func (a *Analysis) voltageNodes(p dialect.Probe) (plus, minus int, err error) {
	switch p.Of {
	case dialect.OfPort:
		return a.description.Ports[p.Port].Plus, a.description.Ports[p.Port].Minus, nil
	case dialect.OfPart:
		part := &a.description.Parts[p.Part]
		if !wired(part) {
			return -1, -1, refuse("never-wired", part.Name+" is not wired, so it has no voltage")
		}
		switch part.Kind {
		case dialect.OpAmp:
			return part.Output, a.description.Ground, nil
		case dialect.Transformer:
			return part.Windings[0].Plus, part.Windings[0].Minus, nil
		}
		return part.From, part.To, nil
	case dialect.OfTerminal:
		part := &a.description.Parts[p.Part]
		if part.Kind != dialect.Transformer {
			return part.Output, a.description.Ground, nil
		}
		w := part.Windings[windingIndex(part, p.Terminal)]
		return w.Plus, w.Minus, nil
	}
	return p.Plus, p.Minus, nil
}

func (a *Analysis) voltageOutput(sys *network.System, p dialect.Probe) (network.Output, error) {
	plus, minus, err := a.voltageNodes(p)
	if err != nil {
		return network.Output{}, err
	}
	if minus < 0 {
		return network.Output{}, refuse("no-ground", fmt.Sprintf(
			"no node is named as ground, so only differences such as v[%s,…] can be asked", a.nodeName(plus)))
	}
	out, problem := sys.NodeVoltage(plus, minus)
	if problem != nil {
		return out, refuse("floating-island", fmt.Sprintf(
			"no path joins %s, so the voltage between them is not defined",
			list(a.nodeNames([]int{plus, minus}))+a.islandNames(sys, plus, minus)))
	}
	return out, nil
}

// islandNames tells which nodes make up the island away from the reference.
func (a *Analysis) islandNames(sys *network.System, plus, minus int) string {
	apart := plus
	if minus != a.description.Ground && sys.Island(plus) == 0 {
		apart = minus
	}
	var members []int
	for n := range a.description.Nodes {
		if n != apart && a.description.Nodes[n].Name != "" && sys.Island(n) == sys.Island(apart) {
			members = append(members, n)
		}
	}
	if len(members) == 0 || len(members) > 8 {
		return ""
	}
	return fmt.Sprintf(" (%s belongs to the island with %s)", a.nodeName(apart), list(a.nodeNames(members)))
}

func (a *Analysis) currentOutput(sys *network.System, p dialect.Probe, by excitation) (network.Output, *network.Problem, error) {
	switch p.Of {
	case dialect.OfPort:
		return a.portCurrent(sys, p, by)
	case dialect.OfPart, dialect.OfTerminal:
		part := &a.description.Parts[p.Part]
		if !wired(part) {
			return network.Output{}, nil, refuse("never-wired", part.Name+" is not wired, so it carries no current")
		}
		if part.Kind == dialect.Transformer || part.Kind == dialect.OpAmp {
			out, problem := sys.TerminalCurrent(p.Part, windingIndex(part, p.Terminal))
			return out, problem, nil
		}
		out, problem := sys.ElementCurrent(p.Part)
		return out, problem, nil
	case dialect.OfInflow:
		return a.inflow(sys, p)
	}
	return network.Output{}, nil, refuse("wrong-sort", fmt.Sprintf(
		"%s: a current belongs to a part, a terminal or a driven port, not to a node pair", a.probeText(p)))
}

// inflow sums the currents that leave a joint into a subnetwork.
func (a *Analysis) inflow(sys *network.System, p dialect.Probe) (network.Output, *network.Problem, error) {
	var sum network.Output
	for _, end := range p.Inflow {
		probe := currentProbe(a.description, end.Part, end.Terminal)
		var out network.Output
		var problem *network.Problem
		if probe.Quantity == network.TerminalCurrent {
			out, problem = sys.TerminalCurrent(probe.Element, probe.Winding)
		} else {
			out, problem = sys.ElementCurrent(probe.Element)
		}
		if problem != nil {
			return sum, problem, nil
		}
		sum = sum.Add(out.Scale(rational(int64(end.Sign), 1)))
	}
	return sum, nil, nil
}

// portDrivers are the elements that drive a port.
func (a *Analysis) portDrivers(p dialect.Probe, by excitation) []int {
	if by.port == p.Port && by.element >= len(a.description.Parts) {
		return []int{by.element}
	}
	return a.sourcesAcross(a.description.Ports[p.Port].Plus, a.description.Ports[p.Port].Minus)
}

// portCurrent is the current into a port's + terminal: that of what drives it.
func (a *Analysis) portCurrent(sys *network.System, p dialect.Probe, by excitation) (network.Output, *network.Problem, error) {
	port := a.description.Ports[p.Port]
	drivers := a.portDrivers(p, by)
	if len(drivers) == 0 {
		return network.Output{}, nil, refuse("open-port", fmt.Sprintf(
			"nothing drives port %s, so it is open and its current is zero; ask norton[%s] or matrix y for the current of a shorted port",
			port.Name, port.Name))
	}
	var sum network.Output
	for _, e := range drivers {
		out, problem := sys.ElementCurrent(e)
		if problem != nil {
			return sum, problem, nil
		}
		from := sys.Network().Elements[e].From
		sign := int64(-1)
		if from != port.Plus {
			sign = 1
		}
		sum = sum.Add(out.Scale(rational(sign, 1)))
	}
	return sum, nil, nil
}
