package float

import (
	"context"
	"math"
	"slices"
)

// symmetrise looks for multipliers d of the rows that make the matrix
// symmetric for every s, d[i]·a[i][j] = d[j]·a[j][i] up to rounding. Networks
// of resistors, inductors, capacitors, couplings and independent sources have
// them all 1. It returns nil where there are none. exact tells that the matrix
// is symmetric as it stands.
func (m *matrix) symmetrise() (d []float64, exact bool) {
	start, col, at := m.transposed()
	opposite := make([]int32, len(m.row)) // the entry of (j, i) for that of (i, j)
	for j := range m.n {
		// Rows of column j and columns of row j, both ascending, must agree.
		p, q := m.start[j], start[j]
		if m.start[j+1]-p != start[j+1]-q {
			return nil, false
		}
		for ; p < m.start[j+1]; p, q = p+1, q+1 {
			if m.row[p] != col[q] {
				return nil, false
			}
			opposite[p] = at[q]
		}
	}
	d = make([]float64, m.n)
	exact = true
	var queue []int32
	for root := range int32(m.n) {
		if d[root] != 0 {
			continue
		}
		d[root] = 1
		queue = append(queue[:0], root)
		for len(queue) > 0 {
			j := queue[len(queue)-1]
			queue = queue[:len(queue)-1]
			for p := m.start[j]; p < m.start[j+1]; p++ {
				i, o := m.row[p], opposite[p]
				if d[i] == 0 {
					// d[i]·a[i][j] = d[j]·a[j][i]
					if d[i] = d[j] * ratio(m, o, p); d[i] == 0 {
						return nil, false
					}
					queue = append(queue, i)
				}
				if !m.balanced(p, o, d[i], d[j]) {
					return nil, false
				}
				exact = exact && m.g[p] == m.g[o] && m.c[p] == m.c[o]
			}
		}
	}
	return d, exact
}

// ratio returns entry o by entry p, 0 for none that makes sense.
func ratio(m *matrix, o, p int32) float64 {
	x := m.g[o].hi / m.g[p].hi
	if m.g[p].hi == 0 {
		x = m.c[o].hi / m.c[p].hi
	}
	if !(math.Abs(x) > 1e-100 && math.Abs(x) < 1e100) {
		return 0
	}
	return x
}

// balanced tells whether entry p times x is entry o times y.
func (m *matrix) balanced(p, o int32, x, y float64) bool {
	near := func(a, b float64) bool { return math.Abs(a-b) <= 1e-13*math.Abs(a) }
	return near(m.g[p].hi*x, m.g[o].hi*y) && near(m.c[p].hi*x, m.c[o].hi*y)
}

// symmetricOrder is an order of elimination for a symmetric matrix. Unknowns
// whose diagonal is too small to be a pivot are paired with another unknown;
// vertices are unknowns and pairs. Positions count in the order of
// elimination, which is a postorder of the elimination tree.
type symmetricOrder struct {
	vertices     [][2]int32 // position → unknowns, the second −1 for a single one
	parent       []int32    // elimination tree
	start, index []int32    // for every vertex the later ones that it is joined to when eliminated, ascending
}

// width is the number of unknowns of the vertex at a position.
func (o *symmetricOrder) width(v int32) int32 {
	if o.vertices[v][1] >= 0 {
		return 2
	}
	return 1
}

// below lists the vertices under the diagonal of the column of v.
func (o *symmetricOrder) below(v int32) []int32 { return o.index[o.start[v]:o.start[v+1]] }

// symmetricOrder orders a matrix with symmetric pattern for the scaled values
// at one frequency. The error is errPivot if no choice of pivots exists, or the
// context's.
func (m *matrix) symmetricOrder(ctx context.Context, scaled []complex128) (*symmetricOrder, error) {
	match, err := m.match(ctx, scaled, 1/freshLimit)
	if err != nil {
		return nil, err
	}
	if match == nil {
		return nil, errPivot
	}
	vertices := pairs(match)
	start, index := m.contracted(vertices)
	weight := make([]int32, len(vertices))
	for v, u := range vertices {
		weight[v] = 1
		if u[1] >= 0 {
			weight[v] = 2
		}
	}
	order, err := minimumDegree(ctx, start, index, weight)
	if err != nil {
		return nil, err
	}
	parent := eliminationTree(start, index, order, inverse(order))
	post := postorder(parent)
	for k, p := range post {
		post[k] = order[p]
	}
	order = post
	o := &symmetricOrder{vertices: make([][2]int32, len(order))}
	place := inverse(order)
	for k, v := range order {
		o.vertices[k] = vertices[v]
	}
	o.parent = eliminationTree(start, index, order, place)
	o.start, o.index = structure(start, index, order, place, o.parent)
	return o, nil
}

// pairs turns a matching of columns to rows into single unknowns and pairs:
// along its cycles, every other entry (I. S. Duff, S. Pralet, Strategies for
// scaling and pivoting for sparse symmetric indefinite problems, SIAM J.
// Matrix Anal. Appl. 27 (2005)).
func pairs(match []int32) [][2]int32 {
	taken := make([]bool, len(match))
	out := make([][2]int32, 0, len(match))
	for j := range int32(len(match)) {
		for i := j; !taken[i]; {
			next := match[i]
			taken[i] = true
			if taken[next] {
				out = append(out, [2]int32{i, -1})
				break
			}
			taken[next] = true
			out = append(out, [2]int32{i, next})
			i = match[next]
		}
	}
	return out
}

// contracted is the pattern between vertices.
func (m *matrix) contracted(vertices [][2]int32) (start, index []int32) {
	of := make([]int32, m.n)
	for v, u := range vertices {
		of[u[0]] = int32(v)
		if u[1] >= 0 {
			of[u[1]] = int32(v)
		}
	}
	start = make([]int32, len(vertices)+1)
	index = make([]int32, 0, len(m.row))
	for v, u := range vertices {
		for _, j := range u {
			if j < 0 {
				continue
			}
			for _, i := range m.row[m.start[j]:m.start[j+1]] {
				index = append(index, of[i])
			}
		}
		start[v+1] = int32(len(index))
	}
	return unrepeated(start, index)
}

// postorder lists the nodes of a forest, children before parents, a subtree in
// a row. parent[k] > k or −1.
func postorder(parent []int32) []int32 {
	n := int32(len(parent))
	first, next := make([]int32, n), make([]int32, n)
	for k := range n {
		first[k] = -1
	}
	for k := n - 1; k >= 0; k-- {
		if p := parent[k]; p >= 0 {
			next[k], first[p] = first[p], k
		}
	}
	out := make([]int32, 0, n)
	var path []int32
	for root := range n {
		if parent[root] >= 0 {
			continue
		}
		path = append(path[:0], root)
		for len(path) > 0 {
			k := path[len(path)-1]
			if c := first[k]; c >= 0 {
				first[k] = next[c]
				path = append(path, c)
				continue
			}
			path = path[:len(path)-1]
			out = append(out, k)
		}
	}
	return out
}

// structure lists the positions below the diagonal of every column of the
// factor, ascending.
func structure(start, index, order, place, parent []int32) (s, list []int32) {
	n := len(order)
	mark := make([]int32, n)
	walk := func(visit func(column, row int32)) {
		for k := range mark {
			mark[k] = -1
		}
		for k, v := range order {
			mark[k] = int32(k)
			for _, w := range index[start[v]:start[v+1]] {
				for i := place[w]; i < int32(k) && mark[i] != int32(k); i = parent[i] {
					mark[i] = int32(k)
					visit(i, int32(k))
				}
			}
		}
	}
	s = make([]int32, n+1)
	walk(func(column, _ int32) { s[column+1]++ })
	for k := range n {
		s[k+1] += s[k]
	}
	list = make([]int32, s[n])
	fill := slices.Clone(s[:n])
	walk(func(column, row int32) {
		list[fill[column]] = row
		fill[column]++
	})
	return s, list
}

// interleaved is the same elimination with the branches of the tree taken in
// turns, deepest vertices first. What is computed is the same, but the steps no
// longer wait for one another.
func (o *symmetricOrder) interleaved() *symmetricOrder {
	n := len(o.vertices)
	depth := make([]int32, n)
	deepest := int32(0)
	for v := n - 1; v >= 0; v-- {
		if p := o.parent[v]; p >= 0 {
			depth[v] = depth[p] + 1
			deepest = max(deepest, depth[v])
		}
	}
	place := make([]int32, deepest+2) // first position of each depth
	for _, d := range depth {
		place[deepest-d+1]++
	}
	for d := range deepest + 1 {
		place[d+1] += place[d]
	}
	position := make([]int32, n)
	for v, d := range depth {
		position[v] = place[deepest-d]
		place[deepest-d]++
	}
	p := &symmetricOrder{
		vertices: make([][2]int32, n), parent: make([]int32, n),
		start: make([]int32, n+1), index: make([]int32, 0, len(o.index)),
	}
	for k, v := range inverse(position) {
		p.vertices[k], p.parent[k] = o.vertices[v], -1
		if up := o.parent[v]; up >= 0 {
			p.parent[k] = position[up]
		}
		for _, w := range o.below(v) {
			p.index = append(p.index, position[w])
		}
		slices.Sort(p.index[p.start[k]:])
		p.start[k+1] = int32(len(p.index))
	}
	return p
}
