package dialect

import (
	"testing"
	"unicode/utf8"

	"pgregory.net/rapid"
)

func TestLines(t *testing.T) {
	// The last character of the second line takes two UTF-16 units and four
	// bytes; µ takes two bytes.
	l := NewLines("ab\nµ𝔽\r\nx\ry")
	for _, c := range []struct {
		offset, line, utf16, utf8, points int
	}{
		{0, 0, 0, 0, 0}, {2, 0, 2, 2, 2}, {3, 1, 0, 0, 0}, {4, 1, 0, 0, 0}, {5, 1, 1, 2, 1},
		{7, 1, 1, 2, 1}, {9, 1, 3, 6, 2}, {10, 1, 3, 6, 2}, {11, 2, 0, 0, 0}, {13, 3, 0, 0, 0},
		{14, 3, 1, 1, 1}, {99, 3, 1, 1, 1}, {-1, 0, 0, 0, 0},
	} {
		for e, want := range []int{UTF16: c.utf16, UTF8: c.utf8, CodePoints: c.points} {
			if line, column := l.Position(c.offset, Encoding(e)); line != c.line || column != want {
				t.Errorf("offset %d, encoding %d: %d:%d, want %d:%d", c.offset, e, line, column, c.line, want)
			}
		}
	}
	for _, c := range []struct {
		line, column int
		e            Encoding
		offset       int
	}{
		{1, 1, UTF16, 5}, {1, 2, UTF16, 5}, {1, 3, UTF16, 9}, {1, 99, UTF16, 9}, {1, 3, UTF8, 5},
		{1, 2, CodePoints, 9}, {9, 0, UTF16, 14}, {-1, 4, UTF16, 0},
	} {
		if got := l.Offset(c.line, c.column, c.e); got != c.offset {
			t.Errorf("%d:%d encoding %d: offset %d, want %d", c.line, c.column, c.e, got, c.offset)
		}
	}
	if l.Count() != 4 || NewLines("").Count() != 1 || NewLines("a\n").Count() != 2 {
		t.Error("a wrong count of lines")
	}
}

// TestLinesRoundTrip turns places into positions and back.
func TestLinesRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`([a-µΩ𝔽 ]{0,4}(\n|\r\n|\r)?){0,5}`).Draw(t, "text")
		l := NewLines(text)
		for offset := range len(text) + 1 {
			line := l.Line(offset)
			if offset > l.Span(line).End || offset < len(text) && !utf8.RuneStart(text[offset]) {
				continue
			}
			for e := UTF16; e <= CodePoints; e++ {
				line, column := l.Position(offset, e)
				if back := l.Offset(line, column, e); back != offset {
					t.Fatalf("%q offset %d encoding %d: %d:%d, back %d", text, offset, e, line, column, back)
				}
			}
		}
	})
}
