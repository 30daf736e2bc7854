package lsp

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/analyze"
	"portlight/dialect"
)

// The commands of workspace/executeCommand.
const (
	commandAnswer  = "portlight.answer"  // URI, QUESTION: gives the answer as a string
	commandShow    = "portlight.show"    // URI, QUESTION: shows the answer in a document
	commandExplain = "portlight.explain" // CODE: shows what a finding means
	commandApply   = "portlight.apply"   // EDIT: has the client make an edit
)

func commandNames() []string {
	return []string{commandAnswer, commandShow, commandExplain, commandApply}
}

// executeCommand handles workspace/executeCommand.
func executeCommand(ctx context.Context, r *request, p *protocol.ExecuteCommandParams) (jsonrpc2.RawMessage, error) {
	switch p.Command {
	case commandAnswer, commandShow:
		var at uri.URI
		var question string
		if err := arguments(p, &at, &question); err != nil {
			return nil, err
		}
		return r.askCommand(ctx, p.Command, at, question)
	case commandExplain:
		var code string
		if err := arguments(p, &code); err != nil {
			return nil, err
		}
		page, ok := explanationPage(dialect.Code(code))
		if !ok {
			return nil, jsonrpc2.Errorf(jsonrpc2.InvalidParams, "there is no finding %q", code)
		}
		r.showPage(code, page)
		return nil, nil
	case commandApply:
		var edit json.RawMessage
		if err := arguments(p, &edit); err != nil {
			return nil, err
		}
		params := &protocol.ApplyWorkspaceEditParams{}
		if err := protocol.Unmarshal(edit, &params.Edit); err != nil {
			return nil, fmt.Errorf("%w: %w", jsonrpc2.ErrInvalidParams, err)
		}
		r.call(protocol.MethodWorkspaceApplyEdit, params, nil, nil)
		return nil, nil
	}
	return nil, jsonrpc2.Errorf(jsonrpc2.InvalidParams, "there is no command %q", p.Command)
}

// arguments reads a command's arguments, all of which must be there.
func arguments(p *protocol.ExecuteCommandParams, into ...any) error {
	if len(p.Arguments) != len(into) {
		return jsonrpc2.Errorf(jsonrpc2.InvalidParams, "%s takes %d arguments, not %d", p.Command, len(into), len(p.Arguments))
	}
	for i, target := range into {
		if err := json.Unmarshal(p.Arguments[i], target); err != nil {
			return jsonrpc2.Errorf(jsonrpc2.InvalidParams, "argument %d of %s: %v", i+1, p.Command, err)
		}
	}
	return nil
}

func (r *request) askCommand(ctx context.Context, command string, at uri.URI, question string) (jsonrpc2.RawMessage, error) {
	place, err := r.whole(at)
	if err != nil {
		return nil, err
	}
	ctx, done := place.unit.with(ctx)
	defer done()
	answer, err := place.analysis.Ask(ctx, question)
	if err != nil {
		return nil, err
	}
	if command == commandShow {
		r.showPage(question, analyze.Markdown(answer))
		return nil, nil
	}
	return json.Marshal(strings.Join(analyze.Words(answer), "\n"))
}

// showPage puts a page of Markdown before the user: in a document of its own
// if the client opens one, as a message otherwise.
func (r *request) showPage(title, page string) {
	if !r.client.showDocument {
		r.show(protocol.MessageTypeInfo, page)
		return
	}
	dir, err := r.pages.folder()
	if err != nil {
		r.show(protocol.MessageTypeInfo, page)
		return
	}
	name := filepath.Join(dir, fileName(title)+".md")
	if err := os.WriteFile(name, []byte(page), 0o600); err != nil {
		r.show(protocol.MessageTypeInfo, page)
		return
	}
	params := &protocol.ShowDocumentParams{URI: uri.File(name), TakeFocus: ptr(false)}
	r.call(protocol.MethodWindowShowDocument, params, nil, nil)
}

// fileName makes a file's name of a title.
func fileName(title string) string {
	clean := strings.Map(func(r rune) rune {
		if strings.ContainsRune(`/\:*?"<>|`, r) || r < ' ' {
			return '_'
		}
		return r
	}, title)
	return strings.TrimSpace(shorten(clean, 80))
}
