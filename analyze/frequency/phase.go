package frequency

import (
	"context"
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// At evaluates h at jω.
func At(h exact.Ratio, omega number.Ball) number.ComplexBall {
	z := number.ComplexBall{Re: number.BallFromInt(0, omega.Prec()), Im: omega}
	return h.Num.EvalComplexBall(z).Quo(h.Den.EvalComplexBall(z))
}

// Phase is the angle of a function on the imaginary axis, continuous in ω:
// every root turns it by the angle it is seen under, and a root on the axis,
// taken as the limit of one in the left half-plane, by half a turn as ω goes
// past it. Just above ω = 0 it lies in (−π, π].
type Phase struct {
	h            exact.Ratio
	zeros, poles []exact.Root
}

// NewPhase prepares the phase of a function that is not zero, its roots to
// prec bits.
func NewPhase(ctx context.Context, h exact.Ratio, prec uint) (*Phase, error) {
	p := &Phase{h: h}
	for _, side := range []struct {
		poly exact.Poly
		into *[]exact.Root
	}{{h.Num, &p.zeros}, {h.Den, &p.poles}} {
		if side.poly.Degree() < 1 {
			continue
		}
		set, err := exact.Roots(ctx, side.poly)
		if err != nil {
			return nil, err
		}
		if *side.into, err = set.At(prec); err != nil {
			return nil, err
		}
	}
	return p, nil
}

// At is the phase in radians at ω > 0 (rad/s). At a root on the axis it holds
// both sides of the jump.
func (p *Phase) At(omega number.Ball) number.Ball {
	prec := omega.Prec()
	sum := number.BallFromExact(number.Pi(), prec).MulRat(p.start())
	for _, r := range p.zeros {
		sum = sum.Add(turn(r, omega))
	}
	for _, r := range p.poles {
		sum = sum.Sub(turn(r, omega))
	}
	return sum
}

// start is the phase just above ω = 0, in half turns.
func (p *Phase) start() *big.Rat {
	k, m := p.h.Num.Order(), p.h.Den.Order()
	quarters := int64(k - m)
	if p.h.Num.Coeff(k).Sign()*p.h.Den.Coeff(m).Sign() < 0 {
		quarters += 2
	}
	quarters = ((quarters % 4) + 4) % 4
	if quarters > 2 {
		quarters -= 4
	}
	return big.NewRat(quarters, 2)
}

// turn is by how much the direction from a root to jω turns as ω rises from
// just above zero.
func turn(r exact.Root, omega number.Ball) number.Ball {
	prec := omega.Prec()
	multiple := int64(max(r.Multiplicity, 1))
	if r.Imaginary || r.Re.ContainsZero() {
		return axisTurn(r, omega).MulInt(multiple)
	}
	size := r.Re.Abs()
	zero := number.BallFromInt(0, prec)
	change := omega.Sub(r.Im).Quo(size).Atan().Sub(zero.Sub(r.Im).Quo(size).Atan())
	if sign, _ := r.Re.Sign(); sign > 0 {
		change = change.Neg()
	}
	return change.MulInt(multiple)
}

// axisTurn is half a turn once ω has gone past a root on the axis.
func axisTurn(r exact.Root, omega number.Ball) number.Ball {
	prec := omega.Prec()
	none := number.BallFromInt(0, prec)
	if sign, sure := r.Im.Sign(); !sure || sign <= 0 {
		return none // at the origin, or below it
	}
	half := number.BallFromExact(number.Pi(), prec)
	order, sure := omega.Cmp(r.Im)
	switch {
	case !sure || order == 0:
		return none.Union(half)
	case order > 0:
		return half
	}
	return none
}

// Points lists, like Curve.Extremes, the ends of the range, the places inside
// where the phase turns (zero group delay), and the roots on the axis, where
// it jumps: the value there holds both sides. Values are in radians.
func (p *Phase) Points(ctx context.Context, r Range, prec uint) ([]Point, error) {
	delay := Delay(p.h)
	turns, err := delay.inside(ctx, delay.Num, r, prec)
	if err != nil {
		return nil, err
	}
	for _, root := range append(append([]exact.Root(nil), p.zeros...), p.poles...) {
		if root.Imaginary && delay.within(root.Im, r, prec) {
			turns = append(turns, root.Im)
		}
	}
	sortBalls(turns)
	points := []Point{p.end(r.From, prec)}
	for _, w := range turns {
		points = append(points, Point{Omega: w, Value: p.At(w)})
	}
	if r.To != nil {
		return append(points, p.end(*r.To, prec)), nil
	}
	return append(points, p.atInfinity(prec)), nil
}

func (p *Phase) end(w number.Exact, prec uint) Point {
	omega := number.BallFromExact(w, prec)
	point := Point{Omega: omega, End: true}
	if sign, sure := w.Sign(); sure && sign == 0 {
		point.AtZero = true
		point.halfTurns(p.start(), prec)
		return point
	}
	point.Value = p.At(omega)
	return point
}

// atInfinity adds up the whole turns.
func (p *Phase) atInfinity(prec uint) Point {
	quarter := big.NewRat(1, 2)
	halves := p.start()
	for _, side := range []struct {
		roots []exact.Root
		sign  int64
	}{{p.zeros, 1}, {p.poles, -1}} {
		for _, r := range side.roots {
			if r.Re.ContainsZero() && r.Im.ContainsZero() {
				continue // its quarter turns are in start
			}
			sign, sure := r.Re.Sign()
			if !sure || sign == 0 {
				sign = -1
			}
			// A pair turns by half a turn, a real root by a quarter.
			n := big.NewRat(-int64(sign)*side.sign*int64(max(r.Multiplicity, 1)), 1)
			halves = new(big.Rat).Add(halves, n.Mul(n, quarter))
		}
	}
	point := Point{End: true, Infinite: true}
	point.halfTurns(halves, prec)
	return point
}

// halfTurns puts a multiple of π into a point.
func (p *Point) halfTurns(r *big.Rat, prec uint) {
	x := number.Pi().Mul(number.FromRat(r))
	p.Exact, p.Value = &x, number.BallFromExact(number.Pi(), prec).MulRat(r)
}
