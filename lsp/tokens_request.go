package lsp

import (
	"context"
	"strconv"
	"sync"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// tokenCache keeps, per document, the tokens sent last, for deltas.
type tokenCache struct {
	mu   sync.Mutex
	next int
	sent map[string]sentTokens
}

type sentTokens struct {
	id   string
	data []uint32
}

// swap remembers what is sent now and returns what was sent before.
func (c *tokenCache) swap(name string, data []uint32) (before sentTokens, id string) {
	c.mu.Lock()
	defer c.mu.Unlock()
	c.next++
	id = strconv.Itoa(c.next)
	before = c.sent[name]
	if c.sent == nil {
		c.sent = map[string]sentTokens{}
	}
	c.sent[name] = sentTokens{id, data}
	return before, id
}

// forget drops what was sent for a document that is closed.
func (c *tokenCache) forget(name string) {
	c.mu.Lock()
	defer c.mu.Unlock()
	delete(c.sent, name)
}

// semanticTokens handles textDocument/semanticTokens/full, at any size.
func semanticTokens(_ context.Context, r *request, p *protocol.SemanticTokensParams) (*protocol.SemanticTokens, error) {
	at, err := r.whole(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	data := r.encode(at.file, tokensOf(at, at.file.Extent()))
	_, id := r.tokens.swap(at.unit.name, data)
	return &protocol.SemanticTokens{ResultID: ptr(id), Data: data}, nil
}

// semanticTokensRange handles textDocument/semanticTokens/range.
func semanticTokensRange(_ context.Context, r *request, p *protocol.SemanticTokensRangeParams) (*protocol.SemanticTokens, error) {
	at, err := r.whole(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	return &protocol.SemanticTokens{Data: r.encode(at.file, tokensOf(at, r.mapper.span(at.file.Lines, p.Range)))}, nil
}

// semanticTokensDelta handles textDocument/semanticTokens/full/delta. One
// edit covers all that differs.
func semanticTokensDelta(_ context.Context, r *request, p *protocol.SemanticTokensDeltaParams) (protocol.SemanticTokensDeltaResult, error) {
	at, err := r.whole(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	data := r.encode(at.file, tokensOf(at, at.file.Extent()))
	before, id := r.tokens.swap(at.unit.name, data)
	if before.id == "" || before.id != p.PreviousResultID {
		return &protocol.SemanticTokens{ResultID: ptr(id), Data: data}, nil
	}
	delta := &protocol.SemanticTokensDelta{ResultID: ptr(id), Edits: []protocol.SemanticTokensEdit{}}
	head := 0
	for head < len(data) && head < len(before.data) && data[head] == before.data[head] {
		head++
	}
	tail := 0
	for tail < len(data)-head && tail < len(before.data)-head && data[len(data)-1-tail] == before.data[len(before.data)-1-tail] {
		tail++
	}
	if head+tail < len(data) || head+tail < len(before.data) {
		delta.Edits = append(delta.Edits, protocol.SemanticTokensEdit{
			Start: uint32(head), DeleteCount: uint32(len(before.data) - head - tail), Data: data[head : len(data)-tail],
		})
	}
	return delta, nil
}

// encode writes tokens in the protocol's form: five numbers each, places
// relative to the token before.
func (r *request) encode(file *dialect.File, list []token) []uint32 {
	data := make([]uint32, 0, 5*len(list))
	w := r.mapper.walk(file)
	line, column := 0, 0
	for _, t := range list {
		l, c := w.to(t.span.Start)
		_, end := w.to(t.span.End)
		if end <= c {
			continue
		}
		if l != line {
			column = 0
		}
		data = append(data, uint32(l-line), uint32(c-column), uint32(end-c), uint32(t.class), uint32(t.mark))
		line, column = l, c
	}
	return data
}
