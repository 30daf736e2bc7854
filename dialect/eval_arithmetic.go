package dialect

import (
	"math/big"

	"portlight/dialect/number"
)

// binary works out X op Y of two sound operands.
func (e *evaluator) binary(x *BinaryExpr, a, b operand) operand {
	if !e.isValue(&a, x.X.Extent()) || !e.isValue(&b, x.Y.Extent()) || !e.sameWorld(x, &a, &b) {
		return operand{}
	}
	switch x.Op {
	case '+', '-':
		return e.sum(x, a, b)
	case '*', '/':
		return e.product(x, a, b)
	case '^':
		return e.power(x, a, b)
	}
	return operand{}
}

// sameWorld reports a function of s that meets a signal in t.
func (e *evaluator) sameWorld(x *BinaryExpr, a, b *operand) bool {
	if e.in == inSource || e.in == inLet {
		return true // told when the whole is put to use
	}
	if a.shape == ShapeFunction && b.shape == ShapeSignal || a.shape == ShapeSignal && b.shape == ShapeFunction {
		e.report(x.Span, "mixed-worlds",
			"%s is a function of s and %s a signal in time: they cannot be combined",
			e.written(pick(a.shape == ShapeFunction, x.X, x.Y).Extent()), e.written(pick(a.shape == ShapeFunction, x.Y, x.X).Extent()))
		return false
	}
	return true
}

func pick(first bool, a, b Expr) Expr {
	if first {
		return a
	}
	return b
}

// joined is what two operands have in common once combined.
func joined(a, b *operand, span Span) operand {
	o := operand{ok: true, span: span, has: a.has | b.has, size: a.size + b.size + 1,
		bare: a.bare && b.bare, bent: a.bent || b.bent, complex: a.complex || b.complex, shape: a.shape}
	o.real = !a.isComplex() && !b.isComplex()
	if a.constant || b.shape == ShapeSignal {
		o.shape = b.shape
	}
	if a.shape == ShapeFunction || b.shape == ShapeFunction {
		if o.shape == ShapeNumber {
			o.shape = ShapeFunction
		}
	}
	return o
}

// sum works out X + Y and X − Y.
func (e *evaluator) sum(x *BinaryExpr, a, b operand) operand {
	if a.dim.Level != b.dim.Level {
		if !e.meetLevel(x.X, x.Y, &a, &b, "added") {
			return operand{}
		}
	}
	if !e.alike(x.X, x.Y, &a, &b, "added") || !e.angles(x, &a, &b) {
		return operand{}
	}
	o := joined(&a, &b, x.Span)
	o.dim, o.hz, o.rad, o.pi, o.either = a.dim, a.hz, max(a.rad, b.rad), a.pi || b.pi, a.either && b.either
	o.degree = a.degree
	if a.degree != b.degree {
		e.report(x.Span, "function-form",
			"a sum in a function is of responses or of functions, not of both: every response is divided by its excitation")
		return operand{}
	}
	e.warnCycles(x, &a, &b)
	if o.constant = a.constant && b.constant; o.constant {
		if x.Op == '+' {
			o.value = a.value.Add(b.value)
		} else {
			o.value = a.value.Sub(b.value)
		}
		o.size, o.shape = 1, ShapeNumber
		return o
	}
	o.x = &Binary{Typed: o.typed(), Op: x.Op, X: a.expression(), Y: b.expression()}
	return o
}

// angles reports a bare number beside an angle such as 30° or a phase, which
// could be meant in degrees or in radians.
func (e *evaluator) angles(x *BinaryExpr, a, b *operand) bool {
	for i, o := range [...]*operand{a, b} {
		other := [...]*operand{b, a}[i]
		if !o.plainNumber() || o.rad != 1 || o.has&hasT != 0 || o.has&hasS != 0 && !o.real || !other.constant || !other.bare {
			continue
		}
		at := pick(i == 0, x.Y, x.X)
		r := e.report(at.Extent(), "unit-missing", "%s has no unit, but is added to an angle: is it in ° or in rad?", e.written(at.Extent()))
		e.offerUnits(r, at, DimensionAngle)
		return false
	}
	return true
}

// meetLevel makes a level of the operand that is none; reports when it has a
// dimension.
func (e *evaluator) meetLevel(x, y Expr, a, b *operand, how string) bool {
	level, other, otherText := a, b, y
	if b.dim.Level {
		level, other, otherText = b, a, x
	}
	if !other.plainNumber() {
		e.report(otherText.Extent(), "unit-mismatch", "%s is %s and cannot be %s to a level in dB: divide it by a reference first",
			e.written(otherText.Extent()), e.describe(other), how)
		return false
	}
	if other.bare && other.constant {
		r := e.report(otherText.Extent(), "unit-missing", "%s meets a level: is the level %s dB meant, or the ratio dB(%s)?",
			e.written(otherText.Extent()), e.written(otherText.Extent()), e.written(otherText.Extent()))
		r.repair(e.text(), otherText.Extent(), e.written(otherText.Extent())+" dB", "the level")
		r.repair(e.text(), otherText.Extent(), "dB("+e.written(otherText.Extent())+")", "the ratio")
		r.choose()
		return false
	}
	_ = level
	made := e.levelOf(*other, otherText.Extent())
	*other = made
	return made.ok
}

// levelOf is 20·log10 of the magnitude of a plain ratio.
func (e *evaluator) levelOf(o operand, span Span) operand {
	if o.constant {
		value, err := number.Decibel(o.value.Abs())
		if err != nil {
			e.report(span, "no-value", "%s has no level: %s", e.written(span), failure(err))
			return operand{}
		}
		return constantOperand(value, DimensionLevel, span)
	}
	o.dim, o.hz, o.rad, o.pi, o.real, o.complex, o.bent = DimensionLevel, 0, 0, false, true, false, true
	o.size++
	o.span = span
	o.x = &Call{Typed: o.typed(), Name: "dB", Args: []Expression{o.x}, Part: -1}
	return o
}

// alike reports two operands that cannot be added or compared, and brings
// frequencies to one kind where a measure left that open.
func (e *evaluator) alike(x, y Expr, a, b *operand, how string) bool {
	if a.dim != b.dim {
		e.reportUnlike(x, y, a, b, how)
		return false
	}
	if a.dim != DimensionRate || a.hz == b.hz && a.rad == b.rad {
		return true
	}
	if a.isHertz() == b.isHertz() {
		return true // a plain 1/s beside rad/s
	}
	if a.either || b.either || how == "compared" && (a.isRadian() || b.isRadian()) {
		for _, o := range [...]*operand{a, b} {
			if o.isHertz() {
				*o = e.timesTwoPi(*o)
				o.hz, o.rad = 0, 1
			}
		}
		return true
	}
	e.reportFrequencies(x, y, a, b, how)
	return false
}

func (e *evaluator) reportUnlike(x, y Expr, a, b *operand, how string) {
	code, at := Code("unit-mismatch"), y
	var missing *operand
	switch {
	case b.bare && b.constant:
		code, missing = "unit-missing", a
	case a.bare && a.constant:
		code, at, missing = "unit-missing", x, b
	}
	if code == "unit-missing" {
		r := e.report(at.Extent(), code, "%s has no unit, but is %s to %s", e.written(at.Extent()), how, e.describe(missing))
		e.offerUnits(r, at, missing.sorted())
		e.offerSpaces(r, x, y)
		return
	}
	r := e.report(Span{x.Extent().Start, y.Extent().End}, code, "%s is %s and %s is %s: they cannot be %s",
		e.written(x.Extent()), e.describe(a), e.written(y.Extent()), e.describe(b), how)
	e.offerSpaces(r, x, y)
}

func (e *evaluator) reportFrequencies(x, y Expr, a, b *operand, how string) {
	kind := func(o *operand) string {
		switch {
		case o.isHertz():
			return "in Hz"
		case o.isRadian():
			return "in rad/s"
		}
		return "a plain 1/s"
	}
	r := e.report(Span{x.Extent().Start, y.Extent().End}, "frequency-kind",
		"%s is %s and %s is %s, which differ by 2π: convert one before they are %s",
		e.written(x.Extent()), kind(a), e.written(y.Extent()), kind(b), how)
	file := e.text()
	r.repair(file, x.Extent(), "("+e.written(x.Extent())+" in "+unitOfKind(b)+")", "convert the left side")
	r.repair(file, y.Extent(), "("+e.written(y.Extent())+" in "+unitOfKind(a)+")", "convert the right side")
	r.choose()
}

func unitOfKind(o *operand) string {
	if o.isHertz() {
		return "Hz"
	}
	return "rad/s"
}

// warnCycles warns of s or t counted in cycles against a plain number: the
// factor 2π is missing.
func (e *evaluator) warnCycles(x *BinaryExpr, a, b *operand) {
	if a.dim != DimensionNumber {
		return
	}
	for i, o := range [...]*operand{a, b} {
		if o.hz != 0 && !o.pi && o.has&hasS != 0 {
			at := pick(i == 0, x.X, x.Y).Extent()
			e.warn(at, "frequency-kind", "%s sets s, which is in rad/s, against hertz: the factor 2π is missing; as it stands 1 Hz is taken as 1 rad/s", e.written(at))
			return
		}
	}
}

// product works out X*Y and X/Y.
func (e *evaluator) product(x *BinaryExpr, a, b operand) operand {
	if a.dim.Level || b.dim.Level {
		if !e.levelProduct(x, &a, &b) {
			return operand{}
		}
	}
	if !e.signalProduct(x, &a, &b) {
		return operand{}
	}
	if e.in == inFunction {
		if !e.responseProduct(x, &a, &b) {
			return operand{}
		}
	}
	o := joined(&a, &b, x.Span)
	var ok bool
	if x.Op == '*' {
		o.dim, ok = a.dim.Times(b.dim)
		o.hz, o.rad, o.degree = a.hz+b.hz, a.rad+b.rad, a.degree+b.degree
	} else {
		o.dim, ok = a.dim.Over(b.dim)
		o.hz, o.rad, o.degree = a.hz-b.hz, a.rad-b.rad, a.degree-b.degree
	}
	if a.dim.Level != b.dim.Level {
		o.dim = DimensionLevel
	}
	if !ok || o.hz > maxExponent || o.hz < -maxExponent || o.rad > maxExponent || o.rad < -maxExponent {
		e.report(x.Span, "no-value", "the powers in the unit of this are too high")
		return operand{}
	}
	o.pi = a.pi || b.pi
	if o.pi && (a.hz != 0 || b.hz != 0) {
		o.hz, o.pi = 0, false // 2·π·f is no longer a count of cycles
	}
	if o.plainNumber() || o.dim == DimensionRate {
		o.either = a.either || b.either
	}
	return e.foldProduct(x, &a, &b, o)
}

func (e *evaluator) foldProduct(x *BinaryExpr, a, b *operand, o operand) operand {
	if b.constant && x.Op == '/' {
		if s, decided := b.value.Sign(); decided && s == 0 {
			e.report(x.Y.Extent(), "no-value", "%s is zero: %s", e.written(x.Y.Extent()), failure(number.ErrDivisionByZero))
			return operand{}
		}
	}
	if !a.constant || !b.constant {
		o.x = &Binary{Typed: o.typed(), Op: x.Op, X: a.expression(), Y: b.expression()}
		return o
	}
	o.constant, o.size, o.shape = true, 1, ShapeNumber
	if x.Op == '*' {
		o.value = a.value.Mul(b.value)
		return o
	}
	value, err := a.value.Quo(b.value)
	if err != nil {
		e.report(x.Y.Extent(), "no-value", "%s: %s", e.written(x.Span), failure(err))
		return operand{}
	}
	o.value = value
	return o
}

// levelProduct allows a level times or over a plain number, and the quotient
// of two levels.
func (e *evaluator) levelProduct(x *BinaryExpr, a, b *operand) bool {
	both := a.dim.Level && b.dim.Level
	switch {
	case both && x.Op == '/':
		return true
	case both:
		e.report(x.Span, "unit-mismatch", "two levels in dB cannot be multiplied: the product of ratios is the sum of their levels")
		return false
	case x.Op == '/' && b.dim.Level:
		e.report(x.Y.Extent(), "unit-mismatch", "a level in dB cannot divide %s: 10^(%s/(20 dB)) is the ratio it stands for",
			e.written(x.X.Extent()), e.written(x.Y.Extent()))
		return false
	}
	other, at := b, x.Y
	level := x.X
	if b.dim.Level {
		other, at, level = a, x.X, x.Y
	}
	if other.constant && other.plainNumber() {
		return true
	}
	r := e.report(Span{x.X.Extent().Start, x.Y.Extent().End}, "unit-mismatch",
		"%s is %s and cannot be multiplied by the level %s: 10^(%s/(20 dB)) is the ratio it stands for",
		e.written(at.Extent()), e.describe(other), e.written(level.Extent()), e.written(level.Extent()))
	r.repair(e.text(), level.Extent(), "10^("+e.written(level.Extent())+"/(20 dB))", "write the ratio")
	return false
}

// signalProduct reports products and quotients of signals.
func (e *evaluator) signalProduct(x *BinaryExpr, a, b *operand) bool {
	if e.in != inSignal || b.shape != ShapeSignal {
		return true
	}
	if x.Op == '*' {
		if a.shape != ShapeSignal {
			return true
		}
		e.report(x.Span, "signal-product", "signals add and scale, but %s multiplies two: the power of a part is p[PART]", e.written(x.Span))
		return false
	}
	text := e.written(x.Span)
	r := e.report(x.Span, "signal-quotient",
		"%s divides by a signal; a ratio of transforms is a network function: function H = %s", text, text)
	line := e.text().Lines.Span(e.text().Lines.Line(x.Span.Start))
	if e.file == nil && len(text) < 30 {
		r.repairs(Repair{Title: "define a function and name it here", Edits: []Edit{
			{File: e.text(), Span: Span{line.Start, line.Start}, Text: "function H = " + text + "\n"},
			{File: e.text(), Span: x.Span, Text: "H"},
		}})
	}
	return false
}

// power works out X^Y.
func (e *evaluator) power(x *BinaryExpr, a, b operand) operand {
	if !b.constant || !b.plainNumber() {
		e.report(x.Y.Extent(), "not-dimensionless", "an exponent is a plain constant number, and %s is %s",
			e.written(x.Y.Extent()), pickWord(b.constant, e.describe(&b), "none"))
		return operand{}
	}
	if a.dim.Level {
		e.report(x.X.Extent(), "unit-mismatch", "a level in dB cannot be raised to a power")
		return operand{}
	}
	exponent := b.value.Rat()
	n, whole := smallInt(exponent)
	if !b.value.IsExact() {
		whole = false
	}
	o := a
	o.span = x.Span
	var ok bool
	if o.dim, ok = powerDimension(a.dim, exponent, n, whole && b.value.IsExact()); !ok {
		e.report(x.Span, "unit-mismatch", "%s is %s and has no unit to the power %s",
			e.written(x.X.Extent()), e.describe(&a), e.written(x.Y.Extent()))
		return operand{}
	}
	o.hz, o.rad, o.pi, o.either = scaled(a.hz, exponent), scaled(a.rad, exponent), a.pi && a.hz == 0, false
	o.bare = a.bare && b.bare
	if a.constant {
		value, err := a.value.Pow(b.value)
		if err != nil {
			e.report(x.Span, "no-value", "%s: %s", e.written(x.Span), failure(err))
			return operand{}
		}
		o.value = value
		return o
	}
	return e.powerOf(x, a, b, o, n, whole)
}

func pickWord(first bool, a, b string) string {
	if first {
		return a
	}
	return b
}

// powerOf raises what is no constant: whole powers of functions of s and of
// waveforms.
func (e *evaluator) powerOf(x *BinaryExpr, a, exponent, o operand, n int, whole bool) operand {
	switch {
	case !whole && !a.real:
		e.report(x.Y.Extent(), "not-rational", "%s can only be raised to a whole number", e.written(x.X.Extent()))
		return operand{}
	case a.degree != 0 && n != 1, e.in == inSignal && a.shape == ShapeSignal && n != 1:
		e.report(x.Span, "signal-product", "signals add and scale, but have no powers: the power of a part is p[PART]")
		return operand{}
	case n > 64 || n < -64:
		e.report(x.Y.Extent(), "too-large", "the exponent is larger than 64")
		return operand{}
	}
	o.size += a.size*int32(max(n, -n, 1)) + 1
	o.x = &Binary{Typed: o.typed(), Op: '^', X: a.expression(), Y: exponent.expression()}
	return o
}

// smallInt is the integer that a rational is.
func smallInt(r *big.Rat) (int, bool) {
	if !r.IsInt() || !r.Num().IsInt64() {
		return 0, false
	}
	n := r.Num().Int64()
	if n > 1<<20 || n < -(1<<20) {
		return 0, false
	}
	return int(n), true
}

// powerDimension is the dimension of a power; a half is allowed where the
// square root has a unit.
func powerDimension(d Dimension, exponent *big.Rat, n int, whole bool) (Dimension, bool) {
	if d == DimensionNumber {
		return d, true
	}
	if whole {
		return d.Power(n)
	}
	twice, ok := smallInt(new(big.Rat).Mul(exponent, big.NewRat(2, 1)))
	if !ok {
		return d, false
	}
	if d, ok = d.Power(twice); !ok {
		return d, false
	}
	return d.Root()
}

// scaled multiplies a count of cycles or radians; what does not come out even
// is dropped.
func scaled(count int8, by *big.Rat) int8 {
	if count == 0 {
		return 0
	}
	p := new(big.Rat).Mul(big.NewRat(int64(count), 1), by)
	n, ok := smallInt(p)
	if !ok || n > maxExponent || n < -maxExponent {
		return 0
	}
	return int8(n)
}
