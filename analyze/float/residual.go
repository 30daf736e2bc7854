package float

import (
	"math/big"
	"slices"
)

// vector is a sparse vector with entries of double length: g + s·c.
type vector struct {
	index []int32
	g, c  []double
}

// at returns the entry k at a point.
func (v *vector) at(k int, s point) (re, im double) { return s.of(v.g[k], v.c[k]) }

// add puts g or s·c into the vector.
func (v *vector) add(i int, value *big.Rat, reactive bool) error {
	if value == nil || value.Sign() == 0 {
		return nil
	}
	d, ok := doubleOf(value)
	if !ok {
		return ErrRange
	}
	at := -1
	for k, x := range v.index {
		if int(x) == i {
			at = k
		}
	}
	if at < 0 {
		at = len(v.index)
		v.index, v.g, v.c = append(v.index, int32(i)), append(v.g, double{}), append(v.c, double{})
	}
	if reactive {
		v.c[at] = v.c[at].plus(d)
	} else {
		v.g[at] = v.g[at].plus(d)
	}
	return nil
}

// equal tells whether two vectors have the same entries in the same order.
func (v *vector) equal(w *vector) bool {
	return slices.Equal(v.index, w.index) && slices.Equal(v.g, w.g) && slices.Equal(v.c, w.c)
}

// residue is b − A·x (or o − Aᵀ·y) with what went into it.
type residue struct {
	re, im []double
	size   []float64 // |A|·|x| + |b|
}

func newResidue(n int) *residue {
	return &residue{make([]double, n), make([]double, n), make([]float64, n)}
}

// start sets the residue to b.
func (r *residue) start(b *vector, s point) {
	clear(r.re)
	clear(r.im)
	clear(r.size)
	for k, i := range b.index {
		re, im := b.at(k, s)
		r.re[i], r.im[i] = r.re[i].plus(re), r.im[i].plus(im)
		r.size[i] += norm1(complex(re.hi, im.hi))
	}
}

// subtract takes A·x off, or Aᵀ·x; are and aim hold the entries of A.
func (r *residue) subtract(m *matrix, are, aim []double, x []complex128, transposed bool) {
	for j := range m.n {
		for k := m.start[j]; k < m.start[j+1]; k++ {
			to, from := m.row[k], int32(j)
			if transposed {
				to, from = from, to
			}
			v := x[from]
			if v == 0 {
				continue
			}
			g, h, re, im := are[k], aim[k], -real(v), -imag(v)
			r.re[to] = r.re[to].plus(g.scaled(re)).plus(h.scaled(-im))
			r.im[to] = r.im[to].plus(g.scaled(im)).plus(h.scaled(re))
			r.size[to] += norm1(complex(g.hi, h.hi)) * norm1(v)
		}
	}
}

// round fills b with the residue as complex numbers.
func (r *residue) round(b []complex128) {
	for i := range b {
		b[i] = complex(r.re[i].value(), r.im[i].value())
	}
}
