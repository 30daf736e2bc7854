package lsp

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"go.lsp.dev/uri"
)

// TestMarkers asks what the comments of network files ask, and compares with
// what they expect. A line
//
//	#@ REQUEST [TEXT]
//
// asks about the nearest line above that is no such comment; TEXT is a piece
// of that line with | where the pointer is. The answer stands below it in
// lines "#> …", which -update writes anew. A folder of markers is a workspace;
// the questions are part of the network, as comments, the answers are not: line
// numbers count without them.
func TestMarkers(t *testing.T) {
	names, err := filepath.Glob("testdata/markers/*/*.plight")
	if err != nil || len(names) == 0 {
		t.Fatalf("no marker files: %v", err)
	}
	asked := map[string]bool{}
	for _, name := range names {
		raw, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(string(raw), "#@ ") {
			continue
		}
		folder, file := filepath.Base(filepath.Dir(name)), filepath.Base(name)
		t.Run(folder+"/"+strings.TrimSuffix(file, ".plight"), func(t *testing.T) { markers(t, name, string(raw), asked) })
	}
	if t.Failed() {
		return
	}
	for request := range markerRequests {
		if !asked[request] {
			t.Errorf("no marker asks %q", request)
		}
	}
}

// markers runs one file.
func markers(t *testing.T, name, text string, asked map[string]bool) {
	folder, err := filepath.Abs(filepath.Dir(name))
	if err != nil {
		t.Fatal(err)
	}
	e := newEditor(t, fullClient, folder)
	m := &marked{editor: e, at: uri.File(filepath.Join(folder, filepath.Base(name))), folder: folder}
	for l := range strings.Lines(text) { // answers are no part of the question
		if !strings.HasPrefix(l, "#>") {
			m.lines = append(m.lines, strings.TrimSuffix(l, "\n"))
		}
	}
	e.open(m.at, strings.Join(m.lines, "\n")+"\n")
	e.findings(m.at)
	var out []string
	line := 0
	for i := 0; i < len(m.lines); i++ {
		switch {
		case strings.HasPrefix(m.lines[i], "#@ "):
			out = append(out, m.lines[i])
			request, where, _ := strings.Cut(strings.TrimPrefix(m.lines[i], "#@ "), " ")
			ask := markerRequests[request]
			if ask == nil {
				t.Fatalf("%s:%d: no request is called %q", name, i+1, request)
			}
			asked[request] = true
			column := 0
			rest := where
			if piece, extra, _ := strings.Cut(where, " => "); strings.Contains(piece, "|") {
				before, after, _ := strings.Cut(piece, "|")
				column = strings.Index(m.lines[line], before+after)
				if column < 0 {
					t.Fatalf("%s:%d: %q is not in line %d", name, i+1, before+after, line+1)
				}
				column += len(before)
				rest = extra
			}
			for _, answer := range ask(m, line, column, rest) {
				out = append(out, strings.TrimRight("#> "+answer, " "))
			}
		default:
			line = i
			out = append(out, m.lines[i])
		}
	}
	e.quiet()
	e.quit()
	got := strings.Join(out, "\n") + "\n"
	if *update {
		if err := os.WriteFile(name, []byte(got), 0o666); err != nil {
			t.Fatal(err)
		}
		return
	}
	if diff := cmp.Diff(text, got); diff != "" {
		t.Errorf("answers differ (-want +got):\n%s", diff)
	}
}

// marked is a file of markers in an editor.
type marked struct {
	*editor
	at     uri.URI
	folder string
	lines  []string
}

// ask sends a request about a place and gives its result as plain JSON.
func (m *marked) ask(method string, line, column int, more map[string]any) any {
	m.t.Helper()
	params := at(m.at, line, column)
	for k, v := range more {
		params[k] = v
	}
	var raw json.RawMessage
	var result any
	if err := m.try(method, params, &result2{&raw}); err != nil {
		return "refused: " + err.Error()
	}
	if len(raw) > 0 {
		if err := json.Unmarshal(raw, &result); err != nil {
			m.t.Fatal(err)
		}
	}
	return result
}

// result2 takes a result as it is on the wire.
type result2 struct{ raw *json.RawMessage }

// UnmarshalJSON implements json.Unmarshaler.
func (r *result2) UnmarshalJSON(data []byte) error {
	*r.raw = append(json.RawMessage(nil), data...)
	return nil
}

// get follows keys and indices into a JSON value; nil where there is nothing.
func get(v any, path ...any) any {
	for _, step := range path {
		switch s := step.(type) {
		case string:
			object, _ := v.(map[string]any)
			v = object[s]
		case int:
			list, _ := v.([]any)
			if s >= len(list) {
				return nil
			}
			v = list[s]
		}
	}
	return v
}

func list(v any) []any { l, _ := v.([]any); return l }
func text(v any) string {
	switch v := v.(type) {
	case string:
		return v
	case nil:
		return ""
	case float64:
		return fmt.Sprint(v)
	}
	return fmt.Sprint(v)
}

// span shows a range as line:column-line:column, from 1, with its text.
func (m *marked) span(r any) string {
	number := func(path ...any) int { n, _ := get(r, path...).(float64); return int(n) }
	l1, c1, l2, c2 := number("start", "line"), number("start", "character"), number("end", "line"), number("end", "character")
	if l1 == l2 {
		return fmt.Sprintf("%d:%d-%d %q", l1+1, c1+1, c2+1, m.piece(l1, c1, c2))
	}
	return fmt.Sprintf("%d:%d-%d:%d", l1+1, c1+1, l2+1, c2+1)
}

func (m *marked) piece(line, from, to int) string {
	if line >= len(m.lines) {
		return ""
	}
	s := m.lines[line] // the client counts bytes
	return s[min(from, len(s)):min(to, len(s))]
}

// where shows a location in any file of the folder.
func (m *marked) where(u, r any) string {
	if text(u) == string(m.at) {
		return m.span(r)
	}
	other := *m
	name := uri.URI(text(u)).FsPath()
	raw, _ := os.ReadFile(name)
	other.lines = strings.Split(string(raw), "\n")
	return filepath.Base(name) + ":" + other.span(r)
}

// paragraphs are the lines of a text.
func paragraphs(s string) []string { return strings.Split(strings.TrimRight(s, "\n"), "\n") }

// newText applies text edits to the document and shows the lines that differ.
func (m *marked) newText(edits []any) []string {
	type change struct {
		start, end int
		text       string
	}
	starts := []int{0}
	for _, l := range m.lines {
		starts = append(starts, starts[len(starts)-1]+len(l)+1)
	}
	before := strings.Join(m.lines, "\n") + "\n"
	offset := func(p any) int {
		line, _ := get(p, "line").(float64)
		column, _ := get(p, "character").(float64)
		return min(starts[min(int(line), len(starts)-1)]+int(column), len(before))
	}
	var changes []change
	for _, e := range edits {
		changes = append(changes, change{offset(get(e, "range", "start")), offset(get(e, "range", "end")), text(get(e, "newText"))})
	}
	slices.SortStableFunc(changes, func(a, b change) int { return b.start - a.start })
	after := before
	for _, c := range changes {
		after = after[:c.start] + c.text + after[c.end:]
	}
	return diffLines(m.lines, strings.Split(strings.TrimSuffix(after, "\n"), "\n"))
}

// diffLines shows what two texts do not share, after their common first and
// last lines are taken off.
func diffLines(a, b []string) []string {
	head := 0
	for head < len(a) && head < len(b) && a[head] == b[head] {
		head++
	}
	tail := 0
	for tail < len(a)-head && tail < len(b)-head && a[len(a)-1-tail] == b[len(b)-1-tail] {
		tail++
	}
	var out []string
	for _, l := range a[head : len(a)-tail] {
		out = append(out, "- "+l)
	}
	for _, l := range b[head : len(b)-tail] {
		out = append(out, "+ "+l)
	}
	if len(out) == 0 {
		return []string{"no change"}
	}
	return out
}
