package lsp

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"sync"
	"time"

	"go.lsp.dev/protocol"
)

// progressTokens keeps what can be called off through the client's progress
// display.
type progressTokens struct {
	mu      sync.Mutex
	next    int
	cancels map[string]func()
}

// progressAfter shows progress on work that takes longer than a while, until
// the returned function is called. cancel, which may be nil, is called when
// the user asks for it.
func (s *session) progressAfter(wait time.Duration, title string, cancel func()) (stop func()) {
	if !s.client.progress {
		return func() {}
	}
	done := make(chan struct{})
	go func() {
		select {
		case <-done:
		case <-s.life.Done():
		case <-time.After(wait):
			s.showProgress(title, cancel, done)
		}
	}()
	return sync.OnceFunc(func() { close(done) })
}

func (s *session) showProgress(title string, cancel func(), done <-chan struct{}) {
	p := &s.progress
	p.mu.Lock()
	p.next++
	token := fmt.Sprintf("portlight/%d", p.next)
	if p.cancels == nil {
		p.cancels = map[string]func(){}
	}
	if cancel != nil {
		p.cancels[token] = cancel
	}
	p.mu.Unlock()
	params := &protocol.WorkDoneProgressCreateParams{Token: protocol.String(token)}
	s.call(protocol.MethodWindowWorkDoneProgressCreate, params, nil, func(err error) {
		if err == nil {
			s.sayProgress(protocol.String(token), &protocol.WorkDoneProgressBegin{Kind: "begin", Title: title, Cancellable: ptr(cancel != nil)})
			select {
			case <-done:
			case <-s.life.Done():
			}
			s.sayProgress(protocol.String(token), &protocol.WorkDoneProgressEnd{Kind: "end"})
		}
		p.mu.Lock()
		delete(p.cancels, token)
		p.mu.Unlock()
	})
}

// sayProgress sends one step of a work's progress, or part of a result.
func (s *session) sayProgress(token protocol.ProgressToken, value any) {
	raw, err := protocol.Marshal(value)
	if err != nil {
		return
	}
	s.notify(protocol.MethodProgress, &protocol.ProgressParams{Token: token, Value: raw})
}

// requestProgress shows progress under the token a request came with, once it
// takes longer than a while.
func (s *session) requestProgress(ctx context.Context, token protocol.ProgressToken, title string) (stop func()) {
	if token == nil {
		return func() {}
	}
	done := make(chan struct{})
	finished := make(chan struct{})
	go func() {
		defer close(finished)
		select {
		case <-done:
		case <-ctx.Done():
		case <-time.After(slow):
			s.sayProgress(token, &protocol.WorkDoneProgressBegin{Kind: "begin", Title: title, Cancellable: ptr(true)})
			<-done
			s.sayProgress(token, &protocol.WorkDoneProgressEnd{Kind: "end"})
		}
	}()
	return func() { close(done); <-finished }
}

// tokenOf finds the work-done token in a request's parameters.
func tokenOf(raw []byte) protocol.ProgressToken {
	if !bytes.Contains(raw, []byte(`"workDoneToken"`)) {
		return nil
	}
	var p struct {
		WorkDoneToken json.RawMessage `json:"workDoneToken"`
	}
	if json.Unmarshal(raw, &p) != nil || len(p.WorkDoneToken) == 0 {
		return nil
	}
	var text string
	if json.Unmarshal(p.WorkDoneToken, &text) == nil {
		return protocol.String(text)
	}
	var number int32
	if json.Unmarshal(p.WorkDoneToken, &number) == nil {
		return protocol.Integer(number)
	}
	return nil
}

// cancelProgress handles window/workDoneProgress/cancel.
func (s *session) cancelProgress(p *protocol.WorkDoneProgressCancelParams) error {
	token, ok := p.Token.(protocol.String)
	if !ok {
		return nil
	}
	s.progress.mu.Lock()
	cancel := s.progress.cancels[string(token)]
	s.progress.mu.Unlock()
	if cancel != nil {
		cancel()
	}
	return nil
}
