package dialect

import (
	"slices"
	"strings"
	"testing"
)

// threeFiles is a description over three files, with a diamond of uses.
func threeFiles() (string, map[string]string) {
	main := `ground hull
use "lib/stages.plight"
use "lib/cells.plight"
voltage source Vh = 1 mV * u(t)
hyd -[Vh]- hull
part P1 = Stage with G = 40 dB, in at hyd, out at a, ref at hull
a -[part C1 = RealCap with ESR = 2*Rdefault]- hull
function H = v[a]/Vh
tell v[P1.n] at 1 ms
tell v[C1.Cap]
require gain(H) <= 60 dB
`
	return main, map[string]string{
		"lib/stages.plight": `use "cells.plight"
## A stage with feedback.
subnetwork Stage (in, out, ref) with G = 20 dB {
  let ratio = 10^(G/(20 dB))
  op amp U = ideal, + at in, - at n, output at out
  out -[resistor Rf = 1 kΩ * (ratio - 1)]- n -[resistor Rg = 1 kΩ]- ref
  out -[part Load = RealCap]- ref
}
## An unused thing with a mistake outside what is used.
resistor Rx = 1 V
`,
		"lib/cells.plight": `let Rdefault = 10 mΩ
subnetwork RealCap (a, b) with C = 1 µF, ESR = Rdefault {
  a -[capacitor Cap = C]-[resistor Re = ESR]- b
}
`,
	}
}

func checkThreeFiles(t *testing.T) *Checked {
	t.Helper()
	main, files := threeFiles()
	c := Check(Parse("main.plight", main), mapReader(files))
	if len(c.Findings) != 0 || c.Description.Faults {
		t.Fatalf("findings: %v", c.Findings)
	}
	return c
}

func TestUsedFiles(t *testing.T) {
	c := checkThreeFiles(t)
	if len(c.Files) != 3 || c.Files[0] != c.Main {
		t.Fatalf("%d files", len(c.Files))
	}
	values := map[string]string{}
	for _, p := range c.Description.Parts {
		values[p.Name] = FormatQuantity(p.Value, kindDimension(p.Kind))
	}
	for name, want := range map[string]string{
		"P1.Rf": "99 kΩ", "P1.Rg": "1 kΩ", "P1.Load.Cap": "1 µF", "P1.Load.Re": "10 mΩ", "C1.Re": "20 mΩ",
	} {
		if values[name] != want {
			t.Errorf("%s is %q, want %s", name, values[name], want)
		}
	}
	for _, p := range c.Description.Parts {
		if p.Name == "P1.Load.Re" && (len(p.Origin.Use) != 2 || p.Origin.File.Name != "lib/cells.plight") {
			t.Errorf("P1.Load.Re comes from %s through %d uses", p.Origin.File.Name, len(p.Origin.Use))
		}
	}
	if links := c.Links(c.Main); len(links) != 2 || links[0].File == nil || links[0].Path != "lib/stages.plight" {
		t.Errorf("links are %v", links)
	}
}

// TestSymbols checks definition and uses of names across files.
func TestSymbols(t *testing.T) {
	c := checkThreeFiles(t)
	find := func(file *File, text string, n int) *Symbol {
		t.Helper()
		at := 0
		for range n {
			at += strings.Index(file.Text[at:], text) + 1
		}
		s, span, ok := c.SymbolAt(file, at)
		if !ok {
			t.Fatalf("no symbol at %q", text)
		}
		if got := file.Text[span.Start:span.End]; got != s.Name {
			t.Fatalf("%s is found as %q", s.Name, got)
		}
		return s
	}
	stages, cells := c.Files[1], c.Files[2]
	if stages.Name != "lib/stages.plight" {
		stages, cells = cells, stages
	}
	for _, x := range []struct {
		file       *File
		text       string
		n          int
		sort       SymbolSort
		definedIn  *File
		references int
	}{
		{c.Main, "hyd", 1, NodeSymbol, c.Main, 2},
		{c.Main, "Vh", 1, PartSymbol, c.Main, 3},
		{c.Main, "H = ", 1, FunctionSymbol, c.Main, 2},
		{c.Main, "Stage with", 1, SubnetworkSymbol, stages, 2},
		{c.Main, "RealCap", 1, SubnetworkSymbol, cells, 3},
		{c.Main, "G = 40", 1, ParameterSymbol, stages, 3},
		{c.Main, "ESR", 1, ParameterSymbol, cells, 3},
		{c.Main, "Rdefault", 1, LetSymbol, cells, 3},
		{c.Main, "n] at", 1, NodeSymbol, stages, 3},
		{c.Main, "Cap]", 1, PartSymbol, cells, 2},
		{c.Main, "in at hyd", 1, NodeSymbol, stages, 3},
		{c.Main, "P1.n", 1, UseSymbol, c.Main, 2},
		{stages, "ratio", 1, LetSymbol, stages, 2},
	} {
		s := find(x.file, x.text, x.n)
		if s.Sort != x.sort || s.File != x.definedIn || len(s.References) != x.references {
			t.Errorf("%s is a %s of %s with %d references, want a %s of %s with %d",
				s.Name, s.Sort, s.File.Name, len(s.References), x.sort, x.definedIn.Name, x.references)
		}
	}
	if s := find(c.Main, "Stage with", 1); s.Doc() != "A stage with feedback." {
		t.Errorf("the documentation of Stage is %q", s.Doc())
	}
	for _, x := range []struct {
		file *File
		text string
		want string
	}{{cells, "Rdefault", "0.01Ω"}, {cells, "ESR", "0.01Ω 0.02Ω"}, {stages, "ratio", "100"}, {c.Main, "H = ", "(v[a]/v[Vh])"}} {
		var got []string
		for _, v := range c.Values(find(x.file, x.text, 1)) {
			got = append(got, c.expressionText(v))
		}
		if strings.Join(got, " ") != x.want {
			t.Errorf("%s stands for %v, want %s", x.text, got, x.want)
		}
	}
	if s := find(cells, "Cap =", 1); !slices.Equal(c.names(s), []string{"P1.Load.Cap", "C1.Cap"}) {
		t.Errorf("Cap stands for %v", c.names(s))
	}
}

// names lists the parts that a symbol has become.
func (c *Checked) names(s *Symbol) []string {
	var names []string
	for _, i := range c.Indices(s) {
		names = append(names, c.Description.Parts[i].Name)
	}
	return names
}

// TestPlaces checks what completion asks: what a place must hold, what is
// visible there, what is not wired yet.
func TestPlaces(t *testing.T) {
	text := `ground hull
let f0 = 3 kHz
resistor R1 = 47 Ω
capacitor C1 = 1 µF, initially 2 V
subnetwork Cell (a, b) with W = 1 Ω {
  resistor Ri = W
  a -[resistor Rj = 2*W]- b
}
in -[resistor R2 = 1 Ω]- hull
port p at in hull
tell z[p] at f0
`
	c := Check(Parse("places.plight", text), nil)
	at := func(s string) int { return strings.Index(text, s) }
	for s, want := range map[string]Dimension{
		"47": DimensionResistance, "1 µF": DimensionCapacitance, "2 V": DimensionVoltage, "f0\n": DimensionFrequency,
	} {
		e, ok := c.ExpectedAt(c.Main, at(s))
		if !ok || e.Dimension != want {
			t.Errorf("at %q a %v is expected, want %v", s, e, want)
		}
	}
	names := func(list []*Symbol) (names []string) {
		for _, s := range list {
			names = append(names, s.Name)
		}
		return names
	}
	if got := names(c.Unwired()); !slices.Equal(got, []string{"R1", "C1"}) {
		t.Errorf("unwired: %v", got)
	}
	if got := names(c.UnwiredAt(c.Main, at("Ri"))); !slices.Equal(got, []string{"Ri"}) {
		t.Errorf("unwired in the body: %v", got)
	}
	if got := names(c.Visible(c.Main, at("Rj"))); !slices.Equal(got, []string{"a", "b", "W", "Ri", "Rj", "f0", "Cell"}) {
		t.Errorf("visible in the body: %v", got)
	}
	if s := c.Lookup(c.Main, at("port"), "R2"); s == nil || s.Kind != Resistor {
		t.Errorf("R2 is %v", s)
	}
}

// TestFilesThatClash checks what goes wrong between files.
func TestFilesThatClash(t *testing.T) {
	base := "ground hull\nport p at a hull\na -[resistor R = 1 Ω]- hull\n"
	cell := "subnetwork Cell (a, b) {\n  a -[resistor R = 1 Ω]- b\n}\n"
	for _, x := range []struct {
		main  string
		files map[string]string
		codes []string
	}{
		{base + "use \"x.plight\"\nuse \"y.plight\"\n", map[string]string{"x.plight": cell, "y.plight": cell}, []string{"name-taken"}},
		{base + "use \"x.plight\"\n" + cell, map[string]string{"x.plight": cell}, []string{"name-taken"}},
		{base + "use \"x.plight\"\nuse \"x.plight\"\n", map[string]string{"x.plight": cell}, nil},
		{base + "use \"x.plight\"\n", map[string]string{"x.plight": "use \"y.plight\"\n", "y.plight": "use \"x.plight\"\n" + cell}, []string{"use-cycle"}},
		{base + "use \"main.plight\"\n", nil, []string{"use-cycle"}},
		{base + "use \"x.plight\"\n", map[string]string{"x.plight": "tell v[\n" + cell + "resistor R = 1 V\n"}, nil},
		{base + "use \"x.plight\"\n", map[string]string{"x.plight": "let q = 1 V + 1 A\n"}, []string{"unit-mismatch"}},
		{base + "use \"x.plight\"\nlet w = q*1 Ω\n", map[string]string{"x.plight": "ground g\na -[resistor R9 = 3 Ω]- g\nlet q = v[a]/(1 V)\nlet k = R9/(1 Ω)\n"}, []string{"wrong-sort"}},
		{base + "use \"x.plight\"\nlet w = k\n", map[string]string{"x.plight": "a -[resistor R9 = 3 Ω]- g\nlet k = R9/(1 Ω)\n"}, nil},
		{base + "use \"x.plight\"\nlet w = inner\n", map[string]string{"x.plight": "use \"y.plight\"\n", "y.plight": "let inner = 3\n"}, []string{"unknown-name"}},
	} {
		c := Check(Parse("main.plight", x.main), mapReader(x.files))
		if got := findingsOf(c); !slices.Equal(got, x.codes) {
			t.Errorf("%v\n\tyields %v, want %v", x.files, c.Findings, x.codes)
		}
		for _, f := range c.Findings {
			if f.Code == "name-taken" && len(f.Related) == 0 {
				t.Errorf("%s has no related place", f)
			}
		}
	}
}

// TestInsideUses checks that a mistake that only a use makes is told at the
// body with the way there.
func TestInsideUses(t *testing.T) {
	c := Check(Parse("main.plight", `ground hull
subnetwork Cell (a, b) with W = 1 Ω {
  a -[resistor R = W - 5 Ω + 5 Ω]- b
}
in -[part Good = Cell with W = 2 Ω]- hull
in -[part Bad = Cell with W = 0 Ω]- hull
port p at in hull
`), nil)
	if len(c.Findings) != 1 {
		t.Fatalf("findings: %v", c.Findings)
	}
	f := c.Findings[0]
	if f.Code != "not-positive" || len(f.Origin.Use) != 1 || len(f.Related) != 1 {
		t.Fatalf("%v through %v, related %v", f, f.Origin.Use, f.Related)
	}
	use := f.Related[0].Origin
	if text := use.File.Text[use.Span.Start:use.Span.End]; !strings.HasPrefix(text, "part Bad") {
		t.Errorf("the way leads over %q", text)
	}
}

// TestQuestions checks questions from outside the file.
func TestQuestions(t *testing.T) {
	c := checkThreeFiles(t)
	for _, text := range []string{"H", "v[P1.n] at 2 ms", "poles of H", "gain(H) at 1 kHz", "z[a]", " initial ", "v[a] in Hz"} {
		q, findings := c.Question(text)
		if text == "v[a] in Hz" {
			if q != nil || len(findings) != 1 || findings[0].Code != "unit-mismatch" {
				t.Errorf("%s yields %v", text, findings)
			}
			continue
		}
		if q == nil || len(findings) != 0 || q.Text != strings.TrimSpace(text) {
			t.Errorf("%s yields %v", text, findings)
		}
	}
	for text, code := range map[string]Code{
		"v[nowhere]": "unknown-name", "v[a": "syntax", "": "syntax", "v[a]/v[hyd]": "signal-quotient",
		"H at 3 V": "unit-mismatch",
	} {
		q, findings := c.Question(text)
		if q != nil || len(findings) == 0 || findings[0].Code != code {
			t.Errorf("%q yields %v", text, findings)
		}
	}
	before := len(c.Findings)
	uses := len(c.Uses(c.Main))
	c.Question("v[a] + v[hyd]")
	if len(c.Findings) != before || len(c.Uses(c.Main)) != uses {
		t.Error("a question changes what was checked")
	}
}
