package response

import (
	"math"
	"math/big"

	"portlight/dialect/number"
)

// Between two samples a signal is bounded by Taylor models: on τ = m + h·x with
// x in [−1, 1] it is a polynomial of degree panelOrder with a proved bound of
// what is left out. (K. Makino, M. Berz, "Taylor models and other validated
// functional inclusion methods", Int. J. Pure Appl. Math. 4 (2003).)
const (
	panelOrder = 24
	// panelPhase is the largest |p|·h of a term that is expanded. The remainder
	// of e^z after panelOrder terms is then below 2^25/25!·1.1 < 3e-18.
	panelPhase = 2.0
	// panelUnits bounds the rounding errors of all coefficients of a term
	// together, in units of its size bound |c|·e^{|z|}: the exponential
	// (exponentialUnits), the coefficient of c rounded to float64 and moved to m
	// (8 for each power), and for each of the coefficients, built by one complex
	// product and one quotient after another (8 each, weighted by |z|^k/k!, whose
	// mean place in the sum is at most |z| ≤ 2 … 4), and the final sum.
	panelUnits = 96
)

// model is the Taylor model of one form on a panel.
type model struct {
	a                [panelOrder + 1]float64
	err, slope, bend float64 // bounds on the rest of the value, of d/dx and of d²/dx²
}

// model expands the sum on [m−h, m+h]. Terms that turn or decay too fast to be
// expanded are put into the bounds when they are below floor; when they are not,
// there is no model and the panel has to be cut.
func (x *floatSum) model(m, h, floor float64) (out model, ok bool) {
	for i := range x.terms {
		f := &x.terms[i]
		if f.zero && len(f.re) == 1 {
			out.a[0] += f.re[0]
			out.err += 4 * unit * f.size[0]
			continue
		}
		if f.rate*h > panelPhase {
			value, slope, bend := f.bounds(m-h, m+h)
			if value > floor {
				return out, false
			}
			out.err += value
			out.slope += slope * h
			out.bend += bend * h * h
			continue
		}
		f.expand(m, h, &out)
	}
	return out, true
}

// bounds are upper bounds of a term and of its first two derivatives on [a, b].
func (f *floatTerm) bounds(a, b float64) (value, slope, bend float64) {
	value = f.bound(a, b)
	lower := floatTerm{sigmaUpper: f.sigmaUpper} // what the powers' derivatives leave
	for m := 1; m < len(f.size); m++ {
		lower.size = append(lower.size, f.size[m]*float64(m))
	}
	if len(lower.size) > 0 {
		slope = lower.bound(a, b)
		var second floatTerm
		second.sigmaUpper = f.sigmaUpper
		for m := 1; m < len(lower.size); m++ {
			second.size = append(second.size, lower.size[m]*float64(m))
		}
		bend = second.bound(a, b) + 2*f.rate*slope
	}
	slope += f.rate * value
	bend += f.rate * f.rate * value
	return value, slope * (1 + 8*unit), bend * (1 + 16*unit)
}

// expand adds the term's expansion: with q(x) = Σ c[k](m+h·x)^k = Σ q[i]·x^i and
// z = p·h it is Re(e^{pm} Σ q[i] x^i Σ z^j x^j/j!).
func (f *floatTerm) expand(m, h float64, out *model) {
	n := len(f.re)
	qr, qi := make([]float64, n), make([]float64, n)
	copy(qr, f.re)
	copy(qi, f.im)
	for i := range n {
		for k := n - 2; k >= i; k-- {
			qr[k] += qr[k+1] * m
			qi[k] += qi[k+1] * m
		}
	}
	er, ei := f.exponential(m, 0)
	scale, size := 1.0, 0.0
	for i := range n {
		qr[i], qi[i] = (qr[i]*er-qi[i]*ei)*scale, (qr[i]*ei+qi[i]*er)*scale
		scale *= h
	}
	// The size bound: Σ |c[k]| (m+h)^k e^{σm}.
	for k, power := 0, 1.0; k < n; k++ {
		size += f.size[k] * power
		power *= m + h
	}
	size *= math.Exp(f.sigmaUpper*m) * (1 + 4096*unit)
	zr, zi := f.sigma*h, f.omega*h
	if n == 1 {
		cr, ci := qr[0], qi[0]
		out.a[0] += cr
		for k := 1; k <= panelOrder; k++ {
			cr, ci = (cr*zr-ci*zi)/float64(k), (cr*zi+ci*zr)/float64(k)
			out.a[k] += cr
		}
	} else {
		for i := range n {
			cr, ci := qr[i], qi[i]
			out.a[i] += cr
			for k := 1; i+k <= panelOrder; k++ {
				cr, ci = (cr*zr-ci*zi)/float64(k), (cr*zi+ci*zr)/float64(k)
				out.a[i+k] += cr
			}
		}
	}
	z := f.rate * h
	out.addRest(size, z, n)
	// The rounding errors of coefficient k, relative to z^k/k! and its like, count
	// k-fold in the derivative: of Σ z^k/k! that is z times the sum, of x^i times
	// it i times more.
	rounding := (panelUnits + 8*float64(n) + f.phaseUnits(m)) * unit * math.Exp(z) * size
	weight := z + float64(n-1)
	out.err += rounding + leastBound
	out.slope += rounding*weight + leastBound
	out.bend += rounding*weight*(weight+1) + leastBound
}

// addRest adds what is cut off after panelOrder of a term of the given size
// bound and number of powers: the derivative of Σ_{k>K} z^k x^k/k! is z times
// the sum from K on, and x^i in front of it adds i times the sum.
func (p *model) addRest(size, z float64, n int) {
	if z == 0 {
		return
	}
	tail, before, second := expTail(z, panelOrder-n+1), expTail(z, panelOrder-n), expTail(z, panelOrder-n-1)
	i := float64(n - 1)
	p.err += size * tail
	p.slope += size * (z*before + i*tail) * (1 + 8*unit)
	p.bend += size * (z*z*second + 2*i*z*before + i*i*tail) * (1 + 8*unit)
}

// expTail bounds Σ_{k>n} z^k/k! for 0 ≤ z ≤ panelPhase: the first term over
// 1 − z/(n+2).
func expTail(z float64, n int) float64 {
	t := 1.0
	for k := 1; k <= n+1; k++ {
		t *= z / float64(k)
	}
	return t / (1 - z/float64(n+2)) * (1 + 64*unit)
}

// interval is the numbers from lo to hi.
type interval struct{ lo, hi float64 }

func (v interval) neg() interval { return interval{-v.hi, -v.lo} }

func (v interval) add(w interval) interval { return interval{v.lo + w.lo, v.hi + w.hi}.outward() }

func (v interval) hull(w interval) interval {
	return interval{math.Min(v.lo, w.lo), math.Max(v.hi, w.hi)}
}

// outward makes room for the rounding of the ends themselves.
func (v interval) outward() interval {
	return interval{math.Nextafter(v.lo, math.Inf(-1)), math.Nextafter(v.hi, math.Inf(1))}
}

var everything = interval{math.Inf(-1), math.Inf(1)}

// enclosure is bounds of a value and of its first two derivatives with respect
// to x. Slack is how much of the width of the value is error of the model:
// cutting the panel does not make it smaller.
type enclosure struct {
	interval
	slope, bend interval
	slack       float64
}

// on encloses the model for x in [u, v] ⊂ [−1, 1]. With x = c + w·y the
// coefficients of y are those of a Taylor shift; the rounding errors of the
// shift are below 2·panelOrder units of Σ|a|, because |c|+w ≤ 1, and those of
// the sums below panelOrder more.
func (p *model) on(u, v float64) enclosure {
	if p.err == 0 && p.a == [panelOrder + 1]float64{} {
		return enclosure{} // nothing is there at all
	}
	c, w := (u+v)/2, (v-u)/2
	b := p.a
	n := panelOrder
	sum := 0.0
	for n > 0 && b[n] == 0 {
		n--
	}
	for i := 0; i <= n; i++ {
		sum += math.Abs(p.a[i])
	}
	if c != 0 {
		for i := 0; i <= n; i++ {
			for k := n - 1; k >= i; k-- {
				b[k] += b[k+1] * c
			}
		}
	}
	var spread, slope, bend float64
	scale := w
	for k := 1; k <= n; k++ {
		m := math.Abs(b[k]) * scale
		spread += m
		if k > 1 {
			slope += float64(k) * m / w
		}
		if k > 2 {
			bend += float64(k*(k-1)) * m / (w * w)
		}
		if scale *= w; scale == 0 {
			break
		}
	}
	// Coefficient k counts k-fold in the derivative, with its rounding errors.
	first, second := p.weighted(n)
	rest := p.err + 4*panelOrder*unit*sum
	slope += p.slope + 4*panelOrder*unit*first
	bend += p.bend + 4*panelOrder*unit*second
	around := func(mid, rad float64) interval { return interval{mid - rad, mid + rad}.outward() }
	return enclosure{around(b[0], spread+rest), around(b[1], slope), around(2*b[2], bend), 2 * rest}
}

// combineModels is Σ signs[i]·models[i]. The additions are exact to a unit of the
// coefficients each, which the bounds take up.
func combineModels(models []model, signs []int) *model {
	var out model
	var total, first, second float64
	for i := range models {
		if signs[i] == 0 {
			continue
		}
		p := &models[i]
		for k, a := range p.a {
			out.a[k] += float64(signs[i]) * a
			total += math.Abs(a)
			first += float64(k) * math.Abs(a)
			second += float64(k*(k-1)) * math.Abs(a)
		}
		out.err += p.err
		out.slope += p.slope
		out.bend += p.bend
	}
	roundings := 2 * float64(len(models)) * unit
	out.err += roundings * total
	out.slope += roundings * first
	out.bend += roundings * second
	return &out
}

// weighted is Σ k·|a[k]| and Σ k(k−1)·|a[k]|.
func (p *model) weighted(n int) (first, second float64) {
	for k := 1; k <= n; k++ {
		first += float64(k) * math.Abs(p.a[k])
		second += float64(k*(k-1)) * math.Abs(p.a[k])
	}
	return first, second
}

// enclose applies the curve's operations to the enclosures of its leaves, which
// are used up in order.
func (c *Curve) enclose(leaves []enclosure) enclosure {
	e, _ := c.encloseNext(leaves)
	return e
}

func (c *Curve) encloseNext(leaves []enclosure) (enclosure, []enclosure) {
	if c.op == opLeaf {
		return leaves[0], leaves[1:]
	}
	x, rest := c.args[0].encloseNext(leaves)
	switch c.op {
	case opNegate:
		return x.negated(), rest
	case opAbs:
		return x.abs(), rest
	}
	y, rest := c.args[1].encloseNext(rest)
	switch c.op {
	case opLeast:
		return x.least(y), rest
	case opGreatest:
		return x.negated().least(y.negated()).negated(), rest
	}
	return enclosure{x.add(y.interval), x.slope.add(y.slope), x.bend.add(y.bend), x.slack + y.slack}, rest
}

func (e enclosure) negated() enclosure {
	return enclosure{e.neg(), e.slope.neg(), e.bend.neg(), e.slack}
}

func (e enclosure) abs() enclosure {
	switch {
	case e.lo >= 0:
		return e
	case e.hi <= 0:
		return e.negated()
	}
	return enclosure{interval{0, math.Max(-e.lo, e.hi)}, e.slope.hull(e.slope.neg()), everything, e.slack}
}

func (e enclosure) least(f enclosure) enclosure {
	switch {
	case e.hi < f.lo:
		return e
	case f.hi < e.lo:
		return f
	}
	return enclosure{interval{math.Min(e.lo, f.lo), math.Min(e.hi, f.hi)}, e.slope.hull(f.slope), everything, math.Max(e.slack, f.slack)}
}

// crude encloses every leaf on [a, b] by the sizes of its terms; b may be
// infinite. Nothing is said about derivatives.
func (st *stage) crude(c *Curve, a, b float64) enclosure {
	leaves := make([]enclosure, len(st.floats))
	for i, x := range st.floats {
		leaves[i] = x.crude(a, b)
	}
	return c.enclose(leaves)
}

// crude bounds the sum on [a, b] by the sizes of its terms, real ones of degree
// 0 by their monotone course.
func (x *floatSum) crude(a, b float64) enclosure {
	span, grouped := x.together(a, b)
	lo, hi := span.lo, span.hi
	for i := range x.terms {
		f := &x.terms[i]
		if grouped != nil && grouped[i] {
			continue
		}
		if !f.real || len(f.re) > 1 {
			s := f.bound(a, b)
			lo, hi = lo-s, hi+s
			continue
		}
		s := []float64{f.re[0] * powerExp(a, 0, f.sigma), f.re[0] * powerExp(b, 0, f.sigma)}
		if f.zero {
			s[1] = s[0]
		}
		slack := (math.Abs(s[0])+math.Abs(s[1]))*4096*unit + leastBound
		if f.zero {
			slack = math.Abs(s[0]) * 4 * unit
		}
		lo += math.Min(s[0], s[1]) - slack
		hi += math.Max(s[0], s[1]) + slack
	}
	pad := (math.Abs(lo) + math.Abs(hi)) * 4 * unit * float64(len(x.terms)+1)
	if math.IsNaN(lo) || math.IsNaN(hi) {
		return enclosure{everything, everything, everything, 0}
	}
	return enclosure{interval{lo - pad, hi + pad}, everything, everything, 0}
}

// ballModel is the model of a sum whose terms cancel: the coefficients are
// computed with balls and only then rounded to float64.
func (x *sum) ballModel(m, h float64) model {
	var out model
	at := number.BallFromFloat64(m, refinePrecision)
	half := number.BallFromFloat64(h, refinePrecision)
	total := make([]number.Ball, panelOrder+1)
	for i := range x.terms {
		t := &x.terms[i]
		n := len(t.c)
		q := append([]number.ComplexBall(nil), t.c...)
		for i := range n {
			for k := n - 2; k >= i; k-- {
				q[k] = q[k].Add(q[k+1].MulBall(at))
			}
		}
		e := t.pole.p.MulBall(at).Exp()
		if !t.pole.real {
			e = e.MulPow2(1)
		}
		scale := number.BallFromInt(1, refinePrecision)
		z := t.pole.p.MulBall(half)
		size := 0.0
		for i := range n {
			c := q[i].Mul(e).MulBall(scale)
			size += upperFloat(c.Abs())
			total[i] = total[i].Add(c.Re)
			for k := 1; i+k <= panelOrder; k++ {
				c = c.Mul(z).MulRat(big.NewRat(1, int64(k)))
				total[i+k] = total[i+k].Add(c.Re)
			}
			scale = scale.Mul(half)
		}
		if !t.pole.zero {
			out.addRest(size*(1+64*unit), upperFloat(z.Abs()), n)
		}
	}
	for k, b := range total {
		out.a[k] = b.MidFloat64()
		lost := upperFloat(b.Sub(number.BallFromFloat64(out.a[k], refinePrecision)).Abs())
		out.err += lost
		out.slope += float64(k) * lost
		out.bend += float64(k*(k-1)) * lost
	}
	return out
}
