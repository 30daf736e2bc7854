package lsp

import (
	"context"
	"encoding/json"
	"slices"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// Call hierarchy for subnetworks: who uses one, and which ones it uses. A
// file's own statements stand in it as a caller without a body.

// itemData finds an item's subnetwork again; a file has no name.
type itemData struct {
	File string `json:"file"`
	Name string `json:"name"`
}

// prepareCallHierarchy handles textDocument/prepareCallHierarchy.
func prepareCallHierarchy(_ context.Context, r *request, p *protocol.CallHierarchyPrepareParams) ([]protocol.CallHierarchyItem, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	symbol, _, ok := at.symbol()
	if !ok {
		return nil, nil
	}
	switch {
	case symbol.Of != nil:
		symbol = symbol.Of
	case symbol.Sort != dialect.SubnetworkSymbol:
		return nil, nil
	}
	return []protocol.CallHierarchyItem{r.item(symbol.File, symbol)}, nil
}

// item describes a subnetwork, or the file itself when symbol is nil.
func (r *request) item(file *dialect.File, symbol *dialect.Symbol) protocol.CallHierarchyItem {
	item := protocol.CallHierarchyItem{URI: r.uriOf(file.Name), Kind: protocol.SymbolKindFile, Name: base(file.Name)}
	data := itemData{File: file.Name}
	if symbol != nil {
		item.Name, item.Kind, data.Name = symbol.Name, protocol.SymbolKindClass, symbol.Name
		item.Detail = ptr(base(file.Name))
		item.Range = r.mapper.reach(file.Lines, symbol.Statement.Extent())
		item.SelectionRange = r.mapper.reach(file.Lines, symbol.Span)
	}
	item.Data, _ = json.Marshal(data)
	return item
}

// incomingCalls handles callHierarchy/incomingCalls.
func incomingCalls(ctx context.Context, r *request, p *protocol.CallHierarchyIncomingCallsParams) ([]protocol.CallHierarchyIncomingCall, error) {
	var data itemData
	if json.Unmarshal(p.Item.Data, &data) != nil || data.Name == "" {
		return nil, nil
	}
	calls := []protocol.CallHierarchyIncomingCall{}
	for _, name := range r.workspaceFiles() {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		checked, _ := r.unit(name).check()
		if checked == nil {
			continue
		}
		eachUse(checked, checked.Main, func(by *dialect.Symbol, use *dialect.UsePartStatement, of *dialect.Symbol) {
			if of.Name != data.Name || of.File.Name != data.File {
				return
			}
			from := r.item(checked.Main, by)
			where := r.mapper.reach(checked.Main.Lines, use.Subnetwork.Span)
			i := slices.IndexFunc(calls, func(c protocol.CallHierarchyIncomingCall) bool { return string(c.From.Data) == string(from.Data) })
			if i < 0 {
				i = len(calls)
				calls = append(calls, protocol.CallHierarchyIncomingCall{From: from})
			}
			calls[i].FromRanges = append(calls[i].FromRanges, where)
		})
	}
	return calls, nil
}

// outgoingCalls handles callHierarchy/outgoingCalls.
func outgoingCalls(_ context.Context, r *request, p *protocol.CallHierarchyOutgoingCallsParams) ([]protocol.CallHierarchyOutgoingCall, error) {
	var data itemData
	if json.Unmarshal(p.Item.Data, &data) != nil {
		return nil, nil
	}
	checked, _ := r.unit(data.File).check()
	if checked == nil {
		return nil, nil
	}
	calls := []protocol.CallHierarchyOutgoingCall{}
	eachUse(checked, checked.Main, func(by *dialect.Symbol, use *dialect.UsePartStatement, of *dialect.Symbol) {
		if (by == nil) != (data.Name == "") || by != nil && by.Name != data.Name {
			return
		}
		to := r.item(of.File, of)
		where := r.mapper.reach(checked.Main.Lines, use.Subnetwork.Span)
		i := slices.IndexFunc(calls, func(c protocol.CallHierarchyOutgoingCall) bool { return string(c.To.Data) == string(to.Data) })
		if i < 0 {
			i = len(calls)
			calls = append(calls, protocol.CallHierarchyOutgoingCall{To: to})
		}
		calls[i].FromRanges = append(calls[i].FromRanges, where)
	})
	return calls, nil
}

// eachUse calls visit for every use of a subnetwork in a file: by is the
// subnetwork whose body holds it, nil outside of any.
func eachUse(c *dialect.Checked, file *dialect.File, visit func(by *dialect.Symbol, use *dialect.UsePartStatement, of *dialect.Symbol)) {
	var by *dialect.Symbol
	var look func(st dialect.Statement)
	look = func(st dialect.Statement) {
		switch st := st.(type) {
		case *dialect.UsePartStatement:
			if of, _, ok := c.SymbolAt(file, st.Subnetwork.Span.Start); ok && st.Subnetwork.Present() && of.Sort == dialect.SubnetworkSymbol {
				visit(by, st, of)
			}
		case *dialect.PathStatement:
			for _, chain := range st.Chains {
				for _, group := range chain.Groups {
					for _, box := range group.Boxes {
						if inner, ok := box.(dialect.Statement); ok {
							look(inner)
						}
					}
				}
			}
		case *dialect.SubnetworkStatement:
			if symbol, _, ok := c.SymbolAt(file, st.Name.Span.Start); ok && symbol.Sort == dialect.SubnetworkSymbol {
				by = symbol
			}
			for _, inner := range st.Statements {
				look(inner)
			}
			by = nil
		}
	}
	for _, st := range file.Statements {
		look(st)
	}
}
