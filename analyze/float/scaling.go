package float

import (
	"context"
	"math"
)

// scaling multiplies rows and columns by powers of two, which loses nothing,
// so that the largest entries of rows and columns are about 1 (D. Ruiz, A
// scaling algorithm to equilibrate both rows and columns norms in matrices,
// 2001).
type scaling struct{ row, col []float64 }

// equilibrate scales a matrix with the given values; symmetric scales rows and
// columns alike.
func (m *matrix) equilibrate(a []complex128, symmetric bool) scaling {
	row, col := make([]float64, m.n), make([]float64, m.n) // logarithms to base 2
	log := make([]float64, len(a))
	for k, z := range a {
		log[k] = math.Log2(norm1(z))
	}
	rowMax, colMax := make([]float64, m.n), make([]float64, m.n)
	for range 8 {
		for i := range m.n {
			rowMax[i], colMax[i] = math.Inf(-1), math.Inf(-1)
		}
		for j := range m.n {
			for k := m.start[j]; k < m.start[j+1]; k++ {
				i := m.row[k]
				v := log[k] + row[i] + col[j]
				rowMax[i], colMax[j] = max(rowMax[i], v), max(colMax[j], v)
			}
		}
		for i := range m.n {
			if symmetric {
				rowMax[i] = max(rowMax[i], colMax[i])
				colMax[i] = rowMax[i]
			}
			if !math.IsInf(rowMax[i], -1) {
				row[i] -= 0.5 * rowMax[i]
			}
			if !math.IsInf(colMax[i], -1) {
				col[i] -= 0.5 * colMax[i]
			}
		}
	}
	for i := range m.n {
		row[i], col[i] = math.Exp2(math.Round(row[i])), math.Exp2(math.Round(col[i]))
	}
	return scaling{row, col}
}

// apply scales the values.
func (s scaling) apply(m *matrix, a []complex128) {
	for j := range m.n {
		c := s.col[j]
		for k := m.start[j]; k < m.start[j+1]; k++ {
			f := s.row[m.row[k]] * c
			a[k] = complex(real(a[k])*f, imag(a[k])*f)
		}
	}
}

// match gives every column a row with an entry there, no row twice: large
// entries first, then whatever is left by augmenting paths (I. S. Duff, On
// algorithms for obtaining a maximum transversal, ACM Trans. Math. Softw. 7
// (1981)). The entry on the diagonal is kept where it is larger
// than keep. It returns the row of each
// column, or nil if there is no such choice. The values are scaled.
func (m *matrix) match(ctx context.Context, a []complex128, keep float64) ([]int32, error) {
	rowOf, colOf := make([]int32, m.n), make([]int32, m.n)
	for i := range m.n {
		rowOf[i], colOf[i] = -1, -1
	}
	const large = 0.1
	for j := range m.n {
		for k := m.start[j]; k < m.start[j+1]; k++ {
			if int(m.row[k]) == j && norm1(a[k]) > keep {
				rowOf[j], colOf[j] = int32(j), int32(j)
			}
		}
	}
	t := &transversal{m: m, rowOf: rowOf, colOf: colOf, visited: make([]int32, m.n), next: make([]int32, m.n), from: make([]int32, m.n)}
	t.allowed = make([]bool, len(a))
	for pass := range 3 {
		least := []float64{large, 1e-6, 0}[pass]
		for k, z := range a {
			t.allowed[k] = norm1(z) > least
		}
		for j := range m.n {
			if j&255 == 0 && ctx.Err() != nil {
				return nil, ctx.Err()
			}
			if rowOf[j] < 0 && !t.augment(int32(j)) && pass == 2 {
				return nil, nil
			}
		}
	}
	return rowOf, nil
}

// transversal is a matching of columns to rows in the making.
type transversal struct {
	m            *matrix
	allowed      []bool
	rowOf, colOf []int32
	visited      []int32 // columns, by the search that came there
	next, from   []int32
	search       int32
	path         []int32
}

// augment finds a row for column j by a depth-first search for an alternating
// path.
func (t *transversal) augment(j int32) bool {
	t.search++
	t.path = append(t.path[:0], j)
	t.visited[j] = t.search
	t.next[j] = t.m.start[j]
	for len(t.path) > 0 {
		c := t.path[len(t.path)-1]
		if t.next[c] == t.m.start[c] {
			for k := t.m.start[c]; k < t.m.start[c+1]; k++ { // a free row ends the search
				if i := t.m.row[k]; t.allowed[k] && t.colOf[i] < 0 {
					t.take(i)
					return true
				}
			}
		}
		if t.next[c] == t.m.start[c+1] {
			t.path = t.path[:len(t.path)-1]
			continue
		}
		k := t.next[c]
		t.next[c]++
		i := t.m.row[k]
		if !t.allowed[k] {
			continue
		}
		if d := t.colOf[i]; t.visited[d] != t.search {
			t.visited[d] = t.search
			t.next[d] = t.m.start[d]
			t.from[d] = i
			t.path = append(t.path, d)
		}
	}
	return false
}

// take gives the last column of the path the free row i, the one before it the
// row that this sets free, and so on.
func (t *transversal) take(i int32) {
	for p := len(t.path) - 1; p >= 0; p-- {
		c := t.path[p]
		old := t.rowOf[c]
		t.rowOf[c], t.colOf[i] = i, c
		i = old
	}
}

// shake multiplies every number by 1 + ε with |ε| about 2^-53, at random from a
// seed; 0 leaves them alone.
func shake(a []complex128, seed uint64) {
	if seed == 0 {
		return
	}
	r := seed*0x9e3779b97f4a7c15 | 1
	for k, z := range a {
		r ^= r << 13 // G. Marsaglia, Xorshift RNGs, J. Stat. Softw. 8 (2003)
		r ^= r >> 7
		r ^= r << 17
		f := 1.0
		switch r >> 62 {
		case 0:
			f = 1 + 2*unit
		case 1:
			f = 1 - unit
		}
		a[k] = complex(real(z)*f, imag(z)*f)
	}
}
