package analyze

import (
	"math"
	"math/big"
	"os"
	"testing"

	"portlight/analyze/response"
	"portlight/dialect"
)

// TestStepsAgreeWithClosedForms compares the step-by-step response, which only
// large networks need, with the proved closed form on networks that have both.
func TestStepsAgreeWithClosedForms(t *testing.T) {
	for _, c := range []struct {
		file, question string
		times          []int64 // µs
	}{
		{"../testdata/buoy/supply.plight", "v[clean]", []int64{0, 10, 100, 1000}},
		{"../testdata/buoy/valve.plight", "v[coil]", []int64{1, 155, 2000}},
		{"../testdata/buoy/bus.plight", "v[in] - 2*v[bus]", []int64{10, 49000, 51000, 200000}},
	} {
		text, err := os.ReadFile(c.file)
		if err != nil {
			t.Fatal(err)
		}
		a := New(dialect.Check(dialect.Parse(c.file, string(text)), nil))
		q, findings := a.checked.Question(c.question)
		if q == nil {
			t.Fatal(findings)
		}
		var times []*big.Rat
		for _, us := range c.times {
			times = append(times, big.NewRat(us, 1000000))
		}
		values, err := a.valuesInDouble(t.Context(), q.What, configuration{}, times)
		if err != nil {
			t.Fatal(c.file, err)
		}
		s, err := a.linear(t.Context(), q.What, configuration{})
		if err != nil {
			t.Fatal(err)
		}
		for i, at := range times {
			for k, part := range []*response.Signal{s, s.ZeroInput(), s.ZeroState()} {
				want, err := signalValue(t.Context(), part, at, response.Right)
				if err != nil {
					t.Fatal(err)
				}
				if !values[i][k].Overlaps(want) {
					t.Errorf("%s %s at %v, part %d: %v, closed form %v", c.file, c.question, at, k, values[i][k], want)
				}
				if r, _ := values[i][k].Rad().Float64(); r > 1e-6*(1+math.Abs(want.MidFloat64())) {
					t.Errorf("%s %s at %v: radius %v is of no use", c.file, c.question, at, r)
				}
			}
		}
	}
}
