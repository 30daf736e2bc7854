package analyze

import (
	"context"
	"fmt"

	"portlight/analyze/network"
	"portlight/analyze/response"
	"portlight/dialect"
)

// equivalentAnswer is the Thévenin or Norton equivalent of a port: what stands
// across it belongs to the network.
func (a *Analysis) equivalentAnswer(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	port := a.description.Ports[q.Ports[0]]
	out := &EquivalentAnswer{Question: head, Norton: q.Sort == dialect.AskNorton}
	if names := a.partNames(a.sourcesAcross(port.Plus, port.Minus)); len(names) > 0 {
		out.Remarks = append(out.Remarks, fmt.Sprintf("%s stands across the port and belongs to the network here; z[%s] leaves it out", list(names), port.Name))
	}
	var err error
	if out.Impedance, out.WhyImpedance, err = a.portImpedance(ctx, head, port, c); err != nil {
		return nil, err
	}
	if out.OpenCircuit, out.WhyOpenCircuit, err = a.openCircuit(ctx, head, q.Ports[0], c); err != nil {
		return nil, err
	}
	out.ShortCircuit, out.WhyShortCircuit, err = a.shortCircuit(ctx, head, port, c)
	return out, err
}

// portImpedance is the impedance behind a port with every source at zero.
func (a *Analysis) portImpedance(ctx context.Context, head Question, port dialect.Port, c configuration) (*FunctionAnswer, string, error) {
	head.Text = "z[" + port.Name + "]"
	f, err := a.impedanceAt(ctx, pair{port.Plus, port.Minus, c, head.Text})
	if err == nil {
		var z *FunctionAnswer
		if z, err = a.functionAnswer(ctx, head, dialect.DimensionResistance, f); err == nil {
			return z, "", nil
		}
	}
	if passOn(ctx, err) {
		return nil, "", err
	}
	return nil, errText(err), nil
}

func (a *Analysis) openCircuit(ctx context.Context, head Question, port int, c configuration) (*SignalAnswer, string, error) {
	head.Text = "v[" + a.description.Ports[port].Name + "]"
	s, err := a.probeSignal(ctx, dialect.Probe{Letter: 'v', Of: dialect.OfPort, Port: port}, c)
	if passOn(ctx, err) {
		return nil, "", err
	}
	if err != nil {
		return nil, "the open-circuit voltage does not exist: " + errText(err), nil
	}
	return &SignalAnswer{Question: head, Dimension: dialect.DimensionVoltage, Signal: s}, "", nil
}

// shortCircuit is the current from the + node through a short to the − node.
func (a *Analysis) shortCircuit(ctx context.Context, head Question, port dialect.Port, c configuration) (*SignalAnswer, string, error) {
	head.Text = fmt.Sprintf("current of the shorted port %s", port.Name)
	element := len(a.description.Parts) + len(c.drives)
	shorted := c.with(drive{network.Short, port.Plus, port.Minus})
	s, err := a.elementSignal(ctx, element, shorted)
	if passOn(ctx, err) {
		return nil, "", err
	}
	if err != nil {
		return nil, "the short-circuit current does not exist: " + errText(err), nil
	}
	return &SignalAnswer{Question: head, Dimension: dialect.DimensionCurrent, Signal: s}, "", nil
}

// elementSignal is the current of an element that is not a part, such as a short.
func (a *Analysis) elementSignal(ctx context.Context, element int, c configuration) (*response.Signal, error) {
	solution, err := a.solution(ctx, c)
	if err != nil {
		return nil, err
	}
	return solution.Signal(ctx, func(sys *network.System) (network.Output, error) {
		out, problem := sys.ElementCurrent(element)
		if problem != nil {
			return out, a.refuseProblems([]network.Problem{*problem})
		}
		return out, nil
	})
}
