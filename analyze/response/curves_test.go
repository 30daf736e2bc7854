package response

import (
	"errors"
	"math"
	"math/big"
	"math/rand"
	"testing"

	"portlight/dialect/number"
)

// randomCurve is a random signal, alone or under the operations of curves.
func randomCurve(t testing.TB, r *rand.Rand) *Curve {
	s := transferSignal(t, randomTransfer(t, r, 1+r.Intn(6)), randomWave(t, r))
	other := transferSignal(t, randomTransfer(t, r, 1+r.Intn(4)), randomWave(t, r)).Curve()
	switch r.Intn(5) {
	case 0:
		return Least(s.Curve(), other)
	case 1:
		return Greatest(s.Curve(), other.Abs())
	case 2:
		return s.Curve().Abs().Sub(other)
	case 3:
		return s.Times(s, number.FromInt(2))
	}
	return s.Curve()
}

// sampled evaluates a curve from fast samples of its leaves.
func sampled(t testing.TB, c *Curve, times []float64) []float64 {
	if c.op == opLeaf {
		switch f := c.leaf.(type) {
		case *Signal:
			v, _ := sampler(t, f).Sample(times)
			return v
		case *product:
			a, b := sampled(t, f.a.Curve(), times), sampled(t, f.b.Curve(), times)
			k, _ := f.factor.Float64()
			for i := range a {
				a[i] *= k * b[i]
			}
			return a
		}
		t.Fatal("a leaf without samples")
	}
	v := sampled(t, c.args[0], times)
	var w []float64
	if len(c.args) > 1 {
		w = sampled(t, c.args[1], times)
	}
	for i := range v {
		switch c.op {
		case opNegate:
			v[i] = -v[i]
		case opAbs:
			v[i] = math.Abs(v[i])
		case opLeast:
			v[i] = math.Min(v[i], w[i])
		case opGreatest:
			v[i] = math.Max(v[i], w[i])
		case opAdd:
			v[i] += w[i]
		}
	}
	return v
}

// Every measure of random curves agrees with dense samples.
func TestCurvesAgainstSamples(t *testing.T) {
	r := rand.New(rand.NewSource(21))
	const n = 3000
	for k := range 40 {
		c := randomCurve(t, r)
		end := big.NewRat(1+r.Int63n(80), 10)
		f, _ := end.Float64()
		times := make([]float64, n+1)
		for i := range times {
			times[i] = f * float64(i) / n
		}
		v := sampled(t, c, times)
		least, most, mean, square := math.Inf(1), math.Inf(-1), 0.0, 0.0
		for i, x := range v {
			least, most = math.Min(least, x), math.Max(most, x)
			weight := 1.0 / n
			if i == 0 || i == n {
				weight /= 2
			}
			mean, square = mean+weight*x, square+weight*x*x
		}
		size := math.Max(math.Abs(least), math.Abs(most))
		if size < 1e-14 {
			continue
		}
		within := func(what string, got number.Ball, err error, low, high float64) {
			t.Helper()
			if m := got.MidFloat64(); err != nil || m < low-1e-9*size || m > high+1e-9*size {
				t.Errorf("%d: %s: %s (%v), samples say %g … %g", k, what, got, err, low, high)
			}
		}
		span := Range{To: end}
		e, err := c.Peak(background, span)
		within("peak", e.Value, err, most, most+0.05*size)
		e, err = c.Trough(background, span)
		within("trough", e.Value, err, least-0.05*size, least)
		x, err := c.Mean(background, span)
		within("mean", x, err, mean-0.01*size, mean+0.01*size)
		x, err = c.RMS(background, span)
		within("rms", x, err, math.Sqrt(square)-0.02*size, math.Sqrt(square)+0.02*size)
		level := least + (most-least)*(0.1+0.8*r.Float64())
		first, last := -1, -1
		for i, x := range v {
			if x > level {
				if last = i; first < 0 {
					first = i
				}
			}
		}
		exactly := number.FromRat(new(big.Rat).SetFloat64(level))
		x, err = c.LastAbove(background, exactly, span)
		within("last above", x, err, times[last], times[min(last+1, n)])
		x, err = c.FirstAbove(background, exactly, span)
		within("first above", x, err, times[max(first-1, 0)], times[first])
		if _, err := c.Peak(background, Range{}); err != nil && !errors.Is(err, ErrUndefined) && !errors.Is(err, ErrUndecided) {
			t.Errorf("%d: peak for ever: %v", k, err)
		}
	}
}
