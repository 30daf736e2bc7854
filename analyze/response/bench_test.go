package response

import (
	"math/big"
	"strconv"
	"testing"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// Marks, on one thread of a 2-core machine:
//
//	BenchmarkSample1000          1000 samples of a degree-20 answer, to 1e-13: < 500 µs
//	BenchmarkLadderSignal        step answer of a 10-section RLC ladder, poles and
//	                             one value to 17 digits, cold: < 20 ms
//	BenchmarkLadderPeak          its peak over all time, proved: < 20 ms
//	BenchmarkHighQPeak           peak of a ringing of Q = 10^5: < 2 ms
//	BenchmarkSwitched            40 intervals of a first-order network: < 20 ms
//	BenchmarkDecideLadder        a limit on the ladder's answer, decided: < 30 ms
//	BenchmarkFrontEndPeak        a least upper bound that is only approached, beside a
//	                             transient of 75 periods and poles at 10 MHz: < 5 ms
//	BenchmarkResonancePeak       Q = 10^5 driven at resonance, for ever: < 20 ms
//	BenchmarkNearResonancePeak   Q = 1000 driven beside resonance, for ever: < 5 ms
//	BenchmarkTwoTonesPeak        10 and 10001 rad/s, one common period: < 20 ms
//	BenchmarkManyPeaks           the last of 10^4 nearly equal peaks, to 10^-15: < 20 ms
//	BenchmarkDecideLongDecayed   |v| <= 60 V long after all has decayed: < 5 ms

func degree20(b *testing.B) *Signal {
	d := poly(1)
	for k := range int64(10) {
		d = d.Mul(poly(100+37*k*k, 3+k, 10))
	}
	return transferSignal(b, ratio(b, poly(1000), d), step(num(b, "1")))
}

func BenchmarkSample1000(b *testing.B) {
	p := sampler(b, degree20(b))
	b.ReportAllocs()
	for b.Loop() {
		_, bound := p.Uniform(0, 0.01, 1000)
		if bound > 1e-13 {
			b.Fatalf("bound %g", bound)
		}
	}
}

// ladder is n sections of series R + L and shunt C behind a step of 1 V.
func ladder(t testing.TB, n int) *circuit {
	c := newCircuit(t, 2*n+2)
	c.source(network.VoltageSource, 1, 0, step(number.FromInt(1)))
	at := 1
	for k := range n {
		c.add(network.Resistor, at, 2*k+2, strconv.Itoa(10+k))
		c.add(network.Inductor, 2*k+2, 2*k+3, "1e-3")
		c.add(network.Capacitor, 2*k+3, 0, "1e-6")
		at = 2*k + 3
	}
	c.add(network.Resistor, at, 0, "100")
	c.from("0", nil)
	return c
}

func ladderSignal(t testing.TB, n int) *Signal {
	return voltage(t, ladder(t, n).solve(), 2*n+1, 0)
}

func BenchmarkLadderSignal(b *testing.B) {
	when := big.NewRat(1, 1000)
	for b.Loop() {
		if _, err := ladderSignal(b, 10).Value(background, when, Right, 17); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkLadderPeak(b *testing.B) {
	s := ladderSignal(b, 10)
	for b.Loop() {
		if _, err := s.Curve().Peak(background, Range{}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkDecideLadder(b *testing.B) {
	s := ladderSignal(b, 10)
	level := number.FromInt(1)
	for b.Loop() {
		if d, err := s.Curve().Decide(background, "<=", level, Range{}); err != nil || d.Outcome != Holds {
			b.Fatal(d, err)
		}
	}
}

func BenchmarkHighQPeak(b *testing.B) {
	w := Wave{Pieces: []WavePiece{{Impulses: []number.Exact{number.FromInt(1000)}}}}
	s := transferSignal(b, ratio(b, poly(1), exact.NewPoly(rat(b, "1000000"), rat(b, "1/100"), rat(b, "1"))), w)
	for b.Loop() {
		if _, err := s.Curve().Peak(background, Range{}); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkSwitched(b *testing.B) {
	for b.Loop() {
		c := newCircuit(b, 4)
		c.source(network.VoltageSource, 1, 0, Wave{Always: []WaveTerm{{Cosine: number.FromInt(10)}}})
		sw := c.add(network.Short, 1, 2, "")
		c.add(network.Resistor, 2, 3, "100")
		c.add(network.Capacitor, 3, 0, "10e-6")
		c.add(network.Resistor, 3, 0, "400")
		for k := range 40 {
			c.from(big.NewRat(int64(k), 1000).RatString(), map[int]bool{sw: k%2 == 0})
		}
		if _, err := voltage(b, c.solve(), 3, 0).Value(background, big.NewRat(1, 20), Right, 17); err != nil {
			b.Fatal(err)
		}
	}
}

// benchmarkPeak finds the peak of a curve whose terms are known.
func benchmarkPeak(b *testing.B, c *Curve, r Range) {
	for b.Loop() {
		if e, err := c.Peak(background, r); err != nil || e.Value.RelativeBits() < 36 {
			b.Fatal(e, err)
		}
	}
}

func BenchmarkFrontEndPeak(b *testing.B) {
	benchmarkPeak(b, voltage(b, frontEnd(b), 6, 0).Curve(), Range{})
}

// ringing is numerator/(s² + 1000/q·s + 10⁶) at a tone of 1 V.
func ringing(b *testing.B, numerator exact.Poly, q, omega string) *Curve {
	d := exact.NewPoly(rat(b, "1000000"), new(big.Rat).Quo(rat(b, "1000"), rat(b, q)), rat(b, "1"))
	return through(b, numerator, d, sineWave(b, "1", omega))
}

func BenchmarkResonancePeak(b *testing.B) {
	benchmarkPeak(b, ringing(b, poly(0, 1000), "100000", "1000"), Range{})
}

func BenchmarkNearResonancePeak(b *testing.B) {
	benchmarkPeak(b, ringing(b, poly(0, 1000), "1000", "1010"), Range{})
}

func BenchmarkTwoTonesPeak(b *testing.B) {
	w := Wave{Always: []WaveTerm{{Omega: num(b, "10"), Sine: num(b, "1")}, {Omega: num(b, "10001"), Sine: num(b, "1/3")}}}
	benchmarkPeak(b, through(b, poly(1), poly(1, 1), w), Range{})
}

func BenchmarkManyPeaks(b *testing.B) {
	benchmarkPeak(b, through(b, poly(0, 1), poly(1, 1), sineWave(b, "1", "1000")), Range{To: rat(b, "60")})
}

func BenchmarkDecideLongDecayed(b *testing.B) {
	c := through(b, poly(0, 1000), poly(1000000, 200, 1), step(num(b, "1"))).Abs()
	level, late := num(b, "60"), Range{From: rat(b, "50")}
	for b.Loop() {
		if d, err := c.Decide(background, "<=", level, late); err != nil || d.Outcome != Holds {
			b.Fatal(d, err)
		}
	}
}
