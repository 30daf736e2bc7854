package lsp

import "go.lsp.dev/protocol"

// pulled says that the client asks for diagnostics itself and can be told to
// ask again. Then nothing is published: the same findings would be shown
// twice. Every other client has them published.
func (s *session) pulled() bool { return s.client.pulls && s.client.refreshDiagnostics }

// refreshDiagnostics tells a client that asks for diagnostics that they may
// be different.
func (s *session) refreshDiagnostics() {
	if s.pulled() {
		s.call(protocol.MethodWorkspaceDiagnosticRefresh, nil, nil, nil)
	}
}

// refreshViews tells the client that what it shows between the lines may be
// different though no text changed.
func (s *session) refreshViews() {
	c := s.client
	if c.refreshInlay {
		s.call(protocol.MethodWorkspaceInlayHintRefresh, nil, nil, nil)
	}
	if c.refreshLens {
		s.call(protocol.MethodWorkspaceCodeLensRefresh, nil, nil, nil)
	}
}
