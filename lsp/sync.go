package lsp

import (
	"fmt"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

// didOpen handles textDocument/didOpen.
func (s *session) didOpen(p *protocol.DidOpenTextDocumentParams) error {
	d := p.TextDocument
	s.setDocument(d.URI, d.Version, d.Text)
	return nil
}

// setDocument opens a document or gives it a new text.
func (s *session) setDocument(at uri.URI, version int32, text string) {
	name := s.mapper.name(at)
	s.change(func(next *snapshot) []string {
		u := newUnit(s, name, nil)
		u.buffer = s.store.Open(name, text)
		u.view = s.store.View()
		u.uri, u.version = at, version
		next.units[name] = u
		return []string{name}
	})
}

// didChange handles textDocument/didChange: the changes apply one after the
// other, each to the text that the ones before it made.
func (s *session) didChange(p *protocol.DidChangeTextDocumentParams) error {
	name := s.mapper.name(p.TextDocument.URI)
	u := s.current.Load().units[name]
	if u == nil {
		return fmt.Errorf("a change of %s, which is not open", p.TextDocument.URI)
	}
	text := u.buffer.Text()
	for _, change := range p.ContentChanges {
		var err error
		if text, err = s.mapper.apply(text, change); err != nil {
			return err
		}
	}
	s.setDocument(p.TextDocument.URI, p.TextDocument.Version, text)
	return nil
}

// didSave handles textDocument/didSave. The buffer is already known; what the
// file on disk says now counts for nobody while the buffer is open.
func (s *session) didSave(p *protocol.DidSaveTextDocumentParams) error {
	s.store.Forget(s.mapper.name(p.TextDocument.URI))
	return nil
}

// didClose handles textDocument/didClose: the file on disk counts again.
func (s *session) didClose(p *protocol.DidCloseTextDocumentParams) error {
	name := s.mapper.name(p.TextDocument.URI)
	s.change(func(next *snapshot) []string {
		delete(next.units, name)
		s.store.Close(name)
		return []string{name}
	})
	return nil
}
