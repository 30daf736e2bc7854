package exact

import (
	"context"
	"math"
	"math/cmplx"
)

// eigenvalues returns the eigenvalues of the tridiagonal matrix of a recurrence,
// in the unit 2^scale: the matrix is made symmetric, real where every β > 0 and
// complex else, and reduced by the QL iteration with implicit shifts (for the
// real case A. Dubrulle, R. S. Martin, J. H. Wilkinson, Numer. Math. 12 (1968)
// 377–383; for the complex one J. Cullum and R. Willoughby, SIAM J. Matrix
// Anal. Appl. 17 (1996) 83–109). It returns nil where that breaks down. The
// values are starting points and nothing more.
func (r *recurrence) eigenvalues(ctx context.Context) []complex128 {
	n := len(r.alpha) - 1
	symmetric := true
	for m := 2; m <= n; m++ {
		symmetric = symmetric && r.beta[m] > 0
	}
	if symmetric {
		d, e := make([]float64, n), make([]float64, n)
		for i := range n {
			d[i] = r.alpha[i+1]
			if i+1 < n {
				e[i] = math.Sqrt(r.beta[i+2])
			}
		}
		return realQL(ctx, d, e)
	}
	d, e := make([]complex128, n), make([]complex128, n)
	for i := range n {
		d[i] = complex(r.alpha[i+1], 0)
		if i+1 < n {
			e[i] = complexRoot(complex(r.beta[i+2], 0))
		}
	}
	return complexQL(ctx, d, e)
}

// mostQL is the number of QL steps for one eigenvalue after which it is given
// up.
const mostQL = 60

func realQL(ctx context.Context, d, e []float64) []complex128 {
	n := len(d)
	for l := range n {
		for tries := 0; ; tries++ {
			m := l
			for ; m < n-1; m++ {
				if math.Abs(e[m]) <= 0x1p-52*(math.Abs(d[m])+math.Abs(d[m+1])) {
					break
				}
			}
			if m == l {
				break
			}
			if tries == mostQL || ctx.Err() != nil {
				return nil
			}
			g := (d[l+1] - d[l]) / (2 * e[l])
			g = d[m] - d[l] + e[l]/(g+math.Copysign(math.Hypot(g, 1), g))
			s, c, p := 1.0, 1.0, 0.0
			i := m - 1
			for ; i >= l; i-- {
				f, b := s*e[i], c*e[i]
				h := math.Sqrt(f*f + g*g)
				e[i+1] = h
				if h == 0 {
					d[i+1] -= p
					e[m] = 0
					break
				}
				s, c = f/h, g/h
				g = d[i+1] - p
				h = (d[i]-g)*s + 2*c*b
				p = s * h
				d[i+1] = g + p
				g = c*h - b
			}
			if i >= l {
				continue
			}
			d[l] -= p
			e[l] = g
			e[m] = 0
		}
	}
	out := make([]complex128, n)
	for i, v := range d {
		out[i] = complex(v, 0)
	}
	return out
}

func complexQL(ctx context.Context, d, e []complex128) []complex128 {
	n := len(d)
	for l := range n {
		for tries := 0; ; tries++ {
			m := l
			for ; m < n-1; m++ {
				if size1(e[m]) <= 0x1p-52*(size1(d[m])+size1(d[m+1])) {
					break
				}
			}
			if m == l {
				break
			}
			if tries == mostQL || ctx.Err() != nil {
				return nil
			}
			g := (d[l+1] - d[l]) / (2 * e[l])
			h := complexRoot(g*g + 1)
			if size1(g+h) < size1(g-h) {
				h = -h
			}
			g = d[m] - d[l] + e[l]/(g+h)
			s, c, p := complex(1, 0), complex(1, 0), complex(0, 0)
			i := m - 1
			for ; i >= l; i-- {
				f, b := s*e[i], c*e[i]
				h := complexRoot(f*f + g*g)
				e[i+1] = h
				if size1(h) <= 0x1p-50*(size1(f)+size1(g)) { // no rotation does it
					if h == 0 && f == 0 {
						d[i+1] -= p
						e[m] = 0
						break
					}
					return nil
				}
				inverse := reciprocal(h)
				s, c = f*inverse, g*inverse
				g = d[i+1] - p
				h = (d[i]-g)*s + 2*c*b
				p = s * h
				d[i+1] = g + p
				g = c*h - b
			}
			if i >= l {
				continue
			}
			d[l] -= p
			e[l] = g
			e[m] = 0
		}
	}
	for _, v := range d {
		if cmplx.IsNaN(v) || cmplx.IsInf(v) {
			return nil
		}
	}
	return d
}

func size1(z complex128) float64 { return math.Abs(real(z)) + math.Abs(imag(z)) }

// complexRoot is a square root without the care of cmplx.Sqrt for the extremes
// of the range.
func complexRoot(z complex128) complex128 {
	a, b := real(z), imag(z)
	size := math.Sqrt(a*a + b*b)
	if size == 0 {
		return 0
	}
	t := math.Sqrt((size + math.Abs(a)) / 2)
	if a >= 0 {
		return complex(t, b/(2*t))
	}
	return complex(math.Abs(b)/(2*t), math.Copysign(t, b))
}

func reciprocal(z complex128) complex128 {
	f := 1 / (real(z)*real(z) + imag(z)*imag(z))
	return complex(real(z)*f, -imag(z)*f)
}

// begin returns the eigenvalues as starting points, or nil.
func (r *recurrence) begin(ctx context.Context) []start {
	values := r.eigenvalues(ctx)
	if values == nil {
		return nil
	}
	points := make([]start, len(values))
	for i, v := range values {
		points[i] = start{v, r.scale}.normal()
	}
	return points
}
