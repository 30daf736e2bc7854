package float

import (
	"context"
	"math"
)

// condition estimates ‖Â‖₁·‖Â⁻¹‖₁ for the scaled matrix Â (N. J. Higham,
// FORTRAN codes for estimating the one-norm of a real or complex matrix, ACM
// Trans. Math. Softw. 14 (1988), after W. W. Hager). It is a lower bound that is
// seldom off by more than a factor of 3.
func (q *query) condition(ctx context.Context) (float64, error) {
	n := q.m.n
	if n == 0 {
		return 1, nil
	}
	norm, scale := 0.0, q.factor.scaling()
	for j := range n {
		sum := 0.0
		for k := q.m.start[j]; k < q.m.start[j+1]; k++ {
			sum += modulus(q.a[k]) * math.Abs(scale.row[q.m.row[k]])
		}
		norm = max(norm, sum*scale.col[j])
	}
	inverse, err := q.inverseNorm(ctx)
	return norm * inverse, err
}

// inverseNorm estimates ‖Â⁻¹‖₁.
func (q *query) inverseNorm(ctx context.Context) (float64, error) {
	n := q.m.n
	scale := q.factor.scaling()
	x := make([]complex128, n)
	apply := func() float64 { // x := Â⁻¹·x
		for i := range x {
			x[i] = shrunk(x[i], scale.row[i])
		}
		q.factor.solve(x, q.y)
		sum := 0.0
		for i := range x {
			x[i] = shrunk(x[i], scale.col[i])
			sum += modulus(x[i])
		}
		return sum
	}
	for i := range x {
		x[i] = complex(1/float64(n), 0)
	}
	estimate := apply()
	last := -1
	for range 4 {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		// x := Â⁻ᴴ·sign(x)
		for i, v := range x {
			if size := modulus(v); size > 0 {
				x[i] = complex(real(v)/size, -imag(v)/size)
			} else {
				x[i] = 1
			}
			x[i] = shrunk(x[i], scale.col[i])
		}
		q.factor.solveTransposed(x, q.y)
		at, largest := 0, -1.0
		for i, v := range x {
			if size := modulus(v) / math.Abs(scale.row[i]); size > largest {
				at, largest = i, size
			}
		}
		if at == last {
			break
		}
		last = at
		clear(x)
		x[at] = 1
		next := apply()
		if next <= estimate {
			break
		}
		estimate = next
	}
	// A vector that alternates and grows catches matrices on which the search
	// fails.
	for i := range x {
		v := 1 + float64(i)/max(1, float64(n-1))
		if i&1 == 1 {
			v = -v
		}
		x[i] = complex(v, 0)
	}
	return max(estimate, 2*apply()/(3*float64(n))), nil
}

// shrunk returns z/d.
func shrunk(z complex128, d float64) complex128 { return complex(real(z)/d, imag(z)/d) }

func modulus(z complex128) float64 { return math.Hypot(real(z), imag(z)) }
