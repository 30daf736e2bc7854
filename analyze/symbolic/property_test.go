package symbolic

import (
	"context"
	"fmt"
	"math/big"
	"math/rand/v2"
	"strings"
	"testing"

	"portlight/analyze/exact"
	"portlight/analyze/network"
)

// randomLines makes a network of up to eight elements between few nodes.
func randomLines(rnd *rand.Rand) (lines []string, ask string) {
	nodes := []string{"0", "a", "b", "c", "d"}[:3+rnd.IntN(3)]
	pair := func() string {
		i, j := rnd.IntN(len(nodes)), rnd.IntN(len(nodes))
		for j == i {
			j = rnd.IntN(len(nodes))
		}
		return nodes[i] + " " + nodes[j]
	}
	value := func() string { return fmt.Sprintf("%d/%d", 1+rnd.IntN(20), 1+rnd.IntN(20)) }
	signed := func() string { return []string{"", "-"}[rnd.IntN(2)] + fmt.Sprint(1+rnd.IntN(3)) }
	var flows, coils []string
	lines = []string{"V1 a 0"}
	for k := range 2 + rnd.IntN(7) {
		name := func(letter string) string { return fmt.Sprintf("%s%d", letter, k+1) }
		switch kind := rnd.IntN(16); {
		case kind < 9:
			n := name([]string{"R", "R", "L", "C"}[rnd.IntN(4)])
			lines = append(lines, n+" "+pair()+" "+value())
			if n[0] == 'L' {
				coils = append(coils, n)
			}
			flows = append(flows, n)
		case kind == 9:
			lines = append(lines, name("U")+" "+pair()+" "+nodes[1+rnd.IntN(len(nodes)-1)])
		case kind == 10:
			lines = append(lines, fmt.Sprintf("%s %s %s %d %d", name("T"), pair(), pair(), 1+rnd.IntN(3), 1+rnd.IntN(3)))
		case kind < 13 && len(coils) >= 2:
			i := rnd.IntN(len(coils) - 1)
			lines = append(lines, fmt.Sprintf("%s %s %s 1/%d", name([]string{"K", "M"}[rnd.IntN(2)]), coils[i], coils[i+1], 1+rnd.IntN(30)))
		case kind < 15:
			probe := "v:" + strings.ReplaceAll(pair(), " ", ":")
			if len(flows) > 0 && rnd.IntN(2) == 0 {
				probe = "i:" + flows[rnd.IntN(len(flows))]
			}
			lines = append(lines, name([]string{"E", "G"}[rnd.IntN(2)])+" "+pair()+" "+signed()+" "+probe)
		}
	}
	ask = "v:" + strings.ReplaceAll(pair(), " ", ":") + " / V1"
	switch rnd.IntN(4) {
	case 0:
		ask = "z:" + strings.ReplaceAll(pair(), " ", ":")
	case 1:
		if len(flows) > 0 {
			ask = "i:" + flows[rnd.IntN(len(flows))] + " / V1"
		}
	}
	return lines, ask
}

// TestRandomNetworks: the function found in symbols is the one that exact
// elimination finds, every time; and what is written, read back, has its value.
func TestRandomNetworks(t *testing.T) {
	rnd := rand.New(rand.NewPCG(7, 11))
	var solvable, found, shown, rooted int
	for range 6000 {
		lines, ask := randomLines(rnd)
		b := build(t, lines...)
		q := b.ask(t, ask)
		r, err := b.ratio(q)
		if err != nil {
			continue // no unique solution
		}
		solvable++
		sp := NewSpace(context.Background())
		f, ok := sp.Transfer(&b.Network, []network.Probe{q.output}, q.by)
		if !ok {
			continue
		}
		found++
		v := sp.values()
		if !proves(f.num.value(v), f.den.value(v), r) {
			t.Fatalf("%s of %q:\n%v is not %v", ask, lines, f, r)
		}
		if f.num.isZero() || sp.long(f) {
			continue
		}
		if sp.hasCoefficients(f) {
			if _, ok := sp.withCoefficients(f); !ok {
				t.Fatalf("%s of %q: %v with coefficients is something else", ask, lines, f)
			}
		} else if e := sp.arrange(f); !e.proves(v, r) {
			t.Fatalf("%s of %q: %s is not the ratio", ask, lines, sp.text(e))
		}
		text, ok := sp.Formula(f, r)
		if !ok {
			continue
		}
		shown++
		if strings.Contains(text, "√") {
			rooted++
		}
		sameValue(t, b, lines, ask, text, r)
		if shown%29 == 0 {
			t.Logf("%s of %s: %s", ask, strings.Join(lines, ", "), text)
		}
	}
	t.Logf("%d networks with a solution, %d functions, %d formulas, %d with a root", solvable, found, shown, rooted)
	if found < solvable*9/10 || shown < 500 || rooted < 3 {
		t.Errorf("too few formulas: %d networks with a solution, %d functions, %d formulas, %d with a root", solvable, found, shown, rooted)
	}
}

// sameValue reads a formula at some s and compares with the ratio there.
func sameValue(t *testing.T, b *builder, lines []string, ask, text string, r exact.Ratio) {
	t.Helper()
	s := big.NewRat(37, 53)
	want, ok := r.Eval(s)
	if !ok {
		return
	}
	values := map[string]*big.Float{"s": real400().SetRat(s)}
	for i := range b.Elements {
		e := &b.Elements[i]
		v := e.Value.Rat()
		switch e.Kind {
		case network.Transformer:
			v = new(big.Rat).Quo(e.Windings[0].Turns.Rat(), e.Windings[1].Turns.Rat())
		case network.DependentVoltage, network.DependentCurrent:
			v = e.Controls[0].Numerator[0].Rat()
		}
		values[e.Name] = real400().SetRat(v)
	}
	got, err := evaluate(text, values)
	if err != nil {
		t.Fatalf("%s of %q: %s: %v", ask, lines, text, err)
	}
	// Roots are stand-ins of at least 75 digits in the exact ratio.
	bound := real400().SetRat(want)
	bound.Abs(bound).Add(bound, real400().SetInt64(1))
	bound.Quo(bound, real400().SetMantExp(big.NewFloat(1), 200))
	if off := real400().Sub(got, real400().SetRat(want)); off.Abs(off).Cmp(bound) > 0 {
		t.Fatalf("%s of %q: %s is %v, not %v", ask, lines, text, got, want)
	}
}

// randomPoly is a short polynomial in a few symbols.
func randomPoly(w *work, rnd *rand.Rand, terms, symbols, powers int) poly {
	var p poly
	for range 1 + rnd.IntN(terms) {
		var m monomial
		for x := range symbols {
			m, _ = m.times(unit(x+1, rnd.IntN(powers+1)))
		}
		p = w.add(p, poly{{m, int64(rnd.IntN(7) - 3)}}.clean())
	}
	return p
}

func (p poly) clean() poly {
	if p[0].c == 0 {
		return nil
	}
	return p
}

// TestCommonFactors: with p = g·a and q = g·b the gcd is divided by g and
// divides both, and what is left has no further common factor.
func TestCommonFactors(t *testing.T) {
	rnd := rand.New(rand.NewPCG(3, 5))
	givenUp := 0
	for range 3000 {
		w := &work{ctx: context.Background(), left: 10 * budget}
		g, a, b := randomPoly(w, rnd, 4, 4, 2), randomPoly(w, rnd, 4, 5, 1), randomPoly(w, rnd, 4, 5, 1)
		p, q := w.mul(g, a), w.mul(g, b)
		if p.isZero() || q.isZero() {
			continue
		}
		h := w.gcd(p, q)
		u, ok := w.quotient(p, h)
		v, also := w.quotient(q, h)
		if w.failed {
			givenUp++ // a coefficient grew out of range
			continue
		}
		if !ok || !also {
			t.Fatalf("%v does not divide %v and %v", h, p, q)
		}
		if _, divides := w.quotient(h, g); !divides {
			t.Fatalf("%v is not divided by %v", h, g)
		}
		if !w.gcd(u, v).isOne() {
			t.Fatalf("%v and %v still have a common factor", u, v)
		}
		number, m, list := w.factors(p)
		product := poly{{m, number}}
		for _, f := range list {
			product = w.mul(product, f)
		}
		if !product.equal(p) {
			t.Fatalf("the factors of %v multiply to %v", p, product)
		}
	}
	if givenUp > 60 {
		t.Errorf("%d of 3000 given up", givenUp)
	}
}

// TestMonomials compares the packed exponents with plain ones.
func TestMonomials(t *testing.T) {
	rnd := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		var a, b [places]int
		var m, n monomial
		for k := range places {
			if rnd.IntN(3) == 0 {
				a[k], b[k] = rnd.IntN(8), rnd.IntN(8)
			}
			m, _ = m.times(unit(k, a[k]))
			n, _ = n.times(unit(k, b[k]))
		}
		p, fits := m.times(n)
		q, divides := m.over(n)
		c := m.common(n)
		wantFits, wantDivides := true, true
		for k := range places {
			wantFits = wantFits && a[k]+b[k] < 8
			wantDivides = wantDivides && a[k] >= b[k]
			if c.power(k) != min(a[k], b[k]) {
				t.Fatalf("common of %v and %v at %d is %d", a, b, k, c.power(k))
			}
			if m.support().has(k) != (a[k] > 0) {
				t.Fatalf("support of %v at %d", a, k)
			}
		}
		if fits != wantFits || divides != wantDivides {
			t.Fatalf("%v and %v: product fits %v, quotient exists %v", a, b, fits, divides)
		}
		for k := range places {
			if fits && p.power(k) != a[k]+b[k] || divides && q.power(k) != a[k]-b[k] {
				t.Fatalf("%v and %v at %d", a, b, k)
			}
		}
	}
}
