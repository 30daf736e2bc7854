package exact

import "math"

// elimination is the order in which a system is eliminated, with the products
// that make up every entry of its triangular factors. It depends on the
// pattern alone; that the pivots are not zero was tested at one random point.
type elimination struct {
	entries  []factorEntry
	pivots   []pivotStep
	negative []bool    // per block: the pivots form an odd permutation
	border   []int     // entry of border row o, column j at o·rhs + j, −1 if zero
	symmetry *symmetry // for a symmetric elimination, which multiplies the rows by factors
}

// factorEntry is an entry of the factors: source − Σ product of two entries,
// then possibly multiplied by an inverse pivot.
type factorEntry struct {
	source   *intEntry // nil for fill
	row      int       // whose factor the source gets in a symmetric elimination, −1 for none
	products []product
	mirrorOf int32 // one more than the entry this one is, times the inverse pivot; 0 for others
}

// product is a pair of entries of the lower and the upper factor.
type product struct{ l, u int32 }

// pivotStep is one pivot with the entries that become final with it.
type pivotStep struct {
	pivot        int32
	lower, upper []int32 // entries of its column and row that are left
	scaleLower   bool    // the inverse pivot goes into lower, else into upper
	block        int
	col          int   // the column of the pivot
	upperCols    []int // the columns of upper
}

// cell is an entry in the active matrix.
type cell struct {
	index int // its row or column
	entry int32
}

// eliminator is the active matrix with values at one point modulo a prime.
type eliminator struct {
	y        *system
	m        *modulus
	out      *elimination
	value    []uint64
	row, col [][]cell
	work     []int32 // column → entry of the row at hand, plus one
	rowPos   []int
	colPos   []int
}

// eliminate orders the system with values taken at s modulo m, or returns the
// rank deficiency found: nil and the block that is singular there.
func (y *system) eliminate(m *modulus, s uint64) (*elimination, int) {
	z := &eliminator{
		y: y, m: m, out: &elimination{},
		row: make([][]cell, y.n+y.outs), col: make([][]cell, y.n+y.rhs),
		work: make([]int32, y.n+y.rhs),
	}
	for i, r := range y.rows {
		for k := range r {
			e := &r[k]
			z.addCell(i, e.col, factorEntry{source: e}, m.entryAt(e, s))
		}
	}
	for b := range y.end {
		if !z.block(b) {
			return nil, b
		}
	}
	z.collectBorder()
	return z.out, -1
}

// collectBorder notes the entries where the borders meet.
func (z *eliminator) collectBorder() {
	y := z.y
	z.out.border = make([]int, y.outs*y.rhs)
	for o := range y.outs {
		for j := range y.rhs {
			z.out.border[o*y.rhs+j] = -1
		}
		for _, c := range z.row[y.n+o] {
			z.out.border[o*y.rhs+c.index-y.n] = int(c.entry)
		}
	}
}

// entryAt returns the residue of g + s·c.
func (m *modulus) entryAt(e *intEntry, s uint64) uint64 {
	var v uint64
	if e.g != nil {
		v = m.fromBig(e.g)
	}
	if e.c != nil {
		v = m.add(v, m.mul(s, m.fromBig(e.c)))
	}
	return v
}

func (z *eliminator) addCell(i, j int, e factorEntry, v uint64) int32 {
	id := int32(len(z.value))
	z.out.entries = append(z.out.entries, e)
	z.value = append(z.value, v)
	z.row[i] = append(z.row[i], cell{j, id})
	z.col[j] = append(z.col[j], cell{i, id})
	return id
}

// block eliminates the pivots of one block by Markowitz's criterion
// (H. M. Markowitz, Management Science 3 (1957) 255–269).
func (z *eliminator) block(b int) bool {
	start, end := z.y.start(b), z.y.end[b]
	rows := make([]int, 0, end-start)
	for i := start; i < end; i++ {
		rows = append(rows, i)
	}
	var pivotRows, pivotCols []int
	for len(rows) > 0 {
		at, j := z.choose(rows, start, end)
		if at < 0 {
			return false
		}
		i := rows[at]
		rows[at] = rows[len(rows)-1]
		rows = rows[:len(rows)-1]
		pivotRows = append(pivotRows, i-start)
		pivotCols = append(pivotCols, j-start)
		z.pivot(i, j, b)
	}
	z.out.negative = append(z.out.negative, oddPermutation(pivotRows) != oddPermutation(pivotCols))
	return true
}

// choose returns the place in rows and the column of the cheapest pivot whose
// value is not zero: the least product of the numbers of other entries in its
// row and column.
func (z *eliminator) choose(rows []int, start, end int) (at, col int) {
	at, col = -1, -1
	best := math.MaxInt
	for k, i := range rows {
		r := len(z.row[i]) - 1
		if r > best { // even a column with one other entry costs more
			continue
		}
		for _, c := range z.row[i] {
			if c.index < start || c.index >= end || z.value[c.entry] == 0 {
				continue
			}
			cost := r * (len(z.col[c.index]) - 1)
			if cost < best || cost == best && c.index == i && col != rows[at] {
				at, col, best = k, c.index, cost
			}
		}
		if best == 0 {
			return at, col
		}
	}
	return at, col
}

// pivot eliminates with the entry at (i, j).
func (z *eliminator) pivot(i, j, block int) {
	step := pivotStep{block: block, col: j}
	upper, lower := z.row[i][:0:0], z.col[j][:0:0]
	for _, c := range z.row[i] {
		if c.index == j {
			step.pivot = c.entry
		} else {
			upper = append(upper, c)
			step.upper = append(step.upper, c.entry)
			step.upperCols = append(step.upperCols, c.index)
			z.col[c.index] = removeCell(z.col[c.index], i)
		}
	}
	for _, c := range z.col[j] {
		if c.index != i {
			lower = append(lower, c)
			step.lower = append(step.lower, c.entry)
			z.row[c.index] = removeCell(z.row[c.index], j)
		}
	}
	z.row[i], z.col[j] = nil, nil
	step.scaleLower = len(lower) <= len(upper)
	inv := z.m.inverse(z.value[step.pivot])
	for _, l := range lower {
		f := z.m.mul(z.value[l.entry], inv)
		if step.scaleLower {
			z.value[l.entry] = f
		}
		for _, c := range z.row[l.index] {
			z.work[c.index] = c.entry + 1
		}
		for _, u := range upper {
			t := z.m.mul(f, z.value[u.entry])
			id := z.work[u.index] - 1
			if id < 0 {
				id = z.addCell(l.index, u.index, factorEntry{}, 0)
			}
			z.value[id] = z.m.sub(z.value[id], t)
			e := &z.out.entries[id]
			e.products = append(e.products, product{l.entry, u.entry})
		}
		for _, c := range z.row[l.index] {
			z.work[c.index] = 0
		}
	}
	z.out.pivots = append(z.out.pivots, step)
}

// removeCell removes the cell with the index.
func removeCell(list []cell, index int) []cell {
	for k := range list {
		if list[k].index == index {
			list[k] = list[len(list)-1]
			return list[:len(list)-1]
		}
	}
	return list
}
