package response

import (
	"context"
	"errors"
	"math"
	"math/big"
	"math/rand"
	"sync"
	"testing"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// randomTransfer is a stable transfer with a mix of real poles, pairs and
// repeated ones, and a random numerator.
func randomTransfer(t testing.TB, r *rand.Rand, degree int) exact.Ratio {
	d := poly(1)
	for d.Degree() < degree {
		var f exact.Poly
		if r.Intn(2) == 0 {
			f = poly(1+r.Int63n(50), 10)
		} else {
			f = poly(1+r.Int63n(900), 1+r.Int63n(20), 10)
		}
		d = d.Mul(f)
		if r.Intn(4) == 0 {
			d = d.Mul(f)
		}
	}
	n := poly()
	for range d.Degree() {
		n = n.Mul(poly(0, 1)).Add(poly(r.Int63n(200) - 100))
	}
	return ratio(t, n, d)
}

func randomWave(t testing.TB, r *rand.Rand) Wave {
	var w Wave
	for range 1 + r.Intn(2) {
		p := WavePiece{From: number.FromRat(big.NewRat(r.Int63n(20), 10))}
		p.Terms = append(p.Terms, WaveTerm{
			Power:  r.Intn(2),
			Rate:   number.FromRat(big.NewRat(-r.Int63n(20), 10)),
			Omega:  number.FromRat(big.NewRat(r.Int63n(3)*r.Int63n(30), 10)),
			Cosine: number.FromRat(big.NewRat(r.Int63n(20)-10, 3)),
			Sine:   number.FromRat(big.NewRat(r.Int63n(20)-10, 7)),
		})
		w.Pieces = append(w.Pieces, p)
	}
	return w
}

// The peak bound holds between samples, is reached, and the samples are within
// their own bound of the refined values.
func TestPeaksAgainstSamples(t *testing.T) {
	r := rand.New(rand.NewSource(7))
	for k := range 60 {
		s := transferSignal(t, randomTransfer(t, r, 1+r.Intn(5)), randomWave(t, r))
		end := big.NewRat(1+r.Int63n(60), 10)
		span := Range{To: end}
		hi, err := s.Curve().Peak(background, span)
		if err != nil {
			t.Fatalf("%d: %v", k, err)
		}
		lo, err := s.Curve().Trough(background, span)
		if err != nil {
			t.Fatalf("%d: %v", k, err)
		}
		abs, err := s.Curve().Abs().Peak(background, span)
		if err != nil {
			t.Fatalf("%d: %v", k, err)
		}
		f, _ := end.Float64()
		values, bound := sampler(t, s).Uniform(0, f/4000, 4000)
		least, most := math.Inf(1), math.Inf(-1)
		for _, v := range values {
			least, most = math.Min(least, v), math.Max(most, v)
		}
		size := math.Max(math.Abs(least), math.Abs(most))
		top, bottom := hi.Value.MidFloat64(), lo.Value.MidFloat64()
		// Samples 1/4000 apart miss an extreme by little of the size.
		if top < most-bound || top > most+0.02*size+bound || bottom > least+bound || bottom < least-0.02*size-bound {
			t.Errorf("%d: peak %g trough %g, samples reach %g and %g", k, top, bottom, most, least)
		}
		if a := abs.Value.MidFloat64(); math.Abs(a-math.Max(top, -bottom)) > 1e-12*size {
			t.Errorf("%d: peak of abs %g, peaks %g %g", k, a, top, bottom)
		}
		if size > 0 && hi.Value.RelativeBits() < 40 && math.Abs(top) > 1e-3*size {
			t.Errorf("%d: peak %s is known to %d bits only", k, hi.Value, hi.Value.RelativeBits())
		}
		if hi.HasAt {
			v, err := s.Curve().Value(background, hi.At.MidRat(), Right, 15)
			w, _ := s.Curve().Value(background, hi.At.MidRat(), Left, 15)
			if err != nil || math.Abs(v.MidFloat64()-top) > 1e-9*size && math.Abs(w.MidFloat64()-top) > 1e-9*size {
				t.Errorf("%d: the value at the peak's instant is %s, not %s (%v)", k, v, hi.Value, err)
			}
		}
	}
}

// Refining narrows: the ball at a higher precision lies in the one at a lower.
func TestRefinementContains(t *testing.T) {
	r := rand.New(rand.NewSource(3))
	for range 40 {
		s := transferSignal(t, randomTransfer(t, r, 2+r.Intn(6)), randomWave(t, r))
		when := big.NewRat(1+r.Int63n(100), 17)
		coarse, err := s.ValueAt(background, when, Right, 64)
		if err != nil {
			t.Fatal(err)
		}
		fine, err := s.ValueAt(background, when, Right, 512)
		if err != nil {
			t.Fatal(err)
		}
		if !coarse.WithBound(fine.Abs().MulPow2(-500)).ContainsBall(number.BallFromFloat(fine.Mid(), 512)) {
			t.Errorf("%s does not hold %s", coarse, fine)
		}
	}
}

// A third-order answer against a Runge–Kutta integration of the differential
// equation, which shares nothing with partial fractions.
func TestAgainstDifferentialEquation(t *testing.T) {
	// y''' + 3y'' + 7y' + 5y = 2u' + 10u, u = cos 2t·e^{−t/2}.
	w := Wave{Always: []WaveTerm{{Rate: num(t, "-1/2"), Omega: num(t, "2"), Cosine: num(t, "1")}}}
	s := transferSignal(t, ratio(t, poly(10, 2), poly(5, 7, 3, 1)), w)
	u := func(t float64) float64 { return math.Cos(2*t) * math.Exp(-t/2) }
	// Controllable form: x1' = x2, x2' = x3, x3' = u − 5x1 − 7x2 − 3x3, y = 10x1 + 2x2.
	derive := func(t float64, x [3]float64) [3]float64 {
		return [3]float64{x[1], x[2], u(t) - 5*x[0] - 7*x[1] - 3*x[2]}
	}
	var x [3]float64
	const h = 1e-3
	move := func(a [3]float64, f float64, d [3]float64) [3]float64 {
		for i := range a {
			a[i] += f * d[i]
		}
		return a
	}
	for n := range 3000 {
		t0 := float64(n) * h
		k1 := derive(t0, x)
		k2 := derive(t0+h/2, move(x, h/2, k1))
		k3 := derive(t0+h/2, move(x, h/2, k2))
		k4 := derive(t0+h, move(x, h, k3))
		x = move(move(move(move(x, h/6, k1), h/3, k2), h/3, k3), h/6, k4)
	}
	near(t, "y(3)", valueOf(t, s, "3"), 10*x[0]+2*x[1], 1e-11)
}

// Zero-input and zero-state parts, and natural and forced ones, add up; the
// initial-value theorem gives the value at 0+.
func TestPartsAddUp(t *testing.T) {
	r := rand.New(rand.NewSource(11))
	for range 30 {
		h := randomTransfer(t, r, 2+r.Intn(4))
		s := transferSignal(t, h, randomWave(t, r))
		when := big.NewRat(1+r.Int63n(100), 23)
		total := at(t, s, when.RatString(), Right)
		sum := at(t, s.Natural(), when.RatString(), Right) + at(t, s.Forced(), when.RatString(), Right)
		if math.Abs(total-sum) > 1e-12*(math.Abs(total)+1) {
			t.Errorf("natural and forced add up to %g, not %g", sum, total)
		}
		if d := s.Sub(s); !d.IsZero() {
			t.Error("a signal minus itself is not zero")
		}
		start, err := s.InitialValue(background)
		limit, err2 := s.Value(background, rat(t, "1e-30"), Right, 17)
		if err != nil || err2 != nil || math.Abs(start.Float()-limit.MidFloat64()) > 1e-20*(1+math.Abs(start.Float())) {
			t.Errorf("at 0+ %v, just after %s (%v %v)", start, limit, err, err2)
		}
	}
}

// The exponential of a term is right to exponentialUnits units.
func TestExponentialUnits(t *testing.T) {
	r := rand.New(rand.NewSource(5))
	worst := 0.0
	for range 5000 {
		p := number.ComplexBall{
			Re: number.BallFromRat(big.NewRat(-r.Int63n(1e9), 1+r.Int63n(1e9)), 192),
			Im: number.BallFromRat(big.NewRat(r.Int63n(1e13), 1+r.Int63n(1e12)), 192),
		}
		x := sum{terms: []term{{pole: termPole{p: p}, c: []number.ComplexBall{realBall(number.BallFromInt(1, 64))}}}}
		f, err := x.toFloat()
		if err != nil {
			t.Fatal(err)
		}
		tau := r.Float64() * math.Pow(10, float64(r.Intn(4)))
		re, im := f.terms[0].exponential(tau, 0)
		e := p.MulBall(number.BallFromFloat64(tau, 192)).Exp()
		size := e.Abs().MidFloat64()
		if size < 1e-290 {
			continue
		}
		dr := e.Re.Sub(number.BallFromFloat64(re, 192)).MidFloat64()
		di := e.Im.Sub(number.BallFromFloat64(im, 192)).MidFloat64()
		worst = math.Max(worst, math.Hypot(dr, di)/size/unit)
	}
	if worst > exponentialUnits {
		t.Errorf("off by %.2f units", worst)
	}
	t.Logf("worst %.2f of %d units", worst, exponentialUnits)
}

// A model holds the value and its derivatives between its samples.
func TestModelsHold(t *testing.T) {
	r := rand.New(rand.NewSource(9))
	for range 300 {
		s := transferSignal(t, randomTransfer(t, r, 1+r.Intn(5)), randomWave(t, r))
		stages, err := s.Curve().stages(background, Range{}, refinePrecision)
		if err != nil {
			t.Fatal(err)
		}
		st := stages[len(stages)-1]
		m := r.Float64() * 3
		h := math.Min(m, r.Float64()/math.Max(st.floats[0].rate, 0.1)*panelPhase)
		for _, exactly := range []bool{false, true} {
			p, ok := st.floats[0].model(m, h, 0)
			if exactly {
				p = st.sums[0].ballModel(m, h)
			}
			if !ok {
				continue
			}
			u := r.Float64()*2 - 1
			v := u + r.Float64()*(1-u)
			e := p.on(u, v)
			tau := number.BallFromFloat64(m, 256).Add(number.BallFromFloat64(h, 256).Mul(number.BallFromFloat64(u+r.Float64()*(v-u), 256)))
			d1 := st.sums[0].derivative()
			check := func(what string, in interval, got number.Ball) {
				x := got.MidFloat64()
				if x < in.lo || x > in.hi {
					t.Errorf("%s %g outside %v", what, x, in)
				}
			}
			check("value", e.interval, st.sums[0].at(tau))
			check("slope", e.slope, d1.at(tau).Mul(number.BallFromFloat64(h, 256)))
			check("bend", e.bend, d1.derivative().at(tau).Mul(number.BallFromFloat64(h, 256).Sqr()))
		}
	}
}

func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	r := rand.New(rand.NewSource(1))
	s := transferSignal(t, randomTransfer(t, r, 6), randomWave(t, r))
	if _, err := s.Value(ctx, big.NewRat(1, 2), Right, 17); !errors.Is(err, context.Canceled) {
		t.Errorf("value: %v", err)
	}
	if _, err := s.Value(background, big.NewRat(1, 2), Right, 17); err != nil {
		t.Errorf("after a cancelled try: %v", err)
	}
}

func TestConcurrentUse(t *testing.T) {
	r := rand.New(rand.NewSource(2))
	s := transferSignal(t, randomTransfer(t, r, 6), randomWave(t, r))
	var wg sync.WaitGroup
	for k := range 8 {
		wg.Add(1)
		go func() {
			defer wg.Done()
			if _, err := s.Value(background, big.NewRat(int64(k+1), 3), Right, 10+5*k); err != nil {
				t.Error(err)
			}
			if _, err := s.Curve().Peak(background, Range{To: big.NewRat(3, 1)}); err != nil {
				t.Error(err)
			}
		}()
	}
	wg.Wait()
}

// Roots are narrowed to any precision, real ones, pairs and those on the
// imaginary axis; a finer ball lies in a coarser one.
func TestRootsToAnyPrecision(t *testing.T) {
	r := rand.New(rand.NewSource(4))
	for k := range 12 {
		p := randomTransfer(t, r, 3+r.Intn(5)).Den.Mul(poly(7, 0, 3)).Radical().Primitive()
		f, err := certifiedFactor(background, p)
		if err != nil {
			t.Fatal(err)
		}
		coarse, err := f.at(background, 200)
		if err != nil {
			t.Fatal(err)
		}
		for _, prec := range []uint{960, 2048, 5000} {
			fine, err := f.at(background, prec)
			if err != nil {
				t.Fatalf("%d: %v", k, err)
			}
			for i, z := range fine {
				if !complexDecided(z, int64(prec)) || !coarse[i].Overlaps(z) {
					t.Errorf("%d: root %d to %d bits: %v, coarse %v", k, i, prec, z, coarse[i])
				}
				value := taylor(complexCoefficients(p, prec), z, 1)[0]
				if !value.ContainsZero() {
					t.Errorf("%d: %v is no root", k, z)
				}
			}
		}
	}
}
