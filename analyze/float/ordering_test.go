package float

import (
	"context"
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"
)

// pattern is the compressed form of a list of edges.
func pattern(n int, edges [][2]int) (start, index []int32) {
	lists := make([][]int32, n)
	for _, e := range edges {
		if e[0] != e[1] {
			lists[e[0]] = append(lists[e[0]], int32(e[1]))
			lists[e[1]] = append(lists[e[1]], int32(e[0]))
		}
	}
	start = []int32{0}
	for _, l := range lists {
		index = append(index, l...)
		start = append(start, int32(len(index)))
	}
	return unrepeated(start, index)
}

// fill is the number of entries below the diagonal after an elimination in an
// order, found by eliminating.
func fill(n int, edges [][2]int, order []int32) int {
	adjacent := make([]map[int32]bool, n)
	for i := range adjacent {
		adjacent[i] = map[int32]bool{}
	}
	for _, e := range edges {
		if e[0] != e[1] {
			adjacent[e[0]][int32(e[1])], adjacent[e[1]][int32(e[0])] = true, true
		}
	}
	sum := 0
	for _, v := range order {
		sum += len(adjacent[v])
		for a := range adjacent[v] {
			delete(adjacent[a], v)
			for b := range adjacent[v] {
				if a != b {
					adjacent[a][b] = true
				}
			}
		}
		adjacent[v] = nil
	}
	return sum
}

// leastDegree orders by exact degrees.
func leastDegree(n int, edges [][2]int) []int32 {
	adjacent := make([]map[int]bool, n)
	for i := range adjacent {
		adjacent[i] = map[int]bool{}
	}
	for _, e := range edges {
		if e[0] != e[1] {
			adjacent[e[0]][e[1]], adjacent[e[1]][e[0]] = true, true
		}
	}
	var order []int32
	gone := make([]bool, n)
	for range n {
		best := -1
		for v := range n {
			if !gone[v] && (best < 0 || len(adjacent[v]) < len(adjacent[best])) {
				best = v
			}
		}
		gone[best] = true
		order = append(order, int32(best))
		for a := range adjacent[best] {
			delete(adjacent[a], best)
			for b := range adjacent[best] {
				if a != b {
					adjacent[a][b] = true
				}
			}
		}
	}
	return order
}

func TestMinimumDegree(t *testing.T) {
	ctx := context.Background()
	ours, exact := 0, 0
	for seed := range uint64(150) {
		r := rand.New(rand.NewPCG(seed, 3))
		n := 1 + r.IntN(80)
		var edges [][2]int
		for range r.IntN(4 * n) {
			a := r.IntN(n)
			b := r.IntN(n)
			if r.IntN(2) == 0 { // mostly near
				b = min(n-1, a+r.IntN(6))
			}
			edges = append(edges, [2]int{a, b})
		}
		if r.IntN(4) == 0 { // a rail
			for v := range n {
				edges = append(edges, [2]int{0, v})
			}
		}
		start, index := pattern(n, edges)
		order, err := minimumDegree(ctx, start, index, nil)
		if err != nil {
			t.Fatal(err)
		}
		sorted := slices.Clone(order)
		slices.Sort(sorted)
		for i, v := range sorted {
			if int(v) != i || len(sorted) != n {
				t.Fatalf("seed %d: no permutation: %v", seed, order)
			}
		}
		count := 0
		for _, c := range columnCounts(start, index, order) {
			count += int(c)
		}
		if f := fill(n, edges, order); f != count {
			t.Errorf("seed %d: %d entries counted, %d found by eliminating", seed, count, f)
		}
		ours, exact = ours+count, exact+fill(n, edges, leastDegree(n, edges))
	}
	// Approximate degrees must not cost more than a little fill.
	if float64(ours) > 1.05*float64(exact) {
		t.Errorf("%d entries, with exact degrees %d", ours, exact)
	}
}

// TestOrderingOfChainsAndGrids: no fill in trees; in grids about what nested
// dissection leaves, 31·n·log₂(n)/4 entries (A. George, Nested dissection of a
// regular finite element mesh, SIAM J. Numer. Anal. 10 (1973)).
func TestOrderingOfChainsAndGrids(t *testing.T) {
	var chain [][2]int
	for v := 1; v < 1000; v++ {
		chain = append(chain, [2]int{v, v * 7 / 10})
	}
	start, index := pattern(1000, chain)
	order, _ := minimumDegree(context.Background(), start, index, nil)
	if f := fill(1000, chain, order); f != 999 {
		t.Errorf("a tree of 1000 vertices has %d entries, want 999", f)
	}
	for side, most := range map[int]int{10: 560, 30: 9800, 100: 175_000} {
		start, index := gridPattern(side)
		order, _ := minimumDegree(context.Background(), start, index, nil)
		sum := 0
		for _, c := range columnCounts(start, index, order) {
			sum += int(c)
		}
		if sum > most {
			t.Errorf("grid of %d²: %d entries, want at most %d", side, sum, most)
		}
	}
}

// TestOrderingWithWeights: a vertex that stands for two unknowns counts as two.
func TestOrderingWithWeights(t *testing.T) {
	// A star of four leaves: the centre is eliminated first if and only if it
	// weighs more than they do together.
	start, index := pattern(5, [][2]int{{0, 1}, {0, 2}, {0, 3}, {0, 4}})
	for _, c := range []struct {
		weight []int32
		centre bool
	}{{[]int32{1, 1, 1, 1, 1}, false}, {[]int32{9, 1, 2, 1, 2}, true}, {[]int32{5, 2, 2, 2, 2}, false}} {
		order, err := minimumDegree(context.Background(), start, index, c.weight)
		if err != nil || len(order) != 5 {
			t.Fatal(order, err)
		}
		if (order[0] == 0) != c.centre {
			t.Errorf("weights %v: %v", c.weight, order)
		}
	}
}

func TestOrderingStops(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	start, index := gridPattern(20)
	if _, err := minimumDegree(ctx, start, index, nil); err != context.Canceled {
		t.Error(err)
	}
}

func TestPostorder(t *testing.T) {
	for seed := range uint64(50) {
		r := rand.New(rand.NewPCG(seed, 4))
		n := 1 + r.IntN(40)
		parent := make([]int32, n)
		for v := range parent {
			parent[v] = -1
			if v+1 < n && r.IntN(8) > 0 {
				parent[v] = int32(v + 1 + r.IntN(n-v-1))
			}
		}
		post := postorder(parent)
		place := inverse(post)
		size := make([]int, n)
		for k, v := range post {
			size[v]++
			if first := k - size[v] + 1; first < 0 {
				t.Fatal("subtree not in a row")
			}
			if p := parent[v]; p >= 0 {
				size[p] += size[v]
				if place[p] <= place[v] {
					t.Fatalf("parent %d before child %d", p, v)
				}
			}
		}
		if len(post) != n {
			t.Fatal(fmt.Sprint(post))
		}
	}
}
