package float

import (
	"math"

	"portlight/analyze/network"
)

// shortest is a time in which nothing in the network moves: a small part of the
// quickest time that two values in the equations can make, C/G, C·R, L·G, L/R,
// √(LC) or an inner state's own, divided by the largest gain.
func (s *Solver) shortest() float64 {
	capacitance, inductance, inner := math.Inf(1), math.Inf(1), math.Inf(1)
	for k, m := range s.system.Memories() {
		switch s.system.Network().Elements[m.Element].Kind {
		case network.Capacitor:
			capacitance = min(capacitance, s.weights[k])
		case network.Inductor:
			inductance = min(inductance, s.weights[k])
		default:
			for _, v := range s.states[k].value {
				inner = min(inner, math.Abs(v))
			}
		}
	}
	least, most := 1.0, 1.0 // conductances, and resistances the other way round
	gain := 1.0
	for j := range s.m.n {
		for k := s.m.start[j]; k < s.m.start[j+1]; k++ {
			g := math.Abs(s.m.g[k].hi)
			switch row, col := s.kind[s.m.row[k]], s.kind[j]; {
			case g == 0:
			case row != col:
				gain = max(gain, g)
			case row == 0:
				least, most = min(least, g), max(most, g)
			default:
				least, most = min(least, 1/g), max(most, 1/g)
			}
		}
	}
	quickest := min(capacitance/most, inductance*least, inner/most, inner*least)
	if lc := math.Sqrt(inductance * capacitance); lc < quickest { // neither is infinite
		quickest = lc
	}
	if math.IsInf(quickest, 1) {
		return 1
	}
	return 1e-3 * quickest / gain
}
