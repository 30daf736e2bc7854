package exact

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"sync"
	"testing"
	"time"

	"pgregory.net/rapid"

	"portlight/dialect/number"
)

// reporter is what *testing.T and *rapid.T have in common here.
type reporter interface {
	Helper()
	Errorf(format string, arguments ...any)
	Fatal(arguments ...any)
}

func rootsAt(t reporter, p Poly, prec uint) []Root {
	t.Helper()
	set, err := Roots(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	roots, err := set.At(prec)
	if err != nil {
		t.Fatal(err)
	}
	return roots
}

// checkRoots checks what does not need the true roots: multiplicities add up,
// radii are small enough, the order, conjugates, the number of real roots by
// isolation, and that the product of the factors s − root holds the polynomial.
func checkRoots(t reporter, p Poly, prec uint) []Root {
	t.Helper()
	roots := rootsAt(t, p, prec)
	total, real := 0, 0
	for i, r := range roots {
		total += r.Multiplicity
		if r.Real {
			real++
		}
		if r.Real != (r.Im.IsExact() && r.Im.ContainsZero()) || r.Imaginary != (r.Re.IsExact() && r.Re.ContainsZero()) {
			t.Errorf("root %d: axis and balls disagree: %v %v", i, r.Re, r.Im)
		}
		size := r.Ball().Abs().Upper()
		limit := new(big.Float).SetMantExp(size, -int(prec))
		if r.Re.Rad().Cmp(limit) > 0 || r.Im.Rad().Cmp(limit) > 0 || r.Radius.Cmp(limit) > 0 {
			t.Errorf("root %d at %d bits: %v %v, radius %v", i, prec, r.Re, r.Im, r.Radius)
		}
		if i > 0 {
			checkOrder(t, roots[i-1], r)
		}
		for j := range i {
			if r.Ball().Overlaps(roots[j].Ball()) {
				t.Errorf("roots %d and %d overlap: %v %v", i, j, r.Re, r.Im)
			}
		}
		if r.Rational != nil && p.EvalSign(r.Rational) != 0 {
			t.Errorf("root %d is not %v", i, r.Rational)
		}
	}
	if total != p.Degree() {
		t.Errorf("%d roots of degree %d", total, p.Degree())
	}
	if want := len(IsolateRealRoots(p, nil, nil)); real != want {
		t.Errorf("%d real roots, isolation says %d", real, want)
	}
	if p.Degree() <= 60 {
		checkProduct(t, p, roots)
	}
	return roots
}

func checkOrder(t reporter, a, b Root) {
	t.Helper()
	// Real parts closer than about 2^-50 of the roots count as one.
	least := a.Ball().Abs().Add(b.Ball().Abs()).MulPow2(-46)
	order, decided := a.Re.Cmp(b.Re.Add(least))
	switch {
	case decided && order > 0:
		t.Errorf("out of order: %v before %v", a.Re, b.Re)
	case !a.Real && a.Im.Mid().Sign() < 0:
		if b.Im.Mid().Cmp(new(big.Float).Neg(a.Im.Mid())) != 0 || b.Re.Mid().Cmp(a.Re.Mid()) != 0 {
			t.Errorf("%v %v is not followed by its conjugate but by %v %v", a.Re, a.Im, b.Re, b.Im)
		}
	case !b.Real && b.Im.Mid().Sign() > 0:
		t.Errorf("%v %v does not follow its conjugate", b.Re, b.Im)
	}
}

// checkProduct multiplies the factors out in balls.
func checkProduct(t reporter, p Poly, roots []Root) {
	t.Helper()
	prec := roots[0].Re.Prec()
	c := []number.ComplexBall{number.RealBall(number.BallFromRat(p.Leading(), prec))}
	for _, r := range roots {
		for range r.Multiplicity {
			next := make([]number.ComplexBall, len(c)+1)
			for i, v := range c {
				next[i+1] = next[i+1].Add(v)
				next[i] = next[i].Sub(v.Mul(r.Ball()))
			}
			c = next
		}
	}
	for i, v := range c {
		if !v.Re.Contains(p.Coeff(i)) || !v.Im.Contains(new(big.Rat)) {
			t.Errorf("coefficient %d of the product is %v %v, not %v", i, v.Re, v.Im, p.Coeff(i))
		}
	}
}

// linear returns s + r.
func linear(r *big.Rat) Poly { return NewPoly(r, big.NewRat(1, 1)) }

func multiply(factors ...Poly) Poly {
	p := PolyFromInt64s(1)
	for _, f := range factors {
		p = p.Mul(f)
	}
	return p
}

func powerOfTenRat(e int64) *big.Rat {
	p := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(max(e, -e)), nil))
	if e < 0 {
		p.Inv(p)
	}
	return p
}

// wilkinson is (s+1)(s+2)…(s+n).
func wilkinson(n int64) Poly {
	p := PolyFromInt64s(1)
	for k := range n {
		p = p.Mul(PolyFromInt64s(k+1, 1))
	}
	return p
}

// chebyshev is the polynomial T_n, whose roots are cos((2k−1)π/2n).
func chebyshev(n int) Poly {
	a, b := PolyFromInt64s(1), PolyFromInt64s(0, 1)
	for range n {
		a, b = b, PolyFromInt64s(0, 2).Mul(b).Sub(a)
	}
	return a
}

func TestRationalRootsAreExact(t *testing.T) {
	third := big.NewRat(1, 3)
	p := multiply(linear(third).Pow(3), linear(big.NewRat(-1000000, 47)), PolyFromInt64s(0, 1).Pow(2), PolyFromInt64s(5, 0, 1).Pow(2), linear(big.NewRat(2, 1)), linear(big.NewRat(22, 7)))
	roots := checkRoots(t, p, 120)
	want := []struct {
		rational     *big.Rat
		multiplicity int
	}{
		{big.NewRat(-22, 7), 1}, {big.NewRat(-2, 1), 1}, {big.NewRat(-1, 3), 3}, {new(big.Rat), 2}, {nil, 2}, {nil, 2}, {big.NewRat(1000000, 47), 1},
	}
	if len(roots) != len(want) {
		t.Fatalf("%d roots", len(roots))
	}
	for i, w := range want {
		r := roots[i]
		if r.Multiplicity != w.multiplicity || (r.Rational == nil) != (w.rational == nil) || (w.rational != nil && r.Rational.Cmp(w.rational) != 0) {
			t.Errorf("root %d: %v ×%d, want %v ×%d", i, r.Rational, r.Multiplicity, w.rational, w.multiplicity)
		}
	}
	if roots[2].Re.Contains(big.NewRat(-1, 3)) == false || roots[1].Radius.Sign() != 0 || !roots[4].Imaginary {
		t.Error("exact roots")
	}
}

func TestWilkinson(t *testing.T) {
	for _, n := range []int64{5, 20, 40, 100} {
		roots := checkRoots(t, wilkinson(n), 60)
		for i, r := range roots {
			if want := new(big.Rat).SetInt64(int64(i) - n); r.Rational == nil || r.Rational.Cmp(want) != 0 {
				t.Errorf("%d: root %d is %v", n, i, r.Re)
			}
		}
	}
	// Wilkinson's perturbation, 2^-23·s^19 added: ten real roots and five pairs, one
	// of them at −16.73073746609 ± 2.812624894j (J. H. Wilkinson, Numer. Math. 1
	// (1959) 150–166).
	real, found := 0, false
	for _, r := range checkRoots(t, wilkinson(20).Add(Monomial(big.NewRat(1, 1<<23), 19)), 80) {
		re, _ := r.Re.Digits(13)
		im, _ := r.Im.Digits(10)
		found = found || (re == "-16.73073746609" && im == "2.812624894")
		if r.Real {
			real++
		}
	}
	if !found || real != 10 {
		t.Errorf("%d real roots, known pair found: %v", real, found)
	}
}

func TestChebyshev(t *testing.T) {
	for _, n := range []int{3, 8, 30, 60, 101} {
		const prec = 150
		roots := checkRoots(t, chebyshev(n), prec)
		pi := number.PiBall(prec + 64)
		for i, r := range roots {
			k := int64(n - i)
			want := pi.MulRat(big.NewRat(2*k-1, 2*int64(n))).Cos()
			if !r.Real || !r.Re.Overlaps(want) {
				t.Errorf("T%d, root %d: %v, want %v", n, i, r.Re, want)
			}
		}
	}
}

func TestRootsOfUnity(t *testing.T) {
	for _, n := range []int{2, 3, 7, 16, 97} {
		const prec = 100
		p := Monomial(big.NewRat(1, 1), n).Sub(PolyFromInt64s(1))
		roots := checkRoots(t, p, prec)
		pi := number.PiBall(prec + 64)
		for k := range n {
			s, c := pi.MulRat(big.NewRat(int64(2*k), int64(n))).SinCos()
			want := number.ComplexBall{Re: c, Im: s}
			hits := 0
			for _, r := range roots {
				if r.Ball().Overlaps(want) {
					hits++
				}
			}
			if hits != 1 {
				t.Errorf("n = %d: root %d is in %d balls", n, k, hits)
			}
		}
	}
}

func TestClusters(t *testing.T) {
	one := big.NewRat(1, 1)
	near := func(e int64) *big.Rat { return new(big.Rat).Add(one, powerOfTenRat(e)) }
	cases := map[string]Poly{
		"two real, 1e-30 apart":  multiply(linear(one), linear(near(-30))),
		"three, 1e-100 apart":    multiply(linear(one), linear(near(-100)), linear(near(-99)), PolyFromInt64s(2, 1)),
		"pair 1e-40 off axis":    multiply(NewPoly(near(-80), big.NewRat(2, 1), one), PolyFromInt64s(3, 1)),
		"near triple":            PolyFromInt64s(1, 1).Pow(3).Sub(Constant(powerOfTenRat(-45))),
		"near 8-fold":            PolyFromInt64s(1, 1).Pow(8).Sub(Constant(powerOfTenRat(-80))).Mul(PolyFromInt64s(7, 3, 1)),
		"Mignotte":               Monomial(one, 24).Sub(linear(big.NewRat(-1, 1000)).Pow(2).Scale(big.NewRat(2, 1))),
		"two clusters":           multiply(linear(one), linear(near(-20)), linear(big.NewRat(1000, 1)), linear(new(big.Rat).Add(big.NewRat(1000, 1), powerOfTenRat(-20)))),
		"repeated clusters":      multiply(linear(one), linear(near(-20))).Pow(3),
		"almost imaginary":       NewPoly(one, powerOfTenRat(-60), one).Mul(PolyFromInt64s(1, 0, 1)),
		"imaginary, 1e-25 apart": NewPoly(one, nil, one).Mul(NewPoly(near(-25), nil, one)),
	}
	for name, p := range cases {
		t.Run(name, func(t *testing.T) {
			for _, prec := range []uint{53, 200, 500} {
				checkRoots(t, p, prec)
			}
		})
	}
}

func TestWideSpread(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	decades := PolyFromInt64s(1)
	for k := int64(-6); k <= 6; k++ {
		decades = decades.Mul(linear(powerOfTenRat(k))).Mul(NewPoly(powerOfTenRat(2*k), powerOfTenRat(k-3), big.NewRat(1, 1)))
	}
	checkRoots(t, decades, 100)
	far := PolyFromInt64s(1)
	for k := int64(-5); k <= 5; k++ {
		far = far.Mul(NewPoly(powerOfTenRat(60*k), powerOfTenRat(30*k), big.NewRat(2, 1))).Mul(linear(powerOfTenRat(30 * k)))
	}
	checkRoots(t, far, 64)
	// Roots from 1e-450 to 1e600, some pairs closer than 1e-300 of themselves:
	// −10^30k and −10^60k nearly, and −10^40k.
	extreme := PolyFromInt64s(1)
	for k := int64(-10); k <= 10; k++ {
		extreme = extreme.Mul(NewPoly(powerOfTenRat(60*k), powerOfTenRat(30*k), powerOfTenRat(-30*k))).Mul(linear(powerOfTenRat(40 * k)))
	}
	total := 0
	for _, r := range rootsAt(t, extreme, 53) {
		total += r.Multiplicity
	}
	if total != 63 {
		t.Errorf("%d roots", total)
	}
	// Coefficients of 1e±300 in no order.
	source := rand.New(rand.NewPCG(7, 11))
	c := make([]*big.Rat, 41)
	for i := range c {
		c[i] = powerOfTenRat(source.Int64N(601) - 300)
		c[i].Mul(c[i], big.NewRat(1+source.Int64N(99), 7))
		if source.IntN(2) == 0 {
			c[i].Neg(c[i])
		}
	}
	checkRoots(t, NewPoly(c...), 64)
}

func TestImaginaryAxis(t *testing.T) {
	// An undamped ladder with a damped one beside it.
	p := multiply(PolyFromInt64s(1, 0, 3, 0, 1), PolyFromInt64s(2, 0, 1), PolyFromInt64s(-2, 0, 1), PolyFromInt64s(1, 0, 0, 0, 1), PolyFromInt64s(4, 1, 1))
	imaginary := 0
	for _, r := range checkRoots(t, p, 90) {
		if r.Imaginary {
			imaginary++
		}
	}
	if imaginary != 6 {
		t.Errorf("%d roots on the imaginary axis, want 6", imaginary)
	}
	// The order does not change with the precision or with what was asked first.
	q := multiply(PolyFromInt64s(2, 2, 1), PolyFromInt64s(5, 2, 1), PolyFromInt64s(1, 1), PolyFromInt64s(10, 2, 1))
	fine, rough := rootsAt(t, q, 300), rootsAt(t, q, 53)
	for i := range fine {
		if !fine[i].Ball().Overlaps(rough[i].Ball()) {
			t.Errorf("root %d moved", i)
		}
	}
	// Same real part: by the imaginary part's magnitude, pairs together.
	want := []int64{0, -1, 1, -2, 2, -3, 3}
	for i, r := range rough {
		if !r.Im.Contains(big.NewRat(want[i], 1)) {
			t.Errorf("root %d: %v", i, r.Im)
		}
	}
}

// Every random product of small factors is taken apart right.
func TestRandomProducts(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := Constant(big.NewRat(rapid.Int64Range(1, 1000).Draw(t, "leading"), 7))
		for range rapid.IntRange(1, 6).Draw(t, "factors") {
			a := rapid.Int64Range(-30, 30).Draw(t, "a")
			b := rapid.Int64Range(-30, 30).Draw(t, "b")
			c := rapid.Int64Range(1, 9).Draw(t, "c")
			f := PolyFromInt64s(a, b, c)
			if rapid.Bool().Draw(t, "linear") {
				f = PolyFromInt64s(a, c)
			}
			p = p.Mul(f.Pow(rapid.IntRange(1, 3).Draw(t, "power")))
		}
		if p.IsZero() || p.Degree() == 0 {
			return
		}
		checkRoots(t, p, uint(rapid.IntRange(50, 300).Draw(t, "prec")))
	})
}

// Products of quadratics and near copies of them: clusters of real roots, of
// pairs and of pairs about the real axis, down to 1e-60 apart.
func TestRandomClusters(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	source := rand.New(rand.NewPCG(21, 5))
	for range 100 {
		p := PolyFromInt64s(1)
		for range 1 + source.IntN(6) {
			a, b := big.NewRat(source.Int64N(2001)-1000, 7), big.NewRat(source.Int64N(2001)-1000, 3)
			off, leading := powerOfTenRat(-source.Int64N(60)), powerOfTenRat(source.Int64N(20)-10)
			f, g := NewPoly(new(big.Rat).Add(a, off), b, leading), NewPoly(a, b, leading)
			switch source.IntN(4) {
			case 0:
				p = p.Mul(f)
			case 1:
				p = p.Mul(f).Mul(g)
			case 2:
				p = p.Mul(NewPoly(a, nil, leading))
			case 3:
				p = p.Mul(f.Pow(1 + source.IntN(2))).Add(Constant(off))
			}
		}
		if p.Degree() >= 1 {
			checkRoots(t, p, 60+uint(source.IntN(100)))
		}
	}
}

func TestRandomCoefficients(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 24).Draw(t, "degree")
		c := make([]*big.Rat, n+1)
		for i := range c {
			v := rapid.Int64Range(-1000, 1000).Draw(t, "c")
			c[i] = new(big.Rat).Mul(big.NewRat(v, 1), powerOfTenRat(int64(rapid.IntRange(-12, 12).Draw(t, "e"))))
		}
		p := NewPoly(c...)
		if p.Degree() < 1 {
			return
		}
		checkRoots(t, p, uint(rapid.IntRange(50, 200).Draw(t, "prec")))
	})
}

func TestNetworksOfHighDegree(t *testing.T) {
	checkRoots(t, unequalLadder(10), 100)
	checkRoots(t, unequalLadder(50), 53)
	if testing.Short() {
		t.Skip("degree 400 takes a second: left out with -short")
	}
	for name, p := range map[string]Poly{"ladder of 200": unequalLadder(200), "equal ladder of 200": equalLadder(200)} {
		started := time.Now()
		roots := rootsAt(t, p, 53)
		total := 0
		for _, r := range roots {
			total += r.Multiplicity
			if sign, decided := r.Re.Sign(); !decided || sign >= 0 {
				t.Errorf("%s: root %v of a passive network", name, r.Re)
			}
		}
		if total != 400 {
			t.Errorf("%s: %d roots", name, total)
		}
		t.Logf("%s: %v", name, time.Since(started))
	}
}

// equalLadder is the denominator of a terminated ladder of n equal sections, each
// a series 1/10 + s and a shunt s.
func equalLadder(n int) Poly {
	z, y := PolyFromInts([]*big.Int{big.NewInt(1), big.NewInt(10)}, big.NewInt(10)), PolyFromInt64s(0, 1)
	u, i := PolyFromInt64s(1), PolyFromInt64s(1)
	for range n {
		u = u.Add(z.Mul(i))
		i = i.Add(y.Mul(u))
	}
	return u.Add(i)
}

func TestRootsOfDegenerates(t *testing.T) {
	if _, err := Roots(context.Background(), Poly{}); !errors.Is(err, ErrZeroPolynomial) {
		t.Errorf("zero polynomial: %v", err)
	}
	if roots := rootsAt(t, PolyFromInt64s(5), 53); len(roots) != 0 {
		t.Errorf("constant: %v", roots)
	}
	if roots := rootsAt(t, PolyFromInt64s(0, 0, 0, -5), 53); len(roots) != 1 || roots[0].Multiplicity != 3 || !roots[0].Real || !roots[0].Imaginary {
		t.Errorf("s³: %v", roots)
	}
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Roots(ended, unequalLadder(20)); !errors.Is(err, context.Canceled) {
		t.Errorf("ended context: %v", err)
	}
}

// An ended context is noticed at every stage: the error comes, and what was begun
// can be gone on with.
func TestRootsStopAnywhere(t *testing.T) {
	p := unequalLadder(60)
	for _, wait := range []time.Duration{0, 100 * time.Microsecond, time.Millisecond, 3 * time.Millisecond, 6 * time.Millisecond} {
		ctx, cancel := context.WithTimeout(context.Background(), wait)
		set, err := Roots(ctx, p)
		cancel()
		if err != nil && (!errors.Is(err, context.DeadlineExceeded) || set != nil) {
			t.Errorf("after %v: %v", wait, err)
		}
	}
	set, err := Roots(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := set.AtContext(ended, 200); !errors.Is(err, context.Canceled) {
		t.Errorf("ended context: %v", err)
	}
	roots, err := set.At(200)
	if err != nil || len(roots) != 120 {
		t.Errorf("after a stop: %v, %d roots", err, len(roots))
	}
}

func TestRootSetIsSharedSafely(t *testing.T) {
	set, err := Roots(context.Background(), unequalLadder(8))
	if err != nil {
		t.Fatal(err)
	}
	var all sync.WaitGroup
	for g := range 8 {
		all.Go(func() {
			for _, prec := range []uint{60, 100, 150, 200} {
				roots, err := set.At(prec + uint(g))
				if err != nil || len(roots) != 16 {
					t.Errorf("%v, %d roots", err, len(roots))
				}
			}
		})
	}
	all.Wait()
}

// The evaluator's bound holds against exact evaluation.
func TestEvaluationBound(t *testing.T) {
	source := rand.New(rand.NewPCG(3, 5))
	polys := []Poly{wilkinson(12), unequalLadder(6), chebyshev(9), PolyFromInt64s(3, -1), multiply(linear(powerOfTenRat(40)), linear(powerOfTenRat(-40)), PolyFromInt64s(1, -1, 1))}
	for _, p := range polys {
		p = p.Primitive()
		e := newEvaluator(p)
		var space scratch
		for range 300 {
			words := 1 + source.IntN(3)
			w := 2 + source.IntN(4)
			a := approximation{words: words, x: new(big.Int), y: new(big.Int), k: source.IntN(40) - 20}
			for range words {
				a.x.Or(a.x.Lsh(a.x, 64), new(big.Int).SetUint64(source.Uint64()))
				a.y.Or(a.y.Lsh(a.y, 64), new(big.Int).SetUint64(source.Uint64()))
			}
			a.x.Rsh(a.x, uint(source.IntN(70)))
			a.y.Rsh(a.y, uint(source.IntN(70)))
			if source.IntN(2) == 0 {
				a.x.Neg(a.x)
			}
			if source.IntN(2) == 0 {
				a.y.Neg(a.y)
			}
			if source.IntN(4) == 0 {
				a.y.SetInt64(0)
			}
			a.normalise()
			checkEvaluation(t, p, e, &a, w, &space)
		}
	}
}

func checkEvaluation(t *testing.T, p Poly, e *evaluator, a *approximation, w int, space *scratch) {
	t.Helper()
	unit := a.k - 64*a.words + 1
	x, _ := dyadic(a.x, unit).Rat(nil)
	y, _ := dyadic(a.y, unit).Rat(nil)
	z := a.fixed()
	ev := e.evaluate(z, w, space)
	pr, pi := p.EvalGaussian(x, y)
	dr, di := p.Derivative().Shift(1).EvalGaussian(x, y)
	if z.uneg != z.vneg { // evaluated in the first quadrant
		pi.Neg(pi)
		di.Neg(di)
	}
	m := e.top(z.k+int(math.Floor(z.log)), phaseStep(z.log))
	within := func(name string, re, im []uint64, wantRe, wantIm *big.Rat, bound float64) {
		t.Helper()
		sum := new(big.Rat)
		for i, words := range [][]uint64{re, im} {
			d := twoPower(ev.fraction - m)
			d.Mul(d, []*big.Rat{wantRe, wantIm}[i])
			d.Sub(d, new(big.Rat).SetInt(signedWords(words)))
			sum.Add(sum, d.Mul(d, d))
		}
		units := math.Exp2(bound + float64(ev.fraction))
		if f, _ := sum.Float64(); math.Sqrt(f) > units {
			t.Errorf("%s of degree %d at 2^%d, W = %d: off by %v units, bound %v", name, p.Degree(), a.k, w, math.Sqrt(f), units)
		}
	}
	within("p", ev.pr, ev.pi, pr, pi, ev.logEP)
	within("zp'", ev.dr, ev.di, dr, di, ev.logED)
	// |p| ≤ 2^bound·|zp'|
	if b := bound(&ev); !math.IsInf(b, 1) {
		square := func(re, im *big.Rat) *big.Rat {
			return new(big.Rat).Add(new(big.Rat).Mul(re, re), new(big.Rat).Mul(im, im))
		}
		right := square(dr, di)
		if right.Mul(right, twoPower(int(math.Ceil(2*b)))).Cmp(square(pr, pi)) < 0 {
			t.Errorf("p/zp' is beyond its bound 2^%v", b)
		}
	}
}

func twoPower(e int) *big.Rat {
	r := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(max(e, -e))))
	if e < 0 {
		r.Inv(r)
	}
	return r
}

func signedWords(words []uint64) *big.Int {
	n := fromWords(words)
	if int64(words[len(words)-1]) < 0 {
		n.Sub(n, new(big.Int).Lsh(big.NewInt(1), uint(64*len(words))))
	}
	return n
}

func ExampleRoots() {
	p := PolyFromInt64s(6, 5, 1).Mul(PolyFromInt64s(1, 0, 1)).Mul(PolyFromInt64s(0, 1))
	set, err := Roots(context.Background(), p)
	if err != nil {
		fmt.Println(err)
		return
	}
	roots, _ := set.At(64)
	for _, r := range roots {
		re, _ := r.Re.MaxDigits(5)
		im, _ := r.Im.MaxDigits(5)
		fmt.Println(re, im, r.Real, r.Imaginary)
	}
	// Output:
	// -3.0000 0 true false
	// -2.0000 0 true false
	// 0 0 true true
	// 0 -1.0000 false true
	// 0 1.0000 false true
}
