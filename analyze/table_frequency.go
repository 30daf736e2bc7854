package analyze

import (
	"context"
	"math"
	"math/big"
	"sort"

	"portlight/analyze/exact"
	"portlight/analyze/frequency"
	"portlight/dialect"
	"portlight/dialect/number"
)

// rowsPerDecade is the spacing of a sweep away from resonances; a magnitude of
// first order changes by at most 1 dB between two rows.
const rowsPerDecade = 20

// mostRows bounds a table, whatever the range.
const mostRows = 2000

// frequencyTable is a sweep over a range of frequency: evenly spread over the
// decades, closer around every resonance, with a row at every extreme of the
// magnitude and at every pole and zero frequency.
func (a *Analysis) frequencyTable(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	low, high, err := frequencyRange(q.Qualifiers)
	if err != nil {
		return nil, err
	}
	complexValued := isRational(q.What)
	out := &TableAnswer{Question: head, Proved: true, Columns: []Column{{Name: "Hz", Dimension: dialect.DimensionFrequency}}}
	if complexValued {
		out.Columns = append(out.Columns, Column{"magnitude", q.What.Dim()}, Column{"phase_deg", dialect.DimensionAngle})
	} else if q.What.Dim().Angle {
		out.Columns = append(out.Columns, Column{"phase_deg", q.What.Dim()})
	} else {
		out.Columns = append(out.Columns, Column{"value", q.What.Dim()})
	}
	hertz := spread(low, high)
	for _, h := range a.functionsIn(ctx, q.What, c) {
		more, err := placesOfInterest(ctx, h, low, high)
		if err != nil {
			return nil, err
		}
		hertz = append(hertz, more...)
	}
	for _, f := range ascending(hertz, low, high) {
		row, double, err := a.frequencyRow(ctx, q.What, c, f, complexValued)
		if err != nil {
			return nil, err
		}
		out.Rows = append(out.Rows, row)
		out.Proved = out.Proved && !double
	}
	return out, nil
}

// frequencyRange reads from … to in Hz.
func frequencyRange(q dialect.Qualifiers) (low, high float64, err error) {
	if q.From == nil || q.To == nil {
		return 0, 0, refuse("range-open", "a table needs both ends of its range: “from 10 Hz to 1 MHz”")
	}
	low, high = hertzOf(q.From), hertzOf(q.To)
	if !(low >= 0 && high > low) {
		return 0, 0, refuse("range-empty", "the range must begin at 0 Hz or above and end higher than it begins")
	}
	return low, high, nil
}

func hertzOf(c *dialect.Constant) float64 { return c.Value.Float() / (2 * math.Pi) }

// spread places frequencies evenly over the decades.
func spread(low, high float64) []float64 {
	start := low
	if start == 0 {
		start = high / 1e4
	}
	n := int(math.Ceil(math.Log10(high/start) * rowsPerDecade))
	n = min(max(n, 10), mostRows/2)
	out := []float64{low, high}
	for k := 0; k <= n; k++ {
		out = append(out, roundTo(start*math.Pow(high/start, float64(k)/float64(n)), 4))
	}
	return out
}

// placesOfInterest lists, in Hz, the extremes of |H| and rows around each pole and
// zero that is far from damped, spaced by its bandwidth.
func placesOfInterest(ctx context.Context, h exact.Ratio, low, high float64) ([]float64, error) {
	var out []float64
	for _, p := range []exact.Poly{h.Num, h.Den} {
		roots, err := rootsOf(ctx, p)
		if err != nil {
			return nil, err
		}
		for _, r := range roots {
			out = append(out, around(r, low, high)...)
		}
	}
	to := number.FromRat(new(big.Rat).SetFloat64(high * 2 * math.Pi))
	points, err := frequency.MagnitudeSquared(h).Extremes(ctx, frequency.Range{To: &to}, 96)
	if err != nil {
		return nil, err
	}
	for _, p := range points {
		if !p.End {
			out = append(out, roundTo(p.Omega.MidFloat64()/(2*math.Pi), 9))
		}
	}
	return out, nil
}

// around spaces rows by the half-width of a resonance at its frequency.
func around(r exact.Root, low, high float64) []float64 {
	re, im := math.Abs(r.Re.MidFloat64()), math.Abs(r.Im.MidFloat64())
	size := math.Hypot(re, im)
	f := size / (2 * math.Pi)
	if f == 0 || f < low/2 || f > high*2 {
		return nil
	}
	if im == 0 || re > size/2 {
		return []float64{roundTo(f, 4)}
	}
	width := math.Max(re/size, 1e-12)
	digits := 4 + int(math.Ceil(-math.Log10(width)))
	var out []float64
	for _, k := range []float64{-8, -4, -2, -1, -0.5, 0, 0.5, 1, 2, 4, 8} {
		out = append(out, roundTo(f*(1+k*width), digits))
	}
	return out
}

// roundTo rounds to so many significant decimal digits.
func roundTo(x float64, digits int) float64 {
	if x == 0 || digits > 15 {
		return x
	}
	scale := math.Pow(10, float64(digits-1)-math.Floor(math.Log10(math.Abs(x))))
	return math.Round(x*scale) / scale
}

// ascending sorts, drops what lies outside and what is there twice.
func ascending(xs []float64, low, high float64) []float64 {
	sort.Float64s(xs)
	var out []float64
	for _, x := range xs {
		if x < low || x > high || len(out) > 0 && x == out[len(out)-1] {
			continue
		}
		out = append(out, x)
	}
	if len(out) > mostRows {
		out = out[:mostRows]
	}
	return out
}

// frequencyRow evaluates one row.
func (a *Analysis) frequencyRow(ctx context.Context, e dialect.Expression, c configuration, hertz float64, complexValued bool) (row []number.Ball, double bool, err error) {
	f := shownRat(hertz)
	v, err := refined(ctx, func(prec uint) (number.ComplexBall, error) {
		two := new(big.Rat).Mul(f, big.NewRat(2, 1))
		w := number.BallFromExact(number.Pi(), prec).MulRat(two)
		return a.value(ctx, e, spot{configuration: c, omega: &w, double: &double}, prec)
	})
	if err != nil {
		return nil, double, err
	}
	row = []number.Ball{number.BallFromRat(f, 96)}
	if complexValued {
		return append(row, v.Abs(), degrees(angle(v))), double, nil
	}
	if e.Dim().Angle {
		v.Re = degrees(v.Re)
	}
	return append(row, v.Re), double, nil
}

// shownRat is the decimal number that a float64 is shown as.
func shownRat(x float64) *big.Rat {
	r, ok := new(big.Rat).SetString(formatFloat(x))
	if !ok {
		return new(big.Rat)
	}
	return r
}

// functionsIn collects the rational functions that an expression looks at.
func (a *Analysis) functionsIn(ctx context.Context, e dialect.Expression, c configuration) []exact.Ratio {
	if e.Shape() == dialect.ShapeFunction && isRational(e) && !e.Dim().Level {
		if f, err := a.function(ctx, e, c); err == nil && !f.constant.IsZero() {
			return []exact.Ratio{f.constant}
		}
	}
	var out []exact.Ratio
	switch e := e.(type) {
	case *dialect.Call:
		for _, x := range e.Args {
			out = append(out, a.functionsIn(ctx, x, c)...)
		}
	case *dialect.Negate:
		out = a.functionsIn(ctx, e.X, c)
	case *dialect.Binary:
		out = append(a.functionsIn(ctx, e.X, c), a.functionsIn(ctx, e.Y, c)...)
	}
	return out
}
