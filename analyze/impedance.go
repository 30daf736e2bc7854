package analyze

import (
	"context"
	"fmt"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/analyze/symbolic"
	"portlight/dialect"
)

// pair is the node pair at which an impedance is asked, and the network it is
// asked of.
type pair struct {
	plus, minus   int
	configuration configuration
	what          string // for messages
}

// pairOf finds the node pair of z[…] or y[…]: a port without its drive, what
// the rest shows to a part, or a plain pair with every source at zero.
func (a *Analysis) pairOf(p dialect.Probe, c configuration) (pair, error) {
	out := pair{plus: p.Plus, minus: p.Minus, configuration: c, what: a.probeText(p)}
	switch p.Of {
	case dialect.OfPort:
		port := a.description.Ports[p.Port]
		out.plus, out.minus = port.Plus, port.Minus
		out.configuration = c.lacking(a.sourcesAcross(port.Plus, port.Minus)...)
	case dialect.OfPart:
		part := &a.description.Parts[p.Part]
		if !wired(part) {
			return out, refuse("never-wired", part.Name+" is not wired, so nothing is seen by it")
		}
		if part.Kind == dialect.OpAmp || part.Kind == dialect.Transformer || part.Kind == dialect.Coupling {
			return out, refuse("wrong-sort", part.Name+" has more than two terminals: ask for the impedance of a node pair, z[a,b]")
		}
		out.plus, out.minus = part.From, part.To
		out.configuration = c.lacking(p.Part)
	case dialect.OfTerminal, dialect.OfInflow:
		return out, refuse("wrong-sort", "an impedance is asked at a node pair, a port or a part")
	}
	if out.minus < 0 {
		return out, refuse("no-ground", fmt.Sprintf(
			"no node is named as ground, so only node pairs such as z[%s,…] can be asked", a.nodeName(out.plus)))
	}
	return out, nil
}

// impedance is the impedance of a pair, in Ω.
func (a *Analysis) impedance(ctx context.Context, p dialect.Probe, c configuration) (form, error) {
	at, err := a.pairOf(p, c)
	if err != nil {
		return form{}, err
	}
	key := fmt.Sprintf("z %d,%d %s", at.plus, at.minus, at.configuration.key())
	f, err := recall(ctx, &a.shared().memo, key, func(ctx context.Context) (form, error) { return a.impedanceAt(ctx, at) })
	if err != nil {
		return f, err
	}
	f.remarks = append([]string(nil), f.remarks...)
	if held := a.holder(at); held != "" && f.constant.IsZero() {
		f.remarks = append(f.remarks, held)
	}
	f.remarks = append(f.remarks, a.leftOut(p)...)
	return f, nil
}

// leftOut says what an impedance is asked without: the part itself, or the
// source that drives the port.
func (a *Analysis) leftOut(p dialect.Probe) []string {
	switch p.Of {
	case dialect.OfPart:
		return []string{fmt.Sprintf("what the rest of the network shows to %s, without %[1]s itself", a.description.Parts[p.Part].Name)}
	case dialect.OfPort:
		port := a.description.Ports[p.Port]
		if names := a.partNames(a.sourcesAcross(port.Plus, port.Minus)); len(names) > 0 {
			return []string{fmt.Sprintf("without %s, which drives the port; z[%s] keeps it, at zero", list(names), a.pairText(port.Plus, port.Minus))}
		}
	}
	return nil
}

func (a *Analysis) impedanceAt(ctx context.Context, at pair) (form, error) {
	if at.plus == at.minus {
		return constantForm(exact.Ratio{}, true), nil
	}
	sys, err := a.system(ctx, at.configuration)
	if err != nil {
		return form{}, err
	}
	col, problem := sys.InjectColumn(at.plus, at.minus)
	if problem != nil {
		return form{}, refuse("floating-island", fmt.Sprintf(
			"%s: no path joins %s, so no current can flow between them: the impedance is infinite",
			at.what, list(a.nodeNames([]int{at.plus, at.minus}))))
	}
	out, problem := sys.NodeVoltage(at.plus, at.minus)
	if problem != nil {
		return form{}, a.refuseProblems([]network.Problem{*problem})
	}
	f, err := a.ratio(ctx, at.configuration, sys, out, col)
	if err == nil {
		f.names = &naming{
			of:     at.configuration,
			output: []network.Probe{{Quantity: network.NodePair, Plus: at.plus, Minus: at.minus}},
			by:     symbolic.Drive{Element: -1, Plus: at.plus, Minus: at.minus},
		}
	}
	return f, err
}

// admittance is 1/z where z is not zero; where a source holds the pair there is none.
func (a *Analysis) admittance(ctx context.Context, p dialect.Probe, c configuration) (form, error) {
	at, err := a.pairOf(p, c)
	if err != nil {
		return form{}, err
	}
	if at.plus == at.minus {
		return form{}, refuse("no-admittance", at.what+": the two nodes are one, so the admittance is infinite")
	}
	key := fmt.Sprintf("y %d,%d %s", at.plus, at.minus, at.configuration.key())
	return recall(ctx, &a.shared().memo, key, func(ctx context.Context) (form, error) { return a.admittanceAt(ctx, at) })
}

func (a *Analysis) admittanceAt(ctx context.Context, at pair) (form, error) {
	c := at.configuration.with(drive{network.VoltageSource, at.plus, at.minus})
	element := len(a.description.Parts) + len(at.configuration.drives)
	sys, err := a.system(ctx, c)
	if err != nil {
		return form{}, err
	}
	col, problem := sys.InputColumn(element)
	if problem == nil {
		var out network.Output
		if out, problem = sys.ElementCurrent(element); problem == nil {
			f, err := a.ratio(ctx, c, sys, out, col)
			if _, refused := asRefusal(err); refused {
				return f, refuse("no-admittance", fmt.Sprintf("%s does not exist: %s", at.what, err.(*refusal).why))
			}
			if err != nil {
				return f, err
			}
			f.names = &naming{
				of:     c,
				output: []network.Probe{{Quantity: network.ElementFlow, Element: element, Negative: true}},
				by:     symbolic.Drive{Element: element},
			}
			f.constant = f.constant.Neg()
			return f, nil
		}
	}
	return form{}, a.refuseProblems([]network.Problem{*problem})
}

// holder says which voltage source makes an impedance zero, and what it sees.
func (a *Analysis) holder(at pair) string {
	for _, i := range a.sourcesAcross(at.plus, at.minus) {
		taken := false
		for _, w := range at.configuration.without {
			taken = taken || w == i
		}
		if p := a.description.Parts[i]; !taken && p.Kind == dialect.VoltageSource {
			return fmt.Sprintf("%s holds this pair, so the impedance is zero; the rest of the network shows z[%s] to it", p.Name, p.Name)
		}
	}
	return ""
}
