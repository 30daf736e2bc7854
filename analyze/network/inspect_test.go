package network

import (
	"fmt"
	"slices"
	"testing"

	"portlight/dialect/number"

	"pgregory.net/rapid"
)

func TestInspectNamesEveryMember(t *testing.T) {
	cases := []struct {
		name  string
		build func(b *builder)
		want  []string
	}{
		{"sources in a loop", func(b *builder) {
			b.two(VoltageSource, "V1", "a 0", "")
			b.two(VoltageSource, "V2", "b a", "")
			b.two(VoltageSource, "V3", "b 0", "")
			b.two(Resistor, "R", "b 0", "10")
		}, []string{"voltage loop: V3, V1, V2 at b, 0, a"}},
		{"a closed switch across a source", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Short, "S", "a 0", "")
			b.two(Resistor, "R", "a 0", "10")
		}, []string{"voltage loop: S, V at a, 0"}},
		{"outputs joined", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.opAmp("U1", "a", "o", "o")
			b.opAmp("U2", "a", "o", "o")
			b.two(Resistor, "R", "o 0", "10")
		}, []string{"voltage loop: U2, U1 at o, 0"}},
		{"source currents disagree", func(b *builder) {
			b.two(CurrentSource, "I1", "0 a", "")
			b.two(CurrentSource, "I2", "a b", "")
			b.two(Resistor, "R", "b 0", "10")
		}, []string{"current cutset: I1, I2 at a"}},
		{"an open switch cuts a source off", func(b *builder) {
			b.two(CurrentSource, "I", "0 a", "")
			b.two(Open, "S", "a b", "")
			b.two(Resistor, "R", "b 0", "10")
			b.two(Capacitor, "C", "b 0", "1")
		}, []string{"current cutset: I, S at a"}},
		{"a current source between two halves, each cut off by open switches", func(b *builder) {
			b.two(Resistor, "R1", "a b", "1")
			b.two(CurrentSource, "I", "b c", "")
			b.two(Resistor, "R2", "c d", "1")
			b.two(Open, "S1", "a 0", "")
			b.two(Open, "S2", "d 0", "")
			b.two(Resistor, "R3", "0 e", "1")
			b.two(Resistor, "R4", "0 e", "1")
		}, []string{
			"island at a, b, c, d",
			"current cutset: I, S2 at c, d", "current cutset: I, S1 at a, b",
		}},
		{"island", func(b *builder) {
			b.two(Resistor, "R1", "a 0", "10")
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Resistor, "R2", "c d", "10")
			b.two(Capacitor, "C", "c d", "1")
		}, []string{"island at c, d"}},
		{"one connection", func(b *builder) {
			b.two(Resistor, "R1", "a 0", "10")
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Resistor, "R2", "a x", "10")
		}, []string{"floating node: R2 at x"}},
		{"an input left open", func(b *builder) {
			b.opAmp("U", "x", "o", "o")
			b.two(Resistor, "R", "o 0", "10")
		}, []string{"floating node: U at x", "across islands: U at x, o"}},
		{"no feedback", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Resistor, "R1", "a p", "1")
			b.two(Resistor, "R2", "p 0", "1")
			b.two(Resistor, "R3", "m 0", "1")
			b.two(Resistor, "R4", "m a", "2")
			b.opAmp("U", "p", "m", "out")
			b.two(Resistor, "RL", "out 0", "1")
		}, []string{"op amp without feedback: U at out, p, m"}},
		{"feedback through another amplifier", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.opAmp("U1", "a", "m", "x")
			b.opAmp("U2", "x", "y", "y")
			b.two(Resistor, "R1", "y m", "1")
			b.two(Resistor, "R2", "m 0", "1")
		}, nil},
		{"feedback through the current of a source", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.opAmp("U", "p", "0", "o")
			b.two(Resistor, "R1", "o a", "1")
			b.put(Element{Name: "F", Kind: DependentCurrent, From: b.node("p"), Controls: []Control{{
				Numerator: numbers(t, "1"), Of: []Probe{{Quantity: ElementFlow, Element: b.index["V"]}},
			}}})
			b.two(Resistor, "R2", "p 0", "1")
		}, nil},
		{"coefficient above one", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Inductor, "L1", "a 0", "4")
			b.two(Inductor, "L2", "b 0", "9")
			b.two(Resistor, "R", "b 0", "1")
			b.couple("M", "L1", "L2", "6.1", true)
		}, []string{"coupling range: M, L1, L2"}},
		{"three coils that could not be wound", func(b *builder) {
			for _, n := range []string{"1", "2", "3"} {
				b.two(Inductor, "L"+n, "n"+n+" 0", "1")
				b.two(Resistor, "R"+n, "n"+n+" 0", "1")
			}
			b.couple("K12", "L1", "L2", "0.9", false)
			b.couple("K13", "L1", "L3", "0.9", false)
			b.couple("K23", "L2", "L3", "-0.9", true)
		}, []string{"inductance matrix: K12, K13, K23, L1, L2, L3"}},
		{"tied initial values", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Capacitor, "C1", "a b", "1")
			b.two(Capacitor, "C2", "b 0", "1")
			b.two(Resistor, "R", "b 0", "1")
			b.two(Inductor, "L1", "b c", "1")
			b.two(Inductor, "L2", "c d", "1")
			b.two(Resistor, "R2", "d 0", "1")
		}, []string{"capacitor loop: C2, V, C1 at b, 0, a", "inductor cutset: L1, L2 at c"}},
		{"no path for direct current", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Resistor, "R", "a b", "1")
			b.two(Capacitor, "C1", "b m", "1")
			b.two(Capacitor, "C2", "m 0", "2")
		}, []string{"no DC path: C1, C2 at m"}},
		{"both ends at one node", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Resistor, "R1", "a a", "1")
			b.two(Resistor, "R2", "a 0", "1")
		}, []string{"self loop: R1 at a"}},
		{"values", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Resistor, "R1", "a 0", "0")
			b.two(Capacitor, "C", "a 0", "-1")
		}, []string{"bad value: R1 (not positive)", "bad value: C (not positive)", "capacitor loop: C, V at a, 0"}},
		{"references", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Capacitor, "C", "a 0", "1")
			b.two(Inductor, "L", "a 0", "1")
			b.couple("M", "L", "C", "1", true)
		}, []string{"bad reference: M, C (couples something other than an inductor)", "capacitor loop: C, V at a, 0"}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			b := start(t)
			c.build(b)
			b.expect(b.says(b.Inspect()), c.want...)
		})
	}
}

func TestGroundAndIslands(t *testing.T) {
	b := start(t)
	b.Ground = -1
	b.two(VoltageSource, "V", "a b", "")
	b.two(Resistor, "R", "a b", "1")
	b.two(Inductor, "L1", "a b", "1")
	b.two(Inductor, "L2", "c d", "1")
	b.two(Resistor, "R2", "c d", "1")
	b.couple("M", "L1", "L2", "0.5", false)
	problems := b.Inspect()
	b.expect(b.says(problems), "island at c, d")
	if p := problems[0]; !p.Coupled || fmt.Sprint(p.Through) != "[5]" {
		t.Errorf("coupled %v through %v", p.Coupled, p.Through)
	}
	s := b.system()
	if _, p := s.NodeVoltage(b.node("c"), b.node("a")); p == nil || p.Kind != AcrossIslands {
		t.Errorf("a voltage between islands: %v", p)
	}
	if _, p := s.InjectColumn(b.node("c"), b.node("a")); p == nil || p.Kind != AcrossIslands {
		t.Errorf("a current between islands: %v", p)
	}
	if _, p := s.NodeVoltage(b.node("c"), b.node("d")); p != nil {
		t.Error(p)
	}
	b.opAmp("U", "a", "b", "b")
	b.expect(b.says(b.Inspect(), NoGround), "no ground: U")
	if s, problems := Assemble(b.Network); s != nil || len(problems) == 0 {
		t.Error("assembled an op amp without a reference")
	}
	u := start(t)
	u.two(Resistor, "R", "a b", "1")
	u.two(VoltageSource, "V", "a b", "")
	u.expect(u.says(u.Inspect()), "ground unused at 0", "island at a, b")
}

func TestDiagnose(t *testing.T) {
	cases := []struct {
		name  string
		build func(b *builder)
		want  []string
	}{
		{"a conductance cancelled", func(b *builder) {
			b.two(CurrentSource, "I", "0 a", "")
			b.two(Resistor, "R", "a 0", "100")
			b.sense(DependentCurrent, "G", "a 0", "a 0", numbers(t, "-0.01"), nil)
		}, []string{"singular equations: R, G at a"}},
		{"a source that follows itself", func(b *builder) {
			b.two(VoltageSource, "V", "in 0", "")
			b.two(Resistor, "R", "in a", "1e3")
			b.sense(DependentVoltage, "E", "a 0", "a 0", numbers(t, "1"), nil)
		}, []string{"singular equations: E"}},
		{"two sources for one voltage", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.sense(DependentVoltage, "E", "a 0", "a 0", numbers(t, "2"), nil)
			b.two(Resistor, "R", "a 0", "10")
		}, []string{"voltage loop: E, V at a, 0"}},
		{"a loop whose current is sensed, well posed", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.put(Element{Name: "H", Kind: DependentVoltage, From: b.node("a"), Controls: []Control{{
				Numerator: numbers(t, "5"), Of: []Probe{{Quantity: ElementFlow, Element: b.index["V"]}},
			}}})
		}, nil},
		{"the current of an open switch sensed, well posed", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Open, "S", "a b", "")
			b.two(Resistor, "R", "b 0", "1")
			b.put(Element{Name: "F", Kind: DependentCurrent, From: b.node("b"), Controls: []Control{{
				Numerator: numbers(t, "5"), Of: []Probe{{Quantity: ElementFlow, Element: b.index["S"]}},
			}}})
		}, nil},
		{"a loop whose current is sensed elsewhere", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Short, "S", "a 0", "")
			b.put(Element{Name: "F", Kind: DependentVoltage, From: b.node("b"), Controls: []Control{{
				Numerator: numbers(t, "5"), Of: []Probe{{Quantity: ElementFlow, Element: b.index["S"]}},
			}}})
			b.two(Resistor, "R", "b 0", "1")
		}, []string{"voltage loop: S, V at a, 0"}},
		{"one piece of several", func(b *builder) {
			b.two(VoltageSource, "V", "a 0", "")
			b.two(Resistor, "R1", "a b", "1")
			b.two(Resistor, "R2", "b 0", "1")
			b.two(Resistor, "R3", "a c", "1")
			b.sense(DependentCurrent, "G", "c 0", "c a", numbers(t, "-1"), nil)
		}, []string{"singular equations: R3, G at c"}},
		{"rational control, cancelled for every s", func(b *builder) {
			b.two(CurrentSource, "I", "0 a", "")
			b.two(Capacitor, "C", "a 0", "2")
			b.sense(DependentCurrent, "G", "a 0", "a 0", numbers(t, "0 -2"), nil)
		}, []string{"singular equations: C, G at a"}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			b := start(t)
			c.build(b)
			problems, err := b.system().Diagnose(t.Context())
			if err != nil {
				t.Fatal(err)
			}
			b.expect(b.says(problems), c.want...)
		})
	}
}

// TestNullVectorsBothWays compares the dense and the sparse way to what is at
// fault.
func TestNullVectorsBothWays(t *testing.T) {
	b := start(t)
	b.two(CurrentSource, "I", "0 a", "")
	b.two(Resistor, "R", "a 0", "100")
	b.sense(DependentCurrent, "G", "a 0", "a 0", numbers(t, "-0.01"), nil)
	last := "0"
	for i := range denseLimit {
		next := fmt.Sprint("n", i)
		b.two(Resistor, "R"+next, last+" "+next, "1")
		b.two(Capacitor, "C"+next, next+" 0", "1")
		last = next
	}
	s := b.system()
	rows, cols, err := s.nullVectors(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	denseRows, denseCols := s.pencil.Kernel(t.Context())
	if !slices.Equal(rows, denseRows) || !slices.Equal(cols, denseCols) {
		t.Errorf("sparse %v %v, dense %v %v", rows, cols, denseRows, denseCols)
	}
}

// TestAnythingIsData feeds elements whose fields make no sense: problems, never
// a panic.
func TestAnythingIsData(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := &Network{Nodes: rapid.IntRange(0, 4).Draw(t, "nodes")}
		n.Ground = rapid.IntRange(-1, n.Nodes-1).Draw(t, "ground")
		index := rapid.IntRange(-2, 6)
		value := rapid.Custom(func(t *rapid.T) number.Exact { return number.FromInt(rapid.Int64Range(-1, 2).Draw(t, "value")) })
		list := rapid.SliceOfN(value, 0, 3)
		for range rapid.IntRange(0, 6).Draw(t, "elements") {
			e := Element{
				Kind: Kind(rapid.IntRange(-1, 15).Draw(t, "kind")), From: index.Draw(t, "from"), To: index.Draw(t, "to"),
				Value: value.Draw(t, "value"), Mutual: rapid.Bool().Draw(t, "mutual"),
				Coils:     [2]int{index.Draw(t, "coil"), index.Draw(t, "coil")},
				Numerator: list.Draw(t, "numerator"), Denominator: list.Draw(t, "denominator"),
				Plus: index.Draw(t, "plus"), Minus: index.Draw(t, "minus"), Output: index.Draw(t, "output"),
			}
			for range rapid.IntRange(0, 3).Draw(t, "windings") {
				e.Windings = append(e.Windings, Winding{index.Draw(t, "plus"), index.Draw(t, "minus"), value.Draw(t, "turns")})
				e.Controls = append(e.Controls, Control{list.Draw(t, "n"), list.Draw(t, "d"), []Probe{{
					Quantity: Quantity(rapid.IntRange(-1, 3).Draw(t, "quantity")), Plus: index.Draw(t, "plus"),
					Minus: index.Draw(t, "minus"), Element: index.Draw(t, "element"), Winding: index.Draw(t, "winding"),
				}}})
			}
			if rapid.Bool().Draw(t, "pole") {
				v := value.Draw(t, "gbw")
				e.GainBandwidth = &v
			}
			n.Elements = append(n.Elements, e)
		}
		n.Inspect()
		p := n.Partition()
		for g := range p.Groups {
			n.Extract(p, g)
		}
		if s, _ := Assemble(n); s != nil {
			if _, err := s.Diagnose(t.Context()); err != nil {
				t.Fatal(err)
			}
		}
		if _, _, err := n.SteadyState(t.Context(), map[int][]Sinusoid{0: {{Cosine: number.FromInt(1)}}}, nil); err != nil {
			t.Fatal(err)
		}
	})
}
