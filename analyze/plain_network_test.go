package analyze_test

import (
	"fmt"
	"math/big"
	"strings"
)

// plainRatio is a rational function by its coefficients, ascending.
type plainRatio struct{ num, den []*big.Rat }

// plainControl is one term of a dependent source: k times a voltage between
// nodes, or times the current of a branch.
type plainControl struct {
	k           plainRatio
	plus, minus int
	branch      int // −1 for a voltage
}

// plainWave is a waveform from an instant on: the sum of A·τ^m·e^{aτ}·cos(ωτ)
// and the like, with rational parameters in s and rad/s, and an impulse.
type plainWave struct {
	from    *big.Rat
	kind    string // "constant", "ramp", "exponential", "sine", "cosine", "impulse"
	size    *big.Rat
	rate    *big.Rat // 1/s or rad/s
	forever bool     // written without u(t)
}

// plainBranch is one branch of the tableau, from node a to node b; node 0 is
// the reference.
type plainBranch struct {
	name     string
	kind     string // resistor inductor capacitor impedance admittance voltage current wire switch dependentVoltage dependentCurrent output winding
	a, b     int
	value    *big.Rat
	ratio    plainRatio
	initial  *big.Rat // V or A at 0−
	waves    []plainWave
	controls []plainControl
	// output: an op amp's, back to the reference
	plus, minus int
	bandwidth   *big.Rat // rad/s, nil for ideal
	gain        *big.Rat // nil for an integrator
	// winding: of the transformer that starts at branch first
	first int
	turns *big.Rat
	// switch
	closedBefore bool
	events       []*big.Rat // s, each turns it
}

// mutual couples two inductor branches by M in H.
type mutual struct {
	a, b int
	m    *big.Rat
}

// plainNetwork is a network for the plain evaluation, and the notation's text of it.
type plainNetwork struct {
	nodes    int // with the reference
	branches []plainBranch
	mutuals  []mutual
	steady   bool
	lines    []string
}

func nodeText(n int) string {
	if n == 0 {
		return "hull"
	}
	return fmt.Sprintf("n%d", n)
}

func (p *plainNetwork) text() string { return strings.Join(p.lines, "\n") + "\n" }

// stand is the position of the switches: closed by branch.
type stand map[int]bool

// at is how the switches stand just after t; nil is at the end of time.
func (p *plainNetwork) at(t *big.Rat) stand {
	out := stand{}
	for i, b := range p.branches {
		if b.kind != "switch" {
			continue
		}
		closed := b.closedBefore
		for _, e := range b.events {
			if t == nil || e.Cmp(t) <= 0 {
				closed = !closed
			}
		}
		out[i] = closed
	}
	return out
}

// tableau is the equations at one value of s.
type tableau[T any] struct {
	f     field[T]
	s     T
	rows  [][]T
	nodes int
}

// tabulate writes Kirchhoff's current law for every node but the reference,
// then the law of every branch. Left out are branches in gone.
func tabulate[T any](p *plainNetwork, f field[T], s T, closed stand, gone map[int]bool) *tableau[T] {
	n := p.nodes - 1 + len(p.branches)
	t := &tableau[T]{f: f, s: s, nodes: p.nodes}
	t.rows = make([][]T, n)
	for i := range t.rows {
		t.rows[i] = make([]T, n)
		for k := range t.rows[i] {
			t.rows[i][k] = f.rat(new(big.Rat))
		}
	}
	one, minus := big.NewRat(1, 1), big.NewRat(-1, 1)
	for i, b := range p.branches {
		if b.a > 0 {
			t.put(b.a-1, t.current(i), f.rat(one))
		}
		if b.b > 0 {
			t.put(b.b-1, t.current(i), f.rat(minus))
		}
		t.law(p, i, closed, gone[i])
	}
	for _, m := range p.mutuals {
		if gone[m.a] || gone[m.b] {
			continue
		}
		k := f.mul(s, f.rat(new(big.Rat).Neg(m.m)))
		t.put(p.nodes-1+m.a, t.current(m.b), k)
		t.put(p.nodes-1+m.b, t.current(m.a), k)
	}
	return t
}

func (t *tableau[T]) current(branch int) int { return t.nodes - 1 + branch }

func (t *tableau[T]) put(row, col int, v T) { t.rows[row][col] = t.f.add(t.rows[row][col], v) }

// voltage adds k·(V(a) − V(b)) to a row.
func (t *tableau[T]) voltage(row, a, b int, k T) {
	if a > 0 {
		t.put(row, a-1, k)
	}
	if b > 0 {
		t.put(row, b-1, t.f.sub(t.f.rat(new(big.Rat)), k))
	}
}

// law writes the equation of one branch.
func (t *tableau[T]) law(p *plainNetwork, i int, closed stand, gone bool) {
	b, f, row, own := &p.branches[i], t.f, t.nodes-1+i, t.current(i)
	rat := func(r *big.Rat) T { return f.rat(r) }
	one := rat(big.NewRat(1, 1))
	neg := func(v T) T { return f.sub(rat(new(big.Rat)), v) }
	if gone {
		t.put(row, own, one)
		return
	}
	switch b.kind {
	case "resistor":
		t.voltage(row, b.a, b.b, one)
		t.put(row, own, neg(rat(b.value)))
	case "inductor":
		t.voltage(row, b.a, b.b, one)
		t.put(row, own, neg(f.mul(t.s, rat(b.value))))
	case "capacitor":
		t.put(row, own, one)
		t.voltage(row, b.a, b.b, neg(f.mul(t.s, rat(b.value))))
	case "impedance":
		t.voltage(row, b.a, b.b, evaluated(f, b.ratio.den, t.s))
		t.put(row, own, neg(evaluated(f, b.ratio.num, t.s)))
	case "admittance":
		t.put(row, own, evaluated(f, b.ratio.den, t.s))
		t.voltage(row, b.a, b.b, neg(evaluated(f, b.ratio.num, t.s)))
	case "voltage", "wire":
		t.voltage(row, b.a, b.b, one)
	case "current":
		t.put(row, own, one)
	case "switch":
		switch {
		case !closed[i]:
			t.put(row, own, one)
		default:
			t.voltage(row, b.a, b.b, one)
			if b.value != nil {
				t.put(row, own, neg(rat(b.value)))
			}
		}
	case "output":
		t.opAmp(row, b)
	case "winding":
		t.winding(p, row, i)
	default:
		t.dependent(row, i, b)
	}
}

// opAmp: v(+) − v(−) = v(out)·(1/gain + s/bandwidth), 0 when ideal.
func (t *tableau[T]) opAmp(row int, b *plainBranch) {
	f := t.f
	t.voltage(row, b.plus, b.minus, f.rat(big.NewRat(1, 1)))
	if b.bandwidth == nil {
		return
	}
	k := f.quo(t.s, f.rat(b.bandwidth))
	if b.gain != nil {
		k = f.add(k, f.quo(f.rat(big.NewRat(1, 1)), f.rat(b.gain)))
	}
	t.voltage(row, b.a, 0, f.sub(f.rat(new(big.Rat)), k))
}

// winding: the first balances the ampere-turns, each other one has the volts
// per turn of the first.
func (t *tableau[T]) winding(p *plainNetwork, row, i int) {
	b, f := &p.branches[i], t.f
	if b.first == i {
		for k := i; k < len(p.branches) && p.branches[k].kind == "winding" && p.branches[k].first == i; k++ {
			t.put(row, t.current(k), f.rat(p.branches[k].turns))
		}
		return
	}
	primary := &p.branches[b.first]
	t.voltage(row, b.a, b.b, f.rat(primary.turns))
	t.voltage(row, primary.a, primary.b, f.rat(new(big.Rat).Neg(b.turns)))
}

// dependent: the quantity itself less every term.
func (t *tableau[T]) dependent(row, i int, b *plainBranch) {
	f := t.f
	if b.kind == "dependentVoltage" {
		t.voltage(row, b.a, b.b, f.rat(big.NewRat(1, 1)))
	} else {
		t.put(row, t.current(i), f.rat(big.NewRat(1, 1)))
	}
	// Multiplying by the denominators keeps the natural frequencies that the
	// coefficients bring along.
	for _, c := range b.controls {
		scale(f, t.rows[row], evaluated(f, c.k.den, t.s))
	}
	for j, c := range b.controls {
		k := f.sub(f.rat(new(big.Rat)), evaluated(f, c.k.num, t.s))
		for m, other := range b.controls {
			if m != j {
				k = f.mul(k, evaluated(f, other.k.den, t.s))
			}
		}
		if c.branch >= 0 {
			t.put(row, t.current(c.branch), k)
		} else {
			t.voltage(row, c.plus, c.minus, k)
		}
	}
}

func scale[T any](f field[T], row []T, k T) {
	for c := range row {
		if f.pivot(row[c]) != 0 {
			row[c] = f.mul(row[c], k)
		}
	}
}

// column is an empty right-hand side.
func (t *tableau[T]) column() []T {
	out := make([]T, len(t.rows))
	for i := range out {
		out[i] = t.f.rat(new(big.Rat))
	}
	return out
}

// solve solves for one right-hand side.
func (t *tableau[T]) solve(column []T) ([]T, error) {
	right := make([][]T, len(column))
	for i := range right {
		right[i] = []T{column[i]}
	}
	x, _, err := eliminate(t.f, t.rows, right)
	if err != nil {
		return nil, err
	}
	out := make([]T, len(x))
	for i := range x {
		out[i] = x[i][0]
	}
	return out, nil
}

// plainOutput is a quantity to look at: a voltage between nodes, or a current.
type plainOutput struct {
	text        string // in the notation
	plus, minus int
	branch      int // −1 for a voltage
}

// of reads an output from a solution.
func of[T any](t *tableau[T], o plainOutput, x []T) T {
	if o.branch >= 0 {
		return x[t.current(o.branch)]
	}
	out := t.f.rat(new(big.Rat))
	if o.plus > 0 {
		out = t.f.add(out, x[o.plus-1])
	}
	if o.minus > 0 {
		out = t.f.sub(out, x[o.minus-1])
	}
	return out
}
