package network

import (
	"fmt"
	"math/big"
	"strings"
)

// ProblemKind is what a Problem is about.
type ProblemKind int

// The kinds of problems. The members of Problem that each fills in stand
// beside it; Nodes and Elements are always set where there are any.
const (
	// NoProblem is the zero value.
	NoProblem ProblemKind = iota
	// BadReference: an element refers to a node or element that is not there
	// or not of the kind it needs. Elements: the element, then what it refers to.
	BadReference
	// BadValue: a value with which the element cannot be (a resistance, turns
	// or denominator of zero, or one whose bound does not exclude zero).
	BadValue
	// NoGround: op amps, whose output currents return to the reference, in a
	// network without one. Elements: the op amps.
	NoGround
	// GroundUnused: nothing is wired to the reference node.
	GroundUnused
	// FloatingNode: a single connection ends at the node and no port.
	FloatingNode
	// Island: nodes that no branch joins to the reference. Coupled when
	// transformers, couplings or dependent sources reach it; Through names
	// these and any open switch at its border.
	Island
	// AcrossIslands: an element senses a voltage between nodes of different
	// islands, which is not defined. Nodes: the pair.
	AcrossIslands
	// SelfLoop: both ends of an element at one node.
	SelfLoop
	// VoltageLoop: a loop of branches with prescribed voltages: sources,
	// shorts, and op amp outputs, which return to the reference.
	VoltageLoop
	// CurrentCutset: nodes fed by current sources (and open switches) only.
	CurrentCutset
	// CapacitorLoop: a loop of capacitors and branches with prescribed
	// voltages: the order is reduced, the initial values are tied.
	CapacitorLoop
	// InductorCutset: nodes reached through inductors and current sources only.
	InductorCutset
	// NoDCPath: nodes without a path for direct current to the reference.
	// Elements: the capacitors and current sources around them.
	NoDCPath
	// OpAmpNoFeedback: nothing leads from an ideal op amp's output to its inputs.
	OpAmpNoFeedback
	// CouplingRange: |k| > 1, or |M| > √(La·Lb).
	CouplingRange
	// InductanceMatrix: the inductances of a set of coupled coils are not
	// positive semidefinite. Elements: the couplings, then the coils.
	InductanceMatrix
	// SingularEquations: the equations have no unique solution for a reason
	// that no structure shows. Elements and Nodes own the equations at fault.
	SingularEquations
	// NoSteadyState: constant (or sinusoidal) sources let something grow
	// without bound. Elements: the sources and memories; Omega: the frequency.
	NoSteadyState
	// IndeterminateState: more than one steady state. Elements: the memories
	// that are not determined.
	IndeterminateState
	// ResonantSource: a source's frequency is a natural frequency of the
	// undamped network. Elements: the sources and the memories; Omega.
	ResonantSource
	// InitialNotFree: an initial value given where the steady state already
	// fixes another.
	InitialNotFree
	// InitialConflict: initial values that violate Kirchhoff's law around a
	// capacitor loop (Mismatch in volts) or at an inductor cutset (in amperes).
	InitialConflict
)

var problemNames = [...]string{
	"no problem", "bad reference", "bad value", "no ground", "ground unused",
	"floating node", "island", "across islands", "self loop", "voltage loop",
	"current cutset", "capacitor loop", "inductor cutset", "no DC path",
	"op amp without feedback", "coupling range", "inductance matrix",
	"singular equations", "no steady state", "indeterminate state",
	"resonant source", "initial value not free", "initial conflict",
}

// String returns the kind in words.
func (k ProblemKind) String() string {
	if k < 0 || int(k) >= len(problemNames) {
		return "unknown problem"
	}
	return problemNames[k]
}

// Problem is something wrong with a network, or worth knowing, as data: all
// members are named, none of it is prose.
type Problem struct {
	Kind     ProblemKind
	Elements []int // members, in the order of a loop where there is one
	Signs    []int // loops and cutsets: +1 where the member's reference direction agrees with the first's
	Nodes    []int // nodes concerned, in ascending order except where a kind says otherwise
	// Singular says that the equations have no unique solution because of this.
	Singular bool
	// Coupled and Through belong to Island.
	Coupled bool
	Through []int
	// Omega is the frequency of a NoSteadyState or ResonantSource, in rad/s,
	// nil for direct current.
	Omega *big.Rat
	// Mismatch is the violation of an InitialConflict: the signed sum around
	// the loop or out of the cutset, with the first member positive.
	Mismatch *big.Rat
	// WithinBound says that stand-ins for irrational values decided this, so
	// that it holds to within their bounds only.
	WithinBound bool
	// Detail is the plain-word cause of a BadReference or BadValue.
	Detail string
}

// String names the members by index, for messages to developers.
func (p Problem) String() string { return p.Describe(nil, nil) }

// Describe names the members; missing names are replaced by indices.
func (p Problem) Describe(n *Network, nodes []string) string {
	var b strings.Builder
	b.WriteString(p.Kind.String())
	sep := ": "
	for _, e := range p.Elements {
		name := fmt.Sprintf("element %d", e)
		if n != nil && e >= 0 && e < len(n.Elements) && n.Elements[e].Name != "" {
			name = n.Elements[e].Name
		}
		b.WriteString(sep + name)
		sep = ", "
	}
	sep = " at "
	for _, v := range p.Nodes {
		name := fmt.Sprintf("node %d", v)
		if v >= 0 && v < len(nodes) {
			name = nodes[v]
		}
		b.WriteString(sep + name)
		sep = ", "
	}
	if p.Detail != "" {
		b.WriteString(" (" + p.Detail + ")")
	}
	return b.String()
}
