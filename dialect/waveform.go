package dialect

import (
	"sort"

	"portlight/dialect/number"
)

// This file brings an expression in t to the Description's form. In between a
// waveform is a list of tones
//
//	amplitude · τ^power · e^(rate·τ + lift) · cos or sin(omega·τ + phase)
//
// with τ = t − from, each standing for ever or from its instant on, and of
// impulses. Lift and phase are kept apart from the amplitude until the end, so
// that e^(−(t−T)/a)·u(t−T) starts at exactly 1 and sin(ω·(t−T))·u(t−T) at
// exactly 0.

// tone is one term, in the time of the piece it belongs to.
type tone struct {
	amplitude   number.Exact
	power       int
	rate, lift  number.Exact
	omega       number.Exact // 0 with phase 0 and no sine: no oscillation
	phase       number.Exact
	sine        bool
	oscillating bool
}

// shape is a waveform: tones in t that stand for ever, and what begins later.
type shape struct {
	always []tone
	pieces []shapePiece // in order of from
}

// shapePiece begins at an instant.
type shapePiece struct {
	from    number.Exact
	tones   []tone
	impulse number.Exact // weight of δ(t − from)
	struck  bool         // it has an impulse
}

const (
	maxTones = 400 // bounds what products of sums spread to
	maxPower = 64  // bounds the powers of t
)

// shaping brings waveforms to form; e tells where and reports.
type shaping struct{ e *evaluator }

const waveformHelp = "a waveform is made of constants, u(t - T), delta(t - T), whole powers of t, exp, sin and cos of expressions linear in t, their sums and products"

func (w *shaping) fail(x Expression, format string, args ...any) (shape, bool) {
	w.e.report(x.Place(), "waveform", format, args...)
	return shape{}, false
}

// waveform lowers an expression in t.
func (w *shaping) waveform(x Expression) (*Waveform, bool) {
	s, ok := w.shape(x)
	if !ok {
		return nil, false
	}
	result := &Waveform{}
	if result.Always, ok = w.settle(x, s.always); !ok {
		return nil, false
	}
	for _, p := range s.pieces {
		terms, ok := w.settle(x, p.tones)
		if !ok {
			return nil, false
		}
		piece := WavePiece{From: p.from, Terms: terms}
		if p.struck && !exactlyZero(p.impulse) {
			piece.Impulses = []number.Exact{p.impulse}
		}
		if len(piece.Terms) > 0 || len(piece.Impulses) > 0 {
			result.Pieces = append(result.Pieces, piece)
		}
	}
	return result, true
}

func plainTone(x number.Exact) tone { return tone{amplitude: x} }

func (w *shaping) shape(x Expression) (shape, bool) {
	switch x := x.(type) {
	case *Constant:
		return shape{always: []tone{plainTone(x.Value)}}, true
	case *Variable:
		if x.Name == "t" {
			return shape{always: []tone{{amplitude: number.FromInt(1), power: 1}}}, true
		}
	case *Negate:
		s, ok := w.shape(x.X)
		return s.scaled(number.FromInt(-1)), ok
	case *Binary:
		return w.shapeBinary(x)
	case *Call:
		return w.shapeCall(x)
	}
	return w.fail(x, "%s is no waveform: %s", w.e.written(x.Place()), waveformHelp)
}

func (w *shaping) shapeBinary(x *Binary) (shape, bool) {
	a, ok := w.shape(x.X)
	if !ok {
		return a, false
	}
	if x.Op == '^' {
		return w.shapePower(x, a)
	}
	b, ok := w.shape(x.Y)
	if !ok {
		return b, false
	}
	switch x.Op {
	case '-':
		b = b.scaled(number.FromInt(-1))
		fallthrough
	case '+':
		return w.bounded(x, a.plus(b))
	case '/':
		if b, ok = w.reciprocal(x.Y, b); !ok {
			return b, false
		}
	}
	return w.product(x, a, b)
}

func (w *shaping) bounded(x Expression, s shape) (shape, bool) {
	n := len(s.always)
	for _, p := range s.pieces {
		n += len(p.tones) + 1
	}
	if n > maxTones {
		return w.fail(x, "%s spreads to more than %d terms", w.e.written(x.Place()), maxTones)
	}
	return s, true
}

// shapePower multiplies out a whole power.
func (w *shaping) shapePower(x *Binary, a shape) (shape, bool) {
	c, ok := x.Y.(*Constant)
	n := 0
	if ok {
		n, ok = smallInt(c.Value.Rat())
	}
	if !ok || n < 0 || n > maxPower {
		return w.fail(x, "%s is no waveform: the power is a whole number from 0 to %d", w.e.written(x.Place()), maxPower)
	}
	power := shape{always: []tone{plainTone(number.FromInt(1))}}
	for range n {
		if power, ok = w.product(x, power, a); !ok {
			return power, false
		}
	}
	return power, true
}

// reciprocal inverts a constant or a single exponential.
func (w *shaping) reciprocal(x Expression, s shape) (shape, bool) {
	if len(s.pieces) == 0 && len(s.always) == 1 {
		t := s.always[0]
		if t.power == 0 && !t.oscillating {
			inverse, err := t.amplitude.Inv()
			if err != nil {
				return w.fail(x, "%s: %s", w.e.written(x.Place()), failure(err))
			}
			t.amplitude, t.rate, t.lift = inverse, t.rate.Neg(), t.lift.Neg()
			return shape{always: []tone{t}}, true
		}
	}
	return w.fail(x, "%s is no waveform: only a constant or an exponential can divide", w.e.written(x.Place()))
}

func (s shape) scaled(by number.Exact) shape {
	scaled := shape{always: scaleTones(s.always, by)}
	for _, p := range s.pieces {
		q := shapePiece{from: p.from, tones: scaleTones(p.tones, by), struck: p.struck}
		if p.struck {
			q.impulse = p.impulse.Mul(by)
		}
		scaled.pieces = append(scaled.pieces, q)
	}
	return scaled
}

func scaleTones(tones []tone, by number.Exact) []tone {
	scaled := make([]tone, len(tones))
	for i, t := range tones {
		t.amplitude = t.amplitude.Mul(by)
		scaled[i] = t
	}
	return scaled
}

func (s shape) plus(o shape) shape {
	sum := shape{always: append(append([]tone(nil), s.always...), o.always...)}
	sum.pieces = append(sum.pieces, s.pieces...)
	for _, p := range o.pieces {
		sum.pieces = addPiece(sum.pieces, p)
	}
	return sum
}

// addPiece enters a piece, joined with one that begins at the same instant.
func addPiece(pieces []shapePiece, p shapePiece) []shapePiece {
	i := sort.Search(len(pieces), func(i int) bool { return pieces[i].from.Rat().Cmp(p.from.Rat()) >= 0 })
	if i == len(pieces) || !pieces[i].from.Equal(p.from) {
		pieces = append(pieces, shapePiece{})
		copy(pieces[i+1:], pieces[i:])
		pieces[i] = p
		return pieces
	}
	q := pieces[i]
	q.tones = append(append([]tone(nil), q.tones...), p.tones...)
	if p.struck {
		q.impulse, q.struck = q.impulse.Add(p.impulse), true
	}
	pieces[i] = q
	return pieces
}

// product multiplies two waveforms. What begins later cuts off what stands or
// began earlier; an impulse takes the other's value at its instant.
func (w *shaping) product(x Expression, a, b shape) (shape, bool) {
	var result shape
	var ok bool
	if result.always, ok = w.multiply(x, a.always, b.always); !ok {
		return result, false
	}
	for _, p := range a.pieces {
		if ok = w.productPiece(x, &result, p, b); !ok {
			return result, false
		}
	}
	for _, p := range b.pieces {
		if ok = w.productPiece(x, &result, p, shape{always: a.always}); !ok {
			return result, false
		}
	}
	return w.bounded(x, result)
}

// productPiece adds a piece times a waveform to a result.
func (w *shaping) productPiece(x Expression, result *shape, p shapePiece, s shape) bool {
	add := func(from number.Exact, a, b []tone) bool {
		tones, ok := w.multiply(x, a, b)
		if ok && len(tones) > 0 {
			result.pieces = addPiece(result.pieces, shapePiece{from: from, tones: tones})
		}
		return ok
	}
	if !add(p.from, p.tones, shiftTones(s.always, p.from)) {
		return false
	}
	if p.struck && !w.strike(x, result, p, s.always, number.Exact{}) {
		return false
	}
	for _, q := range s.pieces {
		order := p.from.Rat().Cmp(q.from.Rat())
		if (p.struck || q.struck) && order == 0 {
			if p.struck && q.struck || len(p.tones) > 0 || len(q.tones) > 0 {
				w.fail(x, "%s multiplies an impulse by something that jumps or strikes at the same instant: the product has no meaning", w.e.written(x.Place()))
				return false
			}
		}
		later, earlier := p, q
		if order < 0 {
			later, earlier = q, p
		}
		shifted := shiftTones(earlier.tones, later.from.Sub(earlier.from))
		if !add(later.from, later.tones, shifted) {
			return false
		}
		if later.struck && order != 0 && !w.strike(x, result, later, earlier.tones, earlier.from) {
			return false
		}
	}
	return true
}

// strike adds the impulse of a piece times the value that tones have at its
// instant; the tones are in the time since from.
func (w *shaping) strike(x Expression, result *shape, p shapePiece, tones []tone, from number.Exact) bool {
	if len(tones) == 0 {
		return true
	}
	value, ok := w.valueAt(x, shiftTones(tones, p.from.Sub(from)))
	if !ok {
		return false
	}
	result.pieces = addPiece(result.pieces, shapePiece{from: p.from, impulse: p.impulse.Mul(value), struck: true})
	return true
}

// valueAt is the value of tones at τ = 0.
func (w *shaping) valueAt(x Expression, tones []tone) (number.Exact, bool) {
	terms, ok := w.settle(x, tones)
	var value number.Exact
	for _, t := range terms {
		if t.Power == 0 {
			value = value.Add(t.Cosine)
		}
	}
	return value, ok
}
