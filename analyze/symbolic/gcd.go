package symbolic

import (
	"math/bits"
	"slices"
)

// gcd is the greatest common divisor of two polynomials, its first coefficient
// positive. Symbols that it cannot contain are found by evaluation modulo a
// prime; the rest is Euclid's algorithm with primitive remainders, recursively
// over the symbols (W. S. Brown, Journal of the ACM 18 (1971) 478–504). With
// symbols that occur at most linearly one step of it decides.
func (w *work) gcd(p, q poly) poly {
	if len(p) == 0 || len(q) == 0 {
		if len(p) == 0 {
			p = q
		}
		if len(p) > 0 && p[0].c < 0 {
			return p.neg()
		}
		return p
	}
	if !w.spend(len(p) + len(q)) {
		return constant(1)
	}
	np, mp, p := p.content()
	nq, mq, q := q.content()
	outer := poly{{mp.common(mq), gcdInt(np, nq)}}
	inside := p.support().and(q.support())
	for {
		possible := inside
		for _, x := range inside.list() {
			if w.unshared(p, q, x) {
				possible = possible.minus(only(x))
			}
		}
		if possible.empty() || w.failed {
			return outer
		}
		// What divides p divides each of its coefficients in other symbols.
		p, q = w.within(p, possible), w.within(q, possible)
		if p.isConstant() || q.isConstant() {
			return outer
		}
		if inside = p.support().and(q.support()); inside == possible {
			break
		}
	}
	return w.mul(outer, w.euclid(p, q, w.mainSymbol(p, q, inside)))
}

// within is the greatest divisor of p in the symbols of a set alone, numbers
// and symbols that divide all of it aside.
func (w *work) within(p poly, inside set) poly {
	if p.support().minus(inside).empty() {
		return p
	}
	groups := p.groups(inside)
	slices.SortStableFunc(groups, func(a, b poly) int { return len(a) - len(b) })
	g := groups[0]
	for _, c := range groups[1:] {
		if g.isConstant() || w.failed {
			break
		}
		g = w.gcd(g, c)
	}
	_, _, g = g.content()
	return g
}

// mainSymbol is the symbol with the lowest degrees.
func (w *work) mainSymbol(p, q poly, inside set) int {
	best, least := -1, 0
	for _, x := range inside.list() {
		if d := p.degree(x) + q.degree(x); best < 0 || d < least {
			best, least = x, d
		}
	}
	return best
}

// euclid is the gcd of two polynomials without common numbers and symbols,
// both of which contain x.
func (w *work) euclid(p, q poly, x int) poly {
	cp, p := w.primitive(p, x)
	cq, q := w.primitive(q, x)
	outer := w.gcd(cp, cq)
	if p.degree(x) < q.degree(x) {
		p, q = q, p
	}
	for !w.failed {
		r := w.remainder(p, q, x)
		if len(r) == 0 {
			_, _, q = q.content()
			return w.mul(outer, q)
		}
		if r.degree(x) == 0 {
			break
		}
		p = q
		_, q = w.primitive(r, x)
	}
	return outer
}

// primitive splits p = content·rest, the content being the gcd of the
// coefficients in x.
func (w *work) primitive(p poly, x int) (content, rest poly) {
	content = w.contentIn(p, x)
	if content.isOne() {
		return content, p
	}
	rest, ok := w.quotient(p, content)
	if !ok {
		w.failed = true
		return constant(1), p
	}
	return content, rest
}

// contentIn is the gcd of p's coefficients in x.
func (w *work) contentIn(p poly, x int) poly {
	list := p.coefficients(x)
	slices.SortStableFunc(list, func(a, b poly) int { return len(a) - len(b) })
	var g poly
	for _, c := range list {
		if g = w.gcd(g, c); g.isOne() || w.failed {
			break
		}
	}
	return g
}

// remainder is a pseudo-remainder of p by q in x.
func (w *work) remainder(p, q poly, x int) poly {
	d := q.degree(x)
	lead := q.coefficients(x)[d]
	for len(p) > 0 && p.degree(x) >= d && !w.failed {
		list := p.coefficients(x)
		k := len(list) - 1
		p = w.sub(w.mul(lead, p), w.mul(w.mul(list[k], poly{{unit(x, k-d), 1}}), q))
	}
	return p
}

// prime is the modulus of evaluations: 2⁶¹ − 1.
const prime = 1<<61 - 1

func mulMod(a, b uint64) uint64 {
	high, low := bits.Mul64(a, b)
	return reduce(high<<3|low>>61) + reduce(low&prime)
}

func reduce(a uint64) uint64 {
	if a >= prime {
		return a - prime
	}
	return a
}

// sample is the value modulo the prime that a symbol is evaluated at, a fixed
// number without pattern (the finalizer of splitmix64 over its place).
func sample(place int) uint64 {
	z := uint64(place+1) * 0x9e3779b97f4a7c15
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return (z ^ z>>31) % prime
}

// samples are the powers 1, 2 and 4 of every place's value.
var samples = func() (out [places][3]uint64) {
	for place := range out {
		v := sample(place)
		for k := range out[place] {
			out[place][k] = v
			v = reduce(mulMod(v, v))
		}
	}
	return out
}()

// unshared tells that no common divisor contains x: with the other symbols
// evaluated and no leading coefficient lost, there is none with x.
func (w *work) unshared(p, q poly, x int) bool {
	a, b := w.image(p, x), w.image(q, x)
	if a[len(a)-1] == 0 || b[len(b)-1] == 0 {
		return false
	}
	for len(b) > 1 {
		a = remainderMod(a, b)
		a, b = b, a
	}
	return len(b) == 1 // zero otherwise: the last a divides both
}

// image is p with every symbol but x evaluated modulo the prime, ascending.
func (w *work) image(p poly, x int) []uint64 {
	w.spend(len(p))
	out := make([]uint64, p.degree(x)+1)
	for _, t := range p {
		v := magnitude(t.c) % prime
		for word, rest := range t.m.without(x) {
			for ; rest != 0; rest &= rest - 1 { // every bit of the exponents
				low := bits.TrailingZeros64(rest)
				v = reduce(mulMod(v, samples[16*word+15-low/4][low%4]))
			}
		}
		if t.c < 0 && v != 0 {
			v = prime - v
		}
		k := t.m.power(x)
		out[k] = reduce(out[k] + v)
	}
	return out
}

// remainderMod is a multiple of the remainder of a by b, without zeros on top.
func remainderMod(a, b []uint64) []uint64 {
	lead := b[len(b)-1]
	for len(a) >= len(b) {
		top, n := a[len(a)-1], len(a)-len(b)
		out := make([]uint64, len(a)-1)
		for i := range out {
			v := reduce(mulMod(a[i], lead))
			if i >= n {
				v = reduce(v + prime - reduce(mulMod(top, b[i-n])))
			}
			out[i] = v
		}
		for len(out) > 0 && out[len(out)-1] == 0 {
			out = out[:len(out)-1]
		}
		a = out
	}
	return a
}

// factors splits p = number·monomial·Π factor into factors that cannot be
// split any further by symbols that occur at most linearly in them: the
// factor with such a symbol is what is left of p without its content.
func (w *work) factors(p poly) (number int64, m monomial, list []poly) {
	number, m, p = p.content()
	if !p.isConstant() {
		list = w.split(p)
	}
	return number, m, list
}

func (w *work) split(p poly) []poly {
	if w.failed {
		return []poly{p}
	}
	for _, x := range p.support().list() {
		g := w.contentIn(p, x)
		_, _, g = g.content()
		if g.isConstant() || g.equal(p) {
			continue
		}
		if rest, ok := w.quotient(p, g); ok {
			return append(w.split(g), w.split(rest)...)
		}
	}
	if r, ok := w.root(p); ok {
		list := w.split(r)
		return append(list, list...)
	}
	return []poly{p}
}

// root is the square root of a polynomial where it is a polynomial: term by
// term from the top, as square roots of numbers are taken by hand.
func (w *work) root(p poly) (poly, bool) {
	first, ok := rootOfTerm(p[0])
	if !ok {
		return nil, false
	}
	r := poly{first}
	rest := w.sub(p, poly{{p[0].m, p[0].c}})
	for len(rest) > 0 && !w.failed {
		m, divides := rest[0].m.over(first.m)
		if !divides || rest[0].c%(2*first.c) != 0 || m.compare(r[len(r)-1].m) >= 0 {
			return nil, false
		}
		t := term{m, rest[0].c / (2 * first.c)}
		rest = w.addScaled(rest, r, term{t.m, -2 * t.c})
		rest = w.addScaled(rest, poly{t}, term{t.m, -t.c})
		r = append(r, t)
	}
	return r, !w.failed
}

func rootOfTerm(t term) (root term, ok bool) {
	for _, x := range t.m.support().list() {
		k := t.m.power(x)
		if k%2 != 0 {
			return root, false
		}
		root.m, _ = root.m.times(unit(x, k/2))
	}
	for root.c = 1; root.c*root.c < t.c && root.c < 1000; root.c++ {
	}
	return root, root.c*root.c == t.c
}
