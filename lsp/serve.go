package lsp

import (
	"context"
	"errors"
	"io"
	"log"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
)

// Options are what the program that serves decides.
type Options struct {
	// Version is told to the client.
	Version string
	// Log takes what a developer of the server would want to read; nil
	// discards it. It must not be the stream that carries the protocol.
	Log *log.Logger

	extra []method // a test's own
}

// ErrNoShutdown is returned by Serve when the client ended the session
// without asking for shutdown first.
var ErrNoShutdown = errors.New("the client left without asking for shutdown")

// Serve is a language server on a pair of streams. It returns when the client
// sends exit, when the input ends or when ctx ends: nil if the client had
// asked for shutdown before.
func Serve(ctx context.Context, in io.Reader, out io.Writer, opts Options) error {
	if opts.Log == nil {
		opts.Log = log.New(io.Discard, "", 0)
	}
	s := newSession(ctx, opts)
	defer s.close()
	stream := newFrames(in, out, opts.Log.Printf)
	s.conn = jsonrpc2.NewConn(jsonrpc2.NewStream(stream), jsonrpc2.WithCodec(codec{}))
	s.conn.Go(s.life, s.handle)
	go s.outbox.run()
	select {
	case <-ctx.Done():
	case <-s.exited:
	case <-s.conn.Done():
	}
	if phase(s.phase.Load()) == afterShutdown {
		return nil
	}
	if err := s.conn.Err(); err != nil {
		return err
	}
	return ErrNoShutdown
}

// codec reads and writes the protocol's own types.
type codec struct{}

// Marshal implements jsonrpc2.Codec.
func (codec) Marshal(v any) ([]byte, error) {
	if raw, ok := v.(jsonrpc2.RawMessage); ok {
		return raw, nil
	}
	return protocol.Marshal(v)
}

// Unmarshal implements jsonrpc2.Codec.
func (codec) Unmarshal(data []byte, v any) error {
	if raw, ok := v.(*jsonrpc2.RawMessage); ok {
		*raw = append(jsonrpc2.RawMessage(nil), data...)
		return nil
	}
	return protocol.Unmarshal(data, v)
}
