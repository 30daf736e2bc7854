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

// relative is size/|v|.
func relative(size float64, v complex128) float64 {
	if size == 0 {
		return 0
	}
	return size / modulus(v)
}
