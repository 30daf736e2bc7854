package dialect

// responseProduct keeps network functions to their form: a response times
// functions, over one excitation. It may replace the excitation by the
// source's own quantity.
func (e *evaluator) responseProduct(x *BinaryExpr, a, b *operand) bool {
	if x.Op == '*' {
		if a.degree != 0 && b.degree != 0 {
			e.report(x.Span, "function-form", "%s multiplies two responses: a network function is a response over an excitation", e.written(x.Span))
			return false
		}
		return true
	}
	if b.degree == 0 {
		return true
	}
	if a.degree == 0 {
		e.report(x.Span, "function-form", "%s divides by an excitation, but there is no response above it: write RESPONSE/EXCITATION, such as v[out]/Vs",
			e.written(x.Span))
		return false
	}
	replaced, ok := e.excitation(x.Y, b.x)
	b.x = replaced
	return ok
}

// excitation finds the one source or port that an expression stands for, with
// a constant factor at most.
func (e *evaluator) excitation(at Expr, x Expression) (Expression, bool) {
	switch x := x.(type) {
	case *Negate:
		inner, ok := e.excitation(at, x.X)
		return &Negate{Typed: x.Typed, X: inner}, ok
	case *Binary:
		_, left := x.X.(*Constant)
		_, right := x.Y.(*Constant)
		copied := *x
		var ok bool
		switch {
		case left && x.Op == '*':
			copied.Y, ok = e.excitation(at, x.Y)
			return &copied, ok
		case right && (x.Op == '*' || x.Op == '/'):
			copied.X, ok = e.excitation(at, x.X)
			return &copied, ok
		}
	case *Quantity:
		return e.drive(at, x)
	}
	e.notAnExcitation(at, "it is more than one quantity")
	return x, false
}

func (e *evaluator) notAnExcitation(at Expr, why string) {
	r := e.report(at.Extent(), "not-an-excitation",
		"%s is no excitation: %s; a function is driven by an independent source, by a port, or by a node pair across which one voltage source stands",
		e.written(at.Extent()), why)
	for _, sym := range e.inst.scope.parts {
		if slot := e.inst.slots[sym.index]; (sym.Kind == VoltageSource || sym.Kind == CurrentSource) && slot >= 0 && !e.b.dependent[slot] {
			r.repair(e.text(), at.Extent(), sym.Name, "divide by "+sym.Name)
		}
	}
	r.choose()
}

// drive checks one quantity as an excitation.
func (e *evaluator) drive(at Expr, q *Quantity) (Expression, bool) {
	p := q.Probe
	switch p.Of {
	case OfPort:
		if p.Letter == 'v' || p.Letter == 'i' {
			return q, true
		}
	case OfPart:
		return q, e.driveOfPart(at, p)
	case OfNodes:
		if p.Letter == 'v' {
			return e.driveOfNodes(at, q)
		}
	}
	e.notAnExcitation(at, "it is neither a source nor a port")
	return q, false
}

func (e *evaluator) driveOfPart(at Expr, p Probe) bool {
	if p.Part < 0 {
		return false
	}
	part := &e.b.d.Parts[p.Part]
	switch {
	case part.Kind != VoltageSource && part.Kind != CurrentSource:
		e.notAnExcitation(at, part.Name+" is "+article(part.Kind.String()))
	case e.b.dependent[p.Part]:
		e.notAnExcitation(at, part.Name+" is a dependent source")
	case part.Kind == VoltageSource && p.Letter != 'v':
		e.notAnExcitation(at, "the network decides the current of a voltage source")
	case part.Kind == CurrentSource && p.Letter != 'i':
		e.notAnExcitation(at, "the network decides the voltage of a current source")
	default:
		return true
	}
	return false
}

// driveOfNodes finds the voltage source or the port that a node pair means.
func (e *evaluator) driveOfNodes(at Expr, q *Quantity) (Expression, bool) {
	plus, minus := q.Probe.Plus, q.Probe.Minus
	found := -1
	for _, i := range e.b.sourcesAcross(plus, minus) {
		if e.b.d.Parts[i].Kind != VoltageSource {
			continue
		}
		if found >= 0 {
			e.notAnExcitation(at, "two voltage sources stand across it")
			return q, false
		}
		found = i
	}
	own := *q
	if found >= 0 {
		own.Probe = Probe{Letter: 'v', Of: OfPart, Part: found, Plus: -1, Minus: -1, Port: -1}
		if e.b.d.Parts[found].From == plus {
			return &own, true
		}
		return &Negate{Typed: own.Typed, X: &own}, true
	}
	for i := range e.b.d.Ports {
		p := &e.b.d.Ports[i]
		if p.Plus != plus && p.Plus != minus || p.Minus != plus && p.Minus != minus || p.Plus == p.Minus {
			continue
		}
		own.Probe = Probe{Letter: 'v', Of: OfPort, Port: i, Plus: -1, Minus: -1, Part: -1}
		if p.Plus == plus {
			return &own, true
		}
		return &Negate{Typed: own.Typed, X: &own}, true
	}
	e.notAnExcitation(at, "no voltage source stands across it")
	return q, false
}
