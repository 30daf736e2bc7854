package analyze

import (
	"context"
	"fmt"
	"strings"

	"portlight/dialect"
	"portlight/dialect/number"
)

// The view of an answer in words: lines of plain text, the most asked-for
// first, figures of at most four digits.

// Words tells an answer in lines of plain text: the answer, then its detail.
// The closed form of a signal with hundreds of poles is found only now, which
// takes its time; [WordsContext] can be stopped.
func Words(answer Answer) []string {
	lines, remarks := wordsOf(context.Background(), answer)
	return append(lines, remarks...)
}

// WordsContext is Words with a way to stop it; the error is the context's.
func WordsContext(ctx context.Context, answer Answer) ([]string, error) {
	lines, remarks := wordsOf(ctx, answer)
	return append(lines, remarks...), ctx.Err()
}

func wordsOf(ctx context.Context, answer Answer) (lines, remarks []string) {
	switch a := answer.(type) {
	case *FunctionAnswer:
		return functionWords(a), a.Remarks
	case *ValueAnswer:
		return valueWords(a), a.Remarks
	case *FactAnswer:
		return factWords(a), a.Remarks
	case *SignalAnswer:
		return signalWords(ctx, a), a.Remarks
	case *CurveAnswer:
		return curveWords(ctx, a), a.Remarks
	case *SignalValueAnswer:
		return signalValueWords(a), a.Remarks
	case *MeasureAnswer:
		return measureWords(a), a.Remarks
	case *TableAnswer:
		return tableWords(a), a.Remarks
	case *EquivalentAnswer:
		return equivalentWords(ctx, a), a.Remarks
	case *RootsAnswer:
		return rootsWords(a), a.Remarks
	case *MatrixAnswer:
		return matrixWords(a), a.Remarks
	case *InitialAnswer:
		return initialWords(a), a.Remarks
	case *RefusedAnswer:
		return []string{"no answer: " + a.Why}, a.Remarks
	}
	return []string{"no answer"}, nil
}

// inFloat is what is said of figures that are not proved.
const inFloat = "computed in double precision: its digits rest on an error estimate, not on a proof"

func unproved(lines []string, proved bool) []string {
	if !proved {
		lines = append(lines, inFloat)
	}
	return lines
}

// joinSentences puts reasons one after the other.
func joinSentences(list []string) string { return strings.Join(list, "; ") }

func valueWords(a *ValueAnswer) []string {
	if !a.Complex {
		text := quantity(a.Value.Re, a.Dimension)
		if a.Dimension.Frequency && !a.Hertz {
			text = figure(a.Value.Re, "rad/s")
		}
		if sign, ok := a.Value.Re.Sign(); ok && sign > 0 && a.Dimension == dialect.DimensionNumber && strings.HasPrefix(a.Text, "gain(") {
			text += ", " + figure(decibels(a.Value.Re), "dB")
		}
		return unproved([]string{text}, a.Proved)
	}
	unit := a.Dimension.Unit()
	if a.Magnitude.ContainsZero() {
		// Zero has no angle.
		return unproved([]string{figure(a.Magnitude, unit)}, a.Proved)
	}
	polar := figure(a.Magnitude, unit) + " ∠ " + figure(a.Phase, "°")
	if a.Dimension == dialect.DimensionNumber {
		if sign, ok := a.Magnitude.Sign(); ok && sign > 0 {
			polar += ", " + figure(decibels(a.Magnitude), "dB")
		}
	}
	lines := []string{polar, cartesian(a.Value, unit)}
	if alike := looksLike(a); alike != "" {
		lines = append(lines, alike)
	}
	return unproved(lines, a.Proved)
}

// cartesian writes z as real part ± j·imaginary part.
func cartesian(z number.ComplexBall, unit string) string {
	sign, im := " + j·", z.Im
	if s, ok := im.Sign(); ok && s < 0 {
		sign, im = " "+minus+" j·", im.Neg()
	}
	return figure(z.Re, unit) + sign + figure(im, unit)
}

// looksLike says what an impedance is like at one frequency: a resistance in
// series with an inductance or a capacitance; an admittance: in parallel.
func looksLike(a *ValueAnswer) string {
	if a.At == nil {
		return ""
	}
	series, joined := a.Dimension == dialect.DimensionResistance, " in series with "
	if !series {
		if a.Dimension != dialect.DimensionConductance {
			return ""
		}
		joined = " in parallel with "
	}
	omega := number.BallFromExact(a.At.Value, figurePrecision)
	sign, decided := a.Value.Im.Sign()
	if positive, ok := omega.Sign(); !ok || positive <= 0 || !decided || sign == 0 {
		return ""
	}
	size := a.Value.Im.Abs()
	real, realUnit := a.Value.Re, "Ω"
	if !series {
		if s, ok := real.Sign(); !ok || s == 0 {
			realUnit = ""
		} else {
			real = real.Inv()
		}
	}
	// Reactance is ωL or −1/ωC, susceptance ωC or −1/ωL.
	units := [2]string{"H", "F"}
	if !series {
		units = [2]string{"F", "H"}
	}
	reactive, unit := size.Quo(omega), units[0]
	if sign < 0 {
		reactive, unit = size.Mul(omega).Inv(), units[1]
	}
	text := figure(reactive, unit)
	if realUnit != "" && !(real.IsExact() && real.ContainsZero()) {
		text = figure(real, realUnit) + joined + text
	}
	return "like " + text + " at this frequency"
}

func factWords(a *FactAnswer) []string {
	text := "no"
	if a.True {
		text = "yes"
	}
	if a.Why != "" {
		text += ": " + a.Why
	}
	return unproved([]string{text}, a.Proved)
}

func signalValueWords(a *SignalValueAnswer) []string {
	unit := a.Dimension.Unit()
	parts := func(zi, zs number.Ball) string {
		return "zero-input part " + figure(zi, unit) + ", zero-state part " + figure(zs, unit)
	}
	lines := []string{figure(a.Total, unit), parts(a.ZeroInput, a.ZeroState)}
	if a.Jump {
		lines = append(lines, "just before: "+figure(a.BeforeTotal, unit)+" ("+parts(a.BeforeZeroInput, a.BeforeZeroState)+")")
	}
	for k, w := range a.Impulses {
		if !(w.IsExact() && w.ContainsZero()) {
			lines = append(lines, "with "+impulseWords(k, figure(w, impulseUnit(a.Dimension, k))))
		}
	}
	return unproved(lines, a.Proved)
}

// impulseUnit is the unit of the weight of the k-th derivative of δ(t).
func impulseUnit(d dialect.Dimension, k int) string {
	seconds, ok := dialect.DimensionTime.Power(k + 1)
	if ok {
		if d, ok = d.Times(seconds); ok {
			return d.Unit()
		}
	}
	return ""
}

func impulseWords(k int, weight string) string {
	switch k {
	case 0:
		return "an impulse of " + weight
	case 1:
		return "the derivative of an impulse, weight " + weight
	}
	return fmt.Sprintf("the derivative number %d of an impulse, weight %s", k, weight)
}

func measureWords(a *MeasureAnswer) []string {
	text := quantity(a.Value, a.Dimension)
	switch a.Measure {
	case "overshoot":
		text = figure(a.Value.MulInt(100), "%")
	case "phase":
		if a.Dimension.Dimensionless() && !a.Dimension.Angle {
			text = figure(a.Value, "°")
		}
	}
	if a.HasWhere {
		text += " at " + where(a.Where, a.InTime)
	}
	return unproved([]string{text}, a.Proved)
}

// where writes an instant or a frequency.
func where(at number.Ball, inTime bool) string {
	if inTime {
		return figure(at, "s")
	}
	return figure(hertz(at), "Hz")
}

// tableRows is how many rows of a table are told in words.
const tableRows = 16

func tableWords(a *TableAnswer) []string {
	cells := [][]string{make([]string, len(a.Columns))}
	for i, c := range a.Columns {
		cells[0][i] = columnTitle(c)
	}
	step := max(1, (len(a.Rows)+tableRows-1)/tableRows)
	for i := 0; i < len(a.Rows); i += step {
		row := make([]string, len(a.Rows[i]))
		for j, b := range a.Rows[i] {
			row[j] = figure(b, columnUnit(a.Columns[j]))
		}
		cells = append(cells, row)
	}
	lines := alignColumns(cells)
	if step > 1 {
		lines = append(lines, fmt.Sprintf("one row in %d of %d", step, len(a.Rows)))
	}
	return unproved(lines, a.Proved)
}

func columnTitle(c Column) string {
	switch c.Name {
	case "Hz", "rad/s":
		return "frequency"
	case "s":
		return "time"
	case "phase_deg":
		return "phase"
	}
	return strings.ReplaceAll(c.Name, "_", "-")
}

// alignColumns pads cells to columns of even width, figures to the right.
func alignColumns(rows [][]string) []string {
	widths := map[int]int{}
	for _, r := range rows {
		for i, c := range r {
			widths[i] = max(widths[i], len([]rune(c)))
		}
	}
	lines := make([]string, len(rows))
	for i, r := range rows {
		var b strings.Builder
		for j, c := range r {
			if j > 0 {
				b.WriteString("   ")
			}
			b.WriteString(strings.Repeat(" ", widths[j]-len([]rune(c))) + c)
		}
		lines[i] = b.String()
	}
	return lines
}

func equivalentWords(ctx context.Context, a *EquivalentAnswer) []string {
	var lines []string
	tell := func(title string, there bool, words func() []string, why string) {
		if !there {
			if why != "" {
				lines = append(lines, title+": none, "+why)
			}
			return
		}
		w := words()
		lines = append(lines, title+": "+w[0])
		for _, l := range w[1:] {
			lines = append(lines, "  "+l)
		}
	}
	impedance := func() {
		tell("impedance", a.Impedance != nil, func() []string { return functionWords(a.Impedance) }, a.WhyImpedance)
	}
	voltage := func() {
		tell("open-circuit voltage", a.OpenCircuit != nil, func() []string { return signalWords(ctx, a.OpenCircuit) }, a.WhyOpenCircuit)
	}
	current := func() {
		tell("short-circuit current", a.ShortCircuit != nil, func() []string { return signalWords(ctx, a.ShortCircuit) }, a.WhyShortCircuit)
	}
	if a.Norton {
		current()
		impedance()
		voltage()
		return lines
	}
	voltage()
	impedance()
	current()
	return lines
}

func matrixWords(a *MatrixAnswer) []string {
	if !a.Exists {
		return []string{"does not exist: " + a.Why}
	}
	var lines []string
	names := [2][2]string{}
	for i := range 2 {
		for j := range 2 {
			names[i][j] = a.Set + subscript(i+1) + subscript(j+1)
		}
	}
	if a.Set == "abcd" {
		names = [2][2]string{{"A", "B"}, {"C", "D"}}
	}
	var shared corners // entries mostly have the same poles
	for i := range 2 {
		for j := range 2 {
			lines = append(lines, names[i][j]+" = "+shared.factored(&a.Entries[i][j]))
		}
	}
	lines = append(lines, shared.lines...)
	if facts := factList(a.Facts); facts != "" {
		lines = append(lines, facts)
	}
	return lines
}

func factList(facts map[string]bool) string {
	var said []string
	for _, name := range []string{"reciprocal", "symmetric", "passive", "lossless"} {
		if is, known := facts[name]; known {
			if !is {
				name = "not " + name
			}
			said = append(said, name)
		}
	}
	return strings.Join(said, ", ")
}

func initialWords(a *InitialAnswer) []string {
	if len(a.Parts) == 0 {
		return []string{"nothing stores energy here"}
	}
	cells := [][]string{{"", "before 0", "after 0"}}
	for _, p := range a.Parts {
		unit := p.Dimension.Unit()
		cells = append(cells, []string{p.Part, exactFigure(p.Before, unit), exactFigure(p.After, unit)})
	}
	return alignColumns(cells)
}

// VerdictShort tells the outcome of a limit in a few words, to stand beside
// its line: the decision and the margin.
func VerdictShort(v Verdict) string {
	text := v.Decision.String()
	switch {
	case v.Decision == Holds && v.InTolerance == Broken:
		return text + ", but not within the tolerances"
	case v.HasMargin && v.Decision == Holds:
		text += " with " + quantity(v.Margin, v.Dimension) + " to spare"
	case v.HasMargin && v.Decision == Broken:
		text += " by " + quantity(v.Margin.Abs(), v.Dimension)
	}
	return text
}

// VerdictWords tells the outcome of a limit in one line.
func VerdictWords(v Verdict) string {
	var b strings.Builder
	b.WriteString(v.Decision.String())
	if v.HasMargin {
		switch v.Decision {
		case Holds:
			b.WriteString(" with " + quantity(v.Margin, v.Dimension) + " to spare")
		case Broken:
			b.WriteString(" by " + quantity(v.Margin.Abs(), v.Dimension))
		}
		b.WriteString(": " + quantity(v.Worst, v.Dimension))
		if v.HasWhere {
			b.WriteString(" at " + where(v.Where, v.InTime))
		}
	}
	if v.Why != "" {
		b.WriteString(": " + v.Why)
	}
	if v.Decision == Holds && v.InTolerance == Undecided && v.Searched {
		b.WriteString("; within the tolerances " + quantity(v.CornerMargin, v.Dimension) + " to spare at the worst point found (searched, not proved)")
	}
	if v.Decision == Holds && v.InTolerance == Broken {
		b.WriteString("; broken within the tolerances")
		if sign, ok := v.CornerMargin.Sign(); ok && sign < 0 {
			b.WriteString(" by " + quantity(v.CornerMargin.Abs(), v.Dimension) + " (" + quantity(v.CornerWorst, v.Dimension) + ")")
		}
		if v.Corner != "" {
			b.WriteString(", with " + v.Corner)
		}
	}
	if v.Decision != Undecided && !v.Proved {
		b.WriteString("; " + inFloat)
	}
	return b.String()
}
