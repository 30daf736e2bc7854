package number

import (
	"math"
	"math/big"
	"sync"
	"testing"

	"pgregory.net/rapid"
)

func drawRat(t *rapid.T, label string) *big.Rat {
	n := rapid.Int64Range(-1<<40, 1<<40).Draw(t, label)
	d := rapid.Int64Range(1, 1<<40).Draw(t, label+" over")
	r := big.NewRat(n, d)
	scale := rapid.IntRange(-60, 60).Draw(t, label+" scale")
	p := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(max(scale, -scale))))
	if scale < 0 {
		p.Inv(p)
	}
	return r.Mul(r, p)
}

// around returns a ball that holds r, off centre, and sometimes wide.
func around(t *rapid.T, r *big.Rat, label string) Ball {
	b := BallFromRat(r, 64*uint(rapid.IntRange(1, 3).Draw(t, label+" words")))
	if rapid.Bool().Draw(t, label+" wide") {
		off := powerOfTwo(int64(rapid.IntRange(-80, 20).Draw(t, label+" off")))
		b = b.Add(BallFromRat(off.rat(), 64))
		b.rad = b.rad.addUp(off)
	}
	return b
}

// The exact result of an operation on points of balls is in the ball of the
// operation: checked against rational arithmetic.
func TestBallArithmeticHoldsTheRationalResult(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x, y := drawRat(t, "x"), drawRat(t, "y")
		bx, by := around(t, x, "x"), around(t, y, "y")
		want := func(name string, b Ball, r *big.Rat) {
			t.Helper()
			if !b.Contains(r) {
				t.Fatalf("%s: %v does not hold %v", name, b, r.RatString())
			}
		}
		want("x", bx, x)
		want("x+y", bx.Add(by), new(big.Rat).Add(x, y))
		want("x-y", bx.Sub(by), new(big.Rat).Sub(x, y))
		want("xy", bx.Mul(by), new(big.Rat).Mul(x, y))
		want("x²", bx.Sqr(), new(big.Rat).Mul(x, x))
		want("|x|", bx.Abs(), new(big.Rat).Abs(x))
		want("-x", bx.Neg(), new(big.Rat).Neg(x))
		want("xr", bx.MulRat(y), new(big.Rat).Mul(x, y))
		want("2^-7 x", bx.MulPow2(-7), new(big.Rat).Mul(x, big.NewRat(1, 128)))
		want("7x", bx.MulInt(7), new(big.Rat).Mul(x, big.NewRat(7, 1)))
		want("x∪y", bx.Union(by), x)
		want("x∪y", bx.Union(by), y)
		want("x at 64", bx.WithPrecision(64), x)
		cube := new(big.Rat).Mul(x, new(big.Rat).Mul(x, x))
		want("x³", bx.PowInt(3), cube)
		if y.Sign() != 0 {
			want("x/y", bx.Quo(by), new(big.Rat).Quo(x, y))
		}
		if x.Sign() != 0 {
			want("x^-3", bx.PowInt(-3), new(big.Rat).Inv(cube))
		}
		want("√x²", bx.Sqr().Sqrt(), new(big.Rat).Abs(x))
		if order, decided := bx.Cmp(by); decided && order != x.Cmp(y) {
			t.Fatalf("Cmp says %d", order)
		}
		if s, decided := bx.Sign(); decided && s != x.Sign() {
			t.Fatalf("Sign says %d", s)
		}
		lower, _ := bx.Lower().Rat(nil)
		upper, _ := bx.Upper().Rat(nil)
		if lower.Cmp(x) > 0 || upper.Cmp(x) < 0 {
			t.Fatalf("ends %v, %v leave out %v", lower, upper, x)
		}
	})
}

func TestComplexArithmeticHoldsTheRationalResult(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b, c, d := drawRat(t, "a"), drawRat(t, "b"), drawRat(t, "c"), drawRat(t, "d")
		z := ComplexBall{around(t, a, "a"), around(t, b, "b")}
		y := ComplexBall{around(t, c, "c"), around(t, d, "d")}
		mul := func(x, y *big.Rat) *big.Rat { return new(big.Rat).Mul(x, y) }
		want := func(name string, got ComplexBall, re, im *big.Rat) {
			t.Helper()
			if !got.Re.Contains(re) || !got.Im.Contains(im) {
				t.Fatalf("%s: %v does not hold %v, %v", name, got, re, im)
			}
		}
		re, im := new(big.Rat).Sub(mul(a, c), mul(b, d)), new(big.Rat).Add(mul(a, d), mul(b, c))
		want("zy", z.Mul(y), re, im)
		want("z²", z.Sqr(), new(big.Rat).Sub(mul(a, a), mul(b, b)), mul(big.NewRat(2, 1), mul(a, b)))
		want("z^2", z.PowInt(2), new(big.Rat).Sub(mul(a, a), mul(b, b)), mul(big.NewRat(2, 1), mul(a, b)))
		want("iz", z.MulI(), new(big.Rat).Neg(b), a)
		if c.Sign() != 0 || d.Sign() != 0 {
			want("zy/y", z.Mul(y).Quo(y), a, b)
			n := new(big.Rat).Add(mul(c, c), mul(d, d))
			want("1/y", y.Inv(), new(big.Rat).Quo(c, n), new(big.Rat).Neg(new(big.Rat).Quo(d, n)))
		}
		if !z.Abs2().Contains(new(big.Rat).Add(mul(a, a), mul(b, b))) {
			t.Fatal("|z|²")
		}
		// |zy| and |z||y| have a point in common, and so have the arguments'
		// exponentials.
		if !z.Mul(y).Abs().Overlaps(z.Abs().Mul(y.Abs())) {
			t.Fatal("|zy|")
		}
		if !polar(z.Abs(), z.Arg()).Overlaps(z) {
			t.Fatalf("|z| e^{i arg z} = %v, z = %v", polar(z.Abs(), z.Arg()), z)
		}
	})
}

// polar returns r·e^{ia}.
func polar(r, a Ball) ComplexBall { return ComplexBall{Im: a}.Exp().MulBall(r) }

// A wide ball at low precision holds the narrow one of higher precision for
// every point of it.
func TestFunctionsHoldUnderRefinement(t *testing.T) {
	functions := map[string]func(Ball) Ball{
		"exp": Ball.Exp, "log": Ball.Log, "sin": Ball.Sin, "cos": Ball.Cos, "tan": Ball.Tan,
		"atan": Ball.Atan, "sqrt": Ball.Sqrt, "inv": Ball.Inv, "log10": Ball.Log10,
	}
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.Int64Range(-1<<50, 1<<50).Draw(t, "n")
		centre := BallFromInt(n, 64).MulPow2(rapid.IntRange(-90, -40).Draw(t, "scale"))
		wide := centre
		wide.rad = powerOfTwo(int64(rapid.IntRange(-100, 3).Draw(t, "radius")))
		if rapid.Bool().Draw(t, "in proportion") { // wide against its midpoint
			wide.rad = powerOfTwo(int64(centre.mid.MantExp(nil) - rapid.IntRange(2, 12).Draw(t, "parts")))
		}
		// a point of the ball, often an end
		u := rapid.OneOf(rapid.Int64Range(-1<<30, 1<<30), rapid.Just(int64(1<<30)), rapid.Just(int64(-1<<30))).Draw(t, "u")
		point := BallFromInt(u, 64).MulPow2(int(wide.rad.e) + 31 - 30).WithPrecision(512).Add(centre)
		if !wide.ContainsBall(point) || !point.IsExact() {
			t.Fatalf("%v is not a point of %v", point, wide)
		}
		for name, f := range functions {
			rough, fine := f(wide), f(point)
			if !fine.IsFinite() || (name == "sqrt" && point.mid.Sign() < 0) {
				continue // outside the domain
			}
			if !rough.ContainsBall(fine) {
				t.Fatalf("%s(%v) = %v does not hold %s(%v) = %v", name, wide, rough, name, point, fine)
			}
		}
	})
}

func TestBallsWithoutBound(t *testing.T) {
	zero := BallFromInt(0, 128)
	one := BallFromInt(1, 128)
	spread := zero.WithRadius(big.NewFloat(1))
	for name, b := range map[string]Ball{
		"1/0": one.Quo(zero), "1/spread": one.Quo(spread), "log 0": zero.Log(), "log spread": spread.Log(),
		"log -1": one.Neg().Log(), "√-1": one.Neg().Sqrt(), "e^huge": one.MulPow2(1000).Exp(),
		"sum": one.Quo(zero).Add(one), "product": one.Quo(zero).Mul(zero.Add(one)), "of inf": BallFromFloat64(math.Inf(1), 64),
		"overflow": one.MulPow2(1 << 28).PowInt(1 << 30), "0^-1": zero.PowInt(-1),
	} {
		if b.IsFinite() {
			t.Errorf("%s = %v", name, b)
		}
		if _, ok := b.Digits(1); ok || b.ErrorText() != "infinite" {
			t.Errorf("%s shows digits", name)
		}
		if _, decided := b.Sign(); decided {
			t.Errorf("%s has a sign", name)
		}
	}
	if z := one.Quo(zero).Mul(zero); !z.Contains(new(big.Rat)) {
		t.Errorf("∞·0 = %v", z)
	}
	if e := one.Neg().MulPow2(1000).Exp(); !e.IsFinite() || !e.ContainsZero() || e.Upper().Cmp(big.NewFloat(1e-300)) > 0 {
		t.Errorf("e^-huge = %v", e)
	}
	if s := one.MulPow2(1 << 20).Sin(); !s.IsFinite() || s.Upper().Cmp(big.NewFloat(1)) > 0 {
		t.Errorf("sin of a huge argument = %v", s)
	}
	if a := spread.Atan2(spread); !a.Contains(big.NewRat(3, 1)) || !a.Contains(big.NewRat(-3, 1)) {
		t.Errorf("angle of the origin = %v", a)
	}
	if a := spread.Atan2(BallFromInt(-5, 64)); !a.Contains(big.NewRat(314, 100)) || !a.Contains(big.NewRat(-314, 100)) {
		t.Errorf("angle about the cut = %v", a)
	}
}

// The zero values are usable numbers.
func TestZeroValues(t *testing.T) {
	var b Ball
	var z ComplexBall
	if !b.Add(b).IsExact() || b.Mul(b).Sqrt().Exp().String() == "" || !b.ContainsZero() {
		t.Error("zero Ball")
	}
	if !z.Add(z).ContainsZero() || !z.Mul(z).IsExact() || !z.Exp().Re.Contains(big.NewRat(1, 1)) {
		t.Error("zero ComplexBall")
	}
	var x Exact
	if !x.Add(x).Mul(x).IsExact() || x.String() != "0" || x.Float() != 0 {
		t.Error("zero Exact")
	}
}

// Results do not depend on what was computed before, nor on other goroutines.
func TestConcurrentUseIsDeterministic(t *testing.T) {
	want := BallFromInt(12345, 448).Log().Sin().Exp()
	var all sync.WaitGroup
	for g := range 8 {
		all.Go(func() {
			for i := range 20 {
				prec := uint(64 * (1 + (g+i)%12))
				_ = BallFromInt(7, prec).Log().Cos().Atan()
				if got := BallFromInt(12345, 448).Log().Sin().Exp(); got.mid.Cmp(&want.mid) != 0 || got.rad != want.rad {
					t.Errorf("got %v, want %v", got, want)
				}
			}
		})
	}
	all.Wait()
}

// Sums of numbers so far apart that they are not aligned hold the exact result,
// and those of 2^(±10^8) come at once.
func TestSumsOfNumbersFarApart(t *testing.T) {
	one := BallFromInt(1, 128)
	for _, k := range []int{100, 4096, 4300, 20000} {
		for _, sign := range []int64{1, -1} {
			small := BallFromInt(3*sign, 64).MulPow2(-k)
			x := new(big.Rat).SetFrac(big.NewInt(3*sign), new(big.Int).Lsh(big.NewInt(1), uint(k)))
			whole := big.NewRat(1, 1)
			for what, c := range map[string]struct {
				got  Ball
				want *big.Rat
			}{
				"1+x": {one.Add(small), new(big.Rat).Add(whole, x)},
				"x+1": {small.Add(one), new(big.Rat).Add(whole, x)},
				"1-x": {one.Sub(small), new(big.Rat).Sub(whole, x)},
				"x-1": {small.Sub(one), new(big.Rat).Sub(x, whole)},
			} {
				if !c.got.Contains(c.want) || c.got.RelativeBits() < 100 || k > 4300 && c.got.IsExact() {
					t.Errorf("%s for x = %d·2^-%d: %s", what, 3*sign, k, c.got)
				}
			}
		}
	}
	if z := one.MulPow2(1e8).Add(one.MulPow2(-1e8)); z.RelativeBits() < 1e8 {
		t.Errorf("2^(10^8) + 2^(-10^8) has %d bits", z.RelativeBits())
	}
}
