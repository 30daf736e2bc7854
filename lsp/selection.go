package lsp

import (
	"context"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// selectionRanges handles textDocument/selectionRange: from the smallest
// thing at each place outwards: word, box, path, statement, body, file.
func selectionRanges(_ context.Context, r *request, p *protocol.SelectionRangeParams) ([]protocol.SelectionRange, error) {
	unit, err := r.document(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	file, err := unit.file()
	if err != nil {
		return nil, err
	}
	list := make([]protocol.SelectionRange, 0, len(p.Positions))
	for _, position := range p.Positions {
		list = append(list, *r.selection(file, r.mapper.offset(file.Lines, position)))
	}
	return list, nil
}

// selection is the smallest range around an offset, linked to larger ones.
func (r *request) selection(file *dialect.File, offset int) *protocol.SelectionRange {
	spans := []dialect.Span{file.Extent()}
	for _, tree := range dialect.PathTo(file, offset) {
		if sub, ok := tree.(*dialect.SubnetworkStatement); ok {
			spans = append(spans, sub.Extent(), dialect.Span{Start: sub.BodyStart, End: sub.BodyStop})
			continue
		}
		spans = append(spans, tree.Extent())
	}
	var outer *protocol.SelectionRange
	last := dialect.Span{Start: -1}
	for _, span := range spans {
		if span == last || !span.Contains(offset) || last.Start >= 0 && (span.Start < last.Start || span.End > last.End) {
			continue
		}
		outer = &protocol.SelectionRange{Range: r.mapper.reach(file.Lines, span), Parent: outer}
		last = span
	}
	return outer
}
