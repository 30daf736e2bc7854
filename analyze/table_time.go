package analyze

import (
	"context"
	"errors"
	"math/big"
	"sort"
	"strconv"

	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// timeRows is how many evenly spaced rows a table over time has, besides
// those at breakpoints and extremes.
const timeRows = 100

// timeTable is a signal over a range of time: evenly spaced instants, the
// places where it changes its form, and its extremes.
func (a *Analysis) timeTable(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	from := new(big.Rat)
	if q.Qualifiers.From != nil {
		from = q.Qualifiers.From.Value.Rat()
	}
	if q.Qualifiers.To == nil {
		return nil, refuse("range-open", "a table over time needs an end: “to 20 ms”")
	}
	to := q.Qualifiers.To.Value.Rat()
	if from.Sign() < 0 || from.Cmp(to) >= 0 {
		return nil, refuse("range-empty", "the range must begin at 0 s or later and end after it begins")
	}
	out := &TableAnswer{Question: head, Proved: true, Columns: []Column{{"s", dialect.DimensionTime}, {"total", q.What.Dim()}}}
	s, err := a.linear(ctx, q.What, c)
	if isLarge(err) {
		return a.largeTable(ctx, q, out, from, to, c)
	}
	if err != nil && !errors.Is(err, errNotLinear) {
		return nil, err
	}
	curve, err := a.curve(ctx, q.What, c)
	if err != nil {
		return nil, err
	}
	value := curve.Value
	columns := []func(context.Context, *big.Rat, response.Side, int) (number.Ball, error){value}
	if s != nil {
		out.Columns = append(out.Columns, Column{"zero_input", q.What.Dim()}, Column{"zero_state", q.What.Dim()})
		columns = append(columns, s.ZeroInput().Value, s.ZeroState().Value)
	}
	for _, t := range a.instants(ctx, curve, s, from, to) {
		row := []number.Ball{number.BallFromRat(t, 96)}
		for _, f := range columns {
			v, err := f(ctx, t, response.Right, answerDigits)
			if err != nil && !errors.Is(err, response.ErrPrecision) {
				return nil, err
			}
			row = append(row, v)
		}
		out.Rows = append(out.Rows, row)
	}
	return out, nil
}

// instants chooses the rows of a table over time.
func (a *Analysis) instants(ctx context.Context, curve *response.Curve, s *response.Signal, from, to *big.Rat) []*big.Rat {
	span := new(big.Rat).Sub(to, from)
	var list []*big.Rat
	for k := int64(0); k <= timeRows; k++ {
		list = append(list, new(big.Rat).Add(from, new(big.Rat).Mul(span, big.NewRat(k, timeRows))))
	}
	if s != nil {
		list = append(list, s.Breakpoints()...)
	}
	for _, t := range turningInstants(ctx, curve, from, to) {
		list = append(list, t)
	}
	sort.Slice(list, func(i, j int) bool { return list[i].Cmp(list[j]) < 0 })
	var out []*big.Rat
	for _, t := range list {
		if t.Cmp(from) < 0 || t.Cmp(to) > 0 || len(out) > 0 && out[len(out)-1].Cmp(t) == 0 {
			continue
		}
		out = append(out, t)
	}
	return out
}

// formatFloat writes a float64 with the fewest digits that tell it apart.
func formatFloat(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }
