package lsp

import (
	"context"
	"os"
	"strings"
	"sync"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
)

// pageScheme is the scheme of the documents that the server itself provides:
// portlight:/findings/unit-mismatch.md is what a finding means.
const pageScheme = "portlight"

// explanationURI is where the meaning of a finding's code is written.
func explanationURI(code dialect.Code) uri.URI {
	return uri.URI(pageScheme + ":/findings/" + string(code) + ".md")
}

// documentContent handles workspace/textDocumentContent.
func documentContent(_ context.Context, _ *request, p *protocol.TextDocumentContentParams) (*protocol.TextDocumentContentResult, error) {
	path, ours := strings.CutPrefix(string(p.URI), pageScheme+":/findings/")
	code, _ := strings.CutSuffix(path, ".md")
	if page, ok := explanationPage(dialect.Code(code)); ours && ok {
		return &protocol.TextDocumentContentResult{Text: page}, nil
	}
	return nil, jsonrpc2.Errorf(jsonrpc2.InvalidParams, "there is no page %s", p.URI)
}

// explanationPage tells what a finding means and how to mend it.
func explanationPage(code dialect.Code) (string, bool) {
	e, ok := dialect.Explain(code)
	if !ok {
		return "", false
	}
	m := &markup{markdown: true}
	m.raw("# " + string(code))
	m.prose(e.Meaning)
	if e.Mend != "" {
		m.prose(e.Mend)
	}
	if e.Example != "" {
		m.prose("An example that has it:")
		m.block(strings.Split(strings.TrimRight(e.Example, "\n"), "\n"))
	}
	return m.content().Value + "\n", true
}

// pageFolder is the session's folder for pages that the client opens; it is
// made when the first one is and goes with the session.
type pageFolder struct {
	mu   sync.Mutex
	path string
}

func (f *pageFolder) folder() (string, error) {
	f.mu.Lock()
	defer f.mu.Unlock()
	if f.path == "" {
		path, err := os.MkdirTemp("", "portlight-")
		if err != nil {
			return "", err
		}
		f.path = path
	}
	return f.path, nil
}

func (f *pageFolder) close() {
	f.mu.Lock()
	defer f.mu.Unlock()
	if f.path != "" {
		_ = os.RemoveAll(f.path)
	}
}
