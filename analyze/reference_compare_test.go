package analyze_test

import (
	"encoding/json"
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"strings"
)

// tolerance is how a case lets an answer differ from its expectation.
type tolerance struct {
	exact              bool
	relative, absolute float64
	floor              bool // 1e-12 of the largest expected magnitude passes too
}

// readTolerance reads a case's tolerance; without one, figures have to agree
// to a relative 1e-9.
func readTolerance(raw json.RawMessage) tolerance {
	var word string
	if json.Unmarshal(raw, &word) == nil && strings.HasPrefix(word, "exact") {
		return tolerance{exact: true, relative: 1e-9}
	}
	var fields map[string]string
	if json.Unmarshal(raw, &fields) != nil {
		return tolerance{relative: 1e-9}
	}
	t := tolerance{floor: fields["absolute_floor"] != ""}
	fmt.Sscan(fields["relative"], &t.relative)
	fmt.Sscan(fields["absolute"], &t.absolute)
	return t
}

// near tells whether got is within the tolerance of want, largest being the
// greatest magnitude that the same list expects.
func (t tolerance) near(got, want complex128, largest float64) bool {
	d := cmplx.Abs(got - want)
	if math.IsNaN(d) {
		return false
	}
	if d <= t.absolute || d <= t.relative*cmplx.Abs(want) {
		return true
	}
	return t.floor && d <= 1e-12*largest
}

// rat reads a decimal or fraction exactly.
func rat(s string) (*big.Rat, error) {
	r, ok := new(big.Rat).SetString(s)
	if !ok {
		return nil, fmt.Errorf("%q is not a number", s)
	}
	return r, nil
}

// float reads a decimal or fraction; NaN when it is none.
func float(s string) float64 {
	r, err := rat(s)
	if err != nil {
		return math.NaN()
	}
	f, _ := r.Float64()
	return f
}

// aRatio is a rational function as lists of exact coefficients.
type aRatio struct{ num, den []*big.Rat }

func readRatio(num, den []string) (aRatio, error) {
	var r aRatio
	for _, side := range []struct {
		from []string
		to   *[]*big.Rat
	}{{num, &r.num}, {den, &r.den}} {
		for _, c := range side.from {
			v, err := rat(c)
			if err != nil {
				return r, err
			}
			*side.to = append(*side.to, v)
		}
	}
	return r.monic()
}

// monic trims zero leading coefficients and makes the denominator monic.
func (r aRatio) monic() (aRatio, error) {
	trim := func(c []*big.Rat) []*big.Rat {
		for len(c) > 0 && c[len(c)-1].Sign() == 0 {
			c = c[:len(c)-1]
		}
		return c
	}
	r.num, r.den = trim(r.num), trim(r.den)
	if len(r.den) == 0 {
		return r, fmt.Errorf("the denominator is zero")
	}
	if len(r.num) == 0 {
		return aRatio{nil, []*big.Rat{big.NewRat(1, 1)}}, nil
	}
	lead := new(big.Rat).Set(r.den[len(r.den)-1])
	scale := func(c []*big.Rat) []*big.Rat {
		out := make([]*big.Rat, len(c))
		for i, v := range c {
			out[i] = new(big.Rat).Quo(v, lead)
		}
		return out
	}
	return aRatio{scale(r.num), scale(r.den)}, nil
}

// at evaluates the function at jω.
func (r aRatio) at(omega float64) complex128 {
	s := complex(0, omega)
	eval := func(c []*big.Rat) complex128 {
		var sum complex128
		for i := len(c) - 1; i >= 0; i-- {
			f, _ := c[i].Float64()
			sum = sum*s + complex(f, 0)
		}
		return sum
	}
	return eval(r.num) / eval(r.den)
}

// compareRatios demands equal degrees, and equal coefficients where both
// sides are exact; otherwise each within the tolerance.
func compareRatios(got, want aRatio, exact bool, t tolerance) error {
	for _, side := range []struct {
		name      string
		got, want []*big.Rat
	}{{"numerator", got.num, want.num}, {"denominator", got.den, want.den}} {
		if len(side.got) != len(side.want) {
			return fmt.Errorf("%s has %d coefficients, want %d", side.name, len(side.got), len(side.want))
		}
		for i := range side.got {
			if exact && t.exact {
				if side.got[i].Cmp(side.want[i]) != 0 {
					return fmt.Errorf("%s coefficient of s^%d is %s, want %s", side.name, i, side.got[i].RatString(), side.want[i].RatString())
				}
				continue
			}
			g, _ := side.got[i].Float64()
			w, _ := side.want[i].Float64()
			if !t.near(complex(g, 0), complex(w, 0), 0) {
				return fmt.Errorf("%s coefficient of s^%d is %g, want %g", side.name, i, g, w)
			}
		}
	}
	return nil
}

// aRoot is a root with its multiplicity, in double precision: enough to
// compare to nine digits.
type aRoot struct {
	at           complex128
	multiplicity int
}

// compareRoots matches every expected root with one found.
func compareRoots(got, want []aRoot, t tolerance) error {
	largest := 0.0
	for _, w := range want {
		largest = math.Max(largest, cmplx.Abs(w.at))
	}
	t.floor = true
	used := make([]bool, len(got))
	for _, w := range want {
		best := -1
		for i, g := range got {
			if !used[i] && t.near(g.at, w.at, largest) && (best < 0 || cmplx.Abs(g.at-w.at) < cmplx.Abs(got[best].at-w.at)) {
				best = i
			}
		}
		if best < 0 {
			return fmt.Errorf("no root at %v among %v", w.at, got)
		}
		if got[best].multiplicity != w.multiplicity {
			return fmt.Errorf("the root %v has multiplicity %d, want %d", w.at, got[best].multiplicity, w.multiplicity)
		}
		used[best] = true
	}
	if len(got) != len(want) {
		return fmt.Errorf("%d roots, want %d: %v", len(got), len(want), got)
	}
	return nil
}
