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
