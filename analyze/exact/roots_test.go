package exact

import (
	"context"
	"fmt"
	"math/big"
	"testing"
)

// ladderPoly is the denominator of a doubly terminated ladder of n sections,
// each a series r + s·l and a shunt s·c.
func ladderPoly(n int, r, l, c *big.Rat) Poly {
	z, y := NewPoly(r, l), NewPoly(nil, c)
	u, i := Constant(big.NewRat(1, 1)), Constant(big.NewRat(1, 1))
	for range n {
		u = u.Add(z.Mul(i))
		i = i.Add(y.Mul(u))
	}
	return u.Add(i)
}

func multiply(factors ...Poly) Poly {
	p := PolyFromInt64s(1)
	for _, f := range factors {
		p = p.Mul(f)
	}
	return p
}

func TestLadder(t *testing.T) {
	for _, n := range []int{2, 5, 10, 20, 50, 100} {
		p := ladderPoly(n, big.NewRat(1, 10), big.NewRat(1, 1), big.NewRat(1, 1))
		set, err := Roots(context.Background(), p)
		if err != nil {
			t.Fatal(err)
		}
		roots, _ := set.At(50)
		fmt.Println(n, p.Degree(), len(roots), set.units[0].solver.roots[0].work)
		for i, r := range roots {
			if i < 4 {
				fmt.Println(r.Re, r.Im, r.Real, r.Imaginary, r.Radius)
			}
		}
	}
}
