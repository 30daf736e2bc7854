package float

import (
	"context"
	"fmt"
	"testing"

	"portlight/analyze/network"
)

// gridPattern is the pattern of a square grid of side·side nodes.
func gridPattern(side int) (start, index []int32) {
	start = []int32{0}
	for i := range side {
		for j := range side {
			v := int32(i*side + j)
			if i > 0 {
				index = append(index, v-int32(side))
			}
			if j > 0 {
				index = append(index, v-1)
			}
			if j+1 < side {
				index = append(index, v+1)
			}
			if i+1 < side {
				index = append(index, v+int32(side))
			}
			start = append(start, int32(len(index)))
		}
	}
	return start, index
}

// BenchmarkOrdering: mark for 10⁴ nodes 50 ms.
func BenchmarkOrdering(b *testing.B) {
	for _, side := range []int{30, 100} {
		start, index := gridPattern(side)
		b.Run(fmt.Sprintf("grid=%d", side), func(b *testing.B) {
			for b.Loop() {
				if _, err := minimumDegree(context.Background(), start, index, nil); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// benchmarks are the networks of the marks.
func benchmarks(b *testing.B, run func(b *testing.B, s *Solver, sys *network.System)) {
	for _, c := range []struct {
		name  string
		build func() *builder
	}{
		{"ladder=1000", func() *builder { return rlcLadder(b, 1000) }},
		{"mesh=30", func() *builder { return rcMesh(b, 30) }},
		{"mesh=100", func() *builder { return rcMesh(b, 100) }},
	} {
		b.Run(c.name, func(b *testing.B) {
			s, sys := c.build().solver()
			run(b, s, sys)
		})
	}
}

// BenchmarkAt is one value with its bound and the condition number, to full
// precision.
func BenchmarkAt(b *testing.B) {
	benchmarks(b, func(b *testing.B, s *Solver, sys *network.System) {
		o, c := drivingPoint(b, sys, 1)
		for b.Loop() {
			if _, err := s.At(context.Background(), 1e5, []network.Output{o}, []network.Column{c}); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkFactorAndSolve is the work for one frequency of a sweep without
// bounds: the factors from new values on the structure found before, and one
// solution. Marks: ladder of 1000 sections 45 µs, mesh of 30² nodes 200 µs, of
// 100² nodes 12 ms.
func BenchmarkFactorAndSolve(b *testing.B) {
	benchmarks(b, func(b *testing.B, s *Solver, sys *network.System) {
		ctx := context.Background()
		o, c := drivingPoint(b, sys, 1)
		if _, err := s.At(ctx, 1e5, []network.Output{o}, []network.Column{c}); err != nil {
			b.Fatal(err)
		}
		f := s.plan.factor()
		x, y := make([]complex128, s.m.n), make([]complex128, s.m.n)
		omega := 1e5
		for b.Loop() {
			omega *= 1.0001
			if err := f.factorise(ctx, complex(0, omega), usedLimit); err != nil {
				b.Fatal(err)
			}
			f.solveSparse([]int32{0}, []complex128{1}, x, y, false)
		}
	})
}

// BenchmarkSweep is one frequency of a sweep with the bound of its error, on
// one thread.
func BenchmarkSweep(b *testing.B) {
	benchmarks(b, func(b *testing.B, s *Solver, sys *network.System) {
		o, c := drivingPoint(b, sys, 1)
		ask, err := s.question([]network.Output{o}, []network.Column{c})
		if err != nil {
			b.Fatal(err)
		}
		w := s.sweeper(ask)
		omega := 1e5
		for b.Loop() {
			omega *= 1.0001
			if _, err := w.answerAt(context.Background(), omega); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkResponse is a step response at 100 instants with bounds, the first
// factors included; no mark.
func BenchmarkResponse(b *testing.B) {
	for _, c := range []struct {
		name  string
		build func() *builder
		end   float64
	}{
		{"ladder=100", func() *builder { return rlcLadder(b, 100) }, 1e-3},
		{"ladder=1000", func() *builder { return rlcLadder(b, 1000) }, 5e-3},
		{"mesh=30", func() *builder { return rcMesh(b, 30) }, 1e-3},
	} {
		b.Run(c.name, func(b *testing.B) {
			n := c.build()
			source := n.two(network.CurrentSource, 0, 1, "")
			s, _ := n.solver()
			r, err := NewResponse(Setup{Intervals: []Interval{{0, s}}, Sources: []Source{{source, step(1e-3)}}})
			if err != nil {
				b.Fatal(err)
			}
			times := make([]float64, 100)
			for k := range times {
				times[k] = c.end * float64(k) / 99
			}
			for b.Loop() {
				if _, err := r.Values(context.Background(), times, voltage(1)); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkTooLarge is the choice between exact and double precision.
func BenchmarkTooLarge(b *testing.B) {
	for _, side := range []int{14, 50, 100} {
		b.Run(fmt.Sprintf("mesh=%d", side), func(b *testing.B) {
			sys := rcMesh(b, side).system()
			for b.Loop() {
				TooLarge(sys)
			}
		})
	}
}

// BenchmarkNew is the preparation of a solver.
func BenchmarkNew(b *testing.B) {
	for _, side := range []int{50, 100} {
		b.Run(fmt.Sprintf("mesh=%d", side), func(b *testing.B) {
			sys := rcMesh(b, side).system()
			for b.Loop() {
				if _, err := New(sys); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
