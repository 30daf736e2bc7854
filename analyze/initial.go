package analyze

import (
	"context"
	"math/big"

	"portlight/analyze/network"
	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// initialAnswer lists every capacitor voltage and inductor current at 0− and 0+.
func (a *Analysis) initialAnswer(ctx context.Context, head Question, c configuration) (Answer, error) {
	out := &InitialAnswer{Question: head}
	state, err := a.initialState(ctx, c)
	if err != nil {
		return nil, err
	}
	before := map[network.Memory]number.Exact{}
	for _, x := range state.initial {
		before[network.Memory{Element: x.Element, Index: x.Index}] = x.Value
	}
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if !wired(p) || p.Kind != dialect.Capacitor && p.Kind != dialect.Inductor {
			continue
		}
		s := InitialState{Part: p.Name, Dimension: dialect.DimensionVoltage, Before: before[network.Memory{Element: i}]}
		letter := byte('v')
		if p.Kind == dialect.Inductor {
			letter, s.Dimension = 'i', dialect.DimensionCurrent
		}
		signal, err := a.probeSignal(ctx, dialect.Probe{Letter: letter, Of: dialect.OfPart, Part: i}, c)
		if err != nil {
			return nil, err
		}
		if s.After, err = valueAfter(ctx, signal); err != nil {
			return nil, err
		}
		out.Parts = append(out.Parts, s)
	}
	return out, nil
}

// valueAfter is the right limit at 0, exact where it is rational for sure.
func valueAfter(ctx context.Context, s *response.Signal) (number.Exact, error) {
	r, ok, err := s.ExactAt(ctx, new(big.Rat), response.Right)
	if err != nil {
		return number.Exact{}, err
	}
	if ok {
		return number.FromRat(r), nil
	}
	v, err := s.Value(ctx, new(big.Rat), response.Right, 60)
	if err != nil {
		return number.Exact{}, err
	}
	return number.FromRat(v.MidRat()), nil
}
