package dialect

// answerFrame is the network that most refused questions are shown with: the
// supply filter of the buoy, a low-pass behind a source.
const answerFrame = `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
function H = v[rail]/Vbat
function nothing = H - H
`

// tankFrame is a resonance without loss.
const tankFrame = `ground hull
voltage source Vcal = 1 V * u(t)
cal -[Vcal]- hull
cal -[inductor Ltank = 1 mH]- tank -[capacitor Ctank = 1 nF]- hull
function H = v[tank]/Vcal
`

// cableFrame is the buoy's cable in lumped sections, eight times as many with
// every level of subnetworks.
const cableFrame = `ground hull
subnetwork Metre (in, out, ref) {
  in -[resistor R = 0.1 Ω]- out -[capacitor C = 100 pF]- ref
}
subnetwork Span (in, out, ref) {
  part A = Metre, in at in, out at m1, ref at ref
  part B = Metre, in at m1, out at m2, ref at ref
  part C = Metre, in at m2, out at m3, ref at ref
  part D = Metre, in at m3, out at m4, ref at ref
  part E = Metre, in at m4, out at m5, ref at ref
  part F = Metre, in at m5, out at m6, ref at ref
  part G = Metre, in at m6, out at m7, ref at ref
  part H = Metre, in at m7, out at out, ref at ref
}
subnetwork Reel (in, out, ref) {
  part A = Span, in at in, out at m1, ref at ref
  part B = Span, in at m1, out at m2, ref at ref
  part C = Span, in at m2, out at m3, ref at ref
  part D = Span, in at m3, out at m4, ref at ref
  part E = Span, in at m4, out at m5, ref at ref
  part F = Span, in at m5, out at m6, ref at ref
  part G = Span, in at m6, out at m7, ref at ref
  part H = Span, in at m7, out at out, ref at ref
}
subnetwork Drum (in, out, ref) {
  part A = Reel, in at in, out at m1, ref at ref
  part B = Reel, in at m1, out at m2, ref at ref
  part C = Reel, in at m2, out at m3, ref at ref
  part D = Reel, in at m3, out at m4, ref at ref
  part E = Reel, in at m4, out at m5, ref at ref
  part F = Reel, in at m5, out at m6, ref at ref
  part G = Reel, in at m6, out at m7, ref at ref
  part H = Reel, in at m7, out at out, ref at ref
}
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
`

// answerExplanations are the codes of refused answers that are no findings of
// their own: a question that is well formed, but has no answer.
var answerExplanations = []Explanation{
	{
		Code: "faults", Severity: Error, Analysis: true, Question: "v[rail] at 1 ms",
		Title:   "The network is not complete",
		Meaning: "Errors reported in the file leave something out of the network: a value, a part, a connection. An answer about what is left would be one about another network.",
		Mend:    "Mend the errors first.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 F]- rail -[capacitor Crail = 10 µF]- hull
`,
	},
	{
		Code: "too-many-modes", Severity: Error, Analysis: true, Question: "poles",
		Title:   "Too many natural frequencies to list",
		Meaning: "The network has more natural frequencies than anyone reads in one answer (400).",
		Mend:    "Ask for the poles of a function, or look at a part of the network with without.",
		Example: cableFrame + `part Cable = Drum, in at supply, out at rail, ref at hull
rail -[resistor Rload = 50 Ω]- hull
`,
	},
	{
		Code: "network-too-large", Severity: Error, Analysis: true, Question: "poles",
		Title:   "Too large for exact answers",
		Meaning: "The polynomials of a network of this size, written exactly, would take longer than anyone waits. Values at a frequency or a time and tables are still answered, in double precision with a bound of their error; closed forms, poles and limits over a range are not.",
		Mend:    "Ask for values at a frequency or a time, or describe the network with fewer sections.",
		Example: cableFrame + `part One = Drum, in at supply, out at j1, ref at hull
part Two = Drum, in at j1, out at j2, ref at hull
part Three = Drum, in at j2, out at j3, ref at hull
part Four = Drum, in at j3, out at j4, ref at hull
part Five = Drum, in at j4, out at j5, ref at hull
part Six = Drum, in at j5, out at j6, ref at hull
part Seven = Drum, in at j6, out at j7, ref at hull
part Eight = Drum, in at j7, out at j8, ref at hull
part Nine = Drum, in at j8, out at j9, ref at hull
part Ten = Drum, in at j9, out at rail, ref at hull
rail -[resistor Rload = 50 Ω]- hull
`,
	},
	{
		Code: "frequency-missing", Severity: Error, Analysis: true, Example: answerFrame, Question: "gain(H)",
		Title:   "At which frequency?",
		Meaning: "What is asked depends on frequency, and neither a frequency nor a range is given.",
		Mend:    "Add at 1 kHz, or from 10 Hz to 1 kHz.",
	},
	{
		Code: "range-open", Severity: Error, Analysis: true, Example: answerFrame, Question: "H from 10 Hz",
		Title:   "A table needs an end",
		Meaning: "A table or curve is made between two ends, and one is not given.",
		Mend:    "Add to 10 kHz, or to 20 ms.",
	},
	{
		Code: "range-empty", Severity: Error, Analysis: true, Example: answerFrame, Question: "v[rail] to 0 s",
		Title:   "The range is empty",
		Meaning: "The range ends where it begins, or before.",
		Mend:    "Give its lower end first.",
	},
	{
		Code: "pole-at-frequency", Severity: Error, Analysis: true, Example: tankFrame, Question: "H at 1e6 rad/s",
		Title:   "A pole at exactly this frequency",
		Meaning: "The function has a pole on the imaginary axis at the frequency asked about, so it has no value there: a sinusoid of this frequency would make the response grow without limit.",
		Mend:    "Ask beside it, or add the loss that the real network has.",
	},
	{
		Code: "division-by-zero", Severity: Error, Analysis: true, Example: answerFrame, Question: "1/nothing",
		Title:   "Division by zero",
		Meaning: "The divisor is zero, or zero at every frequency.",
		Mend:    "Correct the expression.",
	},
	{
		Code: "zero-function", Severity: Error, Analysis: true, Example: answerFrame, Question: "zeros of nothing",
		Title:   "The function is zero everywhere",
		Meaning: "Every point is a zero of it: the excitation does not reach the response at all.",
		Mend:    "Check the wiring between the two.",
	},
	{
		Code: "undefined-measure", Severity: Error, Analysis: true, Example: tankFrame, Question: "quality(H)",
		Title:   "The measure is not defined here",
		Meaning: "The definition of the measure has no value for this function or signal: an overshoot over a final value of zero, a final value of what keeps swinging, the quality factor of a pole without damping.",
		Mend:    "Ask for another measure; the hover of each shows its definition.",
	},
	{
		Code: "no-admittance", Severity: Error, Analysis: true, Example: answerFrame, Question: "y[supply]",
		Title:   "No admittance there",
		Meaning: "The impedance is zero, because a voltage source or a wire holds the two nodes, so the admittance is infinite.",
		Mend:    "Ask for the impedance, or for what the rest shows to the source: y[SOURCE].",
	},
	{
		Code: "no-closed-form", Severity: Error, Analysis: true, Example: answerFrame, Question: "abs(v[rail] - 6 V)",
		Title:   "No closed form over all time",
		Meaning: "The absolute value, the least and the greatest of signals change their form wherever the signals cross, so there is no one list of terms for all time.",
		Mend:    "Ask its value at 1 ms, its course to 10 ms, or a measure such as peak(…).",
	},
	{
		Code: "not-decided", Severity: Error, Analysis: true, Example: answerFrame, Question: "(final(v[rail])/(12 V) - 1)^0.5",
		Title:   "Not decided",
		Meaning: "The answer hinges on a number that is known only to within a bound, and the bound does not decide it; or the computation came to an end without an answer.",
		Mend:    "Ask a little beside the point, or write the values so that they are exact.",
	},
}
