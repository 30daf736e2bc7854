package response

import (
	"context"
	"errors"
	"fmt"
	"math/big"
	"sync"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// Errors of this package. A context's error is passed on as it is.
var (
	// ErrPrecision: the digits asked for were not decided within the greatest
	// working precision; the ball returned beside it is right all the same.
	ErrPrecision = errors.New("not decided within the greatest working precision")
	// ErrBeforeUndefined: the value at 0− does not follow from the capacitor
	// voltages and inductor currents there.
	ErrBeforeUndefined = errors.New("the value before t = 0 does not follow from the initial state")
	// ErrIntervals: the intervals are not in ascending order from t = 0 on.
	ErrIntervals = errors.New("intervals must begin at t = 0 and ascend")
)

// maxPrecision is the greatest working precision in bits. A hundred thousand
// times what a shown figure needs, and reached in well under a second.
const maxPrecision = 1 << 14

// memory names what carries over from one interval to the next: a capacitor
// voltage, an inductor current, or an inner state of an element.
type memory = network.Memory

// row holds the transfers to one output: from the given initial state as a
// whole, from every memory of the network alone, and from every source element
// that can act. Only one of initial and memories is there, as asked.
type row struct {
	initial  exact.Ratio
	memories []exact.Ratio
	sources  map[int]exact.Ratio

	mu    sync.Mutex
	known []rowFraction
}

// rowFraction is a fraction made before from a transfer and a source transform.
type rowFraction struct {
	transfer, drive exact.Ratio
	fraction        *fraction
}

// fraction returns the fraction of transfer h times a source transform u, the
// same one for the same arguments, so that its expansion is shared.
func (r *row) fraction(h, u exact.Ratio, splits []exact.Poly) *fraction {
	r.mu.Lock()
	defer r.mu.Unlock()
	for _, k := range r.known {
		if k.transfer.Equal(h) && k.drive.Equal(u) {
			return k.fraction
		}
	}
	f := newFraction(h.Mul(u), denominator(h), denominator(u), splits...)
	r.known = append(r.known, rowFraction{h, u, f})
	return f
}

// plant is what a network in one position of its switches has to tell.
type plant interface {
	// memories lists the memories in the order of row.memories.
	memories() []memory
	// memoryRows returns the transfers to the value of every memory; first
	// says whether from the initial state or from memories.
	memoryRows(ctx context.Context, first bool) ([]*row, error)
}

// driven is a source with its wave.
type driven struct {
	element int
	wave    Wave
}

// stretch is an interval with the network that holds in it.
type stretch struct {
	start, end *big.Rat // end nil: for ever
	plant      plant

	mu    sync.Mutex
	rows  [][]component            // per memory, once built
	all   *Signal                  // the components of all of them, in one
	state map[uint][][]number.Ball // at the end: [cause][memory], per precision
}

// Solution is a network with its sources and initial state, solved on demand.
// It is safe for concurrent use.
type Solution struct {
	stretches []*stretch
	sources   []driven
	before    *past
	exact     bool // no number of sources and state is a stand-in
	library   *rootLibrary
}

// newSolution checks the intervals and prepares; nothing is computed yet.
func newSolution(starts []*big.Rat, plants []plant, sources []driven) (*Solution, error) {
	if len(starts) == 0 || starts[0].Sign() != 0 {
		return nil, ErrIntervals
	}
	s := &Solution{sources: sources, exact: true, library: &rootLibrary{}}
	for i, start := range starts {
		st := &stretch{start: start, plant: plants[i], state: map[uint][][]number.Ball{}}
		if i > 0 {
			if starts[i-1].Cmp(start) >= 0 {
				return nil, ErrIntervals
			}
			s.stretches[i-1].end = start
		}
		s.stretches = append(s.stretches, st)
	}
	for _, d := range sources {
		s.exact = s.exact && d.wave.isExact()
	}
	return s, nil
}

// causes is the number of causes: the initial state, then each source.
func (s *Solution) causes() int { return 1 + len(s.sources) }

// components lists how one output answers within stretch k, given its
// transfers there.
func (s *Solution) components(ctx context.Context, k int, r *row) ([]component, error) {
	st := s.stretches[k]
	var out []component
	if k == 0 {
		if c, ok := s.initialComponent(st, r); ok {
			out = append(out, c)
		}
	} else {
		carried, err := s.carriedComponents(ctx, k, r)
		if err != nil {
			return nil, err
		}
		out = append(out, carried...)
	}
	for j, src := range s.sources {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		h, ok := r.sources[src.element]
		if !ok || h.IsZero() {
			continue
		}
		wave, near := src.wave.tuned(h)
		for _, d := range wave.drives(fmt.Sprintf("source %d", j), st.start, st.end) {
			f := r.fraction(h, d.transform, d.factors)
			out = append(out, component{from: d.from, until: st.end, cause: 1 + j, weight: d.weight, fraction: f, near: near})
		}
	}
	return out, nil
}

// initialComponent is the zero-input answer in the first stretch: exact.
func (s *Solution) initialComponent(st *stretch, r *row) (component, bool) {
	if r.initial.IsZero() {
		return component{}, false
	}
	f := newFraction(r.initial, denominator(r.initial), one)
	return component{from: st.start, until: st.end, weight: unitWeight, fraction: f}, true
}

// carriedComponents are the answers to the state at the beginning of stretch
// k ≥ 1, split by what caused that state.
func (s *Solution) carriedComponents(ctx context.Context, k int, r *row) ([]component, error) {
	st, prev := s.stretches[k], s.stretches[k-1]
	rows, err := s.memoryComponents(ctx, k-1)
	if err != nil {
		return nil, err
	}
	at := map[memory]int{}
	for i, m := range prev.plant.memories() {
		at[m] = i
	}
	var out []component
	for i, m := range st.plant.memories() {
		h := r.memories[i]
		p, ok := at[m]
		if !ok || h.IsZero() {
			continue
		}
		f := r.fraction(h, unitRatio, nil)
		for cause := range s.causes() {
			if !anyOf(rows[p], cause) {
				continue
			}
			w := weight{
				id: fmt.Sprintf("state %d %d %d", k, cause, p),
				at: func(ctx context.Context, prec uint) (number.Ball, error) {
					state, err := s.stateAtEnd(ctx, k-1, prec)
					if err != nil {
						return number.Ball{}, err
					}
					return state[cause][p], nil
				},
			}
			out = append(out, component{from: st.start, until: st.end, cause: cause, weight: w, fraction: f})
		}
	}
	return out, nil
}

func anyOf(list []component, cause int) bool {
	for _, c := range list {
		if c.cause == cause {
			return true
		}
	}
	return false
}

// memoryComponents returns the components of every memory within stretch k.
func (s *Solution) memoryComponents(ctx context.Context, k int) ([][]component, error) {
	st := s.stretches[k]
	st.mu.Lock()
	defer st.mu.Unlock()
	if st.rows != nil {
		return st.rows, nil
	}
	transfers, err := st.plant.memoryRows(ctx, k == 0)
	if err != nil {
		return nil, err
	}
	rows := make([][]component, len(transfers))
	for i, r := range transfers {
		if rows[i], err = s.components(ctx, k, r); err != nil {
			return nil, err
		}
	}
	st.rows = rows
	return rows, nil
}

// stateAtEnd returns the memories' left limits at the end of stretch k by
// cause, to the working precision.
func (s *Solution) stateAtEnd(ctx context.Context, k int, prec uint) ([][]number.Ball, error) {
	rows, err := s.memoryComponents(ctx, k)
	if err != nil {
		return nil, err
	}
	st := s.stretches[k]
	st.mu.Lock()
	defer st.mu.Unlock()
	if x, ok := st.state[prec]; ok {
		return x, nil
	}
	if st.all == nil {
		st.all = &Signal{solution: s}
		for _, comps := range rows {
			st.all.comps = append(st.all.comps, comps...)
		}
	}
	parts, err := st.all.partsAt(ctx, st.end, Left, prec)
	if err != nil {
		return nil, err
	}
	out := make([][]number.Ball, s.causes())
	for c := range out {
		out[c] = make([]number.Ball, len(rows))
	}
	next := 0
	for i, comps := range rows {
		for _, c := range comps {
			out[c.cause][i] = out[c.cause][i].Add(parts[next].ball(prec))
			next++
		}
	}
	st.state[prec] = out
	return out, nil
}

var (
	one       = exact.PolyFromInt64s(1)
	unitRatio = exact.PolyRatio(one)
)

// denominator reads the zero value's denominator as 1.
func denominator(f exact.Ratio) exact.Poly {
	if f.Den.IsZero() {
		return one
	}
	return f.Den
}
