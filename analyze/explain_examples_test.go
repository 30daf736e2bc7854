package analyze_test

import (
	"context"
	"errors"
	"testing"
	"time"

	"portlight/analyze"
	"portlight/dialect"
)

// checkText parses and checks a file from memory; files are what it uses.
func checkText(name, text string, files map[string]string) *dialect.Checked {
	return dialect.Check(dialect.Parse(name, text), func(path string) (*dialect.File, error) {
		if text, ok := files[path]; ok {
			return dialect.Parse(path, text), nil
		}
		return nil, errors.New("there is no such file")
	})
}

// analysisOfText analyses a text that uses no other file.
func analysisOfText(text string) *analyze.Analysis {
	return analyze.New(checkText("test.plight", text, nil))
}

// soon is a context that ends a test which hangs long before the test binary's own limit does.
func soon(t *testing.T) context.Context {
	t.Helper()
	ctx, cancel := context.WithTimeout(context.Background(), time.Minute)
	t.Cleanup(cancel)
	return ctx
}

// companions are codes that cannot but come with another, with the reason.
var companions = map[dialect.Code]map[dialect.Code]string{
	"initial-conflict": {"capacitor-loop": "voltages conflict around a loop of capacitors"},
	"faults":           {"unit-mismatch": "it takes an error to leave something out"},
}

// TestEveryExplanationExample runs each example through check and analysis: it
// yields its code and no other, as a finding or as the refusal of its question.
func TestEveryExplanationExample(t *testing.T) {
	for _, e := range dialect.Explanations() {
		t.Run(string(e.Code), func(t *testing.T) {
			t.Parallel()
			if e.Example == "" {
				t.Fatal("there is no example")
			}
			a := analyze.New(checkText("example.plight", e.Example, e.Files))
			findings, err := a.Findings(soon(t))
			if err != nil {
				t.Fatal(err)
			}
			found := false
			for _, f := range findings {
				switch {
				case f.Code == e.Code && e.Question == "":
					found = true
					if f.Severity != e.Severity {
						t.Errorf("%s; the table calls it %s", f, e.Severity)
					}
				case companions[e.Code][f.Code] == "":
					t.Errorf("also yields %s", f)
				}
			}
			if e.Question != "" {
				answer, err := a.Ask(soon(t), e.Question)
				if err != nil {
					t.Fatal(err)
				}
				refused, ok := answer.(*analyze.RefusedAnswer)
				if !ok || refused.Code != e.Code {
					t.Fatalf("%s is answered with %T %v", e.Question, answer, analyze.Words(answer))
				}
				found = true
			}
			if !found {
				t.Errorf("the example does not yield it")
			}
		})
	}
}
