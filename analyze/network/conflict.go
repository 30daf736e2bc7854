package network

import "math/big"

// Conflicts reports the capacitor loops and inductor cutsets around which
// given values do not add up to zero: at the first moment charge (or flux) is
// redistributed, with an impulse. state holds each capacitor's voltage and
// each inductor's current at 0−, source each independent source's value at 0+;
// what is missing counts as zero. Loops and cutsets that hold a dependent
// source or an op amp's output, whose values follow from the rest of the
// network, are left to the solution.
func (n *Network) Conflicts(state, source map[int]*big.Rat) []Problem {
	f := newFrame(n)
	var out []Problem
	for _, p := range append(f.capacitorLoops(), f.inductorCutsets()...) {
		sum := new(big.Rat)
		known := true
		for i, e := range p.Elements {
			var v *big.Rat
			switch f.Elements[e].Kind {
			case Capacitor, Inductor:
				v = state[e]
			case VoltageSource, CurrentSource:
				v = source[e]
			case Short:
			default:
				known = false
			}
			switch {
			case v == nil:
			case p.Signs[i] > 0:
				sum.Add(sum, v)
			default:
				sum.Sub(sum, v)
			}
		}
		if known && sum.Sign() != 0 {
			p.Kind, p.Mismatch = InitialConflict, sum
			out = append(out, p)
		}
	}
	return out
}
