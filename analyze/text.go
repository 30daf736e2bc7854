package analyze

import (
	"fmt"
	"strings"

	"portlight/analyze/exact"
	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// probeText writes a quantity as the notation does.
func (a *Analysis) probeText(p dialect.Probe) string {
	d := a.description
	switch p.Of {
	case dialect.OfPart:
		return fmt.Sprintf("%c[%s]", p.Letter, d.Parts[p.Part].Name)
	case dialect.OfTerminal:
		return fmt.Sprintf("%c[%s.%s]", p.Letter, d.Parts[p.Part].Name, p.Terminal)
	case dialect.OfPort:
		return fmt.Sprintf("%c[%s]", p.Letter, d.Ports[p.Port].Name)
	case dialect.OfInflow:
		return fmt.Sprintf("%c[%s]", p.Letter, p.Terminal)
	}
	return fmt.Sprintf("%c[%s]", p.Letter, a.pairText(p.Plus, p.Minus))
}

// pairText names a node pair; the reference goes without saying.
func (a *Analysis) pairText(plus, minus int) string {
	if minus == a.description.Ground && minus >= 0 {
		return a.nodeName(plus)
	}
	return a.nodeName(plus) + "," + a.nodeName(minus)
}

// nodeName names a node; an unnamed joint is told by the parts that meet there.
func (a *Analysis) nodeName(n int) string {
	if n < 0 {
		return "?"
	}
	if name := a.description.Nodes[n].Name; name != "" {
		return name
	}
	var names []string
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.From == n || p.To == n {
			names = append(names, p.Name)
		}
	}
	return "the joint of " + list(names)
}

// list joins names as prose does: "a", "a and b", "a, b and c".
func list(names []string) string {
	switch len(names) {
	case 0:
		return "nothing"
	case 1:
		return names[0]
	}
	return strings.Join(names[:len(names)-1], ", ") + " and " + names[len(names)-1]
}

// partNames gives the names of parts; drives of a question have none.
func (a *Analysis) partNames(elements []int) []string {
	var out []string
	for _, e := range elements {
		if e >= 0 && e < len(a.description.Parts) {
			out = append(out, a.description.Parts[e].Name)
		}
	}
	return out
}

func (a *Analysis) nodeNames(nodes []int) []string {
	var out []string
	for _, n := range nodes {
		out = append(out, a.nodeName(n))
	}
	return out
}

// rootFigures writes roots, a conjugate pair once.
func rootFigures(roots []exact.Root) []string {
	var out []string
	for _, r := range roots {
		if !lowerHalf(r) {
			out = append(out, rootFigure(r))
		}
	}
	return out
}

// constantText shows a constant in the unit it was meant in.
func constantText(k *dialect.Constant) string {
	if k.Dim().Frequency {
		w := ballOf(k.Value)
		if k.Hertz {
			return figure(hertz(w), "Hz")
		}
		return figure(w, "rad/s")
	}
	return quantity(ballOf(k.Value), k.Dim())
}

// transformText writes the Laplace transform of a waveform, piece by piece;
// "" where it would be too long to read.
func transformText(w response.Wave) string {
	var parts []string
	for _, t := range w.Transforms() {
		text := t.Ratio.String()
		if t.From.Sign() != 0 {
			text = "(" + text + ")·e^(−s·" + figure(number.BallFromRat(t.From, figurePrecision), "s") + ")"
		}
		parts = append(parts, text)
	}
	joined := strings.Join(parts, " + ")
	if len(joined) > 120 {
		return ""
	}
	return joined
}

// valueUnit is the unit of the value of a kind of part.
func valueUnit(p *dialect.Part) string {
	switch p.Kind {
	case dialect.Resistor:
		return "Ω"
	case dialect.Inductor:
		return "H"
	case dialect.Capacitor:
		return "F"
	case dialect.Coupling:
		if p.Mutual {
			return "H"
		}
	}
	return ""
}
