package network

import (
	"math/big"
	"testing"

	"portlight/dialect/number"

	"pgregory.net/rapid"
)

// tableau is a second, independent formulation to check the pencil against:
// every element's equations as they stand in a textbook, over all node
// voltages and all terminal currents, at one rational s, solved densely.
type tableau struct {
	n      *Network
	s      *big.Rat
	first  []int // each element's first current
	size   int
	matrix [][]*big.Rat
	rhs    []*big.Rat
}

type drive struct {
	input, state map[int]*big.Rat // by element
	plus, minus  int              // unit current injected, plus < 0 for none
}

func newTableau(n *Network, s *big.Rat, d drive) *tableau {
	t := &tableau{n: n, s: s, first: make([]int, len(n.Elements)), size: n.Nodes}
	for i, e := range n.Elements {
		t.first[i] = t.size
		switch e.Kind {
		case Transformer:
			t.size += len(e.Windings)
		case Coupling, Absent:
		default:
			t.size++
		}
	}
	for v := range n.Nodes { // balances of currents
		t.row()
		for i, e := range n.Elements {
			for k, ends := range t.ends(e) {
				if ends[0] == v {
					t.put(t.first[i]+k, one)
				}
				if ends[1] == v {
					t.put(t.first[i]+k, minusOne)
				}
			}
		}
		if d.plus == v {
			t.right(one)
		}
		if d.minus == v {
			t.right(minusOne)
		}
	}
	for i := range n.Elements {
		t.equations(i, d)
	}
	return t
}

func (t *tableau) ends(e Element) [][2]int {
	switch e.Kind {
	case OpAmp:
		return [][2]int{{e.Output, t.n.Ground}}
	case Transformer:
		var out [][2]int
		for _, w := range e.Windings {
			out = append(out, [2]int{w.Plus, w.Minus})
		}
		return out
	case Coupling, Absent:
		return nil
	}
	return [][2]int{{e.From, e.To}}
}

func (t *tableau) row() {
	r := make([]*big.Rat, t.size)
	for i := range r {
		r[i] = new(big.Rat)
	}
	t.matrix, t.rhs = append(t.matrix, r), append(t.rhs, new(big.Rat))
}

func (t *tableau) put(col int, v *big.Rat) {
	r := t.matrix[len(t.matrix)-1]
	r[col].Add(r[col], v)
}

func (t *tableau) voltage(a, b int, v *big.Rat) {
	t.put(a, v)
	t.put(b, new(big.Rat).Neg(v))
}

func (t *tableau) right(v *big.Rat) {
	if v != nil {
		r := t.rhs[len(t.rhs)-1]
		r.Add(r, v)
	}
}

func mul(xs ...*big.Rat) *big.Rat {
	out := big.NewRat(1, 1)
	for _, x := range xs {
		if x == nil {
			return new(big.Rat)
		}
		out.Mul(out, x)
	}
	return out
}

func (t *tableau) eval(coeffs []number.Exact, empty int64) *big.Rat {
	if len(coeffs) == 0 {
		return big.NewRat(empty, 1)
	}
	out := new(big.Rat)
	for i := len(coeffs) - 1; i >= 0; i-- {
		out.Add(mul(out, t.s), coeffs[i].Rat())
	}
	return out
}

func (t *tableau) equations(i int, d drive) {
	e, c := t.n.Elements[i], t.first[i]
	if e.Kind == Coupling || e.Kind == Absent {
		return
	}
	t.row()
	value := e.Value.Rat()
	switch e.Kind {
	case Resistor:
		t.voltage(e.From, e.To, one)
		t.put(c, mul(minusOne, value))
	case Capacitor:
		t.voltage(e.From, e.To, mul(value, t.s))
		t.put(c, minusOne)
		t.right(mul(value, d.state[i]))
	case Inductor:
		t.voltage(e.From, e.To, one)
		t.put(c, mul(minusOne, value, t.s))
		t.right(mul(minusOne, value, d.state[i]))
		for _, k := range t.n.Elements {
			if k.Kind != Coupling || k.Coils[0] != i && k.Coils[1] != i {
				continue
			}
			other := k.Coils[0] + k.Coils[1] - i
			m := k.Value.Rat()
			t.put(t.first[other], mul(minusOne, m, t.s))
			t.right(mul(minusOne, m, d.state[other]))
		}
	case Immittance:
		num, den := t.eval(e.Numerator, 1), t.eval(e.Denominator, 1)
		if e.Admittance {
			num, den = den, num
		}
		t.voltage(e.From, e.To, den)
		t.put(c, mul(minusOne, num))
	case VoltageSource, Short:
		t.voltage(e.From, e.To, one)
		t.right(d.input[i])
	case CurrentSource, Open:
		t.put(c, one)
		t.right(d.input[i])
	case DependentVoltage, DependentCurrent:
		if e.Kind == DependentVoltage {
			t.voltage(e.From, e.To, one)
		} else {
			t.put(c, one)
		}
		for _, k := range e.Controls {
			h := new(big.Rat).Quo(t.eval(k.Numerator, 1), t.eval(k.Denominator, 1))
			for _, p := range k.Of {
				f := mul(minusOne, h)
				if p.Negative {
					f.Neg(f)
				}
				if p.Quantity == NodePair {
					t.voltage(p.Plus, p.Minus, f)
				} else {
					t.put(t.first[p.Element]+p.Winding, f)
				}
			}
		}
	case OpAmp:
		t.voltage(e.Plus, e.Minus, minusOne)
		gain := new(big.Rat)
		if e.DCGain != nil {
			gain.Inv(e.DCGain.Rat())
		}
		if e.GainBandwidth != nil {
			inverse := new(big.Rat).Inv(e.GainBandwidth.Rat())
			gain.Add(gain, mul(inverse, t.s))
			t.right(mul(inverse, d.state[i]))
		}
		t.voltage(e.Output, t.n.Ground, gain)
	case Transformer:
		for k, w := range e.Windings {
			t.put(c+k, w.Turns.Rat())
		}
		for k, w := range e.Windings[1:] {
			_ = k
			t.row()
			t.voltage(w.Plus, w.Minus, e.Windings[0].Turns.Rat())
			t.voltage(e.Windings[0].Plus, e.Windings[0].Minus, mul(minusOne, w.Turns.Rat()))
		}
	}
}

// solve fixes the reference of every island at zero in place of its balance
// and returns the solution, nil for a singular matrix.
func (t *tableau) solve(references []int) []*big.Rat {
	for _, v := range references {
		for c := range t.matrix[v] {
			t.matrix[v][c] = new(big.Rat)
		}
		t.matrix[v][v] = one
		t.rhs[v] = new(big.Rat)
	}
	a, b := t.matrix, t.rhs
	for c := range t.size {
		p := c
		for p < t.size && a[p][c].Sign() == 0 {
			p++
		}
		if p == t.size {
			return nil
		}
		a[c], a[p], b[c], b[p] = a[p], a[c], b[p], b[c]
		inv := new(big.Rat).Inv(a[c][c])
		for r := range t.size {
			if r == c || a[r][c].Sign() == 0 {
				continue
			}
			f := mul(a[r][c], inv)
			for k := c; k < t.size; k++ {
				a[r][k] = new(big.Rat).Sub(a[r][k], mul(f, a[c][k]))
			}
			b[r] = new(big.Rat).Sub(b[r], mul(f, b[c]))
		}
	}
	out := make([]*big.Rat, t.size)
	for i := range out {
		out[i] = new(big.Rat).Quo(b[i], a[i][i])
	}
	return out
}

// randomNetwork draws a network of every kind of element, well posed or not.
func randomNetwork(t *rapid.T) *Network {
	n := &Network{Nodes: rapid.IntRange(2, 7).Draw(t, "nodes")}
	node := rapid.IntRange(0, n.Nodes-1)
	value := rapid.Custom(func(t *rapid.T) number.Exact {
		return number.FromRat(big.NewRat(rapid.Int64Range(1, 9).Draw(t, "p"), rapid.Int64Range(1, 4).Draw(t, "q")))
	})
	signed := rapid.Custom(func(t *rapid.T) number.Exact {
		v := value.Draw(t, "v")
		if rapid.Bool().Draw(t, "negative") {
			v = v.Neg()
		}
		return v
	})
	coefficients := rapid.SliceOfN(signed, 1, 4)
	pair := func(e *Element) {
		e.From = node.Draw(t, "from")
		e.To = (e.From + rapid.IntRange(1, n.Nodes-1).Draw(t, "to")) % n.Nodes
	}
	// A chain of resistors and capacitors through all nodes keeps most draws
	// well posed.
	for v := 1; v < n.Nodes; v++ {
		if rapid.IntRange(0, 9).Draw(t, "gap") == 0 {
			continue // may leave an island
		}
		e := Element{Kind: rapid.SampledFrom([]Kind{Resistor, Capacitor, Inductor}).Draw(t, "chain"), From: v - 1, To: v, Value: value.Draw(t, "value")}
		n.Elements = append(n.Elements, e)
	}
	var coils []int
	kinds := []Kind{Resistor, Resistor, Capacitor, Inductor, Inductor, Immittance, VoltageSource, CurrentSource,
		DependentVoltage, DependentCurrent, OpAmp, Transformer, Coupling, Short, Open}
	for range rapid.IntRange(1, 9).Draw(t, "elements") {
		e := Element{Kind: rapid.SampledFrom(kinds).Draw(t, "kind"), Value: value.Draw(t, "value")}
		pair(&e)
		switch e.Kind {
		case Immittance:
			e.Numerator, e.Denominator = coefficients.Draw(t, "numerator"), coefficients.Draw(t, "denominator")
			e.Admittance = rapid.Bool().Draw(t, "admittance")
		case DependentVoltage, DependentCurrent:
			for range rapid.IntRange(1, 2).Draw(t, "controls") {
				c := Control{Numerator: coefficients.Draw(t, "numerator"), Denominator: coefficients.Draw(t, "denominator")}
				p := Probe{Plus: node.Draw(t, "plus"), Minus: node.Draw(t, "minus"), Negative: rapid.Bool().Draw(t, "minus sign")}
				if k := len(n.Elements); k > 0 && rapid.Bool().Draw(t, "current") {
					p.Element = rapid.IntRange(0, k-1).Draw(t, "sensed")
					switch s := n.Elements[p.Element]; {
					case s.Kind.twoTerminal() || s.Kind == Open:
						p.Quantity = ElementFlow
					case s.Kind == OpAmp || s.Kind == Transformer:
						p.Quantity = TerminalCurrent
					default:
						p = Probe{Plus: 0, Minus: 1}
					}
				}
				c.Of = []Probe{p}
				e.Controls = append(e.Controls, c)
			}
		case OpAmp:
			e.Plus, e.Minus = e.From, e.To
			e.Output = node.Draw(t, "output")
			if rapid.Bool().Draw(t, "one pole") {
				gbw := value.Draw(t, "gbw")
				e.GainBandwidth = &gbw
				if rapid.Bool().Draw(t, "finite") {
					gain := value.Draw(t, "gain")
					e.DCGain = &gain
				}
			}
		case Transformer:
			e.Windings = []Winding{{e.From, e.To, value.Draw(t, "turns")}}
			for range rapid.IntRange(1, 2).Draw(t, "windings") {
				w := Element{}
				pair(&w)
				e.Windings = append(e.Windings, Winding{w.From, w.To, signed.Draw(t, "turns")})
			}
		case Coupling:
			if len(coils) < 2 {
				continue
			}
			k := rapid.IntRange(1, len(coils)-1).Draw(t, "coil")
			e.Coils, e.Mutual = [2]int{coils[k-1], coils[k]}, true
		case Inductor:
			coils = append(coils, len(n.Elements))
		}
		n.Elements = append(n.Elements, e)
	}
	return n
}

// TestAgainstTableau compares every node voltage and every current, for every
// kind of drive, with the dense solution of the tableau at a random s.
func TestAgainstTableau(t *testing.T) {
	regular, singular := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		n := randomNetwork(t)
		s, problems := Assemble(n)
		if s == nil {
			for _, p := range problems {
				if p.Kind != AcrossIslands {
					t.Fatal(p)
				}
			}
			return
		}
		point := big.NewRat(rapid.Int64Range(1000, 9999).Draw(t, "s"), 997)
		det, err := s.Determinant(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		var cols []Column
		var drives []drive
		add := func(c Column, p *Problem, d drive) {
			if p == nil {
				cols, drives = append(cols, c), append(drives, d)
			}
		}
		for i, e := range n.Elements {
			c, p := s.InputColumn(i)
			add(c, p, drive{input: map[int]*big.Rat{i: one}, plus: -1, minus: -1})
			if e.Kind == Capacitor || e.Kind == Inductor || e.Kind == OpAmp && e.GainBandwidth != nil {
				c := s.StateColumn(s.MemoryIndex(Memory{i, 0}))
				add(c, nil, drive{state: map[int]*big.Rat{i: one}, plus: -1, minus: -1})
			}
		}
		c, p := s.InjectColumn(0, n.Nodes-1)
		add(c, p, drive{plus: 0, minus: n.Nodes - 1})
		want := make([][]*big.Rat, len(drives))
		for j, d := range drives {
			want[j] = newTableau(n, point, d).solve(s.frame.roots)
			if (want[j] == nil) != (det.Eval(point).Sign() == 0) {
				t.Fatalf("tableau singular: %v, determinant %s", want[j] == nil, det)
			}
		}
		if det.Eval(point).Sign() == 0 {
			singular++
			ps, err := s.Diagnose(t.Context())
			if err != nil || len(ps) == 0 {
				t.Fatalf("a singular network without a diagnosis: %v", err)
			}
			return
		}
		regular++
		for _, p := range n.Inspect() {
			if p.Singular {
				t.Fatalf("%v in a regular network", p)
			}
		}
		compareAll(t, s, point, cols, want)
	})
	t.Logf("%d regular, %d singular networks", regular, singular)
	if regular < 5 { // of 20 drawn in a short run
		t.Errorf("only %d regular networks drawn", regular)
	}
}

func compareAll(t *rapid.T, s *System, point *big.Rat, cols []Column, want [][]*big.Rat) {
	n := s.network
	x := newTableau(n, point, drive{plus: -1, minus: -1})
	var outs []Output
	var places []int
	add := func(o Output, p *Problem, place int) {
		if p == nil {
			outs, places = append(outs, o), append(places, place)
		}
	}
	for v := range n.Nodes {
		o, p := s.NodeVoltage(v, s.frame.roots[s.Island(v)])
		add(o, p, v)
	}
	for i, e := range n.Elements {
		if e.Kind == Transformer {
			for w := range e.Windings {
				o, p := s.TerminalCurrent(i, w)
				add(o, p, x.first[i]+w)
			}
			continue
		}
		o, p := s.ElementCurrent(i)
		add(o, p, x.first[i])
	}
	num, den, err := s.Transfer(t.Context(), outs, cols)
	if err != nil {
		t.Fatal(err)
	}
	d := den.Eval(point)
	for i := range outs {
		for j := range cols {
			got := num[i][j].Eval(point)
			if got.Quo(got, d).Cmp(want[j][places[i]]) != 0 {
				t.Fatalf("output %d (%v), column %d: got %s, want %s", i, outs[i], j, got, want[j][places[i]])
			}
		}
	}
}
