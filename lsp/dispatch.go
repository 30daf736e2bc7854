package lsp

import (
	"context"
	"errors"
	"fmt"
	"reflect"
	"runtime/debug"
	"strings"
	"sync"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
)

// method is one line of the table in methods.go: a method of the protocol
// and what is done with it.
type method struct {
	name string
	does string // one sentence for METHODS.md

	// notify handles a notification, on the read loop, in order.
	notify func(s *session, params []byte) error
	// answer handles a request.
	answer func(ctx context.Context, r *request, params []byte) (any, error)
	// inOrder keeps a request on the read loop: nothing is read before it is
	// answered. For the requests that change what follows.
	inOrder bool
}

// request is what the handler of a request works on: the session and the
// state of the documents at the moment the request was read.
type request struct {
	*session
	*snapshot
}

// notification makes a table line for a notification.
func notification[P any](name, does string, f func(*session, *P) error) method {
	return method{name: name, does: does, notify: func(s *session, raw []byte) error {
		params := new(P)
		if err := decode(raw, params); err != nil {
			return err
		}
		return f(s, params)
	}}
}

// answers makes a table line for a request.
func answers[P, R any](name, does string, f func(context.Context, *request, *P) (R, error)) method {
	return method{name: name, does: does, answer: func(ctx context.Context, r *request, raw []byte) (any, error) {
		params := new(P)
		if err := decode(raw, params); err != nil {
			return nil, err
		}
		result, err := f(ctx, r, params)
		if err != nil {
			return nil, err
		}
		return result, nil
	}}
}

// first makes a request's line one that is answered on the read loop.
func first(m method) method { m.inOrder = true; return m }

// decode reads a message's parameters; a method may come without any.
func decode(raw []byte, params any) error {
	if len(raw) == 0 {
		return nil
	}
	if err := protocol.Unmarshal(raw, params); err != nil {
		return fmt.Errorf("%w: %w", jsonrpc2.ErrInvalidParams, err)
	}
	return nil
}

// Causes for which a request's context ends early.
var (
	errCancelled = errors.New("cancelled by the client")
	errModified  = errors.New("the document changed")
)

// running keeps the requests that are being answered, for cancellation.
type running struct {
	mu      sync.Mutex
	cancels map[jsonrpc2.ID]context.CancelCauseFunc
}

func (r *running) add(id jsonrpc2.ID, cancel context.CancelCauseFunc) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.cancels == nil {
		r.cancels = map[jsonrpc2.ID]context.CancelCauseFunc{}
	}
	r.cancels[id] = cancel
}

func (r *running) remove(id jsonrpc2.ID) {
	r.mu.Lock()
	defer r.mu.Unlock()
	delete(r.cancels, id)
}

func (r *running) cancel(id jsonrpc2.ID, cause error) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if cancel := r.cancels[id]; cancel != nil {
		cancel(cause)
	}
}

// handle is the connection's handler. It runs on the read loop: a
// notification to its end, a request until its context, its snapshot and its
// way to be cancelled are fixed; from there on it runs beside what follows.
func (s *session) handle(ctx context.Context, req *jsonrpc2.Request) (any, error) {
	m, known := s.table[req.Method()]
	if !req.IsCall() {
		s.handleNotification(m, known, req)
		return nil, nil // an error would end the connection
	}
	if err := s.refusal(req.Method()); err != nil {
		return nil, err
	}
	if !known || m.answer == nil {
		return nil, jsonrpc2.Errorf(jsonrpc2.MethodNotFound, "%s is not offered", strings.Clone(req.Method()))
	}
	id := req.ID()
	own, cancel := context.WithCancelCause(s.life) // the connection takes ctx back
	defer cancel(nil)
	s.running.add(id, cancel)
	defer s.running.remove(id)
	r := &request{session: s, snapshot: s.current.Load()}
	if !m.inOrder {
		jsonrpc2.Async(ctx)
	}
	return s.run(own, m, r, req.Params())
}

// run answers a request and contains its panics.
func (s *session) run(ctx context.Context, m method, r *request, params []byte) (result any, err error) {
	defer func() {
		if p := recover(); p != nil {
			s.logf(protocol.MessageTypeError, "%s failed: %v\n%s", m.name, p, debug.Stack())
			result, err = nil, jsonrpc2.Errorf(jsonrpc2.InternalError, "%s failed inside the server: %v", m.name, p)
		}
	}()
	stop := s.requestProgress(ctx, tokenOf(params), "Portlight is working it out")
	result, err = m.answer(ctx, r, params)
	stop()
	if ctx.Err() != nil && (err != nil || context.Cause(ctx) == errCancelled) {
		if context.Cause(ctx) == errModified {
			return nil, protocol.ErrContentModified
		}
		return nil, protocol.ErrRequestCancelled
	}
	if errors.Is(err, errModified) || errors.Is(err, context.Canceled) {
		return nil, protocol.ErrContentModified
	}
	if err != nil {
		return nil, err
	}
	if isNil(result) {
		return nil, nil
	}
	return result, nil
}

// isNil says that a result is null on the wire.
func isNil(v any) bool {
	if v == nil {
		return true
	}
	r := reflect.ValueOf(v)
	return r.Kind() == reflect.Pointer && r.IsNil()
}

// handleNotification runs a notification's handler; whatever goes wrong in
// it is logged and ends there.
func (s *session) handleNotification(m method, known bool, req *jsonrpc2.Request) {
	name := strings.Clone(req.Method())
	defer func() {
		if p := recover(); p != nil {
			s.logf(protocol.MessageTypeError, "%s failed: %v\n%s", name, p, debug.Stack())
		}
	}()
	switch {
	case known && m.notify != nil:
		if !s.listens(name) {
			return
		}
		if err := m.notify(s, req.Params()); err != nil {
			s.logf(protocol.MessageTypeError, "%s: %v", name, err)
		}
	case strings.HasPrefix(name, "$/"): // free to ignore, says the protocol
	default:
		s.logf(protocol.MessageTypeLog, "%s is not handled", name)
	}
}

// refusal is the error for a request outside the server's life.
func (s *session) refusal(method string) error {
	switch phase(s.phase.Load()) {
	case beforeInitialize:
		if method != protocol.MethodInitialize {
			return jsonrpc2.Errorf(jsonrpc2.ServerNotInitialized, "%s before initialize", strings.Clone(method))
		}
	case afterShutdown:
		return jsonrpc2.Errorf(jsonrpc2.InvalidRequest, "%s after shutdown", strings.Clone(method))
	default:
		if method == protocol.MethodInitialize {
			return jsonrpc2.Errorf(jsonrpc2.InvalidRequest, "initialize a second time")
		}
	}
	return nil
}

// listens says whether a notification counts in the present phase: before
// initialize and after shutdown only exit does.
func (s *session) listens(method string) bool {
	return phase(s.phase.Load()) == inService || method == protocol.MethodExit
}

// cancelRequest handles $/cancelRequest.
func (s *session) cancelRequest(p *protocol.CancelParams) error {
	switch id := p.ID.(type) {
	case protocol.Integer:
		s.running.cancel(jsonrpc2.NewNumberID(int64(id)), errCancelled)
	case protocol.String:
		s.running.cancel(jsonrpc2.NewStringID(string(id)), errCancelled)
	}
	return nil
}
