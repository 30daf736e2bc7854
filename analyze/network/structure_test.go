package network

import (
	"fmt"
	"slices"
	"testing"

	"portlight/dialect/number"

	"pgregory.net/rapid"
)

func drawEdges(t *rapid.T) (vertices int, edges []edge) {
	vertices = rapid.IntRange(1, 9).Draw(t, "vertices")
	v := rapid.IntRange(0, vertices-1)
	for i := range rapid.IntRange(0, 16).Draw(t, "edges") {
		edges = append(edges, edge{v.Draw(t, "from"), v.Draw(t, "to"), i})
	}
	return vertices, edges
}

// components counts the connected parts without some of the edges.
func components(vertices int, edges []edge, without []int) int {
	s := newSets(vertices)
	n := vertices
	for _, e := range edges {
		if !slices.Contains(without, e.id) && s.join(e.from, e.to) {
			n--
		}
	}
	return n
}

// TestStarsAreMinimalCutsets checks each star by its definition (without it
// there is one part more, with any one member back there is not) and the whole
// set by its number, the rank of the graph.
func TestStarsAreMinimalCutsets(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		vertices, edges := drawEdges(t)
		parts := components(vertices, edges, nil)
		rank := newRank(len(edges))
		stars(vertices, rapid.IntRange(-1, vertices-1).Draw(t, "root"), edges, func(v int, ids []int) {
			if components(vertices, edges, ids) != parts+1 {
				t.Fatalf("%v at %d does not cut %v", ids, v, edges)
			}
			for k := range ids {
				without := slices.Delete(slices.Clone(ids), k, k+1)
				if components(vertices, edges, without) != parts {
					t.Fatalf("%v at %d is not minimal in %v", ids, v, edges)
				}
			}
			if !rank.add(ids) {
				t.Fatalf("%v depends on earlier cutsets of %v", ids, edges)
			}
		})
		if rank.size != vertices-parts {
			t.Fatalf("%d cutsets of %d in %v", rank.size, vertices-parts, edges)
		}
	})
}

// rank counts independent sets over the field of two elements.
type rank struct {
	rows [][]bool
	size int
	n    int
}

func newRank(n int) *rank { return &rank{rows: make([][]bool, n), n: n} }

func (r *rank) add(ids []int) bool {
	x := make([]bool, r.n)
	for _, i := range ids {
		x[i] = !x[i]
	}
	for i := range x {
		if !x[i] {
			continue
		}
		if r.rows[i] == nil {
			r.rows[i] = x
			r.size++
			return true
		}
		for k := range x {
			x[k] = x[k] != r.rows[i][k]
		}
	}
	return false
}

// TestLoopsClose checks that every chord's loop is a closed walk through
// distinct vertices, and that there are as many as the graph's nullity.
func TestLoopsClose(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		vertices, edges := drawEdges(t)
		f := newForest(vertices, -1, edges)
		loops := 0
		for _, e := range edges {
			if e.from == e.to {
				loops++
			}
		}
		if len(f.chords)+loops != len(edges)-vertices+components(vertices, edges, nil) {
			t.Fatalf("%d chords in %v", len(f.chords), edges)
		}
		for _, c := range f.chords {
			ids, signs := f.loop(c)
			at := edges[c].from
			seen := map[int]bool{}
			for k, id := range ids {
				from, to := edges[id].from, edges[id].to
				if signs[k] < 0 {
					from, to = to, from
				}
				if from != at || seen[at] {
					t.Fatalf("loop %v %v of %v", ids, signs, edges)
				}
				seen[at], at = true, to
			}
			if at != edges[c].from {
				t.Fatalf("loop %v of %v does not close", ids, edges)
			}
		}
	})
}

// TestOrderOfComplexity checks the capacitor loops and inductor cutsets
// against the determinant: in a network of R, L, C and independent sources the
// number of natural frequencies is that of the capacitors and inductors less
// the independent loops and cutsets (P. R. Bryant, "The order of complexity of
// electrical networks", Proc. IEE 106C (1959); from memory).
func TestOrderOfComplexity(t *testing.T) {
	counted := 0
	rapid.Check(t, func(t *rapid.T) {
		n := &Network{Nodes: rapid.IntRange(2, 7).Draw(t, "nodes")}
		node := rapid.IntRange(0, n.Nodes-1)
		memories := 0
		for range rapid.IntRange(1, 14).Draw(t, "elements") {
			e := Element{
				Kind:  rapid.SampledFrom([]Kind{Resistor, Inductor, Capacitor, Inductor, Capacitor, VoltageSource, CurrentSource, Short}).Draw(t, "kind"),
				Value: number.FromInt(rapid.Int64Range(1, 7).Draw(t, "value")),
				From:  node.Draw(t, "from"), To: node.Draw(t, "to"),
			}
			if e.From == e.To {
				continue
			}
			if e.Kind == Capacitor || e.Kind == Inductor {
				memories++
			}
			n.Elements = append(n.Elements, e)
		}
		s, problems := Assemble(n)
		if s == nil {
			t.Fatal(problems)
		}
		det, err := s.Determinant(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		want := memories
		singular := false
		for _, p := range n.Inspect() {
			singular = singular || p.Singular
			if p.Kind == CapacitorLoop || p.Kind == InductorCutset {
				want--
			}
		}
		if singular != det.IsZero() {
			t.Fatalf("structure says singular: %v, determinant %s", singular, det)
		}
		if !singular {
			counted++
			if det.Degree() != want {
				t.Fatalf("order %d, structure says %d", det.Degree(), want)
			}
		}
	})
	if counted < 10 {
		t.Errorf("only %d well-posed networks drawn", counted)
	}
}

// TestPartitionKeepsAnswers compares every element's current in the whole
// network with that in the piece it belongs to.
func TestPartitionKeepsAnswers(t *testing.T) {
	pieces := 0
	rapid.Check(t, func(t *rapid.T) {
		n := randomNetwork(t)
		n.Elements = append(n.Elements, Element{Kind: VoltageSource, From: n.Nodes / 2, To: 0})
		s, _ := Assemble(n)
		if s == nil {
			return
		}
		det, err := s.Determinant(t.Context())
		if err != nil {
			t.Fatal(err)
		}
		if det.IsZero() {
			return
		}
		p := n.Partition()
		pieces = max(pieces, len(p.Groups))
		for k, g := range p.Groups {
			piece := n.Extract(p, k)
			part, problems := Assemble(piece.Network)
			if part == nil {
				t.Fatal(problems)
			}
			for _, i := range g {
				whole, problem := s.ElementCurrent(i)
				if problem != nil {
					continue
				}
				own, problem := part.ElementCurrent(piece.Element(i))
				if problem != nil {
					t.Fatal(problem)
				}
				for j, e := range n.Elements {
					a, problem := s.InputColumn(j)
					if problem != nil {
						continue
					}
					x, dx, err := s.Transfer(t.Context(), []Output{whole}, []Column{a})
					if err != nil {
						t.Fatal(err)
					}
					if p.GroupOf[j] >= 0 && p.GroupOf[j] != p.GroupOf[i] {
						if !x[0][0].IsZero() {
							t.Fatalf("source %d (%v) acts on element %d of another group", j, e.Kind, i)
						}
						continue
					}
					if piece.Element(j) < 0 {
						if !x[0][0].IsZero() {
							t.Fatalf("source %d (%v) acts on element %d but holds none of its rails", j, e.Kind, i)
						}
						continue
					}
					b, problem := part.InputColumn(piece.Element(j))
					if problem != nil {
						t.Fatal(problem)
					}
					y, dy, err := part.Transfer(t.Context(), []Output{own}, []Column{b})
					if err != nil {
						t.Fatal(err)
					}
					if !x[0][0].Mul(dy).Equal(y[0][0].Mul(dx)) {
						t.Fatalf("element %d, source %d: %s / %s in the whole, %s / %s in the piece", i, j, x[0][0], dx, y[0][0], dy)
					}
				}
			}
		}
	})
	if pieces < 2 {
		t.Error("no network fell apart")
	}
}

func TestPartitionOfARail(t *testing.T) {
	b := start(t)
	b.two(VoltageSource, "V", "rail 0", "")
	for i := range 3 {
		b.two(Resistor, fmt.Sprint("R", i), fmt.Sprintf("rail n%d", i), "1")
		b.two(Capacitor, fmt.Sprint("C", i), fmt.Sprintf("n%d 0", i), "1")
	}
	b.two(Resistor, "load", "rail 0", "1")
	p := b.Partition()
	if got := fmt.Sprint(p.Groups, p.Held); got != "[[1 2] [3 4] [5 6] [7]] [0]" {
		t.Error(got)
	}
	b.put(Element{Name: "F", Kind: DependentCurrent, From: b.node("n0"), Controls: []Control{{
		Numerator: numbers(t, "1"), Of: []Probe{{Quantity: ElementFlow, Element: 0}},
	}}})
	if p := b.Partition(); len(p.Groups) != 1 || p.Held != nil {
		t.Error("a sensed rail current ties everything on the rail", p.Groups)
	}
}

// bigNetwork has parts elements: filter sections on a rail, coupled coils, and
// amplifiers with feedback.
func bigNetwork(parts int) *Network {
	n := &Network{Nodes: 2}
	add := func(e Element) { n.Elements = append(n.Elements, e) }
	fresh := func() int { n.Nodes++; return n.Nodes - 1 }
	unit := number.FromInt(1)
	add(Element{Kind: VoltageSource, From: 1})
	last := 1
	for len(n.Elements) < parts {
		a, b, out := fresh(), fresh(), fresh()
		add(Element{Kind: Resistor, From: last, To: a, Value: unit})
		add(Element{Kind: Capacitor, From: a, To: 0, Value: unit})
		add(Element{Kind: Inductor, From: a, To: b, Value: unit})
		add(Element{Kind: Resistor, From: b, To: out, Value: unit})
		add(Element{Kind: OpAmp, Plus: 0, Minus: b, Output: out})
		last = out
		if len(n.Elements)%500 < 5 {
			last = 1
		}
	}
	return n
}

// BenchmarkInspect looks for every structural problem in 5 000 parts.
// Mark: 5 ms.
func BenchmarkInspect(b *testing.B) {
	n := bigNetwork(5000)
	for b.Loop() {
		n.Inspect()
	}
}

// BenchmarkInspectMesh is the same on a mesh of 5 000 capacitors and inductors,
// which is all loops and cutsets. Mark: 20 ms.
func BenchmarkInspectMesh(b *testing.B) {
	const side = 50
	n := &Network{Nodes: side * side}
	for i := range side {
		for j := range side {
			v := i*side + j
			kind := Capacitor
			if i >= side/2 {
				kind = Inductor
			}
			for _, e := range []struct {
				to int
				in bool
			}{{v + 1, j+1 < side}, {v + side, i+1 < side}} {
				if e.in {
					n.Elements = append(n.Elements, Element{Kind: kind, From: v, To: e.to, Value: number.FromInt(1)})
				}
			}
		}
	}
	for b.Loop() {
		n.Inspect()
	}
}

// BenchmarkAssemble writes the equations of 5 000 parts. Mark: 20 ms.
func BenchmarkAssemble(b *testing.B) {
	n := bigNetwork(5000)
	for b.Loop() {
		if s, problems := Assemble(n); s == nil {
			b.Fatal(problems)
		}
	}
}

// BenchmarkSteadyStateOnARail settles 5 000 sections on one rail, each for
// itself. Mark: 150 ms.
func BenchmarkSteadyStateOnARail(b *testing.B) {
	n := &Network{Nodes: 2, Elements: []Element{{Kind: VoltageSource, From: 1}}}
	for range 5000 {
		v := n.Nodes
		n.Nodes++
		n.Elements = append(n.Elements,
			Element{Kind: Resistor, From: 1, To: v, Value: number.FromInt(1)},
			Element{Kind: Capacitor, From: v, Value: number.FromInt(1)})
	}
	sources := map[int][]Sinusoid{0: {{Cosine: number.FromInt(1)}}}
	for b.Loop() {
		if _, p, err := n.SteadyState(b.Context(), sources, nil); err != nil || len(p) > 0 {
			b.Fatal(err, p)
		}
	}
}

// BenchmarkPartition splits 5 000 parts. Mark: 3 ms.
func BenchmarkPartition(b *testing.B) {
	n := bigNetwork(5000)
	for b.Loop() {
		n.Partition()
	}
}
