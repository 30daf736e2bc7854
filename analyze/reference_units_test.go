package analyze_test

import (
	"context"
	"fmt"
	"math"
	"strings"

	"portlight/dialect"
)

// unitFrames put a text where a quantity of some kind is expected. The %s is
// the text; the question, when there is one, gives the value back.
var unitFrames = map[string]struct{ file, question string }{
	"value of a resistor":                      {"resistor X = %s\na -[X]- g", ""},
	"value of a inductor":                      {"inductor X = %s\na -[X]- g", ""},
	"value of a capacitor":                     {"capacitor X = %s\na -[X]- g", ""},
	"value of a vccs transconductance":         {"current source X = %s * v[a]\ng -[X]- a", "given"},
	"value of a vcvs gain":                     {"voltage source X = %s * v[a]\nb -[X]- g\nb -[resistor Rb = 1 Ω]- g", "given"},
	"value of a coupling factor":               {"inductor La = 1 H\ninductor Lb = 1 H\na -[La]- g\na -[Lb]- g\ncoupling X = %s, between La Lb", ""},
	"value of a mutual inductance":             {"inductor La = 1 H\ninductor Lb = 1 H\na -[La]- g\na -[Lb]- g\ncoupling X = %s + 0 H, between La Lb", ""},
	"initial condition of a capacitor":         {"capacitor X = 1 F, initially %s\nx -[X || resistor Rx = 1 Ω]- g", "v[X] before 0 s"},
	"initial condition of a inductor":          {"inductor X = 1 H, initially %s\nx -[X || resistor Rx = 1 Ω]- g", "i[X] before 0 s"},
	"step amplitude of a voltage source":       {"voltage source X = %s * u(t)\na -[X]- g", "v[X] at 1 s"},
	"impulse weight of a voltage source":       {"voltage source X = %s * delta(t)\na -[X]- g", ""},
	"impulse weight of a current source":       {"current source X = %s * delta(t)\na -[X]- g", ""},
	"ramp slope of a current source":           {"current source X = %s * t * u(t)\na -[X]- g", "i[X] at 1 s"},
	"exponential rate":                         {"voltage source X = 1 V * exp(-t * (%s)) * u(t)\na -[X]- g", ""},
	"expression, expected dimension time":      {"let X = %s\nlet Y = X + 0 s", "X"},
	"expression, expected dimension 1/time":    {"let X = %s\nlet Y = X*1 s + 0", "X"},
	"expression, expected dimension voltage":   {"voltage source X = (%s)*u(t)\na -[X]- g", ""},
	"expression, dimensionless":                {"let X = %s\nlet Y = exp(X)", "X"},
	"expression, expected dimension energy":    {"let X = %s\nlet Y = X + 0 J", "X"},
	"expression, expected dimension charge":    {"let X = %s\nlet Y = X + 0 C", "X"},
	"expression":                               {"let X = %s", ""},
	"frequency argument":                       {"tell z[a] at %s", ""},
	"level":                                    {"let X = %s", "X"},
	"phase":                                    {"voltage source X = 1 V * sin(50 Hz*2*pi*t + %s) * u(t)\na -[X]- g", ""},
	"single-pole op amp":                       {"op amp X = %s, gain 1e5, + at a, - at o, output at o\no -[resistor Ro = 1 Ω]- g", ""},
	"expression, expected dimension impedance": {"impedance X = %s\na -[X]- g", ""},
}

// unitBase is the network around every text: everything that the collection's
// expressions name.
const unitBase = `ground g
a -[resistor R1 = 1 kΩ]- g
a -[capacitor C1 = 1 µF]- g
a -[inductor L1 = 1 mH]- g
let V0 = 5 V
let G1 = 1 mS
let I0 = 5 mA
`

// unitCheck puts every text in its frame and looks whether it is refused, and
// what value was read where it is not.
func unitCheck(ctx context.Context, q *caseQuestion) outcome {
	var faults []string
	for _, s := range q.Statements {
		if err := unitOne(ctx, s); err != nil {
			faults = append(faults, fmt.Sprintf("%s %q: %v", s.Context, s.Text, err))
		}
	}
	if len(faults) > 0 {
		return wrong("%s", strings.Join(faults, "\n      "))
	}
	return outcome{}
}

func unitOne(ctx context.Context, s unitStatement) error {
	frame, ok := unitFrames[s.Context]
	if !ok {
		return fmt.Errorf("no frame for it")
	}
	text := inNotation(s)
	file := unitBase + fmt.Sprintf(frame.file, text) + "\n"
	if s.Context == "expression" && strings.Contains(text, "<") {
		file = unitBase + "require " + text + "\n"
	}
	a := &asker{ctx: ctx, analysis: analysisOf("units.plight", file)}
	refused := ""
	for _, f := range a.analysis.Checked().Findings {
		grave := f.Severity == dialect.Error || s.Reason == "RANGE_WARNING" && f.Severity == dialect.Warning
		if grave {
			refused = f.String()
		}
	}
	switch {
	case s.Expect == "reject" && refused == "":
		return fmt.Errorf("it is accepted")
	case s.Expect == "reject":
		return nil
	case refused != "":
		return fmt.Errorf("it is refused: %s", refused)
	}
	return a.unitValue(frame.question, text, s)
}

// inNotation rewrites the few texts whose form another notation would have.
func inNotation(s unitStatement) string {
	text := strings.TrimPrefix(s.Text, "gain-bandwidth ")
	text, _ = strings.CutSuffix(text, " as a voltage ratio")
	switch s.Context {
	case "value of a vccs transconductance", "value of a vcvs gain":
		text = "(" + text + ")"
	}
	return text
}

// unitValue compares the value read with the collection's.
func (a *asker) unitValue(question, text string, s unitStatement) error {
	if s.SIValue == nil || s.Context == "frequency argument" || s.Context == "single-pole op amp" {
		return nil
	}
	if question == "" || question == "given" {
		question = text
	}
	want := float(strings.Fields(*s.SIValue)[0])
	v, err := a.ask("%s", question)
	if err != nil {
		return err
	}
	got, err := v.number()
	if err != nil {
		return err
	}
	if s.Context == "level" && v.Unit == "dB" && !strings.HasSuffix(*s.SIValue, "dB") {
		got = math.Pow(10, got/20) // the ratio that the level stands for
	}
	if math.Abs(got-want) > 1e-12*math.Abs(want) {
		return fmt.Errorf("it is read as %.17g, want %s", got, *s.SIValue)
	}
	return nil
}
