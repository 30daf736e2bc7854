package dialect

import (
	"math"
)

// The values beyond which a part is suspected of a wrong prefix: far outside
// what is made, yet written in earnest by nobody (common practice, no source).
const (
	largestCapacitor = 1e4 // F; the largest double-layer cells hold some thousands
	smallestPart     = 1e-18
	largestInductor  = 1e4  // H
	largestResistor  = 1e15 // Ω
	smallestResistor = 1e-6 // Ω
	farFromNeighbour = 1e7  // ratio to every neighbouring resistor
	nearNeighbour    = 1e3  // ratio with the other prefix
)

// suspectPrefix warns of values that no part has.
func (b *builder) suspectPrefix(inst *instance, p *Part, st *PartStatement) {
	if n, ok := st.Value.(*NumberExpr); ok && p.Kind == Resistor && n.Unit != nil && len(n.Unit.Factors) == 1 {
		prefix := n.Unit.Factors[0].Prefix
		b.prefixed = b.prefixed || prefix == "m" || prefix == "M"
	}
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
	b.offerPrefixes(f, inst, st.Value, x > high)
}

// offerPrefixes offers the prefix of the other case, or the usual ones.
func (b *builder) offerPrefixes(f *reported, inst *instance, v Value, large bool) {
	n, ok := v.(*NumberExpr)
	if !ok || n.Unit == nil || len(n.Unit.Factors) != 1 || n.Unit.Factors[0].Power != 1 {
		return
	}
	factor := n.Unit.Factors[0]
	other := map[string][]string{
		"M": {"m", "µ"}, "P": {"p"}, "m": {"M"}, "p": {"P"}, "G": {"n", "µ"}, "T": {"p"}, "k": {"µ", "n"},
		"E": {"µ"}, "Y": {"n"}, "Z": {"n"}, "f": {"p"}, "a": {"p"},
	}[factor.Prefix]
	for _, prefix := range other {
		text := inst.scope.unit.file.Text[n.Number.Span.Start:n.Number.Span.End] + " " + prefix + factor.Base
		f.repair(inst.scope.unit.file, n.Span, text, "write "+text)
	}
	_ = large
}

// neighbours warns of a resistor in mΩ or MΩ that is far from every resistor
// it shares a node with, and would be near them with the other prefix.
func (b *builder) neighbours() {
	if !b.prefixed {
		return
	}
	at := make([][]int, len(b.d.Nodes))
	for i := range b.d.Parts {
		p := &b.d.Parts[i]
		if p.Kind != Resistor || p.From < 0 || p.To < 0 {
			continue
		}
		for _, n := range [...]int{p.From, p.To} {
			if n != b.d.Ground {
				at[n] = append(at[n], i)
			}
		}
	}
	for _, inst := range b.instances {
		for _, sym := range inst.scope.parts {
			if sym.Kind == Resistor {
				b.compareNeighbours(inst, sym, at)
			}
		}
	}
}

func (b *builder) compareNeighbours(inst *instance, sym *Symbol, at [][]int) {
	st := sym.Statement.(*PartStatement)
	n, ok := st.Value.(*NumberExpr)
	if !ok || n.Unit == nil || len(n.Unit.Factors) != 1 {
		return
	}
	swap := map[string]float64{"m": 1e9, "M": 1e-9}[n.Unit.Factors[0].Prefix]
	index := inst.slots[sym.index]
	p := &b.d.Parts[index]
	x := p.Value.Float()
	if swap == 0 || x == 0 || p.From < 0 || p.To < 0 {
		return
	}
	var seen int
	for _, node := range [...]int{p.From, p.To} {
		if len(at[node]) > 50 {
			return
		}
		for _, i := range at[node] {
			y := b.d.Parts[i].Value.Float()
			if i == index || y == 0 {
				continue
			}
			if apart(x, y) < farFromNeighbour || apart(x*swap, y) > nearNeighbour {
				return
			}
			seen++
		}
	}
	if seen == 0 {
		return
	}
	f := b.report(inst, n.Span, "prefix-suspect", "%s is far from the resistors beside it: is the prefix meant?",
		FormatQuantity(p.Value, DimensionResistance))
	b.offerPrefixes(f, inst, st.Value, swap < 1)
}

// apart is the ratio of two positive numbers, at least 1.
func apart(x, y float64) float64 { return math.Max(x/y, y/x) }
