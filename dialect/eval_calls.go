package dialect

import (
	"portlight/dialect/number"
)

// call works out X(ARGS).
func (e *evaluator) call(x *CallExpr, depth int) operand {
	name, isName := x.Callee.(*NameExpr)
	if !isName {
		return e.at(x, depth)
	}
	info := callTable[name.Text()]
	if info == nil || callsUser(e.inst.scope, name) {
		return e.at(x, depth)
	}
	if !e.countArguments(x, info) || !e.callAllowed(x, info) {
		return operand{}
	}
	if info.Group == partMeasure {
		return e.partMeasure(x, info)
	}
	args := make([]operand, len(x.Args))
	for i, a := range x.Args {
		if info.Name == "due" && i == 1 {
			continue
		}
		args[i] = e.eval(a, depth+1)
		if !args[i].ok || !e.isValue(&args[i], a.Extent()) {
			return operand{}
		}
	}
	switch info.Group {
	case mathematics:
		return e.mathematics(x, info, args)
	case waveformCall:
		return e.waveformCall(x, info, args[0])
	case signalPart:
		return e.signalPart(x, info, args[0])
	case functionView, functionMeasure:
		return e.functionMeasure(x, info, args[0])
	}
	return e.signalMeasure(x, info, args)
}

func (e *evaluator) countArguments(x *CallExpr, info *callInfo) bool {
	n, most := len(x.Args), len(info.Parameters)
	if n >= most-info.Optional && (n <= most || info.many) {
		return true
	}
	if meant := map[string]string{"max": "peak", "min": "trough"}[info.Name]; meant != "" && n == 1 {
		if sub, ok := x.Args[0].(*SubscriptExpr); ok && e.in == inSignal {
			at := x.Callee.Extent()
			e.report(x.Span, "arguments", "%s compares two values or more; the %s value of a signal is %s(%s)", info.Name,
				pickWord(info.Name == "max", "largest", "smallest"), meant, e.written(sub.Span)).
				repair(e.text(), at, meant, "write "+meant)
			return false
		}
	}
	form := info.Name + "("
	for i, p := range info.Parameters {
		if i > 0 {
			form += ", "
		}
		form += p
	}
	e.report(x.Span, "arguments", "%s takes %s, not %d: %s)", info.Name, counted(most, "argument", "arguments"), n, form)
	return false
}

// callAllowed reports measures outside questions and limits, and steps outside
// waveforms.
func (e *evaluator) callAllowed(x *CallExpr, info *callInfo) bool {
	switch {
	case info.Group == mathematics, e.in == inLet:
		return true
	case info.Group == waveformCall:
		if e.in == inSource {
			return true
		}
		e.report(x.Span, "not-constant", "%s has no place in %s: it stands in the waveforms of sources", e.written(x.Span), e.what)
		return false
	case e.in == inSignal:
		return true
	case e.in == inFunction:
		e.report(x.Span, "function-form", "%s has no place in a network function: it is asked of one, in tell and require", info.Name)
		return false
	}
	e.report(x.Span, "not-constant", "%s has no place in %s: measures stand in tell and require", e.written(x.Span), e.what)
	return false
}

// mathematics works out the functions that take numbers.
func (e *evaluator) mathematics(x *CallExpr, info *callInfo, args []operand) operand {
	a := args[0]
	at := x.Args[0].Extent()
	switch info.Name {
	case "abs":
		return e.absolute(x, a)
	case "min", "max":
		return e.extreme(x, info, args)
	case "dB":
		if !a.plainNumber() {
			e.report(at, "not-dimensionless", "dB takes a plain ratio, and %s is %s: divide it by a reference, or write dBV, dBu or dBµV", e.written(at), e.describe(&a))
			return operand{}
		}
		if a.shape == ShapeSignal {
			e.report(at, "wrong-sort", "%s is a signal in time: a level is that of a number or a function of s", e.written(at))
			return operand{}
		}
		return e.levelOf(a, x.Span)
	case "sqrt":
		return e.squareRoot(x, a)
	}
	if !a.plainNumber() {
		r := e.report(at, "not-dimensionless", "%s takes a plain number%s, and %s is %s", info.Name,
			pickWord(info.Name == "sin" || info.Name == "cos", " or an angle", ""), e.written(at), e.describe(&a))
		e.offerSpaces(r, x.Args[0], x.Args[0])
		return operand{}
	}
	if info.Name == "sin" || info.Name == "cos" {
		e.warnSine(at, &a)
	}
	return e.transcendental(x, info, a)
}

// warnSine warns of sin(50 Hz * t).
func (e *evaluator) warnSine(at Span, a *operand) {
	if a.hz == 0 || a.pi || a.has&hasT == 0 {
		return
	}
	text := e.written(at)
	e.warn(at, "frequency-kind", "%s counts cycles, but a sine takes an angle in radians: 2*pi times a frequency in Hz is meant; as it stands 1 Hz is taken as 1 rad/s", text).
		repair(e.text(), at, "2*pi*"+e.bracketed(at), "multiply by 2*pi")
}

// bracketed is the text of a factor, in brackets where it is a sum.
func (e *evaluator) bracketed(at Span) string {
	text := e.text().Text[at.Start:at.End]
	for i := 1; i < len(text); i++ {
		if (text[i] == '+' || text[i] == '-') && text[i-1] != 'e' && text[i-1] != '^' {
			return "(" + text + ")"
		}
	}
	return text
}

func (e *evaluator) transcendental(x *CallExpr, info *callInfo, a operand) operand {
	if a.constant {
		function := map[string]func(number.Exact) (number.Exact, error){
			"exp": number.Exp, "log": number.Log, "sin": number.Sin, "cos": number.Cos,
		}[info.Name]
		value, err := function(a.value)
		if err != nil {
			e.report(x.Span, "no-value", "%s: %s", e.written(x.Span), failure(err))
			return operand{}
		}
		o := constantOperand(value, DimensionNumber, x.Span)
		return o
	}
	if (e.in != inSource && e.in != inLet) || a.has&^hasT != 0 || info.Name == "log" {
		code, why := Code("wrong-sort"), "only a plain number has one"
		if info.Name != "log" {
			why = "it takes a plain number, or in a waveform an expression linear in t"
		}
		if e.in == inSource {
			code = "waveform"
		}
		e.report(x.Span, code, "%s of %s is not possible here: %s", info.Name, e.written(x.Args[0].Extent()), why)
		return operand{}
	}
	o := operand{ok: true, shape: a.shape, has: a.has, size: a.size + 1, span: x.Span}
	o.x = &Call{Typed: o.typed(), Name: info.Name, Args: []Expression{a.expression()}, Part: -1}
	return o
}

func (e *evaluator) absolute(x *CallExpr, a operand) operand {
	if e.in == inFunction && !a.constant {
		e.report(x.Span, "not-rational", "a network function is rational in s, and a magnitude is not: ask for gain of the function")
		return operand{}
	}
	if a.constant {
		a.value = a.value.Abs()
		return a
	}
	a.bent, a.real, a.complex = true, true, false
	a.size++
	a.span = x.Span
	a.x = &Call{Typed: a.typed(), Name: "abs", Args: []Expression{a.x}, Part: -1}
	return a
}

func (e *evaluator) squareRoot(x *CallExpr, a operand) operand {
	at := x.Args[0].Extent()
	d, ok := a.dim.Root()
	if !ok || a.dim.Level {
		e.report(at, "unit-mismatch", "%s is %s, which has no square root with a unit", e.written(at), e.describe(&a))
		return operand{}
	}
	o := a
	o.dim, o.span, o.hz, o.rad, o.either = d, x.Span, a.hz/2, a.rad/2, false
	if a.constant {
		value, err := number.Sqrt(a.value)
		if err != nil {
			e.report(x.Span, "no-value", "%s: %s", e.written(x.Span), failure(err))
			return operand{}
		}
		o.value = value
		return o
	}
	if a.isComplex() || a.shape == ShapeSignal {
		e.report(x.Span, "not-rational", "the square root of %s is not possible here: it is neither a number nor a magnitude", e.written(at))
		return operand{}
	}
	o.size++
	o.bent = true
	o.x = &Call{Typed: o.typed(), Name: "sqrt", Args: []Expression{a.expression()}, Part: -1}
	return o
}

// extreme works out min and max.
func (e *evaluator) extreme(x *CallExpr, info *callInfo, args []operand) operand {
	for i := 1; i < len(args); i++ {
		for j := range i {
			if args[i].dim.Level != args[j].dim.Level && !e.meetLevel(x.Args[j], x.Args[i], &args[j], &args[i], "compared") {
				return operand{}
			}
		}
	}
	o := args[0]
	for i := 1; i < len(args); i++ {
		if !e.alike(x.Args[0], x.Args[i], &args[0], &args[i], "compared") {
			return operand{}
		}
		next := joined(&o, &args[i], x.Span)
		next.dim, next.hz, next.rad, next.either = o.dim, o.hz, max(o.rad, args[i].rad), o.either
		if next.constant = o.constant && args[i].constant; next.constant {
			next.value = o.value
			if less := args[i].value.Rat().Cmp(o.value.Rat()) < 0; less == (info.Name == "min") {
				next.value = args[i].value
			}
		}
		o = next
	}
	for i := range args {
		if args[i].isComplex() {
			e.report(x.Args[i].Extent(), "not-real", "%s is complex and has no order: take its abs(…) first", e.written(x.Args[i].Extent()))
			return operand{}
		}
	}
	if o.constant {
		o.shape, o.size = ShapeNumber, 1
		return o
	}
	if e.in == inSource || e.in == inFunction {
		e.report(x.Span, "not-linear", "%s of what is no constant has no place in %s", info.Name, e.what)
		return operand{}
	}
	o.bent = true
	call := &Call{Typed: o.typed(), Name: info.Name, Part: -1}
	for i := range args {
		call.Args = append(call.Args, args[i].expression())
	}
	o.x = call
	return o
}

// waveformCall works out u(…) and delta(…).
func (e *evaluator) waveformCall(x *CallExpr, info *callInfo, a operand) operand {
	at := x.Args[0].Extent()
	o := operand{ok: true, shape: ShapeSignal, has: a.has | hasStep, size: a.size + 1, span: x.Span}
	if info.Name == "delta" {
		o.dim = DimensionRate
	}
	if a.dim != DimensionTime && (info.Name == "delta" || !a.plainNumber() || a.bare && a.constant) {
		if a.bare && a.constant {
			r := e.report(at, "unit-missing", "%s takes a time such as t - 2 ms, and %s has no unit", info.Name, e.written(at))
			e.offerUnits(r, x.Args[0], DimensionTime)
			return operand{}
		}
		e.report(at, "unit-mismatch", "%s takes a time such as t - 2 ms, and %s is %s", info.Name, e.written(at), e.describe(&a))
		return operand{}
	}
	if a.has&^hasT != 0 {
		e.report(at, "waveform", "%s takes an expression linear in t, such as t - 2 ms", info.Name)
		return operand{}
	}
	o.x = &Call{Typed: o.typed(), Name: info.Name, Args: []Expression{a.expression()}, Part: -1}
	return o
}

// at works out H(1 kHz) and v[out](2 ms).
func (e *evaluator) at(x *CallExpr, depth int) operand {
	o := e.eval(x.Callee, depth+1)
	if len(x.Args) != 1 {
		if o.ok {
			e.report(x.Span, "arguments", "%s takes one argument, the frequency or time of the value", e.written(x.Callee.Extent()))
		}
		return operand{}
	}
	if !o.ok || !e.isValue(&o, x.Callee.Extent()) {
		return operand{}
	}
	if e.in != inSignal && e.in != inLet {
		e.report(x.Span, "not-constant", "a value of a function or signal has no place in %s", e.what)
		return operand{}
	}
	want, what := DimensionFrequency, "the frequency of a value"
	switch o.shape {
	case ShapeSignal:
		want, what = DimensionTime, "the time of a value"
	case ShapeFunction:
	default:
		e.report(x.Callee.Extent(), "wrong-sort", "%s is a number and has no value at a frequency or time; for a product write %s * (…)",
			e.written(x.Callee.Extent()), e.written(x.Callee.Extent()))
		return operand{}
	}
	inner := &evaluator{b: e.b, inst: e.inst, in: inConstant, what: what, file: e.file}
	where := inner.eval(x.Args[0], depth+1)
	if !where.ok || !inner.fits(x.Args[0], &where, want, what) {
		return operand{}
	}
	if !e.notNegative(x.Args[0], &where, what) {
		return operand{}
	}
	o.complex = o.isComplex()
	o.shape, o.has, o.real = ShapeNumber, o.has&hasQuantity, false
	o.size++
	o.span = x.Span
	o.x = &At{Typed: o.typed(), X: o.x, Where: where.finish().(*Constant)}
	return o
}
