package dialect

import "strconv"

// expr prints an expression after a separator. Sums are spaced. Products and
// quotients are tight, except where an operand before the last ends in a
// unit, which a touching * or / would continue: then the whole term is spaced.
func (p *printer) expr(sep string, x Expr) {
	switch x := x.(type) {
	case *NumberExpr:
		p.number(sep, x)
	case *NameExpr:
		p.put(sep, x.Span, p.file.Text[x.Span.Start:x.Span.End])
	case *SubscriptExpr:
		p.word(sep, x.Letter)
		p.put("", x.Open, "[")
		for i, n := range x.Subscripts {
			if i > 0 {
				p.put("", x.Comma, ",")
			}
			p.expr("", n)
		}
		p.put("", x.Close, "]")
	case *CallExpr:
		p.call(sep, x)
	case *UnaryExpr:
		p.put(sep, x.Mark, string(x.Op))
		p.expr("", x.X)
	case *BinaryExpr:
		p.binary(sep, x)
	case *ParenExpr:
		p.put(sep, x.Open, "(")
		p.expr("", x.X)
		p.put("", x.Close, ")")
	case *ConvertExpr:
		p.expr(sep, x.X)
		p.word(" ", x.In)
		p.put(" ", x.Unit.Span, unitText(x.Unit))
	case *CodeExpr:
		p.put(sep, x.Span, x.Text)
	}
}

// call prints a call.
func (p *printer) call(sep string, x *CallExpr) {
	p.expr(sep, x.Callee)
	p.put("", x.Open, "(")
	for i, a := range x.Args {
		first := ""
		if i > 0 {
			p.put("", x.Commas[i-1], ",")
			first = " "
		}
		p.expr(first, a)
	}
	p.put("", x.Close, ")")
}

// number prints a number as it is spelled, and its unit in canonical symbols.
func (p *printer) number(sep string, x *NumberExpr) {
	p.put(sep, x.Number.Span, p.file.Text[x.Number.Span.Start:x.Number.Span.End])
	if x.Unit == nil {
		return
	}
	first := &x.Unit.Factors[0]
	gap := " "
	switch {
	case !first.Known:
		gap = p.file.Text[x.Number.Span.End:x.Unit.Span.Start]
	case first.Base == "°" && !x.Unit.Reciprocal:
		gap = ""
	}
	p.put(gap, x.Unit.Span, unitText(x.Unit))
}

// unitText spells a unit in canonical symbols.
func unitText(u *UnitExpr) string {
	var b []byte
	if u.Reciprocal {
		b = append(b, '1')
	}
	for i, f := range u.Factors {
		switch {
		case f.Divide:
			b = append(b, '/')
		case i > 0:
			b = append(b, '*')
		}
		if f.Known {
			b = append(b, f.Prefix...)
			b = append(b, f.Base...)
		} else {
			b = append(b, f.Symbol.Text...)
		}
		if f.Caret.End > f.Caret.Start {
			b = append(b, '^')
			b = strconv.AppendInt(b, int64(f.Power), 10)
		}
	}
	return string(b)
}

// binary prints an operation.
func (p *printer) binary(sep string, x *BinaryExpr) {
	switch x.Op {
	case '+', '-':
		p.expr(sep, x.X)
		p.put(" ", x.Mark, string(x.Op))
		p.expr(" ", x.Y)
	case '^':
		gap := ""
		if endsInUnit(x.X) {
			gap = " "
		}
		p.expr(sep, x.X)
		p.put(gap, x.Mark, "^")
		p.expr(gap, x.Y)
	default:
		gap := ""
		if termHoldsUnit(x) {
			gap = " "
		}
		p.term(sep, gap, x)
	}
}

// term prints a chain of * and / with one gap around all of them.
func (p *printer) term(sep, gap string, x Expr) {
	b, ok := x.(*BinaryExpr)
	if !ok || b.Op != '*' && b.Op != '/' {
		p.expr(sep, x)
		return
	}
	p.term(sep, gap, b.X)
	p.put(gap, b.Mark, string(b.Op))
	p.expr(gap, b.Y)
}

// termHoldsUnit says that an operand before the last of a chain of * and /
// ends in a unit.
func termHoldsUnit(x *BinaryExpr) bool {
	for {
		left, ok := x.X.(*BinaryExpr)
		if !ok || left.Op != '*' && left.Op != '/' {
			return endsInUnit(x.X)
		}
		if endsInUnit(left.Y) {
			return true
		}
		x = left
	}
}

// endsInUnit says that an operand's last character belongs to a unit.
func endsInUnit(x Expr) bool {
	switch x := x.(type) {
	case *NumberExpr:
		return x.Unit != nil
	case *UnaryExpr:
		return endsInUnit(x.X)
	case *BinaryExpr:
		return endsInUnit(x.Y)
	}
	return false
}
