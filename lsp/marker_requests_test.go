package lsp

import (
	"fmt"
	"slices"
	"strings"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

// markerRequests are the questions that a marker can ask.
var markerRequests = map[string]func(m *marked, line, column int, rest string) []string{
	"findings":  markFindings,
	"pull":      markPull,
	"hover":     markHover,
	"complete":  markComplete,
	"document":  markDocument,
	"signature": markSignature,
	"define": func(m *marked, l, c int, _ string) []string {
		return m.places(protocol.MethodTextDocumentDefinition, l, c, nil)
	},
	"declare": func(m *marked, l, c int, _ string) []string {
		return m.places(protocol.MethodTextDocumentDeclaration, l, c, nil)
	},
	"type": func(m *marked, l, c int, _ string) []string {
		return m.places(protocol.MethodTextDocumentTypeDefinition, l, c, nil)
	},
	"references": markReferences,
	"highlight":  markHighlight,
	"symbols":    markSymbols,
	"workspace":  markWorkspace,
	"prepare":    markPrepare,
	"rename":     markRename,
	"linked":     markLinked,
	"fold":       markFold,
	"select":     markSelect,
	"tokens":     markTokens,
	"inlay":      markInlay,
	"lens":       markLens,
	"actions":    markActions,
	"fix":        markFix,
	"tidy": func(m *marked, l, c int, _ string) []string {
		return m.newText(list(m.ask(protocol.MethodTextDocumentFormatting, l, c, options)))
	},
	"tidyline": markTidyLine,
	"tidytype": markTidyType,
	"links":    markLinks,
	"uses":     markUses,
}

var options = map[string]any{"options": map[string]any{"tabSize": 2, "insertSpaces": true}}

func markFindings(m *marked, line, _ int, _ string) []string {
	var out []string
	for _, d := range m.findings(m.at) {
		if int(d.Range.Start.Line) != line {
			continue
		}
		out = append(out, fmt.Sprintf("%d %v %q: %s", d.Severity, d.Code, m.piece(line, int(d.Range.Start.Character), int(d.Range.End.Character)), text(d.Message)))
		for _, r := range d.RelatedInformation {
			out = append(out, fmt.Sprintf("  %s: %s", m.plain(r.Location), r.Message))
		}
	}
	return none(out)
}

func (m *marked) plain(l protocol.Location) string {
	name := ""
	if l.URI != m.at {
		name = base(l.URI.FsPath()) + ":"
	}
	return fmt.Sprintf("%s%d:%d", name, l.Range.Start.Line+1, l.Range.Start.Character+1)
}

func none(out []string) []string {
	if len(out) == 0 {
		return []string{"none"}
	}
	return out
}

func markPull(m *marked, line, column int, _ string) []string {
	r := m.ask(protocol.MethodTextDocumentDiagnostic, line, column, nil)
	out := []string{text(get(r, "kind"))}
	for _, d := range list(get(r, "items")) {
		out = append(out, text(get(d, "code"))+" "+m.span(get(d, "range")))
	}
	again := m.ask(protocol.MethodTextDocumentDiagnostic, line, column, map[string]any{"previousResultId": get(r, "resultId")})
	return append(out, "again: "+text(get(again, "kind")))
}

func markHover(m *marked, line, column int, _ string) []string {
	r := m.ask(protocol.MethodTextDocumentHover, line, column, nil)
	if r == nil {
		return []string{"nothing"}
	}
	return append([]string{m.span(get(r, "range"))}, paragraphs(text(get(r, "contents", "value")))...)
}

func markComplete(m *marked, line, column int, _ string) []string {
	r := m.ask(protocol.MethodTextDocumentCompletion, line, column, nil)
	items := list(get(r, "items"))
	slices.SortStableFunc(items, func(a, b any) int { return strings.Compare(text(get(a, "sortText")), text(get(b, "sortText"))) })
	var out []string
	for i, item := range items {
		if i == 12 {
			out = append(out, fmt.Sprintf("… %d in all", len(items)))
			break
		}
		out = append(out, fmt.Sprintf("%s (%s) %s", text(get(item, "label")), text(get(item, "detail")),
			strings.ReplaceAll(text(get(item, "textEdit", "newText")), "\n", "⏎")))
	}
	return none(out)
}

// markDocument resolves the completion that the rest of the line names.
func markDocument(m *marked, line, column int, label string) []string {
	r := m.ask(protocol.MethodTextDocumentCompletion, line, column, nil)
	for _, item := range list(get(r, "items")) {
		if text(get(item, "label")) == label {
			return paragraphs(text(get(m.raw(protocol.MethodCompletionItemResolve, item), "documentation", "value")))
		}
	}
	return []string{"not offered"}
}

func markSignature(m *marked, line, column int, _ string) []string {
	r := m.ask(protocol.MethodTextDocumentSignatureHelp, line, column, nil)
	if r == nil {
		return []string{"none"}
	}
	return []string{
		text(get(r, "signatures", 0, "label")) + " at parameter " + text(get(r, "activeParameter")),
		text(get(r, "signatures", 0, "documentation", "value")),
	}
}

func (m *marked) places(method string, line, column int, more map[string]any) []string {
	r := m.ask(method, line, column, more)
	if s, ok := r.(string); ok {
		return []string{s}
	}
	var out []string
	for _, l := range list(r) {
		out = append(out, m.where(get(l, "uri"), get(l, "range")))
	}
	return none(out)
}

func markReferences(m *marked, line, column int, _ string) []string {
	return m.places(protocol.MethodTextDocumentReferences, line, column, map[string]any{"context": map[string]any{"includeDeclaration": true}})
}

func markHighlight(m *marked, line, column int, _ string) []string {
	var out []string
	for _, h := range list(m.ask(protocol.MethodTextDocumentDocumentHighlight, line, column, nil)) {
		out = append(out, map[string]string{"2": "read ", "3": "write "}[text(get(h, "kind"))]+m.span(get(h, "range")))
	}
	return none(out)
}

func markSymbols(m *marked, line, column int, _ string) []string {
	var out []string
	var show func(list []any, indent string)
	show = func(items []any, indent string) {
		for _, s := range items {
			out = append(out, fmt.Sprintf("%s%s: %s, kind %s", indent, text(get(s, "name")), text(get(s, "detail")), text(get(s, "kind"))))
			show(list(get(s, "children")), indent+"  ")
		}
	}
	show(list(m.ask(protocol.MethodTextDocumentDocumentSymbol, line, column, nil)), "")
	return none(out)
}

func markWorkspace(m *marked, _, _ int, query string) []string {
	var out []string
	for _, s := range list(m.raw(protocol.MethodWorkspaceSymbol, map[string]any{"query": query})) {
		out = append(out, text(get(s, "name"))+" "+m.where(get(s, "location", "uri"), get(s, "location", "range")))
	}
	return none(out)
}

func (m *marked) raw(method string, params any) any {
	m.t.Helper()
	var result any
	if err := m.try(method, params, &result); err != nil {
		return "refused: " + err.Error()
	}
	return result
}

func markPrepare(m *marked, line, column int, _ string) []string {
	r := m.ask(protocol.MethodTextDocumentPrepareRename, line, column, nil)
	if r == nil {
		return []string{"no name"}
	}
	return []string{m.span(get(r, "range")) + " " + text(get(r, "placeholder"))}
}

func markRename(m *marked, line, column int, name string) []string {
	r := m.ask(protocol.MethodTextDocumentRename, line, column, map[string]any{"newName": name})
	if s, ok := r.(string); ok {
		return []string{s}
	}
	return m.workspaceEdit(r)
}

// workspaceEdit shows the places that an edit changes.
func (m *marked) workspaceEdit(edit any) []string {
	var out []string
	for _, change := range list(get(edit, "documentChanges")) {
		at := get(change, "textDocument", "uri")
		for _, e := range list(get(change, "edits")) {
			out = append(out, m.where(at, get(e, "range"))+" → "+fmt.Sprintf("%q", text(get(e, "newText"))))
		}
	}
	return none(out)
}

func markLinked(m *marked, line, column int, _ string) []string {
	var out []string
	for _, r := range list(get(m.ask(protocol.MethodTextDocumentLinkedEditingRange, line, column, nil), "ranges")) {
		out = append(out, m.span(r))
	}
	return none(out)
}

func markFold(m *marked, line, column int, _ string) []string {
	var out []string
	for _, f := range list(m.ask(protocol.MethodTextDocumentFoldingRange, line, column, nil)) {
		first, _ := get(f, "startLine").(float64)
		last, _ := get(f, "endLine").(float64)
		out = append(out, fmt.Sprintf("%d-%d %s", int(first)+1, int(last)+1, text(get(f, "kind"))))
	}
	return none(out)
}

func markSelect(m *marked, line, column int, _ string) []string {
	r := m.ask(protocol.MethodTextDocumentSelectionRange, line, column,
		map[string]any{"positions": []any{map[string]any{"line": line, "character": column}}})
	var out []string
	for s := get(r, 0); s != nil; s = get(s, "parent") {
		out = append(out, m.span(get(s, "range")))
	}
	return none(out)
}

// markTokens shows the tokens of the line.
func markTokens(m *marked, line, column int, _ string) []string {
	full := m.ask(protocol.MethodTextDocumentSemanticTokensFull, line, column, nil)
	part := m.ask(protocol.MethodTextDocumentSemanticTokensRange, line, column, map[string]any{"range": lineRange(line, len(m.lines[line]))})
	a, b := m.tokenLines(full, line), m.tokenLines(part, line)
	if !slices.Equal(a, b) {
		return append([]string{"full and range differ:"}, append(a, b...)...)
	}
	return none(a)
}

func lineRange(line, length int) any {
	return map[string]any{"start": map[string]any{"line": line, "character": 0}, "end": map[string]any{"line": line, "character": length}}
}

func (m *marked) tokenLines(r any, line int) []string {
	legend := tokenLegend()
	var out []string
	l, c := 0, 0
	data := list(get(r, "data"))
	number := func(i int) int { n, _ := data[i].(float64); return int(n) }
	for i := 0; i+4 < len(data); i += 5 {
		if number(i) > 0 {
			l, c = l+number(i), 0
		}
		c += number(i + 1)
		if l != line {
			continue
		}
		words := legend.TokenTypes[number(i+3)]
		for bit, name := range legend.TokenModifiers {
			if number(i+4)&(1<<bit) != 0 {
				words += " " + name
			}
		}
		out = append(out, fmt.Sprintf("%q %s", m.piece(l, c, c+number(i+2)), words))
	}
	return out
}

func markInlay(m *marked, line, column int, _ string) []string {
	var out []string
	for _, h := range list(m.ask(protocol.MethodTextDocumentInlayHint, line, column, map[string]any{"range": lineRange(line, len(m.lines[line]))})) {
		c, _ := get(h, "position", "character").(float64)
		out = append(out, fmt.Sprintf("%d: %s", int(c)+1, text(get(h, "label"))))
		if get(h, "data") != nil {
			tooltip := text(get(m.raw(protocol.MethodInlayHintResolve, h), "tooltip", "value"))
			for _, l := range paragraphs(tooltip) {
				out = append(out, "   "+l)
			}
		}
	}
	return none(out)
}

func markLens(m *marked, line, column int, _ string) []string {
	var out []string
	for _, l := range list(m.ask(protocol.MethodTextDocumentCodeLens, line, column, nil)) {
		if n, _ := get(l, "range", "start", "line").(float64); int(n) == line {
			out = append(out, text(get(m.raw(protocol.MethodCodeLensResolve, l), "command", "title")))
		}
	}
	return none(out)
}

func (m *marked) actions(line, column int) []any {
	p := map[string]any{"line": line, "character": column}
	return list(m.ask(protocol.MethodTextDocumentCodeAction, line, column, map[string]any{
		"range": map[string]any{"start": p, "end": p}, "context": map[string]any{"diagnostics": []any{}}}))
}

func markActions(m *marked, line, column int, _ string) []string {
	var out []string
	for _, a := range m.actions(line, column) {
		preferred := ""
		if get(a, "isPreferred") == true {
			preferred = " (preferred)"
		}
		out = append(out, fmt.Sprintf("%s: %s%s", text(get(a, "kind")), text(get(a, "title")), preferred))
	}
	return none(out)
}

// markFix makes the action that the rest of the line names.
func markFix(m *marked, line, column int, title string) []string {
	for _, a := range m.actions(line, column) {
		if !strings.HasPrefix(text(get(a, "title")), title) {
			continue
		}
		if get(a, "edit") == nil {
			a = m.raw(protocol.MethodCodeActionResolve, a)
		}
		var edits []any
		for _, change := range list(get(a, "edit", "documentChanges")) {
			edits = append(edits, list(get(change, "edits"))...)
		}
		return m.newText(edits)
	}
	return []string{"not offered"}
}

func markTidyLine(m *marked, line, column int, _ string) []string {
	one := m.ask(protocol.MethodTextDocumentRangeFormatting, line, column,
		map[string]any{"range": lineRange(line, len(m.lines[line])), "options": options["options"]})
	several := m.ask(protocol.MethodTextDocumentRangesFormatting, line, column,
		map[string]any{"ranges": []any{lineRange(line, len(m.lines[line]))}, "options": options["options"]})
	a, b := m.newText(list(one)), m.newText(list(several))
	if !slices.Equal(a, b) {
		return append(a, b...)
	}
	return a
}

// markTidyType types a line feed at the line's end.
func markTidyType(m *marked, line, _ int, _ string) []string {
	return m.newText(list(m.ask(protocol.MethodTextDocumentOnTypeFormatting, line+1, 0, map[string]any{"ch": "\n", "options": options["options"]})))
}

func markLinks(m *marked, line, column int, _ string) []string {
	var out []string
	for _, l := range list(m.ask(protocol.MethodTextDocumentDocumentLink, line, column, nil)) {
		out = append(out, m.span(get(l, "range"))+" "+base(uri.URI(text(get(l, "target"))).FsPath()))
	}
	return none(out)
}

// markUses shows the call hierarchy around a subnetwork.
func markUses(m *marked, line, column int, _ string) []string {
	var out []string
	for _, item := range list(m.ask(protocol.MethodTextDocumentPrepareCallHierarchy, line, column, nil)) {
		out = append(out, text(get(item, "name")))
		for _, c := range list(m.raw(protocol.MethodCallHierarchyIncomingCalls, map[string]any{"item": item})) {
			out = append(out, fmt.Sprintf("  used in %s, %d times", text(get(c, "from", "name")), len(list(get(c, "fromRanges")))))
		}
		for _, c := range list(m.raw(protocol.MethodCallHierarchyOutgoingCalls, map[string]any{"item": item})) {
			out = append(out, fmt.Sprintf("  uses %s, %d times", text(get(c, "to", "name")), len(list(get(c, "fromRanges")))))
		}
	}
	return none(out)
}
