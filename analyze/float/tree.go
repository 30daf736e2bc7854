package float

// unrepeated drops repetitions and the diagonal from a pattern, in place.
func unrepeated(start, index []int32) ([]int32, []int32) {
	n := len(start) - 1
	seen := make([]int32, n)
	kept := int32(0)
	for j := range int32(n) {
		begin, end := start[j], start[j+1]
		start[j] = kept
		seen[j] = j + 1
		for _, i := range index[begin:end] {
			if seen[i] != j+1 {
				seen[i] = j + 1
				index[kept] = i
				kept++
			}
		}
	}
	start[n] = kept
	return start, index[:kept]
}

// eliminationTree returns the parent of every position, −1 for roots: the
// first position below the diagonal of its column of the factor (J. W. H. Liu,
// The role of elimination trees in sparse factorization, SIAM J. Matrix Anal.
// Appl. 11 (1990)). start and index are a symmetric pattern, place the position
// of each vertex and order its inverse.
func eliminationTree(start, index, order, place []int32) []int32 {
	n := len(order)
	parent, ancestor := make([]int32, n), make([]int32, n)
	for k, v := range order {
		parent[k], ancestor[k] = -1, -1
		for _, w := range index[start[v]:start[v+1]] {
			for i := place[w]; i >= 0 && i < int32(k); {
				next := ancestor[i]
				ancestor[i] = int32(k)
				if next < 0 {
					parent[i] = int32(k)
				}
				i = next
			}
		}
	}
	return parent
}

func inverse(order []int32) []int32 {
	place := make([]int32, len(order))
	for k, v := range order {
		place[v] = int32(k)
	}
	return place
}

// columnCounts returns the number of entries below the diagonal in every
// column of the factor, by walking the row subtrees.
func columnCounts(start, index, order []int32) []int32 {
	place := inverse(order)
	parent := eliminationTree(start, index, order, place)
	count, mark := make([]int32, len(order)), make([]int32, len(order))
	for k := range mark {
		mark[k] = -1
	}
	for k, v := range order {
		mark[k] = int32(k)
		for _, w := range index[start[v]:start[v+1]] {
			for i := place[w]; i < int32(k) && mark[i] != int32(k); i = parent[i] {
				mark[i] = int32(k)
				count[i]++
			}
		}
	}
	return count
}
