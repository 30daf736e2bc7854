package dialect

import (
	"math"
	"math/big"
	"sort"
	"strconv"
	"strings"

	"portlight/dialect/number"
)

// The preferred values of IEC 60063:2015. E48, E96 and E192 are the powers
// 10^(i/N) rounded to three significant digits, with one entry of E192 that
// the standard rounds the other way (920, where the formula gives 919). E24
// is a table: eight of its entries depart from the formula for historical
// reasons. E12, E6 and E3 take every second, fourth and eighth entry of it.

// e24 are the values of E24, times ten.
var e24 = [24]int{10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91}

// SeriesValues lists a series' values between 100 and 999: the three leading
// digits. ok is false for a name that is none of E3, E6, … E192.
func SeriesValues(series string) (values []int, ok bool) {
	n, err := strconv.Atoi(strings.TrimPrefix(series, "E"))
	if err != nil || !strings.HasPrefix(series, "E") {
		return nil, false
	}
	switch n {
	case 3, 6, 12, 24:
		for i := 0; i < 24; i += 24 / n {
			values = append(values, e24[i]*10)
		}
		return values, true
	case 48, 96, 192:
		for i := range n {
			values = append(values, roundedRoot(i, n))
		}
		return values, true
	}
	return nil, false
}

// roundedRoot is 100·10^(i/n) rounded to an integer, decided exactly: the
// integer v with (2v−1)^n ≤ (200)^n·10^i < (2v+1)^n.
func roundedRoot(i, n int) int {
	if n == 192 && i == 185 {
		return 920
	}
	target := new(big.Int).Exp(big.NewInt(200), big.NewInt(int64(n)), nil)
	target.Mul(target, new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(i)), nil))
	return 100 + sort.Search(900, func(k int) bool {
		above := new(big.Int).Exp(big.NewInt(int64(2*(100+k)+1)), big.NewInt(int64(n)), nil)
		return above.Cmp(target) > 0
	})
}

// seriesCache holds every series once.
var seriesCache = func() map[string][]int {
	cache := map[string][]int{}
	for _, name := range seriesNames {
		cache[name], _ = SeriesValues(name)
	}
	return cache
}()

// powersOfTen holds the powers that values are compared with.
var powersOfTen = func() (list [81]*big.Rat) {
	for i := range list {
		list[i] = powerOfTen(i - 40)
	}
	return list
}()

// inSeries tells whether a positive value is in a series; its float64 picks
// the only candidate, which is then compared exactly.
func inSeries(values []int, x number.Exact) bool {
	f := x.Float()
	exponent := int(math.Floor(math.Log10(f))) - 2
	if !(f > 0) || exponent < -39 || exponent > 38 {
		return false
	}
	scaled := f / math.Pow(10, float64(exponent))
	if scaled >= 999.5 {
		scaled, exponent = scaled/10, exponent+1
	}
	v := int(math.Round(scaled))
	if i := sort.SearchInts(values, v); i == len(values) || values[i] != v || math.Abs(scaled-float64(v)) > 1e-6 {
		return false
	}
	var candidate big.Rat
	return candidate.Mul(candidate.SetInt64(int64(v)), powersOfTen[exponent+40]).Cmp(x.Rat()) == 0
}

// neighboursIn gives the values of a series next to one that is not in it.
func neighboursIn(values []int, x number.Exact) (below, above number.Exact) {
	_, exponent := roundSignificant(x.Rat(), 18)
	for powerOfTen(exponent).Cmp(x.Rat()) > 0 {
		exponent--
	}
	scale := powerOfTen(exponent - 2)
	scaled := new(big.Rat).Quo(x.Rat(), scale) // 100 ≤ scaled < 1000
	at := func(i int) number.Exact {
		v := big.NewRat(1000, 1)
		switch {
		case i < 0:
			v = big.NewRat(int64(values[len(values)-1]), 10)
		case i < len(values):
			v = big.NewRat(int64(values[i]), 1)
		}
		return number.FromRat(v.Mul(v, scale))
	}
	i := sort.Search(len(values), func(i int) bool { return big.NewRat(int64(values[i]), 1).Cmp(scaled) >= 0 })
	return at(i - 1), at(i)
}

// preference is a prefer statement.
type preference struct {
	series string
	at     *PreferStatement
}

// preferences collects the prefer statements of the main file.
func (b *builder) preferences(inst *instance) {
	for _, st := range inst.scope.statements {
		p, ok := st.(*PreferStatement)
		if !ok || p.Misplaced || !p.KindName.Present() || !p.Series.Present() {
			continue
		}
		if earlier := b.prefer[p.Kind]; earlier != nil {
			f := b.report(inst, p.Span, "given-twice", "the preferred values of %ss are given already", p.Kind)
			f.relate(inst.scope.unit.file, earlier.at.Span, "here")
			continue
		}
		if _, known := seriesCache[p.Series.Text]; known {
			b.prefer[p.Kind] = &preference{p.Series.Text, p}
		}
	}
}

// Preferred lists the series that a part's values come from: the one the file
// prefers for the kind, or those that suit the tolerance; none when neither
// is given.
func (c *Checked) Preferred(kind Kind, tolerance *Tolerance, value number.Exact) []string {
	return c.builder.seriesFor(kind, tolerance, value)
}

// Neighbours gives the values next to a part's in the first of the series that
// [Checked.Preferred] lists. below and above are nil when the value is in it,
// and the series is "" when there is none.
func (c *Checked) Neighbours(kind Kind, tolerance *Tolerance, value number.Exact) (series string, below, above *number.Exact) {
	list := c.Preferred(kind, tolerance, value)
	if sign, _ := value.Sign(); len(list) == 0 || sign <= 0 {
		return "", nil, nil
	}
	values := seriesCache[list[0]]
	if inSeries(values, value) {
		return list[0], nil, nil
	}
	low, high := neighboursIn(values, value)
	return list[0], &low, &high
}

func (b *builder) seriesFor(kind Kind, t *Tolerance, value number.Exact) []string {
	if p := b.prefer[kind]; p != nil {
		return []string{p.series}
	}
	if t == nil || !strings.Contains(t.Text, "%") {
		return nil
	}
	// The tolerances that the series were made for; coarse tolerances are sold
	// in E24 values too (common practice, no source).
	width := (t.High.Float() - t.Low.Float()) / (2 * value.Float())
	for _, step := range [...]struct {
		series string
		width  float64
	}{{"E192", 0.005}, {"E96", 0.01}, {"E48", 0.02}} {
		if math.Abs(width) <= step.width*1.0001 {
			return []string{step.series, "E24"}
		}
	}
	return []string{"E24"}
}

// preferred reports a value outside its series.
func (b *builder) preferred(inst *instance, sym *Symbol, p *Part, st *PartStatement) {
	switch p.Kind {
	case Resistor, Inductor, Capacitor:
	default:
		return
	}
	preference := b.prefer[p.Kind]
	if preference == nil && (p.Tolerance == nil || !literalValue(st.Value)) {
		return
	}
	if sign, _ := p.Value.Sign(); sign <= 0 {
		return
	}
	if b.sound == nil {
		b.sound = map[*Tolerance]bool{}
	}
	if preference == nil && b.sound[p.Tolerance] {
		return // the same value and tolerance as before
	}
	list := b.seriesFor(p.Kind, p.Tolerance, p.Value)
	for _, series := range list {
		if inSeries(seriesCache[series], p.Value) {
			b.sound[p.Tolerance] = preference == nil
			return
		}
	}
	if len(list) == 0 || preference == nil && b.windingResistance(inst, sym) {
		return
	}
	below, above := neighboursIn(seriesCache[list[0]], p.Value)
	unit := kindDimension(p.Kind)
	f := b.report(inst, st.Value.Extent(), "not-preferred", "%s is not a value of %s: its neighbours are %s and %s",
		valueText(inst.scope.unit.file, st.Value.Extent()), list[0], FormatQuantity(below, unit), FormatQuantity(above, unit))
	if preference == nil {
		f.as(Hint)
	} else {
		f.relate(b.instances[0].scope.unit.file, preference.at.Span, "the preferred series")
	}
	neighbours := []number.Exact{below, above}
	if p.Value.Sub(below).Rat().Cmp(above.Sub(p.Value).Rat()) > 0 {
		neighbours[0], neighbours[1] = above, below
	}
	for _, n := range neighbours {
		text := FormatQuantity(n, unit)
		f.repair(inst.scope.unit.file, st.Value.Extent(), text, "use "+text)
	}
}

// literalValue says that a value is a number as bought, not a formula.
func literalValue(v Value) bool {
	switch v.(type) {
	case *NumberExpr, *CodeValue:
		return true
	}
	return false
}

// windingResistance says that a resistor touches an inductor in a chain: it is
// then the resistance of the winding and comes in no series.
func (b *builder) windingResistance(inst *instance, sym *Symbol) bool {
	p := &b.d.Parts[inst.slots[sym.index]]
	if p.Kind != Resistor || p.From < 0 || p.To < 0 {
		return false
	}
	for _, n := range [...]int{p.From, p.To} {
		if b.d.Nodes[n].Joint && b.jointsWithInductor()[n] {
			return true
		}
	}
	return false
}

// jointsWithInductor marks the joints that an inductor touches.
func (b *builder) jointsWithInductor() map[int]bool {
	if b.coilJoints != nil {
		return b.coilJoints
	}
	b.coilJoints = map[int]bool{}
	for i := range b.d.Parts {
		if p := &b.d.Parts[i]; p.Kind == Inductor {
			b.coilJoints[p.From], b.coilJoints[p.To] = true, true
		}
	}
	return b.coilJoints
}
