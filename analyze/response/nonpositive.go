package response

import (
	"context"
	"errors"
	"math/big"

	"portlight/dialect/number"
)

// nonpositive tells whether the curve is −|x| or −k·x² with k > 0, and gives x: the
// power that a resistor gives off, for instance. Wherever x passes zero it is as
// great as it can be, again and again and to the same height, which no
// search could tell from heights that differ a little.
func (c *Curve) nonpositive() (x *Curve, ok bool) {
	if c.op == opNegate && c.args[0].op == opAbs {
		return c.args[0].args[0], true
	}
	p, ok := c.leaf.(*product)
	if !ok {
		return nil, false
	}
	k, ok := p.a.multipleOf(p.b)
	if !ok || k.Sign()*p.factor.Sign() >= 0 {
		return nil, false
	}
	return p.b.Curve(), true
}

// multipleOf tells whether s is k times t, and k; not when either is zero.
func (s *Signal) multipleOf(t *Signal) (k *big.Rat, ok bool) {
	if len(s.comps) != len(t.comps) {
		return nil, false
	}
	for i := range s.comps {
		a, b := &s.comps[i], &t.comps[i]
		if a.from.Cmp(b.from) != 0 || !sameInstant(a.until, b.until) || a.cause != b.cause ||
			a.share != b.share || a.share != wholeShare || !a.weight.same(b.weight) {
			return nil, false
		}
		n, m := a.fraction.ratio.Num, b.fraction.ratio.Num
		if n.Degree() < 0 && m.Degree() < 0 {
			continue
		}
		if n.Degree() != m.Degree() || !a.fraction.ratio.Den.Equal(b.fraction.ratio.Den) {
			return nil, false
		}
		if k == nil {
			k = new(big.Rat).Quo(n.Leading(), m.Leading())
		}
		if !m.Scale(k).Equal(n) {
			return nil, false
		}
	}
	return k, k != nil
}

// same tells whether two weights are equal for sure.
func (w weight) same(v weight) bool {
	if w.at != nil || v.at != nil {
		return w.at != nil && v.at != nil && w.id != "" && w.id == v.id
	}
	return w.rational.Cmp(v.rational) == 0
}

// reachesZero finds the greatest value of −|x| or −k·x² where that is zero: x is
// zero at the beginning, passes zero between breakpoints, or settles on it. The
// instant is the first at which x changes its sign. ok is false where none
// of it is seen.
func (x *Curve) reachesZero(ctx context.Context, r Range) (e Extreme, ok bool, err error) {
	e = Extreme{Exact: new(big.Rat), Attained: true, Proved: true}
	from := r.From
	if from == nil {
		from = new(big.Rat)
	}
	if v, known, err := x.ExactAt(ctx, from, Right); err != nil {
		return e, false, err
	} else if known && v.Sign() == 0 {
		e.At, e.HasAt = number.BallFromRat(from, refinePrecision), true
		return e, true, nil
	}
	stages, err := x.stages(ctx, r, refinePrecision)
	if err != nil {
		return e, false, err
	}
	passes, start := false, 0
	for i, st := range stages {
		signs := st.signs(x)
		passes = passes || signs[0] && signs[1]
		if i == 0 && signs[0] != signs[1] || i == 0 && passes {
			if start = -1; st.signAt(x, 0) > 0 {
				start = 1
			}
		}
	}
	if !passes {
		if last := stages[len(stages)-1]; last.end == nil && last.course() == settles {
			if _, v := x.limitOf(last.sums); v != nil && v.Sign() == 0 {
				e.Attained = false
				return e, true, nil
			}
		}
		return e, false, nil
	}
	e.At, e.HasAt, err = x.firstChange(ctx, r, start)
	return e, true, err
}

// firstChange is the instant of the first change of sign of a curve that begins
// with the given one, when it is found and no jump.
func (x *Curve) firstChange(ctx context.Context, r Range, start int) (number.Ball, bool, error) {
	if start > 0 {
		x = x.Neg()
	}
	t, err := x.edge(ctx, r, true)
	switch {
	case errors.Is(err, ErrUndefined) || errors.Is(err, ErrUndecided):
		return number.Ball{}, false, nil
	case err != nil:
		return number.Ball{}, false, err
	}
	for _, l := range x.leaves() {
		for _, b := range l.Breakpoints() {
			if t.Contains(b) {
				return number.Ball{}, false, nil
			}
		}
	}
	return t, true, nil
}

// signs tells whether the curve is seen below and above zero in the stage.
func (st *stage) signs(c *Curve) (seen [2]bool) {
	for _, x := range st.floats {
		for _, t := range st.looks(x) {
			switch s := st.signAt(c, t); {
			case s < 0:
				seen[0] = true
			case s > 0:
				seen[1] = true
			}
		}
	}
	return seen
}

// signAt is the sign of the curve at τ = t, 0 where it is not known.
func (st *stage) signAt(c *Curve, t float64) int {
	leaves := make([]enclosure, len(st.floats))
	for i, x := range st.floats {
		v, bound := x.at(t, 0)
		leaves[i] = enclosure{interval: interval{v - bound, v + bound}.outward()}
	}
	switch e := c.enclose(leaves); {
	case e.lo > 0:
		return 1
	case e.hi < 0:
		return -1
	}
	return 0
}
