package lsp

import (
	"fmt"
	"unicode/utf8"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
)

// mapper converts between the three ways to name a place:
//
//	offset     a byte offset in a text, the only form used inside the server
//	position   line and column as the client counts them, both from 0; columns
//	           are bytes, UTF-16 units or code points, as agreed at the start
//	name, URI  a file's name is an absolute path, or the URI itself where the
//	           document is not a file
//
// A position outside a text means the nearest place inside it, one inside a
// character the character's start.
type mapper struct{ encoding dialect.Encoding }

// position of an offset.
func (m mapper) position(lines *dialect.Lines, offset int) protocol.Position {
	line, column := lines.Position(offset, m.encoding)
	return protocol.Position{Line: uint32(line), Character: uint32(column)}
}

// offset of a position.
func (m mapper) offset(lines *dialect.Lines, p protocol.Position) int {
	return lines.Offset(int(p.Line), int(p.Character), m.encoding)
}

// reach gives the range of a span.
func (m mapper) reach(lines *dialect.Lines, s dialect.Span) protocol.Range {
	return protocol.Range{Start: m.position(lines, s.Start), End: m.position(lines, s.End)}
}

// span of a range; a range that runs backwards is turned round.
func (m mapper) span(lines *dialect.Lines, r protocol.Range) dialect.Span {
	a, b := m.offset(lines, r.Start), m.offset(lines, r.End)
	return dialect.Span{Start: min(a, b), End: max(a, b)}
}

// location of a span of a file, which the client gets to know by uri.
func (m mapper) location(at uri.URI, file *dialect.File, s dialect.Span) protocol.Location {
	return protocol.Location{URI: at, Range: m.reach(file.Lines, s)}
}

// apply makes a change of the client's to a text.
func (m mapper) apply(text string, change protocol.TextDocumentContentChangeEvent) (string, error) {
	switch c := change.(type) {
	case *protocol.TextDocumentContentChangeWholeDocument:
		return c.Text, nil
	case *protocol.TextDocumentContentChangePartial:
		s := m.span(dialect.NewLines(text), c.Range)
		return text[:s.Start] + c.Text + text[s.End:], nil
	}
	return text, fmt.Errorf("a change of an unknown form (%T)", change)
}

// walker turns ascending offsets into positions without counting any
// character twice, for long lists.
type walker struct {
	lines    *dialect.Lines
	text     string
	encoding dialect.Encoding

	line, column int // of offset at
	at           int
	end          dialect.Span // of the current line
}

func (m mapper) walk(file *dialect.File) *walker {
	return &walker{lines: file.Lines, text: file.Text, encoding: m.encoding, end: file.Lines.Span(0)}
}

// to moves on to an offset not before the last one.
func (w *walker) to(offset int) (line, column int) {
	for w.line+1 < w.lines.Count() && offset >= w.lines.Span(w.line+1).Start {
		w.line++
		w.end = w.lines.Span(w.line)
		w.at, w.column = w.end.Start, 0
	}
	offset = min(offset, w.end.End)
	if w.encoding == dialect.UTF8 {
		return w.line, offset - w.end.Start
	}
	for w.at < offset {
		r, size := utf8.DecodeRuneInString(w.text[w.at:w.end.End])
		if w.at+size > offset {
			break
		}
		w.at += size
		w.column++
		if w.encoding == dialect.UTF16 && r > 0xFFFF {
			w.column++
		}
	}
	return w.line, w.column
}

// name of the document behind a URI.
func (m mapper) name(u uri.URI) string {
	if u.IsFile() {
		return u.FsPath()
	}
	return string(u)
}

// uri of the document with a name.
func (m mapper) uri(name string) uri.URI {
	if isPath(name) {
		return uri.File(name)
	}
	return uri.URI(name)
}
