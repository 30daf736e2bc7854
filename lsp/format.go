package lsp

import (
	"context"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/dialect"
)

// formatting handles textDocument/formatting. There is one canonical form, so
// the client's wishes about tabs are not asked.
func formatting(_ context.Context, r *request, p *protocol.DocumentFormattingParams) ([]protocol.TextEdit, error) {
	return r.tidy(p.TextDocument.URI, func(file *dialect.File) []dialect.Span {
		return []dialect.Span{{Start: 0, End: len(file.Text)}}
	})
}

// rangeFormatting handles textDocument/rangeFormatting.
func rangeFormatting(_ context.Context, r *request, p *protocol.DocumentRangeFormattingParams) ([]protocol.TextEdit, error) {
	return r.tidy(p.TextDocument.URI, func(file *dialect.File) []dialect.Span {
		return []dialect.Span{r.mapper.span(file.Lines, p.Range)}
	})
}

// rangesFormatting handles textDocument/rangesFormatting.
func rangesFormatting(_ context.Context, r *request, p *protocol.DocumentRangesFormattingParams) ([]protocol.TextEdit, error) {
	return r.tidy(p.TextDocument.URI, func(file *dialect.File) []dialect.Span {
		var spans []dialect.Span
		for _, one := range p.Ranges {
			spans = append(spans, r.mapper.span(file.Lines, one))
		}
		return spans
	})
}

// onTypeFormatting handles textDocument/onTypeFormatting: a line feed tidies
// the line it ends, a closing brace the body it closes. The line that the
// pointer is in stays as it is being typed.
func onTypeFormatting(_ context.Context, r *request, p *protocol.DocumentOnTypeFormattingParams) ([]protocol.TextEdit, error) {
	return r.tidy(p.TextDocument.URI, func(file *dialect.File) []dialect.Span {
		offset := r.mapper.offset(file.Lines, p.Position)
		line := file.Lines.Line(offset)
		switch p.Ch {
		case "\n":
			if line > 0 {
				return []dialect.Span{file.Lines.Span(line - 1)}
			}
		case "}":
			if around := statementsAt(file, offset); len(around) > 0 {
				return []dialect.Span{around[0].Extent()}
			}
		}
		return nil
	})
}

// tidy gives the edits that bring parts of a document into canonical form.
func (r *request) tidy(at uri.URI, which func(*dialect.File) []dialect.Span) ([]protocol.TextEdit, error) {
	unit, err := r.document(at)
	if err != nil {
		return nil, err
	}
	file, err := unit.file()
	if err != nil {
		return nil, err
	}
	changes := edits{}
	for _, span := range which(file) {
		for _, e := range dialect.TidyEdits(file, span) {
			changes.add(e.File, e.Span, e.Text)
		}
	}
	return r.textEdits(file, changes[file]), nil
}
