package exact

import (
	"context"
	"math/big"
	"math/rand/v2"
	"testing"
)

// Corrections smaller than the least float64 (2^-1074) are made: the radii are
// asked for at, and around, what that would allow, and far beyond. What the
// roots must satisfy is checked by checkRoots, the product of the linear factors
// among it.
func TestRootsToManyBits(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	source := rand.New(rand.NewPCG(2064, 1040))
	polys := []Poly{
		PolyFromInt64s(120796, 4202, 3545, 65, 25),
		PolyFromInt64s(-2, 0, 0, 1),
		wilkinson(9).Add(Constant(big.NewRat(1, 1000))),
		chebyshev(7),
		unequalLadder(3),
		// A pair 1e-200, and a real cluster 1e-330, apart.
		NewPoly(new(big.Rat).Add(big.NewRat(1, 1), powerOfTenRat(-400)), big.NewRat(2, 1), big.NewRat(1, 1)).Mul(PolyFromInt64s(3, 1)),
		linear(big.NewRat(2, 1)).Mul(linear(new(big.Rat).Add(big.NewRat(2, 1), powerOfTenRat(-330)))).Mul(PolyFromInt64s(5, 1, 7)),
		PolyFromInt64s(1, 1).Pow(3).Sub(Constant(powerOfTenRat(-999))),
	}
	for range 20 {
		c := make([]*big.Rat, 4+source.IntN(6))
		for i := range c {
			c[i] = big.NewRat(1+source.Int64N(200000), 1+source.Int64N(9))
			if source.IntN(3) == 0 {
				c[i].Neg(c[i])
			}
		}
		polys = append(polys, NewPoly(c...))
	}
	precisions := []uint{64, 500, 1000, 1022, 1040, 1080, 1500, 2064, 3000, 4096}
	for i, p := range polys {
		// Each in one go, and one after the other.
		for k, prec := range precisions {
			if i < 3 || (i+k)%5 == 0 {
				checkRoots(t, p, prec)
			}
		}
		set, err := Roots(context.Background(), p)
		if err != nil {
			t.Fatalf("%v: %v", p, err)
		}
		for _, prec := range precisions {
			if _, err := set.At(prec); err != nil {
				t.Errorf("%v at %d bits: %v", p, prec, err)
			}
		}
	}
}
