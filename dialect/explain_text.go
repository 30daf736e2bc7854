package dialect

// textExplanations are the codes of names, wiring and form.
var textExplanations = []Explanation{
	{
		Code: "syntax", Severity: Error,
		Title:   "The text cannot be read here",
		Meaning: "A word or mark stands where the notation has no place for it, or something is missing. Only this statement is affected: the rest of the file is read as it stands.",
		Mend:    "The message says what was expected, and where the intention is plain it offers the text that was probably meant.",
		Example: `ground hull
supply -[resistor Rfeed = 4.7 kΩ]- hull
supply -[capacitor Cfeed = 1,5 nF]- hull
`,
	},
	{
		Code: "unknown-name", Severity: Error,
		Title:   "The name stands for nothing",
		Meaning: "No part, node, port, function or constant of this name is defined where the name is used. Nodes come into being by being wired; everything else by its own statement. A subnetwork sees the constants of its file, but neither its nodes nor its parts.",
		Mend:    "Correct the spelling (the nearest name is offered), or define what is missing.",
		Example: `ground hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF || resistor Rload = 1 kΩ]- hull
port source at supply hull
tell z[rial] at 1 kHz
`,
	},
	{
		Code: "name-taken", Severity: Error,
		Title:   "The name is taken",
		Meaning: "Nodes, parts, ports, functions, constants and subnetworks of one file or subnetwork share one name space, and files must not bring in names that clash. One exception: a port may bear the name of its + node when its − node is the reference.",
		Mend:    "Give one of the two another name.",
		Example: `ground hull
supply -[resistor Rfeed = 47 Ω]- rail
rail -[resistor Rfeed = 100 Ω]- hull
port source at supply hull
`,
	},
	{
		Code: "case-twins", Severity: Warning,
		Title:   "Two names differ by case alone",
		Meaning: "Names are case-sensitive, so these are two different things. That is allowed, but it is usually a slip, and it is easily misread.",
		Mend:    "Use one spelling if one thing is meant, or two names that differ in more than case.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
Rail -[resistor Rload = 1 kΩ]- hull
Rail -[inductor Ltrap = 1 mH]- rail
`,
	},
	{
		Code: "name-like-unit", Severity: Error,
		Title:   "A unit that is also a name",
		Meaning: "A unit follows its number without spaces, and further units are joined to it by * and /: in 5 V/A the A is the ampere. Here that symbol is also a name of the file that has a value (a constant, a function, a part), so the text could be read both ways.",
		Mend:    "For the name put spaces around the operator, 5 V / A; for the unit write it as a quantity of its own, 5 V/(1 A).",
		Example: `ground hull
let A = 100
voltage source Vcal = 5 V/A
cal -[Vcal]- hull
cal -[resistor Rcal = 1 kΩ]- hull
`,
	},
	{
		Code: "never-wired", Severity: Warning,
		Title:   "A part that no wire reaches",
		Meaning: "The part is defined, but no path leads through it, so it is not in the network.",
		Mend:    "Put it into a path, such as a -[NAME]- b, or remove it.",
		Example: `ground hull
port source at supply hull
resistor Rspare = 47 Ω
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "wired-twice", Severity: Error,
		Title:   "A part or terminal in two places",
		Meaning: "A part stands in one place of the network. Here it, or one terminal of a subnetwork, is connected a second time; or two inductors are coupled twice.",
		Mend:    "Remove one of the two, or define a second part with a name of its own.",
		Example: `ground hull
port source at supply hull
resistor Rfeed = 47 Ω
supply -[Rfeed]- rail -[resistor Rload = 1 kΩ]- hull
supply -[Rfeed]- hull
`,
	},
	{
		Code: "not-two-terminal", Severity: Error,
		Title:   "A part that cannot stand in a box",
		Meaning: "A path leads into a part at one end and out at the other, so only parts with two terminals stand in it. Op amps and transformers name their nodes with at; a coupling has no terminals; a subnetwork with other than two terminals names them.",
		Mend:    "Wire it with its options: + at NODE, - at NODE, output at NODE, or TERMINAL at NODE.",
		Example: `ground hull
port source at sense hull
op amp U1 = ideal, + at sense, - at out, output at out
sense -[U1]- out
sense -[resistor Rin = 1 MΩ]- hull
out -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "self-loop", Severity: Warning,
		Title:   "Both ends at one node",
		Meaning: "The part begins and ends at the same node. Nothing outside it can tell that it is there.",
		Mend:    "Correct one of the two node names, or remove the part.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- supply
supply -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "wrong-sort", Severity: Error,
		Title:   "A name or value of the wrong sort",
		Meaning: "The name or expression is known, but it is not what this place needs: a node where a part is needed, a number where a signal is needed, a function of s where a signal is needed, or the like.",
		Mend:    "The message says what it is and what is needed; often v[…], i[…] or a function is missing around it.",
		Example: `ground hull
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- rail -[resistor Rload = 1 kΩ]- hull
tell rail
`,
	},
	{
		Code: "ground-twice", Severity: Error,
		Title:   "Two reference nodes",
		Meaning: "A file names one reference node: the one that v[NODE] is measured against.",
		Mend:    "Remove one of the two lines. To tie two nodes together, set a wire between them.",
		Example: `ground hull
ground chassis
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- chassis -[resistor Rstrap = 1 Ω]- hull
`,
	},
	{
		Code: "use-cycle", Severity: Error,
		Title:   "A file or subnetwork that uses itself",
		Meaning: "The use leads back to where it started, so there would be no end to it.",
		Mend:    "Take one of the uses out; move what both need into a file of its own.",
		Example: `ground hull
subnetwork Stage (in, out) {
  in -[resistor R = 1 kΩ]- mid
  part Inner = Stage, in at mid, out at out
}
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "file-missing", Severity: Error,
		Title:   "A used file that cannot be read",
		Meaning: "A use statement names a file beside the one it stands in. It is not there, or it cannot be read.",
		Mend:    "Correct the path, or create the file.",
		Example: `ground hull
use "cells.plight"
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "too-large", Severity: Error,
		Title:   "Too large to work out",
		Meaning: "An expression is nested too deeply or spreads to too many terms, an expression in s has too high a degree, or subnetworks that use one another expand to too many parts. The bounds are far above what networks need, and keep a slip from stopping the editor.",
		Mend:    "Write it in smaller pieces.",
		Example: `ground hull
port source at supply hull
supply -[impedance Zcell = 1 Ω * (1 + s*1 ms)^64 * (1 + s*2 ms)^64]- hull
`,
	},
	{
		Code: "cycle", Severity: Error,
		Title:   "A definition that needs itself",
		Meaning: "To work out this constant, value or function, its own value is needed, perhaps through others.",
		Mend:    "Break the circle: give one of them a value of its own.",
		Example: `ground hull
port source at supply hull
let tau = Rfeed * C0
let C0 = tau/(47 Ω)
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "option-missing", Severity: Error,
		Title:   "Something the part cannot do without",
		Meaning: "An op amp needs its three nodes, a transformer a primary and a secondary for each number of turns, a coupling its two inductors, a subnetwork's use a node for each terminal.",
		Mend:    "Add what the message names.",
		Example: `ground hull
port source at sense hull
op amp U1 = ideal, + at sense, output at out
sense -[resistor Rin = 1 MΩ]- hull
out -[resistor Rback = 1 kΩ]- tap -[resistor Rtap = 1 kΩ]- hull
out -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "option-conflict", Severity: Error,
		Title:   "Two statements about a part that contradict each other",
		Meaning: "What the option says cannot be true together with the rest of the statement: an ideal op amp, for one, has no finite gain.",
		Mend:    "Remove one of the two.",
		Example: `ground hull
port source at sense hull
op amp U1 = ideal, gain 100 dB, + at sense, - at out, output at out
sense -[resistor Rin = 1 MΩ]- hull
out -[resistor Rload = 1 kΩ]- hull
`,
	},
	{
		Code: "given-twice", Severity: Error,
		Title:   "Said twice",
		Meaning: "How the network starts, and the series that a kind of part prefers, are said once in a file; a parameter is given once in a use.",
		Mend:    "Remove one of the two.",
		Example: `ground hull
start steady
start rest
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "port-shorted", Severity: Error,
		Title:   "A port with one node",
		Meaning: "Both ends of the port are the same node, so its voltage is always zero and nothing can be asked of it.",
		Mend:    "Name the node that the other side is at.",
		Example: `ground hull
port source at supply supply
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "unknown-code", Severity: Warning,
		Title:   "No finding has this code",
		Meaning: "allow accepts the findings of one code, and there is none of this name.",
		Mend:    "Correct the spelling; each finding shows its code.",
		Example: `ground hull
allow tuch-voltage because "behind the hull's hatch"
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "allow-error", Severity: Warning,
		Title:   "An error cannot be accepted",
		Meaning: "Warnings and hints can be accepted with allow. An error means that there is no right answer, so accepting it would not make one.",
		Mend:    "Remove the line and mend what the error is about.",
		Example: `ground hull
allow unit-mismatch because "looks right to me"
port source at supply hull
supply -[resistor Rfeed = 47 Ω]- hull
`,
	},
	{
		Code: "arguments", Severity: Error,
		Title:   "Wrong number of arguments",
		Meaning: "A function or measure takes a certain number of arguments, which the message shows. Scattering parameters need a reference resistance, zeros a function.",
		Mend:    "Write it in the form shown.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
tell last_above(v[rail])
`,
	},
	{
		Code: "qualifier", Severity: Error,
		Title:   "A qualifier without effect or meaning",
		Meaning: "at, before, from … to, with and without restrict a question or limit. This one does not go with what is asked, is given twice, or names an empty range. A single number, such as a bandwidth, has no frequency at which to take it; a signal follows its switches by itself.",
		Mend:    "Remove it, or ask of the function or signal itself.",
		Example: `ground hull
voltage source Vbat = 12 V * u(t)
supply -[Vbat]- hull
supply -[resistor Rfeed = 47 Ω]- rail -[capacitor Crail = 10 µF]- hull
function H = v[rail]/Vbat
tell bandwidth(H) at 1 kHz
`,
	},
}
