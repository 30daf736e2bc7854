package analyze

import (
	"context"
	"errors"
	"fmt"
	"sort"

	"portlight/analyze/exact"
	"portlight/analyze/frequency"
	"portlight/analyze/network"
	"portlight/dialect"
	"portlight/dialect/number"
)

// Findings gives all findings, those about limits, stability, ratings and
// cautions too, in the order of the text, with accepted ones left out.
func (a *Analysis) Findings(ctx context.Context) ([]dialect.Finding, error) {
	return recall(ctx, &a.memo, "findings", func(ctx context.Context) ([]dialect.Finding, error) {
		found, err := a.Structure(ctx)
		if err != nil {
			return nil, err
		}
		found = append([]dialect.Finding(nil), found...)
		if !a.description.Faults && len(a.description.Parts) > 0 && !hasCode(found, "singular", "voltage-loop", "current-cutset", "no-feedback") {
			for _, look := range a.inspectors() {
				more, err := look(ctx)
				if passOn(ctx, err) {
					return nil, err
				}
				if err == nil {
					found = appendNew(found, more)
				}
			}
		}
		return a.accepted(found), nil
	})
}

// inspectors are the looks at a sound network, each giving findings. One
// that cannot be taken (no steady state, say) gives none: what stops it is
// reported by the first.
func (a *Analysis) inspectors() []func(context.Context) ([]dialect.Finding, error) {
	return []func(context.Context) ([]dialect.Finding, error){
		a.soundness, a.stability, a.conflicts, a.limitFindings, a.hiddenModes, a.ratings, a.cautions,
	}
}

// accepted drops what the file accepts and sorts by place, the main file first.
func (a *Analysis) accepted(found []dialect.Finding) []dialect.Finding {
	found = a.checked.Keep(found)
	rank := map[*dialect.File]int{}
	for i, f := range a.checked.Files {
		rank[f] = i
	}
	sort.SliceStable(found, func(i, j int) bool {
		x, y := found[i].Origin, found[j].Origin
		if rank[x.File] != rank[y.File] {
			return rank[x.File] < rank[y.File]
		}
		return x.Span.Start < y.Span.Start
	})
	return found
}

// appendNew adds the findings that do not say the same of the same place again.
func appendNew(found, more []dialect.Finding) []dialect.Finding {
	for _, f := range more {
		known := false
		for _, g := range found {
			known = known || g.Code == f.Code && g.Origin.File == f.Origin.File && g.Origin.Span == f.Origin.Span &&
				len(g.Origin.Use) == len(f.Origin.Use) && (g.Message == f.Message || f.Severity == dialect.Error)
		}
		if !known {
			found = append(found, f)
		}
	}
	return found
}

// hasCode tells whether an error with one of the codes is among the findings.
func hasCode(found []dialect.Finding, codes ...dialect.Code) bool {
	for _, f := range found {
		for _, c := range codes {
			if f.Code == c && f.Severity == dialect.Error {
				return true
			}
		}
	}
	return false
}

// soundness reports what only the equations show: no unique solution, or no
// steady state to start from.
func (a *Analysis) soundness(ctx context.Context) ([]dialect.Finding, error) {
	if a.plainlyPassive() {
		return a.startFindings(ctx)
	}
	var found []dialect.Finding
	for i, iv := range a.intervals(configuration{}) {
		sys, problems := network.Assemble(iv.network)
		if sys != nil {
			err := a.solvable(ctx, sys)
			if err == nil || errors.Is(err, errLarge) {
				continue
			}
			if passOn(ctx, err) {
				return nil, err
			}
			if problems, err = sys.Diagnose(ctx); err != nil {
				return nil, err
			}
		}
		for _, p := range problems {
			if f, ok := a.findingOf(p, a.whenText(i, iv)); ok {
				found = append(found, f)
			}
		}
		if len(found) > 0 {
			return found, nil
		}
	}
	more, err := a.startFindings(ctx)
	return append(found, more...), err
}

// startFindings reports why there is no one steady state before t = 0.
func (a *Analysis) startFindings(ctx context.Context) ([]dialect.Finding, error) {
	if !a.description.Steady {
		return nil, nil
	}
	_, err := a.initialState(ctx, configuration{})
	if r, ok := asRefusal(err); ok {
		f := dialect.Finding{Code: r.code, Severity: dialect.Error, Message: r.why, Origin: a.startPlace(r)}
		return []dialect.Finding{f}, nil
	}
	return nil, err
}

// startPlace is the first part that a refusal names, or the start statement's file.
func (a *Analysis) startPlace(r *refusal) dialect.Origin {
	if r.problem != nil {
		f := dialect.Finding{}
		a.place(&f, *r.problem)
		return f.Origin
	}
	return dialect.Origin{File: a.checked.Main}
}

// stability warns of natural frequencies in the right half-plane.
func (a *Analysis) stability(ctx context.Context) ([]dialect.Finding, error) {
	if a.plainlyPassive() {
		return nil, nil
	}
	blocks, err := a.determinants(ctx, configuration{})
	if err != nil {
		return nil, err
	}
	var roots []exact.Root
	for _, b := range blocks {
		if frequency.Decide(b) == frequency.Unstable {
			if roots, err = rootsOf(ctx, b); err != nil {
				return nil, err
			}
			break
		}
	}
	if roots == nil {
		return nil, nil
	}
	text := "a natural frequency of the network lies in the right half-plane, or more than one at a place on the imaginary axis: its response grows without end"
	for _, r := range roots {
		if sign, sure := r.Re.Sign(); sure && sign > 0 {
			text = fmt.Sprintf("the network is unstable: a natural frequency at s = %s has a positive real part, so its response grows without end",
				rootFigure(r))
			break
		}
	}
	return []dialect.Finding{{
		Code: "unstable", Severity: dialect.Warning, Message: text, Origin: a.activePlace(),
	}}, nil
}

// activePlace is the first part that can put energy in without a source.
func (a *Analysis) activePlace() dialect.Origin {
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.Kind == dialect.OpAmp || p.Dependent != nil || p.Rational != nil {
			return partOrigin(p)
		}
	}
	return dialect.Origin{File: a.checked.Main}
}

// conflicts warns of impulses that follow when capacitor voltages around a
// loop, or inductor currents at a cutset, do not agree at a moment.
func (a *Analysis) conflicts(ctx context.Context) ([]dialect.Finding, error) {
	var found []dialect.Finding
	for i, iv := range a.intervals(configuration{}) {
		for _, p := range iv.problems() {
			if p.Kind != network.CapacitorLoop && p.Kind != network.InductorCutset {
				continue
			}
			f, ok, err := a.conflict(ctx, p, iv, i)
			if err != nil {
				return found, err
			}
			if ok {
				found = append(found, f)
			}
		}
	}
	return found, nil
}

// conflict looks for an impulse in the memories of a loop or cutset.
func (a *Analysis) conflict(ctx context.Context, p network.Problem, iv interval, k int) (dialect.Finding, bool, error) {
	for _, e := range p.Elements {
		kind := iv.network.Elements[e].Kind
		letter := byte('i')
		if kind == network.Inductor {
			letter = 'v'
		} else if kind != network.Capacitor {
			continue
		}
		s, err := a.probeSignal(ctx, dialect.Probe{Letter: letter, Of: dialect.OfPart, Part: e}, configuration{})
		if err != nil {
			return dialect.Finding{}, false, err
		}
		weights, err := impulsesAt(ctx, s, iv.start.Rat())
		if err != nil {
			return dialect.Finding{}, false, err
		}
		if len(weights) == 0 {
			continue
		}
		stored, err := impulsesAt(ctx, s.ZeroInput(), iv.start.Rat())
		if err != nil {
			return dialect.Finding{}, false, err
		}
		f := dialect.Finding{Code: "initial-conflict", Severity: dialect.Warning}
		if len(stored) == 0 && len(iv.turned) == 0 {
			f.Severity = dialect.Information // what stood at 0− is sound; a source steps
		}
		f.Message = a.conflictText(p, iv, k, e, weights[0], f.Severity == dialect.Information)
		a.place(&f, p)
		return f, true, nil
	}
	return dialect.Finding{}, false, nil
}

// conflictText tells a conflict and the impulse through or across element e
// that follows.
func (a *Analysis) conflictText(p network.Problem, iv interval, k, e int, weight number.Ball, stepped bool) string {
	names, at := list(a.partNames(p.Elements)), figure(ballOf(iv.start), "s")
	impulse := fmt.Sprintf("%s through %s", figure(weight, "A·s"), a.description.Parts[e].Name)
	what, where := "voltages around the loop", "around the loop"
	if iv.network.Elements[e].Kind == network.Inductor {
		impulse = fmt.Sprintf("%s across %s", figure(weight, "V·s"), a.description.Parts[e].Name)
		what, where = "currents at the cutset", "at the cutset"
	}
	if stepped {
		return fmt.Sprintf("a source steps at t = %s %s of %s: an impulse of %s follows", at, where, names, impulse)
	}
	return fmt.Sprintf("the %s of %s do not agree at t = %s%s: an impulse of %s makes them",
		what, names, at, comma(a.whenText(k, iv)), impulse)
}

func comma(s string) string {
	if s == "" {
		return ""
	}
	return ", " + s
}

// conflictFinding tells an initial conflict found without solving.
func (a *Analysis) conflictFinding(p network.Problem) dialect.Finding {
	f := dialect.Finding{Code: "initial-conflict", Severity: dialect.Warning}
	f.Message = fmt.Sprintf("the initial values of %s do not agree: an impulse makes them at t = 0", list(a.partNames(p.Elements)))
	a.place(&f, p)
	return f
}

// limitFindings reports broken limits, and those broken within tolerances.
func (a *Analysis) limitFindings(ctx context.Context) ([]dialect.Finding, error) {
	verdicts, err := a.Verdicts(ctx)
	if err != nil {
		return nil, err
	}
	var found []dialect.Finding
	for i := range verdicts {
		v := &verdicts[i]
		switch {
		case v.Decision == Broken:
			found = append(found, dialect.Finding{
				Code: "limit-broken", Severity: dialect.Error, Origin: v.Limit.Origin,
				Message: VerdictWords(*v),
			})
		case v.InTolerance == Broken:
			found = append(found, dialect.Finding{
				Code: "limit-broken-in-tolerance", Severity: dialect.Warning, Origin: v.Limit.Origin,
				Message: VerdictWords(*v),
			})
		case v.Decision == Undecided && !a.checked.FaultyAt(v.Limit.Origin):
			found = append(found, dialect.Finding{
				Code: "limit-undecided", Severity: dialect.Information, Origin: v.Limit.Origin,
				Message: VerdictWords(*v),
			})
		}
	}
	return found, nil
}

// hiddenModes reports natural frequencies that a function of the file does not show.
func (a *Analysis) hiddenModes(ctx context.Context) ([]dialect.Finding, error) {
	var found []dialect.Finding
	for i := range a.description.Functions {
		fn := &a.description.Functions[i]
		f, err := a.namedFunction(ctx, i, configuration{})
		if passOn(ctx, err) {
			return nil, err
		}
		if err != nil {
			if r, ok := asRefusal(err); ok && fn.Value != nil {
				found = append(found, dialect.Finding{Code: r.code, Severity: dialect.Error, Message: fn.Name + ": " + r.why,
					Origin: dialect.Origin{File: fn.Origin.File, Span: fn.NameSpan, Use: fn.Origin.Use}})
			}
			continue
		}
		hidden, err := a.hiddenInPiece(ctx, fn.Value, f)
		if err != nil {
			return nil, err
		}
		if len(hidden) > 0 {
			found = append(found, dialect.Finding{
				Code: "hidden-mode", Severity: dialect.Hint,
				Origin:  dialect.Origin{File: fn.Origin.File, Span: fn.NameSpan, Use: fn.Origin.Use},
				Message: fmt.Sprintf("%s does not show the natural frequenc%s %s of the network", fn.Name, plural(len(hidden)), list(rootFigures(hidden))),
			})
		}
	}
	return found, nil
}

func plural(n int) string {
	if n == 1 {
		return "y"
	}
	return "ies"
}
