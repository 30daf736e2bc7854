package dialect

import (
	"math"

	"portlight/dialect/number"
)

// The values beyond which a part is suspected of a wrong prefix: far outside
// what is made, yet written in earnest by nobody (common practice, no source).
const (
	largestCapacitor = 1e4 // F; the largest double-layer cells hold some thousands
	smallestPart     = 1e-18
	largestInductor  = 1e4  // H
	largestResistor  = 1e15 // Ω
	smallestResistor = 1e-6 // Ω
	farFromNeighbour = 1e7  // ratio of a resistor in MΩ to every neighbouring one
	farBelow         = 3e5  // ratio of one in mΩ to every neighbouring one
	nearNeighbour    = 1e3  // ratio with the other prefix
	plainCapacitor   = 1    // F; from here on a capacitor in F without a prefix is looked at
	longestCharging  = 1e4  // s, to charge it through the smallest resistor beside it
)

// suspectPrefix warns of values that no part has.
func (b *builder) suspectPrefix(inst *instance, p *Part, st *PartStatement) {
	if n, ok := st.Value.(*NumberExpr); ok && p.Kind == Resistor && n.Unit != nil && len(n.Unit.Factors) == 1 {
		prefix := n.Unit.Factors[0].Prefix
		b.prefixed = b.prefixed || prefix == "m" || prefix == "M"
	}
	b.prefixed = b.prefixed || p.Kind == Capacitor && plainFarad(st)
	x := p.Value.Float()
	low, high := smallestPart, largestCapacitor
	switch p.Kind {
	case Inductor:
		high = largestInductor
	case Resistor:
		low, high = smallestResistor, largestResistor
	}
	if x >= low && x <= high {
		return
	}
	f := b.report(inst, st.Value.Extent(), "prefix-suspect", "%s is %s for %s: is the prefix meant?",
		FormatQuantity(p.Value, kindDimension(p.Kind)), pickWord(x > high, "very large", "very small"), article(p.Kind.String()))
	b.offerPrefixes(f, inst, st.Value)
}

// offerPrefixes offers the prefix of the other case, or the usual ones.
func (b *builder) offerPrefixes(f *reported, inst *instance, v Value) {
	n, ok := v.(*NumberExpr)
	if !ok || n.Unit == nil || len(n.Unit.Factors) != 1 || n.Unit.Factors[0].Power != 1 {
		return
	}
	factor := n.Unit.Factors[0]
	other := map[string][]string{
		"M": {"m", "µ"}, "P": {"p"}, "m": {"M"}, "": {"µ", "n", "p"}, "p": {"P"}, "G": {"n", "µ"}, "T": {"p"}, "k": {"µ", "n"},
		"E": {"µ"}, "Y": {"n"}, "Z": {"n"}, "f": {"p"}, "a": {"p"},
	}[factor.Prefix]
	for _, prefix := range other {
		text := inst.scope.unit.file.Text[n.Number.Span.Start:n.Number.Span.End] + " " + prefix + factor.Base
		f.repair(inst.scope.unit.file, n.Span, text, "write "+text)
	}
}

// plainFarad says that a capacitor is written in F without a prefix.
func plainFarad(st *PartStatement) bool {
	n, ok := st.Value.(*NumberExpr)
	return ok && n.Unit != nil && len(n.Unit.Factors) == 1 && n.Unit.Factors[0].Base == "F" && n.Unit.Factors[0].Prefix == ""
}

// neighbours warns of a resistor in mΩ or MΩ that is far from every resistor
// beside it and would be near them with another prefix, and of a capacitor in
// plain farads that the resistors beside it would take hours to charge.
// Beside it are the resistors that share a node, other than the reference;
// where there is none, all of the network.
func (b *builder) neighbours() {
	if !b.prefixed {
		return
	}
	at := make([][]int, len(b.d.Nodes))
	var all []int
	for i := range b.d.Parts {
		p := &b.d.Parts[i]
		if p.Kind != Resistor || p.From < 0 || p.To < 0 {
			continue
		}
		all = append(all, i)
		for _, n := range [...]int{p.From, p.To} {
			if n != b.d.Ground {
				at[n] = append(at[n], i)
			}
		}
	}
	for _, inst := range b.instances {
		for _, sym := range inst.scope.parts {
			index := inst.slots[sym.index]
			if p := &b.d.Parts[index]; p.From < 0 || p.To < 0 || sign(p.Value) <= 0 {
				continue
			}
			switch sym.Kind {
			case Resistor:
				b.compareNeighbours(inst, sym, b.beside(index, at, all))
			case Capacitor:
				b.compareCharging(inst, sym, b.beside(index, at, all))
			}
		}
	}
}

func sign(x number.Exact) int { s, _ := x.Sign(); return s }

// mostBeside bounds how many neighbours are compared.
const mostBeside = 50

// beside lists the resistors beside a part; nil where they are too many.
func (b *builder) beside(index int, at [][]int, all []int) []int {
	p := &b.d.Parts[index]
	var list []int
	for _, n := range [...]int{p.From, p.To} {
		if n == b.d.Ground {
			continue
		}
		for _, i := range at[n] {
			if i != index && sign(b.d.Parts[i].Value) > 0 {
				list = append(list, i)
			}
		}
		if len(list) > mostBeside {
			return nil
		}
	}
	if len(list) > 0 || len(all) > mostBeside {
		return list
	}
	for _, i := range all {
		if i != index && sign(b.d.Parts[i].Value) > 0 && !b.loss(i) {
			list = append(list, i)
		}
	}
	return list
}

func (b *builder) compareNeighbours(inst *instance, sym *Symbol, beside []int) {
	st := sym.Statement.(*PartStatement)
	n, ok := st.Value.(*NumberExpr)
	if !ok || n.Unit == nil || len(n.Unit.Factors) != 1 || len(beside) == 0 {
		return
	}
	index := inst.slots[sym.index]
	x := b.d.Parts[index].Value.Float()
	far, others := farFromNeighbour, []prefixSwap{{"m", 1e-9}}
	switch n.Unit.Factors[0].Prefix {
	case "M":
	case "m":
		if b.loss(index) {
			return // the resistance of a winding or in series with a capacitor
		}
		far, others = farBelow, []prefixSwap{{"M", 1e9}, {"k", 1e6}}
	default:
		return
	}
	var fitting []string
	for _, other := range others {
		near := true
		for _, i := range beside {
			y := b.d.Parts[i].Value.Float()
			if apart(x, y) < far {
				return
			}
			near = near && apart(x*other.factor, y) <= nearNeighbour
		}
		if near {
			fitting = append(fitting, other.prefix)
		}
	}
	if len(fitting) == 0 {
		return
	}
	f := b.report(inst, n.Span, "prefix-suspect", "%s is far from the resistors beside it: is the prefix meant?",
		FormatQuantity(b.d.Parts[index].Value, DimensionResistance))
	for _, prefix := range fitting {
		text := n.Number.Text + " " + prefix + "Ω"
		f.repair(inst.scope.unit.file, n.Span, text, "write "+text)
	}
	if len(fitting) > 1 {
		f.choose()
	}
}

// prefixSwap is another prefix, and what it multiplies the value by.
type prefixSwap struct {
	prefix string
	factor float64
}

// loss says that a resistor touches a coil or a capacitor at a joint inside a
// chain: it is then the loss of that part.
func (b *builder) loss(index int) bool {
	p := &b.d.Parts[index]
	for _, n := range [...]int{p.From, p.To} {
		if !b.d.Nodes[n].Joint {
			continue
		}
		if b.lossy == nil {
			b.lossy = map[int]bool{}
			for i := range b.d.Parts {
				if q := &b.d.Parts[i]; q.Kind == Inductor || q.Kind == Capacitor {
					b.lossy[q.From], b.lossy[q.To] = true, true
				}
			}
		}
		if b.lossy[n] {
			return true
		}
	}
	return false
}

func (b *builder) compareCharging(inst *instance, sym *Symbol, beside []int) {
	st := sym.Statement.(*PartStatement)
	p := &b.d.Parts[inst.slots[sym.index]]
	if !plainFarad(st) || p.Value.Float() < plainCapacitor || len(beside) == 0 || p.Value.Float() > largestCapacitor {
		return
	}
	least := beside[0]
	for _, i := range beside {
		if b.d.Parts[i].Value.Rat().Cmp(b.d.Parts[least].Value.Rat()) < 0 {
			least = i
		}
	}
	r := &b.d.Parts[least]
	if p.Value.Float()*r.Value.Float() <= longestCharging {
		return
	}
	f := b.report(inst, st.Value.Extent(), "prefix-suspect", "%s takes hours to charge through %s, %s: is a prefix missing?",
		FormatQuantity(p.Value, DimensionCapacitance), r.Name, FormatQuantity(r.Value, DimensionResistance))
	b.offerPrefixes(f, inst, st.Value)
	f.choose()
}

// apart is the ratio of two positive numbers, at least 1.
func apart(x, y float64) float64 { return math.Max(x/y, y/x) }
