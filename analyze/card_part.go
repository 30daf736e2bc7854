package analyze

import (
	"fmt"
	"slices"
	"strings"

	"portlight/dialect"
)

// part: value with tolerance and preferred neighbour, voltage and current in
// time, power and energy, the impedance seen by it.
func (c *cardMaker) part(i int) {
	p := &c.a.description.Parts[i]
	c.Title = p.Kind.String() + " " + p.Name
	if p.ValueText != "" {
		c.Title += " = " + p.ValueText
	}
	if p.Tolerance != nil {
		c.Title += " " + p.Tolerance.Text
	}
	c.tolerance(p)
	if !wired(p) {
		c.Answer = append(c.Answer, "not wired yet")
		return
	}
	switch p.Kind {
	case dialect.OpAmp:
		c.signal("i[" + p.Name + ".output]")
		return
	case dialect.Transformer, dialect.Coupling:
		c.coupling(p)
		return
	case dialect.VoltageSource, dialect.CurrentSource:
		c.source(p)
	}
	c.signal("v[" + p.Name + "]")
	c.summary("i[" + p.Name + "]")
	if text := c.sizeOf("mean(p[" + p.Name + "])"); text != "" {
		c.Detail = append(c.Detail, "mean power "+text)
	}
	if text := c.sizeOf("energy(" + p.Name + ")"); text != "" {
		c.Detail = append(c.Detail, "energy absorbed "+text)
	}
	c.askAt("z[" + p.Name + "]")
}

// tolerance tells the range that a tolerance leaves, and the preferred neighbours.
func (c *cardMaker) tolerance(p *dialect.Part) {
	if p.Tolerance != nil {
		unit := valueUnit(p)
		c.Detail = append(c.Detail, fmt.Sprintf("between %s and %s",
			exactFigure(p.Tolerance.Low, unit), exactFigure(p.Tolerance.High, unit)))
	}
	switch p.Kind {
	case dialect.Resistor, dialect.Capacitor, dialect.Inductor:
		series, below, above := c.a.checked.Neighbours(p.Kind, p.Tolerance, p.Value)
		switch {
		case series != "" && below == nil:
			c.Detail = append(c.Detail, "a preferred value of "+series)
		case series != "":
			unit := valueUnit(p)
			c.Detail = append(c.Detail, fmt.Sprintf("between %s and %s of %s", exactFigure(*below, unit), exactFigure(*above, unit), series))
		}
	}
}

// source tells a waveform and its transform.
func (c *cardMaker) source(p *dialect.Part) {
	if p.Dependent != nil {
		c.Detail = append(c.Detail, "a dependent source: its value follows from the network")
		return
	}
	if p.Waveform == nil {
		return
	}
	if text := transformText(waveOf(p.Waveform)); text != "" {
		c.Detail = append(c.Detail, "transform: "+text)
	}
}

// coupling tells what couples.
func (c *cardMaker) coupling(p *dialect.Part) {
	if p.Kind == dialect.Coupling {
		a, b := c.a.description.Parts[p.Coils[0]].Name, c.a.description.Parts[p.Coils[1]].Name
		c.Answer = append(c.Answer, fmt.Sprintf("couples %s and %s, dots at their left nodes", a, b))
		return
	}
	for _, w := range p.Windings {
		c.summary("i[" + p.Name + "." + w.Name + "]")
	}
}

// let: value, unit, what uses it.
func (c *cardMaker) let(i int, s *dialect.Symbol) {
	l := c.a.description.Lets[i]
	c.Title = "constant " + l.Name
	if k, ok := l.Value.(*dialect.Constant); ok {
		c.Answer = append(c.Answer, constantText(k))
		if !k.Value.IsExact() && !k.Hertz {
			c.Detail = append(c.Detail, "irrational: carried with a bound of its error, to 75 digits or more")
		}
	}
	lines := map[int]bool{}
	uses := 0
	for _, r := range s.References {
		if !r.Definition {
			uses++
			lines[r.File.Lines.Line(r.Span.Start)] = true
		}
	}
	c.Detail = append(c.Detail, fmt.Sprintf("used %s on %s", times(uses, "time"), times(len(lines), "line")))
}

// values: what a parameter, or a constant of a used file or of a body, stands
// for, once for each use where they differ.
func (c *cardMaker) values(s *dialect.Symbol) {
	c.Title = s.Sort.String() + " " + s.Name
	var texts []string
	for _, x := range c.a.checked.Values(s) {
		if k, ok := x.(*dialect.Constant); ok && !slices.Contains(texts, constantText(k)) {
			texts = append(texts, constantText(k))
		}
	}
	switch {
	case len(texts) == 0:
		c.Answer = append(c.Answer, "no use gives it a value")
	case len(texts) == 1:
		c.Answer = append(c.Answer, texts[0])
	default:
		c.Answer = append(c.Answer, strings.Join(limited(texts, 6), ", ")+", by use")
	}
}

func times(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// subnetwork: its terminals and parameters.
func (c *cardMaker) subnetwork(s *dialect.Symbol) {
	c.Title = "subnetwork " + s.Name
	c.Answer = append(c.Answer, "terminals "+list(symbolNames(s.Terminals)))
	if len(s.Parameters) > 0 {
		c.Detail = append(c.Detail, "parameters "+list(symbolNames(s.Parameters)))
	}
	c.Detail = append(c.Detail, fmt.Sprintf("used %s", times(len(s.References)-1, "time")))
}

func symbolNames(ss []*dialect.Symbol) []string {
	var out []string
	for _, s := range ss {
		out = append(out, s.Name)
	}
	return out
}

// use: what it is made of.
func (c *cardMaker) use(s *dialect.Symbol) {
	c.Title = "part " + s.Name
	if s.Of != nil {
		c.Title += " = " + s.Of.Name
	}
	names := c.a.partNames(c.a.checked.Indices(s))
	c.Answer = append(c.Answer, "made of "+list(names))
	if s.Of != nil && c.Doc == "" {
		c.Doc = s.Of.Doc()
	}
}
