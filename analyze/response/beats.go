package response

import "math"

// together bounds terms c·e^{pτ} that say more as a sum than one by one, and tells
// which ones it counts, nil where there are none.
//
// On a stretch that is short for all of a set of terms, their sum is nearly a
// straight line. On a stretch that is short for the beat of oscillations of nearly
// equal frequencies, theirs is a carrier e^{iωτ} times what is nearly a straight
// line, whose size is greatest at an end. A transient that starts a resonance has
// the size of what it ends in and the opposite sign: only together do their sizes
// say that the oscillation is small at first.
func (x *floatSum) together(a, b float64) (span interval, grouped []bool) {
	if math.IsInf(b, 1) || !(b > a) || len(x.terms) == 0 {
		return span, nil
	}
	m := a + (b-a)/2
	h := math.Nextafter(math.Max(b-m, m-a), math.Inf(1))
	g := grouping{x: x, a: a, b: b, m: m, h: h, taken: make([]bool, len(x.terms))}
	g.line()
	for i := range x.terms {
		if f := &x.terms[i]; f.oscillates() && !g.taken[i] {
			g.beat(i)
		}
	}
	if !g.any {
		return span, nil
	}
	return g.span, g.taken
}

// grouping gathers terms on [a, b], which lies within m ± h.
type grouping struct {
	x          *floatSum
	a, b, m, h float64
	taken      []bool
	any        bool
	span       interval
}

// plain tells whether the term is c·e^{pτ}, p ≠ 0.
func (f *floatTerm) plain() bool { return !f.zero && len(f.re) == 1 }

// oscillates tells whether the term is c·e^{pτ} with p off the real axis.
func (f *floatTerm) oscillates() bool { return !f.real && len(f.re) == 1 }

// apart is about |p − i·ω|.
func (f *floatTerm) apart(omega float64) float64 { return math.Hypot(f.sigma, f.omega-omega) }

// members lists the terms for which the stretch is short beside the carrier ω.
func (g *grouping) members(omega float64, fits func(*floatTerm) bool) []int {
	var out []int
	for j := range g.x.terms {
		if f := &g.x.terms[j]; !g.taken[j] && fits(f) && g.h*f.apart(omega) <= 1 {
			out = append(out, j)
		}
	}
	return out
}

func (g *grouping) take(members []int, v interval) {
	for _, j := range members {
		g.taken[j] = true
	}
	g.any = true
	g.span = g.span.add(v)
}

// line counts the terms that are slow for the stretch.
func (g *grouping) line() {
	members := g.members(0, (*floatTerm).plain)
	if len(members) == 0 || len(members) == 1 && g.x.terms[members[0]].real {
		return // one real term is known better by its monotone course
	}
	l := g.x.carried(members, 0, g.m, g.h)
	r := (math.Abs(l.slopeRe) + l.rest) * (1 + 64*unit)
	g.take(members, interval{l.re - r, l.re + r}.outward())
}

// beat counts the oscillations near the frequency of term i.
func (g *grouping) beat(i int) {
	omega := g.x.terms[i].omega
	members := g.members(omega, (*floatTerm).oscillates)
	if len(members) < 2 {
		return
	}
	l := g.x.carried(members, omega, g.m, g.h)
	ends := math.Max(math.Hypot(l.re+l.slopeRe, l.im+l.slopeIm), math.Hypot(l.re-l.slopeRe, l.im-l.slopeIm))
	size, alone := (ends+l.rest)*(1+64*unit), 0.0
	for _, j := range members {
		alone += g.x.terms[j].bound(g.a, g.b)
	}
	if size < alone {
		g.take(members, interval{-size, size})
	}
}

// straight is the line re + slopeRe·y (and im + slopeIm·y) for y from −1 to 1,
// to within rest.
type straight struct{ re, im, slopeRe, slopeIm, rest float64 }

// carried finds the line that Σ c·e^{(p−iω)τ}, turned by a constant phase, nearly
// is for τ = m + h·y. With δ = p − iω, e^{δhy} = 1 + δhy + rest, where |rest| ≤
// |δh|²/2·e^{|δh|}. The frequencies, and so the δ, are off by at most four units
// of the rates.
func (x *floatSum) carried(members []int, omega, m, h float64) straight {
	var l straight
	for _, j := range members {
		f := &x.terms[j]
		er, ei := f.exponential(m, 0)
		cr, ci := f.re[0]*er-f.im[0]*ei, f.re[0]*ei+f.im[0]*er
		dr, di := f.sigma*h, (f.omega-omega)*h
		l.re, l.im = l.re+cr, l.im+ci
		l.slopeRe, l.slopeIm = l.slopeRe+cr*dr-ci*di, l.slopeIm+cr*di+ci*dr
		size := f.bound(m, m)
		off := 4 * unit * (f.rate + omega) * h
		d := f.apart(omega)*h*(1+8*unit) + off
		units := 64 + float64(4*len(members)) + f.phaseUnits(m)
		l.rest += size * (d*d/2*math.Exp(d) + (off+units*unit)*(1+d)*math.Exp(off))
	}
	return l
}
