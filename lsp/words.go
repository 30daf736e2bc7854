package lsp

// wordDocs says of each word of the notation what it is, for completion.
// Hovers say more.
var wordDocs = map[string]string{
	"ground":     "Names the reference node. Without one, only differences of voltages can be asked.",
	"let":        "Names a constant.",
	"port":       "Names a node pair, the + side first.",
	"function":   "Names a network function, rational in s: a response over an excitation.",
	"tell":       "Asks a question; the answer stands behind it.",
	"require":    "States a limit that must hold, or a fact.",
	"start":      "The state before t = 0: at rest, or the steady state of the standing sources.",
	"prefer":     "The series of preferred values (IEC 60063) that a kind of part should keep to.",
	"allow":      "Accepts a finding in this file, with the reason.",
	"use":        "Brings in the constants and subnetworks of another file.",
	"subnetwork": "Defines a network with terminals, to be used as a part.",
	"part":       "Uses a subnetwork.",

	"resistor": "A resistance in Ω.", "inductor": "An inductance in H.", "capacitor": "A capacitance in F.",
	"impedance": "A rational expression in s, in Ω.", "admittance": "A rational expression in s, in S.",
	"voltage source": "A waveform in V, or a linear expression in other voltages and currents.",
	"current source": "A waveform in A, or a linear expression in other voltages and currents.",
	"op amp":         "An operational amplifier: ideal, or with a gain-bandwidth product.",
	"transformer":    "An ideal transformer, by its turns ratio.",
	"coupling":       "The coupling coefficient or mutual inductance of two inductors; the dots are at their left nodes.",
	"switch":         "Opens and closes at given times.",
	"wire":           "An ideal connection whose current can be asked.",

	"rated":      "A limit of the part: mean power, or peak voltage or current.",
	"initially":  "The voltage of a capacitor or the current of an inductor just before t = 0.",
	"gain":       "The open-loop gain at DC.",
	"resistance": "The resistance when closed.",
	"between":    "The two inductors that are coupled.",
	"primary":    "The nodes of the first winding.",
	"secondary":  "The nodes of a further winding.",
	"output":     "The node of the output.",

	"at": "At a frequency or a time; at a jump, just after it.", "before": "Just before a time.",
	"from": "Over a range of frequency or time.", "to": "Up to a frequency or a time.",
	"with": "With a switch held open or closed.", "without": "With parts taken out.",
	"nominal": "Leaves tolerances out of a limit.",

	"poles":   "The natural frequencies of the network, or the poles of a function.",
	"zeros":   "The zeros of a function.",
	"initial": "Every capacitor voltage and inductor current just before and just after t = 0.",
	"matrix":  "A two-port parameter set.",
	"pi":      "The number π.",
	"s":       "The complex frequency.",
	"t":       "The time.",
}
