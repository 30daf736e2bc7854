package lsp

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"
	"time"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

func code(err error) jsonrpc2.Code {
	var e *jsonrpc2.Error
	if errors.As(err, &e) {
		return e.Code
	}
	return 0
}

func TestRequestsOutsideTheSessionAreRefused(t *testing.T) {
	e := rawEditor(t)
	if err := e.try(protocol.MethodTextDocumentHover, at("file:///a.plight", 0, 0), nil); code(err) != jsonrpc2.ServerNotInitialized {
		t.Errorf("hover before initialize: %v", err)
	}
	e.notify(protocol.MethodTextDocumentDidOpen, map[string]any{}) // ignored
	e.call(protocol.MethodInitialize, map[string]any{"processId": nil, "rootUri": nil, "capabilities": struct{}{}}, &e.result)
	if err := e.try(protocol.MethodInitialize, map[string]any{"capabilities": struct{}{}}, nil); code(err) != jsonrpc2.InvalidRequest {
		t.Errorf("initialize again: %v", err)
	}
	if err := e.try("textDocument/none", struct{}{}, nil); code(err) != jsonrpc2.MethodNotFound {
		t.Errorf("unknown method: %v", err)
	}
	if err := e.try(protocol.MethodTextDocumentHover, []int{1}, nil); code(err) != jsonrpc2.InvalidParams {
		t.Errorf("wrong parameters: %v", err)
	}
	e.notify("textDocument/none", struct{}{})
	e.notify(protocol.MethodTextDocumentDidChange, []int{1}) // wrong, and only logged
	e.call(protocol.MethodShutdown, nil, nil)
	if err := e.try(protocol.MethodTextDocumentHover, at("file:///a.plight", 0, 0), nil); code(err) != jsonrpc2.InvalidRequest {
		t.Errorf("hover after shutdown: %v", err)
	}
	e.notify(protocol.MethodExit, nil)
	if err := <-e.done; err != nil {
		t.Errorf("ended with %v", err)
	}
}

func TestExitWithoutShutdownIsAFailure(t *testing.T) {
	e := newEditor(t, "{}", "")
	e.notify(protocol.MethodExit, nil)
	if err := <-e.done; !errors.Is(err, ErrNoShutdown) {
		t.Errorf("ended with %v", err)
	}
}

func TestEndOfInputEndsTheServer(t *testing.T) {
	err := Serve(context.Background(), strings.NewReader(""), io.Discard, Options{})
	if !errors.Is(err, ErrNoShutdown) {
		t.Errorf("ended with %v", err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	in, _ := io.Pipe()
	if err := Serve(ctx, in, io.Discard, Options{}); !errors.Is(err, ErrNoShutdown) {
		t.Errorf("cancelled: ended with %v", err)
	}
}

func wire(body string) string {
	return fmt.Sprintf("Content-Length: %d\r\n\r\n%s", len(body), body)
}

// TestMalformedMessagesCostOnlyThemselves feeds damaged frames before and
// after good ones.
func TestMalformedMessagesCostOnlyThemselves(t *testing.T) {
	initialize := wire(`{"jsonrpc":"2.0","id":1,"method":"initialize","params":{"processId":null,"rootUri":null,"capabilities":{}}}`)
	shutdown := wire(`{"jsonrpc":"2.0","id":2,"method":"shutdown"}`) + wire(`{"jsonrpc":"2.0","method":"exit"}`)
	for name, damage := range map[string]string{
		"not JSON":                  wire(`{"jsonrpc":`),
		"trailing text":             wire(`{"jsonrpc":"2.0","method":"a"} x`),
		"not an object":             wire(`"hello"`),
		"no version":                wire(`{"id":7,"method":"textDocument/hover"}`),
		"broken batch":              wire(`[{]`),
		"bad id":                    wire(`{"jsonrpc":"2.0","id":{},"method":"textDocument/hover"}`),
		"no header":                 "hello\r\n\r\n",
		"garbage without line feed": "garbage",
		"negative length":           "Content-Length: -5\r\n\r\n",
		"length not a number":       "Content-Length: many\r\n\r\n{}",
		"huge length":               "Content-Length: 99999999999999999999\r\n\r\n{}",
		"length too small":          "Content-Length: 3\r\n\r\n{\"jsonrpc\":\"2.0\",\"method\":\"x\"}",
		"length too large":          "Content-Length: 60\r\n\r\n{\"jsonrpc\":\"2.0\",\"method\":\"x\"}",
		"binary":                    "\x00\xff\xfe\r\n\x01",
		"other header":              "Content-Type: application/vscode-jsonrpc; charset=utf-8\r\nX-More: 1\r\n\r\n",
		"long line":                 strings.Repeat("x", 100_000),
		"empty lines":               "\r\n\r\n\r\n",
	} {
		t.Run(name, func(t *testing.T) {
			var out bytes.Buffer
			err := serveFor(t, strings.NewReader(initialize+damage+shutdown), &out)
			if err != nil {
				t.Errorf("the server ended with %v", err)
			}
			if !strings.Contains(out.String(), `"id":2`) {
				t.Errorf("shutdown was not answered: %s", out.String())
			}
			if name != "empty lines" && name != "other header" && !strings.Contains(out.String(), `"id":null`) {
				t.Errorf("the damage was not answered: %s", out.String())
			}
		})
	}
}

func serveFor(t *testing.T, in io.Reader, out io.Writer) error {
	t.Helper()
	done := make(chan error, 1)
	go func() { done <- Serve(context.Background(), in, out, Options{}) }()
	select {
	case err := <-done:
		return err
	case <-time.After(patience):
		t.Fatal("the server did not end")
		return nil
	}
}

func TestPanicsAreContained(t *testing.T) {
	extra := []method{
		answers("test/panic", "", func(context.Context, *request, *struct{}) (*struct{}, error) { panic("ouch") }),
		notification("test/panicked", "", func(*session, *struct{}) error { panic("ouch") }),
	}
	e := newEditor(t, "{}", "", extra...)
	e.notify("test/panicked", struct{}{})
	if err := e.try("test/panic", struct{}{}, nil); code(err) != jsonrpc2.InternalError || !strings.Contains(err.Error(), "ouch") {
		t.Errorf("a panic in a request: %v", err)
	}
	u := uri.URI("untitled:Untitled-1")
	e.open(u, "ground a\n")
	e.findings(u)
	e.quit()
}

func TestCancellation(t *testing.T) {
	started := make(chan struct{})
	wait := answers("test/wait", "", func(ctx context.Context, _ *request, _ *struct{}) (*struct{}, error) {
		close(started)
		<-ctx.Done()
		return nil, ctx.Err()
	})
	e := newEditor(t, "{}", "", wait)
	ctx, cancel := context.WithCancel(context.Background())
	go func() { <-started; cancel() }()
	id, err := e.conn.Call(ctx, "test/wait", struct{}{}, nil)
	if !errors.Is(err, context.Canceled) {
		t.Fatalf("the call ended with %v", err)
	}
	// The client has given up its own waiting; the server learns of it now,
	// and must go on serving.
	number, _ := id.Number()
	e.notify(protocol.MethodCancelRequest, map[string]any{"id": number})
	e.quit()
}

// TestProgressOfLongRequests takes longer than a second with a token.
func TestProgressOfLongRequests(t *testing.T) {
	wait := answers("test/long", "", func(context.Context, *request, *struct{}) (*struct{}, error) {
		time.Sleep(slow + 300*time.Millisecond)
		return nil, nil
	})
	e := newEditor(t, "{}", "", wait)
	e.call("test/long", map[string]any{"workDoneToken": "work"}, nil)
	e.wait("its progress", func() bool { return len(e.progress["work"]) == 2 })
	if get(e.progress["work"][0], "kind") != "begin" || get(e.progress["work"][1], "kind") != "end" {
		t.Errorf("the progress is %v", e.progress["work"])
	}
	e.quit()
}

func TestEditSupersedesRequests(t *testing.T) {
	started := make(chan struct{}, 1)
	wait := answers("test/wait", "", func(ctx context.Context, r *request, p *protocol.HoverParams) (*struct{}, error) {
		unit, err := r.document(p.TextDocument.URI)
		if err != nil {
			return nil, err
		}
		ctx, done := unit.with(ctx)
		defer done()
		started <- struct{}{}
		<-ctx.Done()
		return nil, ctx.Err()
	})
	e := newEditor(t, "{}", "", wait)
	u := uri.URI("untitled:a")
	e.open(u, "ground a\n")
	go func() { <-started; e.edit(u, 0, 0, 0, 0, "# x\n") }()
	if err := e.try("test/wait", at(u, 0, 0), nil); code(err) != protocol.CodeContentModified {
		t.Errorf("a request whose document changed: %v", err)
	}
	e.quit()
}
