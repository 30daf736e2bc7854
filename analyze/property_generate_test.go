package analyze_test

import (
	"fmt"
	"math/big"
	"strings"

	"pgregory.net/rapid"
)

// generator draws a random network, part by part, in the plain form and as
// text. Values are around 1 Ω, 1 mH, 1 mF and 1 ms, so that voltages and
// currents are of one size.
type generator struct {
	t *rapid.T
	plainNetwork
	switching bool // switches or a steady start, and nothing whose state cannot be seen from outside
	most      int  // nodes with the reference
}

var mantissas = []string{"0.5", "0.68", "1", "1.5", "2", "2.2", "3.3", "4.7"}

// number draws a short decimal, as text and exactly.
func (g *generator) number(label string) (string, *big.Rat) {
	text := rapid.SampledFrom(mantissas).Draw(g.t, label)
	r, _ := new(big.Rat).SetString(text)
	return text, r
}

func (g *generator) signed(label string) (string, *big.Rat) {
	text, r := g.number(label)
	if rapid.Bool().Draw(g.t, label+" negative") {
		return "-" + text, new(big.Rat).Neg(r)
	}
	return text, r
}

func (g *generator) oneIn(n int, label string) bool {
	return rapid.IntRange(1, n).Draw(g.t, label) == n
}

func (g *generator) node(label string) int { return rapid.IntRange(0, g.nodes-1).Draw(g.t, label) }

// pair draws two different nodes.
func (g *generator) pair(label string) (a, b int) {
	a = g.node(label)
	b = rapid.IntRange(0, g.nodes-2).Draw(g.t, label+" other")
	if b >= a {
		b++
	}
	return a, b
}

func (g *generator) fresh() int { g.nodes++; return g.nodes - 1 }

// milli scales to thousandths.
func milli(r *big.Rat) *big.Rat { return new(big.Rat).Mul(r, big.NewRat(1, 1000)) }

func (g *generator) name(prefix string) string { return fmt.Sprintf("%s%d", prefix, len(g.branches)) }

// path adds a branch and its wiring, "kind name = value" between its nodes.
func (g *generator) path(b plainBranch, definition string) int {
	if rapid.Bool().Draw(g.t, "defined apart") {
		g.lines = append(g.lines, definition, fmt.Sprintf("%s -[%s]- %s", nodeText(b.a), b.name, nodeText(b.b)))
	} else {
		g.lines = append(g.lines, fmt.Sprintf("%s -[%s]- %s", nodeText(b.a), definition, nodeText(b.b)))
	}
	g.branches = append(g.branches, b)
	return len(g.branches) - 1
}

func (g *generator) resistor(a, b int) {
	text, r := g.number("ohms")
	name := g.name("R")
	g.path(plainBranch{name: name, kind: "resistor", a: a, b: b, value: r}, fmt.Sprintf("resistor %s = %s Ω", name, text))
}

// storage adds an inductor or a capacitor.
func (g *generator) storage(kind string, a, b int) {
	text, r := g.number(kind)
	name, unit, start := g.name("L"), "mH", "A"
	if kind == "capacitor" {
		name, unit, start = g.name("C"), "mF", "V"
	}
	branch := plainBranch{name: name, kind: kind, a: a, b: b, value: milli(r)}
	definition := fmt.Sprintf("%s %s = %s %s", kind, name, text, unit)
	if !g.steady && g.oneIn(3, "initial value") {
		var value string
		value, branch.initial = g.signed("initial")
		definition += fmt.Sprintf(", initially %s %s", value, start)
	}
	g.path(branch, definition)
}

// polynomial factors: 1 + s·τ, or (s·τ)² + s·τ + 1.
func (g *generator) factor(label string) (string, []*big.Rat) {
	text, r := g.number(label)
	tau := milli(r)
	if g.oneIn(3, label+" quadratic") {
		return fmt.Sprintf("(1 + s*%s ms + (s*%s ms)^2)", text, text),
			[]*big.Rat{big.NewRat(1, 1), tau, new(big.Rat).Mul(tau, tau)}
	}
	return fmt.Sprintf("(1 + s*%s ms)", text), []*big.Rat{big.NewRat(1, 1), tau}
}

// rational draws a coefficient: a number, or rational in s.
func (g *generator) rational(label, unit string) (string, plainRatio) {
	text, r := g.signed(label)
	if unit != "" {
		text += " " + unit
	}
	one := []*big.Rat{big.NewRat(1, 1)}
	out := plainRatio{one, one}
	if !g.switching && g.oneIn(3, label+" in s") {
		switch rapid.IntRange(0, 2).Draw(g.t, label+" form") {
		case 0:
			var f string
			f, out.den = g.factor(label)
			text += "/" + f
		case 1:
			top, num := g.factor(label + " top")
			text += "*" + top
			out.num = num
			if f, den := g.factor(label + " below"); !proportional(num, den) {
				text, out.den = text+"/"+f, den
			}
		default:
			f, den := g.factor(label)
			out = plainRatio{[]*big.Rat{new(big.Rat), big.NewRat(1, 1000)}, den}
			text += "*(s*1 ms)/" + f
		}
	}
	scaled := make([]*big.Rat, len(out.num))
	for i := range scaled {
		scaled[i] = new(big.Rat).Mul(out.num[i], r)
	}
	return text, plainRatio{scaled, out.den}
}

// proportional tells whether two factors are one: then they would cancel.
func proportional(a, b []*big.Rat) bool { return a[1].Cmp(b[1]) == 0 }

// immittance adds an impedance or an admittance.
func (g *generator) immittance(kind string, a, b int) {
	unit := "Ω"
	if kind == "admittance" {
		unit = "S"
	}
	text, ratio := g.rational(kind, unit)
	name := g.name("Z")
	g.path(plainBranch{name: name, kind: kind, a: a, b: b, ratio: ratio}, fmt.Sprintf("%s %s = %s", kind, name, text))
}

func (g *generator) inner(label string, a, b int) {
	switch rapid.IntRange(0, 9).Draw(g.t, label) {
	case 0, 1, 2, 3, 4:
		g.resistor(a, b)
	case 5, 6:
		g.storage("capacitor", a, b)
	case 7:
		g.storage("inductor", a, b)
	case 8:
		if !g.switching {
			g.immittance("impedance", a, b)
			return
		}
		g.resistor(a, b)
	default:
		if !g.switching {
			g.immittance("admittance", a, b)
			return
		}
		g.resistor(a, b)
	}
}

// wave draws a waveform in the notation.
func (g *generator) wave(unit string) (string, plainWave) {
	text, size := g.signed("amplitude")
	w := plainWave{from: new(big.Rat), size: size}
	kinds := []string{"constant", "ramp", "exponential", "sine", "cosine", "impulse"}
	if g.steady {
		kinds = []string{"constant", "sine", "cosine"}
	}
	w.kind = rapid.SampledFrom(kinds).Draw(g.t, "waveform")
	w.forever = g.steady && rapid.Bool().Draw(g.t, "for ever")
	argument := "t"
	if !w.forever && g.oneIn(3, "delayed") {
		delay, r := g.number("delay")
		w.from = milli(r)
		argument = "(t - " + delay + " ms)"
	}
	parameter, r := g.number("parameter")
	switch w.kind {
	case "constant":
		text = text + " " + unit
	case "ramp":
		w.size = new(big.Rat).Mul(size, big.NewRat(1000, 1))
		text = fmt.Sprintf("%s %s/ms * %s", text, unit, argument)
	case "exponential":
		w.rate = new(big.Rat).Quo(big.NewRat(1000, 1), r)
		text = fmt.Sprintf("%s %s * exp(-%s/%s ms)", text, unit, argument, parameter)
	case "sine", "cosine":
		w.rate = new(big.Rat).Mul(r, big.NewRat(1000, 1))
		text = fmt.Sprintf("%s %s * %s(%s krad/s * %s)", text, unit, w.kind[:3], parameter, argument)
	case "impulse":
		w.size = milli(size)
		return fmt.Sprintf("%s m%s*s * delta(%s)", text, unit, strings.Trim(argument, "()")), w
	}
	if !w.forever {
		text += fmt.Sprintf(" * u(%s)", strings.Trim(argument, "()"))
	}
	return text, w
}

// source adds an independent source; a voltage source gets a node of its own.
func (g *generator) source(kind string) {
	unit, prefix := "V", "V"
	if kind == "current" {
		unit, prefix = "A", "I"
	}
	var terms []string
	b := plainBranch{kind: kind}
	for range rapid.IntRange(1, 2).Draw(g.t, "terms") {
		text, w := g.wave(unit)
		terms = append(terms, text)
		b.waves = append(b.waves, w)
	}
	b.name = g.name(prefix)
	b.a, b.b = g.attached(kind == "voltage")
	g.path(b, fmt.Sprintf("%s source %s = %s", kind, b.name, strings.Join(terms, " + ")))
}

// attached gives the two nodes of a part that prescribes a voltage: mostly one
// of them is new, behind a resistor.
func (g *generator) attached(apart bool) (a, b int) {
	if !apart || g.nodes >= g.most || g.oneIn(12, "across") {
		return g.pair("ends")
	}
	b = g.node("far end")
	near := g.node("near end")
	a = g.fresh()
	g.resistor(a, near)
	return a, b
}

// dependent adds a dependent source of one or two terms.
func (g *generator) dependent(kind string) {
	unit := map[string]string{"voltage": "V", "current": "A"}[kind]
	b := plainBranch{kind: map[string]string{"voltage": "dependentVoltage", "current": "dependentCurrent"}[kind]}
	var terms []string
	for range rapid.IntRange(1, 2).Draw(g.t, "terms") {
		c := plainControl{branch: -1}
		var text string
		if currents := g.carriers(); len(currents) > 0 && rapid.Bool().Draw(g.t, "of a current") {
			c.branch = rapid.SampledFrom(currents).Draw(g.t, "current")
			u := map[string]string{"V": "Ω", "A": ""}[unit]
			text, c.k = g.rational("coefficient", u)
			text = fmt.Sprintf("%s * i[%s]", text, g.branches[c.branch].name)
		} else {
			c.plus, c.minus = g.pair("control")
			u := map[string]string{"V": "", "A": "S"}[unit]
			text, c.k = g.rational("coefficient", u)
			text = fmt.Sprintf("%s * v[%s,%s]", text, nodeText(c.plus), nodeText(c.minus))
		}
		if len(b.controls) > 0 && sameControl(b.controls[0], c) {
			continue // it would be one term, with the coefficients added up
		}
		b.controls = append(b.controls, c)
		terms = append(terms, "("+text+")")
	}
	b.a, b.b = g.attached(kind == "voltage")
	b.name = g.name("follow")
	g.path(b, fmt.Sprintf("%s source %s = %s", kind, b.name, strings.Join(terms, " + ")))
}

// sameControl tells whether two terms follow one quantity, maybe turned around,
// or share a denominator: then one state serves both.
func sameControl(a, b plainControl) bool {
	if len(a.k.den) > 1 && len(a.k.den) == len(b.k.den) && proportional(a.k.den, b.k.den) {
		return true
	}
	return a.branch == b.branch && min(a.plus, a.minus) == min(b.plus, b.minus) && max(a.plus, a.minus) == max(b.plus, b.minus)
}

// carriers are the branches whose current the notation can name by the part.
func (g *generator) carriers() []int {
	var out []int
	for i, b := range g.branches {
		if b.kind != "output" && b.kind != "winding" {
			out = append(out, i)
		}
	}
	return out
}

// opAmp adds one with feedback to its − input.
func (g *generator) opAmp() {
	if g.nodes >= g.most {
		return
	}
	plus, minus := g.pair("inputs")
	if minus == 0 {
		plus, minus = minus, plus
	}
	out := g.fresh()
	b := plainBranch{name: g.name("U"), kind: "output", a: out, plus: plus, minus: minus}
	value := "ideal"
	if rapid.Bool().Draw(g.t, "one pole") {
		text, r := g.number("gain-bandwidth product")
		b.bandwidth = new(big.Rat).Mul(r, big.NewRat(1000, 1))
		value = text + " krad/s"
		if g.oneIn(2, "finite gain") {
			b.gain = big.NewRat(1000, 1)
			value += ", gain 1000"
		}
	}
	g.lines = append(g.lines, fmt.Sprintf("op amp %s = %s, + at %s, - at %s, output at %s",
		b.name, value, nodeText(plus), nodeText(minus), nodeText(out)))
	g.branches = append(g.branches, b)
	g.inner("feedback", out, minus)
}

// transformer adds one of two or three windings.
func (g *generator) transformer() {
	first := len(g.branches)
	name := g.name("T")
	line := "transformer " + name + " = "
	options := ""
	for k := range rapid.IntRange(2, 3).Draw(g.t, "windings") {
		text, turns := g.number("turns")
		a, b := g.pair("primary")
		word := "primary"
		if k > 0 {
			line += " : "
			word = "secondary"
			a, b = g.attached(true)
		}
		line += text
		options += fmt.Sprintf(", %s at %s %s", word, nodeText(a), nodeText(b))
		g.branches = append(g.branches, plainBranch{name: name, kind: "winding", a: a, b: b, first: first, turns: turns})
	}
	g.lines = append(g.lines, line+options)
	g.regroup(first)
}

// regroup moves the windings together behind what attached put between them.
func (g *generator) regroup(first int) {
	var windings, rest []plainBranch
	moved := map[int]int{}
	for i := first; i < len(g.branches); i++ {
		if g.branches[i].kind != "winding" {
			moved[i] = first + len(rest)
			rest = append(rest, g.branches[i])
		} else {
			windings = append(windings, g.branches[i])
		}
	}
	for i := range windings {
		windings[i].first = first + len(rest)
	}
	g.branches = append(append(g.branches[:first:first], rest...), windings...)
}

// couple couples two inductors that are not coupled yet.
func (g *generator) couple() {
	var coils []int
	for i, b := range g.branches {
		free := b.kind == "inductor"
		for _, m := range g.mutuals {
			free = free && m.a != i && m.b != i
		}
		if free {
			coils = append(coils, i)
		}
	}
	if len(coils) < 2 {
		return
	}
	a, b := coils[0], coils[1]
	k := rapid.SampledFrom([]string{"0.5", "0.9", "-0.3", "1"}).Draw(g.t, "coupling")
	factor, _ := new(big.Rat).SetString(k)
	least := g.branches[a].value
	if g.branches[b].value.Cmp(least) < 0 {
		least = g.branches[b].value
	}
	m := new(big.Rat).Mul(least, factor)
	text := new(big.Rat).Mul(m, big.NewRat(1000, 1)).FloatString(6) + " mH"
	if g.branches[a].value.Cmp(g.branches[b].value) == 0 && rapid.Bool().Draw(g.t, "as a coefficient") {
		text = k // M = k·√(L·L) is rational
	}
	g.lines = append(g.lines, fmt.Sprintf("coupling core%d = %s, between %s %s", len(g.mutuals), text, g.branches[a].name, g.branches[b].name))
	g.mutuals = append(g.mutuals, mutual{a, b, m})
}

// switches adds one that turns once or twice, or stands as it is.
func (g *generator) switches() {
	b := plainBranch{name: g.name("S"), kind: "switch"}
	b.a, b.b = g.attached(true)
	times := []string{"0.4", "0.9", "1.3"}
	from := rapid.IntRange(0, 2).Draw(g.t, "first event")
	closes := rapid.Bool().Draw(g.t, "closes")
	b.closedBefore = !closes
	var events []string
	for k := range rapid.IntRange(1, 3-from).Draw(g.t, "events") {
		r, _ := new(big.Rat).SetString(times[from+k])
		b.events = append(b.events, milli(r))
		events = append(events, fmt.Sprintf("%s at %s ms", map[bool]string{true: "closes", false: "opens"}[closes], times[from+k]))
		closes = !closes
	}
	definition := fmt.Sprintf("switch %s = %s", b.name, strings.Join(events, ", "))
	if rapid.Bool().Draw(g.t, "resistance") {
		text, r := g.number("closed resistance")
		b.value = r
		definition += fmt.Sprintf(", resistance %s Ω", text)
	}
	g.path(b, definition)
}

func (g *generator) wire() {
	b := plainBranch{name: g.name("W"), kind: "wire"}
	b.a, b.b = g.attached(true)
	g.path(b, "wire "+b.name)
}

// drawNetwork draws a whole network.
func drawNetwork(t *rapid.T) *generator {
	g := &generator{t: t, most: 12}
	g.lines = []string{"ground hull"}
	g.switching = g.oneIn(2, "switching")
	g.steady = g.oneIn(4, "steady")
	if g.steady {
		g.switching = true
		g.lines = append(g.lines, "start steady")
	}
	g.nodes = 1
	for range rapid.IntRange(1, 7).Draw(t, "tree") {
		a := g.node("parent")
		g.inner("branch", g.fresh(), a)
	}
	g.source(rapid.SampledFrom([]string{"voltage", "current"}).Draw(t, "first source"))
	for range rapid.IntRange(0, 6).Draw(t, "extras") {
		switch rapid.IntRange(0, 11).Draw(t, "extra") {
		case 0, 1, 2:
			a, b := g.pair("ends")
			g.inner("part", a, b)
		case 3:
			g.source("voltage")
		case 4:
			g.source("current")
		case 5:
			g.dependent("voltage")
		case 6:
			g.dependent("current")
		case 7:
			g.opAmp()
		case 8:
			g.transformer()
		case 9:
			a, b := g.pair("coil")
			g.storage("inductor", a, b)
			a, b = g.pair("second coil")
			g.storage("inductor", a, b)
			g.couple()
		case 10:
			if g.switching {
				g.switches()
			}
		default:
			g.wire()
		}
	}
	return g
}

// output draws a quantity to ask about.
func (g *generator) output(label string) plainOutput {
	if currents := g.carriers(); rapid.Bool().Draw(g.t, label+" is a current") {
		i := rapid.SampledFrom(currents).Draw(g.t, label)
		return plainOutput{text: "i[" + g.branches[i].name + "]", branch: i}
	}
	a, b := g.pair(label)
	text := fmt.Sprintf("v[%s,%s]", nodeText(a), nodeText(b))
	if b == 0 {
		text = fmt.Sprintf("v[%s]", nodeText(a))
	}
	return plainOutput{text: text, plus: a, minus: b, branch: -1}
}

// sources lists the independent ones.
func (g *generator) sources() []int {
	var out []int
	for i, b := range g.branches {
		if len(b.waves) > 0 {
			out = append(out, i)
		}
	}
	return out
}
