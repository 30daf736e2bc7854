package lsp

import (
	"context"
	"encoding/json"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/analyze"
	"portlight/dialect"
)

// lensData finds a lens's statement again.
type lensData struct {
	URI     uri.URI `json:"uri"`
	Version int32   `json:"version"`
	Offset  int     `json:"offset"` // of the statement
}

// codeLens handles textDocument/codeLens: a line above each port, function
// and limit. What it says is worked out when the line comes into sight.
func codeLens(_ context.Context, r *request, p *protocol.CodeLensParams) ([]protocol.CodeLens, error) {
	list := []protocol.CodeLens{}
	if !r.settings.lens {
		return list, nil
	}
	unit, err := r.document(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	file, err := unit.file()
	if err != nil {
		return nil, err
	}
	for _, st := range file.Statements {
		switch st.(type) {
		case *dialect.PortStatement, *dialect.FunctionStatement, *dialect.RequireStatement:
		default:
			continue
		}
		if st.Headline().Broken {
			continue
		}
		lens := protocol.CodeLens{Range: r.mapper.reach(file.Lines, st.Extent())}
		lens.Data, _ = json.Marshal(lensData{URI: unit.uri, Version: unit.version, Offset: st.Extent().Start})
		list = append(list, lens)
	}
	return list, nil
}

// resolveLens handles codeLens/resolve.
func resolveLens(ctx context.Context, r *request, lens *protocol.CodeLens) (*protocol.CodeLens, error) {
	lens.Command = protocol.Command{Title: "…"}
	var data lensData
	if json.Unmarshal(lens.Data, &data) != nil {
		return lens, nil
	}
	at, err := r.whole(data.URI)
	if err != nil || at.unit.version != data.Version {
		return lens, nil // of an older version: it will be asked for anew
	}
	ctx, done := at.unit.with(ctx)
	defer done()
	title, question, err := r.lensTitle(ctx, at, data.Offset)
	if err != nil {
		return nil, err
	}
	lens.Command.Title = title
	if question != "" {
		lens.Command.Command = commandShow
		at, _ := json.Marshal(data.URI)
		asked, _ := json.Marshal(question)
		lens.Command.Arguments = []protocol.LSPAny{at, asked}
	}
	return lens, nil
}

// lensTitle is what the line above a statement says, and the question whose
// answer it opens.
func (r *request) lensTitle(ctx context.Context, at *place, offset int) (title, question string, err error) {
	i := find(at.file.Statements, offset)
	if i < 0 {
		return "…", "", nil
	}
	if at.checked.Description.Faults {
		return "no answer while the network has errors", "", nil
	}
	switch st := at.file.Statements[i].(type) {
	case *dialect.PortStatement:
		return r.cardLine(ctx, at, st.Name, "thevenin["+st.Name.Text+"]")
	case *dialect.FunctionStatement:
		return r.cardLine(ctx, at, st.Name, st.Name.Text)
	case *dialect.RequireStatement:
		verdicts, err := at.analysis.Verdicts(ctx)
		if err != nil {
			return "", "", err
		}
		for _, v := range verdicts {
			if v.Limit != nil && v.Limit.Origin.File == at.file && v.Limit.Origin.Span == st.Span {
				return verdictMark(v) + " " + analyze.VerdictShort(v), "", nil
			}
		}
	}
	return "…", "", nil
}

// cardLine is the first line of what a name's card answers.
func (r *request) cardLine(ctx context.Context, at *place, name dialect.Word, question string) (string, string, error) {
	card, _, ok, err := at.analysis.Card(ctx, at.file, name.Span.Start)
	if err != nil {
		return "", "", err
	}
	if !ok || len(card.Answer) == 0 {
		return "…", "", nil
	}
	return shorten(card.Answer[0], 100), question, nil
}
