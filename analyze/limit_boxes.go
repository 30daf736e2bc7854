package analyze

import (
	"context"
	"math/big"

	"portlight/analyze/frequency"
	"portlight/dialect"
	"portlight/dialect/number"
)

// boxBudget is how many stretches of frequency a limit on several functions
// may be enclosed over: about a second of work.
const boxBudget = 20000

// boxBits is the working precision of an enclosure over a stretch.
const boxBits = 128

// decideByBoxes decides a limit by enclosing both sides over stretches of
// frequency, halved where the enclosure is too wide. What holds over every
// stretch is proved; what breaks at one frequency is proved too.
func (a *Analysis) decideByBoxes(ctx context.Context, l *dialect.Limit, r frequency.Range) (Verdict, error) {
	v := Verdict{Decision: Undecided, Dimension: l.Left.Dim()}
	if r.To == nil {
		v.Why = "a limit on several functions needs the upper end of its range: add “to 1 MHz”"
		return v, nil
	}
	stack := []band{{r.From.Rat(), r.To.Rat()}}
	for n := 0; len(stack) > 0; n++ {
		if err := ctx.Err(); err != nil {
			return v, err
		}
		s := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		margin, _, err := a.marginOver(ctx, l, s.ball())
		if err != nil {
			return v, err
		}
		if sign, sure := margin.Sign(); sure && margin.IsFinite() && (sign > 0 || sign == 0 && onTheLimit(l.Relation) == Holds) {
			continue
		}
		middle := s.middle()
		at := number.BallFromRat(middle, boxBits)
		margin, worst, err := a.marginOver(ctx, l, at)
		if err != nil {
			return v, err
		}
		if sign, sure := margin.Sign(); sure && sign < 0 {
			return Verdict{
				Decision: Broken, Proved: true, Dimension: v.Dimension, HasMargin: true, Margin: margin,
				Worst: worst, HasWhere: true, Where: at,
			}, nil
		}
		if n >= boxBudget {
			v.Why = "the limit is too close to decide over the whole range"
			v.HasWhere, v.Where = true, at
			return v, nil
		}
		stack = append(stack, band{s.low, middle}, band{middle, s.high})
	}
	v.Decision, v.Proved = Holds, true
	return v, nil
}

// band is a range of angular frequency.
type band struct{ low, high *big.Rat }

func (s band) middle() *big.Rat {
	m := new(big.Rat).Add(s.low, s.high)
	return m.Quo(m, big.NewRat(2, 1))
}

// ball holds every frequency of the stretch.
func (s band) ball() number.Ball {
	return number.BallFromRat(s.low, boxBits).Union(number.BallFromRat(s.high, boxBits))
}

// marginOver encloses the margin over all frequencies in a ball.
func (a *Analysis) marginOver(ctx context.Context, l *dialect.Limit, omega number.Ball) (margin, left number.Ball, err error) {
	at := spot{configuration: configurationOf(l.Qualifiers), omega: &omega}
	left, right, err := a.sides(ctx, l, at, boxBits)
	if err != nil {
		return margin, left, err
	}
	return marginOf(left, right, l.Relation), left, nil
}
