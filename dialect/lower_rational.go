package dialect

import (
	"portlight/dialect/number"
)

// polynomial is a list of coefficients in ascending powers of s, without
// exactly zero leading ones; the empty list is zero.
type polynomial []number.Exact

// fraction is a rational expression in s; the denominator is not zero.
type fraction struct{ numerator, denominator polynomial }

// maxDegree bounds the degree of a value in s.
const maxDegree = 100

func constantFraction(x number.Exact) fraction {
	return fraction{polynomial{x}.trim(), polynomial{number.FromInt(1)}}
}

func (p polynomial) trim() polynomial {
	for len(p) > 0 {
		last := p[len(p)-1]
		if !last.IsExact() || last.Rat().Sign() != 0 {
			break
		}
		p = p[:len(p)-1]
	}
	return p
}

func (p polynomial) zero() bool { return len(p) == 0 }

func (p polynomial) plus(q polynomial) polynomial {
	sum := make(polynomial, max(len(p), len(q)))
	for i := range sum {
		switch {
		case i >= len(p):
			sum[i] = q[i]
		case i >= len(q):
			sum[i] = p[i]
		default:
			sum[i] = p[i].Add(q[i])
		}
	}
	return sum.trim()
}

func (p polynomial) times(q polynomial) polynomial {
	if p.zero() || q.zero() {
		return nil
	}
	product := make(polynomial, len(p)+len(q)-1)
	for i := range p {
		for j := range q {
			product[i+j] = product[i+j].Add(p[i].Mul(q[j]))
		}
	}
	return product.trim()
}

func (p polynomial) negated() polynomial {
	n := make(polynomial, len(p))
	for i := range p {
		n[i] = p[i].Neg()
	}
	return n
}

func (p polynomial) equal(q polynomial) bool {
	if len(p) != len(q) {
		return false
	}
	for i := range p {
		if !p[i].Equal(q[i]) {
			return false
		}
	}
	return true
}

func (a fraction) plus(b fraction) fraction {
	if a.denominator.equal(b.denominator) {
		return fraction{a.numerator.plus(b.numerator), a.denominator}
	}
	return fraction{
		a.numerator.times(b.denominator).plus(b.numerator.times(a.denominator)),
		a.denominator.times(b.denominator),
	}
}

func (a fraction) times(b fraction) fraction {
	return fraction{a.numerator.times(b.numerator), a.denominator.times(b.denominator)}.lowered()
}

func (a fraction) inverted() fraction { return fraction{a.denominator, a.numerator} }

// lowered takes common powers of s out of numerator and denominator.
func (a fraction) lowered() fraction {
	n := 0
	for n < len(a.numerator) && n < len(a.denominator) && exactlyZero(a.numerator[n]) && exactlyZero(a.denominator[n]) {
		n++
	}
	return fraction{a.numerator[n:], a.denominator[n:]}
}

func exactlyZero(x number.Exact) bool { return x.IsExact() && x.Rat().Sign() == 0 }

// exact is the fraction as the Description holds it.
func (a fraction) exact() *RationalIn {
	return &RationalIn{Numerator: a.numerator, Denominator: a.denominator}
}

// sane says that degree and coefficients stay within bounds.
func (a fraction) sane() bool {
	if len(a.numerator) > maxDegree || len(a.denominator) > maxDegree {
		return false
	}
	for _, p := range [...]polynomial{a.numerator, a.denominator} {
		for _, c := range p {
			if !c.InRange() {
				return false
			}
		}
	}
	return true
}

// lowering turns checked expressions into what the Description holds.
type lowering struct{ e *evaluator }

// fail reports an expression that is not of the form needed.
func (l *lowering) fail(x Expression, code Code, format string, args ...any) {
	l.e.report(x.Place(), code, format, args...)
}

// rational brings an expression in s to a quotient of polynomials.
func (l *lowering) rational(x Expression) (fraction, bool) {
	var f fraction
	ok := true
	switch x := x.(type) {
	case *Constant:
		return constantFraction(x.Value), true
	case *Variable:
		if x.Name != "s" {
			l.fail(x, "not-rational", "%s has no place in an expression in s", x.Name)
			return f, false
		}
		return fraction{polynomial{number.Exact{}, number.FromInt(1)}, polynomial{number.FromInt(1)}}, true
	case *Negate:
		if f, ok = l.rational(x.X); ok {
			f.numerator = f.numerator.negated()
		}
		return f, ok
	case *Binary:
		f, ok = l.rationalBinary(x)
	default:
		l.fail(x, "not-rational", "%s is not rational in s: sums, products, quotients and whole powers are", l.e.written(x.Place()))
		return f, false
	}
	if ok && !f.sane() {
		l.fail(x, "too-large", "this expression in s has too high a degree or too large coefficients")
		return f, false
	}
	return f, ok
}

func (l *lowering) rationalBinary(x *Binary) (fraction, bool) {
	a, ok := l.rational(x.X)
	if !ok {
		return a, false
	}
	b, ok := l.rational(x.Y)
	if !ok {
		return b, false
	}
	switch x.Op {
	case '+':
		return a.plus(b), true
	case '-':
		b.numerator = b.numerator.negated()
		return a.plus(b), true
	case '*':
		return a.times(b), true
	case '/':
		if b.numerator.zero() {
			l.fail(x.Y, "no-value", "%s is zero: division by zero", l.e.written(x.Y.Place()))
			return b, false
		}
		return a.times(b.inverted()), true
	}
	return l.rationalPower(x, a)
}

func (l *lowering) rationalPower(x *Binary, a fraction) (fraction, bool) {
	c, ok := x.Y.(*Constant)
	n := 0
	if ok {
		n, ok = smallInt(c.Value.Rat())
	}
	if !ok || n > 64 || n < -64 {
		l.fail(x.Y, "not-rational", "%s is no whole exponent", l.e.written(x.Y.Place()))
		return a, false
	}
	if n < 0 {
		if a.numerator.zero() {
			l.fail(x.X, "no-value", "%s is zero: division by zero", l.e.written(x.X.Place()))
			return a, false
		}
		a, n = a.inverted(), -n
	}
	if (len(a.numerator)+len(a.denominator))*n > 4*maxDegree {
		l.fail(x, "too-large", "this expression in s has too high a degree")
		return a, false
	}
	power := constantFraction(number.FromInt(1))
	for range n {
		power = power.times(a)
	}
	return power, true
}

// controls brings the law of a dependent source to a sum of coefficients times
// quantities.
func (l *lowering) controls(x Expression) ([]Control, bool) {
	terms, ok := l.linear(x)
	if !ok {
		return nil, false
	}
	var list []Control
	for _, t := range terms {
		if t.quantity == nil {
			if t.factor.numerator.zero() {
				continue
			}
			l.fail(x, "not-linear", "%s mixes quantities of the network with a value of its own: write two sources", l.e.written(x.Place()))
			return nil, false
		}
		if !t.factor.numerator.zero() {
			list = append(list, Control{Coefficient: *t.factor.exact(), Probe: *t.quantity})
		}
	}
	return list, true
}

// linearTerm is factor times quantity, or factor alone.
type linearTerm struct {
	factor   fraction
	quantity *Probe
}

// maxTerms bounds the number of terms that a sum may spread to.
const maxTerms = 2000

func (l *lowering) linear(x Expression) ([]linearTerm, bool) {
	switch x := x.(type) {
	case *Quantity:
		return []linearTerm{{constantFraction(number.FromInt(1)), &x.Probe}}, true
	case *Negate:
		terms, ok := l.linear(x.X)
		return scaleTerms(terms, constantFraction(number.FromInt(-1))), ok
	case *Binary:
		return l.linearBinary(x)
	case *Variable:
		if x.Name == "t" {
			l.fail(x, "not-linear", "a dependent source is linear with constant coefficients: t has no place beside quantities")
			return nil, false
		}
	case *Call:
		l.fail(x, "not-linear", "%s has no place in a dependent source: it is linear in v[…] and i[…]", l.e.written(x.Place()))
		return nil, false
	}
	f, ok := l.rational(x)
	return []linearTerm{{factor: f}}, ok
}

func scaleTerms(terms []linearTerm, by fraction) []linearTerm {
	scaled := make([]linearTerm, len(terms))
	for i, t := range terms {
		scaled[i] = linearTerm{t.factor.times(by), t.quantity}
	}
	return scaled
}

func (l *lowering) linearBinary(x *Binary) ([]linearTerm, bool) {
	if x.Op == '^' {
		f, ok := l.rational(x)
		return []linearTerm{{factor: f}}, ok
	}
	a, ok := l.linear(x.X)
	if !ok {
		return nil, false
	}
	b, ok := l.linear(x.Y)
	if !ok {
		return nil, false
	}
	switch x.Op {
	case '-':
		b = scaleTerms(b, constantFraction(number.FromInt(-1)))
		fallthrough
	case '+':
		return l.collect(x, append(append([]linearTerm(nil), a...), b...))
	case '/':
		f, plain := plainFactor(b)
		if !plain {
			l.fail(x.Y, "not-linear", "%s divides by a quantity of the network: a dependent source is linear in v[…] and i[…]", l.e.written(x.Place()))
			return nil, false
		}
		if f.numerator.zero() {
			l.fail(x.Y, "no-value", "%s is zero: division by zero", l.e.written(x.Y.Place()))
			return nil, false
		}
		return l.collect(x, scaleTerms(a, f.inverted()))
	}
	if f, plain := plainFactor(b); plain {
		return l.collect(x, scaleTerms(a, f))
	}
	if f, plain := plainFactor(a); plain {
		return l.collect(x, scaleTerms(b, f))
	}
	l.fail(x, "not-linear", "%s multiplies two quantities of the network: a dependent source is linear in v[…] and i[…]", l.e.written(x.Place()))
	return nil, false
}

// plainFactor is the value of terms without quantities.
func plainFactor(terms []linearTerm) (fraction, bool) {
	sum := fraction{nil, polynomial{number.FromInt(1)}}
	for _, t := range terms {
		if t.quantity != nil {
			return sum, false
		}
		sum = sum.plus(t.factor)
	}
	return sum, true
}

// collect adds the coefficients of equal quantities and keeps within bounds.
func (l *lowering) collect(x Expression, terms []linearTerm) ([]linearTerm, bool) {
	if len(terms) > maxTerms {
		l.fail(x, "too-large", "this source follows too many quantities")
		return nil, false
	}
	var list []linearTerm
	index := map[probeKey]int{}
	for _, t := range terms {
		key := keyOf(t.quantity)
		if i, seen := index[key]; seen {
			list[i].factor = list[i].factor.plus(t.factor)
			t = list[i]
		} else {
			index[key] = len(list)
			list = append(list, t)
		}
		if !t.factor.sane() {
			l.fail(x, "too-large", "this expression in s has too high a degree or too large coefficients")
			return nil, false
		}
	}
	return list, true
}

// probeKey tells quantities apart.
type probeKey struct {
	letter            byte
	of                ProbeOf
	plus, minus, part int
	terminal          string
	port              int
	inflow            *Probe // currents into uses are not merged
}

func keyOf(p *Probe) probeKey {
	if p == nil {
		return probeKey{}
	}
	key := probeKey{p.Letter, p.Of, p.Plus, p.Minus, p.Part, p.Terminal, p.Port, nil}
	if p.Of == OfInflow {
		key.inflow = p
	}
	return key
}
