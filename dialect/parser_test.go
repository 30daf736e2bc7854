package dialect

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

// sound are statements that read without a finding, with their trees.
var sound = []struct{ text, want string }{
	// Wiring and names.
	{"in-[R1]-mid-[C1]-gnd", "path in [R1] mid [C1] gnd"},
	{"in -[R1]-[L1]- out", "path in [R1] [L1] out"},
	{"3V3 -[R1]-[R2 || C2]- 12V", "path 3V3 [R1] [R2 || C2] 12V"},
	{"1e-[R1]-0", "path 1e [R1] 0"},
	{"10-[R1]-1e5", "path 10 [R1] 1e5"},
	{"port -[wire]- ground", "path port [wire] ground"},
	{"tell-[resistor R1 = 4k7 ±1 %, rated 1 W || C1]-let", "path tell [resistor R1 code:4k7 ±1·% {rated 1·W} || C1] let"},
	{"a −[R1]− b", "path a [R1] b"},
	{"a -[part C1 = RealCap with ESR = 9 mΩ]- b", "path a [part C1 RealCap {ESR = 9·mΩ}] b"},
	{"a -[wire W1]- b", "path a [wire W1] b"},
	{"ground 0", "ground 0"},
	{"ground hull # the shield", "ground hull"},
	{"port in at in hull", "port in in hull"},
	{"port s at 1 0", "port s 1 0"},

	// Numbers and units.
	{"let x = 2.2", "let x 2.2"},
	{"let x = .5", "let x .5"},
	{"let x = 4.7e-9 F", "let x 4.7e-9·F"},
	{"let x = 4.7e−9 F", "let x 4.7e−9·F"},
	{"let x = 10mH", "let x 10·mH"},
	{"let x = 10\u00a0kohm", "let x 10·kΩ"},
	{"let x = 10\u2009\u2126", "let x 10·Ω"},
	{"let x = 2 \u03bcF", "let x 2·µF"},
	{"let x = 3 V^2", "let x 3·V^2"},
	{"let x = 3 V^-1/ms", "let x 3·V^-1/ms"},
	{"let x = 3 V^a", "let x (^ 3·V a)"},
	{"let x = 3 V ^ 2", "let x (^ 3·V 2)"},
	{"let x = 1000 1/s", "let x 1000·1/s"},
	{"let x = 1000/s", "let x (/ 1000 s)"},
	{"let x = 2 mH*s", "let x 2·mH*s"},
	{"let x = 2 mH * s", "let x (* 2·mH s)"},
	{"let x = 12 V/Ts*t*u(t)", "let x (* (* 12·V/Ts t) (u t))"},
	{"let x = 5 V/ms*t*u(t)", "let x (* (* 5·V/ms t) (u t))"},
	{"let x = 10 Ω/s*1 kHz", "let x (* 10·Ω/s 1·kHz)"},
	{"let x = 2 V*exp(-t/3 ms)*u(t)", "let x (* (* 2·V (exp (/ (- t) 3·ms))) (u t))"},
	{"let x = 3 V*s(t)", "let x (* 3·V (s t))"},
	{"let x = 3 V^2/1 V", "let x (/ 3·V^2 1·V)"},
	{"let x = 30° + 5% + 3 deg/s", "let x (+ (+ 30·° 5·%) 3·deg/s)"},
	{"let x = 60 dBuV - 6 dB", "let x (- 60·dBµV 6·dB)"},
	{"let x = 1e3 rad/s in Hz", "let x (in 1e3·rad/s Hz)"},
	{"let x = (f0 in rad/s)*2", "let x (* <(in f0 rad/s)> 2)"},

	// Operators.
	{"let x = v[a]-v[b]", "let x (- v[a] v[b])"},
	{"let x = -a^b", "let x (- (^ a b))"},
	{"let x = 2^-3^2", "let x (^ 2 (- (^ 3 2)))"},
	{"let x = a/b/c*d", "let x (* (/ (/ a b) c) d)"},
	{"let x = a - b + c", "let x (+ (- a b) c)"},
	{"let x = a +-b*c", "let x (+ a (* (- b) c))"},
	{"let x = a*-b", "let x (* a (- b))"},
	{"let x = max(1,5)", "let x (max 1 5)"},
	{"let x = H(1 kHz)*v[out](2 ms)", "let x (* (H 1·kHz) (v[out] 2·ms))"},
	{"let x = F1.mid + t", "let x (+ F1.mid t)"},

	// Parts.
	{"resistor R1 = 4K7", "resistor R1 code:4K7"},
	{"resistor R1 = 0R47 +-1 %", "resistor R1 code:0R47 ±1·%"},
	{"capacitor C1 = 3p5, initially 1 V, rated 50 V", "capacitor C1 code:3p5 {initially 1·V} {rated 50·V}"},
	{"capacitor C1 = 100n +20 % -10 %", "capacitor C1 code:100n +20·% -10·%"},
	{"inductor L1 = 4µ7", "inductor L1 code:4µ7"},
	{"inductor L1 = 10mH", "inductor L1 10·mH"},
	{"capacitor C1 = 2F", "capacitor C1 2·F"},
	{"resistor R1 = 100 Ω +5 Ω -2 Ω", "resistor R1 (- (+ 100·Ω 5·Ω) 2·Ω)"},
	{"resistor R1 = 100 Ω + 20 Ω ±5 %", "resistor R1 (+ 100·Ω 20·Ω) ±5·%"},
	{"resistor R1 = 1 kΩ * (1 + 5 %)", "resistor R1 (* 1·kΩ <(+ 1 5·%)>)"},
	{"resistor R1 = 100 Ω +50ppm", "resistor R1 100·Ω +50·ppm"},
	{"resistor R1 = R47", "resistor R1 R47"},
	{"op amp U1 = ideal, + at a, - at b, output at c", "op amp U1 ideal {+ a} {- b} {output c}"},
	{"op amp U1 = 8 MHz, gain 106 dB, + at a2, − at o1, output at o1", "op amp U1 8·MHz {gain 106·dB} {+ a2} {- o1} {output o1}"},
	{"transformer T = 10 : 1 : n/2, primary at a b, secondary at c d, secondary at e f", "transformer T 10 : 1 : (/ n 2) {primary a b} {secondary c d} {secondary e f}"},
	{"coupling core = 0.98 +1 % -2 %, between L1 L2", "coupling core 0.98 +1·% -2·% {between L1 L2}"},
	{"switch S = closes at 0 s, opens at T + 2 ms, resistance 5 mΩ", "switch S [closes 0·s][opens (+ T 2·ms)] {resistance 5·mΩ}"},
	{"voltage  source V1 = 1 V * u(t)", "voltage source V1 (* 1·V (u t))"},
	{"wire W1", "wire W1"},

	// Questions and limits.
	{"tell initial", "tell initial?"},
	{"tell initial + 1 V", "tell (+ initial 1·V)"},
	{"tell poles", "tell poles?"},
	{"tell zeros of H*G with S1 closed", "tell zeros? of (* H G) {withS1 closed}"},
	{"tell matrix s[p1,p2] reference 50 Ω", "tell matrix? s[p1,p2] reference 50·Ω"},
	{"tell thevenin[p2]", "tell thevenin[p2]"},
	{"tell v[F1.5] at 1 ms", "tell v[F1.5] {at 1·ms }"},
	{"tell v[F1.3V3,12] before 1 ms", "tell v[F1.3V3,12] {before 1·ms }"},
	{"tell H from 20 Hz to 20 kHz without R1, C2", "tell H {from 20·Hz to 20·kHz } {withoutR1,C2 }"},
	{"tell H at f0 in Hz", "tell H {at (in f0 Hz) }"},
	{"tell v[coil] to 20 ms", "tell v[coil] {to to 20·ms }"},
	{"require gain(H) >= -0.5 dB from 20 Hz nominal", "require (gain H) >= (- 0.5·dB) {from 20·Hz }nominal"},
	{"require stable(H)", "require (stable H) "},

	// The rest.
	{"start steady", "start steady"},
	{"prefer resistor E96", "prefer resistor E96"},
	{`allow touch-voltage because "mains side, #1"`, `allow touch-voltage "mains side, #1"`},
	{`use "stages.plight"`, `use "stages.plight"`},
	{"function H = v[out]/Vs", "function H (/ v[out] Vs)"},
	{"part P1 = Preamp with G = 40 dB, in at hyd, out at a", "part P1 Preamp {G = 40·dB} {in at hyd} {out at a}"},
	{"part P1 = Preamp with G = 40 dB,\n  in at hyd, # the hydrophone\n  # and out\n  out at a", "part P1 Preamp {G = 40·dB} {in at hyd} {out at a}"},
	{"let x = (1 +\n 2)\nlet y = 3", "let x <(+ 1 2)>\nlet y 3"},
	{"subnetwork F (a, b) with C = 1 µF, R = 2 Ω {\n  a -[capacitor Q = C]- b\n}\nground 0",
		"subnetwork F (a b) {C = 1·µF} {R = 2·Ω} {\npath a [capacitor Q C] b\n}\nground 0"},
	{"## Doc of R1\n## in two lines\nresistor R1 = 1 Ω", `"Doc of R1\nin two lines" resistor R1 1·Ω`},
	{"\ufeffground 0\r\nlet x = 1\r\n", "ground 0\nlet x 1"},
}

func TestSound(t *testing.T) {
	for _, c := range sound {
		f := Parse("sound.plight", c.text)
		if len(f.Findings) > 0 {
			t.Errorf("%s\nfinding %v", c.text, f.Findings[0])
		}
		if diff := cmp.Diff(c.want, sexp(f.Statements)); diff != "" {
			t.Errorf("%s\n%s", c.text, diff)
		}
	}
}

// slips are texts with one mistake between ⟦ and ⟧ (an empty pair where
// something is missing), the code, a part of the message, and what the first
// repair makes of the text ("" for none).
var slips = []struct{ text, code, message, repaired string }{
	{"resistor R = ⟦--⟧5 Ω", "syntax", "one sign", "resistor R = -5 Ω"},
	{"resistor R = ⟦1e⟧ Ω", "syntax", "exponent", "resistor R = 1 Ω"},
	{"resistor R = ⟦1,5⟧ kΩ", "syntax", "decimal sign", "resistor R = 1.5 kΩ"},
	{"capacitor C = ⟦1,5⟧nF, rated 5 V", "syntax", "decimal sign", "capacitor C = 1.5nF, rated 5 V"},
	{"capacitor C = 10 ⟦u F⟧", "syntax", "one word", "capacitor C = 10 µF"},
	{"resistor R = 4 ⟦k⟧", "unit-unknown", "`kΩ`", "resistor R = 4 kΩ"},
	{"let r = 4 ⟦k⟧", "unit-unknown", "prefix", ""},
	{"capacitor C = 10 ⟦mmF⟧", "unit-unknown", "`pF`", "capacitor C = 10 pF"},
	{"resistor R = 10 ⟦Kohm⟧", "unit-unknown", "`kΩ`", "resistor R = 10 kΩ"},
	{"let f = 10 ⟦khz⟧", "unit-unknown", "`kHz`", "let f = 10 kHz"},
	{"let f = 10 ⟦mhz⟧", "unit-unknown", "`mHz`", "let f = 10 mHz"},
	{"let f = 10 ⟦Mhz⟧", "unit-unknown", "`MHz`", "let f = 10 MHz"},
	{"let t0 = 3 ⟦sec⟧", "unit-unknown", "`s`", "let t0 = 3 s"},
	{"let q = ⟦2pi⟧", "syntax", "2*pi", "let q = 2*pi"},
	{"let q = ⟦2 pi⟧*3", "syntax", "2*pi", "let q = 2*pi*3"},
	{"let R_1 = 2\nlet q = ⟦3 R_1⟧", "syntax", "3*R_1", "let R_1 = 2\nlet q = 3*R_1"},
	{"let q = ⟦3 R_1⟧", "syntax", "3*R_1", ""},
	{"let q = 3 ⟦foo⟧", "unit-unknown", "no unit", ""},
	{"let foo = 2\nlet q = 3 ⟦foo⟧", "unit-unknown", "3*foo", "let foo = 2\nlet q = 3*foo"},
	{"let q = 3 V ⟦foo⟧", "syntax", "not expected", ""},
	{"let foo = 2\nlet q = 3 V ⟦foo⟧", "syntax", "multiply", "let foo = 2\nlet q = 3 V * foo"},
	{"voltage source Vs = 5 V ⟦DC⟧", "syntax", "without a word", "voltage source Vs = 5 V"},
	{"voltage source Vs = 5 ⟦VDC⟧", "syntax", "without a word", "voltage source Vs = 5 V"},
	{"voltage source Vs = 275 V ⟦rms⟧", "syntax", "sqrt(2)*10 V * sin(", ""},
	{"voltage source Vs = 275 ⟦Vrms⟧", "syntax", "sqrt(2)*10 V * sin(", ""},
	{"voltage source Vs = 10 V ⟦AC⟧", "syntax", "amplitude times a sine", ""},
	{"require v[out] <= 10 V ⟦peak⟧", "syntax", "peak(v[out])", ""},
	{"require gain(H) ⟦between -3 dB and 0 dB⟧ to 1 kHz nominal", "syntax", "two limits",
		"require gain(H) >= -3 dB to 1 kHz nominal\nrequire gain(H) <= 0 dB to 1 kHz nominal"},
	{"require x ⟦between 3⟧", "syntax", "two limits", ""},
	{"require x <= 3 V ⟦and⟧ x >= 1 V", "syntax", "a line for each", ""},
	{"require gain⟦(H⟧ <= 2", "syntax", "not closed", "require gain(H) <= 2"},
	{"resistor R = ⟦1,000⟧ Ω", "syntax", "two ways", "resistor R = 1000 Ω"},
	{"resistor R = ⟦1,000⟧kΩ", "syntax", "two ways", "resistor R = 1000kΩ"},
	{"let n = ⟦1,000,000⟧", "syntax", "grouped", "let n = 1000000"},
	{"let n = ⟦0,001⟧", "syntax", "point", "let n = 0.001"},
	{"let n = ⟦1,0005⟧", "syntax", "point", "let n = 1.0005"},
	{"let n = ⟦1000,000⟧", "syntax", "point", "let n = 1000.000"},
	{"capacitor C = 100 ⟦nanofarads⟧", "unit-unknown", "`nF`", "capacitor C = 100 nF"},
	{"capacitor C = 100 ⟦microfarad⟧", "unit-unknown", "`µF`", "capacitor C = 100 µF"},
	{"inductor L = 10 ⟦millihenry⟧", "unit-unknown", "`mH`", "inductor L = 10 mH"},
	{"resistor R = 10 ⟦Kiloohm⟧", "unit-unknown", "`kΩ`", "resistor R = 10 kΩ"},
	{"let f = 10 ⟦megahertz⟧", "unit-unknown", "`MHz`", "let f = 10 MHz"},
	{"let f = 10 ⟦milliseconds⟧", "unit-unknown", "`ms`", "let f = 10 ms"},
	{"resistor R = 1 kΩ ⟦+/-⟧ 5%", "syntax", "`±`", "resistor R = 1 kΩ ±5%"},
	{"resistor R = 4k7 ⟦+/-⟧5 %, rated 1 W", "syntax", "`±`", "resistor R = 4k7 ±5 %, rated 1 W"},
	{"resistor R = 10 Ω ⟦||⟧ 20 Ω", "syntax", "1/(1/R1 + 1/R2)", ""},
	{"a -[R3 || ⟦(⟧R4 -[C1])]- b", "syntax", "no brackets", ""},
	{"a -[R1⟦/⟧C1]- b", "syntax", "||", "a -[R1 || C1]- b"},
	{"⟦in - hull⟧", "syntax", "by a wire", "in -[wire Wjoin]- hull"},
	{"a -[R1]- b ⟦- hull⟧", "syntax", "by a wire", "a -[R1]- b -[wire Wjoin]- hull"},
	{"a -[R1]- b ⟦- R2 -⟧ hull", "syntax", "in a box", "a -[R1]- b -[R2]- hull"},
	{"⟦in -R1- out⟧", "syntax", "in a box", "in -[R1]- out"},
	{"⟦resitor⟧ R1 = 5 Ω", "syntax", "resistor", "resistor R1 = 5 Ω"},
	{"tell v[out] ⟦in mV⟧", "syntax", "chooses its unit", "tell v[out]"},
	{"let q = R1 ⟦//⟧ R2", "syntax", "1/R1 + 1/R2", "let q = R1 / R2"},
	{"a -[R1 ⟦//⟧ C1]- b", "syntax", "||", "a -[R1  ||  C1]- b"},
	{"a -[R1 ⟦|⟧ C1]- b", "syntax", "||", "a -[R1  ||  C1]- b"},
	{"resistor R = ⟦1.2.3⟧ ohm", "syntax", "decimal point", ""},
	{"resistor R = ⟦5.⟧ ohm", "syntax", "decimal point", "resistor R = 5 ohm"},
	{"resistor R = 10 ⟦ohm ohm⟧", "syntax", "one unit", "resistor R = 10 ohm"},
	{"let w = 10 ⟦V s⟧", "syntax", "product of units", "let w = 10 V*s"},
	{"⟦+5V⟧ -[R1]- out", "syntax", "name", "5V -[R1]- out"},
	{"out -[R1]- ⟦-12V⟧", "syntax", "name", "out -[R1]- n12V"},
	{"⟦A+⟧ -[R1]- out", "syntax", "name", "A_plus -[R1]- out"},
	{"out -[R1]- ⟦A+⟧", "syntax", "name", "out -[R1]- A_plus"},
	{"out -[R1]- ⟦1.5V⟧", "syntax", "name", ""},
	{"tell v[⟦A+⟧]", "syntax", "name", "tell v[A_plus]"},
	{"ground ⟦-5V⟧", "syntax", "name", "ground n5V"},
	{"resistor R = ⟦10 000⟧ Ω", "syntax", "grouped", "resistor R = 10000 Ω"},
	{"let n = ⟦1 000 000⟧", "syntax", "grouped", "let n = 1000000"},
	{"in ⟦- [⟧R3] - out", "syntax", "one sign", "in -[R3] - out"},
	{"in ⟦[⟧R3]- out", "syntax", "-[", "in -[R3]- out"},
	{"in ⟦--[⟧R3]- out", "syntax", "one `-`", "in -[R3]- out"},
	{"b -[C1]-⟦-⟧ gnd", "syntax", "one `-`", "b -[C1]- gnd"},
	{"b -[C1] ⟦gnd⟧", "syntax", "missing", "b -[C1]- gnd"},
	{"b -[C1]⟦⟧", "syntax", "ends in a node", ""},
	{"b -[C1]-⟦⟧", "syntax", "node's name", ""},
	{"b ⟦-[C1⟧", "syntax", "not closed", ""},
	{"b -[C1⟦⟧-gnd", "syntax", "`]` is missing", "b -[C1]-gnd"},
	{"b -[⟦]⟧- gnd", "syntax", "a part", ""},
	{"b -[⟦4k7⟧]- gnd", "syntax", "a box holds a part", ""},
	{"b -[⟦resistr⟧ R1 = 5 Ω]- gnd", "syntax", "resistor", "b -[resistor R1 = 5 Ω]- gnd"},
	{"b -[R1 || ⟦(⟧", "syntax", "a part", ""},
	{"a -[R1⟦,⟧ C1]- b", "syntax", "||", ""},
	{"resistor R1 = 4.7 kΩ⟦,⟧", "syntax", "option is missing", "resistor R1 = 4.7 kΩ"},
	{"resistor R2 = ⟦(1 kΩ + 2 kΩ⟧", "syntax", "not closed", "resistor R2 = (1 kΩ + 2 kΩ)"},
	{"tell ⟦v[R1⟧", "syntax", "not closed", "tell v[R1]"},
	{"tell ⟦V⟧[out]", "syntax", "small letters", "tell v[out]"},
	{"tell ⟦x⟧[out]", "syntax", "no subscripts", ""},
	{"resistor R1 = ⟦4k7 Ω⟧", "syntax", "no unit follows", "resistor R1 = 4k7"},
	{"resistor R1 = 2*⟦4k7⟧", "syntax", "code", "resistor R1 = 2*4.7 kΩ"},
	{"let Rx = ⟦4k7⟧", "syntax", "code", "let Rx = 4.7 kΩ"},
	{"let Cx = ⟦2n2⟧", "syntax", "code", "let Cx = 2.2 nF"},
	{"capacitor C1 = ⟦4k7⟧", "syntax", "no letter", "capacitor C1 = 4.7 kF"},
	{"inductor L1 = ⟦4R7⟧", "syntax", "no letter", "inductor L1 = 4.7 µH"},
	{"require ⟦-12 V <= v[out] <= 12 V⟧ at 1 s", "syntax", "two limits", "require -12 V <= v[out] at 1 s\nrequire v[out] <= 12 V at 1 s"},
	{"require x ⟦≤⟧ 3", "syntax", "<=", "require x <= 3"},
	{"require x ⟦=⟧ 3", "syntax", "limit is a relation", ""},
	{"require x ⟦=<⟧ 3", "syntax", "<=", "require x <= 3"},
	{"let x = 2 ⟦×⟧ 3", "syntax", "*", "let x = 2 * 3"},
	{"let x = 2⟦**⟧3", "syntax", "^", "let x = 2^3"},
	{"let x = 3 V⟦²⟧", "syntax", "^2", "let x = 3 V^2"},
	{"let x = a⟦²⟧", "syntax", "^2", "let x = a^2"},
	{"let x = ⟦10  V⟧", "syntax", "one space", "let x = 10 V"},
	{"⟦Resistor⟧ R1 = 5 Ω", "syntax", "resistor", "resistor R1 = 5 Ω"},
	{"⟦resistr⟧ R1 = 5 Ω", "syntax", "resistor", "resistor R1 = 5 Ω"},
	{"⟦opamp⟧ U1 = ideal, + at a, - at b, output at c", "syntax", "op amp", "op amp U1 = ideal, + at a, - at b, output at c"},
	{"⟦diode⟧ D1 = 0.7 V", "syntax", "switch", ""},
	{"⟦R1⟧ = 5 Ω", "syntax", "let", "let R1 = 5 Ω"},
	{"resistor R1 ⟦5⟧ Ω", "syntax", "`=`", "resistor R1 = 5 Ω"},
	{"resistor ⟦1R⟧ = 5 Ω", "syntax", "letter", "resistor _1R = 5 Ω"},
	{"resistor ⟦R-1⟧ = 5 Ω", "syntax", "name", "resistor R_1 = 5 Ω"},
	{"resistor ⟦s⟧ = 5 Ω", "syntax", "stands for itself", ""},
	{"resistor R1 = 5 Ω, ⟦initially⟧ 3 V", "syntax", "no option", ""},
	{"resistor R1 = 5 Ω, ⟦ratd⟧ 3 W", "syntax", "rated", "resistor R1 = 5 Ω, rated 3 W"},
	{"capacitor C = 5 F, rated 3 V, ⟦rated⟧ 4 V", "syntax", "twice", ""},
	{"wire W ⟦= 5 Ω⟧", "syntax", "no value", "wire W "},
	{"transformer T = ⟦10⟧, primary at a b, secondary at c d", "syntax", "ratio", "transformer T = 10 : 1, primary at a b, secondary at c d"},
	{"switch S = ⟦open⟧ at 3 s", "syntax", "opens", "switch S = opens at 3 s"},
	{"start ⟦stedy⟧", "syntax", "steady", "start steady"},
	{"start⟦⟧", "syntax", "rest or steady", ""},
	{"tell v[a] ⟦form⟧ 1 s", "syntax", "from", "tell v[a] from 1 s"},
	{"tell f0 in ⟦kHz⟧", "syntax", "rad/s", "tell f0 in Hz"},
	{"tell matrix ⟦q⟧[a,b]", "syntax", "abcd", ""},
	{"use ⟦stages⟧", "syntax", "quotes", ""},
	{"use ⟦\"stages.plight⟧", "syntax", "closing quote", "use \"stages.plight\""},
	{"let x = 3⟦;⟧", "syntax", "without `;`", "let x = 3"},
	{"let x =⟦⟧", "syntax", "missing", ""},
	{"⟦in - R1 - out⟧", "syntax", "box", "in -[R1]- out"},
	{"⟦in-R1-mid-C1-0⟧", "syntax", "box", "in -[R1]- mid -[C1]- 0"},
	{"⟦in-R1-out-C1⟧", "syntax", "box", ""},
	{"⟦//⟧ a note", "syntax", "comment", "# a note"},
	{"⟦--⟧ a note", "syntax", "comment", "# a note"},
	{"⟦;⟧ a note", "syntax", "comment", "# a note"},
	{"ground 0 ⟦//⟧ the hull here", "syntax", "comment", "ground 0 # the hull here"},
	{"let x = 5 V ⟦//⟧ five volts or so", "syntax", "comment", "let x = 5 V # five volts or so"},
	{"tell v[a] ⟦@⟧ 1 ms", "syntax", "`at`", "tell v[a] at 1 ms"},
	{"resistor R1 = 4k7 ⟦rated⟧ 1 W", "syntax", "comma", "resistor R1 = 4k7, rated 1 W"},
	{"resistor R1 = 5 Ω ±1 % ⟦rated⟧ 1 W", "syntax", "comma", "resistor R1 = 5 Ω ±1 %, rated 1 W"},
	{"resistor R = 5 Ω ⟦+ 5 %⟧ + 3 Ω", "syntax", "brackets", ""},
	{"resistor R = 5 Ω ±5 % ⟦+⟧1 %", "syntax", "one tolerance", ""},
	{"let x = 5 Ω ⟦±⟧5 %", "syntax", "value of a part", ""},
	{"let x = 3 + ⟦)⟧", "syntax", "expected", ""},
	{"let x = 3 ⟦)⟧", "syntax", "closes nothing", "let x = 3 "},
	{"let x = max(1, ⟦,⟧ 2)", "syntax", "expected", ""},
	{"let x = (1 + ⟦*⟧ 2) + 1", "syntax", "expected", ""},
	{"⟦}⟧", "syntax", "closes nothing", ""},
	{"subnetwork F (a) ⟦{⟧\n  a -[R]- b\nground 0", "syntax", "never closed", ""},
	{"subnetwork F (a) {\n  ⟦ground⟧ b\n}", "syntax", "cannot stand", ""},
	{"subnetwork F (⟦5⟧) {\n}", "syntax", "letter", ""},
	{"    ⟦rated⟧ 5 V", "syntax", "option", ""},
	{"a -[R1]- b⟦\u200b⟧", "syntax", "U+200B", "a -[R1]- b"},
}

func TestSlips(t *testing.T) {
	for _, c := range slips {
		open := strings.Index(c.text, "⟦")
		shut := strings.Index(c.text, "⟧") - len("⟦")
		text := strings.NewReplacer("⟦", "", "⟧", "").Replace(c.text)
		f := Parse("slip.plight", text)
		if len(f.Findings) != 1 {
			t.Errorf("%s: %d findings: %v", text, len(f.Findings), f.Findings)
			continue
		}
		got := f.Findings[0]
		if string(got.Code) != c.code || !strings.Contains(got.Message, c.message) {
			t.Errorf("%s: %v, want %s …%s…", text, got, c.code, c.message)
		}
		if got.Origin.Span != (Span{open, shut}) {
			t.Errorf("%s: %v at %v, want %v", text, got, got.Origin.Span, Span{open, shut})
		}
		if c.repaired == "" {
			continue
		}
		if len(got.Repairs) == 0 {
			t.Errorf("%s: no repair", text)
			continue
		}
		repaired := applyEdits(text, got.Repairs[0].Edits)
		if repaired != c.repaired {
			t.Errorf("%s: repaired to %q, want %q", text, repaired, c.repaired)
		}
		if again := Parse("slip.plight", repaired); len(again.Findings) > 0 {
			t.Errorf("%s: repaired to %q, which has %v", text, repaired, again.Findings[0])
		}
	}
}

// applyEdits changes a text as edits say.
func applyEdits(text string, edits []Edit) string {
	sorted := slices.Clone(edits)
	slices.SortStableFunc(sorted, func(a, b Edit) int { return a.Span.Start - b.Span.Start })
	for _, e := range slices.Backward(sorted) {
		text = text[:e.Span.Start] + e.Text + text[e.Span.End:]
	}
	return text
}

// TestLocal puts every slip between sound statements, which must stay as
// they are: a broken statement costs itself only.
func TestLocal(t *testing.T) {
	const before, after = "ground hull\nlet Vbat = 12 V\n", "\nlet Q = 3\na -[R9]- b\nresistor R9 = 5 Ω\n"
	want := func(f *File, n int) string { return sexp(f.Statements[len(f.Statements)-n:]) }
	tail := want(Parse("", after), 3)
	for _, c := range slips {
		if strings.Contains(c.text, "subnetwork") {
			continue
		}
		text := strings.NewReplacer("⟦", "", "⟧", "").Replace(c.text)
		f := Parse("", before+text+after)
		if len(f.Findings) != 1 {
			t.Errorf("%s: %d findings", text, len(f.Findings))
		}
		if got := sexp(f.Statements[:2]); got != "ground hull\nlet Vbat 12·V" {
			t.Errorf("%s: before it: %s", text, got)
		}
		if got := want(f, 3); got != tail {
			t.Errorf("%s: after it: %s", text, got)
		}
	}
}

// TestExamples reads the worked examples: no syntax finding in any but the
// two that are there to be hard.
func TestExamples(t *testing.T) {
	for _, path := range exampleFiles(t) {
		name := filepath.Base(path)
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		f := Parse(path, string(text))
		switch name {
		case "broken.plight":
			checkBroken(t, f)
		case "tokens.plight":
			checkTokens(t, f)
		default:
			for _, x := range f.Findings {
				t.Errorf("%s: %v", path, x)
			}
		}
	}
}

// exampleFiles lists the example files beside the repository and the ones in
// testdata.
func exampleFiles(t *testing.T) []string {
	own, err := filepath.Glob("../testdata/syntax/*.plight")
	if err != nil || len(own) == 0 {
		t.Fatalf("no files in testdata/syntax: %v", err)
	}
	shared, _ := filepath.Glob("../../shared/examples/*.plight")
	more, _ := filepath.Glob("../../shared/examples/*/*.plight")
	if len(shared) == 0 {
		t.Log("../shared/examples is not there: only testdata/syntax is read")
	}
	return slices.Concat(own, shared, more)
}

// checkBroken wants one finding on every broken line and every other
// statement whole.
func checkBroken(t *testing.T, f *File) {
	broken := map[int]bool{2: true, 3: true, 4: true, 5: true, 6: true, 7: true, 8: true, 12: true, 13: true, 14: true, 15: true, 16: true}
	counts := map[int]int{}
	for _, x := range f.Findings {
		counts[f.Lines.Line(x.Origin.Span.Start)+1]++
	}
	for line := 1; line <= 18; line++ {
		want := 0
		if broken[line] {
			want = 1
		}
		if counts[line] != want {
			t.Errorf("%s:%d: %d syntax findings, want %d", f.Name, line, counts[line], want)
		}
	}
	if len(f.Statements) != 18 {
		t.Errorf("%s: %d statements, want one on each of 18 lines", f.Name, len(f.Statements))
	}
	for _, s := range f.Statements {
		line := f.Lines.Line(s.Extent().Start) + 1
		if s.Headline().Broken && !broken[line] {
			t.Errorf("%s:%d: a good statement is broken", f.Name, line)
		}
	}
}

// checkTokens wants the readings of notation.md, line by line; "!" marks the
// lines with a mistake.
func checkTokens(t *testing.T, f *File) {
	want := map[int]string{
		1: "path in [R1] mid [C1] gnd", 2: "path 1 [R1] 2 [R2] 0", 3: "path 1e [R1] 0",
		4: "path 3V3 [R1] [R2 || C2] [L1] 12V", 5: "path port [R1] tell [C1] let", 6: "path ground [R1] start",
		7: "let x (- v[a] v[b])", 8: "let Ts 10·µs",
		9:  "voltage source Va (* (* 12·V/Ts t) (u t))",
		10: "voltage source Vb (* (* 5·V/ms t) (u t))",
		11: "voltage source Vc 2·V*s",
		12: "impedance Z1 (+ 5·Ω 2·mH*s)",
		13: "impedance Z2 (+ 5·Ω (* s 2·mH))",
		14: "impedance Z3 (* 10·Ω/s 1·kHz)",
		15: "voltage source Vd (* (* 2·V (exp (/ (- t) 3·ms))) (u t))",
		16: "voltage source Ve (/ 3·V^2 1·V)",
		17: "voltage source Vf (* (* 325·V (sin (* (* (* 2 pi) 50·Hz) <(- t 5·ms)>))) (u (- t 5·ms)))",
		18: "tell v[F1.mid] {at 1·ms }", 19: "tell v[F1.5] {at 1·ms }", 20: "tell v[A1,3V3]",
		21: "!", 22: "require (- (peak v[a]) (trough v[a])) <= 20·mV {from 1·ms to 2·ms }",
		23: "!", 24: "!",
		25: "resistor R1 100·Ω +20·% -10·%", 26: "resistor R1 (+ 100·Ω 20·Ω) ±5·%",
		27: "resistor R1 (- (+ 100·Ω 5·Ω) 2·Ω)", 28: "!", 29: "resistor R1 R47", 30: "!", 31: "!",
		32: "coupling core 0.98 +1·% -2·% {between L1 L2}",
		33: "transformer T 10 : 1 {primary a b} {secondary c d}",
		34: "switch S [closes 0·s][opens 2·ms] {resistance 5·mΩ}",
		35: "path a [voltage source lift (* 10 v[b,c])] b",
		36: "!", 37: "let f 1000·1/s", 38: "let g (/ 1000 s)", 39: "resistor R5 10·kΩ",
	}
	findings := map[int]int{}
	for _, x := range f.Findings {
		findings[f.Lines.Line(x.Origin.Span.Start)+1]++
	}
	if len(f.Statements) != len(want) {
		t.Errorf("%s: %d statements, want %d", f.Name, len(f.Statements), len(want))
	}
	for _, s := range f.Statements {
		line := f.Lines.Line(s.Extent().Start) + 1
		if want[line] == "!" {
			if findings[line] != 1 || !s.Headline().Broken {
				t.Errorf("%s:%d: %d findings on a broken line", f.Name, line, findings[line])
			}
			continue
		}
		if got := sexp(s); got != want[line] || findings[line] != 0 {
			t.Errorf("%s:%d: %s (%d findings), want %s", f.Name, line, got, findings[line], want[line])
		}
	}
}
