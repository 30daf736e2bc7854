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
	fine, coarse []float64 // solutions
	// jump is what charges and fluxes, at the start of a segment, are more than
	// those of the solutions; nil for nothing.
	jump []float64
	// sources says whether the sources act on it.
	sources bool
	// memories are their values after the last step, fine and coarse.
	memories [2][]float64
	// Of the readings: how far fine and coarse were apart lately, what single
	// steps differed by, and the size of what went into them.
	drift, slips, size []float64

	// What was attempted: the solution, the memories after a whole step and after
	// two halves, the readings likewise, and the sizes of what goes into them.
	next                    []float64
	valueWhole, valueHalves []float64
	rounding                []float64 // of the memories
	whole, halves           []float64
	parts, around           []float64
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

	steppers  map[float64]*stepper
	recent    []float64 // lengths of steps, the last used last
	now, h    float64   // time since the start; the last step, 0 before the first
	patience  int       // steps until a longer one is tried
	failures  int       // of longer ones
	taken     int
	falsified float64 // sum of the squares of what attempt found, relative to the memories
	least     float64 // what is shorter is too short for double precision
	forced    bool    // steps must be taken even if they are too short
	noise     float64 // what attempt finds where steps are far too short to be wrong

	x       []float64 // scratch
	reached []reached // the readings after each of the first steps
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
// drift bounds their errors.
type reached struct {
	after       float64
	fine, drift [][]float64
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
	// beyond is where a response that grows without end is given up.
	beyond = 1e100
	// mostSteps bounds the number of steps in a segment.
	mostSteps = 1_000_000
	// mostHalvings bounds how often a length is halved.
	mostHalvings = 62
	// earlySteps is after how many steps readings are kept, to find what they
	// were at the very start.
	earlySteps = 48
)

// newMarch prepares a segment that begins at start with motions under way.
func newMarch(s *Solver, start float64, drives []drive, readings []reading, motions []*motion) *march {
	n, k, j := s.m.n, len(s.memories), len(readings)
	m := &march{
		solver: s, start: start, drives: drives, readings: readings, motions: motions,
		memories: s.memories, weight: s.weights, largest: make([]float64, k), inputs: make([]float64, len(drives)),
		steppers: map[float64]*stepper{},
		x:        make([]float64, n),
	}
	for _, o := range motions {
		o.next, o.valueWhole, o.valueHalves, o.rounding = make([]float64, n), make([]float64, k), make([]float64, k), make([]float64, k)
		o.drift, o.slips, o.size = make([]float64, j), make([]float64, j), make([]float64, j)
		o.whole, o.halves, o.parts, o.around = make([]float64, j), make([]float64, j), make([]float64, j), make([]float64, j)
		o.memories = [2][]float64{make([]float64, k), make([]float64, k)}
	}
	return m
}

// to advances to a time t after the start of the segment. The first step of the
// segment has the length first at most. With early set it stops after so many
// steps.
func (m *march) to(ctx context.Context, t, first float64, early bool) (at reached, err error) {
	if m.taken == 0 {
		if at, err = m.launch(ctx, t-m.now, first); err != nil {
			return at, err
		}
		if math.Abs(t-m.now) <= 1e-9*m.h {
			m.now = t
			return at, nil
		}
	}
	p := newPace(m.now, t, m.h)
	for !p.done() {
		m.now = p.now()
		size, err := m.attempt(ctx, p.h())
		if errors.Is(err, errShort) {
			if err = m.tooShort(p); err == nil {
				continue
			}
		}
		if err != nil {
			return at, err
		}
		if !(size <= max(1, 4*m.noise)) {
			if err := m.refuse(p, size); err != nil {
				return at, err
			}
			continue
		}
		m.falsified += size * size * stepTolerance * stepTolerance
		if at, err = m.accept(p.h()); err != nil {
			return at, err
		}
		m.h = p.h()
		p.advance()
		if early && m.taken >= earlySteps {
			return at, nil
		}
		m.quicken(p, size)
	}
	m.now = t
	return at, nil
}

// errShort tells that steps are so short that conductances are lost beside
// s·C in double precision.
var errShort = errors.New("float: steps are too short")

// mostWrong is the greatest error of solutions for a step at the start, if
// longer ones do better.
const mostWrong = 1e-7

// stepper returns the factors for steps of length h; a few lengths are kept. It
// fails with errShort where h is too short.
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
	if h < m.least && !m.forced {
		return nil, errShort
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

// drivesOf lists the sources that act on a motion.
func (m *march) drivesOf(o *motion) []drive {
	if o.sources {
		return m.drives
	}
	return nil
}

// attempt compares a step of length h with two of half the length and returns
// the difference relative to what is tolerated.
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
	for _, o := range m.motions {
		drives := m.drivesOf(o)
		copy(m.x, o.fine)
		m.advance(whole, m.x, nil, m.now, drives, o.whole, o.valueWhole)
		copy(o.next, o.fine)
		m.advance(half, o.next, nil, m.now, drives, nil, nil)
		m.advance(half, o.next, nil, m.now+h/2, drives, o.halves, o.valueHalves)
		m.measure(o, o.next)
	}
	return m.difference(whole, m.now), nil
}

// difference compares the memories after a whole step and after two halves, and
// what a step from now on makes of the sources with what these do.
func (m *march) difference(whole *stepper, now float64) float64 {
	energy := max(m.energy, m.energyOf())
	worst := 0.0
	for k := range m.memories {
		scale, d, rounding := m.largest[k], 0.0, floor
		for _, o := range m.motions {
			rounding += o.rounding[k]
			scale = max(scale, math.Abs(o.valueHalves[k]))
			d += math.Abs(o.valueHalves[k] - o.valueWhole[k])
		}
		if m.weight[k] > 0 {
			scale = max(scale, faint*math.Sqrt(energy/m.weight[k]))
		}
		if r := d / (stepTolerance*scale + rounding); !(r <= worst) {
			worst = r
		}
	}
	if !m.driven() {
		return worst
	}
	for k := range m.drives {
		d := &m.drives[k]
		u := d.wave.value(d.start, now+whole.h)
		scale := max(m.inputs[k], math.Abs(u), math.Abs(d.wave.value(d.start, now)))
		if r := math.Abs(whole.echo(d, now)-u) / (1e3*stepTolerance*scale + floor); !(r <= worst) {
			worst = r
		}
	}
	return worst
}

func (m *march) driven() bool {
	for _, o := range m.motions {
		if o.sources {
			return true
		}
	}
	return false
}

// energyOf is about the energy after the step that was attempted.
func (m *march) energyOf() (sum float64) {
	for k, w := range m.weight {
		v := 0.0
		for _, o := range m.motions {
			v = max(v, math.Abs(o.valueHalves[k]))
		}
		sum += w * v * v
	}
	return sum
}

// accept takes the step that was attempted.
func (m *march) accept(h float64) (reached, error) {
	if m.taken++; m.taken > mostSteps {
		return reached{}, ErrSteps
	}
	for _, o := range m.motions {
		for _, v := range o.valueHalves {
			if math.Abs(v) > beyond {
				return reached{}, ErrRange
			}
		}
	}
	m.energy = max(m.energy, m.energyOf())
	whole := m.steppers[h]
	at := reached{after: m.now + h}
	for _, o := range m.motions {
		coarse := make([]float64, len(m.readings))
		m.advance(whole, o.coarse, nil, m.now, m.drivesOf(o), coarse, o.memories[1])
		copy(o.memories[0], o.valueHalves)
		for k := range m.memories {
			m.largest[k] = max(m.largest[k], math.Abs(o.valueHalves[k]))
		}
		o.fine, o.next = o.next, o.fine
		at.fine, at.drift = append(at.fine, append([]float64(nil), o.halves...)), append(at.drift, m.apart(o, coarse))
	}
	for k := range m.drives {
		m.inputs[k] = max(m.inputs[k], math.Abs(m.drives[k].wave.value(m.start, m.now+h)))
	}
	if len(m.reached) < earlySteps {
		m.reached = append(m.reached, at)
	}
	return at, nil
}

// apart bounds by how much the readings may be wrong: a few times what the
// coarse ones are apart from them, what single steps differ by in them, and what
// all steps together have falsified the memories by, and rounding errors, if
// these are at random.
func (m *march) apart(o *motion, coarse []float64) []float64 {
	const few = 24
	random := math.Sqrt(m.falsified)
	rounding := 16 * unit * math.Sqrt(float64(m.taken+16))
	out := make([]float64, len(coarse))
	for j := range coarse {
		o.size[j] = max(o.parts[j], o.size[j]/2)
		o.drift[j] = max(math.Abs(o.halves[j]-coarse[j]), o.drift[j]/2)
		o.slips[j] = max(math.Abs(o.halves[j]-o.whole[j]), o.slips[j]/2)
		out[j] = few*(o.drift[j]+o.slips[j]+random*o.size[j]+rounding*o.around[j]) + floor
	}
	return out
}
