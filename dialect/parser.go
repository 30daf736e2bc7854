package dialect

import (
	"fmt"
	"strings"
)

// Limits of what is read. They are far above what a person writes and keep a
// damaged or hostile text from costing more than a moment.
const (
	maxStatement = 64 << 10 // bytes in one statement
	maxBrackets  = 200      // nested brackets and powers
	maxFindings  = 100      // syntax findings in one file
	maxInvalid   = 32       // bytes that are not UTF-8, if they are a tenth of the text
	maxBodies    = 20       // nested subnetwork bodies
	tabWidth     = 4        // columns of a tab, for indentation
)

// syntaxCode and unitUnknownCode are the codes of the parser's own findings.
const (
	syntaxCode      Code = "syntax"
	unitUnknownCode Code = "unit-unknown"
)

// Parse reads a text. It never fails: what cannot be read is in the file's
// Findings, and as holes and broken statements in its tree.
func Parse(name, text string) *File {
	f := &File{Name: name, Text: text, Lines: NewLines(text)}
	p := &parser{file: f, text: text}
	if p.readable() {
		f.Statements = p.statements(-1)
	}
	p.close()
	return f
}

// ParseQuestion reads one question from outside a file, as it may follow
// tell. The file holds one *TellStatement without a keyword (or a
// *BrokenStatement if the text is empty or has more than one line); spans
// refer to text.
func ParseQuestion(name, text string) *File {
	f := &File{Name: name, Text: text, Lines: NewLines(text)}
	p := &parser{file: f, text: text}
	if p.readable() {
		p.question()
	}
	p.close()
	return f
}

// parser reads one file. Its methods are spread over the parser_*.go files
// by the part of the grammar that they read.
type parser struct {
	file *File
	text string

	line    int             // the next line to read
	pending []*Comment      // ## lines directly above the next line
	bodies  int             // nesting of subnetwork bodies
	omitted int             // findings beyond maxFindings
	invalid int             // bytes that are not UTF-8
	foul    bool            // some of them are in a statement
	defined map[string]bool // names before an equals sign, once needed
	joined  int             // wires offered to join nodes
	wire    string          // what their names begin with, once needed

	// The statement being read.
	tokens []token
	at     int
	head   *Head
	failed bool // a finding covers what follows, until the next sound place
	told   bool // something is reported in this statement
	depth  int  // nesting of brackets
	commas int  // nesting of brackets inside which commas separate

	kind    Kind   // of the part being read
	unit    string // the unit that the place expects, "" if unknown
	inValue bool   // a tolerance would end the expression

	slabs slabs

	record *recorder // notes what would fit at the end; nil when parsing
}

// readable reports a text that is no notation at all.
func (p *parser) readable() bool {
	p.invalid = countInvalid(p.text)
	nul := strings.IndexByte(p.text, 0)
	if nul < 0 && (p.invalid < maxInvalid || p.invalid*10 <= len(p.text)) {
		return true
	}
	message := "this is not text, so nothing in it is read"
	if strings.HasPrefix(p.text, "\xff\xfe") || strings.HasPrefix(p.text, "\xfe\xff") || nul >= 0 && p.invalid == 0 && strings.Count(p.text, "\x00")*3 > len(p.text) {
		message = "this file is UTF-16; save it as UTF-8, which the notation is written in"
	}
	p.head = &Head{Span: Span{0, len(p.text)}, Broken: true}
	p.file.Statements = []Statement{&BrokenStatement{Head: *p.head}}
	p.fail(Span{0, firstRunes(p.text[:p.file.Lines.Span(0).End], 40)}, message)
	p.invalid = 0
	p.file.Unreadable = true
	return false
}

// close adds the findings that concern the file as a whole.
func (p *parser) close() {
	if p.invalid > 0 {
		p.reportInvalid()
	}
	p.sortFindings()
	if p.omitted > 0 {
		last := len(p.text)
		p.file.Findings = append(p.file.Findings, Finding{
			Code: syntaxCode, Severity: Error,
			Message: fmt.Sprintf("%s in this file; the first %d are shown", counted(p.omitted, "more mistake", "more mistakes"), maxFindings),
			Origin:  Origin{File: p.file, Span: Span{last, last}},
		})
	}
}

// statements reads lines until stop, a line number, or to the text's end if
// stop is negative.
func (p *parser) statements(stop int) []Statement {
	if stop < 0 {
		stop = p.file.Lines.Count()
	}
	var list []Statement
	if p.bodies == 0 {
		list = make([]Statement, 0, min(stop, 1+len(p.text)/40))
	}
	for p.line < stop {
		if s := p.next(stop); s != nil {
			list = append(list, s)
		}
	}
	return list
}

// next reads one line and what continues it; nil for blank and comment lines.
func (p *parser) next(stop int) Statement {
	span := p.file.Lines.Span(p.line)
	if span.End-span.Start > maxStatement {
		return p.oversized(span)
	}
	first := p.line
	p.tokens = p.tokens[:0]
	comment := p.scan(span)
	p.line++
	if len(p.tokens) == 0 {
		p.noteDoc(comment, first)
		return nil
	}
	doc := p.takeDoc(first)
	p.gather(first, stop)
	last := p.tokens[len(p.tokens)-1]
	head := Head{Span: Span{p.tokens[0].start, last.end}, Doc: doc}
	p.tokens = append(p.tokens, token{tEnd, last.end, last.end})
	p.at, p.depth, p.commas = 0, 0, 0
	p.kind, p.unit, p.inValue, p.failed, p.told = NoKind, "", false, false, false

	if head.Span.End-head.Span.Start > maxStatement {
		return p.oversized(head.Span)
	}
	s := p.statement(head, first)
	if s.Headline().Broken {
		p.swallow(s.Headline(), first, stop)
	}
	return s
}

// oversized reports a line or statement that is too long to be one.
func (p *parser) oversized(span Span) Statement {
	if p.line < p.file.Lines.Count() && p.file.Lines.Span(p.line) == span {
		p.line++
	}
	p.pending = nil
	s := &BrokenStatement{Head{Span: span, Broken: true}}
	p.head, p.failed = &s.Head, false
	p.fail(Span{span.Start, span.Start + firstRunes(p.text[span.Start:span.End], 40)},
		fmt.Sprintf("this statement is %d bytes long and is not read; one may have %d", span.End-span.Start, maxStatement))
	return s
}

// scan reads the tokens of one line and notes its comment.
func (p *parser) scan(span Span) *Comment {
	had := len(p.tokens)
	var at int
	p.tokens, at = scanLine(p.text, span.Start, span.End, p.tokens)
	if at < 0 {
		return nil
	}
	c := &Comment{Span: Span{at, span.End}, Text: p.text[at:span.End], Own: len(p.tokens) == had}
	p.file.Comments = append(p.file.Comments, c)
	return c
}

// gather adds the lines that continue the statement on line first: while a
// bracket is open or the line ends in a comma, and the next line is indented
// further. Paths are not broken over lines.
func (p *parser) gather(first, stop int) {
	base, open, seen := -1, 0, 0
	for {
		for ; seen < len(p.tokens); seen++ {
			switch p.tokens[seen].kind {
			case tOpenBox:
				return
			case tOpen, tParen:
				open++
			case tClose, tParenClose:
				open = max(open-1, 0)
			}
		}
		if p.tokens[seen-1].kind == tBrace { // it ends its line, whatever is open
			return
		}
		if open == 0 && p.tokens[seen-1].kind != tComma {
			return
		}
		if base < 0 {
			base = p.indent(first)
		}
		line := p.line
		for line < stop && p.commentOnly(line) {
			line++
		}
		if line >= stop || p.blank(line) || p.indent(line) <= base {
			return
		}
		if span := p.file.Lines.Span(line); span.End-p.tokens[0].start > maxStatement && span.End-span.Start > maxStatement {
			return
		}
		for ; p.line <= line; p.line++ {
			p.scan(p.file.Lines.Span(p.line))
		}
	}
}

// swallow adds to a broken statement the deeper lines below it that do not
// look like statements of their own.
func (p *parser) swallow(h *Head, first, stop int) {
	base := p.indent(first)
	for p.line < stop && !p.blank(p.line) && !p.commentOnly(p.line) && p.indent(p.line) > base {
		span := p.file.Lines.Span(p.line)
		if span.End-span.Start > maxStatement {
			return
		}
		tokens, _ := scanLine(p.text, span.Start, span.End, nil)
		if len(tokens) == 0 || p.looksLikeStatement(tokens) {
			return
		}
		p.tokens = p.tokens[:0]
		p.scan(span)
		h.Span.End = p.tokens[len(p.tokens)-1].end
		p.line++
	}
}

// looksLikeStatement says that the tokens of a line begin a statement.
func (p *parser) looksLikeStatement(tokens []token) bool {
	switch {
	case tokens[0].kind == tBraceClose:
		return true
	case len(tokens) > 1 && tokens[1].kind == tOpenBox:
		return true
	case tokens[0].kind != tWord:
		return false
	}
	word := p.text[tokens[0].start:tokens[0].end]
	return isStatementWord(word) || beginsKind(word)
}

// blank says that a line holds nothing.
func (p *parser) blank(line int) bool {
	span := p.file.Lines.Span(line)
	return trimSpaces(p.text[span.Start:span.End]) == ""
}

// commentOnly says that a line holds nothing but a comment.
func (p *parser) commentOnly(line int) bool {
	span := p.file.Lines.Span(line)
	return strings.HasPrefix(trimSpaces(p.text[span.Start:span.End]), "#")
}

// indent is the column of a line's first character that is no space.
func (p *parser) indent(line int) int {
	span := p.file.Lines.Span(line)
	column := 0
	for _, r := range p.text[span.Start:span.End] {
		switch {
		case r == '\t':
			column += tabWidth - column%tabWidth
		case r == '\uFEFF':
		case isSpace(r):
			column++
		default:
			return column
		}
	}
	return column
}

// noteDoc keeps a ## line for the statement below it, or as the file's
// documentation when a blank line or the end follows the first block.
func (p *parser) noteDoc(c *Comment, line int) {
	if c != nil && c.Documents() {
		p.pending = append(p.pending, c)
		if line == p.file.Lines.Count()-1 {
			p.fileDoc()
		}
		return
	}
	if c == nil {
		p.fileDoc()
	}
	p.pending = nil
}

// fileDoc makes the pending block the file's documentation if it is the
// first thing in the file.
func (p *parser) fileDoc() {
	f := p.file
	if len(p.pending) == 0 || f.Doc != nil || f.Comments[0] != p.pending[0] || p.head != nil {
		return
	}
	f.Doc = newDoc(p.pending)
}

// takeDoc gives the block directly above a line, nil if there is none.
func (p *parser) takeDoc(line int) *Doc {
	if len(p.pending) == 0 {
		return nil
	}
	doc := newDoc(p.pending)
	p.pending = nil
	return doc
}

// newDoc joins a block of comments.
func newDoc(lines []*Comment) *Doc {
	return &Doc{Span: Span{lines[0].Span.Start, lines[len(lines)-1].Span.End}, Lines: lines}
}
