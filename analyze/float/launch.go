package float

import (
	"context"
	"math"
	"slices"
)

// launchSteps is how many equal steps are made at the start of a segment.
const launchSteps = 4

// launched is the result of the first steps.
type launched struct {
	h, size float64
	motions []launchedMotion
	reached []reached
}

type launchedMotion struct {
	fine, coarse []float64
	memories     [2][]float64

	drift, slips, size []float64
}

// launch makes the first steps of a segment, no longer than length together.
// Where charges or fluxes that conflict with the network make impulses there,
// these leave a trace in the first step or two, and rounding errors that grow
// as steps get shorter. So a few steps are made at once and compared with twice
// as many of half the length; where they disagree longer ones are tried, as
// long as that helps. It returns the readings after them.
func (m *march) launch(ctx context.Context, length, first float64) (reached, error) {
	h, err := m.usable(ctx, min(first, length/launchSteps), length/launchSteps)
	if err != nil {
		return reached{}, err
	}
	best, err := m.tryLaunch(ctx, h)
	if err != nil {
		return reached{}, err
	}
	early := best.reached
	for best.size > 1 && 8*h*launchSteps <= length {
		h *= 8
		next, err := m.tryLaunch(ctx, h)
		if err != nil {
			return reached{}, err
		}
		if next.size > 1e3*best.size {
			break
		}
		if next.size < best.size {
			best = next
			early = append(early, next.reached...)
		}
	}
	for k, o := range m.motions {
		l := best.motions[k]
		o.fine, o.coarse, o.memories, o.jump = l.fine, l.coarse, l.memories, nil
		o.drift, o.slips, o.size = l.drift, l.slips, l.size
		copy(o.valueHalves, l.memories[0])
		for i, v := range l.memories[0] {
			m.largest[i] = max(m.largest[i], math.Abs(v))
		}
	}
	m.energy = m.energyOf()
	m.reached = early
	m.h, m.taken = best.h, launchSteps
	m.now += launchSteps * best.h
	m.noise = min(best.size, mostNoise)
	m.falsified = m.noise * m.noise * stepTolerance * stepTolerance
	return best.reached[len(best.reached)-1], nil
}

// usable lengthens a first step, up to the longest, as long as conductances are
// lost beside s·C and longer steps lose less.
func (m *march) usable(ctx context.Context, h, longest float64) (float64, error) {
	half, err := m.stepper(ctx, h/2)
	if err != nil {
		return 0, err
	}
	for half.wrong > mostWrong && h < longest {
		next, err := m.stepper(ctx, min(8*h, longest)/2)
		if err != nil {
			return 0, err
		}
		if next.wrong > half.wrong/2 {
			break
		}
		half, h = next, min(8*h, longest)
		m.least = h / 2
	}
	return h, nil
}

// tryLaunch makes the first steps with length h and leaves the motions alone.
func (m *march) tryLaunch(ctx context.Context, h float64) (*launched, error) {
	whole, err := m.stepper(ctx, h)
	if err != nil {
		return nil, err
	}
	half, err := m.stepper(ctx, h/2)
	if err != nil {
		return nil, err
	}
	out := &launched{h: h, reached: make([]reached, launchSteps)}
	j := len(m.readings)
	for _, o := range m.motions {
		drives := m.drivesOf(o)
		trial := append([]float64(nil), o.fine...)
		l := launchedMotion{fine: append([]float64(nil), o.fine...), coarse: append([]float64(nil), o.coarse...)}
		l.memories = [2][]float64{make([]float64, len(m.memories)), make([]float64, len(m.memories))}
		coarse := make([]float64, j)
		for k := range launchSteps {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			now := m.now + float64(k)*h
			jump := o.jump
			if k > 0 {
				jump = nil
			}
			if k == launchSteps/2 { // an impulse has left no trace in what follows
				o.forget()
			}
			m.advance(whole, trial, jump, now, drives, o.whole, o.valueWhole)
			m.advance(whole, l.coarse, jump, now, drives, coarse, l.memories[1])
			m.advance(half, l.fine, jump, now, drives, nil, nil)
			m.advance(half, l.fine, nil, now+h/2, drives, o.halves, l.memories[0])
			m.measure(o, l.fine)
			at := &out.reached[k]
			at.after = float64(k+1) * h
			at.fine, at.drift = append(at.fine, append([]float64(nil), o.halves...)), append(at.drift, m.apart(o, coarse))
		}
		copy(o.valueHalves, l.memories[0])
		l.drift, l.slips, l.size = slices.Clone(o.drift), slices.Clone(o.slips), slices.Clone(o.size)
		out.motions = append(out.motions, l)
	}
	out.size = m.difference(whole, m.now+(launchSteps-1)*h)
	out.reached = out.reached[launchSteps/2:]
	return out, nil
}

// advance moves a solution on by a step and reads what it shows.
func (m *march) advance(t *stepper, x, jump []float64, now float64, drives []drive, readings, memories []float64) {
	if readings == nil {
		t.step(x, jump, now, drives, nil, nil)
	} else {
		t.step(x, jump, now, drives, m.readings, readings)
	}
	if memories != nil {
		for k, f := range m.memories {
			memories[k] = f.of(x)
		}
	}
}

// forget drops what is remembered of the readings of earlier steps.
func (o *motion) forget() {
	clear(o.drift)
	clear(o.slips)
	clear(o.size)
}

// measure notes the sizes of what goes into the readings of a solution, and of
// the largest of the same kind, whose rounding errors reach everywhere.
func (m *march) measure(o *motion, x []float64) {
	var largest [2]float64
	for i, v := range x {
		k := m.solver.kind[i]
		largest[k] = max(largest[k], math.Abs(v))
	}
	for k, f := range m.memories {
		sum := 0.0
		for t, i := range f.index {
			sum += math.Abs(f.value[t] * x[i])
		}
		o.rounding[k] = 32 * unit * sum
	}
	for j := range m.readings {
		r := &m.readings[j]
		o.parts[j], o.around[j] = math.Abs(o.halves[j]), 0
		for k, i := range r.index {
			g := math.Abs(r.g[k])
			o.parts[j] += g * math.Abs(x[i])
			o.around[j] += g * largest[m.solver.kind[i]]
		}
	}
}

// atStart returns the limits at the start of the segment of the readings after
// its first steps: their polynomial through a few of them in a row, of those
// that agree best with the polynomials of one less.
func (m *march) atStart() reached {
	at := reached{}
	points := smoothed(m.reached)
	for k := range m.motions {
		fine, drift := make([]float64, len(m.readings)), make([]float64, len(m.readings))
		for j := range fine {
			if fine[j], drift[j] = startOf(points, k, j); m.least > 0 {
				// Something may have moved and died out before the first step.
				drift[j] = math.Inf(1)
			}
		}
		at.fine, at.drift = append(at.fine, fine), append(at.drift, drift)
	}
	return at
}

// smoothed gives every point the greatest drift of itself and its neighbours: a
// single one may be small by chance.
func smoothed(points []reached) []reached {
	out := make([]reached, len(points))
	for i, p := range points {
		out[i] = reached{after: p.after, fine: p.fine}
		for k := range p.drift {
			drift := append([]float64(nil), p.drift[k]...)
			for _, n := range points[max(0, i-1):min(i+2, len(points))] {
				for j := range drift {
					drift[j] = max(drift[j], n.drift[k][j])
				}
			}
			out[i].drift = append(out[i].drift, drift)
		}
	}
	return out
}

// startOf extrapolates reading j of motion k to the start, and bounds the error
// by the difference of extrapolations and what the drift of the readings makes
// of it. Earlier readings are surer, later ones less noisy: a later window is
// taken where it makes sharper what the earlier ones say, and agrees with all of
// them. As the smallest of many estimates is taken, the bound is several times
// that.
func startOf(points []reached, k, j int) (value, radius float64) {
	radius = math.Inf(1)
	const most, several = 6, 64
	for first := range points {
		for count := 1; count <= most && first+count <= len(points); count++ {
			window := points[first : first+count]
			v, noise := extrapolate(window, k, j, 0)
			r := math.Inf(1)
			if count > 1 {
				less, _ := extrapolate(window[:count-1], k, j, 0)
				r = math.Abs(v-less) + noise
				if first > 0 {
					before, _ := extrapolate(points[first-1:first+count-1], k, j, 0)
					r += math.Abs(v - before)
				}
			} else if len(points) == 1 {
				r = math.Abs(v) + noise
			}
			if r < radius && math.Abs(v-value) <= radius && agrees(window, points[:first], k, j) {
				value, radius = v, r
			}
		}
	}
	return value, several * radius
}

// agrees tells whether the polynomial through a window is as far from earlier
// readings as these may be wrong, at most.
func agrees(window, earlier []reached, k, j int) bool {
	for _, p := range earlier {
		if v, noise := extrapolate(window, k, j, p.after); math.Abs(v-p.fine[k][j]) > p.drift[k][j]+noise {
			return false
		}
	}
	return true
}

// extrapolate is the value at a time of the polynomial through readings, and how
// much of their drift comes with it (Lagrange).
func extrapolate(points []reached, k, j int, at float64) (value, noise float64) {
	for a := range points {
		f := 1.0
		for b := range points {
			if a != b {
				f *= (points[b].after - at) / (points[b].after - points[a].after)
			}
		}
		value += f * points[a].fine[k][j]
		noise += math.Abs(f) * points[a].drift[k][j]
	}
	return value, noise
}
