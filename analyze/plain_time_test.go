package analyze_test

import (
	"math"
	"math/big"
	"math/cmplx"
	"sort"
)

// memory is what a network carries from one instant to the next: V of
// capacitors, A of inductors, V of one-pole op amp outputs, by branch.
type memory map[int]float64

// drivePart says what acts: the sources, and of them one only if it is not
// negative; the state at 0−.
type drivePart struct {
	sources bool
	only    int
	state   bool
}

// waveTerm is c·τ^m·e^{pτ}, or an impulse of weight c.
type plainTerm struct {
	c, p    complex128
	m       int
	impulse bool
}

func f64(r *big.Rat) float64 { f, _ := r.Float64(); return f }

// terms of a waveform in τ, the time since it began.
func (w *plainWave) terms() []plainTerm {
	size, rate := complex(f64(w.size), 0), 0.0
	if w.rate != nil {
		rate = f64(w.rate)
	}
	j := complex(0, rate)
	switch w.kind {
	case "constant":
		return []plainTerm{{c: size}}
	case "ramp":
		return []plainTerm{{c: size, m: 1}}
	case "exponential":
		return []plainTerm{{c: size, p: complex(-rate, 0)}}
	case "sine":
		return []plainTerm{{c: size / 2i, p: j}, {c: -size / 2i, p: -j}}
	case "cosine":
		return []plainTerm{{c: size / 2, p: j}, {c: size / 2, p: -j}}
	}
	return []plainTerm{{c: size, impulse: true}}
}

// moved re-expresses terms from a later origin.
func moved(terms []plainTerm, by float64) []plainTerm {
	var out []plainTerm
	for _, t := range terms {
		if t.impulse {
			continue // it is over
		}
		k := t.c * cmplx.Exp(t.p*complex(by, 0))
		// (τ+d)^m = Σ C(m,j)·d^{m−j}·τ^j, m ≤ 1 here
		out = append(out, plainTerm{c: k * complex(math.Pow(by, float64(t.m)), 0), p: t.p})
		if t.m == 1 {
			out = append(out, plainTerm{c: k, p: t.p, m: 1})
		}
	}
	return out
}

func imageOf(terms []plainTerm, s complex128) complex128 {
	sum := complex128(0)
	for _, t := range terms {
		switch {
		case t.impulse:
			sum += t.c
		case t.m == 1:
			sum += t.c / ((s - t.p) * (s - t.p))
		default:
			sum += t.c / (s - t.p)
		}
	}
	return sum
}

// act is a source's terms that begin a while into an interval.
type act struct {
	branch int
	delay  float64
	terms  []plainTerm
}

// acts lists what the sources do from an instant on.
func (p *plainNetwork) acts(from float64, what drivePart) []act {
	var out []act
	for i, b := range p.branches {
		if !what.sources || what.only >= 0 && what.only != i {
			continue
		}
		for k := range b.waves {
			w := &b.waves[k]
			if at := f64(w.from); at >= from {
				out = append(out, act{i, at - from, w.terms()})
			} else {
				out = append(out, act{i, 0, moved(w.terms(), from-at)})
			}
		}
	}
	return out
}

// instants at which switches turn, with 0.
func (p *plainNetwork) instants() []*big.Rat {
	out := []*big.Rat{new(big.Rat)}
	for _, b := range p.branches {
		for _, e := range b.events {
			known := false
			for _, t := range out {
				known = known || t.Cmp(e) == 0
			}
			if !known {
				out = append(out, e)
			}
		}
	}
	sort.Slice(out, func(i, j int) bool { return out[i].Cmp(out[j]) < 0 })
	return out
}

// initialMemory is the state at 0−.
func (p *plainNetwork) initialMemory() (memory, bool) {
	if p.steady {
		return p.settled()
	}
	out := memory{}
	for i, b := range p.branches {
		if b.initial != nil {
			out[i] = f64(b.initial)
		}
	}
	return out, true
}

// settled superposes the steady states due to every tone of the waves that
// have acted for ever; ok is false when the equations are singular there.
func (p *plainNetwork) settled() (memory, bool) {
	out := memory{}
	closed := p.at(big.NewRat(-1, 1))
	for i, b := range p.branches {
		for _, w := range b.waves {
			if !w.forever {
				continue
			}
			s, phasor := complex128(0), complex(f64(w.size), 0)
			switch w.kind {
			case "sine":
				s, phasor = complex(0, f64(w.rate)), -1i*phasor
			case "cosine":
				s = complex(0, f64(w.rate))
			}
			t := tabulate(p, doubles, s, closed, nil)
			col := t.column()
			col[p.nodes-1+i] = phasor
			x, err := t.solve(col)
			if err != nil {
				return nil, false
			}
			for k, v := range p.recall(x) {
				out[k] += real(v)
				if math.IsNaN(out[k]) || cmplx.Abs(v) > 1e9 {
					return nil, false // singular but for rounding
				}
			}
		}
	}
	return out, true
}

// recall reads the memories from a solution.
func (p *plainNetwork) recall(x []complex128) map[int]complex128 {
	node := func(n int) complex128 {
		if n == 0 {
			return 0
		}
		return x[n-1]
	}
	out := map[int]complex128{}
	for i, b := range p.branches {
		switch {
		case b.kind == "capacitor":
			out[i] = node(b.a) - node(b.b)
		case b.kind == "inductor":
			out[i] = x[p.nodes-1+i]
		case b.kind == "output" && b.bandwidth != nil:
			out[i] = node(b.a)
		}
	}
	return out
}

// remember writes the terms of the memories into a right-hand side.
func (p *plainNetwork) remember(col []complex128, m memory) {
	base := p.nodes - 1
	for i, b := range p.branches {
		switch {
		case b.kind == "capacitor":
			col[base+i] -= complex(f64(b.value)*m[i], 0)
		case b.kind == "inductor":
			col[base+i] -= complex(f64(b.value)*m[i], 0)
		case b.kind == "output" && b.bandwidth != nil:
			col[base+i] -= complex(m[i]/f64(b.bandwidth), 0)
		}
	}
	for _, k := range p.mutuals {
		col[base+k.a] -= complex(f64(k.m)*m[k.b], 0)
		col[base+k.b] -= complex(f64(k.m)*m[k.a], 0)
	}
}

// respond is the value of every unknown at time t, by inverting the transform
// of each interval in turn; ok is false when two contours do not agree.
func (p *plainNetwork) respond(t float64, what drivePart) (x []float64, ok bool) {
	m := memory{}
	if what.state {
		if m, ok = p.initialMemory(); !ok {
			return nil, false
		}
	}
	times := p.instants()
	for k, start := range times {
		from, until := f64(start), t
		last := k+1 == len(times) || f64(times[k+1]) >= t
		if !last {
			until = f64(times[k+1])
		}
		x, ok = p.through(from, until, p.at(start), m, what)
		if !ok || last {
			return x, ok
		}
		z := make([]complex128, len(x))
		for i := range x {
			z[i] = complex(x[i], 0)
		}
		m = memory{}
		for i, v := range p.recall(z) {
			m[i] = real(v)
		}
	}
	return x, ok
}

// through solves one interval from its state to an instant.
func (p *plainNetwork) through(from, until float64, closed stand, m memory, what drivePart) ([]float64, bool) {
	sum := make([]float64, p.nodes-1+len(p.branches))
	groups := map[float64][]act{0: nil}
	for _, a := range p.acts(from, what) {
		groups[a.delay] = append(groups[a.delay], a)
	}
	for delay, acts := range groups {
		tau := until - from - delay
		if tau <= 1e-12 {
			continue
		}
		image := func(s complex128) ([]complex128, error) {
			t := tabulate(p, doubles, s, closed, nil)
			col := t.column()
			if delay == 0 {
				p.remember(col, m)
			}
			for _, a := range acts {
				col[p.nodes-1+a.branch] += imageOf(a.terms, s)
			}
			return t.solve(col)
		}
		x, ok := inverse(image, tau)
		if !ok {
			return nil, false
		}
		for i := range sum {
			sum[i] += x[i]
		}
	}
	return sum, true
}

// inverse is the inverse Laplace transform by the fixed contour of Talbot
// (J. Abate and P. P. Valkó, Multi-precision Laplace transform inversion,
// Int. J. Numer. Methods Eng. 60 (2004) 979–993). It is taken on two contours; ok
// tells that they agree.
func inverse(image func(complex128) ([]complex128, error), t float64) ([]float64, bool) {
	x, ok := contour(image, t, 26)
	if !ok {
		return nil, false
	}
	y, ok := contour(image, t, 35)
	if !ok {
		return nil, false
	}
	largest := 0.0
	for i := range x {
		largest = math.Max(largest, math.Max(math.Abs(x[i]), math.Abs(y[i])))
	}
	for i := range x {
		if !(math.Abs(x[i]-y[i]) <= 1e-8*math.Max(largest, 1)) {
			return nil, false
		}
	}
	return x, true
}

func contour(image func(complex128) ([]complex128, error), t float64, m int) ([]float64, bool) {
	r := 2 * float64(m) / (5 * t)
	var sum []float64
	for k := range m {
		s, weight := complex(r, 0), complex(0.5*math.Exp(r*t), 0)
		if k > 0 {
			theta := float64(k) * math.Pi / float64(m)
			cot := 1 / math.Tan(theta)
			s = complex(r*theta*cot, r*theta)
			sigma := theta + (theta*cot-1)*cot
			weight = cmplx.Exp(s*complex(t, 0)) * complex(1, sigma)
		}
		x, err := image(s)
		if err != nil {
			return nil, false
		}
		if sum == nil {
			sum = make([]float64, len(x))
		}
		for i := range x {
			sum[i] += real(weight*x[i]) * r / float64(m)
		}
	}
	return sum, true
}
