package exact

import (
	"math/big"
	"testing"

	"pgregory.net/rapid"
	"portlight/dialect/number"
)

// A ball around a point holds the exact values at points inside it, and is
// narrow when the point is alone in it.
func TestBallEvaluation(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := drawPoly(t, 12, 300, "p")
		re, im := drawRat(t, 60, "re"), drawRat(t, 60, "im")
		const prec = 192
		spread := new(big.Rat).SetFrac64(rapid.Int64Range(0, 100).Draw(t, "spread"), 1<<40)
		at := func(r *big.Rat) number.Ball {
			return number.BallFromRat(r, prec).WithRadius(new(big.Float).SetRat(spread))
		}
		// A point inside the ball that is not its middle.
		inside := new(big.Rat).Add(re, new(big.Rat).Mul(spread, big.NewRat(rapid.Int64Range(-9, 9).Draw(t, "inside"), 10)))
		if got, want := p.EvalBall(at(re)), p.Eval(inside); !got.Contains(want) {
			t.Fatalf("%v at %v: the ball misses %v", p, inside, want)
		}
		z := number.ComplexBall{Re: at(re), Im: at(im)}
		x, y := p.EvalGaussian(inside, im)
		if got := p.EvalComplexBall(z); !got.Re.Contains(x) || !got.Im.Contains(y) {
			t.Fatalf("%v at %v + j %v: the ball misses %v + j %v", p, inside, im, x, y)
		}
		terms := rapid.IntRange(0, 15).Draw(t, "terms")
		q := p
		factorial := big.NewRat(1, 1)
		for k, got := range p.TaylorComplexBall(z, terms) {
			x, y := q.EvalGaussian(inside, im)
			if !got.Re.Contains(x.Quo(x, factorial)) || !got.Im.Contains(y.Quo(y, factorial)) {
				t.Fatalf("Taylor coefficient %d of %v is missed", k, p)
			}
			q = q.Derivative()
			factorial.Mul(factorial, big.NewRat(int64(k+1), 1))
		}
	})
}

func TestRatioBall(t *testing.T) {
	f, err := NewRatio(PolyFromInt64s(1, 2), PolyFromInt64s(2, 0, 3))
	if err != nil {
		t.Fatal(err)
	}
	x := number.BallFromRat(big.NewRat(1, 3), 128)
	want, _ := f.Eval(big.NewRat(1, 3))
	if got := f.EvalBall(x); !got.Contains(want) || got.RelativeBits() < 100 {
		t.Errorf("value %v with %d bits", got.MidRat(), got.RelativeBits())
	}
	re, im, _ := f.EvalGaussian(big.NewRat(1, 3), big.NewRat(5, 7))
	z := f.EvalComplexBall(number.ComplexBall{Re: x, Im: number.BallFromRat(big.NewRat(5, 7), 128)})
	if !z.Re.Contains(re) || !z.Im.Contains(im) || z.Re.RelativeBits() < 100 {
		t.Error("complex value")
	}
	pole, _ := NewRatio(PolyFromInt64s(1), PolyFromInt64s(-1, 3))
	if pole.EvalBall(x.WithRadius(big.NewFloat(1e-9))).IsFinite() {
		t.Error("a ball that holds a pole has a finite value")
	}
}
