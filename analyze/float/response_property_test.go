package float

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"portlight/analyze/network"
	"portlight/analyze/response"
	"portlight/dialect/number"
)

// closedForm is the same setup for the package that solves in closed form.
func closedForm(s Setup) response.Setup {
	value := func(x float64) number.Exact { return number.FromRat(new(big.Rat).SetFloat64(x)) }
	terms := func(list []Term) (out []response.WaveTerm) {
		for _, t := range list {
			out = append(out, response.WaveTerm{Power: t.Power, Rate: value(t.Rate), Omega: value(t.Omega), Cosine: value(t.Cosine), Sine: value(t.Sine)})
		}
		return out
	}
	var out response.Setup
	for _, v := range s.Intervals {
		out.Intervals = append(out.Intervals, response.Interval{Start: value(v.Start), System: v.Solver.system})
	}
	for _, src := range s.Sources {
		w := response.Wave{Always: terms(src.Wave.Always)}
		for _, p := range src.Wave.Pieces {
			q := response.WavePiece{From: value(p.From), Terms: terms(p.Terms)}
			if p.Impulse != 0 {
				q.Impulses = []number.Exact{value(p.Impulse)}
			}
			w.Pieces = append(w.Pieces, q)
		}
		out.Sources = append(out.Sources, response.Source{Element: src.Element, Wave: w})
	}
	for _, x := range s.Initial {
		out.Initial = append(out.Initial, response.Initial{Element: x.Element, Index: x.Index, Value: value(x.Value)})
	}
	return out
}

// compare asks both and returns the worst error over its radius, and the
// greatest radius over the greatest value.
func compare(t *testing.T, label string, setup Setup, times []float64, outputs ...func(*network.System) (network.Output, error)) (worst, wide float64) {
	ctx := context.Background()
	r, err := NewResponse(setup)
	if err != nil {
		t.Fatal(label, err)
	}
	got, err := r.Values(ctx, times, outputs...)
	if errors.Is(err, ErrSteps) || errors.Is(err, ErrRange) {
		return 0, math.Inf(1)
	}
	if err != nil {
		t.Fatal(label, err)
	}
	solution, err := response.Solve(ctx, closedForm(setup))
	if err != nil {
		t.Fatal(label, err)
	}
	for i, output := range outputs {
		signal, err := solution.Signal(ctx, output)
		if err != nil {
			t.Fatal(label, err)
		}
		largest, radius := 0.0, 0.0
		for k, x := range times {
			v := got[i][k]
			for _, part := range []struct {
				signal      *response.Signal
				got, radius float64
			}{{signal, v.Total, v.TotalRadius}, {signal.ZeroInput(), v.ZeroInput, v.ZeroInputRadius}, {signal.ZeroState(), v.ZeroState, v.ZeroStateRadius}} {
				ball, err := part.signal.Value(ctx, new(big.Rat).SetFloat64(x), response.Right, 18)
				if err != nil && !errors.Is(err, response.ErrPrecision) {
					t.Fatal(label, err)
				}
				want := ball.MidFloat64()
				d := math.Abs(part.got - want)
				if !(d <= part.radius) {
					t.Errorf("%s, output %d at %g: %.17g ± %.3g, want %.17g, off %.3g", label, i, x, part.got, part.radius, want, d)
				}
				worst = max(worst, d/part.radius)
				if !math.IsInf(part.radius, 1) {
					largest, radius = max(largest, math.Abs(want)), max(radius, part.radius)
				}
			}
		}
		if largest > 0 {
			wide = max(wide, radius/largest)
		}
	}
	return worst, wide
}

func randomWave(r *rand.Rand, end float64) Wave {
	var w Wave
	term := func() Term {
		t := Term{Cosine: r.Float64() * 5, Power: r.IntN(2) * r.IntN(2)}
		if t.Power > 0 {
			t.Cosine /= end
		}
		if r.IntN(2) == 0 {
			t.Omega = r.Float64() * 30 / end
			t.Sine = r.Float64()
		}
		if r.IntN(2) == 0 {
			t.Rate = -r.Float64() * 10 / end
		}
		return t
	}
	if r.IntN(2) == 0 {
		w.Always = append(w.Always, term())
	}
	for range r.IntN(3) {
		p := Piece{From: math.Round(r.Float64()*4) / 8 * end, Terms: []Term{term()}}
		if r.IntN(3) == 0 {
			p.Impulse = r.Float64() * end
		}
		w.Pieces = append(w.Pieces, p)
	}
	return w
}

// TestResponsesAgainstClosedForms compares with closed forms from exact
// partial fractions, on random networks with sources, initial states, impulses
// and a switch.
func TestResponsesAgainstClosedForms(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	cases, wideOnes := 0, 0
	for seed := range responseSeeds {
		r := rand.New(rand.NewPCG(seed, 11))
		b := randomNetwork(t, r, 2+r.IntN(5), 4, seed%4 > 0)
		sys, _ := network.Assemble(&b.Network)
		if sys == nil {
			continue
		}
		s, err := New(sys)
		if err != nil {
			t.Fatal(err)
		}
		if det, err := sys.Determinant(context.Background()); err != nil || det.IsZero() {
			continue
		}
		setup := Setup{Intervals: []Interval{{0, s}}}
		end := math.Exp(r.Float64()*4) * 1e-6
		for i, e := range b.Elements {
			if e.Kind == network.VoltageSource || e.Kind == network.CurrentSource {
				setup.Sources = append(setup.Sources, Source{i, randomWave(r, end)})
			}
		}
		for k, m := range sys.Memories() {
			if k%2 == 0 && b.Elements[m.Element].Kind != network.Immittance {
				setup.Initial = append(setup.Initial, Initial{m.Element, m.Index, r.Float64() * 1e-2})
			}
		}
		if r.IntN(2) == 0 {
			if other := switched(b); other != nil {
				setup.Intervals = append(setup.Intervals, Interval{end / 3, other})
			}
		}
		times := []float64{0, end / 7, end / 4, end / 3, end / 2, 0.7 * end, end}
		_, wide := compare(t, fmt.Sprint("seed ", seed), setup, times, voltage(1), voltage(2), current(0), current(1))
		if cases++; wide > 1e-4 {
			t.Logf("seed %d: radius %g of the greatest value", seed, wide)
			wideOnes++
		}
	}
	if cases < 30 || wideOnes > cases/10 {
		t.Errorf("%d cases, %d with a wide radius", cases, wideOnes)
	}
}

// switched is the network with its first resistor opened nearly.
func switched(b *builder) *Solver {
	n := b.Network
	n.Elements = append([]network.Element(nil), n.Elements...)
	for i := range n.Elements {
		if n.Elements[i].Kind == network.Resistor {
			n.Elements[i].Value = b.value("1e6")
			sys, _ := network.Assemble(&n)
			if sys == nil {
				return nil
			}
			if det, err := sys.Determinant(context.Background()); err != nil || det.IsZero() {
				return nil
			}
			s, err := New(sys)
			if err != nil {
				return nil
			}
			return s
		}
	}
	return nil
}

// responseSeeds is how many random networks are looked at.
var responseSeeds = uint64(60)
