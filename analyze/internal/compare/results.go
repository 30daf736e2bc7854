package main

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"math/big"
	"math/cmplx"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"portlight/analyze/exact"
)

// result is what the other side found: a line "KIND TASK METHOD µs DATA…" of a
// file LIBRARY.results.
type result struct {
	library, method string
	micro           float64
	data            []string
}

// results maps "KIND TASK" to what each library found, in the order of the files.
type results map[string][]result

func readResults(directory string) (results, error) {
	names, err := filepath.Glob(filepath.Join(directory, "*.results"))
	if err != nil {
		return nil, err
	}
	all := results{}
	for _, name := range names {
		file, err := os.Open(name)
		if err != nil {
			return nil, err
		}
		err = all.read(file, strings.TrimSuffix(filepath.Base(name), ".results"))
		file.Close()
		if err != nil {
			return nil, fmt.Errorf("%s: %w", name, err)
		}
	}
	return all, nil
}

func (all results) read(from io.Reader, library string) error {
	lines := bufio.NewScanner(from)
	lines.Buffer(nil, 1<<26)
	for lines.Scan() {
		w := strings.Fields(lines.Text())
		if len(w) < 5 {
			return fmt.Errorf("not a result: %.60q", lines.Text())
		}
		micro, err := strconv.ParseFloat(w[3], 64)
		if err != nil || !(micro > 0) {
			return fmt.Errorf("not a time: %q", w[3])
		}
		key := w[0] + " " + w[1]
		all[key] = append(all[key], result{library, w[2], micro, w[4:]})
	}
	return lines.Err()
}

// sameDeterminant compares with det(G + s·C) of the pencil whose rows were
// multiplied by numbers of the given product: every coefficient must be equal.
func (r result) sameDeterminant(ours exact.Poly, product *big.Int) error {
	c := make([]*big.Rat, len(r.data))
	for i, w := range r.data {
		v, ok := new(big.Rat).SetString(w)
		if !ok {
			return fmt.Errorf("%q is not a number", w)
		}
		c[i] = v
	}
	if want := ours.Scale(new(big.Rat).SetInt(product)); !exact.NewPoly(c...).Equal(want) {
		return fmt.Errorf("another determinant")
	}
	return nil
}

// numbers reads the data as float64.
func (r result) numbers() ([]float64, error) {
	x := make([]float64, len(r.data))
	for i, w := range r.data {
		var err error
		if x[i], err = strconv.ParseFloat(w, 64); err != nil {
			return nil, err
		}
	}
	return x, nil
}

// sameRoots matches each of our roots with the nearest one of theirs, each used
// once, and returns the greatest distance relative to the root.
func (r result) sameRoots(ours []complex128) (worst float64, err error) {
	x, err := r.numbers()
	if err != nil {
		return 0, err
	}
	if len(x) != 2*len(ours) {
		return 0, fmt.Errorf("%d roots instead of %d", len(x)/2, len(ours))
	}
	used := make([]bool, len(ours))
	for _, z := range ours {
		nearest, distance := -1, math.Inf(1)
		for j := range ours {
			if d := cmplx.Abs(z-complex(x[2*j], x[2*j+1])) / cmplx.Abs(z); !used[j] && d < distance {
				nearest, distance = j, d
			}
		}
		if nearest < 0 {
			return 0, fmt.Errorf("no root near %v", z)
		}
		used[nearest] = true
		worst = math.Max(worst, distance)
	}
	return worst, nil
}

// sameValue returns the relative distance of a complex value.
func (r result) sameValue(ours complex128) (float64, error) {
	x, err := r.numbers()
	if err != nil || len(x) != 2 {
		return 0, fmt.Errorf("not a complex number: %v", r.data)
	}
	return cmplx.Abs(ours-complex(x[0], x[1])) / cmplx.Abs(ours), nil
}

// sameSamples returns the greatest distance relative to the greatest sample.
func (r result) sameSamples(ours []float64) (float64, error) {
	x, err := r.numbers()
	if err != nil {
		return 0, err
	}
	if len(x) != len(ours) {
		return 0, fmt.Errorf("%d samples instead of %d", len(x), len(ours))
	}
	worst, size := 0.0, 0.0
	for i := range x {
		worst, size = math.Max(worst, math.Abs(x[i]-ours[i])), math.Max(size, math.Abs(ours[i]))
	}
	return worst / size, nil
}

// benchmark returns the least µs of a benchmark in the output of go test -bench.
func benchmark(path, name string) (float64, error) {
	text, err := os.ReadFile(path)
	if err != nil {
		return 0, err
	}
	least := math.Inf(1)
	for _, line := range strings.Split(string(text), "\n") {
		w := strings.Fields(line)
		if len(w) < 4 || w[3] != "ns/op" || strings.TrimSuffix(w[0], "-1") != name {
			continue
		}
		if ns, err := strconv.ParseFloat(w[2], 64); err == nil {
			least = math.Min(least, ns/1e3)
		}
	}
	if math.IsInf(least, 1) {
		return 0, fmt.Errorf("%s has no benchmark %s", path, name)
	}
	return least, nil
}
