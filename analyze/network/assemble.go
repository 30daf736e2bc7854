package network

import (
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// Memory is one value that the network carries across a moment: a capacitor's
// voltage or an inductor's current (Index 0), or an inner state of an op amp,
// an immittance or a dependent source. It stays comparable between networks
// that differ by the positions of switches.
type Memory struct {
	Element, Index int
}

// Owner tells what an equation or an unknown belongs to: the balance of
// currents at Node and its voltage, or an equation and a current (or inner
// quantity) of Element. The other one is -1.
type Owner struct {
	Node, Element int
}

// System is the equations of a network: the pencil G + s·C, its right-hand
// sides and its outputs. It is immutable and safe for concurrent use.
type System struct {
	network  *Network // with elements at fault taken out
	frame    *frame
	pencil   *exact.Pencil
	owners   []Owner
	node     []int // unknown of each node's voltage, -1 for references and unused nodes
	current  []int // unknown of each element's (first) current, -1 for none
	memories []memory
	first    []int                // first memory of each element, -1 for none
	direct   map[int]exact.Vector // currents of dependent sources without an unknown
	standIns bool

	preparing chan struct{} // holds one token while prepared is looked at
	prepared  *exact.Prepared
}

// memory is a Memory in the equations: s·form·row for every row in rows, so
// that its value at 0− enters the right-hand side as rows.
type memory struct {
	Memory
	form exact.Vector // over the unknowns
	rows exact.Vector // over the equations
}

// Assemble writes the equations of the network. Where they cannot be written,
// because an element refers to what is not there, has an impossible value,
// senses a voltage between islands or needs a reference there is none of, the
// system is nil and the problems say why. That the equations have a solution
// is not checked; see System.Diagnose.
func Assemble(n *Network) (*System, []Problem) {
	f := newFrame(n)
	problems := append([]Problem(nil), f.bad...)
	for _, p := range f.values() {
		if p.Singular {
			problems = append(problems, p)
		}
	}
	if f.Ground < 0 {
		problems = append(problems, f.ground()...)
	}
	problems = append(problems, f.across()...)
	if len(problems) > 0 {
		return nil, problems
	}
	a := &assembler{System: &System{network: f.Network, frame: f, preparing: make(chan struct{}, 1)}, sensed: f.sensed()}
	a.number()
	a.inductances = f.inductances(a.rat)
	for i := range f.Elements {
		a.element(i)
	}
	a.close()
	return a.System, nil
}

// Network returns the network the system was assembled from.
func (s *System) Network() *Network { return s.network }

// Pencil returns the pencil; it must not be changed.
func (s *System) Pencil() *exact.Pencil { return s.pencil }

// Size returns the number of unknowns.
func (s *System) Size() int { return len(s.owners) }

// Owner tells what unknown i and equation i belong to.
func (s *System) Owner(i int) Owner { return s.owners[i] }

// Exact tells whether every value in the equations is the very value meant;
// otherwise stand-ins for irrational values are among them.
func (s *System) Exact() bool { return !s.standIns }

// Memories lists everything the network carries across a moment. Indices into
// the list are what StateColumn and Output.State use.
func (s *System) Memories() []Memory {
	out := make([]Memory, len(s.memories))
	for i := range s.memories {
		out[i] = s.memories[i].Memory
	}
	return out
}

// MemoryIndex returns the index of m in Memories, -1 when it is not there.
func (s *System) MemoryIndex(m Memory) int {
	if m.Element < 0 || m.Element >= len(s.first) || s.first[m.Element] < 0 || m.Index < 0 {
		return -1
	}
	i := s.first[m.Element] + m.Index
	if i >= len(s.memories) || s.memories[i].Memory != m {
		return -1
	}
	return i
}

// Island returns the number of the island a node lies in; the reference's is 0
// where there is one.
func (s *System) Island(node int) int { return s.frame.island[node] }

// IslandNodes lists the nodes of the island a node lies in.
func (s *System) IslandNodes(node int) []int {
	var out []int
	for v, i := range s.frame.island {
		if i == s.frame.island[node] {
			out = append(out, v)
		}
	}
	return out
}

// assembler is a System in the making.
type assembler struct {
	*System
	sensed      []bool
	inductances inductances
	static      []entry // of G
}

type entry struct {
	row, col int
	value    *big.Rat
}

// rat takes a value into the equations.
func (a *assembler) rat(x number.Exact) *big.Rat {
	if !x.IsExact() {
		a.standIns = true
	}
	return x.Rat()
}

// number gives the nodes their unknowns: every wired node but one of each
// island. A node that is only sensed is alone in its island and is its own
// reference.
func (a *assembler) number() {
	f := a.frame
	a.node = make([]int, f.Nodes)
	for v := range a.node {
		a.node[v] = -1
		if v != f.roots[f.island[v]] {
			a.node[v] = a.unknown(Owner{v, -1})
		}
	}
	a.current = make([]int, len(f.Elements))
	a.first = make([]int, len(f.Elements))
	for i := range a.current {
		a.current[i], a.first[i] = -1, -1
	}
	// Coupled coils refer to each other's currents, so these come first.
	for i := range f.Elements {
		if f.Elements[i].Kind == Inductor || a.sensed[i] || f.Elements[i].Kind == Transformer {
			a.currentOf(i)
		}
	}
}

// unknown makes an unknown and an equation of the same number.
func (a *assembler) unknown(o Owner) int {
	a.owners = append(a.owners, o)
	return len(a.owners) - 1
}

// currentOf returns the unknown current of element i, made on first use; a
// transformer has one for each winding in a row.
func (a *assembler) currentOf(i int) int {
	if a.current[i] < 0 {
		a.current[i] = a.unknown(Owner{-1, i})
		if e := &a.network.Elements[i]; e.Kind == Transformer {
			for range e.Windings[1:] {
				a.unknown(Owner{-1, i})
			}
		}
	}
	return a.current[i]
}

// close builds the pencil, the memories' part included.
func (a *assembler) close() {
	p := exact.NewPencil(len(a.owners))
	for _, t := range a.static {
		p.Add(t.row, t.col, t.value, nil)
	}
	v := new(big.Rat)
	for _, m := range a.memories {
		for _, r := range m.rows {
			for _, c := range m.form {
				p.Add(r.Index, c.Index, nil, v.Mul(r.Value, c.Value))
			}
		}
	}
	a.pencil = p
}
