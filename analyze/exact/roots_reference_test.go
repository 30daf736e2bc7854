package exact

import (
	"bufio"
	"math/big"
	"os"
	"strings"
	"testing"

	"portlight/dialect/number"
)

// Every root that mpmath found (testdata/roots.txt, made by testdata/roots.py to
// 60 digits) is in one ball, and in one only.
func TestRootsAgainstMpmath(t *testing.T) {
	file, err := os.Open("testdata/roots.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	lines := bufio.NewScanner(file)
	lines.Buffer(nil, 1<<20)
	var name string
	var roots []Root
	var found []int
	count := 0
	finish := func() {
		for i, n := range found {
			if n != 1 {
				t.Errorf("%s: %d reference roots in %v %v", name, n, roots[i].Re, roots[i].Im)
			}
		}
	}
	for lines.Scan() {
		fields := strings.Fields(lines.Text())
		switch fields[0] {
		case "poly":
			finish()
			name = fields[1]
			roots = checkRoots(t, NewPoly(rationals(t, fields[2:])...), 120)
			found = make([]int, len(roots))
		case "root":
			count++
			at := rationals(t, fields[1:])
			want := number.ComplexBall{Re: near(at[0]), Im: near(at[1])}
			for i, r := range roots {
				if r.Ball().Overlaps(want) {
					found[i]++
					if (at[1].Sign() == 0) != r.Real {
						t.Errorf("%s: %v %v, real: %v", name, r.Re, r.Im, r.Real)
					}
				}
			}
		}
	}
	finish()
	if count < 200 {
		t.Errorf("only %d reference roots", count)
	}
}

// Every root that MPSolve found (testdata/adversarial_roots.txt, made by the script
// beside it) is in one ball and in one only: clusters of real roots and of pairs, a
// ring around one point, coefficients that are differences of nearly equal ones or
// spread over 600 decades, and a network of degree 400.
func TestHardRootsAgainstMPSolve(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	built := map[string]func() Poly{"ladder-200": func() Poly { return unequalLadder(200) }}
	var name string
	var roots []Root
	var found []int
	count, polynomials := 0, 0
	begin := func(called string, p Poly) {
		name, roots = called, rootsAt(t, p, 130)
		if p.Degree() <= 60 {
			checkRoots(t, p, 300)
		}
		found = make([]int, len(roots))
		polynomials++
	}
	finish := func() {
		for i, n := range found {
			if n != 1 {
				t.Errorf("%s: %d reference roots in %v %v", name, n, roots[i].Re, roots[i].Im)
			}
		}
	}
	eachLine(t, "adversarial_roots.txt", func(w []string) {
		switch w[0] {
		case "poly":
			finish()
			begin(w[1], readPoly(t, w[2:]))
		case "build":
			finish()
			begin(w[1], built[w[1]]())
		case "root":
			count++
			want := reference(readRat(t, w[1]), readRat(t, w[2]))
			for i, r := range roots {
				if r.Ball().Overlaps(want) {
					found[i]++
					if (w[2] == "0") != r.Real || (w[1] == "0") != r.Imaginary {
						t.Errorf("%s: %v %v, want %v %v", name, r.Re, r.Im, w[1], w[2])
					}
				}
			}
		default:
			t.Fatalf("unknown line %q", w[0])
		}
	})
	finish()
	if polynomials < 9 || count < 620 {
		t.Errorf("only %d polynomials with %d roots", polynomials, count)
	}
}

// reference is a ball around a root known to 48 digits, of 1e-46 of its magnitude.
func reference(re, im *big.Rat) number.ComplexBall {
	size := new(big.Float).SetRat(new(big.Rat).Add(new(big.Rat).Abs(re), new(big.Rat).Abs(im)))
	width := size.SetPrec(53).Mul(size, big.NewFloat(1e-46))
	return number.ComplexBall{Re: number.BallFromRat(re, 256).WithRadius(width), Im: number.BallFromRat(im, 256).WithRadius(width)}
}

func rationals(t *testing.T, fields []string) []*big.Rat {
	t.Helper()
	var out []*big.Rat
	for _, f := range fields {
		r, ok := new(big.Rat).SetString(f)
		if !ok {
			t.Fatalf("%q is no number", f)
		}
		out = append(out, r)
	}
	return out
}

// near is a ball of 1e-57 of r around it.
func near(r *big.Rat) number.Ball {
	width, _ := new(big.Float).SetRat(new(big.Rat).Mul(new(big.Rat).Abs(r), powerOfTenRat(-57))).Float64()
	return number.BallFromRat(r, 256).WithRadius(big.NewFloat(width))
}
