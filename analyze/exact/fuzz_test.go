package exact

import (
	"context"
	"errors"
	"math/big"
	"testing"
)

// fuzzPencil reads a small pencil from bytes: the size, then entries of five
// bytes each (place, two numbers over small denominators).
func fuzzPencil(data []byte) *Pencil {
	if len(data) == 0 {
		return NewPencil(0)
	}
	n := int(data[0])%7 + 1
	p := NewPencil(n)
	number := func(a, b byte) *big.Rat {
		r := big.NewRat(int64(int8(a)), int64(b%12)+1)
		return r.Mul(r, powerOfTen(int(b/12)-10))
	}
	for data = data[1:]; len(data) >= 5; data = data[5:] {
		p.Add(int(data[0]>>4)%n, int(data[0]&15)%n, number(data[1], data[2]), number(data[3], data[4]))
	}
	return p
}

// FuzzPencil compares determinants, adjugate entries and solutions with plain
// elimination over the rational numbers.
func FuzzPencil(f *testing.F) {
	f.Add([]byte{}, int64(1), int64(1))
	f.Add([]byte{0, 0, 1, 120, 1, 120}, int64(2), int64(3))
	f.Add([]byte{1, 0x00, 1, 120, 0, 0, 0x01, 1, 120, 1, 120, 0x10, 2, 121, 3, 90, 0x11, 5, 120, 1, 33}, int64(-7), int64(5))
	f.Add([]byte{2, 0x00, 1, 120, 1, 0, 0x11, 1, 120, 1, 0, 0x22, 1, 120, 1, 0, 0x01, 255, 120, 0, 0, 0x12, 255, 120, 0, 0, 0x10, 255, 120, 0, 0, 0x21, 255, 120, 0, 0}, int64(11), int64(13))
	f.Add([]byte{1, 0x00, 1, 120, 1, 120, 0x01, 1, 120, 1, 120, 0x10, 1, 120, 1, 120, 0x11, 1, 120, 1, 120}, int64(1), int64(2))
	f.Fuzz(func(t *testing.T, data []byte, a, b int64) {
		ctx := context.Background()
		if len(data) > 300 || b == 0 {
			return
		}
		p := fuzzPencil(data)
		n := p.Size()
		s := big.NewRat(a, b)
		q, err := p.Prepare(ctx)
		if err != nil {
			t.Fatal(err)
		}
		d := q.Determinant()
		value := rationalDeterminant(p, s)
		if got := d.Eval(s); got.Cmp(value) != 0 {
			t.Fatalf("determinant at %v: %v, want %v", s, got, value)
		}
		if n == 0 {
			return
		}
		rhs, out := Unit(0), Difference(n-1, 0)
		num, err := q.Numerators(ctx, []Vector{rhs}, []Vector{out})
		if err != nil {
			t.Fatal(err)
		}
		want := rationalDeterminant(p.bordered(rhs, out), s)
		if got := num[0][0].Eval(s); got.Cmp(want.Neg(want)) != 0 {
			t.Fatalf("numerator at %v: %v, want %v", s, got, want)
		}
		x, _, err := p.SolveAt(ctx, s, new(big.Rat), rhs)
		var singular *SingularError
		switch {
		case errors.As(err, &singular):
			if value.Sign() != 0 {
				t.Fatalf("called singular with determinant %v", value)
			}
		case err != nil:
			t.Fatal(err)
		case value.Sign() == 0:
			t.Fatal("a singular system was solved")
		default:
			y := new(big.Rat).Sub(x[n-1], x[0])
			if n == 1 {
				y.SetInt64(0)
			}
			if y.Cmp(want.Quo(want, value)) != 0 {
				t.Fatalf("solution %v, want %v", y, want)
			}
		}
	})
}
