package response

import (
	"context"
	"fmt"
	"math/big"
	"sync"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// segment is a stretch of time between two breakpoints, within which a signal
// is one sum of terms in τ = t − start.
type segment struct {
	start, end *big.Rat // end nil: for ever
	mu         sync.Mutex
	cache      map[uint]*sum
}

// sum is f(τ) = Σ over terms of c[m]·τ^m·e^{pτ}, a term with a complex pole
// standing for itself and its conjugate: 2·Re(c[m]·τ^m·e^{pτ}).
type sum struct {
	terms []term
	// constant is the exact coefficients at the pole s = 0 by power, when they
	// are rational for sure and there are any.
	constant []*big.Rat
	// dropped says that terms below 2^-190 of the parts they were made of were
	// taken as zero, to within the bounds of stand-ins.
	dropped bool
}

// term is what belongs to one pole.
type term struct {
	pole termPole
	c    []number.ComplexBall // by power of τ
}

// termPole is a pole to the working precision, with what is known exactly.
type termPole struct {
	p                number.ComplexBall
	real, axis, zero bool
	omega            *big.Rat // on the axis: its rational imaginary part, nil where not known
	id               string   // equal ids are equal poles
	index            int      // in the signal's family; -1 for poles of products
}

// between splits the time from 0 on at the breakpoints.
func between(breaks []*big.Rat) []*segment {
	out := make([]*segment, len(breaks))
	for i, b := range breaks {
		out[i] = &segment{start: b, cache: map[uint]*sum{}}
		if i > 0 {
			out[i-1].end = b
		}
	}
	return out
}

// pieces returns the segments of the signal.
func (s *Signal) pieces() []*segment {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.segments == nil {
		s.segments = between(s.Breakpoints())
	}
	return s.segments
}

// expand returns the signal within segment i to a working precision.
func (s *Signal) expand(ctx context.Context, i int, prec uint) (*sum, error) {
	seg := s.pieces()[i]
	seg.mu.Lock()
	defer seg.mu.Unlock()
	if x, ok := seg.cache[prec]; ok {
		return x, nil
	}
	active := func(c *component) bool { return c.acts(seg.start, Right) }
	x, err := s.collect(ctx, active, seg.start, prec)
	if err != nil {
		return nil, err
	}
	seg.cache[prec] = x
	return x, nil
}

// collect adds the chosen components as one sum in τ = t − origin, where no
// component begins after origin.
func (s *Signal) collect(ctx context.Context, chosen func(*component) bool, origin *big.Rat, prec uint) (*sum, error) {
	fam, expansions, err := s.prepared(ctx)
	if err != nil {
		return nil, err
	}
	poles, err := fam.at(ctx, prec)
	if err != nil {
		return nil, err
	}
	acc := newGathering(fam, poles, prec)
	acc.loose = s.loose()
	for i := range s.comps {
		c := &s.comps[i]
		if !chosen(c) {
			continue
		}
		if err := acc.add(ctx, c, expansions[i], new(big.Rat).Sub(origin, c.from)); err != nil {
			return nil, err
		}
	}
	return acc.sum(), nil
}

// gathering adds up coefficients pole by pole.
type gathering struct {
	fam      *family
	poles    []number.ComplexBall
	prec     uint
	exps     *exponentials
	c        [][]number.ComplexBall
	size     [][]number.Ball // sums of absolute values
	constant []*big.Rat
	exact    bool // constant holds everything at s = 0
	loose    bool // stand-ins for irrational values are among the numbers
}

func newGathering(fam *family, poles []number.ComplexBall, prec uint) *gathering {
	return &gathering{
		fam: fam, poles: poles, prec: prec, exps: newExponentials(poles, prec),
		c: make([][]number.ComplexBall, len(poles)), size: make([][]number.Ball, len(poles)), exact: true,
	}
}

// add adds a component that began δ before the origin.
func (g *gathering) add(ctx context.Context, c *component, e *expansion, delta *big.Rat) error {
	coefficients, err := e.coefficients(ctx, g.prec)
	if err != nil {
		return err
	}
	w, err := c.weight.ball(ctx, g.prec)
	if err != nil {
		return err
	}
	for j, p := range g.fam.poles {
		if e.powers[j] == 0 || !c.counts(g.fam.base.members[p.member]) {
			continue
		}
		if p.zero && c.weight.at == nil {
			g.addConstant(shiftExact(e.originCoefficients(), delta), c.weight.rational)
			continue
		}
		g.exact = g.exact && !p.zero
		moved := shiftPowers(coefficients[j], delta, g.prec)
		factor := realBall(w)
		if delta.Sign() != 0 && !p.zero {
			factor = factor.Mul(g.exps.at(j, delta))
		}
		for m := range moved {
			g.put(j, m, moved[m].Mul(factor))
		}
	}
	return nil
}

func (g *gathering) put(j, m int, c number.ComplexBall) {
	for len(g.c[j]) <= m {
		g.c[j] = append(g.c[j], number.ComplexBall{})
		g.size[j] = append(g.size[j], number.Ball{})
	}
	g.c[j][m] = g.c[j][m].Add(c)
	g.size[j][m] = g.size[j][m].Add(c.Re.Abs()).Add(c.Im.Abs())
}

func (g *gathering) addConstant(c []*big.Rat, w *big.Rat) {
	for m, r := range c {
		if len(g.constant) <= m {
			g.constant = append(g.constant, new(big.Rat))
		}
		g.constant[m].Add(g.constant[m], new(big.Rat).Mul(r, w))
	}
}

// sum drops what is zero, exactly or to within the bounds of stand-ins.
func (g *gathering) sum() *sum {
	out := &sum{}
	for j, p := range g.fam.poles {
		c, size := g.c[j], g.size[j]
		if p.zero {
			for m, r := range g.constant {
				b := number.BallFromRat(r, g.prec)
				if m < len(c) {
					c[m], size[m] = c[m].Add(realBall(b)), size[m].Add(b.Abs())
				} else {
					c, size = append(c, realBall(b)), append(size, b.Abs())
				}
			}
		}
		n := len(c)
		for n > 0 && negligibleComplex(c[n-1], size[n-1], g.loose) {
			out.dropped = out.dropped || size[n-1].Upper().Sign() != 0
			n--
		}
		if n == 0 {
			continue
		}
		out.terms = append(out.terms, term{pole: g.fam.termPole(j, g.poles[j]), c: c[:n]})
		if p.zero && g.exact {
			out.constant = g.constant[:n]
		}
	}
	return out
}

func (f *family) termPole(j int, p number.ComplexBall) termPole {
	k := f.poles[j]
	// No digits first: only the id of a rational pole may read as a number.
	id := fmt.Sprintf("root %p.%d", f.factors[k.member], k.index)
	if k.rational != nil {
		id = k.rational.RatString()
	}
	return termPole{p: p, real: k.real, axis: k.axis, zero: k.zero, omega: k.omega, id: id, index: j}
}

func negligibleComplex(c number.ComplexBall, size number.Ball, loose bool) bool {
	if size.IsExact() && size.Upper().Sign() == 0 {
		return true
	}
	return negligible(c.Re, size, loose) && negligible(c.Im, size, loose)
}

// shiftPowers turns Σ c[m](τ+δ)^m into powers of τ.
func shiftPowers(c []number.ComplexBall, delta *big.Rat, prec uint) []number.ComplexBall {
	if len(c) == 1 || delta.Sign() == 0 {
		return c
	}
	out := append([]number.ComplexBall(nil), c...)
	d := number.BallFromRat(delta, prec)
	for i := range out {
		for m := len(out) - 2; m >= i; m-- {
			out[m] = out[m].Add(out[m+1].MulBall(d))
		}
	}
	return out
}

// shiftExact is shiftPowers for rational coefficients.
func shiftExact(c []*big.Rat, delta *big.Rat) []*big.Rat {
	for i := range c {
		for m := len(c) - 2; m >= i; m-- {
			c[m].Add(c[m], new(big.Rat).Mul(c[m+1], delta))
		}
	}
	return c
}

// Term is c·τ^Power·e^{Pole·τ} with τ counted from its piece's beginning.
// Complex terms are listed with their conjugates. Natural tells that the pole
// is a natural frequency of the network, Forced that it is a source's; both may
// hold (resonance).
type Term struct {
	Power             int
	Coefficient, Pole number.ComplexBall
	Natural, Forced   bool
}

// Piece is what begins at From and, where a switch ends it, lasts until Until:
// the signal is the sum of its pieces.
type Piece struct {
	From  number.Exact
	Until *number.Exact // nil: for ever
	Terms []Term
	// Impulses[k] is the weight of the k-th derivative of the unit impulse at
	// From; ExactImpulses holds the same where it is rational for sure, else nil.
	Impulses      []number.Ball
	ExactImpulses []*big.Rat
	// Transform is the Laplace transform in τ = t − From of the piece, impulses
	// included, as if nothing ended it, where it is rational for sure.
	Transform *exact.Ratio
}

// Pieces lists the signal's closed form, the coefficients to so many digits.
func (s *Signal) Pieces(ctx context.Context, digits int) ([]Piece, error) {
	impulses, err := s.Impulses(ctx, digits)
	if err != nil {
		return nil, err
	}
	var out []Piece
	for i := range s.comps {
		c := &s.comps[i]
		first := true
		for j := range i {
			if s.comps[j].from.Cmp(c.from) == 0 && sameInstant(s.comps[j].until, c.until) {
				first = false
			}
		}
		if !first {
			continue
		}
		p := Piece{From: number.FromRat(c.from)}
		if c.until != nil {
			u := number.FromRat(c.until)
			p.Until = &u
		}
		if p.Terms, err = s.termsLike(ctx, c, digits); err != nil {
			return nil, err
		}
		for k, g := range impulses {
			if g.At != nil && g.At.Cmp(c.from) == 0 {
				p.Impulses, p.ExactImpulses = g.Weights, g.Exact
				impulses[k].At = nil // said once
			}
		}
		p.Transform = s.transformLike(c)
		if len(p.Terms) > 0 || len(p.Impulses) > 0 {
			out = append(out, p)
		}
	}
	sortPieces(out)
	return out, nil
}

// transformLike adds the transforms of the components that begin and end with c,
// nil where one is not rational.
func (s *Signal) transformLike(like *component) *exact.Ratio {
	sum := exact.PolyRatio(exact.Poly{})
	for i := range s.comps {
		c := &s.comps[i]
		if c.from.Cmp(like.from) != 0 || !sameInstant(c.until, like.until) {
			continue
		}
		if c.weight.at != nil || c.share != wholeShare {
			return nil
		}
		sum = sum.Add(c.fraction.ratio)
	}
	return &sum
}

func sortPieces(list []Piece) {
	for i := 1; i < len(list); i++ {
		for j := i; j > 0 && list[j].From.Rat().Cmp(list[j-1].From.Rat()) < 0; j-- {
			list[j], list[j-1] = list[j-1], list[j]
		}
	}
}

// termsLike adds up the components that begin and end with c.
func (s *Signal) termsLike(ctx context.Context, like *component, digits int) ([]Term, error) {
	chosen := func(c *component) bool {
		return c.from.Cmp(like.from) == 0 && sameInstant(c.until, like.until)
	}
	bits := int64(digits)*10/3 + 4
	for prec := startPrecision(digits); ; prec *= 2 {
		x, err := s.collect(ctx, chosen, like.from, prec)
		if err != nil {
			return nil, err
		}
		if x.decided(bits) {
			return s.listTerms(x, chosen), nil
		}
		if prec*2 > maxPrecision {
			return s.listTerms(x, chosen), ErrPrecision
		}
	}
}

// decided tells whether every pole and coefficient is known to that many bits
// relative to its absolute value, or is nothing beside the others of its pole.
func (x *sum) decided(bits int64) bool {
	for _, t := range x.terms {
		if !t.pole.zero && !complexDecided(t.pole.p, bits) {
			return false
		}
		for m := range t.c {
			if !complexDecided(t.c[m], bits) && !t.vanishes(m) {
				return false
			}
		}
	}
	return true
}

func complexDecided(z number.ComplexBall, bits int64) bool {
	limit := z.Abs().MulPow2(int(-bits)).Lower()
	return z.Re.Rad().Cmp(limit) <= 0 && z.Im.Rad().Cmp(limit) <= 0
}

// vanishes tells whether the coefficient of τ^m cannot be told from zero and,
// at the time scale 1/|p|, is below 2^-190 of the leading one.
func (t *term) vanishes(m int) bool {
	top := len(t.c) - 1
	if m == top || t.pole.zero {
		return t.pole.zero && t.c[m].IsExact() && t.c[m].ContainsZero()
	}
	if !t.c[m].ContainsZero() {
		return false
	}
	limit := t.c[top].Abs().Mul(t.pole.p.Abs().PowInt(m - top)).MulPow2(-negligibleBits)
	return t.c[m].Abs().Upper().Cmp(limit.Lower()) <= 0
}

// listTerms writes the sum out, conjugates too.
func (s *Signal) listTerms(x *sum, chosen func(*component) bool) []Term {
	var out []Term
	for _, t := range x.terms {
		natural, forced := s.kindOf(t.pole.index, chosen)
		for m, c := range t.c {
			if t.vanishes(m) {
				continue
			}
			out = append(out, Term{m, c, t.pole.p, natural, forced})
			if !t.pole.real {
				out = append(out, Term{m, c.Conj(), t.pole.p.Conj(), natural, forced})
			}
		}
	}
	return out
}

// kindOf tells whether pole j of the family is natural, forced or both in the
// components.
func (s *Signal) kindOf(j int, chosen func(*component) bool) (natural, forced bool) {
	member := s.family.base.members[s.family.poles[j].member]
	for i := range s.comps {
		c := &s.comps[i]
		if s.expansions[i].powers[j] == 0 || !chosen(c) {
			continue
		}
		natural = natural || divides(member, c.fraction.natural)
		forced = forced || divides(member, c.fraction.source)
	}
	return natural, forced
}
