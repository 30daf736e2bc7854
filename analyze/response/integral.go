package response

import (
	"context"
	"math"
	"math/big"

	"portlight/dialect/number"
)

// stretchOf is a part of a stage in which the curve is one sum, or a part too
// narrow to tell, where sum is nil and bounds holds.
type stretchOf struct {
	sum    *sum
	a, b   float64
	toEnd  bool // b stands for the end of the stage
	whole  bool // the curve is one sum everywhere
	bounds enclosure
}

// nearBranch is the part of the size of a curve by which it may be off where an
// absolute value or the like is hard to tell; integrals account for it. It is more
// than the models' own errors, so that every box can be told in the end.
const nearBranch = 1e-13

// stretches cuts a stage of finite length where the curve changes from one sum
// to another (the zeros under an absolute value).
func (s *search) stretches(ctx context.Context, st *stage) ([]stretchOf, error) {
	if signs, ok := s.curve.linear(); ok {
		return []stretchOf{{sum: combineSums(st.sums, signs), b: st.length, toEnd: true, whole: true}}, nil
	}
	type part struct {
		box   *box
		signs []int
	}
	var parts []part
	stack := []*box{{stage: st, a: 0, b: st.length, on: st.crude(s.curve, 0, st.length)}}
	for len(stack) > 0 {
		if s.steps++; s.steps > walkBudget {
			return nil, undecided("the curve changes its form too often")
		}
		if s.steps%8 == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
		}
		x := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		signs, ok := s.boxBranchNear(x, nearBranch*s.scale)
		switch {
		case ok:
			parts = append(parts, part{x, signs})
		case x.models != nil && x.exhausted(), x.a == x.b:
			parts = append(parts, part{x, nil})
		default:
			e := &edgeSearch{search: s, first: true}
			stack = append(stack, e.halves(x)...)
		}
	}
	var out []stretchOf
	for i, p := range parts {
		if p.signs == nil {
			out = append(out, stretchOf{a: p.box.a, b: p.box.b, bounds: p.box.on})
			continue
		}
		if n := len(out); i > 0 && parts[i-1].signs != nil && sameSigns(parts[i-1].signs, p.signs) {
			out[n-1].b = p.box.b
			continue
		}
		out = append(out, stretchOf{sum: combineSums(st.sums, p.signs), a: p.box.a, b: p.box.b})
	}
	out[0].a = 0
	for i := range out[1:] { // the parts overlap by roundings; make them meet
		out[i+1].a = out[i].b
	}
	out[len(out)-1].toEnd = true
	return out, nil
}

// linear tells with which sign each leaf counts when the curve is a sum.
func (c *Curve) linear() ([]int, bool) {
	switch c.op {
	case opLeaf:
		return []int{1}, true
	case opNegate, opAdd:
		var out []int
		for _, a := range c.args {
			s, ok := a.linear()
			if !ok {
				return nil, false
			}
			out = append(out, s...)
		}
		if c.op == opNegate {
			for i := range out {
				out[i] = -out[i]
			}
		}
		return out, true
	}
	return nil, false
}

func sameSigns(a, b []int) bool {
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

// boxBranch tells which sum the curve is in a box, when its bounds decide.
func (s *search) boxBranch(x *box) ([]int, bool) { return s.boxBranchNear(x, 0) }

// boxBranchNear is boxBranch where differences below near do not matter.
func (s *search) boxBranchNear(x *box, near float64) ([]int, bool) {
	leaves := make([]enclosure, len(x.stage.floats))
	for i, f := range x.stage.floats {
		if x.models != nil {
			leaves[i] = x.models[i].on(x.u, x.v)
		} else {
			leaves[i] = f.crude(x.a, x.b)
		}
	}
	signs, _, rest, ok := s.curve.branch(leaves, 1, near)
	return signs, ok && len(rest) == 0
}

// integrate is ∫ over the range of the curve, or of its square.
func (c *Curve) integrate(ctx context.Context, r Range, square bool, prec uint) (number.Ball, error) {
	if t, yes, err := c.hasImpulse(ctx, r); err != nil {
		return number.Ball{}, err
	} else if yes && (square || !c.isLeafSignal()) {
		return number.Ball{}, undefined("there is an impulse at t = %s s", shortTime(t))
	}
	stages, err := c.stages(ctx, r, prec)
	if err != nil {
		return number.Ball{}, err
	}
	total, err := c.impulseIntegral(ctx, r)
	if err != nil {
		return number.Ball{}, err
	}
	s := &search{curve: c, stages: stages, enough: func(enclosure) bool { return false }}
	for _, st := range stages {
		s.scale = math.Max(s.scale, st.scale)
	}
	for _, st := range stages {
		v, err := s.integrateStage(ctx, st, square, prec)
		if err != nil {
			return number.Ball{}, err
		}
		total = total.Add(v)
	}
	return total, nil
}

func (c *Curve) isLeafSignal() bool { _, ok := c.leaf.(*Signal); return ok }

// impulseIntegral adds the weights of the impulses inside the range; those of
// derivatives of the impulse integrate to nothing.
func (c *Curve) impulseIntegral(ctx context.Context, r Range) (number.Ball, error) {
	var total number.Ball
	s, ok := c.Signal()
	if !ok {
		return total, nil
	}
	list, err := s.Impulses(ctx, 40)
	if err != nil {
		return total, err
	}
	for _, g := range list {
		if (r.From == nil || g.At.Cmp(r.From) >= 0) && (r.To == nil || g.At.Cmp(r.To) <= 0) {
			total = total.Add(g.Weights[0])
		}
	}
	return total, nil
}

func (s *search) integrateStage(ctx context.Context, st *stage, square bool, prec uint) (number.Ball, error) {
	if math.IsInf(st.length, 1) {
		signs, ok := s.curve.linear()
		if !ok && square && s.curve.op == opAbs {
			signs, ok = s.curve.args[0].linear()
		}
		if !ok {
			return number.Ball{}, undecided("the integral without end of a curve that is not one sum")
		}
		x := combineSums(st.sums, signs)
		if square {
			x = multiplySums(x, x, big.NewRat(1, 1), prec)
		}
		return x.integralForEver()
	}
	parts, err := s.stretches(ctx, st)
	if err != nil {
		return number.Ball{}, err
	}
	var total number.Ball
	end := st.lengthBall().WithPrecision(prec)
	for _, p := range parts {
		a, b := number.BallFromFloat64(p.a, prec), number.BallFromFloat64(p.b, prec)
		if p.toEnd {
			b = end
		}
		if p.sum == nil {
			value := number.Hull(new(big.Float).SetFloat64(p.bounds.lo), new(big.Float).SetFloat64(p.bounds.hi), prec)
			if square {
				value = value.Sqr()
			}
			total = total.Add(value.Mul(b.Sub(a)))
			continue
		}
		x := p.sum
		if square {
			x = multiplySums(x, x, big.NewRat(1, 1), prec)
		}
		total = total.Add(x.integral(a, b, prec))
	}
	if len(parts) > 0 && !parts[0].whole {
		total = total.WithBound(s.nearError(st, square).Mul(end))
	}
	return total, nil
}

// nearError bounds what nearBranch changes in the curve, or in its square: twice
// it for each operation, and for the square twice the greatest size as well.
func (s *search) nearError(st *stage, square bool) number.Ball {
	off := 2 * float64(s.curve.operations()) * nearBranch * s.scale
	if square {
		e := st.crude(s.curve, 0, st.length)
		off *= 2*math.Max(math.Abs(e.lo), math.Abs(e.hi)) + off
	}
	return number.BallFromFloat64(off*(1+8*unit), refinePrecision)
}

// operations counts the operations that have branches.
func (c *Curve) operations() int {
	n := 0
	if c.op == opAbs || c.op == opLeast || c.op == opGreatest {
		n++
	}
	for _, a := range c.args {
		n += a.operations()
	}
	return n
}

// integral is ∫ from a to b of the sum.
func (x *sum) integral(a, b number.Ball, prec uint) number.Ball {
	var total number.Ball
	for i := range x.terms {
		t := &x.terms[i]
		top := len(t.c) - 1
		whole := powerIntegrals(t.pole, b, top, prec)
		if !a.IsExact() || !a.ContainsZero() {
			for m, v := range powerIntegrals(t.pole, a, top, prec) {
				whole[m] = whole[m].Sub(v)
			}
		}
		for m, c := range t.c {
			v := c.Mul(whole[m]).Re
			if !t.pole.real {
				v = v.MulPow2(1)
			}
			total = total.Add(v)
		}
	}
	return total
}

// powerIntegrals are ∫₀^L τ^m e^{pτ} dτ for m = 0 … top: by
// I_m = (L^m e^{pL} − m·I_{m−1})/p where |p|L is above one, and by the series
// L^{m+1} Σ (pL)^k/(k!(m+1+k)) below, which also serves a pole that cannot be
// told from zero.
func powerIntegrals(p termPole, length number.Ball, top int, prec uint) []number.ComplexBall {
	out := make([]number.ComplexBall, top+1)
	if p.zero {
		power := length
		for m := range out {
			out[m] = realBall(power.MulRat(big.NewRat(1, int64(m+1))))
			power = power.Mul(length)
		}
		return out
	}
	z := p.p.MulBall(length)
	if z.Abs().Upper().Cmp(big.NewFloat(1)) <= 0 {
		power := length
		for m := range out {
			out[m] = exponentialSeries(z, m, prec).MulBall(power)
			power = power.Mul(length)
		}
		return out
	}
	e := z.Exp()
	power := e
	one := realBall(number.BallFromInt(1, prec))
	for m := range out {
		if m == 0 {
			out[0] = e.Sub(one).Quo(p.p)
		} else {
			power = power.MulBall(length)
			out[m] = power.Sub(out[m-1].MulRat(big.NewRat(int64(m), 1))).Quo(p.p)
		}
	}
	return out
}

// exponentialSeries is Σ z^k/(k!·(m+1+k)) for |z| ≤ 1; the remainder after the
// term k = n is below 2/(n+1)!.
func exponentialSeries(z number.ComplexBall, m int, prec uint) number.ComplexBall {
	total := realBall(number.BallFromRat(big.NewRat(1, int64(m+1)), prec))
	power := realBall(number.BallFromInt(1, prec))
	bits := 0.0
	for k := 1; ; k++ {
		power = power.Mul(z).MulRat(big.NewRat(1, int64(k)))
		total = total.Add(power.MulRat(big.NewRat(1, int64(m+1+k))))
		if bits += math.Log2(float64(k)); bits > float64(prec)+2 {
			rest := number.BallFromInt(1, number.MinPrecision).MulPow2(1 - int(bits))
			return number.ComplexBall{Re: total.Re.WithBound(rest), Im: total.Im.WithBound(rest)}
		}
	}
}

// integralForEver is ∫₀^∞: m!/(−p)^{m+1} for each decaying term.
func (x *sum) integralForEver() (number.Ball, error) {
	var total number.Ball
	for i := range x.terms {
		t := &x.terms[i]
		if sign, decided := t.pole.p.Re.Sign(); t.pole.axis || t.pole.zero || !decided || sign >= 0 {
			return number.Ball{}, undefined("the integral grows without bound or does not settle")
		}
		factor := t.pole.p.Neg().Inv()
		power := factor
		for m, c := range t.c {
			if m > 0 {
				power = power.Mul(factor).MulRat(big.NewRat(int64(m), 1))
			}
			v := c.Mul(power).Re
			if !t.pole.real {
				v = v.MulPow2(1)
			}
			total = total.Add(v)
		}
	}
	return total, nil
}
