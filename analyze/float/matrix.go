package float

import (
	"context"
	"errors"
	"fmt"
	"math"

	"portlight/analyze/exact"
)

// ErrRange tells that a value of the network, or the answer, is outside the
// range of double precision.
var ErrRange = errors.New("a value is outside the range of double precision")

// matrix is G + s·C in compressed columns, rows ascending.
type matrix struct {
	n     int
	start []int32
	row   []int32
	g, c  []double
}

// newMatrix rounds a pencil. The error is ErrRange or the context's.
func newMatrix(ctx context.Context, p *exact.Pencil) (*matrix, error) {
	m := &matrix{n: p.Size(), start: make([]int32, p.Size()+1)}
	count := 0
	for e := range p.Entries() {
		m.start[e.Col+1]++
		count++
	}
	if count > math.MaxInt32/4 {
		return nil, fmt.Errorf("float: %d entries are too many", count)
	}
	for j := range m.n {
		m.start[j+1] += m.start[j]
	}
	m.row = make([]int32, count)
	m.g, m.c = make([]double, count), make([]double, count)
	fill := append([]int32(nil), m.start[:m.n]...)
	for e := range p.Entries() { // row by row, so rows ascend in every column
		g, ok := doubleOf(e.G)
		c, also := doubleOf(e.C)
		if !ok || !also {
			return nil, ErrRange
		}
		k := fill[e.Col]
		if k&255 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		fill[e.Col]++
		m.row[k], m.g[k], m.c[k] = int32(e.Row), g, c
	}
	return m, nil
}

// values fills a with G + s·C, rounded.
func (m *matrix) values(s complex128, a []complex128) {
	re, im := real(s), imag(s)
	for k := range a {
		c := m.c[k].hi
		a[k] = complex(m.g[k].hi+re*c, im*c)
	}
}

// point is a value of s in doubles.
type point struct{ re, im double }

func (p point) rounded() complex128 { return complex(p.re.hi, p.im.hi) }

// of returns g + s·c.
func (p point) of(g, c double) (re, im double) {
	if p.re.hi != 0 {
		g = g.plus(c.times(p.re))
	}
	return g, c.times(p.im)
}

// doubles fills re and im with G + s·C in doubles.
func (m *matrix) doubles(s point, re, im []double) {
	for k := range re {
		re[k], im[k] = s.of(m.g[k], m.c[k])
	}
}

// transposed is the pattern of the transposed matrix, with the position of
// every entry in the matrix itself.
func (m *matrix) transposed() (start, col, at []int32) {
	start = make([]int32, m.n+1)
	for _, i := range m.row {
		start[i+1]++
	}
	for i := range m.n {
		start[i+1] += start[i]
	}
	col, at = make([]int32, len(m.row)), make([]int32, len(m.row))
	fill := append([]int32(nil), start[:m.n]...)
	for j := range m.n {
		for k := m.start[j]; k < m.start[j+1]; k++ {
			i := m.row[k]
			col[fill[i]], at[fill[i]] = int32(j), k
			fill[i]++
		}
	}
	return start, col, at
}

// norm1 is a cheap absolute value of a complex number: |re| + |im| is at most
// √2 times and at least once the modulus.
func norm1(z complex128) float64 { return math.Abs(real(z)) + math.Abs(imag(z)) }

// ErrMemory tells that the factors of a network would take too much memory.
var ErrMemory = errors.New("the network is too large: its factors would take more than 1 GB")

// maxEntries is how many complex entries factors may have.
const maxEntries = 1 << 26
