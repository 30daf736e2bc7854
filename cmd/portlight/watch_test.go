package main

import (
	"bytes"
	"context"
	"os"
	"strings"
	"sync"
	"testing"
	"time"
)

// syncBuffer can be written and read from two goroutines.
type syncBuffer struct {
	mu sync.Mutex
	b  bytes.Buffer
}

// Write implements io.Writer.
func (s *syncBuffer) Write(p []byte) (int, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.b.Write(p)
}

func (s *syncBuffer) String() string {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.b.String()
}

// await waits until a text has been written so many times.
func (s *syncBuffer) await(t *testing.T, text string, times int) {
	t.Helper()
	for end := time.Now().Add(20 * time.Second); time.Now().Before(end); time.Sleep(10 * time.Millisecond) {
		if strings.Count(s.String(), text) >= times {
			return
		}
	}
	t.Fatalf("%q is not written %d times: %s", text, times, s.String())
}

// TestWatch changes a file and one that it uses, and expects to be told; then
// interrupts.
func TestWatch(t *testing.T) {
	t.Chdir(t.TempDir())
	write := func(name, text string) {
		t.Helper()
		if err := os.WriteFile(name, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	write("values.plight", "let load = 1 kΩ\n")
	write("main.plight", "use \"values.plight\"\nground hull\na -[resistor R1 = load || capacitor C1 = 1 nF]- hull\n")
	ctx, stop := context.WithCancel(t.Context())
	var out, errors syncBuffer
	done := make(chan int)
	go func() {
		done <- run(ctx, []string{"watch", "main.plight"}, streams{strings.NewReader(""), &out, &errors})
	}()
	out.await(t, "0 errors", 1)
	write("values.plight", "let load = 1 kH\n")
	out.await(t, "unit-mismatch", 1)
	write("values.plight", "let load = 2 kΩ\n")
	out.await(t, "0 errors", 2)
	stop()
	select {
	case code := <-done:
		if code != exitFine {
			t.Errorf("it ends with %d: %s", code, errors.String())
		}
	case <-time.After(10 * time.Second):
		t.Fatal("it does not end when interrupted")
	}
}
