package dialect

import "sort"

// Extent implements Tree.
func (f *UnitFactor) Extent() Span { return f.Span }

// Extent implements Tree: the whole text.
func (f *File) Extent() Span { return Span{0, len(f.Text)} }

// Contains says that an offset lies in the span or at its end.
func (s Span) Contains(offset int) bool { return s.Start <= offset && offset <= s.End }

// Walk calls visit for a node and then for all below it, in order of the
// text. Below a node for which visit says false it does not go. Missing words
// are not visited, holes are.
func Walk(t Tree, visit func(Tree) bool) {
	if visit(t) {
		EachChild(t, func(c Tree) { Walk(c, visit) })
	}
}

// PathTo gives the nodes around an offset, from the statement to the
// smallest, which is a Word or another leaf where one touches the offset. Of
// two neighbours that meet there it follows the one that begins at the offset,
// unless that is no word and the other is. It is empty between statements.
func PathTo(f *File, offset int) []Tree {
	s := statementAt(f.Statements, offset)
	if s == nil {
		return nil
	}
	path := []Tree{s}
	for {
		child := childAt(path[len(path)-1], offset)
		if child == nil {
			return path
		}
		path = append(path, child)
	}
}

// statementAt finds the statement that an offset lies in or touches.
func statementAt(list []Statement, offset int) Statement {
	i := sort.Search(len(list), func(i int) bool { return list[i].Extent().Start > offset }) - 1
	if i < 0 || !list[i].Extent().Contains(offset) {
		return nil
	}
	return list[i]
}

// childAt picks the child of a node that an offset belongs to, nil if none.
func childAt(t Tree, offset int) Tree {
	if s, ok := t.(*SubnetworkStatement); ok && s.BodyStart <= offset && offset <= s.BodyStop {
		if inner := statementAt(s.Statements, offset); inner != nil {
			return inner
		}
	}
	var best Tree
	EachChild(t, func(c Tree) {
		span := c.Extent()
		if !span.Contains(offset) {
			return
		}
		if best == nil || offset < span.End && !(endsInWord(best) && !startsWithWord(c)) {
			best = c
		}
	})
	return best
}

// endsInWord says that a node's last character belongs to a name or number.
func endsInWord(t Tree) bool {
	switch t := t.(type) {
	case Word, *NameExpr, *NumberExpr, *UnitFactor, *NameBox:
		return true
	case *UnaryExpr:
		return endsInWord(t.X)
	case *BinaryExpr:
		return endsInWord(t.Y)
	}
	return false
}

// startsWithWord says that a node's first character belongs to a name or
// number.
func startsWithWord(t Tree) bool {
	switch t := t.(type) {
	case *ParenExpr, *UnaryExpr, StringLiteral, *ToleranceClause, *Group, *Chain, *Hole:
		return false
	case *BinaryExpr:
		return startsWithWord(t.X)
	}
	return true
}

// EachChild calls visit for the children of a node in order of the text.
func EachChild(t Tree, visit func(Tree)) {
	words := func(list ...Word) {
		for _, w := range list {
			if w.Present() {
				visit(w)
			}
		}
	}
	switch t := t.(type) {
	case *File:
		visitAll(t.Statements, visit)
	case Statement:
		statementChildren(t, visit, words)
	case *Chain:
		visitAll(t.Groups, visit)
	case *Group:
		visitAll(t.Boxes, visit)
	case *NameBox:
		words(t.Name)
	case *Parameter:
		words(t.Name)
		visit(t.Value)
	case *TerminalClause:
		words(t.Terminal, t.At, t.Node)
	case *IdealValue:
		words(t.Word)
	case *EventsValue:
		visitAll(t.Events, visit)
	case *EventClause:
		words(t.Action, t.At)
		visit(t.Time)
	case *RatioValue:
		visitAll(t.Terms, visit)
	case *ToleranceClause:
		for _, b := range t.Bound {
			visit(b.Value)
		}
	case *PartOption:
		words(t.Keyword, t.At)
		visitExpr(t.Value, visit)
		words(t.Nodes...)
	case *InitialQuestion:
		words(t.Word)
	case *RootsQuestion:
		words(t.Word, t.Of)
		visitExpr(t.X, visit)
	case *MatrixQuestion:
		words(t.Word, t.Set, t.First, t.Second, t.ReferenceWord)
		visitExpr(t.Reference, visit)
	case *Qualifier:
		words(t.Keyword)
		visitExpr(t.Value, visit)
		words(t.ToWord)
		visitExpr(t.To, visit)
		visitAll(t.Names, visit)
		words(t.State)
	case Expr:
		exprChildren(t, visit, words)
	case *UnitExpr:
		for i := range t.Factors {
			visit(&t.Factors[i])
		}
	}
}

// visitAll visits the nodes of a list.
func visitAll[T Tree](list []T, visit func(Tree)) {
	for _, x := range list {
		visit(x)
	}
}

// visitExpr visits an expression that may be absent.
func visitExpr(x Expr, visit func(Tree)) {
	if x != nil {
		visit(x)
	}
}

// statementChildren visits the children of a statement.
func statementChildren(s Statement, visit func(Tree), words func(...Word)) {
	words(s.Headline().Keyword)
	switch s := s.(type) {
	case *GroundStatement:
		words(s.Node)
	case *LetStatement:
		words(s.Name)
		visit(s.Value)
	case *FunctionStatement:
		words(s.Name)
		visit(s.Value)
	case *PartStatement:
		words(s.Name)
		if s.Value != nil {
			visit(s.Value)
		}
		if s.Tolerance != nil {
			visit(s.Tolerance)
		}
		visitAll(s.Options, visit)
	case *PathStatement:
		for i, n := range s.Nodes {
			words(n)
			if i < len(s.Chains) {
				visit(s.Chains[i])
			}
		}
	case *PortStatement:
		words(s.Name, s.At, s.Plus, s.Minus)
	case *TellStatement:
		visit(s.What)
		visitAll(s.Qualifiers, visit)
	case *RequireStatement:
		visit(s.Left)
		words(s.Relation)
		visitExpr(s.Right, visit)
		visitAll(s.Qualifiers, visit)
		words(s.Nominal)
	case *StartStatement:
		words(s.State)
	case *PreferStatement:
		words(s.KindName, s.Series)
	case *AllowStatement:
		words(s.Code, s.Because)
		visit(s.Reason)
	case *UseFileStatement:
		visit(s.Path)
	case *SubnetworkStatement:
		words(s.Name)
		words(s.Terminals...)
		words(s.With)
		visitAll(s.Parameters, visit)
		visitAll(s.Statements, visit)
	case *UsePartStatement:
		words(s.Name, s.Subnetwork, s.With)
		visitAll(s.Arguments, visit)
		visitAll(s.Terminals, visit)
	}
}

// exprChildren visits the children of an expression.
func exprChildren(x Expr, visit func(Tree), words func(...Word)) {
	switch x := x.(type) {
	case *NumberExpr:
		words(x.Number)
		if x.Unit != nil {
			visit(x.Unit)
		}
	case *NameExpr:
		words(x.Words...)
	case *SubscriptExpr:
		words(x.Letter)
		visitAll(x.Subscripts, visit)
	case *CallExpr:
		visit(x.Callee)
		visitAll(x.Args, visit)
	case *UnaryExpr:
		visit(x.X)
	case *BinaryExpr:
		visit(x.X)
		visit(x.Y)
	case *ParenExpr:
		visit(x.X)
	case *ConvertExpr:
		visit(x.X)
		words(x.In)
		visit(x.Unit)
	}
}
