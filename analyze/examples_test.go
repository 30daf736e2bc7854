package analyze_test

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"portlight/analyze"
	"portlight/dialect"
)

// exampleFindings is what a practitioner would be told about each example, by
// code: cautions about real voltages and energies, limits that do not hold,
// remarks on the order of the network. Files that are there to be hard have
// tests of their own.
var exampleFindings = map[string]string{
	"bank":             "stored-energy touch-voltage inductor-cutset limit-broken",
	"buck_load_step":   "limit-broken limit-broken",
	"crossover":        "",
	"delayed_sine":     "touch-voltage",
	"emi":              "limit-broken-in-tolerance",
	"flyback":          "touch-voltage stored-energy",
	"gyrator":          "",
	"lisn":             "no-dc-path hidden-mode",
	"mfb":              "",
	"probe":            "capacitor-loop initial-conflict limit-broken-in-tolerance",
	"relay":            "",
	"riaa":             "touch-voltage limit-broken",
	"sallen_key":       "limit-broken",
	"three-files/main": "hidden-mode",
	"tia":              "capacitor-loop capacitor-loop limit-undecided limit-broken",
	"twoport":          "",
}

// undecidable are the limits of the examples that have no verdict, with the reason.
var undecidable = map[string]string{
	"overshoot(v[out]) <= 10 %": "its final value is 0", // of a pulse, in tia
}

// TestExamples asks every question of the examples that stand beside the
// repository: none is refused, every limit is decided, in time for an editor.
func TestExamples(t *testing.T) {
	folder := filepath.Join("..", "..", "shared", "examples")
	if _, err := os.Stat(folder); err != nil {
		t.Skip("the examples do not stand beside this clone: " + err.Error())
	}
	for name, want := range exampleFindings {
		t.Run(name, func(t *testing.T) {
			start := time.Now()
			a := readAnalysis(t, filepath.Join(folder, filepath.FromSlash(name)+".plight"))
			findings, err := a.Findings(soon(t))
			if err != nil {
				t.Fatal(err)
			}
			var codes []string
			for _, f := range findings {
				codes = append(codes, string(f.Code))
			}
			if got := strings.Join(codes, " "); got != want {
				t.Errorf("the findings are %q, want %q", got, want)
			}
			everyAnswer(t, a)
			t.Logf("all of it took %v", time.Since(start).Round(time.Millisecond))
		})
	}
}

// readAnalysis analyses a file on disk with the files it uses.
func readAnalysis(t *testing.T, name string) *analyze.Analysis {
	t.Helper()
	read := func(path string) (*dialect.File, error) {
		data, err := os.ReadFile(path)
		if err != nil {
			return nil, err
		}
		return dialect.Parse(path, string(data)), nil
	}
	main, err := read(name)
	if err != nil {
		t.Fatal(err)
	}
	return analyze.New(dialect.Check(main, read))
}

// everyAnswer fails for a question that is refused and a limit that is undecided.
func everyAnswer(t *testing.T, a *analyze.Analysis) {
	t.Helper()
	answers, err := a.Answers(soon(t))
	if err != nil {
		t.Fatal(err)
	}
	for _, answer := range answers {
		if refused, ok := answer.(*analyze.RefusedAnswer); ok {
			t.Errorf("tell %s is refused: %s", refused.Text, refused.Why)
		}
		if words := strings.Join(analyze.Words(answer), "\n"); strings.Contains(words, "no answer") || words == "" {
			t.Errorf("tell %s: %q", answer.Asked(), words)
		}
	}
	verdicts, err := a.Verdicts(soon(t))
	if err != nil {
		t.Fatal(err)
	}
	for i := range verdicts {
		v := &verdicts[i]
		why, known := undecidable[v.Limit.Text]
		switch {
		case v.Decision != analyze.Undecided:
		case !known || !strings.Contains(v.Why, why):
			t.Errorf("require %s is undecided: %s", v.Limit.Text, v.Why)
		}
	}
}

// demoWarnings are what demos show on purpose.
var demoWarnings = map[string]dialect.Code{
	"hydrophone.plight": "limit-broken-in-tolerance", // the filter with its parts at their worst
}

// TestDemos: the networks of the project's own scenario have no finding that
// is not accepted in them, and every question of theirs has an answer.
func TestDemos(t *testing.T) {
	names, err := filepath.Glob("../testdata/buoy/*.plight")
	if err != nil || len(names) < 4 {
		t.Fatalf("%d demos, %v", len(names), err)
	}
	for _, name := range names {
		t.Run(filepath.Base(name), func(t *testing.T) {
			a := readAnalysis(t, name)
			findings, err := a.Findings(soon(t))
			if err != nil {
				t.Fatal(err)
			}
			for _, f := range findings {
				if f.Severity <= dialect.Warning && demoWarnings[filepath.Base(name)] != f.Code {
					t.Error(f)
				}
			}
			everyAnswer(t, a)
		})
	}
}
