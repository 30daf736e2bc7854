package response

import (
	"math/big"

	"portlight/dialect/number"
)

// Scale returns k·c.
func (c *Curve) Scale(k number.Exact) *Curve {
	switch f := c.leaf.(type) {
	case *Signal:
		return f.Scale(k).Curve()
	case *product:
		return &Curve{leaf: &product{f.a, f.b, new(big.Rat).Mul(f.factor, k.Rat())}}
	case *constant:
		v := f.value.MulRat(k.Rat())
		if f.exact == nil {
			return constantCurve(v, nil)
		}
		return constantCurve(v, new(big.Rat).Mul(f.exact, k.Rat()))
	}
	if k.Rat().Sign() < 0 && c.op != opAdd && c.op != opNegate {
		return c.Scale(k.Neg()).Neg()
	}
	args := make([]*Curve, len(c.args))
	for i, a := range c.args {
		args[i] = a.Scale(k)
	}
	return &Curve{op: c.op, args: args}
}
