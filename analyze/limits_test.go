package analyze_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"portlight/analyze"
	"portlight/dialect"
)

// sharp is a series resonance at f0 = 1/(2π√(LC)) between the decades with
// Q = √(L/C)/R = 10⁵: at f0 the capacitor has Q times the voltage.
const sharp = `ground hull
voltage source Vs = 1 V
in -[Vs]- hull
in -[resistor R1 = 1 mΩ]-[inductor L1 = 3.7 mH]- out -[capacitor C1 = 370 nF]- hull
function H = v[out]/Vs
`

// divider halves 12 V; every corner of its tolerances is between 12·0.95/2 V
// and 12·1.05/2 V.
const divider = `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rtop = 10 kΩ ±5 %]- rail -[resistor Rbottom = 10 kΩ ±5 %]- hull
function H = v[rail]/Vbat
`

// sharpPeak is |H| of the sharp resonance at its greatest: 1/(2ζ√(1 − ζ²)).
var sharpPeak = func() float64 {
	z := 1e-3 / 2 * math.Sqrt(370e-9/3.7e-3)
	return 1 / (2 * z * math.Sqrt(1-z*z))
}()

var limitCases = []struct {
	network, limit string
	decision       analyze.Decision
	inTolerance    analyze.Decision // counts where the limit holds
	worst          float64          // NaN: not looked at
	says           string
}{
	// At a point.
	{lowPass, "gain(H) <= 0.7072 at 1000 rad/s", analyze.Holds, analyze.Holds, 1 / math.Sqrt2, ""},
	{lowPass, "gain(H) <= 0.7071 at 1000 rad/s", analyze.Broken, 0, 1 / math.Sqrt2, ""},
	{lowPass, "gain(H) <= -3 dB at 1000 rad/s", analyze.Holds, analyze.Holds, -10 * math.Log10(2), ""},
	{lowPass, "real(H) >= 0.5 at 1000 rad/s", analyze.Holds, analyze.Holds, 0.5, ""},
	{lowPass, "real(H) > 0.5 at 1000 rad/s", analyze.Broken, 0, 0.5, ""},
	{lowPass, "v[out] >= 0.63 V at 1 ms", analyze.Holds, analyze.Holds, 1 - math.Exp(-1), ""},
	{lowPass, "v[out] <= 0 V before 0 s", analyze.Holds, analyze.Holds, 0, ""},
	{lowPass, "bandwidth(H) >= 1000 rad/s", analyze.Holds, analyze.Holds, 1000, ""},
	{lowPass, "rise(v[out]) <= 2.1 ms", analyze.Broken, 0, ms * math.Log(9), ""},
	{lowPass, "2*final(v[out]) <= 2 V", analyze.Holds, analyze.Holds, 2, ""},
	{lowPass, "quality(H) <= quality(H)", analyze.Holds, analyze.Holds, math.NaN(), ""},
	// Over frequency: a resonance 10⁻⁵ of its frequency wide, between decades.
	{sharp, "gain(H) <= 1.1e5 from 1 Hz to 1 MHz", analyze.Holds, analyze.Holds, sharpPeak, ""},
	{sharp, "gain(H) <= 0.9e5 from 1 Hz to 1 MHz", analyze.Broken, 0, sharpPeak, ""},
	{sharp, "gain(H) <= 60 dB from 1 kHz to 10 kHz", analyze.Broken, 0, 20 * math.Log10(sharpPeak), ""},
	{sharp, "gain(H) <= 10 from 10 kHz", analyze.Holds, analyze.Holds, math.NaN(), ""},
	{sharp, "abs(phase(H) + 90°) <= 89.99° from 4 kHz to 4.6 kHz", analyze.Broken, 0, math.NaN(), ""},
	{lowPass, "gain(H) >= -40 dB to 10 kHz", analyze.Holds, analyze.Holds, -20 * math.Log10(math.Hypot(1, 2*math.Pi*10)), ""},
	{lowPass, "gain(H) >= -40 dB", analyze.Broken, 0, math.NaN(), "falls to zero"},
	{lowPass, "phase(H) >= -90°", analyze.Holds, analyze.Holds, -math.Pi / 2, ""},
	{lowPass, "phase(H) > -90°", analyze.Holds, analyze.Holds, -math.Pi / 2, ""},
	{lowPass, "phase(H) >= -89.9°", analyze.Broken, 0, -math.Pi / 2, ""},
	{lowPass, "gain(H) > 0", analyze.Holds, analyze.Holds, 0, ""},
	{lowPass, "delay(H) <= 1 ms", analyze.Holds, analyze.Holds, ms, ""},
	{lowPass, "gain(H) <= 1", analyze.Holds, analyze.Holds, 1, ""},
	{lowPass, "gain(H) < 1", analyze.Broken, 0, 1, ""},
	{lowPass, "gain(H) < 1 from 1 mHz", analyze.Holds, analyze.Holds, math.NaN(), ""},
	{ringing, "stable(H)", analyze.Holds, analyze.Holds, math.NaN(), ""},
	// Over time.
	{ringing, "v[out] <= 1.5267 V", analyze.Holds, analyze.Holds, 1 + shoot, ""},
	{ringing, "v[out] <= 1.526 V", analyze.Broken, 0, 1 + shoot, ""},
	{ringing, "abs(v[out] - 1 V) <= 10 mV from 2.3 ms", analyze.Holds, analyze.Holds, math.NaN(), ""},
	{ringing, "abs(v[out] - 1 V) <= 10 mV from 2 ms", analyze.Broken, 0, math.NaN(), ""},
	{ringing, "v[out] >= 0 V", analyze.Holds, analyze.Holds, 0, ""},
	{ringing, "v[out] <= 1.1*peak(v[out])", analyze.Holds, analyze.Holds, 1 + shoot, ""},
	{ringing, "v[out] <= peak(v[out])", analyze.Undecided, 0, math.NaN(), "cannot be told"},
	{lowPass, "v[out] < 1 V", analyze.Holds, analyze.Holds, 1, ""},
	{lowPass, "v[out] <= v[in]", analyze.Holds, analyze.Holds, math.NaN(), ""},
	{lowPass, "p[R1] <= 1 mW", analyze.Holds, analyze.Holds, ms, ""},
	// Within tolerances.
	{divider, "final(v[rail]) <= 6.31 V", analyze.Holds, analyze.Undecided, 6, ""},
	{divider, "final(v[rail]) <= 6.29 V", analyze.Holds, analyze.Broken, 6, "Rtop"},
	{divider, "final(v[rail]) <= 6.29 V nominal", analyze.Holds, analyze.Holds, 6, ""},
	{divider, "v[rail] >= 5.71 V", analyze.Holds, analyze.Broken, 6, "Rbottom"},
	{divider, "gain(H) <= 0.5251", analyze.Holds, analyze.Undecided, 0.5, ""},
	{divider, "gain(H) <= 0.5249 from 10 Hz to 1 kHz", analyze.Holds, analyze.Broken, 0.5, "Rbottom"},
}

func TestLimits(t *testing.T) {
	for _, c := range limitCases {
		a := analysisOfText(c.network + "require " + c.limit + "\n")
		for _, f := range a.Checked().Findings {
			if f.Severity == dialect.Error {
				t.Fatalf("%s: %s", c.limit, f)
			}
		}
		verdicts, err := a.Verdicts(soon(t))
		if err != nil || len(verdicts) != 1 {
			t.Fatalf("%s: %d verdicts, %v", c.limit, len(verdicts), err)
		}
		v := verdicts[0]
		if v.Decision != c.decision || c.decision == analyze.Holds && v.InTolerance != c.inTolerance {
			t.Errorf("%s: %s, within tolerances %s (%s)", c.limit, v.Decision, v.InTolerance, analyze.VerdictWords(v))
			continue
		}
		if v.Proved != (v.Decision != analyze.Undecided) {
			t.Errorf("%s: %s, proved %v", c.limit, v.Decision, v.Proved)
		}
		if got := v.Worst.MidFloat64(); !math.IsNaN(c.worst) && !(math.Abs(got-c.worst) <= 1e-9*(1+math.Abs(c.worst))) {
			t.Errorf("%s: the worst value is %.12g, want %.12g", c.limit, got, c.worst)
		}
		if !strings.Contains(v.Why+v.Corner, c.says) {
			t.Errorf("%s: says %q, without %q", c.limit, v.Why+v.Corner, c.says)
		}
	}
}

// The place of the worst value is told: the resonance to many digits.
func TestLimitSaysWhere(t *testing.T) {
	a := analysisOfText(sharp + "require gain(H) <= 1000 from 1 Hz to 1 MHz\nrequire v[out] <= 2 V\n")
	verdicts, err := a.Verdicts(soon(t))
	if err != nil {
		t.Fatal(err)
	}
	z := 1e-3 / 2 * math.Sqrt(370e-9/3.7e-3)
	want := math.Sqrt(1-2*z*z) / math.Sqrt(3.7e-3*370e-9)
	if v := verdicts[0]; !v.HasWhere || v.InTime || math.Abs(v.Where.MidFloat64()/want-1) > 1e-12 {
		t.Errorf("the worst value is placed at %v rad/s, want %.12g", v.Where, want)
	}
}

// A limit that takes long can be stopped.
func TestLimitsCanBeStopped(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := analysisOfText(sharp + "require gain(H) <= 1000\n").Verdicts(ctx); !errors.Is(err, context.Canceled) {
		t.Errorf("the error is %v", err)
	}
}
