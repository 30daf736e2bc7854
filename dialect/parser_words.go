package dialect

import (
	"fmt"
	"strings"
)

// This file tells what to write for words that engineers set after a value,
// and which names the text defines, so that no repair makes a product with a
// name that does not exist.

// defines says that the text gives a name a meaning in an expression: NAME =
// stands somewhere in it, or it is a variable of the notation.
func (p *parser) defines(name string) bool {
	if name == "pi" || name == "π" || name == "s" || name == "t" {
		return true
	}
	if p.defined == nil {
		p.defined = definedNames(p.text)
	}
	return p.defined[name]
}

// definedNames collects the words that stand before an equals sign.
func definedNames(text string) map[string]bool {
	names := map[string]bool{}
	for i := range len(text) {
		if text[i] != '=' {
			continue
		}
		before := strings.TrimRight(text[:i], " \t")
		start := len(before)
		for start > 0 && wordByte(before[start-1]) {
			start--
		}
		if start < len(before) {
			names[before[start:]] = true
		}
	}
	return names
}

// wordByte says that a byte can be part of a name; all of a letter beyond
// ASCII counts.
func wordByte(c byte) bool {
	return c == '_' || c >= '0' && c <= '9' || c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c >= 0x80
}

// valueWords are words that say what sort of value stands before them. Here
// the mathematics says that.
var valueWords = map[string]string{
	"dc": "dc", "ac": "ac", "rms": "rms", "eff": "rms", "peak": "peak", "pk": "peak", "pp": "pp", "pk-pk": "pp", "p-p": "pp", "amplitude": "peak",
}

// valueWord is what a word after a value means: dc, ac, rms, peak or pp, ""
// for none. A unit's letter may be joined to it: Vrms, VDC.
func valueWord(word string) (meaning, unit string) {
	if m := valueWords[strings.ToLower(word)]; m != "" {
		return m, ""
	}
	if word != "" && (word[0] == 'V' || word[0] == 'A') {
		rest := strings.TrimPrefix(word[1:], "_")
		return valueWords[strings.ToLower(rest)], word[:1]
	}
	return "", ""
}

// explainValueWord reports a word such as DC or rms after a value. The word's
// token is t; unit is what belongs to the number in it.
func (p *parser) explainValueWord(t token, meaning, unit string) {
	span, word := t.span(), p.read(t)
	source := p.kind == VoltageSource || p.kind == CurrentSource
	switch {
	case meaning == "dc":
		start := p.tokens[p.at-1].end
		if p.tokens[p.at].start != t.start { // the word is consumed
			start = t.start
		}
		text := ""
		if unit != "" {
			start, text = t.start, unit
		}
		p.fail(span, fmt.Sprintf("`%s` is not written: a constant is what it is, without a word", word),
			p.only("remove it", Span{start, t.end}, text))
	case source && meaning == "ac":
		p.fail(span, fmt.Sprintf("`%s` is not written: a waveform is mathematics, an alternating voltage is its amplitude times a sine, 10 V * sin(2*pi*50 Hz*t)", word))
	case source && meaning == "rms":
		p.fail(span, fmt.Sprintf("`%s` is not written: a waveform is mathematics, and 10 V in rms are sqrt(2)*10 V * sin(2*pi*50 Hz*t)", word))
	case source && meaning == "peak":
		p.fail(span, fmt.Sprintf("`%s` is not written: a waveform is mathematics, and a peak of 10 V is 10 V * sin(2*pi*50 Hz*t)", word))
	case source:
		p.fail(span, fmt.Sprintf("`%s` is not written: a waveform is mathematics, and 10 V from peak to peak are 5 V * sin(2*pi*50 Hz*t)", word))
	case meaning == "rms":
		p.fail(span, fmt.Sprintf("`%s` is not written after a value: it is asked of the signal, rms(v[out]) <= 10 V", word))
	case meaning == "peak":
		p.fail(span, fmt.Sprintf("`%s` is not written after a value: it is asked of the signal, peak(v[out]) <= 10 V", word))
	case meaning == "pp":
		p.fail(span, fmt.Sprintf("`%s` is not written after a value: it is asked of the signal, peak(v[out]) - trough(v[out]) <= 10 V", word))
	default:
		p.fail(span, fmt.Sprintf("`%s` is not written after a value", word))
	}
}

// between reads "between A and B" after the left side of a limit, and offers
// the two limits that it means.
func (p *parser) between(s *RequireStatement) {
	start := p.take()
	and, stop, open := -1, len(p.tokens)-1, 0
	for i := p.at; i < len(p.tokens)-1; i++ {
		t := p.tokens[i]
		switch t.kind {
		case tParen, tOpen:
			open++
		case tParenClose, tClose:
			open--
		case tWord:
			word := p.read(t)
			if open == 0 && and < 0 && word == "and" {
				and = i
			} else if open == 0 && and >= 0 && (startsQualifier(word) || word == "nominal") {
				stop = i
			}
		}
		if stop == i {
			break
		}
	}
	left := s.Left.Extent()
	span := Span{start.start, p.tokens[stop-1].end}
	message := "a limit has one relation; a range is two limits, one >= and one <="
	if and <= p.at || stop <= and+1 || left.End <= left.Start {
		p.fail(span, message)
		p.at = len(p.tokens) - 1
		return
	}
	low := p.text[p.tokens[p.at].start:p.tokens[and-1].end]
	high := p.text[p.tokens[and+1].start:span.End]
	rest := ""
	if stop < len(p.tokens)-1 {
		rest = " " + p.text[p.tokens[stop].start:s.Span.End]
	}
	indent := p.text[p.file.Lines.Span(p.file.Lines.Line(s.Span.Start)).Start:s.Span.Start]
	value := p.text[left.Start:left.End]
	write := fmt.Sprintf("%s >= %s%s\n%srequire %s <= %s%s", value, low, rest, indent, value, high, rest)
	p.fail(span, message, p.only("write two limits", Span{left.Start, s.Span.End}, write))
	p.at = len(p.tokens) - 1
}

// thousands reports digits in groups set off by commas, "1,000" and
// "1,000,000", of which the first may also be a decimal comma.
func (p *parser) thousands(n *NumberExpr) bool {
	digits := n.Number.Text
	if len(digits) > 3 || digits[0] == '0' || scanDigits(digits, 0) != len(digits) {
		return false
	}
	groups, end := 0, p.at
	for end+1 < len(p.tokens) && p.tokens[end].kind == tComma && p.tokens[end].start == p.tokens[end-1].end {
		t := p.tokens[end+1]
		if t.kind != tNumber && t.kind != tDigits || t.start != p.tokens[end].end || scanMantissa(p.read(t), 0) != 3 || scanDigits(p.read(t), 0) != 3 {
			break
		}
		digits += p.read(t)[:3]
		groups++
		end += 2
		if t.kind == tDigits {
			break
		}
	}
	if groups == 0 {
		return false
	}
	last := p.tokens[end-1]
	span := Span{n.Span.Start, last.start + 3}
	if groups == 1 {
		decimal := n.Number.Text + "." + digits[len(n.Number.Text):]
		p.fail(span, fmt.Sprintf("`%s` can be read in two ways: digits are not grouped, and the decimal sign is a point", p.text[span.Start:span.End]),
			p.repair("write `"+digits+"`", span, digits), p.repair("write `"+decimal+"`", span, decimal))
	} else {
		p.fail(span, "digits are not grouped", p.only("write `"+digits+"`", span, digits))
	}
	p.failed = false
	p.at = end
	n.Number = Word{span, digits}
	n.Span.End = last.end
	p.unitInside(n, last, 3)
	return true
}

// unitInside reads the unit that sticks to a number whose token is consumed.
func (p *parser) unitInside(n *NumberExpr, t token, split int) {
	rest := p.read(t)[split:]
	if rest == "" {
		return
	}
	if f := knownFactor(Word{Span{t.start + split, t.end}, rest}); f.Known {
		p.unitFrom(n, f)
	}
}

// slashedTolerance reports "+/-", which is written ±.
func (p *parser) slashedTolerance(t token) {
	if !strings.HasPrefix(p.read(t), "+/") {
		return
	}
	end := t.end
	for end < len(p.text) && p.text[end] == ' ' {
		end++
	}
	p.fail(t.span(), "a tolerance is written with `±` or `+-`", p.only("write `±`", Span{t.start, end}, "±"))
	p.failed = false
}

// bareJoin reports a "-" in a path without a box: a part that stands in none,
// or two nodes joined by nothing. It says whether it did.
func (p *parser) bareJoin() bool {
	name, after := p.peekAt(1), p.peekAt(2)
	if !p.is(tMinus) || name.kind != tWord && name.kind != tDigits && name.kind != tNumber {
		return false
	}
	t := p.peek()
	if after.kind == tMinus || after.kind == tOpenBox {
		span := Span{p.last(), after.end}
		write, stop := " -["+p.read(name)+"]-", "]-"
		if after.kind == tOpenBox {
			write, stop = " -["+p.read(name)+"]-[", "]-["
		}
		p.fail(Span{t.start, after.end}, "a part in a path stands in a box: in -[R1]- out",
			p.only("write `-["+p.read(name)+stop+"`", span, write))
		return true
	}
	p.joinNodes(Span{p.last(), name.start}, Span{t.start, name.end}, " ", " ")
	return true
}

// joinNodes reports two nodes with a bare "-" between them.
func (p *parser) joinNodes(gap, span Span, left, right string) {
	if p.joined++; p.wire == "" {
		for p.wire = "Wjoin"; strings.Contains(p.text, p.wire); {
			p.wire += "_"
		}
	}
	wire := p.wire
	if p.joined > 1 {
		wire = fmt.Sprintf("%s%d", p.wire, p.joined)
	}
	write := "-[wire " + wire + "]-"
	p.fail(span, "two nodes are joined by one name for both, or by a wire in a box: in -[wire W1]- out",
		p.only("write `"+write+"`", gap, left+write+right))
}
