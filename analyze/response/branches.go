package response

import (
	"context"
	"errors"
)

// mostBranches bounds how many curves a peak is split into.
const mostBranches = 8

// branches writes the curve as the greatest of several curves, in which absolute
// values and greatest values are left only where they count downwards: the peak of
// the curve is the greatest of theirs, and each is much easier to find than
// that of a curve with a kink wherever two of them cross.
func (c *Curve) branches() []*Curve {
	if out := c.split(); len(out) <= mostBranches {
		return out
	}
	return []*Curve{c}
}

func (c *Curve) split() []*Curve {
	switch c.op {
	case opAbs:
		return append(c.args[0].split(), c.args[0].Neg().split()...)
	case opGreatest:
		return append(c.args[0].split(), c.args[1].split()...)
	case opAdd:
		return pairs(c.args, (*Curve).Add)
	case opLeast:
		return pairs(c.args, Least)
	case opNegate:
		if x := c.args[0]; x.op == opAdd || x.op == opLeast {
			turned := &Curve{op: x.op, args: []*Curve{x.args[0].Neg(), x.args[1].Neg()}}
			if x.op == opLeast {
				turned.op = opGreatest
			}
			return turned.split()
		}
	}
	return []*Curve{c}
}

// pairs joins every branch of the first argument with every one of the second.
func pairs(args []*Curve, join func(a, b *Curve) *Curve) []*Curve {
	var out []*Curve
	second := args[1].split()
	for _, a := range args[0].split() {
		for _, b := range second {
			if out = append(out, join(a, b)); len(out) > mostBranches {
				return out
			}
		}
	}
	return out
}

// Peak is the greatest value over the range (its least upper bound), and where
// it is first taken. Both limits count at a jump. The instant is missing where
// the value is only approached, and where several peaks are too nearly equal to
// tell which comes first. The error is ErrUndefined with the reason (it grows,
// there is an impulse), ErrUndecided, ErrRange, or the context's.
func (c *Curve) Peak(ctx context.Context, r Range) (Extreme, error) {
	var best Extreme
	var late error
	for i, part := range c.branches() {
		e, err := part.greatest(ctx, r)
		switch {
		case err != nil && !e.Bounds && (!errors.Is(err, ErrUndecided) || late == nil):
			if !errors.Is(err, ErrUndecided) {
				return e, err
			}
			best, late = Extreme{}, err // a later branch may tell that it grows
		case late != nil && !best.Bounds:
		case i == 0:
			best, late = e, err
		default:
			best, late = greater(best, e, late, err)
		}
	}
	return best, late
}

// greater is the greater of two extremes, the earlier one where they are equal,
// with the error that belongs to it.
func greater(a, b Extreme, errA, errB error) (Extreme, error) {
	order, sure := a.Value.Cmp(b.Value)
	switch {
	case sure && order < 0:
		return b, errB
	case sure && order > 0:
		return a, errA
	case a.Bounds || b.Bounds:
		both := Extreme{Value: betweenBalls(opGreatest, a.Value, b.Value), Bounds: true, Proved: a.Proved && b.Proved}
		if errA == nil {
			errA = errB
		}
		return both, errA
	case !b.HasAt, a.HasAt && a.At.Mid().Cmp(b.At.Mid()) <= 0:
		return a, nil
	}
	return b, nil
}

// Trough is the least value over the range (its greatest lower bound); the rest is
// as for [Curve.Peak].
func (c *Curve) Trough(ctx context.Context, r Range) (Extreme, error) {
	e, err := c.Neg().Peak(ctx, r)
	return e.negated(), err
}
