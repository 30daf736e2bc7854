package analyze

import (
	"context"
	"fmt"
	"strings"
	"time"

	"portlight/dialect"
	"portlight/dialect/number"
)

// cardMaker fills a card by asking the questions a reader would.
type cardMaker struct {
	Card
	a     *Analysis
	ctx   context.Context
	hertz string // where impedances are shown
}

// ask answers a question, nil when there is no answer.
func (c *cardMaker) ask(question string) Answer {
	if c.a.description.Faults {
		return nil
	}
	answer, err := c.a.Ask(c.ctx, question)
	if err != nil {
		return nil
	}
	if _, refused := answer.(*RefusedAnswer); refused {
		return nil
	}
	return answer
}

// answer adds the first line of an answer, the reason where there is none.
func (c *cardMaker) answer(question string) {
	if c.a.description.Faults {
		c.faults()
		return
	}
	answer, err := c.a.Ask(c.ctx, question)
	if err != nil {
		return
	}
	lines := Words(answer)
	if len(lines) > 0 {
		c.Answer = append(c.Answer, lines[0])
		c.Detail = append(c.Detail, limited(lines[1:], 6)...)
	}
	if c.Picture == nil {
		c.Picture = pictureOf(c.ctx, answer)
	}
}

func (c *cardMaker) faults() {
	text := "no answers until the errors of this file are mended"
	if len(c.Answer) == 0 {
		c.Answer = append(c.Answer, text)
	}
}

// askAt adds an impedance at the frequency of interest.
func (c *cardMaker) askAt(what string) {
	if c.a.description.Faults {
		c.faults()
		return
	}
	answer, err := c.a.Ask(c.ctx, what+" at "+c.hertz)
	if err != nil {
		return
	}
	if refused, ok := answer.(*RefusedAnswer); ok {
		c.Answer = append(c.Answer, what+": "+strings.TrimPrefix(refused.Why, what+": "))
		return
	}
	c.Answer = append(c.Answer, fmt.Sprintf("%s at %s: %s", what, c.nice(), strings.Join(inOneLine(answer), "; ")))
}

// inOneLine is what a card says of an impedance: magnitude and angle, the
// parts it looks like, and the first remark.
func inOneLine(answer Answer) []string {
	lines := Words(answer)
	if len(lines) == 0 {
		return nil
	}
	out := lines[:1:1]
	for _, l := range lines[1:] {
		if like, ok := strings.CutSuffix(l, " at this frequency"); ok {
			out = append(out, like)
		}
	}
	if v, ok := answer.(*ValueAnswer); ok && len(v.Remarks) > 0 {
		out = append(out, v.Remarks[0])
	}
	return out
}

// nice is the frequency of interest with a prefix.
func (c *cardMaker) nice() string {
	value, err := number.Parse(strings.TrimSuffix(c.hertz, " Hz"))
	if err != nil {
		return c.hertz
	}
	return figure(ballOf(value), "Hz")
}

// detail adds the lines of an answer below the answer itself.
func (c *cardMaker) detail(question string) {
	if answer := c.ask(question); answer != nil {
		c.Detail = append(c.Detail, limited(Words(answer), 6)...)
		if c.Picture == nil {
			c.Picture = pictureOf(c.ctx, answer)
		}
	}
}

// figureOf is the figure of a measure or value, "" when there is none.
func (c *cardMaker) figureOf(question string) string {
	switch answer := c.ask(question).(type) {
	case *MeasureAnswer:
		text := quantity(answer.Value, answer.Dimension)
		if answer.HasWhere && answer.Measure != "settle" {
			text += " at " + where(answer.Where, answer.InTime)
		}
		return text
	case *SignalValueAnswer:
		return quantity(answer.Total, answer.Dimension)
	case *ValueAnswer:
		return quantity(answer.Value.Re, answer.Dimension)
	}
	return ""
}

// sizeOf is figureOf, "" too for a figure that only cannot be told from zero.
func (c *cardMaker) sizeOf(question string) string {
	if m, ok := c.ask(question).(*MeasureAnswer); ok && m.Value.ContainsZero() && !m.Value.IsExact() {
		return ""
	}
	return c.figureOf(question)
}

// summary adds one line with the figures of a signal.
func (c *cardMaker) summary(signal string) {
	if c.a.description.Faults {
		c.faults()
		return
	}
	if still, ok := c.constant(signal); ok {
		c.Answer = append(c.Answer, signal+": "+still+" at all times from 0 on")
		return
	}
	var parts []string
	hurry, stop := context.WithTimeout(c.ctx, cardPatience)
	defer stop()
	patient := c.ctx
	c.ctx = hurry
	for _, q := range []struct{ label, question string }{
		{"%s at 0+", signal + " at 0 s"},
		{"%s finally", "final(" + signal + ")"},
		{"peak %s", "peak(" + signal + ")"},
		{"trough %s", "trough(" + signal + ")"},
	} {
		if text := c.figureOf(q.question); text != "" {
			parts = append(parts, fmt.Sprintf(q.label, text))
		}
	}
	c.ctx = patient
	if len(parts) > 0 {
		c.Answer = append(c.Answer, signal+": "+strings.Join(parts, ", "))
	}
}

// cardPatience is how long the figures of one line may take: a reader points
// and goes on. What is not there by then can be asked with tell.
const cardPatience = 300 * time.Millisecond

// constant tells whether a signal has one value from 0 on.
func (c *cardMaker) constant(signal string) (string, bool) {
	answer, ok := c.ask(signal).(*SignalAnswer)
	if !ok {
		return "", false
	}
	pieces, err := answer.Signal.Pieces(c.ctx, 6)
	if err != nil || len(pieces) > 1 || len(pieces) == 1 && (len(pieces[0].Impulses) > 0 || pieces[0].From.Rat().Sign() != 0 || pieces[0].Until != nil) {
		return "", false
	}
	value := number.BallFromInt(0, figurePrecision)
	for _, p := range pieces {
		if len(p.Terms) > 1 || len(p.Terms) == 1 && (p.Terms[0].Power > 0 || !p.Terms[0].Pole.IsExact() || !p.Terms[0].Pole.ContainsZero()) {
			return "", false
		}
		for _, t := range p.Terms {
			value = t.Coefficient.Re
		}
	}
	return quantity(value, answer.Dimension), true
}

// signal adds a voltage or current: its figures, then what causes it.
func (c *cardMaker) signal(signal string) {
	c.summary(signal)
	answer, ok := c.ask(signal).(*SignalAnswer)
	if !ok {
		if !c.a.description.Faults {
			c.refusal(signal)
		}
		return
	}
	if _, still := c.constant(signal); still {
		c.shares(signal)
		return
	}
	lines := Words(answer)
	c.Detail = append(c.Detail, limited(lines, 6)...)
	if c.Picture == nil {
		c.Picture = pictureOf(c.ctx, answer)
	}
	c.shares(signal)
}

// refusal says why a signal has no answer.
func (c *cardMaker) refusal(question string) {
	answer, err := c.a.Ask(c.ctx, question)
	if refused, ok := answer.(*RefusedAnswer); err == nil && ok {
		c.Answer = append(c.Answer, question+": "+refused.Why)
	}
}

// shares adds what each source contributes in the end, or at its peak.
func (c *cardMaker) shares(signal string) {
	sources := c.a.independentSources()
	if len(sources) < 2 || len(sources) > 6 {
		return
	}
	var parts []string
	for _, i := range sources {
		name := c.a.description.Parts[i].Name
		due := fmt.Sprintf("due(%s, %s)", signal, name)
		text := c.figureOf("final(" + due + ")")
		if text == "" {
			text = c.figureOf("peak(" + due + ")")
		}
		if text != "" {
			parts = append(parts, name+" "+text)
		}
	}
	if len(parts) > 0 {
		c.Detail = append(c.Detail, "share of each source: "+strings.Join(parts, ", "))
	}
}

// node: what it joins, its impedance to ground, its voltage.
func (c *cardMaker) node(n int) {
	node := c.a.description.Nodes[n]
	c.Title = "node " + node.Name
	var names []string
	for i := range c.a.description.Parts {
		if c.touches(i, n) {
			names = append(names, c.a.description.Parts[i].Name)
		}
	}
	c.Title += " joins " + list(names)
	if n == c.a.description.Ground {
		c.Title += "; it is the reference, 0 V"
		c.Answer = append(c.Answer, "every v[NODE] is measured from here")
		return
	}
	if strings.Contains(node.Name, " ") || node.Name == "" {
		return
	}
	c.askAt("z[" + node.Name + "]")
	c.signal("v[" + node.Name + "]")
	if z, ok := c.ask("z[" + node.Name + "]").(*FunctionAnswer); ok && !z.Ratio.IsZero() {
		c.Detail = append(c.Detail, limited(Words(z), 3)...)
	}
}

// touches tells whether a part has a terminal at a node.
func (c *cardMaker) touches(part, n int) bool {
	p := &c.a.description.Parts[part]
	switch p.Kind {
	case dialect.OpAmp:
		return p.Plus == n || p.Minus == n || p.Output == n
	case dialect.Transformer:
		for _, w := range p.Windings {
			if w.Plus == n || w.Minus == n {
				return true
			}
		}
		return false
	case dialect.Coupling:
		return false
	}
	return p.From == n || p.To == n
}

// port: impedance, then both equivalents.
func (c *cardMaker) port(i int) {
	p := c.a.description.Ports[i]
	c.Title = fmt.Sprintf("port %s, + at %s, − at %s", p.Name, c.a.nodeName(p.Plus), c.a.nodeName(p.Minus))
	c.askAt("z[" + p.Name + "]")
	if answer, ok := c.ask("thevenin[" + p.Name + "]").(*EquivalentAnswer); ok {
		c.Detail = append(c.Detail, limited(Words(answer), 9)...)
		if answer.OpenCircuit != nil {
			c.Picture = pictureOf(c.ctx, answer.OpenCircuit)
		}
	}
	c.portFacts(i)
}

// portFacts adds what is decided about the two-port between this port and the
// next, where the file has exactly two.
func (c *cardMaker) portFacts(i int) {
	if len(c.a.description.Ports) != 2 || c.a.description.Faults {
		return
	}
	tp, err := c.a.twoPort(c.ctx, [2]int{0, 1}, configuration{})
	if err != nil {
		return
	}
	facts, err := tp.facts(c.ctx)
	if err == nil {
		c.Detail = append(c.Detail, fmt.Sprintf("between %s and %s: %s",
			c.a.description.Ports[0].Name, c.a.description.Ports[1].Name, factList(facts)))
	}
}

// function: formula, limits, poles and zeros, bandwidth.
func (c *cardMaker) function(i int) {
	f := c.a.description.Functions[i]
	c.Title = "function " + f.Name
	c.answer(f.Name)
	if text := c.figureOf("bandwidth(" + f.Name + ")"); text != "" {
		c.Detail = append(c.Detail, "bandwidth "+text)
	}
}
