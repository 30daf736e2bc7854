package dialect

import (
	"sort"
	"strings"
	"unicode/utf8"
)

// Lines maps byte offsets of a text to lines and columns and back. Lines and
// columns count from 0; a line ends in "\n", "\r\n" or a lone "\r".
type Lines struct {
	text   string
	starts []int
}

// NewLines indexes a text.
func NewLines(text string) *Lines {
	l := &Lines{text: text, starts: make([]int, 1, 1+strings.Count(text, "\n"))}
	if strings.IndexByte(text, '\r') < 0 {
		for at := 0; ; {
			n := strings.IndexByte(text[at:], '\n')
			if n < 0 {
				return l
			}
			at += n + 1
			l.starts = append(l.starts, at)
		}
	}
	for i := 0; i < len(text); i++ {
		switch text[i] {
		case '\r':
			if i+1 < len(text) && text[i+1] == '\n' {
				continue
			}
			l.starts = append(l.starts, i+1)
		case '\n':
			l.starts = append(l.starts, i+1)
		}
	}
	return l
}

// Count is the number of lines; a text that ends in a line end has an empty
// last line.
func (l *Lines) Count() int { return len(l.starts) }

// Line is the number of the line that holds the offset.
func (l *Lines) Line(offset int) int {
	return sort.Search(len(l.starts), func(i int) bool { return l.starts[i] > offset }) - 1
}

// Span is the span of a line without its line end. Numbers outside the text
// give an empty span at its nearer end.
func (l *Lines) Span(line int) Span {
	if line < 0 {
		return Span{}
	}
	if line >= len(l.starts) {
		return Span{len(l.text), len(l.text)}
	}
	start, end := l.starts[line], len(l.text)
	if line+1 < len(l.starts) {
		end = l.starts[line+1]
	}
	for end > start && (l.text[end-1] == '\n' || l.text[end-1] == '\r') {
		end--
	}
	return Span{start, end}
}

// Encoding is a way to count columns.
type Encoding int

// The ways to count columns.
const (
	UTF16      Encoding = iota // 16-bit units
	UTF8                       // bytes
	CodePoints                 // Unicode code points ("utf-32")
)

// Position gives line and column of an offset. Offsets outside the text are
// moved to its nearer end, offsets in a line end to the end of the line's
// text, offsets inside a character to the character's start. A byte that is
// not valid UTF-8 counts as one unit.
func (l *Lines) Position(offset int, e Encoding) (line, column int) {
	offset = min(max(offset, 0), len(l.text))
	line = l.Line(offset)
	span := l.Span(line)
	offset = min(offset, span.End)
	at := span.Start
	for at < offset {
		r, size := utf8.DecodeRuneInString(l.text[at:span.End])
		if at+size > offset {
			break
		}
		at += size
		column += units(r, size, e)
	}
	return line, column
}

// Offset gives the byte offset of a line and column. Lines beyond the text
// give its end, columns beyond the line the line's end, a column inside a
// character the character's start.
func (l *Lines) Offset(line, column int, e Encoding) int {
	span := l.Span(line)
	at := span.Start
	for at < span.End && column > 0 {
		r, size := utf8.DecodeRuneInString(l.text[at:span.End])
		n := units(r, size, e)
		if n > column {
			break
		}
		column -= n
		at += size
	}
	return at
}

// units is how many columns a character takes.
func units(r rune, size int, e Encoding) int {
	switch {
	case e == UTF8:
		return size
	case e == UTF16 && r > 0xFFFF:
		return 2
	}
	return 1
}
