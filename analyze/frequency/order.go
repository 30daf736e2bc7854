package frequency

import (
	"sort"

	"portlight/dialect/number"
)

// sortPoints orders by frequency; enclosures of distinct roots do not
// overlap, so their centres order them.
func sortPoints(ps []Point) {
	sort.SliceStable(ps, func(i, j int) bool {
		return ps[i].Omega.Mid().Cmp(ps[j].Omega.Mid()) < 0
	})
}

func sortBalls(bs []number.Ball) {
	sort.SliceStable(bs, func(i, j int) bool { return bs[i].Mid().Cmp(bs[j].Mid()) < 0 })
}
