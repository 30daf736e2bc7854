package lsp

import (
	"bufio"
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

// TestTranscripts replays sessions over the standard streams of a real
// process. A transcript has a line "--> JSON" for each message to the server
// and "<-- JSON" for each that must come back before the next is sent; -update
// writes the latter anew. A line "..." waits for one message whose content is
// then recorded. FOLDER stands for the transcript's own folder.
func TestTranscripts(t *testing.T) {
	names, err := filepath.Glob("testdata/transcripts/*.txt")
	if err != nil || len(names) == 0 {
		t.Fatalf("no transcripts: %v", err)
	}
	for _, name := range names {
		t.Run(strings.TrimSuffix(filepath.Base(name), ".txt"), func(t *testing.T) { replay(t, name) })
	}
}

func replay(t *testing.T, name string) {
	raw, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	server := startProcess(t)
	var got, want strings.Builder
	for _, line := range strings.Split(strings.TrimRight(string(raw), "\n"), "\n") {
		switch {
		case strings.HasPrefix(line, "--> "):
			server.send(t, strings.TrimPrefix(line, "--> "))
			fmt.Fprintln(&got, line)
		case strings.HasPrefix(line, "<-- "), line == "...":
			fmt.Fprintln(&got, "<-- "+server.receive(t))
		default:
			fmt.Fprintln(&got, line)
		}
		fmt.Fprintln(&want, line)
	}
	server.end(t)
	if *update {
		if err := os.WriteFile(name, []byte(got.String()), 0o666); err != nil {
			t.Fatal(err)
		}
		return
	}
	if diff := cmp.Diff(want.String(), got.String()); diff != "" {
		t.Errorf("the session differs from the transcript (-want +got):\n%s", diff)
	}
}

// process is a language server in a process of its own.
type process struct {
	command *exec.Cmd
	in      io.WriteCloser
	out     *bufio.Reader
	errors  bytes.Buffer
}

func startProcess(t testing.TB) *process {
	t.Helper()
	program, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	p := &process{command: exec.Command(program)}
	p.command.Env = append(os.Environ(), serverVariable+"=1")
	p.command.Stderr = &p.errors
	if p.in, err = p.command.StdinPipe(); err != nil {
		t.Fatal(err)
	}
	out, err := p.command.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	p.out = bufio.NewReader(out)
	if err := p.command.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = p.command.Process.Kill() })
	return p
}

func (p *process) send(t testing.TB, message string) {
	t.Helper()
	if _, err := fmt.Fprintf(p.in, "Content-Length: %d\r\n\r\n%s", len(message), message); err != nil {
		t.Fatalf("sending %s: %v", message, err)
	}
}

// receive reads one message and gives it with its keys in order.
func (p *process) receive(t testing.TB) string {
	t.Helper()
	type outcome struct {
		text string
		err  error
	}
	done := make(chan outcome, 1)
	go func() {
		text, err := readFrame(p.out)
		done <- outcome{text, err}
	}()
	select {
	case o := <-done:
		if o.err != nil {
			t.Fatalf("the server's answer: %v\n%s", o.err, p.errors.String())
		}
		return o.text
	case <-time.After(patience):
		t.Fatalf("no answer within %v", patience)
		return ""
	}
}

func readFrame(in *bufio.Reader) (string, error) {
	body, err := readBody(in)
	if err != nil {
		return "", err
	}
	var value any
	if err := json.Unmarshal(body, &value); err != nil {
		return "", err
	}
	var ordered bytes.Buffer
	enc := json.NewEncoder(&ordered)
	enc.SetEscapeHTML(false)
	err = enc.Encode(value)
	return strings.TrimSpace(ordered.String()), err
}

// readBody reads the body of one message.
func readBody(in *bufio.Reader) ([]byte, error) {
	length := 0
	for {
		line, err := in.ReadString('\n')
		if err != nil {
			return nil, err
		}
		line = strings.TrimSpace(line)
		if line == "" {
			break
		}
		if value, ok := strings.CutPrefix(line, "Content-Length: "); ok {
			if length, err = strconv.Atoi(value); err != nil {
				return nil, err
			}
		}
	}
	body := make([]byte, length)
	_, err := io.ReadFull(in, body)
	return body, err
}

// end checks that the process ends by itself, successfully, with nothing
// more to say.
func (p *process) end(t *testing.T) {
	t.Helper()
	_ = p.in.Close()
	rest, _ := io.ReadAll(p.out)
	if len(rest) > 0 {
		t.Errorf("the server had more to say: %s", rest)
	}
	if err := p.command.Wait(); err != nil {
		t.Errorf("the server ended with %v\n%s", err, p.errors.String())
	}
}
