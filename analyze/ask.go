package analyze

import (
	"context"
	"errors"
	"fmt"

	"portlight/analyze/exact"
	"portlight/dialect"
)

// Answers answers every tell line, in the order of the text.
func (a *Analysis) Answers(ctx context.Context) ([]Answer, error) {
	out := make([]Answer, 0, len(a.description.Questions))
	for i := range a.description.Questions {
		answer, err := a.Answer(ctx, &a.description.Questions[i])
		if err != nil {
			return nil, err
		}
		out = append(out, answer)
	}
	return out, nil
}

// Ask answers a question put as text, what may follow tell in the file.
func (a *Analysis) Ask(ctx context.Context, text string) (Answer, error) {
	q, findings := a.checked.Question(text)
	for _, f := range findings {
		if f.Severity == dialect.Error {
			return &RefusedAnswer{Question: Question{Text: text}, Code: f.Code, Why: f.Message}, nil
		}
	}
	if q == nil {
		return &RefusedAnswer{Question: Question{Text: text}, Code: "syntax", Why: "this is no question: write what may follow tell"}, nil
	}
	q.Text = text
	return a.Answer(ctx, q)
}

// Answer answers one resolved question. The error is non-nil only when ctx
// ended; everything a user can cause is a RefusedAnswer.
func (a *Analysis) Answer(ctx context.Context, q *dialect.Question) (Answer, error) {
	head := Question{Text: q.Text, Origin: q.Origin}
	if q.Why != "" {
		return &RefusedAnswer{head, "faults", q.Why + ": mend it first"}, nil
	}
	if a.description.Faults {
		return &RefusedAnswer{head, "faults", "the network is not complete because of the errors reported: mend them first"}, nil
	}
	key := fmt.Sprintf("answer %s %v %v %s", q.Text, q.Origin.Span, len(q.Origin.Use), qualifierKey(q.Qualifiers))
	answer, err := recall(ctx, &a.memo, key, func(ctx context.Context) (Answer, error) {
		return a.answer(ctx, q, head)
	})
	if err == nil {
		return answer, nil
	}
	if ctx.Err() != nil || isCancelled(err) {
		return nil, err
	}
	return a.refused(head, err), nil
}

// refused tells why a question has no answer.
func (a *Analysis) refused(head Question, err error) Answer {
	if r, ok := asRefusal(err); ok {
		return &RefusedAnswer{head, r.code, r.why}
	}
	return &RefusedAnswer{head, "not-decided", err.Error()}
}

func (a *Analysis) answer(ctx context.Context, q *dialect.Question, head Question) (Answer, error) {
	c := configurationOf(q.Qualifiers)
	switch q.Sort {
	case dialect.AskInitial:
		return a.initialAnswer(ctx, head, c)
	case dialect.AskPoles, dialect.AskZeros:
		return a.rootsAnswer(ctx, q, head, c)
	case dialect.AskMatrix:
		return a.matrixAnswer(ctx, q, head, c)
	case dialect.AskThevenin, dialect.AskNorton:
		return a.equivalentAnswer(ctx, q, head, c)
	}
	return a.expressionAnswer(ctx, q, head, c)
}

// configurationOf reads the state of the network from qualifiers.
func configurationOf(q dialect.Qualifiers) configuration {
	return configuration{switches: q.Switches, without: q.Without}
}

// expressionAnswer answers what is an expression, by what it evaluates to.
func (a *Analysis) expressionAnswer(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	w := q.Qualifiers
	switch q.What.Shape() {
	case dialect.ShapeFunction:
		switch {
		case w.At != nil:
			return a.valueAnswer(ctx, q, head, c)
		case w.From != nil || w.To != nil:
			return a.frequencyTable(ctx, q, head, c)
		}
		if !isRational(q.What) {
			return nil, refuse("frequency-missing", "say at which frequency, as in “at 1 kHz”, or over which range, as in “from 10 Hz to 1 kHz”")
		}
		f, err := a.function(ctx, q.What, c)
		if err != nil {
			return nil, err
		}
		return a.functionAnswer(ctx, head, q.What.Dim(), f)
	case dialect.ShapeSignal:
		switch {
		case w.At != nil || w.Before != nil:
			return a.signalValueAnswer(ctx, q, head, c)
		case w.From != nil || w.To != nil:
			return a.timeTable(ctx, q, head, c)
		}
		return a.signalAnswer(ctx, head, q.What, c)
	case dialect.ShapeFact:
		return a.factAnswer(ctx, q, head, c)
	}
	if call, ok := q.What.(*dialect.Call); ok && isMeasure(call.Name) {
		return a.measureAnswer(ctx, call, q, head, c)
	}
	return a.valueAnswer(ctx, q, head, c)
}

// isRational tells whether an expression in s is a rational function, not a
// magnitude or phase of one.
func isRational(e dialect.Expression) bool {
	switch e := e.(type) {
	case *dialect.Call:
		return false
	case *dialect.Negate:
		return isRational(e.X)
	case *dialect.Binary:
		return isRational(e.X) && isRational(e.Y)
	}
	return true
}

// rootDigits is the working precision of listed roots, in bits: 30 decimal
// digits and a margin, as the forms that other programs read want.
const rootDigits = 128

// rootsOf gives the roots of a polynomial.
func rootsOf(ctx context.Context, p exact.Poly) ([]exact.Root, error) {
	if p.Degree() < 1 {
		return nil, nil
	}
	set, err := exact.Roots(ctx, p)
	if err != nil {
		return nil, err
	}
	return set.At(rootDigits)
}

// functionAnswer completes a function with its roots and hidden modes.
func (a *Analysis) functionAnswer(ctx context.Context, head Question, d dialect.Dimension, f form) (*FunctionAnswer, error) {
	out := &FunctionAnswer{Question: head, Dimension: d, Ratio: f.constant, Exact: f.exact}
	out.Remarks = append(out.Remarks, f.remarks...)
	var err error
	if out.Formula, err = a.formula(ctx, f); err != nil {
		return nil, err
	}
	if out.Zeros, err = rootsOf(ctx, f.constant.Num); err != nil {
		return nil, err
	}
	if out.Poles, err = rootsOf(ctx, f.constant.Den); err != nil {
		return nil, err
	}
	if f.of == nil {
		return out, nil
	}
	hidden, remark, err := a.hiddenOf(ctx, *f.of, f.constant.Den)
	if err != nil {
		return nil, err
	}
	if out.Hidden = hidden; remark != "" {
		out.Remarks = append(out.Remarks, remark)
	}
	return out, nil
}

// hiddenFactor is what a network's determinant has beyond the denominator of
// a function of it. The denominator divides the determinant.
func hiddenFactor(det, den exact.Poly) exact.Poly {
	if den.Degree() < 1 {
		return det
	}
	return det.Quo(exact.GCD(det, den))
}

func (a *Analysis) rootsAnswer(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	out := &RootsAnswer{Question: head, Zeros: q.Sort == dialect.AskZeros}
	blocks, err := a.rootBlocks(ctx, q, c)
	if err != nil {
		return nil, err
	}
	degree := 0
	for _, b := range blocks {
		degree += b.Degree()
	}
	if degree > mostModes && q.What == nil {
		return nil, refuse("too-many-modes", fmt.Sprintf(
			"the network has more than %d natural frequencies: ask for the poles of a function", mostModes))
	}
	out.Roots, err = rootsOfProduct(ctx, blocks)
	return out, err
}

// rootBlocks are the polynomials whose roots are asked for: of a function, or
// one for each piece of the network.
func (a *Analysis) rootBlocks(ctx context.Context, q *dialect.Question, c configuration) ([]exact.Poly, error) {
	if q.What == nil {
		return a.determinants(ctx, c)
	}
	f, err := a.function(ctx, q.What, c)
	switch {
	case err != nil:
		return nil, err
	case q.Sort == dialect.AskPoles:
		return []exact.Poly{f.constant.Den}, nil
	case f.constant.IsZero():
		return nil, refuse("zero-function", "the function is zero at every frequency, so every point is a zero of it")
	}
	return []exact.Poly{f.constant.Num}, nil
}

// errText joins the reasons of several failures.
func errText(err error) string {
	if r, ok := asRefusal(err); ok {
		return r.why
	}
	return err.Error()
}

// passOn tells whether an error must end the whole answer: the caller gave up.
func passOn(ctx context.Context, err error) bool {
	return err != nil && (ctx.Err() != nil || errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded))
}
