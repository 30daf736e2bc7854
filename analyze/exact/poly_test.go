package exact

import (
	"math/big"
	"testing"

	"pgregory.net/rapid"
)

// drawInt draws an integer of up to the given number of bits, small ones and
// powers of two often.
func drawInt(t *rapid.T, bits int, label string) *big.Int {
	switch rapid.IntRange(0, 3).Draw(t, label+" kind") {
	case 0:
		return big.NewInt(rapid.Int64Range(-9, 9).Draw(t, label))
	case 1:
		v := new(big.Int).Lsh(bigOne, uint(rapid.IntRange(0, bits).Draw(t, label)))
		if rapid.Bool().Draw(t, label+" sign") {
			v.Neg(v)
		}
		return v
	}
	b := rapid.SliceOfN(rapid.Byte(), 1, max(1, bits/8)).Draw(t, label)
	v := new(big.Int).SetBytes(b)
	if rapid.Bool().Draw(t, label+" sign") {
		v.Neg(v)
	}
	return v
}

func drawRat(t *rapid.T, bits int, label string) *big.Rat {
	den := drawInt(t, bits, label+" den")
	if den.Sign() == 0 {
		den = bigOne
	}
	return new(big.Rat).SetFrac(drawInt(t, bits, label+" num"), den)
}

func drawPoly(t *rapid.T, degree, bits int, label string) Poly {
	n := rapid.IntRange(0, degree+1).Draw(t, label+" terms")
	c := make([]*big.Int, n)
	for i := range c {
		c[i] = drawInt(t, bits, label)
	}
	den := drawInt(t, bits/4, label+" den")
	if den.Sign() == 0 {
		den = bigOne
	}
	return PolyFromInts(c, den)
}

// reference multiplies coefficient by coefficient with rationals.
func referenceMul(p, q Poly) Poly {
	if p.IsZero() || q.IsZero() {
		return Poly{}
	}
	c := make([]*big.Rat, p.Degree()+q.Degree()+1)
	for i := range c {
		c[i] = new(big.Rat)
	}
	for i, x := range p.Coefficients() {
		for j, y := range q.Coefficients() {
			c[i+j].Add(c[i+j], new(big.Rat).Mul(x, y))
		}
	}
	return NewPoly(c...)
}

func TestPolyRing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, q := drawPoly(t, 30, 200, "p"), drawPoly(t, 30, 200, "q")
		r := drawRat(t, 40, "r")
		at := func(p Poly) *big.Rat { return p.Eval(r) }
		if got, want := p.Mul(q), referenceMul(p, q); !got.Equal(want) {
			t.Fatalf("product %v, want %v", got, want)
		}
		if at(p.Add(q)).Cmp(new(big.Rat).Add(at(p), at(q))) != 0 {
			t.Fatal("sum")
		}
		if !p.Add(q).Sub(q).Equal(p) || !p.Sub(q).Add(q).Equal(p) || !q.Sub(p).Equal(p.Sub(q).Neg()) {
			t.Fatal("difference")
		}
		if !NewPoly(p.Coefficients()...).Equal(p) {
			t.Fatal("coefficients do not give the polynomial back")
		}
		// (pq)' = p'q + pq'
		lhs := p.Mul(q).Derivative()
		if !lhs.Equal(p.Derivative().Mul(q).Add(p.Mul(q.Derivative()))) {
			t.Fatal("product rule")
		}
		if !q.IsZero() {
			quo, rem := p.DivMod(q)
			if !quo.Mul(q).Add(rem).Equal(p) || rem.Degree() >= max(q.Degree(), 0) && !rem.IsZero() {
				t.Fatalf("division: %v / %v = %v rem %v", p, q, quo, rem)
			}
			if !p.Mul(q).Quo(q).Equal(p) {
				t.Fatal("exact quotient")
			}
			if _, ok := p.divide(q); ok != rem.IsZero() {
				t.Fatal("divisibility")
			}
		}
		if r.Sign() != 0 {
			x := drawRat(t, 20, "x")
			if p.ScaleArgument(r).Eval(x).Cmp(p.Eval(new(big.Rat).Mul(r, x))) != 0 {
				t.Fatal("scaled argument")
			}
			n := max(p.Degree(), 0)
			want := p.Eval(new(big.Rat).Inv(r))
			for range n {
				want.Mul(want, r)
			}
			if p.Reverse().Eval(r).Cmp(want) != 0 {
				t.Fatal("reverse")
			}
		}
	})
}

func TestPolyImaginaryAxis(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawPoly(t, 15, 100, "p")
		w := drawRat(t, 30, "w")
		re, im := p.EvalGaussian(new(big.Rat), w)
		a, b := p.OnImaginaryAxis()
		w2 := new(big.Rat).Mul(w, w)
		if re.Cmp(a.Eval(w2)) != 0 || im.Cmp(new(big.Rat).Mul(w, b.Eval(w2))) != 0 {
			t.Fatal("split on the imaginary axis")
		}
		m := new(big.Rat).Mul(re, re)
		m.Add(m, new(big.Rat).Mul(im, im))
		if m.Cmp(p.MagnitudeSquared().Eval(w2)) != 0 {
			t.Fatal("squared magnitude")
		}
		// Against plain multiplication of Gaussian rationals.
		x := drawRat(t, 30, "x")
		re, im = p.EvalGaussian(x, w)
		ar, ai := new(big.Rat), new(big.Rat)
		for i := p.Degree(); i >= 0; i-- {
			nr := new(big.Rat).Sub(new(big.Rat).Mul(ar, x), new(big.Rat).Mul(ai, w))
			ai = new(big.Rat).Add(new(big.Rat).Mul(ar, w), new(big.Rat).Mul(ai, x))
			ar = nr.Add(nr, p.Coeff(i))
		}
		if re.Cmp(ar) != 0 || im.Cmp(ai) != 0 {
			t.Fatal("value at a Gaussian point")
		}
	})
}

func TestPolySmall(t *testing.T) {
	p := NewPoly(big.NewRat(1, 2), nil, big.NewRat(-3, 4))
	if got, want := p.String(), "-3/4·s^2 + 1/2"; got != want {
		t.Errorf("String %q, want %q", got, want)
	}
	if p.Degree() != 2 || (Poly{}).Degree() != -1 || !(Poly{}).IsZero() {
		t.Error("degree")
	}
	if got := p.Primitive().String(); got != "3·s^2 - 2" {
		t.Errorf("primitive %s", got)
	}
	if got := p.Monic().String(); got != "s^2 - 2/3" {
		t.Errorf("monic %s", got)
	}
	if got := Monomial(big.NewRat(2, 1), 3).Order(); got != 3 {
		t.Errorf("order %d", got)
	}
	if got := p.Pow(2).String(); got != "9/16·s^4 - 3/4·s^2 + 1/4" {
		t.Errorf("square %s", got)
	}
	ints, den := p.Ints()
	if len(ints) != 3 || den.Int64() != 4 || ints[2].Int64() != -3 {
		t.Error("integers and denominator")
	}
}
