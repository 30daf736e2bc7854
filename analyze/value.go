package analyze

import (
	"context"
	"errors"
	"math/big"

	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// valueAnswer is a number: a constant, a value at a frequency, arithmetic on measures.
func (a *Analysis) valueAnswer(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	shape := q.What.Shape()
	double := false
	v, err := refined(ctx, func(prec uint) (number.ComplexBall, error) {
		at := placeOf(q.Qualifiers, shape, prec)
		at.configuration, at.double = c, &double
		return a.value(ctx, q.What, at, prec)
	})
	if err != nil {
		return nil, err
	}
	out := &ValueAnswer{
		Question: head, Dimension: q.What.Dim(), Value: v, Magnitude: v.Abs(), Proved: !double,
		At: q.Qualifiers.At, Complex: shape == dialect.ShapeFunction && isRational(q.What),
	}
	if k, ok := q.What.(*dialect.Constant); ok {
		out.Hertz = k.Hertz
	}
	if at, ok := q.What.(*dialect.At); ok && at.X.Shape() == dialect.ShapeFunction && isRational(at.X) {
		out.Complex, out.At = true, at.Where
	}
	if out.Complex {
		out.Phase = degrees(angle(v))
		out.Remarks = append(out.Remarks, a.remarksOf(ctx, q.What, c)...)
	} else {
		out.Magnitude = v.Re.Abs()
	}
	return out, nil
}

// angle is the principal value of the angle, whole where a value lies on the
// negative real axis to within its bound: there the two ends of the range meet.
func angle(v number.ComplexBall) number.Ball {
	if sign, sure := v.Re.Sign(); sure && sign < 0 && v.Im.ContainsZero() {
		return v.Neg().Arg().Add(number.BallFromExact(number.Pi(), v.Prec()))
	}
	return v.Arg()
}

// remarksOf gives what a function's evaluation remarked.
func (a *Analysis) remarksOf(ctx context.Context, e dialect.Expression, c configuration) []string {
	if f, err := a.function(ctx, e, c); err == nil {
		return f.remarks
	}
	return nil
}

// degrees turns radians into degrees.
func degrees(b number.Ball) number.Ball {
	prec := b.Prec()
	return b.Mul(number.BallFromInt(180, prec)).Quo(number.BallFromExact(number.Pi(), prec))
}

// signalAnswer is a signal in closed form.
func (a *Analysis) signalAnswer(ctx context.Context, head Question, e dialect.Expression, c configuration) (Answer, error) {
	s, err := a.linear(ctx, e, c)
	if errors.Is(err, errNotLinear) {
		return a.curveAnswer(ctx, head, e, c)
	}
	if err != nil {
		return nil, err
	}
	out := &SignalAnswer{Question: head, Dimension: e.Dim(), Signal: s}
	if s.Coincides() {
		out.Remarks = append(out.Remarks, "a source drives a natural frequency of the network: the part at that frequency counts as forced")
	}
	return out, nil
}

// curveAnswer is the closed form of a power and the like.
func (a *Analysis) curveAnswer(ctx context.Context, head Question, e dialect.Expression, c configuration) (Answer, error) {
	curve, err := a.curve(ctx, e, c)
	if err != nil {
		return nil, err
	}
	if !curve.HasClosedForm() {
		return nil, refuse("no-closed-form", "this changes its form wherever signals cross, so it has no one closed form: ask its value “at 1 ms”, a range “to 10 ms”, or a measure such as peak(…)")
	}
	out := &CurveAnswer{Question: head, Dimension: e.Dim(), Curve: curve}
	at, err := curve.ImpulseIn(ctx, response.Range{})
	if at != nil {
		out.Remarks = append(out.Remarks, "an impulse at t = "+ratFigure(at, "s")+" has no product with another signal: the form holds besides")
	}
	return out, err
}

// answerDigits is how many significant digits values for other programs carry.
const answerDigits = 20

// point is the value of an expression at a time, with what causes it.
func (a *Analysis) signalValueAnswer(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	at, side := q.Qualifiers.At, response.Right
	if q.Qualifiers.Before != nil {
		at, side = q.Qualifiers.Before, response.Left
	}
	t := at.Value.Rat()
	if t.Sign() < 0 {
		return nil, refuse("not-positive", "responses are known from t = 0 on; ask “before 0 s” for the left limit there")
	}
	out := &SignalValueAnswer{Question: head, Dimension: q.What.Dim(), At: at.Value, Proved: true}
	s, err := a.linear(ctx, q.What, c)
	if errors.Is(err, errNotLinear) {
		return a.curveValueAnswer(ctx, q, out, t, side, c)
	}
	if isLarge(err) {
		return a.largeValue(ctx, q, out, t, c)
	}
	if err != nil {
		return nil, err
	}
	parts := []struct {
		signal        *response.Signal
		value, before *number.Ball
	}{
		{s, &out.Total, &out.BeforeTotal},
		{s.ZeroInput(), &out.ZeroInput, &out.BeforeZeroInput},
		{s.ZeroState(), &out.ZeroState, &out.BeforeZeroState},
	}
	jumps := isBreakpoint(s, t) && side == response.Right
	for _, p := range parts {
		if *p.value, err = signalValue(ctx, p.signal, t, side); err != nil {
			return nil, err
		}
		if jumps {
			if *p.before, err = signalValue(ctx, p.signal, t, response.Left); errors.Is(err, response.ErrBeforeUndefined) {
				jumps = false
				out.Remarks = append(out.Remarks, "the value at 0− does not follow from the capacitor voltages and inductor currents there")
			} else if err != nil {
				return nil, err
			}
		}
	}
	if jumps {
		order, sure := out.Total.Cmp(out.BeforeTotal)
		out.Jump = sure && order != 0
	}
	out.Impulses, err = impulsesAt(ctx, s, t)
	return out, err
}

func isBreakpoint(s *response.Signal, t *big.Rat) bool {
	for _, b := range s.Breakpoints() {
		if b.Cmp(t) == 0 {
			return true
		}
	}
	return false
}

// signalValue is exact where the value is rational for sure.
func signalValue(ctx context.Context, s *response.Signal, t *big.Rat, side response.Side) (number.Ball, error) {
	if r, ok, err := s.ExactAt(ctx, t, side); err != nil || ok {
		return number.BallFromRat(orZero(r), 256), err
	}
	v, err := s.Value(ctx, t, side, answerDigits)
	if errors.Is(err, response.ErrPrecision) {
		err = nil
	}
	return v, err
}

func orZero(r *big.Rat) *big.Rat {
	if r == nil {
		return new(big.Rat)
	}
	return r
}

func impulsesAt(ctx context.Context, s *response.Signal, t *big.Rat) ([]number.Ball, error) {
	groups, err := s.Impulses(ctx, answerDigits)
	if err != nil {
		return nil, err
	}
	for _, g := range groups {
		if g.At.Cmp(t) == 0 {
			return g.Weights, nil
		}
	}
	return nil, nil
}

// curveValueAnswer is the value of what is no sum of signals, such as a power.
func (a *Analysis) curveValueAnswer(ctx context.Context, q *dialect.Question, out *SignalValueAnswer, t *big.Rat, side response.Side, c configuration) (Answer, error) {
	v, err := a.curveValue(ctx, q.What, c, t, side)
	if err != nil {
		return nil, err
	}
	answer := &ValueAnswer{Question: out.Question, Dimension: out.Dimension, Value: realBall(v), Magnitude: v.Abs(), Proved: true}
	return answer, nil
}

func (a *Analysis) curveValue(ctx context.Context, e dialect.Expression, c configuration, t *big.Rat, side response.Side) (number.Ball, error) {
	curve, err := a.curve(ctx, e, c)
	if err != nil {
		return number.Ball{}, err
	}
	v, err := curve.Value(ctx, t, side, answerDigits)
	if errors.Is(err, response.ErrPrecision) {
		err = nil
	}
	return v, err
}

// signalPoint evaluates a signal inside an expression that has a time.
func (a *Analysis) signalPoint(ctx context.Context, e dialect.Expression, at spot, prec uint) (number.ComplexBall, error) {
	if at.time == nil {
		return number.ComplexBall{}, refuse("frequency-missing", "say at which time, as in “at 2 ms”")
	}
	digits := int(prec*3/10) - 8
	t := at.time.Rat()
	if t.Sign() < 0 {
		return number.ComplexBall{}, refuse("not-positive", "responses are known from t = 0 on")
	}
	s, err := a.linear(ctx, e, at.configuration)
	var v number.Ball
	switch {
	case err == nil:
		v, err = s.Value(ctx, t, at.side, digits)
	case errors.Is(err, errNotLinear):
		v, err = a.curveValue(ctx, e, at.configuration, t, at.side)
	}
	if errors.Is(err, response.ErrPrecision) {
		err = nil
	}
	return realBall(v), err
}
