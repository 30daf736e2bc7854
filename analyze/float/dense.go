package float

import (
	"context"
	"math"
)

// dense is a front at work: wide columns of tall rows, of which the part above
// the diagonal is not used, and the square of the rows below them.
type dense struct {
	values, rest []complex128
	tall, wide   int
	pairs        []bool
	panel        []complex128 // L·D of the columns at hand
}

// panelWidth is how many columns are eliminated before the others are brought
// up to date.
const panelWidth = 4

// factorise eliminates the columns and returns the largest sum of the
// sizes of a column of L.
func (d *dense) factorise(ctx context.Context) (largest float64, err error) {
	work := 0
	for k := 0; k < d.wide; {
		end := min(k+panelWidth, d.wide)
		if d.pairs[end-1] { // a pair stays together
			end--
		}
		largest = max(largest, d.columns(k, end))
		if work += (d.tall - k) * (d.tall - k); work > cancelInterval {
			work = 0
			if err := ctx.Err(); err != nil {
				return 0, err
			}
		}
		d.update(k, end)
		k = end
	}
	return largest, nil
}

// columns eliminates the columns from..end−1 and returns the largest sum of
// the sizes of a column of L.
func (d *dense) columns(from, end int) (largest float64) {
	tall := d.tall
	for k := from; k < end; k++ {
		column := d.values[k*tall:][:tall]
		if d.pairs[k] {
			next := d.values[(k+1)*tall:][:tall]
			d.updateColumn(from, k, k, column[k:])
			d.updateColumn(from, k, k+1, next[k+1:])
			largest = max(largest, d.pair(k, from))
			k++
			continue
		}
		d.updateColumn(from, k, k, column[k:])
		inverse := reciprocal(column[k])
		column[k] = inverse
		p, q := real(inverse), imag(inverse)
		w := d.panel[(k-from)*tall:][:tall]
		sr, si := 0.0, 0.0
		for i := k + 1; i < tall; i++ {
			v := column[i]
			w[i] = v
			x, y := real(v)*p-imag(v)*q, real(v)*q+imag(v)*p
			sr += math.Abs(x)
			si += math.Abs(y)
			column[i] = complex(x, y)
		}
		largest = max(largest, sr+si)
	}
	return largest
}

// pair eliminates columns k and k+1 together.
func (d *dense) pair(k, from int) float64 {
	tall := d.tall
	u, v := d.values[k*tall:][:tall], d.values[(k+1)*tall:][:tall]
	wu, wv := d.panel[(k-from)*tall:][:tall], d.panel[(k+1-from)*tall:][:tall]
	p, q, r := invertPair(u[k], u[k+1], v[k+1])
	u[k], u[k+1], v[k+1] = p, q, r
	sum := norm1(p) * pivotAlone
	for i := k + 2; i < tall; i++ {
		a, b := u[i], v[i]
		la, lb := a*p+b*q, a*q+b*r
		sum += norm1(la) + norm1(lb)
		wu[i], wv[i], u[i], v[i] = a, b, la, lb
	}
	return sum
}

// update takes the products of the columns from..end−1 off the columns after
// them.
func (d *dense) update(from, end int) {
	if end-from == panelWidth {
		for j := end; j < d.tall; j++ {
			d.updateByFour(from, j, d.column(j))
		}
		return
	}
	for j := end; j < d.tall; j++ {
		d.updateColumn(from, end, j, d.column(j))
	}
}

// column is column j from its diagonal on.
func (d *dense) column(j int) []complex128 {
	if j < d.wide {
		return d.values[j*d.tall:][j:d.tall]
	}
	below := d.tall - d.wide
	return d.rest[(j-d.wide)*below:][j-d.wide : below]
}

// updateByFour is updateColumn for a full panel: a row of products at a time, so
// that every entry is fetched and stored once.
func (d *dense) updateByFour(from, j int, to []complex128) {
	tall, n := d.tall, len(to)
	at := from*tall + j
	a, b := d.values[at:][:n], d.values[at+tall:][:n]
	c, e := d.values[at+2*tall:][:n], d.values[at+3*tall:][:n]
	p := d.panel
	ar, ai := real(p[j]), imag(p[j])
	br, bi := real(p[tall+j]), imag(p[tall+j])
	cr, ci := real(p[2*tall+j]), imag(p[2*tall+j])
	er, ei := real(p[3*tall+j]), imag(p[3*tall+j])
	for i, v := range to {
		x, y := real(v), imag(v)
		u := a[i]
		x -= real(u)*ar - imag(u)*ai
		y -= real(u)*ai + imag(u)*ar
		u = b[i]
		x -= real(u)*br - imag(u)*bi
		y -= real(u)*bi + imag(u)*br
		u = c[i]
		x -= real(u)*cr - imag(u)*ci
		y -= real(u)*ci + imag(u)*cr
		u = e[i]
		x -= real(u)*er - imag(u)*ei
		y -= real(u)*ei + imag(u)*er
		to[i] = complex(x, y)
	}
}

// updateColumn brings the rows from j on of column j up to date, for fewer
// columns than a panel has.
func (d *dense) updateColumn(from, end, j int, to []complex128) {
	tall, n := d.tall, len(to)
	at := from*tall + j
	switch end - from {
	case 3:
		a, b, c := d.values[at:][:n], d.values[at+tall:][:n], d.values[at+2*tall:][:n]
		ar, ai := real(d.panel[j]), imag(d.panel[j])
		br, bi := real(d.panel[tall+j]), imag(d.panel[tall+j])
		cr, ci := real(d.panel[2*tall+j]), imag(d.panel[2*tall+j])
		for i, v := range to {
			x, y := real(v), imag(v)
			u := a[i]
			x -= real(u)*ar - imag(u)*ai
			y -= real(u)*ai + imag(u)*ar
			u = b[i]
			x -= real(u)*br - imag(u)*bi
			y -= real(u)*bi + imag(u)*br
			u = c[i]
			x -= real(u)*cr - imag(u)*ci
			y -= real(u)*ci + imag(u)*cr
			to[i] = complex(x, y)
		}
	case 2:
		a, b := d.values[at:][:n], d.values[at+tall:][:n]
		ar, ai := real(d.panel[j]), imag(d.panel[j])
		br, bi := real(d.panel[tall+j]), imag(d.panel[tall+j])
		for i, v := range to {
			x, y := real(v), imag(v)
			u := a[i]
			x -= real(u)*ar - imag(u)*ai
			y -= real(u)*ai + imag(u)*ar
			u = b[i]
			x -= real(u)*br - imag(u)*bi
			y -= real(u)*bi + imag(u)*br
			to[i] = complex(x, y)
		}
	case 1:
		a := d.values[at:][:n]
		ar, ai := real(d.panel[j]), imag(d.panel[j])
		for i, v := range to {
			u := a[i]
			to[i] = complex(real(v)-(real(u)*ar-imag(u)*ai), imag(v)-(real(u)*ai+imag(u)*ar))
		}
	}
}
