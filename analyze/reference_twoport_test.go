package analyze_test

import (
	"encoding/json"
	"math"
	"math/cmplx"
)

// twoPort asks for a parameter set: as functions of s, as values at
// frequencies, or that it does not exist.
func (a *asker) twoPort(q *caseQuestion) outcome {
	reference := ""
	if len(q.Reference) == 2 {
		if q.Reference[0] != q.Reference[1] {
			return a.unequalScattering(q)
		}
		reference = " reference " + q.Reference[0] + " Ω"
	}
	v, err := a.ask("matrix %s[%s,%s]%s", q.Parameters, a.text.port(q.Port1), a.text.port(q.Port2), reference)
	if err != nil {
		return outcome{err: err}
	}
	return judgeMatrix(q, v)
}

func judgeMatrix(q *caseQuestion, v *view) outcome {
	var missing struct{ Exists *bool }
	if json.Unmarshal(q.Expect, &missing) == nil && missing.Exists != nil {
		if v.Exists == nil || *v.Exists != *missing.Exists || (v.Why == "") != *v.Exists {
			return wrong("whether the set exists, and why not: the answer is %+v", v)
		}
		return outcome{}
	}
	if len(v.Entries) != 2 {
		return wrong("no entries: %s", v.Why)
	}
	var functions [][]caseRatio
	if json.Unmarshal(q.Expect, &functions) == nil && len(functions) == 2 && functions[0][0].Den != nil {
		for i := range 2 {
			for j := range 2 {
				if err := v.Entries[i][j].function(functions[i][j], readTolerance(q.Tolerance)); err != nil {
					return wrong("entry %d,%d: %w", i+1, j+1, err)
				}
			}
		}
		return outcome{}
	}
	return judgeMatrixValues(q, v)
}

// judgeMatrixValues evaluates the functions answered at the frequencies asked.
func judgeMatrixValues(q *caseQuestion, v *view) outcome {
	var points []struct {
		Hz, Omega string
		Matrix    [][]frequencyValue
	}
	if err := json.Unmarshal(q.Expect, &points); err != nil || len(points) == 0 {
		return wrong("expectation: %v", err)
	}
	t := readTolerance(q.Tolerance)
	for _, p := range points {
		omega := float(p.Omega)
		if p.Hz != "" {
			omega = 2 * math.Pi * float(p.Hz)
		}
		largest := 0.0
		for _, row := range p.Matrix {
			for _, e := range row {
				largest = math.Max(largest, cmplx.Abs(e.value()))
			}
		}
		for i := range 2 {
			for j := range 2 {
				f, err := readRatio(v.Entries[i][j].Numerator, v.Entries[i][j].Denominator)
				if err != nil {
					return outcome{err: err}
				}
				if got, want := f.at(omega), p.Matrix[i][j].value(); !t.near(got, want, largest) {
					return wrong("entry %d,%d at ω = %g is %v, want %v", i+1, j+1, omega, got, want)
				}
			}
		}
	}
	return outcome{}
}

// unequalScattering asks for scattering parameters between two different
// reference resistances. The notation has one reference for both ports, so
// the waves are made: a source behind each port's resistance drives it in
// turn, and s11 = 2·v1/Vg − 1, s21 = (2·v2/Vg)·√(R1/R2) (power waves of real
// references; K. Kurokawa, IEEE Trans. MTT 13, 1965).
func (a *asker) unequalScattering(q *caseQuestion) outcome {
	ports := [2][]string{q.Port1, q.Port2}
	v := &view{Entries: [][]view{make([]view, 2), make([]view, 2)}}
	for driven := range 2 {
		text := translate(a.case_.Network)
		text.add("voltage source wave = 1 V * u(t)")
		for i, p := range ports {
			text.add("resistor load_%d = %s Ω", i+1, q.Reference[i])
			if i == driven {
				text.add("behind -[wave]- %s", text.node(p[1]))
				text.add("behind -[load_%d]- %s", i+1, text.node(p[0]))
			} else {
				text.add("%s -[load_%d]- %s", text.node(p[0]), i+1, text.node(p[1]))
			}
		}
		for i, p := range ports {
			expression := "2*" + text.voltage(p[0], p[1]) + "/wave"
			if i == driven {
				expression += " - 1"
			} else {
				expression += "*sqrt(load_" + digit(driven) + "/load_" + digit(i) + ")"
			}
			text.function(expression)
		}
		b := &asker{a.ctx, a.case_, text, analysisOf(a.case_.Name+".plight", text.text())}
		for i := range 2 {
			e, err := b.ask("H_%d", i+1)
			if err != nil {
				return outcome{err: err}
			}
			v.Entries[i][driven] = *e
		}
	}
	return judgeMatrix(q, v)
}

func digit(i int) string { return string(rune('1' + i)) }

// fact asks whether a two-port is reciprocal, passive or lossless; the answer
// comes with any of its matrices.
func (a *asker) fact(q *caseQuestion) outcome {
	var want bool
	if err := json.Unmarshal(q.Expect, &want); err != nil {
		return wrong("expectation: %v", err)
	}
	port1, port2 := q.Port1, q.Port2
	for _, other := range a.case_.Ask {
		if len(port1) == 0 && len(other.Port1) == 2 {
			port1, port2 = other.Port1, other.Port2
		}
	}
	v, err := a.ask("matrix s[%s,%s] reference 50 Ω", a.text.port(port1), a.text.port(port2))
	if err != nil {
		return outcome{err: err}
	}
	got, told := v.Facts[q.What]
	if !told {
		return unasked("nothing says whether the two-port is %s", q.What)
	}
	if got != want {
		return wrong("%s is %v, want %v", q.What, got, want)
	}
	return outcome{}
}
