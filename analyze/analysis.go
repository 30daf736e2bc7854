package analyze

import (
	"context"

	"portlight/dialect"
)

// Analysis answers everything about one checked file. It is cheap to make,
// computes on demand, keeps what it computed, and is safe for concurrent use.
type Analysis struct {
	checked *dialect.Checked
}

// New prepares the analysis of a checked file; nothing is computed yet.
func New(checked *dialect.Checked) *Analysis { return &Analysis{checked: checked} }

// Checked is the checked file under analysis.
func (a *Analysis) Checked() *dialect.Checked { return a.checked }

// Structure gives the findings that need no arithmetic on functions: the
// notation's own and those of connectivity. It is what an editor can show at once.
func (a *Analysis) Structure(ctx context.Context) ([]dialect.Finding, error) { panic("to come") }

// Findings gives all findings, those about limits, stability and cautions too,
// in the order of the text, with accepted ones removed.
func (a *Analysis) Findings(ctx context.Context) ([]dialect.Finding, error) { panic("to come") }

// Verdicts decides every require line, in the order of the text.
func (a *Analysis) Verdicts(ctx context.Context) ([]Verdict, error) { panic("to come") }

// Answers answers every tell line, in the order of the text.
func (a *Analysis) Answers(ctx context.Context) ([]Answer, error) { panic("to come") }

// Answer answers one resolved question. The error is non-nil only when ctx
// ended; everything a user can cause is a RefusedAnswer.
func (a *Analysis) Answer(ctx context.Context, q *dialect.Question) (Answer, error) { panic("to come") }

// Ask answers a question put as text, what may follow tell in the file.
func (a *Analysis) Ask(ctx context.Context, text string) (Answer, error) { panic("to come") }

// Card is what a reader is shown about one thing in the text: what it is,
// then the answer, then the detail.
type Card struct {
	Title   string
	Answer  []string
	Detail  []string
	Doc     string     // the ## lines of the thing itself
	Picture *PlotCurve // a curve worth drawing, nil when there is none
}

// PlotCurve is sampled data for a small plot.
type PlotCurve struct {
	Title, XLabel, YLabel string
	LogX                  bool
	X                     []float64
	Y                     [][]float64 // one or more traces over X
	Names                 []string    // of the traces
}

// Card tells about what stands at a byte offset of one of the checked files;
// ok is false where there is nothing to tell.
func (a *Analysis) Card(ctx context.Context, file *dialect.File, offset int) (card Card, at dialect.Span, ok bool, err error) {
	panic("to come")
}
