package lsp

import (
	"context"
	"fmt"
	"sync"
	"sync/atomic"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"

	"portlight/lsp/files"
)

// phase is where in its life a session is.
type phase int32

const (
	beforeInitialize phase = iota
	inService
	afterShutdown
)

// session is what lives as long as the connection.
type session struct {
	opts  Options
	table map[string]method
	conn  jsonrpc2.Conn
	phase atomic.Int32

	// Set by initialize, on the read loop, before anything else can run.
	client *client
	mapper mapper

	life   context.Context // ends with the session
	end    context.CancelFunc
	exited chan struct{}
	exit1  sync.Once

	running running
	outbox  *outbox

	store   *files.Store
	watcher *files.Watcher

	// writing is held by whoever makes the next snapshot.
	writing sync.Mutex
	current atomic.Pointer[snapshot]

	publisher publisher
	busy      atomic.Bool // a card of a large network is being worked out
	tokens    tokenCache
	progress  progressTokens
	pages     pageFolder
}

func newSession(ctx context.Context, opts Options) *session {
	s := &session{opts: opts, table: table(opts.extra), exited: make(chan struct{}), store: files.NewStore(), outbox: newOutbox()}
	s.life, s.end = context.WithCancel(ctx)
	s.client = &client{}
	s.current.Store(&snapshot{session: s, units: map[string]*unit{}, others: &others{}, settings: defaultSettings()})
	return s
}

// close ends everything the session started.
func (s *session) close() {
	s.end()
	if s.watcher != nil {
		s.watcher.Close()
	}
	s.outbox.close()
	s.pages.close()
}

// shutdown handles the request of that name.
func (s *session) shutdown() {
	s.phase.Store(int32(afterShutdown))
}

// exit handles the notification of that name.
func (s *session) exit() { s.exit1.Do(func() { close(s.exited) }) }

// logf writes to the developer's log and to the client's.
func (s *session) logf(kind protocol.MessageType, format string, args ...any) {
	text := fmt.Sprintf(format, args...)
	s.opts.Log.Print(text)
	if phase(s.phase.Load()) == inService {
		s.notify(protocol.MethodWindowLogMessage, &protocol.LogMessageParams{Type: kind, Message: text})
	}
}

// show puts a sentence before the user.
func (s *session) show(kind protocol.MessageType, text string) {
	s.opts.Log.Print(text)
	s.notify(protocol.MethodWindowShowMessage, &protocol.ShowMessageParams{Type: kind, Message: text})
}

// notify sends a notification, in order with all others, without waiting:
// the read loop never waits for a client that does not read.
func (s *session) notify(method string, params any) {
	s.outbox.put(func() { _ = s.conn.Notify(s.life, method, params) })
}

// call sends a request to the client and hands the outcome to then, from
// another goroutine. result may be nil, as may then.
func (s *session) call(method string, params, result any, then func(error)) {
	s.outbox.put(func() {
		go func() {
			err := protocol.Call(s.life, s.conn, method, params, result)
			if then != nil {
				then(err)
			}
		}()
	})
}

// outbox sends what the session has to say, one after the other.
type outbox struct {
	mu     sync.Mutex
	queue  []func()
	more   chan struct{}
	stop   chan struct{}
	closed sync.Once
}

func newOutbox() *outbox {
	return &outbox{more: make(chan struct{}, 1), stop: make(chan struct{})}
}

func (o *outbox) put(send func()) {
	o.mu.Lock()
	o.queue = append(o.queue, send)
	o.mu.Unlock()
	select {
	case o.more <- struct{}{}:
	default:
	}
}

func (o *outbox) run() {
	for {
		select {
		case <-o.stop:
			return
		case <-o.more:
		}
		for {
			o.mu.Lock()
			queue := o.queue
			o.queue = nil
			o.mu.Unlock()
			if len(queue) == 0 {
				break
			}
			for _, send := range queue {
				send()
			}
		}
	}
}

func (o *outbox) close() { o.closed.Do(func() { close(o.stop) }) }
