package dialect

import "strconv"

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
	dependent  []bool // per part: a source that follows quantities
	started    *StartStatement
	prefixed   bool                // a resistor is in mΩ or MΩ
	sound      map[*Tolerance]bool // values in the series of their tolerance
	coilJoints map[int]bool        // joints that an inductor touches
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

// slot is the index of a node's name in an instance, −1 when it has none.
func (inst *instance) slot(name Word) int {
	if sym := inst.scope.nodes[name.Text]; sym != nil && name.Present() {
		return inst.slots[sym.index]
	}
	return -1
}

// joint makes an unnamed node between two boxes that touch.
func (b *builder) joint(inst *instance, span Span) int {
	b.d.Nodes = append(b.d.Nodes, Node{Joint: true, Places: []Origin{inst.origin(span)}})
	return len(b.d.Nodes) - 1
}

// end is one end of a box: the node, and the terminal it is by name.
type end struct {
	node int
	name string // "" for a joint
}

// wire gives the parts in paths and those with "at" their nodes. It returns
// the nodes at the terminals of the uses.
func (b *builder) wire(inst *instance) map[int][]end {
	terminals := map[int][]end{}
	for _, st := range inst.scope.statements {
		if path, ok := st.(*PathStatement); ok {
			b.wirePath(inst, path, terminals)
		}
	}
	for _, sym := range inst.scope.parts {
		b.wireOptions(inst, sym)
	}
	for _, use := range inst.scope.uses {
		st := use.Statement.(*UsePartStatement)
		if use.Of == nil || len(st.Terminals) == 0 {
			continue
		}
		ends := make([]end, len(use.Of.Terminals))
		for i, t := range use.Of.Terminals {
			ends[i] = end{node: -1}
			for _, clause := range st.Terminals {
				if clause.Terminal.Text == t.Name {
					ends[i] = end{inst.slot(clause.Node), clause.Node.Text}
				}
			}
		}
		terminals[use.index] = ends
	}
	return terminals
}

func (b *builder) wirePath(inst *instance, path *PathStatement, terminals map[int][]end) {
	for i, chain := range path.Chains {
		if i+1 >= len(path.Nodes) {
			return
		}
		left := end{inst.slot(path.Nodes[i]), path.Nodes[i].Text}
		last := end{inst.slot(path.Nodes[i+1]), path.Nodes[i+1].Text}
		for j, g := range chain.Groups {
			right := last
			if j+1 < len(chain.Groups) {
				right = end{node: b.joint(inst, Span{g.Close.Start, chain.Groups[j+1].Open.End})}
			}
			for _, box := range g.Boxes {
				b.wireBox(inst, box, left, right, terminals)
			}
			left = right
		}
	}
}

func (b *builder) wireBox(inst *instance, box Box, left, right end, terminals map[int][]end) {
	var sym *Symbol
	switch box := box.(type) {
	case *NameBox:
		sym = inst.scope.names[box.Name.Text]
	case *PartStatement, *UsePartStatement:
		sym = inst.scope.inline(box.(Statement))
	}
	switch {
	case sym == nil:
		b.c.fault() // unknown, or a hole
	case sym.Sort == UseSymbol:
		if terminals[sym.index] == nil && sym.Of != nil && len(sym.Of.Terminals) == 2 {
			terminals[sym.index] = []end{left, right}
		}
	case sym.Sort == PartSymbol:
		p := &b.d.Parts[inst.slots[sym.index]]
		if p.From >= 0 || p.To >= 0 || !p.Kind.twoTerminal() {
			b.c.fault() // wired twice, or not to be wired so
			return
		}
		p.From, p.To, p.Wired = left.node, right.node, inst.origin(box.Extent())
		inst.attach(left, PartEnd{Part: inst.slots[sym.index], Sign: 1})
		inst.attach(right, PartEnd{Part: inst.slots[sym.index], Sign: -1})
	}
}

// twoTerminal says that parts of the kind stand in a path.
func (k Kind) twoTerminal() bool {
	switch k {
	case NoKind, OpAmp, Transformer, Coupling:
		return false
	}
	return true
}

// attach notes that a part's end is connected to a terminal of the body, for
// the current into that terminal.
func (inst *instance) attach(e end, p PartEnd) {
	if inst.scope.body == nil || e.name == "" {
		return
	}
	if sym := inst.scope.nodes[e.name]; sym != nil && sym.Terminal {
		if inst.inflow == nil {
			inst.inflow = map[int][]PartEnd{}
		}
		inst.inflow[sym.index] = append(inst.inflow[sym.index], p)
	}
}

// wireOptions gives op amps and transformers their nodes.
func (b *builder) wireOptions(inst *instance, sym *Symbol) {
	st, index := sym.Statement.(*PartStatement), inst.slots[sym.index]
	p := &b.d.Parts[index]
	secondaries := 0
	for _, o := range st.Options {
		if !o.connects() {
			continue
		}
		node := func(i int) int {
			if i < len(o.Nodes) {
				return inst.slot(o.Nodes[i])
			}
			return -1
		}
		switch word := o.Keyword.Text; {
		case p.Kind == OpAmp && word == "+":
			p.Plus = node(0)
		case p.Kind == OpAmp && word == "-":
			p.Minus = node(0)
		case p.Kind == OpAmp && word == "output":
			p.Output = node(0)
			if len(o.Nodes) > 0 {
				inst.attach(end{p.Output, o.Nodes[0].Text}, PartEnd{Part: index, Terminal: "output", Sign: 1})
			}
		case p.Kind == Transformer && (word == "primary" || word == "secondary"):
			name := word
			if word == "secondary" {
				secondaries++
				name = windingName(secondaries)
			}
			p.Windings = append(p.Windings, Winding{Name: name, Plus: node(0), Minus: node(1)})
			for i, sign := range [...]int{1, -1} {
				if i < len(o.Nodes) {
					inst.attach(end{node(i), o.Nodes[i].Text}, PartEnd{Part: index, Terminal: name, Sign: sign})
				}
			}
		default:
			continue
		}
		p.Wired = inst.origin(st.Span)
	}
}

// windingName is the name of the n-th secondary winding.
func windingName(n int) string {
	if n == 1 {
		return "secondary"
	}
	return "secondary" + strconv.Itoa(n)
}

func (b *builder) wirePorts(inst *instance) {
	for _, sym := range inst.scope.symbols {
		st, ok := sym.Statement.(*PortStatement)
		if !ok || sym.Sort != PortSymbol {
			continue
		}
		p := &b.d.Ports[inst.slots[sym.index]]
		p.Plus, p.Minus = inst.slot(st.Plus), inst.slot(st.Minus)
		for _, n := range [...]int{p.Plus, p.Minus} {
			if n >= 0 {
				b.d.Nodes[n].Ported = true
			}
		}
		if p.Plus == p.Minus && p.Plus >= 0 {
			harmless := b.c.harmless
			b.c.harmless = true
			b.report(inst, Span{st.Plus.Span.Start, st.Minus.Span.End}, "port-shorted",
				"both ends of port %s are at %s", sym.Name, st.Plus.Text)
			b.c.harmless = harmless
		}
	}
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
