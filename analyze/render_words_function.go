package analyze

import (
	"fmt"
	"math/big"
	"strings"

	"portlight/analyze/exact"
	"portlight/dialect"
	"portlight/dialect/number"
)

// functionWords tells a network function: in element names while that stays
// readable, as constant times normalised factors, its limits, and its corners.
func functionWords(a *FunctionAnswer) []string {
	var lines []string
	if a.Formula != "" {
		lines = append(lines, formulaLine(a))
	}
	var c corners
	lines = append(lines, c.factored(a))
	if n := len(c.lines); n > cornerLimit {
		c.lines = append(c.lines[:cornerLimit], fmt.Sprintf("and %d more corners", n-cornerLimit))
	}
	lines = append(lines, c.lines...)
	if !a.Ratio.IsConstant() {
		lines = append(lines, limitsOf(a))
	}
	if len(a.Hidden) > 0 {
		figures := rootFigures(a.Hidden)
		lines = append(lines, fmt.Sprintf("hidden: the network also has the natural frequenc%s %s, which this does not show",
			plural(len(figures)), list(figures)))
	}
	return lines
}

// formulaLine writes a formula as an equation: what was asked, in whichever
// state of the network, is the formula.
func formulaLine(a *FunctionAnswer) string {
	asked := strings.TrimSpace(a.Text)
	for _, state := range []string{" with ", " without "} {
		asked, _, _ = strings.Cut(asked, state)
	}
	return strings.TrimSpace(asked) + " = " + a.Formula
}

// factorLimit is how many factors are written out; beyond it the corners
// alone are listed.
const factorLimit = 8

// cornerLimit is how many corners are listed with a function; its poles and
// zeros can be asked for by themselves.
const cornerLimit = 12

// corners collects what the symbols in the factors of functions mean.
type corners struct {
	lines []string
	index map[[2]string]string // of a root, by its figures
}

// factored writes K·sⁿ·Π(1 + s/ω)… / Π…
func (c *corners) factored(a *FunctionAnswer) string {
	f := a.Ratio
	if f.IsZero() {
		return "0"
	}
	n, d := f.Num.Order(), f.Den.Order()
	k := new(big.Rat).Quo(f.Num.Coeff(n), f.Den.Coeff(d))
	top := c.factors(a.Zeros)
	bottom := c.factors(a.Poles)
	constant := constantFactor(k, n-d, a.Dimension)
	if len(top)+len(bottom) > factorLimit {
		return fmt.Sprintf("a ratio of degree %d over %d, lowest term %s", f.Num.Degree(), f.Den.Degree(), constant)
	}
	// A constant 1 goes without saying before other factors.
	over := append([]string{constant}, top...)
	if constant == "1" && len(top) > 0 {
		over = top
	}
	body := strings.Join(over, "·")
	switch len(bottom) {
	case 0:
	case 1:
		body += " / " + bottom[0]
	default:
		body += " / (" + strings.Join(bottom, "·") + ")"
	}
	return body
}

// constantFactor writes k·s^power with the unit that makes it the dimension
// asked for: an inductance for a resistance at power 1.
func constantFactor(k *big.Rat, power int, d dialect.Dimension) string {
	if power == 0 {
		return ratFigure(k, d.Unit())
	}
	if inverse := inverseElement(k, power, d); inverse != "" {
		return inverse
	}
	unit := d.Unit()
	if seconds, ok := dialect.DimensionTime.Power(power); ok {
		if dd, ok := d.Times(seconds); ok {
			unit = dd.Unit()
		}
	}
	text := "s"
	if power != 1 {
		text = "s" + superscript(power)
	}
	return text + "·" + ratFigure(k, unit)
}

// inverseElement writes 1/(s·C) and 1/(s·L) as such.
func inverseElement(k *big.Rat, power int, d dialect.Dimension) string {
	if power != -1 || k.Sign() <= 0 {
		return ""
	}
	switch d {
	case dialect.DimensionResistance:
		return "1/(s·" + ratFigure(new(big.Rat).Inv(k), "F") + ")"
	case dialect.DimensionConductance:
		return "1/(s·" + ratFigure(new(big.Rat).Inv(k), "H") + ")"
	}
	return ""
}

// factors writes one factor for every real root and every conjugate pair
// other than zero.
func (c *corners) factors(roots []exact.Root) []string {
	var list []string
	for _, r := range roots {
		if atOrigin(r) || lowerHalf(r) {
			continue
		}
		index := c.symbol(r)
		name := "ω" + index
		var text string
		if onRealAxis(r) {
			sign := "+"
			if s, ok := r.Re.Sign(); ok && s > 0 {
				sign = minus
			}
			text = "(1 " + sign + " s/" + name + ")"
		} else {
			damping := "2ζ" + index + "·s/" + name + " + "
			if onImaginaryAxis(r) {
				damping = ""
			}
			text = "(1 + " + damping + "(s/" + name + ")²)"
		}
		if r.Multiplicity > 1 {
			text += superscript(r.Multiplicity)
		}
		list = append(list, text)
	}
	return list
}

// symbol numbers a root, notes what its symbol means and gives the index.
func (c *corners) symbol(r exact.Root) string {
	key := [2]string{decimal(r.Re), decimal(r.Im)}
	if known, ok := c.index[key]; ok {
		return known
	}
	if c.index == nil {
		c.index = map[[2]string]string{}
	}
	index := subscript(len(c.lines) + 1)
	c.index[key] = index
	c.lines = append(c.lines, "with ω"+index+" = 2π·"+cornerFigure(r, index))
	return index
}

// cornerFigure is a root's corner frequency, and the damping of a pair.
func cornerFigure(r exact.Root, index string) string {
	if onRealAxis(r) {
		return figure(hertz(r.Re.Abs()), "Hz")
	}
	radius := number.ComplexBall{Re: r.Re, Im: r.Im}.Abs()
	text := figure(hertz(radius), "Hz")
	if onImaginaryAxis(r) {
		return text + ", undamped"
	}
	zeta := r.Re.Neg().Quo(radius)
	text += ", ζ" + index + " = " + figure(zeta, "")
	if s, ok := zeta.Sign(); ok && s > 0 {
		text += " (quality " + figure(zeta.MulInt(2).Inv(), "") + ")"
	}
	return text
}

func isZero(b number.Ball) bool { return b.IsExact() && b.ContainsZero() }

func onRealAxis(r exact.Root) bool      { return isZero(r.Im) }
func onImaginaryAxis(r exact.Root) bool { return isZero(r.Re) }
func atOrigin(r exact.Root) bool        { return isZero(r.Re) && isZero(r.Im) }

// lowerHalf tells whether the root is the conjugate that goes without saying.
func lowerHalf(r exact.Root) bool {
	s, ok := r.Im.Sign()
	return ok && s < 0
}

// limitsOf tells the values at frequency zero and at very high frequency.
func limitsOf(a *FunctionAnswer) string {
	f := a.Ratio
	unit := a.Dimension.Unit()
	value := func(power int, k *big.Rat) string {
		switch {
		case power > 0:
			return "0"
		case power < 0:
			return "without bound"
		}
		return ratFigure(k, unit)
	}
	if f.IsZero() {
		return "0 at all frequencies"
	}
	low := value(f.Num.Order()-f.Den.Order(), new(big.Rat).Quo(f.Num.Coeff(f.Num.Order()), f.Den.Coeff(f.Den.Order())))
	high := value(f.Den.Degree()-f.Num.Degree(), new(big.Rat).Quo(f.Num.Leading(), f.Den.Leading()))
	return "at DC " + low + ", at high frequency " + high
}

// rootFigure writes a root in the s-plane, in rad/s.
func rootFigure(r exact.Root) string {
	switch {
	case atOrigin(r):
		return "0"
	case onRealAxis(r):
		return figure(r.Re, "rad/s")
	case onImaginaryAxis(r):
		return "±j·" + figure(r.Im.Abs(), "rad/s")
	}
	return figure(r.Re, "rad/s") + " ± j·" + figure(r.Im.Abs(), "rad/s")
}

func rootsWords(a *RootsAnswer) []string {
	if len(a.Roots) == 0 {
		if a.Zeros {
			return []string{"no zeros"}
		}
		return []string{"no poles"}
	}
	cells := [][]string{}
	for i, r := range a.Roots {
		if lowerHalf(r) {
			continue
		}
		row := []string{rootFigure(r), rootMeaning(r)}
		if r.Multiplicity > 1 {
			row[1] += fmt.Sprintf(", %d-fold", r.Multiplicity)
		}
		if i < len(a.Hidden) && a.Hidden[i] {
			row[1] += ", hidden"
		}
		cells = append(cells, row)
	}
	lines := make([]string, len(cells))
	width := 0
	for _, row := range cells {
		width = max(width, len([]rune(row[0])))
	}
	for i, row := range cells {
		lines[i] = row[0] + strings.Repeat(" ", width-len([]rune(row[0]))) + "   " + row[1]
	}
	return lines
}

// rootMeaning says what a root is in a designer's terms.
func rootMeaning(r exact.Root) string {
	switch {
	case atOrigin(r):
		return "at the origin"
	case onRealAxis(r):
		text := "corner " + cornerFigure(r, "") + ", time constant " + figure(r.Re.Abs().Inv(), "s")
		if s, ok := r.Re.Sign(); ok && s > 0 {
			text += ", in the right half plane"
		}
		return text
	}
	text := cornerFigure(r, "")
	if s, ok := r.Re.Sign(); ok && s > 0 {
		text += ", in the right half plane"
	}
	return text
}
