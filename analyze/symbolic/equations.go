package symbolic

import (
	"math/big"

	"portlight/analyze/network"
	"portlight/dialect/number"
)

// unknownSymbol marks an entry that is a plain number.
const unknownSymbol = -1

// entry is ±1 or ± a symbol in an equation.
type entry struct {
	symbol   int // index into quantities, or unknownSymbol
	negative bool
}

// quantity is an element's value as it enters the equations: times s to a
// power, or as the inverse of that (1/R, 1/(s·L)).
type quantity struct {
	key     int
	symbol  symbol
	power   int
	inverse bool
}

// cell is the sum of the entries at one place of the equations.
type cell struct {
	column  int
	entries []entry
}

// equations are nodal equations with the currents of all branches whose
// voltage is prescribed, that are coupled, or that something senses:
// rows·X = drive, quantity asked = output·X.
type equations struct {
	network    *network.Network
	quantities []quantity
	known      map[int]int // index into quantities by key
	rows       [][]cell
	node       []int // unknown of each node's voltage, -1 for references
	current    []int // unknown of each element's current, -1 for none
	second     map[int]int
	drive      map[int][]entry // by row
	output     []cell
	inductance network.Inductances
	coils      []bool // coupled
	hidden     int    // keys of quantities without a name, counting down
	impossible bool
}

// Drive is what excites a network: the voltage or current source Element, or,
// when that is negative, a unit current into node Plus and out of node Minus.
type Drive struct {
	Element     int
	Plus, Minus int
}

// equationsOf writes the equations of a network.
func equationsOf(n *network.Network, output []network.Probe, by Drive) *equations {
	q := &equations{
		network: n, known: map[int]int{}, second: map[int]int{}, drive: map[int][]entry{},
		hidden: -1, coils: make([]bool, len(n.Elements)),
	}
	q.number()
	q.mark(output, by)
	for i := range n.Elements {
		q.element(i, by)
	}
	for _, p := range output {
		q.sense(&q.output, p, entry{unknownSymbol, false})
	}
	if by.Element < 0 {
		q.inject(by.Plus, false)
		q.inject(by.Minus, true)
	}
	return q
}

// number gives every node but one of each connected part its unknown.
func (q *equations) number() {
	up := make([]int, q.network.Nodes)
	for v := range up {
		up[v] = v
	}
	find := func(v int) int {
		for up[v] != v {
			up[v] = up[up[v]]
			v = up[v]
		}
		return v
	}
	q.network.Branches(func(from, to int) { up[find(from)] = find(to) })
	reference := map[int]int{}
	if g := q.network.Ground; g >= 0 {
		reference[find(g)] = g
	}
	q.node = make([]int, len(up))
	for v := range up {
		q.node[v] = -1
		if r, there := reference[find(v)]; !there {
			reference[find(v)] = v
		} else if r != v {
			q.node[v] = q.unknown()
		}
	}
}

func (q *equations) unknown() int {
	q.rows = append(q.rows, nil)
	return len(q.rows) - 1
}

// mark gives unknowns to the currents that need one.
func (q *equations) mark(output []network.Probe, by Drive) {
	q.current = make([]int, len(q.network.Elements))
	for i := range q.current {
		q.current[i] = -1
	}
	sense := func(probes []network.Probe) {
		for _, p := range probes {
			if p.Quantity != network.NodePair {
				q.currentOf(p.Element)
			}
		}
	}
	sense(output)
	for i := range q.network.Elements {
		e := &q.network.Elements[i]
		for _, c := range e.Controls {
			sense(c.Of)
		}
		switch e.Kind {
		case network.Coupling:
			for _, c := range e.Coils {
				q.coils[c] = true
				q.currentOf(c)
			}
		case network.VoltageSource, network.DependentVoltage, network.Short, network.OpAmp:
			q.currentOf(i)
		case network.Transformer:
			q.currentOf(i)
			q.second[i] = q.unknown()
			if len(e.Windings) != 2 {
				q.impossible = true
			}
		}
	}
	if by.Element >= 0 {
		q.currentOf(by.Element)
	}
	for _, coupled := range q.coils {
		if coupled {
			q.inductance = q.network.Inductances()
			break
		}
	}
}

func (q *equations) currentOf(element int) int {
	if q.current[element] < 0 {
		q.current[element] = q.unknown()
	}
	return q.current[element]
}

// put adds an entry to a row; places of references are left out. Entries that
// cancel are dropped.
func put(row *[]cell, column int, e entry) {
	if column < 0 {
		return
	}
	for i := range *row {
		c := &(*row)[i]
		if c.column != column {
			continue
		}
		for k, old := range c.entries {
			if old.symbol == e.symbol && old.negative != e.negative {
				c.entries = append(c.entries[:k:k], c.entries[k+1:]...)
				return
			}
		}
		c.entries = append(c.entries, e)
		return
	}
	*row = append(*row, cell{column, []entry{e}})
}

func (q *equations) add(row, column int, e entry) {
	if row >= 0 {
		put(&q.rows[row], column, e)
	}
}

// across adds factor·(v[plus] − v[minus]) to a row.
func (q *equations) across(row *[]cell, plus, minus int, factor entry) {
	put(row, q.node[plus], factor)
	put(row, q.node[minus], factor.turned())
}

// leave lets the unknown current i flow out of a node and into another.
func (q *equations) leave(from, to, i int, factor entry) {
	if from != to {
		q.add(q.node[from], i, factor)
		q.add(q.node[to], i, factor.turned())
	}
}

func (e entry) turned() entry { return entry{e.symbol, !e.negative} }

// inject puts a unit current into the balance of a node.
func (q *equations) inject(node int, negative bool) {
	if r := q.node[node]; r >= 0 {
		var row []cell
		for _, e := range q.drive[r] {
			put(&row, 0, e)
		}
		put(&row, 0, entry{unknownSymbol, negative})
		q.drive[r] = row[0].entries
	}
}

// sense adds factor·probe to a row; every sensed current has an unknown.
func (q *equations) sense(row *[]cell, p network.Probe, factor entry) {
	if p.Negative {
		factor = factor.turned()
	}
	switch {
	case p.Quantity == network.NodePair:
		q.across(row, p.Plus, p.Minus, factor)
	case p.Quantity == network.TerminalCurrent && p.Winding == 1 && q.network.Elements[p.Element].Kind == network.Transformer:
		put(row, q.second[p.Element], factor)
	default:
		put(row, q.current[p.Element], factor)
	}
}

// symbolOf gives the entry for an element's quantity. A value of exactly ±1
// of something without a unit is that number.
func (q *equations) symbolOf(x quantity) entry {
	k, there := q.known[x.key]
	if !there {
		k = len(q.quantities)
		q.known[x.key] = k
		q.quantities = append(q.quantities, x)
	}
	return entry{k, false}
}

// named is an element's own value as a symbol.
func (q *equations) named(i int, value *big.Rat, power int, inverse bool) entry {
	e := &q.network.Elements[i]
	return q.symbolOf(quantity{
		key: elementKey(i), symbol: symbol{name: e.Name, value: value, order: elementKey(i)},
		power: power, inverse: inverse,
	})
}

// unnamed is a value that has no name.
func (q *equations) unnamed() entry {
	q.hidden--
	return q.symbolOf(quantity{key: q.hidden})
}

// ratio is a value without unit: its name, or a number where it is ±1.
func (q *equations) ratio(i int, value *big.Rat) entry {
	if value.IsInt() && value.Num().IsInt64() {
		switch value.Num().Int64() {
		case 1:
			return entry{unknownSymbol, false}
		case -1:
			return entry{unknownSymbol, true}
		}
	}
	return q.named(i, value, 0, false)
}

// element writes the equations of one element.
func (q *equations) element(i int, by Drive) {
	e := &q.network.Elements[i]
	one := entry{unknownSymbol, false}
	c := q.current[i]
	row := func() *[]cell { return &q.rows[c] }
	switch e.Kind {
	case network.Resistor:
		q.admittance(i, q.named(i, e.Value.Rat(), 0, true))
	case network.Capacitor:
		q.admittance(i, q.named(i, e.Value.Rat(), 1, false))
	case network.Immittance:
		q.admittance(i, q.unnamed())
	case network.Inductor:
		if !q.coils[i] {
			q.admittance(i, q.named(i, e.Value.Rat(), 1, true))
			break
		}
		q.leave(e.From, e.To, c, one)
		q.across(row(), e.From, e.To, one)
		put(row(), c, q.named(i, q.inductance.Self[i], 1, false).turned())
	case network.Coupling:
		q.coupling(i, e)
	case network.VoltageSource, network.Short:
		q.leave(e.From, e.To, c, one)
		q.across(row(), e.From, e.To, one)
		if i == by.Element {
			q.drive[c] = []entry{one}
		}
	case network.CurrentSource, network.Open:
		if c >= 0 {
			q.leave(e.From, e.To, c, one)
			put(row(), c, one)
			if i == by.Element {
				q.drive[c] = []entry{one}
			}
		}
	case network.DependentVoltage:
		q.leave(e.From, e.To, c, one)
		q.across(row(), e.From, e.To, one)
		q.controls(i, row(), true)
	case network.DependentCurrent:
		q.dependentCurrent(i, e)
	case network.OpAmp:
		q.leave(e.Output, q.network.Ground, c, one)
		q.across(row(), e.Plus, e.Minus, one)
		if e.GainBandwidth != nil || e.DCGain != nil {
			q.across(row(), e.Output, q.network.Ground, q.unnamed())
		}
	case network.Transformer:
		q.transformer(i, e)
	}
}

// admittance: y·v in the balances, and i − y·v = 0 where the current is sensed.
func (q *equations) admittance(i int, y entry) {
	e := &q.network.Elements[i]
	if c := q.current[i]; c >= 0 {
		one := entry{unknownSymbol, false}
		q.leave(e.From, e.To, c, one)
		put(&q.rows[c], c, one)
		q.across(&q.rows[c], e.From, e.To, y.turned())
		return
	}
	if e.From == e.To {
		return
	}
	for _, end := range [...]struct {
		node   int
		factor entry
	}{{e.From, y}, {e.To, y.turned()}} {
		if r := q.node[end.node]; r >= 0 {
			q.across(&q.rows[r], e.From, e.To, end.factor)
		}
	}
}

// coupling: −s·M·i in the equation of the other coil.
func (q *equations) coupling(i int, e *network.Element) {
	value := q.inductance.Mutual[i]
	if value == nil || e.Coils[0] == e.Coils[1] {
		q.impossible = true
		return
	}
	x := quantity{key: elementKey(i), symbol: symbol{name: e.Name, value: value, order: elementKey(i)}, power: 1}
	if !e.Mutual {
		x.symbol.coupled = &coefficient{value: e.Value.Rat(), coils: e.Coils}
		for k, c := range e.Coils {
			x.symbol.coupled.names[k] = q.network.Elements[c].Name
			x.symbol.coupled.self[k] = q.inductance.Self[c]
		}
	}
	m := q.symbolOf(x).turned()
	a, b := q.current[e.Coils[0]], q.current[e.Coils[1]]
	put(&q.rows[a], b, m)
	put(&q.rows[b], a, m)
}

// transformer: with n the turns of the first winding over those of the
// second, v₁ − n·v₂ = 0 and n·i₁ + i₂ = 0.
func (q *equations) transformer(i int, e *network.Element) {
	if q.impossible {
		return
	}
	one := entry{unknownSymbol, false}
	first, second := e.Windings[0], e.Windings[1]
	n := q.ratio(i, new(big.Rat).Quo(first.Turns.Rat(), second.Turns.Rat()))
	c, d := q.current[i], q.second[i]
	q.leave(first.Plus, first.Minus, c, one)
	q.leave(second.Plus, second.Minus, d, one)
	q.across(&q.rows[c], first.Plus, first.Minus, one)
	q.across(&q.rows[c], second.Plus, second.Minus, n.turned())
	put(&q.rows[d], c, n)
	put(&q.rows[d], d, one)
}

// controls adds ± Σ gain·quantity to a row. The gain has the source's name
// when all of its coefficients are equal but for signs.
func (q *equations) controls(i int, row *[]cell, negative bool) {
	e := &q.network.Elements[i]
	var common *big.Rat
	same := true
	for _, c := range e.Controls {
		g, ok := constantGain(c)
		if !ok {
			same = false
			continue
		}
		if common == nil {
			common = g
		}
		same = same && new(big.Rat).Abs(g).Cmp(new(big.Rat).Abs(common)) == 0
	}
	for _, c := range e.Controls {
		g, ok := constantGain(c)
		var factor entry
		switch {
		case ok && g.Sign() == 0:
			continue
		case ok && same:
			factor = q.ratio(i, common)
			if g.Sign() != common.Sign() {
				factor = factor.turned()
			}
		case ok && isUnity(g):
			factor = entry{unknownSymbol, g.Sign() < 0}
		default:
			factor = q.unnamed()
		}
		if negative {
			factor = factor.turned()
		}
		for _, p := range c.Of {
			q.sense(row, p, factor)
		}
	}
}

func isUnity(g *big.Rat) bool {
	return g.IsInt() && g.Num().IsInt64() && magnitude(g.Num().Int64()) == 1
}

// constantGain reads a coefficient that does not depend on s.
func constantGain(c network.Control) (*big.Rat, bool) {
	low := func(list []number.Exact, empty *big.Rat) (*big.Rat, bool) {
		if len(list) == 0 {
			return empty, true
		}
		for _, x := range list[1:] {
			if x.Rat().Sign() != 0 {
				return nil, false
			}
		}
		return list[0].Rat(), true
	}
	num, ok := low(c.Numerator, new(big.Rat))
	if !ok {
		return nil, false
	}
	den, ok := low(c.Denominator, big.NewRat(1, 1))
	if !ok || den.Sign() == 0 {
		return nil, false
	}
	return new(big.Rat).Quo(num, den), true
}

// dependentCurrent goes straight into the balances unless it is sensed.
func (q *equations) dependentCurrent(i int, e *network.Element) {
	one := entry{unknownSymbol, false}
	if c := q.current[i]; c >= 0 {
		q.leave(e.From, e.To, c, one)
		put(&q.rows[c], c, one)
		q.controls(i, &q.rows[c], true)
		return
	}
	if e.From == e.To {
		return
	}
	if r := q.node[e.From]; r >= 0 {
		q.controls(i, &q.rows[r], false)
	}
	if r := q.node[e.To]; r >= 0 {
		q.controls(i, &q.rows[r], true)
	}
}
