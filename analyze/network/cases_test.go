package network

import (
	"encoding/json"
	"math"
	"math/big"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// The reference cases lie beside the repository; what they are and how their
// figures were made (two independent routes) is in SCHEMA.md there.
const casesDir = "../../../shared/cases"

type caseFile struct {
	Name    string
	Network *caseNetwork
	Ask     []caseAsk
}

type caseNetwork struct {
	Nodes        []string
	Ground       string
	Elements     []caseElement
	InitialState string `json:"initial_state"`
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

type caseRatio struct{ Num, Den []string }

type caseOutput struct {
	Voltage []string
	Current string
}

type caseAsk struct {
	What, Form, Input string
	Output            caseOutput
	Port              []string
	Order             *int
	Expect            json.RawMessage
	Request           *caseOutput
	Check             map[string]bool
	Transform         *struct {
		ZeroInput caseRatio `json:"zero_input"`
		ZeroState caseRatio `json:"zero_state"`
	}
}

func loadCase(t testing.TB, path string) caseFile {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var c caseFile
	if err := json.Unmarshal(data, &c); err != nil {
		t.Fatalf("%s: %v", path, err)
	}
	return c
}

func caseFiles(t testing.TB, pattern string) []string {
	t.Helper()
	files, err := filepath.Glob(filepath.Join(casesDir, pattern))
	if err != nil {
		t.Fatal(err)
	}
	if len(files) == 0 {
		t.Skip("the reference cases are not beside the repository")
	}
	return files
}

func mustNumber(t testing.TB, text string) number.Exact {
	t.Helper()
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		t.Fatalf("number %q", text)
	}
	return number.FromRat(r)
}

// caseBuild is a case as a network.
type caseBuild struct {
	*Network
	nodes    []string
	elements map[string]int
	initial  map[int]*big.Rat
	laplace  map[int]exact.Ratio // transforms of the sources
	dc       map[int][]Sinusoid
}

// build makes the network of a case with the switches before or after t = 0.
func build(t testing.TB, c *caseNetwork, before bool) caseBuild {
	b := caseBuild{
		Network: &Network{Nodes: len(c.Nodes), Ground: slices.Index(c.Nodes, c.Ground), Ported: make([]bool, len(c.Nodes))},
		nodes:   c.Nodes, elements: map[string]int{}, initial: map[int]*big.Rat{},
		laplace: map[int]exact.Ratio{}, dc: map[int][]Sinusoid{},
	}
	for i, e := range c.Elements {
		b.elements[e.Name] = i
	}
	for i, e := range c.Elements {
		b.Elements = append(b.Elements, b.element(t, e, before))
		if e.Initial != "" {
			b.initial[i] = mustNumber(t, e.Initial).Rat()
		}
		if e.Waveform != nil {
			b.laplace[i] = laplace(t, e.Waveform)
			if e.Waveform["type"] == "dc" {
				b.dc[i] = []Sinusoid{{Cosine: mustNumber(t, e.Waveform["value"])}}
			}
		}
	}
	return b
}

func (b *caseBuild) node(name string) int { return slices.Index(b.nodes, name) }

func (b *caseBuild) lookup(name string) int {
	if i, ok := b.elements[name]; ok {
		return i
	}
	return -1
}

func (b *caseBuild) element(t testing.TB, e caseElement, before bool) Element {
	out := Element{Name: e.Name, From: b.node(e.From), To: b.node(e.To)}
	if e.Value != "" {
		out.Value = mustNumber(t, e.Value)
	}
	control := func(p Probe) {
		out.Controls = []Control{{Numerator: []number.Exact{out.Value}, Of: []Probe{p}}}
	}
	switch e.Kind {
	case "resistor":
		out.Kind = Resistor
	case "inductor":
		out.Kind = Inductor
	case "capacitor":
		out.Kind = Capacitor
	case "voltage_source":
		out.Kind = VoltageSource
	case "current_source":
		out.Kind = CurrentSource
	case "mutual":
		out.Kind, out.Mutual = Coupling, e.Value != ""
		if e.K != "" {
			out.Value = mustNumber(t, e.K)
		}
		out.Coils = [2]int{b.lookup(e.Inductors[0]), b.lookup(e.Inductors[1])}
	case "vcvs", "vccs":
		out.Kind = DependentVoltage
		control(Probe{Quantity: NodePair, Plus: b.node(e.Control.From), Minus: b.node(e.Control.To)})
	case "ccvs", "cccs":
		out.Kind = DependentVoltage
		control(Probe{Quantity: ElementFlow, Element: b.lookup(e.Control.Element)})
	case "ideal_transformer":
		out.Kind = Transformer
		out.Windings = []Winding{
			{b.node(e.Primary.From), b.node(e.Primary.To), mustNumber(t, e.Ratio)},
			{b.node(e.Secondary.From), b.node(e.Secondary.To), number.FromInt(1)},
		}
	case "ideal_opamp", "single_pole_opamp":
		out.Kind = OpAmp
		out.Plus, out.Minus, out.Output = b.node(e.Plus), b.node(e.Minus), b.node(e.Out)
		if e.DCGain != "" {
			gain := mustNumber(t, e.DCGain)
			product := gain.Mul(mustNumber(t, e.Pole))
			out.DCGain, out.GainBandwidth = &gain, &product
		}
	case "switch":
		position := e.After
		if before {
			position = e.Before
		}
		out.Kind = Open
		if position == "closed" {
			out.Kind = Short
		}
	default:
		t.Fatalf("kind %q", e.Kind)
	}
	if e.Kind == "vccs" || e.Kind == "cccs" {
		out.Kind = DependentCurrent
	}
	return out
}

// laplace is the transform of a case's waveform.
func laplace(t testing.TB, w map[string]string) exact.Ratio {
	get := func(key string) *big.Rat { return mustNumber(t, w[key]).Rat() }
	switch w["type"] {
	case "dc", "step":
		return ratio(exact.Constant(get("value")), exact.PolyFromInt64s(0, 1))
	case "impulse":
		return exact.ConstantRatio(get("value"))
	case "ramp":
		return ratio(exact.Constant(get("slope")), exact.PolyFromInt64s(0, 0, 1))
	case "exponential":
		return ratio(exact.Constant(get("amplitude")), exact.NewPoly(get("rate"), one))
	case "sine", "cosine":
		omega := get("omega")
		den := exact.NewPoly(new(big.Rat).Mul(omega, omega), nil, one)
		if w["type"] == "sine" {
			return ratio(exact.Constant(new(big.Rat).Mul(get("amplitude"), omega)), den)
		}
		return ratio(exact.Monomial(get("amplitude"), 1), den)
	}
	t.Fatalf("waveform %v", w)
	return exact.Ratio{}
}

func ratio(num, den exact.Poly) exact.Ratio {
	r, err := exact.NewRatio(num, den)
	if err != nil {
		panic(err)
	}
	return r
}

func (c caseRatio) ratio(t testing.TB) exact.Ratio {
	poly := func(texts []string) exact.Poly {
		var out []*big.Rat
		for _, x := range texts {
			out = append(out, mustNumber(t, x).Rat())
		}
		return exact.NewPoly(out...)
	}
	return ratio(poly(c.Num), poly(c.Den))
}

func (b *caseBuild) output(t testing.TB, s *System, o caseOutput) Output {
	t.Helper()
	var out Output
	var p *Problem
	if o.Current != "" {
		out, p = s.ElementCurrent(b.lookup(o.Current))
	} else {
		out, p = s.NodeVoltage(b.node(o.Voltage[0]), b.node(o.Voltage[1]))
	}
	if p != nil {
		t.Fatal(p.Describe(b.Network, b.nodes))
	}
	return out
}

// TestReferenceCases compares exact functions, natural frequencies and
// transforms of responses with the reference cases.
func TestReferenceCases(t *testing.T) {
	for _, path := range caseFiles(t, "[a-hjk]*.json") {
		c := loadCase(t, path)
		if c.Network == nil || len(c.Network.Elements) > 1000 {
			continue // the large mesh has values at frequencies only
		}
		rejected := slices.ContainsFunc(c.Ask, func(a caseAsk) bool { return a.What == "reject" && a.Request == nil })
		t.Run(c.Name, func(t *testing.T) {
			if rejected {
				rejectCase(t, c)
			} else {
				askCase(t, c)
			}
		})
	}
}

func askCase(t *testing.T, c caseFile) {
	b := build(t, c.Network, false)
	for _, p := range b.Inspect() {
		if p.Singular || p.Kind == Island && !p.Coupled || p.Kind == CouplingRange || p.Kind == InductanceMatrix {
			t.Errorf("unexpected problem %s", p.Describe(b.Network, b.nodes))
		}
	}
	s, problems := Assemble(b.Network)
	if problems != nil {
		t.Fatal(problems)
	}
	det, err := s.Determinant(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	if det.IsZero() {
		// A transformer with nothing on it has a chain matrix, but no
		// determinant of its own.
		if !slices.ContainsFunc(c.Ask, func(a caseAsk) bool {
			return slices.Contains([]string{"network_function", "impedance", "natural_frequencies", "split"}, a.What)
		}) {
			return
		}
		ps, _ := s.Diagnose(t.Context())
		t.Fatal("singular", ps)
	}
	for _, a := range c.Ask {
		switch {
		case a.What == "natural_frequencies":
			checkRoots(t, a, det)
		case a.What == "network_function":
			col, p := s.InputColumn(b.lookup(a.Input))
			if p != nil {
				t.Fatal(p)
			}
			checkFunction(t, a, s, b.output(t, s, a.Output), col)
		case a.What == "impedance":
			col, p := s.InjectColumn(b.node(a.Port[0]), b.node(a.Port[1]))
			if p != nil {
				t.Fatal(p)
			}
			checkFunction(t, a, s, b.output(t, s, caseOutput{Voltage: a.Port}), col)
		case a.What == "initial_state":
			checkInitial(t, a, b, steadyCase(t, c))
		case a.What == "split" && a.Transform != nil:
			checkSplit(t, c, a, b, s)
		case a.What == "reject" && a.Request.Voltage != nil:
			v := a.Request.Voltage
			if _, p := s.NodeVoltage(b.node(v[0]), b.node(v[1])); p == nil {
				t.Errorf("voltage of %v given", v)
			}
		}
	}
}

// checkRoots compares the natural frequencies: their number, and that the
// determinant vanishes there with that multiplicity.
func checkRoots(t *testing.T, a caseAsk, det exact.Poly) {
	var roots []struct {
		Re, Im       string
		Multiplicity int
	}
	if err := json.Unmarshal(a.Expect, &roots); err != nil {
		t.Fatal(err)
	}
	if det.Degree() != *a.Order {
		t.Errorf("order %d, expected %d", det.Degree(), *a.Order)
	}
	for _, r := range roots {
		re, im := mustNumber(t, r.Re).Rat(), mustNumber(t, r.Im).Rat()
		p := det
		for range r.Multiplicity {
			// The root has 30 digits; one Newton step of the right
			// derivative must be shorter than that.
			if !negligible(p, re, im) {
				t.Errorf("det(%s + j·%s) is not zero to multiplicity %d", r.Re, r.Im, r.Multiplicity)
			}
			p = p.Derivative()
		}
	}
}

// negligible tells whether |p(z)| is below 1e-18 of the sum of the magnitudes
// of its terms.
func negligible(p exact.Poly, re, im *big.Rat) bool {
	x, y := p.EvalGaussian(re, im)
	fx, _ := x.Float64()
	fy, _ := y.Float64()
	r, _ := re.Float64()
	i, _ := im.Float64()
	size, power := 0.0, 1.0
	for _, c := range p.Coefficients() {
		f, _ := c.Float64()
		size += math.Abs(f) * power
		power *= math.Hypot(r, i)
	}
	return math.Hypot(fx, fy) <= 1e-18*size
}

func checkFunction(t *testing.T, a caseAsk, s *System, out Output, col Column) {
	t.Helper()
	num, den, err := s.Transfer(t.Context(), []Output{out}, []Column{col})
	if err != nil {
		t.Fatal(err)
	}
	got := ratio(num[0][0], den)
	if a.Form == "rational" {
		var want caseRatio
		if err := json.Unmarshal(a.Expect, &want); err != nil {
			t.Fatal(err)
		}
		if !got.Equal(want.ratio(t)) {
			t.Errorf("%s %s: got %s, want %v / %v", a.What, a.Input, got, want.Num, want.Den)
		}
		return
	}
	var values []struct{ Hz, Omega, Re, Im string }
	if err := json.Unmarshal(a.Expect, &values); err != nil {
		t.Fatal(err)
	}
	floor := 0.0 // of the largest magnitude in the list
	for _, v := range values {
		x, _ := mustNumber(t, v.Re).Rat().Float64()
		y, _ := mustNumber(t, v.Im).Rat().Float64()
		floor = max(floor, 1e-12*math.Hypot(x, y))
	}
	for _, v := range values {
		omega := 0.0
		if v.Hz != "" {
			f, _ := mustNumber(t, v.Hz).Rat().Float64()
			omega = 2 * math.Pi * f
		} else {
			omega, _ = mustNumber(t, v.Omega).Rat().Float64()
		}
		re, im, ok := got.EvalGaussian(new(big.Rat), new(big.Rat).SetFloat64(omega))
		if !ok {
			t.Errorf("pole at ω = %g", omega)
			continue
		}
		x, _ := re.Float64()
		y, _ := im.Float64()
		wx, _ := mustNumber(t, v.Re).Rat().Float64()
		wy, _ := mustNumber(t, v.Im).Rat().Float64()
		if math.Hypot(x-wx, y-wy) > max(1e-9*math.Hypot(wx, wy), floor) {
			t.Errorf("ω = %g: got %g%+gj, want %g%+gj", omega, x, y, wx, wy)
		}
	}
}

func steadyCase(t *testing.T, c caseFile) map[Memory]*big.Rat {
	b := build(t, c.Network, true)
	state, problems, err := b.SteadyState(t.Context(), b.dc, nil)
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range problems {
		t.Error(p.Describe(b.Network, b.nodes))
	}
	return state.Values
}

func checkInitial(t *testing.T, a caseAsk, b caseBuild, got map[Memory]*big.Rat) {
	var want map[string]string
	if err := json.Unmarshal(a.Expect, &want); err != nil {
		t.Fatal(err)
	}
	for name, v := range want {
		g := got[Memory{Element: b.lookup(name)}]
		if g == nil || g.Cmp(mustNumber(t, v).Rat()) != 0 {
			t.Errorf("%s: got %v, want %s", name, g, v)
		}
	}
}

// checkSplit compares the transforms of the zero-input and zero-state parts.
func checkSplit(t *testing.T, c caseFile, a caseAsk, b caseBuild, s *System) {
	state := map[Memory]*big.Rat{}
	for i, v := range b.initial {
		state[Memory{Element: i}] = v
	}
	if c.Network.InitialState == "dc_before_switching" {
		state = steadyCase(t, c)
	}
	var input Column
	for k, m := range s.Memories() {
		if v := state[m]; v != nil {
			input = input.Add(s.StateColumn(k).Scale(v))
		}
	}
	out := b.output(t, s, a.Output)
	cols := []Column{input}
	var drives []exact.Ratio
	for i, w := range b.laplace {
		col, p := s.InputColumn(i)
		if p != nil {
			t.Fatal(p)
		}
		cols, drives = append(cols, col), append(drives, w)
	}
	num, den, err := s.Transfer(t.Context(), []Output{out}, cols)
	if err != nil {
		t.Fatal(err)
	}
	if got, want := ratio(num[0][0], den), a.Transform.ZeroInput.ratio(t); !got.Equal(want) {
		t.Errorf("zero input: got %s, want %s", got, want)
	}
	total := exact.ConstantRatio(new(big.Rat))
	for k, w := range drives {
		total = total.Add(ratio(num[0][k+1], den).Mul(w))
	}
	if want := a.Transform.ZeroState.ratio(t); !total.Equal(want) {
		t.Errorf("zero state: got %s, want %s", total, want)
	}
}

// kindOfReason maps the cases' reasons to problems; the others are about names
// and belong to the notation.
var kindOfReason = map[string][]ProblemKind{
	"ISLAND": {Island}, "DANGLING_NODE": {FloatingNode}, "VOLTAGE_LOOP": {VoltageLoop},
	"CURRENT_CUTSET": {CurrentCutset}, "OPAMP_NO_FEEDBACK": {OpAmpNoFeedback},
	"COUPLING_GT_1": {CouplingRange}, "INDUCTANCE_NOT_PSD": {InductanceMatrix},
	"NONPOSITIVE_VALUE": {BadValue}, "NO_DC_STATE": {NoSteadyState},
	"DC_INDETERMINATE": {IndeterminateState}, "SINGULAR": {SingularEquations},
	"SELF_LOOP": {SelfLoop}, "WRONG_KIND": {BadReference}, "UNKNOWN_ELEMENT": {BadReference},
}

func rejectCase(t *testing.T, c caseFile) {
	b := build(t, c.Network, false)
	found := b.Inspect()
	singular := false
	if s, problems := Assemble(b.Network); s != nil {
		det, err := s.Determinant(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		singular = det.IsZero()
		diagnosed, err := s.Diagnose(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		if singular != (len(diagnosed) > 0) {
			t.Errorf("singular %v, but diagnosed %v", singular, diagnosed)
		}
		for _, p := range diagnosed {
			if !p.Singular {
				t.Errorf("%v is not marked singular", p)
			}
		}
		found = append(found, diagnosed...)
	} else {
		found = append(found, problems...)
		singular = true
	}
	if c.Network.InitialState == "dc_before_switching" {
		before := build(t, c.Network, true)
		_, problems, err := before.SteadyState(t.Context(), before.dc, nil)
		if err != nil {
			t.Fatal(err)
		}
		found = append(found, problems...)
	}
	for _, a := range c.Ask {
		if a.What != "reject" {
			continue
		}
		var want struct {
			Reason string
			Names  []string
		}
		if err := json.Unmarshal(a.Expect, &want); err != nil {
			t.Fatal(err)
		}
		kinds, ours := kindOfReason[want.Reason]
		if !ours {
			t.Skipf("%s is decided where names are", want.Reason)
		}
		if d, ok := a.Check["determinant_identically_zero"]; ok && d != singular && want.Reason != "ISLAND" {
			t.Errorf("singular: %v, want %v", singular, d)
		}
		var all []string
		matched := false
		for _, p := range found {
			text := p.Describe(b.Network, b.nodes)
			all = append(all, text)
			matched = matched || slices.Contains(kinds, p.Kind) && namesAll(b, p, want.Names)
		}
		if !matched {
			t.Errorf("want %s naming %v; found\n\t%s", want.Reason, want.Names, strings.Join(all, "\n\t"))
		}
	}
}

// namesAll tells whether the problem's members hold all names; one that is not
// in the network at all cannot be a member.
func namesAll(b caseBuild, p Problem, names []string) bool {
	for _, n := range names {
		i, isElement := b.elements[n]
		v := b.node(n)
		switch {
		case isElement && slices.Contains(p.Elements, i):
		case v >= 0 && slices.Contains(p.Nodes, v):
		case !isElement && v < 0:
		default:
			return false
		}
	}
	return true
}
