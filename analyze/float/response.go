package float

import (
	"context"
	"math"
	"slices"

	"portlight/analyze/exact"
	"portlight/analyze/network"
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
