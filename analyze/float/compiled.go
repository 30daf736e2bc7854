package float

import "context"

// compiled is a symmetric factorisation L·D·Lᵀ for networks with little
// fill-in, such as ladders: pivot after pivot, with the place of every product
// listed beforehand. D has blocks of one or two unknowns.
type compiled struct {
	blocks  []block
	shapes  []uint32 // of the blocks, to pass through them in order: twice the count, plus one for a pair
	rows    []int32  // positions of unknowns below each block
	targets []int32  // where the products go, block by block
	size    int      // of the values
}

// block is a pivot of one or two unknowns. Its values lie in a row from base:
// the diagonal (one, or the three of a pair: 11, 21, 22), then one or two for
// every row below.
type block struct {
	base, first int32 // first: position of its first unknown
	rows, count int32 // rows[rows : rows+count]
	wide        int32
}

func (b *block) head() int32 { return 2*b.wide - 1 }

// newCompiled lists the operations for an order.
func newCompiled(o *symmetricOrder) *compiled {
	c := &compiled{blocks: make([]block, len(o.vertices))}
	first := make([]int32, len(o.vertices)+1)
	for v := range int32(len(o.vertices)) {
		first[v+1] = first[v] + o.width(v)
	}
	base := int32(0)
	for v := range int32(len(o.vertices)) {
		b := block{base: base, first: first[v], rows: int32(len(c.rows)), wide: o.width(v)}
		for _, w := range o.below(v) {
			c.rows = append(c.rows, first[w])
			if o.width(w) == 2 {
				c.rows = append(c.rows, first[w]+1)
			}
		}
		b.count = int32(len(c.rows)) - b.rows
		base += b.head() + b.wide*b.count
		c.blocks[v] = b
		c.shapes = append(c.shapes, uint32(2*b.count+b.wide-1))
	}
	c.size = int(base)
	for v := range int32(len(o.vertices)) {
		b := &c.blocks[v]
		below := c.below(b)
		k := 0
		for _, w := range o.below(v) {
			for range o.width(w) {
				c.aim(&c.blocks[w], below[k:])
				k++
			}
		}
	}
	return c
}

func (c *compiled) below(b *block) []int32 { return c.rows[b.rows:][:b.count] }

// aim lists the places of the products for column rows[0], which belongs to
// block t, and all rows.
func (c *compiled) aim(t *block, rows []int32) {
	column := rows[0] - t.first
	below := c.below(t)
	a := int32(0)
	for _, r := range rows {
		if r < t.first+t.wide {
			c.targets = append(c.targets, t.base+column+(r-t.first))
			continue
		}
		for below[a] != r {
			a++
		}
		c.targets = append(c.targets, t.base+t.head()+t.wide*a+column)
	}
}

// slot is the place of the entry at positions (row, column), row ≥ column.
func (c *compiled) slot(blockOf []int32, row, column int32) int32 {
	t := &c.blocks[blockOf[column]]
	if row < t.first+t.wide {
		return t.base + (column - t.first) + (row - t.first)
	}
	below := c.below(t)
	low, high := 0, len(below)
	for low < high {
		if mid := (low + high) / 2; below[mid] < row {
			low = mid + 1
		} else {
			high = mid
		}
	}
	return t.base + t.head() + t.wide*int32(low) + (column - t.first)
}

// factorise turns the entries in x into the factors: the inverse of D in place
// of the diagonal. It fails with errPivot where the sizes in a column of L sum
// up to more than limit.
func (c *compiled) factorise(ctx context.Context, x []complex128, limit float64) error {
	work, base := 0, 0
	targets := c.targets
	for _, s := range c.shapes {
		var sum float64
		count := int(s >> 1)
		products := count * (count + 1) / 2
		aim := targets[:products]
		targets = targets[products:]
		switch {
		case s == 2:
			// In chains every step waits for the one before: what does not
			// need the division is done beside it.
			v := x[base:][:2]
			p, q := real(v[0]), imag(v[0])
			m := 1 / (p*p + q*q)
			t := v[1] * v[1] * complex(p, -q)
			x[aim[0]] -= complex(real(t)*m, imag(t)*m)
			v[0] = complex(p*m, -q*m)
			v[1] *= v[0]
			sum = norm1(v[1])
			base += 2
		case s == 4:
			v := x[base:][:3]
			aim = aim[:3]
			p, q := real(v[0]), imag(v[0])
			m := 1 / (p*p + q*q)
			inverse := complex(p*m, -q*m)
			a, b := v[1], v[2]
			x[aim[0]] -= a * a * inverse
			x[aim[1]] -= a * b * inverse
			x[aim[2]] -= b * b * inverse
			v[0], v[1], v[2] = inverse, a*inverse, b*inverse
			sum = norm1(v[1]) + norm1(v[2])
			base += 3
		case s&1 == 0:
			sum = eliminateSingle(x, base, count, aim)
			base += 1 + count
		default:
			sum = eliminatePair(x, base, count, aim)
			base += 3 + 2*count
		}
		if !(sum <= limit) {
			return errPivot
		}
		if work += products + 8; work > cancelInterval {
			work = 0
			if err := ctx.Err(); err != nil {
				return err
			}
		}
	}
	return nil
}

// eliminateSingle eliminates one unknown and returns the sum of the sizes of
// its entries of L.
func eliminateSingle(x []complex128, base, count int, targets []int32) float64 {
	inverse := reciprocal(x[base])
	sum := norm1(inverse) * pivotAlone
	x[base] = inverse
	v := x[base+1:][:count]
	for a, va := range v {
		l := va * inverse
		sum += norm1(l)
		rest := v[a:]
		aim := targets[:len(rest)]
		targets = targets[len(rest):]
		for t, vb := range rest {
			x[aim[t]] -= l * vb
		}
		v[a] = l
	}
	return sum
}

// pivotAlone makes a pivot that is next to nothing show, even where its column
// has no other entries.
const pivotAlone = 1e-12

// eliminatePair does so for a pair.
func eliminatePair(x []complex128, base, count int, targets []int32) float64 {
	d := x[base:][:3]
	p, q, r := invertPair(d[0], d[1], d[2])
	d[0], d[1], d[2] = p, q, r
	sum := norm1(p) * pivotAlone
	v := x[base+3:][:2*count]
	for a := 0; a < len(v); a += 2 {
		u, w := v[a], v[a+1]
		lu, lw := u*p+w*q, u*q+w*r
		sum += norm1(lu) + norm1(lw)
		for t := a; t < len(v); t += 2 {
			x[targets[(t-a)/2]] -= lu*v[t] + lw*v[t+1]
		}
		targets = targets[(len(v)-a)/2:]
		v[a], v[a+1] = lu, lw
	}
	return sum
}

// invertPair returns the inverse of the symmetric matrix (a b; b c).
func invertPair(a, b, c complex128) (p, q, r complex128) {
	det := reciprocal(a*c - b*b)
	return c * det, -b * det, a * det
}

// solve overwrites y, by position, with the solution. Blocks, rows and values
// are passed in step, forwards and then backwards.
func (c *compiled) solve(x, y []complex128) {
	base, row, first := 0, 0, 0
	for _, s := range c.shapes {
		count := int(s >> 1)
		if s&1 == 0 {
			if v := y[first]; v != 0 {
				l := x[base+1:][:count]
				for a, r := range c.rows[row:][:count] {
					y[r] -= l[a] * v
				}
			}
			base += 1 + count
			first++
		} else {
			u, w := y[first], y[first+1]
			l := x[base+3:][:2*count]
			for a, r := range c.rows[row:][:count] {
				y[r] -= l[2*a]*u + l[2*a+1]*w
			}
			base += 3 + 2*count
			first += 2
		}
		row += count
	}
	for k := len(c.shapes) - 1; k >= 0; k-- {
		s := c.shapes[k]
		count := int(s >> 1)
		row -= count
		if s&1 == 0 {
			base -= 1 + count
			first--
			d := x[base:][:1+count]
			v := y[first] * d[0]
			d = d[1:]
			for a, r := range c.rows[row:][:count] {
				v -= d[a] * y[r]
			}
			y[first] = v
		} else {
			base -= 3 + 2*count
			first -= 2
			d := x[base:][:3+2*count]
			u, w := y[first], y[first+1]
			u, w = u*d[0]+w*d[1], u*d[1]+w*d[2]
			d = d[3:]
			for a, r := range c.rows[row:][:count] {
				u -= d[2*a] * y[r]
				w -= d[2*a+1] * y[r]
			}
			y[first], y[first+1] = u, w
		}
	}
}
