package response

import (
	"context"
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// Wave is what an independent source does in time: what stands for ever and
// pieces that begin at an instant. Always acts from t = 0 on as far as the
// zero-state part is concerned; what it did before is in the initial state.
type Wave struct {
	Always []WaveTerm
	Pieces []WavePiece
}

// WavePiece begins at From (s, ≥ 0): terms in τ = t − From, and impulses
// there, Impulses[k] being the weight of the k-th derivative of the unit impulse.
type WavePiece struct {
	From     number.Exact
	Terms    []WaveTerm
	Impulses []number.Exact
}

// WaveTerm is τ^Power · e^{Rate·τ} · (Cosine·cos(Omega·τ) + Sine·sin(Omega·τ)),
// Rate in 1/s and Omega ≥ 0 in rad/s.
type WaveTerm struct {
	Power        int
	Rate, Omega  number.Exact
	Cosine, Sine number.Exact

	// square, when set, is used for Omega²: the square of a natural frequency
	// that Omega, a stand-in, cannot be told from.
	square *big.Rat
}

// isExact tells whether no number of the wave is a stand-in.
func (w Wave) isExact() bool {
	pieces := append([]WavePiece{{Terms: w.Always}}, w.Pieces...)
	for _, piece := range pieces {
		if !piece.From.IsExact() {
			return false
		}
		for _, x := range piece.Impulses {
			if !x.IsExact() {
				return false
			}
		}
		for _, t := range piece.Terms {
			if !t.Rate.IsExact() || !t.Omega.IsExact() || !t.Cosine.IsExact() || !t.Sine.IsExact() {
				return false
			}
		}
	}
	return true
}

// weight multiplies a component of a signal. A nil of function means the
// rational value; otherwise the value is known through balls only, and id tells
// equal weights.
type weight struct {
	rational *big.Rat
	at       func(ctx context.Context, prec uint) (number.Ball, error)
	id       string
}

func rationalWeight(r *big.Rat) weight { return weight{rational: r} }

var unitWeight = rationalWeight(big.NewRat(1, 1))

// ball returns the weight to the working precision.
func (w weight) ball(ctx context.Context, prec uint) (number.Ball, error) {
	if w.at == nil {
		return number.BallFromRat(w.rational, prec), nil
	}
	return w.at(ctx, prec)
}

// drive is one way a source acts within an interval: weight times the inverse
// transform of transform, from the instant from on.
type drive struct {
	from      *big.Rat
	weight    weight
	transform exact.Ratio
	factors   []exact.Poly // of its denominator, one for each frequency
}

// drives lists how the wave acts within [start, end) (nil: for ever). What has
// rational weight and begins together is one drive. The name makes the weights
// of different sources distinguishable.
func (w Wave) drives(name string, start, end *big.Rat) []drive {
	var out []drive
	add := func(from *big.Rat, terms []WaveTerm, impulses []number.Exact) {
		if end != nil && from.Cmp(end) >= 0 {
			return
		}
		if age := new(big.Rat).Sub(start, from); age.Sign() > 0 {
			for _, t := range terms {
				out = appendDrives(out, t.aged(name, start, age))
			}
			return
		}
		sum := exact.PolyRatio(impulsePoly(impulses))
		var factors []exact.Poly
		for _, t := range terms {
			sum = sum.Add(t.transform())
			factors = append(factors, t.factor())
		}
		out = appendDrives(out, []drive{{from, unitWeight, sum, factors}})
	}
	add(new(big.Rat), w.Always, nil)
	for _, piece := range w.Pieces {
		add(piece.From.Rat(), piece.Terms, piece.Impulses)
	}
	return out
}

// appendDrives joins drives of weight one that begin together.
func appendDrives(list, more []drive) []drive {
next:
	for _, d := range more {
		if d.transform.Num.IsZero() {
			continue
		}
		for i := range list {
			e := &list[i]
			if e.from.Cmp(d.from) == 0 && e.weight.at == nil && d.weight.at == nil {
				e.transform = e.transform.Add(d.transform)
				e.factors = append(e.factors, d.factors...)
				continue next
			}
		}
		list = append(list, d)
	}
	return list
}

func impulsePoly(weights []number.Exact) exact.Poly {
	c := make([]*big.Rat, len(weights))
	for i, x := range weights {
		c[i] = x.Rat()
	}
	return exact.NewPoly(c...)
}

// transform is the Laplace transform of the term.
func (t WaveTerm) transform() exact.Ratio {
	cos, sin, den := t.kernel(t.Power)
	num := cos.Scale(t.Cosine.Rat()).Add(sin.Scale(t.Sine.Rat()))
	return ratioOf(num, den)
}

// factor is s − a, or (s−a)² + ω²: the poles of the term.
func (t WaveTerm) factor() exact.Poly {
	_, _, den := t.kernel(0)
	return den
}

// kernel gives the transforms of τ^m e^{aτ} cos ωτ and τ^m e^{aτ} sin ωτ over
// their common denominator: with b = s − a and z = b + jω they are the real and
// imaginary part of m!·z^{m+1}, over (b² + ω²)^{m+1}.
func (t WaveTerm) kernel(m int) (cos, sin, den exact.Poly) {
	base := exact.NewPoly(new(big.Rat).Neg(t.Rate.Rat()), big.NewRat(1, 1))
	factorial := new(big.Rat).SetInt(new(big.Int).MulRange(1, int64(max(m, 1))))
	omega := t.Omega.Rat()
	if omega.Sign() == 0 {
		return exact.Constant(factorial), exact.Poly{}, base.Pow(m + 1)
	}
	square := t.square
	if square == nil {
		square = new(big.Rat).Mul(omega, omega)
	}
	re, im := exact.Constant(factorial), exact.Poly{} // z^k = re + jω·im
	for range m + 1 {
		re, im = re.Mul(base).Sub(im.Scale(square)), im.Mul(base).Add(re)
	}
	return re, im.Scale(omega), base.Mul(base).Add(exact.Constant(square)).Pow(m + 1)
}

// aged gives the term as it goes on at start, age after it began:
//
//	(τ+Δ)^m = Σ binom(m,k) Δ^{m−k} τ^k,
//	A cos ω(τ+Δ) + B sin ω(τ+Δ) = (A cos ωΔ + B sin ωΔ) cos ωτ + (B cos ωΔ − A sin ωΔ) sin ωτ.
func (t WaveTerm) aged(name string, start, age *big.Rat) []drive {
	var cos, sin exact.Ratio
	for k := 0; k <= t.Power; k++ {
		c, s, den := t.kernel(k)
		f := new(big.Rat).SetInt(new(big.Int).Binomial(int64(t.Power), int64(k)))
		f.Mul(f, ratPow(age, t.Power-k))
		cos = cos.Add(ratioOf(c.Scale(f), den))
		sin = sin.Add(ratioOf(s.Scale(f), den))
	}
	factors := []exact.Poly{t.factor()}
	a, b, omega, rate := t.Cosine, t.Sine, t.Omega.Rat(), t.Rate.Rat()
	if omega.Sign() == 0 && rate.Sign() == 0 {
		return []drive{{start, unitWeight, cos.ScaleBy(a.Rat()), factors}}
	}
	id := name + "@" + age.RatString() + "*" + rate.RatString() + "," + omega.RatString()
	grown := func(phase func(c, s number.Ball, prec uint) number.Ball) func(context.Context, uint) (number.Ball, error) {
		return func(_ context.Context, prec uint) (number.Ball, error) {
			growth := number.BallFromRat(new(big.Rat).Mul(rate, age), prec).Exp()
			sn, cs := number.BallFromRat(new(big.Rat).Mul(omega, age), prec).SinCos()
			return growth.Mul(phase(cs, sn, prec)), nil
		}
	}
	if omega.Sign() == 0 {
		w := weight{at: grown(func(_, _ number.Ball, prec uint) number.Ball { return number.BallFromInt(1, prec) }), id: id}
		return []drive{{start, w, cos.ScaleBy(a.Rat()), factors}}
	}
	key := id + "," + a.Rat().RatString() + "," + b.Rat().RatString()
	wc := weight{id: key + "c", at: grown(func(c, s number.Ball, _ uint) number.Ball {
		return c.MulRat(a.Rat()).Add(s.MulRat(b.Rat()))
	})}
	ws := weight{id: key + "s", at: grown(func(c, s number.Ball, _ uint) number.Ball {
		return c.MulRat(b.Rat()).Sub(s.MulRat(a.Rat()))
	})}
	return []drive{{start, wc, cos, factors}, {start, ws, sin, factors}}
}

func ratPow(r *big.Rat, n int) *big.Rat {
	out := big.NewRat(1, 1)
	for range n {
		out.Mul(out, r)
	}
	return out
}

// ratioOf is num/den for a denominator that is never zero.
func ratioOf(num, den exact.Poly) exact.Ratio {
	r, err := exact.NewRatio(num, den)
	if err != nil {
		panic("response: a kernel of a waveform has the denominator zero")
	}
	return r
}
