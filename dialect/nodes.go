package dialect

import "strings"

// This file is the syntax tree: what was written, with the place of every
// word and mark, before any name is looked up. All spans are byte spans of
// File.Text. The tree is immutable once Parse has returned it.
//
// A part of the grammar that is missing in the text is never nil: a missing
// name is a Word with empty Text, a missing mark a Span with Start == End, a
// missing expression, value or box a *Hole. What was expected there is also
// listed in the statement's Holes. The parser has then already reported a
// finding, so that whoever meets a hole stays silent. Only what the grammar
// makes optional is nil or a zero Word when it is absent.

// File is a parsed text.
type File struct {
	Name       string // as handed to Parse: a path or a URI, never interpreted here
	Text       string
	Statements []Statement // in order of the text, broken ones included
	Comments   []*Comment  // all of them, in order of the text
	Doc        *Doc        // the ## block at the top, nil when there is none
	Findings   []Finding   // what parsing found, in order of the text
	Unreadable bool        // not notation at all (binary, UTF-16); nothing in it is read
	Lines      *Lines      // line index of Text
}

// Tree is any node of the syntax tree.
type Tree interface {
	// Extent is the span from the node's first to its last character.
	Extent() Span
}

// Word is a name or keyword with its place. Text is empty when it is missing.
type Word struct {
	Span Span
	Text string
}

// Extent implements Tree.
func (w Word) Extent() Span { return w.Span }

// Present says that the word stands in the text.
func (w Word) Present() bool { return w.Text != "" }

// Comment is one # comment, up to the line's end. Text starts with "#".
type Comment struct {
	Span Span
	Text string
	Own  bool // nothing else stands on its line
}

// Extent implements Tree.
func (c *Comment) Extent() Span { return c.Span }

// Documents says that the comment starts with ##.
func (c *Comment) Documents() bool { return strings.HasPrefix(c.Text, "##") }

// Doc is a block of ## lines on consecutive lines.
type Doc struct {
	Span  Span
	Lines []*Comment
}

// Extent implements Tree.
func (d *Doc) Extent() Span { return d.Span }

// Text is the documentation without the ## marks and the space after them,
// lines joined by newlines.
func (d *Doc) Text() string {
	if d == nil {
		return ""
	}
	lines := make([]string, len(d.Lines))
	for i, c := range d.Lines {
		line := strings.TrimLeft(c.Text, "#")
		lines[i] = strings.TrimPrefix(trimRight(line), " ")
	}
	return strings.Join(lines, "\n")
}

// Want is what the grammar expects at a place.
type Want int

// What a place may want.
const (
	WantNothing       Want = iota
	WantStatement          // any statement
	WantNode               // a node's name, an existing or a new one
	WantNewName            // a name not taken yet
	WantBox                // a part not wired yet, a part statement, or a use
	WantValue              // the value of a part of Hole.Kind
	WantTolerance          // a tolerance, or an option
	WantOption             // an option of Hole.Kind not used yet
	WantExpression         // any expression
	WantUnit               // a unit after a number; of Hole.Kind's value where that is known
	WantQuestion           // what may follow tell
	WantQualifier          // a qualifier of tell or require
	WantRelation           // <= >= < >
	WantKind               // a part kind
	WantSeries             // E3 … E192
	WantCode               // the code of a finding
	WantString             // a quoted text
	WantPath               // a quoted file path
	WantSubnetwork         // the name of a subnetwork
	WantParameter          // a parameter of the subnetwork in Hole.Name
	WantTerminal           // a terminal of the subnetwork in Hole.Name
	WantPart               // the name of a part
	WantInductor           // the name of an inductor
	WantSwitch             // the name of a switch
	WantPort               // the name of a port
	WantSubscript          // what stands in v[…]: node, part, port; Hole.Name is the letter
	WantMatrixSet          // z y h g abcd s
	WantKeyword            // one of Hole.Words
	WantFrequencyUnit      // Hz or rad/s, after in
	WantMark               // punctuation, Hole.Words
)

// Hole is a place where something is missing. It stands as expression, value,
// box or question in the tree, and in Head.Holes.
type Hole struct {
	Span  Span // what stands there instead (skipped text), empty at the place itself
	Want  Want
	Kind  Kind     // the part kind the place belongs to, NoKind otherwise
	Name  string   // see Want
	Words []string // see Want
}

// Extent implements Tree.
func (h *Hole) Extent() Span { return h.Span }

// Head is common to all statements.
type Head struct {
	Span    Span // first to last token, without comments around it
	Keyword Word // "ground", "let", …; the kind of a part ("op amp"); empty for a path
	Doc     *Doc // ## lines directly above, nil when there are none
	Broken  bool // a syntax finding lies in it: printed byte for byte
	Inline  bool // a part or use statement inside a path's box
	// Misplaced says that the statement stands in a subnetwork that cannot
	// hold it. It has been reported and must be ignored.
	Misplaced bool
	Holes     []*Hole
}

// Extent implements Tree.
func (h *Head) Extent() Span { return h.Span }

// Headline gives the common head of a statement.
func (h *Head) Headline() *Head { return h }

// Statement is one statement. The concrete types are *GroundStatement,
// *LetStatement, *PartStatement, *PathStatement, *PortStatement,
// *FunctionStatement, *TellStatement, *RequireStatement, *StartStatement,
// *PreferStatement, *AllowStatement, *UseFileStatement, *SubnetworkStatement,
// *UsePartStatement and *BrokenStatement.
type Statement interface {
	Tree
	// Headline gives the part common to all statements.
	Headline() *Head
}

// GroundStatement is: ground NODE.
type GroundStatement struct {
	Head
	Node Word
}

// LetStatement is: let NAME = EXPR.
type LetStatement struct {
	Head
	Name   Word
	Equals Span
	Value  Expr
}

// PartStatement is: KIND NAME = VALUE [TOLERANCE] {, OPTION}. It is also a
// Box, with Head.Inline set.
type PartStatement struct {
	Head   // Keyword is the kind's words, one space between
	Kind   Kind
	Name   Word
	Equals Span // zero for kinds without a value
	// Value is an Expr, *CodeValue, *IdealValue, *EventsValue or *RatioValue
	// (or *Hole); nil when there is none.
	Value     Value
	Tolerance *ToleranceClause // nil when there is none
	Options   []*PartOption
}

// PathStatement is a wiring path. Nodes has one more element than Chains:
// Nodes[0] Chains[0] Nodes[1] Chains[1] Nodes[2] …
type PathStatement struct {
	Head
	Nodes  []Word
	Chains []*Chain
}

// Chain is the boxes between two named nodes: "-[" group "]" … "-". Groups
// that touch are in series through unnamed joints.
type Chain struct {
	Span   Span
	Groups []*Group
	Dash   Span // the closing "-"
}

// Extent implements Tree.
func (c *Chain) Extent() Span { return c.Span }

// Group is one box, or several in parallel between one pair of nodes.
type Group struct {
	Span  Span
	Open  Span // "-["
	Boxes []Box
	Bars  []Span // the "||" between the boxes
	Close Span   // "]"
}

// Extent implements Tree.
func (g *Group) Extent() Span { return g.Span }

// Box is what stands in a box: *NameBox, *PartStatement, *UsePartStatement
// or *Hole.
type Box interface {
	Tree
	box()
}

// NameBox is a box that holds the name of a part or of a subnetwork's use.
type NameBox struct{ Name Word }

// Extent implements Tree.
func (b *NameBox) Extent() Span { return b.Name.Span }

func (*NameBox) box()          {}
func (*PartStatement) box()    {}
func (*UsePartStatement) box() {}
func (*Hole) box()             {}

// PortStatement is: port NAME at NODE NODE, the + side first.
type PortStatement struct {
	Head
	Name        Word
	At          Word
	Plus, Minus Word
}

// FunctionStatement is: function NAME = EXPR.
type FunctionStatement struct {
	Head
	Name   Word
	Equals Span
	Value  Expr
}

// TellStatement is: tell WHAT {QUALIFIER}.
type TellStatement struct {
	Head
	// What is an Expr, *InitialQuestion, *RootsQuestion or *MatrixQuestion
	// (or *Hole). thevenin[PORT] and norton[PORT] are SubscriptExpr.
	What       Asked
	Qualifiers []*Qualifier
}

// RequireStatement is: require EXPR REL EXPR {QUALIFIER} [nominal], or a fact.
type RequireStatement struct {
	Head
	Left       Expr
	Relation   Word // "<=" ">=" "<" ">"; zero for a fact
	Right      Expr // nil for a fact
	Qualifiers []*Qualifier
	Nominal    Word // zero when absent
}

// StartStatement is: start rest|steady.
type StartStatement struct {
	Head
	State Word
}

// PreferStatement is: prefer KIND SERIES.
type PreferStatement struct {
	Head
	Kind     Kind
	KindName Word
	Series   Word
}

// AllowStatement is: allow CODE because "reason".
type AllowStatement struct {
	Head
	Code    Word // with its hyphens, one word
	Because Word
	Reason  StringLiteral
}

// UseFileStatement is: use "path".
type UseFileStatement struct {
	Head
	Path StringLiteral
}

// StringLiteral is a quoted text; Span includes the quotes, Value does not.
// There are no escapes.
type StringLiteral struct {
	Span  Span
	Value string
}

// Extent implements Tree.
func (s StringLiteral) Extent() Span { return s.Span }

// SubnetworkStatement is: subnetwork NAME (TERMINAL, …) [with …] { … }.
type SubnetworkStatement struct {
	Head
	Name                Word
	Open                Span // "("
	Terminals           []Word
	Close               Span // ")"
	With                Word // zero when absent
	Parameters          []*Parameter
	BraceOpen           Span
	Statements          []Statement
	BraceClose          Span
	BodyStart, BodyStop int // offsets just after "{" and at "}" (or the end)
}

// Parameter is NAME = EXPR: a default in a subnetwork's head, an argument in
// a use.
type Parameter struct {
	Span   Span
	Name   Word
	Equals Span
	Value  Expr
}

// Extent implements Tree.
func (p *Parameter) Extent() Span { return p.Span }

// UsePartStatement is: part NAME = SUBNETWORK [with …] {, TERMINAL at NODE}.
// It is also a Box, with Head.Inline set and without terminals.
type UsePartStatement struct {
	Head
	Name       Word
	Equals     Span
	Subnetwork Word
	With       Word // zero when absent
	Arguments  []*Parameter
	Terminals  []*TerminalClause
}

// TerminalClause is TERMINAL at NODE.
type TerminalClause struct {
	Span     Span
	Terminal Word
	At       Word
	Node     Word
}

// Extent implements Tree.
func (t *TerminalClause) Extent() Span { return t.Span }

// BrokenStatement is text of which not even the sort of statement is known.
type BrokenStatement struct{ Head }

// Value is the value of a part: an Expr, *CodeValue, *IdealValue,
// *EventsValue, *RatioValue or *Hole.
type Value interface {
	Tree
	value()
}

// CodeValue is a value in the code of IEC 60062 ("4k7", "2R2", "100n") as the
// whole value of a resistor, inductor or capacitor. The unit is the kind's.
type CodeValue struct {
	Span Span
	Text string
	// Number is the decimal that the code stands for without its
	// multiplier ("4.7"), Prefix the SI prefix ("k", "" for R, F and H).
	Number, Prefix string
}

// IdealValue is the word ideal.
type IdealValue struct{ Word Word }

// EventsValue is the turns of a switch.
type EventsValue struct {
	Span   Span
	Events []*EventClause
}

// EventClause is (opens|closes) at TIME.
type EventClause struct {
	Span   Span
	Action Word
	At     Word
	Time   Expr
}

// RatioValue is N : M {: K}, with two or more terms.
type RatioValue struct {
	Span   Span
	Terms  []Expr
	Colons []Span
}

// Extent implements Tree.
func (v *CodeValue) Extent() Span { return v.Span }

// Extent implements Tree.
func (v *IdealValue) Extent() Span { return v.Word.Span }

// Extent implements Tree.
func (v *EventsValue) Extent() Span { return v.Span }

// Extent implements Tree.
func (v *EventClause) Extent() Span { return v.Span }

// Extent implements Tree.
func (v *RatioValue) Extent() Span { return v.Span }

func (*CodeValue) value()   {}
func (*IdealValue) value()  {}
func (*EventsValue) value() {}
func (*RatioValue) value()  {}
func (*Hole) value()        {}

// ToleranceClause is ±X, or one or two signed percentages.
type ToleranceClause struct {
	Span  Span
	Bound []ToleranceBound // one or two
}

// Extent implements Tree.
func (t *ToleranceClause) Extent() Span { return t.Span }

// ToleranceBound is one sign with its quantity.
type ToleranceBound struct {
	Sign  Span
	Signs string // "±" (also for +-), "+" or "-"
	Value *NumberExpr
}

// PartOption is one option. Which fields are used depends on Keyword.Text:
//
//	rated initially gain resistance   Value
//	+ - output                        At, Nodes[0]
//	primary secondary                 At, Nodes[0], Nodes[1]
//	between                           Nodes[0], Nodes[1] (part names)
type PartOption struct {
	Span    Span
	Comma   Span // the comma before it
	Keyword Word
	Value   Expr
	At      Word
	Nodes   []Word
}

// Extent implements Tree.
func (o *PartOption) Extent() Span { return o.Span }

// Asked is what tell asks: an Expr, *InitialQuestion, *RootsQuestion,
// *MatrixQuestion or *Hole.
type Asked interface {
	Tree
	asked()
}

// InitialQuestion is: initial.
type InitialQuestion struct{ Word Word }

// RootsQuestion is: (poles|zeros) [of EXPR].
type RootsQuestion struct {
	Span Span
	Word Word
	Of   Word // zero when absent
	X    Expr // nil when absent
}

// MatrixQuestion is: matrix SET [ PORT , PORT ] [reference EXPR].
type MatrixQuestion struct {
	Span          Span
	Word          Word
	Set           Word
	Open          Span
	First         Word
	Comma         Span
	Second        Word
	Close         Span
	ReferenceWord Word // zero when absent
	Reference     Expr // nil when absent
}

// Extent implements Tree.
func (q *InitialQuestion) Extent() Span { return q.Word.Span }

// Extent implements Tree.
func (q *RootsQuestion) Extent() Span { return q.Span }

// Extent implements Tree.
func (q *MatrixQuestion) Extent() Span { return q.Span }

func (*InitialQuestion) asked() {}
func (*RootsQuestion) asked()   {}
func (*MatrixQuestion) asked()  {}
func (*Hole) asked()            {}

// Qualifier restricts a question or limit. Which fields are used depends on
// Keyword.Text:
//
//	at before     Value
//	from          Value, and ToWord with To when a "to" follows
//	to            To (Keyword is the "to" itself)
//	with          Names[0] the switch, State "open" or "closed"
//	without       Names
type Qualifier struct {
	Span    Span
	Keyword Word
	Value   Expr
	ToWord  Word // zero when absent
	To      Expr // nil when absent
	Names   []*NameExpr
	State   Word
}

// Extent implements Tree.
func (q *Qualifier) Extent() Span { return q.Span }
