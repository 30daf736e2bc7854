package dialect

import (
	"strings"

	"portlight/dialect/number"
)

// name works out a name in an expression. Names that stand for nothing were
// reported when they were resolved.
func (e *evaluator) name(x *NameExpr) operand {
	if len(x.Words) == 0 {
		return operand{}
	}
	if len(x.Words) == 1 {
		switch x.Words[0].Text {
		case "pi":
			o := constantOperand(number.Pi(), DimensionNumber, x.Span)
			o.pi, o.bare = true, true
			return o
		case "s":
			return e.variable(x, "s", hasS, ShapeFunction)
		case "t":
			return e.variable(x, "t", hasT, ShapeSignal)
		}
	}
	inst, sym := e.find(x)
	if sym == nil {
		return operand{}
	}
	return e.symbol(x, inst, sym)
}

// find looks a dotted name up; nil when it stands for nothing.
func (e *evaluator) find(x *NameExpr) (*instance, *Symbol) {
	inst := e.inst
	for i, w := range x.Words {
		sym := inst.scope.lookup(w.Text, false, i > 0)
		if sym == nil || i+1 == len(x.Words) {
			return inst, sym
		}
		if inst = inst.child(sym); inst == nil {
			return nil, nil
		}
	}
	return nil, nil
}

// child is the inside of a use, nil where there is none.
func (inst *instance) child(sym *Symbol) *instance {
	if sym.scope != inst.scope || sym.Sort != UseSymbol {
		return nil
	}
	return inst.children[sym.index]
}

// variable works out s or t.
func (e *evaluator) variable(x *NameExpr, name string, has contents, shape Shape) operand {
	allowed := e.in == inLet || e.in == inSource
	if name == "s" {
		allowed = allowed || e.in == inRational || e.in == inFunction || e.in == inSignal
	}
	if !allowed {
		why := "stands in impedances, admittances, functions and in the coefficients of dependent sources"
		if name == "t" {
			why = "stands in the waveforms of sources"
		}
		e.report(x.Span, "not-constant", "%s has no place in %s: it %s", name, e.what, why)
		return operand{}
	}
	o := operand{ok: true, dim: DimensionRate, shape: shape, has: has, size: 1, span: x.Span}
	if name == "t" {
		o.dim = DimensionTime
	}
	o.x = &Variable{Typed: o.typed(), Name: name}
	return o
}

// symbol works out what a name stands for.
func (e *evaluator) symbol(x *NameExpr, inst *instance, sym *Symbol) operand {
	switch sym.Sort {
	case LetSymbol, ParameterSymbol:
		return e.constantOf(x, inst, sym)
	case PartSymbol:
		return e.partOf(x, inst, sym)
	case FunctionSymbol:
		return e.functionOf(x, inst, sym)
	case NodeSymbol, PortSymbol:
		r := e.report(x.Span, "wrong-sort", "%s is %s, not a number: its voltage is v[%s]", x.Text(), article(sym.describe()), x.Text())
		r.repair(e.text(), x.Span, "v["+x.Text()+"]", "write v["+x.Text()+"]")
		return operand{}
	}
	e.report(x.Span, "wrong-sort", "%s is %s, not a number", x.Text(), article(sym.describe()))
	return operand{}
}

// home is the instance that a symbol found from inst belongs to: a body sees
// the constants of its file, a file those of the files it uses.
func home(inst *instance, sym *Symbol) *instance {
	if sym.scope == inst.scope {
		return inst
	}
	return sym.scope.unit.static
}

// constantOf works out a let or a parameter, once per setting.
func (e *evaluator) constantOf(x *NameExpr, inst *instance, sym *Symbol) operand {
	at := home(inst, sym)
	if at == nil {
		return operand{}
	}
	o := at.b.constant(at, sym, inLet, x.Span, e)
	if !o.ok {
		e.b.c.blame.meet(sym)
	}
	if o.ok && at.b != e.b && o.has&hasQuantity != 0 {
		if at.scope.unit != e.inst.scope.unit {
			r := e.report(x.Span, "wrong-sort", "%s depends on quantities of the network in its own file, which has no part in this one", sym.Name)
			r.relate(sym.File, sym.Span, "%s is defined here", sym.Name)
		}
		return operand{}
	}
	if !o.ok || o.constant || e.in == inLet {
		return o
	}
	if e.in == inConstant {
		r := e.report(x.Span, "not-constant", "%s is not a constant: it depends on %s, which has no place in %s",
			sym.Name, o.has.words(), e.what)
		r.relate(sym.File, sym.Span, "%s is defined here", sym.Name)
		return operand{}
	}
	return at.b.constant(at, sym, e.in, x.Span, e)
}

func (h contents) words() string {
	var words []string
	for _, w := range [...]struct {
		bit  contents
		word string
	}{{hasS, "s"}, {hasT | hasStep, "t"}, {hasQuantity, "quantities of the network"}} {
		if h&w.bit != 0 {
			words = append(words, w.word)
		}
	}
	if words == nil {
		return "a function"
	}
	return strings.Join(words, " and ")
}

// constant works out a let or parameter in a setting. asker is who needs it,
// for reporting a cycle.
func (b *builder) constant(inst *instance, sym *Symbol, in setting, span Span, asker *evaluator) operand {
	m := &inst.memo[sym.index]
	if o, ok := m.known(in); ok {
		return o
	}
	if m.busy {
		b.reportCycle(asker, sym, span)
		return operand{}
	}
	m.busy = true
	o := b.c.blame.around(sym, func() operand { return b.evaluateConstant(inst, sym, in) })
	m.busy = false
	return m.keep(in, o)
}

func (b *builder) evaluateConstant(inst *instance, sym *Symbol, in setting) operand {
	e := &evaluator{b: b, inst: inst, in: in, what: "the constant " + sym.Name}
	if sym.Sort == ParameterSymbol {
		return b.parameter(inst, sym, e)
	}
	st, ok := sym.Statement.(*LetStatement)
	if !ok || st.Broken {
		return operand{}
	}
	harmless := b.c.harmless
	b.c.harmless = true // it matters only to those who use it
	defer func() { b.c.harmless = harmless }()
	o := e.eval(st.Value, 0)
	if o.ok && !e.isValue(&o, st.Value.Extent()) {
		return operand{}
	}
	return o
}

// parameter works out the argument of a use, or the default.
func (b *builder) parameter(inst *instance, sym *Symbol, e *evaluator) operand {
	var declared *Parameter
	for _, p := range inst.scope.body.Parameters {
		if p.Name.Span == sym.Span {
			declared = p
		}
	}
	if declared == nil {
		return operand{}
	}
	e.in, e.what = inConstant, "the default of "+sym.Name
	value := e.eval(declared.Value, 0)
	if value.ok && !e.isValue(&value, declared.Value.Extent()) {
		return operand{}
	}
	given := inst.arguments[sym.index]
	if given == nil || inst.parent == nil {
		return value
	}
	outer := &evaluator{b: b, inst: inst.parent, in: inConstant, what: "the argument " + sym.Name}
	o := outer.eval(given.Value, 0)
	if !o.ok || !value.ok {
		return operand{}
	}
	if value.isHertz() && o.isRadian() {
		o = e.overTwoPi(o)
		o.hz, o.rad = 1, 0
	}
	if value.isRadian() && o.isHertz() {
		o = e.timesTwoPi(o)
		o.hz, o.rad = 0, 1
	}
	if !outer.fits(given.Value, &o, value.sorted2(), "the parameter "+sym.Name) {
		return operand{}
	}
	return o
}

// sorted2 is the dimension with frequencies in hertz marked too.
func (o *operand) sorted2() Dimension {
	if o.isHertz() {
		return DimensionFrequency
	}
	return o.sorted()
}

// reportCycle reports a name that is defined by itself.
func (b *builder) reportCycle(asker *evaluator, sym *Symbol, span Span) {
	if asker == nil {
		return
	}
	r := asker.report(span, "cycle", "%s is defined by itself", sym.Name)
	r.relate(sym.File, sym.Span, "%s is defined here", sym.Name)
}

// partOf works out the name of a part: the nominal value of R, L and C, a
// source's own quantity in a function.
func (e *evaluator) partOf(x *NameExpr, inst *instance, sym *Symbol) operand {
	switch sym.Kind {
	case Resistor, Inductor, Capacitor:
		o := e.b.nominal(inst, sym, x.Span, e)
		if !o.ok {
			e.b.c.blame.meet(sym)
		}
		o.bare = false
		return o
	case VoltageSource, CurrentSource:
		if e.in == inFunction || e.in == inLet {
			return e.sourceOf(x, inst, sym)
		}
		letter := "v"
		if sym.Kind == CurrentSource {
			letter = "i"
		}
		r := e.report(x.Span, "wrong-sort", "%s is %s: outside a function its own quantity is %s[%s]",
			x.Text(), article(sym.Kind.String()), letter, x.Text())
		r.repair(e.text(), x.Span, letter+"["+x.Text()+"]", "write "+letter+"["+x.Text()+"]")
		return operand{}
	}
	e.report(x.Span, "wrong-sort", "%s is %s and has no single value: only resistors, inductors and capacitors stand for theirs",
		x.Text(), article(sym.describe()))
	return operand{}
}

// sourceOf is the quantity that an independent source prescribes.
func (e *evaluator) sourceOf(x *NameExpr, inst *instance, sym *Symbol) operand {
	o := operand{ok: true, dim: DimensionVoltage, shape: ShapeSignal, has: hasQuantity, size: 1, span: x.Span}
	letter := byte('v')
	if sym.Kind == CurrentSource {
		letter, o.dim = 'i', DimensionCurrent
	}
	if e.in == inFunction {
		o.shape, o.degree = ShapeFunction, 1
	}
	o.x = &Quantity{Typed: o.typed(), Probe: Probe{
		Letter: letter, Of: OfPart, Plus: -1, Minus: -1, Part: inst.slots[sym.index], Port: -1,
	}}
	return o
}

// functionOf works out the name of a network function.
func (e *evaluator) functionOf(x *NameExpr, inst *instance, sym *Symbol) operand {
	if e.in != inFunction && e.in != inSignal && e.in != inLet {
		e.report(x.Span, "not-constant", "the function %s has no place in %s", x.Text(), e.what)
		return operand{}
	}
	f := e.b.function(inst, sym, x.Span, e)
	if !f.ok {
		e.b.c.blame.meet(sym)
		return operand{}
	}
	o := operand{ok: true, dim: f.dim, hz: f.hz, rad: f.rad, shape: ShapeFunction, has: hasS, size: 1, span: x.Span}
	o.x = &FunctionValue{Typed: o.typed(), Function: inst.slots[sym.index]}
	return o
}

// function works out a function statement, once.
func (b *builder) function(inst *instance, sym *Symbol, span Span, asker *evaluator) operand {
	m := &inst.memo[sym.index]
	if o, ok := m.known(inFunction); ok {
		return o
	}
	if m.busy {
		b.reportCycle(asker, sym, span)
		return operand{}
	}
	m.busy = true
	o := b.c.blame.around(sym, func() operand { return b.evaluateFunction(inst, sym) })
	m.busy = false
	return m.keep(inFunction, o)
}

func (b *builder) evaluateFunction(inst *instance, sym *Symbol) operand {
	st, ok := sym.Statement.(*FunctionStatement)
	if !ok || st.Broken {
		return operand{}
	}
	harmless := b.c.harmless
	b.c.harmless = true
	defer func() { b.c.harmless = harmless }()
	e := &evaluator{b: b, inst: inst, in: inFunction, what: "the function " + sym.Name}
	o := e.eval(st.Value, 0)
	if !o.ok || !e.isValue(&o, st.Value.Extent()) {
		return operand{}
	}
	switch {
	case o.degree != 0:
		e.reportBareResponse(st, &o)
		return operand{}
	case o.bent:
		e.report(st.Value.Extent(), "not-rational", "a network function is rational in s; magnitudes and levels are asked of it with gain(%s)", sym.Name)
		return operand{}
	case o.dim.Level:
		e.report(st.Value.Extent(), "unit-mismatch", "a network function is a ratio, not a level in dB: gain(%s) can be compared with levels", sym.Name)
		return operand{}
	}
	if slot := inst.slots[sym.index]; slot >= 0 && slot < len(b.d.Functions) {
		b.d.Functions[slot].Value = o.finish()
	}
	return o
}

func (e *evaluator) reportBareResponse(st *FunctionStatement, o *operand) {
	r := e.report(st.Value.Extent(), "function-form",
		"a network function is a response over an excitation, such as v[out]/Vs: %s is divided by nothing", e.written(st.Value.Extent()))
	for _, sym := range e.inst.scope.parts {
		p, ok := sym.Statement.(*PartStatement)
		if ok && (sym.Kind == VoltageSource || sym.Kind == CurrentSource) && !containsQuantity(p.Value) {
			r.repair(e.text(), Span{st.Value.Extent().End, st.Value.Extent().End}, "/"+sym.Name, "divide by "+sym.Name)
			r.choose()
		}
	}
}
