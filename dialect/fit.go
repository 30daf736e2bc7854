package dialect

import (
	"strings"

	"portlight/dialect/number"
)

// fits reports an operand that has not the dimension its place needs, with the
// repairs that suggest themselves. A level that stands where a plain ratio is
// needed becomes one; frequencies stay as written (see finish).
func (e *evaluator) fits(x Expr, o *operand, want Dimension, what string) bool {
	span := x.Extent()
	if !o.ok || !e.isValue(o, span) {
		return false
	}
	switch {
	case want.Frequency:
		return e.fitsFrequency(x, o, what)
	case want.Angle && o.plainNumber():
		if o.rad != 0 || !o.constant || !o.bare {
			return true
		}
	case o.dim == want.Base() && !want.Level && !want.Angle:
		return true
	case want.Level && o.dim.Level:
		return true
	}
	if o.constant && o.bare {
		r := e.report(span, "unit-missing", "%s has no unit: %s is %s", e.written(span), what, want)
		e.offerUnits(r, x, want)
		return false
	}
	r := e.report(span, "unit-mismatch", "%s is %s, where %s must be %s", e.written(span), e.describe(o), what, want)
	e.offerSpaces(r, x, x)
	if want == DimensionResistance && o.dim == DimensionConductance {
		r.repair(e.text(), span, "1/("+e.written(span)+")", "write its reciprocal")
	}
	return false
}

func (e *evaluator) fitsFrequency(x Expr, o *operand, what string) bool {
	span := x.Extent()
	if o.isHertz() || o.isRadian() {
		return true
	}
	text := e.written(span)
	switch {
	case o.dim == DimensionRate:
		r := e.report(span, "frequency-kind", "%s is a plain 1/s: %s is in Hz or in rad/s, which differ by 2π", text, what)
		if n, ok := x.(*NumberExpr); ok {
			r.repair(e.text(), n.Unit.Span, "Hz", "write Hz")
			r.repair(e.text(), n.Unit.Span, "rad/s", "write rad/s")
		} else {
			r.repair(e.text(), Span{span.End, span.End}, " in Hz", "it is in Hz")
			r.repair(e.text(), Span{span.End, span.End}, " in rad/s", "it is in rad/s")
		}
		r.choose()
	case o.constant && o.bare:
		r := e.report(span, "unit-missing", "%s has no unit: %s is in Hz or in rad/s", text, what)
		e.offerUnits(r, x, DimensionFrequency)
	default:
		r := e.report(span, "unit-mismatch", "%s is %s, where %s must be a frequency (Hz or rad/s)", text, e.describe(o), what)
		e.offerSpaces(r, x, x)
	}
	return false
}

// offerUnits adds repairs that put a unit after a bare number.
func (e *evaluator) offerUnits(r *reported, x Expr, want Dimension) {
	if r.f == nil {
		return
	}
	for {
		if u, ok := x.(*UnaryExpr); ok {
			x = u.X
		} else if p, ok := x.(*ParenExpr); ok {
			x = p.X
		} else {
			break
		}
	}
	n, ok := x.(*NumberExpr)
	if !ok || n.Unit != nil {
		return
	}
	units := []string{want.Unit()}
	switch {
	case want.Frequency:
		units = []string{"Hz", "kHz", "rad/s"}
	case want.Angle:
		units = []string{"°", "rad"}
	case want == DimensionTime:
		units = []string{"s", "ms", "µs"}
	case want == DimensionInductance:
		units = []string{"H", "mH", "µH"}
	case want == DimensionCapacitance:
		units = []string{"F", "µF", "nF", "pF"}
	case want == DimensionResistance:
		units = []string{"Ω", "kΩ"}
	}
	text := e.text().Text[n.Span.Start:n.Span.End]
	for _, u := range units {
		if u == "" {
			return
		}
		space := " "
		if u == "°" {
			space = ""
		}
		r.repair(e.text(), n.Span, text+space+u, "write "+text+space+u)
	}
	if len(units) > 1 {
		r.choose()
	}
}

// offerSpaces adds the repair for 2 mH*s written for 2 mH * s: a chained s
// that was meant as the variable.
func (e *evaluator) offerSpaces(r *reported, list ...Expr) {
	if r.f == nil || e.in != inRational && e.in != inSource && e.in != inFunction {
		return
	}
	for i, x := range list {
		if i > 0 && x == list[0] {
			return
		}
		walkNumbers(x, 0, func(n *NumberExpr) {
			if n.Unit == nil || len(n.Unit.Factors) < 2 {
				return
			}
			last := n.Unit.Factors[len(n.Unit.Factors)-1]
			if last.Symbol.Text != "s" {
				return
			}
			mark := " * s"
			if last.Divide {
				mark = " / s"
			}
			before := n.Unit.Factors[len(n.Unit.Factors)-2].Span.End
			r.repair(e.text(), Span{before, last.Symbol.Span.End}, mark, "the variable s, with spaces")
		})
	}
}

// walkNumbers visits the numbers of an expression.
func walkNumbers(x Expr, depth int, visit func(*NumberExpr)) {
	if depth > maxDepth {
		return
	}
	switch x := x.(type) {
	case *NumberExpr:
		visit(x)
	case *UnaryExpr:
		walkNumbers(x.X, depth+1, visit)
	case *BinaryExpr:
		walkNumbers(x.X, depth+1, visit)
		walkNumbers(x.Y, depth+1, visit)
	case *ParenExpr:
		walkNumbers(x.X, depth+1, visit)
	case *ConvertExpr:
		walkNumbers(x.X, depth+1, visit)
	case *CallExpr:
		for _, a := range x.Args {
			walkNumbers(a, depth+1, visit)
		}
	}
}

// positive reports a constant that is not proved to be above zero.
func (e *evaluator) positive(x Expr, o *operand, what string) bool {
	sign, decided := o.value.Sign()
	if decided && sign > 0 {
		return true
	}
	span := x.Extent()
	switch {
	case !decided:
		e.report(span, "not-positive", "%s must be positive, and %s cannot be told from zero", what, e.written(span))
	case sign == 0:
		e.report(span, "not-positive", "%s must be positive, and %s is zero", what, e.written(span))
	default:
		e.report(span, "not-positive", "%s must be positive, and %s is negative", what, e.written(span))
	}
	return false
}

// notNegative reports a constant below zero.
func (e *evaluator) notNegative(x Expr, o *operand, what string) bool {
	if sign, decided := o.value.Sign(); !decided || sign >= 0 {
		return true
	}
	e.report(x.Extent(), "not-positive", "%s cannot be negative, and %s is", what, e.written(x.Extent()))
	return false
}

// ratio makes a plain ratio of a level.
func (e *evaluator) ratio(x Expr, o *operand) bool {
	if !o.dim.Level {
		return true
	}
	value, err := number.FromDecibel(o.value)
	if err != nil {
		e.report(x.Extent(), "no-value", "%s: %s", e.written(x.Extent()), failure(err))
		return false
	}
	*o = constantOperand(value, DimensionNumber, o.span)
	return true
}

// constantValue works out an expression that must be a constant of a certain
// dimension, and notes what the place expects.
func (b *builder) constantValue(inst *instance, x Expr, want Dimension, what string) (operand, *evaluator, bool) {
	e := &evaluator{b: b, inst: inst, in: inConstant, what: what}
	if x == nil {
		return operand{}, e, false
	}
	b.expect(inst, x.Extent(), want, what)
	o := e.eval(x, 0)
	if !o.ok || !e.fits(x, &o, want, what) || !e.mustBeConstant(x, &o) {
		b.c.fault()
		return operand{}, e, false
	}
	return o, e, true
}

// expect notes what a place must hold, for completion.
func (b *builder) expect(inst *instance, span Span, want Dimension, what string) {
	if len(inst.use) > 0 {
		return
	}
	file := inst.scope.unit.file
	b.c.expectations[file] = append(b.c.expectations[file], Expectation{span, want, what})
}

// valueText is the text of a value with one space between words.
func valueText(f *File, span Span) string {
	text := f.Text[span.Start:span.End]
	if !strings.Contains(text, "  ") && !strings.ContainsAny(text, "\t\r\n") {
		return text
	}
	return strings.Join(strings.Fields(text), " ")
}
