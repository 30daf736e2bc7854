package float

import (
	"context"
	"errors"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"portlight/analyze/exact"
	"portlight/analyze/network"
)

// FuzzValues compares three ways to a value on random networks: double
// precision, the exact solution at the frequency, and the network function
// evaluated there. None may disagree beyond the stated bound.
func FuzzValues(f *testing.F) {
	for seed := range uint64(20) {
		f.Add(seed, uint8(seed*13), float64(seed)*1.3, seed%2 == 0)
	}
	f.Add(uint64(286), uint8(0xe1), -761.0666666666666, false)
	f.Fuzz(func(t *testing.T, seed uint64, nodes uint8, decade float64, reciprocal bool) {
		ctx := context.Background()
		r := rand.New(rand.NewPCG(seed, 1))
		b := randomNetwork(t, r, 1+int(nodes%12), 8, reciprocal)
		sys, _ := network.Assemble(&b.Network)
		if sys == nil {
			return
		}
		s, err := New(sys)
		if err != nil {
			t.Fatal(err)
		}
		w := math.Pow(10, math.Mod(decade, 9))
		if math.IsNaN(w) || w == 0 {
			return
		}
		omega := new(big.Rat).SetFloat64(w)
		outs, cols := quantities(r, sys)
		got, err := s.At(ctx, w, outs, cols)
		num, det, transferErr := sys.Transfer(ctx, outs, cols)
		if transferErr != nil {
			t.Fatal(transferErr)
		}
		for j, c := range cols {
			xr, xi, exactErr := exactSolution(ctx, sys, omega, c)
			var singular *exact.SingularError
			if errors.As(exactErr, &singular) {
				if !errors.Is(err, ErrSingular) {
					t.Fatalf("singular, but %v", got)
				}
				return
			}
			if errors.Is(err, ErrSingular) {
				return // too close to singular for double precision
			}
			if err != nil || exactErr != nil {
				t.Fatal(err, exactErr)
			}
			for i, o := range outs {
				re, im := exactValue(omega, o, c, xr, xi)
				if d := distance(got.Values[i][j], re, im); !(d <= got.Radius[i][j]) {
					t.Errorf("off by %g, radius %g, value %v", d, got.Radius[i][j], got.Values[i][j])
				}
				nr, ni := onAxis(num[i][j], omega)
				dr, di := onAxis(det, omega)
				if !sameQuotient(nr, ni, dr, di, re, im) {
					t.Errorf("the network function gives another value than the solution at %g", w)
				}
			}
		}
	})
}

// onAxis is the value of a polynomial at jω.
func onAxis(p exact.Poly, omega *big.Rat) (re, im *big.Rat) {
	re, im = new(big.Rat), new(big.Rat)
	for k := p.Degree(); k >= 0; k-- {
		re, im = new(big.Rat).Neg(new(big.Rat).Mul(im, omega)), new(big.Rat).Mul(re, omega)
		re.Add(re, p.Coeff(k))
	}
	return re, im
}

// sameQuotient tells whether n = d·x, exactly.
func sameQuotient(nr, ni, dr, di, xr, xi *big.Rat) bool {
	re := new(big.Rat).Sub(new(big.Rat).Mul(dr, xr), new(big.Rat).Mul(di, xi))
	im := new(big.Rat).Add(new(big.Rat).Mul(dr, xi), new(big.Rat).Mul(di, xr))
	return re.Cmp(nr) == 0 && im.Cmp(ni) == 0
}
