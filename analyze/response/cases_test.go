package response

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"math/big"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// The reference cases lie beside the repository; what they are and how their
// figures were made (two independent routes: exact partial fractions, and the
// exponential of a companion matrix) is in SCHEMA.md there.
const casesDir = "../../../shared/cases"

type caseFile struct {
	Name    string
	Network *struct {
		Nodes        []string
		Ground       string
		Elements     []caseElement
		InitialState string `json:"initial_state"`
	}
	Ask []caseAsk
}

type casePair struct{ From, To, Element string }

type caseElement struct {
	Kind, Name, From, To, Value, K, Initial string
	Inductors                               []string
	Control, Primary, Secondary             casePair
	Ratio, Plus, Minus, Out                 string
	DCGain                                  string `json:"dc_gain"`
	Pole, Before, After                     string
	Waveform                                map[string]string
}

type caseOutput struct {
	Voltage []string
	Current string
}

type caseRatio struct{ Num, Den []string }

type caseAsk struct {
	What, Metric, Definition string
	Output                   json.RawMessage
	Expect                   json.RawMessage
	Transform                *struct {
		ZeroInput caseRatio `json:"zero_input"`
		ZeroState caseRatio `json:"zero_state"`
	}
	Impulses *struct {
		ZeroInput []string `json:"zero_input"`
		ZeroState []string `json:"zero_state"`
		Total     []string `json:"total"`
	} `json:"impulses_at_0"`
	AtStart   *string `json:"value_at_0_plus"`
	Tolerance json.RawMessage
}

// caseBuild is a case as networks before and after t = 0, with its solution.
type caseBuild struct {
	file          caseFile
	before, after *network.Network
	elements      map[string]int
	setup         Setup
	solution      *Solution
}

func (b *caseBuild) node(name string) int { return slices.Index(b.file.Network.Nodes, name) }

// buildCase solves a case; ok is false for one without a network or whose
// network must be refused.
func buildCase(t testing.TB, path string) (*caseBuild, bool) {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	b := &caseBuild{elements: map[string]int{}}
	if err := json.Unmarshal(data, &b.file); err != nil {
		t.Fatalf("%s: %v", path, err)
	}
	c := b.file.Network
	if c == nil || c.Ground == "" {
		return b, false
	}
	for i, e := range c.Elements {
		b.elements[e.Name] = i
	}
	b.before = &network.Network{Nodes: len(c.Nodes), Ground: b.node(c.Ground)}
	b.after = &network.Network{Nodes: len(c.Nodes), Ground: b.node(c.Ground)}
	dc := map[int][]network.Sinusoid{}
	for i, e := range c.Elements {
		b.before.Elements = append(b.before.Elements, b.element(t, e, e.Before))
		b.after.Elements = append(b.after.Elements, b.element(t, e, e.After))
		if e.Initial != "" {
			b.setup.Initial = append(b.setup.Initial, Initial{Element: i, Value: num(t, e.Initial)})
		}
		if e.Waveform != nil {
			b.setup.Sources = append(b.setup.Sources, Source{i, caseWave(t, e.Waveform)})
			if e.Waveform["type"] == "dc" {
				dc[i] = []network.Sinusoid{{Cosine: num(t, e.Waveform["value"])}}
			}
		}
	}
	if c.InitialState == "dc_before_switching" {
		b.steady(t, dc)
	}
	return b, true
}

func (b *caseBuild) steady(t testing.TB, dc map[int][]network.Sinusoid) {
	t.Helper()
	state, problems, err := b.before.SteadyState(context.Background(), dc, nil)
	if err != nil || len(problems) > 0 {
		t.Fatalf("%s: steady state: %v %v", b.file.Name, problems, err)
	}
	for m, v := range state.Values {
		b.setup.Initial = append(b.setup.Initial, Initial{m.Element, m.Index, number.FromRat(v)})
	}
	b.setup.Steady = true
	for i := range b.setup.Sources {
		src := &b.setup.Sources[i]
		if len(dc[src.Element]) > 0 {
			src.Wave = Wave{Always: []WaveTerm{{Cosine: dc[src.Element][0].Cosine}}}
		}
	}
}

func (b *caseBuild) solve(t testing.TB) {
	t.Helper()
	after, problems := network.Assemble(b.after)
	if after == nil {
		t.Fatalf("%s: %v", b.file.Name, problems)
	}
	before, problems := network.Assemble(b.before)
	if before == nil {
		t.Fatalf("%s: %v", b.file.Name, problems)
	}
	b.setup.Intervals = []Interval{{System: after}}
	b.setup.Before = before
	s, err := Solve(context.Background(), b.setup)
	if err != nil {
		t.Fatalf("%s: %v", b.file.Name, err)
	}
	b.solution = s
}

func (b *caseBuild) element(t testing.TB, e caseElement, position string) network.Element {
	out := network.Element{Name: e.Name, From: b.node(e.From), To: b.node(e.To)}
	if e.Value != "" {
		out.Value = num(t, e.Value)
	}
	control := func(kind network.Kind, p network.Probe) {
		out.Kind = kind
		out.Controls = []network.Control{{Numerator: []number.Exact{out.Value}, Of: []network.Probe{p}}}
	}
	pair := network.Probe{Quantity: network.NodePair, Plus: b.node(e.Control.From), Minus: b.node(e.Control.To)}
	flow := network.Probe{Quantity: network.ElementFlow, Element: b.elements[e.Control.Element]}
	switch e.Kind {
	case "resistor":
		out.Kind = network.Resistor
	case "inductor":
		out.Kind = network.Inductor
	case "capacitor":
		out.Kind = network.Capacitor
	case "voltage_source":
		out.Kind = network.VoltageSource
	case "current_source":
		out.Kind = network.CurrentSource
	case "mutual":
		out.Kind, out.Mutual = network.Coupling, e.Value != ""
		if e.K != "" {
			out.Value = num(t, e.K)
		}
		out.Coils = [2]int{b.elements[e.Inductors[0]], b.elements[e.Inductors[1]]}
	case "vcvs":
		control(network.DependentVoltage, pair)
	case "vccs":
		control(network.DependentCurrent, pair)
	case "ccvs":
		control(network.DependentVoltage, flow)
	case "cccs":
		control(network.DependentCurrent, flow)
	case "ideal_transformer":
		out.Kind = network.Transformer
		out.Windings = []network.Winding{
			{Plus: b.node(e.Primary.From), Minus: b.node(e.Primary.To), Turns: num(t, e.Ratio)},
			{Plus: b.node(e.Secondary.From), Minus: b.node(e.Secondary.To), Turns: number.FromInt(1)},
		}
	case "ideal_opamp", "single_pole_opamp":
		out.Kind = network.OpAmp
		out.Plus, out.Minus, out.Output = b.node(e.Plus), b.node(e.Minus), b.node(e.Out)
		if e.DCGain != "" {
			gain := num(t, e.DCGain)
			product := gain.Mul(num(t, e.Pole))
			out.DCGain, out.GainBandwidth = &gain, &product
		}
	case "switch":
		out.Kind = network.Open
		if position == "closed" {
			out.Kind = network.Short
		}
	default:
		t.Fatalf("kind %q", e.Kind)
	}
	return out
}

func caseWave(t testing.TB, w map[string]string) Wave {
	get := func(key string) number.Exact { return num(t, w[key]) }
	term := func(x WaveTerm) Wave { return Wave{Pieces: []WavePiece{{Terms: []WaveTerm{x}}}} }
	switch w["type"] {
	case "dc", "step":
		return term(WaveTerm{Cosine: get("value")})
	case "impulse":
		return Wave{Pieces: []WavePiece{{Impulses: []number.Exact{get("value")}}}}
	case "ramp":
		return term(WaveTerm{Power: 1, Cosine: get("slope")})
	case "exponential":
		return term(WaveTerm{Rate: get("rate").Neg(), Cosine: get("amplitude")})
	case "sine":
		return term(WaveTerm{Omega: get("omega"), Sine: get("amplitude")})
	case "cosine":
		return term(WaveTerm{Omega: get("omega"), Cosine: get("amplitude")})
	}
	t.Fatalf("waveform %v", w)
	return Wave{}
}

// output gives the asked quantity in a network.
func (b *caseBuild) output(raw json.RawMessage) func(*network.System) (network.Output, error) {
	var o caseOutput
	err := json.Unmarshal(raw, &o)
	return func(s *network.System) (network.Output, error) {
		if err != nil {
			return network.Output{}, err
		}
		var out network.Output
		var p *network.Problem
		if o.Current != "" {
			out, p = s.ElementCurrent(b.elements[o.Current])
		} else {
			out, p = s.NodeVoltage(b.node(o.Voltage[0]), b.node(o.Voltage[1]))
		}
		if p != nil {
			return out, fmt.Errorf("%s", p)
		}
		return out, nil
	}
}

func (b *caseBuild) signal(t testing.TB, raw json.RawMessage) *Signal {
	t.Helper()
	s, err := b.solution.Signal(context.Background(), b.output(raw))
	if err != nil {
		t.Fatalf("%s: %v", b.file.Name, err)
	}
	return s
}

func TestReferenceCases(t *testing.T) {
	files, err := filepath.Glob(filepath.Join(casesDir, "*.json"))
	if err != nil {
		t.Fatal(err)
	}
	if len(files) == 0 {
		t.Skip("the reference cases are not beside the repository")
	}
	asked := 0
	for _, path := range files {
		name := strings.TrimSuffix(filepath.Base(path), ".json")
		if strings.HasPrefix(name, "k06") {
			continue // 2500 nodes are not for exact polynomials
		}
		var asks []caseAsk
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		var c caseFile
		if json.Unmarshal(data, &c) != nil {
			continue
		}
		for _, a := range c.Ask {
			switch a.What {
			case "split", "response", "natural_forced", "metric":
				asks = append(asks, a)
			}
		}
		if len(asks) == 0 {
			continue
		}
		t.Run(name, func(t *testing.T) {
			b, ok := buildCase(t, path)
			if !ok {
				t.Fatal("no network")
			}
			b.solve(t)
			for _, a := range asks {
				asked++
				b.check(t, a, asks)
			}
		})
	}
	if asked < 140 {
		t.Errorf("only %d questions were asked", asked)
	}
}

func (b *caseBuild) check(t *testing.T, a caseAsk, all []caseAsk) {
	t.Helper()
	switch a.What {
	case "split", "response":
		s := b.signal(t, a.Output)
		b.checkTimes(t, a, map[string]*Signal{"zero_input": s.ZeroInput(), "zero_state": s.ZeroState(), "total": s})
		b.checkTransforms(t, a, s)
	case "natural_forced":
		s := b.signal(t, a.Output)
		b.checkTimes(t, a, map[string]*Signal{"natural": s.Natural(), "forced": s.Forced()})
	case "metric":
		for _, other := range all {
			if other.What == "split" {
				b.checkMetric(t, a, b.signal(t, other.Output))
				return
			}
		}
	}
}

// checkTimes compares values at times to all the digits of the expectation.
func (b *caseBuild) checkTimes(t *testing.T, a caseAsk, signals map[string]*Signal) {
	t.Helper()
	var rows []map[string]string
	if err := json.Unmarshal(a.Expect, &rows); err != nil {
		t.Fatal(err)
	}
	for key, s := range signals {
		largest := 0.0
		for _, row := range rows {
			if row[key] != "" {
				v, _ := rat(t, row[key]).Float64()
				largest = math.Max(largest, math.Abs(v))
			}
		}
		for _, row := range rows {
			if row[key] == "" {
				continue
			}
			got, err := s.Value(context.Background(), rat(t, row["t"]), Right, 25)
			if err != nil {
				t.Errorf("%s %s at %s: %v", compact(a.Output), key, row["t"], err)
				continue
			}
			want := rat(t, row[key])
			w, _ := want.Float64()
			diff := got.Sub(number.BallFromRat(want, 256)).Abs().MidFloat64()
			if diff > 1e-18*math.Abs(w)+1e-19*largest {
				t.Errorf("%s %s at %s: got %s, want %s", compact(a.Output), key, row["t"], got, row[key])
			}
		}
	}
}

func (b *caseBuild) checkTransforms(t *testing.T, a caseAsk, s *Signal) {
	t.Helper()
	ctx := context.Background()
	if a.Transform != nil {
		for _, p := range []struct {
			key  string
			sig  *Signal
			want caseRatio
		}{{"zero_input", s.ZeroInput(), a.Transform.ZeroInput}, {"zero_state", s.ZeroState(), a.Transform.ZeroState}} {
			got, ok := p.sig.Transform()
			want := p.want.ratio(t)
			if !ok || !got.Equal(want) {
				t.Errorf("%s transform of %s: got %s, want %s", compact(a.Output), p.key, got, want)
			}
		}
	}
	if a.Impulses != nil {
		for _, p := range []struct {
			sig  *Signal
			want []string
		}{{s.ZeroInput(), a.Impulses.ZeroInput}, {s.ZeroState(), a.Impulses.ZeroState}, {s, a.Impulses.Total}} {
			groups, err := p.sig.Impulses(ctx, 17)
			if err != nil {
				t.Error(err)
			}
			var got []*big.Rat
			if len(groups) > 0 {
				got = groups[0].Exact
			}
			if len(got) != len(p.want) {
				t.Errorf("%s impulses: got %v, want %v", compact(a.Output), got, p.want)
				continue
			}
			for i := range got {
				if got[i].Cmp(rat(t, p.want[i])) != 0 {
					t.Errorf("%s impulse %d: got %s, want %s", compact(a.Output), i, got[i], p.want[i])
				}
			}
		}
	}
	if a.AtStart != nil {
		got, err := s.InitialValue(ctx)
		want, _ := rat(t, *a.AtStart).Float64()
		if err != nil || math.Abs(got.Float()-want) > 1e-15*math.Abs(want)+1e-60 {
			t.Errorf("%s at 0+: got %v, want %s (%v)", compact(a.Output), got, *a.AtStart, err)
		}
	}
}

func (c caseRatio) ratio(t testing.TB) exact.Ratio {
	list := func(texts []string) exact.Poly {
		var out []*big.Rat
		for _, x := range texts {
			out = append(out, rat(t, x))
		}
		return exact.NewPoly(out...)
	}
	return ratio(t, list(c.Num), list(c.Den))
}

// checkMetric compares the figures of merit that concern time; those in
// frequency and of stored energy are other packages'.
func (b *caseBuild) checkMetric(t *testing.T, a caseAsk, s *Signal) {
	t.Helper()
	var text string
	if err := json.Unmarshal(a.Expect, &text); err != nil {
		t.Fatal(err)
	}
	want, _ := rat(t, text).Float64()
	got, known, err := b.metric(s.Curve(), a.Metric)
	if err != nil {
		t.Errorf("%s: %v", a.Metric, err)
		return
	}
	if known {
		near(t, b.file.Name+" "+a.Metric, got, want, 1e-13)
	}
}

// metric computes a figure of merit by name.
func (b *caseBuild) metric(c *Curve, name string) (value float64, known bool, err error) {
	ctx := context.Background()
	if name == "peak_time" || name == "t_peak" || name == "peak" || name == "peak_value" || name == "efficiency" || strings.HasPrefix(name, "front") || name == "width50" || name == "tail_from_virtual_origin" {
		return b.impulseMetric(c, name)
	}
	var v number.Ball
	switch name {
	case "rise_time_10_90":
		v, _, err = c.Rise(ctx)
	case "overshoot_percent":
		v, _, err = c.Overshoot(ctx)
		v = v.MulInt(100)
	case "settling_time_2_percent":
		v, err = c.Settle(ctx, number.FromRat(big.NewRat(1, 50)))
	default:
		return 0, false, nil
	}
	return v.MidFloat64(), true, err
}

// impulseMetric computes the figures of an impulse wave as IEC 60060-1 defines
// them: front 1.67·(t90−t30), width at half height, and the time to half value
// from the virtual origin, where the line through 30 % and 90 % meets zero.
func (b *caseBuild) impulseMetric(c *Curve, name string) (float64, bool, error) {
	ctx := context.Background()
	e, err := c.Peak(ctx, Range{})
	if err != nil {
		return 0, true, err
	}
	peak := e.Value.MidRat()
	first := func(part string) float64 {
		level, _ := new(big.Rat).SetString(part)
		v, er := c.FirstAbove(ctx, number.FromRat(level.Mul(level, peak)), Range{})
		if er != nil {
			err = er
		}
		return v.MidFloat64()
	}
	last := func(part string) float64 {
		level, _ := new(big.Rat).SetString(part)
		v, er := c.LastAbove(ctx, number.FromRat(level.Mul(level, peak)), Range{})
		if er != nil {
			err = er
		}
		return v.MidFloat64()
	}
	var value float64
	switch name {
	case "peak", "peak_value":
		value = e.Value.MidFloat64()
	case "efficiency":
		value = e.Value.MidFloat64() / 100e3
		for _, x := range b.setup.Initial {
			value = e.Value.MidFloat64() / x.Value.Float()
			if x.Value.Float() != 0 {
				break
			}
		}
	case "peak_time", "t_peak":
		value = e.At.MidFloat64()
	case "front":
		value = 1.67 * (first("9/10") - first("3/10"))
	case "front_exact":
		value = (first("9/10") - first("3/10")) / 0.6
	case "width50":
		value = last("1/2") - first("1/2")
	case "tail_from_virtual_origin":
		t30, t90 := first("3/10"), first("9/10")
		value = last("1/2") - (t30 - (t90-t30)/2)
	}
	return value, true, err
}

// compact writes an output on one line.
func compact(raw json.RawMessage) string { return strings.Join(strings.Fields(string(raw)), "") }
