package lsp

import (
	"context"
	"encoding/json"
	"fmt"
	"slices"
	"strings"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
)

// fixAll is the kind of the action that makes every obvious repair at once.
const fixAll = protocol.CodeActionKind("source.fixAll.portlight")

// actionKinds are the kinds of action there are.
var actionKinds = []protocol.CodeActionKind{protocol.CodeActionKindQuickFix, fixAll}

// actionData finds an action's document again, for its edit.
type actionData struct {
	URI     uri.URI `json:"uri"`
	Version int32   `json:"version"`
}

// codeActions handles textDocument/codeAction: the repairs of the findings
// that touch the range, a way to accept each, and all obvious repairs at once.
func codeActions(ctx context.Context, r *request, p *protocol.CodeActionParams) ([]protocol.CommandOrCodeAction, error) {
	at, err := r.whole(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	ctx, done := at.unit.with(ctx)
	defer done()
	found, err := at.unit.findings(ctx)
	if err != nil {
		return nil, err
	}
	var actions, acceptances []*protocol.CodeAction
	span := r.mapper.span(at.file.Lines, p.Range)
	for _, f := range r.asked(at, found, span, p.Context.Diagnostics) {
		mend, accept := r.repairs(at, f, p.Context.Diagnostics)
		actions, acceptances = append(actions, mend...), append(acceptances, accept...)
	}
	actions = append(actions, acceptances...) // the first one offered is a repair where there is one
	// A client that asks about one diagnostic and knows no preferred action may
	// apply all that it gets (Kate does).
	alone := len(p.Context.Diagnostics) > 0 && len(p.Context.Only) == 0 && !r.client.preferredActions
	if list := obvious(at.file, found); len(list) > 0 && !alone {
		actions = append(actions, r.fixAll(at, list))
	}
	out := []protocol.CommandOrCodeAction{}
	for _, a := range actions {
		if !wanted(*a.Kind, p.Context.Only) {
			continue
		}
		if r.client.actionLiterals {
			out = append(out, a)
		} else if command := r.asCommand(a); command != nil {
			out = append(out, command)
		}
	}
	return out, nil
}

// asked are the findings that a client asks about: those that touch the span
// and, where it names diagnostics, are among them. Kate asks about one
// diagnostic with the whole document as the span. Diagnostics that are all of
// an older version say nothing.
func (r *request) asked(at *place, found []dialect.Finding, span dialect.Span, named []protocol.Diagnostic) []dialect.Finding {
	var touching, among []dialect.Finding
	for _, f := range found {
		if f.Origin.File != at.file || f.Origin.Span.Start > span.End || f.Origin.Span.End < span.Start {
			continue
		}
		touching = append(touching, f)
		d := r.diagnostic(f)
		if slices.ContainsFunc(named, func(n protocol.Diagnostic) bool { return n.Range == d.Range && n.Code == d.Code }) {
			among = append(among, f)
		}
	}
	if len(among) > 0 {
		return among
	}
	return touching
}

// wanted says that the client asked for a kind or one above it.
func wanted(kind protocol.CodeActionKind, only []protocol.CodeActionKind) bool {
	return len(only) == 0 || slices.ContainsFunc(only, func(o protocol.CodeActionKind) bool {
		return o == "" || kind == o || strings.HasPrefix(string(kind), string(o)+".")
	})
}

// repairs are the actions that mend a finding, and those that accept it.
func (r *request) repairs(at *place, f dialect.Finding, shown []protocol.Diagnostic) (mend, accept []*protocol.CodeAction) {
	diagnostic := r.diagnostic(f)
	for _, d := range shown {
		if d.Range == diagnostic.Range && d.Code == diagnostic.Code {
			diagnostic = d // as the client knows it
		}
	}
	action := func(title string, changes edits, preferred bool) *protocol.CodeAction {
		a := &protocol.CodeAction{
			Title: capital(title), Kind: ptr(protocol.CodeActionKindQuickFix),
			Diagnostics: []protocol.Diagnostic{diagnostic}, Edit: r.workspaceEdit(changes),
		}
		if preferred && r.client.preferredActions {
			a.IsPreferred = ptr(true)
		}
		return a
	}
	for _, repair := range f.Repairs {
		changes := edits{}
		for _, e := range repair.Edits {
			changes.add(e.File, e.Span, e.Text)
		}
		mend = append(mend, action(repair.Title, changes, repair.Preferred))
	}
	if f.Severity != dialect.Error {
		changes := edits{}
		offset := lineAbove(at.file, f.Origin.Span.Start)
		changes.add(at.file, dialect.Span{Start: offset, End: offset}, fmt.Sprintf("allow %s because \"it is meant so\"\n", f.Code))
		accept = append(accept, action(fmt.Sprintf("accept %s in this file, with a reason", f.Code), changes, false))
	}
	return mend, accept
}

// lineAbove is the start of the line above which a statement about the place
// goes: above the file's statement that holds it, and its documentation.
func lineAbove(file *dialect.File, offset int) int {
	if i := find(file.Statements, offset); i >= 0 {
		head := file.Statements[i].Headline()
		offset = head.Span.Start
		if head.Doc != nil {
			offset = head.Doc.Span.Start
		}
	}
	return file.Lines.Span(file.Lines.Line(offset)).Start
}

// obvious are the edits of the preferred repairs in a file, without those
// that would change the same place as one before.
func obvious(file *dialect.File, found []dialect.Finding) []dialect.Edit {
	var list []dialect.Edit
	for _, f := range found {
		for _, repair := range f.Repairs {
			if !repair.Preferred || f.Origin.File != file {
				continue
			}
			apart := !slices.ContainsFunc(repair.Edits, func(e dialect.Edit) bool {
				return e.File != file || slices.ContainsFunc(list, func(other dialect.Edit) bool {
					return e.Span.Start <= other.Span.End && other.Span.Start <= e.Span.End
				})
			})
			if apart {
				list = append(list, repair.Edits...)
			}
			break
		}
	}
	return list
}

// fixAll is the action that makes all obvious repairs. Its edit is left to
// codeAction/resolve where the client does that.
func (r *request) fixAll(at *place, list []dialect.Edit) *protocol.CodeAction {
	a := &protocol.CodeAction{Title: "Make every obvious repair in this file", Kind: ptr(fixAll)}
	if r.client.resolveAction {
		a.Data, _ = json.Marshal(actionData{URI: at.unit.uri, Version: at.unit.version})
	} else {
		a.Edit = r.workspaceEdit(edits{at.file: list})
	}
	return a
}

// resolveAction handles codeAction/resolve.
func resolveAction(ctx context.Context, r *request, a *protocol.CodeAction) (*protocol.CodeAction, error) {
	var data actionData
	if a.Edit != nil || len(a.Data) == 0 {
		return a, nil
	}
	if err := json.Unmarshal(a.Data, &data); err != nil {
		return nil, fmt.Errorf("%w: %w", jsonrpc2.ErrInvalidParams, err)
	}
	at, err := r.whole(data.URI)
	if err != nil {
		return nil, err
	}
	if at.unit.version != data.Version {
		return nil, protocol.ErrContentModified
	}
	ctx, done := at.unit.with(ctx)
	defer done()
	found, err := at.unit.findings(ctx)
	if err != nil {
		return nil, err
	}
	a.Edit = r.workspaceEdit(edits{at.file: obvious(at.file, found)})
	return a, nil
}

// asCommand makes an action a command, for clients that know no others.
func (r *request) asCommand(a *protocol.CodeAction) *protocol.Command {
	if !r.client.applyEdit || a.Edit == nil {
		return nil
	}
	raw, err := protocol.Marshal(a.Edit)
	if err != nil {
		return nil
	}
	return &protocol.Command{Title: a.Title, Command: commandApply, Arguments: []protocol.LSPAny{raw}}
}

func capital(text string) string {
	if text == "" {
		return text
	}
	return strings.ToUpper(text[:1]) + text[1:]
}
