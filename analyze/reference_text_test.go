package analyze_test

import (
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"portlight/analyze"
	"portlight/dialect"
)

// The files of testdata/reference are networks with the answers they must
// give. Directly below a tell line stand its expectations, one to a line:
//
//	#= FIELD WANTED [within TOLERANCE]
//
// FIELD is a field of the answer's JSON form. The file says where the figures
// are from in a line that begins "# Source:".
const referenceTexts = "../testdata/reference"

// TestReferenceTexts asks every question of every file and compares.
func TestReferenceTexts(t *testing.T) {
	names, _ := filepath.Glob(filepath.Join(referenceTexts, "*.plight"))
	if len(names) < 10 {
		t.Fatalf("only %d reference files in %s", len(names), referenceTexts)
	}
	for _, name := range names {
		t.Run(strings.TrimSuffix(filepath.Base(name), ".plight"), func(t *testing.T) { runReferenceText(t, name) })
	}
}

func runReferenceText(t *testing.T, name string) {
	data, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	text := string(data)
	if !strings.Contains(text, "# Source: ") {
		t.Error("the file does not say where its figures are from")
	}
	analysis := analysisOf(name, text)
	findings, err := analysis.Findings(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range findings {
		if f.Severity == dialect.Error {
			line, _ := f.Origin.File.Lines.Position(f.Origin.Span.Start, dialect.CodePoints)
			t.Errorf("line %d: %s", line+1, f)
		}
	}
	verdicts, err := analysis.Verdicts(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	for _, v := range verdicts {
		if v.Decision != analyze.Holds {
			t.Errorf("require %s: %s", v.Limit.Text, analyze.VerdictWords(v))
		}
	}
	checks := askExpectations(t, analysis, strings.Split(text, "\n"))
	if checks == 0 && len(verdicts) == 0 {
		t.Error("the file expects nothing")
	}
}

// askExpectations asks the file's questions and gives how many expectations it met.
func askExpectations(t *testing.T, analysis *analyze.Analysis, lines []string) (checks int) {
	questions := analysis.Checked().Description.Questions
	attached := 0
	for i := range questions {
		q := &questions[i]
		answer, err := analysis.Answer(t.Context(), q)
		if err != nil {
			t.Fatal(err)
		}
		line, _ := q.Origin.File.Lines.Position(q.Origin.Span.Start, dialect.CodePoints)
		for next := line + 1; next < len(lines) && strings.HasPrefix(lines[next], "#="); next++ {
			attached++
			if err := meets(t.Context(), answer, strings.TrimPrefix(lines[next], "#=")); err != nil {
				t.Errorf("line %d, tell %s: %v", next+1, q.Text, err)
			}
			checks++
		}
	}
	for i, l := range lines {
		if strings.HasPrefix(l, "#=") {
			attached--
			if attached < 0 {
				t.Errorf("line %d: an expectation that belongs to no question", i+1)
			}
		}
	}
	return checks
}

var expectationForm = regexp.MustCompile(`^ *(\S+) +(.*?)(?: +within +(\S+))? *$`)

// meets compares one field of an answer with what a line expects.
func meets(_ context.Context, answer analyze.Answer, expectation string) error {
	m := expectationForm.FindStringSubmatch(expectation)
	if m == nil {
		return fmt.Errorf("%q is not FIELD WANTED [within TOLERANCE]", expectation)
	}
	data, err := json.Marshal(analyze.JSON(answer))
	if err != nil {
		return err
	}
	field, wanted, within := m[1], m[2], m[3]
	tolerance := 0.0
	if within != "" {
		if tolerance = float(within); math.IsNaN(tolerance) {
			return fmt.Errorf("the tolerance %q is no number", within)
		}
	}
	var v view
	if err := json.Unmarshal(data, &v); err != nil {
		return err
	}
	if v.Kind == "refused" && field != "code" {
		return fmt.Errorf("refused: %s", v.Why)
	}
	switch field {
	case "roots", "poles", "zeros":
		return meetsRoots(&v, field, wanted, tolerance)
	case "numerator", "denominator":
		return meetsList(side(&v, field), wanted, tolerance)
	}
	if place, of, ok := strings.Cut(field, "."); ok && len(place) == 2 && len(v.Entries) == 2 {
		// 12.numerator: an entry of a matrix
		return meetsList(side(&v.Entries[(place[0]-'1')&1][(place[1]-'1')&1], of), wanted, tolerance)
	}
	var fields map[string]any
	if err := json.Unmarshal(data, &fields); err != nil {
		return err
	}
	got, there := fields[field]
	if !there {
		return fmt.Errorf("the answer has no field %q: %s", field, data)
	}
	text := fmt.Sprint(got)
	if within == "" {
		if text == wanted || sameRat(text, wanted) {
			return nil
		}
	} else if d := math.Abs(float(text) - float(wanted)); d <= tolerance {
		return nil
	}
	return fmt.Errorf("%s is %s, want %s", field, text, wanted)
}

func sameRat(a, b string) bool {
	x, err := rat(a)
	if err != nil {
		return false
	}
	y, err := rat(b)
	return err == nil && x.Cmp(y) == 0
}

// side is one polynomial of a function, scaled so that the lowest coefficient
// of the denominator is 1, as the JSON form has it.
func side(v *view, name string) []string {
	if name == "numerator" {
		return v.Numerator
	}
	return v.Denominator
}

// meetsList compares coefficients, exactly without a tolerance.
func meetsList(got []string, wanted string, tolerance float64) error {
	want := strings.Fields(wanted)
	if len(got) != len(want) {
		return fmt.Errorf("it is %v, want %v", got, want)
	}
	for i := range got {
		if !sameRat(got[i], want[i]) && !(math.Abs(float(got[i])-float(want[i])) <= tolerance && tolerance > 0) {
			return fmt.Errorf("it is %v, want %v", got, want)
		}
	}
	return nil
}

// rootForm reads "-1", "±2j", "-0.5±0.866j" and "-1 x3" for a triple root.
var rootForm = regexp.MustCompile(`^(-?[0-9.e+]*[0-9](?:e-?[0-9]+)?)?(?:±([0-9.]+(?:e-?[0-9]+)?)j)?(?: x([0-9]+))?$`)

// meetsRoots compares a set of roots, "none" or separated by semicolons.
func meetsRoots(v *view, field, wanted string, tolerance_ float64) error {
	list := map[string][]rootView{"roots": v.Roots, "poles": v.Poles, "zeros": v.Zeros}[field]
	var got, want []aRoot
	for _, r := range list {
		got = append(got, aRoot{complex(float(r.Re), float(r.Im)), r.Multiplicity})
	}
	for _, text := range strings.Split(wanted, ";") {
		text = strings.TrimSpace(text)
		if text == "none" {
			continue
		}
		m := rootForm.FindStringSubmatch(text)
		if m == nil || text == "" {
			return fmt.Errorf("%q is not a root", text)
		}
		multiplicity := 1
		if m[3] != "" {
			fmt.Sscan(m[3], &multiplicity)
		}
		re := float(orZero(m[1]))
		if m[2] == "" {
			want = append(want, aRoot{complex(re, 0), multiplicity})
			continue
		}
		im := float(m[2])
		want = append(want, aRoot{complex(re, im), multiplicity}, aRoot{complex(re, -im), multiplicity})
	}
	return compareRoots(got, want, tolerance{absolute: max(tolerance_, 1e-300)})
}
