package analyze

import (
	"context"
	"errors"
	"fmt"

	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// Verdicts decides every require line, in the order of the text.
func (a *Analysis) Verdicts(ctx context.Context) ([]Verdict, error) {
	return recall(ctx, &a.memo, "verdicts", func(ctx context.Context) ([]Verdict, error) {
		out := make([]Verdict, 0, len(a.description.Limits))
		for i := range a.description.Limits {
			l := &a.description.Limits[i]
			if l.Why != "" {
				out = append(out, Verdict{Limit: l, Decision: Undecided, InTolerance: Undecided, Why: l.Why})
				continue
			}
			v, err := recall(ctx, &a.shared().memo, limitKey(l), func(ctx context.Context) (Verdict, error) {
				return a.verdict(ctx, l)
			})
			if err != nil {
				return nil, err
			}
			v.Limit = l
			out = append(out, v)
		}
		return out, nil
	})
}

// verdict decides one limit at the nominal values, then within tolerances.
func (a *Analysis) verdict(ctx context.Context, l *dialect.Limit) (Verdict, error) {
	v := Verdict{Limit: l, InTolerance: Undecided}
	if a.description.Faults {
		v.Decision, v.Why = Undecided, "the network is not complete because of the errors reported"
		return v, nil
	}
	decided, err := a.decide(ctx, l)
	if passOn(ctx, err) {
		return v, err
	}
	if err != nil {
		v.Decision, v.Why = Undecided, errText(err)
		return v, nil
	}
	decided.Limit = l
	decided.InTolerance = decided.Decision
	if l.Nominal || decided.Decision != Holds {
		return decided, nil
	}
	return decided, a.tolerate(ctx, l, &decided)
}

// decide decides a limit at the values the network has.
func (a *Analysis) decide(ctx context.Context, l *dialect.Limit) (Verdict, error) {
	if l.Right == nil {
		return a.decideFact(ctx, l)
	}
	shape := shapeOf(l)
	switch {
	case shape == dialect.ShapeSignal && !atPoint(l):
		return a.decideSignal(ctx, l)
	case shape == dialect.ShapeFunction && !atPoint(l):
		return a.decideFunction(ctx, l)
	}
	return a.decidePoint(ctx, l, shape)
}

// shapeOf is what a limit varies with: time, frequency, or nothing.
func shapeOf(l *dialect.Limit) dialect.Shape {
	for _, e := range []dialect.Expression{l.Left, l.Right} {
		if s := e.Shape(); s == dialect.ShapeSignal || s == dialect.ShapeFunction {
			return s
		}
	}
	return dialect.ShapeNumber
}

func atPoint(l *dialect.Limit) bool { return l.Qualifiers.At != nil || l.Qualifiers.Before != nil }

func (a *Analysis) decideFact(ctx context.Context, l *dialect.Limit) (Verdict, error) {
	q := &dialect.Question{What: l.Left, Qualifiers: l.Qualifiers}
	answer, err := a.factAnswer(ctx, q, Question{}, configurationOf(l.Qualifiers))
	if err != nil {
		return Verdict{}, err
	}
	fact := answer.(*FactAnswer)
	v := Verdict{Decision: Broken, Proved: fact.Proved, Why: fact.Why}
	if fact.True {
		v.Decision = Holds
	}
	return v, nil
}

// decidePoint compares two numbers, with precision raised until their order
// is decided.
func (a *Analysis) decidePoint(ctx context.Context, l *dialect.Limit, shape dialect.Shape) (Verdict, error) {
	v := Verdict{Decision: Undecided, Dimension: l.Left.Dim(), HasMargin: true, Proved: true}
	for prec := uint(192); prec <= maxValueBits; prec *= 2 {
		at := placeOf(l.Qualifiers, shape, prec)
		left, right, err := a.sides(ctx, l, at, prec)
		if err != nil {
			return v, err
		}
		v.Worst = left
		v.Margin = marginOf(left, right, l.Relation)
		sign, sure := v.Margin.Sign()
		switch {
		case sure && sign > 0:
			v.Decision = Holds
		case sure && sign < 0:
			v.Decision = Broken
		case sure:
			v.Decision = onTheLimit(l.Relation)
		}
		if v.Decision != Undecided && (sign == 0 || v.Margin.RelativeBits() >= wantedBits/2) {
			break
		}
	}
	if v.Decision == Undecided {
		v.Why = "the value cannot be told from the limit: it lies on it to within the bound of the irrational values"
	}
	if call, ok := l.Left.(*dialect.Call); ok && isMeasure(call.Name) {
		at := placeOf(l.Qualifiers, shape, 192)
		if m, err := a.measure(ctx, call, at, 192); err == nil && m.hasWhere && m.where.IsFinite() {
			v.HasWhere, v.InTime, v.Where = true, m.inTime, m.where
		}
	}
	if at := l.Qualifiers.At; at != nil {
		v.HasWhere, v.InTime = true, shape == dialect.ShapeSignal
		v.Where = number.BallFromExact(at.Value, 192)
	}
	return v, nil
}

// sides evaluates both sides of a limit, as levels where one of them is one.
func (a *Analysis) sides(ctx context.Context, l *dialect.Limit, at spot, prec uint) (left, right number.Ball, err error) {
	x, err := a.value(ctx, l.Left, at, prec)
	if err != nil {
		return left, right, err
	}
	y, err := a.value(ctx, l.Right, at, prec)
	if err != nil {
		return left, right, err
	}
	if l.Left.Dim().Level != l.Right.Dim().Level {
		x, y = levelIfPlain(x, l.Left, prec), levelIfPlain(y, l.Right, prec)
	}
	return x.Re, y.Re, nil
}

// marginOf is how far the left side is on the good side of the right one.
func marginOf(left, right number.Ball, relation string) number.Ball {
	if relation == "<=" || relation == "<" {
		return right.Sub(left)
	}
	return left.Sub(right)
}

// onTheLimit decides equality.
func onTheLimit(relation string) Decision {
	if relation == "<" || relation == ">" {
		return Broken
	}
	return Holds
}

// decideSignal decides a limit on a signal over a range of time.
func (a *Analysis) decideSignal(ctx context.Context, l *dialect.Limit) (Verdict, error) {
	c := configurationOf(l.Qualifiers)
	inexact := workedOut(l.Left) || workedOut(l.Right)
	l, err := a.limitWithNumbers(ctx, l, c)
	if err != nil {
		return Verdict{}, err
	}
	curve, level, relation, err := a.againstConstant(ctx, l, c)
	if err != nil {
		return Verdict{}, err
	}
	r := rangeOf(spot{from: l.Qualifiers.From, to: l.Qualifiers.To})
	d, err := curve.Decide(ctx, relation, level, r)
	if errors.Is(err, response.ErrRange) {
		return Verdict{}, refuse("range-empty", "the range of time is empty")
	}
	if err != nil {
		return Verdict{}, err
	}
	v := Verdict{
		Decision: Decision(d.Outcome), Proved: d.Outcome != response.Undecided, Dimension: l.Left.Dim(),
		Why: d.Why, HasMargin: d.Margin.IsFinite() && d.Outcome != response.Undecided && d.Why == "",
		Margin: d.Margin, Worst: d.Worst.Value, InTime: true,
	}
	if d.Worst.HasAt {
		v.HasWhere, v.Where = true, d.Worst.At
	}
	if v.HasMargin && (inexact || !level.IsExact()) && negligibleBeside(v.Margin, v.Worst) {
		v.Decision, v.Proved, v.HasMargin = Undecided, false, false
		v.Why = "the worst value cannot be told from the limit"
	}
	return v, nil
}

// negligibleBeside tells whether a margin is below what numbers known to
// within a bound leave undecided.
func negligibleBeside(margin, size number.Ball) bool {
	return margin.Abs().Lower().Cmp(size.Abs().MulPow2(-190).Upper()) <= 0
}

// limitWithNumbers is a limit with its numbers worked out.
func (a *Analysis) limitWithNumbers(ctx context.Context, l *dialect.Limit, c configuration) (*dialect.Limit, error) {
	out := *l
	var err error
	if out.Left, err = a.withNumbers(ctx, l.Left, c); err != nil {
		return nil, err
	}
	out.Right, err = a.withNumbers(ctx, l.Right, c)
	return &out, err
}

// againstConstant writes a limit as curve REL constant.
func (a *Analysis) againstConstant(ctx context.Context, l *dialect.Limit, c configuration) (*response.Curve, number.Exact, string, error) {
	if k, ok := l.Right.(*dialect.Constant); ok {
		curve, err := a.curve(ctx, l.Left, c)
		return curve, k.Value, l.Relation, err
	}
	if k, ok := l.Left.(*dialect.Constant); ok {
		curve, err := a.curve(ctx, l.Right, c)
		return curve, k.Value, turned[l.Relation], err
	}
	left, err := a.curve(ctx, l.Left, c)
	if err != nil {
		return nil, number.Exact{}, "", err
	}
	right, err := a.curve(ctx, l.Right, c)
	if err != nil {
		return nil, number.Exact{}, "", err
	}
	return left.Sub(right), number.FromInt(0), l.Relation, nil
}

// turned is a relation with its sides exchanged.
var turned = map[string]string{"<=": ">=", ">=": "<=", "<": ">", ">": "<"}

// limitText says a limit's verdict in one phrase, for findings.
func (v *Verdict) outcome() string {
	if v.Why != "" {
		return fmt.Sprintf("%s: %s", v.Decision, v.Why)
	}
	return v.Decision.String()
}
