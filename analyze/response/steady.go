package response

import (
	"container/heap"
	"context"
	"math"
	"math/big"

	"portlight/dialect/number"
)

// lasting is the steady oscillation that a stage approaches: the curve is that of
// the steady parts of its leaves, at most ceiling, plus what the rest of them
// can move it.
type lasting struct {
	top     Extreme // of the steady oscillation
	ceiling float64 // not less than top
	fading  []*sum  // what decays, per leaf
	floats  []*floatSum
}

// nothing is the part of a signal's size, 2^-90, below which what decays is
// taken into the bound of a value and does not decide which of several peaks,
// equal but for that, comes first.
const nothing = 90

// bound encloses the curve on [a, b] of a stage from the outside, with no
// more work than one look at each term; b may be infinite.
func (s *search) bound(st *stage, a, b float64) enclosure {
	e := st.crude(s.curve, a, b)
	if l := st.lasting; l != nil {
		e.hi = math.Min(e.hi, math.Nextafter(l.ceiling+l.moves(s.curve, a, b).hi, math.Inf(1)))
	}
	return e
}

// moves bounds how far what decays moves the curve on [a, b].
func (l *lasting) moves(c *Curve, a, b float64) interval {
	leaves := make([]interval, len(l.floats))
	for i, x := range l.floats {
		leaves[i] = x.crude(a, b).interval
	}
	out, _ := c.moved(leaves)
	return out
}

// moved bounds how far the curve moves when its leaves move by what is given, which
// is used up in order. No operation moves further than its arguments.
func (c *Curve) moved(leaves []interval) (interval, []interval) {
	if c.op == opLeaf {
		return leaves[0], leaves[1:]
	}
	x, rest := c.args[0].moved(leaves)
	switch c.op {
	case opNegate:
		return x.neg(), rest
	case opAbs:
		r := math.Max(math.Abs(x.lo), math.Abs(x.hi))
		return interval{-r, r}, rest
	}
	y, rest := c.args[1].moved(rest)
	if c.op == opAdd {
		return x.add(y), rest
	}
	return x.hull(y), rest
}

// neverAbove finds a τ from which on what decays moves the curve down only, when
// in every leaf one term of it dominates: no value from there on reaches the
// least upper bound of the steady oscillation.
func (l *lasting) neverAbove(c *Curve, st *stage) (float64, bool) {
	t, last := 0.0, 64*st.unitTime()
	fast := 0.0
	for _, x := range l.floats {
		fast = math.Max(fast, x.rate)
	}
	for range 200 {
		leaves := make([]interval, len(l.floats))
		for i, x := range l.floats {
			leaves[i] = x.leaning(t)
		}
		if v, _ := c.moved(leaves); v.hi <= 0 && l.leansFrom(c, t) {
			return t, true
		}
		if t = math.Max(2*t, 1/fast); !(t < last) {
			break
		}
	}
	return 0, false
}

// leansFrom proves what leaning only expects.
func (l *lasting) leansFrom(c *Curve, t float64) bool {
	leaves := make([]interval, len(l.fading))
	from := number.BallFromFloat64(t, refinePrecision)
	for i, x := range l.fading {
		if len(x.terms) == 0 {
			continue
		}
		switch x.dominance(from) {
		case 1:
			leaves[i] = interval{0, math.Inf(1)}
		case -1:
			leaves[i] = interval{math.Inf(-1), 0}
		default:
			leaves[i] = everything
		}
	}
	v, _ := c.moved(leaves)
	return v.hi <= 0
}

// leaning tells on which side of zero the sum seems to stay from τ = t on: that of
// its slowest term, when that is real and larger than all others together.
func (x *floatSum) leaning(t float64) interval {
	if len(x.terms) == 0 {
		return interval{}
	}
	slow, others := 0, 0.0
	for i := range x.terms {
		if f := &x.terms[i]; f.sigma > x.terms[slow].sigma {
			slow = i
		}
	}
	lead := &x.terms[slow]
	if !lead.real {
		return everything
	}
	for i := range x.terms {
		if i != slow {
			others += x.terms[i].bound(t, t)
		}
	}
	re, _ := lead.coefficient(t)
	switch v := re * math.Exp(lead.sigma*t); {
	case v > others || v == 0 && re > 0:
		return interval{0, math.Inf(1)}
	case v < -others || v == 0 && re < 0:
		return interval{math.Inf(-1), 0}
	}
	return everything
}

// steadySupremum finds the least upper bound of the steady oscillation that
// remains. It needs a period: one frequency, or several in rational ratios.
func (s *search) steadySupremum(ctx context.Context, st *stage) (*Extreme, error) {
	_, period, ok := periodBall(st.sums)
	if !ok {
		return nil, undecided("it oscillates for ever at several frequencies without a common period; ask over a range of time")
	}
	whole, err := s.findLasting(ctx, st, period)
	if err != nil || whole {
		return nil, err
	}
	l := st.lasting
	lower, _ := l.top.Value.Lower().Float64()
	s.best = math.Max(s.best, math.Nextafter(lower, math.Inf(-1)))
	if t, ok := l.neverAbove(s.curve, st); ok {
		s.dropTail(st, t)
	}
	return &Extreme{Value: l.top.Value, Proved: true}, nil
}

// longStage is how many periods a stage that ends must last before it pays to
// look at its steady oscillation first.
const longStage = 8

// prepareLong looks for the steady oscillation of a stage that ends.
func (s *search) prepareLong(ctx context.Context, st *stage) error {
	course := settles
	for _, x := range st.sums {
		course = max(course, x.course())
	}
	if course != oscillates {
		return nil
	}
	_, period, ok := periodBall(st.sums)
	if !ok || st.length < longStage*period {
		return nil
	}
	_, err := s.findLasting(ctx, st, period)
	return err
}

// findLasting finds the steady oscillation of a stage. Where nothing else is in
// it, or next to nothing, its first period shows everything: whole is true, and
// the rest is dropped.
func (s *search) findLasting(ctx context.Context, st *stage, period float64) (whole bool, err error) {
	steady, transient, err := st.steadyStage(period)
	if err != nil {
		return false, err
	}
	if !transient {
		s.replaceTail(st, period)
		return true, nil
	}
	l := &lasting{}
	for _, x := range st.sums {
		y := x.fading()
		f, err := y.toFloat()
		if err != nil {
			return false, err
		}
		l.fading, l.floats = append(l.fading, y), append(l.floats, f)
	}
	if v := l.moves(s.curve, 0, math.Inf(1)); math.Max(-v.lo, v.hi) <= math.Ldexp(steady.scale, -nothing) {
		s.spread = s.spread.Add(number.BallFromFloat64(math.Max(-v.lo, v.hi), refinePrecision))
		s.replaceTail(st, period)
		return true, nil
	}
	if l.top, err = newSearch(s.curve, []*stage{steady}).find(ctx, nil); err != nil {
		return false, err
	}
	upper, _ := l.top.Value.Upper().Float64()
	l.ceiling = math.Nextafter(upper, math.Inf(1))
	st.lasting = l
	s.boundAgain(st)
	return false, nil
}

// fading keeps what neither lasts nor oscillates for ever.
func (x *sum) fading() *sum {
	out := &sum{}
	for _, t := range x.terms {
		if !t.pole.zero && !t.pole.axis {
			out.terms = append(out.terms, t)
		}
	}
	return out
}

// boundAgain bounds the boxes of a stage anew.
func (s *search) boundAgain(st *stage) {
	for _, b := range s.queue {
		if b.stage == st && b.models == nil {
			b.on = s.bound(st, b.a, b.b)
		}
	}
	heap.Init(&s.queue)
}

// dropTail drops everything from τ = t on of the last stage, where the limit is
// not reached any more.
func (s *search) dropTail(st *stage, t float64) {
	if t > 0 {
		s.replaceTail(st, t)
		return
	}
	kept := s.queue[:0]
	for _, b := range s.queue {
		if b.stage != st {
			kept = append(kept, b)
		}
	}
	s.queue = kept
	heap.Init(&s.queue)
}

// replaceTail ends a stage at τ = t for the search.
func (s *search) replaceTail(st *stage, t float64) {
	for _, b := range s.queue {
		if b.stage == st && b.b > t {
			b.b = t
			b.on = s.bound(st, b.a, t)
		}
	}
	heap.Init(&s.queue)
}

// periodBall is the least common period of all oscillations that do not decay,
// and a float64 that is not less.
func periodBall(sums []*sum) (number.Ball, float64, bool) {
	ids := map[string]termPole{}
	for _, x := range sums {
		for _, t := range x.terms {
			if t.pole.axis && !t.pole.zero {
				ids[t.pole.id] = t.pole
			}
		}
	}
	base := new(big.Rat)
	var one termPole
	for _, p := range ids {
		one = p
		if p.omega == nil {
			base = nil
			break
		}
		base = ratGCD(base, p.omega)
	}
	turn := number.PiBall(refinePrecision).MulPow2(1)
	var period number.Ball
	switch {
	case base != nil:
		period = turn.Quo(number.BallFromRat(base, refinePrecision))
	case len(ids) == 1:
		period = turn.Quo(one.p.Im)
	default:
		return period, 0, false
	}
	for _, p := range ids {
		if cycles := upperFloat(p.p.Im.Mul(period).Abs()); cycles > 1e5 {
			return period, 0, false
		}
	}
	return period, upperFloat(period), true
}

// ratGCD is the greatest rational that divides both a whole number of times.
func ratGCD(a, b *big.Rat) *big.Rat {
	if a.Sign() == 0 {
		return new(big.Rat).Abs(b)
	}
	l := new(big.Int).Mul(a.Denom(), b.Denom())
	x := new(big.Int).Mul(a.Num(), b.Denom())
	y := new(big.Int).Mul(b.Num(), a.Denom())
	return new(big.Rat).SetFrac(new(big.Int).GCD(nil, nil, x.Abs(x), y.Abs(y)), l)
}
