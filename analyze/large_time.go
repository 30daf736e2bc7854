package analyze

import (
	"context"
	"errors"
	"fmt"
	"math/big"

	"portlight/analyze/float"
	"portlight/analyze/network"
	"portlight/dialect"
	"portlight/dialect/number"
)

// What large networks answer in time: values and tables in double precision,
// computed step by step, each with the radius that comparing two computations
// gives.

// steps prepares the response in time of a large network, once.
func (a *Analysis) steps(ctx context.Context, c configuration) (*float.Response, error) {
	return recall(ctx, &a.shared().memo, "steps "+c.key(), func(ctx context.Context) (*float.Response, error) {
		state, err := a.initialState(ctx, c)
		if err != nil {
			return nil, err
		}
		var setup float.Setup
		for _, x := range state.initial {
			setup.Initial = append(setup.Initial, float.Initial{Element: x.Element, Index: x.Index, Value: x.Value.Float()})
		}
		for _, i := range a.independentSources() {
			w, err := doubleWave(&a.description.Parts[i])
			if err != nil {
				return nil, err
			}
			setup.Sources = append(setup.Sources, float.Source{Element: i, Wave: w})
		}
		for _, iv := range a.intervals(c) {
			sys, problems := network.Assemble(iv.network)
			if sys == nil {
				return nil, a.refuseProblems(problems)
			}
			solver, err := float.New(sys)
			if err != nil {
				return nil, err
			}
			setup.Intervals = append(setup.Intervals, float.Interval{Start: iv.start.Float(), Solver: solver})
		}
		return float.NewResponse(setup)
	})
}

// doubleWave carries a waveform over into double precision.
func doubleWave(p *dialect.Part) (float.Wave, error) {
	terms := func(list []dialect.WaveTerm) (out []float.Term) {
		for _, t := range list {
			out = append(out, float.Term{
				Power: t.Power, Rate: t.Rate.Float(), Omega: t.Omega.Float(), Cosine: t.Cosine.Float(), Sine: t.Sine.Float(),
			})
		}
		return out
	}
	w := float.Wave{Always: terms(p.Waveform.Always)}
	for _, piece := range p.Waveform.Pieces {
		q := float.Piece{From: piece.From.Float(), Terms: terms(piece.Terms)}
		for k, x := range piece.Impulses {
			if k > 0 && x.Rat().Sign() != 0 {
				return w, refuse("network-too-large", p.Name+" is the derivative of an impulse, which a network of this size cannot be stepped through")
			}
			if k == 0 {
				q.Impulse = x.Float()
			}
		}
		w.Pieces = append(w.Pieces, q)
	}
	return w, nil
}

// share is one quantity with its factor in a sum of signals.
type share struct {
	factor number.Exact
	probe  dialect.Probe
}

// shares writes an expression as a sum of voltages and currents.
func shares(e dialect.Expression, factor number.Exact) ([]share, bool) {
	switch e := e.(type) {
	case *dialect.Quantity:
		return []share{{factor, e.Probe}}, e.Probe.Letter == 'v' || e.Probe.Letter == 'i'
	case *dialect.Negate:
		return shares(e.X, factor.Neg())
	case *dialect.Binary:
		if k, ok := e.X.(*dialect.Constant); ok && e.Op == '*' {
			return shares(e.Y, factor.Mul(k.Value))
		}
		if k, ok := e.Y.(*dialect.Constant); ok && e.Op == '*' {
			return shares(e.X, factor.Mul(k.Value))
		}
		if e.Op != '+' && e.Op != '-' {
			return nil, false
		}
		x, ok := shares(e.X, factor)
		if e.Op == '-' {
			factor = factor.Neg()
		}
		y, also := shares(e.Y, factor)
		return append(x, y...), ok && also
	}
	return nil, false
}

// valuesInDouble evaluates a sum of signals of a large network at instants:
// total, zero-input and zero-state part.
func (a *Analysis) valuesInDouble(ctx context.Context, e dialect.Expression, c configuration, times []*big.Rat) ([][3]number.Ball, error) {
	list, ok := shares(e, number.FromInt(1))
	if !ok {
		return nil, errLarge
	}
	r, err := a.steps(ctx, c)
	if err != nil {
		return nil, err
	}
	instants := make([]float64, len(times))
	for i, t := range times {
		instants[i], _ = t.Float64()
	}
	values, err := r.Values(ctx, instants, func(sys *network.System) (network.Output, error) {
		var sum network.Output
		for _, s := range list {
			out, err := a.output(sys, s.probe, noExcitation)
			if err != nil {
				return sum, err
			}
			sum = sum.Add(out.Scale(s.factor.Rat()))
		}
		return sum, nil
	})
	if err != nil {
		if _, refused := asRefusal(err); refused || passOn(ctx, err) {
			return nil, err
		}
		return nil, refuse("network-too-large", fmt.Sprintf("the response cannot be computed in double precision: %v", err))
	}
	out := make([][3]number.Ball, len(times))
	for i, v := range values[0] {
		out[i] = [3]number.Ball{within(v.Total, v.TotalRadius), within(v.ZeroInput, v.ZeroInputRadius), within(v.ZeroState, v.ZeroStateRadius)}
	}
	return out, nil
}

// within is a double with a radius.
func within(x, radius float64) number.Ball {
	return number.BallFromFloat64(x, 64).WithRadius(new(big.Float).SetFloat64(radius))
}

// largeValue answers a signal of a large network at a time.
func (a *Analysis) largeValue(ctx context.Context, q *dialect.Question, out *SignalValueAnswer, t *big.Rat, c configuration) (Answer, error) {
	if q.Qualifiers.Before != nil {
		return nil, errLarge // left limits need the closed form
	}
	v, err := a.valuesInDouble(ctx, q.What, c, []*big.Rat{t})
	if err != nil {
		return nil, err
	}
	out.Total, out.ZeroInput, out.ZeroState, out.Proved = v[0][0], v[0][1], v[0][2], false
	return out, nil
}

// largeTable answers a signal of a large network over a range of time.
func (a *Analysis) largeTable(ctx context.Context, q *dialect.Question, out *TableAnswer, from, to *big.Rat, c configuration) (Answer, error) {
	var times []*big.Rat
	span := new(big.Rat).Sub(to, from)
	for k := int64(0); k <= timeRows; k++ {
		times = append(times, new(big.Rat).Add(from, new(big.Rat).Mul(span, big.NewRat(k, timeRows))))
	}
	values, err := a.valuesInDouble(ctx, q.What, c, times)
	if err != nil {
		return nil, err
	}
	out.Proved = false
	out.Columns = append(out.Columns, Column{"zero_input", q.What.Dim()}, Column{"zero_state", q.What.Dim()})
	for i, t := range times {
		out.Rows = append(out.Rows, append([]number.Ball{number.BallFromRat(t, 96)}, values[i][:]...))
	}
	return out, nil
}

// isLarge tells a refusal for size from others.
func isLarge(err error) bool { return errors.Is(err, errLarge) }
