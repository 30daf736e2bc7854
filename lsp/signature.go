package lsp

import (
	"context"
	"fmt"
	"slices"
	"strings"
	"unicode/utf16"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// signatureHelp handles textDocument/signatureHelp for functions and
// measures.
func signatureHelp(_ context.Context, r *request, p *protocol.SignatureHelpParams) (*protocol.SignatureHelp, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	name, argument, ok := callAround(at.file, at.offset)
	if !ok {
		return nil, nil
	}
	list := dialect.Signatures()
	i := slices.IndexFunc(list, func(s dialect.Signature) bool { return s.Name == name })
	if i < 0 {
		return nil, nil
	}
	return r.signature(list[i], argument), nil
}

func (r *request) signature(s dialect.Signature, argument int) *protocol.SignatureHelp {
	info := protocol.SignatureInformation{Label: signatureLabel(s)}
	m := &markup{markdown: r.client.markdownSignature}
	m.prose(s.Definition)
	info.Documentation = m.content()
	start := len(s.Name) + 1
	for _, name := range parameterLabels(s) {
		one := protocol.ParameterInformation{Label: protocol.String(name)}
		if r.client.labelOffsets {
			from := uint32(len(utf16.Encode([]rune(info.Label[:start]))))
			one.Label = protocol.ParameterInformationLabelTuple{from, from + uint32(len(utf16.Encode([]rune(name))))}
		}
		info.Parameters = append(info.Parameters, one)
		start += len(name) + len(", ")
	}
	if s.Many {
		argument = min(argument, len(s.Parameters)-1)
	}
	help := &protocol.SignatureHelp{}
	_ = protocol.Unmarshal([]byte(fmt.Sprintf(`{"signatures":[],"activeParameter":%d}`, argument)), help)
	help.Signatures, help.ActiveSignature = []protocol.SignatureInformation{info}, ptr(uint32(0))
	return help
}

// parameterLabels are the parameters as the label shows them.
func parameterLabels(s dialect.Signature) []string {
	labels := slices.Clone(s.Parameters)
	for i := range labels {
		if i >= len(labels)-s.Optional {
			labels[i] = "[" + labels[i] + "]"
		}
	}
	if s.Many && len(labels) > 0 {
		labels[len(labels)-1] += " …"
	}
	return labels
}

func signatureLabel(s dialect.Signature) string {
	return s.Name + "(" + strings.Join(parameterLabels(s), ", ") + ")"
}

// callAround finds the innermost open call before an offset on its line: the
// name before the bracket, and how many commas of its own follow it. The text
// decides, not the tree: a call is incomplete while it is typed.
func callAround(file *dialect.File, offset int) (name string, argument int, ok bool) {
	start := 0
	if around := statementsAt(file, offset); len(around) > 0 {
		start = around[len(around)-1].Extent().Start
	} else {
		start = file.Lines.Span(file.Lines.Line(offset)).Start
	}
	text := file.Text[start:offset]
	depth, square := 0, 0
	for i := len(text) - 1; i >= 0; i-- {
		switch text[i] {
		case ')':
			depth++
		case ']':
			square++
		case '[':
			square = max(square-1, 0)
		case ',':
			if depth == 0 && square == 0 {
				argument++
			}
		case '(':
			if depth > 0 {
				depth--
				continue
			}
			head := text[:i]
			word := head[strings.LastIndexFunc(head, func(r rune) bool { return !wordRune(r) })+1:]
			if word != "" {
				return word, argument, true
			}
			argument = 0 // a bracket around an operand
		}
	}
	return "", 0, false
}
