package analyze

import (
	"context"
	"fmt"
	"math/big"
	"strings"

	"portlight/analyze/exact"
	"portlight/analyze/frequency"
	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// measured is a figure of merit and where it was found.
type measured struct {
	value    number.Ball
	hasWhere bool
	inTime   bool
	where    number.Ball
}

// measures by what they look at.
var measureSorts = map[string]byte{
	"delay": 'f', "bandwidth": 'f', "crossover": 'f', "damping": 'f', "natural_frequency": 'f', "quality": 'f',
	"peak": 't', "trough": 't', "final": 't', "mean": 't', "rms": 't', "settle": 't', "overshoot": 't', "rise": 't',
	"last_above": 't', "last_below": 't', "energy": 'p', "phase": 'f',
}

// isMeasure tells the figures of merit from functions of numbers.
func isMeasure(name string) bool { return measureSorts[name] != 0 }

// measure computes a figure of merit.
func (a *Analysis) measure(ctx context.Context, e *dialect.Call, at spot, prec uint) (measured, error) {
	switch measureSorts[e.Name] {
	case 'f':
		return a.functionMeasure(ctx, e, at, prec)
	case 'p':
		return a.energy(ctx, e, at)
	}
	curve, err := a.curve(ctx, e.Args[0], at.configuration)
	if err != nil {
		return measured{}, err
	}
	m, err := timeMeasure(ctx, e, curve, rangeOf(at))
	if err != nil {
		return m, a.measureError(e.Name, err)
	}
	return m, nil
}

// measureError words what a signal's course does not allow.
func (a *Analysis) measureError(name string, err error) error {
	if _, ok := asRefusal(err); ok || isCancelled(err) {
		return err
	}
	why := strings.TrimPrefix(err.Error(), response.ErrUndefined.Error()+": ")
	return refuse("undefined-measure", fmt.Sprintf("%s is not defined here: %s", name, why))
}

// functionMeasure computes a figure of merit of a network function.
func (a *Analysis) functionMeasure(ctx context.Context, e *dialect.Call, at spot, prec uint) (measured, error) {
	f, err := a.function(ctx, e.Args[0], at.configuration)
	if err != nil {
		return measured{}, err
	}
	h := f.constant
	switch e.Name {
	case "phase", "delay":
		return angleMeasure(ctx, e.Name, h, at, prec)
	case "bandwidth":
		band, err := frequency.Bandwidth(ctx, h, prec)
		if err != nil {
			return measured{}, a.measureError(e.Name, err)
		}
		return measured{value: band.Width()}, nil
	case "crossover":
		w, err := frequency.Crossover(ctx, h, prec)
		if err != nil {
			return measured{}, a.measureError(e.Name, err)
		}
		return measured{value: w}, nil
	}
	pair, err := frequency.LeastDamped(ctx, h, prec)
	if err != nil {
		return measured{}, a.measureError(e.Name, err)
	}
	switch e.Name {
	case "damping":
		return measured{value: pair.Damping}, nil
	case "quality":
		if pair.Damping.ContainsZero() {
			return measured{}, refuse("undefined-measure", "quality is not defined here: the pole lies on the imaginary axis, without damping")
		}
		return measured{value: pair.Quality(prec)}, nil
	}
	return measured{value: pair.Natural}, nil
}

// angleMeasure is the continuous phase or the group delay at a frequency.
func angleMeasure(ctx context.Context, name string, h exact.Ratio, at spot, prec uint) (measured, error) {
	if at.omega == nil {
		return measured{}, refuse("frequency-missing", fmt.Sprintf("%s depends on frequency: say at which, as in “at 1 kHz”", name))
	}
	if h.IsZero() {
		return measured{}, refuse("undefined-measure", "a function that is zero everywhere has no "+name)
	}
	if name == "delay" {
		d := frequency.Delay(h)
		return measured{value: d.Num.EvalBall(*at.omega).Quo(d.Den.EvalBall(*at.omega))}, nil
	}
	phase, err := frequency.NewPhase(ctx, h, prec)
	if err != nil {
		return measured{}, err
	}
	return measured{value: phase.At(*at.omega)}, nil
}

// rangeOf reads the range of time that a measure looks at.
func rangeOf(at spot) response.Range {
	var r response.Range
	if at.from != nil {
		r.From = at.from.Value.Rat()
	}
	if at.to != nil {
		r.To = at.to.Value.Rat()
	}
	return r
}

// timeMeasure computes a figure of merit of a signal over a range.
func timeMeasure(ctx context.Context, e *dialect.Call, c *response.Curve, r response.Range) (measured, error) {
	instant := func(t number.Ball, err error) (measured, error) {
		return measured{value: t}, err
	}
	extreme := func(x response.Extreme, err error) (measured, error) {
		return measured{value: x.Value, hasWhere: x.HasAt, inTime: true, where: x.At}, err
	}
	switch e.Name {
	case "peak":
		return extreme(c.Peak(ctx, r))
	case "trough":
		return extreme(c.Trough(ctx, r))
	case "final":
		v, _, err := c.Final(ctx)
		return measured{value: v}, err
	case "mean":
		v, err := c.Mean(ctx, r)
		return measured{value: v}, err
	case "rms":
		v, err := c.RMS(ctx, r)
		return measured{value: v}, err
	case "settle":
		return instant(settle(ctx, c, constantArgument(e, 1)))
	case "overshoot":
		v, x, err := c.Overshoot(ctx)
		return measured{value: v, hasWhere: x.HasAt, inTime: true, where: x.At}, err
	case "rise":
		v, start, err := c.Rise(ctx)
		return measured{value: v, hasWhere: true, inTime: true, where: start}, err
	case "last_above":
		return instant(c.LastAbove(ctx, constantArgument(e, 1), r))
	case "last_below":
		return instant(c.LastBelow(ctx, constantArgument(e, 1), r))
	}
	return measured{}, errNoValue
}

// settle is the last instant outside a band around the final value: a part of
// that value, or where it is zero, of the largest distance from it.
func settle(ctx context.Context, c *response.Curve, band number.Exact) (number.Ball, error) {
	final, _, err := c.Final(ctx)
	if err != nil || !final.ContainsZero() {
		if err != nil {
			return number.Ball{}, err
		}
		return c.Settle(ctx, band)
	}
	largest, err := c.Abs().Peak(ctx, response.Range{})
	if err != nil {
		return number.Ball{}, err
	}
	if largest.Value.ContainsZero() {
		return number.BallFromInt(0, 192), nil
	}
	level := number.FromRat(new(big.Rat).Mul(largest.Value.MidRat(), band.Rat()))
	return c.Abs().LastAbove(ctx, level, response.Range{})
}

// constantArgument is a constant argument; settle without one means 1 %.
func constantArgument(e *dialect.Call, k int) number.Exact {
	if k < len(e.Args) {
		if c, ok := e.Args[k].(*dialect.Constant); ok {
			return c.Value
		}
	}
	return number.FromRat(big.NewRat(1, 100))
}

// energy is what a part has absorbed over a range, from 0 on for ever when
// there is none.
func (a *Analysis) energy(ctx context.Context, e *dialect.Call, at spot) (measured, error) {
	p, err := a.power(ctx, dialect.Probe{Letter: 'p', Of: dialect.OfPart, Part: e.Part}, at.configuration)
	if err != nil {
		return measured{}, err
	}
	v, err := p.Integral(ctx, rangeOf(at))
	if err != nil {
		return measured{}, a.measureError("energy", err)
	}
	return measured{value: v}, nil
}

// storedCurve is L·i²/2 or C·v²/2.
func (a *Analysis) storedCurve(ctx context.Context, part int, c configuration) (*response.Curve, error) {
	p := &a.description.Parts[part]
	letter := byte('v')
	if p.Kind == dialect.Inductor {
		letter = 'i'
	}
	s, err := a.probeSignal(ctx, dialect.Probe{Letter: letter, Of: dialect.OfPart, Part: part}, c)
	if err != nil {
		return nil, err
	}
	half, err := p.Value.Quo(number.FromInt(2))
	if err != nil {
		return nil, err
	}
	return s.Times(s, half), nil
}

// measureAnswer answers a question that is one figure of merit.
func (a *Analysis) measureAnswer(ctx context.Context, e *dialect.Call, q *dialect.Question, head Question, c configuration) (Answer, error) {
	var m measured
	_, err := refined(ctx, func(prec uint) (number.ComplexBall, error) {
		at := placeOf(q.Qualifiers, dialect.ShapeNumber, prec)
		at.configuration = c
		var err error
		m, err = a.measure(ctx, e, at, prec)
		return realBall(m.value), err
	})
	if err != nil {
		return nil, err
	}
	return &MeasureAnswer{
		Question: head, Measure: e.Name, Dimension: e.Dim(), Value: m.value,
		HasWhere: m.hasWhere && m.where.IsFinite(), InTime: m.inTime, Where: m.where, Proved: true,
	}, nil
}

// factAnswer decides a fact about a function.
func (a *Analysis) factAnswer(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	call, ok := q.What.(*dialect.Call)
	if !ok || call.Name != "stable" {
		return nil, refuse("not-decided", "this fact cannot be decided")
	}
	f, err := a.function(ctx, call.Args[0], c)
	if err != nil {
		return nil, err
	}
	s := frequency.Decide(f.constant.Den)
	why := stabilityText(s)
	if !f.exact {
		why += ", decided to within the bound of the irrational values"
	}
	return &FactAnswer{Question: head, True: s == frequency.Stable, Why: why, Proved: true}, nil
}

func stabilityText(s frequency.Stability) string {
	switch s {
	case frequency.Stable:
		return "every pole has a negative real part"
	case frequency.Marginal:
		return "simple poles lie on the imaginary axis: a disturbance neither grows nor dies away"
	}
	return "a pole lies in the right half-plane, or more than one at a place on the imaginary axis: a disturbance grows"
}

// turningInstants gives the places of peak and trough inside a range.
func turningInstants(ctx context.Context, c *response.Curve, from, to *big.Rat) []*big.Rat {
	r := response.Range{From: from, To: to}
	var out []*big.Rat
	for _, find := range []func(context.Context, response.Range) (response.Extreme, error){c.Peak, c.Trough} {
		x, err := find(ctx, r)
		if err == nil && x.HasAt {
			out = append(out, shownRat(roundTo(x.At.MidFloat64(), 9)))
		}
	}
	return out
}
