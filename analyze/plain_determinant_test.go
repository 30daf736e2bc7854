package analyze_test

import (
	"math/big"

	"portlight/analyze/exact"
)

// plainDeterminant is the determinant of the plain equations with the
// switches as after their last event, interpolated (Newton) from values at whole numbers.
func (n *networkAsker) plainDeterminant() exact.Poly {
	degree := 2
	for _, b := range n.g.branches {
		switch b.kind {
		case "inductor", "capacitor", "output":
			degree++
		}
		degree += len(b.ratio.num) + len(b.ratio.den)
		for _, c := range b.controls {
			degree += len(c.k.num) + len(c.k.den)
		}
	}
	p, basis := exact.Poly{}, exact.PolyFromInt64s(1)
	for k := range degree {
		x := big.NewRat(int64(k+1)*100, 1)
		t := tabulate(&n.g.plainNetwork, rationals, x, n.g.at(nil), nil)
		_, y, _ := eliminate(rationals, t.rows, make([][]*big.Rat, len(t.rows)))
		// The next divided difference makes p pass through (x, y).
		at := basis.Eval(x)
		c := new(big.Rat).Quo(new(big.Rat).Sub(y, p.Eval(x)), at)
		p = p.Add(basis.Scale(c))
		basis = basis.Mul(exact.NewPoly(new(big.Rat).Neg(x), big.NewRat(1, 1)))
	}
	return p
}
