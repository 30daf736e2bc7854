package dialect

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// Context is what fits at a place of a file.
type Context struct {
	// Replace is the word at the place, from its start to its end; Typed is
	// the part of it before the place.
	Replace Span
	Typed   string
	// Fits lists what may stand there, as the grammar meets it. Holes with
	// the names of units list the unit that the place expects.
	Fits []*Hole
	// Statement is what stands before the place, read on its own: its type
	// and its Headline tell what is being written. It is nil at the start of
	// a statement.
	Statement Statement
	// Subnetwork is the subnetwork whose body holds the place, nil outside.
	Subnetwork *SubnetworkStatement
	Comment    bool // the place is in a comment; nothing fits
	Quoted     bool // the place is in quotes; Typed is all before it
}

// Wants finds the hole of one sort in the context, nil if there is none.
func (c *Context) Wants(want Want) *Hole {
	for _, h := range c.Fits {
		if h.Want == want {
			return h
		}
	}
	return nil
}

// Expected tells what fits at a byte offset of a file.
func Expected(f *File, offset int) Context {
	offset = min(max(offset, 0), len(f.Text))
	var c Context
	c.Subnetwork = bodyAt(f.Statements, offset)
	start := statementStart(f, c.Subnetwork, offset)
	tokens, inside := scanUpTo(f, start, offset)
	if inside == placeComment {
		c.Comment = true
		c.Replace = Span{offset, offset}
		return c
	}
	if inside == placeQuoted {
		c.quoted(f, start, offset, tokens)
		return c
	}
	word := wordStart(f.Text[:offset])
	c.Replace = Span{word, scanWord(f.Text, offset)}
	c.Typed = f.Text[word:offset]
	c.ask(f, start, word)
	if c.Typed != "" && c.Typed[0] >= '0' && c.Typed[0] <= '9' && c.Wants(WantNode) == nil && c.Wants(WantSubscript) == nil {
		c.afterNumber(f, start, word, offset)
	}
	return c
}

// quoted fills a context inside quotes.
func (c *Context) quoted(f *File, start, offset int, tokens []token) {
	open := tokens[len(tokens)-1].start
	end := f.Lines.Span(f.Lines.Line(offset)).End
	if i := strings.IndexByte(f.Text[offset:end], '"'); i >= 0 {
		end = offset + i
	}
	c.Quoted = true
	c.Replace = Span{open + 1, end}
	c.Typed = f.Text[open+1 : offset]
	c.ask(f, start, open)
}

// afterNumber asks again between the digits and the letters of a digit-led
// word, where a unit fits.
func (c *Context) afterNumber(f *File, start, word, offset int) {
	if word > start && f.Text[word-1] == '.' {
		for word > start && (f.Text[word-1] == '.' || asciiClass[f.Text[word-1]&0x7F] == classDigit && f.Text[word-1] < utf8.RuneSelf) {
			word--
		}
	}
	split := word + scanMantissa(f.Text[word:offset], 0)
	if split == offset {
		c.Replace = Span{offset, scanWord(f.Text, offset)}
	} else {
		c.Replace.Start = split
	}
	c.Typed = f.Text[split:offset]
	c.ask(f, start, split)
}

// ask reads the statement up to an offset and keeps what would fit there.
func (c *Context) ask(f *File, start, end int) {
	c.Fits = nil
	tokens, _ := scanUpTo(f, start, end)
	if len(tokens) == 0 {
		c.Fits = startHoles(end, c.Subnetwork != nil)
		return
	}
	last := tokens[len(tokens)-1].end
	p := &parser{file: &File{Text: f.Text, Lines: f.Lines}, text: f.Text, record: &recorder{}}
	p.tokens = append(tokens, token{tEnd, last, last})
	if c.Subnetwork != nil {
		p.bodies = 1
	}
	p.line = f.Lines.Count()
	head := Head{Span: Span{tokens[0].start, last}}
	c.Statement = p.statement(head, f.Lines.Line(start))
	if len(tokens) == 1 && (tokens[0].kind == tWord || tokens[0].kind == tDigits || tokens[0].kind == tNumber) {
		p.record.add(&Hole{Span: Span{end, end}, Want: WantMark, Words: markBox})
	}
	c.Fits = p.record.result(Span{end, end})
}

// startHoles is what fits at the start of a statement.
func startHoles(at int, body bool) []*Hole {
	words := statementWords
	if body {
		words = bodyWords
	}
	place := Span{at, at}
	return []*Hole{
		{Span: place, Want: WantStatement, Words: words},
		{Span: place, Want: WantKind, Words: kindWords},
		{Span: place, Want: WantNode},
	}
}

// bodyAt finds the innermost subnetwork whose body holds an offset.
func bodyAt(list []Statement, offset int) *SubnetworkStatement {
	s, ok := statementAt(list, offset).(*SubnetworkStatement)
	if !ok || offset <= s.BodyStart || offset > s.BodyStop {
		return nil
	}
	if inner := bodyAt(s.Statements, offset); inner != nil {
		return inner
	}
	return s
}

// statementStart finds where the statement begins that an offset is in or
// goes on with; the start of the line if none does.
func statementStart(f *File, body *SubnetworkStatement, offset int) int {
	list := f.Statements
	if body != nil {
		list = body.Statements
	}
	line := f.Lines.Line(offset)
	begin := f.Lines.Span(line).Start
	var before Statement
	for lo, hi := 0, len(list); lo < hi; {
		mid := (lo + hi) / 2
		if list[mid].Extent().Start <= offset {
			before, lo = list[mid], mid+1
		} else {
			hi = mid
		}
	}
	if before == nil {
		return begin
	}
	span := before.Extent()
	if _, ok := before.(*SubnetworkStatement); ok && span.Start < begin {
		return begin
	}
	if span.End >= begin || goesOn(f, before, begin, offset) {
		return span.Start
	}
	return begin
}

// goesOn says that a line without a word before the offset continues the
// statement above it: it is deeper, and a comma or an open bracket came last.
func goesOn(f *File, s Statement, begin, offset int) bool {
	if trimSpaces(f.Text[begin:wordStart(f.Text[:offset])]) != "" {
		return false
	}
	span := s.Extent()
	for line := f.Lines.Line(span.End) + 1; line < f.Lines.Line(offset); line++ {
		l := f.Lines.Span(line)
		if !strings.HasPrefix(trimSpaces(f.Text[l.Start:l.End]), "#") {
			return false
		}
	}
	p := &parser{file: f, text: f.Text}
	if indentOf(f.Text[begin:offset]) <= p.indent(f.Lines.Line(span.Start)) {
		return false
	}
	tokens, _ := scanUpTo(f, span.Start, span.End)
	open := 0
	for _, t := range tokens {
		switch t.kind {
		case tOpenBox:
			return false
		case tOpen, tParen:
			open++
		case tClose, tParenClose:
			open--
		}
	}
	return open > 0 || len(tokens) > 0 && tokens[len(tokens)-1].kind == tComma
}

// place is what an offset may lie in.
type place int

const (
	placeText place = iota
	placeComment
	placeQuoted
)

// scanUpTo reads the tokens from one offset to another, over line ends, and
// says whether the end lies in a comment or in quotes.
func scanUpTo(f *File, start, end int) ([]token, place) {
	var tokens []token
	for at := start; at < end; {
		line := f.Lines.Span(f.Lines.Line(at))
		stop := min(max(line.End, at), end)
		var comment int
		tokens, comment = scanLine(f.Text, at, stop, tokens)
		if comment >= 0 && stop == end {
			return tokens, placeComment
		}
		if next := f.Lines.Line(at) + 1; next < f.Lines.Count() {
			at = f.Lines.Span(next).Start
		} else {
			break
		}
	}
	if n := len(tokens); n > 0 && tokens[n-1].kind == tString && tokens[n-1].end == end {
		text := f.Text[tokens[n-1].start:end]
		if len(text) < 2 || text[len(text)-1] != '"' {
			return tokens, placeQuoted
		}
	}
	return tokens, placeText
}

// wordStart is where the word that ends a text begins.
func wordStart(s string) int {
	at := len(s)
	for at > 0 {
		r, size := utf8.DecodeLastRuneInString(s[:at])
		if r != '_' && (r < '0' || r > '9') && (r == utf8.RuneError || !unicode.IsLetter(r)) {
			break
		}
		at -= size
	}
	return at
}

// recorder notes what would fit at the end of the text read so far.
type recorder struct {
	holes  []*Hole
	closed bool // something that must come is missing: what follows it is no news
}

// add notes one thing that would fit.
func (r *recorder) add(h *Hole) { r.holes = append(r.holes, h) }

// keywords notes words that would fit.
func (r *recorder) keywords(list []string) { r.add(&Hole{Want: WantKeyword, Words: list}) }

// result is what was noted, each thing once, moved to the place asked for.
func (r *recorder) result(place Span) []*Hole {
	parameter := false
	for _, h := range r.holes {
		parameter = parameter || h.Want == WantParameter
	}
	var list []*Hole
next:
	for _, h := range r.holes {
		if h.Want == WantNewName && parameter {
			continue
		}
		h.Span = place
		for _, have := range list {
			if have.Want == h.Want && have.Name == h.Name && strings.Join(have.Words, "|") == strings.Join(h.Words, "|") {
				continue next
			}
		}
		list = append(list, h)
	}
	return list
}

// want notes what would fit here, if the text ends here and someone asks.
func (p *parser) want(want Want, words []string) {
	if p.record != nil && !p.record.closed && p.is(tEnd) {
		p.record.add(p.newHole(want, words))
	}
}

// newHole makes a hole at the current token.
func (p *parser) newHole(want Want, words []string) *Hole {
	at := p.peek().start
	if p.is(tEnd) {
		at = p.last()
	}
	if p.unit != "" && len(words) == 0 && (want == WantUnit || want == WantExpression || want == WantValue) {
		words = []string{p.unit}
	}
	return &Hole{Span: Span{at, at}, Want: want, Kind: p.kind, Words: words}
}

// wantParameter notes that a parameter of a subnetwork would fit.
func (p *parser) wantParameter(subnetwork string) {
	if p.record != nil {
		h := p.newHole(WantParameter, nil)
		h.Name = subnetwork
		p.record.add(h)
	}
}
