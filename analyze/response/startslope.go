package response

import (
	"math/big"

	"portlight/dialect/number"
)

// A curve that begins flat, as the step response of a filter of second or
// higher order does, has an extreme there that no ball can tell from a value
// just after it. Its first derivatives at the beginning are rational, and the
// first of them that is not zero decides.

// mostDerivatives is up to which derivative the beginning is looked at.
const mostDerivatives = 24

// initialDerivatives lists the value and the first n−1 derivatives at τ = 0+ of
// the part without impulses, exact: the coefficients of the series of F(s) in 1/s.
func (f *fraction) initialDerivatives(n int) []*big.Rat {
	d := f.den.Degree()
	out := make([]*big.Rat, n)
	for k := range out {
		out[k] = new(big.Rat)
		if d-1-k >= 0 {
			out[k].Set(f.num.Coeff(d - 1 - k))
		}
		for j := 1; j <= min(k, d); j++ {
			out[k].Sub(out[k], new(big.Rat).Mul(f.den.Coeff(d-j), out[k-j]))
		}
		out[k].Quo(out[k], f.den.Leading())
	}
	return out
}

// derivativesAt lists the component's value and derivatives at τ where they
// are rational for sure: at its beginning, and where its only pole is the origin.
func (c *component) derivativesAt(tau *big.Rat, n int) ([]*big.Rat, bool) {
	if c.weight.at != nil || c.share != wholeShare {
		return nil, false
	}
	var out []*big.Rat
	switch f := c.fraction; {
	case tau.Sign() == 0:
		out = f.initialDerivatives(n)
	case f.den.Degree() == f.den.Order():
		list := f.originCoefficients()
		for range n {
			out = append(out, polynomialAt(list, tau))
			for m := 1; m < len(list); m++ {
				list[m-1] = new(big.Rat).Mul(list[m], big.NewRat(int64(m), 1))
			}
			list = list[:max(len(list)-1, 0)]
		}
	default:
		return nil, false
	}
	for _, r := range out {
		r.Mul(r, c.weight.rational)
	}
	return out, true
}

// derivativesAt lists the value and derivatives just after t where they are
// rational for sure.
func (s *Signal) derivativesAt(t *big.Rat, n int) ([]*big.Rat, bool) {
	sum := make([]*big.Rat, n)
	for k := range sum {
		sum[k] = new(big.Rat)
	}
	for i := range s.comps {
		c := &s.comps[i]
		if !c.acts(t, Right) {
			continue
		}
		list, ok := c.derivativesAt(new(big.Rat).Sub(t, c.from), n)
		if !ok {
			return nil, false
		}
		for k, r := range list {
			sum[k].Add(sum[k], r)
		}
	}
	return sum, true
}

// firstTurn finds the first derivative just after t that is not zero, of the
// sum of the leaves with their signs; ok is false where it is not known exactly.
func (c *Curve) firstTurn(t *big.Rat, signs []int) (order, sign int, ok bool) {
	leaves := c.leaves()
	sum := make([]*big.Rat, mostDerivatives)
	for k := range sum {
		sum[k] = new(big.Rat)
	}
	for i, l := range leaves {
		s, isSignal := l.(*Signal)
		switch {
		case signs[i] == 0:
			continue
		case !isSignal:
			if _, constant := l.(*constant); constant {
				continue
			}
			return 0, 0, false
		}
		list, known := s.derivativesAt(t, mostDerivatives)
		if !known {
			return 0, 0, false
		}
		for k, r := range list {
			sum[k].Add(sum[k], new(big.Rat).Mul(r, big.NewRat(int64(signs[i]), 1)))
		}
	}
	for k, r := range sum[1:] {
		if r.Sign() != 0 {
			return k + 1, r.Sign(), true
		}
	}
	return 0, 0, false
}

// fallsFromStart proves that the greatest value of a cluster at the beginning of
// a stage is the first one: its first derivative there that is not zero is
// negative, and stays so over the cluster.
func (s *search) fallsFromStart(c cluster, x *sum) bool {
	if c.a != 0 || c.stage.steady || len(c.boxes) == 0 {
		return false
	}
	signs, ok := s.boxBranch(c.boxes[0])
	if !ok {
		return false
	}
	order, sign, ok := s.curve.firstTurn(c.stage.origin, signs)
	if !ok || sign > 0 {
		return false
	}
	for range order {
		x = x.derivative()
	}
	// One box may be too wide for the bounds: split it a few times.
	return negativeOver(x, ballBetween(c.a, c.b), 6)
}

// negativeOver proves that a sum is negative over a stretch, halved as often
// as depth allows.
func negativeOver(x *sum, over number.Ball, depth int) bool {
	if sign, decided := x.at(over).Sign(); decided {
		return sign < 0
	}
	if depth == 0 {
		return false
	}
	mid := number.BallFromFloat(over.Mid(), refinePrecision)
	return negativeOver(x, number.Hull(over.Lower(), mid.Upper(), refinePrecision), depth-1) &&
		negativeOver(x, number.Hull(mid.Lower(), over.Upper(), refinePrecision), depth-1)
}
