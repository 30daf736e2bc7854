package lsp

import (
	"context"
	"slices"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// definition handles textDocument/definition: where a name is defined; of a
// used file's path, the file.
func definition(_ context.Context, r *request, p *protocol.DefinitionParams) (protocol.DefinitionResult, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	target, from, ok := r.target(at)
	if !ok {
		return nil, nil
	}
	if r.client.links.definition {
		return protocol.DefinitionLinkSlice{protocol.DefinitionLink(r.link(at, from, target))}, nil
	}
	return protocol.LocationSlice{r.locate(target)}, nil
}

// declaration handles textDocument/declaration. A name is declared where it
// is defined, but for a node: that is declared by the statement which first
// wires it, and for a terminal by the subnetwork's head.
func declaration(_ context.Context, r *request, p *protocol.DeclarationParams) (protocol.DeclarationResult, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	target, from, ok := r.target(at)
	if !ok {
		return nil, nil
	}
	if r.client.links.declaration {
		return protocol.DeclarationLinkSlice{protocol.DeclarationLink(r.link(at, from, target))}, nil
	}
	return protocol.LocationSlice{r.locate(target)}, nil
}

// typeDefinition handles textDocument/typeDefinition: from a subnetwork's use
// to the subnetwork.
func typeDefinition(_ context.Context, r *request, p *protocol.TypeDefinitionParams) (protocol.DefinitionResult, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	symbol, from, ok := at.symbol()
	if !ok {
		return nil, nil
	}
	switch {
	case symbol.Of != nil:
		symbol = symbol.Of
	case symbol.Inside != nil && symbol.Sort != dialect.SubnetworkSymbol:
		symbol = symbol.Inside
	case symbol.Sort != dialect.SubnetworkSymbol:
		return nil, nil
	}
	target := targetOf(symbol)
	if r.client.links.typeDefinition {
		return protocol.DefinitionLinkSlice{protocol.DefinitionLink(r.link(at, from, target))}, nil
	}
	return protocol.LocationSlice{r.locate(target)}, nil
}

// target is a definition: a name, and the statement around it.
type target struct {
	file      *dialect.File
	name, all dialect.Span
}

func targetOf(s *dialect.Symbol) target {
	t := target{file: s.File, name: s.Span, all: s.Span}
	if s.Statement != nil && s.Sort != dialect.NodeSymbol && s.Sort != dialect.ParameterSymbol {
		t.all = s.Statement.Extent()
	}
	return t
}

// target finds the definition of what stands at a place.
func (r *request) target(at *place) (t target, from dialect.Span, ok bool) {
	for _, link := range at.checked.Links(at.file) {
		if link.Span.Start <= at.offset && at.offset <= link.Span.End && link.File != nil {
			return target{file: link.File}, link.Span, true
		}
	}
	symbol, from, ok := at.symbol()
	if !ok {
		return target{}, from, false
	}
	return targetOf(symbol), from, true
}

func (r *request) locate(t target) protocol.Location {
	return r.mapper.location(r.uriOf(t.file.Name), t.file, t.name)
}

func (r *request) link(at *place, from dialect.Span, t target) protocol.LocationLink {
	return protocol.LocationLink{
		OriginSelectionRange: ptr(r.mapper.reach(at.file.Lines, from)),
		TargetURI:            r.uriOf(t.file.Name),
		TargetRange:          r.mapper.reach(t.file.Lines, t.all),
		TargetSelectionRange: r.mapper.reach(t.file.Lines, t.name),
	}
}

// references handles textDocument/references.
func references(ctx context.Context, r *request, p *protocol.ReferenceParams) ([]protocol.Location, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	symbol, _, ok := at.symbol()
	if !ok {
		return nil, nil
	}
	found, err := r.everywhere(ctx, at, symbol)
	if err != nil {
		return nil, err
	}
	list := []protocol.Location{}
	for _, ref := range found {
		if ref.Definition && !p.Context.IncludeDeclaration {
			continue
		}
		list = append(list, r.mapper.location(r.uriOf(ref.File.Name), ref.File, ref.Span))
	}
	return list, nil
}

// everywhere lists the places of a symbol in all files of the workspace that
// can see it, each once, in order of files and places.
func (r *request) everywhere(ctx context.Context, at *place, symbol *dialect.Symbol) ([]dialect.Reference, error) {
	found := slices.Clone(symbol.References)
	if sharedAcrossFiles(symbol) {
		for _, name := range r.workspaceFiles() {
			if ctx.Err() != nil {
				return nil, ctx.Err()
			}
			if name == at.unit.name {
				continue
			}
			checked, _ := r.unit(name).check()
			if same := counterpart(checked, symbol); same != nil {
				found = append(found, same.References...)
			}
		}
	}
	slices.SortFunc(found, func(a, b dialect.Reference) int {
		if a.File.Name != b.File.Name {
			if a.File.Name < b.File.Name {
				return -1
			}
			return 1
		}
		return a.Span.Start - b.Span.Start
	})
	return slices.CompactFunc(found, func(a, b dialect.Reference) bool {
		return a.File.Name == b.File.Name && a.Span == b.Span
	}), nil
}

// sharedAcrossFiles says that other files may name a symbol: lets and
// subnetworks, with their parameters and terminals, and what is in them, by
// dotted names.
func sharedAcrossFiles(s *dialect.Symbol) bool {
	return s.Inside != nil || s.Sort == dialect.LetSymbol || s.Sort == dialect.SubnetworkSymbol
}

// counterpart is the same symbol as another main file sees it.
func counterpart(c *dialect.Checked, s *dialect.Symbol) *dialect.Symbol {
	if c == nil {
		return nil
	}
	for _, file := range c.Files {
		if file.Name != s.File.Name || file.Text != s.File.Text {
			continue
		}
		if other, _, ok := c.SymbolAt(file, s.Span.Start); ok && other.Name == s.Name && other.Span == s.Span {
			return other
		}
	}
	return nil
}

// documentHighlight handles textDocument/documentHighlight: the places of a
// name in this document, definitions apart from uses.
func documentHighlight(_ context.Context, r *request, p *protocol.DocumentHighlightParams) ([]protocol.DocumentHighlight, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	symbol, _, ok := at.symbol()
	if !ok {
		return nil, nil
	}
	list := []protocol.DocumentHighlight{}
	for _, ref := range inFile(symbol, at.file) {
		kind := protocol.DocumentHighlightKindRead
		if ref.Definition {
			kind = protocol.DocumentHighlightKindWrite
		}
		list = append(list, protocol.DocumentHighlight{Range: r.mapper.reach(at.file.Lines, ref.Span), Kind: kind})
	}
	return list, nil
}

// inFile lists the places of a symbol in one file, in order.
func inFile(s *dialect.Symbol, file *dialect.File) []dialect.Reference {
	list := slices.DeleteFunc(slices.Clone(s.References), func(ref dialect.Reference) bool { return ref.File != file })
	slices.SortFunc(list, func(a, b dialect.Reference) int { return a.Span.Start - b.Span.Start })
	return slices.CompactFunc(list, func(a, b dialect.Reference) bool { return a.Span == b.Span })
}
