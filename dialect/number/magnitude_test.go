package number

import (
	"math/big"
	"testing"

	"pgregory.net/rapid"
)

func drawMagnitude(t *rapid.T, label string) magnitude {
	if rapid.IntRange(0, 9).Draw(t, label+" zero") == 0 {
		return magnitude{}
	}
	m := rapid.OneOf(
		rapid.Uint64Range(1<<31, 1<<32-1),
		rapid.Just(uint64(1<<31)),
		rapid.Just(uint64(1<<32-1)),
	).Draw(t, label)
	return magnitude{m, rapid.Int64Range(-80, 80).Draw(t, label+" exponent")}
}

func wellFormed(a magnitude) bool {
	return a.m == 0 || (a.m >= 1<<31 && a.m < 1<<32)
}

// Bounds round the right way and lose less than 2^-29 of the result.
func TestMagnitudeRoundsItsWay(t *testing.T) {
	tiny := big.NewRat(1, 1<<29)
	check := func(t *rapid.T, name string, got magnitude, want *big.Rat, up bool) {
		t.Helper()
		if !wellFormed(got) {
			t.Fatalf("%s: mantissa %x", name, got.m)
		}
		g := got.rat()
		slack := new(big.Rat).Mul(want, tiny)
		low, high := want, new(big.Rat).Add(want, slack)
		if !up {
			low, high = new(big.Rat).Sub(want, slack), want
		}
		if g.Cmp(low) < 0 || g.Cmp(high) > 0 {
			t.Fatalf("%s: got %v, want %v", name, g, want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		a, b := drawMagnitude(t, "a"), drawMagnitude(t, "b")
		ra, rb := a.rat(), b.rat()
		check(t, "addUp", a.addUp(b), new(big.Rat).Add(ra, rb), true)
		check(t, "addDown", a.addDown(b), new(big.Rat).Add(ra, rb), false)
		check(t, "mulUp", a.mulUp(b), new(big.Rat).Mul(ra, rb), true)
		if b.m != 0 {
			check(t, "divUp", a.divUp(b), new(big.Rat).Quo(ra, rb), true)
			check(t, "divDown", a.divDown(b), new(big.Rat).Quo(ra, rb), false)
		}
		if ra.Cmp(rb) >= 0 {
			check(t, "subDown", a.subDown(b), new(big.Rat).Sub(ra, rb), false)
		} else if !a.subDown(b).isZero() {
			t.Fatal("subDown of a smaller number")
		}
		if got := a.cmp(b); got != ra.Cmp(rb) {
			t.Fatalf("cmp %d", got)
		}
		// √a rounded up and down encloses: square it.
		up, down := a.sqrtUp().rat(), a.sqrtDown().rat()
		if up.Mul(up, up).Cmp(ra) < 0 || down.Mul(down, down).Cmp(ra) > 0 || !wellFormed(a.sqrtUp()) || !wellFormed(a.sqrtDown()) {
			t.Fatalf("sqrt of %v", a)
		}
	})
}

func TestMagnitudeOfNumbers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.Int64().Draw(t, "n")
		d := rapid.Int64Range(1, 1<<62).Draw(t, "d")
		r := big.NewRat(n, d)
		lower, upper := magnitudeOfRat(r)
		abs := new(big.Rat).Abs(r)
		if lower.rat().Cmp(abs) > 0 || upper.rat().Cmp(abs) < 0 {
			t.Fatalf("%v not in [%v, %v]", abs, lower, upper)
		}
		for _, prec := range []uint{64, 192, 53, 100} {
			f := new(big.Float).SetPrec(prec).SetRat(r)
			before := new(big.Float).Copy(f)
			lower, upper = magnitudeOf(f)
			exact, _ := f.Rat(nil)
			if exact == nil {
				exact = new(big.Rat)
			}
			exact.Abs(exact)
			if lower.rat().Cmp(exact) > 0 || upper.rat().Cmp(exact) < 0 {
				t.Fatalf("%v not in [%v, %v]", f, lower, upper)
			}
			if f.Cmp(before) != 0 || f.Prec() != before.Prec() {
				t.Fatal("magnitudeOf changed its argument")
			}
		}
	})
}

func TestMagnitudeExtremes(t *testing.T) {
	if !infiniteMagnitude.addUp(powerOfTwo(0)).isInfinite() || !infiniteMagnitude.mulUp(powerOfTwo(-1000)).isInfinite() {
		t.Error("no bound plus or times something is no bound")
	}
	if !powerOfTwo(0).divUp(magnitude{}).isInfinite() {
		t.Error("division by zero must give no bound")
	}
	small := powerOfTwo(leastExponent)
	if z := small.mulUp(small); z.isZero() || !wellFormed(z) {
		t.Errorf("the product of least magnitudes became %v", z)
	}
	if powerOfTwo(100).expm1Up().isInfinite() == false {
		t.Error("expm1 of 2^100 must have no bound")
	}
	// e^(1/2) − 1 = 0.6487…, e^3 − 1 = 19.08…
	if up := powerOfTwo(-1).expm1Up().rat(); up.Cmp(big.NewRat(6487, 10000)) < 0 || up.Cmp(big.NewRat(8, 10)) > 0 {
		t.Errorf("expm1(1/2) bounded by %v", up)
	}
	if up := wholeUp(3, 0).expm1Up().rat(); up.Cmp(big.NewRat(19085, 1000)) < 0 || up.Cmp(big.NewRat(100, 1)) > 0 {
		t.Errorf("expm1(3) bounded by %v", up)
	}
}
