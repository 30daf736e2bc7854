package dialect

import (
	"unicode"
	"unicode/utf8"
)

// Classes of ASCII characters, for the scanner's inner loops.
const (
	classOther = iota
	classSpace
	classLetter // letters and _
	classDigit
)

var asciiClass = func() (table [utf8.RuneSelf]uint8) {
	for c := range table {
		switch {
		case c == ' ' || c == '\t' || c == '\v' || c == '\f':
			table[c] = classSpace
		case c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c == '_':
			table[c] = classLetter
		case c >= '0' && c <= '9':
			table[c] = classDigit
		}
	}
	return table
}()

// markTokens maps single ASCII marks to their tokens.
var markTokens = [utf8.RuneSelf]tokenKind{
	'[': tOpen, ']': tClose, '(': tParen, ')': tParenClose, '{': tBrace, '}': tBraceClose,
	',': tComma, '|': tBar, '=': tEquals, '+': tPlus, '-': tMinus, '*': tStar, '/': tSlash,
	'^': tCaret, '<': tLess, '>': tGreater, ':': tColon, '.': tDot, '%': tUnitMark,
}

// scanLine appends the tokens of text[at:end], which holds no line end, and
// returns the offset of its comment, or -1.
func scanLine(text string, at, end int, tokens []token) ([]token, int) {
	line := text[:end]
	for at < end {
		c := line[at]
		if c >= utf8.RuneSelf {
			var t token
			if t, at = scanWide(line, at); t.kind != tEnd {
				tokens = append(tokens, t)
			}
			continue
		}
		start := at
		switch asciiClass[c] {
		case classSpace:
			at++
			continue
		case classLetter:
			at = scanWord(line, at)
			tokens = append(tokens, token{tWord, start, at})
			continue
		case classDigit:
			var kind tokenKind
			kind, at = scanNumber(line, at)
			tokens = append(tokens, token{kind, start, at})
			continue
		}
		if c == '#' {
			return tokens, at
		}
		var kind tokenKind
		kind, at = scanMark(line, at)
		tokens = append(tokens, token{kind, start, at})
	}
	return tokens, -1
}

// scanMark scans a token that starts with an ASCII mark.
func scanMark(line string, at int) (tokenKind, int) {
	c := line[at]
	var next byte
	if at+1 < len(line) {
		next = line[at+1]
	}
	switch c {
	case '-':
		if next == '[' {
			return tOpenBox, at + 2
		}
	case '+':
		if next == '/' {
			if n := minusAt(line, at+2); n > 0 {
				return tPlusMinus, at + 2 + n // a slip of ±
			}
		}
		if n := minusAt(line, at+1); n > 0 && (at+1+n >= len(line) || line[at+1+n] != '[') {
			return tPlusMinus, at + 1 + n
		}
	case '|':
		if next == '|' {
			return tBars, at + 2
		}
	case '/':
		if next == '/' {
			return tSlashes, at + 2
		}
	case '<':
		if next == '=' {
			return tLessEq, at + 2
		}
	case '>':
		if next == '=' {
			return tGreaterEq, at + 2
		}
	case '.':
		if next >= '0' && next <= '9' {
			return scanNumber(line, at)
		}
	case '"':
		for i := at + 1; i < len(line); i++ {
			if line[i] == '"' {
				return tString, i + 1
			}
		}
		return tString, len(line)
	}
	if kind := markTokens[c]; kind != tEnd {
		return kind, at + 1
	}
	return tBad, scanBad(line, at)
}

// minusAt gives the length of the minus sign at an offset, 0 if there is none.
func minusAt(line string, at int) int {
	if at < len(line) && line[at] == '-' {
		return 1
	}
	if at+3 <= len(line) && line[at:at+3] == "−" {
		return 3
	}
	return 0
}

// scanWord gives the end of the word that starts at an offset.
func scanWord(line string, at int) int {
	for at < len(line) {
		c := line[at]
		if c < utf8.RuneSelf {
			if asciiClass[c] < classLetter {
				return at
			}
			at++
			continue
		}
		r, size := utf8.DecodeRuneInString(line[at:])
		if r == utf8.RuneError || !unicode.IsLetter(r) {
			return at
		}
		at += size
	}
	return at
}

// scanNumber scans a token that starts with a digit or with "." and a digit.
func scanNumber(line string, at int) (tokenKind, int) {
	at = scanMantissa(line, at)
	end := scanWord(line, at)
	if end == at {
		return tNumber, at
	}
	return tDigits, end
}

// scanMantissa gives the end of the number that starts at an offset: digits,
// fraction and exponent.
func scanMantissa(line string, at int) int {
	at = scanDigits(line, at)
	if at+1 < len(line) && line[at] == '.' && line[at+1] >= '0' && line[at+1] <= '9' {
		at = scanDigits(line, at+1)
	}
	if at < len(line) && (line[at] == 'e' || line[at] == 'E') {
		exponent := at + 1
		if exponent < len(line) && line[exponent] == '+' {
			exponent++
		} else {
			exponent += minusAt(line, exponent)
		}
		if end := scanDigits(line, exponent); end > exponent {
			return end
		}
	}
	return at
}

// scanDigits gives the end of the digits at an offset.
func scanDigits(line string, at int) int {
	for at < len(line) && line[at] >= '0' && line[at] <= '9' {
		at++
	}
	return at
}

// scanWide scans a token that starts with a character outside ASCII. Spaces
// give tEnd.
func scanWide(line string, at int) (token, int) {
	r, size := utf8.DecodeRuneInString(line[at:])
	end := at + size
	switch {
	case r == utf8.RuneError && size <= 1:
		end = scanBad(line, at)
		return token{tBad, at, end}, end
	case r == '−':
		if end < len(line) && line[end] == '[' {
			return token{tOpenBox, at, end + 1}, end + 1
		}
		return token{tMinus, at, end}, end
	case r == '±':
		return token{tPlusMinus, at, end}, end
	case r == '°':
		return token{tUnitMark, at, end}, end
	case isSpace(r):
		return token{tEnd, at, end}, end
	}
	if _, ok := foreignMarks[r]; ok {
		return token{tForeign, at, end}, end
	}
	if unicode.IsLetter(r) {
		end = scanWord(line, at)
		return token{tWord, at, end}, end
	}
	end = scanBad(line, at)
	return token{tBad, at, end}, end
}

// scanBad gives the end of a run of characters that no token starts with. It
// takes at least one character.
func scanBad(line string, at int) int {
	for first := true; at < len(line); first = false {
		r, size := utf8.DecodeRuneInString(line[at:])
		if !first && !badRune(r, size) {
			return at
		}
		at += size
	}
	return at
}

// badRune says that a character starts no token and is no space.
func badRune(r rune, size int) bool {
	switch {
	case r == utf8.RuneError && size <= 1:
		return true
	case r < utf8.RuneSelf:
		return asciiClass[r] == classOther && markTokens[r] == tEnd && r != '#' && r != '"'
	case r == '−' || r == '±' || r == '°':
		return false
	}
	_, foreign := foreignMarks[r]
	return !foreign && !unicode.IsLetter(r) && !isSpace(r)
}
