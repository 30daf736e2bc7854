package analyze_test

import (
	"context"
	"encoding/json"
	"fmt"
	"strings"
	"testing"

	"portlight/analyze"
)

// formulaOf asks a question of a text and gives the formula of its answer.
func formulaOf(t *testing.T, a *analyze.Analysis, question string) string {
	t.Helper()
	answer, err := a.Ask(context.Background(), question)
	if err != nil {
		t.Fatal(err)
	}
	f, ok := answer.(*analyze.FunctionAnswer)
	if !ok {
		t.Fatalf("%s: %v", question, analyze.Words(answer))
	}
	return f.Formula
}

// filter is a network of the buoy's depth sensor: a bridge with a filter and
// an amplifier, written so that every kind of question has a formula.
const filter = `ground hull

voltage source Vs = 1 V * u(t)
resistor R1 = 1 kΩ
resistor R2 = 2 kΩ
capacitor C1 = 1 µF
inductor L1 = 10 mH
switch S1 = opens at 1 ms, resistance 1 Ω

in -[Vs]- hull
in -[R1]- out -[C1]- hull
out -[R2 || L1]- coil -[S1]- hull

resistor Ri = 1 kΩ
resistor Rf = 4.7 kΩ
op amp U1 = ideal, + at hull, - at x, output at amp
out -[Ri]- x -[Rf]- amp

subnetwork Lag (i, o, g) with R = 1 kΩ {
    resistor  R1 = R
    capacitor C1 = 100 nF
    i -[R1]- o -[C1]- g
}
part F1 = Lag with R = 3 kΩ, i at amp, o at late, g at hull

port p at out hull
function H = v[out]/Vs
function A = v[amp]/v[p]
function K = 1 - 2*H
function B = A/2
function Z = z[p]/R1
function N = v[late]/v[p]
function Y = i[R1]/Vs
function D = (v[in] - v[out])/Vs
`

func TestFormulas(t *testing.T) {
	a := analysisOfText(filter)
	for _, c := range []struct{ question, want string }{
		{"H", "Ri/(R1 + Ri + s·R1·C1·Ri)"},
		{"H without R1", ""},     // zero
		{"H with S1 closed", ""}, // too many terms
		{"H with S1 closed without Ri, L1", "(R2 + S1)/(R1 + R2 + S1 + s·R1·C1·(R2 + S1))"},
		{"H without Ri", "1/(1 + s·R1·C1)"},
		{"H without Ri, R2", "1/(1 + s·R1·C1)"},
		{"z[p]", "R1·Ri/(R1 + Ri + s·R1·C1·Ri)"},
		{"y[p]", "(R1 + Ri + s·R1·C1·Ri)/(R1·Ri)"},
		{"z[R1]", "Ri/(1 + s·C1·Ri)"},
		{"z[C1]", "R1·Ri/(R1 + Ri)"},
		{"z[amp,x]", "Rf"},
		{"A", "−Rf/Ri"},
		{"B", "−Rf/(2·Ri)"},
		{"K", "(R1 − Ri + s·R1·C1·Ri)/(R1 + Ri + s·R1·C1·Ri)"},
		{"H*H", "Ri²/(R1 + Ri + s·R1·C1·Ri)²"},
		{"H/A", "−Ri²/(Rf·(R1 + Ri + s·R1·C1·Ri))"},
		{"1/(s*z[C1])", "(R1 + Ri)/(s·R1·Ri)"},
		{"Z", ""}, // R1 in an expression is a number there
		{"N", "−Rf/(Ri·(1 + s·F1.R1·F1.C1))"},
		{"Y", "(1 + s·C1·Ri)/(R1 + Ri + s·R1·C1·Ri)"},
		{"D", "R1·(1 + s·C1·Ri)/(R1 + Ri + s·R1·C1·Ri)"},
	} {
		answer, err := a.Ask(context.Background(), c.question)
		if err != nil {
			t.Fatal(err)
		}
		f, ok := answer.(*analyze.FunctionAnswer)
		if !ok {
			t.Errorf("%s: %q", c.question, analyze.Words(answer))
			continue
		}
		if f.Formula != c.want {
			t.Errorf("%s: got  %s\nwant %s", c.question, f.Formula, c.want)
		}
	}
}

// TestFormulaShown: the formula comes first, in every form of an answer.
func TestFormulaShown(t *testing.T) {
	a := analysisOfText(filter)
	ctx := context.Background()
	answer, err := a.Ask(ctx, "H without Ri, R2")
	if err != nil {
		t.Fatal(err)
	}
	const formula = "1/(1 + s·R1·C1)"
	if words := analyze.Words(answer); words[0] != "H = "+formula || words[1] != "1 / (1 + s/ω₁)" {
		t.Errorf("words: %q", words)
	}
	if text := analyze.Markdown(answer); !strings.Contains(text, "- H = "+formula+"\n") {
		t.Errorf("Markdown: %s", text)
	}
	encoded, err := json.Marshal(analyze.JSON(answer))
	if err != nil {
		t.Fatal(err)
	}
	var view map[string]any
	if err := json.Unmarshal(encoded, &view); err != nil || view["formula"] != formula {
		t.Errorf("JSON: %s (%v)", encoded, err)
	}
	answer, err = a.Ask(ctx, "Z")
	if err != nil {
		t.Fatal(err)
	}
	if encoded, _ = json.Marshal(analyze.JSON(answer)); strings.Contains(string(encoded), "formula") {
		t.Errorf("JSON without a formula: %s", encoded)
	}
	answer, err = a.Ask(ctx, "thevenin[p]")
	if err != nil {
		t.Fatal(err)
	}
	if words := strings.Join(analyze.Words(answer), "\n"); !strings.Contains(words, "impedance: z[p] = R1·Ri/(R1 + Ri + s·R1·C1·Ri)") {
		t.Errorf("Thévenin: %s", words)
	}
}

// TestFormulaOfAPiece: of a large network only the piece asked about is looked
// at.
func TestFormulaOfAPiece(t *testing.T) {
	var b strings.Builder
	b.WriteString("ground hull\nvoltage source Vs = 1 V * u(t)\nrail -[Vs]- hull\n")
	for k := range 40 {
		fmt.Fprintf(&b, "resistor R%d = %d Ω\ncapacitor C%d = 1 µF\ninductor L%d = 1 mH\n", k, 1000+k, k, k)
		fmt.Fprintf(&b, "rail -[R%d]- m%d -[C%d || L%d]- hull\n", k, k, k, k)
	}
	a := analysisOfText(b.String() + "function H = v[m17]/Vs\nfunction I = i[R5]/Vs\n")
	for question, want := range map[string]string{
		"H":         "s·L17/(R17 + s·L17 + s²·R17·C17·L17)",
		"z[m15]":    "s·R15·L15/(R15 + s·L15 + s²·R15·C15·L15)",
		"I":         "(1 + s²·C5·L5)/(R5 + s·L5 + s²·R5·C5·L5)",
		"z[m1,m2]":  "s·(R1·R2·(L1 + L2) + s·L1·L2·(R1 + R2) + s²·R1·L1·R2·L2·(C1 + C2))/((R1 + s·L1 + s²·R1·C1·L1)·(R2 + s·L2 + s²·R2·C2·L2))",
		"z[R9]":     "s·L9/(1 + s²·C9·L9)",
		"y[m4]":     "(R4 + s·L4 + s²·R4·C4·L4)/(s·R4·L4)",
		"z[rail]":   "",
		"H/H":       "",
		"H - z[m3]": "",
	} {
		answer, err := a.Ask(context.Background(), question)
		if err != nil {
			t.Fatal(err)
		}
		f, ok := answer.(*analyze.FunctionAnswer)
		if !ok {
			if want != "" {
				t.Errorf("%s: %q", question, analyze.Words(answer))
			}
			continue
		}
		if f.Formula != want {
			t.Errorf("%s: got  %s\nwant %s", question, f.Formula, want)
		}
	}
}

// TestFormulaEnds: an ended context gives no answer without its formula.
func TestFormulaEnds(t *testing.T) {
	a := analysisOfText(filter)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if answer, err := a.Ask(ctx, "H"); err == nil {
		t.Errorf("an answer after the end: %q", analyze.Words(answer))
	}
	if got := formulaOf(t, a, "H"); got == "" {
		t.Error("no formula for the next who asks")
	}
}
