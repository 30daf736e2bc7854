package dialect

// networkExplanations are the codes that the analysis reports.
var networkExplanations = []Explanation{
	{
		Code: "floating-node", Severity: Warning, Analysis: true,
		Title:   "A node with one connection",
		Meaning: "Only one terminal is connected to the node, so no current can flow there. Often the name is a misspelling of another node.",
		Mend:    "Connect it, correct its name, or say with a port that the node is meant to be open.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF || resistor Rload = 1 kΩ]- hull
rail -[resistor Rprobe = 1 kΩ]- probe
`,
	},
	{
		Code: "floating-island", Severity: Error, Analysis: true,
		Title:   "Parts without a connection to the rest",
		Meaning: "These nodes have no path to the reference node, so their voltages against it are not determined. An island reached through a transformer or a coupling is allowed: differences inside it are answered, voltages to the reference refused.",
		Mend:    "Connect the island to the rest, if only through a large resistor.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
lamp -[resistor Rlamp = 100 Ω || capacitor Clamp = 1 µF]- lamp_return
`,
	},
	{
		Code: "no-dc-path", Severity: Information, Analysis: true,
		Title:   "A node without a path for direct current",
		Meaning: "Only capacitors and current sources lead to this part of the network, so its voltage at rest depends on the charge it happens to hold.",
		Mend:    "Add a resistor to the reference, or give the initial voltages of the capacitors.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω || capacitor Cin = 1 nF]- mid -[resistor Rmid = 100 Ω]- hull
mid -[capacitor C1 = 10 nF]- sense -[capacitor C2 = 10 nF]- hull
tell v[sense] at 1 ms
`,
	},
	{
		Code: "no-steady-state", Severity: Error, Analysis: true,
		Title:   "No steady state to start from",
		Meaning: "start steady asks for the state that constant and sinusoidal sources reach when they have acted for ever. Here a source is of another kind, or a loop or cutset has no steady state or more than one.",
		Mend:    "Write start rest, give the free initial values with initially, or add the resistance that the real network has.",
		Example: `ground hull
start steady
voltage source Vbat = 12 V
inductor Lfeed = 1 mH
supply -[Vbat]- hull
supply -[Lfeed]- hull
`,
	},
	{
		Code: "voltage-loop", Severity: Error, Analysis: true,
		Title:   "A loop of voltage sources",
		Meaning: "Sources that prescribe voltages (wires and closed switches among them) form a loop. Their sum around it is fixed, so they contradict each other, or the current around the loop is not determined.",
		Mend:    "Add the resistance that one of them has.",
		Example: `ground hull
voltage source Vbat = 12 V
voltage source Vaux = 12 V
supply -[Vbat]- hull
supply -[Vaux]- hull
supply -[resistor Rload = 100 Ω]- hull
`,
	},
	{
		Code: "current-cutset", Severity: Error, Analysis: true,
		Title:   "A cutset of current sources",
		Meaning: "Only parts that prescribe currents (open switches among them) lead into a part of the network. Their sum is fixed, so they contradict each other, or the voltage across them is not determined.",
		Mend:    "Add the parallel resistance that one of them has.",
		Example: `ground hull
current source Iled = 20 mA
current source Ibias = 1 mA
hull -[Iled]- node -[Ibias]- far -[resistor Rload = 100 Ω]- hull
`,
	},
	{
		Code: "capacitor-loop", Severity: Hint, Analysis: true,
		Title:   "A loop of capacitors and voltage sources",
		Meaning: "The voltages around the loop sum to zero, so one of the capacitor voltages follows from the others: the order of the network is lower than the number of capacitors and inductors, and the initial values are tied.",
		Mend:    "Nothing need be done. If the initial values conflict, charge is shared in an impulse, which is reported.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- rail
rail -[capacitor C1 = 1 µF]- mid -[capacitor C2 = 2.2 µF]- hull
rail -[capacitor C3 = 3.3 µF || resistor Rload = 1 kΩ]- hull
mid -[resistor Rmid = 100 Ω]- hull
`,
	},
	{
		Code: "inductor-cutset", Severity: Hint, Analysis: true,
		Title:   "A cutset of inductors and current sources",
		Meaning: "The currents into a part of the network sum to zero, so one of the inductor currents follows from the others: the order of the network is lower than the number of capacitors and inductors, and the initial values are tied.",
		Mend:    "Nothing need be done. If the initial values conflict, flux is shared in an impulse, which is reported.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- rail -[inductor L1 = 1 mH]- star
star -[inductor L2 = 2.2 mH]- hull
star -[inductor L3 = 3.3 mH]-[resistor Rarm = 10 Ω]- hull
`,
	},
	{
		Code: "initial-conflict", Severity: Warning, Analysis: true,
		Title:   "Initial values that cannot stand",
		Meaning: "At t = 0, or when a switch turns, capacitor voltages around a loop or inductor currents into a cutset do not sum to what they must. Charge and flux are conserved: the values jump, and an impulse of the weight given flows.",
		Mend:    "Give initial values that agree, or add the resistance that limits the surge.",
		Example: `ground hull
capacitor Cbus = 100 µF, initially 12 V
capacitor Crail = 47 µF
bus -[Cbus || resistor Rbleed = 10 kΩ]- hull
bus -[switch S1 = closes at 1 ms]- rail
rail -[Crail || resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "singular", Severity: Error, Analysis: true,
		Title:   "Equations that contradict or repeat each other",
		Meaning: "The wiring is sound, but values cancel exactly so that the network's equations have no solution or more than one: a dependent source that undoes a conductance, a gain of exactly one that feeds itself.",
		Mend:    "The equations at fault are named. A real network has a resistance or a gain that differs a little; write it.",
		Example: `ground hull
current source Isense = 1 mA * u(t)
hull -[Isense]- sense
sense -[resistor Rin = 100 Ω]- hull
sense -[current source cancelling = -10 mS * v[sense]]- hull
`,
	},
	{
		Code: "no-feedback", Severity: Error, Analysis: true,
		Title:   "An ideal op amp without feedback",
		Meaning: "An ideal op amp holds its two inputs at one voltage by whatever output that takes. Here its output cannot influence its inputs, or two outputs are tied together, so there is no such output.",
		Mend:    "Close the feedback path, or give the op amp a gain-bandwidth product and a gain.",
		Example: `ground hull
voltage source Vsense = 1 V * u(t)
sense -[Vsense]- hull
op amp U1 = ideal, + at sense, - at tap, output at out
sense -[resistor Rtop = 10 kΩ]- tap -[resistor Rbottom = 10 kΩ]- hull
out -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "unstable", Severity: Warning, Analysis: true,
		Title:   "An unstable network",
		Meaning: "A natural frequency has a positive real part, or a repeated one lies on the imaginary axis: a disturbance grows without limit.",
		Mend:    "Check the signs of feedback and of dependent sources.",
		Example: `ground hull
allow touch-voltage because "the supplies bound the output"
voltage source Vsense = 1 V * u(t)
in -[Vsense]- hull
in -[resistor Rin = 10 kΩ]- tap -[resistor Rback = 10 kΩ]- out
op amp U1 = 1 MHz, gain 100 dB, + at tap, - at hull, output at out
out -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "hidden-mode", Severity: Hint, Analysis: true,
		Title:   "A natural frequency that a function does not show",
		Meaning: "The network has a natural frequency that cancels in this function: it is excited or observed elsewhere, but a measurement of this function would not reveal it.",
		Mend:    "Nothing need be done; watch the quantity it belongs to.",
		Example: `ground hull
voltage source Vcal = 1 V * u(t)
cal -[Vcal]- hull
cal -[resistor R1 = 1 kΩ]- left -[capacitor C1 = 1 µF]- hull
cal -[resistor R2 = 1 kΩ]- right -[capacitor C2 = 1 µF]- hull
left -[resistor Rbridge = 1 kΩ]- right
function H = v[left]/Vcal
tell H
`,
	},
	{
		Code: "rating-exceeded", Severity: Warning, Analysis: true,
		Title:   "A rating is exceeded",
		Meaning: "The mean power of a resistor, the peak voltage of a capacitor or resistor, or the peak current of an inductor is above what the part is rated for.",
		Mend:    "Choose a part with a higher rating, or change the network.",
		Example: `ground hull
start steady
voltage source Vbat = 12 V
supply -[Vbat]- hull
supply -[resistor Rload = 100 Ω, rated 0.25 W]- hull
`,
	},
	{
		Code: "stored-energy", Severity: Warning, Analysis: true,
		Title:   "Dangerous stored energy",
		Meaning: "A part holds 20 J or more, the hazardous energy level of IEC 60950-1, or a node stays above 60 V after the sources are taken away; the time it needs to fall below is given. Local codes and licensed practice decide.",
		Mend:    "Add a bleeder, an interlock, a warning. Accept it with allow stored-energy because \"…\" where it is meant.",
		Example: `ground hull
capacitor Cbank = 47 mF, initially 48 V
bank -[Cbank || resistor Rbleed = 1 kΩ]- hull
`,
	},
	{
		Code: "touch-voltage", Severity: Warning, Analysis: true,
		Title:   "Dangerous voltage",
		Meaning: "A node's voltage to the reference exceeds 60 V DC or 30 V AC rms, the limits of class ES1 in IEC 62368-1, for good or for a while. Local codes and licensed practice decide.",
		Mend:    "Enclose it. Accept it with allow touch-voltage because \"…\" where it is meant.",
		Example: `ground hull
start steady
voltage source Vmast = 110 V
mast -[Vmast]- hull
mast -[resistor Rheater = 2.2 kΩ]- hull
`,
	},
	{
		Code: "limit-broken", Severity: Error, Analysis: true,
		Title:   "A limit does not hold",
		Meaning: "The require line is not met by the nominal values. The message says where it is broken worst, and by how much.",
		Mend:    "Change the network, or the limit.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
require peak(v[rail]) <= 10 V
`,
	},
	{
		Code: "limit-broken-in-tolerance", Severity: Warning, Analysis: true,
		Title:   "A limit holds, but not for every value in tolerance",
		Meaning: "The nominal network meets the require line; with some values inside the tolerances given it does not. The values are named.",
		Mend:    "Narrow the tolerances, change the nominal values, or write nominal after the limit when only those matter.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rtop = 10 kΩ ±5 %]- rail -[resistor Rbottom = 10 kΩ ±5 %]- hull
require final(v[rail]) <= 6.1 V
`,
	},
	{
		Code: "limit-undecided", Severity: Information, Analysis: true,
		Title:   "A limit could not be decided",
		Meaning: "The limit is met or missed by less than what the answer is known to, or it could not be worked out in the time allowed. The margin is given.",
		Mend:    "Leave more room in the limit, or ask about a shorter range.",
		Example: `ground hull
voltage source Vcal = 1 V * u(t)
cal -[Vcal]- hull
cal -[resistor R1 = 1 kΩ]- out -[capacitor C1 = 1 µF]- hull
function H = v[out]/Vcal
require gain(H) <= sqrt(0.5) at 1000 rad/s
`,
	},
}
