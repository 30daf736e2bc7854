package analyze

import (
	"context"
	"math/big"

	"portlight/analyze/exact"
	"portlight/analyze/response"
	"portlight/dialect/number"
)

type termView struct {
	FromS  string `json:"from_s"`
	Power  int    `json:"power"`
	Re     string `json:"re"`
	Im     string `json:"im"`
	PoleRe string `json:"pole_re"`
	PoleIm string `json:"pole_im"`
}

// impulseView is what begins a delta at an instant: order 0 is δ, 1 its
// derivative; the weights are in the signal's unit times s^(order+1).
type impulseView struct {
	AtS       string `json:"at_s"`
	Order     int    `json:"order"`
	ZeroInput string `json:"zero_input"`
	ZeroState string `json:"zero_state"`
	Total     string `json:"total"`
}

type ratioView struct {
	Numerator   []string `json:"numerator"`
	Denominator []string `json:"denominator"`
}

type transformView struct {
	ZeroInput ratioView `json:"zero_input"`
	ZeroState ratioView `json:"zero_state"`
	Total     ratioView `json:"total"`
}

type signalView struct {
	headView
	Unit      string         `json:"unit"`
	ZeroInput []termView     `json:"zero_input"`
	ZeroState []termView     `json:"zero_state"`
	Impulses  []impulseView  `json:"impulses"`
	Transform *transformView `json:"transform,omitempty"`
	Proved    bool           `json:"proved"`
}

// curveView is a power and the like: the whole of it alone, since it has no
// parts by cause.
type curveView struct {
	headView
	Unit     string        `json:"unit"`
	Total    []termView    `json:"total"`
	Impulses []impulseView `json:"impulses"`
	Proved   bool          `json:"proved"`
}

func curveJSON(ctx context.Context, a *CurveAnswer) any {
	pieces, err := a.Curve.Pieces(ctx, signalDigits)
	if err != nil {
		return refusedView{head(a.Question, "refused"), "not-decided", "the closed form is out of reach: " + err.Error()}
	}
	return curveView{head(a.Question, "signal"), a.Dimension.Unit(), termViews(pieces), []impulseView{}, true}
}

// signalDigits is how many digits the coefficients of a closed form are
// computed to; some are lost where terms are moved to a switching instant.
const signalDigits = jsonDigits + 8

func signalJSON(ctx context.Context, a *SignalAnswer) any {
	v := signalView{
		headView: head(a.Question, "signal"), Unit: a.Dimension.Unit(),
		ZeroInput: []termView{}, ZeroState: []termView{}, Impulses: []impulseView{}, Proved: true,
	}
	zi, err := a.Signal.ZeroInput().Pieces(ctx, signalDigits)
	if err != nil {
		return refusedView{head(a.Question, "refused"), "not-decided", "the closed form is out of reach: " + err.Error()}
	}
	zs, err := a.Signal.ZeroState().Pieces(ctx, signalDigits)
	if err != nil {
		return refusedView{head(a.Question, "refused"), "not-decided", "the closed form is out of reach: " + err.Error()}
	}
	v.ZeroInput, v.ZeroState = termViews(zi), termViews(zs)
	if v.Impulses, err = impulseViews(ctx, a.Signal); err != nil {
		return refusedView{head(a.Question, "refused"), "not-decided", "the impulses are out of reach: " + err.Error()}
	}
	v.Transform = transformsOf(a.Signal)
	return v
}

// termViews lists terms so that their sum, each from its own beginning on, is
// the signal: where a piece ends, its terms are taken away again, moved to the
// instant of the end.
func termViews(pieces []response.Piece) []termView {
	list := []termView{}
	for _, p := range pieces {
		from := p.From.Rat()
		for _, t := range p.Terms {
			list = append(list, viewTerm(from, t.Power, t.Coefficient, t.Pole))
		}
		if p.Until == nil {
			continue
		}
		until := p.Until.Rat()
		delta := new(big.Rat).Sub(until, from)
		for _, t := range p.Terms {
			for j, c := range movedTerm(t, delta) {
				list = append(list, viewTerm(until, j, c.Neg(), t.Pole))
			}
		}
	}
	return list
}

// movedTerm writes c·(τ+δ)^m·e^{p(τ+δ)} as coefficients of τ^j·e^{pτ}:
// c·e^{pδ}·binomial(m,j)·δ^(m−j).
func movedTerm(t response.Term, delta *big.Rat) []number.ComplexBall {
	prec := t.Coefficient.Prec()
	d := number.BallFromRat(delta, prec)
	factor := t.Coefficient.Mul(number.ComplexBall{Re: t.Pole.Re.Mul(d), Im: t.Pole.Im.Mul(d)}.Exp())
	out := make([]number.ComplexBall, t.Power+1)
	for j := range out {
		binomial := new(big.Rat).SetInt(new(big.Int).Binomial(int64(t.Power), int64(j)))
		out[j] = factor.MulBall(d.PowInt(t.Power - j)).MulRat(binomial)
	}
	return out
}

func viewTerm(from *big.Rat, power int, c, pole number.ComplexBall) termView {
	return termView{from.RatString(), power, decimal(c.Re), decimal(c.Im), decimal(pole.Re), decimal(pole.Im)}
}

// impulseViews lists the impulses of a signal with their causes.
func impulseViews(ctx context.Context, s *response.Signal) ([]impulseView, error) {
	list := []impulseView{}
	total, err := s.Impulses(ctx, jsonDigits)
	if err != nil {
		return nil, err
	}
	zi, err := s.ZeroInput().Impulses(ctx, jsonDigits)
	if err != nil {
		return nil, err
	}
	zs, err := s.ZeroState().Impulses(ctx, jsonDigits)
	if err != nil {
		return nil, err
	}
	// An instant may have impulses in both parts that cancel in the total.
	for _, at := range instantsOf(total, zi, zs) {
		orders := max(len(groupAt(total, at).Weights), len(groupAt(zi, at).Weights), len(groupAt(zs, at).Weights))
		for k := range orders {
			v := impulseView{at.RatString(), k, weightText(zi, at, k), weightText(zs, at, k), weightText(total, at, k)}
			if v.ZeroInput != "0" || v.ZeroState != "0" || v.Total != "0" {
				list = append(list, v)
			}
		}
	}
	return list, nil
}

func instantsOf(lists ...[]response.ImpulseGroup) []*big.Rat {
	var out []*big.Rat
	for _, l := range lists {
	next:
		for _, g := range l {
			for i, t := range out {
				if c := g.At.Cmp(t); c == 0 {
					continue next
				} else if c < 0 {
					out = append(out[:i], append([]*big.Rat{g.At}, out[i:]...)...)
					continue next
				}
			}
			out = append(out, g.At)
		}
	}
	return out
}

func groupAt(list []response.ImpulseGroup, at *big.Rat) response.ImpulseGroup {
	for _, g := range list {
		if g.At.Cmp(at) == 0 {
			return g
		}
	}
	return response.ImpulseGroup{}
}

// weightText is the weight of the k-th derivative of δ: "p/q" where it is
// rational for sure.
func weightText(list []response.ImpulseGroup, at *big.Rat, k int) string {
	g := groupAt(list, at)
	switch {
	case k >= len(g.Weights):
		return "0"
	case k < len(g.Exact) && g.Exact[k] != nil:
		return g.Exact[k].RatString()
	}
	return decimal(g.Weights[k])
}

// transformsOf gives the Laplace transforms where all of them are rational.
func transformsOf(s *response.Signal) *transformView {
	var out transformView
	for _, part := range []struct {
		signal *response.Signal
		view   *ratioView
	}{{s.ZeroInput(), &out.ZeroInput}, {s.ZeroState(), &out.ZeroState}, {s, &out.Total}} {
		f, ok := part.signal.Transform()
		if !ok {
			return nil
		}
		*part.view = viewRatio(f)
	}
	return &out
}

func viewRatio(f exact.Ratio) ratioView {
	f = standard(f)
	return ratioView{coefficients(f.Num), coefficients(f.Den)}
}
