package response

import (
	"context"
	"math/big"

	"portlight/dialect/number"
)

// Bound is a ball that holds every value the curve takes in the range, the
// hull of trough and peak.
func (c *Curve) Bound(ctx context.Context, r Range) (number.Ball, error) {
	hi, err := c.Peak(ctx, r)
	if err != nil {
		return number.Ball{}, err
	}
	lo, err := c.Trough(ctx, r)
	return hi.Value.Union(lo.Value), err
}

// Final is the limit for t → ∞, and the same as a rational where it is one for
// sure. The error is ErrUndefined when there is none: it oscillates or grows.
func (c *Curve) Final(ctx context.Context) (number.Ball, *big.Rat, error) {
	st, err := c.lastStage(ctx, refinePrecision)
	if err != nil {
		return number.Ball{}, nil, err
	}
	switch st.course() {
	case grows:
		return number.Ball{}, nil, undefined("it grows without bound")
	case oscillates:
		return number.Ball{}, nil, undefined("it oscillates for ever")
	}
	v, r := c.limitOf(st.sums)
	return v, r, nil
}

// course is the gravest of the leaves'.
func (st *stage) course() growth {
	out := settles
	for _, x := range st.sums {
		out = max(out, x.course())
	}
	return out
}

// lastStage is the stage that goes on for ever.
func (c *Curve) lastStage(ctx context.Context, prec uint) (*stage, error) {
	stages, err := c.stages(ctx, Range{}, prec)
	if err != nil {
		return nil, err
	}
	return stages[len(stages)-1], nil
}

// Integral is ∫ over the range, impulses at its ends included; a nil To needs a
// curve that decays.
func (c *Curve) Integral(ctx context.Context, r Range) (number.Ball, error) {
	return c.refined(ctx, func(prec uint) (number.Ball, error) { return c.integrate(ctx, r, false, prec) })
}

// refined raises the precision until 20 digits are decided or nothing is gained
// by it.
func (c *Curve) refined(ctx context.Context, f func(prec uint) (number.Ball, error)) (number.Ball, error) {
	v, err := f(refinePrecision)
	if _, linear := c.linear(); !linear {
		return v, err // roundings of float64 limit it
	}
	for prec := uint(2 * refinePrecision); err == nil && prec <= 8*refinePrecision && v.RelativeBits() <= 66; prec *= 2 {
		if err := ctx.Err(); err != nil {
			return number.Ball{}, err
		}
		better, err := f(prec)
		if err != nil {
			return better, err
		}
		if better.MulPow2(8).Rad().Cmp(v.Rad()) > 0 {
			return better, nil
		}
		v = better
	}
	return v, err
}

// length is To − From of a range that ends.
func (r Range) length() *big.Rat {
	if r.From == nil {
		return r.To
	}
	return new(big.Rat).Sub(r.To, r.From)
}

// Mean is the mean over the range, or in the long run when it has no end:
// (1/T)∫ for T → ∞.
func (c *Curve) Mean(ctx context.Context, r Range) (number.Ball, error) {
	if r.To == nil {
		return c.longRun(ctx, false)
	}
	return c.average(ctx, r, false)
}

// RMS is the root of the mean square over the range, or in the long run.
func (c *Curve) RMS(ctx context.Context, r Range) (number.Ball, error) {
	if r.To == nil {
		v, err := c.longRun(ctx, true)
		return v.Sqrt(), err
	}
	v, err := c.average(ctx, r, true)
	return v.Sqrt(), err
}

func (c *Curve) average(ctx context.Context, r Range, square bool) (number.Ball, error) {
	if r.length().Sign() <= 0 {
		return number.Ball{}, ErrRange
	}
	v, err := c.refined(ctx, func(prec uint) (number.Ball, error) { return c.integrate(ctx, r, square, prec) })
	if err != nil {
		return v, err
	}
	return v.Quo(number.BallFromRat(r.length(), v.Prec())), nil
}

// longRun is the mean of what remains for t → ∞: of a sum its constant, of its
// square the sum of squares of constant and half squares of amplitudes.
func (c *Curve) longRun(ctx context.Context, square bool) (number.Ball, error) {
	st, err := c.lastStage(ctx, refinePrecision)
	if err != nil {
		return number.Ball{}, err
	}
	switch st.course() {
	case grows:
		return number.Ball{}, undefined("it grows without bound")
	case settles:
		v, _ := c.limitOf(st.sums)
		if square {
			v = v.Sqr()
		}
		return v, nil
	}
	signs, ok := c.linear()
	if !ok && square && c.op == opAbs {
		signs, ok = c.args[0].linear()
	}
	if ok {
		return combineSums(st.sums, signs).meanOfSteady(square), nil
	}
	return c.periodMean(ctx, st, square)
}

// meanOfSteady is the long-run mean of a sum or of its square.
func (x *sum) meanOfSteady(square bool) number.Ball {
	var total number.Ball
	for _, t := range x.terms {
		switch {
		case t.pole.zero && square:
			total = total.Add(t.c[0].Re.Sqr())
		case t.pole.zero:
			total = total.Add(t.c[0].Re)
		case t.pole.axis && square:
			total = total.Add(t.c[0].Abs2().MulPow2(1))
		}
	}
	return total
}

// periodMean integrates the steady part over one period.
func (c *Curve) periodMean(ctx context.Context, st *stage, square bool) (number.Ball, error) {
	period, length, ok := periodBall(st.sums)
	if !ok {
		return number.Ball{}, undecided("it oscillates for ever at several frequencies without a common period; ask over a range of time")
	}
	steady, _, err := st.steadyStage(length)
	if err != nil {
		return number.Ball{}, err
	}
	s := &search{curve: c, stages: []*stage{steady}, scale: steady.scale, enough: func(enclosure) bool { return false }}
	steady.period = &period
	v, err := s.integrateStage(ctx, steady, square, refinePrecision)
	return v.Quo(period), err
}

// Settle is the last instant at which the curve is outside ±band around its
// final value, band being relative to the final value. It is undefined where
// there is no final value or it is 0, and 0 for a curve that is inside from the
// beginning.
func (c *Curve) Settle(ctx context.Context, band number.Exact) (number.Ball, error) {
	final, exactly, err := c.Final(ctx)
	if err != nil {
		return number.Ball{}, err
	}
	if sign, decided := final.Sign(); !decided || sign == 0 {
		return number.Ball{}, undefined("its final value is 0")
	}
	width := constantCurve(final.Abs().MulRat(band.Rat()), nil)
	if exactly != nil {
		w := new(big.Rat).Mul(new(big.Rat).Abs(exactly), band.Rat())
		width = constantCurve(number.BallFromRat(w, refinePrecision), w)
	}
	t, err := c.less(final, exactly).Abs().Sub(width).edge(ctx, Range{}, false)
	if err == errNever {
		return number.Ball{}, nil
	}
	return t, err
}

// less is the curve minus a constant.
func (c *Curve) less(v number.Ball, exactly *big.Rat) *Curve {
	if exactly != nil {
		return c.AddConstant(number.FromRat(new(big.Rat).Neg(exactly)))
	}
	return c.Add(constantCurve(v.Neg(), nil))
}

// Overshoot is (peak − final)/final, for a negative final value taken with the
// trough; 0 when the curve does not go beyond its final value. It is undefined
// where the final value is 0 or there is none.
func (c *Curve) Overshoot(ctx context.Context) (number.Ball, Extreme, error) {
	final, exactly, err := c.Final(ctx)
	if err != nil {
		return number.Ball{}, Extreme{}, err
	}
	sign, decided := final.Sign()
	if !decided || sign == 0 {
		return number.Ball{}, Extreme{}, undefined("its final value is 0")
	}
	find := c.Peak
	if sign < 0 {
		find = c.Trough
	}
	e, err := find(ctx, Range{})
	if err != nil {
		return number.Ball{}, e, err
	}
	if exactly != nil && e.Exact != nil {
		r := new(big.Rat).Sub(e.Exact, exactly)
		return number.BallFromRat(r.Quo(r, exactly), refinePrecision), e, nil
	}
	if !e.HasAt { // the extreme is the limit itself
		return number.Ball{}, e, nil
	}
	return e.Value.Sub(final).Quo(final), e, nil
}

// Rise is the time from where the curve first reaches 10 % of its final value to
// where it first reaches 90 %, and the first of these instants.
func (c *Curve) Rise(ctx context.Context) (rise, start number.Ball, err error) {
	final, exactly, err := c.Final(ctx)
	if err != nil {
		return rise, start, err
	}
	sign, decided := final.Sign()
	if !decided || sign == 0 {
		return rise, start, undefined("its final value is 0")
	}
	curve := c
	if sign < 0 {
		curve, final = c.Neg(), final.Neg()
		if exactly != nil {
			exactly = new(big.Rat).Neg(exactly)
		}
	}
	reach := func(part *big.Rat) (number.Ball, error) {
		var exactPart *big.Rat
		if exactly != nil {
			exactPart = new(big.Rat).Mul(exactly, part)
		}
		return curve.less(final.MulRat(part), exactPart).edge(ctx, Range{}, true)
	}
	if start, err = reach(big.NewRat(1, 10)); err != nil {
		return rise, start, err
	}
	end, err := reach(big.NewRat(9, 10))
	return end.Sub(start), start, err
}

// LastAbove is the last instant in the range at which the curve is above level.
// It is undefined when it never is, or is for ever.
func (c *Curve) LastAbove(ctx context.Context, level number.Exact, r Range) (number.Ball, error) {
	return c.AddConstant(level.Neg()).edge(ctx, r, false)
}

// LastBelow is the last instant in the range at which the curve is below level.
func (c *Curve) LastBelow(ctx context.Context, level number.Exact, r Range) (number.Ball, error) {
	return c.Neg().AddConstant(level).edge(ctx, r, false)
}

// FirstAbove is the first instant in the range from which on the curve is above
// level.
func (c *Curve) FirstAbove(ctx context.Context, level number.Exact, r Range) (number.Ball, error) {
	return c.AddConstant(level.Neg()).edge(ctx, r, true)
}

// constant is a form that is one value at all times.
type constant struct {
	value number.Ball
	exact *big.Rat // nil where it is not rational for sure
}

func constantCurve(v number.Ball, exactly *big.Rat) *Curve {
	return &Curve{leaf: &constant{v, exactly}}
}

// Breakpoints implements form.
func (k *constant) Breakpoints() []*big.Rat { return []*big.Rat{new(big.Rat)} }

// ExactAt implements form.
func (k *constant) ExactAt(context.Context, *big.Rat, Side) (*big.Rat, bool, error) {
	return k.exact, k.exact != nil, nil
}

// impulseAt implements form.
func (k *constant) impulseAt(context.Context, *big.Rat) (bool, error) { return false, nil }

// sumFrom implements form.
func (k *constant) sumFrom(_ context.Context, _ *big.Rat, prec uint) (*sum, error) {
	if sign, decided := k.value.Sign(); decided && sign == 0 {
		return &sum{}, nil
	}
	x := &sum{terms: []term{{
		pole: termPole{real: true, axis: true, zero: true, id: "0", index: -1},
		c:    []number.ComplexBall{realBall(k.value)},
	}}}
	if k.exact != nil {
		x.constant = []*big.Rat{k.exact}
		x.setConstant(prec)
	}
	return x, nil
}

// steadyStage keeps of a stage what oscillates for ever, over one period.
func (st *stage) steadyStage(period float64) (steady *stage, transient bool, err error) {
	steady = &stage{origin: st.origin, length: period, steady: true}
	for _, x := range st.sums {
		y := x.steady()
		f, err := y.toFloat()
		if err != nil {
			return nil, false, err
		}
		transient = transient || len(y.terms) < len(x.terms)
		steady.sums, steady.floats = append(steady.sums, y), append(steady.floats, f)
	}
	steady.scale, _ = steady.largest()
	return steady, transient, nil
}
