package number

import (
	"fmt"
	"testing"
)

// Targets on one thread of a 2-core machine, at 128/256/512 bits:
//
//	Mul, Add         0.15 / 0.2 / 0.3 µs
//	Exp, SinCos      3 / 5 / 10 µs
//	Log, Atan2       10 / 15 / 30 µs
//	ComplexMul       1 / 1.2 / 2 µs
//	Sqrt (stand-in)  10 µs
func BenchmarkBall(b *testing.B) {
	for _, prec := range []uint{128, 256, 512} {
		x := BallFromInt(355, prec).Quo(BallFromInt(113, prec))
		y := BallFromInt(22, prec).Quo(BallFromInt(7, prec))
		z := ComplexBall{x, y}
		var ball Ball
		for _, c := range []struct {
			name string
			do   func()
		}{
			{"Add", func() { ball = x.Add(y) }},
			{"Mul", func() { ball = x.Mul(y) }},
			{"Quo", func() { ball = x.Quo(y) }},
			{"Sqrt", func() { ball = x.Sqrt() }},
			{"Exp", func() { ball = x.Exp() }},
			{"SinCos", func() { ball, _ = x.SinCos() }},
			{"Log", func() { ball = x.Log() }},
			{"Atan2", func() { ball = x.Atan2(y) }},
			{"ComplexMul", func() { ball = z.Mul(z).Re }},
			{"ComplexExp", func() { ball = z.Exp().Re }},
			{"Digits", func() { _, _ = x.Digits(17) }},
		} {
			b.Run(fmt.Sprintf("%s/%d", c.name, prec), func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					c.do()
				}
			})
		}
		_ = ball
	}
}

func BenchmarkStandIn(b *testing.B) {
	x := FromInt(2)
	for b.Loop() {
		_, _ = Sqrt(x)
	}
}
