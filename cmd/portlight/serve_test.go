package main

import (
	"bytes"
	"fmt"
	"strings"
	"testing"
)

// frame wraps a message as the base protocol does.
func frame(message string) string {
	return fmt.Sprintf("Content-Length: %d\r\n\r\n%s", len(message), message)
}

// TestServe opens and closes a session as an editor does, and leaves one
// without asking, which has a status of its own.
func TestServe(t *testing.T) {
	begin := frame(`{"jsonrpc":"2.0","id":1,"method":"initialize","params":{"capabilities":{},"processId":null,"rootUri":null}}`) +
		frame(`{"jsonrpc":"2.0","method":"initialized","params":{}}`)
	end := frame(`{"jsonrpc":"2.0","id":2,"method":"shutdown"}`) + frame(`{"jsonrpc":"2.0","method":"exit"}`)
	for _, c := range []struct {
		name, in string
		args     []string
		status   int
	}{
		{"asked for", begin + end, []string{"serve"}, exitFine},
		{"with --stdio", begin + end, []string{"serve", "--stdio"}, exitFine},
		{"left", begin + frame(`{"jsonrpc":"2.0","method":"exit"}`), []string{"serve"}, exitFaults},
	} {
		t.Run(c.name, func(t *testing.T) {
			var out, errors bytes.Buffer
			if code := run(t.Context(), c.args, streams{strings.NewReader(c.in), &out, &errors}); code != c.status {
				t.Errorf("the status is %d, want %d: %s", code, c.status, errors.String())
			}
			if !strings.Contains(out.String(), `"capabilities"`) {
				t.Errorf("it does not say what it can do: %.300s", out.String())
			}
		})
	}
}
