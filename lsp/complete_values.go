package lsp

import (
	"fmt"
	"slices"
	"strings"
	"unicode"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// usualUnits are the sizes in which each unit is usual on a drawing (common
// practice, no source).
var usualUnits = map[string][]string{
	"Ω": {"Ω", "kΩ", "MΩ", "mΩ"}, "F": {"µF", "nF", "pF", "mF", "F"}, "H": {"µH", "mH", "nH", "H"},
	"V": {"V", "mV", "µV", "kV"}, "A": {"A", "mA", "µA", "kA"}, "S": {"S", "mS", "µS"},
	"s": {"s", "ms", "µs", "ns"}, "Hz": {"Hz", "kHz", "MHz"}, "W": {"W", "mW", "kW"}, "J": {"J", "mJ", "µJ"},
	"C": {"C", "µC", "nC"}, "Wb": {"Wb", "mWb"}, "rad": {"rad", "°"},
}

// allUnits is the order in which units are offered where any may stand.
var allUnits = []string{"Ω", "F", "H", "V", "A", "s", "Hz", "S", "W", "J", "C", "Wb", "rad"}

// unitNames are the units' names (SI Brochure, 9th edition, tables 2 and 4).
var unitNames = map[string]string{
	"Ω": "ohm", "F": "farad", "H": "henry", "V": "volt", "A": "ampere", "S": "siemens", "s": "second",
	"Hz": "hertz", "W": "watt", "J": "joule", "C": "coulomb", "Wb": "weber", "rad": "radian",
}

// prefixNames are the names of the prefixes that are usual (ibid., table 7).
var prefixNames = map[string]string{"p": "pico", "n": "nano", "µ": "micro", "m": "milli", "k": "kilo", "M": "mega"}

// units offers the units that fit, the expected ones first.
func (c *completer) units(wanted []string) {
	list := wanted
	if len(list) == 0 {
		list = c.unitsHere()
	}
	for _, base := range list {
		sizes := usualUnits[base]
		if sizes == nil {
			sizes = []string{base}
		}
		for _, u := range sizes {
			c.oneUnit(u, base)
		}
	}
}

func (c *completer) oneUnit(symbol, base string) {
	c.add(item{
		label: symbol, kind: protocol.CompletionItemKindUnit, detail: unitName(symbol, base),
		filter: strings.NewReplacer("µ", "u", "Ω", "ohm").Replace(symbol), rank: 0,
	})
}

// unitsHere are the units that the text around asks for, all of them where it
// does not say.
func (c *completer) unitsHere() []string {
	before := strings.Fields(c.file.Text[c.file.Lines.Span(c.file.Lines.Line(c.offset)).Start:c.context.Replace.Start])
	if n := len(before); n >= 2 && slices.Contains([]string{"at", "from", "to", "before"}, before[n-2]) {
		return []string{"Hz", "s", "rad/s"}
	}
	if e, ok := c.checked.ExpectedAt(c.file, c.offset); ok && usualUnits[e.Dimension.Unit()] != nil {
		return []string{e.Dimension.Unit()}
	}
	return append(append([]string{}, allUnits...), "dB", "%", "ppm")
}

func unitName(symbol, base string) string {
	switch symbol { // the two whose vowels merge
	case "kΩ":
		return "kilohm"
	case "MΩ":
		return "megohm"
	}
	return prefixNames[strings.TrimSuffix(symbol, base)] + unitNames[base]
}

// decades are the powers of ten of preferred values that are offered, per
// kind: the unit of the number, and zeros or decimals by which it is moved.
var decades = map[dialect.Kind][]string{
	dialect.Resistor: {"kΩ", "Ω", "MΩ"}, dialect.Capacitor: {"nF", "µF", "pF"}, dialect.Inductor: {"µH", "mH", "nH"},
}

// values offers preferred values for R, L and C, waveforms for sources, and
// the words that stand for values of the other kinds.
func (c *completer) values(kind dialect.Kind) {
	switch kind {
	case dialect.Resistor, dialect.Capacitor, dialect.Inductor:
		c.preferred(kind)
	case dialect.VoltageSource:
		c.waveforms("V")
	case dialect.CurrentSource:
		c.waveforms("A")
	case dialect.OpAmp:
		c.add(item{label: "ideal", kind: protocol.CompletionItemKindKeyword})
		c.add(item{label: "10 MHz", kind: protocol.CompletionItemKindValue, detail: "gain-bandwidth product", snippet: "${1:10 MHz}, gain ${2:110 dB}"})
	case dialect.Switch:
		c.add(item{label: "opens at", kind: protocol.CompletionItemKindKeyword, snippet: "opens at ${1:0 s}", insert: "opens at "})
		c.add(item{label: "closes at", kind: protocol.CompletionItemKindKeyword, snippet: "closes at ${1:0 s}", insert: "closes at "})
	case dialect.Transformer:
		c.add(item{label: "1 : 1", kind: protocol.CompletionItemKindValue, detail: "turns ratio", snippet: "${1:1} : ${2:1}"})
	case dialect.Coupling:
		c.add(item{label: "0.98", kind: protocol.CompletionItemKindValue, detail: "coupling coefficient"})
	}
}

// preferred offers values of the preferred series that continue the digits
// typed: "4" gives 4.7 and 47, in the units usual for the kind.
func (c *completer) preferred(kind dialect.Kind) {
	text := c.file.Text
	start := c.context.Replace.Start
	for start > 0 && (text[start-1] == '.' || text[start-1] >= '0' && text[start-1] <= '9') {
		start--
	}
	typed := text[start:c.context.Replace.Start]
	switch {
	case start > 0 && (text[start-1] == '_' || text[start-1] >= 'A'), c.context.Typed != "":
		return // the digits end a name, or a unit is being typed
	case typed == "" && strings.HasSuffix(strings.TrimRight(text[:start], " "), strings.TrimSpace(c.numberBefore(start))):
		return // a number stands there already
	}
	for rank, u := range decades[kind] {
		for _, m := range c.seriesValues(kind) {
			for _, value := range []string{m, moved(m, 1), moved(m, 2)} {
				if typed == "" && value != m || !strings.HasPrefix(value, typed) || value == typed {
					continue
				}
				i := item{label: value + " " + u, kind: protocol.CompletionItemKindValue, detail: "preferred value", rank: 1 + rank}
				if typed != "" {
					i.from, i.rank = start, 3+rank
				}
				c.add(i)
			}
		}
	}
}

// numberBefore is the number that stands before an offset, past spaces; a word
// that cannot be one where there is none.
func (c *completer) numberBefore(offset int) string {
	text := strings.TrimRight(c.file.Text[:offset], " ")
	start := len(text)
	for start > 0 && (text[start-1] == '.' || text[start-1] >= '0' && text[start-1] <= '9') {
		start--
	}
	if start == len(text) {
		return "no number"
	}
	return text[start:]
}

// moved multiplies a decimal by a power of ten, as digits.
func moved(decimal string, places int) string {
	whole, fraction, _ := strings.Cut(decimal, ".")
	for range places {
		if fraction == "" {
			whole += "0"
			continue
		}
		whole, fraction = whole+fraction[:1], fraction[1:]
	}
	if fraction == "" {
		return whole
	}
	return whole + "." + fraction
}

// tolerances offers the usual tolerances (IEC 60062, table of letter codes).
func (c *completer) tolerances() {
	for i, t := range []string{"±1 %", "±5 %", "±10 %", "±20 %", "±0.1 %", "±0.5 %", "±2 %"} {
		c.add(item{label: t, kind: protocol.CompletionItemKindValue, detail: "tolerance", filter: "+-" + t, rank: 4 + i/3})
	}
}

// waveforms offers templates of sources in time.
func (c *completer) waveforms(unit string) {
	template := func(label, insert, detail string) {
		i := item{label: label, kind: protocol.CompletionItemKindSnippet, detail: detail, rank: 1}
		i.snippet = strings.ReplaceAll(insert, "UNIT", unit)
		i.insert = plainSnippet(i.snippet)
		c.add(i)
	}
	template("constant", "${1:5 UNIT}", "for ever")
	template("step", "${1:5 UNIT} * u(t)", "from t = 0 on")
	template("delayed step", "${1:5 UNIT} * u(t - ${2:1 ms})", "from a time on")
	template("pulse", "${1:5 UNIT} * (u(t) - u(t - ${2:1 ms}))", "between two times")
	template("ramp", "${1:1 UNIT/ms} * t * u(t)", "rising from t = 0 on")
	template("sine", "${1:1 UNIT} * sin(2*pi*${2:1 kHz}*t)", "standing for ever")
	template("sine burst", "${1:1 UNIT} * sin(2*pi*${2:1 kHz}*t) * u(t)", "from t = 0 on")
	template("exponential", "${1:5 UNIT} * exp(-t/${2:1 ms}) * u(t)", "decaying from t = 0 on")
	template("impulse", "${1:1 UNIT*s} * delta(t)", "a unit impulse at t = 0, scaled")
}

// plainSnippet is a snippet with its placeholders filled in.
func plainSnippet(snippet string) string {
	var b strings.Builder
	for i := 0; i < len(snippet); i++ {
		switch {
		case snippet[i] == '\\' && i+1 < len(snippet):
			i++
			b.WriteByte(snippet[i])
		case strings.HasPrefix(snippet[i:], "${"):
			end := strings.IndexByte(snippet[i:], '}')
			_, text, _ := strings.Cut(snippet[i+2:i+end], ":")
			b.WriteString(text)
			i += end
		case snippet[i] == '$' && i+1 < len(snippet) && unicode.IsDigit(rune(snippet[i+1])):
			i++
		default:
			b.WriteByte(snippet[i])
		}
	}
	return b.String()
}

// seriesValues are the mantissas of the series that the file prefers for a
// kind, of E12 where it prefers none.
func (c *completer) seriesValues(kind dialect.Kind) []string {
	values, _ := dialect.SeriesValues("E12")
	for _, st := range c.file.Statements {
		if p, ok := st.(*dialect.PreferStatement); ok && p.Kind == kind {
			if chosen, ok := dialect.SeriesValues(p.Series.Text); ok {
				values = chosen
			}
		}
	}
	mantissas := make([]string, 0, len(values))
	for _, v := range values {
		digits := itoa(v)
		mantissas = append(mantissas, strings.TrimRight(strings.TrimRight(digits[:1]+"."+digits[1:], "0"), "."))
	}
	return mantissas
}

func (c *completer) series() {
	for n := 3; n <= 192; n *= 2 {
		c.add(item{label: fmt.Sprintf("E%d", n), kind: protocol.CompletionItemKindEnumMember, detail: fmt.Sprintf("%d values a decade", n)})
	}
}
