package exact

// Factor is a factor of a polynomial with its multiplicity.
type Factor struct {
	Poly         Poly
	Multiplicity int
}

// SquareFree returns the square-free factorisation of p: primitive,
// pairwise coprime polynomials of degree at least 1 without repeated roots,
// in ascending multiplicity, whose product of powers is p up to a constant.
// It is empty for constants. The method is Yun's (D. Y. Y. Yun, Proceedings
// of SYMSAC 1976, 26–35).
func SquareFree(p Poly) []Factor {
	if p.Degree() < 1 {
		return nil
	}
	p = p.Primitive()
	d := p.Derivative()
	g := GCD(p, d)
	if g.Degree() == 0 {
		return []Factor{{p, 1}}
	}
	w := p.Quo(g)
	y := d.Quo(g)
	var out []Factor
	for i := 1; w.Degree() > 0; i++ {
		z := y.Sub(w.Derivative())
		f := GCD(w, z)
		if f.Degree() > 0 {
			out = append(out, Factor{f, i})
		}
		w = w.Quo(f)
		y = z.Quo(f)
	}
	return out
}

// Radical returns the square-free part of p, the primitive polynomial with
// the same roots, each simple. It is 1 for nonzero constants and 0 for 0.
func (p Poly) Radical() Poly {
	if p.IsZero() {
		return p
	}
	p = p.Primitive()
	return p.Quo(GCD(p, p.Derivative())).Primitive()
}
