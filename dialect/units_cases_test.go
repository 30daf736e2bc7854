package dialect

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// unitFrames set a statement of the unit cases into a file.
var unitFrames = map[string]string{
	"value of a resistor":                      "resistor X = %s\na -[X]- g",
	"value of a inductor":                      "inductor X = %s\na -[X]- g",
	"value of a capacitor":                     "capacitor X = %s\na -[X]- g",
	"value of a vccs transconductance":         "current source X = %s * v[a]\ng -[X]- a",
	"value of a vcvs gain":                     "voltage source X = %s * v[a]\nb -[X]- g\nb -[resistor Rb = 1 Ω]- g",
	"value of a coupling factor":               "inductor La = 1 H\ninductor Lb = 1 H\na -[La]- g\na -[Lb]- g\ncoupling X = %s, between La Lb",
	"value of a mutual inductance":             "inductor La = 1 H\ninductor Lb = 1 H\na -[La]- g\na -[Lb]- g\ncoupling X = %s + 0 H, between La Lb",
	"initial condition of a capacitor":         "capacitor X = 1 F, initially %s\na -[X]- g",
	"initial condition of a inductor":          "inductor X = 1 H, initially %s\na -[X]- g",
	"step amplitude of a voltage source":       "voltage source X = %s * u(t)\na -[X]- g",
	"impulse weight of a voltage source":       "voltage source X = %s * delta(t)\na -[X]- g",
	"impulse weight of a current source":       "current source X = %s * delta(t)\na -[X]- g",
	"ramp slope of a current source":           "current source X = %s * t * u(t)\na -[X]- g",
	"exponential rate":                         "voltage source X = 1 V * exp(-t * (%s)) * u(t)\na -[X]- g",
	"expression, expected dimension time":      "let X = %s\nlet Y = X + 0 s",
	"expression, expected dimension 1/time":    "let X = %s\nlet Y = X*1 s + 0",
	"expression, expected dimension voltage":   "voltage source X = (%s)*u(t)\na -[X]- g",
	"expression, dimensionless":                "let X = %s\nlet Y = exp(X)",
	"expression, expected dimension energy":    "let X = %s\nlet Y = X + 0 J",
	"expression, expected dimension charge":    "let X = %s\nlet Y = X + 0 C",
	"expression, expected dimension impedance": "impedance X = %s\na -[X]- g",
	"expression":         "let X = %s",
	"frequency argument": "tell z[a] at %s",
	"level":              "let X = %s",
	"phase":              "voltage source X = 1 V * sin(50 Hz*2*pi*t + %s) * u(t)\na -[X]- g",
	"single-pole op amp": "op amp X = %s, gain 1e5, + at a, - at o, output at o\no -[resistor Ro = 1 Ω]- g",
}

const unitBase = `ground g
a -[resistor R1 = 1 kΩ]- g
a -[capacitor C1 = 1 µF]- g
a -[inductor L1 = 1 mH]- g
let G1 = 1 mS
let V0 = 5 V
let I0 = 2 A
`

type unitStatement struct {
	Context, Text, Expect, Reason string
	SIValue                       *string `json:"si_value"`
}

// ownUnitStatements are the essential statements, kept here so that a clean
// clone runs them. Values of units and prefixes: SI Brochure, 9th edition
// (2019), tables 4 and 7; levels: IEC 60027-3:2002.
var ownUnitStatements = []unitStatement{
	{Context: "value of a resistor", Text: "2.2 kohm", Expect: "accept", SIValue: ptr("2200")},
	{Context: "value of a resistor", Text: "7 V/A", Expect: "accept", SIValue: ptr("7")},
	{Context: "value of a resistor", Text: "5 S", Expect: "reject"},
	{Context: "value of a resistor", Text: "22", Expect: "reject"},
	{Context: "value of a resistor", Text: "0.1 Ω", Expect: "accept", SIValue: ptr("0.1")},
	{Context: "value of a resistor", Text: "1e999 Ω", Expect: "reject"},
	{Context: "value of a resistor", Text: "10 kkΩ", Expect: "reject"},
	{Context: "value of a resistor", Text: "10 Ω Ω", Expect: "reject"},
	{Context: "value of a inductor", Text: "3 mV*s/A", Expect: "accept", SIValue: ptr("0.003")},
	{Context: "value of a inductor", Text: "5 MH", Expect: "reject", Reason: "RANGE_WARNING"},
	{Context: "value of a capacitor", Text: "47 μF", Expect: "accept", SIValue: ptr("4.7e-5")},
	{Context: "value of a capacitor", Text: "5 PF", Expect: "reject", Reason: "RANGE_WARNING"},
	{Context: "value of a capacitor", Text: "4 H", Expect: "reject"},
	{Context: "value of a capacitor", Text: "-1 nF", Expect: "reject"},
	{Context: "value of a coupling factor", Text: "1.01", Expect: "reject"},
	{Context: "initial condition of a capacitor", Text: "3 µC", Expect: "reject"},
	{Context: "impulse weight of a voltage source", Text: "3 V", Expect: "reject"},
	{Context: "impulse weight of a current source", Text: "3 µC", Expect: "accept"},
	{Context: "exponential rate", Text: "10 s", Expect: "reject"},
	{Context: "expression, expected dimension time", Text: "L1/R1", Expect: "accept", SIValue: ptr("1e-6")},
	{Context: "expression, expected dimension impedance", Text: "R1 + 1/(s*C1)", Expect: "accept"},
	{Context: "expression, expected dimension impedance", Text: "R1 + s*C1", Expect: "reject"},
	{Context: "expression", Text: "exp(V0)", Expect: "reject"},
	{Context: "expression", Text: "V0 + I0", Expect: "reject"},
	{Context: "expression", Text: "4 dB + 1 V", Expect: "reject"},
	{Context: "frequency argument", Text: "500", Expect: "reject"},
	{Context: "frequency argument", Text: "500 1/s", Expect: "reject"},
	{Context: "frequency argument", Text: "500 rad/s", Expect: "accept"},
	{Context: "level", Text: "40 dBµV", Expect: "accept", SIValue: ptr("1e-4")},
	{Context: "level", Text: "-20 dBV", Expect: "accept", SIValue: ptr("0.1")},
	{Context: "level", Text: "0 dBu", Expect: "accept", SIValue: ptr("0.7745966692414834")},
	{Context: "level", Text: "dB(3 V)", Expect: "reject"},
	{Context: "phase", Text: "90 Hz", Expect: "reject"},
	{Context: "phase", Text: "90°", Expect: "accept"},
	{Context: "single-pole op amp", Text: "3 MHz", Expect: "accept"},
	{Context: "single-pole op amp", Text: "3 µs", Expect: "reject"},
}

func ptr(s string) *string { return &s }

func TestUnitStatements(t *testing.T) {
	for _, s := range ownUnitStatements {
		checkUnitStatement(t, s)
	}
}

// TestSharedUnitStatements runs the collection's own statements where it is
// at hand.
func TestSharedUnitStatements(t *testing.T) {
	paths, _ := filepath.Glob("../../shared/cases/i0*.json")
	if len(paths) == 0 {
		t.Skip("the shared cases are not at hand")
	}
	asked := 0
	for _, path := range paths {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		var file struct {
			Ask []struct{ Statements []unitStatement }
		}
		if err := json.Unmarshal(text, &file); err != nil {
			t.Fatal(err)
		}
		for _, ask := range file.Ask {
			for _, s := range ask.Statements {
				checkUnitStatement(t, s)
				asked++
			}
		}
	}
	if asked < 80 {
		t.Errorf("only %d statements were asked", asked)
	}
}

func checkUnitStatement(t *testing.T, s unitStatement) {
	t.Helper()
	frame, ok := unitFrames[s.Context]
	if !ok {
		t.Errorf("no frame for %q", s.Context)
		return
	}
	text := strings.TrimPrefix(s.Text, "gain-bandwidth ")
	text = strings.TrimSuffix(text, " as a voltage ratio")
	file := unitBase + fmt.Sprintf(frame, text) + "\n"
	if s.Context == "expression" && strings.Contains(text, "<") {
		file = unitBase + "require " + text + "\n"
	}
	c := Check(Parse("units.plight", file), nil)
	refused := ""
	for _, f := range c.Findings {
		if f.Severity == Error || s.Reason == "RANGE_WARNING" && f.Severity == Warning {
			refused = f.String()
		}
	}
	switch {
	case s.Expect == "accept" && refused != "":
		t.Errorf("%s %q is refused: %s", s.Context, s.Text, refused)
	case s.Expect == "reject" && refused == "":
		t.Errorf("%s %q is accepted", s.Context, s.Text)
	case s.Expect == "accept" && s.SIValue != nil:
		compareUnitValue(t, s, c)
	}
}

// compareUnitValue compares the value read with the one given.
func compareUnitValue(t *testing.T, s unitStatement, c *Checked) {
	t.Helper()
	var want float64
	if n, d, ok := strings.Cut(*s.SIValue, "/"); ok {
		var x, y float64
		fmt.Sscan(n, &x)
		fmt.Sscan(d, &y)
		want = x / y
	} else if _, err := fmt.Sscan(*s.SIValue, &want); err != nil {
		t.Fatal(err)
	}
	if _, radians, ok := strings.Cut(*s.SIValue, " = "); ok { // "1000 Hz = 6283… rad/s"
		fmt.Sscan(radians, &want)
	}
	got, ok := unitValue(s, c)
	if !ok {
		return
	}
	if math.Abs(got-want) > 1e-14*math.Abs(want) {
		t.Errorf("%s %q is read as %.17g, want %s", s.Context, s.Text, got, *s.SIValue)
	}
}

func unitValue(s unitStatement, c *Checked) (float64, bool) {
	d := c.Description
	for _, q := range d.Questions {
		return q.Qualifiers.At.Value.Float(), true
	}
	for _, l := range d.Lets {
		if l.Name == "X" {
			x, ok := l.Value.(*Constant)
			if !ok {
				return 0, false
			}
			if x.Dimension.Level && !strings.HasSuffix(*s.SIValue, "dB") {
				return math.Pow(10, x.Value.Float()/20), true
			}
			return x.Value.Float(), true
		}
	}
	for _, p := range d.Parts {
		if p.Name != "X" {
			continue
		}
		switch {
		case p.Initial != nil:
			return p.Initial.Float(), true
		case p.GainBandwidth != nil:
			return p.GainBandwidth.Float(), true
		case p.Dependent != nil:
			return p.Dependent[0].Coefficient.Numerator[0].Float() / p.Dependent[0].Coefficient.Denominator[0].Float(), true
		case p.Kind == Resistor, p.Kind == Inductor, p.Kind == Capacitor, p.Kind == Coupling:
			return p.Value.Float(), true
		case p.Waveform != nil && s.Context != "exponential rate":
			piece := p.Waveform.Pieces[0]
			if len(piece.Impulses) > 0 {
				return piece.Impulses[0].Float(), true
			}
			return piece.Terms[0].Cosine.Float(), true
		}
	}
	return 0, false
}
