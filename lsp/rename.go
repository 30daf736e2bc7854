package lsp

import (
	"context"
	"fmt"
	"slices"
	"unicode"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
)

// requestFailed is the protocol's code for a request that is right in form but
// cannot be done; its message is shown to the user.
const requestFailed = jsonrpc2.Code(protocol.LSPErrorCodesRequestFailed)

// prepareRename handles textDocument/prepareRename.
func prepareRename(_ context.Context, r *request, p *protocol.PrepareRenameParams) (protocol.PrepareRenameResult, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	symbol, span, ok := at.symbol()
	if !ok {
		return nil, nil
	}
	return &protocol.PrepareRenamePlaceholder{Range: r.mapper.reach(at.file.Lines, span), Placeholder: symbol.Name}, nil
}

// rename handles textDocument/rename, in every file of the workspace that
// names the symbol.
func rename(ctx context.Context, r *request, p *protocol.RenameParams) (*protocol.WorkspaceEdit, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	symbol, _, ok := at.symbol()
	if !ok {
		return nil, jsonrpc2.Errorf(requestFailed, "There is no name here to rename.")
	}
	if p.NewName == symbol.Name {
		return nil, nil
	}
	symbols := at.bearers(symbol)
	for _, s := range symbols {
		if why := at.unfit(s, p.NewName); why != "" {
			return nil, jsonrpc2.Errorf(requestFailed, "%s", why)
		}
	}
	edits := edits{}
	for _, s := range symbols {
		found, err := r.everywhere(ctx, at, s)
		if err != nil {
			return nil, err
		}
		for _, ref := range found {
			edits.add(ref.File, ref.Span, p.NewName)
		}
	}
	return r.workspaceEdit(edits), nil
}

// bearers are the symbols that one name stands for: a port may bear the name
// of its + node, and then both are renamed.
func (p *place) bearers(symbol *dialect.Symbol) []*dialect.Symbol {
	all := []*dialect.Symbol{symbol}
	if symbol.Inside != nil || symbol.Sort != dialect.NodeSymbol && symbol.Sort != dialect.PortSymbol {
		return all
	}
	for _, other := range p.checked.SymbolsOf(symbol.File) {
		if other != symbol && other.Name == symbol.Name &&
			(other.Sort == dialect.NodeSymbol || other.Sort == dialect.PortSymbol) {
			all = append(all, other)
		}
	}
	return all
}

// unfit says why a symbol cannot bear a name, "" if it can.
func (p *place) unfit(s *dialect.Symbol, name string) string {
	if !isName(name, s.Sort == dialect.NodeSymbol) {
		if s.Sort == dialect.NodeSymbol {
			return fmt.Sprintf("%q is not a node's name: letters, digits and _ only.", name)
		}
		return fmt.Sprintf("%q is not a name: a letter or _, then letters, digits and _.", name)
	}
	if s.Sort != dialect.NodeSymbol && (name == "s" || name == "t" || name == "pi") {
		return fmt.Sprintf("%s has a meaning in expressions and cannot name a %s.", name, s.Sort)
	}
	for _, other := range p.neighbours(s) {
		if other != s && other.Name == name {
			return fmt.Sprintf("%s is already the name of a %s.", name, other.Sort)
		}
	}
	return ""
}

// neighbours are the symbols of the name space of a symbol.
func (p *place) neighbours(s *dialect.Symbol) []*dialect.Symbol {
	if s.Inside != nil {
		return p.checked.Body(s.Inside)
	}
	return p.checked.Visible(s.File, s.Span.Start)
}

// isName says that a text can be a name; a node's may begin with a digit.
func isName(text string, digit bool) bool {
	for i, r := range text {
		switch {
		case r == '_' || unicode.IsLetter(r):
		case unicode.IsDigit(r) && (i > 0 || digit):
		default:
			return false
		}
	}
	return text != ""
}

// edits gathers changes of text, file by file.
type edits map[*dialect.File][]dialect.Edit

func (e edits) add(file *dialect.File, span dialect.Span, text string) {
	for i := range e { // one file may be seen through several checks
		if i.Name == file.Name && i.Text == file.Text {
			file = i
		}
	}
	edit := dialect.Edit{File: file, Span: span, Text: text}
	if !slices.Contains(e[file], edit) {
		e[file] = append(e[file], edit)
	}
}

// workspaceEdit words changes in the form that the client takes: with the
// versions of open documents where it checks them.
func (s *snapshot) workspaceEdit(changes edits) *protocol.WorkspaceEdit {
	out := &protocol.WorkspaceEdit{}
	files := make([]*dialect.File, 0, len(changes))
	for file := range changes {
		files = append(files, file)
	}
	slices.SortFunc(files, func(a, b *dialect.File) int {
		if a.Name < b.Name {
			return -1
		}
		return 1
	})
	for _, file := range files {
		list := s.textEdits(file, changes[file])
		at := s.uriOf(file.Name)
		if !s.session.client.documentChanges {
			if out.Changes == nil {
				out.Changes = map[uri.URI][]protocol.TextEdit{}
			}
			out.Changes[at] = list
			continue
		}
		change := &protocol.TextDocumentEdit{}
		change.TextDocument.URI = at
		if u := s.units[file.Name]; u != nil {
			change.TextDocument.Version = ptr(u.version)
		}
		for i := range list {
			change.Edits = append(change.Edits, &list[i])
		}
		out.DocumentChanges = append(out.DocumentChanges, change)
	}
	return out
}

// textEdits words changes of one file, in order of the text.
func (s *snapshot) textEdits(file *dialect.File, list []dialect.Edit) []protocol.TextEdit {
	list = slices.Clone(list)
	slices.SortStableFunc(list, func(a, b dialect.Edit) int { return a.Span.Start - b.Span.Start })
	out := make([]protocol.TextEdit, 0, len(list))
	for _, e := range list {
		out = append(out, protocol.TextEdit{Range: s.session.mapper.reach(file.Lines, e.Span), NewText: e.Text})
	}
	return out
}

// linkedEditing handles textDocument/linkedEditingRange: the places of a name
// in this document, to be typed into at once. Names that other files may
// share are left to rename, which reaches those files.
func linkedEditing(_ context.Context, r *request, p *protocol.LinkedEditingRangeParams) (*protocol.LinkedEditingRanges, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	symbol, _, ok := at.symbol()
	if !ok || symbol.Sort == dialect.SubnetworkSymbol || symbol.File != at.file {
		return nil, nil
	}
	var spans []dialect.Span
	for _, s := range at.bearers(symbol) {
		for _, ref := range s.References {
			if ref.File != at.file {
				return nil, nil
			}
			spans = append(spans, ref.Span)
		}
	}
	slices.SortFunc(spans, func(a, b dialect.Span) int { return a.Start - b.Start })
	out := &protocol.LinkedEditingRanges{WordPattern: ptr(`[\p{L}\p{Nd}_]+`)}
	for _, span := range slices.Compact(spans) {
		out.Ranges = append(out.Ranges, r.mapper.reach(at.file.Lines, span))
	}
	return out, nil
}
