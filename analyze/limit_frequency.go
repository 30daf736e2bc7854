package analyze

import (
	"context"
	"errors"
	"math/big"

	"portlight/analyze/exact"
	"portlight/analyze/frequency"
	"portlight/dialect"
	"portlight/dialect/number"
)

// decideFunction decides a limit over a range of frequency. A side that is a
// magnitude, phase, delay, real or imaginary part of one function, shifted,
// scaled or inside abs(… − constant), is decided at its extremes, which are
// roots of exact polynomials: that is a proof. Everything else is enclosed
// over ever smaller stretches of frequency.
func (a *Analysis) decideFunction(ctx context.Context, l *dialect.Limit) (Verdict, error) {
	r, err := limitRange(l.Qualifiers)
	if err != nil {
		return Verdict{}, err
	}
	places, err := a.candidates(ctx, l, r)
	if errors.Is(err, errMany) {
		return a.decideByBoxes(ctx, l, r)
	}
	if err != nil {
		return Verdict{}, err
	}
	return a.judgePlaces(ctx, l, places)
}

// limitRange reads a range of angular frequency; without one it is all of it.
func limitRange(q dialect.Qualifiers) (frequency.Range, error) {
	var r frequency.Range
	if q.From != nil {
		r.From = q.From.Value
	}
	if q.To != nil {
		to := q.To.Value
		r.To = &to
		if order, _ := r.From.Cmp(to); order >= 0 {
			return r, refuse("range-empty", "the range of frequency is empty")
		}
	}
	return r, nil
}

// errMany says that a limit looks at more than one function of frequency.
var errMany = errors.New("more than one function of frequency")

// limitBits is the working precision of extremes.
const limitBits = 256

// view is what a limit looks at: a curve along the imaginary axis.
type view struct {
	name string // gain, phase, real, imag, delay
	h    exact.Ratio
}

// candidates lists the frequencies among which the worst case is: the ends and
// extremes of the one curve in the limit.
func (a *Analysis) candidates(ctx context.Context, l *dialect.Limit, r frequency.Range) ([]frequency.Point, error) {
	c := configurationOf(l.Qualifiers)
	left, right := opened(l)
	views, err := a.views(ctx, left, c)
	if err != nil {
		return nil, err
	}
	more, err := a.views(ctx, right, c)
	if err != nil {
		return nil, err
	}
	views = append(views, more...)
	if len(views) != 1 || bent(left) || bent(right) {
		return nil, errMany
	}
	return views[0].points(ctx, r)
}

// opened takes abs(…) off the side that must stay small: |x| is largest where
// x is largest or smallest, so the extremes of what is inside decide.
func opened(l *dialect.Limit) (left, right dialect.Expression) {
	left, right = l.Left, l.Right
	side := &left
	if l.Relation == ">=" || l.Relation == ">" {
		side = &right
	}
	if call, ok := (*side).(*dialect.Call); ok && call.Name == "abs" && !isRational(call.Args[0]) {
		*side = call.Args[0]
	}
	return left, right
}

// points lists the ends and extremes of a view's curve.
func (v view) points(ctx context.Context, r frequency.Range) ([]frequency.Point, error) {
	switch v.name {
	case "phase":
		if v.h.IsZero() {
			return nil, refuse("undefined-measure", "a function that is zero everywhere has no phase")
		}
		p, err := frequency.NewPhase(ctx, v.h, limitBits)
		if err != nil {
			return nil, err
		}
		return p.Points(ctx, r, limitBits)
	case "real":
		return frequency.RealPart(v.h).Extremes(ctx, r, limitBits)
	case "imag":
		return frequency.ImaginaryPart(v.h).Extremes(ctx, r, limitBits)
	case "delay":
		return frequency.Delay(v.h).Extremes(ctx, r, limitBits)
	}
	points, err := frequency.MagnitudeSquared(v.h).Extremes(ctx, r, limitBits)
	for i := range points {
		points[i].Value = points[i].Value.Sqrt()
		points[i].Exact = rootOf(points[i].Exact)
	}
	return points, err
}

// rootOf is the square root of a rational square, nil for every other number.
func rootOf(x *number.Exact) *number.Exact {
	if x == nil || x.Rat().Sign() < 0 {
		return nil
	}
	num, den := new(big.Int).Sqrt(x.Rat().Num()), new(big.Int).Sqrt(x.Rat().Denom())
	r := new(big.Rat).SetFrac(num, den)
	if new(big.Rat).Mul(r, r).Cmp(x.Rat()) != 0 {
		return nil
	}
	root := number.FromRat(r)
	return &root
}

// views finds the functions of frequency in an expression.
func (a *Analysis) views(ctx context.Context, e dialect.Expression, c configuration) ([]view, error) {
	switch e := e.(type) {
	case *dialect.Call:
		switch e.Name {
		case "gain", "phase", "real", "imag", "delay", "abs", "dB":
			if arg := e.Args[0]; arg.Shape() == dialect.ShapeFunction && isRational(arg) && !arg.Dim().Level {
				f, err := a.function(ctx, arg, c)
				return []view{{e.Name, f.constant}}, err
			}
		}
		if isMeasure(e.Name) {
			return nil, nil
		}
		var out []view
		for _, x := range e.Args {
			more, err := a.views(ctx, x, c)
			if err != nil {
				return nil, err
			}
			out = append(out, more...)
		}
		return out, nil
	case *dialect.Negate:
		return a.views(ctx, e.X, c)
	case *dialect.Binary:
		x, err := a.views(ctx, e.X, c)
		if err != nil {
			return nil, err
		}
		y, err := a.views(ctx, e.Y, c)
		return append(x, y...), err
	case *dialect.FunctionValue, *dialect.Quantity:
		if e.Shape() == dialect.ShapeFunction {
			return nil, refuse("not-real", "a function of s has no order: limit its gain(…), phase(…), real(…) or imag(…)")
		}
	}
	return nil, nil
}

// bent tells whether an expression is no monotone function of its curve:
// then the worst case need not be at an extreme.
func bent(e dialect.Expression) bool {
	switch e := e.(type) {
	case *dialect.Call:
		switch e.Name {
		case "min", "max", "sin", "cos", "exp", "log", "sqrt":
			return true
		case "abs":
			return !isRational(e.Args[0])
		}
		return false
	case *dialect.Negate:
		return bent(e.X)
	case *dialect.Binary:
		_, constX := e.X.(*dialect.Constant)
		_, constY := e.Y.(*dialect.Constant)
		switch {
		case e.Op == '+' || e.Op == '-':
			return bent(e.X) || bent(e.Y)
		case e.Op == '*' && (constX || constY), e.Op == '/' && constY:
			return bent(e.X) || bent(e.Y)
		}
		return true
	}
	return false
}

// judgePlaces decides a limit at the candidates for the worst case.
func (a *Analysis) judgePlaces(ctx context.Context, l *dialect.Limit, places []frequency.Point) (Verdict, error) {
	v := Verdict{Decision: Holds, Proved: true, HasMargin: true, Dimension: l.Left.Dim()}
	first := true
	for _, p := range places {
		margin, worst, err := a.marginAt(ctx, l, p)
		if err != nil {
			return v, err
		}
		if p.Unbounded || !margin.IsFinite() {
			if d := unboundedDecision(l, p); d == Broken {
				why := "the magnitude grows without bound there"
				if falls(p) {
					why = "the magnitude falls to zero there, its level without bound"
				}
				return Verdict{Decision: Broken, Proved: true, HasWhere: !p.Infinite, Where: p.Omega, Dimension: v.Dimension, Why: why}, nil
			}
			continue
		}
		if !first && margin.Mid().Cmp(v.Margin.Mid()) >= 0 {
			continue
		}
		first = false
		v.Margin, v.Worst, v.Where, v.HasWhere = margin, worst, p.Omega, !p.Infinite
		sign, sure := margin.Sign()
		switch {
		case sure && sign < 0:
			v.Decision = Broken
		case sure && sign == 0 && p.Infinite:
			v.Decision = Holds // it is approached, and not reached
		case sure && sign == 0:
			v.Decision = onTheLimit(l.Relation)
		case !sure:
			v.Decision = a.decideTouch(l, p)
			if v.Decision == Undecided {
				v.Why = "the worst value cannot be told from the limit"
			}
		}
	}
	if first {
		v.HasMargin = false
	}
	return v, nil
}

// decideTouch settles a worst value that cannot be told from the limit by
// numbers: exactly, where the value is rational, or a multiple of π, and one side
// is nothing but the curve.
func (a *Analysis) decideTouch(l *dialect.Limit, p frequency.Point) Decision {
	side, k := l.Left, l.Right
	if _, turned := side.(*dialect.Constant); turned {
		side, k = k, side
	}
	call, plain := side.(*dialect.Call)
	level, constant := k.(*dialect.Constant)
	if !plain || !constant || p.Exact == nil || call.Name == "dB" || !isRational(call.Args[0]) ||
		call.Dim().Level != level.Dim().Level {
		return Undecided
	}
	order, sure := p.Exact.Cmp(level.Value)
	if !sure || order != 0 {
		return Undecided // the margin would have told
	}
	if p.Infinite {
		return Holds // it is approached, and not reached
	}
	return onTheLimit(l.Relation)
}

// unboundedDecision is for a pole on the axis or a growth towards infinite
// frequency: it breaks upper limits on a magnitude, and everything on what can
// have either sign.
func unboundedDecision(l *dialect.Limit, p frequency.Point) Decision {
	upper := l.Relation == "<=" || l.Relation == "<"
	if _, ok := l.Left.(*dialect.Constant); ok {
		upper = !upper
	}
	if upper != falls(p) {
		return Broken
	}
	return Holds
}

// falls tells a magnitude of zero, whose level has no lower bound, from one
// that grows without bound.
func falls(p frequency.Point) bool { return !p.Unbounded && p.Value.ContainsZero() }

// marginAt evaluates both sides at a candidate. The curve's own value there is
// what its polynomial gives; the sides are evaluated afresh from it.
func (a *Analysis) marginAt(ctx context.Context, l *dialect.Limit, p frequency.Point) (margin, worst number.Ball, err error) {
	if p.Unbounded {
		return margin, worst, nil
	}
	c := configurationOf(l.Qualifiers)
	left, err := a.sideAt(ctx, l.Left, c, p)
	if err != nil {
		return margin, worst, err
	}
	right, err := a.sideAt(ctx, l.Right, c, p)
	if err != nil {
		return margin, worst, err
	}
	if l.Left.Dim().Level != l.Right.Dim().Level {
		left = levelIfPlain(realBall(left), l.Left, limitBits).Re
		right = levelIfPlain(realBall(right), l.Right, limitBits).Re
	}
	return marginOf(left, right, l.Relation), left, nil
}

// sideAt evaluates a side with the one curve in it replaced by its value.
func (a *Analysis) sideAt(ctx context.Context, e dialect.Expression, c configuration, p frequency.Point) (number.Ball, error) {
	switch e := e.(type) {
	case *dialect.Constant:
		return number.BallFromExact(e.Value, limitBits), nil
	case *dialect.Negate:
		x, err := a.sideAt(ctx, e.X, c, p)
		return x.Neg(), err
	case *dialect.Binary:
		x, err := a.sideAt(ctx, e.X, c, p)
		if err != nil {
			return x, err
		}
		y, err := a.sideAt(ctx, e.Y, c, p)
		if err != nil {
			return y, err
		}
		if e.Dim().Level && (e.Op == '+' || e.Op == '-') {
			x, y = levelIfPlain(realBall(x), e.X, limitBits).Re, levelIfPlain(realBall(y), e.Y, limitBits).Re
		}
		return map[byte]func(number.Ball) number.Ball{'+': x.Add, '-': x.Sub, '*': x.Mul, '/': x.Quo}[e.Op](y), nil
	case *dialect.Call:
		if isMeasure(e.Name) && e.Name != "phase" && e.Name != "delay" {
			v, err := a.value(ctx, e, spot{configuration: c}, limitBits)
			return v.Re, err
		}
		switch {
		case e.Name == "dB":
			return level(p.Value, limitBits), nil
		case e.Name == "abs" && !isRational(e.Args[0]):
			x, err := a.sideAt(ctx, e.Args[0], c, p)
			return x.Abs(), err
		}
		return p.Value, nil
	}
	v, err := a.value(ctx, e, spot{configuration: c}, limitBits)
	return v.Re, err
}
