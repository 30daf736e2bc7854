package response

import (
	"math/big"

	"portlight/dialect/number"
)

// smallest is the power of two below which all coefficients together are scaled:
// bounds in float64 do not go below leastBound, about 2^-1000.
const smallest = -400

// normalise multiplies all leaves by one power of two when they are so small
// that float64 would lose them, long after everything has decayed, and returns
// its exponent. Every operation of a curve keeps such a factor.
func normalise(stages []*stage) (shift int, err error) {
	size := new(big.Float)
	for _, st := range stages {
		for _, x := range st.sums {
			for _, t := range x.terms {
				for _, c := range t.c {
					if u := c.Abs().Upper(); u.Cmp(size) > 0 {
						size = u
					}
				}
			}
		}
	}
	if size.Sign() == 0 || size.IsInf() || size.MantExp(nil) > smallest {
		return 0, nil
	}
	shift = -size.MantExp(nil)
	for _, st := range stages {
		for i, x := range st.sums {
			st.sums[i] = x.scaled(shift)
			if st.floats[i], err = st.sums[i].toFloat(); err != nil {
				return 0, err
			}
		}
		st.scale, _ = st.largest()
	}
	return shift, nil
}

// scaled is 2^k times the sum.
func (x *sum) scaled(k int) *sum {
	out := &sum{dropped: x.dropped}
	for _, t := range x.terms {
		c := make([]number.ComplexBall, len(t.c))
		for m := range c {
			c[m] = t.c[m].MulPow2(k)
		}
		out.terms = append(out.terms, term{t.pole, c})
	}
	for _, r := range x.constant {
		out.constant = append(out.constant, ratPow2(r, k))
	}
	return out
}

// scaled is 2^k times an extreme.
func (e Extreme) scaled(k int) Extreme {
	if k != 0 {
		e.Value = e.Value.MulPow2(k)
		if e.Exact != nil {
			e.Exact = ratPow2(e.Exact, k)
		}
	}
	return e
}

// negated is minus an extreme.
func (e Extreme) negated() Extreme {
	e.Value = e.Value.Neg()
	if e.Exact != nil {
		e.Exact = new(big.Rat).Neg(e.Exact)
	}
	return e
}

// ratPow2 is 2^k·r.
func ratPow2(r *big.Rat, k int) *big.Rat {
	if k == 0 {
		return r
	}
	power := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(max(k, -k))))
	if k < 0 {
		return power.Quo(r, power)
	}
	return power.Mul(r, power)
}
