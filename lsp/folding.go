package lsp

import (
	"context"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// foldingRanges handles textDocument/foldingRange: subnetworks, statements
// over several lines, blocks of comments, and runs of use statements.
func foldingRanges(_ context.Context, r *request, p *protocol.FoldingRangeParams) ([]protocol.FoldingRange, error) {
	u, err := r.document(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	file, err := u.file()
	if err != nil {
		return nil, err
	}
	f := folder{lines: file.Lines, list: []protocol.FoldingRange{}, collapsed: r.client.collapsedText}
	f.comments(file.Comments)
	f.uses(file.Statements)
	eachStatement(file.Statements, f.statement)
	return f.list, nil
}

// folder gathers ranges of whole lines.
type folder struct {
	lines     *dialect.Lines
	list      []protocol.FoldingRange
	collapsed bool
}

func (f *folder) add(first, last int, kind protocol.FoldingRangeKind, instead string) {
	if last <= first {
		return
	}
	r := protocol.FoldingRange{StartLine: uint32(first), EndLine: uint32(last), Kind: kind}
	if f.collapsed && instead != "" {
		r.CollapsedText = ptr(instead)
	}
	f.list = append(f.list, r)
}

func (f *folder) comments(list []*dialect.Comment) {
	for i := 0; i < len(list); {
		first := f.lines.Line(list[i].Span.Start)
		last := first
		j := i + 1
		if list[i].Own {
			for j < len(list) && list[j].Own && f.lines.Line(list[j].Span.Start) == last+1 {
				last, j = last+1, j+1
			}
		}
		f.add(first, last, protocol.FoldingRangeKindComment, "")
		i = j
	}
}

func (f *folder) uses(list []dialect.Statement) {
	for i := 0; i < len(list); i++ {
		if _, ok := list[i].(*dialect.UseFileStatement); !ok {
			continue
		}
		first := i
		for i+1 < len(list) {
			if _, ok := list[i+1].(*dialect.UseFileStatement); !ok {
				break
			}
			i++
		}
		f.add(f.lines.Line(list[first].Extent().Start), f.lines.Line(list[i].Extent().End), protocol.FoldingRangeKindImports, "")
	}
}

// statement folds a statement of several lines. The line of a subnetwork's
// closing brace stays visible.
func (f *folder) statement(st dialect.Statement) {
	span := st.Extent()
	first, last := f.lines.Line(span.Start), f.lines.Line(span.End)
	if sub, ok := st.(*dialect.SubnetworkStatement); ok {
		if sub.BraceClose.End > sub.BraceClose.Start {
			last--
		}
		f.add(first, last, protocol.FoldingRangeKindRegion, "subnetwork "+sub.Name.Text+" …")
		return
	}
	f.add(first, last, protocol.FoldingRangeKindRegion, "")
}
