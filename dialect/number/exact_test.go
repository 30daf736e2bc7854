package number

import (
	"errors"
	"math"
	"math/big"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestParse(t *testing.T) {
	for text, want := range map[string]string{
		"0": "0", "0.1": "1/10", ".5": "1/2", "5.": "5", "4.7e-9": "47/10000000000", "+2.50": "5/2", "-3E+2": "-300",
		"1e3": "1000", "0e999999999999999999999": "0", "00012": "12", "1e399": "1" + strings.Repeat("0", 399),
		"1e-400": "1/1" + strings.Repeat("0", 400), "0.000e0": "0",
	} {
		x, err := Parse(text)
		if err != nil || x.String() != want || !x.IsExact() {
			t.Errorf("%s: %v, %v, want %s", text, x, err, want)
		}
	}
	for text, want := range map[string]error{
		"": ErrSyntax, ".": ErrSyntax, "e5": ErrSyntax, "1e": ErrSyntax, "1e+": ErrSyntax, "1,5": ErrSyntax, "1.2.3": ErrSyntax,
		" 1": ErrSyntax, "0x10": ErrSyntax, "1_000": ErrSyntax, "inf": ErrSyntax, "--1": ErrSyntax, "1/3": ErrSyntax, "١": ErrSyntax,
		"1e400": ErrRange, "1e-401": ErrRange, "1e99999999999999999999": ErrRange, strings.Repeat("7", 5000): ErrRange,
	} {
		if x, err := Parse(text); !errors.Is(err, want) {
			t.Errorf("%.20q: %v, %v, want %v", text, x, err, want)
		}
	}
}

// What Parse accepts has the value that big.Rat reads; what it refuses as not a
// number, big.Rat's decimals do too.
func FuzzParse(f *testing.F) {
	for _, seed := range []string{"1", ".5", "4.7e-9", "1e400", "-0.0e-5", "1e", "..", "+", "1e+07", "9e-400"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		x, err := Parse(text)
		plain := strings.Trim(text, "0123456789.eE+-") == "" && !strings.Contains(text, "_") && text != ""
		if len(text) > 400 || errors.Is(err, ErrRange) {
			return
		}
		r, ok := new(big.Rat), false
		if plain {
			r, ok = r.SetString(text)
		}
		if ok != (err == nil) {
			t.Fatalf("%q: %v, big.Rat %v", text, err, ok)
		}
		if ok && x.Rat().Cmp(r) != 0 {
			t.Fatalf("%q: %v, big.Rat %v", text, x, r)
		}
	})
}

// inexact is a stand-in and a true value that it may stand for.
type inexact struct {
	x    Exact
	true *big.Rat
}

func drawInexact(t *rapid.T, label string) inexact {
	r := drawRat(t, label)
	if rapid.Bool().Draw(t, label+" exact") {
		return inexact{FromRat(r), r}
	}
	bound := powerOfTwo(int64(rapid.IntRange(-120, 10).Draw(t, label+" bound")))
	share := big.NewRat(rapid.Int64Range(-64, 64).Draw(t, label+" share"), 64)
	return inexact{Exact{value: r, bound: bound}, share.Add(r, share.Mul(share, bound.rat()))}
}

// Bounds stay true through the arithmetic.
func TestBoundsPropagate(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := drawInexact(t, "a"), drawInexact(t, "b")
		check := func(name string, x Exact, err error, want *big.Rat) {
			t.Helper()
			if err != nil {
				if !errors.Is(err, ErrUndecided) && !errors.Is(err, ErrDivisionByZero) {
					t.Fatalf("%s: %v", name, err)
				}
				return
			}
			d := new(big.Rat).Sub(x.Rat(), want)
			if d.Abs(d).Cmp(x.Bound()) > 0 {
				t.Fatalf("%s: off by %v with the bound %v", name, d, x.Bound())
			}
		}
		check("a+b", a.x.Add(b.x), nil, new(big.Rat).Add(a.true, b.true))
		check("a-b", a.x.Sub(b.x), nil, new(big.Rat).Sub(a.true, b.true))
		check("ab", a.x.Mul(b.x), nil, new(big.Rat).Mul(a.true, b.true))
		check("|a|", a.x.Abs(), nil, new(big.Rat).Abs(a.true))
		if b.true.Sign() != 0 {
			q, err := a.x.Quo(b.x)
			check("a/b", q, err, new(big.Rat).Quo(a.true, b.true))
			p, err := b.x.PowInt(-2)
			check("b^-2", p, err, new(big.Rat).Inv(new(big.Rat).Mul(b.true, b.true)))
		}
		if s, decided := a.x.Sign(); decided && s != a.true.Sign() {
			t.Fatalf("Sign says %d", s)
		}
		if c, decided := a.x.Cmp(b.x); decided && c != a.true.Cmp(b.true) {
			t.Fatalf("Cmp says %d", c)
		}
		// Functions: the ball of the true value overlaps the stand-in's range.
		point := BallFromRat(a.true, 512)
		for name, f := range map[string]struct {
			exact func(Exact) (Exact, error)
			ball  func(Ball) Ball
		}{
			"exp": {Exp, Ball.Exp}, "log": {Log, Ball.Log}, "sin": {Sin, Ball.Sin}, "cos": {Cos, Ball.Cos},
			"sqrt": {Sqrt, Ball.Sqrt}, "atan": {Atan, Ball.Atan}, "log10": {Log10, Ball.Log10},
		} {
			x, err := f.exact(a.x)
			if err != nil {
				continue
			}
			if want := f.ball(point); !BallFromExact(x, 512).Overlaps(want) {
				t.Fatalf("%s(%v) = %v, want %v", name, a.x, BallFromExact(x, 512), want)
			}
		}
	})
}

func must(x Exact, err error) Exact {
	if err != nil {
		panic(err)
	}
	return x
}

func TestRationalResultsAreExact(t *testing.T) {
	rat := func(n, d int64) Exact { return FromRat(big.NewRat(n, d)) }
	for name, c := range map[string]struct{ got, want Exact }{
		"√(9/4)":         {must(Sqrt(rat(9, 4))), rat(3, 2)},
		"√0":             {must(Sqrt(rat(0, 1))), rat(0, 1)},
		"e^0":            {must(Exp(rat(0, 1))), rat(1, 1)},
		"log 1":          {must(Log(rat(1, 1))), rat(0, 1)},
		"20 dB":          {must(FromDecibel(rat(20, 1))), rat(10, 1)},
		"-40 dB":         {must(FromDecibel(rat(-40, 1))), rat(1, 100)},
		"0 dB":           {must(FromDecibel(rat(0, 1))), rat(1, 1)},
		"level of 1000":  {must(Decibel(rat(1000, 1))), rat(60, 1)},
		"level of 1/10":  {must(Decibel(rat(1, 10))), rat(-20, 1)},
		"sin 0":          {must(Sin(rat(0, 1))), rat(0, 1)},
		"cos 0":          {must(Cos(rat(0, 1))), rat(1, 1)},
		"sin π":          {must(Sin(Pi())), rat(0, 1)},
		"cos π/3":        {must(Cos(must(Pi().Quo(rat(3, 1))))), rat(1, 2)},
		"sin 7π/6":       {must(Sin(Pi().Mul(rat(7, 6)))), rat(-1, 2)},
		"sin -5π/2":      {must(Sin(Pi().Mul(rat(-5, 2)))), rat(-1, 1)},
		"cos 1000π":      {must(Cos(Pi().Mul(rat(1000, 1)))), rat(1, 1)},
		"tan π/4":        {must(Tan(Pi().Mul(rat(1, 4)))), rat(1, 1)},
		"sin 30°":        {must(SinPi(big.NewRat(30, 180))), rat(1, 2)},
		"cos 120°":       {must(CosPi(big.NewRat(120, 180))), rat(-1, 2)},
		"2π/π":           {must(Pi().Add(Pi()).Quo(Pi())), rat(2, 1)},
		"π-π":            {Pi().Sub(Pi()), rat(0, 1)},
		"8^(2/3)":        {must(rat(8, 1).Pow(rat(2, 3))), rat(4, 1)},
		"(1/32)^(-1/5)":  {must(rat(1, 32).Pow(rat(-1, 5))), rat(2, 1)},
		"4^(1/2)":        {must(rat(4, 1).Pow(rat(1, 2))), rat(2, 1)},
		"0^0":            {must(rat(0, 1).Pow(rat(0, 1))), rat(1, 1)},
		"0^(1/2)":        {must(rat(0, 1).Pow(rat(1, 2))), rat(0, 1)},
		"(-2)^3":         {must(rat(-2, 1).Pow(rat(3, 1))), rat(-8, 1)},
		"angle of (1,0)": {must(Atan2(rat(0, 1), rat(1, 1))), rat(0, 1)},
	} {
		if !c.got.IsExact() || !c.got.Equal(c.want) {
			t.Errorf("%s = %v, want %v", name, c.got, c.want)
		}
	}
	if q := must(must(Atan(rat(1, 1))).Quo(Pi())); !q.IsExact() || !q.Equal(rat(1, 4)) {
		t.Errorf("atan 1 = %v π", q)
	}
	if q := must(must(Atan2(rat(0, 1), rat(-2, 1))).Quo(Pi())); !q.Equal(rat(1, 1)) {
		t.Errorf("angle of (-2, 0) = %v π", q)
	}
}

func TestStandIns(t *testing.T) {
	two := FromInt(2)
	a, b := must(Sqrt(two)), must(Sqrt(FromRat(big.NewRat(4, 2))))
	if a.IsExact() || !a.Equal(b) {
		t.Error("equal subexpressions must have equal stand-ins")
	}
	if r := must(a.Mul(FromInt(3)).Quo(b)); !r.Equal(FromInt(3)) {
		t.Errorf("3√2/√2 = %v", r)
	}
	// π to 80 digits: OEIS A000796.
	digits := "3.1415926535897932384626433832795028841971693993751058209749445923078164062862090"
	if text, ok := BallFromExact(Pi(), 320).Digits(80); !ok || text != digits[:81] {
		t.Errorf("π = %s", text)
	}
	// Repeated sums keep the bound in proportion.
	sum := Exact{}
	for range 1000 {
		sum = sum.Add(a)
	}
	limit := new(big.Rat).Mul(a.Bound(), big.NewRat(1001, 1))
	if sum.Bound().Cmp(limit) > 0 {
		t.Errorf("bound of a thousand summands: %v", sum.Bound())
	}
	if _, decided := a.Sub(b).Sign(); decided {
		t.Error("√2 − √2 of stand-ins is not decided to be zero")
	}
	if s := must(Sin(must(Sqrt(Pi().Mul(Pi()))))); !s.Equal(Exact{}) || s.IsExact() {
		t.Errorf("sin of what may be π = %v", s)
	}
	if s, decided := Pi().Sub(FromRat(big.NewRat(22, 7))).Sign(); s != -1 || !decided {
		t.Error("π < 22/7")
	}
}

func TestExactErrors(t *testing.T) {
	zero, one := Exact{}, FromInt(1)
	root := must(Sqrt(FromInt(2)))
	unsure := root.Sub(root)
	huge := must(Parse("1e399"))
	for name, c := range map[string]struct {
		do   func() (Exact, error)
		want error
	}{
		"1/0":          {func() (Exact, error) { return one.Quo(zero) }, ErrDivisionByZero},
		"1/unsure":     {func() (Exact, error) { return one.Quo(unsure) }, ErrUndecided},
		"0^-1":         {func() (Exact, error) { return zero.PowInt(-1) }, ErrDivisionByZero},
		"0^-(1/2)":     {func() (Exact, error) { return zero.Pow(FromRat(big.NewRat(-1, 2))) }, ErrDivisionByZero},
		"(-2)^(1/2)":   {func() (Exact, error) { return FromInt(-2).Pow(FromRat(big.NewRat(1, 2))) }, ErrDomain},
		"unsure^(1/2)": {func() (Exact, error) { return unsure.Pow(FromRat(big.NewRat(1, 2))) }, ErrUndecided},
		"√-1":          {func() (Exact, error) { return Sqrt(FromInt(-1)) }, ErrDomain},
		"√unsure":      {func() (Exact, error) { return Sqrt(unsure) }, ErrUndecided},
		"log 0":        {func() (Exact, error) { return Log(zero) }, ErrDomain},
		"log -1":       {func() (Exact, error) { return Log(FromInt(-1)) }, ErrDomain},
		"level of 0":   {func() (Exact, error) { return Decibel(zero) }, ErrDomain},
		"e^1e6":        {func() (Exact, error) { return Exp(FromInt(1000000)) }, ErrRange},
		"e^-60000":     {func() (Exact, error) { return Exp(FromInt(-60000)) }, ErrRange},
		"sin 1e399":    {func() (Exact, error) { return Sin(huge) }, ErrRange},
		"cos 1e399":    {func() (Exact, error) { return Cos(huge) }, ErrRange},
		"2^huge":       {func() (Exact, error) { return FromInt(2).Pow(huge) }, ErrRange},
		"2^1e9":        {func() (Exact, error) { return FromInt(2).PowInt(1e9) }, ErrRange},
		"2^minint":     {func() (Exact, error) { return FromInt(2).PowInt(math.MinInt) }, ErrRange},
		"(1/3)^1e9":    {func() (Exact, error) { return FromRat(big.NewRat(1, 3)).PowInt(1e9) }, ErrRange},
		"1e9 dB":       {func() (Exact, error) { return FromDecibel(FromInt(1000000000)) }, ErrRange},
		"tan π/2":      {func() (Exact, error) { return Tan(Pi().Mul(FromRat(halfRat))) }, ErrDivisionByZero},
		"origin":       {func() (Exact, error) { return Atan2(zero, zero) }, ErrDomain},
		"near the cut": {func() (Exact, error) { return Atan2(unsure, FromInt(-1)) }, ErrUndecided},
	} {
		if x, err := c.do(); !errors.Is(err, c.want) {
			t.Errorf("%s: %v, %v, want %v", name, x, err, c.want)
		}
	}
	if x, err := one.Neg().PowInt(1e9 + 1); err != nil || !x.Equal(FromInt(-1)) {
		t.Errorf("(-1)^odd = %v, %v", x, err)
	}
	if huge.Mul(huge).Mul(huge).Mul(huge).InRange() {
		t.Error("1e1596 is out of range")
	}
}
