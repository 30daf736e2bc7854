package frequency

import (
	"context"
	"errors"
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// Reasons why a figure of merit does not exist for a function.
var (
	ErrNoPassband   = errors.New("the magnitude has neither a value at 0 Hz to fall from nor a peak between zero and infinite frequency")
	ErrNeverFalls   = errors.New("the magnitude never falls to 1/√2 of its reference")
	ErrNoCrossover  = errors.New("the magnitude is never 1")
	ErrNoPoles      = errors.New("the function has no poles")
	ErrPoleAtOrigin = errors.New("the pole that decides lies at the origin, where a damping ratio means nothing")
	ErrFlat         = errors.New("the magnitude does not depend on frequency")
)

// everywhere is the whole positive frequency axis.
var everywhere = Range{}

// Band is a passband between half-power frequencies, in rad/s. Low is zero
// for a low-pass function; Reference is the magnitude it is measured from.
type Band struct {
	Low, High number.Ball
	Reference number.Ball
	FromDC    bool
}

// Width is High − Low.
func (b Band) Width() number.Ball { return b.High.Sub(b.Low) }

// Bandwidth finds the half-power band of a function. Where H(0) is finite and
// not zero and |H| falls from there, it is the band from 0 to the lowest frequency at
// which |H| is |H(0)|/√2; otherwise the band around the largest magnitude,
// between the nearest frequencies on either side at which |H| is 1/√2 of it.
func Bandwidth(ctx context.Context, h exact.Ratio, prec uint) (Band, error) {
	c := MagnitudeSquared(h)
	if c.Num.Degree() < 1 && c.Den.Degree() < 1 {
		return Band{}, ErrFlat
	}
	if c.Den.Coeff(0).Sign() != 0 && c.Num.Coeff(0).Sign() != 0 {
		dc := new(big.Rat).Quo(c.Num.Coeff(0), c.Den.Coeff(0))
		xs, err := c.Crossings(ctx, new(big.Rat).Quo(dc, big.NewRat(2, 1)), everywhere, prec)
		if err != nil {
			return Band{}, err
		}
		if len(xs) > 0 {
			ref := number.BallFromRat(dc, prec).Sqrt()
			return Band{number.BallFromRat(new(big.Rat), prec), xs[0], ref, true}, nil
		}
		return Band{}, ErrNeverFalls
	}
	return c.aroundPeak(ctx, prec)
}

// aroundPeak finds the half-power band around the largest interior maximum.
func (c Curve) aroundPeak(ctx context.Context, prec uint) (Band, error) {
	points, err := c.Extremes(ctx, everywhere, prec)
	if err != nil {
		return Band{}, err
	}
	best := -1
	for i, p := range points {
		if p.Unbounded || p.End {
			if p.Unbounded || i == len(points)-1 && sign(p.Value) > 0 {
				return Band{}, ErrNoPassband
			}
			continue
		}
		if best < 0 || p.Value.Mid().Cmp(points[best].Value.Mid()) > 0 {
			best = i
		}
	}
	if best < 0 {
		return Band{}, ErrNoPassband
	}
	peak := points[best]
	low, high, err := c.halfPower(ctx, peak, prec)
	return Band{low, high, peak.Value.Sqrt(), false}, err
}

// halfPower finds where g = peak/2 on either side of the peak. The level is
// algebraic, so the crossing is found between rational levels that enclose it.
func (c Curve) halfPower(ctx context.Context, peak Point, prec uint) (low, high number.Ball, err error) {
	half := peak.Value.Mul(number.BallFromRat(big.NewRat(1, 2), prec))
	for i, level := range []*big.Rat{ratOf(half.Lower()), ratOf(half.Upper())} {
		xs, err := c.Crossings(ctx, level, everywhere, prec)
		if err != nil {
			return low, high, err
		}
		var l, h *number.Ball
		for k := range xs {
			if xs[k].Mid().Cmp(peak.Omega.Mid()) < 0 {
				l = &xs[k]
			} else if h == nil {
				h = &xs[k]
			}
		}
		if l == nil || h == nil {
			return low, high, ErrNeverFalls
		}
		if i == 0 {
			low, high = *l, *h
		} else {
			low, high = low.Union(*l), high.Union(*h)
		}
	}
	return low, high, nil
}

func ratOf(f *big.Float) *big.Rat {
	r, _ := f.Rat(nil)
	return r
}

func sign(b number.Ball) int {
	s, sure := b.Sign()
	if !sure {
		return 0
	}
	return s
}

// Crossover is the highest angular frequency at which |H| is 1.
func Crossover(ctx context.Context, h exact.Ratio, prec uint) (number.Ball, error) {
	xs, err := MagnitudeSquared(h).Crossings(ctx, big.NewRat(1, 1), everywhere, prec)
	if err != nil && !errors.Is(err, errNoRoots) {
		return number.Ball{}, err
	}
	if len(xs) == 0 {
		return number.Ball{}, ErrNoCrossover
	}
	return xs[len(xs)-1], nil
}

// Pair describes the least damped pole of a function: its natural angular
// frequency ω0 = |p| and damping ratio ζ = −Re p/|p|. Two poles that are the
// only ones are taken as the pair s² + 2ζω0·s + ω0² even when they are real.
type Pair struct {
	Natural, Damping number.Ball
}

// Quality is 1/(2ζ).
func (p Pair) Quality(prec uint) number.Ball {
	return number.BallFromRat(big.NewRat(1, 2), prec).Quo(p.Damping)
}

// LeastDamped finds the pole that rings longest for its frequency.
func LeastDamped(ctx context.Context, h exact.Ratio, prec uint) (Pair, error) {
	switch h.Den.Degree() {
	case 0:
		return Pair{}, ErrNoPoles
	case 2:
		return quadratic(h.Den, prec)
	}
	set, err := exact.Roots(ctx, h.Den)
	if err != nil {
		return Pair{}, err
	}
	roots, err := set.At(prec)
	if err != nil {
		return Pair{}, err
	}
	var least *Pair
	for _, r := range roots {
		size := number.ComplexBall{Re: r.Re, Im: r.Im}.Abs()
		if size.ContainsZero() {
			return Pair{}, ErrPoleAtOrigin
		}
		p := Pair{size, r.Re.Neg().Quo(size)}
		if least == nil || p.Damping.Mid().Cmp(least.Damping.Mid()) < 0 {
			least = &p
		}
	}
	return *least, nil
}

// quadratic reads ω0 and ζ from the coefficients: ω0² = a0/a2, 2ζω0 = a1/a2.
func quadratic(d exact.Poly, prec uint) (Pair, error) {
	w2 := new(big.Rat).Quo(d.Coeff(0), d.Coeff(2))
	if w2.Sign() <= 0 {
		return Pair{}, ErrPoleAtOrigin
	}
	w := number.BallFromRat(w2, prec).Sqrt()
	b := number.BallFromRat(new(big.Rat).Quo(d.Coeff(1), d.Coeff(2)), prec)
	two := number.BallFromRat(big.NewRat(2, 1), prec)
	return Pair{w, b.Quo(two.Mul(w))}, nil
}
