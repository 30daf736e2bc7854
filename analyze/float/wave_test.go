package float

import (
	"math"
	"math/big"
	"math/cmplx"
	"testing"
)

// TestPolesOfTheApproximant: Σ ρ/(z−θ) has the first 15 Taylor coefficients of
// e^z, and the θ are zeros of the denominator Σ (14−j)!·8!/(14!·j!·(8−j)!)·(−z)^j.
// These two say all there is to say about the residues and the poles.
func TestPolesOfTheApproximant(t *testing.T) {
	factorial := 1.0
	for k := range 15 {
		if k > 0 {
			factorial *= float64(k)
		}
		sum, size := complex128(0), 0.0
		for _, p := range poles {
			term := -2 * p.residue / cmplx.Pow(p.at, complex(float64(k+1), 0))
			sum += term
			size += cmplx.Abs(term)
		}
		if d := math.Abs(real(sum) - 1/factorial); d > 4e-15*size {
			t.Errorf("coefficient %d: off by %g of %g", k, d, size)
		}
	}
	for _, p := range poles {
		sum, size := complex128(0), 0.0
		for j := range 9 {
			c := new(big.Rat).SetFrac(
				new(big.Int).Mul(new(big.Int).MulRange(1, int64(14-j)), new(big.Int).MulRange(1, 8)),
				new(big.Int).Mul(new(big.Int).MulRange(1, 14), new(big.Int).Mul(new(big.Int).MulRange(1, int64(j)), new(big.Int).MulRange(1, int64(8-j)))))
			f, _ := c.Float64()
			term := complex(f, 0) * cmplx.Pow(-p.at, complex(float64(j), 0))
			sum += term
			size += cmplx.Abs(term)
		}
		if cmplx.Abs(sum) > 4e-15*size {
			t.Errorf("the denominator at %v is %v of %g", p.at, sum, size)
		}
	}
	// Bounded by 1 on the imaginary axis, and e^z near zero.
	for y := 0.0; y < 100; y += 0.25 {
		r := approximant(complex(0, y))
		if cmplx.Abs(r) > 1+1e-11 {
			t.Errorf("|r(j·%g)| = %g", y, cmplx.Abs(r))
		}
		if y < 1.5 && cmplx.Abs(r-cmplx.Exp(complex(0, y))) > 1e-11 {
			t.Errorf("r(j·%g) = %v", y, r)
		}
	}
}

func approximant(z complex128) complex128 {
	var sum complex128
	for _, p := range poles {
		conjugate := cmplx.Conj(p.at)
		sum += p.residue/(z-p.at) + cmplx.Conj(p.residue)/(z-conjugate)
	}
	return sum
}

// TestTransforms compares transforms with the integral of the wave, by the
// trapezoidal rule after the substitution t = u/(1−u)².
func TestTransforms(t *testing.T) {
	for _, x := range []Term{
		{Cosine: 2},
		{Power: 1, Cosine: 3},
		{Power: 2, Rate: -0.5, Omega: 3, Cosine: 1, Sine: -2},
		{Omega: 2, Sine: 1},
		{Rate: 0.25, Cosine: 1},
	} {
		w := Wave{Pieces: []Piece{{From: 1, Terms: []Term{x}}}}
		for _, after := range []float64{0, 0.75} {
			s := complex(1.5, 2)
			var sum complex128
			const n = 40000
			for k := 1; k < n; k++ {
				u := float64(k) / n
				tau, slope := u/((1-u)*(1-u)), (1+u)/math.Pow(1-u, 3)
				if tau < 200 {
					sum += complex(w.value(1, after+tau)*slope/n, 0) * cmplx.Exp(-s*complex(tau, 0))
				}
			}
			sum += complex(w.value(1, after)/(2*n), 0)
			if got := w.transform(s, 1, after); cmplx.Abs(got-sum) > 1e-7*(1+cmplx.Abs(sum)) {
				t.Errorf("%+v after %g: %v, integral %v", x, after, got, sum)
			}
		}
	}
}
