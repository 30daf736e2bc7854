package analyze

import (
	"context"
	"errors"
	"fmt"

	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// rating is one figure a part must not exceed.
type rating struct {
	limit  *number.Exact
	letter byte // the quantity: v, i or p
	unit   string
	mean   bool // the long-run mean counts, otherwise the peak of the magnitude
}

// ratings warns of parts driven beyond what they are rated for, over all
// t ≥ 0: the mean power of resistors, the peak voltage or current of the rest.
func (a *Analysis) ratings(ctx context.Context) ([]dialect.Finding, error) {
	var found []dialect.Finding
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if !wired(p) {
			continue
		}
		for _, r := range []rating{
			{p.RatedPower, 'p', "W", true}, {p.RatedVoltage, 'v', "V", false}, {p.RatedCurrent, 'i', "A", false},
		} {
			if r.limit == nil {
				continue
			}
			f, ok, err := a.rating(ctx, i, r)
			if passOn(ctx, err) {
				return nil, err
			}
			if err == nil && ok {
				found = append(found, f)
			}
		}
	}
	return found, nil
}

func (a *Analysis) rating(ctx context.Context, part int, r rating) (dialect.Finding, bool, error) {
	p := &a.description.Parts[part]
	value, err := a.stress(ctx, part, r)
	what := "peak"
	if r.mean {
		what = "mean"
	}
	f := dialect.Finding{Code: "rating-exceeded", Severity: dialect.Warning, Origin: partOrigin(p)}
	limit := ballOf(*r.limit)
	switch {
	case errors.Is(err, response.ErrUndefined):
		f.Message = fmt.Sprintf("%s is rated for %s, and there is no %s value: %v", p.Name, figure(limit, r.unit), what, err)
		return f, true, nil
	case err != nil:
		return f, false, err
	}
	order, sure := value.Cmp(limit)
	f.Message = fmt.Sprintf("%s is rated for %s and takes a %s of %s", p.Name, figure(limit, r.unit), what, figure(value, r.unit))
	return f, sure && order > 0, nil
}

// stress is what a rating is compared with.
func (a *Analysis) stress(ctx context.Context, part int, r rating) (number.Ball, error) {
	probe := dialect.Probe{Letter: r.letter, Of: dialect.OfPart, Part: part}
	if r.letter == 'p' {
		curve, err := a.power(ctx, probe, configuration{})
		if err != nil {
			return number.Ball{}, err
		}
		return curve.Mean(ctx, response.Range{})
	}
	s, err := a.probeSignal(ctx, probe, configuration{})
	if err != nil {
		return number.Ball{}, err
	}
	if size, ok := crudeBound(ctx, s); ok && size < r.limit.Float()/2 {
		return number.BallFromFloat64(size, figurePrecision), nil
	}
	x, err := s.Curve().Abs().Peak(ctx, response.Range{})
	return x.Value, err
}

// ballOf is an exact number as a ball for figures.
func ballOf(x number.Exact) number.Ball { return number.BallFromExact(x, figurePrecision) }
