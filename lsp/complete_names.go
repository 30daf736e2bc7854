package lsp

import (
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"unicode"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
	"portlight/lsp/files"
)

func protocolURI(text string) uri.URI { return uri.URI(text) }

// offer offers what one place in the grammar wants.
func (c *completer) offer(h *dialect.Hole) {
	switch h.Want {
	case dialect.WantStatement:
		c.statements(h.Words)
	case dialect.WantNode:
		c.nodes()
	case dialect.WantNewName:
		c.newNames(h.Kind)
	case dialect.WantBox:
		c.boxes()
	case dialect.WantValue:
		c.values(h.Kind)
		c.expressions()
	case dialect.WantTolerance:
		c.tolerances()
	case dialect.WantOption:
		c.words(h.Words, "option")
	case dialect.WantExpression:
		c.expressions()
	case dialect.WantUnit:
		c.preferred(h.Kind)
		c.units(h.Words)
	case dialect.WantQuestion:
		c.questions()
	case dialect.WantQualifier:
		c.qualifiers(h.Words)
	case dialect.WantRelation:
		c.words([]string{"<=", ">=", "<", ">"}, "relation")
	case dialect.WantKind:
		c.kinds(h)
	case dialect.WantSeries:
		c.series()
	case dialect.WantCode:
		c.codes()
	case dialect.WantPath:
		c.paths()
	case dialect.WantSubnetwork:
		c.names(0, dialect.SubnetworkSymbol)
	case dialect.WantParameter, dialect.WantTerminal:
		c.inner(h)
	case dialect.WantPart:
		c.names(0, dialect.PartSymbol, dialect.UseSymbol)
	case dialect.WantInductor:
		c.parts(dialect.Inductor)
	case dialect.WantSwitch:
		c.parts(dialect.Switch)
	case dialect.WantPort:
		c.names(0, dialect.PortSymbol)
	case dialect.WantSubscript:
		c.subscripts(h.Name)
	case dialect.WantMatrixSet:
		c.matrixSets()
	case dialect.WantFrequencyUnit:
		c.words([]string{"Hz", "rad/s"}, "unit")
	case dialect.WantMark:
		c.marks(h.Words)
	case dialect.WantKeyword:
		c.words(h.Words, "keyword")
	}
}

// itemKinds shows what each sort of symbol is.
var itemKinds = map[dialect.SymbolSort]protocol.CompletionItemKind{
	dialect.NodeSymbol: protocol.CompletionItemKindVariable, dialect.PartSymbol: protocol.CompletionItemKindField,
	dialect.PortSymbol: protocol.CompletionItemKindInterface, dialect.FunctionSymbol: protocol.CompletionItemKindFunction,
	dialect.LetSymbol: protocol.CompletionItemKindConstant, dialect.ParameterSymbol: protocol.CompletionItemKindTypeParameter,
	dialect.SubnetworkSymbol: protocol.CompletionItemKindClass, dialect.UseSymbol: protocol.CompletionItemKindModule,
}

// symbol offers a name.
func (c *completer) symbol(s *dialect.Symbol, rank int) {
	if s.Name == "" || s.File == c.file && s.Span.Start == c.context.Replace.Start && len(s.References) < 2 {
		return // the name being typed
	}
	if st := c.context.Statement; st != nil && s.Statement != nil && s.File == c.file && s.Sort != dialect.NodeSymbol &&
		s.Statement.Extent().Start == st.Extent().Start {
		return // what this very statement defines
	}
	detail := s.Sort.String()
	if s.Sort == dialect.PartSymbol {
		detail = s.Kind.String()
	} else if s.Sort == dialect.UseSymbol && s.Of != nil {
		detail = s.Of.Name
	}
	c.add(item{label: s.Name, kind: itemKinds[s.Sort], detail: detail, rank: rank, symbol: s})
}

// names offers the visible symbols of some sorts.
func (c *completer) names(rank int, sorts ...dialect.SymbolSort) {
	for _, s := range c.symbols() {
		if slices.Contains(sorts, s.Sort) {
			c.symbol(s, rank)
		}
	}
}

// parts offers the parts of a kind.
func (c *completer) parts(kind dialect.Kind) {
	for _, s := range c.symbols() {
		if s.Sort == dialect.PartSymbol && s.Kind == kind {
			c.symbol(s, 0)
		}
	}
}

// boxes offers what may stand in a box: parts not wired yet first, then part
// statements and uses to be written in place.
func (c *completer) boxes() {
	for _, s := range c.checked.UnwiredAt(c.file, c.offset) {
		c.symbol(s, 0)
	}
	for _, k := range twoTerminal {
		c.kind(k, 1)
	}
	for _, s := range c.symbols() {
		if s.Sort == dialect.SubnetworkSymbol && len(s.Terminals) == 2 {
			c.add(item{
				label: "part … = " + s.Name, kind: protocol.CompletionItemKindSnippet, detail: "a use of " + s.Name,
				insert:  "part " + c.nextName("X") + " = " + s.Name,
				snippet: "part ${1:" + c.nextName("X") + "} = " + s.Name, filter: "part " + s.Name, rank: 2, symbol: s,
			})
		}
	}
}

// subscripts offers what a quantity can be asked of.
func (c *completer) subscripts(letter string) {
	if owner := c.owner(); owner != nil {
		for _, s := range c.checked.Body(owner) {
			if s.Sort == dialect.NodeSymbol || s.Sort == dialect.PartSymbol || s.Sort == dialect.UseSymbol {
				c.symbol(s, 0)
			}
		}
		return
	}
	switch letter {
	case "thevenin", "norton":
		c.names(0, dialect.PortSymbol)
	case "i":
		c.names(0, dialect.PartSymbol, dialect.PortSymbol)
		c.names(1, dialect.UseSymbol)
	case "p":
		c.names(0, dialect.PartSymbol, dialect.UseSymbol)
	default:
		c.names(0, dialect.NodeSymbol, dialect.PortSymbol)
		c.names(1, dialect.PartSymbol, dialect.UseSymbol)
	}
}

// owner is the subnetwork whose inner names follow a dot before the word.
func (c *completer) owner() *dialect.Symbol {
	start := c.context.Replace.Start
	before := c.file.Text[:start]
	if !strings.HasSuffix(before, ".") {
		return nil
	}
	use, _, ok := c.checked.SymbolAt(c.file, start-1)
	if !ok || use.Sort != dialect.UseSymbol {
		name := before[:len(before)-1]
		name = name[strings.LastIndexFunc(name, func(r rune) bool { return !wordRune(r) })+1:]
		if use = c.checked.Lookup(c.file, c.offset, name); use == nil {
			return nil
		}
	}
	return use.Of
}

// inner offers the parameters or terminals of the subnetwork that is used.
func (c *completer) inner(h *dialect.Hole) {
	sub := c.checked.Lookup(c.file, c.offset, h.Name)
	if sub == nil {
		return
	}
	list, insert := sub.Parameters, " = "
	if h.Want == dialect.WantTerminal {
		list, insert = sub.Terminals, " at "
	}
	for _, s := range list {
		c.add(item{label: s.Name, kind: itemKinds[s.Sort], detail: s.Sort.String() + " of " + sub.Name, insert: s.Name + insert, symbol: s, again: true})
	}
}

// newNames suggests the next free name in the file's own manner: where parts
// of the kind are called R1 and R2, R3.
func (c *completer) newNames(kind dialect.Kind) {
	if kind == dialect.NoKind {
		return
	}
	stem := ""
	for _, s := range c.checked.SymbolsOf(c.file) {
		if s.Sort == dialect.PartSymbol && s.Kind == kind {
			if t := strings.TrimRightFunc(s.Name, unicode.IsDigit); t != "" {
				stem = t
			}
		}
	}
	if stem != "" {
		c.add(item{label: c.nextName(stem), kind: protocol.CompletionItemKindText, detail: "next free name"})
	}
}

// nextName is the first free name of a stem and a number.
func (c *completer) nextName(stem string) string {
	taken := map[string]bool{}
	for _, s := range c.symbols() {
		taken[s.Name] = true
	}
	for i := 1; ; i++ {
		if name := fmt.Sprintf("%s%d", stem, i); !taken[name] {
			return name
		}
	}
}

// paths offers the network files beside this one, and below.
func (c *completer) paths() {
	if !isPath(c.unit.name) {
		return
	}
	folder := filepath.Dir(c.unit.name)
	names, _ := files.Collect(folder)
	for _, name := range names {
		path, err := filepath.Rel(folder, name)
		if err != nil || name == c.unit.name {
			continue
		}
		path = filepath.ToSlash(path)
		i := item{label: path, kind: protocol.CompletionItemKindFile}
		if end := c.context.Replace.End; !c.context.Quoted {
			i.insert = `"` + path + `"`
		} else if end >= len(c.file.Text) || c.file.Text[end] != '"' {
			i.insert = path + `"`
		}
		c.add(i)
	}
}
