package dialect

// answerFrame is the network that refused questions are shown with: a low-pass
// behind a source, and a lossless tank.
const answerFrame = `ground hull
voltage source Vcal = 1 V * u(t)
cal -[Vcal]- hull
cal -[resistor R1 = 1 kΩ]- out -[capacitor C1 = 1 µF]- hull
cal -[inductor L1 = 1 mH]- tank -[capacitor C2 = 1 nF]- hull
port p at out hull
function H = v[out]/Vcal
function T = v[tank]/Vcal
function zero = H - H
`

// answerExplanations are the codes of refused answers that are no findings of
// their own: a question that is well formed, but has no answer.
var answerExplanations = []Explanation{
	{
		Code: "frequency-missing", Severity: Error, Analysis: true, Example: answerFrame, Question: "gain(H)",
		Title:   "At which frequency?",
		Meaning: "What is asked depends on frequency, and no frequency or range is given.",
		Mend:    "Add at 1 kHz, or from 10 Hz to 1 kHz.",
	},
	{
		Code: "time-missing", Severity: Error, Analysis: true,
		Title:   "At which time?",
		Meaning: "What is asked depends on time, and no instant is given.",
		Mend:    "Add at 2 ms.",
	},
	{
		Code: "place-missing", Severity: Error, Analysis: true,
		Title:   "At which frequency or time?",
		Meaning: "What is asked depends on frequency or time, and neither is given.",
		Mend:    "Add at 1 kHz or at 2 ms.",
	},
	{
		Code: "range-open", Severity: Error, Analysis: true, Example: answerFrame, Question: "H from 10 Hz",
		Title:   "A table needs an end",
		Meaning: "A table or curve is made between two ends, and one is not given.",
		Mend:    "Add to 10 kHz, or to 20 ms.",
	},
	{
		Code: "range-empty", Severity: Error, Analysis: true,
		Title:   "The range is empty",
		Meaning: "The range ends before it begins, or begins below zero.",
		Mend:    "Give its lower end first.",
	},
	{
		Code: "time-range", Severity: Error, Analysis: true,
		Title:   "Before the beginning",
		Meaning: "Responses are known from t = 0 on; of the time before there is the left limit at 0.",
		Mend:    "Ask before 0 s for the value just before t = 0.",
	},
	{
		Code: "pole-at-frequency", Severity: Error, Analysis: true, Example: answerFrame, Question: "T at 1e6 rad/s",
		Title:   "A pole at exactly this frequency",
		Meaning: "The function has a pole on the imaginary axis at the frequency asked about, so it has no value there: a sinusoid of this frequency would make the response grow without limit.",
		Mend:    "Ask beside it, or add the loss that the real network has.",
	},
	{
		Code: "division-by-zero", Severity: Error, Analysis: true, Example: answerFrame, Question: "1/zero",
		Title:   "Division by zero",
		Meaning: "The divisor is zero, or zero at every frequency.",
		Mend:    "Correct the expression.",
	},
	{
		Code: "zero-function", Severity: Error, Analysis: true, Example: answerFrame, Question: "zeros of zero",
		Title:   "The function is zero everywhere",
		Meaning: "Every point is a zero of it: the excitation does not reach the response at all.",
		Mend:    "Check the wiring between the two.",
	},
	{
		Code: "undefined-measure", Severity: Error, Analysis: true, Example: answerFrame, Question: "quality(T)",
		Title:   "The measure is not defined here",
		Meaning: "The definition of the measure has no value for this function or signal: an overshoot over a final value of zero, a final value of what keeps swinging, the quality factor of a pole without damping.",
		Mend:    "Ask for another measure; the hover of each shows its definition.",
	},
	{
		Code: "no-impedance", Severity: Error, Analysis: true,
		Title:   "No impedance there",
		Meaning: "An impedance is that of two nodes, a port, or a wired part with two terminals.",
		Mend:    "Name a pair of nodes: z[a,b].",
	},
	{
		Code: "no-admittance", Severity: Error, Analysis: true,
		Title:   "No admittance there",
		Meaning: "The impedance is zero, or the two nodes are one, so the admittance is infinite.",
		Mend:    "Ask for the impedance.",
	},
	{
		Code: "no-current", Severity: Error, Analysis: true,
		Title:   "No single current there",
		Meaning: "The part has more than two terminals, or is not in the network.",
		Mend:    "Name the terminal: i[U1.output], i[T1.primary].",
	},
	{
		Code: "not-a-function", Severity: Error, Analysis: true,
		Title:   "Not a network function",
		Meaning: "What is asked has to be rational in s: a response over an excitation, z, y, functions, and sums, products and quotients of them.",
		Mend:    "Define it with function and ask for that.",
	},
	{
		Code: "not-a-signal", Severity: Error, Analysis: true,
		Title:   "Not a signal that can be followed",
		Meaning: "Sums and multiples of voltages, currents and powers, and abs, min and max of them can be followed in time.",
		Mend:    "Ask for one of these.",
	},
	{
		Code: "not-a-source", Severity: Error, Analysis: true,
		Title:   "Not an independent source",
		Meaning: "A share of a response is due to an independent source that is wired into the network.",
		Mend:    "Name such a source: due(v[out], Vs).",
	},
	{
		Code: "not-decided", Severity: Error, Analysis: true,
		Title:   "Not decided",
		Meaning: "The answer hinges on a number that is known only to within a bound, and the bound does not decide it.",
		Mend:    "Ask a little beside the point, or write the values so that they are exact.",
	},
	{
		Code: "same-port", Severity: Error, Analysis: true,
		Title:   "The same port twice",
		Meaning: "A two-port matrix is between two different ports.",
		Mend:    "Name the other port.",
	},
	{
		Code: "reference-missing", Severity: Error, Analysis: true,
		Title:   "Scattering parameters without a reference",
		Meaning: "Scattering parameters are against a reference resistance.",
		Mend:    "Add reference 50 Ω.",
	},
	{
		Code: "value-range", Severity: Error, Analysis: true,
		Title:   "A value that the equations cannot take",
		Meaning: "A part has no value, or one outside its range, because of an error told elsewhere.",
		Mend:    "Mend the other error first.",
	},
}
