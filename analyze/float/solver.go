package float

import (
	"context"
	"errors"
	"math"
	"math/big"
	"sync"
	"sync/atomic"

	"portlight/analyze/network"
)

// ErrSingular tells that the equations have no unique solution at a frequency,
// or that in double precision they cannot be told from equations that have
// none.
var ErrSingular = errors.New("the equations are singular at this frequency in double precision")

// Solver solves the equations of one network at given frequencies. It is safe
// for concurrent use. What depends on the structure alone is found once and
// used for every frequency.
type Solver struct {
	system      *network.System
	m           *matrix
	multipliers []float64 // of rows that make the matrix symmetric, or nil
	symmetric   bool      // it is symmetric as it stands, exactly
	memories    []form    // the values that the network carries
	states      []form    // the right-hand sides that stand for them
	weights     []float64 // of those of capacitors and inductors, their largest entries; of others 0
	kind        []uint8   // of unknowns: 0 a voltage, 1 a current or an inner quantity
	jitter      atomic.Uint32

	mu      sync.Mutex
	plan    *symmetricPlan // the last that served
	pattern *luPattern     // the last that served
	spare   []*workspace
}

// Result is what outputs show at one frequency for right-hand sides.
type Result struct {
	// Values[i][j] is output i driven by column j, as a complex amplitude in
	// the output's unit. The true value is within Radius[i][j] of it.
	Values [][]complex128
	Radius [][]float64
	// Amplification[i][j] bounds how much more the value changes than the
	// entries of the equations, both relative and to first order: the
	// condition number of the value itself (R. D. Skeel, Scaling for numerical
	// stability in Gaussian elimination, J. ACM 26 (1979)).
	Amplification [][]float64
	// Condition estimates the condition number, in the 1-norm, of the matrix
	// with rows and columns scaled; 0 where it was not asked for.
	Condition float64
	// Method is "LU" or "LDLᵀ".
	Method string
}

// newResult makes room for so many outputs and columns.
func newResult(outs, cols int, method string) *Result {
	r := &Result{Method: method, Values: make([][]complex128, outs), Radius: make([][]float64, outs), Amplification: make([][]float64, outs)}
	values, floats := make([]complex128, outs*cols), make([]float64, 2*outs*cols)
	for i := range outs {
		r.Values[i] = values[i*cols : (i+1)*cols : (i+1)*cols]
		r.Radius[i] = floats[2*i*cols : (2*i+1)*cols : (2*i+1)*cols]
		r.Amplification[i] = floats[(2*i+1)*cols : (2*i+2)*cols : (2*i+2)*cols]
	}
	return r
}

// New prepares the equations of a system. The error is ErrRange.
func New(sys *network.System) (*Solver, error) { return NewContext(context.Background(), sys) }

// NewContext is New with a way to stop it; the error may be the context's.
func NewContext(ctx context.Context, sys *network.System) (*Solver, error) {
	m, err := newMatrix(ctx, sys.Pencil())
	if err != nil {
		return nil, err
	}
	s := &Solver{system: sys, m: m}
	s.multipliers, s.symmetric = m.symmetrise()
	for i := range sys.Size() {
		kind := uint8(1)
		if sys.Owner(i).Node >= 0 {
			kind = 0
		}
		s.kind = append(s.kind, kind)
	}
	for k, m := range sys.Memories() {
		if k&255 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		memory, err := newForm(sys.MemoryValue(k).G)
		if err != nil {
			return nil, err
		}
		state, err := newForm(sys.StateColumn(k).RHS)
		if err != nil {
			return nil, err
		}
		weight := 0.0
		if e := sys.Network().Elements[m.Element].Kind; e == network.Capacitor || e == network.Inductor {
			for _, v := range state.value {
				weight = max(weight, math.Abs(v))
			}
		}
		s.memories, s.states, s.weights = append(s.memories, memory), append(s.states, state), append(s.weights, weight)
	}
	return s, nil
}

// At returns what the outputs show at the angular frequency omega (rad/s, 0
// for direct current) for the columns. The error is ErrSingular, ErrRange or
// the context's.
func (s *Solver) At(ctx context.Context, omega float64, outs []network.Output, cols []network.Column) (*Result, error) {
	if math.IsNaN(omega) || math.Abs(omega) > largest {
		return nil, ErrRange
	}
	return s.at(ctx, point{im: double{omega, 0}}, outs, cols)
}

// AtRat is At for a frequency that is not a float64: with a sharp resonance
// its rounding alone would be seen in the answer.
func (s *Solver) AtRat(ctx context.Context, omega *big.Rat, outs []network.Output, cols []network.Column) (*Result, error) {
	w, ok := doubleOf(omega)
	if !ok {
		return nil, ErrRange
	}
	return s.at(ctx, point{im: w}, outs, cols)
}

// workspace is what one solution needs besides the pattern.
type workspace struct {
	a, scaled, x, y []complex128
	re, im          []double // entries, for residuals in doubles
	factor          factor   // one of the next two
	ldl             *symmetricFactor
	lu              *luFactor
}

func (s *Solver) workspace() *workspace {
	s.mu.Lock()
	defer s.mu.Unlock()
	if k := len(s.spare); k > 0 {
		w := s.spare[k-1]
		s.spare = s.spare[:k-1]
		return w
	}
	n, e := s.m.n, len(s.m.row)
	return &workspace{
		a: make([]complex128, e), scaled: make([]complex128, e), x: make([]complex128, n), y: make([]complex128, n),
	}
}

func (s *Solver) release(w *workspace) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if len(s.spare) < 4 {
		s.spare = append(s.spare, w)
	}
}

func (s *Solver) at(ctx context.Context, at point, outs []network.Output, cols []network.Column) (*Result, error) {
	ask, err := s.question(outs, cols)
	if err != nil {
		return nil, err
	}
	return s.precise(ctx, at, ask)
}

// precise answers with residuals of double length.
func (s *Solver) precise(ctx context.Context, at point, ask *question) (*Result, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	q := s.query(at)
	defer s.release(q.workspace)
	return attempt(q, ctx, func() (*Result, error) { return q.answer(ctx, ask) })
}

// attempt factorises and asks, and does both again in other ways as long as
// the answer is that the factors are no good.
func attempt[T any](q *query, ctx context.Context, ask func() (T, error)) (T, error) {
	for way := range ways {
		err := q.factorise(ctx, way)
		if errors.Is(err, errPivot) {
			continue
		}
		var result T
		if err == nil {
			result, err = ask()
		}
		if !errors.Is(err, ErrSingular) {
			return result, err
		}
	}
	var none T
	return none, ErrSingular
}

// The ways to factorise, in the order they are tried: symmetric and general,
// each first with the order and pivots that served at another frequency.
const (
	symmetricAgain = iota
	symmetricAnew
	generalAgain
	generalAnew
	ways
)

// query is the solution at one point.
type query struct {
	*Solver
	*workspace
	at      point
	jitter  uint64 // moves the entries by about a unit in the last place; 0 for none
	residue *residue
}

// query prepares the matrix at a point; its workspace must be released.
func (s *Solver) query(at point) *query {
	q := &query{Solver: s, at: at, workspace: s.workspace(), residue: newResidue(s.m.n)}
	s.m.values(at.rounded(), q.a)
	if q.re == nil {
		q.re, q.im = make([]double, len(s.m.row)), make([]double, len(s.m.row))
	}
	s.m.doubles(at, q.re, q.im)
	return q
}

// factorise factorises the matrix in one way. It fails with errPivot where that
// way leads nowhere.
func (q *query) factorise(ctx context.Context, way int) error {
	q.mu.Lock()
	plan, pattern := q.plan, q.pattern
	q.mu.Unlock()
	switch {
	case way == symmetricAgain && plan != nil:
		if q.ldl == nil || q.ldl.symmetricPlan != plan {
			q.ldl = plan.factor()
		}
		q.factor = q.ldl
		q.ldl.jitter = q.jitter
		return q.ldl.factorise(ctx, q.at.rounded(), usedLimit)
	case way == symmetricAnew && q.multipliers != nil:
		return q.symmetricAnew(ctx)
	case way == generalAgain && pattern != nil:
		if q.lu == nil || q.lu.luPattern != pattern {
			q.lu = pattern.factor()
		}
		copy(q.scaled, q.a)
		pattern.scale.apply(q.m, q.scaled)
		shake(q.scaled, q.jitter)
		clear(q.x)
		q.factor = q.lu
		return pattern.refactorise(ctx, q.scaled, q.lu, q.x)
	case way == generalAnew:
		return q.generalAnew(ctx)
	}
	return errPivot
}

func (q *query) symmetricAnew(ctx context.Context) error {
	plan, err := q.m.planSymmetric(ctx, q.a, q.multipliers)
	if err != nil {
		return err
	}
	q.ldl = plan.factor()
	q.factor = q.ldl
	q.ldl.jitter = q.jitter
	if err := q.ldl.factorise(ctx, q.at.rounded(), freshLimit); err != nil {
		return err
	}
	q.mu.Lock()
	q.plan = plan
	q.mu.Unlock()
	return nil
}

func (q *query) generalAnew(ctx context.Context) error {
	scale := q.m.equilibrate(q.a, false)
	copy(q.scaled, q.a)
	scale.apply(q.m, q.scaled)
	shake(q.scaled, q.jitter)
	cols, preferred, err := q.m.luPreorder(ctx, q.scaled)
	if err != nil {
		return err
	}
	q.lu, err = q.m.factorise(ctx, q.scaled, scale, cols, preferred)
	if err != nil {
		return err
	}
	q.factor = q.lu
	q.mu.Lock()
	q.pattern = q.lu.luPattern
	q.mu.Unlock()
	return nil
}

// factor is a factorisation with values.
type factor interface {
	// scaling is what rows and columns are multiplied by.
	scaling() scaling
	// solve overwrites b, by rows, with the solution by columns; y is scratch.
	solve(b, y []complex128)
	// solveTransposed does so for the transposed equations.
	solveTransposed(b, y []complex128)
	// solveSparse sets x to the solution for a right-hand side with few
	// entries; index repeats none.
	solveSparse(index []int32, value, x, y []complex128, transposed bool)
	// method names the kind.
	method() string
	// entries is how many numbers it holds.
	entries() int
}

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

// question is what is asked, with values rounded to the doubles that are
// computed with.
type question struct {
	outs, cols []*vector
	direct     [][]double
	// same[i] is the column that output i equals, where the matrix is
	// symmetric, so that its transposed solution is that of the column; or −1.
	same []int
}

func (s *Solver) question(outs []network.Output, cols []network.Column) (*question, error) {
	q := &question{same: make([]int, len(outs))}
	for _, c := range cols {
		v := &vector{}
		for _, x := range c.RHS {
			if err := v.add(x.Index, x.Value, false); err != nil {
				return nil, err
			}
		}
		q.cols = append(q.cols, v)
	}
	for i, o := range outs {
		v, err := outputVector(o)
		if err != nil {
			return nil, err
		}
		q.outs = append(q.outs, v)
		q.direct = append(q.direct, make([]double, len(cols)))
		q.same[i] = -1
		for j, c := range cols {
			var ok bool
			if q.direct[i][j], ok = doubleOf(direct(o, c)); !ok {
				return nil, ErrRange
			}
			if s.symmetric && v.equal(q.cols[j]) {
				q.same[i] = j
			}
		}
	}
	return q, nil
}

func outputVector(o network.Output) (*vector, error) {
	v := &vector{}
	for _, x := range o.G {
		if err := v.add(x.Index, x.Value, false); err != nil {
			return nil, err
		}
	}
	for _, x := range o.C {
		if err := v.add(x.Index, x.Value, true); err != nil {
			return nil, err
		}
	}
	return v, nil
}

// answer solves for the columns, and the transposed equations for the outputs.
func (q *query) answer(ctx context.Context, ask *question) (*Result, error) {
	out := newResult(len(ask.outs), len(ask.cols), q.factor.method())
	sols := make([]*solution, len(ask.cols))
	var err error
	for j, b := range ask.cols {
		if sols[j], err = q.refine(ctx, b, false); err != nil {
			return nil, err
		}
	}
	for i, o := range ask.outs {
		var dual *solution
		if j := ask.same[i]; j >= 0 {
			dual = sols[j]
		} else if dual, err = q.refine(ctx, o, true); err != nil {
			return nil, err
		}
		for j := range sols {
			v, radius, amplified := q.value(o, dual, sols[j], ask.direct[i][j])
			if !(radius < largest) {
				return nil, ErrRange
			}
			out.Values[i][j], out.Radius[i][j], out.Amplification[i][j] = v, radius, amplified
		}
	}
	out.Condition, err = q.condition(ctx)
	return out, err
}

// direct is what an output holds of a column without the network's doing.
func direct(o network.Output, c network.Column) *big.Rat {
	sum := new(big.Rat)
	for _, pair := range [][2]map[int]*big.Rat{{o.Input, c.Input}, {o.State, c.State}} {
		for k, v := range pair[0] {
			if w := pair[1][k]; w != nil {
				sum.Add(sum, new(big.Rat).Mul(v, w))
			}
		}
	}
	return sum
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

// relative is size/|v|.
func relative(size float64, v complex128) float64 {
	if size == 0 {
		return 0
	}
	return size / modulus(v)
}
