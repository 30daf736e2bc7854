package symbolic

import (
	"context"
	"fmt"
	"math/big"
	"strings"
	"testing"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// builder makes a network from lines such as "R1 a b 1000", the kind being the
// letters before the number; node 0 is the reference.
type builder struct {
	network.Network
	nodes map[string]int
}

func rat(t testing.TB, text string) number.Exact {
	t.Helper()
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		t.Fatalf("%q is not a number", text)
	}
	return number.FromRat(r)
}

func (b *builder) node(name string) int {
	if v, there := b.nodes[name]; there {
		return v
	}
	b.nodes[name] = b.Nodes
	b.Nodes++
	return b.nodes[name]
}

func (b *builder) index(t testing.TB, name string) int {
	t.Helper()
	for i := range b.Elements {
		if b.Elements[i].Name == name {
			return i
		}
	}
	t.Fatalf("no element %s", name)
	return -1
}

// probe reads v:a, v:a:b or i:R1.
func (b *builder) probe(t testing.TB, text string) network.Probe {
	t.Helper()
	parts := strings.Split(text, ":")
	if parts[0] == "i" {
		p := network.Probe{Quantity: network.ElementFlow, Element: b.index(t, parts[1])}
		if k := b.Elements[p.Element].Kind; k == network.OpAmp || k == network.Transformer {
			p.Quantity = network.TerminalCurrent
			if len(parts) > 2 {
				p.Winding = 1
			}
		}
		return p
	}
	p := network.Probe{Quantity: network.NodePair, Plus: b.node(parts[1])}
	if len(parts) > 2 {
		p.Minus = b.node(parts[2])
	}
	return p
}

func build(t testing.TB, lines ...string) *builder {
	t.Helper()
	b := &builder{nodes: map[string]int{"0": 0}}
	b.Nodes = 1
	for _, line := range lines {
		w := strings.Fields(line)
		e := network.Element{Name: w[0]}
		kind := strings.TrimRight(w[0], "0123456789")
		two := func() { e.From, e.To = b.node(w[1]), b.node(w[2]) }
		switch kind {
		case "R", "L", "C":
			two()
			e.Kind = map[string]network.Kind{"R": network.Resistor, "L": network.Inductor, "C": network.Capacitor}[kind]
			e.Value = rat(t, w[3])
		case "V":
			two()
			e.Kind = network.VoltageSource
		case "I":
			two()
			e.Kind = network.CurrentSource
		case "S":
			two()
			e.Kind = network.Short
		case "U":
			e.Kind = network.OpAmp
			e.Plus, e.Minus, e.Output = b.node(w[1]), b.node(w[2]), b.node(w[3])
			if len(w) > 4 {
				x := rat(t, w[4])
				e.GainBandwidth = &x
			}
		case "T":
			e.Kind = network.Transformer
			e.Windings = []network.Winding{
				{Plus: b.node(w[1]), Minus: b.node(w[2]), Turns: rat(t, w[5])},
				{Plus: b.node(w[3]), Minus: b.node(w[4]), Turns: rat(t, w[6])},
			}
		case "K", "M":
			e.Kind, e.Mutual = network.Coupling, kind == "M"
			e.Coils = [2]int{b.index(t, w[1]), b.index(t, w[2])}
			e.Value = rat(t, w[3])
		case "E", "G": // voltage or current: gain probe {gain probe}
			two()
			e.Kind = map[string]network.Kind{"E": network.DependentVoltage, "G": network.DependentCurrent}[kind]
			for k := 3; k+1 < len(w); k += 2 {
				e.Controls = append(e.Controls, network.Control{
					Numerator: []number.Exact{rat(t, w[k])}, Of: []network.Probe{b.probe(t, w[k+1])},
				})
			}
		case "Z":
			two()
			e.Kind, e.Numerator = network.Immittance, []number.Exact{rat(t, w[3]), rat(t, w[4])}
		default:
			t.Fatalf("%q is no element", line)
		}
		b.Elements = append(b.Elements, e)
	}
	return b
}

// question is what a test asks: an output and the drive that causes it.
type question struct {
	output network.Probe
	by     Drive
}

// ask reads "v:out / V1" or "z:a:b".
func (b *builder) ask(t testing.TB, text string) question {
	t.Helper()
	if rest, isZ := strings.CutPrefix(text, "z:"); isZ {
		p := b.probe(t, "v:"+rest)
		return question{p, Drive{-1, p.Plus, p.Minus}}
	}
	out, by, _ := strings.Cut(text, " / ")
	return question{b.probe(t, out), Drive{Element: b.index(t, by)}}
}

// ratio answers a question by the exact polynomials of the network package.
func (b *builder) ratio(q question) (exact.Ratio, error) {
	sys, problems := network.Assemble(&b.Network)
	if sys == nil {
		return exact.Ratio{}, fmt.Errorf("%v", problems)
	}
	var col network.Column
	var problem *network.Problem
	if q.by.Element < 0 {
		col, problem = sys.InjectColumn(q.by.Plus, q.by.Minus)
	} else {
		col, problem = sys.InputColumn(q.by.Element)
	}
	if problem != nil {
		return exact.Ratio{}, fmt.Errorf("%v", problem)
	}
	var out network.Output
	switch p := q.output; p.Quantity {
	case network.NodePair:
		out, problem = sys.NodeVoltage(p.Plus, p.Minus)
	case network.ElementFlow:
		out, problem = sys.ElementCurrent(p.Element)
	default:
		out, problem = sys.TerminalCurrent(p.Element, p.Winding)
	}
	if problem != nil {
		return exact.Ratio{}, fmt.Errorf("%v", problem)
	}
	h, err := sys.Responses(context.Background(), []network.Output{out}, []network.Column{col})
	if err != nil {
		return exact.Ratio{}, err
	}
	return h[0][0], nil
}

// formula answers a question in symbols, "" when there is no formula.
func (b *builder) formula(t testing.TB, q question) (string, *Space, Function) {
	t.Helper()
	r, err := b.ratio(q)
	if err != nil {
		t.Fatal(err)
	}
	sp := NewSpace(context.Background())
	f, ok := sp.Transfer(&b.Network, []network.Probe{q.output}, q.by)
	if !ok {
		return "", sp, f
	}
	text, _ := sp.Formula(f, r)
	return text, sp, f
}
