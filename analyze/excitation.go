package analyze

import (
	"fmt"

	"portlight/analyze/network"
	"portlight/dialect"
)

// excitation is what drives a network function: one element of a
// configuration, whose own quantity is Sign times what the expression named.
type excitation struct {
	configuration configuration
	element       int
	negative      bool
	port          int // the port it drives, -1 when none
}

// excitation finds what a divisor stands for.
func (a *Analysis) excitation(p dialect.Probe, c configuration) (excitation, error) {
	switch p.Of {
	case dialect.OfPort:
		return a.portExcitation(p, c)
	case dialect.OfPart:
		if e, ok := a.sourceExcitation(p, c); ok {
			return e, nil
		}
		if p.Letter == 'v' {
			part := a.description.Parts[p.Part]
			return a.heldExcitation(part.From, part.To, p, c)
		}
	case dialect.OfNodes:
		if p.Letter == 'v' {
			return a.heldExcitation(p.Plus, p.Minus, p, c)
		}
	}
	return excitation{}, refuse("not-an-excitation", fmt.Sprintf(
		"%s is not an excitation: divide by an independent source, a port's voltage or current, or a voltage across which exactly one voltage source stands",
		a.probeText(p)))
}

// sourceExcitation takes an independent source by its own quantity.
func (a *Analysis) sourceExcitation(p dialect.Probe, c configuration) (excitation, bool) {
	part := &a.description.Parts[p.Part]
	if part.Dependent != nil || !wired(part) {
		return excitation{}, false
	}
	if part.Kind == dialect.VoltageSource && p.Letter == 'v' || part.Kind == dialect.CurrentSource && p.Letter == 'i' {
		return excitation{c, p.Part, false, a.portAcross(part.From, part.To)}, true
	}
	return excitation{}, false
}

// portExcitation puts an ideal source at a port in place of what drives it.
func (a *Analysis) portExcitation(p dialect.Probe, c configuration) (excitation, error) {
	port := a.description.Ports[p.Port]
	c = c.lacking(a.sourcesAcross(port.Plus, port.Minus)...)
	d := drive{network.VoltageSource, port.Plus, port.Minus}
	if p.Letter == 'i' {
		d = drive{network.CurrentSource, port.Minus, port.Plus}
	}
	element := len(a.description.Parts) + len(c.drives)
	return excitation{c.with(d), element, false, p.Port}, nil
}

// heldExcitation takes a voltage across which exactly one voltage source stands.
func (a *Analysis) heldExcitation(plus, minus int, p dialect.Probe, c configuration) (excitation, error) {
	found := -1
	for _, i := range a.sourcesAcross(plus, minus) {
		if a.description.Parts[i].Kind != dialect.VoltageSource {
			continue
		}
		if found >= 0 {
			return excitation{}, refuse("not-an-excitation", fmt.Sprintf(
				"two voltage sources, %s and %s, stand across %s: name one of them as the divisor",
				a.description.Parts[found].Name, a.description.Parts[i].Name, a.probeText(p)))
		}
		found = i
	}
	if found < 0 {
		return excitation{}, refuse("not-an-excitation", fmt.Sprintf(
			"no voltage source stands across %s: divide by a source, or declare a port there and divide by its voltage",
			a.probeText(p)))
	}
	return excitation{c, found, a.description.Parts[found].From != plus, a.portAcross(plus, minus)}, nil
}

// sourcesAcross lists the independent sources that stand across a node pair.
func (a *Analysis) sourcesAcross(plus, minus int) []int {
	var out []int
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.Kind != dialect.VoltageSource && p.Kind != dialect.CurrentSource || p.Dependent != nil {
			continue
		}
		if p.From == plus && p.To == minus || p.From == minus && p.To == plus {
			out = append(out, i)
		}
	}
	return out
}

// portAcross finds the port declared at a node pair, -1 when there is none.
func (a *Analysis) portAcross(plus, minus int) int {
	for i, p := range a.description.Ports {
		if p.Plus == plus && p.Minus == minus || p.Plus == minus && p.Minus == plus {
			return i
		}
	}
	return -1
}
