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

// ErrSingular: the equations of a network have no unique solution.
var ErrSingular = errors.New("the equations have no unique solution")

// Interval is a network that holds from Start (s) on, until the next interval
// begins. All networks of a Setup have the same elements by index; switches
// stand in them as they are in that interval.
type Interval struct {
	Start  number.Exact
	System *network.System
}

// Source is an independent source, by its element index, and what it does.
type Source struct {
	Element int
	Wave    Wave
}

// Initial is the value of a memory at 0−: V for a capacitor, A for an inductor.
// Index is 0 except for inner states of elements that have several.
type Initial struct {
	Element, Index int
	Value          number.Exact
}

// Setup is what happens to a network: the position of its switches interval by
// interval (the first begins at 0), its sources, and the state at 0−. Sources
// that are not listed are zero.
type Setup struct {
	Intervals []Interval
	Sources   []Source
	Initial   []Initial
	// Before is the network as it stood until t = 0, nil when it is that of the
	// first interval. Steady says that what Always holds of the waves has acted
	// for ever; otherwise every source is zero before t = 0.
	Before *network.System
	Steady bool
}

// Solve prepares the time responses of a network. What is asked of the
// Solution is computed then. The error is ErrIntervals, or one of a source or
// memory that is not there.
func Solve(_ context.Context, setup Setup) (*Solution, error) {
	initial := map[memory]number.Exact{}
	for _, x := range setup.Initial {
		initial[memory{Element: x.Element, Index: x.Index}] = x.Value
	}
	var sources []driven
	for _, src := range setup.Sources {
		sources = append(sources, driven{src.Element, src.Wave})
	}
	var starts []*big.Rat
	var plants []plant
	known := map[*network.System]*networkPlant{}
	for _, v := range setup.Intervals {
		if v.System == nil {
			return nil, ErrIntervals
		}
		if known[v.System] == nil {
			known[v.System] = newNetworkPlant(v.System, sources, initial)
		}
		starts = append(starts, v.Start.Rat())
		plants = append(plants, known[v.System])
	}
	s, err := newSolution(starts, plants, sources)
	if err != nil {
		return nil, err
	}
	for _, v := range setup.Intervals {
		s.exact = s.exact && v.System.Exact()
	}
	first := setup.Intervals[0].System
	for _, x := range setup.Initial {
		s.exact = s.exact && x.Value.IsExact()
		if first.MemoryIndex(memory{Element: x.Element, Index: x.Index}) < 0 {
			return nil, fmt.Errorf("response: element %d has no initial value", x.Element)
		}
	}
	s.before = newPast(setup, sources, initial)
	return s, nil
}

// Signal returns the answer of one output. The function gives the output in
// the network of each interval, and in the one before t = 0.
func (s *Solution) Signal(ctx context.Context, output func(*network.System) (network.Output, error)) (*Signal, error) {
	var comps []component
	known := map[*networkPlant]*row{} // from the second interval on
	for k, st := range s.stretches {
		p := st.plant.(*networkPlant)
		r := known[p]
		if k == 0 || r == nil {
			out, err := output(p.system)
			if err != nil {
				return nil, err
			}
			rows, err := p.rows(ctx, []network.Output{out}, k == 0)
			if err != nil {
				return nil, err
			}
			if r = rows[0]; k > 0 {
				known[p] = r
			}
		}
		more, err := s.components(ctx, k, r)
		if err != nil {
			return nil, err
		}
		comps = append(comps, more...)
	}
	before := func(ctx context.Context) (number.Exact, error) { return s.before.value(ctx, output) }
	if s.before.silent() {
		before = nil
	}
	return newSignal(s, comps, before), nil
}

// Waveform returns a source's wave as a signal, for differences with answers.
func (s *Solution) Waveform(w Wave) *Signal {
	var comps []component
	for _, d := range w.drives("waveform", new(big.Rat), nil) {
		f := newFraction(d.transform, one, denominator(d.transform), d.factors...)
		comps = append(comps, component{from: d.from, cause: noCause, weight: d.weight, fraction: f})
	}
	return newSignal(s, comps, nil)
}

// networkPlant is a network in one position of its switches.
type networkPlant struct {
	system  *network.System
	sources []driven
	initial map[memory]number.Exact

	mu     sync.Mutex
	memory map[bool][]*row
}

func newNetworkPlant(system *network.System, sources []driven, initial map[memory]number.Exact) *networkPlant {
	return &networkPlant{system: system, sources: sources, initial: initial, memory: map[bool][]*row{}}
}

func (p *networkPlant) memories() []memory { return p.system.Memories() }

func (p *networkPlant) memoryRows(ctx context.Context, first bool) ([]*row, error) {
	p.mu.Lock()
	defer p.mu.Unlock()
	if r, ok := p.memory[first]; ok {
		return r, nil
	}
	outs := make([]network.Output, len(p.system.Memories()))
	for i := range outs {
		outs[i] = p.system.MemoryValue(i)
	}
	r, err := p.rows(ctx, outs, first)
	if err == nil {
		p.memory[first] = r
	}
	return r, err
}

// rows finds the transfers to outputs, all from one factorisation.
func (p *networkPlant) rows(ctx context.Context, outs []network.Output, first bool) ([]*row, error) {
	var cols []network.Column
	memories := 1
	if first {
		cols = append(cols, p.initialColumn())
	} else {
		memories = len(p.system.Memories())
		for i := range memories {
			cols = append(cols, p.system.StateColumn(i))
		}
	}
	elements := p.drivenElements()
	for _, e := range elements {
		c, problem := p.system.InputColumn(e)
		if problem != nil {
			return nil, fmt.Errorf("response: element %d is not an independent source: %s", e, problem)
		}
		cols = append(cols, c)
	}
	h, err := p.system.Responses(ctx, outs, cols)
	var singular *exact.SingularError
	if errors.As(err, &singular) {
		return nil, ErrSingular
	}
	if err != nil {
		return nil, err
	}
	out := make([]*row, len(outs))
	for i := range outs {
		r := &row{sources: map[int]exact.Ratio{}}
		for j := range cols {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			f := h[i][j]
			switch {
			case j >= memories:
				r.sources[elements[j-memories]] = f
			case first:
				r.initial = f
			default:
				r.memories = append(r.memories, f)
			}
		}
		out[i] = r
	}
	return out, nil
}

// drivenElements lists the source elements that are there and can act.
func (p *networkPlant) drivenElements() []int {
	var out []int
	seen := map[int]bool{}
	elements := p.system.Network().Elements
	for _, d := range p.sources {
		if e := d.element; e >= 0 && e < len(elements) && !seen[e] && elements[e].Kind != network.Absent {
			seen[e] = true
			out = append(out, e)
		}
	}
	return out
}

// initialColumn is the right-hand side of the whole initial state.
func (p *networkPlant) initialColumn() network.Column {
	var sum network.Column
	for m, x := range p.initial {
		if i := p.system.MemoryIndex(m); i >= 0 && x.Rat().Sign() != 0 {
			sum = sum.Add(p.system.StateColumn(i).Scale(x.Rat()))
		}
	}
	return sum
}

// past is what was before t = 0.
type past struct {
	plant   *networkPlant
	steady  bool
	initial map[memory]number.Exact

	mu         sync.Mutex
	checked    bool
	consistent bool
}

// newPast prepares the network as it stood until t = 0.
func newPast(setup Setup, sources []driven, initial map[memory]number.Exact) *past {
	system := setup.Before
	if system == nil {
		system = setup.Intervals[0].System
	}
	var standing []driven
	if setup.Steady {
		for _, d := range sources {
			if len(d.wave.Always) > 0 {
				standing = append(standing, driven{d.element, Wave{Always: d.wave.Always}})
			}
		}
	}
	return &past{plant: newNetworkPlant(system, standing, initial), steady: setup.Steady, initial: initial}
}

// silent tells whether everything is zero before t = 0.
func (p *past) silent() bool {
	for _, x := range p.initial {
		if x.Rat().Sign() != 0 {
			return false
		}
	}
	return len(p.plant.sources) == 0
}

// value is an output at 0−. The network as it stood, started from the state at
// 0− with what has stood for ever, answers at 0+ with just what was at 0−, if
// the state agrees with Kirchhoff's laws; otherwise only the memories
// themselves are known.
func (p *past) value(ctx context.Context, output func(*network.System) (network.Output, error)) (number.Exact, error) {
	out, err := output(p.plant.system)
	if err != nil {
		return number.Exact{}, err
	}
	if x, ok := p.memoryOf(out); ok {
		return x, nil
	}
	ok, err := p.agrees(ctx)
	if err != nil {
		return number.Exact{}, err
	}
	if !ok {
		return number.Exact{}, ErrBeforeUndefined
	}
	rows, err := p.plant.rows(ctx, []network.Output{out}, true)
	if err != nil {
		return number.Exact{}, err
	}
	r, impulse := p.start(rows[0])
	if impulse {
		return number.Exact{}, ErrBeforeUndefined
	}
	return number.FromRat(r), nil
}

// start is the right limit at 0 of what a row answers, and whether there is an
// impulse before it.
func (p *past) start(r *row) (*big.Rat, bool) {
	sum := r.initial
	for _, d := range p.plant.sources {
		if h, ok := r.sources[d.element]; ok {
			for _, v := range d.wave.drives("", new(big.Rat), nil) {
				sum = sum.Add(h.Mul(v.transform))
			}
		}
	}
	f := newFraction(sum, one, one)
	return f.initialValue(), !f.impulses.IsZero()
}

// memoryOf recognises an output that is a memory itself.
func (p *past) memoryOf(out network.Output) (number.Exact, bool) {
	if len(out.C) > 0 || len(out.Input) > 0 || len(out.State) > 0 || len(out.G) == 0 {
		return number.Exact{}, false
	}
	for i, m := range p.plant.memories() {
		if sameVector(out.G, p.plant.system.MemoryValue(i).G) {
			return p.initial[m], true
		}
	}
	return number.Exact{}, false
}

func sameVector(a, b exact.Vector) bool {
	if len(a) != len(b) {
		return false
	}
	for _, x := range a {
		found := false
		for _, y := range b {
			found = found || x.Index == y.Index && x.Value.Cmp(y.Value) == 0
		}
		if !found {
			return false
		}
	}
	return true
}

// agrees tells whether the state at 0− is one the network as it stood can be in.
func (p *past) agrees(ctx context.Context) (bool, error) {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.checked {
		return p.consistent, nil
	}
	rows, err := p.plant.memoryRows(ctx, true)
	if err != nil {
		return false, err
	}
	p.checked, p.consistent = true, true
	for i, m := range p.plant.memories() {
		r, impulse := p.start(rows[i])
		p.consistent = p.consistent && !impulse && r.Cmp(p.initial[m].Rat()) == 0
	}
	return p.consistent, nil
}
