package lsp

import (
	"encoding/json"
	"path/filepath"
	"slices"
	"testing"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

// TestActionsOfOneDiagnostic asks as Kate does: about one diagnostic, with the
// whole document as the range, and knowing no preferred action. Kate applies
// all that it gets.
func TestActionsOfOneDiagnostic(t *testing.T) {
	e := newEditor(t, `{"textDocument":{"codeAction":{"codeActionLiteralSupport":{"codeActionKind":{"valueSet":["quickfix"]}}}}}`, "")
	u := uri.File(filepath.Join(t.TempDir(), "a.plight"))
	e.open(u, "ground hull\nvoltage source Vs = 1 V\nresistor R1 = 1 Ω\nresistor R2 = 1 Ω\nplus -[Vs]- hull\nplus -[R1]- hull\ntell v[plis]\n")
	found := e.findings(u)
	at := slices.IndexFunc(found, func(d protocol.Diagnostic) bool { return d.Code == protocol.String("unknown-name") })
	if at < 0 || len(found) < 2 {
		t.Fatalf("the findings are %v, want an unknown name among others", found)
	}
	titles := func(named []protocol.Diagnostic) (titles []string) {
		var raw []json.RawMessage
		e.call(protocol.MethodTextDocumentCodeAction, map[string]any{"textDocument": map[string]any{"uri": u},
			"range":   map[string]any{"start": map[string]any{"line": 0, "character": 0}, "end": map[string]any{"line": 7, "character": 0}},
			"context": map[string]any{"diagnostics": named}}, &raw)
		for _, r := range raw {
			var a struct{ Title string }
			if err := json.Unmarshal(r, &a); err != nil {
				t.Fatal(err)
			}
			titles = append(titles, a.Title)
		}
		return titles
	}
	if got := titles(found[at : at+1]); len(got) != 1 || got[0] != "Write plus" {
		t.Errorf("for one diagnostic the actions are %q, want its repair alone", got)
	}
	if got := titles([]protocol.Diagnostic{}); len(got) < 3 {
		t.Errorf("for the whole document the actions are %q, want those of every finding", got)
	}
	e.quit()
}
