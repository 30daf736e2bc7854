package symbolic

import "testing"

// textbook are networks with the forms in which their functions are published.
// The names of theorems and circuits are common practice; where a form is a
// particular author's, the source is named.
var textbook = []struct {
	name string
	net  []string
	ask  string
	want string
}{
	{"divider", []string{"V1 in 0", "R1 in out 1000", "R2 out 0 2000"}, "v:out / V1", "R2/(R1 + R2)"},
	{"divider, seen from its output", []string{"V1 in 0", "R1 in out 1000", "R2 out 0 2000"}, "z:out", "R1·R2/(R1 + R2)"},
	{"RC low-pass", []string{"V1 in 0", "R1 in out 1000", "C1 out 0 1/1000000"}, "v:out / V1", "1/(1 + s·R1·C1)"},
	{"RC high-pass", []string{"V1 in 0", "C1 in out 1/1000000", "R1 out 0 1000"}, "v:out / V1", "s·C1·R1/(1 + s·C1·R1)"},
	{"RL low-pass", []string{"V1 in 0", "L1 in out 1/100", "R1 out 0 1000"}, "v:out / V1", "R1/(R1 + s·L1)"},
	{"L parallel to R", []string{"L1 a 0 1/100", "R1 a 0 1000"}, "z:a", "s·L1·R1/(R1 + s·L1)"},
	{"series resonance, at the capacitor", []string{"V1 in 0", "R1 in a 10", "L1 a b 1/100", "C1 b 0 1/1000000"}, "v:b / V1", "1/(1 + s·R1·C1 + s²·L1·C1)"},
	{"series resonance, impedance", []string{"R1 in a 10", "L1 a b 1/100", "C1 b 0 1/1000000"}, "z:in", "R1 + s·L1 + 1/(s·C1)"},
	{"series resonance, current", []string{"V1 in 0", "R1 in a 10", "L1 a b 1/100", "C1 b 0 1/1000000"}, "i:R1 / V1", "s·C1/(1 + s·R1·C1 + s²·L1·C1)"},
	{"lossless trap", []string{"R1 in a 10", "L1 a b 1/100", "C1 b 0 1/1000000"}, "z:a", "s·L1 + 1/(s·C1)"},
	{"parallel resonance", []string{"R1 a 0 1000", "L1 a 0 1/100", "C1 a 0 1/1000000"}, "z:a", "s·R1·L1/(R1 + s·L1 + s²·R1·L1·C1)"},
	{"bridge", []string{"V1 in 0", "R1 in a 1", "R2 a 0 2", "R3 in b 3", "R4 b 0 5"}, "v:a:b / V1", "(R2·R3 − R1·R4)/((R1 + R2)·(R3 + R4))"},
	{"T, open end", []string{"R1 a m 1", "R2 b m 2", "R3 m 0 3"}, "z:a", "R1 + R3"},
	{"T, shorted end", []string{"R1 a m 1", "R2 b m 2", "R3 m 0 3", "S1 b 0"}, "z:a", "(R1·R2 + R1·R3 + R2·R3)/(R2 + R3)"},
	{"Π, shorted end", []string{"R1 a 0 1", "R2 a b 2", "R3 b 0 3", "S1 b 0"}, "z:a", "R1·R2/(R1 + R2)"},
	{"lag network", []string{"V1 in 0", "R1 in out 1000", "R2 out m 500", "C1 m 0 1/1000000"}, "v:out / V1", "(1 + s·R2·C1)/(1 + s·C1·(R1 + R2))"},
	{"lead network", []string{"V1 in 0", "R1 in out 1000", "C1 in out 1/1000000", "R2 out 0 500"}, "v:out / V1", "R2·(1 + s·R1·C1)/(R1 + R2 + s·R1·C1·R2)"},
	{"lead–lag network", []string{"V1 in 0", "R1 in out 1000", "C1 in out 1/1000000", "R2 out m 500", "C2 m 0 1/100000"}, "v:out / V1",
		"(1 + s·R1·C1)·(1 + s·R2·C2)/(1 + s·(R1·C1 + R1·C2 + R2·C2) + s²·R1·C1·R2·C2)"},
	{"compensated attenuator", []string{"V1 in 0", "R1 in out 9000000", "C1 in out 1/100000000000", "R2 out 0 1000000", "C2 out 0 9/100000000000"}, "v:out / V1",
		"R2·(1 + s·R1·C1)/(R1 + R2 + s·R1·R2·(C1 + C2))"},
	{"inverting amplifier", []string{"V1 in 0", "R1 in x 1000", "R2 x out 10000", "U1 0 x out"}, "v:out / V1", "−R2/R1"},
	{"non-inverting amplifier", []string{"V1 in 0", "R1 x 0 1000", "R2 x out 9000", "U1 in x out"}, "v:out / V1", "1 + R2/R1"},
	{"summing amplifier", []string{"V1 in 0", "V2 in2 0", "R1 in x 1000", "R2 in2 x 1000", "R3 x out 10000", "U1 0 x out"}, "v:out / V2", "−R3/R2"},
	{"integrator", []string{"V1 in 0", "R1 in x 1000", "C1 x out 1/1000000", "U1 0 x out"}, "v:out / V1", "−1/(s·R1·C1)"},
	{"lossy integrator", []string{"V1 in 0", "R1 in x 1000", "C1 x out 1/1000000", "R2 x out 5000", "U1 0 x out"}, "v:out / V1", "−R2/(R1·(1 + s·C1·R2))"},
	{"differentiator", []string{"V1 in 0", "C1 in x 1/1000000", "R1 x out 5000", "U1 0 x out"}, "v:out / V1", "−s·C1·R1"},
	{"first-order all-pass", []string{"V1 in 0", "R1 in x 1000", "R2 x out 1000", "R3 in p 5000", "C1 p 0 1/1000000", "U1 p x out"}, "v:out / V1",
		"(R1 − s·R2·R3·C1)/(R1·(1 + s·R3·C1))"},
	// R. P. Sallen, E. L. Key, IRE Trans. Circuit Theory 2 (1955) 74–85, with
	// an amplifier of gain 1: 1/(1 + s·C2·(R1 + R2) + s²·R1·R2·C1·C2).
	{"Sallen–Key low-pass, gain 1", []string{"V1 in 0", "R1 in a 1000", "R2 a b 2000", "C1 a out 1/1000000", "C2 b 0 1/2000000", "U1 b out out"}, "v:out / V1",
		"1/(1 + s·C2·(R1 + R2) + s²·R1·R2·C1·C2)"},
	{"Sallen–Key high-pass, gain 1", []string{"V1 in 0", "C1 in a 1/1000000", "C2 a b 1/2000000", "R1 a out 1000", "R2 b 0 2000", "U1 b out out"}, "v:out / V1",
		"s²·C1·C2·R1·R2/(1 + s·R1·(C1 + C2) + s²·C1·C2·R1·R2)"},
	// Multiple-feedback low-pass: −1/(R1/R3 + s·C2·(R1 + R2 + R1·R2/R3) + s²·R1·R2·C1·C2).
	{"multiple-feedback low-pass", []string{"V1 in 0", "R1 in a 1000", "R2 a x 2000", "R3 a out 3000", "C1 a 0 1/1000000", "C2 x out 1/2000000", "U1 0 x out"}, "v:out / V1",
		"−R3/(R1 + s·C2·(R1·R2 + R1·R3 + R2·R3) + s²·R1·R2·R3·C1·C2)"},
	{"generalized impedance converter", []string{"R1 a b 1000", "R2 b c 2000", "R3 c d 3000", "C4 d e 1/1000000", "R5 e 0 5000", "U1 a c d", "U2 e c b"}, "z:a",
		"s·R1·R3·C4·R5/R2"},
	{"gyrator of two transconductances", []string{"G1 0 b 1/100 v:a", "G2 a 0 1/50 v:b", "C1 b 0 1/1000000"}, "z:a", "s·C1/(G1·G2)"},
	{"ideal transformer, load seen from the primary", []string{"T1 a 0 b 0 3 1", "R1 b 0 50"}, "z:a", "T1²·R1"},
	{"ideal transformer, ratio", []string{"V1 in 0", "R1 in a 10", "T1 a 0 b 0 3 1", "R2 b 0 50"}, "v:b / V1", "T1·R2/(R1 + T1²·R2)"},
	{"coupled coils with a load", []string{"L1 a 0 1/100", "L2 b 0 1/1000", "K1 L1 L2 9/10", "R1 b 0 50"}, "z:a",
		"s·L1·(R1 + s·L2·(1 − K1²))/(R1 + s·L2)"},
	{"coupled coils, open voltage ratio", []string{"V1 a 0", "L1 a 0 1/100", "L2 b 0 1/1000", "K1 L1 L2 9/10"}, "v:b / V1", "K1·√(L1·L2)/L1"},
	{"coupled coils by their mutual inductance", []string{"V1 a 0", "L1 a 0 1/100", "L2 b 0 1/1000", "M1 L1 L2 1/500"}, "v:b / V1", "M1/L1"},
	{"amplifier by its gain", []string{"V1 in 0", "R1 in a 1000", "R2 a 0 1000", "E1 b 0 10 v:a", "R3 b out 100", "R4 out 0 100"}, "v:out / V1",
		"R2·E1·R4/((R1 + R2)·(R3 + R4))"},
	{"follower of gain 1", []string{"V1 in 0", "R1 in a 1000", "C1 a 0 1/1000000", "E1 b 0 1 v:a", "R2 b out 100", "C2 out 0 1/1000000"}, "v:out / V1",
		"1/((1 + s·R1·C1)·(1 + s·R2·C2))"},
	{"what hangs by one wire is not in it", []string{"V1 in 0", "R1 in out 1000", "R2 out 0 2000", "R3 out x 5", "R4 x y 6", "C1 x y 1/1000"}, "v:out / V1", "R2/(R1 + R2)"},
	{"what the output feeds is not in it", []string{"V1 in 0", "R1 in x 1000", "R2 x out 10000", "U1 0 x out", "R3 out w 5", "L1 w 0 1/1000", "C1 w 0 1/1000"}, "v:out / V1", "−R2/R1"},
	{"one-pole op amp", []string{"V1 in 0", "R1 in x 1000", "R2 x out 10000", "U1 0 x out 1000000"}, "v:out / V1", ""},
	{"one-pole op amp elsewhere", []string{"V1 in 0", "R1 in x 1000", "R2 x 0 10000", "U1 x out out 1000000"}, "v:x / V1", "R2/(R1 + R2)"},
	{"an impedance given by an expression", []string{"V1 in 0", "R1 in x 1000", "Z1 x 0 5 1/1000"}, "v:x / V1", ""},
	{"bridge, impedance: too long", []string{"R1 a b 1", "R2 b 0 2", "R3 a c 3", "R4 c 0 4", "R5 b c 5"}, "z:a", ""},
}

func TestTextbook(t *testing.T) {
	for _, c := range textbook {
		t.Run(c.name, func(t *testing.T) {
			b := build(t, c.net...)
			got, sp, f := b.formula(t, b.ask(t, c.ask))
			if got != c.want {
				t.Errorf("got  %s\nwant %s\nfunction %v, failed %v", got, c.want, f, sp.failed)
			}
			t.Logf("%d steps", budget-sp.left)
		})
	}
}
