package dialect

// instance is a scope as it stands in a network: the main file, or one use of
// a subnetwork.
type instance struct {
	b      *builder // that makes it
	scope  *scope
	parent *instance // the instance that uses it, nil for a file
	use    []Origin  // the chain of uses
	prefix string    // "F1." before inner names
	// slots gives for each symbol of the scope its index in the Description's
	// slice of its sort, −1 for none.
	slots    []int
	children map[int]*instance // by the use's symbol index
	// arguments of the use, by the parameter's symbol index.
	arguments map[int]*Parameter
	memo      []memo // of lets, parameters, functions and part values

	firstPart, lastPart int // the parts made by it, those inside it included
	inflow              map[int][]PartEnd
	unwired             []bool // per slot of scope.parts: no ends known
}

// memo is the value of a name that is being or has been worked out, in each
// setting it was needed in.
type memo struct {
	busy  bool
	first memoValue
	more  []memoValue
}

type memoValue struct {
	done    bool
	in      setting
	operand operand
}

// known is the value in a setting, if it has been worked out.
func (m *memo) known(in setting) (operand, bool) {
	if m.first.done && m.first.in == in {
		return m.first.operand, true
	}
	for i := range m.more {
		if m.more[i].in == in {
			return m.more[i].operand, true
		}
	}
	return operand{}, false
}

func (m *memo) keep(in setting, o operand) operand {
	v := memoValue{true, in, o}
	if m.first.done {
		m.more = append(m.more, v)
	} else {
		m.first = v
	}
	return o
}

// builder makes a Description, or only checks a body when it is a trial.
type builder struct {
	c          *checker
	d          *Description
	instances  []*instance
	allowed    map[Code]Origin
	trial      bool // a body on its own, or a used file: nothing is kept
	prefer     map[Kind]*preference
	sources    []int  // the parts that are independent sources
	dependent  []bool // per part: a source that follows quantities
	started    *StartStatement
	prefixed   bool                // a resistor is in mΩ or MΩ
	sound      map[*Tolerance]bool // values in the series of their tolerance
	coilJoints map[int]bool        // joints that an inductor touches
	lossy      map[int]bool        // nodes that an inductor or capacitor touches
}

// maxParts bounds the size of an expanded network, which nested uses could
// make grow without limit.
const maxParts = 200000

// maxNesting bounds how deep subnetworks may use one another.
const maxNesting = 50

func newBuilder(c *checker) *builder {
	return &builder{c: c, d: &Description{Ground: -1}, allowed: map[Code]Origin{}, prefer: map[Kind]*preference{}}
}

// checkBodies checks each subnetwork of a file on its own, with its default
// parameters and its terminals open, and the constants of a used file.
// What is wrong there leaves nothing out of the network: a use that meets it
// again does.
func (c *checker) checkBodies(u *unit) {
	c.harmless = true
	defer func() { c.harmless = false }()
	b := newBuilder(c)
	b.trial = true
	u.static = b.newInstance(u.scope, nil, nil, "")
	if !u.main {
		b.structure(u.static)
		b.values()
		b.constants(u.static)
	}
	for _, s := range u.scope.bodies {
		b := newBuilder(c)
		b.trial = true
		inst := b.newInstance(s, nil, nil, "")
		b.structure(inst)
		b.values()
		b.couplings()
		b.statements(inst)
	}
}

// buildMain makes the Description of the main file.
func (b *builder) buildMain(u *unit) {
	u.static = b.newInstance(u.scope, nil, nil, "")
	b.c.harmless = true
	b.preferences(u.static)
	b.c.harmless = false
	b.structure(u.static)
	b.values()
	b.couplings()
	for _, inst := range b.instances {
		b.statements(inst)
	}
	b.neighbours()
}

func (b *builder) newInstance(s *scope, parent *instance, use []Origin, prefix string) *instance {
	inst := &instance{
		b: b, scope: s, parent: parent, use: use, prefix: prefix,
		slots: make([]int, len(s.symbols)), memo: make([]memo, len(s.symbols)),
	}
	for i := range inst.slots {
		inst.slots[i] = -1
	}
	b.instances = append(b.instances, inst)
	return inst
}

// origin is a place in an instance's text.
func (inst *instance) origin(span Span) Origin {
	return Origin{File: inst.scope.unit.file, Span: span, Use: inst.use}
}

// report adds a finding at a place in an instance's text.
func (b *builder) report(inst *instance, span Span, code Code, format string, args ...any) *reported {
	return b.c.reportAt(inst.origin(span), code, format, args...)
}

// structure makes the nodes, parts, uses, ports and functions of an instance,
// without values, and wires them. Terminals have their slots already.
func (b *builder) structure(inst *instance) {
	s := inst.scope
	if b.d.Parts == nil {
		b.d.Parts = make([]Part, 0, len(s.parts))
		b.d.Nodes = make([]Node, 0, len(s.nodes))
	}
	inst.firstPart = len(b.d.Parts)
	b.leftOut(inst)
	for _, sym := range s.symbols {
		switch sym.Sort {
		case NodeSymbol:
			if inst.slots[sym.index] < 0 {
				b.makeNode(inst, sym)
			}
		case PartSymbol:
			b.makePart(inst, sym)
		case PortSymbol:
			inst.slots[sym.index] = len(b.d.Ports)
			b.d.Ports = append(b.d.Ports, Port{Name: inst.prefix + sym.Name, Plus: -1, Minus: -1,
				Origin: inst.origin(sym.Statement.Headline().Span), NameSpan: sym.Span})
		case FunctionSymbol:
			inst.slots[sym.index] = len(b.d.Functions)
			b.d.Functions = append(b.d.Functions, Function{Name: inst.prefix + sym.Name,
				Origin: inst.origin(sym.Statement.Headline().Span), NameSpan: sym.Span})
		}
	}
	if s.ground != nil {
		b.d.Ground = inst.slots[s.ground.index]
	}
	terminals := b.wire(inst)
	b.wirePorts(inst)
	for _, use := range s.uses {
		b.expand(inst, use, terminals[use.index])
	}
	inst.lastPart = len(b.d.Parts)
}

// leftOut notes the statements of which the parser could make nothing whole.
func (b *builder) leftOut(inst *instance) {
	for _, st := range inst.scope.statements {
		if head := st.Headline(); !head.Broken || head.Misplaced {
			continue
		}
		switch st.(type) {
		case *LetStatement, *FunctionStatement, *TellStatement, *RequireStatement, *PreferStatement,
			*AllowStatement, *PortStatement, *UseFileStatement, *SubnetworkStatement:
			// missed only by those who name it
		default:
			b.c.fault()
		}
	}
}

func (b *builder) makeNode(inst *instance, sym *Symbol) {
	inst.slots[sym.index] = len(b.d.Nodes)
	places := make([]Origin, len(sym.References))
	for i, r := range sym.References {
		places[i] = Origin{File: r.File, Span: r.Span, Use: inst.use}
	}
	b.d.Nodes = append(b.d.Nodes, Node{
		Name: inst.prefix + sym.Name, Places: places, Ported: b.trial && sym.Terminal,
	})
}

func (b *builder) makePart(inst *instance, sym *Symbol) {
	st := sym.Statement.(*PartStatement)
	if inst.scope.names[sym.Name] != sym {
		b.c.fault() // its name was taken
	}
	inst.slots[sym.index] = len(b.d.Parts)
	b.d.Parts = append(b.d.Parts, Part{
		Name: inst.prefix + sym.Name, Kind: sym.Kind, From: -1, To: -1,
		Plus: -1, Minus: -1, Output: -1, Coils: [2]int{-1, -1},
		Origin: inst.origin(st.Span), NameSpan: sym.Span,
	})
}

// expand makes the inside of a subnetwork's use.
func (b *builder) expand(inst *instance, use *Symbol, ends []end) {
	st := use.Statement.(*UsePartStatement)
	if use.Of == nil {
		b.c.fault()
		return
	}
	for at := inst; at != nil; at = at.parent {
		if at.scope == use.Of.body {
			f := b.report(inst, st.Subnetwork.Span, "use-cycle", "%s is made of itself: a subnetwork cannot contain its own use", use.Of.Name)
			f.relate(use.Of.File, use.Of.Span, "%s is defined here", use.Of.Name)
			return
		}
	}
	origin := inst.origin(st.Span)
	if len(b.d.Parts) > maxParts || len(inst.use) >= maxNesting {
		b.report(inst, st.Subnetwork.Span, "too-large", "the network has more than %d parts once its subnetworks are expanded", maxParts)
		return
	}
	chain := append(append([]Origin(nil), inst.use...), Origin{File: origin.File, Span: origin.Span})
	child := b.newInstance(use.Of.body, inst, chain, inst.prefix+use.Name+".")
	for i, t := range use.Of.Terminals {
		if i < len(ends) {
			child.slots[t.index] = ends[i].node
		}
	}
	child.arguments = map[int]*Parameter{}
	for _, a := range st.Arguments {
		if p := use.Of.body.names[a.Name.Text]; p != nil && p.Sort == ParameterSymbol {
			child.arguments[p.index] = a
		}
	}
	if inst.children == nil {
		inst.children = map[int]*instance{}
	}
	inst.children[use.index] = child
	b.structure(child)
	for i, t := range use.Of.Terminals {
		if i < len(ends) {
			for _, p := range child.inflow[t.index] {
				inst.attach(ends[i], p)
			}
		}
	}
}

// fault notes that something is missing from the network.
func (c *checker) fault() {
	if !c.harmless {
		c.faults = true
	}
}
