package analyze_test

import (
	"encoding/json"
	"fmt"
	"math"
	"strconv"
)

// metricStatements are the functions that a case's figures of merit need.
var metricStatements = map[string][]string{
	"c19_instrumentation_amp":    {"function common = v[out]/Va + v[out]/Vb", "function difference = (v[out]/Vb - v[out]/Va)/2"},
	"f11_complex_line_impedance": {"function reflection = (z[a] - 600 Ω)/(z[a] + 600 Ω)"},
	"f20_complex_line_impedance_uk": {
		"impedance standard_line = 270 Ω + 1/(1/(750 Ω) + s*150 nF)",
		"apart -[standard_line]- 0",
		"function reflection = (z[a] - z[apart])/(z[a] + z[apart])",
	},
	"k06_rc_grid_50x50": {"function H_far = v[g49_49]/i[pair_1]"},
}

// metricAsker computes one figure by asking for it.
type metricAsker func(*asker) (float64, error)

// metrics answers the collection's figures of merit, each by its own
// definition. A figure that the notation has as a measure is asked as one;
// others are put together from values and instants that are asked for.
var metrics = map[string]metricAsker{
	"rise_time_10_90":                measure("rise(v[out])"),
	"peak_time":                      nil, // by case, below
	"overshoot_percent":              scaled(measure("overshoot(v[out])"), 100),
	"settling_time_2_percent":        measure("settle(v[out], 2 %)"),
	"half_power_omega_lower":         halfPower(-1),
	"half_power_omega_upper":         halfPower(1),
	"Q":                              measure("quality(H_1)"),
	"energy_lost":                    energyLost,
	"bandwidth_3dB_omega":            measure("bandwidth(H_1)"),
	"common_mode_gain":               measure("gain(common) at 0 rad/s"),
	"differential_gain":              measure("gain(difference) at 0 rad/s"),
	"series_resonance_hz":            scaled(measure("1/sqrt(L1*C1)"), 1/(2*math.Pi)),
	"parallel_resonance_hz_lossless": scaled(measure("sqrt(1 + C1/C0)/sqrt(L1*C1)"), 1/(2*math.Pi)),
	"peak_value":                     measure("peak(i[Rl])"),
	"efficiency":                     scaled(measure("peak(v[b])"), 1e-5),
	"peak":                           measure("peak(v[o])"),
	"t_peak":                         instant("peak(v[o])"),
	"front":                          surge(func(s surgeTimes) float64 { return 1.67 * (s.t90 - s.t30) }),
	"front_exact":                    surge(func(s surgeTimes) float64 { return (s.t90 - s.t30) / 0.6 }),
	"width50":                        surge(func(s surgeTimes) float64 { return s.tail50 - s.rise50 }),
	"tail_from_virtual_origin":       surge(func(s surgeTimes) float64 { return s.tail50 - (s.t30 - (s.t90-s.t30)/0.6*0.3) }),
}

// peakSignals names the signal of each case that asks for the time of its peak.
var peakSignals = map[string]string{
	"a03_series_rlc_under": "v[out]", "d24_impulse_generator_hv": "v[b]", "f18_hbm_parasitic": "i[Rl]",
}

func (a *asker) metric(q *caseQuestion) outcome {
	if q.What == "derived" {
		return a.returnLoss(q)
	}
	asked := metrics[q.Metric]
	if q.Metric == "peak_time" {
		asked = instant("peak(" + peakSignals[a.case_.Name] + ")")
	}
	if asked == nil {
		return unasked("the figure %q has no question", q.Metric)
	}
	var want string
	if err := json.Unmarshal(q.Expect, &want); err != nil {
		return wrong("expectation: %v", err)
	}
	got, err := asked(a)
	if err != nil {
		return outcome{err: err}
	}
	if t := readTolerance(q.Tolerance); !t.near(complex(got, 0), complex(float(want), 0), 0) {
		return wrong("%s is %.12g, want %s", q.Metric, got, want)
	}
	return outcome{}
}

// number is the one real figure of an answer.
func (v *view) number() (float64, error) {
	for _, s := range []string{v.Value, v.Total, v.Re} {
		if s != "" {
			return strconv.ParseFloat(s, 64)
		}
	}
	return 0, fmt.Errorf("a %s is not one figure", v.Kind)
}

func measure(question string) metricAsker {
	return func(a *asker) (float64, error) {
		v, err := a.ask("%s", question)
		if err != nil {
			return 0, err
		}
		return v.number()
	}
}

func instant(question string) metricAsker {
	return func(a *asker) (float64, error) {
		v, err := a.ask("%s", question)
		if err != nil {
			return 0, err
		}
		return strconv.ParseFloat(v.AtS, 64)
	}
}

func scaled(ask metricAsker, factor float64) metricAsker {
	return func(a *asker) (float64, error) {
		x, err := ask(a)
		return x * factor, err
	}
}

// halfPower is an edge of a tuned circuit's band from its width B and its
// natural frequency ω0: √(ω0² + B²/4) ± B/2.
func halfPower(side float64) metricAsker {
	return func(a *asker) (float64, error) {
		width, err := measure("bandwidth(H_1)")(a)
		if err != nil {
			return 0, err
		}
		natural, err := measure("natural_frequency(H_1)")(a)
		return math.Hypot(natural, width/2) + side*width/2, err
	}
}

// energyLost is what two capacitors hold before and after they are joined.
func energyLost(a *asker) (float64, error) {
	sum := 0.0
	for _, c := range []string{"C1", "C2"} {
		before, err := measure("stored(" + c + ") before 0 s")(a)
		if err != nil {
			return 0, err
		}
		after, err := measure("stored(" + c + ") at 0 s")(a)
		if err != nil {
			return 0, err
		}
		sum += before - after
	}
	return sum, nil
}

// surgeTimes are the instants that define a surge's front and tail
// (IEC 60060-1): 30 %, 90 % and 50 % of the peak on the way up, 50 % on the
// way down.
type surgeTimes struct{ t30, t90, rise50, tail50 float64 }

func surge(figure func(surgeTimes) float64) metricAsker {
	return func(a *asker) (float64, error) {
		v, err := a.ask("peak(v[o])")
		if err != nil {
			return 0, err
		}
		peak, err := v.number()
		if err != nil {
			return 0, err
		}
		level := func(measure, range_ string, share float64) float64 {
			if err != nil {
				return 0
			}
			var w *view
			question := fmt.Sprintf("%s(v[o], %s V)%s", measure, strconv.FormatFloat(share*peak, 'g', 17, 64), range_)
			if w, err = a.ask("%s", question); err != nil {
				return 0
			}
			var at float64
			at, err = w.number()
			return at
		}
		rising := " to " + v.AtS + " s"
		s := surgeTimes{
			t30: level("last_below", rising, 0.3), t90: level("last_below", rising, 0.9),
			rise50: level("last_below", rising, 0.5), tail50: level("last_above", "", 0.5),
		}
		return figure(s), err
	}
}

// returnLoss asks for the gain of a reflection coefficient in dB.
func (a *asker) returnLoss(q *caseQuestion) outcome {
	var list []map[string]string
	if err := json.Unmarshal(q.Expect, &list); err != nil {
		return wrong("expectation: %v", err)
	}
	t := readTolerance(q.Tolerance)
	for _, point := range list {
		for key, want := range point {
			if key == "hz" {
				continue
			}
			loss, err := measure("dB(1/reflection) at " + point["hz"] + " Hz")(a)
			if err != nil {
				return outcome{err: err}
			}
			if !t.near(complex(loss, 0), complex(float(want), 0), 0) {
				return wrong("%s at %s Hz is %.12g, want %s", key, point["hz"], loss, want)
			}
		}
	}
	return outcome{}
}
