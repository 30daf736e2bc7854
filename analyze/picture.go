package analyze

import (
	"context"
	"errors"
	"fmt"
	"math"

	"portlight/dialect"
)

// Picture is what an answer looks like, ready to be drawn at any size: one or
// more panels of curves, or a map of roots.
type Picture struct {
	Title  string
	Panels []PlotCurve
	Roots  *RootMap
}

// RootMap is the complex frequency plane with poles and zeros, in rad/s.
type RootMap struct {
	Poles, Zeros []complex128
	// PoleCount and ZeroCount are the multiplicities.
	PoleCount, ZeroCount []int
}

// ErrNoPicture is returned for answers that are no curve and no set of roots.
var ErrNoPicture = errors.New("this answer is no curve; a picture needs a function, a signal, a range or roots")

// curvePoints is how many points of a curve are computed for a picture.
const curvePoints = 480

// window is the range that a picture shows: Hz or s, 0 for an end that the
// picture chooses.
type window struct{ low, high float64 }

// PictureOf computes the curves of an answer, in double precision, over a
// range that shows what is characteristic.
func PictureOf(ctx context.Context, answer Answer) (*Picture, error) {
	return pictureWithin(ctx, answer, window{})
}

// Picture answers a question put as text and computes its curves. A question
// over a range is drawn from the function or signal itself, finer than the
// table that answers it. The answer is what the question gets, also when the
// error says that it has no picture.
func (a *Analysis) Picture(ctx context.Context, text string) (*Picture, Answer, error) {
	answer, err := a.Ask(ctx, text)
	if err != nil {
		return nil, nil, err
	}
	if _, isTable := answer.(*TableAnswer); isTable {
		if q, _ := a.checked.Question(text); q != nil {
			if p := a.withinRange(ctx, q); p != nil {
				p.Title = text
				return p, answer, nil
			}
		}
	}
	p, err := PictureOf(ctx, answer)
	return p, answer, err
}

// withinRange draws a question over a range; nil where the question without
// its range is no function and no signal.
func (a *Analysis) withinRange(ctx context.Context, q *dialect.Question) *Picture {
	whole := *q
	var w window
	overTime := false
	for _, end := range []struct {
		from *dialect.Constant
		to   *float64
	}{{q.Qualifiers.From, &w.low}, {q.Qualifiers.To, &w.high}} {
		if end.from == nil {
			continue
		}
		*end.to = end.from.Value.Float()
		if end.from.Dimension.Frequency {
			*end.to /= 2 * math.Pi
		} else {
			overTime = true
		}
	}
	whole.Qualifiers.From, whole.Qualifiers.To = nil, nil
	whole.Text = "all of " + q.Text // answers are kept by their question's text
	answer, err := a.Answer(ctx, &whole)
	if err != nil {
		return nil
	}
	switch answer.(type) {
	case *FunctionAnswer:
		if overTime || w.low <= 0 {
			return nil
		}
	case *SignalAnswer, *CurveAnswer:
		if !overTime {
			return nil
		}
	default:
		return nil
	}
	p, err := pictureWithin(ctx, answer, w)
	if err != nil {
		return nil
	}
	for i := range p.Panels {
		if p.Panels[i].Title == whole.Text {
			p.Panels[i].Title = q.Text
		}
	}
	return p
}

func pictureWithin(ctx context.Context, answer Answer, w window) (*Picture, error) {
	p := &Picture{Title: answer.Asked()}
	switch a := answer.(type) {
	case *FunctionAnswer:
		if a.Ratio.IsConstant() {
			return nil, fmt.Errorf("%w: this function does not depend on frequency", ErrNoPicture)
		}
		low, high := frequencyWindow(a)
		if w.low > 0 {
			low, high = w.low, max(high, 10*w.low)
		}
		if w.high > 0 {
			high = w.high
		}
		p.Panels = functionCurves(a, low, high)
	case *TableAnswer:
		p.Panels = tableCurves(a)
	case *SignalAnswer:
		curve, err := signalCurve(ctx, a, w)
		if err != nil {
			return nil, err
		}
		p.Panels = []PlotCurve{curve}
	case *CurveAnswer:
		curve, err := productCurve(ctx, a, w)
		if err != nil {
			return nil, err
		}
		p.Panels = []PlotCurve{curve}
	case *RootsAnswer:
		p.Roots = rootMap(a)
	case *EquivalentAnswer:
		if a.Impedance == nil {
			return nil, fmt.Errorf("%w: this equivalent has no impedance", ErrNoPicture)
		}
		inner, err := PictureOf(ctx, a.Impedance)
		if err != nil {
			return nil, err
		}
		p.Panels = inner.Panels
	case *RefusedAnswer:
		return nil, errors.New(a.Why)
	default:
		return nil, ErrNoPicture
	}
	return p, nil
}
