package response

import "math"

// beats bounds oscillations of nearly equal frequencies together: on a stretch
// that is short for their beat, Σ c·e^{pτ} is a carrier e^{iωτ} times what is
// nearly a straight line in τ, whose size is greatest at an end. A transient
// that starts a resonance has the size of what it ends in and the opposite sign:
// only together do their sizes say that the oscillation is small at first. It
// returns the bound and which terms it counts, nil where there are none.
func (x *floatSum) beats(a, b float64) (together float64, grouped []bool) {
	if x.oscillations() < 2 || math.IsInf(b, 1) || !(b > a) {
		return 0, nil
	}
	m := a + (b-a)/2
	h := math.Nextafter(math.Max(b-m, m-a), math.Inf(1))
	for i := range x.terms {
		if !x.terms[i].oscillates() || grouped != nil && grouped[i] {
			continue
		}
		var members []int
		for j := i; j < len(x.terms); j++ {
			f := &x.terms[j]
			if f.oscillates() && (grouped == nil || !grouped[j]) && h*f.apart(&x.terms[i]) <= 1 {
				members = append(members, j)
			}
		}
		if len(members) < 2 {
			continue
		}
		size, alone := x.carried(members, m, h), 0.0
		for _, j := range members {
			alone += x.terms[j].bound(a, b)
		}
		if size >= alone {
			continue
		}
		if grouped == nil {
			grouped = make([]bool, len(x.terms))
		}
		for _, j := range members {
			grouped[j] = true
		}
		together += size
	}
	return together, grouped
}

// oscillates tells whether the term is c·e^{pτ} with p off the real axis.
func (f *floatTerm) oscillates() bool { return !f.real && len(f.re) == 1 }

// oscillations counts such terms.
func (x *floatSum) oscillations() int {
	n := 0
	for i := range x.terms {
		if x.terms[i].oscillates() {
			n++
		}
	}
	return n
}

// apart is about |p − i·ω| for the frequency ω of another term.
func (f *floatTerm) apart(carrier *floatTerm) float64 {
	return math.Hypot(f.sigma, f.omega-carrier.omega)
}

// carried bounds |Σ c·e^{pτ}| over the members for |τ − m| ≤ h. With δ = p − iω,
// ω that of the first member, e^{δ(τ−m)} = 1 + δ(τ−m) + rest, where
// |rest| ≤ |δh|²/2·e^{|δh|}. The frequencies, and so the δ, are off by at most four
// units of the rates.
func (x *floatSum) carried(members []int, m, h float64) float64 {
	carrier := &x.terms[members[0]]
	var re, im, slopeRe, slopeIm, rest float64
	for _, j := range members {
		f := &x.terms[j]
		er, ei := f.exponential(m, 0)
		cr, ci := f.re[0]*er-f.im[0]*ei, f.re[0]*ei+f.im[0]*er
		dr, di := f.sigma*h, (f.omega-carrier.omega)*h
		re, im = re+cr, im+ci
		slopeRe, slopeIm = slopeRe+cr*dr-ci*di, slopeIm+cr*di+ci*dr
		size := f.bound(m, m)
		d := f.apart(carrier) * h
		off := 4 * unit * (f.rate + carrier.rate) * h
		d = d*(1+8*unit) + off
		units := 64 + float64(4*len(members)) + f.phaseUnits(m)
		rest += size * (d*d/2*math.Exp(d) + (off+units*unit)*(1+d)*math.Exp(off))
	}
	ends := math.Max(math.Hypot(re+slopeRe, im+slopeIm), math.Hypot(re-slopeRe, im-slopeIm))
	return (ends + rest) * (1 + 64*unit)
}
