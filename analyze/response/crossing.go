package response

import (
	"context"
	"math"
	"math/big"

	"portlight/dialect/number"
)

// never says that a curve is not above zero anywhere in the range.
var errNever = undefined("never in the range")

// edge finds where a curve is last above zero in the range or, with first, where
// it first is: the instant in which it passes zero, or the breakpoint at which it
// jumps past it. The error is errNever, ErrUndefined when it is above for ever or
// passes zero again and again, or ErrUndecided where it touches zero.
func (c *Curve) edge(ctx context.Context, r Range, first bool) (number.Ball, error) {
	stages, err := c.stages(ctx, r, refinePrecision)
	if err != nil {
		return number.Ball{}, err
	}
	s := &search{curve: c, stages: stages, best: math.Inf(-1)}
	for _, st := range stages {
		s.scale = math.Max(s.scale, st.scale)
	}
	s.enough = func(e enclosure) bool { return e.hi <= 0 || e.lo > 0 }
	e := &edgeSearch{search: s, first: first}
	if first {
		for i := range stages {
			if t, ok, err := e.stage(ctx, i); ok || err != nil {
				return t, err
			}
		}
		return number.Ball{}, errNever
	}
	for i := len(stages) - 1; i >= 0; i-- {
		if t, ok, err := e.stage(ctx, i); ok || err != nil {
			return t, err
		}
	}
	return number.Ball{}, errNever
}

type edgeSearch struct {
	*search
	first bool
}

// stage looks for the edge within one stage.
func (e *edgeSearch) stage(ctx context.Context, i int) (number.Ball, bool, error) {
	st := e.stages[i]
	if st.end != nil {
		return e.within(ctx, st, i, 0, st.length)
	}
	if e.first {
		return e.firstForward(ctx, st, i)
	}
	t, err := e.quietFrom(ctx, st)
	if err != nil {
		return number.Ball{}, false, err
	}
	return e.within(ctx, st, i, 0, t)
}

// quietFrom finds a τ from which on the curve is never above zero.
func (e *edgeSearch) quietFrom(ctx context.Context, st *stage) (float64, error) {
	limit, err := e.prepareTail(ctx, st)
	if err != nil {
		return 0, err
	}
	if limit != nil {
		if sign, decided := limit.Value.Sign(); decided && sign > 0 {
			if st.lasting == nil {
				return 0, undefined("it stays there for ever")
			}
			return 0, undefined("it comes back there for ever")
		}
	}
	touching := limit != nil && limit.Exact != nil && limit.Exact.Sign() == 0
	unitTime := st.unitTime()
	for t, k := 0.0, 0; k < 200; k++ {
		hi := e.bound(st, t, math.Inf(1)).hi
		if hi <= 0 {
			return t, nil
		}
		if touching || limit == nil {
			sums, ok := e.resolveTail(st, t)
			if ok && t > 0 {
				switch sign := sums.dominance(number.BallFromFloat64(t, refinePrecision)); {
				case sign < 0:
					return t, nil
				case sign > 0:
					return 0, undefined("it stays there for ever")
				}
			}
		}
		if t = 2*t + unitTime; touching && k > 60 {
			return 0, undefined("it passes the level again and again while it settles on it")
		}
	}
	return 0, undecided("it comes too near the level for t → ∞")
}

// firstForward goes forward in growing steps until the curve is above zero or
// can be no more.
func (e *edgeSearch) firstForward(ctx context.Context, st *stage, i int) (number.Ball, bool, error) {
	from, step := 0.0, st.unitTime()
	for range 200 {
		if hi := e.bound(st, from, math.Inf(1)).hi; hi <= 0 {
			return number.Ball{}, false, nil
		}
		if t, ok, err := e.within(ctx, st, i, from, from+step); ok || err != nil {
			return t, ok, err
		}
		if sums, ok := e.resolveTail(st, from+step); ok &&
			sums.dominance(number.BallFromFloat64(from+step, refinePrecision)) < 0 {
			return number.Ball{}, false, nil
		}
		from += step
		step *= 2
	}
	return number.Ball{}, false, undecided("it comes too near the level for t → ∞")
}

// within looks for the edge in [a, b] of a stage, from the side it must be met
// first. Everything passed over is proved not to be above zero.
func (e *edgeSearch) within(ctx context.Context, st *stage, i int, a, b float64) (number.Ball, bool, error) {
	stack := []*box{{stage: st, index: i, a: a, b: b, on: e.bound(st, a, b)}}
	for len(stack) > 0 {
		if e.steps++; e.steps > walkBudget {
			return number.Ball{}, false, undecided("the curve is near the level for too long")
		}
		if e.steps%8 == 0 {
			if err := ctx.Err(); err != nil {
				return number.Ball{}, false, err
			}
		}
		x := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		switch {
		case x.on.hi <= 0:
		case x.on.lo > 0:
			return e.atEnd(x), true, nil
		case x.models != nil && x.exhausted(), x.b == x.a:
			t, ok, err := e.pass(x)
			if ok || err != nil {
				return t, ok, err
			}
		default:
			stack = append(stack, e.halves(x)...)
		}
	}
	return number.Ball{}, false, nil
}

// halves cuts a box in two; the one to look at first comes last.
func (e *edgeSearch) halves(x *box) []*box {
	var out []*box
	switch {
	case x.models != nil:
		c := (x.u + x.v) / 2
		out = []*box{e.part(x, x.u, c), e.part(x, c, x.v)}
	case e.makePanel(x):
		return []*box{e.part(x, -1, 1)}
	default:
		c := x.a + (x.b-x.a)/2
		if c <= x.a || c >= x.b {
			y := *x
			y.b = y.a
			return []*box{&y}
		}
		for _, p := range [][2]float64{{x.a, c}, {c, x.b}} {
			out = append(out, &box{stage: x.stage, index: x.index, a: p[0], b: p[1], on: e.bound(x.stage, p[0], p[1])})
		}
	}
	if e.first {
		out[0], out[1] = out[1], out[0]
	}
	return out
}

func (e *edgeSearch) part(b *box, u, v float64) *box {
	p := &box{stage: b.stage, index: b.index, models: b.models, m: b.m, h: b.h, u: u, v: v}
	p.a = math.Max(b.a, down(b.m+b.h*u, b.m))
	p.b = math.Min(b.b, up(b.m+b.h*v, b.m))
	p.on = e.evaluate(b.models, u, v)
	return p
}

// atEnd is the instant at the side of a box from which it was met; the curve is
// above zero in the whole box and not beyond, so it jumps there or the range
// ends.
func (e *edgeSearch) atEnd(x *box) number.Ball {
	origin := number.BallFromRat(x.stage.origin, refinePrecision)
	if e.first {
		if x.a == 0 {
			return origin
		}
		return origin.Add(number.BallFromFloat64(x.a, refinePrecision))
	}
	if x.stage.end != nil && x.b >= x.stage.length {
		return number.BallFromRat(x.stage.end, refinePrecision)
	}
	return origin.Add(number.BallFromFloat64(x.b, refinePrecision))
}

// pass finds the zero in a box that is as narrow as boxes get, where the curve
// passes zero with a slope of one sign. ok is false when it does not reach zero.
func (e *edgeSearch) pass(x *box) (number.Ball, bool, error) {
	near := func() error {
		t, _ := x.stage.origin.Float64()
		return undecided("it touches the level at t ≈ %s s without crossing it for sure",
			new(big.Float).SetFloat64(t+x.a).Text('g', 6))
	}
	c := cluster{x.stage, x.index, x.a, x.b, []*box{x}}
	sums, ok := e.resolve(c)
	if !ok {
		return number.Ball{}, false, near()
	}
	slope := c.slopeTau()
	if slope.lo <= 0 && slope.hi >= 0 {
		return number.Ball{}, false, near()
	}
	box := ballBetween(x.a, x.b)
	left, okLeft := sums.at(number.BallFromFloat64(x.a, refinePrecision)).Sign()
	right, okRight := sums.at(number.BallFromFloat64(math.Min(x.b, x.stage.length), refinePrecision)).Sign()
	origin := number.BallFromRat(x.stage.origin, refinePrecision)
	switch {
	case !okLeft || !okRight:
		// The zero is at an end of the box to within the working precision.
		return origin.Add(newton(sums, sums.derivative(), slope, box)), true, nil
	case left <= 0 && right <= 0:
		return number.Ball{}, false, nil
	case left > 0 && right > 0, e.first && left > 0, !e.first && right > 0:
		return e.atEnd(x), true, nil
	}
	return origin.Add(newton(sums, sums.derivative(), slope, box)), true, nil
}
