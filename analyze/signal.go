package analyze

import (
	"context"
	"errors"
	"fmt"

	"portlight/analyze/network"
	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// past is the state at 0− and how it came about.
type past struct {
	steady  bool
	initial []response.Initial
	exact   bool
}

// initialState finds the state at 0−: rest with what initially says, or the
// steady state of what has acted for ever.
func (a *Analysis) initialState(ctx context.Context, c configuration) (past, error) {
	c.drives = nil // what a question puts at a port is put there at t = 0
	return recall(ctx, &a.shared().memo, "state "+c.key(), func(ctx context.Context) (past, error) {
		if !a.description.Steady {
			return a.restState(), nil
		}
		return a.steadyState(ctx, c)
	})
}

// restState is what initially says, and zero for everything else.
func (a *Analysis) restState() past {
	out := past{exact: true}
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.Initial != nil && wired(p) && (p.Kind == dialect.Capacitor || p.Kind == dialect.Inductor) {
			out.initial = append(out.initial, response.Initial{Element: i, Value: *p.Initial})
			out.exact = out.exact && p.Initial.IsExact()
		}
	}
	return out
}

// steadyState solves the network as it stood before t = 0.
func (a *Analysis) steadyState(ctx context.Context, c configuration) (past, error) {
	sources := map[int][]network.Sinusoid{}
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.Waveform == nil {
			continue
		}
		for _, t := range p.Waveform.Always {
			if t.Power != 0 || t.Rate.Rat().Sign() != 0 {
				return past{}, refuse("no-steady-state", fmt.Sprintf(
					"%s grows or dies away and has no unit step, so it has no steady state before t = 0: multiply it by u(t), or use start rest",
					p.Name))
			}
			sources[i] = append(sources[i], network.Sinusoid{Omega: t.Omega, Cosine: t.Cosine, Sine: t.Sine})
		}
	}
	given := map[int]number.Exact{}
	for _, x := range a.restState().initial {
		given[x.Element] = x.Value
	}
	state, problems, err := a.before(c).SteadyState(ctx, sources, given)
	if err != nil {
		return past{}, err
	}
	if len(problems) > 0 {
		return past{}, a.refuseProblems(problems)
	}
	out := past{steady: true, exact: state.Exact}
	for m, v := range state.Values {
		out.initial = append(out.initial, response.Initial{Element: m.Element, Index: m.Index, Value: number.FromRat(v)})
	}
	return out, nil
}

// solution prepares the responses in time of a configuration.
func (a *Analysis) solution(ctx context.Context, c configuration) (*response.Solution, error) {
	return recall(ctx, &a.shared().memo, "solution "+c.key(), func(ctx context.Context) (*response.Solution, error) {
		state, err := a.initialState(ctx, c)
		if err != nil {
			return nil, err
		}
		setup := response.Setup{Initial: state.initial, Steady: state.steady, Sources: a.waves()}
		for _, iv := range a.intervals(c) {
			sys, problems := network.Assemble(iv.network)
			if sys == nil {
				return nil, a.refuseProblems(problems)
			}
			if err := a.solvable(ctx, sys); err != nil {
				return nil, err
			}
			setup.Intervals = append(setup.Intervals, response.Interval{Start: iv.start, System: sys})
		}
		if len(a.allSwitches()) > 0 {
			undriven := c
			undriven.drives = nil
			setup.Before, _ = network.Assemble(a.before(undriven))
		}
		return response.Solve(ctx, setup)
	})
}

// solvable refuses equations without a unique solution, and those for which
// closed forms would take too long.
func (a *Analysis) solvable(ctx context.Context, sys *network.System) error {
	if a.largeSystem(ctx, sys) {
		return errLarge
	}
	blocks, err := sys.Blocks(ctx)
	if err != nil {
		return err
	}
	for _, b := range blocks {
		if b.IsZero() {
			return a.refuseSingular(ctx, sys)
		}
	}
	return nil
}

// waves lists the independent sources; their order is that of due.
func (a *Analysis) waves() []response.Source {
	var out []response.Source
	for _, i := range a.independentSources() {
		out = append(out, response.Source{Element: i, Wave: waveOf(a.description.Parts[i].Waveform)})
	}
	return out
}

// independentSources lists the wired independent sources.
func (a *Analysis) independentSources() []int {
	var out []int
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.Waveform != nil && p.Dependent == nil && wired(p) {
			out = append(out, i)
		}
	}
	return out
}

// waveOf carries a waveform over into the form that the responses take.
func waveOf(w *dialect.Waveform) response.Wave {
	var out response.Wave
	terms := func(list []dialect.WaveTerm) []response.WaveTerm {
		var ts []response.WaveTerm
		for _, t := range list {
			ts = append(ts, response.WaveTerm{Power: t.Power, Rate: t.Rate, Omega: t.Omega, Cosine: t.Cosine, Sine: t.Sine})
		}
		return ts
	}
	out.Always = terms(w.Always)
	for _, p := range w.Pieces {
		out.Pieces = append(out.Pieces, response.WavePiece{From: p.From, Terms: terms(p.Terms), Impulses: p.Impulses})
	}
	return out
}

// probeSignal is an elementary quantity as a signal in time.
func (a *Analysis) probeSignal(ctx context.Context, p dialect.Probe, c configuration) (*response.Signal, error) {
	return recall(ctx, &a.shared().memo, "signal "+probeKey(p)+c.key(), func(ctx context.Context) (*response.Signal, error) {
		s, err := a.solution(ctx, c)
		if err != nil {
			return nil, err
		}
		return s.Signal(ctx, func(sys *network.System) (network.Output, error) {
			return a.output(sys, p, noExcitation)
		})
	})
}

// errNotLinear says that an expression is no sum of signals; it can still be a curve.
var errNotLinear = errors.New("not a sum of signals")

// linear evaluates an expression to one signal: sums of quantities with
// constant factors, and the parts of them by cause.
func (a *Analysis) linear(ctx context.Context, e dialect.Expression, c configuration) (*response.Signal, error) {
	e, err := a.withNumbers(ctx, e, c)
	if err != nil {
		return nil, err
	}
	switch e := e.(type) {
	case *dialect.Quantity:
		if e.Probe.Letter == 'p' {
			return nil, errNotLinear
		}
		return a.probeSignal(ctx, e.Probe, c)
	case *dialect.Negate:
		s, err := a.linear(ctx, e.X, c)
		if err != nil {
			return nil, err
		}
		return s.Scale(number.FromInt(-1)), nil
	case *dialect.Binary:
		return a.linearBinary(ctx, e, c)
	case *dialect.Call:
		return a.partSignal(ctx, e, c)
	}
	return nil, errNotLinear
}

func (a *Analysis) linearBinary(ctx context.Context, e *dialect.Binary, c configuration) (*response.Signal, error) {
	x, xConstant := e.X.(*dialect.Constant)
	y, yConstant := e.Y.(*dialect.Constant)
	switch {
	case e.Op == '*' && xConstant, e.Op == '*' && yConstant, e.Op == '/' && yConstant:
		k, of := y, e.X
		if xConstant {
			k, of = x, e.Y
		}
		factor := k.Value
		if e.Op == '/' {
			inverse, err := factor.Inv()
			if err != nil {
				return nil, refuse("division-by-zero", "the divisor is zero")
			}
			factor = inverse
		}
		s, err := a.linear(ctx, of, c)
		if err != nil {
			return nil, err
		}
		return s.Scale(factor), nil
	case e.Op == '+' || e.Op == '-':
		return a.linearSum(ctx, e, x, y, c)
	}
	return nil, errNotLinear
}

func (a *Analysis) linearSum(ctx context.Context, e *dialect.Binary, x, y *dialect.Constant, c configuration) (*response.Signal, error) {
	minus := e.Op == '-'
	switch {
	case x != nil:
		s, err := a.linear(ctx, e.Y, c)
		if err != nil {
			return nil, err
		}
		if minus {
			s = s.Scale(number.FromInt(-1))
		}
		return s.AddConstant(x.Value), nil
	case y != nil:
		s, err := a.linear(ctx, e.X, c)
		if err != nil {
			return nil, err
		}
		k := y.Value
		if minus {
			k = k.Neg()
		}
		return s.AddConstant(k), nil
	}
	s, err := a.linear(ctx, e.X, c)
	if err != nil {
		return nil, err
	}
	t, err := a.linear(ctx, e.Y, c)
	if err != nil {
		return nil, err
	}
	if minus {
		return s.Sub(t), nil
	}
	return s.Add(t), nil
}

// partSignal is a part of a signal by its cause.
func (a *Analysis) partSignal(ctx context.Context, e *dialect.Call, c configuration) (*response.Signal, error) {
	if !isPartOf(e.Name) {
		return nil, errNotLinear
	}
	s, err := a.linear(ctx, e.Args[0], c)
	if errors.Is(err, errNotLinear) {
		return nil, refuse("not-linear", e.Name+" is defined for voltages and currents and sums of them only: superposition does not hold for the rest")
	}
	if err != nil {
		return nil, err
	}
	switch e.Name {
	case "zir":
		return s.ZeroInput(), nil
	case "zsr":
		return s.ZeroState(), nil
	case "natural":
		return s.Natural(), nil
	case "forced":
		return s.Forced(), nil
	}
	for k, i := range a.independentSources() {
		if i == e.Part {
			return s.Due(k), nil
		}
	}
	return nil, refuse("never-wired", a.description.Parts[e.Part].Name+" is not wired, so nothing is due to it")
}

// curve evaluates an expression to what measures and limits look at.
func (a *Analysis) curve(ctx context.Context, e dialect.Expression, c configuration) (*response.Curve, error) {
	e, err := a.withNumbers(ctx, e, c)
	if err != nil {
		return nil, err
	}
	s, err := a.linear(ctx, e, c)
	if err == nil {
		return s.Curve(), nil
	}
	if !errors.Is(err, errNotLinear) {
		return nil, err
	}
	switch e := e.(type) {
	case *dialect.Quantity:
		return a.power(ctx, e.Probe, c)
	case *dialect.Negate:
		x, err := a.curve(ctx, e.X, c)
		if err != nil {
			return nil, err
		}
		return x.Neg(), nil
	case *dialect.Binary:
		return a.curveBinary(ctx, e, c)
	case *dialect.Call:
		return a.curveCall(ctx, e, c)
	}
	return nil, refuse("signal-product", "only sums, multiples, products of two, abs, min and max of signals can be followed in time")
}

// power is the power a part absorbs: voltage times current.
func (a *Analysis) power(ctx context.Context, p dialect.Probe, c configuration) (*response.Curve, error) {
	v, i := p, p
	v.Letter, i.Letter = 'v', 'i'
	voltage, err := a.probeSignal(ctx, v, c)
	if err != nil {
		return nil, err
	}
	current, err := a.probeSignal(ctx, i, c)
	if err != nil {
		return nil, err
	}
	return voltage.Times(current, number.FromInt(1)), nil
}

func (a *Analysis) curveBinary(ctx context.Context, e *dialect.Binary, c configuration) (*response.Curve, error) {
	x, xConstant := e.X.(*dialect.Constant)
	y, yConstant := e.Y.(*dialect.Constant)
	switch {
	case (e.Op == '+' || e.Op == '-') && (xConstant || yConstant):
		return a.curveShifted(ctx, e, x, y, c)
	case e.Op == '*' && !xConstant && !yConstant:
		s, err := a.linear(ctx, e.X, c)
		if err != nil {
			break
		}
		t, err := a.linear(ctx, e.Y, c)
		if err != nil {
			break
		}
		return s.Times(t, number.FromInt(1)), nil
	case e.Op == '+' || e.Op == '-':
		s, err := a.curve(ctx, e.X, c)
		if err != nil {
			return nil, err
		}
		t, err := a.curve(ctx, e.Y, c)
		if err != nil {
			return nil, err
		}
		if e.Op == '-' {
			return s.Sub(t), nil
		}
		return s.Add(t), nil
	case e.Op == '*' && xConstant, (e.Op == '*' || e.Op == '/') && yConstant:
		return a.curveScaled(ctx, e, x, y, c)
	}
	return nil, refuse("signal-product", "only sums, multiples, products of two, abs, min and max of signals can be followed in time")
}

func (a *Analysis) curveShifted(ctx context.Context, e *dialect.Binary, x, y *dialect.Constant, c configuration) (*response.Curve, error) {
	if x != nil {
		s, err := a.curve(ctx, e.Y, c)
		if err != nil {
			return nil, err
		}
		if e.Op == '-' {
			s = s.Neg()
		}
		return s.AddConstant(x.Value), nil
	}
	s, err := a.curve(ctx, e.X, c)
	if err != nil {
		return nil, err
	}
	if e.Op == '-' {
		return s.AddConstant(y.Value.Neg()), nil
	}
	return s.AddConstant(y.Value), nil
}

func (a *Analysis) curveScaled(ctx context.Context, e *dialect.Binary, x, y *dialect.Constant, c configuration) (*response.Curve, error) {
	k, of := y, e.X
	if x != nil {
		k, of = x, e.Y
	}
	s, err := a.curve(ctx, of, c)
	if err != nil {
		return nil, err
	}
	factor := k.Value
	if e.Op == '/' {
		if factor, err = factor.Inv(); err != nil {
			return nil, refuse("division-by-zero", "the divisor is zero")
		}
	}
	return s.Scale(factor), nil
}

func (a *Analysis) curveCall(ctx context.Context, e *dialect.Call, c configuration) (*response.Curve, error) {
	var args []*response.Curve
	var constants []number.Exact
	for _, x := range e.Args {
		if k, ok := x.(*dialect.Constant); ok {
			constants = append(constants, k.Value)
			continue
		}
		s, err := a.curve(ctx, x, c)
		if err != nil {
			return nil, err
		}
		args = append(args, s)
	}
	for _, k := range constants {
		args = append(args, args[0].Scale(number.FromInt(0)).AddConstant(k))
	}
	switch e.Name {
	case "stored":
		return a.storedCurve(ctx, e.Part, c)
	case "abs":
		return args[0].Abs(), nil
	case "min", "max":
		out := args[0]
		for _, s := range args[1:] {
			if e.Name == "min" {
				out = response.Least(out, s)
			} else {
				out = response.Greatest(out, s)
			}
		}
		return out, nil
	}
	return nil, refuse("signal-product", e.Name+" of a signal cannot be followed in time")
}
