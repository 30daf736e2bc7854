package lsp

import (
	"context"
	"strings"
	"unicode"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
)

// documentSymbols handles textDocument/documentSymbol: every name that the
// document defines, subnetworks with what is in them.
func documentSymbols(_ context.Context, r *request, p *protocol.DocumentSymbolParams) (protocol.DocumentSymbolResult, error) {
	u, err := r.document(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	file, err := u.file()
	if err != nil {
		return nil, err
	}
	list := outlineOf(file.Statements)
	if r.client.nestedSymbols {
		return protocol.DocumentSymbolSlice(r.nested(file, r.mapper.walk(file), list)), nil
	}
	flat := protocol.SymbolInformationSlice{}
	r.flatten(file, u.uri, list, "", &flat)
	return flat, nil
}

// outline is one line of a document's outline.
type outline struct {
	name, detail string
	kind         protocol.SymbolKind
	span, at     dialect.Span // of the statement, of the name
	inside       []outline
}

// outlineOf lists what statements define.
func outlineOf(statements []dialect.Statement) []outline {
	var list []outline
	for _, st := range statements {
		list = appendOutline(list, st)
	}
	return list
}

func appendOutline(list []outline, st dialect.Statement) []outline {
	span := st.Extent()
	add := func(name dialect.Word, kind protocol.SymbolKind, detail string) {
		if name.Present() {
			list = append(list, outline{name: name.Text, detail: detail, kind: kind, span: span, at: name.Span})
		}
	}
	switch st := st.(type) {
	case *dialect.GroundStatement:
		add(st.Node, protocol.SymbolKindNull, "reference node")
	case *dialect.LetStatement:
		add(st.Name, protocol.SymbolKindConstant, "constant")
	case *dialect.PartStatement:
		add(st.Name, protocol.SymbolKindObject, st.Kind.String())
	case *dialect.PathStatement:
		for _, chain := range st.Chains {
			for _, group := range chain.Groups {
				for _, box := range group.Boxes {
					if inner, ok := box.(dialect.Statement); ok {
						list = appendOutline(list, inner)
					}
				}
			}
		}
	case *dialect.PortStatement:
		add(st.Name, protocol.SymbolKindInterface, "port")
	case *dialect.FunctionStatement:
		add(st.Name, protocol.SymbolKindFunction, "network function")
	case *dialect.UsePartStatement:
		add(st.Name, protocol.SymbolKindObject, st.Subnetwork.Text)
	case *dialect.SubnetworkStatement:
		if st.Name.Present() {
			list = append(list, outline{
				name: st.Name.Text, detail: "subnetwork", kind: protocol.SymbolKindClass,
				span: span, at: st.Name.Span, inside: outlineOf(st.Statements),
			})
		}
	}
	return list
}

// nested makes the outline a tree for the client. Statements come in order of
// the text, so one walk over it gives all positions.
func (r *request) nested(file *dialect.File, w *walker, list []outline) []protocol.DocumentSymbol {
	out := make([]protocol.DocumentSymbol, 0, len(list))
	for _, o := range list {
		out = append(out, protocol.DocumentSymbol{
			Name: o.name, Detail: ptr(o.detail), Kind: o.kind,
			Range: r.mapper.reach(file.Lines, o.span), SelectionRange: r.mapper.reach(file.Lines, o.at),
			Children: r.nested(file, w, o.inside),
		})
	}
	return out
}

// flatten makes the outline a list for older clients.
func (r *request) flatten(file *dialect.File, at uri.URI, list []outline, container string, out *protocol.SymbolInformationSlice) {
	for _, o := range list {
		info := protocol.SymbolInformation{Location: r.mapper.location(at, file, o.span)}
		info.Name, info.Kind = o.name, o.kind
		if container != "" {
			info.ContainerName = ptr(container)
		}
		*out = append(*out, info)
		r.flatten(file, at, o.inside, o.name, out)
	}
}

// maxWorkspaceSymbols bounds an answer to workspace/symbol; the client asks
// again with every letter.
const maxWorkspaceSymbols = 1000

// workspaceSymbols handles workspace/symbol: names anywhere in the workspace
// that hold the letters of the query in order.
func workspaceSymbols(ctx context.Context, r *request, p *protocol.WorkspaceSymbolParams) (protocol.WorkspaceSymbolResult, error) {
	found := protocol.WorkspaceSymbolSlice{}
	for _, name := range r.workspaceFiles() {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		u := r.unit(name)
		file, err := u.file()
		if err != nil {
			continue // vanished in the meantime
		}
		r.match(file, r.uriOf(name), outlineOf(file.Statements), "", p.Query, &found)
		if len(found) >= maxWorkspaceSymbols {
			break
		}
	}
	return found, nil
}

func (r *request) match(file *dialect.File, at uri.URI, list []outline, container, query string, out *protocol.WorkspaceSymbolSlice) {
	for _, o := range list {
		if len(*out) >= maxWorkspaceSymbols {
			return
		}
		if holds(o.name, query) {
			symbol := protocol.WorkspaceSymbol{Location: ptr(r.mapper.location(at, file, o.at))}
			symbol.Name, symbol.Kind = o.name, o.kind
			if container != "" {
				symbol.ContainerName = ptr(container)
			}
			*out = append(*out, symbol)
		}
		r.match(file, at, o.inside, o.name, query, out)
	}
}

// holds says that a name has all letters of a query in their order, case aside.
func holds(name, query string) bool {
	rest := []rune(strings.ToLower(query))
	for _, r := range name {
		if len(rest) == 0 {
			break
		}
		if unicode.ToLower(r) == rest[0] {
			rest = rest[1:]
		}
	}
	return len(rest) == 0
}
