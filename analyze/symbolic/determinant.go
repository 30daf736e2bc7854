package symbolic

import "math/bits"

// mostRelevant is up to how many unknowns determinants are expanded.
const mostRelevant = 40

// minors expands determinants of one matrix with symbols. Minors are kept, so
// none is expanded twice; each is expanded along the row or column with the
// fewest entries.
type minors struct {
	*work
	cells   [][]poly
	rows    []uint64 // columns with an entry, by row
	columns []uint64 // rows with an entry, by column
	made    map[[2]uint64]poly
}

func newMinors(w *work, cells [][]poly) *minors {
	d := &minors{work: w, cells: cells, made: map[[2]uint64]poly{}}
	d.rows, d.columns = make([]uint64, len(cells)), make([]uint64, len(cells))
	for r, row := range cells {
		for c, p := range row {
			if !p.isZero() {
				d.rows[r] |= 1 << c
				d.columns[c] |= 1 << r
			}
		}
	}
	return d
}

// determinant expands the minor of some rows and columns, equally many.
func (d *minors) determinant(rows, columns uint64) poly {
	if rows == 0 {
		return constant(1)
	}
	key := [2]uint64{rows, columns}
	if p, made := d.made[key]; made {
		return p
	}
	if !d.spend(4) {
		return nil
	}
	line, along, byRow := d.shortest(rows, columns)
	var sum poly
	for ; along != 0 && !d.failed; along &= along - 1 {
		r, c := line, bits.TrailingZeros64(along)
		if !byRow {
			r, c = c, r
		}
		minor := d.determinant(rows&^(1<<r), columns&^(1<<c))
		sign := int64(1)
		if (bits.OnesCount64(rows&(1<<r-1))+bits.OnesCount64(columns&(1<<c-1)))%2 == 1 {
			sign = -1
		}
		for _, t := range d.cells[r][c] {
			sum = d.addScaled(sum, minor, term{t.m, sign * t.c})
		}
	}
	d.made[key] = sum
	return sum
}

// shortest is the row or column of a minor with the fewest entries.
func (d *minors) shortest(rows, columns uint64) (line int, along uint64, byRow bool) {
	least := 65
	for rest := rows; rest != 0; rest &= rest - 1 {
		r := bits.TrailingZeros64(rest)
		if n := bits.OnesCount64(d.rows[r] & columns); n < least {
			least, line, along, byRow = n, r, d.rows[r]&columns, true
		}
	}
	for rest := columns; rest != 0; rest &= rest - 1 {
		c := bits.TrailingZeros64(rest)
		if n := bits.OnesCount64(d.columns[c] & rows); n < least {
			least, line, along, byRow = n, c, d.columns[c]&rows, false
		}
	}
	return line, along, byRow
}
