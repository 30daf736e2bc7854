package analyze

import (
	"context"
	"fmt"
	"sort"

	"portlight/analyze/exact"
)

// mostModes is how many natural frequencies one answer may list, and
// mostHidden how many that a function does not show.
const (
	mostModes  = 400
	mostHidden = 60
)

// coprime writes a product of polynomials as powers of polynomials that have
// no roots in common, so that the roots of a network of many pieces are found
// piece by piece.
type coprime struct {
	factors []exact.Factor
}

// multiply takes in one more factor.
func (c *coprime) multiply(p exact.Poly, multiplicity int) {
	for i := 0; i < len(c.factors) && p.Degree() > 0; i++ {
		f := c.factors[i]
		g := exact.GCD(p, f.Poly)
		if g.Degree() < 1 {
			continue
		}
		rest := f.Poly.Quo(g)
		p = p.Quo(g)
		c.factors[i] = exact.Factor{Poly: g, Multiplicity: f.Multiplicity + multiplicity}
		if rest.Degree() > 0 {
			c.multiply(rest, f.Multiplicity)
		}
		i-- // what is left may have more in common with it
		if p.Degree() < 1 {
			return
		}
	}
	if p.Degree() > 0 {
		c.factors = append(c.factors, exact.Factor{Poly: p.Monic(), Multiplicity: multiplicity})
	}
}

// rootsOfProduct gives the roots of a product, in the order of [exact.RootSet].
func rootsOfProduct(ctx context.Context, blocks []exact.Poly) ([]exact.Root, error) {
	if len(blocks) == 1 {
		return rootsOf(ctx, blocks[0])
	}
	var c coprime
	for _, b := range blocks {
		if b.Degree() < 1 {
			continue
		}
		for _, f := range exact.SquareFree(b) {
			c.multiply(f.Poly, f.Multiplicity)
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
	}
	var out []exact.Root
	for _, f := range c.factors {
		roots, err := rootsOf(ctx, f.Poly)
		if err != nil {
			return nil, err
		}
		for _, r := range roots {
			r.Multiplicity *= f.Multiplicity
			out = append(out, r)
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].Re.Mid().Cmp(out[j].Re.Mid()) < 0 })
	return out, nil
}

// hiddenOf gives the natural frequencies of a configuration that a
// function with a denominator does not show; where they are too many to list,
// it says how many.
func (a *Analysis) hiddenOf(ctx context.Context, c configuration, den exact.Poly) (hidden []exact.Root, remark string, err error) {
	blocks, err := a.determinants(ctx, c)
	if err != nil {
		return nil, "", err
	}
	var left []exact.Poly
	degree := 0
	for _, b := range blocks {
		if g := exact.GCD(b, den); g.Degree() > 0 {
			b, den = b.Quo(g), den.Quo(g)
		}
		if b.Degree() > 0 {
			left = append(left, b)
			degree += b.Degree()
		}
	}
	if degree == 0 {
		return nil, "", nil
	}
	if degree > mostHidden {
		return nil, fmt.Sprintf("the network has %d more natural frequencies, which this does not show", degree), nil
	}
	hidden, err = rootsOfProduct(ctx, left)
	return hidden, "", err
}
