package network

import "portlight/dialect/number"

// values reports values that an element cannot have. Those marked Singular
// keep the equations from being written; the others (a resistance below zero)
// do not.
func (f *frame) values() []Problem {
	var out []Problem
	for i := range f.Elements {
		if detail, fatal := f.badValue(&f.Elements[i]); detail != "" {
			out = append(out, Problem{Kind: BadValue, Elements: []int{i}, Singular: fatal, Detail: detail})
		}
	}
	return out
}

// badValue says what is wrong with an element's values and whether no
// equation can be written with them.
func (f *frame) badValue(e *Element) (detail string, fatal bool) {
	switch e.Kind {
	case Resistor, Inductor, Capacitor:
		s, decided := e.Value.Sign()
		if s <= 0 || !decided {
			return "not positive", e.Kind == Resistor && e.Value.Rat().Sign() == 0
		}
	case Immittance:
		if len(e.Denominator) > 0 && order(e.Denominator) < 0 {
			return "the denominator is zero", true
		}
	case DependentVoltage, DependentCurrent:
		for _, c := range e.Controls {
			if len(c.Denominator) > 0 && order(c.Denominator) < 0 {
				return "the denominator is zero", true
			}
		}
	case OpAmp:
		for _, x := range []*number.Exact{e.GainBandwidth, e.DCGain} {
			if x == nil {
				continue
			}
			if s, decided := x.Sign(); s <= 0 || !decided {
				return "not positive", x.Rat().Sign() == 0
			}
		}
	case Transformer:
		for _, w := range e.Windings {
			if s, decided := w.Turns.Sign(); s == 0 || !decided {
				return "a winding without turns", true
			}
		}
	case Coupling:
		product := f.coilProduct(e)
		if s, decided := product.Sign(); !e.Mutual && (s < 0 || !decided) {
			return "coils of opposite signs", true
		}
	}
	return "", false
}

// coilProduct is the product of a coupling's two inductances.
func (f *frame) coilProduct(e *Element) number.Exact {
	return f.Elements[e.Coils[0]].Value.Mul(f.Elements[e.Coils[1]].Value)
}
