package exact

import (
	"context"
	"testing"

	"pgregory.net/rapid"
)

// drawChain draws a pencil with entries near the diagonal only, in shuffled
// order of rows and columns.
func drawChain(t *rapid.T, maxSize, width, bits int) *Pencil {
	n := rapid.IntRange(1, maxSize).Draw(t, "n")
	rows := rapid.Permutation(identity(n)).Draw(t, "rows")
	cols := rapid.Permutation(identity(n)).Draw(t, "cols")
	p := NewPencil(n)
	for i := range n {
		for j := max(0, i-width); j <= min(n-1, i+width); j++ {
			if i != j && rapid.Bool().Draw(t, "none") {
				continue
			}
			p.Add(rows[i], cols[j], drawRat(t, bits, "g"), nil)
			if rapid.Bool().Draw(t, "reactive") {
				p.Add(rows[i], cols[j], nil, drawRat(t, bits, "c"))
			}
		}
	}
	return p
}

func identity(n int) []int {
	list := make([]int, n)
	for i := range list {
		list[i] = i
	}
	return list
}

// The two methods agree on every system that both can do.
func TestFrontierAgreesWithModular(t *testing.T) {
	ctx := context.Background()
	compared := 0
	rapid.Check(t, func(t *rapid.T) {
		p := drawChain(t, 9, 2, 40)
		n := p.Size()
		f, err := p.Prepare(ctx)
		if err != nil || f.form == nil {
			return
		}
		all := make([]int, len(f.form.end))
		for b := range all {
			all[b] = b
		}
		rowAt, colAt := f.positions(all)
		var rhs, out []border
		for range rapid.IntRange(0, 2).Draw(t, "borders") {
			rhs = append(rhs, f.rhsBorder(drawVector(t, n, "rhs"), rowAt))
			out = append(out, f.outBorder(drawVector(t, n, "out"), colAt))
		}
		y := f.system(all, rhs, out)
		y.end = []int{y.n} // as one block
		plans, _ := y.frontierPlans([]bool{true})
		if plans == nil {
			t.Fatal("a chain was found too wide")
		}
		compared++
		d1, n1, err1 := y.solveFrontier(ctx, plans, []bool{true})
		d2, n2, err2 := y.solveModular(ctx, []bool{true})
		if err1 != err2 {
			t.Fatalf("%v and %v", err1, err2)
		}
		if err1 != nil {
			return
		}
		if !d1[0].Equal(d2[0]) {
			t.Fatalf("determinants %v and %v", d1[0], d2[0])
		}
		for k := range n1 {
			if !n1[k].Equal(n2[k]) {
				t.Fatalf("numerators %d: %v and %v", k, n1[k], n2[k])
			}
		}
	})
	if compared == 0 {
		t.Error("nothing was compared")
	}
}
