package analyze

import (
	"context"
	"fmt"
	"math/big"
	"sort"
	"time"

	"portlight/dialect"
	"portlight/dialect/number"
)

// tolerancePatience is how long the search for one limit may take beyond its
// first round, in which every part is moved to either end.
const tolerancePatience = 300 * time.Millisecond

// mostToleranced is how many toleranced parts are looked at for one limit.
const mostToleranced = 60

// tolerate looks for values inside the tolerances that break a limit which
// holds nominally, and for the least margin there. Every part is moved to
// either end alone, then all of them to their worse ends; from the worst point
// so far a pattern search with halving steps goes on inside the box, because
// resonances that meet are worst between the corners (R. Hooke and T. A. Jeeves,
// "Direct search solution of numerical and statistical problems", J. ACM 8 (1961)).
// A point that breaks the limit is a proof; that none was found is not, and
// the verdict says so.
func (a *Analysis) tolerate(ctx context.Context, l *dialect.Limit, v *Verdict) error {
	parts := a.toleranced(l)
	if len(parts) == 0 {
		v.InTolerance = Holds
		return nil
	}
	v.InTolerance = Undecided
	if len(parts) > mostToleranced {
		return nil
	}
	s := &toleranceSearch{Analysis: a, ctx: ctx, limit: l, parts: parts, known: map[string]float64{}}
	s.best, s.margin, s.worst = make(box, len(parts)), v.Margin, v.Worst
	for k, p := range parts {
		s.best[k] = a.nominalIn(p)
	}
	s.least = v.Margin.MidFloat64()
	err := s.run()
	if s.failed != nil {
		return s.failed
	}
	if err == errFoundBroken {
		v.InTolerance, v.Corner = Broken, s.text(s.best)
	}
	v.CornerMargin, v.CornerWorst, v.Searched = s.margin, s.worst, v.HasMargin
	return nil
}

// box is a point inside the tolerances: −1 the lowest, +1 the highest value.
type box []float64

// toleranceSearch minimises the margin of a limit over the box.
type toleranceSearch struct {
	*Analysis
	ctx   context.Context
	limit *dialect.Limit
	parts []int
	known map[string]float64

	best          box
	least         float64 // the margin there
	margin, worst number.Ball
	failed        error // the caller gave up
}

// errFoundBroken ends a search that has found a point which breaks the limit.
var errFoundBroken = refuse("limit-broken", "broken inside the tolerances")

// run searches; the error is errFoundBroken, or that of a caller that gave up.
func (s *toleranceSearch) run() error {
	start := append(box(nil), s.best...)
	corner := append(box(nil), start...)
	for k := range s.parts {
		var margins [2]float64
		for end, x := range []float64{-1, 1} {
			p := append(box(nil), start...)
			p[k] = x
			m, err := s.try(p)
			if err != nil {
				return err
			}
			margins[end] = m
		}
		corner[k] = -1
		if margins[1] < margins[0] {
			corner[k] = 1
		}
	}
	if _, err := s.try(corner); err != nil {
		return err
	}
	return s.pattern(time.Now().Add(tolerancePatience))
}

// pattern goes downhill from the best point with halving steps.
func (s *toleranceSearch) pattern(until time.Time) error {
	for step := 1.0; step > 1e-3; {
		moved := false
		for k := range s.parts {
			for _, d := range []float64{-step, step} {
				if time.Now().After(until) {
					return nil
				}
				p := append(box(nil), s.best...)
				p[k] = min(max(p[k]+d, -1), 1)
				before := s.least
				if _, err := s.try(p); err != nil {
					return err
				}
				moved = moved || s.least < before-1e-9*(1+abs64(before))
			}
		}
		if !moved {
			step /= 2
		}
	}
	return nil
}

func abs64(x float64) float64 {
	if x < 0 {
		return -x
	}
	return x
}

// try evaluates the limit at a point.
func (s *toleranceSearch) try(p box) (float64, error) {
	key := fmt.Sprint([]float64(p))
	if m, ok := s.known[key]; ok {
		return m, nil
	}
	w, err := s.at(s.parts, p).decide(s.ctx, s.limit)
	if passOn(s.ctx, err) {
		s.failed = err
		return 0, err
	}
	m := s.least
	if err == nil && w.HasMargin {
		m = w.Margin.MidFloat64()
	}
	s.known[key] = m
	if err == nil && w.Decision == Broken {
		s.best, s.least, s.margin, s.worst = p, m, w.Margin, w.Worst
		return m, errFoundBroken
	}
	if err == nil && m < s.least {
		s.best, s.least, s.margin, s.worst = p, m, w.Margin, w.Worst
	}
	return m, nil
}

// toleranced lists the wired parts with a tolerance that can matter to a limit.
func (a *Analysis) toleranced(l *dialect.Limit) []int {
	out := map[int]bool{}
	for _, p := range l.Qualifiers.Without {
		out[p] = true
	}
	var parts []int
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.Tolerance != nil && wired(p) && !out[i] {
			parts = append(parts, i)
		}
	}
	return parts
}

// nominalIn is where a part's nominal value lies in its tolerance.
func (a *Analysis) nominalIn(part int) float64 {
	p := &a.description.Parts[part]
	low, high := p.Tolerance.Low.Float(), p.Tolerance.High.Float()
	if high <= low {
		return 0
	}
	return 2*(p.Value.Float()-low)/(high-low) - 1
}

// valueAt is the value of a part at a place in its tolerance.
func (a *Analysis) valueAt(part int, x float64) number.Exact {
	p := &a.description.Parts[part]
	switch {
	case x <= -1:
		return p.Tolerance.Low
	case x >= 1:
		return p.Tolerance.High
	case x == a.nominalIn(part):
		return p.Value
	}
	share := new(big.Rat).SetFloat64((1 + x) / 2)
	width := p.Tolerance.High.Sub(p.Tolerance.Low)
	return p.Tolerance.Low.Add(width.Mul(number.FromRat(share)))
}

// at is the analysis of the same network with parts elsewhere in their tolerances.
func (a *Analysis) at(parts []int, p box) *Analysis {
	d := *a.description
	d.Parts = append([]dialect.Part(nil), d.Parts...)
	for k, i := range parts {
		d.Parts[i].Value = a.valueAt(i, p[k])
	}
	return &Analysis{checked: a.checked, description: &d}
}

// text names a point by the values that differ from the nominal ones, the
// most moved first: "L1 = 108 mH and C2 = 253.3 nF".
func (s *toleranceSearch) text(p box) string {
	type moved struct {
		text string
		by   float64
	}
	var moves []moved
	for k, i := range s.parts {
		nominal := s.nominalIn(i)
		if p[k] == nominal {
			continue
		}
		part := &s.description.Parts[i]
		moves = append(moves, moved{part.Name + " = " + exactFigure(s.valueAt(i, p[k]), valueUnit(part)), abs64(p[k] - nominal)})
	}
	sort.SliceStable(moves, func(i, j int) bool { return moves[i].by > moves[j].by })
	var names []string
	for _, m := range moves {
		names = append(names, m.text)
	}
	const shown = 6
	if len(names) > shown {
		names = append(names[:shown], fmt.Sprintf("%d more", len(names)-shown))
	}
	return list(names)
}
