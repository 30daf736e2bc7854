package dialect

import (
	"strings"
	"testing"
	"unicode/utf8"
)

// FuzzParse reads any text: nothing panics, every span lies in the text,
// statements follow each other, tidying keeps the meaning, and what fits can
// be asked anywhere.
func FuzzParse(f *testing.F) {
	for _, c := range sound {
		f.Add(c.text, 3)
	}
	for _, c := range slips {
		f.Add(strings.NewReplacer("⟦", "", "⟧", "").Replace(c.text), 5)
	}
	for _, c := range tidied {
		f.Add(c.text, 1)
	}
	f.Add(wholeFile, 200)
	f.Add("\x00\x01", 0)
	f.Add("let x = \xb5", 8)
	// Found by fuzzing: an unclosed "{" at the end, mixed line ends, a form
	// feed in documentation.
	f.Add("subnetwork {", 3)
	f.Add("0\r #000\r\n", 3)
	f.Add("00\x8d00000  ", 27)
	f.Add("##\f", -14)
	f.Add("\n\ufeff", 1)
	f.Fuzz(func(t *testing.T, text string, offset int) {
		if len(text) > 1<<16 || countInvalid(text) >= maxInvalid { // tidying changes how large a part they are
			return
		}
		checkParse(t, text)
		if fault := tidyFaults(text); fault != "" {
			t.Errorf("%s\n%q", fault, text)
		}
		file := Parse("", text)
		PathTo(file, offset)
		if c := Expected(file, offset); c.Replace.Start > c.Replace.End || c.Replace.End > len(text) {
			t.Errorf("%q at %d: replaces %v", text, offset, c.Replace)
		}
		for _, s := range ParseQuestion("", text).Statements {
			s.Extent()
		}
	})
}

// checkParse checks what holds for the tree of any text.
func checkParse(t *testing.T, text string) {
	f := Parse("", text)
	inside := func(what string, s Span) {
		if s.Start < 0 || s.Start > s.End || s.End > len(text) {
			t.Errorf("%q: %s at %v", text, what, s)
		}
	}
	if len(f.Findings) > maxFindings+2 {
		t.Errorf("%d findings", len(f.Findings))
	}
	broken := false
	last := 0
	for _, s := range f.Statements {
		if s.Extent().Start < last {
			t.Errorf("%q: statements overlap at %d", text, last)
		}
		last = s.Extent().End
		broken = broken || anyBroken(s)
		Walk(s, func(x Tree) bool {
			inside("a node", x.Extent())
			if w, ok := x.(Word); ok && w.Span.End > len(text) {
				t.Errorf("%q: word %v", text, w)
			}
			return true
		})
	}
	for _, x := range f.Findings {
		inside("a finding", x.Origin.Span)
		if !utf8.ValidString(x.Message) && utf8.ValidString(text) {
			t.Errorf("%q: message %q", text, x.Message)
		}
		for _, r := range x.Repairs {
			for _, e := range r.Edits {
				inside("a repair", e.Span)
			}
		}
	}
	if broken && len(f.Findings) == 0 {
		t.Errorf("%q: a statement is broken without a finding", text)
	}
	if utf8.ValidString(text) {
		for _, x := range f.Findings {
			if s := text[x.Origin.Span.Start:x.Origin.Span.End]; !utf8.ValidString(s) {
				t.Errorf("%q: finding cuts a character: %v", text, x.Origin.Span)
			}
		}
	}
}

func anyBroken(s Statement) bool {
	if sub, ok := s.(*SubnetworkStatement); ok {
		for _, inner := range sub.Statements {
			if anyBroken(inner) {
				return true
			}
		}
	}
	return s.Headline().Broken
}
