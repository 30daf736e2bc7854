package lsp

import (
	"encoding/json"
	"strings"
	"testing"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
	"pgregory.net/rapid"

	"portlight/dialect"
)

// pieces are what a random typist types: sound statements, halves of them, and
// what breaks lines and brackets.
var pieces = []string{
	"resistor R1 = 1 kΩ\n", "a -[R1]- b -[C1]- hull\n", "capacitor C1 = ", "ground hull\n", "subnetwork S (a, b) {\n", "}\n", "tell v[a]", "\n", "(", ")", "[", "]",
	"let x = 2*x\n", "µ", "😀", "\r\n", "require gain(H) <= 1\n", "function H = v[b]/Vs\n", "a -[voltage source Vs = 1 V]- hull\n", "port p at a hull\n", "# note\n", "\"", ",", " ",
	"use \"none.plight\"\n", "part P = S, a at a, b at hull\n", "\t", "\x00", "switch S1 = opens at 1 ms\n", "start steady\n",
}

// requests are asked in between, at random places.
var everyRequest = []string{
	protocol.MethodTextDocumentHover, protocol.MethodTextDocumentCompletion, protocol.MethodTextDocumentSignatureHelp,
	protocol.MethodTextDocumentDefinition, protocol.MethodTextDocumentTypeDefinition, protocol.MethodTextDocumentReferences,
	protocol.MethodTextDocumentDocumentHighlight, protocol.MethodTextDocumentDocumentSymbol, protocol.MethodTextDocumentPrepareRename,
	protocol.MethodTextDocumentLinkedEditingRange, protocol.MethodTextDocumentFoldingRange, protocol.MethodTextDocumentSemanticTokensFull,
	protocol.MethodTextDocumentCodeLens, protocol.MethodTextDocumentFormatting, protocol.MethodTextDocumentDocumentLink,
	protocol.MethodTextDocumentPrepareCallHierarchy, protocol.MethodTextDocumentDiagnostic, protocol.MethodTextDocumentInlayHint,
	protocol.MethodTextDocumentCodeAction, protocol.MethodTextDocumentSelectionRange, protocol.MethodTextDocumentOnTypeFormatting,
}

// TestRandomTyping makes random edits with random requests in between. No
// request may fail but for a document that changed meanwhile, and in the end
// the server must know exactly what a fresh one knows of the same text.
func TestRandomTyping(t *testing.T) {
	e := newEditor(t, fullClient, "")
	fresh := newEditor(t, fullClient, "")
	n := 0
	rapid.Check(t, func(rt *rapid.T) {
		n++
		u := uri.URI("untitled:random" + itoa(n))
		m := mapper{encoding: dialect.UTF8}
		content := strings.Join(rapid.SliceOfN(rapid.SampledFrom(pieces), 0, 12).Draw(rt, "text"), "")
		e.open(u, content)
		for range rapid.IntRange(1, 8).Draw(rt, "edits") {
			runes := []rune(content)
			from := len(string(runes[:rapid.IntRange(0, len(runes)).Draw(rt, "from")]))
			to := len(string(runes[:rapid.IntRange(0, len(runes)).Draw(rt, "to")]))
			file := lines(content)
			change := &protocol.TextDocumentContentChangePartial{Text: rapid.SampledFrom(pieces).Draw(rt, "typed")}
			change.Range.Start, change.Range.End = m.position(file, min(from, to)), m.position(file, max(from, to))
			e.versions[string(u)]++
			raw, _ := protocol.Marshal(change)
			e.notify(protocol.MethodTextDocumentDidChange, map[string]any{
				"textDocument":   map[string]any{"uri": u, "version": e.versions[string(u)]},
				"contentChanges": []any{json.RawMessage(raw)}})
			content, _ = m.apply(content, change)
			method := rapid.SampledFrom(everyRequest).Draw(rt, "request")
			place := m.position(lines(content), rapid.IntRange(0, len(content)).Draw(rt, "at"))
			params := map[string]any{
				"textDocument": map[string]any{"uri": u}, "position": place, "positions": []any{place},
				"range": protocol.Range{Start: place, End: place}, "context": map[string]any{"diagnostics": []any{}, "includeDeclaration": true},
				"options": options["options"], "ch": "\n",
			}
			if err := e.try(method, params, nil); err != nil && code(err) != protocol.CodeContentModified {
				rt.Fatalf("%s of %q: %v", method, content, err)
			}
		}
		e.note, fresh.note = content, content
		fresh.open(u, content)
		sameText(rt, e, fresh, u)
		for _, ed := range []*editor{e, fresh} {
			ed.notify(protocol.MethodTextDocumentDidClose, map[string]any{"textDocument": map[string]any{"uri": u}})
		}
	})
	e.quiet()
	e.quit()
}

// sameText compares what two servers know of a document.
func sameText(t *rapid.T, a, b *editor, u uri.URI) {
	found, want := a.findings(u), b.findings(u)
	x, _ := json.Marshal(found)
	y, _ := json.Marshal(want)
	if string(x) != string(y) {
		t.Fatalf("findings after typing\n%s\nafresh\n%s", x, y)
	}
	document := map[string]any{"textDocument": map[string]any{"uri": u}}
	for _, method := range []string{protocol.MethodTextDocumentSemanticTokensFull, protocol.MethodTextDocumentDocumentSymbol, protocol.MethodTextDocumentFormatting} {
		var p, q any
		a.call(method, document, &p)
		b.call(method, document, &q)
		for _, v := range []any{p, q} {
			if object, ok := v.(map[string]any); ok {
				delete(object, "resultId")
			}
		}
		x, _ := json.Marshal(p)
		y, _ := json.Marshal(q)
		if string(x) != string(y) {
			t.Fatalf("%s after typing\n%s\nafresh\n%s", method, x, y)
		}
	}
}
