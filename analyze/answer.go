// Package analyze turns a checked description into typed answers. An answer
// is computed once and shown many ways: as words, JSON, Markdown or a
// picture, by the files beside this one, which never compute.
package analyze

import (
	"portlight/analyze/exact"
	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// Answer is what one question gets: one of the *Answer types of this file.
type Answer interface {
	// Asked is the question as written, without "tell".
	Asked() string
}

// Question is the part every answer has.
type Question struct {
	Text   string
	Origin dialect.Origin // zero for a question from outside the file
	// Remarks are sentences that qualify the answer: a coincidence decided
	// only to within a bound, a source that holds the pair, a hidden mode.
	Remarks []string
}

// Asked implements Answer.
func (q Question) Asked() string { return q.Text }

// FunctionAnswer is a rational function of s with exact coefficients.
type FunctionAnswer struct {
	Question
	Dimension    dialect.Dimension
	Ratio        exact.Ratio
	Exact        bool // false when a coefficient is a stand-in for an irrational
	Zeros, Poles []exact.Root
	Hidden       []exact.Root // natural frequencies the function does not show
	// Formula is the function in element names, proved by their values; "" when
	// it would not be readable.
	Formula string
}

// ValueAnswer is a number, complex when Complex is set.
type ValueAnswer struct {
	Question
	Dimension dialect.Dimension
	Complex   bool
	Value     number.ComplexBall // Im is exact zero unless Complex
	Magnitude number.Ball
	Phase     number.Ball // degrees; only when Complex
	Proved    bool        // false when it was computed in float64
	Hertz     bool        // show a frequency in Hz (Value stays rad/s)
	// At is the angular frequency of a value on the imaginary axis, nil otherwise.
	At *dialect.Constant
}

// FactAnswer is true or false, decided.
type FactAnswer struct {
	Question
	True   bool
	Why    string
	Proved bool
}

// SignalAnswer is a signal in closed form, split by its causes.
type SignalAnswer struct {
	Question
	Dimension dialect.Dimension
	Signal    *response.Signal
}

// CurveAnswer is what is no sum of voltages and currents but still has a closed
// form, such as a power: it has no parts by cause, since superposition does not hold.
type CurveAnswer struct {
	Question
	Dimension dialect.Dimension
	Curve     *response.Curve
}

// SignalValueAnswer is a signal at a time.
type SignalValueAnswer struct {
	Question
	Dimension                    dialect.Dimension
	At                           number.Exact // s
	Total, ZeroInput, ZeroState  number.Ball
	Jump                         bool // the left limits below differ
	BeforeTotal, BeforeZeroInput number.Ball
	BeforeZeroState              number.Ball
	Impulses                     []number.Ball // weights of δ, δ′, … at this instant
	Proved                       bool
}

// MeasureAnswer is a figure of merit, with where it was found.
type MeasureAnswer struct {
	Question
	Measure   string
	Dimension dialect.Dimension
	Value     number.Ball
	HasWhere  bool
	InTime    bool        // Where is a time in s, otherwise rad/s
	Where     number.Ball // instant or angular frequency
	Proved    bool
}

// TableAnswer is a sweep: an answer over a range of frequency or time.
type TableAnswer struct {
	Question
	Columns []Column
	Rows    [][]number.Ball
	Proved  bool
}

// Column is a column of a TableAnswer.
type Column struct {
	Name      string // "Hz", "s", "magnitude", "phase_deg", "total", …
	Dimension dialect.Dimension
}

// EquivalentAnswer is a Thévenin or Norton equivalent. A form that does not
// exist is nil, with the reason beside it.
type EquivalentAnswer struct {
	Question
	Norton          bool // asked as norton[…]
	Impedance       *FunctionAnswer
	OpenCircuit     *SignalAnswer // V
	ShortCircuit    *SignalAnswer // A, from the + node through the short
	WhyImpedance    string
	WhyOpenCircuit  string
	WhyShortCircuit string
}

// RootsAnswer lists natural frequencies, poles or zeros.
type RootsAnswer struct {
	Question
	Zeros bool
	Roots []exact.Root
	// Hidden marks, per root, the natural frequencies that no asked quantity
	// shows; nil for poles and zeros of a function.
	Hidden []bool
}

// MatrixAnswer is a two-port parameter set, or why it does not exist.
type MatrixAnswer struct {
	Question
	Set     string
	Ports   [2]string
	Exists  bool
	Why     string
	Entries [2][2]FunctionAnswer
	// Facts of the two-port, decided: "reciprocal", "symmetric", "passive", "lossless".
	Facts map[string]bool
}

// InitialAnswer lists the state at 0− and 0+.
type InitialAnswer struct {
	Question
	Parts []InitialState
}

// InitialState is one capacitor voltage or inductor current around t = 0.
type InitialState struct {
	Part          string
	Dimension     dialect.Dimension
	Before, After number.Exact
}

// RefusedAnswer says why there is no answer.
type RefusedAnswer struct {
	Question
	Code dialect.Code
	Why  string
}

// Decision is the outcome of a limit.
type Decision int

// The outcomes of a limit.
const (
	Holds Decision = iota
	Broken
	Undecided
)

// String gives the word shown and written to JSON.
func (d Decision) String() string { return [...]string{"holds", "broken", "undecided"}[d] }

// Verdict is the answer to a require line.
type Verdict struct {
	Limit    *dialect.Limit
	Decision Decision
	Proved   bool
	// Margin is how far the worst case is from the limit, positive when it
	// holds, in the limit's own unit; HasMargin is false for facts.
	HasMargin bool
	Margin    number.Ball
	Dimension dialect.Dimension
	// Worst is the worst value and Where its frequency (rad/s) or instant.
	Worst    number.Ball
	HasWhere bool
	InTime   bool
	Where    number.Ball
	// InTolerance tells about values inside their tolerances: Broken names in
	// Corner values that break the limit; Holds means that no part has a
	// tolerance; Undecided that a search found nothing that breaks it.
	InTolerance Decision
	Corner      string
	// Searched says that CornerMargin and CornerWorst are the margin and the
	// value at the worst point a search inside the tolerances has found.
	Searched                  bool
	CornerMargin, CornerWorst number.Ball
	Why                       string // for undecided and refused limits
}
