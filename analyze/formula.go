package analyze

import (
	"context"
	"math/big"

	"portlight/analyze/network"
	"portlight/analyze/symbolic"
	"portlight/dialect"
)

// naming is how a function follows from the network in the names of its
// elements: a transfer (op 0), a number ('n'), s ('s'), or two of these
// combined by + * or /. It refers to the network by index alone, and becomes a
// formula only when one is to be shown.
type naming struct {
	op     byte
	x, y   *naming
	number *big.Rat
	of     configuration
	output []network.Probe
	by     symbolic.Drive
}

func numberNaming(n int64) *naming { return &naming{op: 'n', number: big.NewRat(n, 1)} }

// constantNaming is a number as it may stand in a formula: a plain one. The
// value of a quantity with a unit would hide where it comes from.
func constantNaming(c *dialect.Constant) *naming {
	if c.Dim() != dialect.DimensionNumber || !c.Value.IsExact() {
		return nil
	}
	return &naming{op: 'n', number: c.Value.Rat()}
}

// combined is x op y; there is none where one of them is missing.
func combined(op byte, x, y *naming) *naming {
	if x == nil || y == nil {
		return nil
	}
	switch {
	case op == '+' && x.isNumber(0), op == '*' && x.isNumber(1):
		return y
	case op == '+' && y.isNumber(0), (op == '*' || op == '/') && y.isNumber(1):
		return x
	}
	return &naming{op: op, x: x, y: y}
}

func (n *naming) isNumber(value int64) bool {
	return n.op == 'n' && n.number.IsInt() && n.number.Num().IsInt64() && n.number.Num().Int64() == value
}

// power raises to a whole number; there is none for high powers.
func (n *naming) power(exponent int64) *naming {
	const most = 4
	if n == nil || exponent > most || exponent < -most {
		return nil
	}
	out := numberNaming(1)
	for range max(exponent, -exponent) {
		out = combined('*', out, n)
	}
	if exponent < 0 {
		out = combined('/', numberNaming(1), out)
	}
	return out
}

// formula writes a function with element names, "" where that would not be
// readable. The error is the context's.
func (a *Analysis) formula(ctx context.Context, f form) (string, error) {
	if f.names == nil {
		return "", nil
	}
	sp := symbolic.NewSpace(ctx)
	text := ""
	if g, ok := a.symbols(ctx, sp, f.names); ok {
		text, _ = sp.Formula(g, f.constant)
	}
	return text, ctx.Err()
}

// symbols works out a naming.
func (a *Analysis) symbols(ctx context.Context, sp *symbolic.Space, n *naming) (f symbolic.Function, ok bool) {
	switch n.op {
	case 'n':
		return sp.Number(n.number)
	case 's':
		return sp.Variable(), true
	case 0:
		net := a.around(ctx, n)
		if net == nil {
			return f, false
		}
		return sp.Transfer(net, n.output, n.by)
	}
	x, ok := a.symbols(ctx, sp, n.x)
	if !ok {
		return f, false
	}
	y, ok := a.symbols(ctx, sp, n.y)
	if !ok {
		return f, false
	}
	switch n.op {
	case '+':
		return sp.Add(x, y), true
	case '*':
		return sp.Multiply(x, y), true
	}
	return sp.Divide(x, y)
}

// wholeNetwork is up to how many elements a network is looked at as a whole.
const wholeNetwork = 100

// around is the network of a transfer; of a large one only what can influence
// what is asked, other elements taken out. It is nil where there is none.
func (a *Analysis) around(ctx context.Context, n *naming) *network.Network {
	m := a.model(ctx, n.of)
	if m.system == nil {
		return nil
	}
	whole := m.system.Network()
	if len(whole.Elements) <= wholeNetwork {
		return whole
	}
	groups, ok := askedGroups(whole, m.partition(), n.output)
	if !ok {
		return whole
	}
	part := *whole
	part.Elements = append([]network.Element(nil), whole.Elements...)
	for i, g := range m.partition().GroupOf {
		if g >= 0 && !groups[g] && i != n.by.Element {
			part.Elements[i] = network.Element{Name: part.Elements[i].Name, Kind: network.Absent}
		}
	}
	return &part
}

// askedGroups are the groups of elements that some quantities belong to; ok is
// false for the current of what holds a rail, which belongs to all of them.
func askedGroups(n *network.Network, p network.Partition, asked []network.Probe) (groups map[int]bool, ok bool) {
	held := map[int]bool{n.Ground: true}
	for _, h := range p.Held {
		held[n.Elements[h].From], held[n.Elements[h].To] = true, true
	}
	groups = map[int]bool{}
	for _, q := range asked {
		if q.Quantity != network.NodePair {
			if p.GroupOf[q.Element] < 0 {
				return nil, false
			}
			groups[p.GroupOf[q.Element]] = true
			continue
		}
		for i := range n.Elements {
			e := &n.Elements[i]
			if !held[q.Plus] && e.Touches(q.Plus) || !held[q.Minus] && e.Touches(q.Minus) {
				groups[p.GroupOf[i]] = true
			}
		}
	}
	return groups, true
}

// sensedBy is a quantity as elementary ones; see output, which it follows.
func (a *Analysis) sensedBy(p dialect.Probe, by excitation) ([]network.Probe, bool) {
	d := a.description
	if p.Letter == 'v' {
		plus, minus, err := a.voltageNodes(p)
		return []network.Probe{{Quantity: network.NodePair, Plus: plus, Minus: minus}}, err == nil
	}
	if p.Of != dialect.OfPort {
		return probesOf(d, p), p.Of == dialect.OfPart || p.Of == dialect.OfTerminal || p.Of == dialect.OfInflow
	}
	port := d.Ports[p.Port]
	drivers := a.portDrivers(p, by)
	var out []network.Probe
	net := a.build(by.configuration, nil)
	for _, e := range drivers {
		out = append(out, network.Probe{
			Quantity: network.ElementFlow, Element: e, Negative: net.Elements[e].From == port.Plus,
		})
	}
	return out, len(out) > 0
}
