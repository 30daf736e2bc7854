package response

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"

	"portlight/dialect/number"
)

// form is a signal that is a sum of terms between its breakpoints.
type form interface {
	// Breakpoints lists the instants, 0 first, where the sum changes.
	Breakpoints() []*big.Rat
	// sumFrom returns the sum in τ = t − origin that holds from origin to the
	// next breakpoint.
	sumFrom(ctx context.Context, origin *big.Rat, prec uint) (*sum, error)
	// ExactAt returns the value at an instant when it is rational for sure.
	ExactAt(ctx context.Context, t *big.Rat, side Side) (*big.Rat, bool, error)
	// impulseAt tells whether there is an impulse at the breakpoint t.
	impulseAt(ctx context.Context, t *big.Rat) (bool, error)
}

// sumFrom implements form.
func (s *Signal) sumFrom(ctx context.Context, origin *big.Rat, prec uint) (*sum, error) {
	for i, seg := range s.pieces() {
		if seg.start.Cmp(origin) == 0 {
			return s.expand(ctx, i, prec)
		}
	}
	return s.collect(ctx, func(c *component) bool { return c.acts(origin, Right) }, origin, prec)
}

// impulseAt implements form.
func (s *Signal) impulseAt(ctx context.Context, t *big.Rat) (bool, error) {
	any := false
	for i := range s.comps {
		c := &s.comps[i]
		any = any || c.from.Cmp(t) == 0 && c.impulsesCount() && c.fraction.impulses.Degree() >= 0
	}
	if !any {
		return false, nil
	}
	list, err := s.Impulses(ctx, 6)
	for _, g := range list {
		if g.At.Cmp(t) == 0 {
			return true, err
		}
	}
	return false, err
}

// curveOp is an operation on curves.
type curveOp int

const (
	opLeaf curveOp = iota
	opNegate
	opAbs
	opLeast
	opGreatest
	opAdd
)

// Curve is what measures and limits look at: a signal, or signals under
// products, sums, absolute value, least and greatest. It is immutable.
type Curve struct {
	op   curveOp
	leaf form
	args []*Curve
}

// Curve returns the signal as a curve.
func (s *Signal) Curve() *Curve { return &Curve{leaf: s} }

// AddConstant returns s + k.
func (s *Signal) AddConstant(k number.Exact) *Signal {
	if k.Rat().Sign() == 0 {
		return s
	}
	f := newFraction(ratioOf(constantPoly(k.Rat()), polyS), one, polyS)
	comps := append(append([]component(nil), s.comps...), component{from: new(big.Rat), cause: noCause, weight: unitWeight, fraction: f})
	before := s.before
	return newSignal(s.solution, comps, func(ctx context.Context) (number.Exact, error) {
		x, err := valueBefore(ctx, before)
		return x.Add(k), err
	})
}

// noCause marks what is neither due to the initial state nor to a source.
const noCause = -1

// Neg returns −c.
func (c *Curve) Neg() *Curve {
	if s, ok := c.leaf.(*Signal); ok {
		return s.Scale(number.FromInt(-1)).Curve()
	}
	if p, ok := c.leaf.(*product); ok {
		return &Curve{leaf: &product{p.a, p.b, new(big.Rat).Neg(p.factor)}}
	}
	if c.op == opNegate {
		return c.args[0]
	}
	return &Curve{op: opNegate, args: []*Curve{c}}
}

// Abs returns |c|.
func (c *Curve) Abs() *Curve { return &Curve{op: opAbs, args: []*Curve{c}} }

// Least returns the lesser of two curves at each instant.
func Least(a, b *Curve) *Curve { return &Curve{op: opLeast, args: []*Curve{a, b}} }

// Greatest returns the greater of two curves at each instant.
func Greatest(a, b *Curve) *Curve { return &Curve{op: opGreatest, args: []*Curve{a, b}} }

// Add returns c + d.
func (c *Curve) Add(d *Curve) *Curve {
	a, ok := c.leaf.(*Signal)
	b, also := d.leaf.(*Signal)
	if ok && also {
		return a.Add(b).Curve()
	}
	return &Curve{op: opAdd, args: []*Curve{c, d}}
}

// Sub returns c − d.
func (c *Curve) Sub(d *Curve) *Curve { return c.Add(d.Neg()) }

// AddConstant returns c + k.
func (c *Curve) AddConstant(k number.Exact) *Curve {
	if s, ok := c.leaf.(*Signal); ok {
		return s.AddConstant(k).Curve()
	}
	return c.Add(constantCurve(number.BallFromRat(k.Rat(), refinePrecision), k.Rat()))
}

// Signal returns the curve's signal when it is nothing else.
func (c *Curve) Signal() (*Signal, bool) {
	s, ok := c.leaf.(*Signal)
	return s, ok
}

// leaves lists the forms in order.
func (c *Curve) leaves() []form {
	if c.op == opLeaf {
		return []form{c.leaf}
	}
	var out []form
	for _, a := range c.args {
		out = append(out, a.leaves()...)
	}
	return out
}

// Range is the time from From to To, both in s; a nil From is 0 and a nil To is
// without end.
type Range struct{ From, To *big.Rat }

// Errors of curves over a range. They are results: the wording tells the reader.
var (
	// ErrUndefined: the measure has no value; the text says why.
	ErrUndefined = errors.New("undefined")
	// ErrUndecided: bounds as narrow as the working precision allows do not
	// decide; the text says what.
	ErrUndecided = errors.New("undecided")
	// ErrRange: the range is empty or begins before 0.
	ErrRange = errors.New("the range of time is empty or begins before t = 0")
)

func undefined(format string, a ...any) error {
	return fmt.Errorf("%w: %s", ErrUndefined, fmt.Sprintf(format, a...))
}

func undecided(format string, a ...any) error {
	return fmt.Errorf("%w: %s", ErrUndecided, fmt.Sprintf(format, a...))
}

// stage is a piece of the range without breakpoints inside.
type stage struct {
	origin, end *big.Rat // end nil: for ever
	length      float64  // upper bound of end − origin
	sums        []*sum   // per leaf
	floats      []*floatSum
	scale       float64      // of the values, for tolerances
	steady      bool         // only what oscillates for ever is left in it
	lasting     *lasting     // set where a steady oscillation underlies it
	period      *number.Ball // of a steady stage, when it is integrated
}

// stages splits the range and prepares every leaf within it.
func (c *Curve) stages(ctx context.Context, r Range, prec uint) ([]*stage, error) {
	from := r.From
	if from == nil {
		from = new(big.Rat)
	}
	if from.Sign() < 0 || r.To != nil && r.To.Cmp(from) < 0 {
		return nil, ErrRange
	}
	cuts := []*big.Rat{from}
	leaves := c.leaves()
	for _, l := range leaves {
		for _, b := range l.Breakpoints() {
			if b.Cmp(from) > 0 && (r.To == nil || b.Cmp(r.To) < 0) {
				cuts = append(cuts, b)
			}
		}
	}
	cuts = sortedInstants(cuts)
	out := make([]*stage, len(cuts))
	for i, origin := range cuts {
		st := &stage{origin: origin, end: r.To, length: math.Inf(1)}
		if i+1 < len(cuts) {
			st.end = cuts[i+1]
		}
		if st.end != nil {
			l, _ := new(big.Rat).Sub(st.end, origin).Float64()
			st.length = math.Nextafter(l, math.Inf(1))
			if l == 0 {
				st.length = 0
			}
		}
		if err := st.prepare(ctx, leaves, prec); err != nil {
			return nil, err
		}
		out[i] = st
	}
	return out, nil
}

// prepare finds the sums of the leaves and their float64 form. Where terms cancel
// the precision is raised until the values have stageBits bits.
func (st *stage) prepare(ctx context.Context, leaves []form, prec uint) error {
	for {
		st.sums, st.floats = nil, nil
		for _, l := range leaves {
			x, err := l.sumFrom(ctx, st.origin, prec)
			if err != nil {
				return err
			}
			f, err := x.toFloat()
			if err != nil {
				return err
			}
			st.sums, st.floats = append(st.sums, x), append(st.floats, f)
		}
		var bits int64
		if st.scale, bits = st.largest(); bits >= stageBits || prec >= stageLimit {
			return nil
		}
		prec *= 2
	}
}

const (
	stageBits  = 120
	stageLimit = 4096
	// leastScale is the scale of what is zero.
	leastScale = 1e-290
)

// largest is about the largest size of the leaves, seen at a few instants: the
// measure of what is negligible. Where terms cancel it is found with balls; bits
// is how many bits of it are decided.
func (st *stage) largest() (size float64, bits int64) {
	bits = stageBits
	for i, x := range st.floats {
		value, bound := 0.0, 0.0
		times := st.looks(x)
		for _, t := range times {
			v, b := x.at(t, 0)
			value, bound = math.Max(value, math.Abs(v)), math.Max(bound, b)
		}
		if value < 1e6*bound {
			value = 0
			var best int64
			for _, t := range times {
				v := st.sums[i].at(number.BallFromFloat64(t, refinePrecision))
				if m := math.Abs(v.MidFloat64()); m > value {
					value, best = m, v.RelativeBits()
				}
			}
			if value > 0 {
				bits = min(bits, best)
			}
		}
		size = math.Max(size, value)
	}
	return math.Max(size, leastScale), bits
}

// looks are instants from the fastest to the slowest time of a sum.
func (st *stage) looks(x *floatSum) []float64 {
	times := []float64{0}
	fast := 1.0
	if x.rate > 1e-250 {
		fast = 1 / x.rate
	}
	for t := fast / 2; t < st.length && t < 1e9*fast && t <= 8*st.unitTime(); t *= 2 {
		times = append(times, t)
	}
	if !math.IsInf(st.length, 1) && len(times) < 30 {
		times = append(times, st.length/2, st.length)
	}
	return times
}

// hasImpulse looks for an impulse in the range, its ends included.
func (c *Curve) hasImpulse(ctx context.Context, r Range) (*big.Rat, bool, error) {
	for _, l := range c.leaves() {
		for _, b := range l.Breakpoints() {
			if r.From != nil && b.Cmp(r.From) < 0 || r.To != nil && b.Cmp(r.To) > 0 {
				continue
			}
			if yes, err := l.impulseAt(ctx, b); yes || err != nil {
				return b, yes, err
			}
		}
	}
	return nil, false, nil
}

// ExactAt returns the value at t when it is rational for sure.
func (c *Curve) ExactAt(ctx context.Context, t *big.Rat, side Side) (*big.Rat, bool, error) {
	if c.op == opLeaf {
		return c.leaf.ExactAt(ctx, t, side)
	}
	values := make([]*big.Rat, len(c.args))
	for i, a := range c.args {
		v, ok, err := a.ExactAt(ctx, t, side)
		if !ok || err != nil {
			return nil, false, err
		}
		values[i] = v
	}
	return applyExact(c.op, values), true, nil
}

func applyExact(op curveOp, v []*big.Rat) *big.Rat {
	switch op {
	case opNegate:
		return new(big.Rat).Neg(v[0])
	case opAbs:
		return new(big.Rat).Abs(v[0])
	case opLeast:
		if v[0].Cmp(v[1]) <= 0 {
			return v[0]
		}
		return v[1]
	case opGreatest:
		if v[0].Cmp(v[1]) >= 0 {
			return v[0]
		}
		return v[1]
	}
	return new(big.Rat).Add(v[0], v[1])
}

// applyBall is the operation on balls.
func applyBall(op curveOp, v []number.Ball) number.Ball {
	switch op {
	case opNegate:
		return v[0].Neg()
	case opAbs:
		return v[0].Abs()
	case opLeast, opGreatest:
		order, decided := v[0].Cmp(v[1])
		if !decided {
			return betweenBalls(op, v[0], v[1])
		}
		if (order <= 0) == (op == opLeast) {
			return v[0]
		}
		return v[1]
	}
	return v[0].Add(v[1])
}

// betweenBalls is the least or greatest of two balls that overlap.
func betweenBalls(op curveOp, a, b number.Ball) number.Ball {
	lo, hi := a.Lower(), a.Upper()
	if (b.Lower().Cmp(lo) < 0) == (op == opLeast) {
		lo = b.Lower()
	}
	if (b.Upper().Cmp(hi) < 0) == (op == opLeast) {
		hi = b.Upper()
	}
	return number.Hull(lo, hi, max(a.Prec(), b.Prec()))
}

// Value is [Signal.Value] for a curve.
func (c *Curve) Value(ctx context.Context, t *big.Rat, side Side, digits int) (number.Ball, error) {
	if s, ok := c.Signal(); ok {
		return s.Value(ctx, t, side, digits)
	}
	if t.Sign() < 0 || t.Sign() == 0 && side == Left {
		v, _, err := c.ExactAt(ctx, new(big.Rat), Left)
		if err != nil {
			return number.Ball{}, err
		}
		return number.BallFromRat(v, startPrecision(digits)), nil
	}
	return refine(ctx, digits, c.loose(), func(prec uint) (value, size number.Ball, err error) {
		return c.valueAt(ctx, t, side, prec)
	})
}

// loose tells whether stand-ins for irrational values went into a leaf.
func (c *Curve) loose() bool {
	for _, l := range c.leaves() {
		switch f := l.(type) {
		case *Signal:
			if f.loose() {
				return true
			}
		case *product:
			if f.a.loose() || f.b.loose() {
				return true
			}
		}
	}
	return false
}

// valueAt evaluates at a working precision, with the size of the parts.
func (c *Curve) valueAt(ctx context.Context, t *big.Rat, side Side, prec uint) (value, size number.Ball, err error) {
	if c.op == opLeaf {
		switch f := c.leaf.(type) {
		case *Signal:
			return f.valueAt(ctx, t, side, prec)
		case *product:
			return f.valueAt(ctx, t, side, prec)
		case *constant:
			return f.value, f.value.Abs(), nil
		}
	}
	v := make([]number.Ball, len(c.args))
	for i, a := range c.args {
		var s number.Ball
		if v[i], s, err = a.valueAt(ctx, t, side, prec); err != nil {
			return value, size, err
		}
		size = size.Add(s)
	}
	return applyBall(c.op, v), size, nil
}
