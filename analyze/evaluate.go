package analyze

import (
	"context"
	"fmt"
	"math/big"

	"portlight/analyze/frequency"
	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// spot is where an expression is evaluated: at an angular frequency, at a
// time, over a range that measures look at, or nowhere in particular.
type spot struct {
	configuration configuration
	omega         *number.Ball  // rad/s
	time          *number.Exact // s
	side          response.Side // of the time
	from, to      *dialect.Constant
	// double is set where a value may be, and was, computed in double precision.
	double *bool
}

// placeOf reads a place from qualifiers, for an expression of a shape.
func placeOf(q dialect.Qualifiers, shape dialect.Shape, prec uint) spot {
	p := spot{configuration: configurationOf(q), from: q.From, to: q.To, side: response.Right}
	at := q.At
	if q.Before != nil {
		at, p.side = q.Before, response.Left
	}
	if at == nil {
		return p
	}
	if shape == dialect.ShapeSignal {
		t := at.Value
		p.time = &t
	} else {
		w := number.BallFromExact(at.Value, prec)
		p.omega = &w
	}
	return p
}

// value evaluates an expression to a number with a working precision of prec
// bits: a complex one at a frequency, a real one otherwise. Levels are in dB,
// angles in radians, frequencies in rad/s.
func (a *Analysis) value(ctx context.Context, e dialect.Expression, at spot, prec uint) (number.ComplexBall, error) {
	if err := ctx.Err(); err != nil {
		return number.ComplexBall{}, err
	}
	switch e := e.(type) {
	case *dialect.Constant:
		return realBall(number.BallFromExact(e.Value, prec)), nil
	case *dialect.Negate:
		x, err := a.value(ctx, e.X, at, prec)
		return x.Neg(), err
	case *dialect.Binary:
		if e.Shape() == dialect.ShapeFunction && isRational(e) && !e.Dim().Level {
			return a.functionValue(ctx, e, at)
		}
		return a.binaryValue(ctx, e, at, prec)
	case *dialect.Call:
		return a.callValue(ctx, e, at, prec)
	case *dialect.At:
		return a.value(ctx, e.X, a.moved(e, at, prec), prec)
	case *dialect.FunctionValue:
		return a.functionValue(ctx, e, at)
	case *dialect.Variable:
		return a.variableValue(e, at, prec)
	case *dialect.Quantity:
		if e.Probe.Letter == 'z' || e.Probe.Letter == 'y' {
			return a.functionValue(ctx, e, at)
		}
		return a.signalPoint(ctx, e, at, prec)
	}
	return number.ComplexBall{}, refuse("not-decided", "this expression has no value")
}

func realBall(b number.Ball) number.ComplexBall {
	return number.ComplexBall{Re: b, Im: number.BallFromInt(0, b.Prec())}
}

// moved is the place that X(where) looks at.
func (a *Analysis) moved(e *dialect.At, at spot, prec uint) spot {
	if e.X.Shape() == dialect.ShapeSignal {
		t := e.Where.Value
		at.time, at.side = &t, response.Right
	} else {
		w := number.BallFromExact(e.Where.Value, prec)
		at.omega = &w
	}
	return at
}

func (a *Analysis) variableValue(e *dialect.Variable, at spot, prec uint) (number.ComplexBall, error) {
	switch {
	case e.Name == "s" && at.omega != nil:
		return number.ComplexBall{Re: number.BallFromInt(0, prec), Im: *at.omega}, nil
	case e.Name == "t" && at.time != nil:
		return realBall(number.BallFromExact(*at.time, prec)), nil
	}
	return number.ComplexBall{}, refuse("frequency-missing", fmt.Sprintf("%s has no value here: say at which frequency, as in “at 1 kHz”", e.Name))
}

// functionValue evaluates a rational function of s on the imaginary axis.
func (a *Analysis) functionValue(ctx context.Context, e dialect.Expression, at spot) (number.ComplexBall, error) {
	f, err := a.function(ctx, e, at.configuration)
	if large, ok := inDouble(err); ok && at.omega != nil && at.double != nil {
		*at.double = true
		return a.valueInDouble(ctx, large, *at.omega)
	}
	if err != nil {
		return number.ComplexBall{}, err
	}
	if f.constant.IsConstant() && at.omega == nil {
		return realBall(number.BallFromRat(f.constant.Num.Coeff(0), 256)), nil
	}
	if at.omega == nil {
		return number.ComplexBall{}, refuse("frequency-missing", "say at which frequency, as in “at 1 kHz”")
	}
	if at.omega.IsExact() && f.constant.Den.EvalComplexBall(number.ComplexBall{Im: *at.omega}).ContainsZero() {
		return number.ComplexBall{}, refuse("pole-at-frequency", "the function has a pole at exactly this frequency: it has no value there")
	}
	return frequency.At(f.constant, *at.omega), nil
}

// binaryValue does arithmetic between numbers; a plain ratio that meets a
// level becomes one.
func (a *Analysis) binaryValue(ctx context.Context, e *dialect.Binary, at spot, prec uint) (number.ComplexBall, error) {
	x, err := a.value(ctx, e.X, at, prec)
	if err != nil {
		return x, err
	}
	y, err := a.value(ctx, e.Y, at, prec)
	if err != nil {
		return y, err
	}
	if (e.Op == '+' || e.Op == '-') && e.Dim().Level {
		x, y = levelIfPlain(x, e.X, prec), levelIfPlain(y, e.Y, prec)
	}
	switch e.Op {
	case '+':
		return x.Add(y), nil
	case '-':
		return x.Sub(y), nil
	case '*':
		return x.Mul(y), nil
	case '/':
		if y.ContainsZero() {
			return x, refuse("division-by-zero", "the divisor is zero, or cannot be told from zero")
		}
		return x.Quo(y), nil
	}
	return powerValue(x, y, e)
}

func powerValue(x, y number.ComplexBall, e *dialect.Binary) (number.ComplexBall, error) {
	if n, ok := integerOf(e.Y); ok && n >= -4096 && n <= 4096 {
		return x.PowInt(int(n)), nil
	}
	if sign, sure := x.Re.Sign(); !x.Im.IsExact() || !sure || sign <= 0 {
		return x, refuse("not-decided", "only a positive number can be raised to a power that is not a whole number")
	}
	return realBall(x.Re.Log().Mul(y.Re).Exp()), nil
}

// levelIfPlain turns a plain ratio into a level in dB.
func levelIfPlain(x number.ComplexBall, e dialect.Expression, prec uint) number.ComplexBall {
	if e.Dim().Level {
		return x
	}
	return realBall(level(x.Abs(), prec))
}

// level is 20·log₁₀ of a magnitude.
func level(magnitude number.Ball, prec uint) number.Ball {
	ten := number.BallFromInt(10, prec).Log()
	return magnitude.Log().Quo(ten).MulInt(20)
}

// callValue applies a function, a measure of a function, or a measure of a signal.
func (a *Analysis) callValue(ctx context.Context, e *dialect.Call, at spot, prec uint) (number.ComplexBall, error) {
	if isMeasure(e.Name) {
		m, err := a.measure(ctx, e, at, prec)
		return realBall(m.value), err
	}
	if isPartOf(e.Name) {
		return a.signalPoint(ctx, e, at, prec)
	}
	if e.Name == "u" {
		return a.stepValue(ctx, e, at, prec)
	}
	args := make([]number.ComplexBall, len(e.Args))
	for i, x := range e.Args {
		var err error
		if args[i], err = a.value(ctx, x, at, prec); err != nil {
			return args[i], err
		}
		if e.Dim().Level && (e.Name == "min" || e.Name == "max") {
			args[i] = levelIfPlain(args[i], x, prec)
		}
	}
	return apply(e.Name, args, prec)
}

// apply is the functions of numbers.
func apply(name string, args []number.ComplexBall, prec uint) (number.ComplexBall, error) {
	x := args[0]
	switch name {
	case "abs", "gain":
		return realBall(x.Abs()), nil
	case "real":
		return realBall(x.Re), nil
	case "imag":
		return realBall(x.Im), nil
	case "phase":
		return realBall(x.Arg()), nil
	case "dB":
		return realBall(level(x.Abs(), prec)), nil
	case "sqrt":
		return realBall(x.Re.Sqrt()), nil
	case "exp":
		return x.Exp(), nil
	case "log":
		return realBall(x.Re.Log()), nil
	case "sin":
		s, _ := x.Re.SinCos()
		return realBall(s), nil
	case "cos":
		_, c := x.Re.SinCos()
		return realBall(c), nil
	case "min", "max":
		out := x.Re
		for _, y := range args[1:] {
			out = extremeOf(out, y.Re, name == "max")
		}
		return realBall(out), nil
	}
	return x, refuse("not-decided", name+" has no value here")
}

// extremeOf is the lesser or greater of two numbers; undecided, both ends.
func extremeOf(x, y number.Ball, greatest bool) number.Ball {
	order, sure := x.Cmp(y)
	switch {
	case !sure:
		return x.Union(y)
	case (order > 0) == greatest:
		return x
	}
	return y
}

// stepValue is the unit step at a time: 1 from its instant on.
func (a *Analysis) stepValue(ctx context.Context, e *dialect.Call, at spot, prec uint) (number.ComplexBall, error) {
	x, err := a.value(ctx, e.Args[0], at, prec)
	if err != nil {
		return x, err
	}
	sign, sure := x.Re.Sign()
	if !sure {
		return x, refuse("not-decided", "it cannot be decided on which side of the step this time lies")
	}
	if sign > 0 || sign == 0 && at.side == response.Right {
		return realBall(number.BallFromInt(1, prec)), nil
	}
	return realBall(number.BallFromInt(0, prec)), nil
}

// isPartOf tells the words that take a part of a signal by its cause.
func isPartOf(name string) bool {
	switch name {
	case "zir", "zsr", "due", "natural", "forced":
		return true
	}
	return false
}

// wantedBits is the relative precision of a value written for other programs:
// 20 significant digits and a margin.
const wantedBits = 72

// maxValueBits bounds the working precision of a single value.
const maxValueBits = 4096

// refined evaluates with growing precision until the digits for other
// programs are decided, or the value is plainly zero to all of them.
func refined(ctx context.Context, f func(prec uint) (number.ComplexBall, error)) (number.ComplexBall, error) {
	for prec := uint(192); ; prec *= 2 {
		v, err := f(prec)
		if err != nil {
			return v, err
		}
		if err := ctx.Err(); err != nil {
			return v, err
		}
		if decidedTo(v, wantedBits) || prec >= maxValueBits || v.Prec() <= 64 {
			return v, nil
		}
	}
}

// decidedTo tells whether a value is known to so many bits of its size; a
// part that is negligible beside the other counts with the size of the whole.
func decidedTo(v number.ComplexBall, bits int64) bool {
	if v.Re.RelativeBits() >= bits && v.Im.RelativeBits() >= bits {
		return true
	}
	size := v.Abs()
	if size.ContainsZero() {
		return v.Re.IsExact() && v.Im.IsExact()
	}
	limit := new(big.Float).SetMantExp(size.Lower(), -int(bits)-40)
	small := func(b number.Ball) bool { return b.RelativeBits() >= bits || b.Rad().Cmp(limit) <= 0 }
	return small(v.Re) && small(v.Im)
}
