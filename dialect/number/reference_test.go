package number

import (
	"bufio"
	"math/big"
	"os"
	"strings"
	"testing"
)

// reference is one line of testdata/functions.txt, made by
// testdata/reference.py with mpmath.
type reference struct {
	name      string
	arguments []*big.Rat
	value     *big.Rat // to 110 digits
	slack     *big.Rat // one unit of the last digit
}

func readReferences(t testing.TB) []reference {
	t.Helper()
	file, err := os.Open("testdata/functions.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	var all []reference
	for lines := bufio.NewScanner(file); lines.Scan(); {
		fields := strings.Fields(lines.Text())
		r := reference{name: fields[0]}
		for _, f := range fields[1 : len(fields)-1] {
			q, ok := new(big.Rat).SetString(f)
			if !ok {
				t.Fatalf("argument %q", f)
			}
			r.arguments = append(r.arguments, q)
		}
		text := fields[len(fields)-1]
		v, ok := new(big.Rat).SetString(text)
		if !ok {
			t.Fatalf("value %q", text)
		}
		r.value = v
		r.slack = new(big.Rat).Abs(new(big.Rat).Mul(v, new(big.Rat).SetFrac(big.NewInt(1), powerOfTen(109))))
		all = append(all, r)
	}
	if len(all) < 500 {
		t.Fatalf("only %d reference values", len(all))
	}
	return all
}

var ballFunctions = map[string]func(...Ball) Ball{
	"exp":   func(a ...Ball) Ball { return a[0].Exp() },
	"log":   func(a ...Ball) Ball { return a[0].Log() },
	"sin":   func(a ...Ball) Ball { return a[0].Sin() },
	"cos":   func(a ...Ball) Ball { return a[0].Cos() },
	"atan":  func(a ...Ball) Ball { return a[0].Atan() },
	"sqrt":  func(a ...Ball) Ball { return a[0].Sqrt() },
	"atan2": func(a ...Ball) Ball { return a[0].Atan2(a[1]) },
}

// holds tells whether b holds some number within slack of value.
func holds(b Ball, value, slack *big.Rat) bool {
	if !b.IsFinite() {
		return true
	}
	d := b.MidRat()
	d.Sub(d, value)
	d.Abs(d)
	return d.Cmp(new(big.Rat).Add(b.rad.rat(), slack)) <= 0
}

// Every ball holds mpmath's value, and is narrow: relative to the value within
// 2^(4−p) where the arguments are exact at p bits.
func TestFunctionsAgainstMpmath(t *testing.T) {
	narrow := 0
	for _, r := range readReferences(t) {
		for _, prec := range []uint{64, 128, 192, 256, 320} {
			exact := true
			arguments := make([]Ball, len(r.arguments))
			for i, q := range r.arguments {
				arguments[i] = BallFromRat(q, prec)
				exact = exact && arguments[i].IsExact()
				if !holds(arguments[i], q, new(big.Rat)) {
					t.Fatalf("BallFromRat(%v, %d) = %v", q, prec, arguments[i])
				}
			}
			b := ballFunctions[r.name](arguments...)
			if !holds(b, r.value, r.slack) {
				t.Errorf("%s%v at %d bits = %v, does not hold the value", r.name, r.arguments, prec, b)
			}
			if exact {
				narrow++
				if b.RelativeBits() < int64(prec)-4 {
					t.Errorf("%s%v at %d bits = %v: only %d bits", r.name, r.arguments, prec, b, b.RelativeBits())
				}
			}
		}
	}
	if narrow < 1500 {
		t.Errorf("only %d widths were checked", narrow)
	}
}

// The stand-ins are within their bound of mpmath's values, and the bound within
// 10^-75 of them.
func TestStandInsAgainstMpmath(t *testing.T) {
	functions := map[string]func(...Exact) (Exact, error){
		"exp":   func(a ...Exact) (Exact, error) { return Exp(a[0]) },
		"log":   func(a ...Exact) (Exact, error) { return Log(a[0]) },
		"sin":   func(a ...Exact) (Exact, error) { return Sin(a[0]) },
		"cos":   func(a ...Exact) (Exact, error) { return Cos(a[0]) },
		"atan":  func(a ...Exact) (Exact, error) { return Atan(a[0]) },
		"sqrt":  func(a ...Exact) (Exact, error) { return Sqrt(a[0]) },
		"atan2": func(a ...Exact) (Exact, error) { return Atan2(a[0], a[1]) },
	}
	relative := new(big.Rat).SetFrac(big.NewInt(1), powerOfTen(75))
	count := 0
	for _, r := range readReferences(t) {
		arguments := make([]Exact, len(r.arguments))
		for i, q := range r.arguments {
			arguments[i] = FromRat(q)
		}
		x, err := functions[r.name](arguments...)
		if err != nil {
			if outside := new(big.Rat).Abs(r.arguments[0]); outside.Cmp(big.NewRat(1<<12, 1)) < 0 || r.name == "atan" || r.name == "sqrt" {
				t.Errorf("%s%v: %v", r.name, r.arguments, err)
			}
			continue
		}
		count++
		distance := new(big.Rat).Sub(x.Rat(), r.value)
		if distance.Abs(distance).Cmp(new(big.Rat).Add(x.Bound(), r.slack)) > 0 {
			t.Errorf("%s%v = %v beyond its bound", r.name, r.arguments, x.Float())
		}
		limit := new(big.Rat).Mul(relative, r.value)
		if x.Bound().Cmp(limit.Abs(limit)) > 0 {
			t.Errorf("%s%v: bound %v", r.name, r.arguments, x.bound)
		}
		if n := x.Rat().Num().BitLen(); !x.IsExact() && n > standInBits && x.Rat().IsInt() == false {
			t.Errorf("%s%v: numerator of %d bits", r.name, r.arguments, n)
		}
	}
	if count < 450 {
		t.Errorf("only %d stand-ins were checked", count)
	}
}
