package dialect

import (
	"slices"
	"strings"
)

// scope is a name space: a file's, or a subnetwork body's. It is made from the
// tree once; what the names stand for in a network is an instance's business.
type scope struct {
	unit       *unit
	body       *SubnetworkStatement // nil for a file
	symbol     *Symbol              // the subnetwork, nil for a file
	statements []Statement
	symbols    []*Symbol
	nodes      map[string]*Symbol
	names      map[string]*Symbol // everything but nodes
	imported   map[string]*Symbol // a file's: lets and subnetworks of used files
	parts      []*Symbol          // part statements, inline ones too, in order of the text
	uses       []*Symbol
	folded     map[foldedName]*Symbol // for case twins
	ground     *Symbol                // the reference node
	groundSeen *GroundStatement
	groundName string                // the word after ground, "" while it was not looked for
	taken      map[Statement]*Symbol // parts and uses whose names were taken
	bodies     []*scope
}

// foldedName is a name in lower case with its sort.
type foldedName struct {
	sort SymbolSort
	name string
}

// unit is one file of the description.
type unit struct {
	file   *File
	path   string
	main   bool
	scope  *scope
	links  []FileLink
	used   []*unit // by its use statements, nil where not read
	doing  bool    // its use statements are being followed
	static *instance
	broken []Span          // statements that the parser has told about; nil: not collected
	lost   map[string]bool // words of broken parts and paths, collected with broken
}

func (c *checker) newScope(u *unit, statements []Statement) *scope {
	n := len(statements)
	return &scope{
		unit: u, statements: statements, symbols: make([]*Symbol, 0, n+4),
		nodes: make(map[string]*Symbol, n/2), names: make(map[string]*Symbol, n), folded: make(map[foldedName]*Symbol, n),
	}
}

// bodyAt finds the body that an offset lies in.
func (s *scope) bodyAt(offset int) *scope {
	for _, b := range s.bodies {
		if b.body.BodyStart <= offset && offset <= b.body.BodyStop {
			return b
		}
	}
	return nil
}

// unwired lists the parts and uses that nothing wires.
func (s *scope) unwired() []*Symbol {
	var found []*Symbol
	for _, sym := range s.symbols {
		switch {
		case sym.Sort != PartSymbol && sym.Sort != UseSymbol, sym.Kind == Coupling:
		case len(sym.boxes) == 0 && !sym.options.present:
			found = append(found, sym)
		}
	}
	return found
}

// add makes a symbol and enters its name, reporting a name already taken.
func (c *checker) add(s *scope, sort SymbolSort, name Word, st Statement) *Symbol {
	sym := c.table.symbol()
	sym.Name, sym.Sort, sym.File, sym.Span, sym.Statement = name.Text, sort, s.unit.file, name.Span, st
	sym.Inside, sym.scope, sym.index = s.symbol, s, len(s.symbols)
	sym.boxes = sym.fewBox[:0]
	s.symbols = append(s.symbols, sym)
	if !name.Present() {
		s.hide(sym)
		return sym
	}
	c.table.record(sym, s.unit.file, name.Span, true)
	c.caseTwin(s, sym)
	if sort == NodeSymbol {
		s.nodes[name.Text] = sym
	} else if _, taken := s.names[name.Text]; !taken {
		s.names[name.Text] = sym
	} else {
		s.hide(sym)
	}
	return sym
}

// hide keeps a symbol that cannot be found by its name.
func (s *scope) hide(sym *Symbol) {
	if s.taken == nil {
		s.taken = map[Statement]*Symbol{}
	}
	s.taken[sym.Statement] = sym
}

// reserve reports a name that is taken. Nodes and the rest are kept apart, so that a quantity still finds both.
func (c *checker) reserve(s *scope, sort SymbolSort, name Word, st Statement) {
	if !name.Present() {
		return
	}
	if sort != NodeSymbol && (name.Text == "s" || name.Text == "t" || name.Text == "pi") {
		return // reported by the parser
	}
	other := s.names[name.Text]
	if node := s.nodes[name.Text]; other == nil && sort != NodeSymbol {
		if port, ok := st.(*PortStatement); node != nil && ok && c.bearsNodeName(s, port) {
			return
		}
		other = node
	} else if port, ok := statementOf(other).(*PortStatement); ok && sort == NodeSymbol && c.bearsNodeName(s, port) {
		return
	}
	if other == nil {
		return
	}
	f := c.report(s.unit.file, name.Span, "name-taken", "%s is already the name of a %s", name.Text, other.describe())
	f.relate(other.File, other.Span, "%s, the %s", other.Name, other.describe())
}

func statementOf(s *Symbol) Statement {
	if s == nil {
		return nil
	}
	return s.Statement
}

// describe is the kind of a part, or the sort of another symbol, in words.
func (s *Symbol) describe() string {
	switch {
	case s.Sort == PartSymbol:
		return s.Kind.String()
	case s.Terminal:
		return "terminal"
	case s.Sort == UseSymbol:
		return "part (a subnetwork's use)"
	}
	return s.Sort.String()
}

// bearsNodeName says that a port has the name of its + node and ends at the
// reference, which the notation allows.
func (c *checker) bearsNodeName(s *scope, p *PortStatement) bool {
	if p.Name.Text != p.Plus.Text {
		return false
	}
	if s.groundName == "" {
		s.groundName = "?" // no node's name
		for _, st := range s.statements {
			if g, ok := st.(*GroundStatement); ok {
				s.groundName = g.Node.Text
				break
			}
		}
	}
	return s.groundName == p.Minus.Text
}

// caseTwin warns of two names of one sort that differ by case alone.
func (c *checker) caseTwin(s *scope, sym *Symbol) {
	sort := sym.Sort
	if sort == UseSymbol {
		sort = PartSymbol
	}
	key := foldedName{sort, strings.ToLower(sym.Name)}
	twin := s.folded[key]
	if twin == nil {
		s.folded[key] = sym
		return
	}
	if twin.Name == sym.Name {
		return
	}
	f := c.report(s.unit.file, sym.Span, "case-twins",
		"%s and %s are two %ss that differ by case alone", twin.Name, sym.Name, sym.Sort)
	f.relate(twin.File, twin.Span, "%s is first written here", twin.Name)
	f.repair(s.unit.file, sym.Span, twin.Name, "write "+twin.Name)
}

// declare enters every name of a scope, in order of the text.
func (c *checker) declare(s *scope) {
	if s.body != nil {
		for _, t := range s.body.Terminals {
			if old := s.nodes[t.Text]; old != nil && t.Present() {
				f := c.report(s.unit.file, t.Span, "name-taken", "%s is already a terminal", t.Text)
				f.relate(old.File, old.Span, "the terminal %s", old.Name)
			}
			sym := c.add(s, NodeSymbol, t, s.body)
			sym.Terminal = true
			s.symbol.Terminals = append(s.symbol.Terminals, sym)
		}
		for _, p := range s.body.Parameters {
			c.reserve(s, ParameterSymbol, p.Name, s.body)
			s.symbol.Parameters = append(s.symbol.Parameters, c.add(s, ParameterSymbol, p.Name, s.body))
		}
	}
	for _, st := range s.statements {
		c.declareStatement(s, st)
	}
}

func (c *checker) declareStatement(s *scope, st Statement) {
	if st.Headline().Misplaced {
		return
	}
	switch st := st.(type) {
	case *GroundStatement:
		c.declareGround(s, st)
	case *LetStatement:
		c.reserve(s, LetSymbol, st.Name, st)
		c.add(s, LetSymbol, st.Name, st)
	case *PartStatement:
		c.declarePart(s, st)
	case *PathStatement:
		c.declarePath(s, st)
	case *PortStatement:
		c.reserve(s, PortSymbol, st.Name, st)
		c.add(s, PortSymbol, st.Name, st)
	case *FunctionStatement:
		c.reserve(s, FunctionSymbol, st.Name, st)
		c.add(s, FunctionSymbol, st.Name, st)
	case *SubnetworkStatement:
		c.declareSubnetwork(s, st)
	case *UsePartStatement:
		c.declareUse(s, st)
	}
}

func (c *checker) declareGround(s *scope, st *GroundStatement) {
	if s.groundSeen != nil {
		f := c.report(s.unit.file, st.Span, "ground-twice", "the reference node is %s already", s.groundSeen.Node.Text)
		f.relate(s.unit.file, s.groundSeen.Span, "the reference node")
		f.remove(s.unit.file, st.Span, "remove this line")
		return
	}
	s.groundSeen = st
}

func (c *checker) declarePart(s *scope, st *PartStatement) {
	c.reserve(s, PartSymbol, st.Name, st)
	sym := c.add(s, PartSymbol, st.Name, st)
	sym.Kind = st.Kind
	s.parts = append(s.parts, sym)
	for _, o := range st.Options {
		if !o.connects() {
			continue
		}
		sym.options = wiring{span: o.Span, present: true}
		for _, n := range o.Nodes {
			c.node(s, n, st)
		}
	}
}

// connects says that the option's words are nodes.
func (o *PartOption) connects() bool {
	switch o.Keyword.Text {
	case "+", "-", "output", "primary", "secondary":
		return true
	}
	return false
}

func (c *checker) declareUse(s *scope, st *UsePartStatement) {
	c.reserve(s, UseSymbol, st.Name, st)
	sym := c.add(s, UseSymbol, st.Name, st)
	s.uses = append(s.uses, sym)
	for _, t := range st.Terminals {
		sym.options = wiring{span: t.Span, present: true}
		c.node(s, t.Node, st)
	}
}

func (c *checker) declarePath(s *scope, st *PathStatement) {
	for i, n := range st.Nodes {
		c.node(s, n, st)
		if i >= len(st.Chains) {
			continue
		}
		for _, g := range st.Chains[i].Groups {
			for _, b := range g.Boxes {
				switch b := b.(type) {
				case *PartStatement:
					c.declarePart(s, b)
				case *UsePartStatement:
					c.declareUse(s, b)
				}
			}
		}
	}
}

func (c *checker) declareSubnetwork(s *scope, st *SubnetworkStatement) {
	c.reserve(s, SubnetworkSymbol, st.Name, st)
	sym := c.add(s, SubnetworkSymbol, st.Name, st)
	sym.body = c.newScope(s.unit, st.Statements)
	sym.body.body, sym.body.symbol = st, sym
	s.bodies = append(s.bodies, sym.body)
	harmless := c.harmless
	c.harmless = true
	c.declare(sym.body)
	c.harmless = harmless
}

// node finds or makes the node that a connecting place names.
func (c *checker) node(s *scope, name Word, st Statement) *Symbol {
	if !name.Present() {
		return nil
	}
	if sym := s.nodes[name.Text]; sym != nil {
		c.table.record(sym, s.unit.file, name.Span, false)
		return sym
	}
	c.reserve(s, NodeSymbol, name, st)
	return c.add(s, NodeSymbol, name, st)
}

// visible finds a name other than a node's: in the scope, in the file around
// a body (lets and subnetworks only), in used files.
func (s *scope) visible(name string) *Symbol {
	if sym := s.names[name]; sym != nil {
		return sym
	}
	file := s.unit.scope
	if s != file {
		if sym := file.names[name]; sym != nil && (sym.Sort == LetSymbol || sym.Sort == SubnetworkSymbol) {
			return sym
		}
	}
	return file.imported[name]
}

// candidates lists the names a misspelling may have meant, in order of the
// text, those of used files last.
func (s *scope) candidates(fits func(*Symbol) bool) []string {
	var names []string
	for _, sym := range s.symbols {
		if fits(sym) {
			names = append(names, sym.Name)
		}
	}
	file := s.unit.scope
	if s != file {
		for _, sym := range file.symbols {
			if (sym.Sort == LetSymbol || sym.Sort == SubnetworkSymbol) && fits(sym) {
				names = append(names, sym.Name)
			}
		}
	}
	var far []string
	for _, sym := range file.imported {
		if fits(sym) {
			far = append(far, sym.Name)
		}
	}
	slices.Sort(far)
	return append(names, far...)
}
