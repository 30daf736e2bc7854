package main

import (
	"math/big"
	"strings"
	"testing"

	"portlight/analyze/exact"
)

func one(t *testing.T, line string) result {
	t.Helper()
	all := results{}
	if err := all.read(strings.NewReader(line), "library"); err != nil {
		t.Fatal(err)
	}
	for _, r := range all {
		return r[0]
	}
	t.Fatal("nothing read")
	return result{}
}

// What differs is called different, by however little.
func TestDisagreementIsSeen(t *testing.T) {
	p := exact.NewPoly(big.NewRat(1, 2), big.NewRat(3, 1))
	if err := one(t, "det x m 1.5 5 30 0").sameDeterminant(p, big.NewInt(10)); err != nil {
		t.Error(err)
	}
	for _, line := range []string{"det x m 1.5 5 31", "det x m 1.5 -5 -30", "det x m 1.5 5 x"} {
		if one(t, line).sameDeterminant(p, big.NewInt(10)) == nil {
			t.Errorf("%q passes", line)
		}
	}
	ours := []complex128{-1, complex(-2, 3), complex(-2, -3)}
	if d, err := one(t, "roots x m 1 -2 -3 -1 0 -2 3").sameRoots(ours); err != nil || d != 0 {
		t.Error(d, err)
	}
	if d, err := one(t, "roots x m 1 -2 -3 -1.00000001 0 -2 3").sameRoots(ours); err != nil || d < 0.9e-8 || d > 1.1e-8 {
		t.Error(d, err)
	}
	// The same root twice is not both of a pair.
	if d, err := one(t, "roots x m 1 -2 -3 -1 0 -2 -3").sameRoots(ours); err != nil || d < 1 {
		t.Error(d, err)
	}
	if _, err := one(t, "roots x m 1 -2 -3").sameRoots(ours); err == nil {
		t.Error("a missing root passes")
	}
	if d, err := one(t, "frequency x m 1 3 4.5").sameValue(complex(3, 4)); err != nil || d != 0.1 {
		t.Error(d, err)
	}
	if d, err := one(t, "step x m 1 0 1 2.5").sameSamples([]float64{0, 1, 2}); err != nil || d != 0.25 {
		t.Error(d, err)
	}
	if (results{}).read(strings.NewReader("det x m 0 1\n"), "library") == nil || (results{}).read(strings.NewReader("det x m"), "library") == nil {
		t.Error("a broken line passes")
	}
}

// Every task has the degree that its name says: 2n for a ladder of n sections, k²
// for a mesh.
func TestProblemsAreOfTheSizesNamed(t *testing.T) {
	want := map[string]int{
		"ladder-10": 20, "ladder-20": 40, "ladder-50": 100, "mesh-5": 25, "mesh-7": 49, "mesh-10": 100,
		"filter-10": 20, "filter-20": 40, "filter-50": 100, "filter-100": 200, "ladder-100": 200,
	}
	for _, task := range polynomialTasks() {
		d, err := task.denominator()
		if err != nil || d.Degree() != want[task.name] {
			t.Errorf("%s: degree %d, want %d; %v", task.name, d.Degree(), want[task.name], err)
		}
	}
}
