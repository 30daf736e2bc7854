package analyze_test

import (
	"encoding/json"
	"fmt"
	"math"
	"math/cmplx"
)

// timeValue is an expected value at a time; the parts are empty where a case
// gives the total alone.
type timeValue struct {
	T         string
	ZeroInput string `json:"zero_input"`
	ZeroState string `json:"zero_state"`
	Total     string
}

func text(raw json.RawMessage) string {
	var s string
	_ = json.Unmarshal(raw, &s)
	return s
}

// split asks for a signal at times, its transform, its impulses at 0 and its
// value just after.
func (a *asker) split(q *caseQuestion) outcome {
	var list []timeValue
	if err := json.Unmarshal(q.Expect, &list); err != nil {
		return wrong("expectation: %v", err)
	}
	t := readTolerance(q.Tolerance)
	largest := math.Abs(float(orZero(q.ValueAt0Plus)))
	for _, w := range list {
		for _, s := range []string{w.ZeroInput, w.ZeroState, w.Total} {
			largest = math.Max(largest, math.Abs(float(orZero(s))))
		}
	}
	output := a.text.output(q.Output)
	for _, w := range list {
		if err := a.signalAt(output, w, t, largest); err != nil {
			return outcome{err: err}
		}
	}
	if q.What == "response" {
		return outcome{}
	}
	v, err := a.ask("%s at 0 s", output)
	if err != nil {
		return outcome{err: err}
	}
	if !t.near(complex(float(v.Total), 0), complex(float(q.ValueAt0Plus), 0), largest) {
		return wrong("%s at 0+ is %s, want %s", output, v.Total, q.ValueAt0Plus)
	}
	return outcome{err: a.closedForm(output, q)}
}

func orZero(s string) string {
	if s == "" {
		return "0"
	}
	return s
}

func (a *asker) signalAt(output string, w timeValue, t tolerance, largest float64) error {
	v, err := a.ask("%s at %s s", output, w.T)
	if err != nil {
		return err
	}
	for _, part := range []struct{ name, got, want string }{
		{"zero-input part", text(v.ZeroInput), w.ZeroInput},
		{"zero-state part", text(v.ZeroState), w.ZeroState},
		{"total", v.Total, w.Total},
	} {
		if part.want == "" {
			continue
		}
		if !t.near(complex(float(part.got), 0), complex(float(part.want), 0), largest) {
			return fmt.Errorf("%s at %s s: the %s is %s, want %s", output, w.T, part.name, part.got, part.want)
		}
	}
	return nil
}

// closedForm asks for the signal itself: transforms and impulses.
func (a *asker) closedForm(output string, q *caseQuestion) error {
	v, err := a.ask("%s", output)
	if err != nil {
		return err
	}
	if err := a.termsAddUp(v, q); err != nil {
		return fmt.Errorf("%s: %w", output, err)
	}
	exact := tolerance{exact: true, relative: 1e-9}
	for part, want := range q.Transform {
		got := v.Transform[part]
		if got == nil {
			return fmt.Errorf("%s has no transform of its %s part", output, part)
		}
		if err := compareViews(got.Numerator, got.Denominator, want, true, exact); err != nil {
			return fmt.Errorf("transform of %s, %s part: %w", output, part, err)
		}
	}
	for part, want := range q.Impulses {
		got := map[int]string{}
		for _, i := range v.Impulses {
			if float(i.AtS) == 0 {
				got[i.Order] = map[string]string{"zero_input": i.ZeroInput, "zero_state": i.ZeroState, "total": i.Total}[part]
			}
		}
		for k := 0; k < max(len(want), 4); k++ {
			expected := "0"
			if k < len(want) {
				expected = want[k]
			}
			if d := math.Abs(float(orZero(got[k])) - float(expected)); !(d <= 1e-9*math.Abs(float(expected))) {
				return fmt.Errorf("%s: the weight of impulse %d in the %s part at 0 is %q, want %s", output, k, part, got[k], expected)
			}
		}
	}
	return nil
}

// naturalForced asks for the parts at the network's and at the sources' frequencies.
func (a *asker) naturalForced(q *caseQuestion) outcome {
	var list []struct{ T, Natural, Forced string }
	if err := json.Unmarshal(q.Expect, &list); err != nil {
		return wrong("expectation: %v", err)
	}
	t := readTolerance(q.Tolerance)
	output := a.text.output(q.Output)
	for _, w := range list {
		for _, part := range []struct{ name, want string }{{"natural", w.Natural}, {"forced", w.Forced}} {
			v, err := a.ask("%s(%s) at %s s", part.name, output, w.T)
			if err != nil {
				return outcome{err: err}
			}
			if !t.near(complex(float(v.Total), 0), complex(float(part.want), 0), 0) {
				return wrong("%s(%s) at %s s is %s, want %s", part.name, output, w.T, v.Total, part.want)
			}
		}
	}
	return outcome{}
}

// equivalent asks for a Thévenin or Norton equivalent.
func (a *asker) equivalent(q *caseQuestion) outcome {
	var want map[string]json.RawMessage
	if err := json.Unmarshal(q.Expect, &want); err != nil {
		return wrong("expectation: %v", err)
	}
	without := ""
	for i, name := range q.NetworkWithout {
		without += map[bool]string{true: " without ", false: ", "}[i == 0] + a.text.part(name)
	}
	v, err := a.ask("%s[%s]%s", q.What, a.text.port(q.Port), without)
	if err != nil {
		return outcome{err: err}
	}
	for key, raw := range want {
		if key == "sense" {
			continue
		}
		var ratio caseRatio
		if err := json.Unmarshal(raw, &ratio); err != nil {
			return wrong("expectation %s: %v", key, err)
		}
		if err := a.equivalentPart(v, key, ratio, a.text.port(q.Port), without); err != nil {
			return wrong("%s of %s: %w", key, q.What, err)
		}
	}
	return outcome{}
}

func (a *asker) equivalentPart(v *view, key string, want caseRatio, port, without string) error {
	exact := tolerance{exact: true, relative: 1e-9}
	total := func(s *view) error {
		if s == nil || s.Transform["total"] == nil {
			return fmt.Errorf("it has no transform (%s)", v.Why)
		}
		return compareViews(s.Transform["total"].Numerator, s.Transform["total"].Denominator, want, true, exact)
	}
	switch key {
	case "open_circuit_voltage":
		return total(v.OpenCircuit)
	case "short_circuit_current":
		return total(v.ShortCircuit)
	case "short_circuit_current_per_volt":
		// The source of that network is a step of 1 V: one more factor 1/s.
		want.Den = append([]string{"0"}, want.Den...)
		return total(v.ShortCircuit)
	case "impedance":
		if v.Impedance == nil {
			return fmt.Errorf("there is none: %s", v.Why)
		}
		return v.Impedance.function(want, exact)
	case "admittance":
		y, err := a.ask("y[%s]%s", port, without)
		if err != nil {
			return err
		}
		return y.function(want, exact)
	}
	return fmt.Errorf("an expectation that nothing asks for")
}

// termView is one term of a closed form.
type termView struct {
	FromS  string `json:"from_s"`
	Power  int
	Re, Im string
	PoleRe string `json:"pole_re"`
	PoleIm string `json:"pole_im"`
}

// termsAt adds the terms of a closed form that have begun before t, and gives
// the size of the largest.
func termsAt(raw json.RawMessage, t float64) (sum, size float64, err error) {
	var terms []termView
	if err := json.Unmarshal(raw, &terms); err != nil {
		return 0, 0, err
	}
	total := complex(0, 0)
	for _, x := range terms {
		from := float(x.FromS)
		if t <= from {
			continue
		}
		c := complex(float(x.Re), float(x.Im)) * cmplx.Exp(complex(float(x.PoleRe), float(x.PoleIm))*complex(t-from, 0)) *
			complex(math.Pow(t-from, float64(x.Power)), 0)
		total += c
		size = math.Max(size, cmplx.Abs(c))
	}
	if math.Abs(imag(total)) > 1e-9*size {
		return 0, 0, fmt.Errorf("the terms add up to %v at %g s: a conjugate is missing", total, t)
	}
	return real(total), size, nil
}

// termsAddUp compares the closed form, added up term by term, with the
// expected values. Terms may cancel: then digits go.
func (a *asker) termsAddUp(v *view, q *caseQuestion) error {
	var list []timeValue
	if err := json.Unmarshal(q.Expect, &list); err != nil {
		return err
	}
	for _, w := range list {
		if float(w.T) <= 0 {
			continue
		}
		for _, part := range []struct {
			terms json.RawMessage
			want  string
		}{{v.ZeroInput, w.ZeroInput}, {v.ZeroState, w.ZeroState}} {
			got, size, err := termsAt(part.terms, float(w.T))
			if err != nil {
				return err
			}
			if want := float(part.want); !(math.Abs(got-want) <= 1e-9*math.Abs(want)+1e-11*size) {
				return fmt.Errorf("the terms add up to %g at %s s, want %g", got, w.T, want)
			}
		}
	}
	return nil
}
