package float

import (
	"context"
	"errors"
	"math"
)

// ErrSteps tells that a response would take too many steps: something in the
// network moves far too fast, without dying out, for the range of time asked
// about.
var ErrSteps = errors.New("the response moves too fast for the range of time: it would take too many steps")

// motion is a state on its way, once as it is taken to be, in half steps, and
// once in whole steps: the two drift apart as far as steps are too long or
// numbers too short.
type motion struct {
	fine, coarse []float64
	// sources says whether the sources act on it.
	sources bool
	// memories are their values after the last step, fine and coarse.
	memories [2][]float64
	drift    []float64 // of the readings; halved with every step
	size     []float64 // the largest that went into the readings in the segment
}

// march advances motions through a segment, in which neither the network nor
// what sources do changes. Steps are the lengths between the instants asked
// for, halved as often as needed.
type march struct {
	solver   *Solver
	start    float64 // of the segment
	drives   []drive
	readings []reading
	motions  []*motion
	memories []form    // the values that the network carries
	largest  []float64 // the largest value of each so far
	weight   []float64 // of a memory's square in the energy, roughly
	energy   float64   // the largest so far
	inputs   []float64 // the largest value of each source so far

	steppers map[float64]*stepper
	recent   []float64 // lengths of steps, the last used last
	now, h   float64   // h: the last step, 0 before the first
	patience int       // steps until a longer one is tried
	failures int       // of longer ones
	taken    int
	noise    float64 // what attempt finds where steps are far too short to be wrong

	x, q, total  []float64
	ahead, next  []float64 // after the step that was attempted: unknowns, state
	y            []float64 // and readings
	value, after []float64 // memories after a whole step and after two halves
	reached      []reached // the readings after each of the first steps
}

// form is a sparse functional of the unknowns.
type form struct {
	index []int32
	value []float64
}

func (f form) of(x []float64) (sum float64) {
	for k, i := range f.index {
		sum += f.value[k] * x[i]
	}
	return sum
}

// reached are readings at a time after the start of a segment: [motion][reading].
// drift bounds how far fine and coarse are apart, for a few steps back too, so
// that no crossing of the two is taken for agreement.
type reached struct {
	after               float64
	fine, coarse, drift [][]float64
}

const (
	// stepTolerance is the relative error of a whole step that is accepted; of
	// the two half steps it is some thousand times smaller.
	stepTolerance = 1e-11
	// faint is how small a memory's value, beside what the greatest energy so
	// far would make of it, still counts by its own size.
	faint = 1e-3
	// mostNoise is how much of what attempt finds can be noise.
	mostNoise = 1e5
	// mostSteps bounds the number of steps in a segment.
	mostSteps = 4_000_000
	// mostHalvings bounds how often a length is halved.
	mostHalvings = 70
	// earlySteps is after how many steps readings are kept, to find what they
	// were at the very start.
	earlySteps = 48
)

// newMarch prepares a segment that begins at start with motions under way.
func newMarch(s *Solver, start float64, drives []drive, readings []reading, motions []*motion) *march {
	n, k := s.m.n, len(s.memories)
	m := &march{
		solver: s, start: start, now: start, drives: drives, readings: readings, motions: motions,
		memories: s.memories, weight: s.weights, largest: make([]float64, k), inputs: make([]float64, len(drives)),
		steppers: map[float64]*stepper{},
		x:        make([]float64, n), q: make([]float64, n), total: make([]float64, n),
		ahead: make([]float64, n), next: make([]float64, n), y: make([]float64, len(readings)),
		value: make([]float64, k), after: make([]float64, k),
	}
	return m
}

// to advances to the instant t. The first step of the segment has the length
// first at most. With early set it stops after so many steps.
func (m *march) to(ctx context.Context, t, first float64, early bool) (at reached, err error) {
	length, begin := t-m.now, m.now
	longest := m.h
	if longest == 0 {
		longest = first
	}
	halvings := 0
	for math.Ldexp(length, -halvings) > longest*(1+1e-9) && halvings < mostHalvings {
		halvings++
	}
	for position := uint64(0); position < uint64(1)<<halvings; {
		h := math.Ldexp(length, -halvings)
		m.now = begin + float64(position)*h
		size, err := m.attempt(ctx, h)
		if err != nil {
			return at, err
		}
		if m.taken < 4 {
			m.noise = max(m.noise, min(size, mostNoise))
		}
		if !(size <= max(1, 4*m.noise)) {
			if halvings++; halvings > mostHalvings {
				return at, ErrSteps
			}
			position *= 2
			m.failures = min(m.failures+1, 10)
			m.patience = 4 << m.failures
			continue
		}
		if at, err = m.accept(h); err != nil {
			return at, err
		}
		m.h = h
		position++
		if early && m.taken >= earlySteps {
			return at, nil
		}
		m.patience--
		if position&1 == 0 && halvings > 0 && size < max(0.1, 2*m.noise) && m.patience <= 0 {
			halvings--
			position /= 2
		}
		if m.patience < -64 {
			m.failures = 0
		}
	}
	m.now = t
	return at, nil
}

// stepper returns the factors for steps of length h; a few lengths are kept.
func (m *march) stepper(ctx context.Context, h float64) (*stepper, error) {
	if s := m.steppers[h]; s != nil {
		for k, r := range m.recent {
			if r == h {
				copy(m.recent[k:], m.recent[k+1:])
				m.recent[len(m.recent)-1] = h
			}
		}
		return s, nil
	}
	s, err := m.solver.stepper(ctx, h)
	if err != nil {
		return nil, err
	}
	m.steppers[h] = s
	m.recent = append(m.recent, h)
	for len(m.recent) > 3 || len(m.recent) > 2 && len(m.recent)*s.entries() > maxEntries {
		delete(m.steppers, m.recent[0])
		m.recent = m.recent[1:]
	}
	if 2*s.entries() > maxEntries {
		return nil, ErrMemory
	}
	return s, nil
}

// together is the state of all motions.
func (m *march) together() (state []float64, drives []drive) {
	if len(m.motions) == 1 {
		if m.motions[0].sources {
			drives = m.drives
		}
		return m.motions[0].fine, drives
	}
	clear(m.total)
	for _, o := range m.motions {
		if o.sources {
			drives = m.drives
		}
		for i, v := range o.fine {
			m.total[i] += v
		}
	}
	return m.total, drives
}

// attempt compares a step of length h with two of half the length, all motions
// together, and returns the difference relative to what is tolerated.
func (m *march) attempt(ctx context.Context, h float64) (float64, error) {
	if err := ctx.Err(); err != nil {
		return 0, err
	}
	whole, err := m.stepper(ctx, h)
	if err != nil {
		return 0, err
	}
	half, err := m.stepper(ctx, h/2)
	if err != nil {
		return 0, err
	}
	state, drives := m.together()
	whole.step(state, m.now, drives, m.x, nil, nil)
	for k, f := range m.memories {
		m.value[k] = f.of(m.x)
	}
	half.step(state, m.now, drives, m.x, nil, nil)
	m.solver.m.state(m.x, m.q)
	half.step(m.q, m.now+h/2, drives, m.x, m.readings, m.y)
	copy(m.ahead, m.x)
	m.solver.m.state(m.x, m.next)
	for k, f := range m.memories {
		m.after[k] = f.of(m.x)
	}
	return m.difference(whole, drives), nil
}

// difference compares the memories after a whole step and after two halves, and
// what a step makes of the sources with what these do.
func (m *march) difference(whole *stepper, drives []drive) float64 {
	energy := 0.0
	for k, v := range m.after {
		energy += m.weight[k] * v * v
	}
	energy = max(energy, m.energy)
	worst := 0.0
	for k, v := range m.after {
		scale := max(m.largest[k], math.Abs(v))
		if m.weight[k] > 0 {
			scale = max(scale, faint*math.Sqrt(energy/m.weight[k]))
		}
		if r := math.Abs(v-m.value[k]) / (stepTolerance*scale + floor); !(r <= worst) {
			worst = r
		}
	}
	for k := range drives {
		d := &drives[k]
		u := d.wave.value(d.start, m.now+whole.h)
		scale := max(m.inputs[k], math.Abs(u), math.Abs(d.wave.value(d.start, m.now)))
		if r := math.Abs(whole.echo(d, m.now)-u) / (1e3*stepTolerance*scale + floor); !(r <= worst) {
			worst = r
		}
	}
	return worst
}

// accept takes the step that was attempted.
func (m *march) accept(h float64) (reached, error) {
	if m.taken++; m.taken > mostSteps {
		return reached{}, ErrSteps
	}
	energy := 0.0
	for k, v := range m.after {
		m.largest[k] = max(m.largest[k], math.Abs(v))
		energy += m.weight[k] * v * v
	}
	m.energy = max(m.energy, energy)
	whole, half := m.steppers[h], m.steppers[h/2]
	at := reached{after: m.now + h - m.start}
	for _, o := range m.motions {
		var drives []drive
		if o.sources {
			drives = m.drives
		}
		coarse, fine := make([]float64, len(m.readings)), make([]float64, len(m.readings))
		whole.step(o.coarse, m.now, drives, m.x, m.readings, coarse)
		m.solver.m.state(m.x, o.coarse)
		m.remember(o, 1)
		if len(m.motions) == 1 { // the very one that was attempted
			copy(fine, m.y)
			o.fine, m.next = m.next, o.fine
			copy(m.x, m.ahead)
		} else {
			half.step(o.fine, m.now, drives, m.x, nil, nil)
			m.solver.m.state(m.x, o.fine)
			half.step(o.fine, m.now+h/2, drives, m.x, m.readings, fine)
			m.solver.m.state(m.x, o.fine)
		}
		m.remember(o, 0)
		at.coarse, at.fine, at.drift = append(at.coarse, coarse), append(at.fine, fine), append(at.drift, m.apart(o, fine, coarse))
	}
	for k := range m.drives {
		m.inputs[k] = max(m.inputs[k], math.Abs(m.drives[k].wave.value(m.start, m.now+h)))
	}
	if len(m.reached) < earlySteps {
		m.reached = append(m.reached, at)
	}
	return at, nil
}

// apart bounds by how much the fine readings may be wrong: a few times what the
// coarse ones are apart from them, and the rounding errors of a step, by chance
// accumulated.
func (m *march) apart(o *motion, fine, coarse []float64) []float64 {
	if o.drift == nil {
		o.drift, o.size = make([]float64, len(fine)), make([]float64, len(fine))
	}
	const perStep = 1e3 * unit // the residues of r(z) over its poles sum up to so much
	out := make([]float64, len(fine))
	for j := range fine {
		r := &m.readings[j]
		size := math.Abs(fine[j])
		for k, i := range r.index {
			size += math.Abs(r.g[k] * m.x[i])
		}
		o.size[j] = max(o.size[j], size)
		o.drift[j] = max(math.Abs(fine[j]-coarse[j]), o.drift[j]/2)
		out[j] = 4*o.drift[j] + perStep*math.Sqrt(float64(m.taken))*o.size[j] + floor
	}
	return out
}

// remember notes the memories in x.
func (m *march) remember(o *motion, which int) {
	if len(o.memories[which]) != len(m.memories) {
		o.memories[which] = make([]float64, len(m.memories))
	}
	for k, f := range m.memories {
		o.memories[which][k] = f.of(m.x)
	}
}

// atStart returns the limits at the start of the segment of the readings after
// its first steps: their polynomial through a few of them in a row, of those
// that agree best with the polynomials of one less. The very first steps are
// left out where there are more, for an impulse at the start may show in them.
func (m *march) atStart() reached {
	points := m.reached
	if skip := min(2, len(points)-1); skip > 0 {
		points = points[skip:]
	}
	at := reached{}
	for k := range m.motions {
		fine, drift := make([]float64, len(m.readings)), make([]float64, len(m.readings))
		for j := range fine {
			fine[j], drift[j] = startOf(points, k, j)
		}
		at.fine, at.drift = append(at.fine, fine), append(at.drift, drift)
	}
	return at
}

// startOf extrapolates reading j of motion k to the start, and bounds the error
// by the difference of two extrapolations and what the drift of the readings
// makes of it. Earlier readings are surer, later ones less noisy: a later
// window is taken where it makes sharper what the earlier ones say.
func startOf(points []reached, k, j int) (value, radius float64) {
	radius = math.Inf(1)
	const most = 6
	for first := range points {
		for count := 1; count <= most && first+count <= len(points); count++ {
			window := points[first : first+count]
			v, noise := extrapolate(window, k, j)
			r := math.Inf(1)
			if count > 1 {
				less, _ := extrapolate(window[:count-1], k, j)
				r = math.Abs(v-less) + noise
			} else if len(points) == 1 {
				r = math.Abs(v) + noise
			}
			if r < radius && math.Abs(v-value) <= radius {
				value, radius = v, r
			}
		}
	}
	return value, radius
}

// extrapolate is the value at zero of the polynomial through readings, and how
// much of their drift comes with it (Lagrange).
func extrapolate(points []reached, k, j int) (value, noise float64) {
	for a := range points {
		f := 1.0
		for b := range points {
			if a != b {
				f *= points[b].after / (points[b].after - points[a].after)
			}
		}
		value += f * points[a].fine[k][j]
		noise += math.Abs(f) * points[a].drift[k][j]
	}
	return value, noise
}
