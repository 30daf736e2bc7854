package dialect

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"portlight/dialect/number"
)

// waveAt is the value of a waveform at an instant, impulses left out.
func waveAt(w *Waveform, t float64) float64 {
	sum := termsAt(w.Always, t)
	for _, p := range w.Pieces {
		if from := p.From.Float(); t > from {
			sum += termsAt(p.Terms, t-from)
		}
	}
	return sum
}

func termsAt(terms []WaveTerm, t float64) float64 {
	sum := 0.0
	for _, x := range terms {
		angle := x.Omega.Float() * t
		sum += math.Pow(t, float64(x.Power)) * math.Exp(x.Rate.Float()*t) *
			(x.Cosine.Float()*math.Cos(angle) + x.Sine.Float()*math.Sin(angle))
	}
	return sum
}

// randomWave writes a waveform in volts together with the same function,
// built from the standard library's elementary functions.
func randomWave(r *rand.Rand, depth int) (string, func(float64) float64) {
	if depth == 0 || r.IntN(4) == 0 {
		return randomAtom(r)
	}
	a, f := randomWave(r, depth-1)
	b, g := randomWave(r, depth-1)
	switch r.IntN(5) {
	case 0:
		return "(" + a + " + " + b + ")", func(t float64) float64 { return f(t) + g(t) }
	case 1:
		return "(" + a + " - " + b + ")", func(t float64) float64 { return f(t) - g(t) }
	case 2:
		n := r.IntN(3)
		return fmt.Sprintf("(%s)^%d", a, n), func(t float64) float64 { return math.Pow(f(t), float64(n)) }
	default:
		return a + "*" + b, func(t float64) float64 { return f(t) * g(t) }
	}
}

func randomAtom(r *rand.Rand) (string, func(float64) float64) {
	a, b := float64(r.IntN(19)-9)/2, float64(r.IntN(20))/10
	switch r.IntN(7) {
	case 0:
		return fmt.Sprintf("(%g)", a), func(float64) float64 { return a }
	case 1:
		return fmt.Sprintf("(t/1 s - %g)", b), func(t float64) float64 { return t - b }
	case 2:
		return fmt.Sprintf("exp(%g - (%g)*t/1 s)", b, a/4), func(t float64) float64 { return math.Exp(b - a/4*t) }
	case 3:
		return fmt.Sprintf("sin(%g rad/s*t + %g)", a, b), func(t float64) float64 { return math.Sin(a*t + b) }
	case 4:
		return fmt.Sprintf("cos(2*pi*%g Hz*(t - %g s) + 30°)", math.Abs(a), b), func(t float64) float64 {
			return math.Cos(2*math.Pi*math.Abs(a)*(t-b) + math.Pi/6)
		}
	case 5:
		return fmt.Sprintf("u(%g s - t)", b+0.05), func(t float64) float64 { return step(b + 0.05 - t) }
	}
	return fmt.Sprintf("u(t - %g s)", b), func(t float64) float64 { return step(t - b) }
}

func step(x float64) float64 {
	if x > 0 {
		return 1
	}
	return 0
}

func sourceOf(t *testing.T, text string) (*Waveform, []Finding) {
	t.Helper()
	c := Check(Parse("wave.plight", "ground hull\nvoltage source Vs = "+text+"\na -[Vs]- hull\na -[resistor R = 1 Ω]- hull\n"), nil)
	return c.Description.Parts[0].Waveform, c.Findings
}

// TestWaveformsAgree compares waveforms with the same function evaluated
// directly, at random instants.
func TestWaveformsAgree(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 11))
	compared := 0
	for range 400 {
		text, f := randomWave(r, 3)
		text = "1 V*" + text
		w, findings := sourceOf(t, text)
		if w == nil {
			for _, x := range findings {
				if !strings.Contains(x.Message, "spreads to more than") {
					t.Fatalf("%s\n\t%v", text, findings)
				}
			}
			continue
		}
		for range 10 {
			at := r.Float64()*3 + 1e-6
			got, want := waveAt(w, at), f(at)
			// The re-expanded form cancels; its terms bound the rounding.
			if math.Abs(got-want) > 1e-9*(1+magnitudeOf(w, at)) {
				t.Fatalf("%s\n\tat %g s is %g, want %g", text, at, got, want)
			}
		}
		compared++
	}
	if compared < 300 {
		t.Errorf("only %d waveforms were compared", compared)
	}
}

// magnitudeOf sums the magnitudes of a waveform's terms.
func magnitudeOf(w *Waveform, t float64) float64 {
	sum := 0.0
	add := func(terms []WaveTerm, t float64) {
		for _, x := range terms {
			sum += math.Pow(t, float64(x.Power)) * math.Exp(x.Rate.Float()*t) * (math.Abs(x.Cosine.Float()) + math.Abs(x.Sine.Float()))
		}
	}
	add(w.Always, t)
	for _, p := range w.Pieces {
		if from := p.From.Float(); t > from {
			add(p.Terms, t-from)
		}
	}
	return sum
}

// TestWaveformsExact checks that delayed functions begin at exactly the value
// that algebra gives, not near it.
func TestWaveformsExact(t *testing.T) {
	w, _ := sourceOf(t, "3 V*exp(-(t - 2 ms)/3 ms)*u(t - 2 ms)")
	if p := w.Pieces[0]; len(p.Terms) != 1 || p.Terms[0].Cosine.String() != "3" || p.Terms[0].Rate.String() != "-1000/3" {
		t.Errorf("a delayed exponential begins at %v", p.Terms)
	}
	w, _ = sourceOf(t, "3 V*sin(2*pi*50 Hz*(t - 5 ms))*u(t - 5 ms)")
	if p := w.Pieces[0]; len(p.Terms) != 1 || p.Terms[0].Cosine.String() != "0" || p.Terms[0].Sine.String() != "3" {
		t.Errorf("a delayed sine begins at %v", p.Terms)
	}
	w, _ = sourceOf(t, "8 V*sin(2*pi*1 kHz*t + 30°)")
	if x := w.Always[0]; x.Cosine.String() != "4" {
		t.Errorf("sin 30° is %v", x.Cosine)
	}
	w, _ = sourceOf(t, "2 V*t^2/1 s^2*u(t - 3 s)")
	for i, want := range []string{"2", "12", "18"} {
		if got := w.Pieces[0].Terms[i]; got.Cosine.String() != want || got.Power != 2-i {
			t.Errorf("term %d of a delayed parabola is %v", i, got)
		}
	}
	w, _ = sourceOf(t, "6 mV*s*delta(2*t - 4 ms)*(t/1 ms)")
	if p := w.Pieces[0]; p.From.String() != "1/500" || len(p.Impulses) != 1 || !p.Impulses[0].Equal(rational("3/500")) || len(p.Terms) != 0 {
		t.Errorf("an impulse of 2·3 mV·s is %v", p)
	}
	if w, _ = sourceOf(t, "1 V*(u(t) - u(t))"); len(w.Always)+len(w.Pieces) != 0 {
		t.Errorf("nothing is %v", w)
	}
}

func rational(text string) number.Exact {
	n, d, _ := strings.Cut(text, "/")
	x, _ := number.Parse(n)
	y, _ := number.Parse(d)
	q, _ := x.Quo(y)
	return q
}
