package lsp

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

// pulling is a client that asks for diagnostics itself.
const pulling = `{"workspace":{"diagnostics":{"refreshSupport":true}},"textDocument":{"diagnostic":{"relatedDocumentSupport":true}}}`

// TestPullingClientsAreNotPublishedTo checks that findings come one way only,
// that used files' findings come along, and that a change elsewhere is told.
func TestPullingClientsAreNotPublishedTo(t *testing.T) {
	folder := t.TempDir()
	lib := write(t, folder, "library.plight", strings.Replace(library, "10 Ω", "10 H", 1))
	main := write(t, folder, "main.plight", user)
	e := newEditor(t, pulling, folder)
	e.open(main, user)
	ask := map[string]any{"textDocument": map[string]any{"uri": main}}
	var report any
	e.call(protocol.MethodTextDocumentDiagnostic, ask, &report)
	related, _ := get(report, "relatedDocuments").(map[string]any)
	if items := list(get(related[string(lib)], "items")); len(items) == 0 || get(items[0], "code") != "unit-mismatch" {
		t.Errorf("the used file's findings are %v", related)
	}
	var again any
	e.call(protocol.MethodTextDocumentDiagnostic, map[string]any{"textDocument": ask["textDocument"], "previousResultId": get(report, "resultId")}, &again)
	if get(again, "kind") != "unchanged" {
		t.Errorf("asked again: %v", again)
	}
	write(t, folder, "library.plight", library)
	e.wait("the client to be told to ask again", func() bool {
		return strings.Contains(strings.Join(e.calls, " "), protocol.MethodWorkspaceDiagnosticRefresh)
	})
	e.call(protocol.MethodTextDocumentDiagnostic, ask, &report)
	if items := list(get(report, "items")); len(items) > 0 {
		t.Errorf("after the library was mended: %v", items)
	}
	e.mu.Lock()
	if len(e.shown) > 0 {
		t.Errorf("findings were published too: %v", e.shown)
	}
	e.mu.Unlock()
	e.quit()
}

func TestWorkspaceDiagnosticsInParts(t *testing.T) {
	folder := t.TempDir()
	write(t, folder, "good.plight", divider)
	write(t, folder, "bad.plight", strings.Replace(divider, "12 V", "12 A", 1))
	e := newEditor(t, pulling, folder)
	var whole any
	e.call(protocol.MethodWorkspaceDiagnostic, map[string]any{"previousResultIds": []any{}}, &whole)
	items := list(get(whole, "items"))
	if len(items) != 2 || len(list(get(items[0], "items"))) == 0 || len(list(get(items[1], "items"))) != 0 {
		t.Fatalf("the folder's findings are %v", whole)
	}
	ids := []any{}
	for _, i := range items {
		ids = append(ids, map[string]any{"uri": get(i, "uri"), "value": get(i, "resultId")})
	}
	var again any
	e.call(protocol.MethodWorkspaceDiagnostic, map[string]any{"previousResultIds": ids, "partialResultToken": "parts"}, &again)
	if len(list(get(again, "items"))) != 0 {
		t.Errorf("in parts, the answer itself must be empty: %v", again)
	}
	e.wait("two parts", func() bool { return len(e.progress["parts"]) == 2 })
	for _, part := range e.progress["parts"] {
		if get(part, "items", 0, "kind") != "unchanged" {
			t.Errorf("a part is %v", part)
		}
	}
	e.quit()
}

func TestCommands(t *testing.T) {
	e := newEditor(t, fullClient, "")
	u := uri.URI("untitled:divider")
	e.open(u, divider)
	e.findings(u)
	run := func(command string, arguments ...any) (result any, err error) {
		err = e.try(protocol.MethodWorkspaceExecuteCommand, map[string]any{"command": command, "arguments": arguments}, &result)
		return result, err
	}
	if got, err := run(commandAnswer, u, "v[out] at 1 ms"); err != nil || !strings.HasPrefix(text(got), "8 V") && !strings.HasPrefix(text(got), "8.000 V") {
		t.Errorf("12 V over 1 kΩ and 2 kΩ gives %v, %v", got, err)
	}
	for _, wrong := range [][]any{{}, {u}, {u, 3}, {u, "v[out]", "more"}} {
		if _, err := run(commandAnswer, wrong...); code(err) != jsonrpc2.InvalidParams {
			t.Errorf("arguments %v: %v", wrong, err)
		}
	}
	if _, err := run("portlight.none"); code(err) != jsonrpc2.InvalidParams {
		t.Errorf("an unknown command: %v", err)
	}
	var page string
	e.answer[protocol.MethodWindowShowDocument] = func(raw rawMessage) any {
		raw2, _ := os.ReadFile(uri.URI(text(get(parse(t, raw), "uri"))).FsPath())
		page = string(raw2)
		return map[string]any{"success": true}
	}
	if _, err := run(commandShow, u, "v[out] at 1 ms"); err != nil {
		t.Error(err)
	}
	e.wait("the page", func() bool { return strings.Contains(page, "8") })
	if _, err := run(commandExplain, "unit-mismatch"); err != nil {
		t.Error(err)
	}
	e.wait("the page", func() bool { return strings.Contains(page, "# unit-mismatch") })
	if _, err := run(commandExplain, "none"); code(err) != jsonrpc2.InvalidParams {
		t.Errorf("an unknown code: %v", err)
	}
	var edit any
	e.answer[protocol.MethodWorkspaceApplyEdit] = func(raw rawMessage) any {
		edit = get(parse(t, raw), "edit")
		return map[string]any{"applied": true}
	}
	change := map[string]any{"changes": map[string]any{string(u): []any{}}}
	if _, err := run(commandApply, change); err != nil {
		t.Error(err)
	}
	e.wait("the edit", func() bool { return edit != nil })
	e.quit()
}

// TestClientsThatOpenNoDocuments gets answers as messages.
func TestClientsThatOpenNoDocuments(t *testing.T) {
	e := newEditor(t, `{"window":{"showDocument":{"support":false}}}`, "")
	e.call(protocol.MethodWorkspaceExecuteCommand, map[string]any{"command": commandExplain, "arguments": []any{"unit-mismatch"}}, nil)
	e.wait("the message", func() bool { return len(e.messages) > 0 && strings.Contains(e.messages[0], "unit-mismatch") })
	e.quit()
}

func TestPagesOfTheServersOwn(t *testing.T) {
	e := newEditor(t, `{"workspace":{"textDocumentContent":{}},"textDocument":{"publishDiagnostics":{"codeDescriptionSupport":true}}}`, "")
	u := uri.URI("untitled:bad")
	e.open(u, strings.Replace(divider, "12 V", "12 A", 1))
	found := e.findings(u)
	if len(found) == 0 {
		t.Fatal("no findings")
	}
	var page any
	e.call(protocol.MethodWorkspaceTextDocumentContent, map[string]any{"uri": found[0].CodeDescription.Href}, &page)
	if !strings.HasPrefix(text(get(page, "text")), "# unit-mismatch") {
		t.Errorf("the page of %s is %v", found[0].CodeDescription.Href, page)
	}
	if err := e.try(protocol.MethodWorkspaceTextDocumentContent, map[string]any{"uri": "portlight:/findings/none.md"}, nil); code(err) != jsonrpc2.InvalidParams {
		t.Errorf("a page that is not there: %v", err)
	}
	e.quit()
}

// TestUseStatementsFollowFiles renames a used file and moves a user.
func TestUseStatementsFollowFiles(t *testing.T) {
	folder := t.TempDir()
	lib := write(t, folder, "library.plight", library)
	main := write(t, folder, "main.plight", user)
	e := newEditor(t, fullClient, folder)
	move := func(from, to string) []any {
		var edit any
		e.call(protocol.MethodWorkspaceWillRenameFiles, map[string]any{"files": []any{map[string]any{"oldUri": from, "newUri": to}}}, &edit)
		return list(get(edit, "documentChanges"))
	}
	renamed := move(string(lib), string(uri.File(filepath.Join(folder, "lib", "pads.plight"))))
	if len(renamed) != 1 || get(renamed[0], "edits", 0, "newText") != `"lib/pads.plight"` {
		t.Errorf("the used file moves: %v", renamed)
	}
	moved := move(string(main), string(uri.File(filepath.Join(folder, "sub", "main.plight"))))
	if len(moved) != 1 || get(moved[0], "edits", 0, "newText") != `"../library.plight"` {
		t.Errorf("the user moves: %v", moved)
	}
	if both := move(string(uri.File(folder)), string(uri.File(folder+"2"))); len(both) != 0 {
		t.Errorf("the folder moves: %v", both)
	}
	e.quit()
}

// TestFilesThatAreNotOpenCanBeAskedAbout asks about a file on disk, and one
// that is not there.
func TestFilesThatAreNotOpenCanBeAskedAbout(t *testing.T) {
	folder := t.TempDir()
	u := write(t, folder, "divider.plight", divider)
	e := newEditor(t, fullClient, folder)
	var hover any
	e.call(protocol.MethodTextDocumentHover, at(u, 0, 8), &hover)
	if !strings.Contains(text(get(hover, "contents", "value")), "hull") {
		t.Errorf("the hover is %v", hover)
	}
	if err := e.try(protocol.MethodTextDocumentHover, at(uri.File(filepath.Join(folder, "none.plight")), 0, 0), nil); code(err) != jsonrpc2.InvalidParams {
		t.Errorf("a file that is not there: %v", err)
	}
	e.quit()
}

// TestOldClientsGetWhatTheyKnow uses a client that announces nothing.
func TestOldClientsGetWhatTheyKnow(t *testing.T) {
	e := newEditor(t, `{"workspace":{"applyEdit":true}}`, "")
	u := uri.URI("untitled:old")
	e.open(u, strings.Replace(divider, "resistor Ra", "resistr Ra", 1))
	e.findings(u)
	var symbols any
	e.call(protocol.MethodTextDocumentDocumentSymbol, map[string]any{"textDocument": map[string]any{"uri": u}}, &symbols)
	if get(symbols, 0, "location", "uri") != string(u) {
		t.Errorf("symbols must be flat: %v", symbols)
	}
	var hover any
	e.call(protocol.MethodTextDocumentHover, at(u, 0, 8), &hover)
	if get(hover, "contents", "kind") != "plaintext" || strings.Contains(text(get(hover, "contents", "value")), "**") {
		t.Errorf("hovers must be plain text: %v", hover)
	}
	var actions any
	line := strings.Split(divider, "\n")[2]
	p := map[string]any{"line": 2, "character": strings.Index(line, "resistor") + 2}
	e.call(protocol.MethodTextDocumentCodeAction, map[string]any{"textDocument": map[string]any{"uri": u},
		"range": map[string]any{"start": p, "end": p}, "context": map[string]any{"diagnostics": []any{}}}, &actions)
	if get(actions, 0, "command") != commandApply {
		t.Errorf("actions must be commands: %v", actions)
	}
	var edit any
	e.call(protocol.MethodTextDocumentRename, map[string]any{"textDocument": map[string]any{"uri": u}, "position": map[string]any{"line": 0, "character": 8}, "newName": "deck"}, &edit)
	if changes, _ := get(edit, "changes").(map[string]any); len(changes) != 1 {
		t.Errorf("edits must be plain changes: %v", edit)
	}
	e.quit()
}

// TestPicturesOnlyForClientsThatShowThem hovers a node with a transient.
func TestPicturesOnlyForClientsThatShowThem(t *testing.T) {
	network := strings.Replace(divider, "12 V", "12 V * u(t)", 1) + "out -[capacitor Ca = 1 µF]- hull\n"
	for _, c := range []struct {
		client, options string
		image           bool
	}{
		{"Visual Studio Code", `{}`, true}, {"code-server", `{}`, true}, {"Neovim", `{}`, false},
		{"Neovim", `{"hover":{"pictures":"always"}}`, true}, {"Visual Studio Code", `{"hover":{"pictures":"never"}}`, false},
	} {
		e := rawEditor(t)
		e.call(protocol.MethodInitialize, map[string]any{
			"processId": nil, "rootUri": nil, "clientInfo": map[string]any{"name": c.client}, "initializationOptions": json.RawMessage(c.options),
			"capabilities": json.RawMessage(`{"textDocument":{"hover":{"contentFormat":["markdown"]}}}`),
		}, nil)
		u := uri.URI("untitled:transient")
		e.open(u, network)
		var hover any
		line := strings.Split(network, "\n")[2]
		column := len([]rune(line[:strings.Index(line, "out")])) + 1
		e.call(protocol.MethodTextDocumentHover, at(u, 2, column), &hover)
		value := text(get(hover, "contents", "value"))
		if image := strings.Contains(value, "data:image/svg+xml;base64,"); image != c.image {
			t.Errorf("%s with %s: an image is sent: %v\n%.300s", c.client, c.options, image, value)
		}
		if braille := strings.ContainsRune(value, '⠀'); braille == c.image {
			t.Errorf("%s with %s: dots are sent: %v", c.client, c.options, braille)
		}
		if len(value) >= 90_000 {
			t.Errorf("a hover of %d characters", len(value))
		}
		e.quit()
	}
}

func TestDeltasOfTokens(t *testing.T) {
	e := newEditor(t, fullClient, "")
	u := uri.URI("untitled:tokens")
	e.open(u, divider)
	document := map[string]any{"uri": u}
	var full protocol.SemanticTokens
	e.call(protocol.MethodTextDocumentSemanticTokensFull, map[string]any{"textDocument": document}, &full)
	e.edit(u, 1, 0, 1, 0, "let a = 1 V\n")
	var delta protocol.SemanticTokensDelta
	e.call(protocol.MethodTextDocumentSemanticTokensFullDelta, map[string]any{"textDocument": document, "previousResultId": *full.ResultID}, &delta)
	data := full.Data
	for _, edit := range delta.Edits {
		data = append(append(append([]uint32(nil), data[:edit.Start]...), edit.Data...), data[edit.Start+edit.DeleteCount:]...)
	}
	var fresh protocol.SemanticTokens
	e.call(protocol.MethodTextDocumentSemanticTokensFull, map[string]any{"textDocument": document}, &fresh)
	if len(delta.Edits) == 0 || string(rawTokens(data)) != string(rawTokens(fresh.Data)) {
		t.Errorf("the delta gives %v, afresh %v", data, fresh.Data)
	}
	var stale any
	e.call(protocol.MethodTextDocumentSemanticTokensFullDelta, map[string]any{"textDocument": document, "previousResultId": "none"}, &stale)
	if get(stale, "data") == nil {
		t.Errorf("with an unknown id all tokens must come: %v", stale)
	}
	e.quit()
}

func rawTokens(data []uint32) []byte { raw, _ := json.Marshal(data); return raw }

// TestClosingBraceTidiesTheBody types the brace that ends a subnetwork.
func TestClosingBraceTidiesTheBody(t *testing.T) {
	e := newEditor(t, fullClient, "")
	u := uri.URI("untitled:brace")
	e.open(u, "subnetwork Pad (a, b) {\na   -[resistor R1=1 kΩ]-b\n}\nlet   x = 1\n")
	var edits []any
	e.call(protocol.MethodTextDocumentOnTypeFormatting, map[string]any{
		"textDocument": map[string]any{"uri": u}, "position": map[string]any{"line": 2, "character": 1}, "ch": "}", "options": options["options"]}, &edits)
	if len(edits) == 0 {
		t.Error("the body is not tidied")
	}
	for _, edit := range edits {
		if line, _ := get(edit, "range", "start", "line").(float64); line > 2 {
			t.Errorf("a line beyond the body is changed: %v", edit)
		}
	}
	e.quit()
}
