package exact

import (
	"fmt"
	"iter"
	"math/big"
)

// Pencil is a square matrix G + s·C with sparse rational entries. Build it
// with NewPencil and Add; once it is asked questions it must not change any
// more, and may then be shared between goroutines.
type Pencil struct {
	rows [][]Entry
}

// Entry is one stored entry of a pencil, G + s·C at (Row, Col). G and C are
// never nil in what Entries yields and must not be modified.
type Entry struct {
	Row, Col int
	G, C     *big.Rat
}

// Component is one nonzero component of a sparse vector.
type Component struct {
	Index int
	Value *big.Rat
}

// Vector is a sparse vector of rational numbers. Components with the same
// index add up; nil values stand for zero.
type Vector []Component

// Unit returns the vector with a one at the index.
func Unit(index int) Vector { return Vector{{index, big.NewRat(1, 1)}} }

// Difference returns the vector with one at plus and minus one at minus; a
// negative index is left out. It picks the voltage between two nodes.
func Difference(plus, minus int) Vector {
	var v Vector
	if plus >= 0 {
		v = append(v, Component{plus, big.NewRat(1, 1)})
	}
	if minus >= 0 {
		v = append(v, Component{minus, big.NewRat(-1, 1)})
	}
	return v
}

// SingularError tells that a pencil is singular, for every s or at the point
// of a solution, and which equations and unknowns are at fault: a
// combination of the equations Rows loses its left-hand side, and a
// combination of the unknowns Cols is not determined.
type SingularError struct {
	Rows, Cols []int
}

func (e *SingularError) Error() string {
	return fmt.Sprintf("singular system: equations %v, unknowns %v", e.Rows, e.Cols)
}

// NewPencil returns the n-by-n pencil 0.
func NewPencil(n int) *Pencil { return &Pencil{rows: make([][]Entry, n)} }

// Size returns the number of rows and of columns.
func (p *Pencil) Size() int { return len(p.rows) }

// Add adds g + s·c to the entry at (row, col); nil stands for zero. It panics
// if the place is outside the pencil. The arguments are copied.
func (p *Pencil) Add(row, col int, g, c *big.Rat) {
	if row < 0 || row >= len(p.rows) || col < 0 || col >= len(p.rows) {
		panic(fmt.Sprintf("exact: entry (%d, %d) of a pencil of size %d", row, col, len(p.rows)))
	}
	e := p.entry(row, col)
	if g != nil {
		e.G.Add(e.G, g)
	}
	if c != nil {
		e.C.Add(e.C, c)
	}
}

// entry returns the entry at (row, col), making it if need be.
func (p *Pencil) entry(row, col int) *Entry {
	r := p.rows[row]
	for i := range r {
		if r[i].Col == col {
			return &r[i]
		}
	}
	p.rows[row] = append(r, Entry{row, col, new(big.Rat), new(big.Rat)})
	return &p.rows[row][len(r)]
}

// Entries yields the entries that are not zero, row by row, in the order in
// which they were first added.
func (p *Pencil) Entries() iter.Seq[Entry] {
	return func(yield func(Entry) bool) {
		for _, r := range p.rows {
			for _, e := range r {
				if (e.G.Sign() != 0 || e.C.Sign() != 0) && !yield(e) {
					return
				}
			}
		}
	}
}

// bordered returns the pencil [[M, rhs], [outᵀ, 0]], whose determinant is
// −outᵀ·adj(M)·rhs.
func (p *Pencil) bordered(rhs, out Vector) *Pencil {
	n := p.Size()
	q := NewPencil(n + 1)
	for i, r := range p.rows {
		q.rows[i] = append([]Entry(nil), r...)
	}
	for _, v := range rhs {
		q.Add(v.Index, n, v.Value, nil)
	}
	for _, v := range out {
		q.Add(n, v.Index, v.Value, nil)
	}
	return q
}
