package response

import (
	"context"
	"math"
	"math/big"
	"sort"
)

// Turns lists instants, in s and in ascending order, that show the shape of the
// curve between from and to: every turning point, to about 10^-6 of the time
// scale there, and the breakpoints. No turning point is missed; a flat stretch counts
// as one. When there are more than most of them the list is cut and
// complete is false.
func (c *Curve) Turns(ctx context.Context, r Range, most int) (times []float64, complete bool, err error) {
	if r.To == nil {
		return nil, false, ErrRange
	}
	stages, err := c.stages(ctx, r, refinePrecision)
	if err != nil {
		return nil, false, err
	}
	s := &search{curve: c, stages: stages, enough: func(e enclosure) bool { return e.slope.lo > 0 || e.slope.hi < 0 }}
	for _, st := range stages {
		s.scale = math.Max(s.scale, st.scale)
	}
	for i, st := range stages {
		origin, _ := st.origin.Float64()
		times = append(times, origin)
		more, err := s.turnsIn(ctx, i, most-len(times))
		if err != nil {
			return nil, false, err
		}
		for _, t := range more {
			times = append(times, origin+t)
		}
		if len(times) >= most {
			return times, false, nil
		}
	}
	end, _ := r.To.Float64()
	times = append(times, end)
	sort.Float64s(times)
	return times, true, nil
}

// turnWidth is the width in x to which a turning point is located, unless the
// curve is flat there to turnFlat of its size.
const (
	turnWidth = 1.0 / (1 << 20)
	turnFlat  = 1e-11
)

// turnsIn lists the turning points of a stage, at most most of them.
func (s *search) turnsIn(ctx context.Context, i, most int) ([]float64, error) {
	st := s.stages[i]
	stack := []*box{{stage: st, index: i, a: 0, b: st.length, on: st.crude(s.curve, 0, st.length)}}
	e := &edgeSearch{search: s, first: true}
	var out []float64
	from, to := math.Inf(-1), math.Inf(-1) // adjoining boxes that hold one turn
	flush := func() {
		if !math.IsInf(from, -1) {
			out = append(out, from+(to-from)/2)
		}
	}
	for len(stack) > 0 && len(out) < most {
		if s.steps++; s.steps > walkBudget {
			return nil, undecided("the curve turns too often")
		}
		if s.steps%8 == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
		}
		x := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		switch {
		case x.on.slope.lo > 0, x.on.slope.hi < 0:
		case x.models != nil && x.v-x.u <= turnWidth, x.a == x.b, x.on.hi-x.on.lo < turnFlat*s.scale:
			if x.a > to {
				flush()
				from = x.a
			}
			to = x.b
		default:
			stack = append(stack, e.halves(x)...)
		}
	}
	flush()
	return out[:min(len(out), max(most, 0))], nil
}

// Horizon is a time, in s, by which the shape of the curve has shown itself:
// after the last breakpoint until every decaying term is below part of the size
// of the signal, and for three cycles of the slowest oscillation that does not
// decay. For a curve without either it is the last breakpoint, or 1 s.
func (c *Curve) Horizon(ctx context.Context, part float64) (float64, error) {
	st, err := c.lastStage(ctx, refinePrecision)
	if err != nil {
		return 0, err
	}
	after := 0.0
	for _, x := range st.floats {
		for i := range x.terms {
			f := &x.terms[i]
			switch {
			case f.zero:
			case f.sigmaUpper < 0 && !f.axis:
				after = math.Max(after, f.fadesAt(part*st.scale))
			case f.omega > 0:
				after = math.Max(after, 6*math.Pi/f.omega)
			case f.sigma > 0:
				after = math.Max(after, 5/f.sigma)
			}
		}
	}
	start, _ := new(big.Rat).Set(st.origin).Float64()
	if start+after == 0 {
		return 1, nil
	}
	if after == 0 {
		return 1.5 * start, nil
	}
	return start + after, nil
}

// fadesAt is a time from which on the term is below level.
func (f *floatTerm) fadesAt(level float64) float64 {
	t := 0.0
	for step := 1 / -f.sigmaUpper; f.bound(t, math.Inf(1)) > level && t < 1e4*step; {
		t += step / 2
	}
	return t
}
