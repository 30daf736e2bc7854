package float

import (
	"context"
	"errors"
	"math"
	"runtime"
	"sync"
	"sync/atomic"

	"portlight/analyze/network"
)

// Sweep returns what At returns for many angular frequencies (rad/s), in their
// order. Residuals are taken in plain double precision as long as that gives
// every value to about ten digits, so radii are larger than those of At, and
// the condition number is left out. Where the equations are singular at a
// frequency its result is nil. The error is ErrRange, ErrMemory or the
// context's.
func (s *Solver) Sweep(ctx context.Context, omegas []float64, outs []network.Output, cols []network.Column) ([]*Result, error) {
	for _, w := range omegas {
		if math.IsNaN(w) || math.Abs(w) > largest {
			return nil, ErrRange
		}
	}
	ask, err := s.question(outs, cols)
	if err != nil {
		return nil, err
	}
	results := make([]*Result, len(omegas))
	// Neighbours go to one worker, for the pivots that serve at one frequency
	// mostly serve at the next.
	workers := max(1, min(runtime.GOMAXPROCS(0), len(omegas)/sweepShare))
	errs := make([]error, workers)
	var failed atomic.Bool
	var wg sync.WaitGroup
	for k := range workers {
		part := func() {
			from, to := k*len(omegas)/workers, (k+1)*len(omegas)/workers
			w := s.sweeper(ask)
			defer s.release(w.workspace)
			for i := from; i < to && !failed.Load(); i++ {
				r, err := w.answerAt(ctx, omegas[i])
				if err != nil && !errors.Is(err, ErrSingular) {
					errs[k] = err
					failed.Store(true)
					return
				}
				results[i] = r
			}
		}
		if k == workers-1 {
			part()
		} else {
			wg.Go(part)
		}
	}
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return nil, err
		}
	}
	return results, nil
}

// sweepShare is how many frequencies a worker has at least.
const sweepShare = 8

// sweeper answers one question at many frequencies.
type sweeper struct {
	*query
	ask         *question
	cols, duals []plain
	terms       []float64    // of every row and column, the relative error of its sum
	inverse     float64      // estimate of ‖Â⁻¹‖₁ for the plan at hand
	planned     any          // the plan that it was made for
	few         []complex128 // entries of a right-hand side
}

// plain is a solution with its residual in double precision.
type plain struct {
	x, r []complex128
	size []float64 // |A|·|x| + |b|
}

func (s *Solver) sweeper(ask *question) *sweeper {
	n := s.m.n
	w := &sweeper{query: &query{Solver: s, workspace: s.workspace()}, ask: ask}
	room := func() plain { return plain{make([]complex128, n), make([]complex128, n), make([]float64, n)} }
	for range ask.cols {
		w.cols = append(w.cols, room())
	}
	for i := range ask.outs {
		if j := ask.same[i]; j >= 0 {
			w.duals = append(w.duals, w.cols[j])
		} else {
			w.duals = append(w.duals, room())
		}
	}
	// A sum of t products of entries with two rounding errors each, and one
	// for each addition.
	w.terms = make([]float64, n)
	inRow := make([]int32, n)
	for _, i := range s.m.row {
		inRow[i]++
	}
	for i := range n {
		inColumn := s.m.start[i+1] - s.m.start[i]
		w.terms[i] = float64(max(inRow[i], inColumn)+8) * unit
	}
	return w
}

// answerAt answers at one frequency, in double precision if that is good enough.
func (w *sweeper) answerAt(ctx context.Context, omega float64) (*Result, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	w.at = point{im: double{omega, 0}}
	w.m.values(complex(0, omega), w.a)
	for way := range ways {
		switch err := w.factorise(ctx, way); {
		case errors.Is(err, errPivot):
			continue
		case err != nil:
			return nil, err
		}
		r, err := w.plainAnswer(ctx)
		if r != nil || err != nil {
			return r, err
		}
		break
	}
	return w.precise(ctx, w.at, w.ask)
}

// fineEnough is the relative backward error, and the relative radius, up to
// which an answer in double precision is taken.
const fineEnough = 1e-10

// plainAnswer returns nil where double precision is not good enough.
func (w *sweeper) plainAnswer(ctx context.Context) (*Result, error) {
	if err := w.norm(ctx); err != nil {
		return nil, err
	}
	for j := range w.cols {
		if !w.solvePlain(&w.cols[j], w.ask.cols[j], false) {
			return nil, nil
		}
	}
	for i := range w.duals {
		if w.ask.same[i] < 0 && !w.solvePlain(&w.duals[i], w.ask.outs[i], true) {
			return nil, nil
		}
	}
	out := newResult(len(w.duals), len(w.cols), w.factor.method())
	for i := range w.duals {
		for j := range w.cols {
			v, radius, amplified := w.plainValue(i, j)
			if !(radius <= fineEnough*norm1(v)+floor) {
				return nil, nil
			}
			out.Values[i][j], out.Radius[i][j], out.Amplification[i][j] = v, radius, amplified
		}
	}
	return out, nil
}

// norm estimates the norm of the inverse anew for every plan.
func (w *sweeper) norm(ctx context.Context) (err error) {
	var plan any = w.ldl
	if w.factor == factor(w.lu) {
		plan = w.lu
	}
	if w.planned != plan {
		w.planned = plan
		w.inverse, err = w.inverseNorm(ctx)
	}
	return err
}

// solvePlain solves and takes the residual. It returns false where that is
// large: then the factors are no good.
func (w *sweeper) solvePlain(p *plain, b *vector, transposed bool) bool {
	m := w.m
	clear(p.r)
	clear(p.size)
	omega := w.at.im.hi
	w.few = w.few[:0]
	for k, i := range b.index {
		v := complex(b.g[k].hi, omega*b.c[k].hi)
		w.few = append(w.few, v)
		p.r[i] += v
		p.size[i] += norm1(v)
	}
	w.factor.solveSparse(b.index, w.few, p.x, w.y, transposed)
	if transposed {
		for j := range m.n {
			begin, end := m.start[j], m.start[j+1]
			a, rows := w.a[begin:end], m.row[begin:end][:end-begin]
			var sum complex128
			size := 0.0
			for k, i := range rows {
				v := p.x[i]
				sum += a[k] * v
				size += norm1(a[k]) * norm1(v)
			}
			p.r[j] -= sum
			p.size[j] += size
		}
	} else {
		for j := range m.n {
			v := p.x[j]
			if v == 0 {
				continue
			}
			begin, end := m.start[j], m.start[j+1]
			a, rows := w.a[begin:end], m.row[begin:end][:end-begin]
			size := norm1(v)
			for k, i := range rows {
				p.r[i] -= a[k] * v
				p.size[i] += norm1(a[k]) * size
			}
		}
	}
	for i, r := range p.r {
		if !(norm1(r) <= fineEnough*p.size[i]) {
			return false
		}
	}
	return true
}

// plainValue is value with residuals in double precision. The error of the
// second order is |ρᵀ·A⁻¹·r| ≤ ‖ρ‖∞·‖A⁻¹‖₁·‖r‖₁, all scaled; the norm is an
// estimate at a frequency nearby, so it is taken a million times.
func (w *sweeper) plainValue(i, j int) (v complex128, radius, amplified float64) {
	o, y, x := w.ask.outs[i], &w.duals[i], &w.cols[j]
	direct := w.ask.direct[i][j]
	v = complex(direct.hi, 0)
	rough := math.Abs(direct.hi)
	for k, r := range o.index {
		c := complex(o.g[k].hi, w.at.im.hi*o.c[k].hi)
		v += c * x.x[r]
		rough += norm1(c) * norm1(x.x[r])
	}
	scale := w.factor.scaling()
	var first complex128
	size, rest, residual, dual := 0.0, 0.0, 0.0, 0.0
	for r, f := range y.x {
		n, e := norm1(f), norm1(x.r[r])
		first += f * x.r[r]
		size += n * e
		amplified += n * x.size[r]
		rest += n * x.size[r] * w.terms[r]
		residual += (e + w.terms[r]*x.size[r]) * math.Abs(scale.row[r])
		dual = max(dual, (norm1(y.r[r])+w.terms[r]*y.size[r])*math.Abs(scale.col[r]))
	}
	v += first
	const nearby = 1e6
	radius = rest + float64(w.m.n+8)*2*unit*size + nearby*dual*w.inverse*residual
	radius = radius*(1+16*unit) + float64(len(o.index)+8)*unit*rough + 2*unit*norm1(v) + floor
	return v, radius, relative(amplified, v)
}
