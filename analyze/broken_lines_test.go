package analyze

import (
	"context"
	"strings"
	"testing"

	"portlight/dialect"
)

// TestBrokenLinesDecideNothing checks that a limit and a question which rest
// on a line with an error are kept and say so, that the others are decided,
// and that a mere warning stops none.
func TestBrokenLinesDecideNothing(t *testing.T) {
	const text = `ground hull
voltage source Vs = 5 V * sin(50 Hz*t)
in -[Vs]- hull
in -[resistor R1 = 1 kΩ]- out -[capacitor C1 = 1 µF]- hull
function F = v[out/Vs
function H = v[out]/Vs
tell F at 1 kHz
require gain(F) <= 2
require gain(H) <= 2
require v[out] <= 5.001 V
require v[oit] <= 1 V
`
	ctx := context.Background()
	a := New(dialect.Check(dialect.Parse("broken.plight", text), nil))
	verdicts, err := a.Verdicts(ctx)
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []string{
		"undecided: the line that defines the function F has an error", "holds", "holds", "undecided: its own line has an error",
	} {
		if i >= len(verdicts) || !strings.HasPrefix(VerdictWords(verdicts[i]), want) {
			t.Errorf("limit %d of %d: want %s", i, len(verdicts), want)
		}
	}
	answers, err := a.Answers(ctx)
	if err != nil || len(answers) != 1 {
		t.Fatal(answers, err)
	}
	if r, ok := answers[0].(*RefusedAnswer); !ok || r.Code != "faults" || !strings.Contains(r.Why, "the function F has an error") {
		t.Errorf("the question about F: %v", Words(answers[0]))
	}
	told := map[int]bool{}
	findings, err := a.Findings(ctx)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range findings {
		if f.Code == "limit-undecided" {
			told[f.Origin.File.Lines.Line(f.Origin.Span.Start)+1] = true
		}
	}
	if len(told) != 1 || !told[8] {
		t.Errorf("limit-undecided is told at lines %v, want 8 alone: line 11 has its own finding", told)
	}
}
