package float

import (
	"context"
	"math"
)

// solution is a refined solution of A·x = b or Aᵀ·x = b.
type solution struct {
	x     []complex128
	r     []complex128 // the residual, of a relative error of about 2^-53
	size  []float64    // |A|·|x| + |b|
	slack []float64    // an absolute bound of the error of r
	away  []float64    // about how far x is from the true solution, at most
}

const (
	// mostRounds bounds the number of corrections.
	mostRounds = 40
	// mostContraction is the largest part of an error that a correction may
	// leave: beyond it the factors have no digit in common with the matrix.
	mostContraction = 0.5
)

// refine solves and corrects the solution until that gains nothing. Where the
// corrections do not shrink well the error is ErrSingular.
func (q *query) refine(ctx context.Context, b *vector, transposed bool) (*solution, error) {
	n := q.m.n
	s := &solution{x: make([]complex128, n), r: make([]complex128, n), slack: make([]float64, n), away: make([]float64, n)}
	solve, weight := q.factor.solve, q.factor.scaling().col
	if transposed {
		solve, weight = q.factor.solveTransposed, q.factor.scaling().row
	}
	next := make([]complex128, n)
	q.residue.start(b, q.at)
	before, contraction, step := 0.0, 0.0, 0.0
	for round := 0; ; round++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		q.residue.round(s.r)
		copy(next, s.r)
		solve(next, q.y)
		size := 0.0
		step = 0
		for i, d := range next {
			step = max(step, norm1(d)/math.Abs(weight[i]))
			size = max(size, norm1(s.x[i])/math.Abs(weight[i]))
		}
		if !(step < 1e200) {
			return nil, ErrSingular
		}
		if round > 0 {
			if before > 64*unit*size {
				contraction = max(contraction, step/before)
			}
			if contraction > mostContraction {
				return nil, ErrSingular
			}
			if round > 1 && step <= 4*unit*size || step > before/2 || round == mostRounds {
				break
			}
		}
		before = step
		for i, d := range next {
			s.x[i] += d
		}
		q.residue.start(b, q.at)
		q.residue.subtract(q.m, q.re, q.im, s.x, transposed)
	}
	s.size = append([]float64(nil), q.residue.size...)
	// The corrections still to come, of which next is the first, shrink at
	// least as before.
	rest := step * contraction / (1 - contraction)
	for i := range n {
		s.slack[i] = 256*unit2*s.size[i] + 2*unit*norm1(s.r[i]) + floor
		if s.x[i] != 0 || next[i] != 0 { // else nothing reaches it
			s.away[i] = 2*norm1(next[i]) + rest*math.Abs(weight[i]) + 2*unit*norm1(s.x[i])
		}
	}
	return s, nil
}

// value returns oᵀ·A⁻¹·b + d with a bound of its error and its amplification.
// For the solution y of Aᵀ·y = o and the approximations x̂ and ŷ, with the
// residual r of x̂,
//
//	oᵀ·x − oᵀ·x̂ = yᵀ·r = ŷᵀ·r + (y − ŷ)ᵀ·r, and (y − ŷ)ᵀ·r = ρᵀ·(x − x̂)
//
// with the residual ρ of ŷ. The first term is added, the second bounded.
func (q *query) value(o *vector, y, x *solution, direct double) (v complex128, radius, amplified float64) {
	re, im := direct, double{}
	radius = floor + 64*unit2*math.Abs(direct.hi)
	for k, i := range o.index {
		g, c := o.at(k, q.at)
		a, b := real(x.x[i]), imag(x.x[i])
		re = re.plus(g.scaled(a)).plus(c.scaled(-b))
		im = im.plus(g.scaled(b)).plus(c.scaled(a))
		radius += 64 * unit2 * norm1(complex(g.hi, c.hi)) * norm1(x.x[i])
	}
	var first complex128
	size, rest := 0.0, 0.0
	for i, v := range y.x {
		first += v * x.r[i]
		size += norm1(v) * norm1(x.r[i])
		rest += norm1(v) * x.slack[i]
		rest += (norm1(y.r[i]) + y.slack[i]) * x.away[i]
		amplified += norm1(v) * x.size[i]
	}
	re, im = re.plus(double{real(first), 0}), im.plus(double{imag(first), 0})
	radius += rest + float64(q.m.n+8)*2*unit*size
	v = complex(re.value(), im.value())
	radius += unit*norm1(v) + 8*unit*radius
	return v, radius, relative(amplified, v)
}
