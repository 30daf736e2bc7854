package main

import (
	"bufio"
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"go.lsp.dev/uri"

	"portlight/dialect"
	"portlight/lsp"
	"portlight/lsp/files"
)

// TestCommandAndServerSayTheSame checks every network file that the tests
// have, good ones and bad: check of a file against what the server publishes
// when the file is opened, and check of the folder against the server's
// workspace diagnostics.
func TestCommandAndServerSayTheSame(t *testing.T) {
	folder := t.TempDir()
	copyNetworks(t, "../../testdata", filepath.Join(folder, "testdata"))
	copyNetworks(t, "../../lsp/testdata", filepath.Join(folder, "markers"))
	for _, e := range dialect.Explanations() {
		for name, text := range e.Files {
			put(t, filepath.Join(folder, "examples", string(e.Code), name), text)
		}
		put(t, filepath.Join(folder, "examples", string(e.Code), "example.plight"), e.Example)
	}
	s := startServer(t, folder)
	if diff := cmp.Diff(commandFindings(t, folder), s.workspace(t)); diff != "" {
		t.Errorf("the folder (-check +server):\n%s", diff)
	}
	names, _ := files.Collect(folder)
	if len(names) < 60 {
		t.Fatalf("only %d files", len(names))
	}
	for _, name := range names {
		if diff := cmp.Diff(commandFindings(t, name), s.opened(t, name)); diff != "" {
			t.Errorf("%s (-check +server):\n%s", name, diff)
		}
	}
	s.end(t)
}

func put(t *testing.T, name, text string) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(name, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

func copyNetworks(t *testing.T, from, to string) {
	t.Helper()
	names, problems := files.Collect(from)
	if len(problems) > 0 {
		t.Fatal(problems)
	}
	root, _ := filepath.Abs(from)
	for _, name := range names {
		rel, _ := filepath.Rel(root, name)
		text, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		put(t, filepath.Join(to, rel), string(text))
	}
}

// commandFindings is what check says, one line each.
func commandFindings(t *testing.T, path string) []string {
	t.Helper()
	var out, errors bytes.Buffer
	if code := run(t.Context(), []string{"check", "--as", "json", path}, streams{strings.NewReader(""), &out, &errors}); code == exitNotRun {
		t.Fatalf("check %s did not run: %s", path, errors.String())
	}
	var report struct{ Findings []findingView }
	if err := json.Unmarshal(out.Bytes(), &report); err != nil {
		t.Fatal(err)
	}
	lines := []string{}
	for _, f := range report.Findings {
		name, _ := filepath.Abs(f.File)
		lines = append(lines, fmt.Sprintf("%s:%d:%d-%d:%d %s %s: %s", name, f.Line, f.Column, f.EndLine, f.EndColumn, f.Severity, f.Code, f.Message))
	}
	slices.Sort(lines)
	return lines
}

// server is a language server that the test talks to in raw messages, with
// columns in code points, as the command counts them.
type server struct {
	to   io.WriteCloser
	from *bufio.Reader
	done chan error
	next int
}

func startServer(t *testing.T, folder string) *server {
	t.Helper()
	in, to := io.Pipe()
	from, out := io.Pipe()
	s := &server{to: to, from: bufio.NewReader(from), done: make(chan error, 1)}
	go func() {
		s.done <- lsp.Serve(t.Context(), in, out, lsp.Options{})
		_ = out.Close()
	}()
	s.call(t, "initialize", fmt.Sprintf(`{"processId":null,"rootUri":%q,"capabilities":{"general":{"positionEncodings":["utf-32"]},`+
		`"textDocument":{"publishDiagnostics":{"relatedInformation":true}}}}`, uri.File(folder)))
	s.send(t, `{"jsonrpc":"2.0","method":"initialized","params":{}}`)
	return s
}

func (s *server) send(t *testing.T, message string) {
	t.Helper()
	if _, err := io.WriteString(s.to, frame(message)); err != nil {
		t.Fatal(err)
	}
}

type message struct {
	ID     *int
	Method string
	Params json.RawMessage
	Result json.RawMessage
	Error  json.RawMessage
}

// receive reads messages until one is wanted.
func (s *server) receive(t *testing.T, wanted func(message) bool) message {
	t.Helper()
	found := make(chan message, 1)
	go func() {
		for {
			length := 0
			for {
				line, err := s.from.ReadString('\n')
				if err != nil {
					close(found)
					return
				}
				if line = strings.TrimSpace(line); line == "" {
					break
				}
				if value, ok := strings.CutPrefix(line, "Content-Length: "); ok {
					length, _ = strconv.Atoi(value)
				}
			}
			body := make([]byte, length)
			var m message
			if _, err := io.ReadFull(s.from, body); err != nil || json.Unmarshal(body, &m) != nil {
				close(found)
				return
			}
			if wanted(m) {
				found <- m
				return
			}
		}
	}()
	select {
	case m, ok := <-found:
		if !ok {
			t.Fatal("the server ended early")
		}
		return m
	case <-time.After(2 * time.Minute):
		t.Fatal("the server did not answer")
		return message{}
	}
}

func (s *server) call(t *testing.T, method, params string) json.RawMessage {
	t.Helper()
	s.next++
	id := s.next
	s.send(t, fmt.Sprintf(`{"jsonrpc":"2.0","id":%d,"method":%q,"params":%s}`, id, method, params))
	m := s.receive(t, func(m message) bool { return m.ID != nil && *m.ID == id && m.Method == "" })
	if len(m.Error) > 0 {
		t.Fatalf("%s: %s", method, m.Error)
	}
	return m.Result
}

type diagnostic struct {
	Range struct {
		Start, End struct{ Line, Character int }
	}
	Severity      int
	Code, Message string
}

func (d diagnostic) line(at string) string {
	severity := []string{"", "error", "warning", "information", "hint"}[d.Severity]
	r := d.Range
	return fmt.Sprintf("%s:%d:%d-%d:%d %s %s: %s", uri.URI(at).FsPath(), r.Start.Line+1, r.Start.Character+1, r.End.Line+1, r.End.Character+1,
		severity, d.Code, d.Message)
}

// workspace is what the server says of the whole folder.
func (s *server) workspace(t *testing.T) []string {
	t.Helper()
	var report struct {
		Items []struct {
			URI   string
			Items []diagnostic
		}
	}
	if err := json.Unmarshal(s.call(t, "workspace/diagnostic", `{"previousResultIds":[]}`), &report); err != nil {
		t.Fatal(err)
	}
	lines := []string{}
	for _, file := range report.Items {
		for _, d := range file.Items {
			lines = append(lines, d.line(file.URI))
		}
	}
	slices.Sort(lines)
	return lines
}

// opened is what the server publishes when one file is open, for it and for
// the files it uses.
func (s *server) opened(t *testing.T, name string) []string {
	t.Helper()
	text, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	at := string(uri.File(name))
	quoted, _ := json.Marshal(string(text))
	s.send(t, fmt.Sprintf(`{"jsonrpc":"2.0","method":"textDocument/didOpen","params":{"textDocument":{"uri":%q,"languageId":"portlight","version":1,"text":%s}}}`, at, quoted))
	shown := map[string][]diagnostic{}
	take := func(m message) bool {
		if m.Method != "textDocument/publishDiagnostics" {
			return false
		}
		var p struct {
			URI         string
			Diagnostics []diagnostic
		}
		if err := json.Unmarshal(m.Params, &p); err != nil {
			t.Error(err)
		}
		shown[p.URI] = p.Diagnostics
		return p.URI == at
	}
	s.receive(t, take)
	// What belongs to used files is published in the same turn, before
	// anything that is asked now is answered.
	s.next++
	id := s.next
	s.send(t, fmt.Sprintf(`{"jsonrpc":"2.0","id":%d,"method":"textDocument/diagnostic","params":{"textDocument":{"uri":%q}}}`, id, at))
	s.receive(t, func(m message) bool { take(m); return m.ID != nil && *m.ID == id })
	s.send(t, fmt.Sprintf(`{"jsonrpc":"2.0","method":"textDocument/didClose","params":{"textDocument":{"uri":%q}}}`, at))
	lines := []string{}
	for file, list := range shown {
		for _, d := range list {
			lines = append(lines, d.line(file))
		}
	}
	// The closed file is taken back before the next one is opened.
	s.receive(t, func(m message) bool {
		return m.Method == "textDocument/publishDiagnostics" && strings.Contains(string(m.Params), strings.Trim(fmt.Sprintf("%q", at), `"`))
	})
	slices.Sort(lines)
	return lines
}

func (s *server) end(t *testing.T) {
	t.Helper()
	s.call(t, "shutdown", "null")
	s.send(t, `{"jsonrpc":"2.0","method":"exit"}`)
	go func() { _, _ = io.Copy(io.Discard, s.from) }()
	if err := <-s.done; err != nil {
		t.Errorf("the server ended with %v", err)
	}
}
