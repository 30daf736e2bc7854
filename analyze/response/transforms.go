package response

import (
	"math/big"

	"portlight/analyze/exact"
)

// Transformed is the Laplace transform of what begins at From (s), without
// the factor e^{−s·From}.
type Transformed struct {
	From  *big.Rat
	Ratio exact.Ratio
}

// Transforms lists the Laplace transforms of the wave from t = 0 on, one for
// each instant at which something begins.
func (w Wave) Transforms() []Transformed {
	var out []Transformed
	for _, d := range w.drives("", new(big.Rat), nil) {
		out = append(out, Transformed{d.from, d.transform})
	}
	return out
}
