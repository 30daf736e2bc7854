package dialect

// valueExplanations are the codes of units, values and expressions.
var valueExplanations = []Explanation{
	{
		Code: "unit-mismatch", Severity: Error,
		Title:   "The unit does not fit",
		Meaning: "Every quantity carries its dimension, and every place knows the one it needs. Here they differ: a value in henries on a capacitor, a sum of ohms and siemens, a level in dB beside a voltage.",
		Mend:    "Correct the unit or the formula. Conductance to resistance is 1/(10 mS); a level to a ratio is 10^(G/(20 dB)).",
		Example: `ground hull
port source at supply hull
supply -[capacitor Crail = 10 mH || resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "unit-missing", Severity: Error,
		Title:   "A number without its unit",
		Meaning: "Where a quantity with a dimension is needed a bare number says too little: 10 could be 10 Ω or 10 kΩ, 1000 could be in Hz or in rad/s.",
		Mend:    "Add the unit.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47]- hull
`,
	},
	{
		Code: "unit-unknown", Severity: Error,
		Title:   "Not a unit of the notation",
		Meaning: "The symbol after the number is no unit, or its prefix is none: prefixes are case-sensitive, k is kilo, K is not; two prefixes in a row are not allowed.",
		Mend:    "Use V A Ω S H F W J C Wb s Hz rad deg ° % ppm dB with an SI prefix where it takes one.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Kohm]- hull
`,
	},
	{
		Code: "prefix-suspect", Severity: Warning,
		Title:   "A prefix that was probably not meant",
		Meaning: "The value can be computed with, but no such part is made (10 PF is ten petafarad), or it is so far from the resistors beside it that another prefix was probably meant (mΩ for MΩ or kΩ), or it is a capacitor in plain farads that those resistors would take hours to charge.",
		Mend:    "Write the prefix that is meant. If the value is right, accept the finding: allow prefix-suspect because \"…\".",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 PF || resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "frequency-kind", Severity: Error,
		Title:   "Hertz or radians per second?",
		Meaning: "A frequency is in Hz or in rad/s, and the two differ by 2π. Here it is not said which (a plain 1/s), two kinds are added without a conversion, or a sine is given cycles where it takes an angle.",
		Mend:    "Say which: f0 in Hz, w0 in rad/s; write sin(2*pi*f*t) for a frequency f in Hz.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω || capacitor Crail = 10 µF]- hull
tell z[source] at 1000 1/s
`,
	},
	{
		Code: "level-missing", Severity: Warning,
		Title:   "A magnitude compared with a negative number",
		Meaning: "gain(H), and abs of a function, is a magnitude: a ratio that is never negative. A limit with a negative plain number always holds or never does. A level in dB was probably meant.",
		Mend:    "Write the unit of the level: gain(H) >= -3 dB.",
		Example: `ground hull
voltage source Vs = 1 V * u(t)
supply -[Vs]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
function H = v[rail]/Vs
require gain(H) >= -3 to 100 Hz
`,
	},
	{
		Code: "not-dimensionless", Severity: Error,
		Title:   "A function that takes plain numbers",
		Meaning: "exp, log, sin, cos and dB are defined for plain numbers (the sine and cosine for angles too), and an exponent is one. The exponential of 2 V has no meaning.",
		Mend:    "Divide by a quantity of the same unit: exp(-t/3 ms), dB(v/(1 V)).",
		Example: `ground hull
port source at supply hull
let ratio = exp(2 V)
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "not-constant", Severity: Error,
		Title:   "Not a constant",
		Meaning: "The value of a part, an option or a qualifier is one number. It cannot depend on s, on t or on quantities of the network. Sources take t, impedances and functions take s.",
		Mend:    "Use a constant here, or the kind of part that takes what is written: an impedance, a source, a dependent source.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω * (1 + t/1 s)]- hull
`,
	},
	{
		Code: "no-value", Severity: Error,
		Title:   "The expression has no value",
		Meaning: "A division by zero, the root or logarithm of a negative number, or a number beyond what is read (about 1e±400) or computed with.",
		Mend:    "Correct the expression.",
		Example: `ground hull
port source at supply hull
let share = 1/(2 - 2)
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "not-positive", Severity: Error,
		Title:   "The value must be positive",
		Meaning: "Resistances, inductances and capacitances are greater than zero, and so are ratings, gain-bandwidth products and numbers of turns; times and frequencies are not negative.",
		Mend:    "For a short circuit use a wire, for an open one leave the part out; a negative resistance is a dependent source, -50 Ω * i[…].",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = -47 Ω]- hull
`,
	},
	{
		Code: "tolerance", Severity: Error,
		Title:   "A tolerance that cannot be",
		Meaning: "Resistors, inductors, capacitors and couplings carry tolerances, as a percentage or an amount in the value's unit. The lowest value they allow must still be positive.",
		Mend:    "Correct the tolerance, or remove it.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω ±120 %]- hull
`,
	},
	{
		Code: "transformer-ratio", Severity: Error,
		Title:   "Turns and windings do not match",
		Meaning: "A transformer's value gives one number of turns for each winding, the primary first: 10 : 1, or 10 : 1 : 1 with two secondaries.",
		Mend:    "Give as many numbers as there are windings.",
		Example: `ground hull
port source at supply hull
transformer T1 = 10 : 1, primary at supply hull, secondary at low hull, secondary at aux hull
low -[resistor Rlow = 10 Ω]- hull
aux -[resistor Raux = 10 Ω]- hull
`,
	},
	{
		Code: "coupling-range", Severity: Error,
		Title:   "A coupling beyond the possible",
		Meaning: "The coefficient k of two inductors lies between −1 and 1, their mutual inductance within ±√(L1·L2), and all couplings of a set together must leave the stored energy positive for every set of currents. Otherwise the inductors could deliver energy for ever.",
		Mend:    "Correct the value. The dots are at the left nodes of the inductors; a negative value turns one over.",
		Example: `ground hull
port source at supply hull
supply -[inductor Lp = 1 mH]- hull
coil -[inductor Ls = 1 mH || resistor Rcoil = 1 kΩ]- hull
coupling core = 1.2, between Lp Ls
`,
	},
	{
		Code: "switch-order", Severity: Error,
		Title:   "The turns of a switch are out of order",
		Meaning: "The events of a switch follow one another in time, and opening and closing take turns.",
		Mend:    "Put them in order of time and leave out what changes nothing.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
supply -[switch S1 = closes at 2 ms, opens at 1 ms]- rail -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "not-rational", Severity: Error,
		Title:   "Not rational in s",
		Meaning: "An impedance, an admittance, a coefficient and a network function are quotients of polynomials in s: sums, products, quotients and whole powers of s and constants. Roots, magnitudes and exponentials are not.",
		Mend:    "Write it as a quotient of polynomials; ask for the magnitude with gain(H) in tell and require.",
		Example: `ground hull
port source at supply hull
supply -[impedance Zcable = 1 Ω * sqrt(s*1 ms)]- hull
`,
	},
	{
		Code: "not-linear", Severity: Error,
		Title:   "Not linear",
		Meaning: "The networks here are linear: a dependent source is a sum of v[…] and i[…] with constant coefficients or coefficients rational in s. Products of quantities, waveforms beside quantities, abs, min and max are not; nor can a signal with abs in it be split by superposition.",
		Mend:    "Write a linear law; put an independent part into a source of its own, in series or in parallel.",
		Example: `ground hull
port source at sense hull
sense -[resistor Rin = 1 MΩ]- hull
voltage source square = 1 1/V * v[sense] * v[sense]
out -[square]- hull
out -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "waveform", Severity: Error,
		Title:   "Not a waveform that has a closed form",
		Meaning: "A source is made of constants, steps u(t - T), impulses delta(t - T), whole powers of t, exp, sin and cos of expressions linear in t, their sums and products. Steps and impulses act at t = 0 or later.",
		Mend:    "Write it with these. A ramp that levels off is a difference of two delayed ramps; a pulse is u(t) - u(t - T).",
		Example: `ground hull
voltage source Vchirp = 1 V * sin((t/1 ms)^2)
cal -[Vchirp]- hull
cal -[resistor Rcal = 1 kΩ]- hull
`,
	},
	{
		Code: "function-form", Severity: Error,
		Title:   "Not the form of a network function",
		Meaning: "A network function is RESPONSE/EXCITATION, such as v[out]/Vs or v[out]/i[in], an impedance or admittance, or made of such functions and numbers. Responses are voltages and currents; products of two of them, a response divided by nothing and measures have no place in it.",
		Mend:    "Divide each response by its excitation; ask measures of the function in tell and require.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
function H = v[rail]
`,
	},
	{
		Code: "not-an-excitation", Severity: Error,
		Title:   "Not an excitation",
		Meaning: "A function says how the network answers to one cause, with every other source zero. The cause is an independent source, a voltage or current at a port, or a node pair across which exactly one voltage source stands.",
		Mend:    "Divide by the source's name, or define a port where the network is driven.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[resistor Rline = 100 Ω]- far -[capacitor Crail = 10 µF]- hull
function H = v[far]/v[rail]
`,
	},
	{
		Code: "signal-product", Severity: Error,
		Title:   "A product of signals",
		Meaning: "In tell and require v, i and p are signals in time. They add, scale by numbers and go into abs, min and max, but they are not multiplied.",
		Mend:    "The power absorbed by a part is p[PART], its energy energy(PART).",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
tell v[rail]*i[Crail]
`,
	},
	{
		Code: "signal-quotient", Severity: Error,
		Title:   "A quotient of signals",
		Meaning: "In tell and require v and i are signals in time, and the quotient of two signals is no network function: that is the quotient of their transforms.",
		Mend:    "Define function H = v[out]/Vs and ask for H.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
tell v[rail]/v[supply]
`,
	},
	{
		Code: "mixed-worlds", Severity: Error,
		Title:   "A function of s beside a signal in time",
		Meaning: "z, y and functions depend on s, voltages and currents in tell and require on time. A sum or product of the two has no meaning.",
		Mend:    "Ask for one or the other; the response of a function to a source is the signal itself.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
tell z[rail] * i[Rfeed]
`,
	},
	{
		Code: "not-real", Severity: Error,
		Title:   "Complex values have no order",
		Meaning: "A function of s is complex at a frequency, so it cannot be compared, and min and max do not take it.",
		Mend:    "Compare gain(H) or abs(z[…]), phase(H), real(H) or imag(H).",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω || capacitor Crail = 10 µF]- hull
require z[source] <= 50 Ω
`,
	},
	{
		Code: "open-port", Severity: Error,
		Title:   "The current of an open port",
		Meaning: "Outside functions a port that no source stands across is open, so the current into it is zero.",
		Mend:    "norton[PORT] gives the short-circuit current, matrix y the currents of driven ports; or set a source across the port.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
tell i[source]
`,
	},
	{
		Code: "no-ground", Severity: Error,
		Title:   "No reference node",
		Meaning: "v[NODE] and z[NODE] are against the reference node, and the output of an op amp returns to it, but the file names none.",
		Mend:    "Write ground NODE, or ask for differences, v[a,b].",
		Example: `voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
tell v[rail]
`,
	},
	{
		Code: "not-preferred", Severity: Information,
		Title:   "Not a preferred value",
		Meaning: "The value is not in the series of IEC 60063 that the file prefers for this kind, or that suits the tolerance given (E24 for 5 % and more, E48, E96 or E192 beside E24 for less), so it is probably not made.",
		Mend:    "Take one of the neighbours. The resistance of a winding next to its inductor is left alone.",
		Example: `ground hull
prefer resistor E12
port source at supply hull
supply -[resistor Rfeed = 50 Ω]- hull
`,
	},
}
