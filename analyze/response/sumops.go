package response

import (
	"math/big"

	"portlight/dialect/number"
)

// at evaluates the sum for every τ in a ball.
func (x *sum) at(tau number.Ball) number.Ball {
	var total number.Ball
	for i := range x.terms {
		t := &x.terms[i]
		c := t.c[len(t.c)-1]
		for m := len(t.c) - 2; m >= 0; m-- {
			c = c.MulBall(tau).Add(t.c[m])
		}
		if !t.pole.zero {
			c = c.Mul(t.pole.p.MulBall(tau).Exp())
		}
		if t.pole.real {
			total = total.Add(c.Re)
		} else {
			total = total.Add(c.Re.MulPow2(1))
		}
	}
	return total
}

// derivative is df/dτ: (c[m]·τ^m·e^{pτ})′ = (p·c[m]·τ^m + m·c[m]·τ^{m−1})·e^{pτ}.
func (x *sum) derivative() *sum {
	out := &sum{dropped: x.dropped}
	for _, t := range x.terms {
		c := make([]number.ComplexBall, len(t.c))
		for m := range c {
			if !t.pole.zero {
				c[m] = t.c[m].Mul(t.pole.p)
			}
			if m+1 < len(t.c) {
				c[m] = c[m].Add(t.c[m+1].MulRat(big.NewRat(int64(m+1), 1)))
			}
		}
		if t.pole.zero {
			if c = c[:len(c)-1]; len(c) == 0 {
				continue
			}
		}
		out.terms = append(out.terms, term{t.pole, c})
	}
	for m := 1; m < len(x.constant); m++ {
		out.constant = append(out.constant, new(big.Rat).Mul(x.constant[m], big.NewRat(int64(m), 1)))
	}
	return out
}

// combineSums is Σ sign[i]·x[i], terms at equal poles added up.
func combineSums(x []*sum, signs []int) *sum {
	if len(x) == 1 && signs[0] == 1 {
		return x[0]
	}
	out := &sum{}
	at := map[string]int{}
	exactConstants := true
	var constant []*big.Rat
	for i, s := range x {
		if signs[i] == 0 {
			continue
		}
		out.dropped = out.dropped || s.dropped
		for _, t := range s.terms {
			exactConstants = exactConstants && (!t.pole.zero || s.constant != nil)
			c := append([]number.ComplexBall(nil), t.c...)
			if signs[i] < 0 {
				for m := range c {
					c[m] = c[m].Neg()
				}
			}
			k, ok := at[t.pole.id]
			if !ok {
				at[t.pole.id] = len(out.terms)
				out.terms = append(out.terms, term{t.pole, c})
				continue
			}
			old := &out.terms[k]
			for m := range c {
				if m < len(old.c) {
					old.c[m] = old.c[m].Add(c[m])
				} else {
					old.c = append(old.c, c[m])
				}
			}
		}
		for m, r := range s.constant {
			if m >= len(constant) {
				constant = append(constant, new(big.Rat))
			}
			constant[m].Add(constant[m], new(big.Rat).Mul(r, big.NewRat(int64(signs[i]), 1)))
		}
	}
	if exactConstants && len(constant) > 0 {
		out.setExactConstant(constant)
	}
	return out
}

// setExactConstant puts the exact part at s = 0 in place of the balls.
func (x *sum) setExactConstant(constant []*big.Rat) {
	for len(constant) > 0 && constant[len(constant)-1].Sign() == 0 {
		constant = constant[:len(constant)-1]
	}
	for i := range x.terms {
		t := &x.terms[i]
		if !t.pole.zero {
			continue
		}
		if len(constant) == 0 {
			x.terms = append(x.terms[:i:i], x.terms[i+1:]...)
			return
		}
		prec := t.c[0].Prec()
		t.c = t.c[:0]
		for _, r := range constant {
			t.c = append(t.c, realBall(number.BallFromRat(r, prec)))
		}
		x.constant = constant
		return
	}
}

// growth tells how a sum goes on for ever.
type growth int

const (
	settles    growth = iota // to its constant
	oscillates               // between bounds
	grows                    // without bound, or in a way the poles do not decide
)

// course tells how the sum goes on, from its poles: the coefficients of a sum
// are not zero.
func (x *sum) course() growth {
	out := settles
	for _, t := range x.terms {
		sign, decided := t.pole.p.Re.Sign()
		onAxis := t.pole.axis || t.pole.zero
		switch {
		case onAxis && len(t.c) > 1, !onAxis && (!decided || sign > 0):
			return grows
		case onAxis && !t.pole.zero:
			out = oscillates
		}
	}
	return out
}

// limit is the constant of a sum, exact where it is rational for sure.
func (x *sum) limit() (number.Ball, *big.Rat) {
	for _, t := range x.terms {
		if t.pole.zero {
			if len(x.constant) > 0 {
				return t.c[0].Re, x.constant[0]
			}
			return t.c[0].Re, nil
		}
	}
	if x.dropped {
		return number.Ball{}, nil
	}
	return number.Ball{}, new(big.Rat)
}

// steady keeps the constant and what oscillates for ever.
func (x *sum) steady() *sum {
	out := &sum{constant: x.constant, dropped: x.dropped}
	for _, t := range x.terms {
		if t.pole.zero || t.pole.axis {
			out.terms = append(out.terms, t)
		}
	}
	return out
}

// dominance is the sign of the sum for all τ ≥ from, when one real term is
// larger than all others together from there on; 0 when that cannot be said.
// The quotient of another term by it, τ^{m−m'}·e^{(σ−σ')τ}, must be falling
// from there on (m = m' or τ ≥ (m−m')/(σ'−σ)), or constant.
func (x *sum) dominance(from number.Ball) int {
	best := -1
	for i, t := range x.terms {
		if best < 0 {
			best = i
			continue
		}
		order, decided := t.pole.p.Re.Cmp(x.terms[best].pole.p.Re)
		if decided && order > 0 || (!decided || order == 0) && len(t.c) > len(x.terms[best].c) {
			best = i
		}
	}
	if best < 0 || !x.terms[best].pole.real {
		return 0
	}
	lead := &x.terms[best]
	top := len(lead.c) - 1
	sign, decided := lead.c[top].Re.Sign()
	if !decided {
		return 0
	}
	var others number.Ball
	for i, t := range x.terms {
		for m, c := range t.c {
			if i == best && m == top {
				continue
			}
			gap := lead.pole.p.Re.Sub(t.pole.p.Re)
			if i != best {
				if s, ok := gap.Sign(); !ok || s < 0 || s == 0 && m > top {
					return 0
				}
			}
			if m > top && from.Mul(gap).Lower().Cmp(big.NewFloat(float64(m-top))) < 0 {
				return 0
			}
			if m < top && from.ContainsZero() {
				return 0 // τ^{m−top} has no bound at 0
			}
			size := c.Abs()
			if !t.pole.real {
				size = size.MulPow2(1)
			}
			part := size.Mul(gap.Neg().Mul(from).Exp())
			if m != top {
				part = part.Mul(from.PowInt(m - top))
			}
			others = others.Add(part)
		}
	}
	if !others.IsFinite() || others.Upper().Cmp(lead.c[top].Re.Abs().Lower()) >= 0 {
		return 0
	}
	return sign
}
