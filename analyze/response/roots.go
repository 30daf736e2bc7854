package response

import (
	"context"

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
		roots, err := set.AtContext(ctx, prec+rootGuard)
		if err != nil {
			return nil, err
		}
		out := make([]number.ComplexBall, len(chosen))
		for j, i := range chosen {
			out[j] = number.ComplexBall{Re: roots[i].Re.WithPrecision(prec + rootGuard), Im: roots[i].Im.WithPrecision(prec + rootGuard)}
		}
		return out, nil
	}
	return f, nil
}
