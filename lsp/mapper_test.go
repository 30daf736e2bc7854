package lsp

import (
	"strings"
	"testing"

	"go.lsp.dev/protocol"
	"pgregory.net/rapid"

	"portlight/dialect"
)

var encodings = []dialect.Encoding{dialect.UTF8, dialect.UTF16, dialect.CodePoints}

// TestPositionsCountInEveryEncoding checks columns against counts made by
// hand: 😀 is four bytes, two UTF-16 units, one code point (Unicode 15, D90-D92).
func TestPositionsCountInEveryEncoding(t *testing.T) {
	lines := dialect.NewLines("aΩ😀b\r\nx\n")
	for _, c := range []struct {
		offset             int
		line               uint32
		utf8, utf16, utf32 uint32
	}{
		{0, 0, 0, 0, 0}, {1, 0, 1, 1, 1}, {3, 0, 3, 2, 2}, {7, 0, 7, 4, 3}, {8, 0, 8, 5, 4},
		{10, 1, 0, 0, 0}, {12, 2, 0, 0, 0},
	} {
		for i, want := range []uint32{c.utf8, c.utf16, c.utf32} {
			m := mapper{encodings[i]}
			got := m.position(lines, c.offset)
			if got != (protocol.Position{Line: c.line, Character: want}) {
				t.Errorf("encoding %d: offset %d is %v, want %d:%d", i, c.offset, got, c.line, want)
			}
			if back := m.offset(lines, got); back != c.offset {
				t.Errorf("encoding %d: %v is offset %d, want %d", i, got, back, c.offset)
			}
		}
	}
}

func TestPositionsOutsideTheTextMeanTheNearestPlace(t *testing.T) {
	lines := dialect.NewLines("😀\nb")
	m := mapper{dialect.UTF16}
	for _, c := range []struct {
		line, column uint32
		want         int
	}{{0, 1, 0}, {0, 99, 4}, {7, 0, 6}, {1, 1 << 31, 6}, {1 << 31, 1 << 31, 6}} {
		if got := m.offset(lines, protocol.Position{Line: c.line, Character: c.column}); got != c.want {
			t.Errorf("%d:%d is offset %d, want %d", c.line, c.column, got, c.want)
		}
	}
}

// TestWalkerAgreesWithPositions walks over random texts in order.
func TestWalkerAgreesWithPositions(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`([aΩ😀 ]{0,6}(\n|\r\n)?){0,6}`).Draw(t, "text")
		m := mapper{rapid.SampledFrom(encodings).Draw(t, "encoding")}
		file := &dialect.File{Text: text, Lines: dialect.NewLines(text)}
		w := m.walk(file)
		for offset := range text {
			line, column := w.to(offset)
			want := m.position(file.Lines, offset)
			if uint32(line) != want.Line || uint32(column) != want.Character {
				t.Fatalf("offset %d of %q: walked to %d:%d, want %v", offset, text, line, column, want)
			}
		}
	})
}

// TestChangesApplyAsIfToRunes makes random edits through the mapper and, apart
// from it, to a slice of code points; the texts must agree.
func TestChangesApplyAsIfToRunes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		plain := []rune(rapid.StringMatching(`([aΩ😀 ]{0,6}\n){0,5}`).Draw(t, "text"))
		text := string(plain)
		m := mapper{rapid.SampledFrom(encodings).Draw(t, "encoding")}
		for range rapid.IntRange(1, 5).Draw(t, "edits") {
			a := rapid.IntRange(0, len(plain)).Draw(t, "from")
			b := rapid.IntRange(a, len(plain)).Draw(t, "to")
			insert := rapid.StringMatching(`[bµ😀\n]{0,4}`).Draw(t, "insert")
			lines := dialect.NewLines(text)
			var err error
			text, err = m.apply(text, &protocol.TextDocumentContentChangePartial{
				Range: protocol.Range{
					Start: m.position(lines, len(string(plain[:a]))),
					End:   m.position(lines, len(string(plain[:b]))),
				},
				Text: insert,
			})
			if err != nil {
				t.Fatal(err)
			}
			plain = []rune(string(plain[:a]) + insert + string(plain[b:]))
			if text != string(plain) {
				t.Fatalf("after the edit: %q, want %q", text, string(plain))
			}
		}
	})
}

func TestEncodingChosen(t *testing.T) {
	for _, c := range []struct {
		offered string
		want    protocol.PositionEncodingKind
	}{
		{"", "utf-16"}, {"utf-16", "utf-16"}, {"utf-16 utf-8", "utf-8"}, {"utf-32 utf-8 utf-16", "utf-8"},
		{"utf-32 utf-16", "utf-16"}, {"utf-32", "utf-32"}, {"utf-7", "utf-16"},
	} {
		p := &protocol.InitializeParams{}
		p.Capabilities.General = &protocol.GeneralClientCapabilities{}
		for _, kind := range strings.Fields(c.offered) {
			p.Capabilities.General.PositionEncodings = append(p.Capabilities.General.PositionEncodings, protocol.PositionEncodingKind(kind))
		}
		if got := newClient(p).kind; got != c.want {
			t.Errorf("offered %q: chose %s, want %s", c.offered, got, c.want)
		}
	}
}

func TestURIsAndNames(t *testing.T) {
	m := mapper{}
	for _, c := range []struct{ uri, name string }{
		{"file:///w/a%20b.plight", "/w/a b.plight"}, {"file:///w/%CE%A9.plight", "/w/Ω.plight"},
		{"untitled:Untitled-1", "untitled:Untitled-1"}, {"vscode-vfs://github/x/y.plight", "vscode-vfs://github/x/y.plight"},
	} {
		if got := m.name(protocolURI(c.uri)); got != c.name {
			t.Errorf("name of %s is %q, want %q", c.uri, got, c.name)
		}
		if got := m.name(m.uri(c.name)); got != c.name {
			t.Errorf("%q comes back as %q", c.name, got)
		}
	}
}

func lines(text string) *dialect.Lines { return dialect.NewLines(text) }
