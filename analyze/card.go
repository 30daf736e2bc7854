package analyze

import (
	"context"
	"fmt"
	"math"
	"strings"

	"portlight/analyze/exact"
	"portlight/dialect"
	"portlight/dialect/number"
)

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
// ok is false where there is nothing to tell. The error is the context's.
func (a *Analysis) Card(ctx context.Context, file *dialect.File, offset int) (card Card, at dialect.Span, ok bool, err error) {
	if s, span, found := a.checked.SymbolAt(file, offset); found {
		card, err = a.symbolCard(ctx, s, file, offset)
		return card, span, err == nil, err
	}
	path := dialect.PathTo(file, offset)
	for i := len(path) - 1; i >= 0; i-- {
		card, ok, err = a.treeCard(ctx, path[i], file, offset)
		if err != nil || ok {
			return card, path[i].Extent(), ok, err
		}
	}
	return Card{}, dialect.Span{}, false, nil
}

// symbolCard tells about a name.
func (a *Analysis) symbolCard(ctx context.Context, s *dialect.Symbol, file *dialect.File, offset int) (Card, error) {
	indices := a.checked.Indices(s)
	first := -1
	if len(indices) > 0 {
		first = indices[0]
	}
	c := cardMaker{a: a, ctx: ctx, hertz: a.frequencyNear(ctx, file, offset)}
	c.Doc = s.Doc()
	switch {
	case s.Sort == dialect.NodeSymbol && first >= 0:
		c.node(first)
	case s.Sort == dialect.PartSymbol && first >= 0:
		c.part(first)
	case s.Sort == dialect.PortSymbol && first >= 0:
		c.port(first)
	case s.Sort == dialect.FunctionSymbol && first >= 0:
		c.function(first)
	case s.Sort == dialect.LetSymbol && first >= 0:
		c.let(first, s)
	case s.Sort == dialect.LetSymbol, s.Sort == dialect.ParameterSymbol:
		c.values(s)
	case s.Sort == dialect.SubnetworkSymbol:
		c.subnetwork(s)
	case s.Sort == dialect.UseSymbol:
		c.use(s)
	default:
		c.Title = strings.TrimSpace(s.Sort.String() + " " + s.Name)
	}
	if len(indices) > 1 && s.Sort != dialect.UseSymbol {
		c.Detail = append(c.Detail, fmt.Sprintf("stands %d times in the network, once in each use; this is the first", len(indices)))
	}
	return c.Card, ctx.Err()
}

// treeCard tells about a statement or an expression that is no name.
func (a *Analysis) treeCard(ctx context.Context, t dialect.Tree, file *dialect.File, offset int) (Card, bool, error) {
	switch t := t.(type) {
	case *dialect.SubscriptExpr:
		return a.expressionCard(ctx, t, file, offset)
	case *dialect.TellStatement:
		return a.tellCard(ctx, t, file)
	case *dialect.RequireStatement:
		return a.requireCard(ctx, t, file)
	}
	return Card{}, false, nil
}

// expressionCard tells about v[a,b], z[a,b] and the like, as if asked.
func (a *Analysis) expressionCard(ctx context.Context, t dialect.Tree, file *dialect.File, offset int) (Card, bool, error) {
	if file != a.checked.Main {
		return Card{}, false, nil
	}
	span := t.Extent()
	c := cardMaker{a: a, ctx: ctx, hertz: a.frequencyNear(ctx, file, offset)}
	text := file.Text[span.Start:span.End]
	c.Title = text
	switch text[0] {
	case 'z', 'y':
		c.askAt(text)
		c.detail(text)
	case 'v', 'i':
		c.signal(text)
	case 'p':
		c.summary(text)
	default:
		c.answer(text)
	}
	return c.Card, len(c.Answer) > 0, ctx.Err()
}

func (a *Analysis) tellCard(ctx context.Context, t *dialect.TellStatement, file *dialect.File) (Card, bool, error) {
	for i := range a.description.Questions {
		q := &a.description.Questions[i]
		if q.Origin.File != file || q.Origin.Span != t.Extent() && !contains(t.Extent(), q.Origin.Span) {
			continue
		}
		answer, err := a.Answer(ctx, q)
		if err != nil {
			return Card{}, false, err
		}
		lines := Words(answer)
		c := Card{Title: "tell " + q.Text, Answer: limited(lines, 11)}
		c.Picture = pictureOf(ctx, answer)
		return c, true, nil
	}
	return Card{}, false, nil
}

func contains(outer, inner dialect.Span) bool {
	return outer.Start <= inner.Start && inner.End <= outer.End
}

// limited keeps a card at about a dozen lines.
func limited(lines []string, n int) []string {
	if len(lines) <= n {
		return lines
	}
	return append(append([]string(nil), lines[:n]...), "… "+times(len(lines)-n, "more line"))
}

func (a *Analysis) requireCard(ctx context.Context, t *dialect.RequireStatement, file *dialect.File) (Card, bool, error) {
	verdicts, err := a.Verdicts(ctx)
	if err != nil {
		return Card{}, false, err
	}
	for i := range verdicts {
		v := &verdicts[i]
		if v.Limit.Origin.File != file || !contains(t.Extent(), v.Limit.Origin.Span) {
			continue
		}
		c := Card{Title: "require " + v.Limit.Text, Answer: []string{VerdictWords(*v)}}
		c.Detail = append(c.Detail, a.toleranceWords(v))
		return c, true, nil
	}
	return Card{}, false, nil
}

// toleranceWords says what was looked at besides the nominal values.
func (a *Analysis) toleranceWords(v *Verdict) string {
	switch {
	case v.Limit.Nominal:
		return "decided at the nominal values, as the line says"
	case v.Decision != Holds:
		return "decided at the nominal values"
	case v.InTolerance == Broken:
		return "broken with " + v.Corner
	case v.InTolerance == Holds:
		return "no part has a tolerance"
	}
	return "nothing found inside the tolerances breaks it; that is a search, not a proof"
}

// frequencyNear is the frequency, in Hz as text, to show impedances at: that
// of the nearest question, or the middle of the network's own frequencies.
func (a *Analysis) frequencyNear(ctx context.Context, file *dialect.File, offset int) string {
	best, text := math.MaxInt, ""
	consider := func(at *dialect.Constant, o dialect.Origin) {
		if at == nil || !at.Dim().Frequency || o.File != file {
			return
		}
		if d := abs(o.Span.Start - offset); d < best {
			best, text = d, hertzText(hertzOf(at))
		}
	}
	for _, q := range a.description.Questions {
		consider(q.Qualifiers.At, q.Origin)
	}
	for _, l := range a.description.Limits {
		consider(l.Qualifiers.At, l.Origin)
	}
	if text != "" {
		return text
	}
	return hertzText(a.middleFrequency(ctx))
}

func abs(n int) int {
	if n < 0 {
		return -n
	}
	return n
}

// middleFrequency is the geometric mean of the natural frequencies, in Hz to
// one digit; 1 kHz for a network without any.
func (a *Analysis) middleFrequency(ctx context.Context) float64 {
	f, err := recall(ctx, &a.shared().memo, "middle", func(ctx context.Context) (float64, error) {
		blocks, err := a.determinants(ctx, configuration{})
		if err != nil {
			return 0, err
		}
		var roots []exact.Root
		for _, b := range blocks {
			if len(roots) > mostModes {
				break // enough for a middle
			}
			more, err := rootsOf(ctx, b)
			if err != nil {
				return 0, err
			}
			roots = append(roots, more...)
		}
		sum, n := 0.0, 0.0
		for _, r := range roots {
			size := number.ComplexBall{Re: r.Re, Im: r.Im}.Abs().MidFloat64()
			if size > 0 {
				sum, n = sum+math.Log(size/(2*math.Pi)), n+1
			}
		}
		if n == 0 {
			return 0, nil
		}
		return math.Exp(sum / n), nil
	})
	if err != nil || f == 0 {
		return 1000
	}
	return roundTo(f, 1)
}

func hertzText(f float64) string { return formatFloat(roundTo(f, 6)) + " Hz" }

// pictureOf is the first curve of an answer, nil when it has none.
func pictureOf(ctx context.Context, answer Answer) *PlotCurve {
	switch answer.(type) {
	case *FunctionAnswer, *TableAnswer, *SignalAnswer, *CurveAnswer:
		if p, err := PictureOf(ctx, answer); err == nil && len(p.Panels) > 0 {
			return &p.Panels[0]
		}
	}
	return nil
}
