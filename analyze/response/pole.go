package response

import (
	"context"
	"math/big"
	"sync"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// pole is one pole of a family: a real one, or the one of a conjugate pair
// with positive imaginary part.
type pole struct {
	member   int      // index of its factor in the family's base
	index    int      // among the factor's half roots
	real     bool     // decided exactly
	axis     bool     // real part exactly zero
	zero     bool     // the pole s = 0
	rational *big.Rat // the pole, when it is real and rational
	omega    *big.Rat // its imaginary part, when it is on the axis and rational
}

// family is the set of poles that the components of a signal share.
type family struct {
	base    base
	factors []*rootFactor // per member of the base
	poles   []pole

	mu         sync.Mutex
	cache      map[uint][]number.ComplexBall
	cofactors  map[cofactorKey][][]number.ComplexBall
	expansions map[*fraction]*expansion
}

// cofactorKey is a working precision and the powers of the poles, as bytes.
type cofactorKey struct {
	prec   uint
	powers string
}

// family returns the family of a base; equal bases share one, and with it all
// that was computed.
func (l *rootLibrary) family(ctx context.Context, b base) (*family, error) {
	l.mu.Lock()
	for _, f := range l.families {
		if f.base.equal(b) {
			l.mu.Unlock()
			return f, nil
		}
	}
	l.mu.Unlock()
	f, err := newFamily(ctx, b, l)
	if err != nil {
		return nil, err
	}
	l.mu.Lock()
	defer l.mu.Unlock()
	for _, g := range l.families {
		if g.base.equal(b) {
			return g, nil
		}
	}
	l.families = append(l.families, f)
	return f, nil
}

// newFamily finds the kinds of the roots of every member of the base.
func newFamily(ctx context.Context, b base, library *rootLibrary) (*family, error) {
	f := &family{
		base: b, cache: map[uint][]number.ComplexBall{},
		cofactors: map[cofactorKey][][]number.ComplexBall{}, expansions: map[*fraction]*expansion{},
	}
	for i, m := range b.members {
		rf, err := library.factor(ctx, m)
		if err != nil {
			return nil, err
		}
		f.factors = append(f.factors, rf)
		for j, k := range rf.kinds {
			k.member, k.index = i, j
			f.poles = append(f.poles, k)
		}
	}
	return f, nil
}

// at returns the poles to the working precision.
func (f *family) at(ctx context.Context, prec uint) ([]number.ComplexBall, error) {
	f.mu.Lock()
	defer f.mu.Unlock()
	if c, ok := f.cache[prec]; ok {
		return c, nil
	}
	var out []number.ComplexBall
	for _, rf := range f.factors {
		half, err := rf.at(ctx, prec)
		if err != nil {
			return nil, err
		}
		out = append(out, half...)
	}
	f.cache[prec] = out
	return out, nil
}

// rootLibrary keeps the roots of every polynomial met, so that outputs of one
// network share them.
type rootLibrary struct {
	mu       sync.Mutex
	factors  []*rootFactor
	families []*family
}

// factor returns the roots of a square-free primitive polynomial.
func (l *rootLibrary) factor(ctx context.Context, p exact.Poly) (*rootFactor, error) {
	l.mu.Lock()
	for _, f := range l.factors {
		if f.poly.Equal(p) {
			l.mu.Unlock()
			return f, nil
		}
	}
	l.mu.Unlock()
	f, err := newRootFactor(ctx, p)
	if err != nil {
		return nil, err
	}
	l.mu.Lock()
	defer l.mu.Unlock()
	for _, g := range l.factors {
		if g.poly.Equal(p) {
			return g, nil
		}
	}
	l.factors = append(l.factors, f)
	return f, nil
}

// rootFactor is a square-free polynomial with its half roots: the real ones
// and those with positive imaginary part.
type rootFactor struct {
	poly  exact.Poly
	kinds []pole
	at    func(ctx context.Context, prec uint) ([]number.ComplexBall, error)
}

// newRootFactor treats degrees one and two by their formulas and leaves the
// rest to certified root finding.
func newRootFactor(ctx context.Context, p exact.Poly) (*rootFactor, error) {
	switch p.Degree() {
	case 1:
		return linearFactor(p), nil
	case 2:
		return quadraticFactor(p), nil
	}
	return certifiedFactor(ctx, p)
}

func linearFactor(p exact.Poly) *rootFactor {
	r := p.Coeff(0)
	r.Neg(r.Quo(r, p.Coeff(1)))
	return &rootFactor{
		poly:  p,
		kinds: []pole{rationalPole(r)},
		at: func(_ context.Context, prec uint) ([]number.ComplexBall, error) {
			return []number.ComplexBall{realBall(number.BallFromRat(r, prec))}, nil
		},
	}
}

func rationalPole(r *big.Rat) pole {
	zero := r.Sign() == 0
	return pole{real: true, axis: zero, zero: zero, rational: r}
}

// quadraticFactor solves s² + 2b·s + c = 0 by −b ± √(b²−c); the smaller of two
// real roots is taken as c over the larger, without cancellation.
func quadraticFactor(p exact.Poly) *rootFactor {
	a := p.Coeff(2)
	c := p.Coeff(0)
	c.Quo(c, a)
	b := p.Coeff(1)
	b.Quo(b, a).Mul(b, big.NewRat(1, 2))
	disc := new(big.Rat).Mul(b, b)
	disc.Sub(disc, c)
	if root, ok := rationalSqrt(disc); ok {
		lo := new(big.Rat).Sub(new(big.Rat).Neg(b), root)
		hi := new(big.Rat).Add(new(big.Rat).Neg(b), root)
		return &rootFactor{
			poly:  p,
			kinds: []pole{rationalPole(lo), rationalPole(hi)},
			at: func(_ context.Context, prec uint) ([]number.ComplexBall, error) {
				return []number.ComplexBall{realBall(number.BallFromRat(lo, prec)), realBall(number.BallFromRat(hi, prec))}, nil
			},
		}
	}
	if disc.Sign() > 0 {
		return &rootFactor{poly: p, kinds: []pole{{real: true}, {real: true}}, at: realQuadratic(b, c, disc)}
	}
	kind := pole{axis: b.Sign() == 0}
	minus := new(big.Rat).Neg(disc)
	omega, rational := rationalSqrt(minus)
	if kind.axis && rational {
		kind.omega = omega
	}
	return &rootFactor{poly: p, kinds: []pole{kind}, at: func(_ context.Context, prec uint) ([]number.ComplexBall, error) {
		im := number.BallFromRat(minus, prec).Sqrt()
		if rational {
			im = number.BallFromRat(omega, prec)
		}
		return []number.ComplexBall{{Re: number.BallFromRat(new(big.Rat).Neg(b), prec), Im: im}}, nil
	}}
}

func realQuadratic(b, c, disc *big.Rat) func(context.Context, uint) ([]number.ComplexBall, error) {
	return func(_ context.Context, prec uint) ([]number.ComplexBall, error) {
		root := number.BallFromRat(disc, prec).Sqrt()
		mid := number.BallFromRat(new(big.Rat).Neg(b), prec)
		if b.Sign() == 0 {
			return []number.ComplexBall{realBall(root.Neg()), realBall(root)}, nil
		}
		if b.Sign() > 0 {
			low := mid.Sub(root)
			return []number.ComplexBall{realBall(low), realBall(number.BallFromRat(c, prec).Quo(low))}, nil
		}
		high := mid.Add(root)
		return []number.ComplexBall{realBall(number.BallFromRat(c, prec).Quo(high)), realBall(high)}, nil
	}
}

// rationalSqrt returns √r when it is rational.
func rationalSqrt(r *big.Rat) (*big.Rat, bool) {
	if r.Sign() < 0 {
		return nil, false
	}
	n := new(big.Int).Sqrt(r.Num())
	d := new(big.Int).Sqrt(r.Denom())
	if new(big.Int).Mul(n, n).Cmp(r.Num()) != 0 || new(big.Int).Mul(d, d).Cmp(r.Denom()) != 0 {
		return nil, false
	}
	return new(big.Rat).SetFrac(n, d), true
}
