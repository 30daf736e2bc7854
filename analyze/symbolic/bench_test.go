package symbolic

import (
	"context"
	"testing"

	"portlight/analyze/network"
)

// Targets on one core of a 2020s desktop: a formula in at most 1 ms, proof and
// words included; a network that has none given up within 5 ms.
func BenchmarkFormula(b *testing.B) {
	for _, c := range textbook {
		switch c.name {
		case "RC low-pass", "bridge", "Sallen–Key low-pass, gain 1", "generalized impedance converter",
			"coupled coils with a load", "multiple-feedback low-pass", "bridge, impedance: too long":
		default:
			continue
		}
		b.Run(c.name, func(b *testing.B) { benchmarkFormula(b, build(b, c.net...), c.ask) })
	}
	b.Run("three buffered low-passes", func(b *testing.B) {
		benchmarkFormula(b, build(b, buffered...), "v:o3 / V1")
	})
	b.Run("ladder of eight sections: none", func(b *testing.B) {
		benchmarkFormula(b, build(b, ladder(8)...), "v:n8 / V1")
	})
	b.Run("mesh of 6 by 6: none", func(b *testing.B) {
		benchmarkFormula(b, build(b, mesh(6)...), "v:n2.2 / V1")
	})
}

func benchmarkFormula(b *testing.B, net *builder, ask string) {
	q := net.ask(b, ask)
	r, err := net.ratio(q)
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		sp := NewSpace(context.Background())
		if f, ok := sp.Transfer(&net.Network, []network.Probe{q.output}, q.by); ok {
			sp.Formula(f, r)
		}
	}
}
