package float

import (
	"context"
	"errors"
	"math"
	"sync"
)

// poles are the poles in the upper half-plane, with their residues, of the
// Padé approximant r(z) = P₆(z)/Q₈(z) of e^z, as printed by the calculation
// that the test of them repeats. It has order 14, decays like z⁻² and |r(z)| ≤ 1
// in the left half-plane (B. L. Ehle, A-stable methods and Padé approximations
// to the exponential, SIAM J. Math. Anal. 4 (1973)), so that motions too fast
// to be followed die out, and impulses leave nothing behind.
var poles = [...]struct{ at, residue complex128 }{
	{complex(9.1616288675846683733, 1.5583773940619034399), complex(501.71555875795917802, -4734.9973098000839974)},
	{complex(8.4022529851495197874, 4.6911627560543325855), complex(-782.68480848475045126, 2253.940546158093266)},
	{complex(6.7412618178789648814, 7.8859496894854112027), complex(312.81797603338503183, -428.59461337512327225)},
	{complex(3.6948563293868469578, 11.269699300097056971), complex(-31.848726306593758587, 14.952818662368041023)},
}

// stepper advances the solution by a fixed time. From an instant on, where it
// was x, its change δ obeys
//
//	(G + s·C)·Δ(s) = B·U(s) − G·x/s + jump,
//
// jump being the charges and fluxes that are not C·x. With r(z) = Σ ρ/(z − θ) in
// place of e^z, δ(h) = −Σ (ρ/h)·Δ(θ/h): what r makes of the constant, and of
// sources that are outputs of a network of their own, is taken in. Rounding
// errors are those of the change, not of x.
type stepper struct {
	m       *matrix
	h       float64
	factors [len(poles)]factor
	s       [len(poles)]complex128
	b       [len(poles)][]complex128 // right-hand sides, then solutions
	scratch [len(poles)][]complex128
	gx      []float64 // G·x
	wrong   float64   // the error of a solution, relative to scaled unknowns
}

// stepper factorises the matrices for a step.
func (s *Solver) stepper(ctx context.Context, h float64) (*stepper, error) {
	t := &stepper{m: s.m, h: h, gx: make([]float64, s.m.n)}
	for i, p := range poles {
		t.s[i] = p.at / complex(h, 0)
		t.b[i], t.scratch[i] = make([]complex128, s.m.n), make([]complex128, s.m.n)
		f, wrong, err := s.factorAt(ctx, t.s[i])
		if err != nil {
			return nil, err
		}
		t.factors[i], t.wrong = f, max(t.wrong, wrong)
	}
	return t, nil
}

// entries is how many numbers the factors hold.
func (t *stepper) entries() (sum int) {
	for _, f := range t.factors {
		sum += f.entries()
	}
	return sum
}

// drive is a source in a segment: a column of B and what it does.
type drive struct {
	index []int32
	value []float64
	wave  *Wave
	start float64 // of the segment
}

// reading is an output in a segment, over the unknowns, the sources and the
// derivatives of the unknowns.
type reading struct {
	index []int32
	g, c  []float64
	input []float64 // by drive
}

// step adds to x its change within a step from now on, a time after the start
// of the segment, and sets y to the readings after it. A nil jump is none.
func (t *stepper) step(x, jump []float64, now float64, drives []drive, readings []reading, y []float64) {
	t.m.conduct(x, t.gx)
	if len(x) < parallelSize {
		for i := range t.factors {
			t.solve(i, jump, now, drives)
		}
	} else {
		var wg sync.WaitGroup
		for i := 1; i < len(t.factors); i++ {
			wg.Go(func() { t.solve(i, jump, now, drives) })
		}
		t.solve(0, jump, now, drives)
		wg.Wait()
	}
	clear(y)
	for i := range t.factors {
		w, s := t.weight(i), t.s[i]
		re, im := real(w), imag(w)
		for k, v := range t.b[i] {
			x[k] += re*real(v) - im*imag(v)
		}
		for j := range readings {
			r := &readings[j]
			for k, at := range r.index {
				if c := r.c[k]; c != 0 {
					y[j] += c * real(w*s*t.b[i][at])
				}
			}
		}
	}
	for j := range readings {
		r := &readings[j]
		for k, at := range r.index {
			y[j] += r.g[k] * x[at]
		}
		for k, d := range drives {
			if f := r.input[k]; f != 0 {
				y[j] += f * d.wave.value(d.start, now+t.h)
			}
		}
	}
}

// weight is −ρ/h, twice, for the pole below the axis gives the conjugate.
func (t *stepper) weight(i int) complex128 { return -2 * poles[i].residue / complex(t.h, 0) }

// parallelSize is from how many unknowns on the poles of a step are worth
// goroutines of their own.
const parallelSize = 1000

// solve solves for one pole.
func (t *stepper) solve(i int, jump []float64, now float64, drives []drive) {
	b := t.b[i]
	over := -1 / t.s[i]
	re, im := real(over), imag(over)
	for k, v := range t.gx {
		b[k] = complex(v*re, v*im)
	}
	for k, v := range jump {
		b[k] += complex(v, 0)
	}
	for _, d := range drives {
		u := d.wave.transform(t.s[i], d.start, now)
		for k, r := range d.index {
			b[r] += complex(d.value[k], 0) * u
		}
	}
	t.factors[i].solve(b, t.scratch[i])
}

// conduct sets y to G·x.
func (m *matrix) conduct(x, y []float64) {
	clear(y)
	for j := range m.n {
		v := x[j]
		if v == 0 {
			continue
		}
		begin, end := m.start[j], m.start[j+1]
		rows := m.row[begin:end]
		for k, g := range m.g[begin:end] {
			y[rows[k]] += g.hi * v
		}
	}
}

// echo is what the step makes of a wave itself: how well it follows it.
func (t *stepper) echo(d *drive, now float64) float64 {
	sum := 0.0
	for i := range t.factors {
		sum += real(t.weight(i) * d.wave.transform(t.s[i], d.start, now))
	}
	return sum
}

// sound are the backward errors up to which factors are taken for a step: if
// no way of factorising gives the first, the second will do.
var sound = []float64{1e-13, 1e-10}

// factorAt factorises the matrix at a point with values of its own. The entries
// are moved by about half a unit in the last place, each time otherwise: what
// is computed with different factors then differs by as much as rounded entries
// may falsify it (after J. Vignes, A stochastic arithmetic for reliable
// scientific computation, Math. Comput. Simul. 35 (1993)). The factors are tried
// on one right-hand side; wrong is the error of its solution.
func (s *Solver) factorAt(ctx context.Context, at complex128) (f factor, wrong float64, err error) {
	q := &query{Solver: s, at: point{double{real(at), 0}, double{imag(at), 0}}, workspace: s.workspace()}
	defer func() {
		q.ldl, q.lu = nil, nil // they belong to the caller
		s.release(q.workspace)
	}()
	q.ldl, q.lu = nil, nil
	q.jitter = uint64(s.jitter.Add(1))
	s.m.values(at, q.a)
	for _, limit := range sound {
		for way := range ways {
			err := q.factorise(ctx, way)
			if err == nil {
				if wrong, ok := q.tried(limit); ok {
					return q.factor, wrong, nil
				}
			} else if !errors.Is(err, errPivot) {
				return nil, 0, err
			}
		}
	}
	return nil, 0, ErrSingular
}

// tried solves once for a solution that is known. It returns the largest error,
// relative to what scaling makes 1, and whether the backward error is within a
// limit.
func (q *query) tried(limit float64) (wrong float64, ok bool) {
	n := q.m.n
	b, x := make([]complex128, n), make([]complex128, n)
	size := make([]float64, n)
	scale := q.factor.scaling().col
	for j := range n {
		v := complex(math.Cos(float64(j))*scale[j], 0)
		for k := q.m.start[j]; k < q.m.start[j+1]; k++ {
			i := q.m.row[k]
			b[i] += q.a[k] * v
		}
	}
	copy(x, b)
	for i, v := range b {
		size[i] = norm1(v)
	}
	q.factor.solve(x, q.y)
	for j := range n {
		v := x[j]
		wrong = max(wrong, math.Abs(real(v)/scale[j]-math.Cos(float64(j)))+math.Abs(imag(v)/scale[j]))
		for k := q.m.start[j]; k < q.m.start[j+1]; k++ {
			i := q.m.row[k]
			b[i] -= q.a[k] * v
			size[i] += norm1(q.a[k]) * norm1(v)
		}
	}
	for i, r := range b {
		if !(norm1(r) <= limit*size[i]) {
			return wrong, false
		}
	}
	return wrong, true
}
