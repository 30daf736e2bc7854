package dialect

import "strings"

// This file points from words that other texts use for functions and measures
// to those of the notation.

// meantCall is what an unknown word before brackets probably means.
type meantCall struct {
	name string // the notation's word, to be written in its place; "" for none
	help string // how it is said, where one word does not do
}

// meantCalls are known words, folded to lower case and without underscores.
var meantCalls = map[string]meantCall{
	"risetime": {name: "rise"}, "trise": {name: "rise"}, "tr": {name: "rise"},
	"settlingtime": {name: "settle"}, "settletime": {name: "settle"}, "settling": {name: "settle"}, "tsettle": {name: "settle"},
	"average": {name: "mean"}, "avg": {name: "mean"},
	"maximum": {name: "peak"}, "highest": {name: "peak"}, "largest": {name: "peak"}, "pk": {name: "peak"}, "vmax": {name: "peak"},
	"minimum": {name: "trough"}, "lowest": {name: "trough"}, "smallest": {name: "trough"}, "vmin": {name: "trough"}, "valley": {name: "trough"},
	"magnitude": {name: "gain"}, "mag": {name: "gain"}, "modulus": {name: "gain"}, "db20": {name: "dB"},
	"arg": {name: "phase"}, "angle": {name: "phase"}, "ph": {name: "phase"},
	"re": {name: "real"}, "im": {name: "imag"}, "ln": {name: "log"}, "root": {name: "sqrt"},
	"groupdelay": {name: "delay"}, "gd": {name: "delay"}, "bw": {name: "bandwidth"},
	"cutoff": {name: "bandwidth"}, "corner": {name: "bandwidth"}, "unitygain": {name: "crossover"},
	"zeta": {name: "damping"}, "dampingratio": {name: "damping"}, "q": {name: "quality"}, "qfactor": {name: "quality"}, "qualityfactor": {name: "quality"},
	"naturalfrequency": {name: "natural_frequency"}, "resonance": {name: "natural_frequency"}, "isstable": {name: "stable"}, "stability": {name: "stable"},
	"finalvalue": {name: "final"}, "limit": {name: "final"}, "effective": {name: "rms"}, "eff": {name: "rms"},
	"step": {name: "u"}, "heaviside": {name: "u"}, "unitstep": {name: "u"}, "impulse": {name: "delta"}, "dirac": {name: "delta"},
	"lastabove": {name: "last_above"}, "lastbelow": {name: "last_below"}, "work": {name: "energy"},
	"zeroinput": {name: "zir"}, "zerostate": {name: "zsr"}, "transient": {name: "natural"}, "steadystate": {name: "forced"},
	"log10":    {help: "the logarithm to base 10 is log(X)/log(10), a level is dB(X)"},
	"tan":      {help: "a tangent is sin(X)/cos(X)"},
	"pulse":    {help: "a pulse from 0 to T is u(t) - u(t - T), times its height"},
	"rect":     {help: "a pulse from 0 to T is u(t) - u(t - T), times its height"},
	"square":   {help: "a pulse from 0 to T is u(t) - u(t - T), times its height; a sum of them is a square wave"},
	"ramp":     {help: "a ramp is a slope times t, 5 V/ms * t * u(t)"},
	"triangle": {help: "a triangle is a sum of ramps, 5 V/ms * (t*u(t) - 2*(t - 1 ms)*u(t - 1 ms) + (t - 2 ms)*u(t - 2 ms))"},
	"sine":     {name: "sin"}, "cosine": {name: "cos"},
	"power":      {help: "the power that a part absorbs is p[PART], its mean is mean(p[PART])"},
	"falltime":   {help: "the time to a level is last_above(X, VALUE)"},
	"peaktopeak": {help: "from peak to peak is peak(X) - trough(X)"}, "pp": {help: "from peak to peak is peak(X) - trough(X)"},
}

// linkCallee resolves the name before brackets.
func (c *checker) linkCallee(s *scope, name *NameExpr, e *CallExpr) {
	if len(name.Words) != 1 || !name.Words[0].Present() || s.lookup(name.Words[0].Text, false, false) != nil {
		c.linkName(s, name, nil)
		return
	}
	switch word := name.Words[0]; word.Text {
	case "s", "t", "pi":
		c.linkName(s, name, nil)
	default:
		if c.lostName(s.unit, word.Text) {
			c.fault()
			return
		}
		c.reportCallee(s, word, e)
	}
}

// reportCallee reports an unknown function or measure, and what is meant.
func (c *checker) reportCallee(s *scope, w Word, e *CallExpr) {
	folded := strings.ReplaceAll(strings.ToLower(w.Text), "_", "")
	file := s.unit.file
	if isQuantityLetter(strings.ToLower(w.Text)) && e.Close.End > e.Open.End && len(e.Args) > 0 {
		write := strings.ToLower(w.Text) + "[" + file.Text[e.Open.End:e.Close.Start] + "]"
		c.report(file, e.Span, "unknown-name", "there is no function or measure %s: a quantity takes square brackets, %s", w.Text, shorten(write)).
			repair(file, e.Span, write, "write "+shorten(write))
		return
	}
	f := c.report(file, w.Span, "unknown-name", "there is no function or measure %s", w.Text)
	if f.f == nil {
		return
	}
	meant, known := meantCalls[folded]
	if !known && c.suggested <= 200 {
		c.suggested++
		candidates := s.candidates(func(sym *Symbol) bool { return sym.Sort == FunctionSymbol })
		for i := range callList {
			candidates = append(candidates, callList[i].Name)
		}
		if best, ok := Nearest(w.Text, candidates); ok {
			meant.name = best
		}
	}
	if sub, ok := firstArgument(e).(*SubscriptExpr); ok && len(e.Args) == 1 && meant.name == "gain" && strings.Contains("vip", sub.Letter.Text) {
		meant.name = "abs"
	}
	if other := map[string]string{"peak": "max", "trough": "min"}[meant.name]; other != "" && len(e.Args) > 1 {
		meant.name = other
	}
	switch {
	case meant.help != "":
		f.f.Message += ": " + meant.help
	case meant.name != "":
		f.f.Message += "; did you mean " + meant.name + "?"
		f.repair(file, w.Span, meant.name, "write "+meant.name)
	default:
		f.f.Message += c.measuresFor(s, e)
	}
}

func firstArgument(e *CallExpr) Expr {
	if len(e.Args) == 0 {
		return nil
	}
	return e.Args[0]
}

// measuresFor lists the measures that fit the argument of a call.
func (c *checker) measuresFor(s *scope, e *CallExpr) string {
	groups, of := []callGroup{mathematics}, "a number"
	switch x := firstArgument(e).(type) {
	case *SubscriptExpr:
		groups, of = []callGroup{signalMeasure}, "a signal"
		if x.Letter.Text == "z" || x.Letter.Text == "y" {
			groups, of = []callGroup{functionView, functionMeasure}, "a function"
		}
	case *NameExpr:
		sym := s.visible(x.Text())
		switch {
		case sym == nil:
		case sym.Sort == FunctionSymbol:
			groups, of = []callGroup{functionView, functionMeasure}, "a function"
		case sym.Sort == PartSymbol:
			groups, of = []callGroup{partMeasure}, "a part"
		}
	}
	var names []string
	for i := range callList {
		for _, g := range groups {
			if callList[i].Group == g {
				names = append(names, callList[i].Name)
			}
		}
	}
	return "; of " + of + " there are " + strings.Join(names, ", ")
}

// reportUncalled reports a function or measure that stands without brackets.
func (c *checker) reportUncalled(s *scope, w Word) {
	info := callTable[w.Text]
	form := info.Name + "(" + strings.Join(info.Parameters[:len(info.Parameters)-info.Optional], ", ") + ")"
	f := c.report(s.unit.file, w.Span, "unknown-name", "%s takes what it is asked of in brackets: %s", w.Text, form)
	if w.Text == "natural" && f.f != nil {
		f.f.Message += "; all natural frequencies are asked with poles"
	}
}
