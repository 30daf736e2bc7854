package dialect

import (
	"fmt"
	"sort"
	"strings"
	"unicode"
	"unicode/utf8"
)

// peek is the current token.
func (p *parser) peek() token { return p.tokens[p.at] }

// peekAt is the token n places on; the end stands for all beyond it.
func (p *parser) peekAt(n int) token {
	return p.tokens[min(p.at+n, len(p.tokens)-1)]
}

// is says that the current token is of a kind.
func (p *parser) is(kind tokenKind) bool { return p.tokens[p.at].kind == kind }

// take consumes the current token. The end is never consumed.
func (p *parser) take() token {
	t := p.tokens[p.at]
	if t.kind != tEnd {
		p.at++
	}
	return t
}

// last is the end of the token before the current one.
func (p *parser) last() int {
	if p.at == 0 {
		return p.tokens[0].start
	}
	return p.tokens[p.at-1].end
}

// read is the text of a token.
func (p *parser) read(t token) string { return p.text[t.start:t.end] }

// word makes a Word of a token.
func (p *parser) word(t token) Word { return Word{Span{t.start, t.end}, p.text[t.start:t.end]} }

// isWord says that the current token is a certain word.
func (p *parser) isWord(s string) bool {
	t := p.tokens[p.at]
	return t.kind == tWord && t.end-t.start == len(s) && p.text[t.start:t.end] == s
}

// touches says that the token n places on follows the one before it without
// a space.
func (p *parser) touches(n int) bool {
	i := p.at + n
	return i > 0 && i < len(p.tokens) && p.tokens[i].kind != tEnd && p.tokens[i].start == p.tokens[i-1].end
}

// spaces counts the characters between the token n places on and the one
// before it; many for a line end.
func (p *parser) spaces(n int) int {
	i := p.at + n
	if i <= 0 || i >= len(p.tokens) || p.tokens[i].kind == tEnd {
		return 1 << 20
	}
	gap := p.text[p.tokens[i-1].end:p.tokens[i].start]
	if strings.ContainsAny(gap, "\n\r") {
		return 1 << 20
	}
	return utf8.RuneCountInString(gap)
}

// describe names the current token for a message.
func (p *parser) describe() string {
	t := p.peek()
	if t.kind == tEnd {
		return "the end of the line"
	}
	return "`" + shorten(p.read(t)) + "`"
}

// shorten cuts a long text for a message.
func shorten(s string) string {
	if n := firstRunes(s, 30); n < len(s) {
		return s[:n] + "…"
	}
	return s
}

// firstRunes is the length in bytes of the first n characters.
func firstRunes(s string, n int) int {
	for i := range s {
		if n == 0 {
			return i
		}
		n--
	}
	return len(s)
}

// counted is "1 thing" or "7 things".
func counted(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

// fail reports a place that cannot be read. The statement is broken, and
// nothing more is reported until a sound place is reached. That a line ends
// too early is not worth a word after another finding in its statement.
func (p *parser) fail(span Span, message string, repairs ...Repair) {
	p.head.Broken = true
	if !p.failed && !(p.told && p.at < len(p.tokens) && p.is(tEnd)) {
		p.complain(syntaxCode, span, message, repairs...)
	}
	p.failed = true
}

// complain reports something that can be read but is wrong.
func (p *parser) complain(code Code, span Span, message string, repairs ...Repair) {
	if p.record != nil || p.failed {
		return
	}
	p.told = true
	if len(p.file.Findings) >= maxFindings {
		p.omitted++
		return
	}
	p.file.Findings = append(p.file.Findings, Finding{
		Code: code, Severity: Error, Message: message,
		Origin: Origin{File: p.file, Span: span}, Repairs: repairs,
	})
}

// repair is a repair that replaces one span; the first of several should be
// the preferred one.
func (p *parser) repair(title string, span Span, text string) Repair {
	return Repair{Title: title, Edits: []Edit{{File: p.file, Span: span, Text: text}}}
}

// only is a repair that is the obvious one.
func (p *parser) only(title string, span Span, text string) Repair {
	r := p.repair(title, span, text)
	r.Preferred = true
	return r
}

// hole notes that something is missing at the current token.
func (p *parser) hole(want Want, words []string) *Hole {
	h := p.newHole(want, words)
	if p.record != nil && !p.record.closed && p.is(tEnd) {
		p.record.add(h)
		p.record.closed = true
	}
	p.head.Holes = append(p.head.Holes, h)
	p.head.Broken = true
	return h
}

// holeWord is a missing name.
func (p *parser) holeWord(want Want) Word {
	h := p.hole(want, nil)
	return Word{Span: h.Span}
}

// expect consumes a mark, or reports it as missing just after what was read.
func (p *parser) expect(kind tokenKind, mark, message string) Span {
	if p.is(kind) {
		return p.take().span()
	}
	at := p.last()
	p.fail(p.blame(), message, p.only("insert `"+mark+"`", Span{at, at}, mark))
	p.hole(WantMark, []string{mark})
	return Span{at, at}
}

// blame is the span of the current token, or the place after the last
// character when the line ends there.
func (p *parser) blame() Span {
	t := p.peek()
	if t.kind != tEnd {
		return t.span()
	}
	at := p.last()
	return Span{at, at}
}

// skipTo drops tokens up to one of the kinds, outside brackets opened on the
// way, or to the end. It says whether it found one; what follows then is
// sound again.
func (p *parser) skipTo(kinds ...tokenKind) bool {
	open := 0
	for ; !p.is(tEnd); p.at++ {
		kind := p.peek().kind
		if open == 0 {
			for _, k := range kinds {
				if k == kind {
					p.failed = false
					return true
				}
			}
		}
		switch kind {
		case tOpen, tParen, tOpenBox:
			open++
		case tClose, tParenClose:
			if open > 0 {
				open--
			}
		}
	}
	return false
}

// enter goes one bracket deeper. When that is too deep it reports it once,
// drops the statement's rest and says false.
func (p *parser) enter() bool {
	p.depth++
	if p.depth <= maxBrackets {
		return true
	}
	p.fail(p.blame(), fmt.Sprintf("brackets and powers are nested more than %d deep here; give the inner parts names with let", maxBrackets))
	p.at = len(p.tokens) - 1
	return false
}

// leave undoes enter.
func (p *parser) leave() { p.depth-- }

// finish reports what is left of a statement that could have ended, unless an
// earlier finding in it explains that.
func (p *parser) finish() {
	if p.is(tEnd) {
		return
	}
	p.head.Broken = true
	if !p.failed && !p.told {
		p.leftover()
	}
	p.at = len(p.tokens) - 1
}

// leftover says what is wrong with a token after a complete statement.
func (p *parser) leftover() {
	t := p.peek()
	switch {
	case t.kind == tForeign || t.kind == tBad:
		p.foreign(t)
	case t.kind == tSlashes:
		p.slashes(t)
	case t.kind == tParenClose || t.kind == tClose:
		p.fail(t.span(), fmt.Sprintf("%s closes nothing", p.describe()), p.only("remove it", t.span(), ""))
	case t.kind == tBraceClose:
		p.fail(t.span(), "`}` stands alone on its line")
	case t.kind == tPlusMinus:
		p.fail(t.span(), "a tolerance stands only after the value of a part")
	case t.kind == tBrace:
		p.fail(t.span(), "`{` belongs to a subnetwork's first line: subnetwork NAME (TERMINAL, …) {")
	case t.kind == tNumber && p.kind != NoKind && p.percentAt(-1):
		p.fail(t.span(), "a tolerance starts with `±`", p.only("insert `±`", Span{t.start, t.start}, "±"))
	case p.kind != NoKind && t.kind == tWord && isOptionWord(p.read(t)):
		at := p.last()
		p.fail(t.span(), "a comma is missing before this option", p.only("insert `,`", Span{at, at}, ","))
	case t.kind == tComma:
		p.fail(t.span(), "nothing can follow a comma here")
	case t.kind == tBars:
		p.fail(t.span(), "parts in parallel stand in a box, -[R1 || R2]-; as a value, two resistances in parallel are 1/(1/R1 + 1/R2)")
	case t.kind == tEquals:
		p.fail(t.span(), "`=` is not expected here; limits are written with <= >= < >")
	case t.kind == tOpenBox:
		p.fail(t.span(), "a box `-[…]-` stands only in a path, which starts with one node: in -[R1]- out")
	case p.at > 0 && p.tokens[p.at-1].kind.operand() && (t.kind == tWord || t.kind == tNumber || t.kind == tDigits || t.kind == tParen):
		p.missingOperator(t)
	default:
		p.fail(t.span(), fmt.Sprintf("%s is not expected here", p.describe()))
	}
}

// missingOperator reports an operand that follows another without operator.
func (p *parser) missingOperator(t token) {
	if t.kind == tWord {
		near := nearest(p.read(t), qualifierNear)
		if near == p.read(t) {
			p.fail(t.span(), fmt.Sprintf("%s is not expected here", p.describe()))
			return
		}
		if near != "" {
			p.fail(t.span(), fmt.Sprintf("`%s` is not expected here; `%s` may be meant", p.read(t), near), p.only("write `"+near+"`", t.span(), near))
			return
		}
		if meaning, unit := valueWord(p.read(t)); meaning != "" && unit == "" && !p.defines(p.read(t)) {
			p.explainValueWord(t, meaning, unit)
			return
		}
		if p.read(t) == "and" || p.read(t) == "or" {
			p.fail(t.span(), "a question or a limit says one thing; write a line for each")
			return
		}
		if next := p.peekAt(1).kind; !p.defines(p.read(t)) && next != tParen && next != tOpen {
			p.fail(t.span(), fmt.Sprintf("%s is not expected here", p.describe()))
			return
		}
	}
	before := p.last()
	p.fail(t.span(), fmt.Sprintf("%s follows without an operator; to multiply, write *", p.describe()),
		p.repair("insert ` * `", Span{before, t.start}, " * "))
}

var qualifierNear = []string{"at", "before", "from", "to", "with", "without", "nominal", "reference"}

// slashes reports the sign that is used elsewhere for parallel parts.
func (p *parser) slashes(t token) {
	if p.proseAhead() {
		p.fail(t.span(), "a comment starts with `#`", p.only("write `#`", t.span(), "#"))
		return
	}
	p.fail(t.span(), "`//` has no meaning here: parts in parallel are written `||` inside a box, -[R1 || C1]-")
}

// foreign reports a character that no statement may hold here.
func (p *parser) foreign(t token) {
	text := p.read(t)
	r, size := utf8.DecodeRuneInString(text)
	if r == utf8.RuneError && size <= 1 {
		// Reported once for the whole file.
		p.foul = true
		p.head.Broken = true
		p.failed = true
		return
	}
	if meant, ok := foreignMarks[r]; ok {
		if meant == "" {
			p.fail(t.span(), fmt.Sprintf("`%c` has no meaning in the notation", r))
			return
		}
		p.fail(t.span(), fmt.Sprintf("`%c` is written `%s` in the notation", r, meant), p.only("write `"+meant+"`", t.span(), meant))
		return
	}
	switch {
	case r == '@':
		p.fail(t.span(), "`@` is written `at` in the notation", p.only("write `at`", t.span(), "at"))
	case r == ';':
		p.fail(t.span(), "a statement ends with its line, without `;`", p.only("remove it", t.span(), ""))
	case unicode.IsControl(r) || !unicode.IsPrint(r):
		p.fail(t.span(), fmt.Sprintf("an invisible character (U+%04X) stands here", r), p.only("remove it", t.span(), ""))
	case unicode.IsMark(r):
		p.fail(t.span(), fmt.Sprintf("the mark U+%04X is not part of a name: names are letters, digits and _ (an accented letter must be one character)", r))
	default:
		p.fail(t.span(), fmt.Sprintf("`%s` has no meaning in the notation", shorten(text)))
	}
}

// foreignAs consumes a character written for one of the notation's marks,
// and reports it.
func (p *parser) foreignAs(mark string) bool {
	t := p.peek()
	if t.kind != tForeign {
		return false
	}
	r, _ := utf8.DecodeRuneInString(p.text[t.start:])
	if foreignMarks[r] != mark {
		return false
	}
	p.foreign(t)
	p.failed = false // understood
	p.take()
	return true
}

// countInvalid counts the bytes that are not valid UTF-8.
func countInvalid(s string) int {
	if utf8.ValidString(s) {
		return 0
	}
	n := 0
	for i := 0; i < len(s); {
		r, size := utf8.DecodeRuneInString(s[i:])
		if r == utf8.RuneError && size <= 1 {
			n++
		}
		i += size
	}
	return n
}

// reportInvalid reports all bytes that are not UTF-8 in one finding, at the
// first.
func (p *parser) reportInvalid() {
	at := 0
	for at < len(p.text) {
		r, size := utf8.DecodeRuneInString(p.text[at:])
		if r == utf8.RuneError && size <= 1 {
			break
		}
		at += size
	}
	message := fmt.Sprintf("%s in this file %s not UTF-8, the first here (0x%02X); save the file as UTF-8",
		counted(p.invalid, "byte", "bytes"), map[bool]string{true: "is", false: "are"}[p.invalid == 1], p.text[at])
	severity := Warning // in comments and quotes it does no harm
	if p.foul {
		severity = Error
	}
	p.file.Findings = append(p.file.Findings, Finding{
		Code: syntaxCode, Severity: severity, Message: message,
		Origin: Origin{File: p.file, Span: Span{at, at + 1}},
	})
}

// sortFindings puts the findings in order of the text.
func (p *parser) sortFindings() {
	list := p.file.Findings
	sort.SliceStable(list, func(i, j int) bool { return list[i].Origin.Span.Start < list[j].Origin.Span.Start })
}

// isSpace says that a character is a space of the notation: any Unicode space,
// and the no-break space of no width that also serves as byte order mark.
func isSpace(r rune) bool { return unicode.IsSpace(r) || unicode.Is(unicode.Zs, r) || r == '\uFEFF' }

// nearest finds the word of a list that a misspelling probably means, ""
// if none is near: one slip in words of up to five letters, two in longer.
func nearest(word string, list []string) string {
	best, bestDistance := "", 3
	folded := strings.ToLower(word)
	for _, candidate := range list {
		d := editDistance(folded, candidate, bestDistance)
		limit := 2
		if len(candidate) < 3 {
			limit = 0
		} else if len(candidate) <= 5 {
			limit = 1
		}
		if d <= limit && d < bestDistance {
			best, bestDistance = candidate, d
		}
	}
	return best
}

// trimSpaces removes the spaces around a text.
func trimSpaces(s string) string { return strings.TrimFunc(s, isSpace) }
