package float

import (
	"fmt"
	"math/big"
	"testing"

	"portlight/analyze/network"
	"portlight/dialect/number"
)

// builder makes networks; node 0 is the reference.
type builder struct {
	network.Network
	t testing.TB
}

func build(t testing.TB) *builder { return &builder{network.Network{Nodes: 1}, t} }

func (b *builder) nodes(n int) int {
	b.Nodes += n
	return b.Nodes - n
}

func (b *builder) put(e network.Element) int {
	b.Elements = append(b.Elements, e)
	return len(b.Elements) - 1
}

func (b *builder) value(text string) number.Exact {
	x, err := number.Parse(text)
	if err != nil {
		b.t.Fatal(err)
	}
	return x
}

func (b *builder) two(kind network.Kind, from, to int, value string) int {
	e := network.Element{Kind: kind, From: from, To: to}
	if value != "" {
		e.Value = b.value(value)
	}
	return b.put(e)
}

func (b *builder) system() *network.System {
	s, problems := network.Assemble(&b.Network)
	if s == nil {
		b.t.Fatal(problems)
	}
	return s
}

func (b *builder) solver() (*Solver, *network.System) {
	sys := b.system()
	s, err := New(sys)
	if err != nil {
		b.t.Fatal(err)
	}
	return s, sys
}

// rlcLadder has sections of R and L in series and C across: 2·sections
// natural frequencies. The input is node 1.
func rlcLadder(t testing.TB, sections int) *builder {
	b := build(t)
	last := b.nodes(1)
	b.two(network.Resistor, last, 0, "1e3")
	for k := range sections {
		next := b.nodes(1)
		b.two(network.Inductor, last, next, fmt.Sprintf("%de-3", 1+k%7))
		b.two(network.Capacitor, next, 0, fmt.Sprintf("%de-9", 1+k%5))
		b.two(network.Resistor, next, 0, fmt.Sprintf("%de3", 100+k%11))
		last = next
	}
	b.two(network.Resistor, last, 0, "1e3")
	return b
}

// rcMesh is a square of side·side nodes, 1 kΩ between neighbours, 1 nF at
// every node and 10 kΩ to ground at the last.
func rcMesh(t testing.TB, side int) *builder {
	b := build(t)
	first := b.nodes(side * side)
	for i := range side {
		for j := range side {
			v := first + i*side + j
			if j+1 < side {
				b.two(network.Resistor, v, v+1, "1e3")
			}
			if i+1 < side {
				b.two(network.Resistor, v, v+side, "1e3")
			}
			b.two(network.Capacitor, v, 0, "1e-9")
		}
	}
	b.two(network.Resistor, first+side*side-1, 0, "1e4")
	return b
}

// drivingPoint is the impedance of a node to the reference.
func drivingPoint(t testing.TB, sys *network.System, node int) (network.Output, network.Column) {
	return transferImpedance(t, sys, node, node)
}

func transferImpedance(t testing.TB, sys *network.System, to, from int) (network.Output, network.Column) {
	o, p := sys.NodeVoltage(to, 0)
	if p != nil {
		t.Fatal(p)
	}
	c, p := sys.InjectColumn(from, 0)
	if p != nil {
		t.Fatal(p)
	}
	return o, c
}

// hertz is 2π·f.
func hertz(t testing.TB, text string) *big.Rat {
	f, err := number.Parse(text)
	if err != nil {
		t.Fatal(err)
	}
	return f.Mul(number.Pi()).Mul(number.FromInt(2)).Rat()
}
