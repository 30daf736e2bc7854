package analyze

import (
	"context"
	"fmt"
	"strings"

	"portlight/dialect"
	"portlight/dialect/number"
)

// allCorners is up to how many toleranced parts every corner is tried.
const allCorners = 4

// mostToleranced is how many toleranced parts are looked at for one limit;
// beyond that the search would take longer than a reader waits.
const mostToleranced = 60

// tolerate looks for values inside the tolerances that break a limit which
// holds nominally. Up to four toleranced parts every corner is tried;
// with more, each part is moved to either end alone, and then all together to the ends
// that were worse. A corner that breaks the limit is a proof; that none does
// is not, and the verdict says so.
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
	try := func(c corner) (Verdict, bool, error) {
		w, err := a.at(c).decide(ctx, l)
		if passOn(ctx, err) {
			return w, false, err
		}
		if err == nil && w.Decision == Broken {
			v.InTolerance, v.Corner = Broken, a.cornerText(c)
			v.CornerMargin, v.CornerWorst = w.Margin, w.Worst
			return w, true, nil
		}
		return w, false, nil
	}
	if len(parts) <= allCorners {
		return a.everyCorner(parts, try)
	}
	return a.worseCorner(parts, try)
}

// corner is the ends of their tolerances that some parts are at.
type corner map[int]bool // by part: at the high end

// everyCorner tries all corners.
func (a *Analysis) everyCorner(parts []int, try func(corner) (Verdict, bool, error)) error {
	for bits := range 1 << len(parts) {
		c := corner{}
		for k, p := range parts {
			c[p] = bits>>k&1 == 1
		}
		if _, broken, err := try(c); broken || err != nil {
			return err
		}
	}
	return nil
}

// worseCorner moves each part alone, then all of them to their worse ends.
func (a *Analysis) worseCorner(parts []int, try func(corner) (Verdict, bool, error)) error {
	worse := corner{}
	for _, p := range parts {
		var margins [2]number.Ball
		for end := range margins {
			w, broken, err := try(corner{p: end == 1})
			if broken || err != nil {
				return err
			}
			margins[end] = w.Margin
		}
		order, sure := margins[1].Cmp(margins[0])
		worse[p] = sure && order < 0
	}
	_, _, err := try(worse)
	return err
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

// at is the analysis of the same network with parts at ends of their tolerances.
func (a *Analysis) at(c corner) *Analysis {
	d := *a.description
	d.Parts = append([]dialect.Part(nil), d.Parts...)
	for i, high := range c {
		t := d.Parts[i].Tolerance
		d.Parts[i].Value = t.Low
		if high {
			d.Parts[i].Value = t.High
		}
	}
	return &Analysis{checked: a.checked, description: &d}
}

// cornerText names a corner: "C1 at its low end, R1 at its high end".
func (a *Analysis) cornerText(c corner) string {
	var low, high []string
	for i := range a.description.Parts {
		if up, ok := c[i]; ok && up {
			high = append(high, a.description.Parts[i].Name)
		} else if ok {
			low = append(low, a.description.Parts[i].Name)
		}
	}
	var words []string
	for _, side := range []struct {
		names []string
		end   string
	}{{low, "lowest"}, {high, "highest"}} {
		if len(side.names) > 0 {
			words = append(words, fmt.Sprintf("%s at the %s value", list(side.names), side.end))
		}
	}
	return strings.Join(words, ", ")
}
