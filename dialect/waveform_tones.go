package dialect

import (
	"math/big"

	"portlight/dialect/number"
)

// shiftTones re-expands tones in τ about a later instant: τ = τ' + by.
func shiftTones(tones []tone, by number.Exact) []tone {
	if exactlyZero(by) {
		return tones
	}
	var shifted []tone
	for _, t := range tones {
		t.lift = t.lift.Add(t.rate.Mul(by))
		if t.oscillating {
			t.phase = t.phase.Add(t.omega.Mul(by))
		}
		// (τ' + by)^n = Σ binomial(n, k)·by^(n−k)·τ'^k
		n := t.power
		power := number.FromInt(1)
		for k := n; k >= 0; k-- {
			u := t
			u.power = k
			binomial := new(big.Rat).SetInt(new(big.Int).Binomial(int64(n), int64(k)))
			u.amplitude = t.amplitude.Mul(power).Mul(number.FromRat(binomial))
			shifted = append(shifted, u)
			power = power.Mul(by)
		}
	}
	return shifted
}

var half = number.FromRat(big.NewRat(1, 2))

// multiply multiplies two sums of tones in the same time.
func (w *shaping) multiply(x Expression, a, b []tone) ([]tone, bool) {
	if len(a)*len(b) > maxTones {
		w.fail(x, "%s spreads to more than %d terms", w.e.written(x.Place()), maxTones)
		return nil, false
	}
	var product []tone
	for _, p := range a {
		for _, q := range b {
			if p.power+q.power > maxPower {
				w.fail(x, "%s has a power of t above %d", w.e.written(x.Place()), maxPower)
				return nil, false
			}
			product = append(product, multiplyTones(p, q)...)
		}
	}
	return mergeTones(product), true
}

// multiplyTones multiplies two tones: products of oscillations become sums.
//
//	cos A·cos B = ½[cos(A−B) + cos(A+B)]
//	sin A·sin B = ½[cos(A−B) − cos(A+B)]
//	sin A·cos B = ½[sin(A+B) + sin(A−B)]
func multiplyTones(p, q tone) []tone {
	if p.oscillating && q.oscillating && q.sine && !p.sine {
		p, q = q, p
	}
	r := tone{
		amplitude: p.amplitude.Mul(q.amplitude), power: p.power + q.power,
		rate: p.rate.Add(q.rate), lift: p.lift.Add(q.lift),
	}
	if !p.oscillating || !q.oscillating {
		from := p
		if q.oscillating {
			from = q
		}
		r.omega, r.phase, r.sine, r.oscillating = from.omega, from.phase, from.sine, from.oscillating
		return []tone{r}
	}
	r.amplitude, r.oscillating = r.amplitude.Mul(half), true
	sum, difference := r, r
	sum.omega, sum.phase = p.omega.Add(q.omega), p.phase.Add(q.phase)
	difference.omega, difference.phase = p.omega.Sub(q.omega), p.phase.Sub(q.phase)
	switch {
	case p.sine && q.sine:
		sum.amplitude = sum.amplitude.Neg()
	case p.sine:
		sum.sine, difference.sine = true, true
	}
	return []tone{sum, difference}
}

// mergeTones adds tones that differ in amplitude alone.
func mergeTones(tones []tone) []tone {
	var merged []tone
next:
	for _, t := range tones {
		if exactlyZero(t.amplitude) {
			continue
		}
		for i := range merged {
			if merged[i].alike(t) {
				merged[i].amplitude = merged[i].amplitude.Add(t.amplitude)
				continue next
			}
		}
		merged = append(merged, t)
	}
	return merged
}

func (t tone) alike(u tone) bool {
	return t.power == u.power && t.oscillating == u.oscillating && t.sine == u.sine &&
		t.rate.Equal(u.rate) && t.lift.Equal(u.lift) && t.omega.Equal(u.omega) && t.phase.Equal(u.phase)
}

// settle works out lifts and phases and adds what has the same form.
func (w *shaping) settle(x Expression, tones []tone) ([]WaveTerm, bool) {
	var terms []WaveTerm
	for _, t := range mergeTones(tones) {
		term, err := t.term()
		if err != nil {
			w.fail(x, "%s: %s", w.e.written(x.Place()), failure(err))
			return nil, false
		}
		terms = addTerm(terms, term)
	}
	kept := terms[:0]
	for _, t := range terms {
		if !exactlyZero(t.Cosine) || !exactlyZero(t.Sine) {
			kept = append(kept, t)
		}
	}
	return kept, true
}

func addTerm(terms []WaveTerm, t WaveTerm) []WaveTerm {
	for i := range terms {
		u := &terms[i]
		if u.Power == t.Power && u.Rate.Equal(t.Rate) && u.Omega.Equal(t.Omega) {
			u.Cosine, u.Sine = u.Cosine.Add(t.Cosine), u.Sine.Add(t.Sine)
			return terms
		}
	}
	return append(terms, t)
}

// term splits a tone into cosine and sine parts:
//
//	cos(ωτ+φ) = cos φ·cos ωτ − sin φ·sin ωτ
//	sin(ωτ+φ) = sin φ·cos ωτ + cos φ·sin ωτ
func (t tone) term() (WaveTerm, error) {
	amplitude := t.amplitude
	if !exactlyZero(t.lift) {
		factor, err := number.Exp(t.lift)
		if err != nil {
			return WaveTerm{}, err
		}
		amplitude = amplitude.Mul(factor)
	}
	term := WaveTerm{Power: t.power, Rate: t.rate, Cosine: amplitude}
	if !amplitude.InRange() || !t.rate.InRange() || !t.omega.InRange() {
		return term, number.ErrRange
	}
	if !t.oscillating {
		return term, nil
	}
	omega, phase, flip := t.omega, t.phase, false
	if sign, _ := omega.Sign(); sign < 0 { // cos is even, sin odd
		omega, phase, flip = omega.Neg(), phase.Neg(), t.sine
	}
	if flip {
		amplitude = amplitude.Neg()
	}
	sine, err := number.Sin(phase)
	if err != nil {
		return term, err
	}
	cosine, err := number.Cos(phase)
	if err != nil {
		return term, err
	}
	term.Omega = omega
	if t.sine {
		term.Cosine, term.Sine = amplitude.Mul(sine), amplitude.Mul(cosine)
	} else {
		term.Cosine, term.Sine = amplitude.Mul(cosine), amplitude.Mul(sine).Neg()
	}
	if omega.Rat().Sign() == 0 {
		term.Omega, term.Sine = number.Exact{}, number.Exact{}
	}
	return term, nil
}

// linearIn brings an expression to slope·t + offset.
func (w *shaping) linearIn(x Expression) (slope, offset number.Exact, ok bool) {
	s, ok := w.shape(x)
	if !ok {
		return slope, offset, false
	}
	for _, t := range s.always {
		if t.oscillating || t.power > 1 || !exactlyZero(t.rate) || !exactlyZero(t.lift) {
			ok = false
			continue
		}
		if t.power == 1 {
			slope = slope.Add(t.amplitude)
		} else {
			offset = offset.Add(t.amplitude)
		}
	}
	if !ok || len(s.pieces) > 0 {
		w.fail(x, "%s is not linear in t: %s", w.e.written(x.Place()), waveformHelp)
		return slope, offset, false
	}
	return slope, offset, true
}

func (w *shaping) shapeCall(x *Call) (shape, bool) {
	if len(x.Args) != 1 {
		return w.fail(x, "%s is no waveform: %s", w.e.written(x.Place()), waveformHelp)
	}
	var t tone
	switch x.Name {
	case "exp", "sin", "cos":
		slope, offset, ok := w.linearIn(x.Args[0])
		if !ok {
			return shape{}, false
		}
		t.amplitude = number.FromInt(1)
		if x.Name == "exp" {
			t.rate, t.lift = slope, offset
		} else {
			t.omega, t.phase, t.sine, t.oscillating = slope, offset, x.Name == "sin", true
		}
		return shape{always: []tone{t}}, true
	case "u", "delta":
		return w.shapeStep(x)
	}
	return w.fail(x, "%s is no waveform: %s", w.e.written(x.Place()), waveformHelp)
}

// shapeStep reads u(a·t − b) and delta(a·t − b), which act at t = b/a ≥ 0.
func (w *shaping) shapeStep(x *Call) (shape, bool) {
	slope, offset, ok := w.linearIn(x.Args[0])
	if !ok {
		return shape{}, false
	}
	direction, decided := slope.Sign()
	if !decided || direction == 0 {
		return w.fail(x, "%s does not depend on t: write %s(t - T)", w.e.written(x.Place()), x.Name)
	}
	from, err := offset.Neg().Quo(slope)
	if err != nil {
		return w.fail(x, "%s: %s", w.e.written(x.Place()), failure(err))
	}
	if sign, decided := from.Sign(); !decided || sign < 0 {
		return w.fail(x, "%s acts before t = 0: what has acted for ever is written without u(t), under start steady", w.e.written(x.Place()))
	}
	one := number.FromInt(1)
	if x.Name == "delta" {
		weight, err := slope.Abs().Inv() // δ(a·t) = δ(t)/|a|
		if err != nil {
			return w.fail(x, "%s: %s", w.e.written(x.Place()), failure(err))
		}
		return shape{pieces: []shapePiece{{from: from, impulse: weight, struck: true}}}, true
	}
	if direction > 0 {
		return shape{pieces: []shapePiece{{from: from, tones: []tone{plainTone(one)}}}}, true
	}
	// u(T − t) = 1 − u(t − T)
	return shape{
		always: []tone{plainTone(one)},
		pieces: []shapePiece{{from: from, tones: []tone{plainTone(one.Neg())}}},
	}, true
}
