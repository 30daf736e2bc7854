package dialect

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// tidied are texts with their canonical form.
var tidied = []struct{ text, want string }{
	{"", ""},
	{"\n\n", ""},
	{"ground   hull", "ground hull\n"},
	{"ground hull\r\nlet x=1\r\n", "ground hull\r\nlet x = 1\r\n"},
	{"in-[R1]-mid  -[ C1||R2 ]-gnd\n", "in -[R1]- mid -[C1 || R2]- gnd\n"},
	{"in -[R1] - [C1] - gnd\n", "in -[R1] - [C1] - gnd\n"}, // broken
	{"resistor R1=2.2k\n", "resistor R1 = 2.2k\n"},
	{"resistor R1=4K7+-5%,rated 1W", "resistor R1 = 4K7 ±5 %, rated 1 W\n"},
	{"let x=10uF+2 ohm*s", "let x = 10 µF + 2 Ω*s\n"},
	{"let x=30 °", "let x = 30°\n"},
	{"let x = 5 V*u(t)*exp( - t / 3 ms )", "let x = 5 V * u(t) * exp(-t/3 ms)\n"},
	{"let x = 1 / ( 2 * pi )", "let x = 1/(2*pi)\n"},
	{"let x = 3 V^2/1 V", "let x = 3 V^2 / 1 V\n"},
	{"let x = (2 V)^2 + 2 V ^ 2 + a ^ -2", "let x = (2 V)^2 + 2 V ^ 2 + a^-2\n"},
	{"let x = a +-b", "let x = a + -b\n"},
	{"let x = 2^3 V * 2", "let x = 2^3 V * 2\n"},
	{"let x = -2 V * -2", "let x = -2 V * -2\n"},
	{"let x = a*2 V", "let x = a*2 V\n"},
	{"let x = 10 Kohm*a", "let x = 10 Kohm * a\n"},
	{"a -[R1//C1]-   b  # note  \nlet x=1", "a -[R1//C1]-   b  # note\nlet x = 1\n"},
	{"resistor Rload = 1 Ω\nvoltage source V = 1 V\nwire W\nground 0\nresistor R = 1 Ω\nresistor Rl = 2 Ω\n",
		"resistor        Rload = 1 Ω\nvoltage source  V     = 1 V\nwire            W\nground 0\nresistor R  = 1 Ω\nresistor Rl = 2 Ω\n"},
	{"resistor Rü = 1 Ω\nresistor R = 1 Ω", "resistor Rü = 1 Ω\nresistor R  = 1 Ω\n"},
	{"resistor 漢 = 1 Ω\nresistor R = 1 Ω", "resistor 漢 = 1 Ω\nresistor R  = 1 Ω\n"},
	{"ground 0 # a\nlet voltage = 1 # b\nlet x = 1", "ground 0         # a\nlet voltage = 1  # b\nlet x = 1\n"},
	{"# a\n\n\n## b\nlet x = 1\n\n\n\n# c", "# a\n\n## b\nlet x = 1\n\n# c\n"},
	{"subnetwork F(a,b)with R=1 Ω{\n\n\na -[R1]- b\n# c\n\n}\n", "subnetwork F (a, b) with R = 1 Ω {\n  a -[R1]- b\n  # c\n}\n"},
	{"subnetwork F (a) {\nresistor R = (1\nresistor R2=5 Ω\n}\n", "subnetwork F (a) {\n  resistor R = (1\n  resistor R2 = 5 Ω\n}\n"},
	{"part C = F with x = 1, # one\n\n", "part C = F with x = 1, # one\n"},
	{"part C = F with x = 1, # one\n # two\n      y = 2,a at 3V3\n", "part C = F with x = 1,  # one\n  # two\n  y = 2, a at 3V3\n"},
	{"op amp U = ideal,+ at a,−at b,output at c", "op amp U = ideal, + at a, - at b, output at c\n"},
	{"tell  matrix s[ a,b ]  reference 50ohm with S open", "tell matrix s[a,b] reference 50 Ω with S open\n"},
	{"tell max(1,2)", "tell max(1, 2)\n"},
	{"transformer T=10:1,primary at a b,secondary at c d", "transformer T = 10 : 1, primary at a b, secondary at c d\n"},
}

func TestTidy(t *testing.T) {
	for _, c := range tidied {
		if diff := cmp.Diff(c.want, Tidy(Parse("", c.text))); diff != "" {
			t.Errorf("%q\n%s", c.text, diff)
		}
	}
}

// wholeFile is the sample file of the notation's description.
const wholeFile = `## Release of the bilge valve: what the clamp has to stand.

ground hull

let Vbat = 12 V

voltage source  Vs = Vbat
switch          S1 = opens at 0 s
resistor        Rw = 48 Ω ±5 %
inductor        Lw = 120 mH ±10 %
resistor        Rs = 330 Ω ±1 %, rated 0.25 W
capacitor       Cs = 220 nF ±10 %, rated 250 V

plus -[Vs]- hull
plus -[S1]- coil -[Rw]-[Lw]- hull
coil -[Rs]-[Cs]- hull

start steady

port valve at coil hull
tell z[valve] at 1 kHz
tell v[coil] to 20 ms
require trough(v[coil]) >= -200 V
require abs(v[coil]) <= 1 V from 20 ms
`

func TestTidyFixedPoints(t *testing.T) {
	check := func(name, text string) {
		if diff := cmp.Diff(text, Tidy(Parse(name, text))); diff != "" {
			t.Errorf("%s is not tidy:\n%s", name, diff)
		}
	}
	check("whole file", wholeFile)
	syntax, _ := filepath.Glob("../testdata/syntax/*.plight")
	buoy, _ := filepath.Glob("../testdata/buoy/*.plight")
	if len(syntax) == 0 || len(buoy) == 0 {
		t.Fatal("no files in testdata")
	}
	for _, path := range slices.Concat(syntax, buoy) {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		check(path, string(text))
	}
}

// tidyFaults says what tidying a text does wrong, "" if nothing.
func tidyFaults(text string) string {
	before := Parse("a.plight", text)
	tidy := Tidy(before)
	after := Parse("b.plight", tidy)
	if a, b := sexp(before.Statements), sexp(after.Statements); a != b {
		return "the meaning changed:\n" + cmp.Diff(a, b)
	}
	if len(before.Findings) != len(after.Findings) {
		return "the findings changed"
	}
	if a, b := commentTexts(before), commentTexts(after); !cmp.Equal(a, b) {
		return "the comments changed:\n" + cmp.Diff(a, b)
	}
	if before.Doc.Text() != after.Doc.Text() {
		return "the file's documentation changed"
	}
	if again := Tidy(after); again != tidy {
		return "tidying again changes more:\n" + cmp.Diff(tidy, again)
	}
	if edited := applyEdits(text, TidyEdits(before, Span{0, len(text)})); edited != tidy {
		return "the edits make something else:\n" + cmp.Diff(tidy, edited)
	}
	for _, line := range strings.Split(tidy, "\n") {
		if trimmed := trimRight(line); trimmed != line && trimmed+"\r" != line && len(before.Findings) == 0 && !before.Unreadable {
			return "a space at a line's end is left: " + line
		}
	}
	return ""
}

func commentTexts(f *File) []string {
	var list []string
	for _, c := range f.Comments {
		list = append(list, trimRight(c.Text))
	}
	return list
}

// TestTidyKeepsMeaning draws files and tidies them.
func TestTidyKeepsMeaning(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := (&textMaker{T: t}).file()
		if fault := tidyFaults(text); fault != "" {
			t.Fatalf("%s\n---\n%s\n---\n%s", fault, text, Tidy(Parse("", text)))
		}
	})
}

// TestDrawnFilesAreSound guards the property above: the drawn statements that
// are meant to be sound are.
func TestDrawnFilesAreSound(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := &textMaker{T: t}
		text := m.statement(false)
		if f := Parse("", text); len(f.Findings) > 0 {
			t.Fatalf("%s\n%v at %v", text, f.Findings[0], f.Findings[0].Origin.Span)
		}
	})
}

func TestTidyEditsInRange(t *testing.T) {
	text := "let  x=1\nlet  y=2\nlet  z=3\n"
	f := Parse("", text)
	got := applyEdits(text, TidyEdits(f, Span{10, 12}))
	if want := "let  x=1\nlet y = 2\nlet  z=3\n"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
	if edits := TidyEdits(Parse("", wholeFile), Span{0, len(wholeFile)}); len(edits) != 0 {
		t.Errorf("a tidy file has edits: %v", edits)
	}
}

// Target: a file of 10 000 lines is tidied in 20 ms.
func BenchmarkTidy(b *testing.B) {
	f := Parse("bank.plight", benchmarkText(10000))
	b.ReportAllocs()
	for b.Loop() {
		Tidy(f)
	}
}
