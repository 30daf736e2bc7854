package dialect

import (
	"portlight/dialect/number"
)

// nominal works out the value of a resistor, inductor or capacitor, once per
// instance. asker is who needs it, for reporting a cycle.
func (b *builder) nominal(inst *instance, sym *Symbol, span Span, asker *evaluator) operand {
	m := &inst.memo[sym.index]
	if o, ok := m.known(inConstant); ok {
		return o
	}
	if m.busy {
		b.reportCycle(asker, sym, span)
		return operand{}
	}
	m.busy = true
	o := b.c.blame.around(sym, func() operand { return b.evaluateNominal(inst, sym) })
	m.busy = false
	return m.keep(inConstant, o)
}

// kindWhat says what the value of a kind is.
var kindWhat = func() (words [Wire + 1]string) {
	for k := range words {
		words[k] = "the value of " + article(Kind(k).String())
	}
	return words
}()

// kindDimension is the dimension of a kind's value.
func kindDimension(k Kind) Dimension {
	switch k {
	case Resistor, Impedance:
		return DimensionResistance
	case Admittance:
		return DimensionConductance
	case Inductor:
		return DimensionInductance
	case Capacitor:
		return DimensionCapacitance
	case VoltageSource:
		return DimensionVoltage
	case CurrentSource:
		return DimensionCurrent
	}
	return DimensionNumber
}

func (b *builder) evaluateNominal(inst *instance, sym *Symbol) operand {
	st := sym.Statement.(*PartStatement)
	switch v := st.Value.(type) {
	case *CodeValue:
		return b.codeValue(inst, v, kindDimension(sym.Kind))
	case Expr:
		e := &evaluator{b: b, inst: inst, in: inConstant, what: kindWhat[sym.Kind]}
		o := e.eval(v, 0)
		if o.ok && o.constant && o.dim == kindDimension(sym.Kind) {
			if sign, decided := o.value.Sign(); decided && sign > 0 {
				return o
			}
		}
		what := "the value of " + sym.Kind.String() + " " + sym.Name
		if sym.Kind == Resistor && o.ok && o.constant && o.dim == DimensionResistance && b.zeroResistor(e, st, &o) {
			return operand{}
		}
		if !o.ok || !e.fits(v, &o, kindDimension(sym.Kind), what) || !e.mustBeConstant(v, &o) || !e.positive(v, &o, what) {
			return operand{}
		}
		return o
	}
	return operand{} // missing: reported by the parser
}

// zeroResistor reports a resistor of 0 Ω, which is a wire.
func (b *builder) zeroResistor(e *evaluator, st *PartStatement, o *operand) bool {
	if sign, decided := o.value.Sign(); !decided || sign != 0 {
		return false
	}
	at := st.Value.Extent()
	r := e.report(at, "not-positive", "the value of a resistor must be positive, and %s is zero: an ideal connection is a wire, wire %s", e.written(at), st.Name.Text)
	if len(st.Options) == 0 && st.Tolerance == nil && st.Name.Present() {
		r.repair(e.text(), Span{st.Keyword.Span.Start, at.End}, "wire "+st.Name.Text, "write wire "+st.Name.Text)
	}
	return true
}

// codeValue reads a value in the code of IEC 60062.
func (b *builder) codeValue(inst *instance, v *CodeValue, d Dimension) operand {
	value, err := number.Parse(v.Number)
	if err != nil {
		return operand{}
	}
	if p := prefixIndex()[v.Prefix]; p != nil && p.power != 0 {
		value = value.Mul(number.FromRat(powerOfTen(p.power)))
	}
	o := constantOperand(value, d, v.Span)
	if sign, _ := value.Sign(); sign <= 0 {
		b.report(inst, v.Span, "not-positive", "the value must be positive, and %s is zero", v.Text)
		return operand{}
	}
	return o
}

// values works out the values and options of all parts.
func (b *builder) values() {
	b.dependent = make([]bool, len(b.d.Parts))
	for _, inst := range b.instances {
		for _, sym := range inst.scope.parts {
			if sym.Kind != VoltageSource && sym.Kind != CurrentSource {
				continue
			}
			i := inst.slots[sym.index]
			if b.dependent[i] = b.isDependent(inst, sym); !b.dependent[i] {
				b.sources = append(b.sources, i)
			}
		}
	}
	for _, inst := range b.instances {
		for _, sym := range inst.scope.parts {
			b.partValue(inst, sym)
		}
	}
}

func (b *builder) partValue(inst *instance, sym *Symbol) {
	st := sym.Statement.(*PartStatement)
	p := &b.d.Parts[inst.slots[sym.index]]
	if st.Value != nil {
		p.ValueText = valueText(inst.scope.unit.file, st.Value.Extent())
	}
	if st.Broken {
		b.c.fault()
	}
	switch sym.Kind {
	case Resistor, Inductor, Capacitor:
		if st.Value != nil {
			b.expect(inst, st.Value.Extent(), kindDimension(sym.Kind), kindWhat[sym.Kind])
		}
		if o := b.nominal(inst, sym, sym.Span, nil); o.ok {
			p.Value = o.value
			b.suspectPrefix(inst, p, st)
		} else {
			b.c.fault()
		}
	case Impedance, Admittance:
		b.rationalValue(inst, p, st, "the value of "+sym.Kind.String()+" "+sym.Name)
	case VoltageSource, CurrentSource:
		b.sourceValue(inst, p, st, "the value of "+sym.Kind.String()+" "+sym.Name)
	case OpAmp:
		b.opAmpValue(inst, p, st)
	case Transformer:
		b.transformerValue(inst, p, st)
	case Coupling:
		b.couplingValue(inst, p, st)
	case Switch:
		b.switchValue(inst, p, st)
	}
	b.options(inst, sym, p, st)
	b.tolerance(inst, p, st)
	b.preferred(inst, sym, p, st)
}

// options reads what follows the value.
func (b *builder) options(inst *instance, sym *Symbol, p *Part, st *PartStatement) {
	for _, o := range st.Options {
		switch o.Keyword.Text {
		case "initially":
			b.initially(inst, p, o)
		case "rated":
			b.rated(inst, p, o)
		case "gain":
			b.dcGain(inst, p, st, o)
		case "resistance":
			if p.Kind != Switch {
				continue // reported by the parser
			}
			if v, e, ok := b.constantValue(inst, o.Value, DimensionResistance, "the resistance of the closed switch"); ok &&
				e.positive(o.Value, &v, "the resistance of the closed switch") {
				p.Resistance = &v.value
			}
		}
	}
}

func (b *builder) initially(inst *instance, p *Part, o *PartOption) {
	want, what := DimensionVoltage, "the initial voltage of a capacitor"
	switch p.Kind {
	case Inductor:
		want, what = DimensionCurrent, "the initial current of an inductor"
	case Capacitor:
	default:
		return
	}
	if v, _, ok := b.constantValue(inst, o.Value, want, what); ok {
		p.Initial = &v.value
	}
}

func (b *builder) rated(inst *instance, p *Part, o *PartOption) {
	if o.Value == nil {
		return
	}
	harmless := b.c.harmless
	b.c.harmless = true // a rating is no part of the network
	defer func() { b.c.harmless = harmless }()
	what, want := "the rating of a "+p.Kind.String(), DimensionVoltage
	switch p.Kind {
	case Inductor:
		what, want = "the rating of an inductor", DimensionCurrent
	case Resistor:
		want = DimensionPower
		e := &evaluator{b: b, inst: inst, in: inConstant, what: what}
		if v := e.eval(o.Value, 0); v.ok && v.dim == DimensionVoltage {
			want = DimensionVoltage
		} else if v.ok && v.dim != DimensionPower && !v.bare {
			e.report(o.Value.Extent(), "unit-mismatch", "%s is %s, where the rating of a resistor must be a power (W) or a voltage (V)",
				e.written(o.Value.Extent()), e.describe(&v))
			return
		}
	case Capacitor:
	default:
		return
	}
	v, e, ok := b.constantValue(inst, o.Value, want, what)
	if !ok || !e.positive(o.Value, &v, what) {
		return
	}
	switch want {
	case DimensionPower:
		p.RatedPower = &v.value
	case DimensionVoltage:
		p.RatedVoltage = &v.value
	default:
		p.RatedCurrent = &v.value
	}
}

// toleranceKey is a value and its tolerance as written: equal texts have equal
// bounds.
type toleranceKey struct {
	kind             Kind
	value, tolerance string
}

// tolerance works out the bounds of a value.
func (b *builder) tolerance(inst *instance, p *Part, st *PartStatement) {
	t := st.Tolerance
	if t == nil || len(t.Bound) == 0 {
		return
	}
	switch p.Kind {
	case Resistor, Inductor, Capacitor, Coupling:
	default:
		b.report(inst, t.Span, "tolerance", "%s carries no tolerance: resistors, inductors, capacitors and couplings do", article(p.Kind.String()))
		return
	}
	if sign, _ := p.Value.Sign(); sign == 0 {
		return // no value
	}
	text := valueText(inst.scope.unit.file, t.Span)
	key := toleranceKey{p.Kind, p.ValueText, text}
	if known := b.c.tolerances[key]; known != nil && literalValue(st.Value) {
		p.Tolerance = known
		return
	}
	low, high := p.Value, p.Value
	for _, bound := range t.Bound {
		d, ok := b.deviation(inst, p, st, bound)
		if !ok {
			return
		}
		if bound.Signs != "-" {
			high = p.Value.Add(d)
		}
		if bound.Signs != "+" {
			low = p.Value.Sub(d)
		}
	}
	if order, _ := low.Cmp(high); order > 0 {
		low, high = high, low // a negative coupling
	}
	if sign, decided := low.Sign(); p.Kind != Coupling && (!decided || sign <= 0) {
		b.report(inst, t.Span, "tolerance", "with this tolerance the value can be zero or negative")
		return
	}
	p.Tolerance = &Tolerance{Low: low, High: high, Text: text}
	if literalValue(st.Value) {
		b.c.tolerances[key] = p.Tolerance
	}
}

// deviation is one side of a tolerance, in the value's own unit.
func (b *builder) deviation(inst *instance, p *Part, st *PartStatement, bound ToleranceBound) (number.Exact, bool) {
	if bound.Value == nil || !bound.Value.Number.Present() {
		return number.Exact{}, false
	}
	e := &evaluator{b: b, inst: inst, in: inConstant, what: "a tolerance"}
	o := e.eval(bound.Value, 0)
	if !o.ok {
		return number.Exact{}, false
	}
	unit := kindDimension(p.Kind)
	if p.Mutual {
		unit = DimensionInductance
	}
	relative := o.plainNumber() && o.rad == 0 && !o.bare
	if p.Kind == Coupling && !p.Mutual && o.plainNumber() && o.bare {
		return o.value.Abs(), true // a deviation of k itself
	}
	switch {
	case relative:
		return o.value.Mul(p.Value).Abs(), true
	case o.dim == unit && !o.plainNumber():
		return o.value.Abs(), true
	case o.bare:
		r := e.report(bound.Value.Span, "unit-missing", "the tolerance %s has no unit: write %s %% or an amount in %s",
			e.written(bound.Value.Span), e.written(bound.Value.Span), unit.Unit())
		r.repair(e.text(), bound.Value.Span, e.written(bound.Value.Span)+" %", "write "+e.written(bound.Value.Span)+" %")
	default:
		e.report(bound.Value.Span, "unit-mismatch", "the tolerance %s is %s, where %s or a percentage is needed",
			e.written(bound.Value.Span), e.describe(&o), unit)
	}
	return number.Exact{}, false
}

// isDependent says that a source follows quantities of the network, looking
// into the constants it names.
func (b *builder) isDependent(inst *instance, sym *Symbol) bool {
	st := sym.Statement.(*PartStatement)
	x, ok := st.Value.(Expr)
	return ok && mentionsQuantity(inst.scope, x, 0, 0)
}

// containsQuantity says that a value names quantities itself.
func containsQuantity(v Value) bool {
	x, ok := v.(Expr)
	return ok && mentionsQuantity(nil, x, 0, 0)
}

// mentionsQuantity looks for v[…] and i[…] in an expression and, with a scope,
// in the constants that it names.
func mentionsQuantity(s *scope, x Expr, depth, lets int) bool {
	if depth > maxDepth || lets > 10 {
		return false
	}
	switch x := x.(type) {
	case *SubscriptExpr:
		return true
	case *NameExpr:
		if s == nil || len(x.Words) != 1 {
			return false
		}
		sym := s.visible(x.Words[0].Text)
		if sym == nil || sym.Sort != LetSymbol {
			return false
		}
		st, ok := sym.Statement.(*LetStatement)
		return ok && mentionsQuantity(sym.scope, st.Value, depth+1, lets+1)
	case *UnaryExpr:
		return mentionsQuantity(s, x.X, depth+1, lets)
	case *BinaryExpr:
		return mentionsQuantity(s, x.X, depth+1, lets) || mentionsQuantity(s, x.Y, depth+1, lets)
	case *ParenExpr:
		return mentionsQuantity(s, x.X, depth+1, lets)
	case *ConvertExpr:
		return mentionsQuantity(s, x.X, depth+1, lets)
	}
	return false
}
