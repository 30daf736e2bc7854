package float

import "math"

// pace divides the way to an instant into steps: the length between two
// instants, halved so often.
type pace struct {
	begin, length float64
	halvings      int
	position      uint64    // in steps
	refused       []float64 // what was found in attempts one after another
	lengthened    bool      // the step is longer than the one before
}

// newPace starts with steps no longer than longest.
func newPace(begin, end, longest float64) *pace {
	p := &pace{begin: begin, length: end - begin}
	for p.h() > longest*(1+1e-9) && p.halvings < mostHalvings {
		p.halvings++
	}
	return p
}

func (p *pace) h() float64   { return math.Ldexp(p.length, -p.halvings) }
func (p *pace) now() float64 { return p.begin + float64(p.position)*p.h() }
func (p *pace) done() bool   { return p.position == uint64(1)<<p.halvings }
func (p *pace) shorten()     { p.halvings, p.position = p.halvings+1, 2*p.position }
func (p *pace) lengthen()    { p.halvings, p.position = p.halvings-1, p.position/2 }

// canLengthen tells whether a step twice as long fits.
func (p *pace) canLengthen() bool { return p.halvings > 0 && p.position&1 == 0 }

func (p *pace) advance() {
	p.position++
	p.refused, p.lengthened = p.refused[:0], false
}

// refuse shortens the step, or finds that it is noise that makes it differ.
func (m *march) refuse(p *pace, size float64) error {
	if p.refused = append(p.refused, size); m.isNoise(p.refused) {
		m.noise = size
		return nil
	}
	if p.halvings == mostHalvings {
		return ErrSteps
	}
	p.shorten()
	m.patience = 2
	if p.lengthened {
		m.failures = min(m.failures+1, 8)
		m.patience = 2 << m.failures
	}
	p.lengthened = false
	return nil
}

// tooShort finds a way out where a step is too short for double precision: what
// was refused before is as good as it gets, or a longer one is taken, or there
// is none.
func (m *march) tooShort(p *pace) error {
	k := len(p.refused)
	switch {
	case k > 0 && p.refused[k-1] <= mostNoise:
		m.noise = p.refused[k-1]
		p.lengthen()
	case k == 0 && p.canLengthen():
		p.lengthen()
	case k == 0 && p.halvings == 0:
		m.forced = true
	default:
		return ErrSteps
	}
	return nil
}

// quicken lengthens the step after one of which both versions agreed well, if
// that was not tried in vain just before.
func (m *march) quicken(p *pace, size float64) {
	m.patience--
	if p.canLengthen() && size < max(0.1, 2*m.noise) && m.patience <= 0 {
		p.lengthen()
		p.lengthened = true
	}
	if m.patience < -64 {
		m.failures = 0
	}
}

// isNoise tells whether three halvings one after another were of no use: the
// error of a step is then one of rounding. Only a small one is taken for that.
func (m *march) isNoise(refused []float64) bool {
	const small = 1e3
	k := len(refused) - 1
	return k >= 3 && refused[k] <= small && refused[k] > refused[k-3]/4
}
