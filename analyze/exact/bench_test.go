package exact

import (
	"context"
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
