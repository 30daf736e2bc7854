package network

import (
	"math/big"

	"portlight/analyze/exact"
)

// element writes the equations of one element.
func (a *assembler) element(i int) {
	e := &a.network.Elements[i]
	switch e.Kind {
	case Resistor:
		a.resistor(i, e)
	case Capacitor:
		a.capacitor(i, e)
	case Inductor:
		a.inductor(i, e)
	case Immittance:
		a.immittance(i, e)
	case VoltageSource, Short:
		a.prescribed(i, e)
	case CurrentSource, Open:
		// i = u, or i = 0 through an open switch, where i is sensed.
		if a.sensed[i] {
			c := a.currentOf(i)
			a.flow(e.From, e.To, c)
			a.add(c, c, one)
		}
	case DependentVoltage:
		a.flow(e.From, e.To, a.currentOf(i))
		a.dependent(i, e, a.currentOf(i), a.across(e.From, e.To))
	case DependentCurrent:
		a.dependentCurrent(i, e)
	case OpAmp:
		a.opAmp(i, e)
	case Transformer:
		a.transformer(i, e)
	}
}

// resistor: i = v/R in the balances, or v − R·i = 0 where i is sensed.
func (a *assembler) resistor(i int, e *Element) {
	r, v := a.rat(e.Value), a.across(e.From, e.To)
	if !a.sensed[i] {
		a.leave(e.From, e.To, plus(nil, v, new(big.Rat).Inv(r)))
		return
	}
	c := a.currentOf(i)
	a.flow(e.From, e.To, c)
	a.addForm(c, v, one)
	a.add(c, c, new(big.Rat).Neg(r))
}

// capacitor: i = s·C·v in the balances, or i − s·C·v = 0 where i is sensed.
func (a *assembler) capacitor(i int, e *Element) {
	value := a.rat(e.Value)
	negative := new(big.Rat).Neg(value)
	m := a.memorise(i, a.across(e.From, e.To))
	if !a.sensed[i] {
		m.term(a.node[e.From], value)
		m.term(a.node[e.To], negative)
		m.rows = combine(m.rows)
		return
	}
	c := a.currentOf(i)
	a.flow(e.From, e.To, c)
	a.add(c, c, one)
	m.term(c, negative)
}

// inductor: v − s·L·i − Σ s·M·i' = 0; the memory is the current.
func (a *assembler) inductor(i int, e *Element) {
	c := a.currentOf(i)
	a.flow(e.From, e.To, c)
	a.addForm(c, a.across(e.From, e.To), one)
	m := a.memorise(i, exact.Unit(c))
	m.term(c, new(big.Rat).Neg(a.inductances.self[i]))
	for _, k := range a.inductances.mutual[i] {
		m.term(a.current[k.coil], new(big.Rat).Neg(k.value))
	}
	m.rows = combine(m.rows)
}

// immittance: D·v − N·i = 0 for an impedance N/D, N·v − D·i = 0 for an
// admittance.
func (a *assembler) immittance(i int, e *Element) {
	c := a.currentOf(i)
	a.flow(e.From, e.To, c)
	num, den := a.fraction(e.Numerator, e.Denominator)
	ofVoltage, ofCurrent := den, num
	if e.Admittance {
		ofVoltage, ofCurrent = num, den
	}
	v := a.across(e.From, e.To)
	f := make([]exact.Vector, max(ofVoltage.Degree(), ofCurrent.Degree())+1)
	for k := range f {
		f[k] = plus(plus(nil, v, ofVoltage.Coeff(k)), exact.Unit(c), new(big.Rat).Neg(ofCurrent.Coeff(k)))
	}
	a.polynomial(c, i, f)
}

// prescribed: v = u, or v = 0.
func (a *assembler) prescribed(i int, e *Element) {
	c := a.currentOf(i)
	a.flow(e.From, e.To, c)
	a.addForm(c, a.across(e.From, e.To), one)
}

// dependent puts y = Σ N/D·q into an equation, where y is a form: with the
// least common denominator D and numerators N', Σ sⁱ·(dᵢ·y − Σ n'ᵢ·q) = 0.
func (a *assembler) dependent(i int, e *Element, row int, y exact.Vector) {
	f := a.dependence(e)
	for k := range f.denominator.Degree() + 1 {
		f.forms[k] = plus(f.forms[k], y, f.denominator.Coeff(k))
	}
	a.polynomial(row, i, f.forms)
}

// dependence is the controlling part of a dependent source: Σ sⁱ·forms[i] is
// −Σ N'·q for the least common denominator.
type dependence struct {
	denominator exact.Poly
	forms       []exact.Vector // at least as many as the denominator has coefficients
}

func (a *assembler) dependence(e *Element) dependence {
	nums := make([]exact.Poly, len(e.Controls))
	dens := make([]exact.Poly, len(e.Controls))
	common := exact.PolyFromInt64s(1)
	for k, c := range e.Controls {
		nums[k], dens[k] = a.fraction(c.Numerator, c.Denominator)
		common = common.Mul(dens[k].Quo(exact.GCD(common, dens[k])))
	}
	d := dependence{denominator: common, forms: make([]exact.Vector, common.Degree()+1)}
	for k, c := range e.Controls {
		num := nums[k].Mul(common.Quo(dens[k]))
		q := a.probed(c.Of)
		for p := range num.Degree() + 1 {
			if p == len(d.forms) {
				d.forms = append(d.forms, nil)
			}
			d.forms[p] = plus(d.forms[p], q, num.Coeff(p).Neg(num.Coeff(p)))
		}
	}
	return d
}

// probed is a sum of sensed quantities as a form.
func (a *assembler) probed(probes []Probe) exact.Vector {
	var out exact.Vector
	for _, p := range probes {
		var q exact.Vector
		switch {
		case p.Quantity == NodePair:
			q = a.across(p.Plus, p.Minus)
		case p.Quantity == TerminalCurrent:
			q = exact.Unit(a.terminal(p.Element, p.Winding))
		default:
			q = exact.Unit(a.currentOf(p.Element))
		}
		factor := one
		if p.Negative {
			factor = minusOne
		}
		out = plus(out, q, factor)
	}
	return out
}

// dependentCurrent goes straight into the balances where its coefficients are
// constants, and has an unknown current otherwise.
func (a *assembler) dependentCurrent(i int, e *Element) {
	d := a.dependence(e)
	if !a.sensed[i] && len(d.forms) == 1 {
		scale := d.denominator.Coeff(0)
		y := combine(plus(nil, d.forms[0], scale.Neg(scale.Inv(scale))))
		a.leave(e.From, e.To, y)
		if a.direct == nil {
			a.direct = map[int]exact.Vector{}
		}
		a.direct[i] = y
		return
	}
	c := a.currentOf(i)
	a.flow(e.From, e.To, c)
	a.dependent(i, e, c, exact.Unit(c))
}

// opAmp: v(plus) = v(minus), or v(output)/A − (v(plus) − v(minus)) = 0 with
// 1/A = 1/A₀ + s/GBW; the memory of the latter is the output's voltage.
func (a *assembler) opAmp(i int, e *Element) {
	c := a.currentOf(i)
	out := a.across(e.Output, a.network.Ground)
	a.flow(e.Output, a.network.Ground, c)
	in := a.across(e.Plus, e.Minus)
	a.addForm(c, in, minusOne)
	if e.DCGain != nil {
		a.addForm(c, out, new(big.Rat).Inv(a.rat(*e.DCGain)))
	}
	if e.GainBandwidth != nil {
		a.memorise(i, out).term(c, new(big.Rat).Inv(a.rat(*e.GainBandwidth)))
	}
}

// transformer: Σ N·i = 0 and N₁·v − N·v₁ = 0 for every further winding.
func (a *assembler) transformer(i int, e *Element) {
	c := a.currentOf(i)
	first := a.across(e.Windings[0].Plus, e.Windings[0].Minus)
	turns := a.rat(e.Windings[0].Turns)
	for k, w := range e.Windings {
		n := a.rat(w.Turns)
		a.flow(w.Plus, w.Minus, c+k)
		a.add(c, c+k, n)
		if k > 0 {
			a.addForm(c+k, a.across(w.Plus, w.Minus), turns)
			a.addForm(c+k, first, new(big.Rat).Neg(n))
		}
	}
}

// terminal returns the unknown current into a winding, or into an op amp's
// output.
func (a *assembler) terminal(element, winding int) int {
	if a.network.Elements[element].Kind == OpAmp {
		winding = 0
	}
	return a.currentOf(element) + winding
}
