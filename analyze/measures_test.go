package analyze_test

import (
	"math"
	"strings"
	"testing"

	"portlight/analyze"
	"portlight/dialect"
)

// The networks of the measures, with their closed forms from any textbook on
// linear networks: τ = R·C = 1 ms, and ω0 = 1/√(LC) = 10⁴ rad/s, ζ = (R/2)·√(C/L).
const (
	lowPass = `ground hull
voltage source Vs = 1 V * u(t)
in -[Vs]- hull
in -[resistor R1 = 1 kΩ]- out -[capacitor C1 = 1 µF]- hull
function H = v[out]/Vs
`
	ringing = `ground hull
voltage source Vs = 1 V * u(t)
in -[Vs]- hull
in -[resistor R1 = 40 Ω]-[inductor L1 = 10 mH]- out -[capacitor C1 = 1 µF]- hull
function H = v[out]/Vs
`
	tank = `ground hull
current source Is = 1 mA * u(t)
hull -[Is]- out
out -[resistor R1 = 5 kΩ || inductor L1 = 1 mH || capacitor C1 = 100 nF]- hull
function H = v[out]/Is
`
	driven = `ground hull
voltage source Vs = 2 V * sin(500 rad/s * t) * u(t)
in -[Vs]- hull
in -[resistor R1 = 1 kΩ]- out -[capacitor C1 = 1 µF]- hull
`
	release = `ground hull
inductor L1 = 120 mH, initially 250 mA
coil -[L1]- hull
coil -[resistor R1 = 48 Ω]- hull
`
	overdamped = `ground hull
voltage source Vs = 1 V * u(t)
in -[Vs]- hull
in -[resistor R1 = 400 Ω]-[inductor L1 = 10 mH]- out -[capacitor C1 = 1 µF]- hull
function H = v[out]/Vs
`
	amplifier = `ground hull
voltage source Vs = 1 V * u(t)
in -[Vs]- hull
in -[resistor Rin = 1 kΩ]- mid -[capacitor Cin = 1 µF]- hull
out -[voltage source boosting = 10 * v[mid]]- hull
out -[resistor Rl = 1 kΩ]- hull
function H = v[out]/Vs
`
	pair = `ground hull
voltage source Vone = 1 V * u(t)
voltage source Vtwo = 3 V * u(t)
a -[Vone]- hull
b -[Vtwo]- hull
a -[resistor R1 = 1 kΩ]- out -[resistor R2 = 1 kΩ]- b
out -[capacitor C1 = 1 µF, initially 4 V]- hull
`
)

const (
	ms       = 1e-3
	omega0   = 1e4
	zeta     = 0.2
	resonant = 1e5 // of the tank, in rad/s: 1/√(1 mH · 100 nF)
)

// step is the step response of the ringing network.
func step(t float64) float64 {
	root := math.Sqrt(1 - zeta*zeta)
	a := omega0 * root * t
	return 1 - math.Exp(-zeta*omega0*t)*(math.Cos(a)+zeta/root*math.Sin(a))
}

// bisect finds where f changes its sign between a and b.
func bisect(f func(float64) float64, a, b float64) float64 {
	for range 200 {
		m := (a + b) / 2
		if (f(m) > 0) == (f(a) > 0) {
			a = m
		} else {
			b = m
		}
	}
	return (a + b) / 2
}

// lastOutside is the last time at which the ringing step response is outside
// ±band around 1, looked for from the end in small steps.
func lastOutside(band float64) float64 {
	outside := func(t float64) float64 { return math.Abs(step(t)-1) - band }
	for t := 10 * ms; t > 0; t -= 1e-7 {
		if outside(t) > 0 {
			return bisect(outside, t, t+1e-7)
		}
	}
	return 0
}

// firstAt is when the ringing step response first reaches a level.
func firstAt(level float64) float64 {
	return bisect(func(t float64) float64 { return step(t) - level }, 0, math.Pi/omega0)
}

// dampedPhase is the phase of 1/(1 − x² + j2ζx) at ω = x·ω0, for x < 1.
func dampedPhase(x float64) float64 { return -math.Atan2(2*zeta*x, 1-x*x) }

var (
	rootZeta = math.Sqrt(1 - zeta*zeta)
	dampedW  = omega0 * rootZeta
	shoot    = math.Exp(-math.Pi * zeta / rootZeta)
	// drivenGain and drivenAngle of the low-pass at 500 rad/s.
	drivenGain  = 1 / math.Sqrt(1+0.25)
	drivenAngle = -math.Atan(0.5)
)

// measureCases holds what every function and measure of the notation gives on
// these networks: frequencies in rad/s, angles in rad, all else in SI units.
var measureCases = []struct {
	network, question string
	want              float64
}{
	{lowPass, "gain(H) at 1000 rad/s", 1 / math.Sqrt2},
	{lowPass, "abs(H) at 1000 rad/s", 1 / math.Sqrt2},
	{lowPass, "dB(H) at 1000 rad/s", -10 * math.Log10(2)},
	{lowPass, "phase(H) at 1000 rad/s", -math.Pi / 4},
	{lowPass, "real(H) at 1000 rad/s", 0.5},
	{lowPass, "imag(H) at 1000 rad/s", -0.5},
	{lowPass, "delay(H) at 2000 rad/s", ms / 5},
	{lowPass, "bandwidth(H)", 1000},
	{lowPass, "damping(H)", 1},
	{lowPass, "natural_frequency(H)", 1000},
	{lowPass, "quality(H)", 0.5},
	{lowPass, "peak(v[out])", 1},
	{lowPass, "trough(v[out])", 0},
	{lowPass, "trough(v[out]) from 1 ms", 1 - math.Exp(-1)},
	{lowPass, "peak(v[out]) to 2 ms", 1 - math.Exp(-2)},
	{lowPass, "final(v[out])", 1},
	{lowPass, "mean(v[out])", 1},
	{lowPass, "mean(v[out]) to 1 ms", math.Exp(-1)},
	{lowPass, "rms(v[out]) to 1 ms", math.Sqrt(1 - 2*(1-math.Exp(-1)) + (1-math.Exp(-2))/2)},
	{lowPass, "settle(v[out])", ms * math.Log(100)},
	{lowPass, "settle(v[out], 2 %)", ms * math.Log(50)},
	{lowPass, "overshoot(v[out])", 0},
	{lowPass, "rise(v[out])", ms * math.Log(9)},
	{lowPass, "last_below(v[out], 0.5 V)", ms * math.Ln2},
	{lowPass, "last_above(i[C1], 0.5 mA)", ms * math.Ln2},
	{lowPass, "settle(i[C1])", ms * math.Log(100)}, // falls to 0: 1 % of its largest value
	{lowPass, "energy(R1)", 0.5e-6},
	{lowPass, "energy(C1)", 0.5e-6},
	{lowPass, "energy(Vs)", -1e-6},
	{lowPass, "energy(C1) to 1 ms", 0.5e-6 * (1 - math.Exp(-1)) * (1 - math.Exp(-1))},
	{lowPass, "energy(C1) from 1 ms", 0.5e-6 * (1 - (1-math.Exp(-1))*(1-math.Exp(-1)))},
	{lowPass, "stored(C1) at 1 ms", 0.5e-6 * (1 - math.Exp(-1)) * (1 - math.Exp(-1))},
	{lowPass, "peak(stored(C1))", 0.5e-6},
	{lowPass, "peak(p[R1])", 1 * ms},
	{lowPass, "min(v[out], 0.2 V) at 1 ms", 0.2},
	{lowPass, "max(v[out], 0.2 V) at 0.1 ms", 0.2},
	{lowPass, "mean(abs(v[out] - 0.5 V)) to 1 ms", (func() float64 {
		cut := math.Ln2 // where v crosses 0.5 V; ∫(e^{-x} − ½) changes its sign there
		area := func(a, b float64) float64 { return math.Exp(-a) - math.Exp(-b) - (b-a)/2 }
		return area(0, cut) - area(cut, 1)
	})()},
	{ringing, "overshoot(v[out])", shoot},
	{ringing, "peak(v[out])", 1 + shoot},
	{ringing, "trough(v[out]) from 0.35 ms", 1 - shoot*shoot},
	{ringing, "peak(v[out]) from 0.7 ms", 1 + shoot*shoot*shoot},
	{ringing, "rise(v[out])", firstAt(0.9) - firstAt(0.1)},
	{ringing, "settle(v[out], 5 %)", lastOutside(0.05)},
	{ringing, "settle(v[out])", lastOutside(0.01)},
	{ringing, "damping(H)", zeta},
	{ringing, "quality(H)", 1 / (2 * zeta)},
	{ringing, "natural_frequency(H)", omega0},
	{ringing, "bandwidth(H)", omega0 * math.Sqrt(1-2*zeta*zeta+math.Sqrt(2-4*zeta*zeta+4*math.Pow(zeta, 4)))},
	{ringing, "crossover(H)", omega0 * math.Sqrt(2-4*zeta*zeta)},
	{ringing, "phase(H) at 10000 rad/s", -math.Pi / 2},
	{ringing, "phase(H) at 5000 rad/s", dampedPhase(0.5)},
	{ringing, "phase(H) at 1e9 rad/s", -math.Pi + 2*zeta*1e-5},
	{ringing, "delay(H) at 10000 rad/s", 1 / (zeta * omega0)},
	{ringing, "peak(i[L1])", 0.01 * math.Exp(-zeta/rootZeta*math.Atan2(rootZeta, zeta))},
	{ringing, "energy(R1)", 0.5e-6},
	{overdamped, "damping(H)", 2},
	{overdamped, "quality(H)", 0.25},
	{overdamped, "natural_frequency(H)", omega0},
	{tank, "bandwidth(H)", 2000},
	{tank, "quality(H)", 50},
	{tank, "natural_frequency(H)", resonant},
	{amplifier, "crossover(H)", 1000 * math.Sqrt(99)},
	{amplifier, "bandwidth(H)", 1000},
	{driven, "rms(v[out])", math.Sqrt2 * drivenGain},
	{driven, "mean(v[out])", 0},
	{driven, "mean(p[R1])", (2 * 2 / 1e3) / 2 * (1 - drivenGain*drivenGain)},
	{driven, "forced(v[out]) at 3 ms", 2 * drivenGain * math.Sin(500*3*ms+drivenAngle)},
	{driven, "natural(v[out]) at 3 ms", -2 * drivenGain * math.Sin(drivenAngle) * math.Exp(-3)},
	{release, "energy(R1)", 0.12 * 0.25 * 0.25 / 2},
	{release, "stored(L1) at 0 s", 0.12 * 0.25 * 0.25 / 2},
	{release, "last_above(i[L1], 10 mA)", 0.12 / 48 * math.Log(25)},
	{release, "trough(v[coil])", -0.25 * 48},
	{release, "settle(i[L1], 10 %)", 0.12 / 48 * math.Log(10)},
	{pair, "due(v[out], Vone) at 0.5 ms", 0.5 * (1 - math.Exp(-1))},
	{pair, "due(v[out], Vtwo) at 0.5 ms", 1.5 * (1 - math.Exp(-1))},
	{pair, "zir(v[out]) at 0.5 ms", 4 * math.Exp(-1)},
	{pair, "zsr(v[out]) at 0.5 ms", 2 * (1 - math.Exp(-1))},
	{pair, "final(v[out])", 2},
	{pair, "sqrt(final(v[out])/(1 V))", math.Sqrt2},
	{pair, "overshoot(v[out])", 1},
}

// valueOf is the number of a value, of a measure or of a signal at a time.
func valueOf(t *testing.T, answer analyze.Answer) float64 {
	t.Helper()
	switch a := answer.(type) {
	case *analyze.ValueAnswer:
		return a.Value.Re.MidFloat64()
	case *analyze.MeasureAnswer:
		return a.Value.MidFloat64()
	case *analyze.SignalValueAnswer:
		return a.Total.MidFloat64()
	}
	t.Fatalf("%s has no number: %v", answer.Asked(), analyze.Words(answer))
	return 0
}

func TestMeasures(t *testing.T) {
	for _, c := range measureCases {
		answer, err := analysisOfText(c.network).Ask(soon(t), c.question)
		if err != nil {
			t.Fatal(err)
		}
		if got := valueOf(t, answer); !(math.Abs(got-c.want) <= 1e-12+1e-10*math.Abs(c.want)) {
			t.Errorf("%s is %.15g, want %.15g", c.question, got, c.want)
		}
	}
}

// TestEveryMeasureIsTried: what signature help offers is covered above, or
// belongs to waveforms and constants, which have tests of their own.
func TestEveryMeasureIsTried(t *testing.T) {
	elsewhere := " exp log sin cos u delta stable "
	for _, s := range dialect.Signatures() {
		tried := strings.Contains(elsewhere, " "+s.Name+" ")
		for _, c := range measureCases {
			tried = tried || strings.Contains(c.question, s.Name+"(")
		}
		if !tried {
			t.Errorf("%s is not tried", s.Name)
		}
	}
}

// Where a measure is found belongs to its answer.
func TestWhereMeasuresAreFound(t *testing.T) {
	for _, c := range []struct {
		network, question string
		where             float64
	}{
		{ringing, "peak(v[out])", math.Pi / dampedW},
		{ringing, "overshoot(v[out])", math.Pi / dampedW},
		{ringing, "rise(v[out])", firstAt(0.1)},
		{ringing, "trough(v[out]) from 0.35 ms", 2 * math.Pi / dampedW},
		{release, "trough(v[coil])", 0},
	} {
		answer, err := analysisOfText(c.network).Ask(soon(t), c.question)
		if err != nil {
			t.Fatal(err)
		}
		m, ok := answer.(*analyze.MeasureAnswer)
		if !ok || !m.HasWhere || !m.InTime {
			t.Errorf("%s does not say when: %v", c.question, analyze.Words(answer))
			continue
		}
		if got := m.Where.MidFloat64(); math.Abs(got-c.where) > 1e-12 {
			t.Errorf("%s is found at %.12g s, want %.12g s", c.question, got, c.where)
		}
	}
	answer, err := analysisOfText(lowPass).Ask(soon(t), "peak(v[out])")
	if m, ok := answer.(*analyze.MeasureAnswer); err != nil || !ok || m.HasWhere {
		t.Errorf("a supremum that is only approached claims an instant: %v", analyze.Words(answer))
	}
}

// TestMeasuresWithoutValue: each refusal says what is missing.
func TestMeasuresWithoutValue(t *testing.T) {
	for _, c := range []struct{ network, question, says string }{
		{lowPass, "crossover(H)", "never 1"},
		{lowPass, "last_above(v[out], 2 V)", "never"},
		{lowPass, "last_above(v[out], 0.5 V)", "for ever"},
		{driven, "final(v[out])", "oscillates"},
		{release, "overshoot(i[L1])", "0"},
		{tank, "bandwidth(H - H)", ""},
		{"ground hull\nout -[inductor L1 = 1 mH || capacitor C1 = 1 nF]- hull\nport p at out hull\n", "quality(z[p])", "without damping"},
	} {
		answer, err := analysisOfText(c.network).Ask(soon(t), c.question)
		if err != nil {
			t.Fatal(err)
		}
		refused, ok := answer.(*analyze.RefusedAnswer)
		if !ok {
			t.Errorf("%s is answered: %v", c.question, analyze.Words(answer))
			continue
		}
		if refused.Code != "undefined-measure" || !strings.Contains(refused.Why, c.says) {
			t.Errorf("%s is refused as %s: %s", c.question, refused.Code, refused.Why)
		}
	}
}
