package dialect

import (
	"strings"
	"sync"
)

// ExplainWord explains a word of the notation: a keyword, a kind of part, an option,
// a unit (with its prefix), a function or measure, a quantity's letter. Only
// Title, Meaning and Example are filled in.
func ExplainWord(word string) (Explanation, bool) {
	if e, ok := wordIndex()[word]; ok {
		return e, true
	}
	if info := callTable[word]; info != nil {
		return callWord(info), true
	}
	return unitWord(word)
}

func callWord(info *callInfo) Explanation {
	group := map[callGroup]string{
		mathematics: "function", waveformCall: "waveform", signalPart: "part of a signal",
		functionView: "measure of a function", functionMeasure: "measure of a function",
		signalMeasure: "measure of a signal", partMeasure: "measure of a part",
	}[info.Group]
	form := info.Name + "(" + strings.Join(info.Parameters, ", ") + ")"
	if info.many {
		form = strings.TrimSuffix(form, ")") + ", …)"
	}
	return Explanation{Title: form + ": " + group, Meaning: info.Definition}
}

// unitWord explains a unit symbol with its prefix, or a compound unit's name.
func unitWord(word string) (Explanation, bool) {
	prefix, base, ok := lookupUnit(word)
	if !ok {
		return Explanation{}, false
	}
	info := unitIndex()[base]
	if info == nil {
		return Explanation{}, false
	}
	p := prefixIndex()[prefix]
	if p == nil || p.power == 0 {
		return Explanation{Title: base + ": " + info.Name, Meaning: "Unit: " + info.Meaning + "."}, true
	}
	power := roundedDigits(powerOfTen(p.power), 2)
	return Explanation{
		Title:   prefix + base + ": " + p.name + info.Name,
		Meaning: "Unit: " + power + " " + base + " (" + info.Meaning + ").",
	}, true
}

// Words lists the words of the notation that ExplainWord explains, units left out.
func Words() []string {
	words := make([]string, 0, len(wordList)+len(callList))
	for _, w := range wordList {
		words = append(words, w.word)
	}
	for _, c := range callList {
		words = append(words, c.Name)
	}
	return words
}

var wordIndex = sync.OnceValue(func() map[string]Explanation {
	index := make(map[string]Explanation, len(wordList))
	for _, w := range wordList {
		index[w.word] = Explanation{Title: w.title, Meaning: w.meaning, Example: w.example}
	}
	return index
})

var wordList = []struct{ word, title, meaning, example string }{
	{"ground", "ground NODE: the reference node", "v[NODE] and z[NODE] are against this node. A file has one; without it only differences can be asked.", "ground hull"},
	{"let", "let NAME = EXPR: a constant", "Names a value. Constants may stand in any order; R, L and C names stand for their nominal values in them.", "let f0 = 1/(2*pi*sqrt(Lw*Cs)) in Hz"},
	{"port", "port NAME at NODE NODE: a node pair", "Names a pair of nodes, the + side first, at which impedances, equivalents and matrices are asked. A node with a port may have one connection.", "port valve at coil hull"},
	{"function", "function NAME = RESPONSE/EXCITATION: a network function", "Rational in s, with zero initial state and every other source zero. The excitation is an independent source, a port quantity, or a voltage that one source holds.", "function H = v[out]/Vs"},
	{"tell", "tell WHAT {QUALIFIER}: a question", "The answer is shown beside the line and printed by the command.", "tell v[coil] at 2 ms"},
	{"require", "require EXPR REL EXPR {QUALIFIER} [nominal]: a limit", "Must hold for all values in tolerance, or for the nominal ones with nominal. A fact such as stable(H) needs no relation.", "require peak(v[coil]) <= 200 V"},
	{"start", "start rest|steady: the state at t = 0−", "rest: everything is zero but the values given with initially. steady: constants and sinusoids without u(t) have acted for ever.", "start steady"},
	{"rest", "start rest: from zero", "Every capacitor voltage and inductor current is zero before t = 0, unless initially gives it; sources act from t = 0 on.", "start rest"},
	{"steady", "start steady: from the steady state", "Constants and sinusoids that stand without u(t) have acted for ever, switches stand as before their first event.", "start steady"},
	{"prefer", "prefer KIND SERIES: preferred values", "Values of this kind should be in the series of IEC 60063, E3 … E192.", "prefer resistor E96"},
	{"allow", "allow CODE because \"reason\": a finding accepted", "Findings of this code, other than errors, are no longer shown.", "allow touch-voltage because \"mains side, enclosed\""},
	{"use", "use \"path\": another file", "Its constants and subnetworks can be used here. The path is beside this file.", "use \"cells.plight\""},
	{"subnetwork", "subnetwork NAME (TERMINAL, …) [with P = DEFAULT, …] { … }: a network to be used many times", "Its body holds constants, parts, wiring, uses and limits. It sees the file's constants, not its nodes; the reference enters as a terminal.", "subnetwork RealCap (a, b) with C = 1 µF, ESR = 10 mΩ {\n  a -[capacitor C0 = C]-[resistor Re = ESR]- b\n}"},
	{"part", "part NAME = SUBNETWORK [with P = EXPR, …], TERMINAL at NODE, …: a subnetwork's use", "With two terminals it may stand in a box without naming them.", "part C1 = RealCap with C = 470 µF, a at vout, b at hull"},
	{"resistor", "resistor NAME = VALUE in Ω", "v = R·i. Options: rated in W (mean power) or V.", "resistor Rw = 48 Ω ±5 %, rated 0.25 W"},
	{"inductor", "inductor NAME = VALUE in H", "v = L·di/dt. Options: initially in A, rated in A (peak).", "inductor Lw = 120 mH ±10 %, initially 0.2 A"},
	{"capacitor", "capacitor NAME = VALUE in F", "i = C·dv/dt. Options: initially in V, rated in V (peak).", "capacitor Cs = 220 nF ±10 %, rated 250 V"},
	{"impedance", "impedance NAME = EXPR in s, Ω", "v = Z(s)·i, Z rational in s.", "impedance Zw = 6.1 Ω + s*0.85 mH"},
	{"admittance", "admittance NAME = EXPR in s, S", "i = Y(s)·v, Y rational in s.", "admittance Yc = s*10 nF + 1/(1 MΩ)"},
	{"voltage source", "voltage source NAME = WAVEFORM or LAW, V", "Prescribes its voltage, left node minus right: a function of t, or a linear law in v[…] and i[…] with coefficients that may be rational in s.", "voltage source Vs = 5 V * u(t)"},
	{"current source", "current source NAME = WAVEFORM or LAW, A", "Prescribes its current, left to right through it: a function of t, or a linear law in v[…] and i[…].", "current source Ipd = 10 µA * u(t)"},
	{"op amp", "op amp NAME = ideal or GAIN-BANDWIDTH", "ideal: the inputs are at one voltage and take no current. With a gain-bandwidth product in Hz or rad/s: one pole; gain is the DC gain, a level or a ratio. The output returns to the reference.", "op amp U1 = 8 MHz, gain 106 dB, + at a, - at out, output at out"},
	{"transformer", "transformer NAME = N : M {: K}", "Ideal: winding voltages are in the ratio of the turns, ampere-turns sum to zero.", "transformer T1 = 10 : 1, primary at a hull, secondary at b c"},
	{"coupling", "coupling NAME = k or M, between INDUCTOR INDUCTOR", "Couples two inductors: a coefficient between −1 and 1, or a mutual inductance in H. The dots are at the left nodes.", "coupling core = 0.98, between Lp Ls"},
	{"switch", "switch NAME = opens|closes at TIME, …", "Before its first event it is in the opposite state. Option: resistance in Ω when closed.", "switch S1 = closes at 1 ms, opens at 3 ms"},
	{"wire", "wire NAME: an ideal connection", "Joins its nodes; its current can be asked.", "wire link"},
	{"ideal", "ideal: an op amp without limits", "Infinite gain and bandwidth, no input current.", "op amp U1 = ideal, + at a, - at b, output at out"},
	{"rated", "rated X: what the part stands", "W: mean power of a resistor; V: peak voltage of a resistor or capacitor; A: peak current of an inductor.", "resistor R1 = 330 Ω, rated 0.25 W"},
	{"initially", "initially X: the value at t = 0−", "The voltage of a capacitor or the current of an inductor.", "capacitor C1 = 1 µF, initially 12 V"},
	{"resistance", "resistance X: of a closed switch", "Ω; a switch without it is ideal.", "switch S1 = closes at 0 s, resistance 5 mΩ"},
	{"between", "between INDUCTOR INDUCTOR", "The two inductors that a coupling joins.", "coupling core = 0.98, between Lp Ls"},
	{"primary", "primary at NODE NODE", "The first winding of a transformer, its dotted end first.", "transformer T1 = 10 : 1, primary at a hull, secondary at b c"},
	{"secondary", "secondary at NODE NODE", "A further winding of a transformer, its dotted end first; again for more.", "transformer T1 = 10 : 1 : 1, primary at a hull, secondary at b c, secondary at d c"},
	{"output", "output at NODE", "The output of an op amp.", "op amp U1 = ideal, + at a, - at out, output at out"},
	{"opens", "opens at TIME", "A switch that is closed before.", "switch S1 = opens at 0 s"},
	{"closes", "closes at TIME", "A switch that is open before.", "switch S1 = closes at 1 ms"},
	{"at", "at X: one frequency or instant", "At a jump, the value just after; before T is the value just before.", "tell z[valve] at 1 kHz"},
	{"before", "before T: the left limit", "The value just before an instant.", "tell v[coil] before 0 s"},
	{"from", "from X [to Y]: a range of frequency or time", "Without an end the range is open.", "tell H from 20 Hz to 20 kHz"},
	{"to", "to Y: up to", "The end of a range.", "tell v[coil] to 20 ms"},
	{"with", "with: a switch's state, or parameters", "with S1 closed fixes a switch for a question in s; after a subnetwork it gives parameters.", "tell z[valve] with S1 closed"},
	{"without", "without PART, …: parts taken out", "The question is answered for the network without them.", "tell z[valve] without Rs"},
	{"nominal", "nominal: tolerances left out", "The limit must hold for the nominal values only.", "require gain(H) <= 3 dB nominal"},
	{"in", "in Hz, in rad/s: a conversion", "Says or changes the kind of a frequency.", "tell H at w0 in rad/s"},
	{"initial", "tell initial: the state at t = 0", "Every capacitor voltage and inductor current at 0− and 0+.", "tell initial"},
	{"poles", "poles [of H]", "All natural frequencies of the network, or the poles of a function, with multiplicity.", "tell poles of H"},
	{"zeros", "zeros of H", "The zeros of a function, with multiplicity.", "tell zeros of H"},
	{"matrix", "matrix SET[PORT,PORT]", "The two-port matrix z, y, h, g, abcd or s; currents flow into the + terminals. s needs a reference resistance.", "tell matrix s[in,out] reference 50 Ω"},
	{"reference", "reference R", "The reference resistance of scattering parameters, the same at both ports.", "tell matrix s[in,out] reference 50 Ω"},
	{"thevenin", "thevenin[PORT]", "The open-circuit voltage of a port and the impedance behind it.", "tell thevenin[valve]"},
	{"norton", "norton[PORT]", "The short-circuit current of a port and the impedance beside it.", "tell norton[valve]"},
	{"v", "v[NODE], v[NODE,NODE], v[PART], v[PORT]: a voltage", "To the reference, between nodes, of a part (left minus right), of a port.", "tell v[coil]"},
	{"i", "i[PART], i[PORT], i[U1.output]: a current", "Through a part from left to right, into a port or a terminal.", "tell i[Lw]"},
	{"z", "z[NODE], z[NODE,NODE], z[PORT], z[PART]: an impedance", "Independent sources zero; of a part, what the rest of the network shows to it. The source that drives a port is left out of z[PORT].", "tell z[valve] at 1 kHz"},
	{"y", "y[…]: an admittance", "The reciprocal of z[…].", "tell y[valve] at 1 kHz"},
	{"p", "p[PART]: power absorbed", "v·i of a part, a signal in time.", "tell p[Rs]"},
	{"s", "s: the complex frequency", "In rad/s, unit 1/s.", "impedance Z1 = 5 Ω + 2 mH * s"},
	{"t", "t: the time", "In seconds; sources are functions of it.", "voltage source Vs = 2 V * exp(-t/3 ms) * u(t)"},
	{"pi", "pi: 3.14159…", "Carried exactly: rational multiples of it stay such.", "let w0 = 2*pi*f0"},
	{"because", "because \"reason\"", "Why a finding is accepted.", "allow floating-node because \"test pad\""},
	{"E3", "E3: 3 values a decade", "IEC 60063, for tolerances above 20 %.", "prefer capacitor E3"},
	{"E6", "E6: 6 values a decade", "IEC 60063, made for ±20 %.", "prefer capacitor E6"},
	{"E12", "E12: 12 values a decade", "IEC 60063, made for ±10 %.", "prefer inductor E12"},
	{"E24", "E24: 24 values a decade", "IEC 60063, made for ±5 %.", "prefer resistor E24"},
	{"E48", "E48: 48 values a decade", "IEC 60063, made for ±2 %.", "prefer resistor E48"},
	{"E96", "E96: 96 values a decade", "IEC 60063, made for ±1 %.", "prefer resistor E96"},
	{"E192", "E192: 192 values a decade", "IEC 60063, made for ±0.5 % and less.", "prefer resistor E192"},
	{"gain", "gain(H), or the option gain X of an op amp", "The magnitude |H(jω)|, in the unit of H; compared with a level it becomes 20·log10 of it. After an op amp: its gain at DC, a level or a ratio.", "tell gain(H) at 1 kHz"},
}
