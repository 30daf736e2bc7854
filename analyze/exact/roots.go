package exact

import (
	"context"
	"errors"
	"math/big"
	"slices"
	"sync"

	"portlight/dialect/number"
)

// ErrZeroPolynomial is returned where the roots of the zero polynomial are
// asked for.
var ErrZeroPolynomial = errors.New("the zero polynomial has no definite roots")

// Root is a root of a polynomial with real coefficients, enclosed: it lies in
// Re + j·Im, and no other root does.
type Root struct {
	Re, Im       number.Ball
	Multiplicity int
	// Real and Imaginary are decided exactly: the root is on the real or on the
	// imaginary axis (the root 0 is on both). Then the other part is exactly 0.
	Real, Imaginary bool
	// Rational is the root itself where it is known to be a rational number,
	// else nil. It must not be modified.
	Rational *big.Rat
	// Radius bounds the distance of the root from the centre of the balls.
	Radius *big.Float
}

// Ball returns the enclosure of the root.
func (r Root) Ball() number.ComplexBall { return number.ComplexBall{Re: r.Re, Im: r.Im} }

// RootSet holds the roots of one polynomial and refines them on demand. It may
// be used by several goroutines at once.
type RootSet struct {
	zeros int // multiplicity of the root 0
	units []*rootUnit
	order []rootPlace
	mu    sync.Mutex
	cache map[uint][]Root
}

// rootUnit is a square-free polynomial whose roots are found together. The roots
// asked for are those of poly, or their square roots where squared is set (then
// poly is g with a factor g(s²) of the polynomial).
type rootUnit struct {
	multiplicity int
	squared      bool
	solver       *rootSolver
	bits         uint // least precision of the ball of a root known exactly
}

// rootPlace names a root of a unit: the index among the solver's essential
// roots (real ones and those of the upper half plane), and which of the roots
// that it stands for.
type rootPlace struct {
	unit, index int
	branch      int
}

// basePrecision is the relative precision in bits to which roots are found at
// first: 2^-50 is below 1e-15.
const basePrecision = 50

// Roots finds the roots of p with their multiplicities: 0 by inspection, the
// others by certified simultaneous iteration on the square-free factors. The
// error is [ErrZeroPolynomial] or the context's.
//
// Which roots are on the imaginary axis is decided apart: with p(s) = E(s²) +
// s·O(s²) square-free, they are common to E and O. The factor g(s²), g = gcd(E,
// O), is split off and g solved; a root −ω² < 0 of g makes the roots ±jω.
func Roots(ctx context.Context, p Poly) (*RootSet, error) {
	if p.IsZero() {
		return nil, ErrZeroPolynomial
	}
	set := &RootSet{zeros: p.Order(), cache: map[uint][]Root{}}
	for _, f := range SquareFree(p.Shift(-p.Order())) {
		for _, part := range splitEven(f.Poly) {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			part.multiplicity = f.Multiplicity
			if err := part.solver.refine(ctx, basePrecision+1); err != nil {
				return nil, err
			}
			set.units = append(set.units, part)
		}
	}
	if err := set.separate(ctx); err != nil {
		return nil, err
	}
	return set, nil
}

// splitEven returns the units of a square-free f with f(0) ≠ 0.
func splitEven(f Poly) []*rootUnit {
	even, odd := f.EvenOdd()
	g := GCD(even, odd)
	if odd.IsZero() {
		g = even.Primitive()
	}
	var units []*rootUnit
	if g.Degree() > 0 {
		units = append(units, &rootUnit{squared: true, solver: newRootSolver(g)})
		f = f.Quo(spread(g))
	}
	if f.Degree() > 0 {
		units = append(units, &rootUnit{solver: newRootSolver(f)})
	}
	return units
}

// spread returns g(s²).
func spread(g Poly) Poly {
	c, den := g.Ints()
	wide := make([]*big.Int, 2*len(c)-1)
	for i, v := range c {
		wide[2*i] = v
	}
	return PolyFromInts(wide, den)
}

// Count returns the number of roots, multiple ones counted once.
func (s *RootSet) Count() int {
	n := len(s.order)
	if s.zeros > 0 {
		n++
	}
	return n
}

// At returns the roots in balls whose radius is at most 2^-prec of the root's
// magnitude. The order is by real part, where these agree to about 2^-50 of the
// magnitudes by the imaginary part's magnitude, with conjugates side by side, and
// does not depend on prec.
func (s *RootSet) At(prec uint) ([]Root, error) { return s.AtContext(context.Background(), prec) }

// AtContext is At with a way to stop it; the error is the context's.
func (s *RootSet) AtContext(ctx context.Context, prec uint) ([]Root, error) {
	prec = max(prec, basePrecision)
	s.mu.Lock()
	defer s.mu.Unlock()
	if known, ok := s.cache[prec]; ok {
		return slices.Clone(known), nil
	}
	for _, u := range s.units {
		if err := u.solver.refine(ctx, int(prec)+1); err != nil {
			return nil, err
		}
	}
	roots := s.collect(prec)
	if len(s.cache) > 16 {
		clear(s.cache)
	}
	s.cache[prec] = roots
	return slices.Clone(roots), nil
}
