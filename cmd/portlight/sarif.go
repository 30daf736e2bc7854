package main

import (
	"encoding/json"
	"io"
	"net/url"
	"path/filepath"

	"github.com/owenrumney/go-sarif/v3/pkg/report/v210/sarif"

	"portlight/dialect"
)

// reportSARIF writes the findings in the Static Analysis Results Interchange
// Format, version 2.1.0 (OASIS standard, 2020). Files are relative to the
// working folder where they lie in it.
func reportSARIF(to io.Writer, src *sources, all []checked) error {
	run := sarif.NewRun()
	run.Tool = sarif.NewTool().WithDriver(sarif.NewToolComponent().WithName("portlight").WithVersion(version()))
	run.WithColumnKind("unicodeCodePoints").WithResults([]*sarif.Result{})
	known := map[dialect.Code]bool{}
	for _, c := range all {
		for _, f := range c.findings {
			if !known[f.Code] {
				known[f.Code] = true
				run.Tool.Driver.AddRule(sarifRule(f.Code))
			}
			run.AddResult(sarifResult(src, f, run))
		}
	}
	document := sarif.NewReport().AddRun(run)
	encoder := json.NewEncoder(to)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", " ")
	return encoder.Encode(document)
}

// sarifRule describes a code as the program explains it.
func sarifRule(code dialect.Code) *sarif.ReportingDescriptor {
	rule := sarif.NewReportingDescriptor().WithID(string(code))
	if page, ok := explanation(code); ok {
		rule.WithShortDescription(sarif.NewMultiformatMessageString().WithText(page.title))
		rule.WithHelp(sarif.NewMultiformatMessageString().WithText(page.text))
	}
	return rule
}

// sarifLevels are the format's words for our severities.
var sarifLevels = map[dialect.Severity]string{
	dialect.Error: "error", dialect.Warning: "warning", dialect.Information: "note", dialect.Hint: "note",
}

func sarifResult(src *sources, f dialect.Finding, run *sarif.Run) *sarif.Result {
	r := sarif.NewResult().
		WithRuleID(string(f.Code)).
		WithRuleIndex(run.GetRuleIndex(string(f.Code))).
		WithLevel(sarifLevels[f.Severity]).
		WithKind("fail").
		WithMessage(sarif.NewTextMessage(f.Message)).
		WithLocations([]*sarif.Location{sarifLocation(src, f.Origin, "")})
	for _, use := range f.Origin.Use {
		r.AddRelatedLocation(sarifLocation(src, use, "used here"))
	}
	for _, related := range f.Related {
		r.AddRelatedLocation(sarifLocation(src, related.Origin, related.Message))
	}
	for _, repair := range f.Repairs {
		r.AddFixe(sarifFix(src, repair))
	}
	return r
}

func sarifLocation(src *sources, o dialect.Origin, message string) *sarif.Location {
	l := sarif.NewLocation().WithPhysicalLocation(
		sarif.NewPhysicalLocation().WithArtifactLocation(sarifFile(src, o.File)).WithRegion(sarifRegion(src, o)))
	if message != "" {
		l.WithMessage(sarif.NewTextMessage(message))
	}
	return l
}

func sarifRegion(src *sources, o dialect.Origin) *sarif.Region {
	p := src.place(o)
	return sarif.NewRegion().WithStartLine(p.line).WithStartColumn(p.column).WithEndLine(p.endLine).WithEndColumn(p.endColumn)
}

// sarifFile is a file as a URI, escaped as URIs are.
func sarifFile(src *sources, f *dialect.File) *sarif.ArtifactLocation {
	if f == nil {
		return sarif.NewArtifactLocation().WithURI(stdinName)
	}
	name := src.shown(f.Name)
	u := url.URL{Path: filepath.ToSlash(name)}
	if filepath.IsAbs(name) {
		u.Scheme = "file"
	}
	return sarif.NewArtifactLocation().WithURI(u.String())
}

// sarifFix is a repair; edits of one file belong together.
func sarifFix(src *sources, repair dialect.Repair) *sarif.Fix {
	fix := sarif.NewFix().WithDescription(sarif.NewTextMessage(repair.Title))
	byFile := map[*dialect.File]*sarif.ArtifactChange{}
	for _, e := range repair.Edits {
		change := byFile[e.File]
		if change == nil {
			change = sarif.NewArtifactChange().WithArtifactLocation(sarifFile(src, e.File))
			byFile[e.File] = change
			fix.AddArtifactChange(change)
		}
		change.AddReplacement(sarif.NewReplacement().
			WithDeletedRegion(sarifRegion(src, dialect.Origin{File: e.File, Span: e.Span})).
			WithInsertedContent(sarif.NewArtifactContent().WithText(e.Text)))
	}
	return fix
}
