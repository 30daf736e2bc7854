package lsp

import (
	"context"
	"encoding/json"
	"fmt"
	"slices"
	"strings"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// maxCompletions bounds a list; with more the client asks again when the next
// letter is typed.
const maxCompletions = 200

// completion handles textDocument/completion: what the grammar wants at the
// place decides what is offered.
func completion(_ context.Context, r *request, p *protocol.CompletionParams) (protocol.CompletionResult, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	c := &completer{request: r, place: at, context: contextAt(at.file, at.offset), seen: map[string]bool{}}
	for _, hole := range c.context.Fits {
		c.offer(hole)
	}
	return c.list(), nil
}

// contextAt is what the grammar wants at an offset. The code of a finding is
// one word there, hyphens included.
func contextAt(file *dialect.File, offset int) dialect.Context {
	context := dialect.Expected(file, offset)
	start := context.Replace.Start
	for start > 0 && (file.Text[start-1] == '-' || file.Text[start-1] >= 'a' && file.Text[start-1] <= 'z') {
		start--
	}
	if start < context.Replace.Start && file.Text[context.Replace.Start-1] == '-' {
		if code := dialect.Expected(file, start); code.Wants(dialect.WantCode) != nil {
			code.Replace = dialect.Span{Start: start, End: context.Replace.End}
			code.Typed = file.Text[start:offset]
			return code
		}
	}
	return context
}

// completer gathers what fits at a place.
type completer struct {
	*request
	*place
	context dialect.Context
	visible []*dialect.Symbol // see symbols
	items   []protocol.CompletionItem
	seen    map[string]bool
	more    bool
}

// symbols are the names that the place may use, gathered once.
func (c *completer) symbols() []*dialect.Symbol {
	if c.visible == nil {
		c.visible = c.checked.Visible(c.file, c.offset)
	}
	return c.visible
}

// item is one thing to offer.
type item struct {
	label   string
	kind    protocol.CompletionItemKind
	detail  string // beside the label
	doc     string // for resolve
	insert  string // the text, "" for the label
	snippet string // with places to fill in, for clients that can; wins over insert
	filter  string // what typing is compared with, "" for the label
	rank    int    // smaller first
	again   bool   // open the list again after it is taken
	from    int    // where the replaced text starts if before the word, else 0
	symbol  *dialect.Symbol
}

// completionData finds what an item stands for again.
type completionData struct {
	URI     string `json:"uri,omitempty"`
	Version int32  `json:"version,omitempty"`
	File    string `json:"file,omitempty"`
	Offset  int    `json:"offset,omitempty"` // of a symbol's definition
	Doc     string `json:"doc,omitempty"`
}

// add offers an item once, if what is typed can still become it.
func (c *completer) add(i item) {
	filter := i.filter
	if filter == "" {
		filter = i.label
	}
	if c.seen[i.label] || !holds(filter, c.context.Typed) && !holds(i.label, c.context.Typed) {
		return
	}
	if len(c.items) >= maxCompletions {
		c.more = true
		return
	}
	c.seen[i.label] = true
	out := protocol.CompletionItem{Label: i.label, Kind: i.kind, SortText: protocol.NewOptional(fmt.Sprintf("%02d%05d", i.rank, len(c.items)))}
	if i.detail != "" {
		out.Detail = protocol.NewOptional(i.detail)
	}
	if filter != i.label && !holds(i.label, c.context.Typed) {
		out.FilterText = protocol.NewOptional(filter)
	}
	text := i.insert
	if text == "" {
		text = i.label
	}
	if i.snippet != "" && c.client.snippets {
		text, out.InsertTextFormat = i.snippet, protocol.InsertTextFormatSnippet
	}
	c.setText(&out, i, text)
	c.setData(&out, i)
	if i.again {
		out.Command = protocol.Command{Title: "suggest", Command: "editor.action.triggerSuggest"}
		if !c.client.pictures { // only that family of clients has the command
			out.Command = protocol.Command{}
		}
	}
	c.items = append(c.items, out)
}

// setText makes the edit: the whole word is replaced, or where the client
// lets its user choose, the part before the pointer.
func (c *completer) setText(out *protocol.CompletionItem, i item, text string) {
	word := c.context.Replace
	if i.from > 0 {
		word.Start = i.from
	}
	replace := c.mapper.reach(c.file.Lines, word)
	if c.client.insertReplace {
		insert := replace
		insert.End = c.mapper.position(c.file.Lines, c.offset)
		out.TextEdit = &protocol.InsertReplaceEdit{NewText: text, Insert: insert, Replace: replace}
		return
	}
	out.TextEdit = &protocol.TextEdit{Range: replace, NewText: text}
}

func (c *completer) setData(out *protocol.CompletionItem, i item) {
	data := completionData{Doc: i.doc}
	if i.symbol != nil {
		data.URI, data.Version = string(c.unit.uri), c.unit.version
		data.File, data.Offset = i.symbol.File.Name, i.symbol.Span.Start
	}
	if data == (completionData{}) {
		return
	}
	out.Data, _ = json.Marshal(data)
	if !slices.Contains(c.client.resolveCompletion, "documentation") && data.Doc != "" {
		out.Documentation = c.documentation(data.Doc)
	}
}

func (r *request) documentation(text string) protocol.InlayHintTooltip {
	m := &markup{markdown: r.client.markdownCompletion}
	m.prose(text)
	return m.content()
}

func (c *completer) list() *protocol.CompletionList {
	if c.items == nil {
		c.items = []protocol.CompletionItem{}
	}
	return &protocol.CompletionList{IsIncomplete: c.more, Items: c.items}
}

// resolveCompletion handles completionItem/resolve: documentation, which for
// a name is the same card that a hover shows.
func resolveCompletion(ctx context.Context, r *request, i *protocol.CompletionItem) (*protocol.CompletionItem, error) {
	var data completionData
	if len(i.Data) == 0 || json.Unmarshal(i.Data, &data) != nil {
		return i, nil
	}
	if data.File == "" {
		i.Documentation = r.documentation(data.Doc)
		return i, nil
	}
	unit := r.units[r.mapper.name(protocolURI(data.URI))]
	if unit == nil {
		return i, nil
	}
	checked, analysis := unit.check()
	if checked == nil {
		return i, nil
	}
	for _, file := range checked.Files {
		if file.Name != data.File {
			continue
		}
		ctx, done := unit.with(ctx)
		defer done()
		card, _, ok, err := analysis.Card(ctx, file, data.Offset)
		if err != nil {
			return nil, err
		}
		if ok {
			m := &markup{markdown: r.client.markdownCompletion}
			r.card(m, card)
			i.Documentation = m.content()
		}
	}
	return i, nil
}

// snippetText protects a text from being read as a snippet.
func snippetText(text string) string {
	return strings.NewReplacer(`\`, `\\`, `$`, `\$`, `}`, `\}`).Replace(text)
}
