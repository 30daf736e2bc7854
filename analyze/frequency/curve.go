// Package frequency follows network functions along the imaginary axis:
// where a magnitude, phase, real part or group delay is largest or smallest
// over a range, and where it crosses a level. Nothing is sampled: every such
// curve is a rational function of ω or ω², so its extremes stand at roots of
// an exact polynomial, and those are isolated with a proof.
package frequency

import (
	"context"
	"errors"
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// Curve is a real rational function g(x) = Num(x)/Den(x) of x = ω² when
// Squared is set, of x = ω otherwise (ω in rad/s).
type Curve struct {
	Num, Den exact.Poly
	Squared  bool
}

// MagnitudeSquared is |H(jω)|² as a function of ω².
func MagnitudeSquared(h exact.Ratio) Curve {
	return reduced(h.Num.MagnitudeSquared(), h.Den.MagnitudeSquared(), true)
}

// RealPart is Re H(jω) as a function of ω.
func RealPart(h exact.Ratio) Curve {
	re, _, den := parts(h)
	return reduced(re, den, false)
}

// ImaginaryPart is Im H(jω) as a function of ω.
func ImaginaryPart(h exact.Ratio) Curve {
	_, im, den := parts(h)
	return reduced(im, den, false)
}

// Delay is the group delay −dφ/dω of H(jω) in seconds, as a function of ω.
// With H = N/D it is Re(D′(jω)/D(jω)) − Re(N′(jω)/N(jω)).
func Delay(h exact.Ratio) Curve {
	if h.Num.IsZero() {
		return Curve{exact.Poly{}, one, false}
	}
	dn, dd := logDerivative(h.Num), logDerivative(h.Den)
	num := dd.Num.Mul(dn.Den).Sub(dn.Num.Mul(dd.Den))
	return reduced(num, dn.Den.Mul(dd.Den), false)
}

var one = exact.PolyFromInt64s(1)

// logDerivative is Re(P′(jω)/P(jω)).
func logDerivative(p exact.Poly) Curve {
	d := p.Derivative()
	re, _, den := parts(exact.Ratio{Num: d, Den: p})
	return reduced(re, den, false)
}

// parts gives Re and Im of N(jω)/D(jω) over the common denominator |D(jω)|²,
// all as polynomials in ω. OnImaginaryAxis gives a(ω²) and b(ω²) with
// P(jω) = a + jω·b.
func parts(h exact.Ratio) (re, im, den exact.Poly) {
	na, nb := h.Num.OnImaginaryAxis()
	da, db := h.Den.OnImaginaryAxis()
	na, nb, da, db = spread(na), spread(nb).Shift(1), spread(da), spread(db).Shift(1)
	re = na.Mul(da).Add(nb.Mul(db))
	im = nb.Mul(da).Sub(na.Mul(db))
	den = da.Mul(da).Add(db.Mul(db))
	return re, im, den
}

// spread turns p(x) into p(x²).
func spread(p exact.Poly) exact.Poly {
	c := p.Coefficients()
	out := make([]*big.Rat, 2*len(c))
	for i := range out {
		out[i] = new(big.Rat)
		if i%2 == 0 {
			out[i] = c[i/2]
		}
	}
	return exact.NewPoly(out...)
}

func reduced(num, den exact.Poly, squared bool) Curve {
	if num.IsZero() {
		return Curve{num, one, squared}
	}
	g := exact.GCD(num, den)
	return Curve{num.Quo(g), den.Quo(g), squared}
}

// Range is a stretch of angular frequency in rad/s; To is nil for no upper end.
type Range struct {
	From number.Exact
	To   *number.Exact
}

// Point is a place on a curve: an end of the range, or a local extreme.
type Point struct {
	Omega     number.Ball // rad/s; not finite for the end at infinity
	Value     number.Ball
	End       bool
	AtZero    bool // the end is ω = 0 exactly
	Infinite  bool // the end at ω → ∞
	Unbounded bool // the curve has a pole here; Value then carries only a sign
	// Exact is the value where it is known as a rational number, or as a
	// rational multiple of π for a phase: at ends of the range. Nil elsewhere.
	Exact *number.Exact
}

// exactly puts a rational value into a point.
func (p *Point) exactly(r *big.Rat, prec uint) {
	x := number.FromRat(r)
	p.Exact, p.Value = &x, number.BallFromRat(r, prec)
}

var errNoRoots = errors.New("no polynomial to take roots of")

// Extremes lists the ends of the range and every local extreme and pole of
// the curve inside it, in order of frequency. The largest and smallest value
// over the range are among them: that is the proof a limit rests on.
func (c Curve) Extremes(ctx context.Context, r Range, prec uint) ([]Point, error) {
	points := []Point{c.end(r.From, prec)}
	inner, err := c.turning(ctx, r, prec)
	if err != nil {
		return nil, err
	}
	points = append(points, inner...)
	if r.To != nil {
		points = append(points, c.end(*r.To, prec))
	} else {
		points = append(points, c.atInfinity(prec))
	}
	return points, nil
}

// turning finds the extremes and poles strictly inside the range.
func (c Curve) turning(ctx context.Context, r Range, prec uint) ([]Point, error) {
	slope := c.Num.Derivative().Mul(c.Den).Sub(c.Num.Mul(c.Den.Derivative()))
	turns, err := c.inside(ctx, slope, r, prec)
	if err != nil {
		return nil, err
	}
	poles, err := c.inside(ctx, c.Den, r, prec)
	if err != nil {
		return nil, err
	}
	var points []Point
	for _, x := range turns {
		points = append(points, Point{Omega: c.omega(x), Value: c.at(x)})
	}
	for _, x := range poles {
		points = append(points, Point{Omega: c.omega(x), Unbounded: true})
	}
	sortPoints(points)
	return points, nil
}

// inside gives the real roots of p in the open range of x, as balls. A root
// that cannot be told from an end is left to the end itself.
func (c Curve) inside(ctx context.Context, p exact.Poly, r Range, prec uint) ([]number.Ball, error) {
	if p.Degree() < 1 {
		return nil, nil
	}
	set, err := exact.Roots(ctx, p)
	if err != nil {
		return nil, err
	}
	roots, err := set.At(prec)
	if err != nil {
		return nil, err
	}
	var out []number.Ball
	for _, root := range roots {
		if root.Real && c.within(root.Re, r, prec) {
			out = append(out, root.Re)
		}
	}
	return out, nil
}

// within tells whether x lies inside the open range for sure.
func (c Curve) within(x number.Ball, r Range, prec uint) bool {
	if order, sure := x.Cmp(c.argument(r.From, prec)); !sure || order <= 0 {
		return false
	}
	if r.To == nil {
		return true
	}
	order, sure := x.Cmp(c.argument(*r.To, prec))
	return sure && order < 0
}

// Crossings gives the frequencies inside the range where the curve equals the
// level, a rational number, in rising order.
func (c Curve) Crossings(ctx context.Context, level *big.Rat, r Range, prec uint) ([]number.Ball, error) {
	p := c.Num.Sub(c.Den.Scale(level))
	if p.IsZero() {
		return nil, errNoRoots
	}
	xs, err := c.inside(ctx, p, r, prec)
	if err != nil {
		return nil, err
	}
	out := make([]number.Ball, len(xs))
	for i, x := range xs {
		out[i] = c.omega(x)
	}
	sortBalls(out)
	return out, nil
}

func (c Curve) argument(w number.Exact, prec uint) number.Ball {
	x := number.BallFromExact(w, prec)
	if c.Squared {
		x = x.Mul(x)
	}
	return x
}

func (c Curve) omega(x number.Ball) number.Ball {
	if c.Squared {
		return x.Sqrt()
	}
	return x
}

func (c Curve) at(x number.Ball) number.Ball {
	return c.Num.EvalBall(x).Quo(c.Den.EvalBall(x))
}

// end evaluates the curve at an end of the range.
func (c Curve) end(w number.Exact, prec uint) Point {
	p := Point{Omega: number.BallFromExact(w, prec), End: true}
	if sign, sure := w.Sign(); sure && sign == 0 {
		p.AtZero = true
		if c.Den.Coeff(0).Sign() == 0 {
			p.Unbounded = true
			return p
		}
		p.exactly(new(big.Rat).Quo(c.Num.Coeff(0), c.Den.Coeff(0)), prec)
		return p
	}
	x := c.argument(w, prec)
	if w.IsExact() {
		at := square(w.Rat(), c.Squared)
		den := c.Den.Eval(at)
		if den.Sign() == 0 {
			p.Unbounded = true
			return p
		}
		p.exactly(new(big.Rat).Quo(c.Num.Eval(at), den), prec)
		return p
	}
	p.Value = c.at(x)
	return p
}

func square(r *big.Rat, yes bool) *big.Rat {
	if yes {
		return new(big.Rat).Mul(r, r)
	}
	return r
}

func (c Curve) atInfinity(prec uint) Point {
	p := Point{End: true, Infinite: true}
	switch n, d := c.Num.Degree(), c.Den.Degree(); {
	case n > d:
		p.Unbounded = true
		p.Value = number.BallFromRat(big.NewRat(int64(c.Num.Leading().Sign()*c.Den.Leading().Sign()), 1), prec)
	case n < d:
		p.exactly(new(big.Rat), prec)
	default:
		p.exactly(new(big.Rat).Quo(c.Num.Leading(), c.Den.Leading()), prec)
	}
	return p
}
