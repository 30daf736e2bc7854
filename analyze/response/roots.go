package response

import (
	"context"
	"fmt"
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// rootGuard is how many bits more than the working precision roots are found
// to: their errors are multiplied by times and in differences.
const rootGuard = 16

// certifiedFactor finds the roots of a square-free polynomial of degree above
// two, with proved radii. Which of them are real or on the imaginary axis is
// decided exactly.
func certifiedFactor(ctx context.Context, p exact.Poly) (*rootFactor, error) {
	set, err := exact.Roots(ctx, p)
	if err != nil {
		return nil, err
	}
	roots, err := set.AtContext(ctx, number.MinPrecision)
	if err != nil {
		return nil, err
	}
	f := &rootFactor{poly: p}
	var chosen []int
	for i, r := range roots {
		if sign, decided := r.Im.Sign(); !r.Real && decided && sign < 0 {
			continue
		}
		chosen = append(chosen, i)
		f.kinds = append(f.kinds, pole{
			real:     r.Real,
			axis:     r.Imaginary,
			zero:     r.Real && r.Imaginary,
			rational: r.Rational,
		})
	}
	f.at = func(ctx context.Context, prec uint) ([]number.ComplexBall, error) {
		prec += rootGuard
		roots, err := set.AtContext(ctx, min(prec, certifiedBits))
		if err != nil {
			return nil, err
		}
		out := make([]number.ComplexBall, len(chosen))
		for j, i := range chosen {
			if out[j], err = polish(ctx, p, roots[i], prec); err != nil {
				return nil, err
			}
		}
		return out, nil
	}
	return f, nil
}

// certifiedBits is the precision up to which roots are taken from root finding;
// from there on the interval Newton step doubles the digits.
const certifiedBits = 900

// polish narrows the ball of a simple root until its radius is 2^-bits of its
// size. With m the centre of the ball Z and r the root in it, p(m) = (m−r) times
// the mean of p' on the way from r to m, which lies in the convex p'(Z), so that r
// lies in m − p(m)/p'(Z).
func polish(ctx context.Context, p exact.Poly, root exact.Root, bits uint) (number.ComplexBall, error) {
	z := root.Ball()
	z = z.WithPrecision(max(bits, z.Prec()))
	if bits <= certifiedBits {
		return z, nil
	}
	for work := bits + 128; !complexDecided(z, int64(bits)); {
		if err := ctx.Err(); err != nil {
			return z, err
		}
		if work > 4*bits+1024 {
			return z, fmt.Errorf("%w: a root of degree %d to %d bits", ErrPrecision, p.Degree(), bits)
		}
		m := number.ComplexBall{Re: number.BallFromFloat(z.Re.Mid(), work), Im: number.BallFromFloat(z.Im.Mid(), work)}
		value := taylor(complexCoefficients(p, work), m, 1)[0]
		slope := taylor(complexCoefficients(p.Derivative(), work), z.WithPrecision(work), 1)[0]
		next := m.Sub(value.Quo(slope))
		if root.Imaginary {
			next.Re = number.Ball{}
		}
		if !next.IsFinite() || !narrower(next, z) {
			work *= 2
			continue
		}
		z = next
	}
	return z.WithPrecision(bits), nil
}

// narrower tells whether a is at most half as wide as b.
func narrower(a, b number.ComplexBall) bool {
	width := func(z number.ComplexBall) *big.Float { return new(big.Float).Add(z.Re.Rad(), z.Im.Rad()) }
	return new(big.Float).Mul(width(a), big.NewFloat(2)).Cmp(width(b)) <= 0
}
