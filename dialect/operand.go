package dialect

import (
	"errors"

	"portlight/dialect/number"
)

// setting is the place an expression stands in; it decides which names and
// quantities may occur and what they mean.
type setting int

const (
	inLet      setting = iota // a let on its own: anything
	inConstant                // a value, an option, a qualifier: numbers alone
	inRational                // an impedance or admittance: numbers and s
	inSource                  // a source: t, or quantities with coefficients in s
	inFunction                // a function: responses over excitations
	inSignal                  // tell and require
)

// contents is what occurs in an expression.
type contents uint8

const (
	hasS contents = 1 << iota
	hasT
	hasQuantity
	hasStep // u(t) or delta(t)
)

// operand is the value of an expression while it is worked out. The zero
// value stands for one that has been reported already.
type operand struct {
	ok       bool
	constant bool
	value    number.Exact // when constant: coherent, but a count where hz is set
	x        Expression   // when not constant
	dim      Dimension    // exponents and Level; the frequency sorts are below
	// hz and rad count the powers of cycles and of radians in it. A plain
	// frequency in hertz has hz 1 and its value in cycles per second.
	hz, rad int8
	pi      bool // a factor of π not yet set against a frequency in hertz
	either  bool // a frequency that stands for hertz and for rad/s alike
	bare    bool // made of numbers without any unit
	real    bool // a real function of frequency, such as gain(H)
	bent    bool // abs, min, max or a level in it: no longer linear, nor rational
	complex bool // a complex number, such as H(1 kHz)
	shape   Shape
	degree  int8 // in functions: 1 for responses and excitations
	has     contents
	size    int32 // nodes of the expression tree
	span    Span
}

// isComplex says that the operand has no order: it cannot be compared.
func (o *operand) isComplex() bool { return o.complex || o.shape == ShapeFunction && !o.real }

// constantOperand makes a constant operand.
func constantOperand(x number.Exact, d Dimension, span Span) operand {
	return operand{ok: true, constant: true, value: x, dim: d, span: span, size: 1}
}

// typed gives the common part of an expression node for an operand.
func (o *operand) typed() Typed {
	return Typed{Dimension: o.sorted(), Form: o.shape, Span: o.span}
}

// sorted is the dimension with the sorts of frequency and angle.
func (o *operand) sorted() Dimension {
	d := o.dim
	switch {
	case d == DimensionRate && (o.rad == 1 && o.hz == 0):
		d.Frequency = true
	case d == DimensionNumber && o.rad == 1 && o.hz == 0:
		d.Angle = true
	}
	return d
}

// isHertz says that the operand is a frequency written in hertz.
func (o *operand) isHertz() bool { return o.dim == DimensionRate && o.hz == 1 && o.rad == 0 }

// isRadian says that the operand is an angular frequency.
func (o *operand) isRadian() bool { return o.dim == DimensionRate && o.rad == 1 && o.hz == 0 }

// plainNumber says that the operand has neither dimension nor level.
func (o *operand) plainNumber() bool { return o.dim == DimensionNumber }

// expression is the operand as it stands inside a larger expression.
func (o *operand) expression() Expression {
	if !o.constant {
		return o.x
	}
	return &Constant{Typed: Typed{Dimension: o.dim, Form: ShapeNumber, Span: o.span}, Value: o.value}
}

var twoPi = number.Pi().Mul(number.FromInt(2))

// twoPiConstant is the constant that a frequency in hertz is converted with.
var twoPiConstant = &Constant{Value: twoPi}

// radians is the value of a frequency in rad/s.
func (o *operand) radians() number.Exact {
	if o.hz == 1 {
		return o.value.Mul(twoPi)
	}
	return o.value
}

// finish is the operand as a whole expression of the Description: frequencies
// in rad/s, angles and frequencies marked as such.
func (o *operand) finish() Expression {
	if o.constant {
		c := &Constant{Typed: o.typed(), Value: o.value}
		c.Form = ShapeNumber
		if o.isHertz() {
			c.Value, c.Hertz, c.Dimension = o.radians(), true, DimensionFrequency
		}
		return c
	}
	if !o.isHertz() {
		return o.x
	}
	typed := o.typed()
	typed.Dimension = DimensionFrequency
	if b, ok := o.x.(*Binary); ok && b.Op == '/' && b.Y == Expression(twoPiConstant) {
		return b.X
	}
	return &Binary{Typed: typed, Op: '*', X: o.x, Y: twoPiConstant}
}

// failure puts an error of the arithmetic into words.
func failure(err error) string {
	switch {
	case errors.Is(err, number.ErrDivisionByZero):
		return "division by zero"
	case errors.Is(err, number.ErrUndecided):
		return "the number cannot be told from zero within the bound it is known to"
	case errors.Is(err, number.ErrRange):
		return "the number is too large, too small or too long"
	case errors.Is(err, number.ErrDomain):
		return "there is no real value"
	}
	return "there is no value"
}
