package dialect

import "portlight/dialect/number"

// This file is the contract between the notation and the analysis: what a
// checked file says, with names resolved, units checked, subnetworks expanded
// and values exact. Nothing above it reads the tree to compute an answer.

// Description is the flat network that one main file describes. Indices into
// its slices are the only references used below the notation; -1 means none.
type Description struct {
	Nodes     []Node
	Ground    int // index into Nodes, -1 when the file names no reference
	Parts     []Part
	Ports     []Port
	Functions []Function
	Lets      []Let
	Questions []Question
	Limits    []Limit
	Steady    bool // start steady
	// Faults says that an error-level finding left something out, so that
	// answers which depend on the whole network must be refused.
	Faults bool
}

// Origin is a place in a text: the file as it was handed in, and the byte
// span in it. Use is the chain of subnetwork uses the place was reached
// through, outermost first, empty for the main file's own statements.
type Origin struct {
	File *File
	Span Span
	Use  []Origin
}

// Node is an electrical node. Name is what a quantity calls it ("mid",
// "F1.mid"); an unnamed joint inside a chain has an empty name.
type Node struct {
	Name   string
	Joint  bool     // made by touching boxes, has no name of its own
	Places []Origin // every place it is written, the first one first
	Ported bool     // a port ends here, so one connection is enough
}

// Kind is the kind of a part.
type Kind int

// The part kinds of the notation.
const (
	NoKind Kind = iota
	Resistor
	Inductor
	Capacitor
	Impedance
	Admittance
	VoltageSource // independent or dependent, see Part.Dependent
	CurrentSource
	OpAmp
	Transformer
	Coupling
	Switch
	Wire
)

// Part is one element of the flat network. Two-terminal kinds use From and To
// (voltage is From minus To, current flows From to To). Values are coherent
// SI: Ω, H, F, V, A, s, rad/s.
type Part struct {
	Name     string
	Kind     Kind
	From, To int
	Origin   Origin // the part statement; Origin.Use tells the instance
	NameSpan Span   // the name inside Origin.File
	Wired    Origin // the box that wires it, zero when never wired

	Value     number.Exact // R, L, C, coupling coefficient or mutual inductance
	ValueText string       // the value as written, for display
	Mutual    bool         // a coupling given in henry
	Tolerance *Tolerance

	Waveform  *Waveform   // independent sources
	Dependent []Control   // dependent sources: sum of coefficient × quantity
	Rational  *RationalIn // impedance (Ω) and admittance (S)

	Coils [2]int // coupling: the two inductors' indices into Parts

	Windings []Winding // transformer, primary first

	Plus, Minus, Output int           // op amp nodes
	GainBandwidth       *number.Exact // rad/s; nil for an ideal op amp
	DCGain              *number.Exact // ratio; nil for an integrating one-pole op amp

	Events     []Event       // switch, in order of time
	ClosedAt0  bool          // switch state before the first event
	Resistance *number.Exact // switch closed resistance, nil for ideal

	Initial                                *number.Exact // V or A at 0−
	RatedPower, RatedVoltage, RatedCurrent *number.Exact
}

// Winding is one winding of an ideal transformer: voltages of the windings
// are in the ratio of Turns, and the ampere-turns sum to zero.
type Winding struct {
	Name        string // "primary", "secondary", "secondary2", …
	Plus, Minus int
	Turns       number.Exact
}

// Event is one change of a switch.
type Event struct {
	At     number.Exact // s
	Closes bool
}

// Tolerance bounds a value: Low ≤ value ≤ High, in the value's own unit.
type Tolerance struct {
	Low, High number.Exact
	Text      string // as written
}

// RationalIn is a rational expression in s: coefficient lists in ascending
// powers of s in rad/s. The denominator is never the zero polynomial.
type RationalIn struct {
	Numerator, Denominator []number.Exact
}

// Control is one term of a dependent source: Coefficient times the quantity.
type Control struct {
	Coefficient RationalIn
	Probe       Probe
}

// Probe is an elementary quantity of the network.
type Probe struct {
	Letter byte // 'v' 'i' 'p' 'z' 'y'
	// Of says which of the fields below is meant.
	Of          ProbeOf
	Plus, Minus int    // OfNodes: node pair; Minus is Ground for v[NODE]
	Part        int    // OfPart, OfTerminal
	Terminal    string // OfTerminal: "output", "primary", "secondary", …; the current into it
	Port        int    // OfPort
	// Inflow lists, for the current into a subnetwork use's terminal
	// (i[F1.in]), the part ends whose currents leave the joint inwards.
	Inflow []PartEnd
}

// ProbeOf tells what a Probe refers to.
type ProbeOf int

// What a probe can refer to.
const (
	OfNodes ProbeOf = iota
	OfPart
	OfTerminal
	OfPort
	OfInflow
)

// PartEnd is one end of a part: Sign +1 when the part's reference current
// leaves the node there into the part, −1 otherwise. Terminal names the
// terminal of a part with more than two.
type PartEnd struct {
	Part     int
	Terminal string
	Sign     int
}

// Waveform is a source as mathematics: what stands for ever (no unit step)
// and pieces that begin at a time. Under start rest, Always acts from 0 on.
type Waveform struct {
	Always []WaveTerm
	Pieces []WavePiece
}

// WavePiece is what begins at From: terms in τ = t − From, and impulses
// there, Impulses[k] being the weight of the k-th derivative of δ.
type WavePiece struct {
	From     number.Exact // s, ≥ 0
	Terms    []WaveTerm
	Impulses []number.Exact
}

// WaveTerm is τ^Power · e^{Rate·τ} · (Cosine·cos(Omega·τ) + Sine·sin(Omega·τ)).
type WaveTerm struct {
	Power        int
	Rate, Omega  number.Exact // 1/s, rad/s; Omega ≥ 0
	Cosine, Sine number.Exact
}

// Port is a named node pair.
type Port struct {
	Name        string
	Plus, Minus int
	Origin      Origin
	NameSpan    Span
}

// Function is a named network function; Value is rational in s.
type Function struct {
	Name     string
	Value    Expression
	Origin   Origin
	NameSpan Span
}

// Let is a named constant.
type Let struct {
	Name     string
	Value    Expression // a *Constant when the value is known
	Origin   Origin
	NameSpan Span
}

// QuestionSort is the form of a question.
type QuestionSort int

// The forms of a question.
const (
	AskExpression QuestionSort = iota
	AskInitial
	AskPoles
	AskZeros
	AskMatrix
	AskThevenin
	AskNorton
)

// Question is one tell line, or one question from the command line.
type Question struct {
	Text       string // what follows "tell", as written, spaces trimmed
	Sort       QuestionSort
	What       Expression // AskExpression; the function for poles of / zeros of (nil: the network)
	Set        string     // AskMatrix: z y h g abcd s
	Ports      [2]int     // AskMatrix; Ports[0] for Thévenin and Norton
	Reference  *number.Exact
	Unit       string // "Hz" or "rad/s" where the question ends in it ("in Hz")
	Qualifiers Qualifiers
	Origin     Origin
	// Why is empty, or says what error keeps the question from being worked
	// out; What is then nil.
	Why string
}

// Limit is one require line, flattened out of subnetworks too.
type Limit struct {
	Text       string
	Left       Expression
	Relation   string     // "<=" ">=" "<" ">", or "" for a fact
	Right      Expression // nil for a fact
	Qualifiers Qualifiers
	Nominal    bool
	Origin     Origin
	// Why is empty, or says what error keeps the limit from being worked out;
	// Left and Right are then nil.
	Why string
}

// Qualifiers restrict a question or a limit.
type Qualifiers struct {
	At, Before *Constant // a frequency or a time
	From, To   *Constant
	Switches   []SwitchState
	Without    []int // part indices taken out
}

// SwitchState fixes a switch for a question in s.
type SwitchState struct {
	Part   int
	Closed bool
}

// Shape tells what an expression is once evaluated.
type Shape int

// The shapes of an expression.
const (
	ShapeNumber     Shape = iota // a constant
	ShapeFunction                // a function of s
	ShapeSignal                  // a function of t
	ShapeFact                    // true or false
	ShapeEquivalent              // thevenin, norton
)

// Expression is a resolved, unit-checked expression. The concrete types are
// Constant, Variable, Negate, Binary, Call, Quantity, FunctionValue and At.
type Expression interface {
	// Dim is the unit's dimension; Dim.Level marks a level in dB.
	Dim() Dimension
	// Shape tells what the expression evaluates to.
	Shape() Shape
	// Place is where it stands.
	Place() Span
}

// Typed carries what every Expression knows about itself.
type Typed struct {
	Dimension Dimension
	Form      Shape
	Span      Span
}

// Dim implements Expression.
func (t Typed) Dim() Dimension { return t.Dimension }

// Shape implements Expression.
func (t Typed) Shape() Shape { return t.Form }

// Place implements Expression.
func (t Typed) Place() Span { return t.Span }

// Constant is a number in coherent SI; a level holds its dB figure; a
// frequency holds rad/s, with Hertz set when it was written in Hz.
type Constant struct {
	Typed
	Value number.Exact
	Hertz bool
}

// Variable is s or t, or the unit step u(t) and impulse delta(t) as calls.
type Variable struct {
	Typed
	Name string
}

// Negate is −X.
type Negate struct {
	Typed
	X Expression
}

// Binary is X Op Y with Op one of + - * / ^.
type Binary struct {
	Typed
	Op   byte
	X, Y Expression
}

// Call is a function or measure of the notation applied to arguments:
// sqrt exp log sin cos abs min max dB u delta, zir zsr due natural forced,
// gain phase … peak trough … energy stored.
type Call struct {
	Typed
	Name string
	Args []Expression
	// Part is the source of due, or the part of energy and stored; -1 otherwise.
	Part int
}

// Quantity is an elementary quantity of the network.
type Quantity struct {
	Typed
	Probe Probe
}

// FunctionValue is a named function used by name.
type FunctionValue struct {
	Typed
	Function int
}

// At is X(where): H(1 kHz), v[out](2 ms).
type At struct {
	Typed
	X     Expression
	Where *Constant
}
