package analyze

import "portlight/dialect"

// plainlyPassive says that the network consists of resistors, inductors and
// capacitors (whose values are positive), wires, switches and independent
// sources alone. Of such a network two things hold without arithmetic. At a
// real s > 0 every branch is a positive resistance, so the equations have one
// solution unless voltage sources form a loop or current sources a cutset,
// which the inspection of the structure reports. And the stored energy never
// grows without a source, so no natural frequency lies in the right half-plane
// (Desoer and Kuh, Basic Circuit Theory, 1969, chapter 19; from memory).
func (a *Analysis) plainlyPassive() bool {
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		switch p.Kind {
		case dialect.Resistor, dialect.Inductor, dialect.Capacitor, dialect.Wire, dialect.Switch:
		case dialect.VoltageSource, dialect.CurrentSource:
			if p.Dependent != nil {
				return false
			}
		default:
			return false
		}
	}
	return true
}
