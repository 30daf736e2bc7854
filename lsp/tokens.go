package lsp

import (
	"slices"
	"strings"
	"sync"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// tokenClass indexes the legend's types.
type tokenClass uint8

// The types of semantic token.
const (
	keywordToken tokenClass = iota
	variableToken
	propertyToken
	interfaceToken
	functionToken
	parameterToken
	classToken
	typeToken
	numberToken
	stringToken
	commentToken
	operatorToken
	enumToken
)

// Bits of the legend's modifiers.
const (
	declarationMark = 1 << iota
	readonlyMark
	documentationMark
	libraryMark
)

func tokenLegend() protocol.SemanticTokensLegend {
	return protocol.SemanticTokensLegend{
		TokenTypes: []string{
			"keyword", "variable", "property", "interface", "function", "parameter", "class", "type",
			"number", "string", "comment", "operator", "enumMember",
		},
		TokenModifiers: []string{"declaration", "readonly", "documentation", "defaultLibrary"},
	}
}

// symbolTokens says how each sort of name is shown: nodes as variables, parts
// as properties, units as types.
var symbolTokens = map[dialect.SymbolSort]struct {
	class tokenClass
	mark  uint8
}{
	dialect.NodeSymbol: {variableToken, 0}, dialect.PartSymbol: {propertyToken, 0}, dialect.PortSymbol: {interfaceToken, 0},
	dialect.FunctionSymbol: {functionToken, 0}, dialect.LetSymbol: {variableToken, readonlyMark},
	dialect.ParameterSymbol: {parameterToken, 0}, dialect.SubnetworkSymbol: {classToken, 0}, dialect.UseSymbol: {propertyToken, 0},
}

// token is one coloured piece of text.
type token struct {
	span  dialect.Span
	class tokenClass
	mark  uint8
}

// tokensOf lists the tokens of a document that touch a span, in order of the
// text.
func tokensOf(at *place, span dialect.Span) []token {
	t := tokenList{uses: at.checked.Uses(at.file), text: at.file.Text}
	t.list = make([]token, 0, (span.End-span.Start)/4)
	t.uses = t.uses[firstUse(t.uses, span.Start):]
	comments := at.file.Comments
	i, _ := slices.BinarySearchFunc(comments, span.Start, func(c *dialect.Comment, offset int) int { return c.Span.End - offset })
	comments = comments[i:]
	for _, st := range overlapping(at.file.Statements, span) {
		comments = t.commentsBefore(comments, st.Extent().Start)
		if sub, ok := st.(*dialect.SubnetworkStatement); ok {
			comments = t.subnetwork(sub, comments)
			continue
		}
		t.statement(st)
	}
	t.commentsBefore(comments, span.End)
	if !slices.IsSortedFunc(t.list, byStart) { // a comment inside a statement of several lines
		slices.SortStableFunc(t.list, byStart)
	}
	return t.list
}

func byStart(a, b token) int { return a.span.Start - b.span.Start }

func firstUse(uses []dialect.SymbolUse, offset int) int {
	i, _ := slices.BinarySearchFunc(uses, offset, func(u dialect.SymbolUse, offset int) int { return u.Span.End - offset })
	return i
}

// tokenList gathers tokens while the tree is walked in order of the text.
type tokenList struct {
	list []token
	uses []dialect.SymbolUse // those not passed yet
	text string
}

func (t *tokenList) add(span dialect.Span, class tokenClass, mark uint8) {
	if span.End > span.Start {
		t.list = append(t.list, token{span, class, mark})
	}
}

func (t *tokenList) commentsBefore(list []*dialect.Comment, offset int) []*dialect.Comment {
	for len(list) > 0 && list[0].Span.Start < offset {
		mark := uint8(0)
		if list[0].Documents() {
			mark = documentationMark
		}
		t.add(list[0].Span, commentToken, mark)
		list = list[1:]
	}
	return list
}

func (t *tokenList) subnetwork(sub *dialect.SubnetworkStatement, comments []*dialect.Comment) []*dialect.Comment {
	t.statement(&dialect.SubnetworkStatement{ // the head alone
		Head: sub.Head, Name: sub.Name, Terminals: sub.Terminals, With: sub.With, Parameters: sub.Parameters,
	})
	for _, st := range sub.Statements {
		comments = t.commentsBefore(comments, st.Extent().Start)
		if inner, ok := st.(*dialect.SubnetworkStatement); ok {
			comments = t.subnetwork(inner, comments)
			continue
		}
		t.statement(st)
	}
	return comments
}

// statement adds the tokens of one statement.
func (t *tokenList) statement(st dialect.Statement) { dialect.Walk(st, t.visit) }

// visit adds the tokens of one node, and says whether its children follow.
func (t *tokenList) visit(tree dialect.Tree) bool {
	switch x := tree.(type) {
	case dialect.Word:
		t.word(x)
	case *dialect.NumberExpr:
		t.add(x.Number.Span, numberToken, 0)
		if x.Unit != nil {
			t.add(x.Unit.Span, typeToken, 0)
		}
		return false
	case *dialect.CodeValue:
		t.add(x.Span, numberToken, 0)
	case *dialect.CodeExpr:
		t.add(x.Span, numberToken, 0)
	case dialect.StringLiteral:
		t.add(x.Span, stringToken, 0)
	case *dialect.UnitExpr:
		t.add(x.Span, typeToken, 0)
		return false
	case *dialect.BinaryExpr:
		dialect.Walk(x.X, t.visit)
		t.add(x.Mark, operatorToken, 0)
		dialect.Walk(x.Y, t.visit)
		return false
	case *dialect.UnaryExpr:
		t.add(x.Mark, operatorToken, 0)
	case *dialect.NameExpr:
		for _, w := range x.Words {
			t.name(w)
		}
		return false
	case *dialect.SubscriptExpr:
		t.add(x.Letter.Span, functionToken, libraryMark)
		for _, s := range x.Subscripts {
			t.visit(s)
		}
		return false
	}
	return true
}

// name adds a word of an expression: a symbol, or a name of the notation.
func (t *tokenList) name(w dialect.Word) {
	if t.symbol(w.Span) || w.Text == "" {
		return
	}
	switch {
	case w.Text == "pi" || w.Text == "s" || w.Text == "t":
		t.add(w.Span, variableToken, readonlyMark|libraryMark)
	case callNames()[w.Text]:
		t.add(w.Span, functionToken, libraryMark)
	}
}

// callNames are the names of functions and measures.
var callNames = sync.OnceValue(func() map[string]bool {
	names := map[string]bool{}
	for _, s := range dialect.Signatures() {
		names[s.Name] = true
	}
	return names
})

// word adds a word of a statement: a symbol or a keyword.
func (t *tokenList) word(w dialect.Word) {
	if t.symbol(w.Span) || w.Text == "" {
		return
	}
	switch first := w.Text[0]; {
	case first == '<' || first == '>' || first == '+' || first == '-':
		t.add(w.Span, operatorToken, 0)
	case keywords[w.Text]:
		t.add(w.Span, keywordToken, 0)
	case values[w.Text] || first == 'E':
		t.add(w.Span, enumToken, 0)
	}
}

// keywords are the words of the grammar that stand in the tree as words.
var keywords = wordSet("ground let port function tell require start prefer allow use subnetwork part",
	"at before from to with without because of in nominal reference ideal opens closes open closed",
	"rated initially gain resistance output primary secondary between poles zeros initial matrix",
	"resistor inductor capacitor impedance admittance transformer coupling switch wire",
	"voltage source|current source|op amp")

// values are the words that are chosen from a list.
var values = wordSet("rest steady z y h g abcd s")

func wordSet(lists ...string) map[string]bool {
	set := map[string]bool{}
	for _, list := range lists {
		words := strings.Fields(list)
		if strings.Contains(list, "|") {
			words = strings.Split(list, "|")
		}
		for _, w := range words {
			set[w] = true
		}
	}
	return set
}

// symbol adds a name that the symbol table knows.
func (t *tokenList) symbol(span dialect.Span) bool {
	for len(t.uses) > 0 && t.uses[0].Span.End <= span.Start {
		t.uses = t.uses[1:]
	}
	if len(t.uses) == 0 || t.uses[0].Span != span {
		return false
	}
	s := t.uses[0].Symbol
	shown := symbolTokens[s.Sort]
	if s.Span == span {
		shown.mark |= declarationMark
	}
	t.add(span, shown.class, shown.mark)
	return true
}
