package float

import "math"

// Wave is what an independent source does in time: what stands for ever and
// pieces that begin at an instant. Before t = 0 its effect is in the initial
// state.
type Wave struct {
	Always []Term
	Pieces []Piece
}

// Piece begins at From (s, ≥ 0): terms in τ = t − From, and an impulse there
// of weight Impulse (V·s or A·s).
type Piece struct {
	From    float64
	Terms   []Term
	Impulse float64
}

// Term is τ^Power · e^{Rate·τ} · (Cosine·cos(Omega·τ) + Sine·sin(Omega·τ)),
// Rate in 1/s and Omega ≥ 0 in rad/s.
type Term struct {
	Power        int
	Rate, Omega  float64
	Cosine, Sine float64
}

// value is the term at age τ.
func (t Term) value(age float64) float64 {
	sin, cos := math.Sincos(t.Omega * age)
	return math.Pow(age, float64(t.Power)) * math.Exp(t.Rate*age) * (t.Cosine*cos + t.Sine*sin)
}

// transform is the Laplace transform at s of the term as it goes on from age
// on. With p = Rate + j·Omega and c = Cosine − j·Sine the term is the mean of
// c·τ^m·e^{pτ} and its conjugate, and the transform of (a+τ)^m·e^{p(a+τ)} is
//
//	e^{pa}·Σ binom(m,k)·a^{m−k}·k!/(s−p)^{k+1}.
func (t Term) transform(s complex128, age float64) complex128 {
	sin, cos := math.Sincos(t.Omega * age)
	growth := math.Exp(t.Rate * age)
	c := complex(t.Cosine, -t.Sine) * complex(growth*cos, growth*sin)
	p := complex(t.Rate, t.Omega)
	if t.Omega == 0 {
		return complex(t.Cosine*growth, 0) * t.powers(s-p, age)
	}
	conjugate := complex(real(p), -imag(p))
	return 0.5 * (c*t.powers(s-p, age) + complex(real(c), -imag(c))*t.powers(s-conjugate, age))
}

// powers is the transform of (age+τ)^m at d.
func (t Term) powers(d complex128, age float64) complex128 {
	inverse := 1 / d
	sum, factor := complex128(0), inverse // factor = m!/(m−k)!/d^{k+1}
	for k := 0; k <= t.Power; k++ {
		sum += complex(math.Pow(age, float64(t.Power-k)), 0) * factor
		factor *= complex(float64(t.Power-k), 0) * inverse
	}
	return sum
}

// each calls f for every term that acts from the instant start on, with its
// age there.
func (w *Wave) each(start float64, f func(t Term, from float64)) {
	for _, t := range w.Always {
		f(t, 0)
	}
	for _, p := range w.Pieces {
		if p.From <= start {
			for _, t := range p.Terms {
				f(t, p.From)
			}
		}
	}
}

// value is the wave a time after the start of a segment, in it.
func (w *Wave) value(start, after float64) float64 {
	sum := 0.0
	w.each(start, func(x Term, from float64) { sum += x.value(start - from + after) })
	return sum
}

// transform is the Laplace transform at s of the wave from a time after the
// start of a segment on.
func (w *Wave) transform(s complex128, start, after float64) complex128 {
	var sum complex128
	w.each(start, func(x Term, from float64) { sum += x.transform(s, start-from+after) })
	return sum
}

// impulse is the weight of the impulse at exactly an instant.
func (w *Wave) impulse(t float64) float64 {
	sum := 0.0
	for _, p := range w.Pieces {
		if p.From == t {
			sum += p.Impulse
		}
	}
	return sum
}
