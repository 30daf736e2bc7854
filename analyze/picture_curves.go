package analyze

import (
	"context"
	"math"
	"math/big"
	"math/cmplx"
	"slices"

	"portlight/analyze/exact"
	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// frequencyWindow is the range in Hz that shows a function's corners: from a
// decade and a half below the lowest to as much above the highest.
func frequencyWindow(a *FunctionAnswer) (low, high float64) {
	low, high = math.Inf(1), 0
	for _, list := range [][]exact.Root{a.Poles, a.Zeros} {
		for _, r := range list {
			f := cmplx.Abs(complexFloat(r)) / (2 * math.Pi)
			if f > 0 && !math.IsInf(f, 0) {
				low, high = min(low, f), max(high, f)
			}
		}
	}
	if high == 0 {
		return 1, 1e6
	}
	return decadeFloor(low / 20), decadeCeil(high * 20)
}

func decadeFloor(f float64) float64 { return math.Pow(10, math.Floor(math.Log10(f)+1e-9)) }
func decadeCeil(f float64) float64  { return math.Pow(10, math.Ceil(math.Log10(f)-1e-9)) }

func complexFloat(r exact.Root) complex128 { return complex(r.Re.MidFloat64(), r.Im.MidFloat64()) }

// functionCurves samples magnitude and phase over a logarithmic range in Hz.
func functionCurves(a *FunctionAnswer, low, high float64) []PlotCurve {
	x := logSpace(low, high, curvePoints)
	values := make([]complex128, len(x))
	for i, f := range x {
		values[i] = valueAtHertz(a.Ratio, f)
	}
	return responseCurves(x, values, a.Dimension)
}

func logSpace(low, high float64, n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = low * math.Pow(high/low, float64(i)/float64(n-1))
	}
	return x
}

// valueAtHertz evaluates a function on the imaginary axis with enough guard
// bits that cancellation does not show, NaN at a pole.
func valueAtHertz(f exact.Ratio, hertz float64) complex128 {
	prec := uint(128 + 4*(f.Num.Degree()+f.Den.Degree()))
	s := number.ComplexBall{Re: number.BallFromInt(0, prec), Im: number.BallFromFloat64(2*math.Pi*hertz, prec)}
	v := f.EvalComplexBall(s)
	if !v.IsFinite() {
		return cmplx.NaN()
	}
	return complex(v.Re.MidFloat64(), v.Im.MidFloat64())
}

// responseCurves makes the two panels: magnitude, in dB for plain ratios, and
// phase, followed without jumps.
func responseCurves(x []float64, values []complex128, d dialect.Dimension) []PlotCurve {
	magnitude := make([]float64, len(x))
	phase := make([]float64, len(x))
	turn := 0.0
	for i, v := range values {
		magnitude[i] = cmplx.Abs(v)
		phase[i] = cmplx.Phase(v)*180/math.Pi + turn
		if i > 0 && !math.IsNaN(phase[i-1]) {
			step := math.Round((phase[i]-phase[i-1])/360) * 360
			phase[i] -= step
			turn -= step
		}
	}
	title, unit := "magnitude", d.Unit()
	if d.Dimensionless() {
		unit = "dB"
		for i, m := range magnitude {
			magnitude[i] = 20 * math.Log10(m)
		}
	}
	return []PlotCurve{
		{Title: title, XLabel: "Hz", YLabel: unit, LogX: true, X: x, Y: [][]float64{magnitude}, Names: []string{"magnitude"}},
		{Title: "phase", XLabel: "Hz", YLabel: "°", LogX: true, X: x, Y: [][]float64{phase}, Names: []string{"phase"}},
	}
}

// tableCurves plots every column over the first, those of one unit together.
func tableCurves(a *TableAnswer) []PlotCurve {
	if len(a.Columns) == 0 || len(a.Rows) == 0 {
		return nil
	}
	unit := columnUnit(a.Columns[0])
	x := make([]float64, len(a.Rows))
	for i, row := range a.Rows {
		x[i] = row[0].MidFloat64()
	}
	overFrequency := unit == "Hz" || unit == "rad/s"
	logX := overFrequency && x[0] > 0
	var panels []PlotCurve
	for j, c := range a.Columns[1:] {
		y := make([]float64, len(a.Rows))
		for i, row := range a.Rows {
			y[i] = row[j+1].MidFloat64()
		}
		last := len(panels) - 1
		yUnit := columnUnit(c)
		if overFrequency && c.Name == "magnitude" && c.Dimension.Dimensionless() {
			yUnit = "dB"
			for i := range y {
				y[i] = 20 * math.Log10(y[i])
			}
		}
		if last >= 0 && panels[last].YLabel == yUnit && !overFrequency {
			panels[last].Title = a.Asked()
			panels[last].Y, panels[last].Names = append(panels[last].Y, y), append(panels[last].Names, columnTitle(c))
			continue
		}
		panels = append(panels, PlotCurve{
			Title: columnTitle(c), XLabel: unit, YLabel: yUnit, LogX: logX,
			X: x, Y: [][]float64{y}, Names: []string{columnTitle(c)},
		})
	}
	return panels
}

// signalCurve samples a signal, over a window or from 0 until it has settled,
// its zero-input and zero-state parts beside it where both are there.
func signalCurve(ctx context.Context, a *SignalAnswer, w window) (PlotCurve, error) {
	end := w.high
	if end <= w.low {
		settled, err := timeWindow(ctx, a.Signal)
		if err != nil {
			return PlotCurve{}, err
		}
		end = w.low + settled
	}
	curve := PlotCurve{Title: a.Asked(), XLabel: "s", YLabel: a.Dimension.Unit()}
	parts := []struct {
		name   string
		signal *response.Signal
	}{{"total", a.Signal}}
	if zi, zs := a.Signal.ZeroInput(), a.Signal.ZeroState(); !zi.IsZero() && !zs.IsZero() {
		parts = append(parts, struct {
			name   string
			signal *response.Signal
		}{"zero-input part", zi}, struct {
			name   string
			signal *response.Signal
		}{"zero-state part", zs})
	}
	curve.X = instants(a.Signal.Breakpoints(), w.low, end)
	for _, p := range parts {
		sampler, err := p.signal.Sampler(ctx)
		if err != nil {
			return PlotCurve{}, err
		}
		y, _ := sampler.Sample(curve.X)
		curve.Y, curve.Names = append(curve.Y, y), append(curve.Names, p.name)
	}
	return curve, nil
}

// productCurve samples a power and the like.
func productCurve(ctx context.Context, a *CurveAnswer, w window) (PlotCurve, error) {
	pieces, err := a.Curve.Pieces(ctx, shownDigits+8)
	if err != nil {
		return PlotCurve{}, err
	}
	end := w.high
	if end <= w.low {
		end = w.low + windowOf(pieces)
	}
	curve := PlotCurve{Title: a.Asked(), XLabel: "s", YLabel: a.Dimension.Unit(), Names: []string{"total"}}
	var breaks []*big.Rat
	for _, p := range pieces {
		breaks = append(breaks, p.From.Rat())
	}
	curve.X = instants(breaks, w.low, end)
	y := make([]float64, len(curve.X))
	for i, t := range curve.X {
		y[i] = sampled(pieces, t)
	}
	curve.Y = [][]float64{y}
	return curve, nil
}

// sampled adds up the terms of pieces at a time, in double precision.
func sampled(pieces []response.Piece, t float64) float64 {
	sum := 0.0
	for _, p := range pieces {
		tau := t - p.From.Float()
		if tau < 0 || p.Until != nil && t >= p.Until.Float() {
			continue
		}
		for _, x := range p.Terms {
			c := complex(x.Coefficient.Re.MidFloat64(), x.Coefficient.Im.MidFloat64())
			pole := complex(x.Pole.Re.MidFloat64(), x.Pole.Im.MidFloat64())
			sum += real(c*cmplx.Exp(pole*complex(tau, 0))) * math.Pow(tau, float64(x.Power))
		}
	}
	return sum
}

// instants are evenly spaced, with both sides of every instant where the
// signal may jump.
func instants(breaks []*big.Rat, low, high float64) []float64 {
	var x []float64
	for i := range curvePoints {
		x = append(x, low+(high-low)*float64(i)/(curvePoints-1))
	}
	for _, b := range breaks {
		at, _ := b.Float64()
		before := at - (high-low)*1e-9
		if at > low && at < high && before > low {
			x = append(x, before, at)
		}
	}
	slices.Sort(x)
	return x
}

// timeWindow is how long a signal is drawn: beyond the last instant where
// something begins, six of the slowest time constants that count, or six
// periods of a lasting oscillation.
func timeWindow(ctx context.Context, s *response.Signal) (float64, error) {
	pieces, err := s.Pieces(ctx, shownDigits)
	if err != nil {
		return 0, err
	}
	return windowOf(pieces), nil
}

// windowOf is timeWindow for a closed form.
func windowOf(pieces []response.Piece) float64 {
	last, span := 0.0, 0.0
	for _, p := range pieces {
		from, _ := p.From.Rat().Float64()
		last = max(last, from)
		if p.Until != nil {
			last = max(last, p.Until.Float())
		}
		largest := 0.0
		for _, t := range p.Terms {
			largest = max(largest, t.Coefficient.Abs().MidFloat64())
		}
		for _, t := range p.Terms {
			if t.Power == 0 && t.Coefficient.Abs().MidFloat64() < 1e-3*largest {
				continue
			}
			sigma, omega := math.Abs(t.Pole.Re.MidFloat64()), math.Abs(t.Pole.Im.MidFloat64())
			switch {
			case sigma > 0:
				span = max(span, 6/sigma)
			case omega > 0:
				span = max(span, 6*2*math.Pi/omega)
			}
		}
	}
	end := last + span
	if span == 0 {
		end = max(2*last, 0)
	}
	if end == 0 {
		end = 1
	}
	return niceCeil(end)
}

// niceCeil rounds up to 1, 1.5, 2, 3, 5 or 8 times a power of ten.
func niceCeil(x float64) float64 {
	base := math.Pow(10, math.Floor(math.Log10(x)))
	for _, m := range []float64{1, 1.5, 2, 3, 5, 8, 10} {
		if x <= m*base*(1+1e-9) {
			return m * base
		}
	}
	return 10 * base
}

func rootMap(a *RootsAnswer) *RootMap {
	m := &RootMap{}
	for _, r := range a.Roots {
		z := complexFloat(r)
		if a.Zeros {
			m.Zeros, m.ZeroCount = append(m.Zeros, z), append(m.ZeroCount, r.Multiplicity)
		} else {
			m.Poles, m.PoleCount = append(m.Poles, z), append(m.PoleCount, r.Multiplicity)
		}
	}
	return m
}
