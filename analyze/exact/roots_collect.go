package exact

import (
	"context"
	"math"
	"math/big"
	"slices"

	"portlight/dialect/number"
)

// essentials returns how many roots of the unit's polynomial are real or in the
// upper half plane.
func (u *rootUnit) essentials() int {
	if u.solver.poly.Degree() == 1 {
		return 1
	}
	return len(u.solver.essential)
}

// enclosed is a root of a unit's polynomial.
type enclosed struct {
	ball     number.ComplexBall
	real     bool
	rational *big.Rat
}

// essential returns one of them in a ball at the precision reached, and with a
// midpoint of prec bits at least. The midpoint is not rounded more coarsely than
// the proved radius, which keeps the roots apart.
func (u *rootUnit) essential(index int, prec uint) enclosed {
	p := u.solver.poly
	if p.Degree() == 1 {
		r := p.Coeff(0)
		r.Neg(r.Quo(r, p.Coeff(1)))
		return enclosed{number.RealBall(number.BallFromRat(r, max(prec, u.bits))), true, r}
	}
	i := u.solver.essential[index]
	a := &u.solver.roots[i]
	prec = max(prec, uint(-a.log)+16)
	radius := u.solver.radius(i)
	unit := a.k - 64*a.words + 1
	re := number.BallFromFloat(dyadic(a.x, unit), prec).WithRadius(radius)
	if a.link == i {
		e := enclosed{number.RealBall(re), true, nil}
		if r := u.solver.rationalIn(i, re); r != nil {
			e.rational = r
			e.ball = number.RealBall(number.BallFromRat(r, prec))
		}
		return e
	}
	im := number.BallFromFloat(dyadic(a.y, unit), prec).WithRadius(radius)
	return enclosed{number.ComplexBall{Re: re, Im: im}, false, nil}
}

// wantMore asks for a smaller ball of an essential root.
func (u *rootUnit) wantMore(index int) {
	if u.solver.poly.Degree() == 1 {
		u.bits = max(64, u.bits) * 2
		return
	}
	u.solver.wantMore(u.solver.essential[index])
}

// dyadic returns n·2^e.
func dyadic(n *big.Int, e int) *big.Float {
	f := new(big.Float).SetInt(n)
	return f.SetMantExp(f, e)
}

// radius returns the bound of the distance of root i from its centre.
func (s *rootSolver) radius(i int) *big.Float {
	a := &s.roots[i]
	whole := math.Floor(a.log)
	f := big.NewFloat(math.Exp2(a.log-whole+2*slack) * cmplxAbs(s.views[i].x))
	return f.SetMantExp(f, int(whole)+a.k)
}

func cmplxAbs(x complex128) float64 { return math.Hypot(real(x), imag(x)) }

// rationalIn returns root i if it is found to be a rational number with short
// numerator and denominator: the simplest fraction in its ball is tried, if it
// is shorter than one would meet there by chance.
func (s *rootSolver) rationalIn(i int, b number.Ball) *big.Rat {
	if r := s.rational[i]; r != nil {
		return r
	}
	most := b.RelativeBits() - 12
	if most <= s.searched[i] {
		return nil
	}
	s.searched[i] = most
	lower, _ := b.Lower().Rat(nil)
	upper, _ := b.Upper().Rat(nil)
	if lower == nil || upper == nil || lower.Sign()*upper.Sign() <= 0 {
		return nil
	}
	negative := lower.Sign() < 0
	if negative {
		lower, upper = upper.Neg(upper), lower.Neg(lower)
	}
	r := simplestBetween(lower, upper, int(most))
	if r == nil {
		return nil
	}
	if negative {
		r.Neg(r)
	}
	if s.poly.EvalSign(r) != 0 {
		return nil
	}
	s.rational[i] = r
	return r
}

// simplestBetween returns the fraction of the least denominator from lower to
// upper, 0 < lower ≤ upper, by the part that their continued fractions have in
// common, or nil if numerator and denominator have more than most bits.
func simplestBetween(lower, upper *big.Rat, most int) *big.Rat {
	a, b := new(big.Int).Set(lower.Num()), new(big.Int).Set(lower.Denom())
	c, d := new(big.Int).Set(upper.Num()), new(big.Int).Set(upper.Denom())
	// Convergents p/q of the common part.
	p, p1 := big.NewInt(1), new(big.Int)
	q, q1 := new(big.Int), big.NewInt(1)
	whole, rest, other, restOther := new(big.Int), new(big.Int), new(big.Int), new(big.Int)
	for p.BitLen()+q.BitLen() <= most {
		whole.QuoRem(a, b, rest)
		other.QuoRem(c, d, restOther)
		last := rest.Sign() == 0 || whole.Cmp(other) != 0
		if rest.Sign() != 0 && last {
			whole.Add(whole, bigOne) // the least integer from a/b to c/d
		}
		p, p1 = p1.Add(p1, new(big.Int).Mul(whole, p)), p
		q, q1 = q1.Add(q1, new(big.Int).Mul(whole, q)), q
		if last {
			if p.BitLen()+q.BitLen() > most {
				return nil
			}
			return new(big.Rat).SetFrac(p, q)
		}
		// Turn the rests over, which swaps the ends. The upper rest is not 0, as
		// the lower one is greater than 0 and below it.
		a, b, c, d, rest, restOther = d, restOther, b, rest, a, c
	}
	return nil
}

// branches returns the roots of the polynomial that an essential root of a unit
// stands for: itself and its conjugate, or with squared the square roots of
// these, lower half plane first.
func (u *rootUnit) branches(index int, prec uint) []Root {
	e := u.essential(index, prec)
	if u.squared {
		return u.squareRoots(e)
	}
	if e.real {
		return []Root{{Re: e.ball.Re, Im: e.ball.Im, Real: true, Rational: e.rational}}
	}
	low := e.ball.Conj()
	return []Root{{Re: low.Re, Im: low.Im}, {Re: e.ball.Re, Im: e.ball.Im}}
}

// squareRoots returns ±√y, and ±√ȳ for complex y.
func (u *rootUnit) squareRoots(e enclosed) []Root {
	zero := number.BallFromInt(0, e.ball.Prec())
	if e.real {
		sign, _ := e.ball.Re.Sign()
		root := e.ball.Re.Abs().Sqrt()
		if sign < 0 {
			return []Root{{Re: zero, Im: root.Neg(), Imaginary: true}, {Re: zero, Im: root, Imaginary: true}}
		}
		var rational, negative *big.Rat
		if e.rational != nil {
			if rational = exactSquareRoot(e.rational); rational != nil {
				negative = new(big.Rat).Neg(rational)
			}
		}
		return []Root{{Re: root.Neg(), Im: zero, Real: true, Rational: negative}, {Re: root, Im: zero, Real: true, Rational: rational}}
	}
	z := complexSquareRoot(e.ball)
	a, b := z.Re, z.Im
	return []Root{{Re: a.Neg(), Im: b.Neg()}, {Re: a.Neg(), Im: b}, {Re: a, Im: b.Neg()}, {Re: a, Im: b}}
}

func exactSquareRoot(r *big.Rat) *big.Rat {
	n, d := new(big.Int).Sqrt(r.Num()), new(big.Int).Sqrt(r.Denom())
	root := new(big.Rat).SetFrac(n, d)
	if new(big.Rat).Mul(root, root).Cmp(r) != 0 {
		return nil
	}
	return root
}

// complexSquareRoot returns the square root in the first quadrant of a number y
// with positive imaginary part: √((|y|+|Re y|)/2) is the larger part, and
// Im y/2 over it the other, free of cancellation.
func complexSquareRoot(y number.ComplexBall) number.ComplexBall {
	larger := y.Abs().Add(y.Re.Abs()).MulPow2(-1).Sqrt()
	smaller := y.Im.MulPow2(-1).Quo(larger)
	if y.Re.Mid().Sign() < 0 {
		return number.ComplexBall{Re: smaller, Im: larger}
	}
	return number.ComplexBall{Re: larger, Im: smaller}
}

// placed is one root or a pair of conjugates, on the way to its place.
type placed struct {
	places []rootPlace
	re, im number.Ball
}

// everyRoot returns the roots as far as they are known, conjugates together.
func (s *RootSet) everyRoot() []placed {
	var all []placed
	for ui, u := range s.units {
		for index := range u.essentials() {
			roots := u.branches(index, basePrecision)
			for b := 0; b < len(roots); {
				size := 1
				if !roots[b].Real {
					size = 2
				}
				g := placed{re: roots[b].Re, im: roots[b].Im.Abs()}
				for range size {
					g.places = append(g.places, rootPlace{ui, index, b})
					b++
				}
				all = append(all, g)
			}
		}
	}
	return all
}

// separate refines roots, also those of different units, until their balls with
// four times the radius do not meet. Balls refined later stay within these, so
// they remain apart. Then the order is fixed.
func (s *RootSet) separate(ctx context.Context) error {
	for {
		all := s.everyRoot()
		slices.SortStableFunc(all, func(a, b placed) int { return a.re.Mid().Cmp(b.re.Mid()) })
		wide := make([]number.ComplexBall, len(all))
		widest := new(big.Float)
		for i, g := range all {
			wide[i] = number.ComplexBall{Re: fourfold(g.re), Im: fourfold(g.im)}
			if r := wide[i].Re.Rad(); r.Cmp(widest) > 0 {
				widest = r
			}
		}
		apart := true
		for i := range all {
			reach := new(big.Float).Add(wide[i].Re.Upper(), widest)
			for j := i + 1; j < len(all) && wide[j].Re.Mid().Cmp(reach) <= 0; j++ {
				if wide[i].Overlaps(wide[j]) {
					apart = false
					for _, g := range []placed{all[i], all[j]} {
						s.units[g.places[0].unit].wantMore(g.places[0].index)
					}
				}
			}
		}
		if apart {
			for _, u := range s.units {
				u.solver.settle()
			}
			s.arrange(all)
			return nil
		}
		for _, u := range s.units {
			if err := u.solver.refine(ctx, basePrecision+1); err != nil {
				return err
			}
		}
	}
}

func fourfold(b number.Ball) number.Ball {
	r := b.Rad()
	return b.WithRadius(r.Mul(r, big.NewFloat(3)))
}

// arrange fixes the order of roots sorted by real part: those that the balls do
// not tell apart in it by the magnitude of the imaginary part, the lower one of
// a pair first.
func (s *RootSet) arrange(all []placed) {
	for i := 0; i < len(all); {
		j := i + 1
		for j < len(all) && all[j-1].re.Overlaps(all[j].re) {
			j++
		}
		slices.SortStableFunc(all[i:j], func(a, b placed) int { return a.im.Mid().Cmp(b.im.Mid()) })
		i = j
	}
	for _, g := range all {
		s.order = append(s.order, g.places...)
	}
}

// collect returns the roots in order at the precision reached.
func (s *RootSet) collect(prec uint) []Root {
	branches := make([][][]Root, len(s.units))
	for i, u := range s.units {
		for index := range u.essentials() {
			branches[i] = append(branches[i], u.branches(index, prec+8))
		}
	}
	var out []Root
	origin := s.zeros > 0
	place := func() {
		out = append(out, Root{
			Re: number.BallFromInt(0, prec), Im: number.BallFromInt(0, prec), Multiplicity: s.zeros,
			Real: true, Imaginary: true, Rational: new(big.Rat), Radius: new(big.Float),
		})
		origin = false
	}
	for _, p := range s.order {
		r := branches[p.unit][p.index][p.branch]
		r.Multiplicity = s.units[p.unit].multiplicity
		r.Radius = distance(r)
		if origin && !r.Imaginary && r.Re.Mid().Sign() > 0 || origin && r.Imaginary {
			place()
		}
		out = append(out, r)
	}
	if origin {
		place()
	}
	return out
}

// distance bounds the distance of the points of a rectangle from its centre.
func distance(r Root) *big.Float {
	a, b := r.Re.Rad(), r.Im.Rad()
	switch {
	case a.Sign() == 0:
		return b
	case b.Sign() == 0:
		return a
	}
	sum := new(big.Float).SetPrec(64).SetMode(big.ToPositiveInf).Add(new(big.Float).SetPrec(128).Mul(a, a), new(big.Float).SetPrec(128).Mul(b, b))
	// √ rounds to nearest: one unit more is above.
	root := new(big.Float).SetPrec(53).Sqrt(sum)
	return root.Mul(root, big.NewFloat(1+0x1p-50))
}
