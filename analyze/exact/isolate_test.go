package exact

import (
	"context"
	"errors"
	"math/big"
	"testing"

	"pgregory.net/rapid"
)

// checkIsolation checks what IsolateRealRoots promises, with Sturm's theorem
// as the judge.
func checkIsolation(t interface{ Fatalf(string, ...any) }, p Poly, lo, hi *big.Rat, roots []Interval) {
	if got, want := len(roots), SturmCount(p, lo, hi); got != want {
		t.Fatalf("%d roots of %v in [%v, %v], want %d", got, p, lo, hi, want)
	}
	if got := CountRealRoots(p, lo, hi); got != len(roots) {
		t.Fatalf("%d roots counted, %d isolated", got, len(roots))
	}
	for i, v := range roots {
		if v.Lo.Cmp(v.Hi) > 0 || lo != nil && v.Lo.Cmp(lo) < 0 || hi != nil && v.Hi.Cmp(hi) > 0 {
			t.Fatalf("interval [%v, %v] leaves the range", v.Lo, v.Hi)
		}
		if i > 0 && (roots[i-1].Hi.Cmp(v.Lo) > 0 || roots[i-1].IsPoint() && v.IsPoint() && roots[i-1].Hi.Cmp(v.Lo) == 0) {
			t.Fatalf("intervals %d and %d overlap", i-1, i)
		}
		if SturmCount(p, v.Lo, v.Hi) != 1 {
			t.Fatalf("interval [%v, %v] holds %d roots", v.Lo, v.Hi, SturmCount(p, v.Lo, v.Hi))
		}
		if !v.IsPoint() && (p.EvalSign(v.Lo) == 0 || p.EvalSign(v.Hi) == 0) {
			t.Fatalf("an end of [%v, %v] is a root", v.Lo, v.Hi)
		}
	}
}

// drawRooted draws a polynomial with some rational and some close roots.
func drawRooted(t *rapid.T, label string) Poly {
	p := drawPoly(t, 4, 30, label)
	if p.IsZero() {
		p = PolyFromInt64s(1)
	}
	for range rapid.IntRange(0, 4).Draw(t, label+" roots") {
		a := rapid.Int64Range(-8, 8).Draw(t, label+" root")
		b := rapid.SampledFrom([]int64{1, 2, 3, 1 << 40}).Draw(t, label+" over")
		p = p.Mul(PolyFromInt64s(-a, b))
	}
	return p
}

func TestIsolateRealRoots(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawRooted(t, "p")
		var lo, hi *big.Rat
		if rapid.Bool().Draw(t, "lo") {
			lo = big.NewRat(rapid.Int64Range(-9, 9).Draw(t, "lo"), rapid.Int64Range(1, 3).Draw(t, "lo den"))
		}
		if rapid.Bool().Draw(t, "hi") {
			hi = big.NewRat(rapid.Int64Range(-9, 9).Draw(t, "hi"), rapid.Int64Range(1, 3).Draw(t, "hi den"))
		}
		roots := IsolateRealRoots(p, lo, hi)
		checkIsolation(t, p, lo, hi, roots)
		q := drawRooted(t, "q")
		width := big.NewRat(1, 1<<rapid.IntRange(0, 60).Draw(t, "width"))
		for _, v := range roots {
			w := RefineRoot(p, v, width)
			if w.Width().Cmp(width) > 0 || w.Lo.Cmp(v.Lo) < 0 || w.Hi.Cmp(v.Hi) > 0 || SturmCount(p, w.Lo, w.Hi) != 1 {
				t.Fatalf("[%v, %v] refined to [%v, %v]", v.Lo, v.Hi, w.Lo, w.Hi)
			}
			sign := SignAtRoot(q, p, v)
			if sign == 0 {
				if g := GCD(p, q); q.IsZero() == false && SturmCount(g, v.Lo, v.Hi) != 1 {
					t.Fatalf("%v is not zero at the root of %v in [%v, %v]", q, p, v.Lo, v.Hi)
				}
				continue
			}
			if SignAtRoot(q.Neg(), p, v) != -sign || SignAtRoot(q.Mul(q), p, v) != 1 || SignAtRoot(q.Mul(p), p, v) != 0 {
				t.Fatalf("signs of %v at the root of %v disagree", q, p)
			}
		}
	})
}

// Wilkinson's polynomial, Mignotte's close pair and roots spread over
// decades have known real roots.
func TestIsolateHardPolynomials(t *testing.T) {
	w := PolyFromInt64s(1)
	for k := int64(1); k <= 20; k++ {
		w = w.Mul(PolyFromInt64s(-k, 1))
	}
	roots := IsolateRealRoots(w, nil, nil)
	if len(roots) != 20 {
		t.Fatalf("%d roots of Wilkinson's polynomial", len(roots))
	}
	for i, v := range roots {
		k := big.NewRat(int64(i+1), 1)
		if v.Lo.Cmp(k) > 0 || v.Hi.Cmp(k) < 0 {
			t.Errorf("root %d in [%v, %v]", i+1, v.Lo, v.Hi)
		}
	}
	// x^n − 2(ax − 1)²: two roots within about a^−(n/2+1) of 1/a
	// (M. Mignotte, Some useful bounds, 1982).
	a := big.NewRat(1000, 1)
	line := NewPoly(big.NewRat(-1, 1), a)
	m := Monomial(big.NewRat(1, 1), 21).Sub(line.Mul(line).Scale(big.NewRat(2, 1)))
	checkIsolation(t, m, nil, nil, IsolateRealRoots(m, nil, nil))
	spread := PolyFromInt64s(1)
	for k := -12; k <= 12; k += 4 {
		ten := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(k, -k))), nil)
		r := new(big.Rat).SetInt(ten)
		if k < 0 {
			r.Inv(r)
		}
		spread = spread.Mul(NewPoly(r, big.NewRat(1, 1))).Mul(NewPoly(r.Neg(r), big.NewRat(3, 1)))
	}
	checkIsolation(t, spread, nil, nil, IsolateRealRoots(spread, nil, nil))
}

func TestIsolateCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := IsolateRealRootsContext(ctx, PolyFromInt64s(-2, 0, 1), nil, nil); !errors.Is(err, context.Canceled) {
		t.Errorf("error %v", err)
	}
}

func TestRefineRootManyDigits(t *testing.T) {
	p := PolyFromInt64s(-2, 0, 1)
	v := RefineRoot(p, Interval{big.NewRat(1, 1), big.NewRat(2, 1)}, new(big.Rat).SetFrac(bigOne, new(big.Int).Lsh(bigOne, 4000)))
	two := big.NewRat(2, 1)
	if new(big.Rat).Mul(v.Lo, v.Lo).Cmp(two) >= 0 || new(big.Rat).Mul(v.Hi, v.Hi).Cmp(two) <= 0 {
		t.Error("the square root of two is not inside")
	}
}

// What the limited arithmetic calls decided is what exact arithmetic finds.
func TestNearVariations(t *testing.T) {
	decided := 0
	rapid.Check(t, func(t *rapid.T) {
		p := PolyFromInt64s(1)
		for range rapid.IntRange(1, 14).Draw(t, "factors") {
			if f := drawRooted(t, "f"); !f.IsZero() {
				p = p.Mul(f)
			}
		}
		p = p.Radical()
		p = p.Shift(-p.Order())
		if p.Degree() < 1 {
			return
		}
		lo := big.NewRat(rapid.Int64Range(1, 1<<20).Draw(t, "lo"), 1<<rapid.IntRange(0, 40).Draw(t, "over"))
		width := new(big.Rat).Mul(lo, big.NewRat(rapid.Int64Range(1, 64).Draw(t, "width"), 64))
		hi := new(big.Rat).Add(lo, width)
		want := signVariations(onUnitInterval(p, lo, width))
		guard := rapid.SampledFrom([]int{1, 20, nearGuard}).Draw(t, "guard")
		got, ok := newNearVariations(p, guard).count(lo, hi)
		if !ok {
			return
		}
		decided++
		if got != want {
			t.Fatalf("%d variations of %v on [%v, %v], want %d", got, p, lo, hi, want)
		}
	})
	if decided == 0 {
		t.Error("nothing was decided")
	}
}
