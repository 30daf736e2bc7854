package dialect

import (
	"slices"
	"strings"
	"testing"
)

// findingsOf lists the codes that a text yields, in order of the text.
func findingsOf(c *Checked) []string {
	var codes []string
	for _, f := range c.Findings {
		codes = append(codes, string(f.Code))
	}
	return codes
}

// frame is a sound network around the line under test.
const frame = `ground hull
voltage source Vs = 5 V * u(t)
resistor R1 = 1 kΩ
capacitor C1 = 1 µF
inductor L1 = 1 mH
in -[Vs]- hull
in -[R1]- out -[C1 || L1]- hull
port p at out hull
function H = v[out]/Vs
switch S1 = opens at 1 ms
in -[S1]- far -[resistor Rfar = 1 kΩ]- hull
`

// TestFindings checks single lines in a sound file: the code, and a part of
// the message or of the first repair that must be there.
func TestFindings(t *testing.T) {
	cases := []struct{ line, code, message string }{
		// Units and values.
		{"let x = 3 V + 2 A", "unit-mismatch", "cannot be added"},
		{"let x = 3 V + 2", "unit-missing", "2 has no unit"},
		{"let x = sqrt(2 V)", "unit-mismatch", "no square root"},
		{"let x = (2 V)^0.25", "unit-mismatch", ""},
		{"let x = 2^(1 V)", "not-dimensionless", ""},
		{"let x = 1/(3 - 3)", "no-value", "division by zero"},
		{"let x = sqrt(-2)", "no-value", "no real value"},
		{"let x = log(0)", "no-value", ""},
		{"let x = 3 dB * 2 V", "unit-mismatch", "10^(3 dB/(20 dB))"},
		{"let x = 3 dB * 2 dB", "unit-mismatch", ""},
		{"let x = 3 dB + 2", "unit-missing", "the level 2 dB"},
		{"let x = 1 kHz + 1000 rad/s", "frequency-kind", "2π"},
		{"let x = 1 kHz + 1/(R1*C1)", "frequency-kind", ""},
		{"let x = 3 V in Hz", "unit-mismatch", ""},
		{"let x = dB(2 V)", "not-dimensionless", ""},
		{"let x = min(1 V, 2 A)", "unit-mismatch", ""},
		{"let x = x + 1", "cycle", ""},
		{"let x = 30° + 2", "unit-missing", "2°"},
		{"require phase(H) + 10 >= 3°", "unit-missing", "angle"},
		{"let x = nothing", "unknown-name", ""},
		{"let x = out", "wrong-sort", "v[out]"},
		{"let x = sqrt(1, 2)", "arguments", "sqrt(X)"},
		{"let V = 3\nlet x = 5 A/V", "name-like-unit", ""},
		{"tell 1 ms*H at 1 kHz", "name-like-unit", "* H"},
		{"out -[resistor Rx = 0 Ω]- hull", "not-positive", "write wire Rx"},
		{"out -[capacitor Cx = 0 F]- hull", "not-positive", "zero"},
		{"far -[resistor Rx = 10 kΩ]- x1 -[resistor Ry = 10 mΩ]- x2 -[resistor Rz = 47 kΩ]- hull", "prefix-suspect", "10 MΩ"},
		{"out -[capacitor Cx = 100 F]- hull", "prefix-suspect", "100 µF"},
		{"require gain(H) >= -3", "level-missing", "write -3 dB"},
		{"require abs(H) > -3.5 at 1 kHz", "level-missing", "write -3.5 dB"},
		{"let low = -3\nrequire low < abs(H(1 kHz))", "level-missing", "the level -3 dB"},
		{"tell rise_time(v[out])", "unknown-name", "write rise"},
		{"tell settling_time(v[out])", "unknown-name", "write settle"},
		{"tell average(v[out])", "unknown-name", "write mean"},
		{"tell maximum(v[out])", "unknown-name", "write peak"},
		{"tell maximum(v[out], v[far])", "unknown-name", "write max"},
		{"tell minimum(v[out])", "unknown-name", "write trough"},
		{"tell max(v[out])", "arguments", "write peak"},
		{"tell min(v[out])", "arguments", "write trough"},
		{"tell magnitude(v[out])", "unknown-name", "write abs"},
		{"tell magnitude(H) at 1 kHz", "unknown-name", "write gain"},
		{"tell foo(v[out])", "unknown-name", "of a signal there are peak, trough"},
		{"tell foo(H)", "unknown-name", "of a function there are gain, phase"},
		{"tell foo(R1)", "unknown-name", "of a part there are energy, stored"},
		{"tell V(out)", "unknown-name", "write v[out]"},
		{"far -[current source Ix = 1 mA*pulse(t)]- hull", "unknown-name", "u(t) - u(t - T)"},
		{"tell natural", "unknown-name", "poles"},
		{"tell peak", "unknown-name", "peak(X)"},
		{"subnetwork Cell (a, b) {\n  let fc = 1 kHz\n  a -[resistor R = 1 Ω]- b\n}\nfar -[part F = Cell with fc = 2 kHz]- hull", "unknown-name", "a let inside Cell"},
		{"out -[capacitor Cx = -1 nF]- hull", "not-positive", "negative"},
		{"out -[resistor Rx = 5 mS]- hull", "unit-mismatch", "conductance"},
		{"out -[resistor Rx = v[out]/(1 A)]- hull", "not-constant", ""},
		{"out -[resistor Rx = 1 Ω ±100 %]- hull", "tolerance", ""},
		{"out -[voltage source Vx = 1 V ±5 %]-[resistor Rx = 1 Ω]- hull", "tolerance", ""},
		{"out -[resistor Rx = 1 Ω ±5]- hull", "unit-missing", "%"},
		{"out -[resistor Rx = 1 Ω, rated 3 A]- hull", "unit-mismatch", "(W)"},
		{"out -[capacitor Cx = 1 F, rated 3 W]- hull", "unit-mismatch", ""},
		{"out -[capacitor Cx = 1 F, initially 3 A]- hull", "unit-mismatch", ""},
		{"out -[impedance Zx = 5 Ω + 2 mH*s]- hull", "unit-mismatch", "added"},
		{"out -[impedance Zx = 1 Ω*sqrt(s*1 s)]- hull", "not-rational", ""},
		{"out -[impedance Zx = 1 Ω*t/1 s]- hull", "not-constant", "t has no place"},
		{"out -[impedance Zx = s*0 H]- hull", "not-positive", ""},
		{"out -[capacitor Cx = 2 MF]- hull", "prefix-suspect", ""},
		{"far -[resistor Rx = 33 MΩ]- mid -[resistor Ry = 33 mΩ]- hull", "prefix-suspect", "33 mΩ"},
		// Names and wiring.
		{"out -[R2]- hull", "unknown-name", "did you mean R1?"},
		{"out -[R1]- hull", "wired-twice", ""},
		{"out -[H]- hull", "wrong-sort", "function"},
		{"out -[resistor R1 = 1 Ω]- hull", "name-taken", "resistor"},
		{"let out = 3", "name-taken", "node"},
		{"out -[resistor Rx = 1 Ω]- out", "self-loop", ""},
		{"resistor Rx = 1 Ω", "never-wired", ""},
		{"out -[resistor r1 = 1 Ω]- hull", "case-twins", ""},
		{"port q at out hul", "unknown-name", "did you mean hull?"},
		{"ground in", "ground-twice", ""},
		{"coupling K = 0.5, between L1 R1", "wrong-sort", "where an inductor is needed"},
		{"coupling K = 0.5, between L1 L1", "coupling-range", "itself"},
		{"coupling K = 0.5", "option-missing", "between"},
		{"far -[inductor L2 = 1 mH]- hull\ncoupling K = -1.5, between L1 L2", "coupling-range", "between -1 and 1"},
		{"far -[inductor L2 = 4 mH]- hull\ncoupling K = 2.1 mH, between L1 L2", "coupling-range", "2 mH"},
		{"far -[inductor L2 = 4 mH]- hull\ncoupling K = 0.5, between L1 L2\ncoupling M = 0.4, between L2 L1", "wired-twice", ""},
		{"op amp U1 = ideal, + at out, - at tap", "option-missing", "output at NODE"},
		{"op amp U1 = 3 s, + at out, - at tap, output at tap\ntap -[resistor Rt = 1 Ω]- hull", "unit-mismatch", ""},
		{"transformer T1 = 3 : 1, primary at out hull", "option-missing", "secondary"},
		{"transformer T1 = 3 : 0, primary at out hull, secondary at far hull", "not-positive", ""},
		{"far -[switch S2 = closes at 1 ms, closes at 2 ms]- hull", "switch-order", "closed already"},
		{"far -[switch S2 = closes at 2 ms, opens at 1 ms]- hull", "switch-order", ""},
		{"far -[switch S2 = closes at 2 V]- hull", "unit-mismatch", ""},
		{"far -[switch S2 = closes at -1 ms]- hull", "not-positive", ""},
		// Sources.
		{"far -[current source Ix = 1 mA*v[out]]- hull", "unit-mismatch", ""},
		{"far -[current source Ix = 1 mS*v[out] + 1 mA]- hull", "not-linear", "two sources"},
		{"far -[current source Ix = 1 mS*abs(v[out])]- hull", "not-linear", ""},
		{"far -[current source Ix = 1 S/V*v[out]*v[in]]- hull", "not-linear", ""},
		{"far -[current source Ix = z[out]*1 A/(1 Ω)]- hull", "not-linear", ""},
		{"far -[current source Ix = 1 mA*sin(50 Hz*t)]- hull", "frequency-kind", "2*pi"},
		{"far -[current source Ix = 1 mA*exp(-t)]- hull", "not-dimensionless", ""},
		{"far -[current source Ix = 1 mA*u(t + 1 ms)]- hull", "waveform", "before t = 0"},
		{"far -[current source Ix = 1 mA*sin(u(t))]- hull", "waveform", "linear in t"},
		{"far -[current source Ix = 2 mA*delta(t)]- hull", "unit-mismatch", ""},
		// Functions, questions and limits.
		{"function G = v[out]", "function-form", "divided by nothing"},
		{"function G = v[out]/v[far]", "not-an-excitation", ""},
		{"function G = v[out]/i[Vs]", "not-an-excitation", ""},
		{"function G = v[out]/R1", "function-form", ""},
		{"function G = v[out]*v[in]/Vs", "function-form", ""},
		{"function G = abs(H)", "not-rational", ""},
		{"function G = p[R1]/Vs", "function-form", ""},
		{"function G = F + 1\nfunction F = G*2", "cycle", ""},
		{"tell v[out]/v[in]", "signal-quotient", "function H"},
		{"tell v[out]*v[in]", "signal-product", "p[PART]"},
		{"tell z[out] + v[out]", "mixed-worlds", ""},
		{"tell i[out]", "wrong-sort", "i[PART]"},
		{"tell p[out]", "wrong-sort", "p[PART]"},
		{"tell i[p]", "open-port", "norton"},
		{"tell v[R1,C1]", "wrong-sort", ""},
		{"tell gain(v[out])", "wrong-sort", "network function"},
		{"tell peak(H)", "wrong-sort", "signal"},
		{"tell peak(v[out]", "syntax", ""},
		{"tell zir(abs(v[out]))", "not-linear", ""},
		{"tell due(v[out], R1)", "wrong-sort", ""},
		{"tell energy(H)", "wrong-sort", ""},
		{"tell stored(R1)", "wrong-sort", ""},
		{"tell t", "not-constant", ""},
		{"tell H at 2 ms", "unit-mismatch", "frequency"},
		{"tell v[out] at 2 kHz", "unit-mismatch", "time"},
		{"tell H at 1000", "unit-missing", "Hz"},
		{"tell H at 1000 1/s", "frequency-kind", ""},
		{"tell H before 1 kHz", "qualifier", ""},
		{"tell H from 2 kHz to 1 kHz", "qualifier", "empty"},
		{"tell H at 1 kHz at 2 kHz", "qualifier", "twice"},
		{"tell v[out] with S1 open", "qualifier", ""},
		{"tell H with R1 open", "wrong-sort", "switch"},
		{"tell quality(H) at 1 kHz", "qualifier", ""},
		{"tell stable(H) + 1", "wrong-sort", ""},
		{"tell thevenin[p] + 1", "wrong-sort", ""},
		{"tell zeros", "arguments", ""},
		{"tell poles of gain(H)", "wrong-sort", ""},
		{"tell matrix z[p,p]", "wrong-sort", ""},
		{"port q at in hull\ntell matrix s[p,q]", "arguments", "reference"},
		{"port q at in hull\ntell matrix z[p,q] reference 50 Ω", "arguments", ""},
		{"tell H(1 ms)", "unit-mismatch", ""},
		{"tell v[out](1 kHz)", "unit-mismatch", ""},
		{"tell R1(2)", "wrong-sort", ""},
		{"require H <= 2", "not-real", "gain"},
		{"require v[out] <= 2 A", "unit-mismatch", "compared"},
		{"require v[out] <= 2", "unit-missing", ""},
		{"require phase(H) >= -90", "unit-missing", "angle"},
		{"require quality(H)", "wrong-sort", "neither true nor false"},
		{"require stable(H) <= 2", "wrong-sort", ""},
		{"require crossover(z[out]) >= 1 kHz", "not-dimensionless", ""},
		{"allow nothing because \"why\"", "unknown-code", ""},
		{"allow syntax because \"why\"", "allow-error", ""},
		{"prefer resistor E12\nprefer resistor E24", "given-twice", ""},
		{"prefer capacitor E12\nfar -[capacitor Cx = 1.1 nF]- hull", "not-preferred", "1 nF"},
		{"far -[resistor Rx = 48 Ω ±1 %]- hull", "not-preferred", "E96"},
		{"use \"gone.plight\"", "file-missing", ""},
		{"part F1 = Cell, a at out", "unknown-name", "no subnetwork"},
		{"subnetwork Cell (a, b) {\n  a -[resistor R = 1 Ω]- b\n}\npart F1 = Cell, a at out", "option-missing", "terminal b"},
		{"subnetwork Cell (a, b) {\n  a -[resistor R = 1 Ω]- b\n}\npart F1 = Cell with Q = 2, a at out, b at hull", "unknown-name", "no parameter Q"},
		{"subnetwork Cell (a, b) with W = 1 Ω {\n  a -[resistor R = W]- b\n}\npart F1 = Cell with W = 2 V, a at out, b at hull", "unit-mismatch", ""},
		{"subnetwork Cell (a, b, c) {\n  a -[resistor R = 1 Ω]- b -[resistor Q = 1 Ω]- c\n}\nout -[part F1 = Cell]- hull", "not-two-terminal", "3 terminals"},
		{"subnetwork Cell (a, b) {\n  a -[resistor R = R1]- b\n}\npart F1 = Cell, a at out, b at hull", "unknown-name", "not seen inside"},
		{"subnetwork Cell (a, b) with W = 1 Ω {\n  a -[resistor R = W]- b\n}\npart F1 = Cell with W = 2 Ω, W = 3 Ω, a at out, b at hull", "given-twice", "W"},
		{"subnetwork Cell (a, b) {\n  a -[inductor La = 1 mH]- b\n  a -[inductor Lb = 1 mH]- b\n  coupling K = 2, between La Lb\n}", "coupling-range", ""},
		{"tell v[F1.x]", "unknown-name", ""},
		{"tell v[R1.x]", "wrong-sort", "nothing inside"},
	}
	for _, c := range cases {
		checked := Check(Parse("case.plight", frame+c.line+"\n"), mapReader(nil))
		if got := findingsOf(checked); len(got) != 1 || got[0] != c.code {
			t.Errorf("%s\n\tyields %v, want %s: %v", c.line, got, c.code, checked.Findings)
			continue
		}
		f := checked.Findings[0]
		text := f.Message
		for _, r := range f.Repairs {
			text += " | " + r.Title + " " + r.Edits[0].Text
		}
		if !strings.Contains(text, c.message) {
			t.Errorf("%s\n\tsays %q, without %q", c.line, text, c.message)
		}
	}
}

// TestSoundLines are lines that must yield nothing.
func TestSoundLines(t *testing.T) {
	for _, line := range []string{
		"let x = 3 V*u(t)\nfar -[voltage source Vx = x]-[resistor Rx = 1 Ω]- hull",
		"let ratio = 10^(20 dB/(20 dB))",
		"let w0 = 1/sqrt(L1*C1)\ntell H at w0 in rad/s",
		"let x = 2 dB + 3 dB - 1 dB*2",
		"let x = (3 dB)/(1.5 dB)",
		"let x = sqrt(1 kHz*4 kHz)\ntell H at x",
		"let x = 30° + 0.1 rad",
		"let x = max(1 V, 20 mV, 0 dBV)",
		"let a1 = b1\nlet b1 = c1*2\nlet c1 = 3",
		"tell gain(H) - 3 dB at 1 kHz",
		"tell abs(z[out] - R1) at 1 kHz",
		"tell v[out] - 2 V from 0 s to 1 ms",
		"tell max(v[out], v[in])",
		"tell bandwidth(H)/crossover(H)",
		"tell crossover(H) - 1 kHz",
		"tell crossover(H)*1 s",
		"tell v[R1] + v[p] + v[in,out]",
		"tell y[R1] at 1 kHz",
		"tell poles with S1 closed",
		"tell z[p] without R1 at 1 kHz",
		"tell real(H)*2 + imag(H) from 1 Hz",
		"tell H^2 at 1 kHz",
		"tell s*H at 1 kHz",
		"require gain(H) <= -3 dB at 1 MHz",
		"require gain(z[out]) <= 2 kΩ",
		"require peak(v[out]) - trough(v[out]) <= 20 mV from 1 ms to 2 ms",
		"require abs(phase(H)) <= 90°",
		"require 1 V <= final(v[in])",
		"require crossover(H) <= 1e6 rad/s",
		"function G = v[out]/v[in]\nfunction F = G + 2*H - z[out]/R1",
		"function G = (v[out] - v[in])/Vs + 1",
		"function G = v[out]/(2*Vs)",
		"function G = v[out]/v[p]",
		"far -[resistor Rx = R1*2, rated 250 V]- hull",
		"far -[resistor Rx = 1k5 ±1 %]- hull",
		"far -[resistor Rx = 3.3 Ω +20 % -10 %]- hull",
		"far -[resistor Rx = 640 Ω ±10 %]-[inductor Lx = 1.2 H]- hull",
		"far -[current source Ix = 2*i[R1] + 1 mS*v[out]/(1 + s*1 ms)]- hull",
		"far -[voltage source Vx = 2 V*exp(-t/3 ms)*cos(2*pi*50 Hz*t + 30°)*u(t - 1 ms)]-[resistor Rx = 1 Ω]- hull",
		"far -[wire W1]- hull\ntell i[W1]",
		"port in at in hull\ntell v[in]\ntell i[in]\ntell z[in]",
		"subnetwork Cell (a, b) with W = 1 Ω, f0 = 1 kHz {\n  let K = 1/(2*pi*f0*W)\n  a -[resistor R = W]- m -[capacitor C = K]- b\n}\nout -[part F1 = Cell with f0 = 6283 rad/s]- hull\ntell v[F1.m]\ntell i[F1.a]\ntell v[F1.C]",
		"out -[part F2 = Cell2]- hull\nsubnetwork Cell2 (a, b) {\n  a -[part X = Cell3]- b\n}\nsubnetwork Cell3 (a, b) {\n  a -[resistor R = 1 Ω]- b\n}\ntell v[F2.X.R]",
		"op amp U1 = 1e6 rad/s, gain 60 dB, + at out, - at tap, output at tap\ntap -[resistor Rt = 1 Ω]- hull\ntell i[U1.output]\ntell v[U1.output]",
		"transformer T1 = 3 : 1 : 2, primary at out hull, secondary at s1 hull, secondary at s2 hull\ns1 -[resistor Ra = 1 Ω]- hull\ns2 -[resistor Rb = 1 Ω]- hull\ntell i[T1.primary]\ntell i[T1.secondary2]",
	} {
		checked := Check(Parse("case.plight", frame+line+"\n"), nil)
		if len(checked.Findings) != 0 {
			t.Errorf("%s\n\tyields %v", line, checked.Findings)
		}
		if checked.Description.Faults {
			t.Errorf("%s\n\tis left out of the network", line)
		}
	}
}

// TestOrderDoesNotMatter checks a file with its statements in reverse.
func TestOrderDoesNotMatter(t *testing.T) {
	text := frame + "let a1 = b1*2\nlet b1 = R1*C1\nsubnetwork Cell (a, b) with W = 1 Ω {\n  a -[resistor R = W]- b\n}\nout -[part F1 = Cell with W = Wx]- hull\nlet Wx = 3 Ω\ntell v[F1.R]\nfunction G = F + 1\nfunction F = H*2\n"
	forward := Check(Parse("case.plight", text), nil)
	var statements []string
	f := Parse("case.plight", text)
	for _, st := range f.Statements {
		s := st.Headline().Span
		statements = append(statements, text[s.Start:s.End])
	}
	slices.Reverse(statements)
	backward := Check(Parse("case.plight", strings.Join(statements, "\n")), nil)
	if len(forward.Findings)+len(backward.Findings) != 0 {
		t.Fatalf("findings %v and %v", forward.Findings, backward.Findings)
	}
	for _, p := range forward.Description.Parts {
		found := false
		for _, q := range backward.Description.Parts {
			found = found || p.Name == q.Name && p.Value.Equal(q.Value)
		}
		if !found {
			t.Errorf("%s differs with the statements in reverse", p.Name)
		}
	}
}
