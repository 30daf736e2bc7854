package lsp

import (
	"fmt"
	"os"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"go.lsp.dev/protocol"
)

// TestEveryMethodIsServedOrDeliberatelyAbsent compares the server's tables
// with the protocol's own list of messages.
func TestEveryMethodIsServedOrDeliberatelyAbsent(t *testing.T) {
	missing := map[string]string{}
	for _, a := range absent {
		missing[a.name] = a.why
	}
	sends := map[string]bool{}
	for _, s := range sent {
		sends[s.name] = true
	}
	served := table(nil)
	known := map[string]bool{}
	for _, m := range protocol.Methods {
		known[m.Method] = true
		line, handles := served[m.Method]
		listed := missing[m.Method] != ""
		switch {
		case m.Direction == protocol.DirectionClientToServer && handles == listed:
			t.Errorf("%s must be either served or listed as absent", m.Method)
		case m.Direction == protocol.DirectionServerToClient && sends[m.Method] == listed:
			t.Errorf("%s must be either sent or listed as absent", m.Method)
		case m.Direction == protocol.DirectionBoth && !handles && !sends[m.Method] && !listed:
			t.Errorf("%s is neither served, nor sent, nor listed as absent", m.Method)
		}
		if handles && (line.answer != nil) != (m.Kind == "request") {
			t.Errorf("%s is a %s, and is not handled as one", m.Method, m.Kind)
		}
	}
	for name := range served {
		if !known[name] {
			t.Errorf("%s is served, and is no method of the protocol", name)
		}
	}
}

// announced says which capability announces each request that is offered.
var announced = map[string]string{
	"textDocument/hover": "hoverProvider", "textDocument/completion": "completionProvider", "completionItem/resolve": "completionProvider.resolveProvider",
	"textDocument/signatureHelp": "signatureHelpProvider", "textDocument/definition": "definitionProvider", "textDocument/declaration": "declarationProvider",
	"textDocument/typeDefinition": "typeDefinitionProvider", "textDocument/references": "referencesProvider",
	"textDocument/documentHighlight": "documentHighlightProvider", "textDocument/documentSymbol": "documentSymbolProvider",
	"textDocument/prepareRename": "renameProvider.prepareProvider", "textDocument/rename": "renameProvider",
	"textDocument/linkedEditingRange": "linkedEditingRangeProvider", "textDocument/foldingRange": "foldingRangeProvider",
	"textDocument/selectionRange": "selectionRangeProvider", "textDocument/semanticTokens/full": "semanticTokensProvider.full",
	"textDocument/semanticTokens/full/delta": "semanticTokensProvider.full.delta", "textDocument/semanticTokens/range": "semanticTokensProvider.range",
	"textDocument/inlayHint": "inlayHintProvider", "inlayHint/resolve": "inlayHintProvider.resolveProvider", "textDocument/codeLens": "codeLensProvider",
	"codeLens/resolve": "codeLensProvider.resolveProvider", "textDocument/codeAction": "codeActionProvider", "codeAction/resolve": "codeActionProvider.resolveProvider",
	"textDocument/formatting": "documentFormattingProvider", "textDocument/rangeFormatting": "documentRangeFormattingProvider",
	"textDocument/rangesFormatting": "documentRangeFormattingProvider.rangesSupport", "textDocument/onTypeFormatting": "documentOnTypeFormattingProvider.firstTriggerCharacter",
	"textDocument/documentLink": "documentLinkProvider", "textDocument/diagnostic": "diagnosticProvider",
	"textDocument/prepareCallHierarchy": "callHierarchyProvider", "callHierarchy/incomingCalls": "callHierarchyProvider", "callHierarchy/outgoingCalls": "callHierarchyProvider",
	"workspace/diagnostic": "diagnosticProvider.workspaceDiagnostics", "workspace/symbol": "workspaceSymbolProvider", "workspace/executeCommand": "executeCommandProvider.commands",
	"workspace/willRenameFiles": "workspace.fileOperations.willRename", "workspace/textDocumentContent": "workspace.textDocumentContent",
	"workspace/didChangeWorkspaceFolders": "workspace.workspaceFolders.changeNotifications",
	"textDocument/didOpen":                "textDocumentSync.openClose", "textDocument/didChange": "textDocumentSync.change",
	"textDocument/didSave": "textDocumentSync.save", "textDocument/didClose": "textDocumentSync.openClose",
}

// needsNone are the messages that belong to every session.
var needsNone = []string{
	"initialize", "initialized", "shutdown", "exit", "$/cancelRequest", "window/workDoneProgress/cancel", "$/setTrace",
	"workspace/didChangeConfiguration", "workspace/didChangeWatchedFiles",
}

func TestWhatIsServedIsAnnounced(t *testing.T) {
	e := newEditor(t, fullClient, "")
	raw, err := protocol.Marshal(&e.result.Capabilities)
	if err != nil {
		t.Fatal(err)
	}
	capabilities := parse(t, raw)
	for name := range table(nil) {
		if slices.Contains(needsNone, name) {
			continue
		}
		value := capabilities
		for _, key := range strings.Split(announced[name], ".") {
			value = get(value, key)
		}
		if value == nil || value == false {
			t.Errorf("%s is served, and %q does not announce it", name, announced[name])
		}
	}
	e.quit()
}

// TestMethodsPage keeps METHODS.md what the tables say; -update writes it.
func TestMethodsPage(t *testing.T) {
	var b strings.Builder
	b.WriteString("# What Portlight does with each method of the Language Server Protocol\n\n" +
		"Written by `go test ./lsp -run TestMethodsPage -update` from `methods.go`, `absent.go` and `settings.go`;\n" +
		"a test compares it with the protocol's own list of messages (version 3.18).\n\n" +
		"## Served\n\n| method | what Portlight does |\n|---|---|\n")
	for _, m := range methods() {
		fmt.Fprintf(&b, "| `%s` | %s |\n", m.name, m.does)
	}
	b.WriteString("\n## Sent\n\n| method | when |\n|---|---|\n")
	for _, s := range sent {
		fmt.Fprintf(&b, "| `%s` | %s |\n", s.name, s.does)
	}
	b.WriteString("\n## Deliberately absent\n\n| method | why |\n|---|---|\n")
	for _, a := range absent {
		fmt.Fprintf(&b, "| `%s` | %s |\n", a.name, a.why)
	}
	b.WriteString("\n## Settings\n\nUnder the section `portlight`; a wrong key or value is reported. Also taken from `initializationOptions`.\n\n| key | default | meaning |\n|---|---|---|\n")
	for _, s := range settingTable {
		fmt.Fprintf(&b, "| `portlight.%s` | `%s` | %s |\n", s.key, s.fallback, s.means)
	}
	b.WriteString("\n## Commands\n\n| command | arguments | effect |\n|---|---|---|\n" +
		"| `portlight.answer` | URI, question | gives the answer as text |\n" +
		"| `portlight.show` | URI, question | shows the answer in a document |\n" +
		"| `portlight.explain` | code | shows what a finding means |\n" +
		"| `portlight.apply` | edit | has the client make an edit |\n")
	if *update {
		if err := os.WriteFile("METHODS.md", []byte(b.String()), 0o666); err != nil {
			t.Fatal(err)
		}
		return
	}
	page, err := os.ReadFile("METHODS.md")
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(b.String(), string(page)); diff != "" {
		t.Errorf("METHODS.md is not what the tables say (-want +got):\n%s", diff)
	}
}
