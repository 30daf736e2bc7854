package dialect

import "strings"

// Expr is an expression: *NumberExpr, *NameExpr, *SubscriptExpr, *CallExpr,
// *UnaryExpr, *BinaryExpr, *ParenExpr, *ConvertExpr, *CodeExpr or *Hole.
type Expr interface {
	Tree
	value()
	asked()
	expr()
}

// NumberExpr is a number with its unit, one operand.
type NumberExpr struct {
	Span   Span
	Number Word      // the digits as written: "4.7e-9", ".5"
	Unit   *UnitExpr // nil for a plain number
}

// UnitExpr is a unit: factors from left to right.
type UnitExpr struct {
	Span       Span
	Reciprocal bool // begins with "1/"
	Factors    []UnitFactor
}

// UnitFactor is one symbol of a unit with its power.
type UnitFactor struct {
	Span   Span   // symbol and power
	Symbol Word   // prefix and symbol as written: "kΩ", "ms", "kohm"
	Divide bool   // a "/" stands before it (the factor after "1/" too)
	Power  int    // as written after ^, 1 without; not negated by Divide
	Caret  Span   // zero when no power is written
	Known  bool   // false: the parser has reported unit-unknown
	Prefix string // canonical SI prefix, "µ" for u
	Base   string // canonical symbol, "Ω" for ohm; "" when not Known
}

// Extent implements Tree.
func (u *UnitExpr) Extent() Span { return u.Span }

// NameExpr is a name, or an inner name with dots: a let, part, function,
// parameter, pi, s, t. In subscripts it is a node, part, port or terminal.
type NameExpr struct {
	Span  Span
	Words []Word  // one or more; a node inside a subnetwork may begin with a digit
	first [1]Word // room for Words with one word
}

// Text is the name with its dots and no spaces.
func (n *NameExpr) Text() string {
	if len(n.Words) == 1 {
		return n.Words[0].Text
	}
	parts := make([]string, len(n.Words))
	for i, w := range n.Words {
		parts[i] = w.Text
	}
	return strings.Join(parts, ".")
}

// SubscriptExpr is a letter with one or two subscripts: v[a], z[a,b],
// thevenin[p].
type SubscriptExpr struct {
	Span       Span
	Letter     Word // v i z y p thevenin norton
	Open       Span
	Subscripts []*NameExpr // one or two, words empty where missing
	Comma      Span        // zero with one subscript
	Close      Span
}

// CallExpr is X(ARGS): a function of the notation, a measure, a named
// function at a frequency, or a signal at a time.
type CallExpr struct {
	Span   Span
	Callee Expr // *NameExpr or *SubscriptExpr
	Open   Span
	Args   []Expr
	Commas []Span
	Close  Span
}

// UnaryExpr is a sign before an operand.
type UnaryExpr struct {
	Span Span
	Op   byte // '-' or '+'
	Mark Span
	X    Expr
}

// BinaryExpr is X Op Y.
type BinaryExpr struct {
	Span Span
	Op   byte // + - * / ^
	Mark Span
	X, Y Expr
}

// ParenExpr is a bracketed expression.
type ParenExpr struct {
	Span        Span
	Open, Close Span
	X           Expr
}

// ConvertExpr is X in Hz, or X in rad/s.
type ConvertExpr struct {
	Span Span
	X    Expr
	In   Word
	Unit *UnitExpr // Hz or rad/s, factors empty when it is missing
}

// CodeExpr is a code of IEC 60062 where none may stand; reported already.
type CodeExpr struct{ CodeValue }

// Extent implements Tree.
func (e *NumberExpr) Extent() Span { return e.Span }

// Extent implements Tree.
func (n *NameExpr) Extent() Span { return n.Span }

// Extent implements Tree.
func (e *SubscriptExpr) Extent() Span { return e.Span }

// Extent implements Tree.
func (e *CallExpr) Extent() Span { return e.Span }

// Extent implements Tree.
func (e *UnaryExpr) Extent() Span { return e.Span }

// Extent implements Tree.
func (e *BinaryExpr) Extent() Span { return e.Span }

// Extent implements Tree.
func (e *ParenExpr) Extent() Span { return e.Span }

// Extent implements Tree.
func (e *ConvertExpr) Extent() Span { return e.Span }

func (*NumberExpr) expr()    {}
func (*NameExpr) expr()      {}
func (*SubscriptExpr) expr() {}
func (*CallExpr) expr()      {}
func (*UnaryExpr) expr()     {}
func (*BinaryExpr) expr()    {}
func (*ParenExpr) expr()     {}
func (*ConvertExpr) expr()   {}
func (*CodeExpr) expr()      {}
func (*Hole) expr()          {}

func (*NumberExpr) value()    {}
func (*NameExpr) value()      {}
func (*SubscriptExpr) value() {}
func (*CallExpr) value()      {}
func (*UnaryExpr) value()     {}
func (*BinaryExpr) value()    {}
func (*ParenExpr) value()     {}
func (*ConvertExpr) value()   {}

func (*NumberExpr) asked()    {}
func (*NameExpr) asked()      {}
func (*SubscriptExpr) asked() {}
func (*CallExpr) asked()      {}
func (*UnaryExpr) asked()     {}
func (*BinaryExpr) asked()    {}
func (*ParenExpr) asked()     {}
func (*ConvertExpr) asked()   {}
func (*CodeExpr) asked()      {}
