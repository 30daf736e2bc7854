package dialect

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// checkSeeds are all texts at hand: the examples of the findings and the files
// of the repository.
func checkSeeds() []string {
	var seeds []string
	for _, e := range Explanations() {
		seeds = append(seeds, e.Example)
	}
	for _, pattern := range []string{"../testdata/*/*.plight", "../../shared/examples/*.plight", "../../shared/examples/*/*.plight"} {
		paths, _ := filepath.Glob(pattern)
		for _, p := range paths {
			if text, err := os.ReadFile(p); err == nil {
				seeds = append(seeds, string(text))
			}
		}
	}
	return seeds
}

// examine checks a text and looks whether the result is consistent: indices in
// range, findings inside their files, repairs that can be applied.
func examine(t *testing.T, text string) *Checked {
	t.Helper()
	c := Check(Parse("fuzz.plight", text), mapReader(map[string]string{"other.plight": text}))
	d := c.Description
	node := func(n int, what string) {
		if n < -1 || n >= len(d.Nodes) {
			t.Fatalf("%s is at node %d of %d", what, n, len(d.Nodes))
		}
	}
	node(d.Ground, "the reference")
	for i := range d.Parts {
		examinePart(t, d, &d.Parts[i], node)
	}
	for _, p := range d.Ports {
		node(p.Plus, p.Name)
		node(p.Minus, p.Name)
	}
	for _, q := range d.Questions {
		examineExpression(t, d, q.What)
	}
	for _, l := range d.Limits {
		examineExpression(t, d, l.Left)
		examineExpression(t, d, l.Right)
	}
	for _, f := range d.Functions {
		examineExpression(t, d, f.Value)
	}
	for _, f := range c.Findings {
		examineFinding(t, f)
	}
	for _, s := range c.Symbols() {
		c.Indices(s)
		for _, r := range s.References {
			if r.File.Text[r.Span.Start:r.Span.End] != s.Name {
				t.Fatalf("%s is said to stand at %q", s.Name, r.File.Text[r.Span.Start:r.Span.End])
			}
		}
	}
	for offset := 0; offset <= len(text); offset += 1 + len(text)/50 {
		c.SymbolAt(c.Main, offset)
		c.ExpectedAt(c.Main, offset)
		c.Visible(c.Main, offset)
		c.UnwiredAt(c.Main, offset)
	}
	return c
}

func examinePart(t *testing.T, d *Description, p *Part, node func(int, string)) {
	t.Helper()
	for _, n := range []int{p.From, p.To, p.Plus, p.Minus, p.Output} {
		node(n, p.Name)
	}
	for _, w := range p.Windings {
		node(w.Plus, p.Name)
		node(w.Minus, p.Name)
	}
	for _, i := range p.Coils {
		if i < -1 || i >= len(d.Parts) || i >= 0 && d.Parts[i].Kind != Inductor {
			t.Fatalf("%s couples part %d", p.Name, i)
		}
	}
	if p.Rational != nil && len(p.Rational.Denominator) == 0 {
		t.Fatalf("the denominator of %s is zero", p.Name)
	}
	for _, k := range p.Dependent {
		examineProbe(t, d, k.Probe)
		if len(k.Coefficient.Denominator) == 0 {
			t.Fatalf("the denominator of a coefficient of %s is zero", p.Name)
		}
	}
	if p.Waveform != nil {
		for _, piece := range p.Waveform.Pieces {
			if sign, _ := piece.From.Sign(); sign < 0 {
				t.Fatalf("a piece of %s begins before 0", p.Name)
			}
		}
	}
}

func examineProbe(t *testing.T, d *Description, p Probe) {
	t.Helper()
	switch p.Of {
	case OfNodes:
		if p.Plus < 0 || p.Plus >= len(d.Nodes) || p.Minus >= len(d.Nodes) || p.Minus < 0 {
			if !d.Faults {
				t.Fatalf("a probe is between %d and %d of %d nodes", p.Plus, p.Minus, len(d.Nodes))
			}
		}
	case OfPart, OfTerminal:
		if p.Part < 0 || p.Part >= len(d.Parts) {
			t.Fatalf("a probe is of part %d of %d", p.Part, len(d.Parts))
		}
	case OfPort:
		if p.Port < 0 || p.Port >= len(d.Ports) {
			t.Fatalf("a probe is of port %d of %d", p.Port, len(d.Ports))
		}
	}
}

func examineExpression(t *testing.T, d *Description, x Expression) {
	t.Helper()
	switch x := x.(type) {
	case *Negate:
		examineExpression(t, d, x.X)
	case *Binary:
		examineExpression(t, d, x.X)
		examineExpression(t, d, x.Y)
	case *Call:
		for _, a := range x.Args {
			examineExpression(t, d, a)
		}
	case *At:
		examineExpression(t, d, x.X)
	case *Quantity:
		examineProbe(t, d, x.Probe)
	case *FunctionValue:
		if x.Function < 0 || x.Function >= len(d.Functions) {
			t.Fatalf("function %d of %d", x.Function, len(d.Functions))
		}
	}
}

func examineFinding(t *testing.T, f Finding) {
	t.Helper()
	inside := func(file *File, s Span) {
		if file == nil || s.Start < 0 || s.End < s.Start || s.End > len(file.Text) {
			t.Fatalf("%s is at %v", f, s)
		}
	}
	inside(f.Origin.File, f.Origin.Span)
	if f.Message == "" || strings.Contains(f.Message, "%!") {
		t.Fatalf("%s says %q", f.Code, f.Message)
	}
	if _, known := Explain(f.Code); !known {
		t.Fatalf("%s is not in the table", f.Code)
	}
	for _, r := range f.Related {
		inside(r.Origin.File, r.Origin.Span)
	}
	for _, r := range f.Repairs {
		for _, e := range r.Edits {
			inside(e.File, e.Span)
		}
	}
}

func FuzzCheck(f *testing.F) {
	for _, s := range checkSeeds() {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		if len(text) > 20000 {
			return
		}
		examine(t, text)
	})
}

// TestCheckSurvives cuts and mixes the seeds: every prefix of a line, every
// statement left out, words exchanged.
func TestCheckSurvives(t *testing.T) {
	for _, s := range checkSeeds() {
		lines := strings.SplitAfter(s, "\n")
		step := 1 + len(lines)/20
		for i := 0; i < len(lines); i += step {
			without := strings.Join(lines[:i], "") + strings.Join(lines[i+1:], "")
			examine(t, without)
			half := lines[i][:len(lines[i])/2]
			examine(t, strings.Join(lines[:i], "")+half+"\n"+strings.Join(lines[i+1:], ""))
		}
		examine(t, strings.ReplaceAll(s, "resistor", "inductor"))
		examine(t, strings.ReplaceAll(s, "ground", "# ground"))
		examine(t, strings.ReplaceAll(s, "=", ""))
		examine(t, s+s)
		examine(t, "use \"other.plight\"\n"+s)
	}
}
