package analyze

import (
	"bytes"
	"context"
	"encoding/json"
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect"
	"portlight/dialect/number"
)

// The JSON view of an answer. Exact rationals are strings "p/q" or "p",
// computed reals decimal strings; every field of an answer's kind is always
// there, in the order of its struct.

// JSON gives the value whose encoding is the answer's JSON object.
func JSON(answer Answer) any { return viewOf(context.Background(), answer) }

// JSONContext is JSON with a way to stop it; the error is the context's.
func JSONContext(ctx context.Context, answer Answer) (any, error) {
	v := viewOf(ctx, answer)
	return v, ctx.Err()
}

func viewOf(ctx context.Context, answer Answer) any {
	switch a := answer.(type) {
	case *FunctionAnswer:
		return functionJSON(a)
	case *ValueAnswer:
		return valueJSON(a)
	case *FactAnswer:
		return factView{head(a.Question, "fact"), a.True, a.Why, a.Proved}
	case *SignalAnswer:
		return signalJSON(ctx, a)
	case *CurveAnswer:
		return curveJSON(ctx, a)
	case *SignalValueAnswer:
		return signalValueJSON(a)
	case *MeasureAnswer:
		return measureJSON(a)
	case *TableAnswer:
		return tableJSON(a)
	case *EquivalentAnswer:
		return equivalentJSON(ctx, a)
	case *RootsAnswer:
		return rootsJSON(a)
	case *MatrixAnswer:
		return matrixJSON(a)
	case *InitialAnswer:
		return initialJSON(a)
	case *RefusedAnswer:
		return refusedView{head(a.Question, "refused"), string(a.Code), a.Why}
	}
	return refusedView{headView{Question: answer.Asked(), Kind: "refused"}, "not-decided", "this kind of answer has no JSON form"}
}

// MarshalAnswers writes answers as one JSON array, an object to a line, with
// the characters of units as they are. The error is the context's.
func MarshalAnswers(ctx context.Context, answers []Answer) ([]byte, error) {
	var b bytes.Buffer
	b.WriteByte('[')
	for i, a := range answers {
		if i > 0 {
			b.WriteByte(',')
		}
		b.WriteByte('\n')
		var line bytes.Buffer
		encoder := json.NewEncoder(&line)
		encoder.SetEscapeHTML(false)
		v, err := JSONContext(ctx, a)
		if err != nil {
			return nil, err
		}
		if err := encoder.Encode(v); err != nil {
			return nil, err
		}
		b.Write(bytes.TrimRight(line.Bytes(), "\n"))
	}
	b.WriteString("\n]\n")
	return b.Bytes(), nil
}

// headView is what every answer begins with.
type headView struct {
	Question string   `json:"question"`
	Kind     string   `json:"kind"`
	Remarks  []string `json:"remarks,omitempty"`
}

func head(q Question, kind string) headView { return headView{q.Text, kind, q.Remarks} }

type refusedView struct {
	headView
	Code string `json:"code"`
	Why  string `json:"why"`
}

type factView struct {
	headView
	True   bool   `json:"true"`
	Why    string `json:"why"`
	Proved bool   `json:"proved"`
}

// jsonDigits is how many significant digits of a computed real are written
// where so many are known.
const jsonDigits = 24

// decimal writes a real with the digits that are decided, exact short numbers
// in full; a ball that holds zero is written by its midpoint's leading digits
// when it has any sense only together with the error beside it.
func decimal(b number.Ball) string {
	if text, ok := b.MaxDigits(jsonDigits); ok {
		return trimExact(b, text)
	}
	if !b.IsFinite() {
		return "unknown"
	}
	if b.ContainsZero() {
		return "0"
	}
	text, _ := number.BallFromFloat(b.Mid(), b.Prec()).MaxDigits(3)
	return text
}

// trimExact drops zeros after the point where the number is exactly the short one.
func trimExact(b number.Ball, text string) string {
	if !b.IsExact() {
		return text
	}
	r, ok := new(big.Rat).SetString(text)
	if !ok || !b.Contains(r) {
		return text
	}
	mantissa, exponent, _ := b.Decimal(jsonDigits)
	mantissa, exponent = trimZeros(mantissa, exponent)
	if exponent >= 0 && exponent < jsonDigits {
		return r.RatString()
	}
	short, _ := b.Digits(len(mantissa) - boolInt(mantissa[0] == '-'))
	return short
}

func boolInt(b bool) int {
	if b {
		return 1
	}
	return 0
}

// errorOf bounds how far the decimals written for some balls are from the
// true values, to one digit.
func errorOf(balls ...number.Ball) string {
	worst := new(big.Float)
	for _, b := range balls {
		if !b.IsFinite() {
			return "infinite"
		}
		shown, ok := new(big.Rat).SetString(decimal(b))
		if !ok {
			return "infinite"
		}
		off := b.WithPrecision(b.Prec() + 128).Sub(number.BallFromRat(shown, b.Prec()+128)).Abs()
		if up := off.Upper(); up.Cmp(worst) > 0 {
			worst = up
		}
	}
	return number.Ball{}.WithRadius(worst).ErrorText()
}

// coefficients writes a polynomial as ascending exact coefficients.
func coefficients(p exact.Poly) []string {
	list := []string{}
	for _, c := range p.Coefficients() {
		list = append(list, c.RatString())
	}
	if len(list) == 0 {
		list = append(list, "0")
	}
	return list
}

// standard scales a function so that the lowest nonzero coefficient of its
// denominator is 1: the form in which time constants are read off.
func standard(f exact.Ratio) exact.Ratio {
	low := f.Den.Coeff(f.Den.Order())
	if f.Den.IsZero() || low.Sign() == 0 {
		return f
	}
	k := new(big.Rat).Inv(low)
	return exact.Ratio{Num: f.Num.Scale(k), Den: f.Den.Scale(k)}
}

type rootView struct {
	Re           string `json:"re"`
	Im           string `json:"im"`
	Multiplicity int    `json:"multiplicity"`
	Radius       string `json:"radius"`
	Hidden       *bool  `json:"hidden,omitempty"`
}

func rootViews(roots []exact.Root) []rootView {
	list := []rootView{}
	for _, r := range roots {
		list = append(list, rootView{Re: decimal(r.Re), Im: decimal(r.Im), Multiplicity: r.Multiplicity, Radius: errorOf(r.Re, r.Im)})
	}
	return list
}

type functionView struct {
	headView
	Unit        string     `json:"unit"`
	Exact       bool       `json:"exact"`
	Formula     string     `json:"formula,omitempty"`
	Numerator   []string   `json:"numerator"`
	Denominator []string   `json:"denominator"`
	Zeros       []rootView `json:"zeros"`
	Poles       []rootView `json:"poles"`
	Hidden      []rootView `json:"hidden"`
}

func functionJSON(a *FunctionAnswer) functionView {
	f := standard(a.Ratio)
	return functionView{
		head(a.Question, "function"), a.Dimension.Unit(), a.Exact, a.Formula, coefficients(f.Num), coefficients(f.Den),
		rootViews(a.Zeros), rootViews(a.Poles), rootViews(a.Hidden),
	}
}

type valueView struct {
	headView
	Unit      string `json:"unit"`
	Re        string `json:"re"`
	Im        string `json:"im"`
	Magnitude string `json:"magnitude"`
	Phase     string `json:"phase_deg"`
	Error     string `json:"error"`
	Proved    bool   `json:"proved"`
}

func valueJSON(a *ValueAnswer) valueView {
	v := valueView{headView: head(a.Question, "value"), Unit: a.Dimension.Unit(), Proved: a.Proved}
	re, im, phase := a.Value.Re, a.Value.Im, a.Phase
	if a.Dimension.Frequency && a.Hertz {
		re, v.Unit = hertz(re), "Hz"
	}
	if a.Dimension.Angle && !a.Complex {
		re, v.Unit = degrees(re), "°"
	}
	magnitude := a.Magnitude
	if !a.Complex {
		im, phase, magnitude = number.Ball{}, number.Ball{}, re.Abs()
		if sign, ok := re.Sign(); ok && sign < 0 {
			phase = number.BallFromInt(180, number.MinPrecision)
		}
	}
	v.Re, v.Im, v.Magnitude, v.Phase = decimal(re), decimal(im), decimal(magnitude), decimal(phase)
	v.Error = errorOf(re, im, magnitude)
	return v
}

type momentView struct {
	Total     string `json:"total"`
	ZeroInput string `json:"zero_input"`
	ZeroState string `json:"zero_state"`
}

type signalValueView struct {
	headView
	Unit string `json:"unit"`
	momentView
	Error    string       `json:"error"`
	Proved   bool         `json:"proved"`
	Before   *momentView  `json:"before,omitempty"`
	Impulses []weightView `json:"impulses,omitempty"`
}

// weightView is the weight of one impulse at an instant: order 0 is δ, 1 its
// derivative, and so on.
type weightView struct {
	Order int    `json:"order"`
	Total string `json:"total"`
}

func signalValueJSON(a *SignalValueAnswer) signalValueView {
	v := signalValueView{
		headView:   head(a.Question, "signal value"),
		Unit:       a.Dimension.Unit(),
		momentView: momentView{decimal(a.Total), decimal(a.ZeroInput), decimal(a.ZeroState)},
		Error:      errorOf(a.Total, a.ZeroInput, a.ZeroState),
		Proved:     a.Proved,
	}
	if a.Jump {
		v.Before = &momentView{decimal(a.BeforeTotal), decimal(a.BeforeZeroInput), decimal(a.BeforeZeroState)}
		v.Error = errorOf(a.Total, a.ZeroInput, a.ZeroState, a.BeforeTotal, a.BeforeZeroInput, a.BeforeZeroState)
	}
	for k, w := range a.Impulses {
		v.Impulses = append(v.Impulses, weightView{k, decimal(w)})
	}
	return v
}

type measureView struct {
	headView
	Measure string `json:"measure"`
	Unit    string `json:"unit"`
	Value   string `json:"value"`
	AtS     string `json:"at_s,omitempty"`
	AtRad   string `json:"at_rad_per_s,omitempty"`
	Error   string `json:"error"`
	Proved  bool   `json:"proved"`
}

func measureJSON(a *MeasureAnswer) measureView {
	v := measureView{
		headView: head(a.Question, "measure"), Measure: a.Measure, Unit: a.Dimension.Unit(),
		Value: decimal(a.Value), Error: errorOf(a.Value), Proved: a.Proved,
	}
	switch {
	case a.HasWhere && a.InTime:
		v.AtS = decimal(a.Where)
	case a.HasWhere:
		v.AtRad = decimal(a.Where)
	}
	return v
}

type tableView struct {
	headView
	Columns []string   `json:"columns"`
	Units   []string   `json:"units"`
	Rows    [][]string `json:"rows"`
	Proved  bool       `json:"proved"`
}

func tableJSON(a *TableAnswer) tableView {
	v := tableView{headView: head(a.Question, "table"), Columns: []string{}, Units: []string{}, Rows: [][]string{}, Proved: a.Proved}
	for _, c := range a.Columns {
		v.Columns = append(v.Columns, c.Name)
		v.Units = append(v.Units, columnUnit(c))
	}
	for _, row := range a.Rows {
		cells := make([]string, len(row))
		for i, b := range row {
			cells[i] = decimal(b)
		}
		v.Rows = append(v.Rows, cells)
	}
	return v
}

// columnUnit is the unit that a table's column is in.
func columnUnit(c Column) string {
	switch c.Name {
	case "Hz", "s", "rad/s":
		return c.Name
	case "phase_deg":
		return "°"
	}
	return c.Dimension.Unit()
}

type equivalentView struct {
	headView
	Impedance    any    `json:"impedance"`
	OpenCircuit  any    `json:"open_circuit"`
	ShortCircuit any    `json:"short_circuit"`
	Why          string `json:"why,omitempty"`
}

func equivalentJSON(ctx context.Context, a *EquivalentAnswer) equivalentView {
	v := equivalentView{headView: head(a.Question, "equivalent")}
	var whys []string
	if a.Impedance != nil {
		v.Impedance = functionJSON(a.Impedance)
	}
	if a.OpenCircuit != nil {
		v.OpenCircuit = signalJSON(ctx, a.OpenCircuit)
	}
	if a.ShortCircuit != nil {
		v.ShortCircuit = signalJSON(ctx, a.ShortCircuit)
	}
	for _, w := range []string{a.WhyImpedance, a.WhyOpenCircuit, a.WhyShortCircuit} {
		if w != "" {
			whys = append(whys, w)
		}
	}
	v.Why = joinSentences(whys)
	return v
}

type rootsView struct {
	headView
	Roots []rootView `json:"roots"`
}

func rootsJSON(a *RootsAnswer) rootsView {
	v := rootsView{head(a.Question, "roots"), rootViews(a.Roots)}
	for i := range v.Roots {
		if i < len(a.Hidden) {
			v.Roots[i].Hidden = &a.Hidden[i]
		}
	}
	return v
}

type matrixView struct {
	headView
	Exists  bool             `json:"exists"`
	Entries [][]functionView `json:"entries,omitempty"`
	Why     string           `json:"why,omitempty"`
	Facts   map[string]bool  `json:"facts,omitempty"`
}

func matrixJSON(a *MatrixAnswer) matrixView {
	v := matrixView{headView: head(a.Question, "matrix"), Exists: a.Exists, Why: a.Why, Facts: a.Facts}
	if a.Exists {
		for i := range 2 {
			v.Entries = append(v.Entries, []functionView{functionJSON(&a.Entries[i][0]), functionJSON(&a.Entries[i][1])})
		}
	}
	return v
}

type stateView struct {
	Part   string `json:"part"`
	Unit   string `json:"unit"`
	Before string `json:"before"`
	After  string `json:"after"`
}

type initialView struct {
	headView
	Parts []stateView `json:"parts"`
}

func initialJSON(a *InitialAnswer) initialView {
	v := initialView{head(a.Question, "initial"), []stateView{}}
	for _, p := range a.Parts {
		v.Parts = append(v.Parts, stateView{p.Part, p.Dimension.Unit(), exactText(p.Before), exactText(p.After)})
	}
	return v
}

// exactText writes an exact value as "p/q", a stand-in as a decimal.
func exactText(x number.Exact) string {
	if x.IsExact() {
		return x.Rat().RatString()
	}
	return decimal(number.BallFromExact(x, figurePrecision))
}

type verdictView struct {
	File    string `json:"file"`
	Line    int    `json:"line"`
	Text    string `json:"text"`
	Verdict string `json:"verdict"`
	Proved  bool   `json:"proved"`
	Margin  string `json:"margin"`
	Unit    string `json:"unit"`
	Why     string `json:"why,omitempty"`
	// Worst is the worst value at the nominal values, AtHz or AtS where it is.
	Worst string `json:"worst,omitempty"`
	AtHz  string `json:"at_hz,omitempty"`
	AtS   string `json:"at_s,omitempty"`
	// InTolerance is "broken" where values inside the tolerances break the
	// limit, "not broken" where a search found none; ToleranceMargin is the
	// margin at the worst point found.
	InTolerance     string `json:"in_tolerance,omitempty"`
	ToleranceMargin string `json:"tolerance_margin,omitempty"`
	With            string `json:"with,omitempty"`
}

// VerdictJSON gives the value whose encoding is a verdict's JSON object; line
// counts from 1.
func VerdictJSON(v Verdict, file string, line int) any {
	view := verdictView{
		File: file, Line: line, Verdict: v.Decision.String(), Proved: v.Proved,
		Unit: v.Dimension.Unit(), Why: v.Why,
	}
	if v.Limit != nil {
		view.Text = v.Limit.Text
	}
	if v.HasMargin {
		view.Margin = decimal(v.Margin)
		view.Worst = decimal(v.Worst)
	}
	switch {
	case !v.HasWhere:
	case v.InTime:
		view.AtS = decimal(v.Where)
	default:
		view.AtHz = decimal(hertz(v.Where))
	}
	if v.Decision == Holds && v.InTolerance != Holds {
		view.InTolerance, view.With = "not broken", v.Corner
		if v.InTolerance == Broken {
			view.InTolerance = "broken"
		}
		if v.Searched {
			view.ToleranceMargin = decimal(v.CornerMargin)
		}
	}
	return view
}

// FindingText is a finding in one line, without its place.
func FindingText(f dialect.Finding) string {
	return f.Severity.String() + " " + string(f.Code) + ": " + f.Message
}
