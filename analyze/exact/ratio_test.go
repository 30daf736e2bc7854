package exact

import (
	"errors"
	"math/big"
	"testing"

	"pgregory.net/rapid"
)

func drawRatio(t *rapid.T, label string) Ratio {
	// Few small factors, so that cancellation is common.
	factors := []Poly{
		PolyFromInt64s(1, 1), PolyFromInt64s(0, 1), PolyFromInt64s(-2, 3),
		PolyFromInt64s(1, 0, 1), PolyFromInt64s(1, 1, 5), PolyFromInt64s(4),
	}
	product := func(label string) Poly {
		p := Constant(drawRat(t, 20, label+" scale"))
		for range rapid.IntRange(0, 4).Draw(t, label+" count") {
			p = p.Mul(rapid.SampledFrom(factors).Draw(t, label))
		}
		return p
	}
	den := product(label + " den")
	if den.IsZero() {
		den = PolyFromInt64s(1)
	}
	f, err := NewRatio(product(label+" num").Add(product(label+" num 2")), den)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func TestRatioField(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f, g := drawRatio(t, "f"), drawRatio(t, "g")
		checked := func(what string, h Ratio) Ratio {
			if euclidGCD(h.Num, h.Den).Degree() > 0 || h.Den.Leading().Cmp(big.NewRat(1, 1)) != 0 {
				t.Fatalf("%s is not in lowest terms with monic denominator: %v", what, h)
			}
			return h
		}
		x := drawRat(t, 30, "x")
		fx, okF := f.Eval(x)
		gx, okG := g.Eval(x)
		same := func(what string, h Ratio, want *big.Rat) {
			if got, ok := checked(what, h).Eval(x); ok && got.Cmp(want) != 0 {
				t.Fatalf("%s at %v: %v, want %v", what, x, got, want)
			}
		}
		if okF && okG {
			same("sum", f.Add(g), new(big.Rat).Add(fx, gx))
			same("difference", f.Sub(g), new(big.Rat).Sub(fx, gx))
			same("product", f.Mul(g), new(big.Rat).Mul(fx, gx))
			same("negative", f.Neg(), new(big.Rat).Neg(fx))
			if q, err := f.Quo(g); err == nil && gx.Sign() != 0 {
				same("quotient", q, new(big.Rat).Quo(fx, gx))
			} else if err != nil && !g.IsZero() {
				t.Fatal(err)
			}
		}
		if !f.Add(g).Sub(g).Equal(f) {
			t.Fatal("f + g − g")
		}
		product := f.Mul(g)
		lhs := checked("derivative", product.Derivative())
		if !lhs.Equal(f.Derivative().Mul(g).Add(f.Mul(g.Derivative()))) {
			t.Fatal("product rule")
		}
		q, r := f.ProperPart()
		checked("proper part", r)
		if !PolyRatio(q).Add(r).Equal(f) || r.Num.Degree() >= r.Den.Degree() {
			t.Fatal("proper part")
		}
		if re, im, ok := f.EvalGaussian(x, new(big.Rat)); ok && (re.Cmp(fx) != 0 || im.Sign() != 0) {
			t.Fatal("Gaussian value on the real axis")
		}
	})
}

func TestRatioZero(t *testing.T) {
	var z Ratio
	one := ConstantRatio(big.NewRat(1, 1))
	if !z.IsZero() || !z.IsConstant() || !z.Add(one).Equal(one) || z.String() != "0" || !z.Mul(one).Equal(z) {
		t.Error("the zero value is not the function 0")
	}
	if _, err := NewRatio(PolyFromInt64s(1), Poly{}); !errors.Is(err, ErrZeroDenominator) {
		t.Errorf("NewRatio(1, 0): %v", err)
	}
	if _, err := one.Quo(z); !errors.Is(err, ErrZeroDenominator) {
		t.Errorf("1/0: %v", err)
	}
}
