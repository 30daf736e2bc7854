package lsp

import (
	"context"
	"encoding/json"
	"strings"
	"unicode/utf8"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/analyze"
	"portlight/dialect"
)

// maxInlay is how long inlay text may be; the rest is in its tooltip.
const maxInlay = 72

// inlayHints handles textDocument/inlayHint: the answer behind each tell line,
// the verdict behind each require line, the value behind a let that is worked
// out, and the reference direction behind a part that is asked about.
func inlayHints(ctx context.Context, r *request, p *protocol.InlayHintParams) ([]protocol.InlayHint, error) {
	at, err := r.whole(p.TextDocument.URI)
	if err != nil {
		return nil, err
	}
	ctx, done := at.unit.with(ctx)
	defer done()
	h := inlays{request: r, place: at, span: r.mapper.span(at.file.Lines, p.Range), list: []protocol.InlayHint{}}
	if r.settings.directions {
		h.directions()
	}
	if r.settings.constants {
		if err := h.constants(ctx); err != nil {
			return nil, err
		}
	}
	if r.settings.answers {
		if err := h.answers(ctx); err != nil {
			return nil, err
		}
	}
	if r.settings.verdicts {
		if err := h.verdicts(ctx); err != nil {
			return nil, err
		}
	}
	return h.list, nil
}

// inlays gathers inlay text for a span of a document.
type inlays struct {
	*request
	*place
	span dialect.Span
	list []protocol.InlayHint
}

// inlayData finds an answer again, for its tooltip.
type inlayData struct {
	URI      uri.URI `json:"uri"`
	Version  int32   `json:"version"`
	Question string  `json:"question"`
}

// add puts text behind an offset.
func (h *inlays) add(offset int, text string, kind protocol.InlayHintKind, question string) {
	hint := protocol.InlayHint{
		Position: h.mapper.position(h.file.Lines, offset), Label: protocol.String(shorten(text, maxInlay)),
		Kind: kind, PaddingLeft: ptr(true),
	}
	if question != "" {
		hint.Data, _ = json.Marshal(inlayData{URI: h.unit.uri, Version: h.unit.version, Question: question})
	}
	h.list = append(h.list, hint)
}

// covers says that a statement of this document touches the span asked about.
func (h *inlays) covers(o dialect.Origin) bool {
	return o.File == h.file && len(o.Use) == 0 && o.Span.End >= h.span.Start && o.Span.Start <= h.span.End
}

func (h *inlays) answers(ctx context.Context) error {
	questions := h.checked.Description.Questions
	for i := range questions {
		q := &questions[i]
		if !h.covers(q.Origin) {
			continue
		}
		answer, err := h.analysis.Answer(ctx, q)
		if err != nil {
			return err
		}
		if _, refused := answer.(*analyze.RefusedAnswer); refused && (h.checked.Description.Faults || h.checked.FaultyAt(q.Origin)) {
			continue // the mistake is marked already
		}
		if words := analyze.Words(answer); len(words) > 0 {
			h.add(q.Origin.Span.End, headline(words), 0, q.Text)
		}
	}
	return nil
}

// headline is the first line of an answer, with a sign where more follows.
func headline(words []string) string {
	text := strings.Join(strings.Fields(words[0]), " ")
	if len(words) > 1 {
		text += " …"
	}
	return "→ " + text
}

func (h *inlays) verdicts(ctx context.Context) error {
	limits := h.checked.Description.Limits
	any := false
	for i := range limits {
		any = any || h.covers(limits[i].Origin)
	}
	if !any || h.checked.Description.Faults {
		return nil
	}
	verdicts, err := h.analysis.Verdicts(ctx)
	if err != nil {
		return err
	}
	for _, v := range verdicts {
		if v.Limit != nil && h.covers(v.Limit.Origin) && !h.checked.FaultyAt(v.Limit.Origin) {
			h.add(v.Limit.Origin.Span.End, verdictMark(v)+" "+analyze.VerdictShort(v), 0, "")
		}
	}
	return nil
}

func verdictMark(v analyze.Verdict) string {
	switch v.Decision {
	case analyze.Holds:
		return "✓"
	case analyze.Broken:
		return "✗"
	}
	return "?"
}

// constants shows what a let comes to, unless a number stands there already.
func (h *inlays) constants(ctx context.Context) error {
	for _, st := range overlapping(h.file.Statements, h.span) {
		let, ok := st.(*dialect.LetStatement)
		if !ok || let.Broken || !let.Name.Present() || isNumber(let.Value) {
			continue
		}
		answer, err := h.analysis.Ask(ctx, let.Name.Text)
		if err != nil {
			return err
		}
		if _, refused := answer.(*analyze.RefusedAnswer); refused {
			continue
		}
		if words := analyze.Words(answer); len(words) > 0 {
			h.add(let.Extent().End, "= "+words[0], protocol.InlayHintKindType, let.Name.Text)
		}
	}
	return nil
}

// isNumber says that an expression is a number with its unit, signed or not.
func isNumber(x dialect.Expr) bool {
	switch x := x.(type) {
	case *dialect.NumberExpr:
		return true
	case *dialect.UnaryExpr:
		return isNumber(x.X)
	}
	return false
}

// directions shows from where to where the current of a part counts, and
// between which nodes its voltage, where a question or limit asks for it.
func (h *inlays) directions() {
	for _, st := range overlapping(h.file.Statements, h.span) {
		switch st.(type) {
		case *dialect.TellStatement, *dialect.RequireStatement, *dialect.FunctionStatement:
			eachSubscript(st, h.direction)
		}
	}
}

func (h *inlays) direction(x *dialect.SubscriptExpr) {
	if len(x.Subscripts) != 1 || !strings.Contains("iv", x.Letter.Text) || x.Letter.Text == "" || x.Close.End == x.Close.Start {
		return
	}
	symbol, _, ok := h.checked.SymbolAt(h.file, x.Subscripts[0].Span.End)
	if !ok || symbol.Sort != dialect.PartSymbol {
		return
	}
	d := h.checked.Description
	indices := h.checked.Indices(symbol)
	if len(indices) != 1 || indices[0] >= len(d.Parts) {
		return
	}
	part := d.Parts[indices[0]]
	if part.From < 0 || part.To < 0 {
		return
	}
	from, to := nodeName(d.Nodes[part.From]), nodeName(d.Nodes[part.To])
	if x.Letter.Text == "i" {
		h.add(x.Close.End, from+"→"+to, protocol.InlayHintKindParameter, "")
	} else {
		h.add(x.Close.End, from+"−"+to, protocol.InlayHintKindParameter, "")
	}
}

func nodeName(n dialect.Node) string {
	if n.Name == "" {
		return "·"
	}
	return n.Name
}

// resolveInlay handles inlayHint/resolve: the whole answer as a tooltip.
func resolveInlay(ctx context.Context, r *request, hint *protocol.InlayHint) (*protocol.InlayHint, error) {
	var data inlayData
	if len(hint.Data) == 0 || json.Unmarshal(hint.Data, &data) != nil {
		return hint, nil
	}
	at, err := r.whole(data.URI)
	if err != nil || at.unit.version != data.Version {
		return hint, nil // of an older version: it will be asked for anew
	}
	ctx, done := at.unit.with(ctx)
	defer done()
	answer, err := at.analysis.Ask(ctx, data.Question)
	if err != nil {
		return nil, err
	}
	m := &markup{markdown: true}
	m.title(data.Question)
	m.block(analyze.Words(answer))
	hint.Tooltip = m.content()
	return hint, nil
}

// shorten cuts a text that is too long for its place, at a space if it can.
func shorten(text string, most int) string {
	if utf8.RuneCountInString(text) <= most {
		return text
	}
	runes := []rune(text)[:most-1]
	cut := string(runes)
	if space := strings.LastIndexByte(cut, ' '); space > most/2 {
		cut = cut[:space]
	}
	return strings.TrimRight(cut, " ,;:") + "…"
}
