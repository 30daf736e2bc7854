package exact

import (
	"context"
	"math"
	"math/big"
)

// recurrence gives a polynomial by Q_0 = 1, Q_1 = s − α_1 and
// Q_m = (s − α_m)·Q_(m−1) − β_m·Q_(m−2), the polynomial being a multiple of
// Q_n at 2^scale·s. It is the characteristic polynomial of a tridiagonal matrix,
// which for the networks met here is well conditioned where the coefficients of
// the polynomial are not. Only starting values come from it.
type recurrence struct {
	alpha, beta []float64
	scale       int
}

// threeTerm finds a recurrence: the Jacobi matrix from Sturm's sequence of p
// where all its roots seem to be real, else the matrix of Schwarz from Routh's
// array (H. R. Schwarz, Z. angew. Math. Phys. 7 (1956) 473–500), with
// β_m < 0 where the roots are in the left half plane. It returns nil where
// neither exists, the spread is beyond float64 or the context has ended.
func (e *evaluator) threeTerm(ctx context.Context) *recurrence {
	if e.n < 3 {
		return nil
	}
	prec := uint(128+2*e.n+63) &^ 63
	c, scale := e.balanced(prec)
	if c == nil {
		return nil
	}
	if e.mayBeReal() {
		if r := jacobi(ctx, c, scale, prec); r != nil {
			return r
		}
	}
	return schwarz(ctx, c, scale, prec)
}

// balanced returns the coefficients of p(2^scale·s)/a_n, ascending, with the
// geometric mean of the roots' magnitudes near 1.
func (e *evaluator) balanced(prec uint) (c []*big.Float, scale int) {
	top, bottom := e.bits[e.n], e.bits[0]
	scale = int(math.Round(float64(bottom-top) / float64(e.n)))
	c = make([]*big.Float, e.n+1)
	for i := range c {
		f := new(big.Float).SetPrec(prec)
		if e.bits[i] > 0 {
			f.SetInt(fromWords(e.size[i]))
			f.SetMantExp(f, (i-e.n)*scale-top)
			if e.negative[i] {
				f.Neg(f)
			}
		}
		c[i] = f
	}
	inverse := new(big.Float).SetPrec(prec).Quo(big.NewFloat(1), c[e.n])
	for i := range c {
		c[i].Mul(c[i], inverse)
	}
	return c, scale
}

func fromWords(words []uint64) *big.Int {
	raw := make([]byte, 8*len(words))
	for i, w := range words {
		for b := range 8 {
			raw[len(raw)-1-8*i-b] = byte(w >> (8 * b))
		}
	}
	return new(big.Int).SetBytes(raw)
}

// mayBeReal checks Newton's inequalities
// a_k² ≥ a_(k−1)·a_(k+1)·(1+1/k)·(1+1/(n−k)), which hold where all roots are
// real.
func (e *evaluator) mayBeReal() bool {
	size := func(i int) float64 { return math.Log2(math.Abs(e.mantissa[i])) + float64(e.bits[i]) }
	for k := 1; k < e.n; k++ {
		if e.negative[k-1] != e.negative[k+1] || e.bits[k-1] == 0 || e.bits[k+1] == 0 {
			continue
		}
		if e.bits[k] == 0 {
			return false
		}
		factor := math.Log2((1 + 1/float64(k)) * (1 + 1/float64(e.n-k)))
		if 2*size(k) < size(k-1)+size(k+1)+factor-1e-9 {
			return false
		}
	}
	return true
}

// jacobi runs Euclid's algorithm on p and p'/n, all made monic:
// p_(k−1) = (s − α_k)·p_k − β_k·p_(k+1). Every β_k > 0 means that all roots are
// real; nil is returned at the first that is not.
func jacobi(ctx context.Context, c []*big.Float, scale int, prec uint) *recurrence {
	n := len(c) - 1
	r := &recurrence{alpha: make([]float64, n+1), beta: make([]float64, n+1), scale: scale}
	above, p := c, make([]*big.Float, n)
	order := new(big.Float).SetPrec(prec).Quo(big.NewFloat(1), big.NewFloat(float64(n)))
	for i := range p {
		p[i] = new(big.Float).SetPrec(prec).SetInt64(int64(i + 1))
		p[i].Mul(p[i], c[i+1])
		p[i].Mul(p[i], order)
	}
	t, one := new(big.Float).SetPrec(prec), big.NewFloat(1)
	for m := n; ; m-- { // above has degree m, p degree m−1
		if ctx.Err() != nil {
			return nil
		}
		// α = p[m−2] − above[m−1], from the second coefficients
		alpha := new(big.Float).SetPrec(prec).Neg(above[m-1])
		if m >= 2 {
			alpha.Add(alpha, p[m-2])
		}
		r.alpha[m], _ = alpha.Float64()
		if m == 1 {
			return r.checked()
		}
		// −β·next = above − (s − α)·p, of degree m−2
		next := make([]*big.Float, m-1)
		for i := range next {
			v := new(big.Float).SetPrec(prec).Set(above[i])
			v.Add(v, t.Mul(alpha, p[i]))
			if i > 0 {
				v.Sub(v, p[i-1])
			}
			next[i] = v
		}
		if next[m-2].Sign() >= 0 {
			return nil
		}
		beta, _ := next[m-2].Float64()
		r.beta[m] = -beta
		inverse := new(big.Float).SetPrec(prec).Quo(one, next[m-2])
		for i := range next {
			next[i].Mul(next[i], inverse)
		}
		above, p = p, next
	}
}

// schwarz runs Routh's scheme: with q_k the quotients of the leading entries of
// successive rows, α at the last place is −1/q_1 and the β are −1/(q_(k−1)·q_k).
func schwarz(ctx context.Context, c []*big.Float, scale int, prec uint) *recurrence {
	n := len(c) - 1
	r := &recurrence{alpha: make([]float64, n+1), beta: make([]float64, n+1), scale: scale}
	var first, second []*big.Float
	for i := n; i >= 0; i-- {
		if (n-i)%2 == 0 {
			first = append(first, new(big.Float).Copy(c[i]))
		} else {
			second = append(second, c[i])
		}
	}
	t := new(big.Float).SetPrec(prec)
	var before *big.Float
	for k := 1; k <= n; k++ {
		if second[0].Sign() == 0 || ctx.Err() != nil {
			return nil
		}
		q := new(big.Float).SetPrec(prec).Quo(first[0], second[0])
		if k == 1 {
			a, _ := t.Quo(second[0], first[0]).Float64()
			r.alpha[n] = -a
		} else {
			b, _ := t.Quo(big.NewFloat(1), t.Mul(before, q)).Float64()
			r.beta[n-k+2] = -b
		}
		for j := 0; j < len(first)-1; j++ {
			if j+1 < len(second) {
				first[j].Sub(first[j+1], t.Mul(q, second[j+1]))
			} else {
				first[j].Set(first[j+1])
			}
		}
		first, second, before = second, first[:len(first)-1], q
		if k < n && len(second) == 0 {
			return nil
		}
	}
	return r.checked()
}

// checked returns the recurrence if its numbers are usable.
func (r *recurrence) checked() *recurrence {
	for m := 1; m < len(r.alpha); m++ {
		for _, v := range []float64{r.alpha[m], r.beta[m]} {
			if math.IsNaN(v) || math.Abs(v) > 1e100 || (v != 0 && math.Abs(v) < 1e-100) {
				return nil
			}
		}
	}
	return r
}

// evaluate returns z·p'/p.
func (r *recurrence) evaluate(z start) (ratio complex128, noise bool) {
	k := z.k - r.scale
	if k > 300 || k < -300 {
		return 0, true
	}
	unit := math.Ldexp(1, k)
	s := complex(real(z.x)*unit, imag(z.x)*unit)
	q, q1 := complex(1, 0), complex(0, 0) // Q_(m−1), Q_(m−2)
	d, d1 := complex(0, 0), complex(0, 0) // their derivatives
	for m := 1; m < len(r.alpha); m++ {
		x, b := s-complex(r.alpha[m], 0), r.beta[m]
		next := x*q - complex(b*real(q1), b*imag(q1))
		d, d1 = q+x*d-complex(b*real(d1), b*imag(d1)), d
		q, q1 = next, q
		if size := math.Abs(real(q)) + math.Abs(imag(q)) + math.Abs(real(d)) + math.Abs(imag(d)); size > 1e100 || size < 1e-100 {
			if size == 0 || math.IsInf(size, 0) || math.IsNaN(size) {
				return 0, true
			}
			_, e := math.Frexp(size)
			f := complex(math.Ldexp(1, -e), 0)
			q, q1, d, d1 = q*f, q1*f, d*f, d1*f
		}
	}
	if q == 0 {
		return 0, true
	}
	return s * d / q, false
}
