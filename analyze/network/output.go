package network

import (
	"maps"
	"math/big"

	"portlight/analyze/exact"
)

// Output is a quantity of the network as a functional of its unknowns,
//
//	y = (G + s·C)ᵀ X + Σ Input[j]·u[j] + Σ State[k]·x[k](0−)
//
// with the independent sources by element and the memories by their index in
// System.Memories. Outputs are values: operations return new ones.
type Output struct {
	G, C  exact.Vector
	Input map[int]*big.Rat
	State map[int]*big.Rat
}

// Add returns o + p.
func (o Output) Add(p Output) Output { return o.plus(p, one) }

// Sub returns o − p.
func (o Output) Sub(p Output) Output { return o.plus(p, minusOne) }

// Scale returns r·o.
func (o Output) Scale(r *big.Rat) Output { return Output{}.plus(o, r) }

func (o Output) plus(p Output, factor *big.Rat) Output {
	return Output{
		G:     combine(plus(o.G[:len(o.G):len(o.G)], p.G, factor)),
		C:     combine(plus(o.C[:len(o.C):len(o.C)], p.C, factor)),
		Input: plusMap(o.Input, p.Input, factor),
		State: plusMap(o.State, p.State, factor),
	}
}

// plusMap returns a + factor·b.
func plusMap(a, b map[int]*big.Rat, factor *big.Rat) map[int]*big.Rat {
	if len(b) == 0 {
		return a
	}
	out := maps.Clone(a)
	if out == nil {
		out = map[int]*big.Rat{}
	}
	for k, v := range b {
		x := new(big.Rat).Mul(factor, v)
		if old := out[k]; old != nil {
			x.Add(x, old)
		}
		if x.Sign() == 0 {
			delete(out, k)
		} else {
			out[k] = x
		}
	}
	return out
}

// NodeVoltage returns the voltage of node a minus that of node b. Between
// islands there is none: the problem then names the two nodes.
func (s *System) NodeVoltage(a, b int) (Output, *Problem) {
	if s.frame.island[a] != s.frame.island[b] {
		return Output{}, &Problem{Kind: AcrossIslands, Nodes: []int{a, b}}
	}
	return Output{G: s.across(a, b)}, nil
}

// ElementVoltage returns the voltage of a two-terminal element, of an op amp's
// output to the reference, or of a transformer's first winding. The problem is
// that of NodeVoltage, for an open switch between islands; it is a BadReference
// for an element without a voltage.
func (s *System) ElementVoltage(element int) (Output, *Problem) {
	e := &s.network.Elements[element]
	switch {
	case e.Kind.twoTerminal() || e.Kind == Open:
		return s.NodeVoltage(e.From, e.To)
	case e.Kind == OpAmp:
		return s.NodeVoltage(e.Output, s.network.Ground)
	case e.Kind == Transformer:
		return s.WindingVoltage(element, 0)
	}
	return Output{}, noQuantity(element)
}

// WindingVoltage returns the voltage of a transformer's winding.
func (s *System) WindingVoltage(element, winding int) (Output, *Problem) {
	e := &s.network.Elements[element]
	if e.Kind != Transformer || winding < 0 || winding >= len(e.Windings) {
		return Output{}, noQuantity(element)
	}
	return s.NodeVoltage(e.Windings[winding].Plus, e.Windings[winding].Minus)
}

func noQuantity(element int) *Problem {
	return &Problem{Kind: BadReference, Elements: []int{element}, Detail: "the element has no such quantity"}
}

// ElementCurrent returns the current of a two-terminal element from From to
// To, the current into an op amp's output, or into a transformer's first
// winding. It is a BadReference for an element without a current.
func (s *System) ElementCurrent(element int) (Output, *Problem) {
	e := &s.network.Elements[element]
	if i := s.current[element]; i >= 0 && e.Kind != Coupling {
		return Output{G: exact.Unit(i)}, nil
	}
	switch e.Kind {
	case Open:
		return Output{}, nil
	case Resistor:
		return Output{G: plus(nil, s.across(e.From, e.To), new(big.Rat).Inv(e.Value.Rat()))}, nil
	case Capacitor:
		value := e.Value.Rat()
		return Output{
			C:     plus(nil, s.across(e.From, e.To), value),
			State: map[int]*big.Rat{s.first[element]: new(big.Rat).Neg(value)},
		}, nil
	case CurrentSource:
		return Output{Input: map[int]*big.Rat{element: one}}, nil
	case DependentCurrent:
		// Its coefficients are constants, or it would have an unknown current.
		return Output{G: s.direct[element]}, nil
	}
	return Output{}, noQuantity(element)
}

// TerminalCurrent returns the current into the Plus end of a transformer's
// winding, or into an op amp's output.
func (s *System) TerminalCurrent(element, winding int) (Output, *Problem) {
	e := &s.network.Elements[element]
	switch {
	case e.Kind == OpAmp:
		return Output{G: exact.Unit(s.current[element])}, nil
	case e.Kind == Transformer && winding >= 0 && winding < len(e.Windings):
		return Output{G: exact.Unit(s.current[element] + winding)}, nil
	}
	return Output{}, noQuantity(element)
}

// MemoryValue returns the quantity that memory k carries.
func (s *System) MemoryValue(k int) Output { return Output{G: s.memories[k].form} }

// Column is a right-hand side: what drives the network. Input and State say
// which amounts of independent sources and initial values it stands for, so
// that outputs which hold these directly are right. Columns are values.
type Column struct {
	RHS   exact.Vector
	Input map[int]*big.Rat
	State map[int]*big.Rat
}

// Add returns c + d.
func (c Column) Add(d Column) Column { return c.plus(d, one) }

// Scale returns r·c.
func (c Column) Scale(r *big.Rat) Column { return Column{}.plus(c, r) }

func (c Column) plus(d Column, factor *big.Rat) Column {
	return Column{
		RHS:   combine(plus(c.RHS[:len(c.RHS):len(c.RHS)], d.RHS, factor)),
		Input: plusMap(c.Input, d.Input, factor),
		State: plusMap(c.State, d.State, factor),
	}
}

// InputColumn returns a unit value of an independent source. It is a
// BadReference for any other element.
func (s *System) InputColumn(element int) (Column, *Problem) {
	e := &s.network.Elements[element]
	col := Column{Input: map[int]*big.Rat{element: one}}
	switch {
	case e.Kind == VoltageSource || e.Kind == CurrentSource && s.current[element] >= 0:
		col.RHS = exact.Unit(s.current[element])
	case e.Kind == CurrentSource:
		col.RHS = s.across(e.To, e.From)
	default:
		return Column{}, noQuantity(element)
	}
	return col, nil
}

// StateColumn returns a unit value of memory k at 0−: C·1 V into the balances
// for a capacitor, L·1 A and the mutual terms for an inductor.
func (s *System) StateColumn(k int) Column {
	return Column{RHS: s.memories[k].rows, State: map[int]*big.Rat{k: one}}
}

// InjectColumn returns a unit current driven from outside into node plus and
// out of node minus. Between islands no current can flow: the problem then
// names the two nodes.
func (s *System) InjectColumn(plus, minus int) (Column, *Problem) {
	if s.frame.island[plus] != s.frame.island[minus] {
		return Column{}, &Problem{Kind: AcrossIslands, Nodes: []int{plus, minus}}
	}
	return Column{RHS: s.across(plus, minus)}, nil
}
