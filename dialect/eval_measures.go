package dialect

import (
	"math/big"

	"portlight/dialect/number"
)

// signalPart works out zir, zsr, due, natural and forced.
func (e *evaluator) signalPart(x *CallExpr, info *callInfo, a operand) operand {
	at := x.Args[0].Extent()
	if a.shape != ShapeSignal || a.has&hasQuantity == 0 {
		e.report(at, "wrong-sort", "%s takes a signal such as v[out], and %s is %s", info.Name, e.written(at), e.shapeWords(&a))
		return operand{}
	}
	if a.bent {
		e.report(at, "not-linear", "%s splits a signal by superposition, which abs, min and max do not allow: apply them outside", info.Name)
		return operand{}
	}
	source := -1
	if info.Name == "due" {
		var ok bool
		if source, ok = e.namedPart(x.Args[1], "an independent source", func(k Kind) bool { return k == VoltageSource || k == CurrentSource }); !ok {
			return operand{}
		}
		if e.b.dependent[source] {
			e.report(x.Args[1].Extent(), "wrong-sort", "%s is a dependent source: a share is due to an independent one", e.written(x.Args[1].Extent()))
			return operand{}
		}
	}
	a.size++
	a.span = x.Span
	a.x = &Call{Typed: a.typed(), Name: info.Name, Args: []Expression{a.x}, Part: source}
	return a
}

// shapeWords says what an operand is, where a signal or function is needed.
func (e *evaluator) shapeWords(o *operand) string {
	switch o.shape {
	case ShapeFunction:
		return "a function of s"
	case ShapeSignal:
		return "a signal in time"
	}
	return "a number"
}

// namedPart finds the part that an argument names.
func (e *evaluator) namedPart(x Expr, what string, fits func(Kind) bool) (int, bool) {
	name, ok := x.(*NameExpr)
	if !ok {
		if _, hole := x.(*Hole); !hole {
			e.report(x.Extent(), "wrong-sort", "the name of %s is needed here", what)
		}
		return -1, false
	}
	inst, sym := e.find(name)
	if sym == nil {
		return -1, false
	}
	if sym.Sort != PartSymbol || !fits(sym.Kind) {
		r := e.report(x.Extent(), "wrong-sort", "%s is %s, where the name of %s is needed", name.Text(), article(sym.describe()), what)
		r.relate(sym.File, sym.Span, "%s is defined here", sym.Name)
		return -1, false
	}
	return inst.slots[sym.index], true
}

// functionMeasure works out gain, phase, … and bandwidth, damping, …
func (e *evaluator) functionMeasure(x *CallExpr, info *callInfo, a operand) operand {
	at := x.Args[0].Extent()
	if !a.isComplex() || a.complex && info.Group == functionMeasure || a.complex && info.Name == "delay" {
		r := e.report(at, "wrong-sort", "%s takes a network function, and %s is %s", info.Name, e.written(at), e.shapeWords(&a))
		if a.shape == ShapeSignal && r.f != nil {
			r.f.Message += ": define one with function H = v[…]/SOURCE"
		}
		return operand{}
	}
	o := a
	o.size++
	o.span = x.Span
	o.complex, o.bent, o.either = false, true, false
	o.real = true
	switch info.Name {
	case "phase":
		o.dim, o.hz, o.rad = DimensionNumber, 0, 1
	case "delay":
		o.dim, o.hz, o.rad = DimensionTime, 0, 0
	case "bandwidth", "natural_frequency", "crossover":
		if info.Name == "crossover" && !a.plainNumber() {
			e.report(at, "not-dimensionless", "crossover is where a plain ratio is 1, and %s is %s", e.written(at), e.describe(&a))
			return operand{}
		}
		o.dim, o.hz, o.rad, o.either = DimensionRate, 0, 1, true
	case "damping", "quality":
		o.dim, o.hz, o.rad = DimensionNumber, 0, 0
	}
	if info.Group == functionMeasure {
		o.shape, o.has = ShapeNumber, hasQuantity
		if info.Name == "stable" {
			o.shape, o.dim = ShapeFact, DimensionNumber
		}
	}
	o.x = &Call{Typed: o.typed(), Name: info.Name, Args: []Expression{a.x}, Part: -1}
	return o
}

// settleTolerance is what settle(X) takes when no tolerance is given.
var settleTolerance = number.FromRat(big.NewRat(1, 100))

// signalMeasure works out peak, settle, last_above, …
func (e *evaluator) signalMeasure(x *CallExpr, info *callInfo, args []operand) operand {
	a := args[0]
	at := x.Args[0].Extent()
	if a.shape != ShapeSignal {
		e.report(at, "wrong-sort", "%s takes a signal such as v[out], and %s is %s", info.Name, e.written(at), e.shapeWords(&a))
		return operand{}
	}
	call := &Call{Name: info.Name, Args: []Expression{a.x}, Part: -1}
	o := operand{ok: true, dim: a.dim, rad: a.rad, shape: ShapeNumber, has: hasQuantity, size: a.size + 1, span: x.Span}
	switch info.Name {
	case "settle":
		o.dim, o.rad = DimensionTime, 0
		tolerance := constantOperand(settleTolerance, DimensionNumber, at)
		if len(args) > 1 {
			tolerance = args[1]
			if !e.fits(x.Args[1], &tolerance, DimensionNumber, "the tolerance of settle") || !e.mustBeConstant(x.Args[1], &tolerance) ||
				!e.positive(x.Args[1], &tolerance, "the tolerance of settle") {
				return operand{}
			}
		}
		call.Args = append(call.Args, tolerance.finish())
	case "overshoot":
		o.dim, o.rad = DimensionNumber, 0
	case "rise":
		o.dim, o.rad = DimensionTime, 0
	case "last_above", "last_below":
		level := args[1]
		if !e.alike(x.Args[0], x.Args[1], &a, &level, "compared") || !e.mustBeConstant(x.Args[1], &level) {
			return operand{}
		}
		call.Args = append(call.Args, level.finish())
		o.dim, o.rad = DimensionTime, 0
	}
	call.Typed = o.typed()
	o.x = call
	return o
}

func (e *evaluator) mustBeConstant(x Expr, o *operand) bool {
	if o.constant {
		return true
	}
	e.report(x.Extent(), "not-constant", "%s is not a constant", e.written(x.Extent()))
	return false
}

// partMeasure works out energy and stored.
func (e *evaluator) partMeasure(x *CallExpr, info *callInfo) operand {
	fits, what := Kind.twoTerminal, "a part"
	o := operand{ok: true, dim: DimensionEnergy, shape: ShapeNumber, has: hasQuantity, size: 1, span: x.Span}
	if info.Name == "stored" {
		fits, what = func(k Kind) bool { return k == Inductor || k == Capacitor }, "an inductor or capacitor"
		o.shape, o.bent = ShapeSignal, true
	}
	part, ok := e.namedPart(x.Args[0], what, fits)
	if !ok {
		return operand{}
	}
	o.x = &Call{Typed: o.typed(), Name: info.Name, Part: part}
	return o
}
