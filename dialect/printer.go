package dialect

import (
	"strings"
	"unicode"

	"golang.org/x/text/width"
)

// bodyIndent is the indentation of a subnetwork's body, and of the lines
// that continue a statement.
const bodyIndent = "  "

// Tidy gives the canonical form of a file: one look for spacing, columns and
// unit symbols. Numbers keep their digits and spelling, comments and line
// breaks stay, runs of blank lines become one, and a broken statement is kept
// byte for byte. Tidying twice changes nothing more, and what the text means
// never changes. Line ends are those of the file's first line.
func Tidy(f *File) string {
	if f.Unreadable {
		return f.Text
	}
	var b strings.Builder
	b.Grow(len(f.Text) + len(f.Text)/16)
	end := lineEnd(f.Text)
	for _, r := range tidyRows(f) {
		r.write(&b, end)
	}
	return b.String()
}

// TidyEdits gives the changes that tidy a file, as edits of whole or partial
// lines in order of the text, none of which overlap. Only lines that touch
// the span are changed.
func TidyEdits(f *File, within Span) []Edit {
	if f.Unreadable {
		return nil
	}
	var edits []Edit
	end := lineEnd(f.Text)
	covered := 0
	for _, r := range tidyRows(f) {
		source := r.source(f)
		if source.Start > covered { // lines that vanish
			edits = appendEdit(edits, f, Span{covered, source.Start}, "", within)
		}
		covered = source.End
		var b strings.Builder
		r.write(&b, end)
		edits = appendEdit(edits, f, source, b.String(), within)
	}
	if covered < len(f.Text) {
		edits = appendEdit(edits, f, Span{covered, len(f.Text)}, "", within)
	}
	return edits
}

// appendEdit adds the edit that makes text of a span, cut down to what
// differs, if it touches the range.
func appendEdit(edits []Edit, f *File, span Span, text string, within Span) []Edit {
	if span.End < within.Start || span.Start > within.End {
		return edits
	}
	old := f.Text[span.Start:span.End]
	if old == text {
		return edits
	}
	head := 0
	for head < len(old) && head < len(text) && old[head] == text[head] {
		head++
	}
	for head > 0 && !boundary(old, head) {
		head--
	}
	tail := 0
	for tail < len(old)-head && tail < len(text)-head && old[len(old)-1-tail] == text[len(text)-1-tail] {
		tail++
	}
	for tail > 0 && !boundary(old, len(old)-tail) {
		tail--
	}
	return append(edits, Edit{File: f, Span: Span{span.Start + head, span.End - tail}, Text: text[head : len(text)-tail]})
}

// boundary says that an edit may begin or end at an offset: not inside a
// character and not between the two halves of CR LF.
func boundary(s string, at int) bool {
	if at <= 0 || at >= len(s) {
		return true
	}
	return s[at]&0xC0 != 0x80 && !(s[at] == '\n' && s[at-1] == '\r')
}

// lineEnd is how the first line of a text ends, "\n" if none does.
func lineEnd(text string) string {
	if i := strings.IndexByte(text, '\n'); i > 0 && text[i-1] == '\r' {
		return "\r\n"
	}
	return "\n"
}

// row is one printed statement, comment or blank line.
type row struct {
	first, stop int    // the source lines it stands for: first up to stop
	indent      string // before its first line
	text        string // without indent and trailing comment; may hold "\n"
	comment     string // trailing comment
	gap         int    // spaces before the trailing comment
	verbatim    bool   // text is whole lines as they are
	cells       *cells // set for a part statement on one line
}

// cells are the columns of a part statement.
type cells struct {
	kind, name, rest string
}

// source is the span of the lines that a row stands for, line ends included.
func (r *row) source(f *File) Span {
	span := Span{f.Lines.Span(r.first).Start, len(f.Text)}
	if r.stop < f.Lines.Count() {
		span.End = f.Lines.Span(r.stop).Start
	}
	return span
}

// write appends the row's lines.
func (r *row) write(b *strings.Builder, end string) {
	if r.text != "" && !r.verbatim {
		b.WriteString(r.indent)
	}
	if end == "\n" || r.verbatim {
		b.WriteString(r.text)
	} else {
		b.WriteString(strings.ReplaceAll(r.text, "\n", end))
	}
	if r.comment != "" {
		for range r.gap {
			b.WriteByte(' ')
		}
		b.WriteString(r.comment)
	}
	b.WriteString(end)
}

// blank says that the row is an empty line.
func (r *row) blank() bool { return r.text == "" && r.comment == "" }

// tidyRows prints a file as rows and lines up their columns.
func tidyRows(f *File) []row {
	p := &printer{file: f}
	p.block(f.Statements, f.Lines.Count(), "")
	p.dropBlank(0, true)
	alignParts(p.rows)
	alignComments(p.rows)
	return p.rows
}

// printer collects the rows of a file.
type printer struct {
	file *File
	rows []row
	line int // the next source line
	next int // index of the next comment

	out    []byte // the statement being printed
	last   int    // end in the source of what is printed
	indent string
}

// block prints the statements, comments and blank lines up to a line.
func (p *printer) block(list []Statement, stop int, indent string) {
	for _, s := range list {
		p.between(p.file.Lines.Line(s.Extent().Start), indent)
		p.indent = indent
		p.statement(s)
	}
	p.between(stop, indent)
}

// between prints the comment and blank lines up to a line.
func (p *printer) between(stop int, indent string) {
	f := p.file
	for ; p.line < stop; p.line++ {
		span := f.Lines.Span(p.line)
		if p.next < len(f.Comments) && f.Comments[p.next].Span.Start <= span.End {
			text := trimRight(f.Comments[p.next].Text)
			p.next++
			p.rows = append(p.rows, row{first: p.line, stop: p.line + 1, indent: indent, text: text})
			continue
		}
		if n := len(p.rows); n > 0 && !p.rows[n-1].blank() {
			p.rows = append(p.rows, row{first: p.line, stop: p.line + 1})
		}
	}
}

// dropBlank removes blank rows at the end, and with leading set the one at
// the start of the rows from an index on.
func (p *printer) dropBlank(from int, leading bool) {
	for n := len(p.rows); n > from && p.rows[n-1].blank(); n = len(p.rows) {
		p.rows = p.rows[:n-1]
	}
	if leading && len(p.rows) > from && p.rows[from].blank() {
		p.rows = append(p.rows[:from], p.rows[from+1:]...)
	}
}

// statement prints one statement as a row, or several for a subnetwork.
func (p *printer) statement(s Statement) {
	h := s.Headline()
	if h.Broken {
		p.verbatim(h)
		return
	}
	p.begin(h)
	if sub, ok := s.(*SubnetworkStatement); ok {
		p.subnetwork(sub)
		return
	}
	p.print(s)
	var c *cells
	if part, ok := s.(*PartStatement); ok && p.oneLine(h) {
		c = p.cells(part)
	}
	p.end(h.Span.End, c)
}

// begin starts a row for a statement.
func (p *printer) begin(h *Head) {
	p.out = p.out[:0]
	p.last = h.Span.Start
}

// oneLine says that a statement stands on one line.
func (p *printer) oneLine(h *Head) bool {
	return p.file.Lines.Span(p.line).End >= h.Span.End
}

// cells splits a printed part statement into its columns.
func (p *printer) cells(s *PartStatement) *cells {
	text := string(p.out)
	kind, name := s.Kind.String(), s.Name.Text
	return &cells{kind, name, strings.TrimPrefix(text[len(kind)+1+len(name):], " ")}
}

// end closes the row of what was printed up to a source offset.
func (p *printer) end(offset int, c *cells) {
	f := p.file
	first := p.line
	p.line = f.Lines.Line(offset) + 1
	r := row{first: first, stop: p.line, indent: p.indent, text: string(p.out), cells: c}
	if p.next < len(f.Comments) && f.Comments[p.next].Span.Start < f.Lines.Span(p.line-1).End {
		r.comment, r.gap = trimRight(f.Comments[p.next].Text), 2
		p.next++
	}
	p.rows = append(p.rows, r)
}

// verbatim prints a broken statement's lines as they are, moved to the
// indentation of their neighbours as a block.
func (p *printer) verbatim(h *Head) {
	f := p.file
	first, stop := p.line, f.Lines.Line(h.Span.End)+1
	shift := len(p.indent) - indentOf(f.Text[f.Lines.Span(first).Start:h.Span.Start])
	var b strings.Builder
	for line := first; line < stop; line++ {
		if line > first {
			b.WriteString(lineEnd(f.Text))
		}
		span := f.Lines.Span(line)
		b.WriteString(shifted(f.Text[span.Start:span.End], shift))
	}
	p.rows = append(p.rows, row{first: first, stop: stop, text: trimRight(b.String()), verbatim: true})
	end := f.Lines.Span(stop - 1).End
	for p.next < len(f.Comments) && f.Comments[p.next].Span.Start < end {
		p.next++
	}
	p.line = stop
}

// indentOf is the column after spaces and tabs.
func indentOf(space string) int {
	column := 0
	for _, r := range space {
		if r == '\t' {
			column += tabWidth - column%tabWidth
		} else if r != '\uFEFF' {
			column++
		}
	}
	return column
}

// shifted moves a line by columns.
func shifted(line string, by int) string {
	body := strings.TrimLeftFunc(line, isSpace)
	if by == 0 || body == "" {
		return line
	}
	return strings.Repeat(" ", max(indentOf(line[:len(line)-len(body)])+by, 0)) + body
}

// subnetwork prints a subnetwork's head, body and closing brace.
func (p *printer) subnetwork(s *SubnetworkStatement) {
	indent := p.indent
	p.word("", s.Keyword)
	p.word(" ", s.Name)
	p.put(" ", s.Open, "(")
	for i, t := range s.Terminals {
		p.listed(i, "", t)
	}
	p.put("", s.Close, ")")
	if s.With.Present() {
		p.word(" ", s.With)
		p.parameters(s.Parameters)
	}
	p.put(" ", s.BraceOpen, "{")
	p.end(s.BraceOpen.End, nil)
	from := len(p.rows)
	p.block(s.Statements, p.file.Lines.Line(s.BraceClose.Start), indent+bodyIndent)
	p.dropBlank(from, true)
	p.indent = indent
	p.out = append(p.out[:0], '}')
	p.end(s.BraceClose.End, nil)
}

// trimRight removes spaces at the end.
func trimRight(s string) string { return strings.TrimRightFunc(s, isSpace) }

// displayWidth is the number of columns that a text takes in a terminal or
// editor: none for combining marks, two for wide East Asian characters.
func displayWidth(s string) int {
	n := 0
	for _, r := range s {
		switch {
		case r < 0x300:
			n++
		case unicode.In(r, unicode.Mn, unicode.Me, unicode.Cf):
		default:
			n++
			if k := width.LookupRune(r).Kind(); k == width.EastAsianWide || k == width.EastAsianFullwidth {
				n++
			}
		}
	}
	return n
}

// ownComment says that the row is a comment alone.
func (r *row) ownComment() bool { return !r.verbatim && strings.HasPrefix(r.text, "#") }

// alignParts lines up kinds, names and equals signs in every run of part
// statements on lines that follow each other; comments alone on a line do not
// end it.
func alignParts(rows []row) {
	for i := 0; i < len(rows); {
		stop := i
		for stop < len(rows) && (rows[stop].cells != nil || rows[stop].ownComment()) && rows[stop].indent == rows[i].indent {
			stop++
		}
		alignRun(rows[i:stop])
		i = max(stop, i+1)
	}
}

// alignRun lines up one run. Where the kinds differ in width, two spaces
// follow the widest.
func alignRun(rows []row) {
	kindWidth, nameWidth, gap := 0, 0, 1
	for _, r := range rows {
		if r.cells == nil {
			continue
		}
		w := displayWidth(r.cells.kind)
		if kindWidth != 0 && w != kindWidth {
			gap = 2
		}
		kindWidth = max(kindWidth, w)
		nameWidth = max(nameWidth, displayWidth(r.cells.name))
	}
	for i := range rows {
		c := rows[i].cells
		if c == nil {
			continue
		}
		var b strings.Builder
		pad(&b, c.kind, kindWidth+gap)
		switch {
		case strings.HasPrefix(c.rest, "="):
			pad(&b, c.name, nameWidth+1)
		default: // ", option" of a wire
			b.WriteString(c.name)
		}
		b.WriteString(c.rest)
		rows[i].text = b.String()
	}
}

// pad writes a text and spaces up to a width.
func pad(b *strings.Builder, s string, columns int) {
	b.WriteString(s)
	for n := displayWidth(s); n < columns; n++ {
		b.WriteByte(' ')
	}
}

// maxCommentShift is how far a trailing comment is moved to stand under its
// neighbours; a run with lines more unequal than that is left ragged.
const maxCommentShift = 24

// alignComments lines up trailing comments on lines that follow each other.
func alignComments(rows []row) {
	for i := 0; i < len(rows); i++ {
		narrow, wide, stop := 1<<30, 0, i
		for ; stop < len(rows) && rows[stop].comment != "" && rows[stop].text != ""; stop++ {
			w := rows[stop].lastWidth()
			narrow, wide = min(narrow, w), max(wide, w)
		}
		if wide-narrow <= maxCommentShift {
			for j := i; j < stop; j++ {
				rows[j].gap = wide - rows[j].lastWidth() + 2
			}
		}
		i = max(i, stop-1)
	}
}

// lastWidth is the display width of a row's last line.
func (r *row) lastWidth() int {
	if i := strings.LastIndexByte(r.text, '\n'); i >= 0 {
		return displayWidth(r.text[i+1:])
	}
	return displayWidth(r.indent) + displayWidth(r.text)
}
