package lsp

import (
	"context"
	"encoding/json"
	"fmt"
	"runtime/debug"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"

	"portlight/lsp/files"
)

// initialize handles the first request of a session.
func initialize(_ context.Context, r *request, p *protocol.InitializeParams) (*protocol.InitializeResult, error) {
	s := r.session
	chosen, problems := readSettings(p.InitializationOptions)
	s.client = newClient(p)
	s.client.countIn(chosen.positions)
	s.mapper = mapper{encoding: s.client.encoding}
	s.phase.Store(int32(inService))
	if p.ProcessID != nil {
		go s.watchParent(*p.ProcessID)
	}
	roots := s.rootsOf(p)
	s.startWatching(roots)
	s.change(func(next *snapshot) []string {
		next.roots, next.settings = roots, chosen
		return nil
	})
	for _, problem := range problems {
		s.show(protocol.MessageTypeWarning, problem)
	}
	result := &protocol.InitializeResult{Capabilities: s.capabilities()}
	result.ServerInfo.Name = "Portlight"
	if s.opts.Version != "" {
		result.ServerInfo.Version = protocol.NewOptional(s.opts.Version)
	}
	return result, nil
}

// initialized handles the notification of that name: now the client may be
// asked for things.
func (s *session) initialized(*protocol.InitializedParams) error {
	var list []protocol.Registration
	if s.client.watchFiles {
		pattern := protocol.FileSystemWatcher{GlobPattern: protocol.Pattern("**/*" + files.Extension)}
		list = append(list, registration("files", protocol.MethodWorkspaceDidChangeWatchedFiles,
			&protocol.DidChangeWatchedFilesRegistrationOptions{Watchers: []protocol.FileSystemWatcher{pattern}}))
	}
	if s.client.watchSettings {
		list = append(list, registration("settings", protocol.MethodWorkspaceDidChangeConfiguration,
			&protocol.DidChangeConfigurationRegistrationOptions{Section: protocol.String("portlight")}))
	}
	if len(list) > 0 {
		s.call(protocol.MethodClientRegisterCapability, &protocol.RegistrationParams{Registrations: list}, nil, func(err error) {
			if err != nil {
				s.logf(protocol.MessageTypeLog, "the client refused registrations: %v", err)
			}
		})
	}
	if s.client.configuration {
		s.askSettings()
	}
	return nil
}

func registration(id, method string, options any) protocol.Registration {
	raw, err := protocol.Marshal(options)
	if err != nil {
		panic(fmt.Sprintf("registration of %s: %v", method, err))
	}
	return protocol.Registration{ID: "portlight/" + id, Method: method, RegisterOptions: raw}
}

// shutdownRequest handles shutdown: from here on every request is refused.
func shutdownRequest(_ context.Context, r *request, _ *json.RawMessage) (jsonrpc2.RawMessage, error) {
	r.session.shutdown()
	return nil, nil
}

func (s *session) logPanic(what string, p any) {
	s.logf(protocol.MessageTypeError, "%s failed: %v\n%s", what, p, debug.Stack())
}
