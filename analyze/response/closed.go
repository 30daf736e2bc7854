package response

import (
	"context"
	"errors"
	"math/big"

	"portlight/dialect/number"
)

// ErrNoClosedForm: absolute values, least and greatest change their form
// wherever their arguments cross, so there is no one list of terms.
var ErrNoClosedForm = errors.New("there is no one closed form between breakpoints")

// Pieces lists the closed form of a curve made of signals, products, sums and
// multiples, one piece for each stretch between breakpoints, the coefficients
// to so many digits: products of terms are terms, at the sums of their
// poles. Pieces do not overlap, and impulses, whose products have no meaning, are left
// out (ImpulseIn finds them). The error is ErrNoClosedForm, ErrPrecision (the
// terms are right but wider), or the context's.
func (c *Curve) Pieces(ctx context.Context, digits int) ([]Piece, error) {
	leaves := c.leaves()
	signs, ok := c.linear()
	if !ok {
		return nil, ErrNoClosedForm
	}
	var cuts []*big.Rat
	for _, l := range leaves {
		cuts = append(cuts, l.Breakpoints()...)
	}
	cuts = sortedInstants(append(cuts, new(big.Rat)))
	var out []Piece
	var late error
	for i, from := range cuts {
		p := Piece{From: number.FromRat(from)}
		if i+1 < len(cuts) {
			until := number.FromRat(cuts[i+1])
			p.Until = &until
		}
		x, err := closedSum(ctx, leaves, signs, from, digits)
		if err != nil && !errors.Is(err, ErrPrecision) {
			return nil, err
		}
		if err != nil {
			late = err
		}
		if p.Terms = x.list(); len(p.Terms) > 0 {
			out = append(out, p)
		}
	}
	return out, late
}

// HasClosedForm tells whether Pieces can list the curve.
func (c *Curve) HasClosedForm() bool { _, ok := c.linear(); return ok }

// AddBall returns c + v for a number that is known through a ball.
func (c *Curve) AddBall(v number.Ball) *Curve { return c.Add(constantCurve(v, nil)) }

// ImpulseIn tells the first instant in the range at which a signal of the
// curve has an impulse, nil when none has.
func (c *Curve) ImpulseIn(ctx context.Context, r Range) (*big.Rat, error) {
	at, found, err := c.hasImpulse(ctx, r)
	if !found {
		at = nil
	}
	return at, err
}

// closedSum adds the forms from an instant on, with the precision raised until the
// digits of every term are decided.
func closedSum(ctx context.Context, leaves []form, signs []int, from *big.Rat, digits int) (*sum, error) {
	bits := int64(digits)*10/3 + 4
	for prec := startPrecision(digits) + negligibleBits; ; prec *= 2 {
		sums := make([]*sum, len(leaves))
		for i, l := range leaves {
			var err error
			if sums[i], err = l.sumFrom(ctx, from, prec); err != nil {
				return nil, err
			}
		}
		x := combineSums(sums, signs).withoutNothing(sums)
		if x.decided(bits) {
			return x, nil
		}
		if prec*2 > maxPrecision {
			return x, ErrPrecision
		}
	}
}

// withoutNothing drops the coefficients that cannot be told from zero and are
// below 2^-190 of the largest term, at the fastest time scale, of what was
// added up: they cancel.
func (x *sum) withoutNothing(from []*sum) *sum {
	rate := number.BallFromInt(1, refinePrecision)
	fastest := 0.0
	for _, t := range x.terms {
		if size := t.pole.p.Abs(); size.MidFloat64() > fastest {
			fastest, rate = size.MidFloat64(), size
		}
	}
	var largest *big.Float
	size := func(t *term, m int) *big.Float { return t.c[m].Abs().Quo(rate.PowInt(m)).Upper() }
	for _, y := range from {
		for i := range y.terms {
			for m := range y.terms[i].c {
				if s := size(&y.terms[i], m); largest == nil || s.Cmp(largest) > 0 {
					largest = s
				}
			}
		}
	}
	if largest == nil {
		return x
	}
	limit := new(big.Float).SetMantExp(largest, -negligibleBits)
	out := &sum{dropped: x.dropped, constant: x.constant}
	for _, t := range x.terms {
		t.c = append([]number.ComplexBall(nil), t.c...)
		for m := range t.c {
			if t.c[m].ContainsZero() && size(&t, m).Cmp(limit) <= 0 {
				out.dropped = out.dropped || !t.c[m].IsExact()
				t.c[m] = number.ComplexBall{}
			}
		}
		for len(t.c) > 0 && t.c[len(t.c)-1].IsExact() && t.c[len(t.c)-1].ContainsZero() {
			t.c = t.c[:len(t.c)-1]
		}
		if len(t.c) > 0 {
			out.terms = append(out.terms, t)
		}
	}
	return out
}

// list writes the terms out, conjugates too.
func (x *sum) list() []Term {
	var out []Term
	for _, t := range x.terms {
		for m, c := range t.c {
			if t.vanishes(m) || c.IsExact() && c.ContainsZero() {
				continue
			}
			out = append(out, Term{Power: m, Coefficient: c, Pole: t.pole.p})
			if !t.pole.real {
				out = append(out, Term{Power: m, Coefficient: c.Conj(), Pole: t.pole.p.Conj()})
			}
		}
	}
	return out
}
