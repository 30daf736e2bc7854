package analyze_test

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"strings"

	"portlight/analyze"
	"portlight/dialect"
)

// view is an answer as JSON, decoded again: the form that other programs
// read is the form that is compared.
type view struct {
	Kind, Unit, Why, Code  string
	Exact                  bool
	Numerator, Denominator []string
	Zeros, Poles, Roots    []rootView
	Re, Im, Magnitude      string
	PhaseDeg               string `json:"phase_deg"`
	Total                  string
	ZeroInput              json.RawMessage `json:"zero_input"`
	ZeroState              json.RawMessage `json:"zero_state"`
	Impulses               []impulseView
	Transform              map[string]*ratioView
	Value                  string
	True                   bool
	AtS                    string `json:"at_s"`
	Impedance              *view
	OpenCircuit            *view `json:"open_circuit"`
	ShortCircuit           *view `json:"short_circuit"`
	Entries                [][]view
	Exists                 *bool
	Facts                  map[string]bool
	Parts                  []struct{ Part, Unit, Before, After string }
	Before                 *struct{ Total string }
}

type rootView struct {
	Re, Im       string
	Multiplicity int
}

type ratioView struct{ Numerator, Denominator []string }

type impulseView struct {
	AtS       string `json:"at_s"`
	Order     int
	ZeroInput string `json:"zero_input"`
	ZeroState string `json:"zero_state"`
	Total     string
}

// outcome is what became of one question.
type outcome struct {
	unasked string // why it could not be asked
	err     error  // what was wrong with the answer
}

func wrong(format string, args ...any) outcome { return outcome{err: fmt.Errorf(format, args...)} }

func unasked(format string, args ...any) outcome {
	return outcome{unasked: fmt.Sprintf(format, args...)}
}

// asker puts questions to one network.
type asker struct {
	ctx      context.Context
	case_    referenceCase
	text     *translation
	analysis *analyze.Analysis
}

// newAsker translates, reads and checks the network of a case.
func newAsker(ctx context.Context, c referenceCase) *asker {
	text := translate(c.Network)
	for i := range c.Ask {
		text.declare(&c.Ask[i])
	}
	for _, extra := range metricStatements[c.Name] {
		text.add("%s", extra)
	}
	return &asker{ctx, c, text, analysisOf(c.Name+".plight", text.text())}
}

// analysisOf reads and checks a text.
func analysisOf(name, text string) *analyze.Analysis {
	none := func(path string) (*dialect.File, error) { return nil, fmt.Errorf("%s: no such file", path) }
	return analyze.New(dialect.Check(dialect.Parse(name, text), none))
}

// ask puts a question and gives the answer's JSON view.
func (a *asker) ask(format string, args ...any) (*view, error) {
	question := fmt.Sprintf(format, args...)
	answer, err := a.analysis.Ask(a.ctx, question)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", question, err)
	}
	data, err := json.Marshal(analyze.JSON(answer))
	if err != nil {
		return nil, fmt.Errorf("%s: %w", question, err)
	}
	v := new(view)
	if err := json.Unmarshal(data, v); err != nil {
		return nil, fmt.Errorf("%s: %w in %s", question, err, data)
	}
	if v.Kind == "refused" {
		return v, fmt.Errorf("%s: refused (%s): %s", question, v.Code, v.Why)
	}
	return v, nil
}

// question asks one question of the case in full and judges the answer.
func (a *asker) question(q *caseQuestion) outcome {
	switch q.What {
	case "network_function", "impedance":
		if q.Form == "rational" {
			return a.rational(q)
		}
		return a.values(q)
	case "poles", "zeros":
		return a.roots(q, q.What+" of "+a.nameOf(q.Of))
	case "natural_frequencies":
		return a.naturalFrequencies(q)
	case "split", "response":
		return a.split(q)
	case "natural_forced":
		return a.naturalForced(q)
	case "initial_state":
		return a.initialState(q)
	case "thevenin", "norton":
		return a.equivalent(q)
	case "two_port":
		return a.twoPort(q)
	case "reciprocal", "passive", "lossless":
		return a.fact(q)
	case "metric", "derived":
		return a.metric(q)
	case "reject":
		return a.reject(q)
	case "accept":
		return a.accept()
	}
	return unasked("questions about %s are not written", q.What)
}

// nameOf is the named function that stands for a network function or an impedance.
func (a *asker) nameOf(q *caseQuestion) string {
	if q.What == "impedance" {
		return a.text.functions[a.text.impedance(q.Port)]
	}
	return a.text.functions[a.text.transfer(q)]
}

// function compares an answer's function with an expected one.
func (v *view) function(want caseRatio, t tolerance) error {
	return compareViews(v.Numerator, v.Denominator, want, v.Exact, t)
}

func compareViews(num, den []string, want caseRatio, exact bool, t tolerance) error {
	got, err := readRatio(num, den)
	if err != nil {
		return err
	}
	expected, err := readRatio(want.Num, want.Den)
	if err != nil {
		return err
	}
	return compareRatios(got, expected, exact, t)
}

func (a *asker) rational(q *caseQuestion) outcome {
	var want caseRatio
	if err := json.Unmarshal(q.Expect, &want); err != nil {
		return wrong("expectation: %v", err)
	}
	// The impedance is asked both as itself and through its name.
	question := a.nameOf(q)
	if q.What == "impedance" {
		question = a.text.impedance(q.Port)
	}
	v, err := a.ask("%s", question)
	if err != nil {
		return outcome{err: err}
	}
	return outcome{err: v.function(want, readTolerance(q.Tolerance))}
}

// frequencyValue is an expected value at a frequency.
type frequencyValue struct {
	Hz, Omega, Re, Im, Mag string
	PhaseDeg               string          `json:"phase_deg"`
	Far                    *frequencyValue `json:"transfer_impedance_to_far_corner"`
}

// at is the frequency in the notation, with its unit.
func (f frequencyValue) at() string {
	if f.Hz != "" {
		return f.Hz + " Hz"
	}
	return f.Omega + " rad/s"
}

func (f frequencyValue) value() complex128 { return complex(float(f.Re), float(f.Im)) }

func (a *asker) values(q *caseQuestion) outcome {
	var list []frequencyValue
	if err := json.Unmarshal(q.Expect, &list); err != nil {
		return wrong("expectation: %v", err)
	}
	largest := 0.0
	for _, w := range list {
		largest = math.Max(largest, math.Hypot(float(w.Re), float(w.Im)))
	}
	t := readTolerance(q.Tolerance)
	for _, w := range list {
		if err := a.valueAt(a.nameOf(q), w, t, largest); err != nil {
			return outcome{err: err}
		}
		if w.Far != nil {
			w.Far.Hz, w.Far.Omega = w.Hz, w.Omega
			// The corner is named by the case's note; metricStatements has the function.
			if err := a.valueAt("H_far", *w.Far, t, largest); err != nil {
				return outcome{err: err}
			}
		}
	}
	return outcome{}
}

func (a *asker) valueAt(name string, w frequencyValue, t tolerance, largest float64) error {
	v, err := a.ask("%s at %s", name, w.at())
	if err != nil {
		return err
	}
	got := complex(float(v.Re), float(v.Im))
	if !t.near(got, w.value(), largest) {
		return fmt.Errorf("%s at %s is %v, want %v", name, w.at(), got, w.value())
	}
	if w.Mag != "" && !t.near(complex(float(v.Magnitude), 0), complex(float(w.Mag), 0), largest) {
		return fmt.Errorf("%s at %s has magnitude %s, want %s", name, w.at(), v.Magnitude, w.Mag)
	}
	// The phase of a value at the floor of the list is not a figure.
	if w.PhaseDeg != "" && float(w.Mag) > 1e-12*largest {
		turn := math.Remainder(float(v.PhaseDeg)-float(w.PhaseDeg), 360)
		if !(math.Abs(turn) <= 360*math.Max(t.relative, 1e-12)) {
			return fmt.Errorf("%s at %s has phase %s°, want %s°", name, w.at(), v.PhaseDeg, w.PhaseDeg)
		}
	}
	return nil
}

func (a *asker) roots(q *caseQuestion, question string) outcome {
	var list []caseRoot
	if err := json.Unmarshal(q.Expect, &list); err != nil {
		return wrong("expectation: %v", err)
	}
	v, err := a.ask("%s", question)
	if err != nil {
		return outcome{err: err}
	}
	if v.Kind != "roots" {
		return wrong("%s is answered by a %s", question, v.Kind)
	}
	var got, want []aRoot
	for _, r := range v.Roots {
		got = append(got, aRoot{complex(float(r.Re), float(r.Im)), r.Multiplicity})
	}
	for _, r := range list {
		want = append(want, aRoot{complex(float(r.Re), float(r.Im)), r.Multiplicity})
	}
	return outcome{err: compareRoots(got, want, readTolerance(q.Tolerance))}
}

func (a *asker) naturalFrequencies(q *caseQuestion) outcome {
	if o := a.roots(q, "poles"); o.err != nil {
		return o
	}
	v, err := a.ask("poles")
	if err != nil {
		return outcome{err: err}
	}
	order := 0
	for _, r := range v.Roots {
		order += r.Multiplicity
	}
	if order != q.Order {
		return wrong("order %d, want %d", order, q.Order)
	}
	return outcome{}
}

func (a *asker) initialState(q *caseQuestion) outcome {
	var want map[string]string
	if err := json.Unmarshal(q.Expect, &want); err != nil {
		return wrong("expectation: %v", err)
	}
	v, err := a.ask("initial")
	if err != nil {
		return outcome{err: err}
	}
	for name, value := range want {
		found := false
		for _, p := range v.Parts {
			if p.Part != a.text.part(name) {
				continue
			}
			found = true
			got, err := rat(p.Before)
			expected, _ := rat(value)
			if err != nil || got.Cmp(expected) != 0 {
				return wrong("%s starts from %q, want %s", name, p.Before, value)
			}
		}
		if !found {
			return wrong("nothing is said about %s", name)
		}
	}
	return outcome{}
}

// refusal words of the collection and the codes that say the same here.
var refusalCodes = map[string][]dialect.Code{
	"NO_GROUND":          {"no-ground", "unknown-name"},
	"ISLAND":             {"floating-island"},
	"DANGLING_NODE":      {"floating-node"},
	"VOLTAGE_LOOP":       {"voltage-loop"},
	"CURRENT_CUTSET":     {"current-cutset"},
	"OPAMP_NO_FEEDBACK":  {"no-feedback"},
	"COUPLING_GT_1":      {"coupling-range"},
	"INDUCTANCE_NOT_PSD": {"coupling-range"},
	"NONPOSITIVE_VALUE":  {"value-range", "not-positive"},
	"NO_DC_STATE":        {"no-steady-state"},
	"DC_INDETERMINATE":   {"no-steady-state", "no-dc-path"},
	"SINGULAR":           {"singular", "voltage-loop", "current-cutset"},
	"DUPLICATE_NAME":     {"name-taken"},
	"UNKNOWN_NODE":       {"unknown-name"},
	"UNKNOWN_ELEMENT":    {"unknown-name"},
	"SELF_LOOP":          {"self-loop", "short-circuited"},
	"WRONG_KIND":         {"wrong-sort"},
}

func (a *asker) reject(q *caseQuestion) outcome {
	var want struct {
		Reason string
		Names  []string
	}
	if err := json.Unmarshal(q.Expect, &want); err != nil {
		return wrong("expectation: %v", err)
	}
	var told []string
	findings, err := a.analysis.Findings(a.ctx)
	if err != nil {
		return outcome{err: err}
	}
	for _, f := range findings {
		// The line at fault is shown with the message and may do the naming.
		message := f.Message + " / " + lineOf(f.Origin)
		for _, r := range f.Related {
			message += " / " + r.Message
		}
		if f.Severity > dialect.Warning {
			continue
		}
		told = append(told, string(f.Code)+": "+message)
	}
	// A node that does not exist and a voltage that is not tied down are told
	// when somebody asks for them.
	request := q.Request
	switch want.Reason {
	case "UNKNOWN_NODE", "ISLAND":
		if request == nil {
			request = &caseOutput{Voltage: []string{want.Names[0], a.case_.Network.Ground}}
		}
	}
	if request != nil {
		v, err := a.ask("%s", a.text.output(request))
		if v != nil && v.Kind == "refused" {
			told = append(told, v.Code+": "+v.Why)
		} else if err != nil {
			return outcome{err: err}
		}
	}
	for _, message := range told {
		if a.sameRefusal(message, want.Reason, want.Names) {
			return outcome{}
		}
	}
	return wrong("nothing says %s about %s; told: %s", want.Reason, strings.Join(want.Names, ", "), strings.Join(told, " | "))
}

// lineOf is the line of the text that an origin begins in.
func lineOf(o dialect.Origin) string {
	if o.File == nil {
		return ""
	}
	span := o.File.Lines.Span(o.File.Lines.Line(o.Span.Start))
	return o.File.Text[span.Start:span.End]
}

// sameRefusal tells whether a message has a code that means the reason and
// names everything that has to be named.
func (a *asker) sameRefusal(message, reason string, names []string) bool {
	code, text, _ := strings.Cut(message, ": ")
	fits := false
	for _, c := range refusalCodes[reason] {
		fits = fits || string(c) == code
	}
	for _, n := range names {
		name := a.text.part(n)
		if name == n {
			name = a.text.node(n)
		}
		fits = fits && containsWord(text, name)
	}
	return fits
}

// containsWord finds a name that is not a piece of a longer one.
func containsWord(text, word string) bool {
	isName := func(b byte) bool {
		return b == '_' || b >= '0' && b <= '9' || b >= 'a' && b <= 'z' || b >= 'A' && b <= 'Z'
	}
	for i := 0; ; {
		j := strings.Index(text[i:], word)
		if j < 0 {
			return false
		}
		start, end := i+j, i+j+len(word)
		if (start == 0 || !isName(text[start-1])) && (end == len(text) || !isName(text[end])) {
			return true
		}
		i = end
	}
}

func (a *asker) accept() outcome {
	findings, err := a.analysis.Findings(a.ctx)
	if err != nil {
		return outcome{err: err}
	}
	for _, f := range findings {
		if f.Severity == dialect.Error {
			return wrong("refused: %s", f)
		}
	}
	return outcome{}
}
