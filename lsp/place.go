package lsp

import (
	"fmt"
	"unicode"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/analyze"
	"portlight/dialect"
)

// place is where a request points: an offset in a checked document.
type place struct {
	unit     *unit
	file     *dialect.File
	checked  *dialect.Checked
	analysis *analyze.Analysis
	offset   int
}

// place finds where a request points.
func (r *request) place(p protocol.TextDocumentPositionParams) (*place, error) {
	at, err := r.whole(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	at.offset = r.mapper.offset(at.file.Lines, p.Position)
	return at, nil
}

// whole is a document without an offset in it.
func (r *request) whole(u uri.URI) (*place, error) {
	unit, err := r.document(u)
	if err != nil {
		return nil, err
	}
	file, err := unit.file()
	if err != nil {
		return nil, err
	}
	checked, analysis := unit.check()
	if checked == nil {
		return nil, jsonrpc2.Errorf(requestFailed, "%s", fmt.Sprint(unit.problem))
	}
	return &place{unit: unit, file: file, checked: checked, analysis: analysis}, nil
}

// symbol is the symbol whose name stands at the place.
func (p *place) symbol() (*dialect.Symbol, dialect.Span, bool) {
	return p.checked.SymbolAt(p.file, p.offset)
}

// statement is the innermost statement around an offset of a file, a
// subnetwork's own statements included, with those around it, outermost
// first.
func statementsAt(file *dialect.File, offset int) []dialect.Statement {
	var around []dialect.Statement
	list := file.Statements
	for {
		i := find(list, offset)
		if i < 0 {
			return around
		}
		around = append(around, list[i])
		sub, ok := list[i].(*dialect.SubnetworkStatement)
		if !ok || offset < sub.BodyStart || offset > sub.BodyStop {
			return around
		}
		list = sub.Statements
	}
}

// find is the index of the statement around an offset, -1 between statements.
func find(list []dialect.Statement, offset int) int {
	low, high := 0, len(list)
	for low < high {
		mid := (low + high) / 2
		if list[mid].Extent().End < offset {
			low = mid + 1
		} else {
			high = mid
		}
	}
	if low < len(list) && list[low].Extent().Start <= offset {
		return low
	}
	return -1
}

// overlapping gives the statements of a list that touch a span.
func overlapping(list []dialect.Statement, span dialect.Span) []dialect.Statement {
	low, high := 0, len(list)
	for low < high {
		mid := (low + high) / 2
		if list[mid].Extent().End < span.Start {
			low = mid + 1
		} else {
			high = mid
		}
	}
	last := low
	for last < len(list) && list[last].Extent().Start <= span.End {
		last++
	}
	return list[low:last]
}

// eachStatement calls visit for every statement of a list and of the bodies
// in it, in order of the text.
func eachStatement(list []dialect.Statement, visit func(dialect.Statement)) {
	for _, st := range list {
		visit(st)
		if sub, ok := st.(*dialect.SubnetworkStatement); ok {
			eachStatement(sub.Statements, visit)
		}
	}
}

// wordRune says that a character can be part of a name.
func wordRune(r rune) bool { return r == '_' || unicode.IsLetter(r) || unicode.IsDigit(r) }
