package exact

import (
	"math"
	"slices"
)

// stampOrder lists the entries pair of row and column after pair, in an order
// that keeps the frontier narrow.
func (z *frontierPlanner) stampOrder() []placedEntry {
	y := z.y
	position := y.pairOrder()
	// Step by step, and within a step rows begun earlier first: they are
	// finished sooner.
	type placed struct {
		placedEntry
		step, rank int
	}
	var list []placed
	for i, r := range y.rows {
		rank := y.n
		if i < y.n {
			rank = position[i]
		} else if i != z.borderRow {
			continue
		}
		for k := range r {
			e := &r[k]
			step := 0
			if i < y.n {
				step = rank
			}
			if e.col < y.n {
				step = max(step, position[e.col])
			} else if e.col != z.borderCol {
				continue
			}
			list = append(list, placed{placedEntry{i, e}, step, rank})
		}
	}
	slices.SortStableFunc(list, func(p, q placed) int {
		if p.step != q.step {
			return p.step - q.step
		}
		return p.rank - q.rank
	})
	out := make([]placedEntry, len(list))
	for k := range list {
		out[k] = list[k].placedEntry
	}
	return out
}

// pairOrder returns the position of every pair of row i and column i in an
// order from one end of the network to the other: breadth first from a
// peripheral pair, always the pair that widens the frontier least (I. P. King,
// International Journal for Numerical Methods in Engineering 2 (1970)
// 523–533).
func (y *system) pairOrder() []int {
	near := make([][]int, y.n)
	for i, r := range y.rows[:y.n] {
		for _, e := range r {
			if e.col < y.n && e.col != i {
				near[i] = append(near[i], e.col)
				near[e.col] = append(near[e.col], i)
			}
		}
	}
	position := make([]int, y.n)
	for i := range position {
		position[i] = -1
	}
	count := 0
	begun := make([]bool, y.n)
	for root := range y.n {
		if position[root] >= 0 {
			continue
		}
		start := farthest(near, farthest(near, root))
		begun[start] = true
		candidates := []int{start}
		for len(candidates) > 0 {
			best, bestNew := 0, math.MaxInt
			for k, i := range candidates {
				grow := 0
				for _, j := range near[i] {
					if !begun[j] {
						grow++
					}
				}
				if grow < bestNew {
					best, bestNew = k, grow
				}
			}
			i := candidates[best]
			candidates = slices.Delete(candidates, best, best+1)
			position[i] = count
			count++
			for _, j := range near[i] {
				if !begun[j] {
					begun[j] = true
					candidates = append(candidates, j)
				}
			}
		}
	}
	return position
}

// farthest returns a vertex farthest from the given one.
func farthest(near [][]int, from int) int {
	seen := make([]bool, len(near))
	seen[from] = true
	queue := []int{from}
	for k := 0; k < len(queue); k++ {
		for _, j := range near[queue[k]] {
			if !seen[j] {
				seen[j] = true
				queue = append(queue, j)
			}
		}
	}
	return queue[len(queue)-1]
}
