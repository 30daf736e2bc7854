package exact

import (
	"context"
	"fmt"
	"math/big"
	"testing"
)

// gridPoly is the denominator of an RC mesh of k×k nodes with unequal values.
func gridPoly(t testing.TB, k int) Poly {
	p := NewPencil(k * k)
	edge := func(a, b int, g int64) {
		y := big.NewRat(g, 1000)
		p.Add(a, a, y, nil)
		p.Add(b, b, y, nil)
		p.Add(a, b, new(big.Rat).Neg(y), nil)
		p.Add(b, a, new(big.Rat).Neg(y), nil)
	}
	for r := range k {
		for c := range k {
			i := r*k + c
			p.Add(i, i, nil, big.NewRat(int64(10+(i*37)%23), 1000000000))
			if c+1 < k {
				edge(i, i+1, int64(10+(i*53)%17))
			}
			if r+1 < k {
				edge(i, i+k, int64(10+(i*29)%19))
			}
		}
	}
	p.Add(0, 0, big.NewRat(1, 50), nil)
	q, err := p.Prepare(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	d, err := q.DeterminantContext(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// unequalLadder is a ladder of n sections with values like those of a filter.
func unequalLadder(n int) Poly {
	u, i := Constant(big.NewRat(1, 1)), Constant(big.NewRat(1, 600))
	for k := range int64(n) {
		z := NewPoly(big.NewRat(10+k%7, 10), big.NewRat(47+(k*13)%29, 100000))
		y := NewPoly(big.NewRat(1, 1000000), big.NewRat(22+(k*17)%31, 1000000000))
		u = u.Add(z.Mul(i))
		i = i.Add(y.Mul(u))
	}
	return u.Add(i.Scale(big.NewRat(50, 1)))
}

// Targets, to a relative radius of 1e-15 on one thread: ladders of 10/20/50/100
// sections 0.2/0.6/6/30 ms; meshes of 5²/7²/10² nodes 1/6/40 ms.
func BenchmarkRoots(b *testing.B) {
	run := func(name string, p Poly) {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				set, err := Roots(context.Background(), p)
				if err != nil {
					b.Fatal(err)
				}
				if _, err := set.At(50); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	for _, n := range []int{10, 20, 50, 100} {
		run(fmt.Sprintf("ladder/%d", n), unequalLadder(n))
	}
	for _, k := range []int{5, 7, 10} {
		run(fmt.Sprintf("mesh/%d", k), gridPoly(b, k))
	}
}
