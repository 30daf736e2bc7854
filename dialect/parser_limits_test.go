package dialect

import (
	"strings"
	"testing"
	"unicode/utf16"
)

// only reads a text and wants a single finding that holds a phrase.
func only(t *testing.T, name, text, phrase string) *File {
	t.Helper()
	f := Parse(name, text)
	if len(f.Findings) != 1 {
		t.Errorf("%s: %d findings, want 1", name, len(f.Findings))
		for i, x := range f.Findings {
			if i < 5 {
				t.Logf("%s: %v", name, x)
			}
		}
		return f
	}
	if !strings.Contains(f.Findings[0].Message, phrase) {
		t.Errorf("%s: %v, want …%s…", name, f.Findings[0], phrase)
	}
	if s := f.Findings[0].Origin.Span; s.End-s.Start > 200 {
		t.Errorf("%s: the finding marks %d bytes", name, s.End-s.Start)
	}
	if tidy := Tidy(f); Tidy(Parse(name, tidy)) != tidy {
		t.Errorf("%s: tidy is not idempotent", name)
	}
	return f
}

func TestHostileTexts(t *testing.T) {
	if f := Parse("empty", ""); len(f.Findings)+len(f.Statements)+len(f.Comments) != 0 {
		t.Errorf("empty file: %v", f)
	}
	long := strings.Repeat("x", 10<<20)
	only(t, "a line of 10 MB", "ground 0\n"+long+"\nlet x = 1\n", "10485760 bytes")
	f := only(t, "a comma list of 1 MB", "ground 0\nresistor R = max("+strings.Repeat("1,\n  ", 1<<18)+"1)\nlet x = 1\n", "bytes long")
	if got := sexp(f.Statements[len(f.Statements)-1]); got != "let x 1" {
		t.Errorf("after the long statement: %s", got)
	}
	only(t, "a comment of 10 MB", "ground 0\n#"+long+"\n", "bytes long")
	only(t, "10 000 open brackets", "let x = "+strings.Repeat("(", 10000)+"\nlet y = 1\n", "nested")
	only(t, "10 000 brackets", "let x = "+strings.Repeat("(", 10000)+"1"+strings.Repeat(")", 10000)+"\n", "nested")
	only(t, "10 000 calls", "let x = "+strings.Repeat("sin(", 10000)+"1"+strings.Repeat(")", 10000)+"\n", "nested")
	only(t, "10 000 powers", "let x = 2"+strings.Repeat("^2", 10000)+"\n", "nested")
	only(t, "199 signs", "let x = "+strings.Repeat("-", 199)+"2\n", "one sign")
	only(t, "10 000 square brackets", "tell "+strings.Repeat("v[", 10000)+"\n", "")
	only(t, "10 000 open boxes", "a "+strings.Repeat("-[", 10000)+"\n", "")
	if f := Parse("10 000 terms", "let x = 1"+strings.Repeat("+1", 10000)+"\n"); len(f.Findings) != 0 {
		t.Errorf("10 000 terms: %v", f.Findings[0])
	}
	only(t, "unclosed bracket", "resistor R = (1 Ω\nlet x = 1\n", "not closed")
	only(t, "binary", "\x7fELF\x02\x01\x01\x00\x00\x00\x00\x00let x = 1\n(((\n", "not text")
	only(t, "random bytes", strings.Repeat("\xfe\xc3\x28 (", 1000), "not text")
	only(t, "UTF-16", utf16Text("ground 0\nlet x = (\n"), "UTF-16")
	f = only(t, "invalid UTF-8", "resistor R1 = 5 \xd9\nlet x = 1\ncapacitor C = 10 \xb5F\n", "2 bytes in this file are not UTF-8")
	if sexp(f.Statements[1]) != "let x 1" || f.Findings[0].Severity != Error {
		t.Errorf("invalid UTF-8: %s, %v", sexp(f.Statements), f.Findings[0])
	}
	f = only(t, "invalid UTF-8 in a comment", "ground 0 # 10 \xb5F\n", "1 byte in this file is not UTF-8")
	if f.Findings[0].Severity != Warning {
		t.Errorf("invalid UTF-8 in a comment: %v", f.Findings[0])
	}
	only(t, "an invisible character", "let x\u200b = 1\n", "U+200B")
}

// utf16Text encodes a text as little-endian UTF-16 with its mark.
func utf16Text(s string) string {
	b := []byte{0xff, 0xfe}
	for _, u := range utf16.Encode([]rune(s)) {
		b = append(b, byte(u), byte(u>>8))
	}
	return string(b)
}

// TestNoFlood wants findings counted, not listed, beyond a bound.
func TestNoFlood(t *testing.T) {
	f := Parse("", strings.Repeat("this is no notation at all\n", 5000))
	if len(f.Findings) != maxFindings+1 {
		t.Fatalf("%d findings, want %d", len(f.Findings), maxFindings+1)
	}
	if last := f.Findings[maxFindings].Message; !strings.Contains(last, "4900 more mistakes") {
		t.Errorf("last finding: %s", last)
	}
}

// TestContinuation covers what goes on over lines and what does not.
func TestContinuation(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"let x = (1 +\n  2\n  )", "let x <(+ 1 2)>"},
		{"let x = (1\nlet y = 2", "BROKEN let x <1>\nlet y 2"},
		{"resistor R = 1 Ω,\n  rated 1 W", "resistor R 1·Ω {rated 1·W}"},
		{"resistor R = 1 Ω, # note\n# and\n  rated 1 W", "resistor R 1·Ω {rated 1·W}"},
		{"resistor R = 1 Ω,\n\n  rated 1 W", "BROKEN resistor R 1·Ω\nBROKEN ?"},
		{"resistor R = 1 Ω,\nrated 1 W", "BROKEN resistor R 1·Ω\nBROKEN ?"},
		{"a -[R1]- b -[R2\n  let x = 1", "BROKEN path a [R1] b [R2] \nlet x 1"},
		{"let x = 1 2\n  3 4\nlet y = 2", "BROKEN let x 1\nlet y 2"},
		{"let x = 1 2\n  let z = 3\nlet y = 2", "BROKEN let x 1\nlet z 3\nlet y 2"},
		{"  let x = 1\nlet y = 2", "let x 1\nlet y 2"},
		{"let x = 1\rlet y = 2\r\nlet z = 3", "let x 1\nlet y 2\nlet z 3"},
		{"subnetwork F (a,\n  b) {\n  let x = 1\n}\nlet y = 2", "subnetwork F (a b) {\nlet x 1\n}\nlet y 2"},
		{"subnetwork F (a {\n  let x = 1\n}\nlet y = 2", "BROKEN subnetwork F (a) {\nlet x 1\n}\nlet y 2"},
		{"subnetwork F (a)\n  let x = 1\n}\nlet y = 2", "BROKEN subnetwork F (a) {\nlet x 1\n}\nlet y 2"},
		{"subnetwork F (a) {\n  let x = 1\nlet y = 2", "BROKEN subnetwork F (a) {\nlet x 1\n}\nlet y 2"},
		{"subnetwork F (a) {\nlet x = 1\nsubnetwork G (b) {\n}\n", "BROKEN subnetwork F (a) {\n\n}\nlet x 1\nsubnetwork G (b) {\n\n}"},
		{"subnetwork F (a) {\n  let x = (\n}\nlet y = 2", "subnetwork F (a) {\nBROKEN let x <hole>\n}\nlet y 2"},
		{"subnetwork F (a) { a -[R]- b }\nlet y = 2", "BROKEN subnetwork F (a) {\n\n}\nlet y 2"},
	} {
		if got := sexp(Parse("", c.text).Statements); got != c.want {
			t.Errorf("%q:\n%s\nwant\n%s", c.text, got, c.want)
		}
	}
}

// TestDocs covers which ## lines document what.
func TestDocs(t *testing.T) {
	f := Parse("", "## The file.\n\n## One\n##   two\nlet x = 1\n## lost\n\nlet y = 2\n# plain\nlet z = 3\n## last\n")
	if f.Doc.Text() != "The file." {
		t.Errorf("file: %q", f.Doc.Text())
	}
	for i, want := range []string{"One\n  two", "", ""} {
		if got := f.Statements[i].Headline().Doc.Text(); got != want {
			t.Errorf("statement %d: %q, want %q", i, got, want)
		}
	}
	if f := Parse("", "## Of the let.\nlet x = 1\n"); f.Doc != nil || f.Statements[0].Headline().Doc.Text() != "Of the let." {
		t.Error("a block directly above a statement documents the statement")
	}
}

func TestParseQuestion(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"z[valve] at 1 kHz", " z[valve] {at 1·kHz }"},
		{"  tell poles of H", "tell poles? of H"},
		{"initial", " initial?"},
		{"tell", " tell"},
	} {
		f := ParseQuestion("question", c.text)
		if len(f.Findings) > 0 || sexp(f.Statements) != c.want {
			t.Errorf("%q: %q %v", c.text, sexp(f.Statements), f.Findings)
		}
	}
	for _, text := range []string{"", "  # nothing", "v[", "v[a]\nv[b]"} {
		if f := ParseQuestion("question", text); len(f.Findings) != 1 {
			t.Errorf("%q: %v", text, f.Findings)
		}
	}
}

// TestTyping types every sound statement character by character above another
// statement: at most one finding at any time, and the other stays whole.
func TestTyping(t *testing.T) {
	for _, c := range sound {
		if strings.ContainsAny(c.text, "\n{") {
			continue
		}
		for at := range c.text {
			f := Parse("", c.text[:at]+"\nlet Q = 3\n")
			if len(f.Findings) > 1 {
				t.Errorf("%q: %d findings: %v", c.text[:at], len(f.Findings), f.Findings)
			}
			if n := len(f.Statements); n == 0 || sexp(f.Statements[n-1]) != "let Q 3" {
				t.Errorf("%q: the next statement is lost", c.text[:at])
			}
		}
	}
}

// TestDeletions deletes every token of every sound statement in turn: at most
// one finding, and the next statement stays whole.
func TestDeletions(t *testing.T) {
	for _, c := range sound {
		if strings.ContainsAny(c.text, "\n{") {
			continue
		}
		tokens, _ := scanLine(c.text, 0, len(c.text), nil)
		for _, tok := range tokens {
			text := c.text[:tok.start] + c.text[tok.end:]
			f := Parse("", text+"\nlet Q = 3\n")
			if len(f.Findings) > 1 {
				t.Errorf("%q without %q: %q: %d findings: %v", c.text, c.text[tok.start:tok.end], text, len(f.Findings), f.Findings)
			}
			if n := len(f.Statements); n == 0 || sexp(f.Statements[n-1]) != "let Q 3" {
				t.Errorf("%q: the next statement is lost", text)
			}
		}
	}
}
