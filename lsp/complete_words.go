package lsp

import (
	"slices"
	"strings"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// partTemplates are the statements that make a part of each kind, with places
// to fill in; NAME is replaced by a free name.
var partTemplates = []struct {
	kind     dialect.Kind
	stem     string
	template string
}{
	{dialect.Resistor, "R", "resistor ${1:NAME} = ${2:10 kΩ}"},
	{dialect.Inductor, "L", "inductor ${1:NAME} = ${2:10 mH}"},
	{dialect.Capacitor, "C", "capacitor ${1:NAME} = ${2:100 nF}"},
	{dialect.Impedance, "Z", "impedance ${1:NAME} = ${2:1 Ω + 1 mH*s}"},
	{dialect.Admittance, "Y", "admittance ${1:NAME} = ${2:1 mS}"},
	{dialect.VoltageSource, "Vs", "voltage source ${1:NAME} = ${2:5 V}"},
	{dialect.CurrentSource, "Is", "current source ${1:NAME} = ${2:1 mA}"},
	{dialect.OpAmp, "U", "op amp ${1:NAME} = ${2:ideal}, + at ${3:plus}, - at ${4:minus}, output at ${5:out}"},
	{dialect.Transformer, "T", "transformer ${1:NAME} = ${2:1 : 1}, primary at ${3:a} ${4:b}, secondary at ${5:c} ${6:d}"},
	{dialect.Coupling, "K", "coupling ${1:NAME} = ${2:0.98}, between ${3:L1} ${4:L2}"},
	{dialect.Switch, "S", "switch ${1:NAME} = ${2|closes,opens|} at ${3:0 s}"},
	{dialect.Wire, "W", "wire ${1:NAME}"},
}

// twoTerminal are the kinds that fit into a box.
var twoTerminal = []dialect.Kind{
	dialect.Resistor, dialect.Inductor, dialect.Capacitor, dialect.Impedance, dialect.Admittance,
	dialect.VoltageSource, dialect.CurrentSource, dialect.Switch, dialect.Wire,
}

// kind offers a part statement.
func (c *completer) kind(kind dialect.Kind, rank int) {
	for _, t := range partTemplates {
		if t.kind == kind {
			c.add(item{
				label: kind.String(), kind: protocol.CompletionItemKindKeyword, detail: "part",
				snippet: strings.ReplaceAll(t.template, "NAME", c.nextName(t.stem)), insert: kind.String() + " ",
				doc: wordDocs[kind.String()], rank: rank,
			})
		}
	}
}

// statementTemplates are the other statements.
var statementTemplates = []struct{ word, template string }{
	{"ground", "ground ${1:hull}"},
	{"let", "let ${1:name} = ${2:1 kHz}"},
	{"port", "port ${1:name} at ${2:plus} ${3:minus}"},
	{"function", "function ${1:H} = ${2:v[out]/Vs}"},
	{"tell", "tell $1"},
	{"require", "require $1"},
	{"start", "start ${1|steady,rest|}"},
	{"prefer", "prefer ${1|resistor,capacitor,inductor|} ${2:E24}"},
	{"allow", "allow ${1:code} because \"${2:reason}\""},
	{"use", "use \"$1\""},
	{"subnetwork", "subnetwork ${1:Name} (${2:a}, ${3:b}) {\n  $0\n}"},
	{"part", "part ${1:X1} = ${2:Subnetwork}"},
}

// statements offers the words that a statement can begin with.
func (c *completer) statements(words []string) {
	for _, t := range statementTemplates {
		if !slices.Contains(words, t.word) {
			continue
		}
		c.add(item{
			label: t.word, kind: protocol.CompletionItemKindKeyword, snippet: t.template, insert: t.word + " ",
			doc: wordDocs[t.word], rank: 1,
		})
	}
}

// kinds offers the kinds of part: a whole statement at the start of a line, the
// word alone elsewhere.
func (c *completer) kinds(h *dialect.Hole) {
	for _, t := range partTemplates {
		if len(h.Words) > 0 && !slices.Contains(h.Words, t.kind.String()) {
			continue
		}
		if c.context.Statement == nil {
			c.kind(t.kind, 0)
		} else {
			c.words([]string{t.kind.String()}, "kind")
		}
	}
}

// nodes offers nodes; at the start of a statement, the beginning of a path.
func (c *completer) nodes() {
	if c.context.Statement != nil {
		c.names(0, dialect.NodeSymbol)
		return
	}
	for _, s := range c.symbols() {
		if s.Sort == dialect.NodeSymbol {
			c.add(item{
				label: s.Name + " -[", kind: protocol.CompletionItemKindSnippet, detail: "a path from this node",
				snippet: snippetText(s.Name) + " -[${1:R1}]- ${2:node}", insert: s.Name + " -[", filter: s.Name, rank: 2,
			})
		}
	}
}

// marks offers the marks of the grammar that are worth a line in a list.
func (c *completer) marks(marks []string) {
	if text := c.file.Text[:c.context.Replace.Start]; slices.Contains(marks, "-[") {
		line := strings.TrimSpace(text[c.file.Lines.Span(c.file.Lines.Line(c.offset)).Start:])
		if s := c.checked.Lookup(c.file, c.offset, line); s == nil || s.Sort != dialect.NodeSymbol {
			return // the word is the beginning of another statement
		}
	}
	for _, m := range marks {
		if m == "-[" || m == "||" {
			c.add(item{label: m, kind: protocol.CompletionItemKindOperator, detail: map[string]string{"-[": "a box in series", "||": "in parallel"}[m], rank: 4, again: true})
		}
	}
}

// words offers words of the grammar.
func (c *completer) words(words []string, detail string) {
	for _, w := range words {
		c.add(item{label: w, kind: protocol.CompletionItemKindKeyword, detail: detail, doc: wordDocs[w], rank: 1})
	}
}

// qualifiers offers what may follow a question or limit.
func (c *completer) qualifiers(words []string) {
	templates := map[string]string{
		"at": "at ${1:1 kHz}", "before": "before ${1:0 s}", "from": "from ${1:10 Hz} to ${2:1 kHz}", "to": "to ${1:10 ms}",
		"with": "with ${1:S1} ${2|open,closed|}", "without": "without ${1:C1}",
	}
	if len(words) == 0 {
		words = []string{"at", "before", "from", "to", "with", "without"}
		if _, limit := c.context.Statement.(*dialect.RequireStatement); limit {
			words = append(words, "nominal")
		}
	}
	for _, w := range words {
		i := item{label: w, kind: protocol.CompletionItemKindKeyword, detail: "qualifier", doc: wordDocs[w], rank: 1}
		if t := templates[w]; t != "" {
			i.snippet, i.insert = t, w+" "
		}
		c.add(i)
	}
}

// questions offers what can be asked.
func (c *completer) questions() {
	for _, q := range []struct{ label, template, doc string }{
		{"z[…]", "z[${1:port}]", "the impedance of a port or node pair"},
		{"v[…]", "v[${1:node}]", "a voltage in time"},
		{"i[…]", "i[${1:part}]", "a current in time"},
		{"thevenin[…]", "thevenin[${1:port}]", "the Thévenin equivalent of a port"},
		{"norton[…]", "norton[${1:port}]", "the Norton equivalent of a port"},
		{"matrix …", "matrix ${1|z,y,h,g,abcd,s|}[${2:in}, ${3:out}]", "a two-port parameter set"},
		{"poles of …", "poles of ${1:H}", "the poles of a function"},
		{"zeros of …", "zeros of ${1:H}", "the zeros of a function"},
	} {
		c.add(item{
			label: q.label, kind: protocol.CompletionItemKindSnippet, detail: q.doc, snippet: q.template,
			insert: plainSnippet(q.template), filter: strings.TrimRight(q.label, "[…] "), rank: 1,
		})
	}
	c.words([]string{"poles", "initial"}, "question")
	c.names(0, dialect.FunctionSymbol)
	c.calls(nil)
	c.quantities("vipzy")
}

// quantities offers letters of quantities.
func (c *completer) quantities(letters string) {
	what := map[rune]string{'v': "voltage", 'i': "current", 'p': "power absorbed", 'z': "impedance", 'y': "admittance"}
	for _, letter := range letters {
		c.add(item{
			label: string(letter) + "[", kind: protocol.CompletionItemKindOperator, detail: what[letter],
			snippet: string(letter) + "[$1]", rank: 2, again: true,
		})
	}
}

// mathematics are the functions that take numbers, waveformCalls those that
// make waveforms; the others are measures.
var (
	mathematics   = []string{"sqrt", "exp", "log", "sin", "cos", "abs", "min", "max", "dB"}
	waveformCalls = []string{"u", "delta"}
)

// calls offers functions and measures, all but waveforms where none are named.
func (c *completer) calls(names []string) {
	for _, s := range dialect.Signatures() {
		if names != nil && !slices.Contains(names, s.Name) || names == nil && slices.Contains(waveformCalls, s.Name) {
			continue
		}
		places := make([]string, 0, len(s.Parameters))
		for i, p := range s.Parameters[:len(s.Parameters)-s.Optional] {
			places = append(places, "${"+itoa(i+1)+":"+p+"}")
		}
		c.add(item{
			label: s.Name, kind: protocol.CompletionItemKindFunction, detail: signatureLabel(s), doc: s.Definition,
			snippet: s.Name + "(" + strings.Join(places, ", ") + ")", insert: s.Name + "(", rank: 3,
		})
	}
}

// expressions offers what an expression can begin with, as far as the
// statement allows it.
func (c *completer) expressions() {
	c.names(1, dialect.LetSymbol, dialect.ParameterSymbol)
	switch st := c.context.Statement.(type) {
	case *dialect.LetStatement:
		c.valued(4)
		c.calls(mathematics)
	case *dialect.PartStatement:
		c.valued(4)
		c.calls(mathematics)
		switch st.Kind {
		case dialect.VoltageSource, dialect.CurrentSource:
			c.calls(waveformCalls)
			c.constants("pi", "t")
			c.quantities("vi")
			return
		case dialect.Impedance, dialect.Admittance:
			c.constants("s")
		}
	case *dialect.FunctionStatement:
		c.names(0, dialect.FunctionSymbol)
		c.quantities("vizy")
		c.sources()
		c.constants("s")
	case *dialect.TellStatement:
		c.asked()
		if q, ok := st.What.(*dialect.RootsQuestion); !ok || q == nil {
			c.quantities("vipzy")
		}
	default:
		c.asked()
		c.quantities("vipzy")
	}
	c.constants("pi")
}

// asked offers what questions and limits ask about.
func (c *completer) asked() {
	c.names(0, dialect.FunctionSymbol)
	c.calls(nil)
	c.valued(4)
}

// valued offers the parts whose names stand for their nominal values.
func (c *completer) valued(rank int) {
	for _, s := range c.symbols() {
		if s.Sort == dialect.PartSymbol && (s.Kind == dialect.Resistor || s.Kind == dialect.Inductor || s.Kind == dialect.Capacitor) {
			c.symbol(s, rank)
		}
	}
}

// sources offers the independent sources, which excite network functions.
func (c *completer) sources() {
	for _, s := range c.symbols() {
		if s.Sort == dialect.PartSymbol && (s.Kind == dialect.VoltageSource || s.Kind == dialect.CurrentSource) {
			c.symbol(s, 0)
		}
	}
}

func (c *completer) constants(names ...string) {
	for _, w := range names {
		c.add(item{label: w, kind: protocol.CompletionItemKindConstant, doc: wordDocs[w], rank: 5})
	}
}

// matrixSets offers the two-port parameter sets.
func (c *completer) matrixSets() {
	for _, m := range []struct{ set, what string }{
		{"z", "open-circuit impedances"}, {"y", "short-circuit admittances"}, {"h", "hybrid"}, {"g", "inverse hybrid"},
		{"abcd", "chain (transmission)"}, {"s", "scattering"},
	} {
		c.add(item{label: m.set, kind: protocol.CompletionItemKindEnumMember, detail: m.what})
	}
}

// codes offers the codes of findings.
func (c *completer) codes() {
	for _, e := range dialect.Explanations() {
		if e.Severity != dialect.Error {
			c.add(item{label: string(e.Code), kind: protocol.CompletionItemKindEnumMember, detail: e.Title, doc: e.Meaning})
		}
	}
}
