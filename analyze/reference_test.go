package analyze_test

import (
	"context"
	"fmt"
	"sort"
	"strings"
	"testing"
	"time"
)

// tally counts the questions of one group.
type tally struct{ asked, passed, unasked int }

// TestReferenceCases puts every question of the shared collection through the
// whole pipeline, from text to the JSON of the answer, and compares it with
// what general-purpose mathematics found.
func TestReferenceCases(t *testing.T) {
	cases := loadCases(t)
	groups := map[string]*tally{}
	left := map[string]int{}
	for _, c := range cases {
		group := groups[c.Group]
		if group == nil {
			group = new(tally)
			groups[c.Group] = group
		}
		t.Run(c.Name, func(t *testing.T) { runCase(t, c, group, left) })
	}
	report(t, groups, left)
}

// caseTime is what a case may take before it counts as an answer that never
// comes; the slowest takes a small part of it.
const caseTime = 2 * time.Minute

func runCase(t *testing.T, c referenceCase, group *tally, left map[string]int) {
	ctx, stop := context.WithTimeout(context.Background(), caseTime)
	defer stop()
	var a *asker
	if c.Network != nil {
		a = newAsker(ctx, c)
	}
	for i := range c.Ask {
		q := &c.Ask[i]
		var o outcome
		if q.What == "unit_check" {
			o = unitCheck(ctx, q)
		} else {
			o = a.question(q)
		}
		switch {
		case o.unasked != "":
			group.unasked++
			left[q.What+": "+o.unasked]++
		case o.err != nil:
			group.asked++
			t.Errorf("question %d, %s: %v", i+1, q.What, o.err)
		default:
			group.asked++
			group.passed++
		}
	}
	if t.Failed() && testing.Verbose() && a != nil && len(a.text.lines) < 60 {
		t.Logf("the network:\n%s", a.text.text())
	}
}

func report(t *testing.T, groups map[string]*tally, left map[string]int) {
	var names []string
	for name := range groups {
		names = append(names, name)
	}
	sort.Strings(names)
	var b strings.Builder
	var all tally
	for _, name := range names {
		g := groups[name]
		fmt.Fprintf(&b, "%-16s asked %4d  passed %4d  cannot ask yet %4d\n", name, g.asked, g.passed, g.unasked)
		all.asked, all.passed, all.unasked = all.asked+g.asked, all.passed+g.passed, all.unasked+g.unasked
	}
	fmt.Fprintf(&b, "%-16s asked %4d  passed %4d  cannot ask yet %4d\n", "all", all.asked, all.passed, all.unasked)
	for kind, n := range left {
		fmt.Fprintf(&b, "  cannot ask yet: %d × %s\n", n, kind)
	}
	t.Log("\n" + b.String())
}
