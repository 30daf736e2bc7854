package lsp

import (
	"context"

	"go.lsp.dev/protocol"
)

// documentLinks handles textDocument/documentLink: the files that use
// statements name, where they are there.
func documentLinks(_ context.Context, r *request, p *protocol.DocumentLinkParams) ([]protocol.DocumentLink, error) {
	at, err := r.whole(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	list := []protocol.DocumentLink{}
	for _, link := range at.checked.Links(at.file) {
		if link.File == nil {
			continue
		}
		span := link.Span
		if span.End-span.Start >= 2 { // without the quotes
			span.Start, span.End = span.Start+1, span.End-1
		}
		list = append(list, protocol.DocumentLink{
			Range: r.mapper.reach(at.file.Lines, span), Target: ptr(r.uriOf(link.File.Name)),
			Tooltip: ptr("Open " + base(link.File.Name)),
		})
	}
	return list, nil
}
