package exact

import (
	"context"
	"math/big"
	"testing"
)

// BenchmarkNumeratorAndDenominator is the whole way from a pencil to the
// numerator of the driving-point response and the denominator. The marks are
// milliseconds on one thread (go test -cpu 1); ms/op stands beside its mark.
func BenchmarkNumeratorAndDenominator(b *testing.B) {
	ctx := context.Background()
	for _, n := range benchmarkNetworks {
		b.Run(n.String(), func(b *testing.B) {
			p, rhs, input, _ := n.build(n.size)
			for b.Loop() {
				f, err := p.Prepare(ctx)
				if err != nil {
					b.Fatal(err)
				}
				if _, err := f.Numerators(ctx, []Vector{rhs}, []Vector{input}); err != nil {
					b.Fatal(err)
				}
				f.Determinant()
			}
			ms := b.Elapsed().Seconds() * 1e3 / float64(b.N)
			b.ReportMetric(ms, "ms/op")
			b.ReportMetric(n.mark, "mark-ms")
			b.ReportMetric(ms/n.mark, "of-mark")
		})
	}
}

// BenchmarkLimit isolates the frequencies where the gain from input to output
// of a network crosses a limit: the roots in ω² of |N|² − k²·|D|², the work
// of deciding a limit over a range.
func BenchmarkLimit(b *testing.B) {
	ctx := context.Background()
	for _, n := range benchmarkNetworks {
		p, rhs, input, output := n.build(n.size)
		f, err := p.Prepare(ctx)
		if err != nil {
			b.Fatal(err)
		}
		h, err := f.Responses(ctx, []Vector{rhs}, []Vector{input, output})
		if err != nil {
			b.Fatal(err)
		}
		for k, name := range []string{"input", "output"} {
			num, den := h[k][0].Num.MagnitudeSquared(), h[k][0].Den.MagnitudeSquared()
			at, _ := PolyRatio(num).Quo(PolyRatio(den))
			mid, _ := at.Eval(big.NewRat(1e8, 1))
			limit := num.Sub(den.Scale(mid))
			b.Run(n.String()+"/"+name, func(b *testing.B) {
				roots := 0
				for b.Loop() {
					roots = len(IsolateRealRoots(limit, new(big.Rat), nil))
				}
				b.ReportMetric(float64(roots), "roots")
				b.ReportMetric(float64(maxBits(limit.Primitive().c)), "bits")
			})
		}
	}
}
