package dialect

import (
	"fmt"
	"strings"
)

// sexp spells a tree without its places, so that trees can be compared and
// read in a test. Units are in canonical symbols, numbers as written.
func sexp(t any) string {
	switch t := t.(type) {
	case nil:
		return "nil"
	case Expr:
		return exprSexp(t)
	case *CodeValue:
		return "code:" + t.Text
	case *IdealValue:
		return "ideal"
	case *EventsValue:
		var b strings.Builder
		for _, e := range t.Events {
			fmt.Fprintf(&b, "[%s %s]", e.Action.Text, sexp(e.Time))
		}
		return b.String()
	case *RatioValue:
		return joinSexp(" : ", t.Terms)
	case *InitialQuestion:
		return "initial?"
	case *RootsQuestion:
		return t.Word.Text + "?" + optional(" of ", t.X)
	case *MatrixQuestion:
		return fmt.Sprintf("matrix? %s[%s,%s]", t.Set.Text, t.First.Text, t.Second.Text) + optional(" reference ", t.Reference)
	case Statement:
		return statementSexp(t)
	case []Statement:
		lines := make([]string, len(t))
		for i, s := range t {
			lines[i] = sexp(s)
		}
		return strings.Join(lines, "\n")
	}
	return fmt.Sprintf("%T", t)
}

func joinSexp[T any](sep string, list []T) string {
	parts := make([]string, len(list))
	for i, x := range list {
		parts[i] = sexp(x)
	}
	return strings.Join(parts, sep)
}

func optional(before string, x Expr) string {
	if x == nil {
		return ""
	}
	return before + sexp(x)
}

func texts(list []Word) string {
	parts := make([]string, len(list))
	for i, w := range list {
		parts[i] = w.Text
	}
	return strings.Join(parts, " ")
}

func exprSexp(x Expr) string {
	switch x := x.(type) {
	case *NumberExpr:
		s := x.Number.Text
		if x.Unit != nil {
			s += "·" + unitText(x.Unit)
		}
		return s
	case *NameExpr:
		return x.Text()
	case *SubscriptExpr:
		return x.Letter.Text + "[" + joinSexp(",", x.Subscripts) + "]"
	case *CallExpr:
		return "(" + sexp(x.Callee) + " " + joinSexp(" ", x.Args) + ")"
	case *UnaryExpr:
		return "(" + string(x.Op) + " " + sexp(x.X) + ")"
	case *BinaryExpr:
		return "(" + string(x.Op) + " " + sexp(x.X) + " " + sexp(x.Y) + ")"
	case *ParenExpr:
		return "<" + sexp(x.X) + ">"
	case *ConvertExpr:
		return "(in " + sexp(x.X) + " " + unitText(x.Unit) + ")"
	case *CodeExpr:
		return "code!" + x.Text
	}
	return "hole"
}

func statementSexp(s Statement) string {
	h := s.Headline()
	var b strings.Builder
	if h.Broken {
		b.WriteString("BROKEN ")
	}
	if h.Doc != nil {
		fmt.Fprintf(&b, "%q ", h.Doc.Text())
	}
	b.WriteString(h.Keyword.Text)
	switch s := s.(type) {
	case *GroundStatement:
		b.WriteString(" " + s.Node.Text)
	case *LetStatement:
		b.WriteString(" " + s.Name.Text + " " + sexp(s.Value))
	case *FunctionStatement:
		b.WriteString(" " + s.Name.Text + " " + sexp(s.Value))
	case *PartStatement:
		b.WriteString(partSexp(s))
	case *UsePartStatement:
		fmt.Fprintf(&b, " %s %s%s", s.Name.Text, s.Subnetwork.Text, parametersSexp(s.Arguments))
		for _, t := range s.Terminals {
			fmt.Fprintf(&b, " {%s at %s}", t.Terminal.Text, t.Node.Text)
		}
	case *PathStatement:
		b.WriteString("path " + pathSexp(s))
	case *PortStatement:
		fmt.Fprintf(&b, " %s %s %s", s.Name.Text, s.Plus.Text, s.Minus.Text)
	case *TellStatement:
		b.WriteString(" " + sexp(s.What) + qualifiersSexp(s.Qualifiers))
	case *RequireStatement:
		b.WriteString(" " + sexp(s.Left) + " " + s.Relation.Text + optional(" ", s.Right) + qualifiersSexp(s.Qualifiers) + s.Nominal.Text)
	case *StartStatement:
		b.WriteString(" " + s.State.Text)
	case *PreferStatement:
		b.WriteString(" " + s.KindName.Text + " " + s.Series.Text)
	case *AllowStatement:
		fmt.Fprintf(&b, " %s %q", s.Code.Text, s.Reason.Value)
	case *UseFileStatement:
		fmt.Fprintf(&b, " %q", s.Path.Value)
	case *SubnetworkStatement:
		fmt.Fprintf(&b, " %s (%s)%s {\n%s\n}", s.Name.Text, texts(s.Terminals), parametersSexp(s.Parameters), sexp(s.Statements))
	case *BrokenStatement:
		b.WriteString("?")
	}
	return b.String()
}

func partSexp(s *PartStatement) string {
	var b strings.Builder
	b.WriteString(" " + s.Name.Text)
	if s.Value != nil {
		b.WriteString(" " + sexp(s.Value))
	}
	if s.Tolerance != nil {
		for _, t := range s.Tolerance.Bound {
			b.WriteString(" " + t.Signs + sexp(t.Value))
		}
	}
	for _, o := range s.Options {
		fmt.Fprintf(&b, " {%s%s%s}", o.Keyword.Text, optional(" ", o.Value), strings.TrimRight(" "+texts(o.Nodes), " "))
	}
	return b.String()
}

func pathSexp(s *PathStatement) string {
	var b strings.Builder
	for i, n := range s.Nodes {
		b.WriteString(n.Text)
		if i == len(s.Chains) {
			break
		}
		for _, g := range s.Chains[i].Groups {
			b.WriteString(" [")
			for j, x := range g.Boxes {
				if j > 0 {
					b.WriteString(" || ")
				}
				if name, ok := x.(*NameBox); ok {
					b.WriteString(name.Name.Text)
				} else {
					b.WriteString(sexp(x))
				}
			}
			b.WriteString("]")
		}
		b.WriteString(" ")
	}
	return b.String()
}

func parametersSexp(list []*Parameter) string {
	var b strings.Builder
	for _, p := range list {
		fmt.Fprintf(&b, " {%s = %s}", p.Name.Text, sexp(p.Value))
	}
	return b.String()
}

func qualifiersSexp(list []*Qualifier) string {
	var b strings.Builder
	for _, q := range list {
		fmt.Fprintf(&b, " {%s%s%s%s %s}", q.Keyword.Text, optional(" ", q.Value), optional(" to ", q.To), joinSexp(",", q.Names), q.State.Text)
	}
	return b.String()
}
