package dialect

import (
	"strings"
	"testing"
)

// TestBrokenNamesHaveNoValue checks that a statement with an error gives its
// name no value, that users of the name are silent, and that their questions
// and limits are kept and say why.
func TestBrokenNamesHaveNoValue(t *testing.T) {
	for _, c := range []struct{ lines, code, why string }{
		{"function F = v[out/Vs\nrequire gain(F) <= 2", "syntax", "the function F"},
		{"function F = v[oit]/Vs\nrequire gain(F) <= 2", "unknown-name", "the function F"},
		{"function F = v[out/Vs\nfunction G = 2*F\nrequire gain(G) <= 2", "syntax", "the function F"},
		{"let q = 2pi\nlet r = q + 1\nrequire gain(H) <= r", "syntax", "the constant q"},
		{"let q = 1 V + 1 A\nrequire v[out] <= q", "unit-mismatch", "the constant q"},
		{"let q = 10 000 Hz\nrequire gain(H) <= 1 at q", "syntax", "the constant q"},
		{"require gain(H) <= 2 V", "unit-mismatch", "its own line"},
		{"require gain(H <= 2", "syntax", "its own line"},
		{"require gain(H)", "wrong-sort", "its own line"},
		{"require v[oit] <= 2 V", "unknown-name", "its own line"},
		{"require v[out] <= 2 V at 1 kHz", "unit-mismatch", "its own line"},
	} {
		checked := Check(Parse("case.plight", frame+c.lines+"\n"), nil)
		if codes := findingsOf(checked); len(codes) != 1 || codes[0] != c.code {
			t.Errorf("%s\n\tfindings %v, want %s alone", c.lines, checked.Findings, c.code)
		}
		if len(checked.Description.Limits) != 1 {
			t.Errorf("%s: %d limits", c.lines, len(checked.Description.Limits))
			continue
		}
		l := checked.Description.Limits[0]
		if l.Left != nil || l.Right != nil || l.Qualifiers.At != nil || !strings.Contains(l.Why, c.why) {
			t.Errorf("%s\n\tlimit %+v, want …%s…", c.lines, l, c.why)
		}
		if checked.Description.Faults {
			t.Errorf("%s: nothing is left out of the network", c.lines)
		}
	}
	c := Check(Parse("case.plight", frame+"function F = v[out/Vs\ntell F at 1 kHz\ntell H at 1 kHz\ntell v[out\n"), nil)
	want := []string{"the line that defines the function F has an error", "", "its own line has an error"}
	for i, q := range c.Description.Questions {
		if q.Why != want[i] || (q.What == nil) != (want[i] != "") {
			t.Errorf("tell %s: %q", q.Text, q.Why)
		}
	}
	if len(c.Description.Questions) != 3 {
		t.Errorf("%d questions, want 3", len(c.Description.Questions))
	}
	if _, found := c.Question("gain(F) at 1 kHz"); len(found) != 1 || !strings.Contains(found[0].Message, "the function F has an error") {
		t.Errorf("a question from outside: %v", found)
	}
}

// TestWarningsLeaveNothingOut checks that sin(50 Hz*t) warns, says what is
// taken, and gives a waveform that turns at 50 rad/s.
func TestWarningsLeaveNothingOut(t *testing.T) {
	c := Check(Parse("case.plight", frame+"far -[current source Ix = 1 mA*sin(50 Hz*t)]- hull\n"), nil)
	if len(c.Findings) != 1 || c.Findings[0].Severity != Warning || !strings.Contains(c.Findings[0].Message, "1 Hz is taken as 1 rad/s") {
		t.Errorf("findings %v", c.Findings)
	}
	if c.Description.Faults {
		t.Error("a warning left something out of the network")
	}
	for _, p := range c.Description.Parts {
		if p.Name == "Ix" && (len(p.Waveform.Always) != 1 || p.Waveform.Always[0].Omega.Rat().String() != "50/1") {
			t.Errorf("the waveform is %+v", p.Waveform)
		}
	}
}
