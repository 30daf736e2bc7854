package dialect

import (
	"slices"
	"sort"
)

// SymbolSort is what a name stands for.
type SymbolSort int

// What a name can stand for.
const (
	NoSymbol SymbolSort = iota
	NodeSymbol
	PartSymbol
	PortSymbol
	FunctionSymbol
	LetSymbol
	ParameterSymbol
	SubnetworkSymbol
	UseSymbol // part NAME = SUBNETWORK
)

// String is the sort in words.
func (s SymbolSort) String() string {
	return [...]string{"", "node", "part", "port", "function", "constant", "parameter", "subnetwork", "part"}[s]
}

// Symbol is a name with its definition and every place that uses it.
type Symbol struct {
	Name      string
	Sort      SymbolSort
	Kind      Kind      // of a part
	File      *File     // where it is defined
	Span      Span      // the name there; of a node, where it is first written
	Statement Statement // the defining statement; of a node, the first that names it
	Terminal  bool      // a node that is a terminal of its subnetwork
	Inside    *Symbol   // the subnetwork in whose body it is defined, nil in a file
	Of        *Symbol   // of a use, the subnetwork; nil when that is unknown
	// References lists every place of the name, the definition included, in
	// all files, in no particular order.
	References []Reference
	// Parameters and Terminals of a subnetwork, in order.
	Parameters, Terminals []*Symbol

	scope   *scope
	index   int      // in scope.symbols
	body    *scope   // of a subnetwork
	boxes   []wiring // the boxes a part or use stands in
	options wiring   // the statement that wires it with "at"
	few     [2]Reference
	fewBox  [1]wiring
}

// wiring is a place that wires a part.
type wiring struct {
	span    Span
	present bool
}

// Doc is the ## text above the definition, "" when there is none.
func (s *Symbol) Doc() string {
	if s.Statement == nil || s.Sort == NodeSymbol {
		return ""
	}
	return s.Statement.Headline().Doc.Text()
}

// Reference is one place of a name.
type Reference struct {
	File       *File
	Span       Span
	Definition bool
}

// SymbolUse is a place in a file with the symbol it refers to.
type SymbolUse struct {
	Span   Span
	Symbol *Symbol
}

// symbolTable records uses per file, sorted by place when first asked.
type symbolTable struct {
	uses   map[*File][]SymbolUse
	last   *File       // whose list is at hand
	list   []SymbolUse // the list at hand
	slab   []Symbol    // room for symbols
	silent bool        // records nothing: names of a question from outside
}

// symbol makes a symbol. They are made many at a time, which is faster.
func (t *symbolTable) symbol() *Symbol {
	if len(t.slab) == 0 {
		t.slab = make([]Symbol, 128)
	}
	s := &t.slab[0]
	t.slab = t.slab[1:]
	s.References = s.few[:0]
	return s
}

// record notes that span in file names the symbol.
func (t *symbolTable) record(s *Symbol, file *File, span Span, definition bool) {
	if t.silent || span.Start == span.End {
		return
	}
	s.References = append(s.References, Reference{File: file, Span: span, Definition: definition})
	if file != t.last {
		t.flush()
		t.last, t.list = file, t.uses[file]
	}
	t.list = append(t.list, SymbolUse{Span: span, Symbol: s})
}

// flush puts the list at hand back.
func (t *symbolTable) flush() {
	if t.last != nil {
		t.uses[t.last] = t.list
	}
}

func (t *symbolTable) sort() {
	t.flush()
	for _, uses := range t.uses {
		slices.SortFunc(uses, func(a, b SymbolUse) int { return a.Span.Start - b.Span.Start })
	}
}

// Uses lists every place of a name in a file, in order of the text. Where a
// port bears its node's name, both symbols are listed for the place.
func (c *Checked) Uses(file *File) []SymbolUse { return c.table.uses[file] }

// SymbolAt finds the symbol whose name stands at an offset (its end
// included), with the place of that name.
func (c *Checked) SymbolAt(file *File, offset int) (*Symbol, Span, bool) {
	uses := c.table.uses[file]
	i := sort.Search(len(uses), func(i int) bool { return uses[i].Span.Start > offset })
	for i--; i >= 0 && i < len(uses); i-- {
		if u := uses[i]; u.Span.Start <= offset && offset <= u.Span.End {
			return u.Symbol, u.Span, true
		}
		if uses[i].Span.End < offset {
			break
		}
	}
	return nil, Span{}, false
}

// Symbols lists the symbols of the main file's own scope, in order of their
// definition.
func (c *Checked) Symbols() []*Symbol {
	return c.main.scope.symbols
}

// SymbolsOf lists the symbols of a file's own scope.
func (c *Checked) SymbolsOf(file *File) []*Symbol {
	for _, u := range c.units {
		if u.file == file {
			return u.scope.symbols
		}
	}
	return nil
}

// Body lists the symbols of a subnetwork's body, its terminals and parameters
// first.
func (c *Checked) Body(subnetwork *Symbol) []*Symbol {
	if subnetwork.body == nil {
		return nil
	}
	return subnetwork.body.symbols
}

// Visible lists the symbols that an expression or box at an offset may name:
// those of the body it lies in, then the file's (inside a body only its lets
// and subnetworks), then the lets and subnetworks of used files.
func (c *Checked) Visible(file *File, offset int) []*Symbol {
	var unit *unit
	for _, u := range c.units {
		if u.file == file {
			unit = u
		}
	}
	if unit == nil {
		return nil
	}
	var all []*Symbol
	body := unit.scope.bodyAt(offset)
	if body != nil {
		all = append(all, body.symbols...)
	}
	for _, s := range unit.scope.symbols {
		if body == nil || s.Sort == LetSymbol || s.Sort == SubnetworkSymbol {
			all = append(all, s)
		}
	}
	names := make([]string, 0, len(unit.scope.imported))
	for name := range unit.scope.imported {
		names = append(names, name)
	}
	sort.Strings(names)
	for _, name := range names {
		all = append(all, unit.scope.imported[name])
	}
	return all
}

// Lookup finds a name as seen from an offset of a file: nodes too.
func (c *Checked) Lookup(file *File, offset int, name string) *Symbol {
	for _, s := range c.Visible(file, offset) {
		if s.Name == name {
			return s
		}
	}
	return nil
}

// Unwired lists the parts and uses of the main file that no path and no "at"
// wires, in order of the text.
func (c *Checked) Unwired() []*Symbol { return c.main.scope.unwired() }

// UnwiredAt lists the parts of the scope at an offset that are not wired yet.
func (c *Checked) UnwiredAt(file *File, offset int) []*Symbol {
	for _, u := range c.units {
		if u.file == file {
			if body := u.scope.bodyAt(offset); body != nil {
				return body.unwired()
			}
			return u.scope.unwired()
		}
	}
	return nil
}

// Indices lists what a symbol has become in the Description: indices into
// Nodes, Parts, Ports, Functions or Lets according to its sort; for a use,
// the parts inside. A symbol of a subnetwork's body has one entry per use.
func (c *Checked) Indices(s *Symbol) []int {
	var found []int
	for _, inst := range c.builder.instances {
		if inst.scope != s.scope {
			continue
		}
		if s.Sort == UseSymbol {
			if child := inst.children[s.index]; child != nil {
				for i := child.firstPart; i < child.lastPart; i++ {
					found = append(found, i)
				}
			}
			continue
		}
		if i := inst.slots[s.index]; i >= 0 {
			found = append(found, i)
		}
	}
	return found
}

// Values lists what a constant, parameter or function stands for: one entry
// per use of the subnetwork it is in, without those that an error left without
// a value. A constant of a used file has its one value too.
func (c *Checked) Values(s *Symbol) []Expression {
	in := inLet
	switch s.Sort {
	case FunctionSymbol:
		in = inFunction
	case LetSymbol, ParameterSymbol:
	default:
		return nil
	}
	c.questions.Lock() // questions work out constants in further settings
	defer c.questions.Unlock()
	var values []Expression
	add := func(inst *instance) {
		if inst != nil && inst.scope == s.scope {
			if o, ok := inst.memo[s.index].known(in); ok && o.ok {
				values = append(values, o.finish())
			}
		}
	}
	for _, inst := range c.builder.instances {
		add(inst)
	}
	for _, u := range c.units {
		if !u.main {
			add(u.static)
		}
	}
	return values
}

// FileLink is a use statement with the file it names.
type FileLink struct {
	Span Span   // the quoted path
	Path string // as handed to the reader
	File *File  // nil when it could not be read
}

// Links lists the use statements of a file.
func (c *Checked) Links(file *File) []FileLink {
	for _, u := range c.units {
		if u.file == file {
			return u.links
		}
	}
	return nil
}

// Expectation is what a place in the text must hold.
type Expectation struct {
	Span      Span
	Dimension Dimension
	What      string // "the value of a resistor"
}

// ExpectedAt finds the innermost place with a known dimension around an
// offset: the value of a part, an option, a qualifier.
func (c *Checked) ExpectedAt(file *File, offset int) (Expectation, bool) {
	best, found := Expectation{}, false
	for _, e := range c.expectations[file] {
		if e.Span.Start <= offset && offset <= e.Span.End &&
			(!found || e.Span.End-e.Span.Start <= best.Span.End-best.Span.Start) {
			best, found = e, true
		}
	}
	return best, found
}
