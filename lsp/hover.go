package lsp

import (
	"context"
	"slices"

	"go.lsp.dev/protocol"

	"portlight/analyze"
	"portlight/dialect"
)

// maxHover is how many characters a hover may have: the best-known client
// cuts at 100 000, in the middle of a picture.
const maxHover = 90_000

// hover handles textDocument/hover: kind and name first, then the answer,
// then the detail.
func hover(ctx context.Context, r *request, p *protocol.HoverParams) (*protocol.Hover, error) {
	at, err := r.place(p.TextDocumentPositionParams)
	if err != nil {
		return nil, err
	}
	card, span, ok, err := r.cardAt(ctx, at)
	if err != nil {
		return nil, err
	}
	m := &markup{markdown: r.client.markdownHover, fence: r.client.fence}
	if ok {
		r.card(m, card)
	} else if word, where := at.word(); word != "" {
		m.title(word)
		m.prose(wordDocs[word])
		span, ok = where, true
	}
	if found, where := at.finding(); found != "" {
		m.prose(found)
		if !ok {
			span, ok = where, true
		}
	}
	if !ok {
		return nil, nil
	}
	return &protocol.Hover{Contents: m.content(), Range: ptr(r.mapper.reach(at.file.Lines, span))}, nil
}

// card writes a card: what it is, the answer, then the detail. A picture that
// the client shows stands before the detail, since a hover is seldom higher
// than both; one made of characters stands behind it.
func (r *request) card(m *markup, card analyze.Card) {
	m.title(card.Title)
	image := ""
	if card.Picture != nil && r.sendsPictures() && m.markdown {
		image = pictureLink(card.Picture)
	}
	if image != "" && len(image)+size(card) < maxHover {
		m.block(card.Answer)
		m.raw(image)
		m.block(card.Detail)
		m.prose(card.Doc)
		return
	}
	lines := append([]string(nil), card.Answer...)
	if len(card.Answer) > 0 && len(card.Detail) > 0 {
		lines = append(lines, "")
	}
	m.block(append(lines, card.Detail...))
	m.prose(card.Doc)
	if card.Picture != nil {
		m.block(brailleText(card.Picture))
	}
}

// size is how many bytes the words of a card take at most, once marked up.
func size(card analyze.Card) int {
	n := 2*len(card.Title) + 2*len(card.Doc) + 100
	for _, line := range slices.Concat(card.Answer, card.Detail) {
		n += len(line) + 1
	}
	return n
}

// sendsPictures says that hovers may hold images.
func (r *request) sendsPictures() bool {
	switch r.settings.pictures {
	case "always":
		return true
	case "never":
		return false
	}
	return r.client.pictures
}

// word is the word of the notation at the place, if it is one that is
// documented.
func (p *place) word() (string, dialect.Span) {
	path := dialect.PathTo(p.file, p.offset)
	if len(path) == 0 {
		return "", dialect.Span{}
	}
	word, ok := path[len(path)-1].(dialect.Word)
	if !ok || wordDocs[word.Text] == "" {
		return "", dialect.Span{}
	}
	return word.Text, word.Span
}

// finding explains the finding at the place, if there is one.
func (p *place) finding() (string, dialect.Span) {
	found := p.checked.Findings
	if all := p.unit.found.Load(); all != nil {
		found = *all
	}
	for _, f := range found {
		if f.Origin.File == p.file && f.Origin.Span.Start <= p.offset && p.offset <= f.Origin.Span.End {
			if e, ok := dialect.Explain(f.Code); ok {
				return string(f.Code) + ": " + e.Meaning + "\n" + e.Mend, f.Origin.Span
			}
		}
	}
	return "", dialect.Span{}
}
