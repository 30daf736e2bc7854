package network

import (
	"math/big"

	"portlight/dialect/number"
)

// Inductances are the inductances of coils and couplings, in H, as they stand
// in the equations: where a coupling is perfect, stand-ins for irrational
// values that keep it perfect.
type Inductances struct {
	Self   map[int]*big.Rat // by inductor
	Mutual map[int]*big.Rat // by coupling
}

// Inductances gives the inductances of all coupled coils. The network must be
// one that Assemble accepts.
func (n *Network) Inductances() Inductances {
	f := newFrame(n)
	l := f.inductances(func(x number.Exact) *big.Rat { return x.Rat() })
	out := Inductances{map[int]*big.Rat{}, map[int]*big.Rat{}}
	for _, g := range f.coilGroups() {
		entered := map[int]int{} // of each coil's mutual inductances, in the order of the couplings
		for _, c := range g.coils {
			out.Self[c] = l.self[c]
		}
		for _, i := range g.couplings {
			coils := f.Elements[i].Coils
			if k := entered[coils[0]]; k < len(l.mutual[coils[0]]) {
				out.Mutual[i] = l.mutual[coils[0]][k].value
			}
			entered[coils[0]]++
			entered[coils[1]]++
		}
	}
	return out
}

// Branches calls f for every pair of nodes that an element lets a current flow
// between, an op amp's output and the reference among them.
func (n *Network) Branches(f func(from, to int)) {
	for _, b := range newFrame(n).branches {
		f(b.from, b.to)
	}
}
