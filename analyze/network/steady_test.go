package network

import (
	"math/big"
	"testing"

	"portlight/analyze/exact"
	"portlight/dialect/number"

	"pgregory.net/rapid"
)

// settle finds the state at 0− with constant sources and given values by name.
func (b *builder) settle(sources, given map[string]string) (*Steady, []Problem) {
	b.t.Helper()
	s := map[int][]Sinusoid{}
	for name, v := range sources {
		s[b.index[name]] = []Sinusoid{{Cosine: mustNumber(b.t, v)}}
	}
	g := map[int]number.Exact{}
	for name, v := range given {
		g[b.index[name]] = mustNumber(b.t, v)
	}
	state, problems, err := b.SteadyState(b.t.Context(), s, g)
	if err != nil {
		b.t.Fatal(err)
	}
	return state, problems
}

func (b *builder) holds(state *Steady, want map[string]string) {
	b.t.Helper()
	for name, v := range want {
		got := state.Values[Memory{Element: b.index[name]}]
		if got == nil || got.Cmp(rat(b.t, v)) != 0 {
			b.t.Errorf("%s: got %v, want %s", name, got, v)
		}
	}
}

func TestSteadyState(t *testing.T) {
	t.Run("an inductor straight across a source", func(t *testing.T) {
		b := start(t)
		b.two(VoltageSource, "V1", "a 0", "")
		b.two(Inductor, "L1", "a 0", "1e-3")
		b.two(Resistor, "R", "a 0", "1")
		_, p := b.settle(map[string]string{"V1": "5"}, nil)
		b.expect(b.says(p), "no steady state: V1, L1")
		_, p = b.settle(nil, nil)
		b.expect(b.says(p), "indeterminate state: L1")
		state, p := b.settle(nil, map[string]string{"L1": "3"})
		b.expect(b.says(p))
		b.holds(state, map[string]string{"L1": "3"})
	})
	t.Run("two inductors side by side", func(t *testing.T) {
		b := start(t)
		b.two(VoltageSource, "V", "a 0", "")
		b.two(Resistor, "R", "a b", "2")
		b.two(Inductor, "L1", "b 0", "1")
		b.two(Inductor, "L2", "b 0", "3")
		_, p := b.settle(map[string]string{"V": "10"}, nil)
		b.expect(b.says(p), "indeterminate state: L1, L2")
		state, p := b.settle(map[string]string{"V": "10"}, map[string]string{"L2": "4"})
		b.expect(b.says(p))
		b.holds(state, map[string]string{"L1": "1", "L2": "4"})
	})
	t.Run("two capacitors in series", func(t *testing.T) {
		b := start(t)
		b.two(VoltageSource, "V1", "a 0", "")
		b.two(Resistor, "R1", "a b", "1e3")
		b.two(Capacitor, "C1", "b m", "1e-6")
		b.two(Capacitor, "C2", "m 0", "2e-6")
		v := map[string]string{"V1": "10"}
		_, p := b.settle(v, nil)
		b.expect(b.says(p), "indeterminate state: C1, C2 at m")
		state, p := b.settle(v, map[string]string{"C1": "4"})
		b.expect(b.says(p))
		b.holds(state, map[string]string{"C1": "4", "C2": "6"})
		state, p = b.settle(v, map[string]string{"C1": "4", "C2": "6"})
		b.expect(b.says(p))
		b.holds(state, map[string]string{"C1": "4", "C2": "6"})
		_, p = b.settle(v, map[string]string{"C1": "4", "C2": "5"})
		if len(p) != 1 || p[0].Kind != InitialNotFree {
			t.Errorf("contradicting initial values: %v", p)
		}
	})
	t.Run("a value that is not free", func(t *testing.T) {
		b := start(t)
		b.two(VoltageSource, "V", "a 0", "")
		b.two(Resistor, "R", "a b", "1")
		b.two(Capacitor, "C", "b 0", "1")
		_, p := b.settle(map[string]string{"V": "10"}, map[string]string{"C": "4"})
		b.expect(b.says(p), "initial value not free: C")
		if p[0].Mismatch.Cmp(rat(t, "-6")) != 0 {
			t.Error(p[0].Mismatch)
		}
	})
	t.Run("a current into a capacitor alone", func(t *testing.T) {
		b := start(t)
		b.two(CurrentSource, "I", "0 a", "")
		b.two(Capacitor, "C", "a 0", "1")
		_, p := b.settle(map[string]string{"I": "1"}, nil)
		b.expect(b.says(p), "no steady state: I, C at a")
	})
	t.Run("resonance", func(t *testing.T) {
		b := start(t)
		b.two(VoltageSource, "V", "a 0", "")
		b.two(Inductor, "L", "a b", "1/4")
		b.two(Capacitor, "C", "b 0", "1/9")
		b.two(Resistor, "R", "a 0", "1")
		at := func(omega string) []Problem {
			_, p, err := b.SteadyState(t.Context(), map[int][]Sinusoid{0: {{
				Omega: mustNumber(t, omega), Sine: mustNumber(t, "1"),
			}}}, nil)
			if err != nil {
				t.Fatal(err)
			}
			return p
		}
		b.expect(b.says(at("6")), "resonant source: V, L, C at b")
		b.expect(b.says(at("7")))
	})
	t.Run("inner states settle too", func(t *testing.T) {
		b := start(t)
		b.two(VoltageSource, "V", "a 0", "")
		b.sense(DependentVoltage, "E", "o 0", "a 0", numbers(t, "6"), numbers(t, "2 1"))
		b.two(Resistor, "R", "o 0", "1")
		state, p := b.settle(map[string]string{"V": "5"}, nil)
		b.expect(b.says(p))
		s := b.system()
		if len(s.Memories()) != 1 {
			t.Fatal(s.Memories())
		}
		// z[1] = d[1]·y with y = 6/2·5.
		if got := state.Values[s.Memories()[0]]; got.Cmp(rat(t, "15")) != 0 {
			t.Error(got)
		}
	})
}

// TestSteadyStateIsTheResponseAtItsFrequency compares with the network
// functions from source to memory, evaluated at jω.
func TestSteadyStateIsTheResponseAtItsFrequency(t *testing.T) {
	compared := 0
	rapid.Check(t, func(t *rapid.T) {
		n := randomNetwork(t)
		s, _ := Assemble(n)
		if s == nil {
			return
		}
		det, err := s.Determinant(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		sources := map[int][]Sinusoid{}
		for i, e := range n.Elements {
			if e.Kind == VoltageSource || e.Kind == CurrentSource {
				for range rapid.IntRange(1, 2).Draw(t, "parts") {
					draw := func(name string) number.Exact { return number.FromInt(rapid.Int64Range(0, 3).Draw(t, name)) }
					sources[i] = append(sources[i], Sinusoid{draw("omega"), draw("cosine"), draw("sine")})
				}
			}
		}
		for w := range int64(4) {
			if re, im := det.EvalGaussian(new(big.Rat), big.NewRat(w, 1)); re.Sign() == 0 && im.Sign() == 0 {
				return
			}
		}
		state, problems, err := n.SteadyState(t.Context(), sources, nil)
		if err != nil || problems != nil {
			t.Fatal(err, problems)
		}
		for k, m := range s.Memories() {
			want := new(big.Rat)
			for i, parts := range sources {
				col, _ := s.InputColumn(i)
				num, _, err := s.Transfer(t.Context(), []Output{s.MemoryValue(k)}, []Column{col})
				if err != nil {
					t.Fatal(err)
				}
				h, err := exact.NewRatio(num[0][0], det)
				if err != nil {
					t.Fatal(err)
				}
				for _, w := range parts {
					re, im, _ := h.EvalGaussian(new(big.Rat), w.Omega.Rat())
					// Re((re + j·im)(cosine − j·sine))
					want.Add(want, mul(re, w.Cosine.Rat()))
					if w.Omega.Rat().Sign() != 0 {
						want.Add(want, mul(im, w.Sine.Rat()))
					}
				}
			}
			if got := state.Values[m]; got == nil || got.Cmp(want) != 0 {
				t.Fatalf("memory %v: got %v, want %s", m, got, want)
			}
			compared++
		}
	})
	if compared < 20 {
		t.Errorf("only %d memories compared", compared)
	}
}

func TestConflicts(t *testing.T) {
	b := start(t)
	v := b.two(VoltageSource, "V", "a 0", "")
	c1 := b.two(Capacitor, "C1", "a b", "1")
	c2 := b.two(Capacitor, "C2", "b 0", "1")
	b.two(Resistor, "R", "b c", "1")
	l1 := b.two(Inductor, "L1", "c d", "1")
	l2 := b.two(Inductor, "L2", "0 d", "1")
	conflicts := func(v1, v2, i1, i2, u string) []Problem {
		return b.Conflicts(
			map[int]*big.Rat{c1: rat(t, v1), c2: rat(t, v2), l1: rat(t, i1), l2: rat(t, i2)},
			map[int]*big.Rat{v: rat(t, u)})
	}
	b.expect(b.says(conflicts("4", "1", "2", "-2", "5")))
	p := conflicts("4", "2", "2", "-1", "5")
	b.expect(b.says(p), "initial conflict: C2, V, C1 at b, 0, a", "initial conflict: L1, L2 at d")
	if p[0].Mismatch.Cmp(rat(t, "1")) != 0 || p[1].Mismatch.Cmp(rat(t, "1")) != 0 {
		t.Error(p[0].Mismatch, p[1].Mismatch)
	}
}

// BenchmarkSteadyState settles 1 000 filter sections in 5 000 parts.
// Mark: 200 ms.
func BenchmarkSteadyState(b *testing.B) {
	n := bigNetwork(5000)
	sources := map[int][]Sinusoid{0: {{Cosine: number.FromInt(1)}}}
	for b.Loop() {
		if _, p, err := n.SteadyState(b.Context(), sources, nil); err != nil || len(p) > 0 {
			b.Fatal(err, p)
		}
	}
}
