package float

import (
	"context"
	"errors"
	"math"
	"slices"

	"portlight/analyze/exact"
	"portlight/analyze/network"
)

// ErrIntervals tells that the intervals of a setup are not in ascending order
// from t = 0 on.
var ErrIntervals = errors.New("intervals must begin at t = 0 and ascend")

// ErrTime tells that a response was asked for before t = 0, or at no time.
var ErrTime = errors.New("responses are known from t = 0 on")

// Interval is a network that holds from Start (s) on, until the next interval
// begins. All networks of a Setup have the same elements by index.
type Interval struct {
	Start  float64
	Solver *Solver
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
	Value          float64
}

// Setup is what happens to a network: the position of its switches interval by
// interval, its sources and the state at 0−. Sources that are not listed are
// zero.
type Setup struct {
	Intervals []Interval
	Sources   []Source
	Initial   []Initial
}

// Value is what an output shows at an instant, in the output's unit: ZeroInput
// is due to the state at 0−, ZeroState to the sources, Total their sum. Each is
// within its radius of the true value, as far as comparing two computations
// with steps of different lengths and differently rounded entries can tell. A
// radius is +Inf right after a jump where double precision cannot tell what
// moved and died out there.
type Value struct {
	Total, ZeroInput, ZeroState                   float64
	TotalRadius, ZeroInputRadius, ZeroStateRadius float64
}

// Response computes how a network answers in time, without its natural
// frequencies: by steps with an A-stable approximant of the exponential of high
// order. It is immutable and safe for concurrent use.
type Response struct {
	setup Setup
}

// NewResponse checks a setup. The error is ErrIntervals, or a *network.Problem's
// for a source or memory that is not there.
func NewResponse(setup Setup) (*Response, error) {
	if len(setup.Intervals) == 0 || setup.Intervals[0].Start != 0 {
		return nil, ErrIntervals
	}
	for k, v := range setup.Intervals {
		if v.Solver == nil || k > 0 && !(setup.Intervals[k-1].Start < v.Start) {
			return nil, ErrIntervals
		}
		for _, s := range setup.Sources {
			if s.Element < 0 || s.Element >= len(v.Solver.system.Network().Elements) {
				return nil, ErrSource
			}
			if _, problem := v.Solver.system.InputColumn(s.Element); problem != nil {
				return nil, ErrSource
			}
		}
	}
	first := setup.Intervals[0].Solver.system
	for _, x := range setup.Initial {
		if first.MemoryIndex(network.Memory{Element: x.Element, Index: x.Index}) < 0 {
			return nil, ErrMemoryValue
		}
	}
	return &Response{setup}, nil
}

// ErrSource tells that an element is not an independent source, ErrMemoryValue
// that an element has no initial value.
var (
	ErrSource      = errors.New("the element is not an independent source")
	ErrMemoryValue = errors.New("the element has no initial value")
)

// Values returns outputs at instants t ≥ 0, as [output][instant]: the limits
// from the right, where there are jumps. The outputs are given for the network
// of every interval. The error is ErrTime, ErrSteps, ErrSingular, ErrRange,
// ErrMemory, one of an output, or the context's.
func (r *Response) Values(ctx context.Context, times []float64, outputs ...func(*network.System) (network.Output, error)) ([][]Value, error) {
	w := &walk{Response: r, outputs: outputs, at: make(map[float64][]Value)}
	for _, t := range times {
		if !(t >= 0) || math.IsInf(t, 0) {
			return nil, ErrTime
		}
		w.at[t] = nil
		w.times = append(w.times, t)
	}
	slices.Sort(w.times)
	w.times = slices.Compact(w.times)
	if err := w.run(ctx); err != nil {
		return nil, err
	}
	out := make([][]Value, len(outputs))
	for i := range outputs {
		for _, t := range times {
			out[i] = append(out[i], w.at[t][i])
		}
	}
	return out, nil
}

// walk is one passage from segment to segment.
type walk struct {
	*Response
	outputs []func(*network.System) (network.Output, error)
	times   []float64 // ascending
	at      map[float64][]Value
	motions []*motion
}

// breaks lists where segments begin, up to the last time asked for.
func (w *walk) breaks() []float64 {
	var list []float64
	for _, v := range w.setup.Intervals {
		list = append(list, v.Start)
	}
	for _, s := range w.setup.Sources {
		for _, p := range s.Wave.Pieces {
			list = append(list, p.From)
		}
	}
	slices.Sort(list)
	list = slices.Compact(list)
	last := w.times[len(w.times)-1]
	for k, t := range list {
		if t > last {
			return list[:k]
		}
	}
	return list
}

func (w *walk) run(ctx context.Context) error {
	if len(w.times) == 0 {
		return nil
	}
	breaks := w.breaks()
	if len(breaks) > 0 && breaks[0] < 0 {
		return ErrTime
	}
	interval := 0
	solver := w.setup.Intervals[0].Solver
	w.begin(solver)
	for k, start := range breaks {
		if next := interval + 1; next < len(w.setup.Intervals) && w.setup.Intervals[next].Start == start {
			interval = next
			w.handOver(solver, w.setup.Intervals[next].Solver)
			solver = w.setup.Intervals[next].Solver
		}
		end := math.Inf(1)
		if k+1 < len(breaks) {
			end = breaks[k+1]
		}
		if err := w.segment(ctx, solver, start, end); err != nil {
			return err
		}
	}
	return nil
}

// begin sets the state at 0−.
func (w *walk) begin(s *Solver) {
	values := make([]float64, len(s.memories))
	any := false
	for _, x := range w.setup.Initial {
		if x.Value != 0 {
			any = true
			values[s.system.MemoryIndex(network.Memory{Element: x.Element, Index: x.Index})] += x.Value
		}
	}
	if any {
		o := &motion{}
		o.fine, o.jump = s.recall(values)
		o.coarse = slices.Clone(o.fine)
		w.motions = append(w.motions, o)
	}
	if len(w.setup.Sources) > 0 || !any {
		w.motions = append(w.motions, &motion{fine: make([]float64, s.m.n), coarse: make([]float64, s.m.n), sources: true})
	}
}

// add adds factor times the form to a vector.
func (f form) add(to []float64, factor float64) {
	for k, i := range f.index {
		to[i] += factor * f.value[k]
	}
}

func newForm(v exact.Vector) (form, error) {
	var f form
	for _, c := range v {
		d, ok := doubleOf(c.Value)
		if !ok {
			return f, ErrRange
		}
		f.index, f.value = append(f.index, int32(c.Index)), append(f.value, d.hi)
	}
	return f, nil
}

// segment passes through a stretch of time in which nothing changes suddenly.
func (w *walk) segment(ctx context.Context, s *Solver, start, end float64) error {
	drives, err := w.drives(s, start)
	if err != nil {
		return err
	}
	readings, err := w.readings(s, len(drives))
	if err != nil {
		return err
	}
	for _, o := range w.motions {
		if o.sources {
			o.strike(drives, start)
		}
	}
	m := newMarch(s, start, drives, readings, w.motions)
	first := s.shortest()
	begins := false
	for _, t := range w.times {
		switch {
		case t == start:
			begins = true
		case t > start && t < end:
			at, err := m.to(ctx, t-start, first, false)
			if err != nil {
				return err
			}
			w.at[t] = w.valuesAt(at)
		}
	}
	if !math.IsInf(end, 1) {
		if _, err := m.to(ctx, end-start, first, false); err != nil {
			return err
		}
	} else if begins && m.taken == 0 {
		if _, err := m.to(ctx, math.Ldexp(first, earlySteps), first, true); err != nil {
			return err
		}
	}
	if begins {
		w.at[start] = w.valuesAt(m.atStart())
	}
	return nil
}

// drives lists the sources of a network.
func (w *walk) drives(s *Solver, start float64) ([]drive, error) {
	var out []drive
	for k := range w.setup.Sources {
		c, problem := s.system.InputColumn(w.setup.Sources[k].Element)
		if problem != nil {
			return nil, ErrSource
		}
		f, err := newForm(c.RHS)
		if err != nil {
			return nil, err
		}
		out = append(out, drive{f.index, f.value, &w.setup.Sources[k].Wave, start})
	}
	return out, nil
}

// readings turns the outputs into functionals of a network.
func (w *walk) readings(s *Solver, drives int) ([]reading, error) {
	var out []reading
	for _, f := range w.outputs {
		o, err := f(s.system)
		if err != nil {
			return nil, err
		}
		v, err := outputVector(o)
		if err != nil {
			return nil, err
		}
		r := reading{index: v.index, input: make([]float64, drives)}
		for k := range v.index {
			r.g, r.c = append(r.g, v.g[k].hi), append(r.c, v.c[k].hi)
		}
		for k, src := range w.setup.Sources {
			if x := o.Input[src.Element]; x != nil {
				d, ok := doubleOf(x)
				if !ok {
					return nil, ErrRange
				}
				r.input[k] = d.hi
			}
		}
		out = append(out, r)
	}
	return out, nil
}

// shortest is a time in which nothing in the network moves: a small part of the
// quickest time that two values in the equations can make, C/G, C·R, L·G, L/R,
// √(LC) or an inner state's own, divided by the largest gain.
func (s *Solver) shortest() float64 {
	capacitance, inductance, inner := math.Inf(1), math.Inf(1), math.Inf(1)
	for k, m := range s.system.Memories() {
		switch s.system.Network().Elements[m.Element].Kind {
		case network.Capacitor:
			capacitance = min(capacitance, s.weights[k])
		case network.Inductor:
			inductance = min(inductance, s.weights[k])
		default:
			for _, v := range s.states[k].value {
				inner = min(inner, math.Abs(v))
			}
		}
	}
	least, most := 1.0, 1.0 // conductances, and resistances the other way round
	gain := 1.0
	for j := range s.m.n {
		for k := s.m.start[j]; k < s.m.start[j+1]; k++ {
			g := math.Abs(s.m.g[k].hi)
			switch row, col := s.kind[s.m.row[k]], s.kind[j]; {
			case g == 0:
			case row != col:
				gain = max(gain, g)
			case row == 0:
				least, most = min(least, g), max(most, g)
			default:
				least, most = min(least, 1/g), max(most, 1/g)
			}
		}
	}
	quickest := min(capacitance/most, inductance*least, inner/most, inner*least)
	if lc := math.Sqrt(inductance * capacitance); lc < quickest { // neither is infinite
		quickest = lc
	}
	if math.IsInf(quickest, 1) {
		return 1
	}
	return 1e-3 * quickest / gain
}

// valuesAt sums motions up.
func (w *walk) valuesAt(at reached) []Value {
	out := make([]Value, len(w.outputs))
	for j := range out {
		v := &out[j]
		for k, o := range w.motions {
			x := at.fine[k][j]
			r := at.drift[k][j]
			if o.sources {
				v.ZeroState, v.ZeroStateRadius = x, r
			} else {
				v.ZeroInput, v.ZeroInputRadius = x, r
			}
			v.Total += x
			v.TotalRadius += r
		}
		v.TotalRadius += unit * math.Abs(v.Total)
	}
	return out
}

// strike adds the impulses of sources at an instant.
func (o *motion) strike(drives []drive, at float64) {
	for _, d := range drives {
		weight := d.wave.impulse(at)
		if weight == 0 {
			continue
		}
		if o.jump == nil {
			o.jump = make([]float64, len(o.fine))
		}
		for k, i := range d.index {
			o.jump[i] += weight * d.value[k]
		}
	}
}

// handOver carries memories from one network to the next.
func (w *walk) handOver(from, to *Solver) {
	for _, o := range w.motions {
		values := make([]float64, len(to.memories))
		drift := make([]float64, len(to.memories))
		for k, m := range to.system.Memories() {
			if i := from.system.MemoryIndex(m); i >= 0 {
				values[k] = o.memories[0][i]
				drift[k] = o.memories[1][i] - o.memories[0][i]
			}
		}
		o.fine, o.jump = to.recall(values)
		// What coarse is apart in goes with its solution; what conflicts with
		// the network in it is small beyond notice.
		o.coarse, _ = to.recall(drift)
		for i, v := range o.fine {
			o.coarse[i] += v
		}
	}
}
