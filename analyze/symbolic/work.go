package symbolic

import (
	"context"
	"math/bits"
)

// work is the budget of one formula. When it is used up, or a coefficient or
// exponent gets out of hand, failed is set; what is computed from then on is
// worthless and soon over.
type work struct {
	ctx    context.Context
	left   int
	failed bool
}

// budget is how many steps with single terms one formula may take. The
// formulas of textbook networks take a few hundred to a few thousand; all of
// it is spent within a few milliseconds.
const budget = 60_000

// mostTerms is how long a polynomial may get on the way.
const mostTerms = 300

// spend takes steps from the budget and tells whether to go on.
func (w *work) spend(steps int) bool {
	before := w.left
	w.left -= steps
	if w.left < 0 || before>>10 != w.left>>10 && w.ctx.Err() != nil {
		w.failed = true
	}
	return !w.failed
}

// product multiplies coefficients that must stay small.
func (w *work) product(a, b int64) int64 {
	high, low := bits.Mul64(magnitude(a), magnitude(b))
	if high != 0 || low > 1<<40 {
		w.failed = true
		return 0
	}
	return a * b
}

func magnitude(a int64) uint64 {
	if a < 0 {
		return uint64(-a)
	}
	return uint64(a)
}

// gcdInt is the greatest common divisor of magnitudes.
func gcdInt(a, b int64) int64 {
	x, y := magnitude(a), magnitude(b)
	for y != 0 {
		x, y = y, x%y
	}
	return int64(x)
}
