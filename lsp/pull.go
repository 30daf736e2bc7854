package lsp

import (
	"context"
	"fmt"
	"hash/fnv"
	"slices"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
)

// tryAgain refuses a request for diagnostics whose document has changed, in
// the way that makes the client ask again and keep what it shows.
var tryAgain = &jsonrpc2.Error{
	Code: jsonrpc2.Code(protocol.LSPErrorCodesServerCancelled), Message: "the document changed",
	Data: jsonrpc2.RawMessage(`{"retriggerRequest":true}`),
}

// pullDiagnostics handles textDocument/diagnostic: what would be published
// for the document, and for the files it uses.
func pullDiagnostics(ctx context.Context, r *request, p *protocol.DocumentDiagnosticParams) (protocol.DocumentDiagnosticReport, error) {
	unit, err := r.document(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	bound, done := unit.with(ctx)
	defer done()
	all, err := r.allFindings(bound, unit)
	if err != nil {
		if ctx.Err() != nil {
			return nil, err
		}
		return nil, tryAgain
	}
	items := r.diagnostics(gatherAll(all, unit.name))
	id := resultID(unit.version, items)
	related := r.relatedReports(unit, all)
	if p.PreviousResultID != nil && *p.PreviousResultID == id {
		report := &protocol.RelatedUnchangedDocumentDiagnosticReport{RelatedDocuments: related}
		report.Kind, report.ResultID = "unchanged", id
		return report, nil
	}
	report := &protocol.RelatedFullDocumentDiagnosticReport{RelatedDocuments: related}
	report.Kind, report.ResultID, report.Items = "full", ptr(id), items
	return report, nil
}

// allFindings are the findings of a unit and of every open document that uses
// its file.
func (r *request) allFindings(ctx context.Context, unit *unit) ([][]dialect.Finding, error) {
	found, err := unit.findings(ctx)
	if err != nil {
		return nil, err
	}
	all := [][]dialect.Finding{found}
	for _, u := range r.open() {
		if u == unit {
			continue
		}
		if u.check(); !u.uses(unit.name) {
			continue
		}
		found, err := u.findings(ctx)
		if err != nil {
			return nil, err
		}
		all = append(all, found)
	}
	return all, nil
}

func gatherAll(all [][]dialect.Finding, name string) (list []dialect.Finding) {
	for _, found := range all {
		list = gather(list, found, name)
	}
	return list
}

// relatedReports reports on the files that the document uses and that are not
// open, for a client that takes them.
func (r *request) relatedReports(unit *unit, all [][]dialect.Finding) map[uri.URI]protocol.FullDocumentDiagnosticReportOrUnchangedDocumentDiagnosticReport {
	if !r.client.relatedDocuments || unit.checked == nil || len(unit.checked.Files) < 2 {
		return nil
	}
	related := map[uri.URI]protocol.FullDocumentDiagnosticReportOrUnchangedDocumentDiagnosticReport{}
	for _, file := range unit.checked.Files[1:] {
		if r.units[file.Name] != nil {
			continue
		}
		items := r.diagnostics(gatherAll(all, file.Name))
		related[r.uriOf(file.Name)] = &protocol.FullDocumentDiagnosticReport{
			Kind: "full", ResultID: ptr(resultID(0, items)), Items: items,
		}
	}
	return related
}

// resultID names a list of diagnostics by what it says.
func resultID(version int32, items []protocol.Diagnostic) string {
	h := fnv.New64a()
	for _, d := range items {
		raw, _ := protocol.Marshal(d)
		_, _ = h.Write(raw)
	}
	return fmt.Sprintf("%d/%x", version, h.Sum64())
}

// workspaceDiagnostics handles workspace/diagnostic: the findings of every
// network file of the workspace as a main file, gathered file by file. It is
// what check says of the same folders.
func workspaceDiagnostics(ctx context.Context, r *request, p *protocol.WorkspaceDiagnosticParams) (*protocol.WorkspaceDiagnosticReport, error) {
	byFile := map[string][]dialect.Finding{}
	names := r.workspaceFiles()
	for _, name := range names {
		u := r.unit(name)
		bound, done := u.with(ctx)
		found, err := u.findings(bound)
		done()
		if err != nil {
			if ctx.Err() != nil {
				return nil, err
			}
			return nil, tryAgain
		}
		for _, f := range found {
			if f.Origin.File != nil {
				name := f.Origin.File.Name
				byFile[name] = gather(byFile[name], []dialect.Finding{f}, name)
			}
		}
	}
	for name := range byFile {
		names = append(names, name)
	}
	slices.Sort(names)
	return r.workspaceReport(p, slices.Compact(names), byFile), nil
}

func (r *request) workspaceReport(p *protocol.WorkspaceDiagnosticParams, names []string, byFile map[string][]dialect.Finding) *protocol.WorkspaceDiagnosticReport {
	before := map[uri.URI]string{}
	for _, id := range p.PreviousResultIds {
		before[id.URI] = id.Value
	}
	report := &protocol.WorkspaceDiagnosticReport{Items: []protocol.WorkspaceDocumentDiagnosticReport{}}
	for _, name := range names {
		at, version := r.uriOf(name), int32(0)
		var said *int32
		if u := r.units[name]; u != nil {
			version, said = u.version, ptr(u.version)
		}
		items := r.diagnostics(byFile[name])
		id := resultID(version, items)
		var item protocol.WorkspaceDocumentDiagnosticReport
		if before[at] == id {
			unchanged := &protocol.WorkspaceUnchangedDocumentDiagnosticReport{URI: at, Version: said}
			unchanged.Kind, unchanged.ResultID = "unchanged", id
			item = unchanged
		} else {
			full := &protocol.WorkspaceFullDocumentDiagnosticReport{URI: at, Version: said}
			full.Kind, full.ResultID, full.Items = "full", ptr(id), items
			item = full
		}
		if p.PartialResultToken != nil {
			part := &protocol.WorkspaceDiagnosticReportPartialResult{Items: []protocol.WorkspaceDocumentDiagnosticReport{item}}
			r.sayProgress(p.PartialResultToken, part)
			continue
		}
		report.Items = append(report.Items, item)
	}
	return report
}
