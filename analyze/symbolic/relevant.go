package symbolic

// mostUnknowns is up to how many unknowns a network is looked at.
const mostUnknowns = 400

// relevant finds which equations and unknowns the quantity asked for depends
// on and which of these depend on the drive; the others would only multiply
// numerator and denominator by a common factor, or are zero. With every
// equation matched to an unknown in it, an unknown depends on those in its
// equation; which unknowns are found does not depend on the matching (A. L.
// Dulmage, N. S. Mendelsohn, Canadian Journal of Mathematics 10 (1958)
// 517–534). ok is false when there is no matching: the equations are singular
// whatever the values.
func (q *equations) relevant() (rows, columns []int, ok bool) {
	n := len(q.rows)
	if n > mostUnknowns {
		return nil, nil, false
	}
	columnsOf := make([][]int, n)
	for r, row := range q.rows {
		for _, c := range row {
			if len(c.entries) > 0 {
				columnsOf[r] = append(columnsOf[r], c.column)
			}
		}
	}
	rowOf, ok := matching(columnsOf)
	if !ok {
		return nil, nil, false
	}
	needs := make([][]int, n) // by unknown
	serves := make([][]int, n)
	var asked, driven []int
	for c, r := range rowOf {
		needs[c] = columnsOf[r]
		for _, d := range columnsOf[r] {
			serves[d] = append(serves[d], c)
		}
		if len(q.drive[r]) > 0 {
			driven = append(driven, c)
		}
	}
	for _, c := range q.output {
		if len(c.entries) > 0 {
			asked = append(asked, c.column)
		}
	}
	before, after := reached(needs, asked), reached(serves, driven)
	for c := range n {
		if before[c] && after[c] {
			rows, columns = append(rows, rowOf[c]), append(columns, c)
		}
	}
	return rows, columns, true
}

// matching gives every column a row of its own that contains it.
func matching(columnsOf [][]int) (rowOf []int, ok bool) {
	n := len(columnsOf)
	rowOf = make([]int, n)
	for c := range rowOf {
		rowOf[c] = -1
	}
	seen := make([]int, n) // the row last tried for, by column
	var augment func(r, round int) bool
	augment = func(r, round int) bool {
		for _, c := range columnsOf[r] {
			if rowOf[c] < 0 {
				rowOf[c] = r
				return true
			}
		}
		for _, c := range columnsOf[r] {
			if seen[c] == round {
				continue
			}
			seen[c] = round
			if augment(rowOf[c], round) {
				rowOf[c] = r
				return true
			}
		}
		return false
	}
	for r := range n {
		if !augment(r, r+1) {
			return nil, false
		}
	}
	return rowOf, true
}

// reached lists what can be reached from some vertices of a graph, these
// included.
func reached(next [][]int, from []int) []bool {
	out := make([]bool, len(next))
	stack := append([]int(nil), from...)
	for len(stack) > 0 {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		if !out[v] {
			out[v] = true
			stack = append(stack, next[v]...)
		}
	}
	return out
}
