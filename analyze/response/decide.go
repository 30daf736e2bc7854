package response

import (
	"context"
	"errors"

	"portlight/dialect/number"
)

// Outcome is what a limit turned out to be.
type Outcome int

// The outcomes of a limit.
const (
	Holds Outcome = iota
	Broken
	Undecided
)

// Decision is a limit decided over a range of time.
type Decision struct {
	Outcome Outcome
	// Worst is the worst value of the curve and Margin how far it is on the
	// good side of the level, negative when the limit is broken.
	Worst  Extreme
	Margin number.Ball
	// Why says why nothing was decided, or what breaks it where that is no
	// value (an impulse, growth).
	Why string
}

// Decide decides curve REL level over the range, REL being one of <= >= < >. It
// is a proof: the bounds hold between any samples. The error is ErrRange, the
// context's, or one of finding poles; what cannot be decided is an Outcome.
func (c *Curve) Decide(ctx context.Context, relation string, level number.Exact, r Range) (Decision, error) {
	upper := relation == "<=" || relation == "<"
	strict := relation == "<" || relation == ">"
	find := c.Peak
	if !upper {
		find = c.Trough
	}
	worst, err := find(ctx, r)
	switch {
	case errors.Is(err, ErrUndefined):
		return c.decideUnbounded(ctx, err, r, upper)
	case errors.Is(err, ErrUndecided) && !worst.Bounds:
		return Decision{Outcome: Undecided, Why: err.Error()}, nil
	case err != nil && !worst.Bounds:
		return Decision{}, err
	}
	d := Decision{Worst: worst}
	bound := number.BallFromExact(level, refinePrecision)
	if d.Margin = bound.Sub(worst.Value); !upper {
		d.Margin = d.Margin.Neg()
	}
	d.Outcome = d.judge(level, strict, c.loose())
	if d.Outcome == Undecided && err != nil {
		d.Why = err.Error()
	} else if d.Outcome == Undecided {
		d.Why = "the worst value cannot be told from the limit"
	}
	return d, nil
}

// judge tells the outcome from the margin, exactly where both sides are rational.
// With loose, or a level that is a stand-in, equality holds to within the bounds
// of stand-ins only.
func (d *Decision) judge(level number.Exact, strict, loose bool) Outcome {
	loose = loose || !level.IsExact()
	if d.Worst.Exact != nil && level.Rat().Cmp(d.Worst.Exact) == 0 {
		d.Margin = number.Ball{}
		switch {
		case loose && strict:
			return Undecided
		case loose:
			d.Why = "the worst value equals the limit to within the bounds of irrational values"
		case strict && d.Worst.Attained:
			return Broken // a value that is only approached keeps a strict limit
		}
		return Holds
	}
	switch sign, decided := d.Margin.Sign(); {
	case decided && sign > 0:
		return Holds
	case decided && sign < 0:
		return Broken
	}
	return Undecided
}

// decideUnbounded is for curves without a worst value: an impulse breaks every
// limit on its side, as growth does.
func (c *Curve) decideUnbounded(ctx context.Context, why error, r Range, upper bool) (Decision, error) {
	t, yes, err := c.hasImpulse(ctx, r)
	if err != nil {
		return Decision{}, err
	}
	if yes {
		s, ok := c.Signal()
		if ok {
			if harmless, err := s.impulsesPoint(ctx, r, upper); err != nil || harmless {
				return Decision{Outcome: Undecided, Why: "an impulse at t = " + shortTime(t) + " s points away from the limit; ask from just after it"}, err
			}
		}
	}
	return Decision{Outcome: Broken, Why: why.Error()}, nil
}

// impulsesPoint tells whether all impulses in the range are plain ones that
// point away from the limit: downwards for an upper one.
func (s *Signal) impulsesPoint(ctx context.Context, r Range, upper bool) (bool, error) {
	list, err := s.Impulses(ctx, 6)
	if err != nil {
		return false, err
	}
	for _, g := range list {
		if r.From != nil && g.At.Cmp(r.From) < 0 || r.To != nil && g.At.Cmp(r.To) > 0 {
			continue
		}
		sign, decided := g.Weights[0].Sign()
		if len(g.Weights) > 1 || !decided || (sign > 0) == upper {
			return false, nil
		}
	}
	return true, nil
}
