package dialect

import (
	"fmt"
	"strings"
)

// isStatementWord says that a word begins a statement that is no part.
func isStatementWord(s string) bool {
	switch s {
	case "ground", "let", "port", "function", "tell", "require", "start",
		"prefer", "allow", "use", "subnetwork", "part":
		return true
	}
	return false
}

// statement reads the tokens gathered as one statement; line is its first.
func (p *parser) statement(head Head, line int) Statement {
	t := p.peek()
	if t.kind == tBraceClose {
		return p.strayBrace(head)
	}
	if p.pathAhead() {
		return p.path(head)
	}
	if t.kind != tWord {
		return p.unknown(head)
	}
	if kind, words := p.kindAhead(); kind != NoKind {
		head.Keyword = Word{Span{t.start, p.peekAt(words - 1).end}, kind.String()}
		p.at += words
		s := fresh(&p.slabs.parts)
		s.Head, s.Kind = head, kind
		p.head = &s.Head
		p.part(s)
		p.finish()
		return s
	}
	word := p.read(t)
	if !isStatementWord(word) {
		return p.unknown(head)
	}
	head.Keyword = p.word(p.take())
	s := p.keywordStatement(word, head, line)
	p.misplaced(s.Headline())
	return s
}

// keywordStatement reads a statement after its first word.
func (p *parser) keywordStatement(word string, head Head, line int) Statement {
	switch word {
	case "ground":
		return p.ground(head)
	case "let":
		return p.let(head)
	case "port":
		return p.port(head)
	case "function":
		return p.function(head)
	case "tell":
		return p.tell(head)
	case "require":
		return p.require(head)
	case "start":
		return p.start(head)
	case "prefer":
		return p.prefer(head)
	case "allow":
		return p.allow(head)
	case "use":
		return p.use(head)
	case "part":
		s := &UsePartStatement{Head: head}
		p.head = &s.Head
		p.usePart(s)
		p.finish()
		return s
	}
	return p.subnetwork(head, line)
}

// misplaced reports a statement that a subnetwork's body cannot hold.
func (p *parser) misplaced(h *Head) {
	if p.bodies == 0 {
		return
	}
	switch h.Keyword.Text {
	case "let", "part", "require":
		return
	case "subnetwork":
		h.Misplaced = true
		p.failed = false
		p.complain(syntaxCode, h.Keyword.Span, "a subnetwork cannot be defined inside another; put it beside it")
		return
	}
	h.Misplaced = true
	p.failed = false
	p.complain(syntaxCode, h.Keyword.Span,
		fmt.Sprintf("`%s` cannot stand in a subnetwork, which holds lets, parts, wiring, uses and limits; put it in the file", h.Keyword.Text))
}

// begin makes a statement's head the current one.
func (p *parser) begin(h *Head) { p.head = h }

// strayBrace reports a "}" that closes nothing.
func (p *parser) strayBrace(head Head) Statement {
	s := &BrokenStatement{head}
	p.begin(&s.Head)
	t := p.peek()
	p.fail(t.span(), "`}` closes nothing: no subnetwork is open", p.repair("remove it", t.span(), ""))
	return s
}

// kindAhead recognises a part kind at the current token and counts its words.
// A kind of two words needs both.
func (p *parser) kindAhead() (Kind, int) {
	if !p.is(tWord) {
		return NoKind, 0
	}
	switch p.read(p.peek()) {
	case "resistor":
		return Resistor, 1
	case "inductor":
		return Inductor, 1
	case "capacitor":
		return Capacitor, 1
	case "impedance":
		return Impedance, 1
	case "admittance":
		return Admittance, 1
	case "transformer":
		return Transformer, 1
	case "coupling":
		return Coupling, 1
	case "switch":
		return Switch, 1
	case "wire":
		return Wire, 1
	case "voltage":
		return p.secondWord("source", VoltageSource)
	case "current":
		return p.secondWord("source", CurrentSource)
	case "op":
		return p.secondWord("amp", OpAmp)
	}
	return NoKind, 0
}

// secondWord recognises the second word of a kind.
func (p *parser) secondWord(word string, kind Kind) (Kind, int) {
	next := p.peekAt(1)
	if next.kind == tEnd && p.record != nil {
		p.record.keywords([]string{word})
	}
	if next.kind == tWord && p.read(next) == word {
		return kind, 2
	}
	return NoKind, 0
}

// beginsKind says that a word is the first of a part kind.
func beginsKind(s string) bool {
	switch s {
	case "resistor", "inductor", "capacitor", "impedance", "admittance",
		"transformer", "coupling", "switch", "wire", "voltage", "current", "op":
		return true
	}
	return false
}

// name reads a name of its own for something new.
func (p *parser) name(what string) Word {
	t := p.peek()
	switch t.kind {
	case tWord:
		w := p.word(p.take())
		if w.Text == "s" || w.Text == "t" || w.Text == "pi" {
			p.complain(syntaxCode, w.Span, fmt.Sprintf("`%s` stands for itself in expressions and cannot name %s", w.Text, what))
		}
		p.touching(w)
		return w
	case tDigits, tNumber:
		p.fail(t.span(), fmt.Sprintf("the name of %s starts with a letter or _, not with a digit", what),
			p.repair("write `_"+p.read(t)+"`", t.span(), "_"+p.read(t)))
		p.failed = false
		return p.word(p.take())
	}
	p.missing(WantNewName, "the name of "+what)
	return p.holeWord(WantNewName)
}

// touching reports characters that stick to a name and cannot be part of it.
func (p *parser) touching(w Word) {
	t := p.peek()
	if !p.touches(0) || t.kind != tMinus && t.kind != tPlus && t.kind != tDot && t.kind != tBad {
		return
	}
	if p.head.Inline && !p.closeAhead() {
		return // "-[wire W1- b": the "]" is missing
	}
	if t.kind == tBad {
		p.foreign(t)
		p.take()
		return
	}
	end := t.end
	text := w.Text + map[tokenKind]string{tMinus: "_", tPlus: "_plus", tDot: "_"}[t.kind]
	if n := p.peekAt(1); (n.kind == tWord || n.kind == tNumber || n.kind == tDigits) && n.start == t.end {
		end = n.end
		text = w.Text + "_" + p.read(n)
	}
	p.fail(Span{w.Span.Start, end}, fmt.Sprintf("a name is letters, digits and _; `%s` cannot be one", p.text[w.Span.Start:end]),
		p.only("write `"+text+"`", Span{w.Span.Start, end}, text))
	for p.peek().kind != tEnd && p.peek().start < end {
		p.take()
	}
	p.failed = false
}

// missing reports that something is expected at the current token.
func (p *parser) missing(want Want, what string) {
	t := p.peek()
	if t.kind == tBad || t.kind == tForeign {
		p.foreign(t)
		return
	}
	if t.kind == tEnd {
		p.fail(p.blame(), what+" is missing here")
		return
	}
	p.fail(t.span(), fmt.Sprintf("%s is expected here, not %s", what, p.describe()))
}

// equals reads the "=" after a name.
func (p *parser) equals() Span {
	if p.is(tEquals) {
		return p.take().span()
	}
	at := p.last()
	p.want(WantMark, markEquals)
	if p.is(tEnd) || p.is(tComma) {
		p.fail(Span{at, at}, "`=` and a value are missing here")
	} else {
		p.fail(p.blame(), "`=` is missing before this", p.only("insert `=`", Span{at, p.peek().start}, " = "))
		p.failed = false
	}
	return Span{at, at}
}

var markEquals = []string{"="}

// keyword reads a word that must stand here.
func (p *parser) keyword(word string, list []string) Word {
	if p.isWord(word) {
		return p.word(p.take())
	}
	t := p.peek()
	h := p.hole(WantKeyword, list)
	if t.kind == tWord && nearest(p.read(t), list) == word {
		p.fail(t.span(), fmt.Sprintf("`%s` is expected here", word), p.only("write `"+word+"`", t.span(), word))
		p.failed = false
		return p.word(p.take())
	}
	p.missing(WantKeyword, "`"+word+"`")
	return Word{Span: h.Span}
}

// choice reads one of several words; a hole if none is there.
func (p *parser) choice(want Want, list []string, what string) Word {
	t := p.peek()
	if t.kind == tWord {
		for _, w := range list {
			if p.read(t) == w {
				return p.word(p.take())
			}
		}
		if near := nearest(p.read(t), list); near != "" {
			p.fail(t.span(), fmt.Sprintf("%s is expected here, probably `%s`", what, near), p.only("write `"+near+"`", t.span(), near))
			p.hole(want, list)
			p.failed = false
			return p.word(p.take())
		}
	}
	p.missing(want, what+" ("+orList(list)+")")
	h := p.hole(want, list)
	if t.kind == tWord || t.kind == tDigits {
		p.failed = true
		return p.word(p.take())
	}
	return Word{Span: h.Span}
}

// orList joins words for a message: "a, b or c".
func orList(list []string) string {
	if len(list) < 2 {
		return strings.Join(list, "")
	}
	return strings.Join(list[:len(list)-1], ", ") + " or " + list[len(list)-1]
}

// ground reads: ground NODE.
func (p *parser) ground(head Head) Statement {
	s := &GroundStatement{Head: head}
	p.begin(&s.Head)
	s.Node = p.node()
	p.finish()
	return s
}

// let reads: let NAME = EXPR.
func (p *parser) let(head Head) Statement {
	s := &LetStatement{Head: head}
	p.begin(&s.Head)
	s.Name = p.name("a constant")
	s.Equals = p.equals()
	s.Value = p.expr()
	p.finish()
	return s
}

// function reads: function NAME = EXPR.
func (p *parser) function(head Head) Statement {
	s := &FunctionStatement{Head: head}
	p.begin(&s.Head)
	s.Name = p.name("a function")
	s.Equals = p.equals()
	s.Value = p.expr()
	p.finish()
	return s
}

// port reads: port NAME at NODE NODE.
func (p *parser) port(head Head) Statement {
	s := &PortStatement{Head: head}
	p.begin(&s.Head)
	s.Name = p.portName()
	s.At = p.keyword("at", atWord)
	s.Plus = p.node()
	s.Minus = p.node()
	p.finish()
	return s
}

var atWord = []string{"at"}

// portName reads a port's name, which stands only in subscripts and so may be
// s, t or pi.
func (p *parser) portName() Word {
	if p.is(tWord) {
		w := p.word(p.take())
		p.touching(w)
		return w
	}
	return p.name("a port")
}

// start reads: start rest|steady.
func (p *parser) start(head Head) Statement {
	s := &StartStatement{Head: head}
	p.begin(&s.Head)
	s.State = p.choice(WantKeyword, stateWords, "the state to start from")
	p.finish()
	return s
}

// prefer reads: prefer KIND SERIES.
func (p *parser) prefer(head Head) Statement {
	s := &PreferStatement{Head: head}
	p.begin(&s.Head)
	kind, words := p.kindAhead()
	if kind == Resistor || kind == Inductor || kind == Capacitor {
		s.Kind, s.KindName = kind, p.word(p.take())
	} else {
		if words > 1 {
			p.fail(Span{p.peek().start, p.peekAt(words - 1).end}, "preferred values are those of a resistor, inductor or capacitor")
		}
		s.KindName = p.choice(WantKind, kindWords[:3], "a kind of part with preferred values")
	}
	s.Series = p.choice(WantSeries, seriesNames, "a series of IEC 60063")
	p.finish()
	return s
}

// allow reads: allow CODE because "reason".
func (p *parser) allow(head Head) Statement {
	s := &AllowStatement{Head: head}
	p.begin(&s.Head)
	if !p.is(tWord) {
		p.missing(WantCode, "the code of a finding, such as `touch-voltage`,")
		s.Code = p.holeWord(WantCode)
	} else {
		first, last := p.peek(), p.take()
		for p.is(tMinus) && p.touches(0) && p.touches(1) && p.peekAt(1).kind == tWord {
			p.take()
			last = p.take()
		}
		s.Code = Word{Span{first.start, last.end}, p.text[first.start:last.end]}
	}
	s.Because = p.keyword("because", becauseWord)
	s.Reason = p.quoted(WantString, "the reason, in double quotes,")
	p.finish()
	return s
}

var becauseWord = []string{"because"}

// use reads: use "path".
func (p *parser) use(head Head) Statement {
	s := &UseFileStatement{Head: head}
	p.begin(&s.Head)
	s.Path = p.quoted(WantPath, "a file's path, in double quotes,")
	p.finish()
	return s
}

// quoted reads a text in quotes.
func (p *parser) quoted(want Want, what string) StringLiteral {
	t := p.peek()
	if t.kind != tString {
		p.missing(want, what)
		h := p.hole(want, nil)
		return StringLiteral{Span: h.Span}
	}
	p.take()
	text := p.read(t)
	if len(text) < 2 || text[len(text)-1] != '"' {
		end := t.start + len(strings.TrimRight(text, " \t"))
		p.fail(t.span(), "the closing quote is missing", p.only("insert `\"`", Span{end, end}, `"`))
		p.hole(want, nil)
		return StringLiteral{Span: t.span(), Value: strings.TrimSpace(text[1:])}
	}
	if len(strings.TrimSpace(text)) == 2 {
		p.fail(t.span(), what+" is missing between the quotes")
	}
	return StringLiteral{Span: t.span(), Value: text[1 : len(text)-1]}
}
