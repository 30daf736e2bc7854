package response

import (
	"context"
	"fmt"
	"math/big"

	"portlight/dialect/number"
)

// negligibleBits is how far below the size of its parts a sum must lie to count
// as zero to within the bounds of stand-ins for irrational values (which have
// 75 digits, 249 bits, some of which the arithmetic that follows may use up).
const negligibleBits = 190

// contribution is what one component gives at an instant: an exact part and
// one known through a ball.
type contribution struct {
	exact *big.Rat // nil is zero
	rest  number.Ball
	some  bool        // rest is not the exact zero
	size  number.Ball // sum of the terms' absolute values, amplitudes for pairs
}

// ball is the whole contribution.
func (c contribution) ball(prec uint) number.Ball {
	sum := c.rest
	if c.exact != nil {
		sum = sum.Add(number.BallFromRat(c.exact, prec))
	}
	return sum
}

// acts tells whether the component is on at t, approached from side.
func (c *component) acts(t *big.Rat, side Side) bool {
	began := c.from.Cmp(t)
	if began > 0 || (began == 0 && side == Left) {
		return false
	}
	if c.until == nil {
		return true
	}
	ends := c.until.Cmp(t)
	return ends > 0 || (ends == 0 && side == Left)
}

// partsAt evaluates every component at t to the working precision, zero where
// it does not act. Impulses do not count.
func (s *Signal) partsAt(ctx context.Context, t *big.Rat, side Side, prec uint) ([]contribution, error) {
	fam, expansions, err := s.prepared(ctx)
	if err != nil {
		return nil, err
	}
	poles, err := fam.at(ctx, prec)
	if err != nil {
		return nil, err
	}
	out := make([]contribution, len(s.comps))
	exps := newExponentials(poles, prec)
	for i := range s.comps {
		c := &s.comps[i]
		if !c.acts(t, side) {
			continue
		}
		if out[i], err = s.partAt(ctx, c, expansions[i], exps, new(big.Rat).Sub(t, c.from), prec); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// partAt evaluates one component at τ ≥ 0 after its beginning.
func (s *Signal) partAt(ctx context.Context, c *component, e *expansion, exps *exponentials, tau *big.Rat, prec uint) (contribution, error) {
	rational := c.weight.at == nil
	if tau.Sign() == 0 && rational && c.share == wholeShare {
		v := new(big.Rat).Mul(c.weight.rational, e.initialValue())
		return contribution{exact: v, size: number.BallFromRat(v, prec).Abs()}, nil
	}
	coefficients, err := e.coefficients(ctx, prec)
	if err != nil {
		return contribution{}, err
	}
	w, err := c.weight.ball(ctx, prec)
	if err != nil {
		return contribution{}, err
	}
	var out contribution
	for j, p := range e.family.poles {
		if e.powers[j] == 0 || !c.counts(e.family.base.members[p.member]) {
			continue
		}
		if p.zero && rational {
			out.exact = polynomialAt(e.originCoefficients(), tau)
			out.exact.Mul(out.exact, c.weight.rational)
			continue
		}
		sum := hornerAt(coefficients[j], tau, prec).Mul(exps.at(j, tau))
		if !p.real {
			sum = sum.MulPow2(1)
		}
		out.rest = out.rest.Add(sum.Re)
		out.size = out.size.Add(sum.Abs())
		out.some = true
	}
	out.rest, out.size = out.rest.Mul(w), out.size.Mul(w).Abs()
	if out.exact != nil {
		out.size = out.size.Add(number.BallFromRat(out.exact, prec).Abs())
	}
	return out, nil
}

// polynomialAt is Σ c[m]·τ^m, exactly.
func polynomialAt(c []*big.Rat, tau *big.Rat) *big.Rat {
	sum := new(big.Rat)
	for m := len(c) - 1; m >= 0; m-- {
		sum.Mul(sum, tau).Add(sum, c[m])
	}
	return sum
}

// hornerAt is Σ c[m]·τ^m.
func hornerAt(c []number.ComplexBall, tau *big.Rat, prec uint) number.ComplexBall {
	sum := c[len(c)-1]
	if len(c) == 1 {
		return sum
	}
	x := number.BallFromRat(tau, prec)
	for m := len(c) - 2; m >= 0; m-- {
		sum = sum.MulBall(x).Add(c[m])
	}
	return sum
}

// exponentials keeps the e^{pτ} of an evaluation.
type exponentials struct {
	poles []number.ComplexBall
	prec  uint
	known map[string][]*number.ComplexBall
}

func newExponentials(poles []number.ComplexBall, prec uint) *exponentials {
	return &exponentials{poles: poles, prec: prec, known: map[string][]*number.ComplexBall{}}
}

// at is e^{pτ} for pole j.
func (x *exponentials) at(j int, tau *big.Rat) number.ComplexBall {
	key := tau.RatString()
	row, ok := x.known[key]
	if !ok {
		row = make([]*number.ComplexBall, len(x.poles))
		x.known[key] = row
	}
	if row[j] == nil {
		t := number.BallFromRat(tau, x.prec)
		p := x.poles[j]
		v := p.MulBall(t).Exp()
		row[j] = &v
	}
	return *row[j]
}

// ValueAt evaluates the signal at t to a working precision of prec bits: the
// right limit (the value at t) or the left one, without impulses. t must not be
// negative, and is not 0 from the left (see [Signal.Before]).
func (s *Signal) ValueAt(ctx context.Context, t *big.Rat, side Side, prec uint) (number.Ball, error) {
	v, _, err := s.valueAt(ctx, t, side, prec)
	return v, err
}

// valueAt also gives the sum of the terms' sizes.
func (s *Signal) valueAt(ctx context.Context, t *big.Rat, side Side, prec uint) (value, size number.Ball, err error) {
	parts, err := s.partsAt(ctx, t, side, prec)
	if err != nil {
		return value, size, err
	}
	sum := new(big.Rat)
	for _, c := range parts {
		if c.exact != nil {
			sum.Add(sum, c.exact)
		}
		value = value.Add(c.rest)
		size = size.Add(c.size)
	}
	return value.Add(number.BallFromRat(sum, prec)), size, nil
}

// ExactAt returns the value at t when it is rational for sure: at the beginning
// of a stretch that does not depend on earlier ones, or where only constants
// and powers of time are left.
func (s *Signal) ExactAt(ctx context.Context, t *big.Rat, side Side) (*big.Rat, bool, error) {
	if t.Sign() == 0 && side == Left {
		x, err := s.Before(ctx)
		return x.Rat(), err == nil, err
	}
	sum := new(big.Rat)
	for i := range s.comps {
		c := &s.comps[i]
		if !c.acts(t, side) {
			continue
		}
		x, ok := c.exactAt(new(big.Rat).Sub(t, c.from))
		if !ok {
			return nil, false, nil
		}
		sum.Add(sum, x)
	}
	return sum, true, nil
}

// exactAt is the component's value at τ when it is rational for sure: at its
// beginning, and where its only pole is the origin.
func (c *component) exactAt(tau *big.Rat) (*big.Rat, bool) {
	if c.weight.at != nil || c.share != wholeShare {
		return nil, false
	}
	v := new(big.Rat)
	switch f := c.fraction; {
	case tau.Sign() == 0:
		v = f.initialValue()
	case f.den.Degree() == f.den.Order():
		v = polynomialAt(f.originCoefficients(), tau)
	default:
		return nil, false
	}
	return v.Mul(v, c.weight.rational), true
}

// Value returns the value at t, the right limit or the left one, with the
// working precision raised until digits significant digits are decided. Where
// the value is below 2^-190 of the parts it is made of, the ball holds zero and
// what the stand-ins for irrational values leave undecided. The error is
// [ErrPrecision] (the ball is right but wider), [ErrBeforeUndefined] for t = 0
// from the left, or the context's.
func (s *Signal) Value(ctx context.Context, t *big.Rat, side Side, digits int) (number.Ball, error) {
	start := startPrecision(digits)
	if t.Sign() < 0 || (t.Sign() == 0 && side == Left) {
		x, err := s.Before(ctx)
		if t.Sign() < 0 && err == nil && x.Rat().Sign() != 0 {
			err = fmt.Errorf("%w: only the limit at 0− is known", ErrBeforeUndefined)
		}
		return number.BallFromExact(x, start), err
	}
	return refine(ctx, digits, s.loose(), func(prec uint) (number.Ball, number.Ball, error) {
		return s.valueAt(ctx, t, side, prec)
	})
}

// startPrecision is the first working precision to try for that many digits.
func startPrecision(digits int) uint { return uint(max(digits, 1))*10/3 + 64 }

// refine raises the precision until the digits are decided, or the value is
// negligible beside its size; it is then zero as far as can be told.
func refine(ctx context.Context, digits int, loose bool, f func(prec uint) (value, size number.Ball, err error)) (number.Ball, error) {
	bits := int64(max(digits, 1))*10/3 + 4
	prec := startPrecision(digits)
	for {
		if err := ctx.Err(); err != nil {
			return number.Ball{}, err
		}
		value, size, err := f(prec)
		if err != nil {
			return value, err
		}
		if negligible(value, size, loose) {
			return number.Ball{}.WithPrecision(prec).WithBound(size.MulPow2(-negligibleBits)), nil
		}
		if value.RelativeBits() >= bits {
			return value, nil
		}
		if prec *= 2; prec > maxPrecision {
			return value, fmt.Errorf("%w (%d bits)", ErrPrecision, maxPrecision)
		}
	}
}

// negligible tells whether every number in value is below 2^-negligibleBits of
// size and none of them need be anything but zero: the ball holds zero, or the
// numbers it was made from are loose, stand-ins for irrational values.
func negligible(value, size number.Ball, loose bool) bool {
	limit := size.MulPow2(-negligibleBits)
	return (loose || value.ContainsZero()) && value.IsFinite() && value.Abs().Upper().Cmp(limit.Lower()) <= 0
}

// loose tells whether stand-ins for irrational values went into the signal.
func (s *Signal) loose() bool { return !s.solution.exact }

// InitialValue is the value at 0+, which is rational for signals that begin at 0.
func (s *Signal) InitialValue(ctx context.Context) (number.Exact, error) {
	r, ok, err := s.ExactAt(ctx, new(big.Rat), Right)
	if err != nil {
		return number.Exact{}, err
	}
	if !ok {
		return number.Exact{}, fmt.Errorf("%w: the value at 0+ of a part is irrational", ErrPrecision)
	}
	return number.FromRat(r), nil
}

// ImpulseGroup is the impulses at one instant: Weights[k] is the weight of the
// k-th derivative of the unit impulse. Exact holds the same weights where they
// are rational for sure, nil entries elsewhere.
type ImpulseGroup struct {
	At      *big.Rat
	Weights []number.Ball
	Exact   []*big.Rat
}

// Impulses lists the impulses in ascending order of time, to the digits asked.
func (s *Signal) Impulses(ctx context.Context, digits int) ([]ImpulseGroup, error) {
	var out []ImpulseGroup
	for _, t := range s.Breakpoints() {
		order := -1
		for i := range s.comps {
			if c := &s.comps[i]; c.from.Cmp(t) == 0 && c.impulsesCount() {
				order = max(order, c.fraction.impulses.Degree())
			}
		}
		group := ImpulseGroup{At: t, Weights: make([]number.Ball, order+1), Exact: make([]*big.Rat, order+1)}
		for k := range group.Weights {
			var err error
			if group.Weights[k], group.Exact[k], err = s.impulse(ctx, t, k, digits); err != nil {
				return nil, err
			}
		}
		if group.trim(); len(group.Weights) > 0 {
			out = append(out, group)
		}
	}
	return out, nil
}

// impulse is the weight of the k-th derivative of the impulse at t.
func (s *Signal) impulse(ctx context.Context, t *big.Rat, k, digits int) (number.Ball, *big.Rat, error) {
	exactSum := new(big.Rat)
	allExact := true
	for i := range s.comps {
		c := &s.comps[i]
		if c.from.Cmp(t) != 0 || !c.impulsesCount() || c.fraction.impulses.Coeff(k).Sign() == 0 {
			continue
		}
		if c.weight.at != nil {
			allExact = false
			continue
		}
		exactSum.Add(exactSum, new(big.Rat).Mul(c.weight.rational, c.fraction.impulses.Coeff(k)))
	}
	if allExact {
		return number.BallFromRat(exactSum, startPrecision(digits)), exactSum, nil
	}
	v, err := refine(ctx, digits, s.loose(), func(prec uint) (value, size number.Ball, err error) {
		value = number.BallFromRat(exactSum, prec)
		size = value.Abs()
		for i := range s.comps {
			c := &s.comps[i]
			if c.from.Cmp(t) != 0 || !c.impulsesCount() || c.weight.at == nil {
				continue
			}
			w, err := c.weight.ball(ctx, prec)
			if err != nil {
				return value, size, err
			}
			part := w.MulRat(c.fraction.impulses.Coeff(k))
			value, size = value.Add(part), size.Add(part.Abs())
		}
		return value, size, nil
	})
	return v, nil, err
}

// trim drops weights at the end that are zero, exactly or to within the bounds
// of stand-ins.
func (g *ImpulseGroup) trim() {
	for n := len(g.Weights); n > 0; n = len(g.Weights) {
		last := g.Weights[n-1]
		if g.Exact[n-1] != nil && g.Exact[n-1].Sign() != 0 || g.Exact[n-1] == nil && !last.ContainsZero() {
			return
		}
		g.Weights, g.Exact = g.Weights[:n-1], g.Exact[:n-1]
	}
}
