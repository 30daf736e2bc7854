package lsp

import (
	"context"
	"strings"
	"time"

	"portlight/analyze"
	"portlight/dialect"
)

// How long a reader waits for a card. Where working it out takes longer, what
// is known at once is shown, and the work goes on for the next time.
const (
	patienceSmall = time.Second
	patienceLarge = 2 * time.Millisecond // of a network of more than largeParts
	largeParts    = 500
)

// cardAt is the card of what stands at a place: whole if it can be worked out
// while the reader waits, else what is known without arithmetic.
func (r *request) cardAt(ctx context.Context, at *place) (analyze.Card, dialect.Span, bool, error) {
	patience := patienceSmall
	large := at.checked != nil && len(at.checked.Description.Parts) > largeParts
	if large {
		patience = patienceLarge
	}
	// Of large networks one card at a time is worked out behind, also when its
	// version has been superseded: a pointer that wanders over the text while it
	// is edited must not start dozens.
	if large && !r.session.busy.CompareAndSwap(false, true) {
		card, span, ok := at.quickCard()
		return card, span, ok, nil
	}
	type outcome struct {
		card analyze.Card
		span dialect.Span
		ok   bool
		err  error
	}
	done := make(chan outcome, 1)
	go func() {
		defer at.unit.session.contain("working out a card")
		if large {
			defer r.session.busy.Store(false)
		}
		var o outcome
		o.card, o.span, o.ok, o.err = at.analysis.Card(at.unit.ctx, at.file, at.offset)
		done <- o
	}()
	timer := time.NewTimer(patience)
	defer timer.Stop()
	select {
	case o := <-done:
		return o.card, o.span, o.ok, o.err
	case <-ctx.Done():
		return analyze.Card{}, dialect.Span{}, false, ctx.Err()
	case <-timer.C:
		card, span, ok := at.quickCard()
		return card, span, ok, nil
	}
}

// quickCard is what is known of a name at once: what it is, as it is written.
func (p *place) quickCard() (analyze.Card, dialect.Span, bool) {
	symbol, span, ok := p.symbol()
	if !ok {
		return analyze.Card{}, dialect.Span{}, false
	}
	card := analyze.Card{Title: symbol.Sort.String() + " " + symbol.Name, Doc: symbol.Doc()}
	if symbol.Sort == dialect.PartSymbol {
		card.Title = symbol.Kind.String() + " " + symbol.Name
	}
	if symbol.Statement != nil && symbol.Sort != dialect.NodeSymbol && symbol.Sort != dialect.SubnetworkSymbol {
		text := symbol.Statement.Extent()
		card.Answer = []string{strings.Join(strings.Fields(symbol.File.Text[text.Start:text.End]), " ")}
	}
	card.Detail = []string{"the answers are being worked out; ask again for them"}
	return card, span, true
}
