package lsp

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

// patience is how long a test waits for what must come.
const patience = 20 * time.Second

// editor is a client for tests: it talks to a server through pipes.
type editor struct {
	t    testing.TB
	conn jsonrpc2.Conn
	ctx  context.Context
	done chan error // what Serve returned

	mu       sync.Mutex
	news     *sync.Cond
	shown    map[uri.URI][]protocol.PublishDiagnosticsParams
	messages []string         // window/showMessage
	progress map[string][]any // $/progress values, by token
	calls    []string         // methods of the server's requests
	answer   map[string]func(params rawMessage) any
	result   protocol.InitializeResult
	versions map[string]int32
	note     string // shown when waiting is in vain
}

// capabilities of the test client, as JSON; tests change them.
const fullClient = `{
	"general":{"positionEncodings":["utf-16","utf-8"]},
	"window":{"workDoneProgress":true,"showDocument":{"support":true}},
	"workspace":{"applyEdit":true,"configuration":false,"workspaceFolders":true,
		"workspaceEdit":{"documentChanges":true},
		"didChangeWatchedFiles":{"dynamicRegistration":true}},
	"textDocument":{
		"hover":{"contentFormat":["markdown","plaintext"]},
		"completion":{"completionItem":{"snippetSupport":true,"documentationFormat":["markdown"],"resolveSupport":{"properties":["documentation"]}}},
		"signatureHelp":{"signatureInformation":{"documentationFormat":["plaintext"],"parameterInformation":{"labelOffsetSupport":true}}},
		"publishDiagnostics":{"relatedInformation":true},
		"documentSymbol":{"hierarchicalDocumentSymbolSupport":true},
		"codeAction":{"codeActionLiteralSupport":{"codeActionKind":{"valueSet":["quickfix"]}},"isPreferredSupport":true,"dataSupport":true,"resolveSupport":{"properties":["edit"]}},
		"rename":{"prepareSupport":true},
		"semanticTokens":{"requests":{"full":{"delta":true},"range":true},"tokenTypes":[],"tokenModifiers":[],"formats":["relative"]}
	}}`

// newEditor starts a server and initialises it. folder may be empty.
func newEditor(t testing.TB, capabilities, folder string, extra ...method) *editor {
	t.Helper()
	e := rawEditor(t, extra...)
	params := map[string]any{"processId": nil, "rootUri": nil, "capabilities": json.RawMessage(capabilities)}
	if folder != "" {
		params["workspaceFolders"] = []any{map[string]any{"uri": uri.File(folder), "name": filepath.Base(folder)}}
	}
	e.call(protocol.MethodInitialize, params, &e.result)
	e.notify(protocol.MethodInitialized, struct{}{})
	return e
}

// rawEditor starts a server and says nothing to it yet.
func rawEditor(t testing.TB, extra ...method) *editor {
	t.Helper()
	fromServer, toClient := io.Pipe()
	fromClient, toServer := io.Pipe()
	e := &editor{
		t: t, ctx: context.Background(), done: make(chan error, 1), shown: map[uri.URI][]protocol.PublishDiagnosticsParams{},
		answer: map[string]func(rawMessage) any{}, versions: map[string]int32{},
	}
	e.news = sync.NewCond(&e.mu)
	go func() {
		e.done <- Serve(context.Background(), fromClient, toClient, Options{Version: "test", extra: extra})
		_ = toClient.Close()
	}()
	e.conn = jsonrpc2.NewConn(jsonrpc2.NewStream(pipeEnds{fromServer, toServer}), jsonrpc2.WithCodec(codec{}))
	e.conn.Go(e.ctx, jsonrpc2.AsyncHandler(e.handle))
	t.Cleanup(func() { _ = toServer.Close(); <-e.conn.Done() })
	return e
}

type rawMessage = jsonrpc2.RawMessage

type pipeEnds struct {
	io.ReadCloser
	w io.WriteCloser
}

func (p pipeEnds) Write(b []byte) (int, error) { return p.w.Write(b) }
func (p pipeEnds) Close() error                { _ = p.w.Close(); return p.ReadCloser.Close() }

func (e *editor) handle(_ context.Context, req *jsonrpc2.Request) (any, error) {
	e.mu.Lock()
	defer e.mu.Unlock()
	defer e.news.Broadcast()
	switch req.Method() {
	case protocol.MethodTextDocumentPublishDiagnostics:
		var p protocol.PublishDiagnosticsParams
		if err := protocol.Unmarshal(req.Params(), &p); err != nil {
			return nil, err
		}
		e.shown[p.URI] = append(e.shown[p.URI], p)
	case protocol.MethodProgress:
		var p struct {
			Token string
			Value any
		}
		_ = json.Unmarshal(req.Params(), &p)
		if e.progress == nil {
			e.progress = map[string][]any{}
		}
		e.progress[p.Token] = append(e.progress[p.Token], p.Value)
	case protocol.MethodWindowShowMessage:
		var p protocol.ShowMessageParams
		_ = protocol.Unmarshal(req.Params(), &p)
		e.messages = append(e.messages, p.Message)
	case protocol.MethodWindowLogMessage:
		var p protocol.LogMessageParams
		_ = protocol.Unmarshal(req.Params(), &p)
		if p.Type == protocol.MessageTypeError {
			e.messages = append(e.messages, p.Message)
		}
	}
	if req.IsCall() {
		e.calls = append(e.calls, req.Method())
		if f := e.answer[req.Method()]; f != nil {
			return f(append(jsonrpc2.RawMessage(nil), req.Params()...)), nil
		}
	}
	return nil, nil
}

// try sends a request and gives its outcome.
func (e *editor) try(method string, params, result any) error {
	ctx, cancel := context.WithTimeout(e.ctx, patience)
	defer cancel()
	_, err := e.conn.Call(ctx, method, params, result)
	return err
}

// call sends a request that must succeed.
func (e *editor) call(method string, params, result any) {
	e.t.Helper()
	if err := e.try(method, params, result); err != nil {
		e.t.Fatalf("%s: %v", method, err)
	}
}

func (e *editor) notify(method string, params any) {
	e.t.Helper()
	if err := e.conn.Notify(e.ctx, method, params); err != nil {
		e.t.Fatalf("%s: %v", method, err)
	}
}

// wait waits until a condition on the client's state holds.
func (e *editor) wait(what string, holds func() bool) {
	e.t.Helper()
	stop := time.AfterFunc(patience, e.news.Broadcast)
	defer stop.Stop()
	deadline := time.Now().Add(patience)
	e.mu.Lock()
	defer e.mu.Unlock()
	for !holds() {
		if time.Now().After(deadline) {
			e.t.Fatalf("waited %v for %s\n%s", patience, what, e.note)
		}
		e.news.Wait()
	}
}

func (e *editor) open(at uri.URI, text string) {
	e.t.Helper()
	e.versions[string(at)] = 1
	e.notify(protocol.MethodTextDocumentDidOpen, map[string]any{"textDocument": map[string]any{
		"uri": at, "languageId": "portlight", "version": 1, "text": text}})
}

// edit replaces a range, given in the client's positions.
func (e *editor) edit(at uri.URI, startLine, startColumn, endLine, endColumn int, text string) {
	e.t.Helper()
	e.versions[string(at)]++
	e.notify(protocol.MethodTextDocumentDidChange, map[string]any{
		"textDocument": map[string]any{"uri": at, "version": e.versions[string(at)]},
		"contentChanges": []any{map[string]any{"text": text, "range": map[string]any{
			"start": map[string]any{"line": startLine, "character": startColumn},
			"end":   map[string]any{"line": endLine, "character": endColumn}}}}})
}

func (e *editor) replaceAll(at uri.URI, text string) {
	e.t.Helper()
	e.versions[string(at)]++
	e.notify(protocol.MethodTextDocumentDidChange, map[string]any{
		"textDocument":   map[string]any{"uri": at, "version": e.versions[string(at)]},
		"contentChanges": []any{map[string]any{"text": text}}})
}

// findings waits for the findings of a document's present version.
func (e *editor) findings(at uri.URI) []protocol.Diagnostic {
	e.t.Helper()
	want := e.versions[string(at)]
	var found []protocol.Diagnostic
	e.wait(fmt.Sprintf("findings of %s, version %d", at, want), func() bool {
		list := e.shown[at]
		if len(list) == 0 {
			return false
		}
		last := list[len(list)-1]
		if v, ok := last.Version.Get(); !ok || v != want {
			return false
		}
		found = last.Diagnostics
		return true
	})
	return found
}

// codes lists the codes of diagnostics.
func codes(list []protocol.Diagnostic) []string {
	out := []string{}
	for _, d := range list {
		out = append(out, fmt.Sprint(d.Code))
	}
	return out
}

func at(u uri.URI, line, column int) map[string]any {
	return map[string]any{
		"textDocument": map[string]any{"uri": u}, "position": map[string]any{"line": line, "character": column},
	}
}

// quit ends the session in order and checks that the server ended well.
func (e *editor) quit() {
	e.t.Helper()
	e.call(protocol.MethodShutdown, nil, nil)
	e.notify(protocol.MethodExit, nil)
	select {
	case err := <-e.done:
		if err != nil {
			e.t.Errorf("the server ended with %v", err)
		}
	case <-time.After(patience):
		e.t.Error("the server did not end after exit")
	}
}

// quiet fails the test when the server reported a failure of its own.
func (e *editor) quiet() {
	e.t.Helper()
	e.mu.Lock()
	defer e.mu.Unlock()
	for _, m := range e.messages {
		if strings.Contains(m, " failed") {
			e.t.Error(m)
		}
	}
}

// write makes a file below a folder and gives its URI.
func write(t testing.TB, folder, name, text string) uri.URI {
	t.Helper()
	path := filepath.Join(folder, filepath.FromSlash(name))
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return uri.File(path)
}

// parse reads a JSON value.
func parse(t testing.TB, raw []byte) any {
	t.Helper()
	var value any
	if err := json.Unmarshal(raw, &value); err != nil {
		t.Fatal(err)
	}
	return value
}
