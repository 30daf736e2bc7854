package exact

import (
	"math/big"
	"testing"

	"pgregory.net/rapid"
)

// euclidGCD is the monic greatest common divisor by Euclid's algorithm over
// the rationals.
func euclidGCD(a, b Poly) Poly {
	for !b.IsZero() {
		_, r := a.DivMod(b)
		a, b = b, r
	}
	return a.Monic()
}

func TestGCD(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawPoly(t, 6, 80, "c")
		a, b := drawPoly(t, 8, 80, "a").Mul(c), drawPoly(t, 8, 80, "b").Mul(c)
		g := GCD(a, b)
		if !g.Monic().Equal(euclidGCD(a, b)) {
			t.Fatalf("GCD(%v, %v) = %v, want a multiple of %v", a, b, g, euclidGCD(a, b))
		}
		if !g.Equal(g.Primitive()) {
			t.Fatalf("%v is not primitive", g)
		}
	})
}

func TestSquareFree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := PolyFromInt64s(rapid.Int64Range(1, 9).Draw(t, "content"))
		for range rapid.IntRange(0, 5).Draw(t, "factors") {
			p = p.Mul(drawPoly(t, 3, 20, "f").Pow(rapid.IntRange(1, 4).Draw(t, "power")))
		}
		if p.Degree() < 1 {
			return
		}
		product := PolyFromInt64s(1)
		last := 0
		radical := PolyFromInt64s(1)
		for _, f := range SquareFree(p) {
			if f.Multiplicity <= last || f.Poly.Degree() < 1 {
				t.Fatal("order or degree")
			}
			last = f.Multiplicity
			if euclidGCD(f.Poly, f.Poly.Derivative()).Degree() != 0 {
				t.Fatalf("%v has a repeated root", f.Poly)
			}
			product = product.Mul(f.Poly.Pow(f.Multiplicity))
			radical = radical.Mul(f.Poly)
		}
		if !product.Equal(p.Primitive()) {
			t.Fatalf("product %v, want %v", product, p.Primitive())
		}
		if !radical.Equal(p.Radical()) || euclidGCD(radical, radical.Derivative()).Degree() != 0 {
			t.Fatal("radical")
		}
	})
}

// randomPoly returns a polynomial with coefficients of the given size from a
// fixed sequence.
func randomPoly(seed int64, degree, bits int) Poly {
	c := make([]*big.Int, degree+1)
	x := big.NewInt(seed*2 + 1)
	mod := new(big.Int).Lsh(bigOne, uint(bits))
	mul, _ := new(big.Int).SetString("92709568269121840386109413", 10)
	for i := range c {
		for range bits/64 + 1 {
			x.Mul(x, mul)
			x.Add(x, big.NewInt(int64(i)+12345))
			x.Mod(x, mod)
		}
		c[i] = new(big.Int).Set(x)
		if i%3 == 1 {
			c[i].Neg(c[i])
		}
	}
	return PolyFromInts(c, nil)
}

func BenchmarkGCDDegree200(b *testing.B) {
	p, q, c := randomPoly(1, 200, 1000), randomPoly(2, 200, 1000), randomPoly(3, 20, 100)
	b.Run("coprime", func(b *testing.B) {
		for b.Loop() {
			if GCD(p, q).Degree() != 0 {
				b.Fatal("not coprime")
			}
		}
	})
	b.Run("common", func(b *testing.B) {
		p, q := p.Mul(c), q.Mul(c)
		for b.Loop() {
			if !GCD(p, q).Equal(c.Primitive()) {
				b.Fatal("wrong divisor")
			}
		}
	})
}
