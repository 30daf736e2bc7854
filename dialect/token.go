package dialect

// tokenKind is the sort of a token.
type tokenKind uint8

// The sorts of token. What a digit-led token means, the place decides.
const (
	tEnd        tokenKind = iota // end of the statement
	tWord                        // letter or _, then letters, digits, _
	tNumber                      // "2.2", ".5", "4.7e-9"
	tDigits                      // a number with letters touching: "4k7", "10mH", "3V3", "1e"
	tString                      // "…", or to the line's end when not closed
	tOpenBox                     // -[
	tOpen                        // [
	tClose                       // ]
	tParen                       // (
	tParenClose                  // )
	tBrace                       // {
	tBraceClose                  // }
	tComma                       // ,
	tBars                        // ||
	tBar                         // |
	tEquals                      // =
	tPlus                        // +
	tMinus                       // - or U+2212
	tStar                        // *
	tSlash                       // /
	tSlashes                     // //
	tCaret                       // ^
	tPlusMinus                   // ± or +-
	tLess                        // <
	tLessEq                      // <=
	tGreater                     // >
	tGreaterEq                   // >=
	tColon                       // :
	tDot                         // .
	tUnitMark                    // % or °
	tForeign                     // a character with a meaning elsewhere (× ÷ ∥ ≤ ²), see foreignMarks
	tBad                         // what no statement may hold
)

// token is one token: text[start:end].
type token struct {
	kind       tokenKind
	start, end int
}

// span is the token's place.
func (t token) span() Span { return Span{t.start, t.end} }

// operand says that the token can end an operand, so that a sign after it is
// an operator.
func (k tokenKind) operand() bool {
	switch k {
	case tWord, tNumber, tDigits, tClose, tParenClose, tUnitMark:
		return true
	}
	return false
}

// foreignMarks are characters that people write for what the notation spells
// otherwise.
var foreignMarks = map[rune]string{
	'×': "*", '·': "*", '⋅': "*", '∙': "*", '÷': "/", '∥': "||", '‖': "||",
	'≤': "<=", '≥': ">=", '²': "^2", '³': "^3", '–': "-", '—': "-", '‑': "-", '‐': "-",
	'“': `"`, '”': `"`, '„': `"`, '≈': "", '√': "sqrt", '∞': "", '∠': "", '‰': "%",
}

// keywords in the order in which they are offered.
var (
	statementWords = []string{
		"ground", "let", "port", "function", "tell", "require", "start",
		"prefer", "allow", "use", "subnetwork", "part",
	}
	bodyWords    = []string{"let", "require", "part"}
	kindWords    = []string{"resistor", "inductor", "capacitor", "impedance", "admittance", "voltage source", "current source", "op amp", "transformer", "coupling", "switch", "wire"}
	eventWords   = []string{"opens", "closes"}
	stateWords   = []string{"rest", "steady"}
	switchWords  = []string{"open", "closed"}
	matrixSets   = []string{"z", "y", "h", "g", "abcd", "s"}
	seriesNames  = []string{"E3", "E6", "E12", "E24", "E48", "E96", "E192"}
	relations    = []string{"<=", ">=", "<", ">"}
	questionStat = []string{"initial", "poles", "zeros", "matrix"}
)

// kindNames gives every kind its words.
var kindNames = [...]string{
	NoKind: "", Resistor: "resistor", Inductor: "inductor", Capacitor: "capacitor",
	Impedance: "impedance", Admittance: "admittance",
	VoltageSource: "voltage source", CurrentSource: "current source",
	OpAmp: "op amp", Transformer: "transformer", Coupling: "coupling",
	Switch: "switch", Wire: "wire",
}

// String gives the kind's words in the notation, "" for NoKind.
func (k Kind) String() string {
	if k < 0 || int(k) >= len(kindNames) {
		return ""
	}
	return kindNames[k]
}

// withArticle gives "a resistor", "an op amp".
func (k Kind) withArticle() string {
	name := k.String()
	if name == "" {
		return "a part"
	}
	switch name[0] {
	case 'a', 'e', 'i', 'o', 'u':
		return "an " + name
	}
	return "a " + name
}

// kindOptions lists the option keywords that each kind takes.
func kindOptions(k Kind) []string {
	switch k {
	case Resistor:
		return ratedOnly
	case Inductor, Capacitor:
		return reactiveOptions
	case OpAmp:
		return opAmpOptions
	case Transformer:
		return transformerOptions
	case Coupling:
		return couplingOptions
	case Switch:
		return switchOptions
	}
	return nil
}

var (
	ratedOnly          = []string{"rated"}
	reactiveOptions    = []string{"initially", "rated"}
	opAmpOptions       = []string{"gain", "+", "-", "output"}
	transformerOptions = []string{"primary", "secondary"}
	couplingOptions    = []string{"between"}
	switchOptions      = []string{"resistance"}
	allOptions         = []string{"rated", "initially", "gain", "resistance", "+", "-", "output", "primary", "secondary", "between"}
)

// isQualifierWord says that a word after an expression goes on with the
// statement and is no unit.
func isQualifierWord(s string) bool {
	switch s {
	case "at", "before", "from", "to", "with", "without", "nominal", "in", "reference":
		return true
	}
	return false
}
