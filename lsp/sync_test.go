package lsp

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

// divider is a sound network without findings.
const divider = `ground hull
plus -[voltage source Vs = 12 V]- hull
plus -[resistor Ra = 1 kΩ]- out -[resistor Rb = 2 kΩ]- hull
`

func has(list []protocol.Diagnostic, code string) bool { return slices.Contains(codes(list), code) }

func TestFindingsFollowEdits(t *testing.T) {
	e := newEditor(t, fullClient, "")
	u := uri.URI("untitled:divider")
	e.open(u, divider)
	if got := e.findings(u); len(got) > 0 {
		t.Fatalf("a sound network has findings: %v", got)
	}
	column := strings.Index(strings.Split(divider, "\n")[2], "out")
	e.edit(u, 2, column, 2, column+3, "hull")
	got := e.findings(u)
	e.edit(u, 2, column, 2, column+4, "out")
	if again := e.findings(u); len(again) > 0 {
		t.Errorf("the mended network has findings: %v", again)
	}
	e.edit(u, 2, 7, 2, 15, "resistr")
	if !has(e.findings(u), "syntax") {
		t.Errorf("a misspelt kind gives %v", e.findings(u))
	}
	if len(got) == 0 {
		t.Error("a part with both ends at one node has no finding")
	}
	e.notify(protocol.MethodTextDocumentDidClose, map[string]any{"textDocument": map[string]any{"uri": u}})
	e.wait("the findings to be taken back", func() bool {
		last := e.shown[u][len(e.shown[u])-1]
		return len(last.Diagnostics) == 0
	})
	e.quiet()
	e.quit()
}

// TestBurstsOfEditsEndRight types many edits without waiting; the last
// version's findings must be those of a fresh server on the same text.
func TestBurstsOfEditsEndRight(t *testing.T) {
	e := newEditor(t, fullClient, "")
	u := uri.URI("untitled:burst")
	e.open(u, divider)
	for i := range 200 {
		e.edit(u, 3, 0, 3, 0, fmt.Sprintf("let k%d = %d\n", i, i))
	}
	e.edit(u, 3, 0, 3, 0, "tell v[nowhere]\n")
	got := codes(e.findings(u))
	fresh := newEditor(t, fullClient, "")
	text := divider + "tell v[nowhere]\n"
	for i := 199; i >= 0; i-- {
		text += fmt.Sprintf("let k%d = %d\n", i, i)
	}
	fresh.open(u, text)
	if want := codes(fresh.findings(u)); !slices.Equal(got, want) || len(want) == 0 {
		t.Errorf("after a burst %v, afresh %v", got, want)
	}
	e.mu.Lock()
	defer e.mu.Unlock()
	last := int32(0)
	for _, p := range e.shown[u] {
		v, _ := p.Version.Get()
		if v < last {
			t.Errorf("version %d was published after %d", v, last)
		}
		last = v
	}
}

func TestSeveralChangesInOneMessage(t *testing.T) {
	e := newEditor(t, fullClient, "")
	u := uri.URI("untitled:several")
	e.open(u, "ground a\n")
	change := func(line, from, to int, text string) any {
		return map[string]any{"text": text, "range": map[string]any{
			"start": map[string]any{"line": line, "character": from}, "end": map[string]any{"line": line, "character": to}}}
	}
	e.versions[string(u)]++
	e.notify(protocol.MethodTextDocumentDidChange, map[string]any{
		"textDocument":   map[string]any{"uri": u, "version": 2},
		"contentChanges": []any{map[string]any{"text": "let a = 1\n"}, change(1, 0, 0, "let b = a\n"), change(0, 4, 5, "c")},
	})
	e.findings(u)
	var symbols []any
	e.call(protocol.MethodTextDocumentDocumentSymbol, map[string]any{"textDocument": map[string]any{"uri": u}}, &symbols)
	if len(symbols) != 2 || get(symbols[0], "name") != "c" || get(symbols[1], "name") != "b" {
		t.Errorf("the outline is %v", symbols)
	}
	e.quit()
}

const library = "let Rout = 1 kΩ\nsubnetwork Pad (a, b) {\n  a -[resistor R1 = 10 Ω]- b\n}\n"
const user = `use "library.plight"
ground hull
plus -[voltage source Vs = 1 V]- hull
plus -[part P1 = Pad]- out -[resistor Ro = Rout]- hull
`

// TestUnsavedBuffersWinOverTheDisk edits a used file in a buffer: the file
// that uses it must see the buffer, and the disk again once it is closed.
func TestUnsavedBuffersWinOverTheDisk(t *testing.T) {
	folder := t.TempDir()
	lib := write(t, folder, "library.plight", library)
	main := write(t, folder, "main.plight", user)
	e := newEditor(t, fullClient, folder)
	e.open(main, user)
	if got := e.findings(main); len(got) > 0 {
		t.Fatalf("findings at first: %v", got)
	}
	shown := len(e.shown[main])
	e.open(lib, strings.Replace(library, "Rout", "Rend", 1))
	e.wait("the unknown name in the file that uses the buffer", func() bool {
		return len(e.shown[main]) > shown && has(e.shown[main][len(e.shown[main])-1].Diagnostics, "unknown-name")
	})
	e.notify(protocol.MethodTextDocumentDidClose, map[string]any{"textDocument": map[string]any{"uri": lib}})
	e.wait("the file on disk to count again", func() bool {
		return len(e.shown[main][len(e.shown[main])-1].Diagnostics) == 0
	})
	e.quiet()
	e.quit()
}

// TestOtherProgramsChangesAreSeen changes a used file on disk, in place, by
// renaming over it, by removing it and making it again; the client watches
// nothing.
func TestOtherProgramsChangesAreSeen(t *testing.T) {
	folder := t.TempDir()
	lib := write(t, folder, "library.plight", library)
	main := write(t, folder, "main.plight", user)
	e := newEditor(t, "{}", "")
	e.open(main, user)
	e.findings(main)
	last := func() []protocol.Diagnostic { return e.shown[main][len(e.shown[main])-1].Diagnostics }
	write(t, folder, "library.plight", "# nothing\n")
	e.wait("unknown names", func() bool { return has(last(), "unknown-name") })
	write(t, folder, "library.tmp", library)
	if err := os.Rename(filepath.Join(folder, "library.tmp"), lib.FsPath()); err != nil {
		t.Fatal(err)
	}
	e.wait("no findings", func() bool { return len(last()) == 0 })
	if err := os.Remove(lib.FsPath()); err != nil {
		t.Fatal(err)
	}
	e.wait("the missing file", func() bool { return has(last(), "file-missing") })
	write(t, folder, "library.plight", library)
	e.wait("no findings", func() bool { return len(last()) == 0 })
	e.quiet()
	e.quit()
}

// TestFindingsInUsedFilesAreShownThere checks that a mistake in a file that is
// not open is shown in that file, and taken back when nobody uses it.
func TestFindingsInUsedFilesAreShownThere(t *testing.T) {
	folder := t.TempDir()
	lib := write(t, folder, "library.plight", strings.Replace(library, "10 Ω", "10 H", 1))
	main := write(t, folder, "main.plight", user)
	e := newEditor(t, fullClient, folder)
	e.open(main, user)
	e.wait("the unit mismatch in the used file", func() bool {
		list := e.shown[lib]
		return len(list) > 0 && has(list[len(list)-1].Diagnostics, "unit-mismatch")
	})
	e.notify(protocol.MethodTextDocumentDidClose, map[string]any{"textDocument": map[string]any{"uri": main}})
	e.wait("it to be taken back", func() bool {
		list := e.shown[lib]
		return len(list[len(list)-1].Diagnostics) == 0
	})
	e.quit()
}

func TestWorkspaceFoldersComeAndGo(t *testing.T) {
	a, b := t.TempDir(), t.TempDir()
	write(t, a, "a.plight", "let inA = 1\n")
	write(t, b, "b.plight", "let inB = 1\n")
	e := newEditor(t, fullClient, a)
	names := func() string {
		var list []any
		e.call(protocol.MethodWorkspaceSymbol, map[string]any{"query": "in"}, &list)
		var out []string
		for _, s := range list {
			out = append(out, text(get(s, "name")))
		}
		return strings.Join(out, " ")
	}
	if got := names(); got != "inA" {
		t.Errorf("one folder: %q", got)
	}
	folder := func(path string) any { return map[string]any{"uri": uri.File(path), "name": "x"} }
	e.notify(protocol.MethodWorkspaceDidChangeWorkspaceFolders, map[string]any{"event": map[string]any{"added": []any{folder(b)}, "removed": []any{}}})
	if got := names(); !strings.Contains(got, "inA") || !strings.Contains(got, "inB") {
		t.Errorf("two folders: %q", got)
	}
	e.notify(protocol.MethodWorkspaceDidChangeWorkspaceFolders, map[string]any{"event": map[string]any{"added": []any{}, "removed": []any{folder(a)}}})
	if got := names(); got != "inB" {
		t.Errorf("the other folder: %q", got)
	}
	e.quit()
}

// TestBadInput opens texts that are hardly networks.
func TestBadInput(t *testing.T) {
	e := newEditor(t, fullClient, "")
	for name, text := range map[string]string{
		"empty": "", "binary": "\x00\x01\x02\x7f\x00", "line": strings.Repeat("x ", 1<<20), "brackets": "tell " + strings.Repeat("(", 10_000),
		"unclosed": "subnetwork A (a, b) {\n", "crlf": strings.ReplaceAll(divider, "\n", "\r\n"), "bom": "\ufeff" + divider,
	} {
		u := uri.URI("untitled:" + name)
		e.open(u, text)
		e.findings(u)
		for _, method := range []string{
			protocol.MethodTextDocumentHover, protocol.MethodTextDocumentCompletion, protocol.MethodTextDocumentDocumentSymbol,
			protocol.MethodTextDocumentSemanticTokensFull, protocol.MethodTextDocumentFoldingRange, protocol.MethodTextDocumentFormatting,
			protocol.MethodTextDocumentCodeLens, protocol.MethodTextDocumentSignatureHelp, protocol.MethodTextDocumentDocumentHighlight,
		} {
			start := time.Now()
			e.call(method, at(u, 0, 5), nil)
			if d := time.Since(start); d > 5*time.Second {
				t.Errorf("%s: %s took %v", name, method, d)
			}
		}
	}
	e.quiet()
	e.quit()
}
