package network

import (
	"math/big"
	"slices"
	"strings"
	"testing"

	"portlight/dialect/number"
)

// builder makes small networks by names; "0" is the reference.
type builder struct {
	*Network
	t     testing.TB
	nodes []string
	index map[string]int
}

func start(t testing.TB) *builder {
	return &builder{Network: &Network{Nodes: 1}, t: t, nodes: []string{"0"}, index: map[string]int{}}
}

func (b *builder) node(name string) int {
	if i := slices.Index(b.nodes, name); i >= 0 {
		return i
	}
	b.nodes = append(b.nodes, name)
	b.Nodes++
	return b.Nodes - 1
}

func (b *builder) put(e Element) int {
	i := len(b.Elements)
	b.index[e.Name] = i
	b.Elements = append(b.Elements, e)
	return i
}

// two adds a two-terminal element "from to"; value may be empty.
func (b *builder) two(kind Kind, name, ends, value string) int {
	f := strings.Fields(ends)
	e := Element{Name: name, Kind: kind, From: b.node(f[0]), To: b.node(f[1])}
	if value != "" {
		e.Value = mustNumber(b.t, value)
	}
	return b.put(e)
}

// sense adds a dependent source: coefficients N/D times the voltage "plus minus".
func (b *builder) sense(kind Kind, name, ends, pair string, num, den []number.Exact) int {
	f, p := strings.Fields(ends), strings.Fields(pair)
	return b.put(Element{Name: name, Kind: kind, From: b.node(f[0]), To: b.node(f[1]), Controls: []Control{{
		Numerator: num, Denominator: den,
		Of: []Probe{{Quantity: NodePair, Plus: b.node(p[0]), Minus: b.node(p[1])}},
	}}})
}

func (b *builder) opAmp(name, plus, minus, output string) int {
	return b.put(Element{Name: name, Kind: OpAmp, Plus: b.node(plus), Minus: b.node(minus), Output: b.node(output)})
}

func (b *builder) couple(name, l1, l2, value string, henry bool) int {
	return b.put(Element{Name: name, Kind: Coupling, Value: mustNumber(b.t, value), Mutual: henry, Coils: [2]int{b.index[l1], b.index[l2]}})
}

func (b *builder) system() *System {
	b.t.Helper()
	s, problems := Assemble(b.Network)
	if s == nil {
		b.t.Fatal(problems)
	}
	return s
}

// order is the degree of the determinant.
func (b *builder) order() int {
	b.t.Helper()
	det, err := b.system().Determinant(b.t.Context())
	if err != nil {
		b.t.Fatal(err)
	}
	return det.Degree()
}

// says describes problems of the given kinds, or all, by names.
func (b *builder) says(problems []Problem, kinds ...ProblemKind) []string {
	var out []string
	for _, p := range problems {
		if len(kinds) == 0 || slices.Contains(kinds, p.Kind) {
			out = append(out, p.Describe(b.Network, b.nodes))
		}
	}
	return out
}

func (b *builder) expect(got []string, want ...string) {
	b.t.Helper()
	if !slices.Equal(got, want) {
		b.t.Errorf("got\n\t%s\nwant\n\t%s", strings.Join(got, "\n\t"), strings.Join(want, "\n\t"))
	}
}

func numbers(t testing.TB, text string) []number.Exact {
	var out []number.Exact
	for _, f := range strings.Fields(text) {
		out = append(out, mustNumber(t, f))
	}
	return out
}

func rat(t testing.TB, text string) *big.Rat { return mustNumber(t, text).Rat() }
