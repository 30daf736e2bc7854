package exact

import "slices"

// blocks is the block-triangular form of a square sparse pattern: the order
// of rows and columns in which the matrix is block lower triangular, with the
// smallest blocks possible (A. L. Dulmage and N. S. Mendelsohn, Canadian
// Journal of Mathematics 10 (1958) 517–534; the blocks are the strong
// components of the matched pattern, R. E. Tarjan, SIAM Journal on Computing 1
// (1972) 146–160).
type blocks struct {
	rows, cols []int // position → row, column of the original
	end        []int // block b holds the positions end[b−1] … end[b]−1
	blockOfRow []int
	blockOfCol []int
	needs      [][]int // needs[b]: earlier blocks whose columns the rows of b touch
	negative   bool    // the two orders together are an odd permutation
}

// blockTriangular returns the form, or nil if no choice of one entry per row
// and column exists, which makes the determinant vanish for any values.
func blockTriangular(pattern [][]int) *blocks {
	n := len(pattern)
	rowOf := maximumMatching(pattern, n) // column → row
	for _, r := range rowOf {
		if r < 0 {
			return nil
		}
	}
	colOf := make([]int, n)
	for c, r := range rowOf {
		colOf[r] = c
	}
	b := &blocks{blockOfRow: make([]int, n), blockOfCol: make([]int, n)}
	for _, component := range strongComponents(pattern, rowOf) {
		slices.Sort(component)
		first := len(b.cols)
		for _, r := range component {
			b.blockOfRow[r], b.blockOfCol[colOf[r]] = len(b.end), len(b.end)
			b.rows = append(b.rows, r)
			b.cols = append(b.cols, colOf[r])
		}
		if symmetricPattern(pattern, component, b.cols[first:]) {
			slices.Sort(b.cols[first:]) // so that the block stays symmetric
		}
		b.end = append(b.end, len(b.rows))
	}
	b.needs = make([][]int, len(b.end))
	for r, cols := range pattern {
		k := b.blockOfRow[r]
		for _, c := range cols {
			if e := b.blockOfCol[c]; e != k && !slices.Contains(b.needs[k], e) {
				b.needs[k] = append(b.needs[k], e)
			}
		}
	}
	b.negative = oddPermutation(b.rows) != oddPermutation(b.cols)
	return b
}

// symmetricPattern reports whether the block of the rows, ascending, and
// columns has the same pattern when mirrored.
func symmetricPattern(pattern [][]int, rows, cols []int) bool {
	for _, c := range cols {
		if _, ok := slices.BinarySearch(rows, c); !ok {
			return false
		}
	}
	for _, r := range rows {
		for _, c := range pattern[r] {
			if _, inside := slices.BinarySearch(rows, c); inside && !slices.Contains(pattern[c], r) {
				return false
			}
		}
	}
	return true
}

// maximumMatching returns for every column the row matched to it, −1 for
// none, in a matching of greatest size: cheap assignment, then augmenting
// paths.
func maximumMatching(pattern [][]int, cols int) []int {
	rowOf := make([]int, cols)
	for i := range rowOf {
		rowOf[i] = -1
	}
	var free []int
	for r, list := range pattern {
		c := cheapColumn(list, rowOf, r)
		if c < 0 {
			free = append(free, r)
			continue
		}
		rowOf[c] = r
	}
	seen := make([]int, cols) // the row whose search visited the column last, plus one
	for _, r := range free {
		augment(pattern, rowOf, seen, r)
	}
	return rowOf
}

// cheapColumn returns a column of the list that is not matched yet, the
// diagonal one if possible, or −1.
func cheapColumn(list, rowOf []int, r int) int {
	found := -1
	for _, c := range list {
		if rowOf[c] < 0 && (found < 0 || c == r) {
			found = c
		}
	}
	return found
}

// augment searches an augmenting path from the free row start, depth first
// without recursion.
func augment(pattern [][]int, rowOf, seen []int, start int) bool {
	type frame struct{ row, next, via int } // via: the column taken from the row
	stack := []frame{{row: start, via: -1}}
	for len(stack) > 0 {
		top := &stack[len(stack)-1]
		if top.next == len(pattern[top.row]) {
			stack = stack[:len(stack)-1]
			continue
		}
		c := pattern[top.row][top.next]
		top.next++
		if seen[c] == start+1 {
			continue
		}
		seen[c] = start + 1
		top.via = c
		if rowOf[c] >= 0 {
			stack = append(stack, frame{row: rowOf[c], via: -1})
			continue
		}
		for _, f := range stack {
			rowOf[f.via] = f.row
		}
		return true
	}
	return false
}

// strongComponents returns the strong components of the graph in which a row
// points to the rows matched with its columns, every component after those it
// points to (Tarjan's algorithm without recursion).
func strongComponents(pattern [][]int, rowOf []int) [][]int {
	n := len(pattern)
	index := make([]int, n) // order of discovery, from 1
	low := make([]int, n)
	onStack := make([]bool, n)
	type frame struct{ row, next int }
	var components [][]int
	var stack []int
	count := 0
	for root := range n {
		if index[root] != 0 {
			continue
		}
		calls := []frame{{row: root}}
		for len(calls) > 0 {
			top := &calls[len(calls)-1]
			r := top.row
			if top.next == 0 {
				count++
				index[r], low[r] = count, count
				stack = append(stack, r)
				onStack[r] = true
			}
			if top.next < len(pattern[r]) {
				to := rowOf[pattern[r][top.next]]
				top.next++
				if index[to] == 0 {
					calls = append(calls, frame{row: to})
				} else if onStack[to] {
					low[r] = min(low[r], index[to])
				}
				continue
			}
			calls = calls[:len(calls)-1]
			if len(calls) > 0 {
				parent := calls[len(calls)-1].row
				low[parent] = min(low[parent], low[r])
			}
			if low[r] == index[r] {
				k := len(stack) - 1
				for stack[k] != r {
					k--
				}
				component := slices.Clone(stack[k:])
				for _, v := range component {
					onStack[v] = false
				}
				stack = stack[:k]
				components = append(components, component)
			}
		}
	}
	return components
}

// oddPermutation reports whether the permutation is odd.
func oddPermutation(p []int) bool {
	seen := make([]bool, len(p))
	odd := false
	for i := range p {
		for j := p[i]; !seen[i] && j != i; j = p[j] {
			seen[j] = true
			odd = !odd
		}
		seen[i] = true
	}
	return odd
}
