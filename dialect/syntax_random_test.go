package dialect

import (
	"fmt"
	"strings"

	"pgregory.net/rapid"
)

// textMaker draws a sound file with random spacing, so that the tidy form
// can be compared with what was drawn.
type textMaker struct {
	*rapid.T
	depth int
	value bool // in a part's value, where a percentage would be a tolerance
}

// pick draws one of several texts.
func (m *textMaker) pick(list ...string) string { return rapid.SampledFrom(list).Draw(m.T, "pick") }

// chance is true in one of n draws.
func (m *textMaker) chance(n int) bool { return rapid.IntRange(1, n).Draw(m.T, "chance") == 1 }

// gap draws a space that may be left out, doubled, or of another kind.
func (m *textMaker) gap() string { return m.pick("", " ", "  ", "\t", "\u00a0", " \u2009") }

// space draws a space that may not be left out.
func (m *textMaker) space() string { return m.pick(" ", "  ", "\t", "\u202f") }

func (m *textMaker) name() string {
	return m.pick("R1", "C_2", "mid", "Vs", "x", "m", "A", "Ts", "knee", "to", "at", "in", "V", "ü", "e1", "s2")
}

func (m *textMaker) node() string {
	return m.pick("hull", "in", "3V3", "12", "0", "1e5", "mid", "out", "tell", "let", "port", "1e", "2k2", "Ω")
}

func (m *textMaker) number() string {
	return m.pick("1", "2.20", ".5", "4.7e-9", "1E3", "0", "100", "4.7e−9", "10", "007")
}

func (m *textMaker) unit() string {
	symbol := m.pick("V", "A", "Ω", "ohm", "kohm", "\u2126", "µF", "uF", "\u03bcF", "ms", "s", "Hz", "kHz", "rad", "deg", "°", "%", "ppm", "dB", "dBuV", "mH", "Wb", "das", "Ts", "m\u2126")
	if m.value && (symbol == "%" || symbol == "ppm") {
		symbol = "V"
	}
	unit := symbol + m.pick("", "", "", "^2", "^-1", "^-12")
	for m.chance(4) {
		unit += m.pick("*", "/") + m.pick("s", "ms", "V", "A", "rad", "ohm") + m.pick("", "", "^2")
	}
	if m.chance(12) {
		return "1/" + m.pick("s", "ms^2", "V*s")
	}
	return unit
}

func (m *textMaker) quantity() string {
	n := m.number()
	if m.chance(2) {
		return n
	}
	unit := m.unit()
	sep := m.pick("", " ", "\u00a0", "\t")
	if strings.HasPrefix(unit, "1/") || unit[0] == 'E' || unit[0] == 'e' {
		sep = " "
	}
	return n + sep + unit
}

// expr draws an expression. Around * / ^ it leaves a space where an operand
// could be mistaken for a unit's next factor.
func (m *textMaker) expr() string {
	m.depth++
	defer func() { m.depth-- }()
	if m.depth > 4 {
		return m.operand()
	}
	x := m.pick("", "", "-", "- ", "+") + m.operand()
	for range rapid.IntRange(0, 3).Draw(m.T, "operators") {
		switch m.pick("+", "*", "^") {
		case "+":
			x += m.gap() + m.plus() + m.space() + m.operand()
		case "*":
			x += m.space() + m.pick("*", "/", "*-", "/ +") + m.gap() + m.operand()
		case "^":
			x = m.pick("a", "(1 + x)", "2 V", "H(3)", "v[in]", "7") + " ^" + m.gap() + m.pick("2", "-3", "x", "2^-y", "(a*b)")
		}
	}
	return x
}

// plus draws an addition or subtraction; in a part's value +- is a tolerance.
func (m *textMaker) plus() string {
	op := m.pick("+", "-", "−", "+ -", "+-", "- +")
	if m.value && op == "+-" {
		return "+ -"
	}
	return op
}

func (m *textMaker) operand() string {
	switch rapid.IntRange(0, 6).Draw(m.T, "operand") {
	case 0, 1:
		return m.quantity()
	case 2:
		return m.pick("R1", "x", "pi", "t", "s", "F1.C2", "knee", "m", "A")
	case 3:
		return m.pick("v", "i", "z", "y", "p") + "[" + m.gap() + m.pick("out", "F1.mid", "F1.5", "R1", "3V3", "U1.output") + m.gap() + "]"
	case 4:
		return "v[" + m.node() + m.gap() + "," + m.gap() + m.node() + "]"
	case 5:
		return "(" + m.gap() + m.expr() + m.gap() + ")"
	default:
		args := m.expr()
		for m.chance(3) {
			args += m.gap() + ", " + m.expr()
		}
		return m.pick("sin", "max", "H", "u", "v[out]", "zir") + m.pick("", "", " ") + "(" + args + ")"
	}
}

func (m *textMaker) tolerance() string {
	return m.pick("", "", " ±5 %", "+-10%", " +20 % -10 %", "  ± 0.5 pF", " -5%", "+ 50 ppm")
}

// part draws a part statement; in a box it must stand on one line.
func (m *textMaker) part(inline bool) string {
	m.value = true
	defer func() { m.value = false }()
	comma := func() string {
		if !inline && m.chance(3) {
			return ", # so\n   # and so\n" + m.pick("      ", "\t\t")
		}
		return m.gap() + "," + m.gap()
	}
	eq := m.gap() + "=" + m.gap()
	name := m.space() + m.name()
	switch rapid.IntRange(0, 7).Draw(m.T, "kind") {
	case 0:
		return "resistor" + name + eq + m.pick("4k7", "0R47", "4K7", m.expr()) + m.tolerance() + m.pick("", comma()+"rated 0.25 W"+comma()+"rated 50V")
	case 1:
		return "capacitor" + name + eq + m.pick("100n", "3p5", m.expr()) + m.tolerance() + m.pick("", comma()+"initially"+m.space()+m.expr())
	case 2:
		return "voltage" + m.space() + "source" + name + eq + m.expr()
	case 3:
		return "op amp" + name + eq + m.pick("ideal", "8MHz") + comma() + "+" + m.gap() + "at a" + comma() + "-" + m.gap() + "at b" + comma() + "output at c" + m.pick("", comma()+"gain 100dB")
	case 4:
		return "transformer" + name + eq + "10" + m.gap() + ":" + m.gap() + m.expr() + comma() + "primary at a b" + comma() + "secondary at c 3V3"
	case 5:
		return "switch" + name + eq + "opens at 0s" + comma() + "closes at " + m.expr() + m.pick("", comma()+"resistance 5 mohm")
	case 6:
		return "coupling" + name + eq + ".98" + m.tolerance() + comma() + "between La Lb"
	}
	return "wire" + name
}

func (m *textMaker) path() string {
	path := m.node() + m.gap()
	for range rapid.IntRange(1, 3).Draw(m.T, "chains") {
		for range rapid.IntRange(1, 2).Draw(m.T, "groups") {
			path += m.pick("-[", "−[") + m.gap() + m.box()
			if m.chance(3) {
				path += m.gap() + "||" + m.gap() + m.box()
			}
			path += m.gap() + "]" + m.gap()
		}
		path += m.pick("-", "−", "- ") + m.pick("hull", "in", "mid", "3V3", "12", "let") + m.gap()
	}
	return path
}

func (m *textMaker) box() string {
	switch rapid.IntRange(0, 3).Draw(m.T, "box") {
	case 0:
		return m.part(true)
	case 1:
		return "part" + m.space() + "Q = Cell with C" + m.gap() + "=" + m.gap() + m.expr()
	}
	return m.name()
}

func (m *textMaker) qualifiers() string {
	q := ""
	for m.chance(3) {
		q += m.space() + m.pick("at "+m.expr(), "before 1ms", "from 1 Hz to "+m.expr(), "to 3 s", "with S1 open", "without R1 ,C2", "from 3 s")
	}
	return q
}

func (m *textMaker) statement(body bool) string {
	n := 7
	if body {
		n = 3
	}
	switch rapid.IntRange(0, n).Draw(m.T, "statement") {
	case 0:
		return "let" + m.space() + m.name() + m.gap() + "=" + m.gap() + m.expr() + m.pick("", " in Hz", " in rad/s")
	case 1:
		return m.part(false)
	case 2:
		return m.path()
	case 3:
		return "require" + m.space() + m.expr() + m.gap() + m.pick("<=", ">", ">=", "<") + m.gap() + m.expr() + m.qualifiers() + m.pick("", " nominal")
	case 4:
		return "tell" + m.space() + m.pick("initial", "poles", "poles of H", "zeros of "+m.expr(), "matrix s[ a ,b ]", "matrix abcd[a,b] reference 50ohm", m.expr(), m.expr()) + m.qualifiers()
	case 5:
		return m.pick("ground 0", "ground  hull", "start  steady", "prefer resistor   E96", `use  "a b.plight"`, `allow touch-voltage  because "x  y"`, "port p at  1 0")
	case 6:
		return "part Q" + m.gap() + "=" + m.gap() + "Cell" + m.pick("", " with C = "+m.expr()+m.gap()+", D=2") + m.pick("", " , a at 1,b at 2", ",\n    a at 1")
	}
	return "function H" + m.gap() + "=" + m.expr()
}

// file draws a whole file.
func (m *textMaker) file() string {
	var b strings.Builder
	line := func(indent, s string) {
		fmt.Fprintf(&b, "%s%s%s\n", indent, s, m.pick("", "", "  ", " # note", "#note  "))
	}
	for range rapid.IntRange(0, 8).Draw(m.T, "lines") {
		switch rapid.IntRange(0, 9).Draw(m.T, "line") {
		case 0:
			b.WriteString(m.pick("\n", "\n\n\n", "# comment  \n", "## doc\n", "   # indented\n"))
		case 1:
			line("", m.pick("let x = (1", "oops", "a -[R1//C]- b", "resistor R = --5 Ω", "in - [R] - out", "resistor R = 5 Ω,", "tell v[R1", "}", "let x = 10 000"))
		case 2:
			line("", "subnetwork F"+m.gap()+"( a"+m.gap()+", b )"+m.pick("", " with C="+m.expr()+", D = 2")+m.gap()+"{")
			for range rapid.IntRange(0, 3).Draw(m.T, "body") {
				b.WriteString(m.pick("", "", "\n", "  # inside\n"))
				line(m.pick("", "  ", "      "), m.statement(true))
			}
			line(m.pick("", "  "), "}")
		default:
			line("", m.statement(false))
		}
	}
	text := b.String()
	if m.chance(6) {
		text = strings.ReplaceAll(text, "\n", "\r\n")
	}
	return text
}
