package float

import (
	"context"
	"errors"
	"slices"
)

// errPivot tells that no usable pivot was found: singular, or so close to it
// that double precision cannot tell.
var errPivot = errors.New("float: no usable pivot")

// luPattern is a sparse LU factorisation without its values: with scaled rows
// and columns, the rows in the order rows and the columns in the order cols,
// the matrix is L·U. Positions count in these orders.
type luPattern struct {
	m              *matrix
	scale          scaling
	rows, cols     []int32 // position → row, column
	place          []int32 // row → position
	lstart, lindex []int32 // columns of L below the diagonal, of ones
	ustart, uindex []int32 // columns of U above the diagonal, ascending
}

// luFactor is a factorisation with values.
type luFactor struct {
	*luPattern
	l, u, inverse []complex128 // inverse: 1/diagonal of U
}

// threshold is how small a preferred pivot may be beside the largest entry of
// its column.
const threshold = 0.01

// luPreorder chooses the order of columns and the preferred pivot of each.
func (m *matrix) luPreorder(ctx context.Context, scaled []complex128) (cols, preferred []int32, err error) {
	preferred, err = m.match(ctx, scaled, threshold)
	if err != nil {
		return nil, nil, err
	}
	if preferred == nil {
		return nil, nil, errPivot
	}
	start, index := m.symmetricPattern(preferred)
	cols, err = minimumDegree(ctx, start, index, nil)
	return cols, preferred, err
}

// symmetricPattern is the pattern of B + Bᵀ, where row preferred[j] of the
// matrix is row j of B.
func (m *matrix) symmetricPattern(preferred []int32) (start, index []int32) {
	to := make([]int32, m.n)
	for j, i := range preferred {
		to[i] = int32(j)
	}
	start = make([]int32, m.n+1)
	for j := range m.n {
		for _, i := range m.row[m.start[j]:m.start[j+1]] {
			start[j+1]++
			start[to[i]+1]++
		}
	}
	for j := range m.n {
		start[j+1] += start[j]
	}
	index = make([]int32, start[m.n])
	fill := append([]int32(nil), start[:m.n]...)
	for j := range int32(m.n) {
		for _, r := range m.row[m.start[j]:m.start[j+1]] {
			i := to[r]
			index[fill[j]] = i
			fill[j]++
			index[fill[i]] = j
			fill[i]++
		}
	}
	return unrepeated(start, index)
}

// factorise finds pivots and values at once, column by column: the pattern of
// each column by depth-first searches in L, then its values (J. R. Gilbert,
// T. Peierls, Sparse partial pivoting in time proportional to arithmetic
// operations, SIAM J. Sci. Stat. Comput. 9 (1988)).
func (m *matrix) factorise(ctx context.Context, a []complex128, scale scaling, cols, preferred []int32) (*luFactor, error) {
	g := &gilbertPeierls{
		f: &luFactor{
			luPattern: &luPattern{m: m, scale: scale, cols: cols, rows: make([]int32, m.n), place: make([]int32, m.n), lstart: make([]int32, 1, m.n+1), ustart: make([]int32, 1, m.n+1)},
			inverse:   make([]complex128, m.n),
		},
		x: make([]complex128, m.n), visited: make([]int32, m.n), next: make([]int32, m.n),
	}
	for i := range m.n {
		g.f.place[i] = -1
	}
	work := 0
	for k, j := range cols {
		if work > cancelInterval {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			work = 0
		}
		done, err := g.column(int32(k), j, preferred[j], a)
		if err != nil {
			return nil, err
		}
		work += done + 16
	}
	g.f.finish()
	return g.f, nil
}

// cancelInterval is how many inner steps of about 2 ns pass between looks at
// the context.
const cancelInterval = 1 << 19

// gilbertPeierls is a factorisation in the making; L still has rows of the
// matrix for positions.
type gilbertPeierls struct {
	f       *luFactor
	x       []complex128 // by row
	visited []int32      // by row: column + 1
	next    []int32      // by row, while it is on the path: the next entry of its column of L
	path    []int32
	reach   []int32 // rows with entries: those with pivots in reverse topological order
	fresh   []int32 // rows without pivot
}

func (g *gilbertPeierls) column(k, j, preferred int32, a []complex128) (work int, err error) {
	f, m := g.f, g.f.m
	g.reach, g.fresh = g.reach[:0], g.fresh[:0]
	for p := m.start[j]; p < m.start[j+1]; p++ {
		g.search(m.row[p], k+1)
	}
	for p := m.start[j]; p < m.start[j+1]; p++ {
		g.x[m.row[p]] = a[p]
	}
	for q := len(g.reach) - 1; q >= 0; q-- {
		i := g.reach[q]
		v := g.x[i]
		g.x[i] = 0
		c := f.place[i]
		f.uindex, f.u = append(f.uindex, c), append(f.u, v)
		if v == 0 {
			continue
		}
		index := f.lindex[f.lstart[c]:f.lstart[c+1]]
		values := f.l[f.lstart[c]:f.lstart[c+1]][:len(index)]
		work += len(index)
		for t, r := range index {
			g.x[r] -= values[t] * v
		}
	}
	f.ustart = append(f.ustart, int32(len(f.u)))
	best, largest := int32(-1), 0.0
	for _, i := range g.fresh {
		if v := norm1(g.x[i]); v > largest {
			best, largest = i, v
		}
	}
	if best < 0 || !(largest < 1e300) || largest < 1e-300 {
		return work, errPivot
	}
	if f.place[preferred] < 0 && g.visited[preferred] == k+1 && norm1(g.x[preferred]) >= threshold*largest {
		best = preferred
	}
	inverse := reciprocal(g.x[best])
	g.x[best] = 0
	f.rows[k], f.place[best], f.inverse[k] = best, k, inverse
	for _, i := range g.fresh {
		if i == best {
			continue
		}
		f.lindex, f.l = append(f.lindex, i), append(f.l, g.x[i]*inverse)
		g.x[i] = 0
	}
	f.lstart = append(f.lstart, int32(len(f.l)))
	return work, nil
}

// search collects the rows that can be reached from row i in L.
func (g *gilbertPeierls) search(i, stamp int32) {
	f := g.f
	if g.visited[i] == stamp {
		return
	}
	g.visited[i] = stamp
	if f.place[i] < 0 {
		g.fresh = append(g.fresh, i)
		return
	}
	g.path = append(g.path[:0], i)
	g.next[i] = f.lstart[f.place[i]]
next:
	for len(g.path) > 0 {
		r := g.path[len(g.path)-1]
		end := f.lstart[f.place[r]+1]
		for g.next[r] < end {
			s := f.lindex[g.next[r]]
			g.next[r]++
			if g.visited[s] == stamp {
				continue
			}
			g.visited[s] = stamp
			if f.place[s] < 0 {
				g.fresh = append(g.fresh, s)
				continue
			}
			g.next[s] = f.lstart[f.place[s]]
			g.path = append(g.path, s)
			continue next
		}
		g.path = g.path[:len(g.path)-1]
		g.reach = append(g.reach, r)
	}
}

// finish turns rows of L into positions and sorts the columns of U.
func (f *luFactor) finish() {
	for k, i := range f.lindex {
		f.lindex[k] = f.place[i]
	}
	var both []indexed
	for k := range f.m.n {
		index, values := f.uindex[f.ustart[k]:f.ustart[k+1]], f.u[f.ustart[k]:f.ustart[k+1]]
		both = both[:0]
		for t := range index {
			both = append(both, indexed{index[t], values[t]})
		}
		slices.SortFunc(both, func(a, b indexed) int { return int(a.index - b.index) })
		for t := range index {
			index[t], values[t] = both[t].index, both[t].value
		}
	}
}

type indexed struct {
	index int32
	value complex128
}

// reciprocal returns 1/z for z neither very large nor very small.
func reciprocal(z complex128) complex128 {
	x, y := real(z), imag(z)
	d := 1 / (x*x + y*y)
	return complex(x*d, -y*d)
}

// refactorise computes the values for new entries in the order chosen before.
// It fails with errPivot where a pivot has become too small for that.
func (p *luPattern) refactorise(ctx context.Context, a []complex128, f *luFactor, x []complex128) error {
	m := p.m
	work := 0
	for k, j := range p.cols {
		if work > cancelInterval {
			if err := ctx.Err(); err != nil {
				return err
			}
			work = 0
		}
		for q := m.start[j]; q < m.start[j+1]; q++ {
			x[p.place[m.row[q]]] = a[q]
		}
		for q := p.ustart[k]; q < p.ustart[k+1]; q++ {
			c := p.uindex[q]
			v := x[c]
			x[c] = 0
			f.u[q] = v
			if v == 0 {
				continue
			}
			index := p.lindex[p.lstart[c]:p.lstart[c+1]]
			values := f.l[p.lstart[c]:p.lstart[c+1]][:len(index)]
			work += len(index)
			for t, r := range index {
				x[r] -= values[t] * v
			}
		}
		pivot := x[k]
		x[k] = 0
		size := norm1(pivot)
		inverse := reciprocal(pivot)
		f.inverse[k] = inverse
		largest := 0.0
		for q := p.lstart[k]; q < p.lstart[k+1]; q++ {
			r := p.lindex[q]
			v := x[r]
			x[r] = 0
			largest = max(largest, norm1(v))
			f.l[q] = v * inverse
		}
		if !(size < 1e300) || size < 1e-300 || size < 0.1*threshold*largest {
			clear(x)
			return errPivot
		}
		work += 16
	}
	return nil
}

// factor makes room for values.
func (p *luPattern) factor() *luFactor {
	return &luFactor{p, make([]complex128, len(p.lindex)), make([]complex128, len(p.uindex)), make([]complex128, p.m.n)}
}

func (f *luFactor) scaling() scaling { return f.scale }

func (f *luFactor) method() string { return "LU" }

func (f *luFactor) entries() int { return len(f.l) + len(f.u) + len(f.inverse) }

// solveSparse sets x to the solution for a right-hand side with few entries;
// transposed is for the transposed equations.
func (f *luFactor) solveSparse(index []int32, value, x, y []complex128, transposed bool) {
	clear(x)
	for k, i := range index {
		x[i] = value[k]
	}
	if transposed {
		f.solveTransposed(x, y)
	} else {
		f.solve(x, y)
	}
}

// solve overwrites b, by rows of the matrix, with the solution by columns; y
// is scratch.
func (f *luFactor) solve(b, y []complex128) {
	n := f.m.n
	for k, i := range f.rows {
		s := f.scale.row[i]
		y[k] = complex(real(b[i])*s, imag(b[i])*s)
	}
	for k := range n {
		v := y[k]
		if v == 0 {
			continue
		}
		index := f.lindex[f.lstart[k]:f.lstart[k+1]]
		values := f.l[f.lstart[k]:f.lstart[k+1]][:len(index)]
		for t, r := range index {
			y[r] -= values[t] * v
		}
	}
	for k := n - 1; k >= 0; k-- {
		v := y[k] * f.inverse[k]
		y[k] = v
		if v == 0 {
			continue
		}
		index := f.uindex[f.ustart[k]:f.ustart[k+1]]
		values := f.u[f.ustart[k]:f.ustart[k+1]][:len(index)]
		for t, r := range index {
			y[r] -= values[t] * v
		}
	}
	for k, j := range f.cols {
		s := f.scale.col[j]
		b[j] = complex(real(y[k])*s, imag(y[k])*s)
	}
}

// solveTransposed overwrites b, by columns of the matrix, with the solution of
// the transposed equations, by rows.
func (f *luFactor) solveTransposed(b, y []complex128) {
	n := f.m.n
	for k, j := range f.cols {
		s := f.scale.col[j]
		y[k] = complex(real(b[j])*s, imag(b[j])*s)
	}
	for k := range n {
		v := y[k]
		index := f.uindex[f.ustart[k]:f.ustart[k+1]]
		values := f.u[f.ustart[k]:f.ustart[k+1]][:len(index)]
		for t, r := range index {
			v -= values[t] * y[r]
		}
		y[k] = v * f.inverse[k]
	}
	for k := n - 1; k >= 0; k-- {
		v := y[k]
		index := f.lindex[f.lstart[k]:f.lstart[k+1]]
		values := f.l[f.lstart[k]:f.lstart[k+1]][:len(index)]
		for t, r := range index {
			v -= values[t] * y[r]
		}
		y[k] = v
	}
	for k, i := range f.rows {
		s := f.scale.row[i]
		b[i] = complex(real(y[k])*s, imag(y[k])*s)
	}
}
