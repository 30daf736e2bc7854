package network

import (
	"cmp"
	"context"
	"math/big"
	"slices"
)

// cell is one entry of a sparse row over the Gaussian rationals; a nil im is 0.
type cell struct {
	col    int
	re, im *big.Rat
}

func (c cell) zero() bool { return c.re.Sign() == 0 && (c.im == nil || c.im.Sign() == 0) }

// times returns a·b at a's column.
func (c cell) times(b cell) cell {
	re := new(big.Rat).Mul(c.re, b.re)
	if c.im == nil && b.im == nil {
		return cell{c.col, re, nil}
	}
	im := new(big.Rat)
	var t big.Rat
	if c.im != nil && b.im != nil {
		re.Sub(re, t.Mul(c.im, b.im))
	}
	if c.im != nil {
		im.Add(im, t.Mul(c.im, b.re))
	}
	if b.im != nil {
		im.Add(im, t.Mul(c.re, b.im))
	}
	return cell{c.col, re, im}
}

// minus returns a − b at a's column.
func (c cell) minus(b cell) cell {
	re := new(big.Rat).Sub(c.re, b.re)
	switch {
	case b.im == nil:
		return cell{c.col, re, c.im}
	case c.im == nil:
		return cell{c.col, re, new(big.Rat).Neg(b.im)}
	}
	return cell{c.col, re, new(big.Rat).Sub(c.im, b.im)}
}

// over returns a/b at a's column.
func (c cell) over(b cell) cell {
	if b.im == nil || b.im.Sign() == 0 {
		inv := new(big.Rat).Inv(b.re)
		return c.times(cell{re: inv})
	}
	var t big.Rat
	d := new(big.Rat).Mul(b.re, b.re)
	d.Inv(d.Add(d, t.Mul(b.im, b.im)))
	return c.times(cell{re: new(big.Rat).Mul(b.re, d), im: new(big.Rat).Neg(new(big.Rat).Mul(b.im, d))})
}

// row is a sparse row in ascending order of columns without zeros.
type row []cell

func (r row) find(col int) (int, bool) {
	return slices.BinarySearchFunc(r, col, func(c cell, col int) int { return cmp.Compare(c.col, col) })
}

// at returns the entry at col, a zero cell where there is none.
func (r row) at(col int) cell {
	if i, ok := r.find(col); ok {
		return r[i]
	}
	return cell{col: col, re: new(big.Rat)}
}

// newRow sorts cells, adds up those of one column and drops zeros.
func newRow(cells []cell) row {
	slices.SortStableFunc(cells, func(a, b cell) int { return cmp.Compare(a.col, b.col) })
	var out row
	for _, c := range cells {
		if k := len(out) - 1; k >= 0 && out[k].col == c.col {
			out[k] = out[k].minus(cell{re: minusOne}.times(c))
		} else {
			out = append(out, c)
		}
	}
	return slices.DeleteFunc(out, cell.zero)
}

// less returns r − f·p, where the entry of p at column skip is left out
// together with that of r.
func (r row) less(p row, f cell, skip int) row {
	out := make(row, 0, len(r)+len(p))
	i, j := 0, 0
	for i < len(r) || j < len(p) {
		switch {
		case j == len(p) || i < len(r) && r[i].col < p[j].col:
			if r[i].col != skip {
				out = append(out, r[i])
			}
			i++
		case i == len(r) || p[j].col < r[i].col:
			if p[j].col != skip {
				t := f.times(p[j])
				out = append(out, cell{col: p[j].col, re: new(big.Rat)}.minus(t))
			}
			j++
		default:
			if r[i].col != skip {
				if c := r[i].minus(f.times(p[j])); !c.zero() {
					out = append(out, c)
				}
			}
			i++
			j++
		}
	}
	return out
}

// echelon is a matrix brought into triangular form; columns from cols on are
// right-hand sides.
type echelon struct {
	cols   int
	rows   []row
	pivots []place // in the order of elimination
	rest   []int   // rows without a pivot: what is left is their right-hand sides
	free   []int   // columns without a pivot
}

type place struct{ row, col int }

// eliminate brings rows into triangular form. It overwrites them. Pivots are
// taken from the shortest row left, at the column with the fewest entries.
func eliminate(ctx context.Context, rows []row, cols int) (*echelon, error) {
	e := &echelon{cols: cols, rows: rows}
	q := newQueue(rows, cols)
	taken := make([]bool, cols)
	for {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		p, ok := q.next(rows)
		if !ok {
			break
		}
		taken[p.col] = true
		e.pivots = append(e.pivots, p)
		pivot := rows[p.row]
		at, _ := pivot.find(p.col)
		for _, i := range q.holders(p.col) {
			k, ok := rows[i].find(p.col)
			if q.done[i] || !ok {
				continue
			}
			f := rows[i][k].over(pivot[at])
			q.replace(rows, i, rows[i].less(pivot, f, p.col))
		}
	}
	for i := range rows {
		if !q.done[i] {
			e.rest = append(e.rest, i)
		}
	}
	for c := range cols {
		if !taken[c] {
			e.free = append(e.free, c)
		}
	}
	return e, nil
}

// queue keeps the rows of an elimination by length.
type queue struct {
	cols    int
	done    []bool
	count   []int   // rows with an entry, for each column
	where   [][]int // rows that may have an entry, for each column
	buckets [][]int // rows that may have that many entries
	length  []int   // entries left of the right-hand sides, for each row
}

func newQueue(rows []row, cols int) *queue {
	q := &queue{
		cols: cols, done: make([]bool, len(rows)), count: make([]int, cols),
		where: make([][]int, cols), length: make([]int, len(rows)),
	}
	for i := range rows {
		q.enter(rows, i, nil)
	}
	return q
}

// enter files row i; old is what it was before.
func (q *queue) enter(rows []row, i int, old row) {
	n := 0
	for _, c := range rows[i] {
		if c.col >= q.cols {
			break
		}
		n++
		q.count[c.col]++
		if _, had := old.find(c.col); !had {
			q.where[c.col] = append(q.where[c.col], i)
		}
	}
	q.length[i] = n
	for len(q.buckets) <= n {
		q.buckets = append(q.buckets, nil)
	}
	q.buckets[n] = append(q.buckets[n], i)
}

// leave takes row i's entries out of the counts.
func (q *queue) leave(r row) {
	for _, c := range r {
		if c.col >= q.cols {
			break
		}
		q.count[c.col]--
	}
}

func (q *queue) replace(rows []row, i int, r row) {
	old := rows[i]
	q.leave(old)
	rows[i] = r
	q.enter(rows, i, old)
}

func (q *queue) holders(col int) []int {
	h := q.where[col]
	slices.Sort(h)
	return slices.Compact(h)
}

// next takes the next pivot.
func (q *queue) next(rows []row) (place, bool) {
	for n := 1; n < len(q.buckets); n++ {
		for len(q.buckets[n]) > 0 {
			k := len(q.buckets[n]) - 1
			i := q.buckets[n][k]
			q.buckets[n] = q.buckets[n][:k]
			if q.done[i] || q.length[i] != n {
				continue
			}
			best := rows[i][0].col
			for _, c := range rows[i][:n] {
				if q.count[c.col] < q.count[best] {
					best = c.col
				}
			}
			q.done[i] = true
			q.leave(rows[i])
			return place{i, best}, true
		}
	}
	return place{}, false
}

// back solves for the pivot columns, given values for the free ones; rhs is
// the column of the right-hand side, -1 for zero.
func (e *echelon) back(free map[int]cell, rhs int) []cell {
	x := make([]cell, e.cols)
	for c, v := range free {
		x[c] = v
	}
	for k := len(e.pivots) - 1; k >= 0; k-- {
		p := e.pivots[k]
		r := e.rows[p.row]
		sum := cell{re: new(big.Rat)}
		if rhs >= 0 {
			sum = r.at(rhs)
		}
		for _, c := range r {
			if c.col < e.cols && c.col != p.col && x[c.col].re != nil {
				sum = sum.minus(c.times(x[c.col]))
			}
		}
		if !sum.zero() {
			x[p.col] = sum.over(r.at(p.col))
		}
	}
	for c := range x {
		if x[c].re == nil {
			x[c] = cell{re: new(big.Rat)}
		}
	}
	return x
}

// kernel returns a basis of the null vectors: one for each free column, with 1
// there and 0 at the others.
func (e *echelon) kernel() [][]cell {
	var out [][]cell
	for _, c := range e.free {
		out = append(out, e.back(map[int]cell{c: {re: one}}, -1))
	}
	return out
}

// transpose returns the rows of the transposed matrix of size rows × cols.
func transpose(rows []row, cols int) []row {
	cells := make([][]cell, cols)
	for i, r := range rows {
		for _, c := range r {
			if c.col < cols {
				cells[c.col] = append(cells[c.col], cell{i, c.re, c.im})
			}
		}
	}
	out := make([]row, cols)
	for c := range out {
		out[c] = row(cells[c])
	}
	return out
}
