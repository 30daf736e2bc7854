package dialect

// target is what a subscript refers to.
type target struct {
	sort SymbolSort // NodeSymbol, PartSymbol, PortSymbol, UseSymbol
	// index is the node's, part's or port's place in the Description.
	index    int
	sym      *Symbol
	terminal string    // of an op amp or transformer
	inside   *instance // of a use; of a terminal's use
	inner    bool      // a terminal of a use: i[F1.in]
}

// resolve finds what a subscript refers to; false when that was reported.
func (e *evaluator) resolve(n *NameExpr) (target, bool) {
	inst := e.inst
	for i, w := range n.Words {
		if !w.Present() {
			return target{}, false
		}
		sym := inst.scope.lookup(w.Text, true, i > 0)
		if sym == nil {
			return target{}, false
		}
		if i+1 == len(n.Words) {
			return e.resolved(inst, sym, i > 0), sym.scope == inst.scope
		}
		if sym.Sort == PartSymbol && i+2 == len(n.Words) && hasTerminal(sym, n.Words[i+1].Text) {
			return target{sort: PartSymbol, index: inst.slots[sym.index], sym: sym, terminal: n.Words[i+1].Text}, true
		}
		if inst = inst.child(sym); inst == nil {
			return target{}, false
		}
	}
	return target{}, false
}

func (e *evaluator) resolved(inst *instance, sym *Symbol, inner bool) target {
	if sym.scope != inst.scope {
		return target{}
	}
	t := target{sort: sym.Sort, index: inst.slots[sym.index], sym: sym}
	switch {
	case sym.Sort == UseSymbol:
		t.inside = inst.children[sym.index]
	case inner && sym.Terminal:
		t.inner, t.inside = true, inst
	}
	return t
}

// quantityDimensions gives the unit of each quantity's letter.
var quantityDimensions = map[string]Dimension{
	"v": DimensionVoltage, "i": DimensionCurrent, "p": DimensionPower,
	"z": DimensionResistance, "y": DimensionConductance,
}

// quantity works out v[…], i[…], z[…], y[…], p[…], thevenin[…] and norton[…].
func (e *evaluator) quantity(x *SubscriptExpr) operand {
	letter := x.Letter.Text
	if !e.letterAllowed(x) {
		return operand{}
	}
	if letter == "thevenin" || letter == "norton" {
		return e.equivalent(x)
	}
	dim, known := quantityDimensions[letter]
	if !known || len(x.Subscripts) == 0 || len(x.Subscripts) > 2 {
		return operand{}
	}
	var targets []target
	for _, n := range x.Subscripts {
		t, ok := e.resolve(n)
		if !ok {
			return operand{}
		}
		targets = append(targets, t)
	}
	probe, ok := e.probe(x, letter[0], targets)
	if !ok {
		return operand{}
	}
	o := operand{ok: true, dim: dim, shape: ShapeSignal, has: hasQuantity, size: 1, span: x.Span}
	switch {
	case letter == "z" || letter == "y":
		o.shape, o.has = ShapeFunction, hasS|hasQuantity
	case e.in == inFunction:
		o.shape, o.degree = ShapeFunction, 1
	}
	return e.portCurrent(x, o, probe)
}

// letterAllowed reports a quantity where none, or none of its letter, may be.
func (e *evaluator) letterAllowed(x *SubscriptExpr) bool {
	letter := x.Letter.Text
	switch e.in {
	case inConstant, inRational:
		e.report(x.Span, "not-constant", "%s has no place in %s", e.written(x.Span), e.what)
		return false
	case inSource:
		if letter != "v" && letter != "i" {
			e.report(x.Span, "not-linear", "a dependent source follows voltages v[…] and currents i[…], not %s", e.written(x.Span))
			return false
		}
	case inFunction:
		if letter == "p" || letter == "thevenin" || letter == "norton" {
			e.report(x.Span, "function-form", "%s has no place in a network function: it is made of responses over excitations, z[…], y[…] and other functions",
				e.written(x.Span))
			return false
		}
	}
	return true
}

func (e *evaluator) equivalent(x *SubscriptExpr) operand {
	if len(x.Subscripts) != 1 {
		e.report(x.Span, "wrong-sort", "%s takes the name of one port", x.Letter.Text)
		return operand{}
	}
	t, ok := e.resolve(x.Subscripts[0])
	if !ok || t.sort != PortSymbol {
		return operand{}
	}
	o := operand{ok: true, shape: ShapeEquivalent, has: hasQuantity, size: 1, span: x.Span}
	o.x = &Quantity{Typed: o.typed(), Probe: Probe{Letter: x.Letter.Text[0], Of: OfPort, Plus: -1, Minus: -1, Part: -1, Port: t.index}}
	return o
}

// probe makes the elementary quantity of a letter and its subscripts.
func (e *evaluator) probe(x *SubscriptExpr, letter byte, targets []target) (Probe, bool) {
	p := Probe{Letter: letter, Plus: -1, Minus: -1, Part: -1, Port: -1}
	if len(targets) == 2 {
		return e.pair(x, p, targets)
	}
	t := targets[0]
	switch {
	case t.sort == NodeSymbol && letter == 'i' && t.inner:
		p.Of, p.Inflow = OfInflow, t.inside.inflow[t.sym.index]
		return p, true
	case t.sort == NodeSymbol:
		return e.nodeProbe(x, p, t)
	case t.sort == PortSymbol:
		if letter == 'p' {
			e.report(x.Span, "wrong-sort", "p[…] is the power absorbed by a part, and %s is a port", t.sym.Name)
			return p, false
		}
		p.Of, p.Port = OfPort, t.index
		return p, true
	case t.sort == UseSymbol:
		return e.useProbe(x, p, t)
	case t.terminal != "":
		return e.terminalProbe(x, p, t)
	}
	return e.partProbe(x, p, t)
}

func (e *evaluator) pair(x *SubscriptExpr, p Probe, targets []target) (Probe, bool) {
	if p.Letter == 'i' || p.Letter == 'p' {
		e.report(x.Span, "wrong-sort", "%s[…] takes one name: the part, port or terminal that the current flows into", x.Letter.Text)
		return p, false
	}
	for i, t := range targets {
		if t.sort == PortSymbol && e.b.portNode(t) {
			t.index = e.b.d.Ports[t.index].Plus
			targets[i] = t
			continue
		}
		if t.sort != NodeSymbol {
			e.report(x.Subscripts[i].Span, "wrong-sort", "%s is %s: a pair of subscripts names two nodes", x.Subscripts[i].Text(), article(t.sym.describe()))
			return p, false
		}
	}
	p.Of, p.Plus, p.Minus = OfNodes, targets[0].index, targets[1].index
	if p.Plus == p.Minus && p.Letter != 'v' && p.Plus >= 0 {
		e.report(x.Span, "wrong-sort", "%s is between a node and itself", e.written(x.Span))
		return p, false
	}
	return p, true
}

// portNode says that a port bears its + node's name.
func (b *builder) portNode(t target) bool {
	st, ok := t.sym.Statement.(*PortStatement)
	return ok && st.Plus.Text == t.sym.Name && t.index >= 0 && t.index < len(b.d.Ports)
}

// nodeProbe is a node against the reference.
func (e *evaluator) nodeProbe(x *SubscriptExpr, p Probe, t target) (Probe, bool) {
	if p.Letter == 'i' || p.Letter == 'p' {
		r := e.report(x.Span, "wrong-sort", "%s is a node: a current flows through a part, i[PART]", x.Subscripts[0].Text())
		if p.Letter == 'p' && r.f != nil {
			r.f.Message = x.Subscripts[0].Text() + " is a node: power is absorbed by a part, p[PART]"
		}
		return p, false
	}
	if e.b.d.Ground < 0 && !e.b.trial {
		r := e.report(x.Span, "no-ground", "%s is against the reference node, but the file names none: only differences such as %c[%s,…] can be asked",
			e.written(x.Span), p.Letter, x.Subscripts[0].Text())
		e.offerGround(r)
		return p, false
	}
	p.Of, p.Plus, p.Minus = OfNodes, t.index, e.b.d.Ground
	if p.Plus == p.Minus && p.Letter != 'v' && p.Plus >= 0 {
		e.report(x.Span, "wrong-sort", "%s is between the reference node and itself", e.written(x.Span))
		return p, false
	}
	return p, true
}

// groundNames are the usual names of a reference node.
var groundNames = []string{"gnd", "ground", "hull", "g", "0", "earth", "pe", "com", "common", "rtn", "agnd", "vss", "n"}

// offerGround offers to name a node that is called like a reference.
func (e *evaluator) offerGround(r *reported) {
	main := e.b.instances[0].scope
	for _, name := range groundNames {
		if main.nodes[name] == nil {
			continue
		}
		at := 0
		if doc := main.unit.file.Doc; doc != nil && len(main.unit.file.Statements) > 0 {
			first := main.unit.file.Statements[0].Headline()
			at = first.Span.Start
			if first.Doc != nil {
				at = first.Doc.Span.Start
			}
		}
		r.repair(main.unit.file, Span{at, at}, "ground "+name+"\n", "make "+name+" the reference node")
		return
	}
}

// useProbe is the voltage across or the current into a subnetwork's use with
// two terminals.
func (e *evaluator) useProbe(x *SubscriptExpr, p Probe, t target) (Probe, bool) {
	if t.inside == nil {
		return p, false
	}
	terminals := t.sym.Of.Terminals
	if len(terminals) != 2 || p.Letter != 'v' && p.Letter != 'i' {
		first := "a terminal"
		if len(terminals) > 0 {
			first = x.Subscripts[0].Text() + "." + terminals[0].Name
		}
		e.report(x.Span, "wrong-sort", "%s is a subnetwork's use: ask for one of its terminals, such as i[%s], or for what is inside",
			x.Subscripts[0].Text(), first)
		return p, false
	}
	if p.Letter == 'i' {
		p.Of, p.Inflow = OfInflow, t.inside.inflow[terminals[0].index]
		return p, true
	}
	p.Of, p.Plus, p.Minus = OfNodes, t.inside.slots[terminals[0].index], t.inside.slots[terminals[1].index]
	return p, true
}

// terminalProbe is a terminal of an op amp or a transformer.
func (e *evaluator) terminalProbe(x *SubscriptExpr, p Probe, t target) (Probe, bool) {
	if t.index < 0 {
		return p, false
	}
	part := &e.b.d.Parts[t.index]
	switch {
	case p.Letter == 'i':
		p.Of, p.Part, p.Terminal = OfTerminal, t.index, t.terminal
		return p, true
	case p.Letter == 'v' && part.Kind == OpAmp:
		return e.nodeProbe(x, p, target{sort: NodeSymbol, index: part.Output, sym: t.sym})
	case p.Letter == 'v':
		for _, w := range part.Windings {
			if w.Name == t.terminal {
				p.Of, p.Plus, p.Minus = OfNodes, w.Plus, w.Minus
				return p, true
			}
		}
	}
	e.report(x.Span, "wrong-sort", "of the terminal %s the voltage v[…] and the current i[…] can be asked", e.written(x.Subscripts[0].Span))
	return p, false
}

func (e *evaluator) partProbe(x *SubscriptExpr, p Probe, t target) (Probe, bool) {
	if t.sort != PartSymbol {
		e.report(x.Subscripts[0].Span, "wrong-sort", "%s is %s and has no %s", x.Subscripts[0].Text(),
			article(t.sym.describe()), map[byte]string{'v': "voltage", 'i': "current", 'p': "power", 'z': "impedance", 'y': "admittance"}[p.Letter])
		return p, false
	}
	name := x.Subscripts[0].Text()
	switch t.sym.Kind {
	case OpAmp:
		e.report(x.Span, "wrong-sort", "%s is an op amp: ask for v[%s.output] or i[%s.output]", name, name, name)
		return p, false
	case Transformer:
		e.report(x.Span, "wrong-sort", "%s is a transformer: ask for one winding, such as i[%s.primary]", name, name)
		return p, false
	case Coupling:
		e.report(x.Span, "wrong-sort", "%s is a coupling and has no terminals: ask for one of its inductors", name)
		return p, false
	}
	p.Of, p.Part = OfPart, t.index
	return p, true
}

// portCurrent settles the current of a port: outside functions it is the
// current of the one source that stands across the port.
func (e *evaluator) portCurrent(x *SubscriptExpr, o operand, p Probe) operand {
	quantity := func(p Probe) Expression { return &Quantity{Typed: o.typed(), Probe: p} }
	if p.Letter != 'i' || p.Of != OfPort || e.in == inFunction || e.b.trial || p.Port < 0 {
		o.x = quantity(p)
		return o
	}
	port := &e.b.d.Ports[p.Port]
	sources := e.b.sourcesAcross(port.Plus, port.Minus)
	switch {
	case len(sources) == 0:
		name := x.Subscripts[0].Text()
		r := e.report(x.Span, "open-port", "nothing drives port %s, so it is open and its current is zero: norton[%s] gives the short-circuit current, matrix y the currents of driven ports", name, name)
		r.repair(e.text(), x.Span, "norton["+name+"]", "ask for norton["+name+"]")
		return operand{}
	case len(sources) > 1:
		e.report(x.Span, "open-port", "more than one source stands across port %s: ask for the current of one of them", x.Subscripts[0].Text())
		return operand{}
	}
	source := &e.b.d.Parts[sources[0]]
	p = Probe{Letter: 'i', Of: OfPart, Plus: -1, Minus: -1, Port: -1, Part: sources[0]}
	o.x = quantity(p)
	if source.From == port.Plus { // its current leaves the network at the + end
		o.x = &Negate{Typed: o.typed(), X: o.x}
		o.size++
	}
	return o
}

// sourcesAcross lists the sources between two nodes, either way round, that do
// not depend on the network.
func (b *builder) sourcesAcross(plus, minus int) []int {
	var found []int
	for _, i := range b.sources {
		p := &b.d.Parts[i]
		if p.From == plus && p.To == minus || p.From == minus && p.To == plus {
			found = append(found, i)
		}
	}
	return found
}
