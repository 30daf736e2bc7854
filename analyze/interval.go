package analyze

import (
	"sort"
	"sync"

	"portlight/analyze/network"
	"portlight/dialect"
	"portlight/dialect/number"
)

// interval is a stretch of time in which no switch turns.
type interval struct {
	start   number.Exact // s; the first is 0
	network *network.Network
	turned  []int // the switches that turn at start
	// problems are those of the network's structure, found once.
	problems func() []network.Problem
}

// turns lists the instants t ≥ 0 at which switches turn, in order, and the
// switches that turn at each.
func (a *Analysis) turns() (times []number.Exact, turned [][]int) {
	type turn struct {
		at   number.Exact
		part int
	}
	var all []turn
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if p.Kind != dialect.Switch || !wired(p) {
			continue
		}
		for _, e := range p.Events {
			all = append(all, turn{e.At, i})
		}
	}
	sort.SliceStable(all, func(i, j int) bool {
		order, _ := all[i].at.Cmp(all[j].at)
		return order < 0
	})
	for _, t := range all {
		if n := len(times); n > 0 && times[n-1].Equal(t.at) {
			turned[n-1] = append(turned[n-1], t.part)
			continue
		}
		times, turned = append(times, t.at), append(turned, []int{t.part})
	}
	return times, turned
}

// intervals gives the networks from t = 0 on. A configuration whose switches
// are set by hand has one interval only.
func (a *Analysis) intervals(c configuration) []interval {
	if len(c.switches) > 0 || len(c.without) > 0 || len(c.drives) > 0 {
		return a.newIntervals(c)
	}
	a.asWritten.Do(func() { a.stretches = a.newIntervals(c) })
	return a.stretches
}

func (a *Analysis) newIntervals(c configuration) []interval {
	zero := number.FromInt(0)
	times, turned := a.turns()
	var out []interval
	if len(times) == 0 || !times[0].Equal(zero) {
		out = append(out, interval{start: zero})
	}
	for i := range times {
		out = append(out, interval{start: times[i], turned: turned[i]})
	}
	for i := range out {
		out[i].network = a.build(c, &out[i].start)
		out[i].problems = sync.OnceValue(out[i].network.Inspect)
	}
	return out
}

// before is the network as it stands before t = 0.
func (a *Analysis) before(c configuration) *network.Network {
	early := number.FromInt(-1)
	return a.build(c, &early)
}
