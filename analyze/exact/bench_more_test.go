package exact

import (
	"context"
	"math/big"
	"strconv"
	"testing"
	"time"
)

// longLadder is a ladder whose values have 290-bit numerators and
// denominators, as stand-ins for irrational numbers have.
func longLadder(n int) (p *Pencil, rhs, input, output Vector) {
	q, rhs, input, output := ladder(n)
	p = NewPencil(2 * n)
	k := int64(1)
	stretch := func(r *big.Rat) *big.Rat {
		if r.Sign() == 0 || r.IsInt() && r.Num().BitLen() == 1 {
			return r
		}
		k += 2
		f := new(big.Rat).SetFrac(
			new(big.Int).Exp(big.NewInt(1000003+k), big.NewInt(14), nil),
			new(big.Int).Exp(big.NewInt(1000002-k), big.NewInt(14), nil))
		return f.Mul(f, r)
	}
	for e := range q.Entries() {
		p.Add(e.Row, e.Col, stretch(e.G), stretch(e.C))
	}
	return p, rhs, input, output
}

// longMesh is a mesh with such values.
func longMesh(k int) (p *Pencil, rhs, input, output Vector) {
	q, rhs, input, output := mesh(k)
	p = NewPencil(k * k)
	f := new(big.Rat).SetFrac(
		new(big.Int).Exp(big.NewInt(1000003), big.NewInt(14), nil),
		new(big.Int).Exp(big.NewInt(1000033), big.NewInt(14), nil))
	for e := range q.Entries() {
		g, c := e.G, e.C
		if e.Row%3 == 0 {
			c = new(big.Rat).Mul(c, f)
		}
		p.Add(e.Row, e.Col, g, c)
	}
	return p, rhs, input, output
}

// BenchmarkLongValues is numerator and denominator with long values.
func BenchmarkLongValues(b *testing.B) {
	ctx := context.Background()
	for _, n := range []network{
		{name: "ladder", build: longLadder, size: 5},
		{name: "ladder", build: longLadder, size: 20},
		{name: "ladder", build: longLadder, size: 50},
		{name: "mesh", build: longMesh, size: 5},
		{name: "mesh", build: longMesh, size: 7},
	} {
		b.Run(n.String(), func(b *testing.B) {
			p, rhs, input, _ := n.build(n.size)
			for b.Loop() {
				f, _ := p.Prepare(ctx)
				if _, err := f.Numerators(ctx, []Vector{rhs}, []Vector{input}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkSolveAt solves for all unknowns at s = 0 and on the imaginary axis.
func BenchmarkSolveAt(b *testing.B) {
	ctx := context.Background()
	for _, n := range benchmarkNetworks {
		p, rhs, _, _ := n.build(n.size)
		for name, w := range map[string]*big.Rat{"dc": new(big.Rat), "sine": big.NewRat(314159265, 1000)} {
			b.Run(n.String()+"/"+name, func(b *testing.B) {
				for b.Loop() {
					if _, _, err := p.SolveAt(ctx, new(big.Rat), w, rhs); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// manyFilters is a pencil of count unconnected ladders of two sections.
func manyFilters(count int) *Pencil {
	q, _, _, _ := ladder(2)
	n := q.Size()
	p := NewPencil(count * n)
	for k := range count {
		for e := range q.Entries() {
			p.Add(k*n+e.Row, k*n+e.Col, e.G, e.C)
		}
	}
	return p
}

// BenchmarkThousandFilters asks about one of a thousand filters, and for the
// determinants of all.
func BenchmarkThousandFilters(b *testing.B) {
	ctx := context.Background()
	p := manyFilters(1000)
	b.Run("prepare", func(b *testing.B) {
		for b.Loop() {
			if _, err := p.Prepare(ctx); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("one", func(b *testing.B) {
		f, _ := p.Prepare(ctx)
		k := 0
		for b.Loop() {
			k = (k + 1) % 1000
			if _, err := f.Responses(ctx, []Vector{Unit(4 * k)}, []Vector{Unit(4*k + 3)}); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("all", func(b *testing.B) {
		for b.Loop() {
			f, _ := p.Prepare(ctx)
			if _, err := f.BlockDeterminants(ctx); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("solve", func(b *testing.B) {
		for b.Loop() {
			if _, _, err := p.SolveAt(ctx, new(big.Rat), new(big.Rat), Unit(8)); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// BenchmarkCancel reports how long the end of a long computation takes after
// its context has ended. Mark: 10 ms.
func BenchmarkCancel(b *testing.B) {
	p, rhs, input, _ := mesh(20)
	worst := 0.0
	for b.Loop() {
		ctx, cancel := context.WithCancel(context.Background())
		var ended time.Time
		time.AfterFunc(20*time.Millisecond, func() { ended = time.Now(); cancel() })
		f, err := p.Prepare(ctx)
		if err == nil {
			_, err = f.Numerators(ctx, []Vector{rhs}, []Vector{input})
		}
		if err == nil {
			b.Fatal("finished before it was stopped")
		}
		worst = max(worst, time.Since(ended).Seconds()*1e3)
	}
	b.ReportMetric(worst, "ms-worst")
	b.ReportMetric(10, "mark-ms")
}

// BenchmarkSturm compares the two ways of counting real roots.
func BenchmarkSturm(b *testing.B) {
	for _, degree := range []int{4, 8, 12, 20, 40} {
		p := randomPoly(5, degree, 300)
		b.Run("sequence/"+strconv.Itoa(degree), func(b *testing.B) {
			for b.Loop() {
				SturmCount(p, nil, nil)
			}
		})
		b.Run("isolation/"+strconv.Itoa(degree), func(b *testing.B) {
			for b.Loop() {
				IsolateRealRoots(p, nil, nil)
			}
		})
	}
}
