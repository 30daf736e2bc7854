package exact

import (
	"context"
	"errors"
	"math"
	"math/big"
	"math/rand/v2"
	"runtime"
	"sync"
	"sync/atomic"
)

// errSingular tells that a system is singular, with the error bound that
// decidedSingular states.
var errSingular = errors.New("singular system")

// primeBits is a lower bound of log2 p for the primes that can come up: the
// first 10^7 of the sequence are all larger than 2^60.999.
const primeBits = 60.999

// primesFor returns how many primes have a product greater than twice
// 2^bits, so that residues determine integers up to that size with sign.
func primesFor(bits float64) int {
	if math.IsInf(bits, -1) {
		return 1
	}
	return max(1, int(math.Ceil((bits+1.01)/primeBits)))
}

// modularRun is the state of one solution of a system by evaluation modulo
// primes.
type modularRun struct {
	prog    *program
	points  int   // evaluation points per prime
	primes  []int // primes needed by each output
	degrees []int // degree bound of each output
	residue [][]uint64
	used    []*modulus
	next    atomic.Int64 // the next prime of the sequence
	taken   atomic.Int64 // places in used that are given out
}

// solveModular returns the wanted block determinants, with nil polynomials
// for the others, and the numerators, as integer polynomials in the scaled
// time. It evaluates the system at enough points modulo enough primes,
// interpolates and reconstructs; the numbers of points and primes are the
// proved bounds of degreeBounds and coefficientBounds.
func (y *system) solveModular(ctx context.Context, wantDet []bool) ([]Poly, []Poly, error) {
	plan, err := y.order(ctx)
	if err != nil {
		return nil, nil, err
	}
	return y.newModularRun(plan, wantDet).solve(ctx, y, wantDet)
}

// solve carries the run out.
func (r *modularRun) solve(ctx context.Context, y *system, wantDet []bool) (_, _ []Poly, err error) {
	if err := r.runAll(ctx); err != nil {
		return nil, nil, err
	}
	dets := make([]Poly, len(y.end))
	i := 0
	for b := range dets {
		if wantDet[b] {
			if dets[b], err = r.output(ctx, i); err != nil {
				return nil, nil, err
			}
			i++
		}
	}
	nums := make([]Poly, y.outs*y.rhs)
	for k := range nums {
		if nums[k], err = r.output(ctx, i+k); err != nil {
			return nil, nil, err
		}
	}
	return dets, nums, nil
}

// order returns an elimination order found at a random point modulo a prime,
// or errSingular.
func (y *system) order(ctx context.Context) (*elimination, error) {
	const attempts = 3
	for i := range attempts {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		m := takeModuli(attempts)[i]
		if sym := y.symmetric(); sym != nil && i == 0 {
			if plan := y.eliminateSymmetric(m, rand.Uint64N(m.p), sym); plan != nil {
				return plan, nil
			}
		}
		plan, block := y.eliminate(m, rand.Uint64N(m.p))
		if plan != nil {
			return plan, nil
		}
		if i == attempts-1 {
			singular, err := y.decidedSingular(ctx, block)
			if err != nil {
				return nil, err
			}
			if singular {
				return nil, errSingular
			}
		}
	}
	return nil, errors.New("no usable pivots at random points") // probability below 2^-100
}

// decidedSingular reports whether the determinant of a block is the zero
// polynomial; the probability of a wrong yes is below 2^-100.
//
// If the determinant d is not zero, its coefficients are at most 2^B by the
// bound, so not all of the k primes, whose product exceeds 2^B, divide all of
// them. Modulo a prime that does not, d has at most n zeros, and two
// independent uniform points both meet zeros with probability at most
// (n/2^60.9)², which is below 2^-100 for n < 2^10 and for larger n after the
// further points taken there.
func (y *system) decidedSingular(ctx context.Context, block int) (bool, error) {
	start, end := y.start(block), y.end[block]
	sub := y.only(start, end)
	bits, _ := sub.coefficientBounds()
	trials := 2
	for n := end - start; n >= 1<<10; n >>= 10 {
		trials++
	}
	for _, m := range takeModuli(primesFor(bits[0])) {
		for range trials {
			if err := ctx.Err(); err != nil {
				return false, err
			}
			if plan, _ := sub.eliminate(m, rand.Uint64N(m.p)); plan != nil {
				return false, nil
			}
		}
	}
	return true, nil
}

// only returns the system of the positions of one block without borders.
func (y *system) only(start, end int) *system {
	z := &system{n: end - start, end: []int{end - start}}
	for _, r := range y.rows[start:end] {
		var row []intEntry
		for _, e := range r {
			if e.col >= start && e.col < end {
				row = append(row, intEntry{e.col - start, e.g, e.c})
			}
		}
		z.rows = append(z.rows, row)
	}
	return z
}

func (y *system) newModularRun(plan *elimination, wantDet []bool) *modularRun {
	r := &modularRun{prog: y.compile(plan, wantDet)}
	detBits, numBits := y.coefficientBounds()
	detDegrees, numDegree := y.degreeBounds()
	for b, want := range wantDet {
		if want {
			r.primes = append(r.primes, primesFor(detBits[b]))
			r.degrees = append(r.degrees, detDegrees[b])
		}
	}
	for _, bits := range numBits {
		r.primes = append(r.primes, primesFor(bits))
		r.degrees = append(r.degrees, numDegree)
	}
	degree, primes := 0, 0
	for i, d := range r.degrees {
		if r.prog.outputs[i] >= 0 {
			degree = max(degree, d)
			primes = max(primes, r.primes[i])
		}
	}
	r.points = transformSize(degree + 1)
	r.used = make([]*modulus, primes)
	r.residue = make([][]uint64, len(r.degrees))
	for i, d := range r.degrees {
		if r.prog.outputs[i] >= 0 {
			r.residue[i] = make([]uint64, primes*(d+1))
		}
	}
	return r
}

// parallelWork is the estimated work in nanoseconds from which on the primes
// are shared among processors.
const parallelWork = 4e6

// work estimates the time of all evaluations in nanoseconds.
func (r *modularRun) work() float64 {
	perPoint := 4*float64(len(r.prog.ops)) + 1.5*float64(len(r.prog.pairs))
	return perPoint * float64(r.points) * float64(len(r.used))
}

// cost estimates the whole time in nanoseconds: evaluation, interpolation and
// reconstruction.
func (r *modularRun) cost() float64 {
	primes := float64(len(r.used))
	perOutput := float64(r.points) * primes * (30 + 3*primes)
	return r.work() + perOutput*float64(len(r.degrees))
}

func (r *modularRun) runAll(ctx context.Context) error {
	workers := 1
	if r.work() > parallelWork {
		workers = min(runtime.GOMAXPROCS(0), len(r.used))
	}
	if workers == 1 {
		return r.worker(ctx)
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	errs := make([]error, workers)
	var wg sync.WaitGroup
	for i := range workers {
		wg.Go(func() {
			if errs[i] = r.worker(ctx); errs[i] != nil {
				cancel()
			}
		})
	}
	wg.Wait()
	return errors.Join(errs...)
}

// worker takes primes until all places are filled.
func (r *modularRun) worker(ctx context.Context) error {
	chunks := (r.points + chunkPoints - 1) / chunkPoints
	v := newMachine(r.prog, (r.points+chunks-1)/chunks)
	values := make([][]uint64, len(r.residue))
	for i := range values {
		if r.residue[i] != nil {
			values[i] = make([]uint64, r.points)
		}
	}
	for {
		place := int(r.taken.Add(1)) - 1
		if place >= len(r.used) {
			return nil
		}
		for done := false; !done; {
			i := int(r.next.Add(1))
			if i > 2*len(r.used)+64 {
				return errors.New("no usable primes") // probability below 2^-100
			}
			m := takeModuli(i)[i-1]
			var err error
			if done, err = r.evaluate(ctx, v, m, values); err != nil {
				return err
			}
			r.used[place] = m
		}
		for i, d := range r.degrees {
			if values[i] != nil {
				copy(r.residue[i][place*(d+1):], values[i][:d+1])
			}
		}
	}
}

// evaluate leaves the coefficients of the outputs modulo m in values and
// reports success; it fails if every coset of points tried meets a zero of a
// pivot.
func (r *modularRun) evaluate(ctx context.Context, v *machine, m *modulus, values [][]uint64) (bool, error) {
	if !v.load(m) {
		return false, nil
	}
	const attempts = 3
	for range attempts {
		q := m.newPoints(r.points, 1+rand.Uint64N(m.p-1))
		ok := true
		for at := 0; at < r.points && ok; at += v.width {
			end := min(at+v.width, r.points)
			var err error
			if ok, err = v.run(ctx, m, q.x[at:end]); err != nil {
				return false, err
			}
			for i, slot := range r.prog.outputs {
				if slot >= 0 {
					copy(values[i][at:end], v.slot(slot, end-at))
				}
			}
		}
		if !ok {
			continue
		}
		for i, val := range values {
			if val == nil {
				continue
			}
			if r.prog.sym != nil && v.undo != m.one {
				for k := range val {
					val[k] = m.mul(val[k], v.undo)
				}
			}
			q.interpolate(val)
			for _, c := range val[r.degrees[i]+1:] {
				if c != 0 {
					panic("exact: a determinant exceeds the proved degree")
				}
			}
		}
		return true, nil
	}
	return false, nil
}

// output reconstructs one output.
func (r *modularRun) output(ctx context.Context, i int) (Poly, error) {
	if r.residue[i] == nil {
		return Poly{}, nil
	}
	c := reconstructionFor(r.used[:r.primes[i]])
	stride := r.degrees[i] + 1
	ints := make([]*big.Int, stride)
	for k := range ints {
		if err := ctx.Err(); err != nil {
			return Poly{}, err
		}
		ints[k] = c.integer(r.residue[i][k:], stride)
	}
	return makePoly(ints, nil), nil
}
