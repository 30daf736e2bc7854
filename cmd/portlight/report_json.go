package main

import (
	"encoding/json"
	"io"

	"portlight/analyze"
	"portlight/dialect"
)

type findingView struct {
	File      string        `json:"file"`
	Line      int           `json:"line"`
	Column    int           `json:"column"`
	EndLine   int           `json:"end_line"`
	EndColumn int           `json:"end_column"`
	Severity  string        `json:"severity"`
	Code      string        `json:"code"`
	Message   string        `json:"message"`
	Related   []relatedView `json:"related"`
}

type relatedView struct {
	File      string `json:"file"`
	Line      int    `json:"line"`
	Column    int    `json:"column"`
	EndLine   int    `json:"end_line"`
	EndColumn int    `json:"end_column"`
	Message   string `json:"message"`
}

// reportJSON writes one object with all findings and verdicts.
func reportJSON(to io.Writer, src *sources, all []checked) error {
	view := struct {
		Findings []findingView `json:"findings"`
		Verdicts []any         `json:"verdicts"`
	}{[]findingView{}, []any{}}
	for _, c := range all {
		for _, f := range c.findings {
			view.Findings = append(view.Findings, viewFinding(src, f))
		}
		for _, v := range c.verdicts {
			p := src.place(dialect.Origin{})
			if v.Limit != nil {
				p = src.place(v.Limit.Origin)
			}
			view.Verdicts = append(view.Verdicts, analyze.VerdictJSON(v, p.file, p.line))
		}
	}
	encoder := json.NewEncoder(to)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", " ")
	return encoder.Encode(view)
}

func viewFinding(src *sources, f dialect.Finding) findingView {
	p := src.place(f.Origin)
	v := findingView{
		p.file, p.line, p.column, p.endLine, p.endColumn,
		f.Severity.String(), string(f.Code), f.Message, []relatedView{},
	}
	for _, use := range f.Origin.Use {
		q := src.place(use)
		v.Related = append(v.Related, relatedView{q.file, q.line, q.column, q.endLine, q.endColumn, "used here"})
	}
	for _, r := range f.Related {
		q := src.place(r.Origin)
		v.Related = append(v.Related, relatedView{q.file, q.line, q.column, q.endLine, q.endColumn, r.Message})
	}
	return v
}
