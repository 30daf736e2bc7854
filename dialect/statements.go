package dialect

// statements reads everything that is neither a part nor wiring.
func (b *builder) statements(inst *instance) {
	harmless := b.c.harmless
	b.c.harmless = true
	defer func() { b.c.harmless = harmless }()
	b.constants(inst)
	b.functions(inst)
	for _, st := range inst.scope.statements {
		if st.Headline().Misplaced {
			continue
		}
		switch st := st.(type) {
		case *TellStatement:
			b.tell(inst, st)
		case *RequireStatement:
			b.require(inst, st)
		case *StartStatement:
			b.start(inst, st)
		case *AllowStatement:
			b.allow(inst, st)
		}
	}
}

// constants works out every let, used or not.
func (b *builder) constants(inst *instance) {
	for _, sym := range inst.scope.symbols {
		switch sym.Sort {
		case LetSymbol:
			o := b.constant(inst, sym, inLet, sym.Span, nil)
			let := Let{Name: inst.prefix + sym.Name, NameSpan: sym.Span, Origin: inst.origin(sym.Statement.Headline().Span)}
			if o.ok {
				let.Value = o.finish()
			}
			inst.slots[sym.index] = len(b.d.Lets)
			b.d.Lets = append(b.d.Lets, let)
		case ParameterSymbol:
			b.constant(inst, sym, inLet, sym.Span, nil)
		}
	}
}

// functions works out every function.
func (b *builder) functions(inst *instance) {
	for _, sym := range inst.scope.symbols {
		if sym.Sort == FunctionSymbol {
			b.function(inst, sym, sym.Span, nil)
		}
	}
}

func (b *builder) tell(inst *instance, st *TellStatement) {
	m := b.c.blame
	m.culprit = nil
	var q *Question
	ok := false
	if !st.Broken {
		q, ok = b.ask(&evaluator{b: b, inst: inst, in: inSignal, what: "a question"}, st)
	}
	if !ok {
		q = &Question{Ports: [2]int{-1, -1}, Why: m.why(b.errorIn(inst, st))}
	}
	file := inst.scope.unit.file
	q.Text = trimQuestion(file.Text[st.Keyword.Span.End:st.Span.End])
	q.Origin = inst.origin(st.Span)
	b.d.Questions = append(b.d.Questions, *q)
}

func (b *builder) start(inst *instance, st *StartStatement) {
	if b.started != nil {
		f := b.report(inst, st.Span, "given-twice", "how the network starts is given already")
		f.relate(inst.scope.unit.file, b.started.Span, "here")
		f.remove(inst.scope.unit.file, st.Span, "remove this line")
		return
	}
	b.started = st
	b.d.Steady = st.State.Text == "steady"
}

func (b *builder) allow(inst *instance, st *AllowStatement) {
	if !st.Code.Present() {
		return
	}
	code := Code(st.Code.Text)
	e, known := explanations()[code]
	if !known {
		f := b.report(inst, st.Code.Span, "unknown-code", "there is no finding %s", st.Code.Text)
		if f.f == nil {
			return
		}
		var codes []string
		for _, e := range explanationList {
			codes = append(codes, string(e.Code))
		}
		if best, ok := Nearest(st.Code.Text, codes); ok {
			f.f.Message += "; did you mean " + best + "?"
			f.repair(inst.scope.unit.file, st.Code.Span, best, "write "+best)
		}
		return
	}
	if e.Severity == Error {
		b.report(inst, st.Code.Span, "allow-error", "%s is an error: there is no answer that could be accepted", code)
		return
	}
	b.allowed[code] = inst.origin(st.Span)
}

// require reads a limit or a fact. One that cannot be worked out is kept and
// says why.
func (b *builder) require(inst *instance, st *RequireStatement) {
	limit := Limit{Relation: st.Relation.Text, Nominal: st.Nominal.Present(), Origin: inst.origin(st.Span)}
	file := inst.scope.unit.file
	limit.Text = trimQuestion(file.Text[st.Keyword.Span.End:st.Span.End])
	m := b.c.blame
	m.culprit = nil
	if st.Broken || !b.limit(inst, st, &limit) {
		limit.Left, limit.Right, limit.Qualifiers, limit.Why = nil, nil, Qualifiers{}, m.why(b.errorIn(inst, st))
	}
	b.d.Limits = append(b.d.Limits, limit)
}

// limit works out both sides of a limit and its qualifiers.
func (b *builder) limit(inst *instance, st *RequireStatement, limit *Limit) bool {
	e := &evaluator{b: b, inst: inst, in: inSignal, what: "a limit"}
	left := e.eval(st.Left, 0)
	if st.Right == nil {
		if left.ok && left.shape != ShapeFact {
			e.report(st.Left.Extent(), "wrong-sort", "%s is neither true nor false: compare it with a limit, such as <= %s",
				e.written(st.Left.Extent()), e.exampleOf(&left))
			return false
		}
		if !left.ok {
			return false
		}
		limit.Left = left.finish()
		return b.finishLimit(e, st, limit, &left)
	}
	right := e.eval(st.Right, 0)
	if !left.ok || !right.ok || !e.compared(st, &left, &right) {
		return false
	}
	limit.Left, limit.Right = left.finish(), right.finish()
	whole := joined(&left, &right, Span{st.Left.Extent().Start, st.Right.Extent().End})
	return b.finishLimit(e, st, limit, &whole)
}

func (b *builder) finishLimit(e *evaluator, st *RequireStatement, limit *Limit, whole *operand) bool {
	var ok bool
	limit.Qualifiers, ok = b.qualifiers(e, st.Qualifiers, whole, AskExpression, limit.Left, limit.Right)
	return ok
}

// exampleOf is a value of an operand's unit, for messages.
func (e *evaluator) exampleOf(o *operand) string {
	unit := o.sorted().Unit()
	switch unit {
	case "":
		return "2"
	case "rad/s":
		return "1 kHz"
	case "rad":
		return "45°"
	}
	return "1 " + unit
}

// compared reports two sides of a limit that cannot be compared.
func (e *evaluator) compared(st *RequireStatement, left, right *operand) bool {
	if !e.isValue(left, st.Left.Extent()) || !e.isValue(right, st.Right.Extent()) {
		return false
	}
	x := &BinaryExpr{Span: Span{st.Left.Extent().Start, st.Right.Extent().End}, X: st.Left, Y: st.Right}
	if !e.sameWorld(x, left, right) {
		return false
	}
	for i, o := range [...]*operand{left, right} {
		if o.isComplex() {
			at := pick(i == 0, st.Left, st.Right).Extent()
			r := e.report(at, "not-real", "%s is complex and has no order: its magnitude is abs(%s) or gain(%s)", e.written(at), e.written(at), e.written(at))
			r.repair(e.text(), at, "gain("+e.text().Text[at.Start:at.End]+")", "compare the gain")
			return false
		}
	}
	if left.dim.Level != right.dim.Level && !e.meetLevel(st.Left, st.Right, left, right, "compared") {
		return false
	}
	if left.plainNumber() && right.plainNumber() && !left.dim.Level && (left.rad == 1) != (right.rad == 1) {
		for i, o := range [...]*operand{left, right} {
			if o.bare && o.constant {
				at := pick(i == 0, st.Left, st.Right)
				r := e.report(at.Extent(), "unit-missing", "%s has no unit, but is compared with an angle", e.written(at.Extent()))
				e.offerUnits(r, at, DimensionAngle)
				return false
			}
		}
	}
	if !e.alike(st.Left, st.Right, left, right, "compared") {
		return false
	}
	e.warnMagnitude(st.Left, st.Right, left, right)
	e.warnMagnitude(st.Right, st.Left, right, left)
	return true
}

// warnMagnitude warns of a magnitude that is compared with a negative number:
// a level in dB was probably meant.
func (e *evaluator) warnMagnitude(side, limit Expr, magnitude, value *operand) {
	if !value.constant || !value.bare || value.dim != DimensionNumber || !magnitude.plainNumber() || !isMagnitude(magnitude.x) {
		return
	}
	if sign, decided := value.value.Sign(); !decided || sign >= 0 {
		return
	}
	at := limit.Extent()
	r := e.report(at, "level-missing", "%s is a magnitude and never negative: is the level %s dB meant?",
		e.written(side.Extent()), roundedDigits(value.value.Rat(), 6))
	if sign, ok := limit.(*UnaryExpr); ok {
		if _, ok := sign.X.(*NumberExpr); ok {
			r.repair(e.text(), Span{at.End, at.End}, " dB", "write "+e.written(at)+" dB")
		}
	}
}

// isMagnitude says that an expression is the magnitude of a function of s.
func isMagnitude(x Expression) bool {
	switch x := x.(type) {
	case *At:
		return isMagnitude(x.X)
	case *Call:
		if x.Name == "gain" {
			return true
		}
		if x.Name == "abs" && len(x.Args) == 1 {
			_, value := x.Args[0].(*At)
			return value || x.Args[0].Shape() == ShapeFunction
		}
	}
	return false
}
