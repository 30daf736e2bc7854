package dialect

import (
	"portlight/dialect/number"
)

// expressionValue works out the value of a part that is an expression of s, t
// or quantities.
func (b *builder) expressionValue(inst *instance, p *Part, st *PartStatement, in setting, what string) (operand, Expr, *evaluator, bool) {
	e := &evaluator{b: b, inst: inst, in: in, what: what}
	x, ok := st.Value.(Expr)
	if !ok {
		return operand{}, nil, e, false
	}
	b.expect(inst, x.Extent(), kindDimension(p.Kind), what)
	o := e.eval(x, 0)
	if !o.ok || !e.fits(x, &o, kindDimension(p.Kind), what) {
		return operand{}, x, e, false
	}
	return o, x, e, true
}

// rationalValue reads an impedance or admittance.
func (b *builder) rationalValue(inst *instance, p *Part, st *PartStatement, what string) {
	o, x, e, ok := b.expressionValue(inst, p, st, inRational, what)
	if !ok {
		b.c.fault()
		return
	}
	l := lowering{e: e}
	r, ok := l.rational(o.expression())
	if !ok {
		b.c.fault()
		return
	}
	if r.numerator.zero() {
		e.report(x.Extent(), "not-positive", "%s is zero: a wire is an ideal connection", what)
		return
	}
	p.Rational = r.exact()
}

// sourceValue reads a waveform or the law of a dependent source.
func (b *builder) sourceValue(inst *instance, p *Part, st *PartStatement, what string) {
	o, x, e, ok := b.expressionValue(inst, p, st, inSource, what)
	if !ok {
		b.c.fault()
		return
	}
	if o.has&hasQuantity == 0 {
		if o.has&hasS != 0 {
			e.report(x.Extent(), "waveform", "%s depends on s: a source is a function of t, or follows quantities v[…] and i[…]", what)
			return
		}
		w := shaping{e: e}
		if p.Waveform, ok = w.waveform(o.expression()); !ok {
			b.c.fault()
		}
		return
	}
	l := lowering{e: e}
	if p.Dependent, ok = l.controls(o.expression()); !ok {
		b.c.fault()
	}
}

// opAmpValue reads the gain-bandwidth product and the nodes of an op amp.
func (b *builder) opAmpValue(inst *instance, p *Part, st *PartStatement) {
	const what = "the gain-bandwidth product of an op amp"
	switch v := st.Value.(type) {
	case Expr:
		if o, e, ok := b.constantValue(inst, v, DimensionFrequency, what); ok && e.positive(v, &o, what) {
			value := o.radians()
			p.GainBandwidth = &value
		}
	case *IdealValue:
	default:
		b.c.fault()
	}
	var missing []string
	seen := map[string]Span{}
	for _, o := range st.Options {
		if o.connects() {
			if first, twice := seen[o.Keyword.Text]; twice {
				b.report(inst, o.Span, "wired-twice", "%s of %s is connected already", o.Keyword.Text, p.Name).
					relate(inst.scope.unit.file, first, "here")
			}
			seen[o.Keyword.Text] = o.Span
		}
	}
	for _, word := range [...]string{"+", "-", "output"} {
		if _, ok := seen[word]; !ok {
			missing = append(missing, word+" at NODE")
		}
	}
	b.missingOptions(inst, st, missing)
	if b.d.Ground < 0 && !b.trial {
		r := b.report(inst, p.NameSpan, "no-ground", "the output of op amp %s returns to the reference node, but the file names none", p.Name)
		(&evaluator{b: b, inst: inst}).offerGround(r)
	}
}

// missingOptions reports options that a part cannot do without.
func (b *builder) missingOptions(inst *instance, st *PartStatement, missing []string) {
	if len(missing) == 0 {
		return
	}
	if st.Broken {
		b.c.fault()
		return
	}
	text := ""
	for _, m := range missing {
		text += ", " + m
	}
	r := b.report(inst, st.Name.Span, "option-missing", "%s %s needs %s", st.Kind, st.Name.Text, text[2:])
	r.repair(inst.scope.unit.file, Span{st.Span.End, st.Span.End}, text, "add "+text[2:])
}

// dcGain reads the gain of an op amp at DC, a level or a ratio.
func (b *builder) dcGain(inst *instance, p *Part, st *PartStatement, o *PartOption) {
	if p.Kind != OpAmp {
		return
	}
	const what = "the DC gain of an op amp"
	e := &evaluator{b: b, inst: inst, in: inConstant, what: what}
	if o.Value == nil {
		return
	}
	b.expect(inst, o.Value.Extent(), DimensionNumber, what)
	v := e.eval(o.Value, 0)
	if !v.ok || !e.ratio(o.Value, &v) || !e.fits(o.Value, &v, DimensionNumber, what) ||
		!e.mustBeConstant(o.Value, &v) || !e.positive(o.Value, &v, what) {
		b.c.fault()
		return
	}
	if _, ideal := st.Value.(*IdealValue); ideal {
		r := b.report(inst, o.Span, "option-conflict", "an ideal op amp has no finite gain: give a gain-bandwidth product instead of ideal")
		r.repair(inst.scope.unit.file, Span{o.Comma.Start, o.Span.End}, "", "leave the gain out")
		return
	}
	p.DCGain = &v.value
}

// transformerValue reads the turns and checks the windings.
func (b *builder) transformerValue(inst *instance, p *Part, st *PartStatement) {
	v, ok := st.Value.(*RatioValue)
	if !ok {
		if st.Value != nil {
			if _, hole := st.Value.(*Hole); !hole {
				b.report(inst, st.Value.Extent(), "transformer-ratio", "a transformer's value is the ratio of its turns, such as 10 : 1")
			}
		}
		b.c.fault()
		return
	}
	var turns []number.Exact
	for _, t := range v.Terms {
		const what = "a number of turns"
		o, e, ok := b.constantValue(inst, t, DimensionNumber, what)
		if !ok || !e.positive(t, &o, what) {
			return
		}
		turns = append(turns, o.value)
	}
	// Windings in the order primary, secondary, secondary2, …
	var sorted []Winding
	primaries := 0
	for _, w := range p.Windings {
		if w.Name == "primary" {
			primaries++
			sorted = append([]Winding{w}, sorted...)
		} else {
			sorted = append(sorted, w)
		}
	}
	p.Windings = sorted
	var missing []string
	if primaries == 0 {
		missing = append(missing, "primary at NODE NODE")
	}
	for range max(0, len(turns)-1-(len(p.Windings)-primaries)) {
		missing = append(missing, "secondary at NODE NODE")
	}
	b.missingOptions(inst, st, missing)
	if len(missing) == 0 && (primaries > 1 || len(p.Windings) != len(turns)) {
		b.report(inst, v.Span, "transformer-ratio", "%s has %s but %s: each winding has one number of turns",
			p.Name, counted(len(p.Windings), "winding", "windings"), counted(len(turns), "number of turns", "numbers of turns"))
		return
	}
	for i := range p.Windings {
		if i < len(turns) {
			p.Windings[i].Turns = turns[i]
		}
	}
}

// couplingValue reads a coupling's coefficient or mutual inductance.
func (b *builder) couplingValue(inst *instance, p *Part, st *PartStatement) {
	x, ok := st.Value.(Expr)
	if !ok {
		b.c.fault()
		return
	}
	what := "the value of coupling " + p.Name
	e := &evaluator{b: b, inst: inst, in: inConstant, what: what}
	o := e.eval(x, 0)
	if !o.ok || !e.isValue(&o, x.Extent()) || !e.mustBeConstant(x, &o) {
		b.c.fault()
		return
	}
	switch {
	case o.plainNumber() && o.rad == 0:
	case o.dim == DimensionInductance:
		p.Mutual = true
	default:
		e.report(x.Extent(), "unit-mismatch", "%s is %s, where %s must be a plain number (coefficient k) or an inductance (mutual inductance, H)",
			e.written(x.Extent()), e.describe(&o), what)
		return
	}
	p.Value = o.value
	for _, option := range st.Options {
		if option.Keyword.Text != "between" {
			continue
		}
		for i, n := range option.Nodes {
			if sym := inst.scope.names[n.Text]; i < 2 && sym != nil && sym.Sort == PartSymbol && sym.Kind == Inductor {
				p.Coils[i] = inst.slots[sym.index]
			}
		}
		p.Wired = inst.origin(option.Span)
		if p.Coils[0] >= 0 && p.Coils[0] == p.Coils[1] {
			b.report(inst, option.Span, "coupling-range", "%s couples %s with itself: name two inductors", p.Name, option.Nodes[0].Text)
			p.Coils = [2]int{-1, -1}
		}
		if p.Coils[0] < 0 || p.Coils[1] < 0 {
			b.c.fault()
		}
		return
	}
	b.missingOptions(inst, st, []string{"between INDUCTOR INDUCTOR"})
}

// couplings checks the range of every coupling once the inductors are known.
func (b *builder) couplings() {
	pairs := map[[2]int]int{}
	for i := range b.d.Parts {
		p := &b.d.Parts[i]
		if p.Kind != Coupling || p.Coils[0] < 0 || p.Coils[1] < 0 {
			continue
		}
		st := b.d.Parts[i].Origin
		pair := [2]int{min(p.Coils[0], p.Coils[1]), max(p.Coils[0], p.Coils[1])}
		if first, twice := pairs[pair]; twice {
			other := &b.d.Parts[first]
			b.c.reportAt(Origin{File: st.File, Span: p.NameSpan, Use: st.Use}, "wired-twice", "%s and %s are coupled by %s already",
				b.d.Parts[pair[0]].Name, b.d.Parts[pair[1]].Name, other.Name).
				relate(other.Origin.File, other.NameSpan, "the coupling %s", other.Name)
			continue
		}
		pairs[pair] = i
		b.couplingRange(p)
	}
}

// couplingRange reports |k| > 1, or M² > L1·L2.
func (b *builder) couplingRange(p *Part) {
	la, lb := &b.d.Parts[p.Coils[0]], &b.d.Parts[p.Coils[1]]
	if s, _ := la.Value.Sign(); s == 0 {
		return
	}
	if s, _ := lb.Value.Sign(); s == 0 {
		return
	}
	limit := number.FromInt(1)
	if p.Mutual {
		limit = la.Value.Mul(lb.Value)
	}
	origin := Origin{File: p.Origin.File, Span: p.NameSpan, Use: p.Origin.Use}
	if order, decided := p.Value.Mul(p.Value).Cmp(limit); !decided || order <= 0 {
		return
	}
	if !p.Mutual {
		b.c.reportAt(origin, "coupling-range", "the coefficient of coupling %s between %s and %s is %s: it lies between -1 and 1",
			p.Name, la.Name, lb.Name, FormatQuantity(p.Value, DimensionNumber))
		return
	}
	most := "√(" + la.Name + "·" + lb.Name + ")"
	if root, err := number.Sqrt(limit); err == nil {
		most += " = " + FormatQuantity(root, DimensionInductance)
	}
	b.c.reportAt(origin, "coupling-range", "the mutual inductance %s between %s and %s is %s: it is at most %s",
		p.Name, la.Name, lb.Name, FormatQuantity(p.Value, DimensionInductance), most)
}

// switchValue reads the turns of a switch.
func (b *builder) switchValue(inst *instance, p *Part, st *PartStatement) {
	v, ok := st.Value.(*EventsValue)
	if !ok || len(v.Events) == 0 {
		b.c.fault()
		return
	}
	const what = "the time of a switch"
	for i, clause := range v.Events {
		o, e, ok := b.constantValue(inst, clause.Time, DimensionTime, what)
		if !ok || !e.notNegative(clause.Time, &o, what) {
			b.c.fault()
			return
		}
		event := Event{At: o.value, Closes: clause.Action.Text == "closes"}
		if i > 0 && !b.eventFollows(inst, p, event, clause) {
			return
		}
		p.Events = append(p.Events, event)
	}
	p.ClosedAt0 = !p.Events[0].Closes
}

func (b *builder) eventFollows(inst *instance, p *Part, event Event, clause *EventClause) bool {
	last := p.Events[len(p.Events)-1]
	if order, decided := event.At.Cmp(last.At); !decided || order <= 0 {
		b.report(inst, clause.Span, "switch-order", "%s is given at %s, not after the turn before it at %s", p.Name,
			FormatQuantity(event.At, DimensionTime), FormatQuantity(last.At, DimensionTime))
		return false
	}
	if event.Closes == last.Closes {
		state := "open"
		if event.Closes {
			state = "closed"
		}
		b.report(inst, clause.Action.Span, "switch-order", "%s is %s already when it %s again", p.Name, state, clause.Action.Text)
		return false
	}
	return true
}
