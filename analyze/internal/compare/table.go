package main

import (
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"
	"text/tabwriter"
)

// How far results may be apart, relative: roots and values are right to nearly
// all digits of float64 on both sides; scipy's samples come from a matrix
// exponential and a recurrence.
const (
	rootTolerance   = 1e-12
	valueTolerance  = 1e-9
	sampleTolerance = 1e-9
)

// report prints rows and collects disagreements.
type report struct {
	all      results
	lines    *tabwriter.Writer
	problems []error
}

// row prints one piece of work: its mark and our time in µs, and every other
// side's time with the ratio to ours. apart tells how far a result is from ours,
// relative, or that it is wrong.
func (r *report) row(kind, task, work string, mark, ours float64, apart func(result) (float64, error), tolerance float64) {
	reached := ""
	if mark > 0 {
		reached = fmt.Sprintf("%s\t%.2f", shown(mark), ours/mark)
	} else {
		reached = "–\t"
	}
	fmt.Fprintf(r.lines, "%s\t%s\t%s\t", work, reached, shown(ours))
	var cells []string
	for _, other := range r.all[kind+" "+task] {
		name := other.library + " " + other.method
		d, err := apart(other)
		if err == nil && !(d <= tolerance) {
			err = fmt.Errorf("off by %.2g", d)
		}
		if err != nil {
			r.problems = append(r.problems, fmt.Errorf("%s: %s disagrees: %w", work, name, err))
			name += " DISAGREES"
		}
		cells = append(cells, fmt.Sprintf("%s %s (%.2g×)", name, shown(other.micro), other.micro/ours))
	}
	if len(cells) == 0 {
		cells = append(cells, "–")
	}
	fmt.Fprintln(r.lines, strings.Join(cells, ", "))
}

// shown writes microseconds as ms or µs.
func shown(micro float64) string {
	if micro >= 100 {
		return fmt.Sprintf("%.3g ms", micro/1e3)
	}
	return fmt.Sprintf("%.3g µs", micro)
}

func table(directory string, to io.Writer) error {
	all, err := readResults(directory)
	if err != nil {
		return err
	}
	r := &report{all: all, lines: tabwriter.NewWriter(to, 0, 0, 2, ' ', 0)}
	fmt.Fprintln(r.lines, "work\tmark\tof mark\tours\tothers (their time over ours)")
	for _, section := range []func(*report, string) error{determinants, roots, frequencies, steps} {
		if err := section(r, directory); err != nil {
			return err
		}
	}
	if err := r.lines.Flush(); err != nil {
		return err
	}
	if len(r.problems) > 0 {
		return errors.Join(r.problems...)
	}
	_, err = fmt.Fprintln(to, "\nAll results agree: determinants coefficient by coefficient, roots to 1e-12, values and samples to 1e-9.")
	return err
}

func determinants(r *report, _ string) error {
	for _, t := range polynomialTasks() {
		if t.pencil == nil {
			continue
		}
		micro, d, err := ourDeterminant(t)
		if err != nil {
			return err
		}
		_, product := integerRows(t.pencil)
		r.row("det", t.name, "N and D (others: D), "+t.name, t.determinant*1e3, micro, func(o result) (float64, error) {
			return 0, o.sameDeterminant(d, product)
		}, 0)
	}
	return nil
}

func roots(r *report, _ string) error {
	for _, t := range polynomialTasks() {
		d, err := t.denominator()
		if err != nil {
			return err
		}
		micro, z, err := ourRoots(d)
		if err != nil {
			return err
		}
		r.row("roots", t.name, "roots of D, "+t.name, t.rooting*1e3, micro, func(o result) (float64, error) {
			return o.sameRoots(z)
		}, rootTolerance)
	}
	return nil
}

func frequencies(r *report, directory string) error {
	tasks, err := frequencyTasks()
	if err != nil {
		return err
	}
	for _, t := range tasks {
		micro, sweep, value, radius, err := ourValue(t)
		if err != nil {
			return err
		}
		if !(radius <= 1e-9*abs(value)) {
			r.problems = append(r.problems, fmt.Errorf("%s: the bound %g of %v is wide", t.name, radius, value))
		}
		apart := func(o result) (float64, error) { return o.sameValue(value) }
		bare, err := benchmark(filepath.Join(directory, "float.bench"), "BenchmarkFactorAndSolve/"+t.bench)
		if err != nil {
			return err
		}
		r.row("frequency", t.name, "factors and one solution, "+t.name, t.mark, bare, apart, valueTolerance)
		r.row("frequency", t.name, "value in a sweep with its bound, "+t.name, 0, sweep, apart, valueTolerance)
		r.row("frequency", t.name, "value to full precision with bound and condition, "+t.name, 0, micro, apart, valueTolerance)
	}
	return nil
}

func steps(r *report, _ string) error {
	micro, values, bound, err := ourStep()
	if err != nil {
		return err
	}
	if !(bound <= 1e-13) {
		r.problems = append(r.problems, fmt.Errorf("samples: the bound is %g", bound))
	}
	r.row("step", "ladder-10", "1000 samples of a step response of degree 20", 500, micro, func(o result) (float64, error) {
		return o.sameSamples(values)
	}, sampleTolerance)
	return nil
}

func abs(z complex128) float64 {
	re, im := real(z), imag(z)
	return max(re, -re) + max(im, -im)
}
