package symbolic

import (
	"math/big"
	"slices"

	"portlight/analyze/network"
)

// Function is a rational function of s and the element values of one Space,
// its common factors removed.
type Function struct{ num, den poly }

// Number is the constant r; ok is false when it is no number to write into a
// formula.
func (sp *Space) Number(r *big.Rat) (f Function, ok bool) {
	const most = 9999
	if !r.Num().IsInt64() || magnitude(r.Num().Int64()) > most || !r.Denom().IsInt64() || r.Denom().Int64() > most {
		return f, false
	}
	return Function{constant(r.Num().Int64()), constant(r.Denom().Int64())}, true
}

// Variable is the function s.
func (sp *Space) Variable() Function { return Function{symbolPoly(sPlace), constant(1)} }

// Add returns f + g.
func (sp *Space) Add(f, g Function) Function {
	return sp.reduced(sp.add(sp.mul(f.num, g.den), sp.mul(g.num, f.den)), sp.mul(f.den, g.den))
}

// Multiply returns f·g.
func (sp *Space) Multiply(f, g Function) Function {
	a, b := sp.reduced(f.num, g.den), sp.reduced(g.num, f.den)
	return sp.reduced(sp.mul(a.num, b.num), sp.mul(a.den, b.den))
}

// Divide returns f/g; ok is false when g is zero.
func (sp *Space) Divide(f, g Function) (quotient Function, ok bool) {
	if g.num.isZero() {
		return quotient, false
	}
	return sp.Multiply(f, Function{g.den, g.num}), true
}

// reduced removes the common factor and makes the denominator's first
// coefficient positive. It spends the budget where the denominator is zero.
func (sp *Space) reduced(num, den poly) Function {
	if len(den) == 0 || sp.failed {
		sp.failed = true
		return Function{nil, constant(1)}
	}
	if len(num) == 0 {
		return Function{nil, constant(1)}
	}
	if g := sp.gcd(num, den); !g.isOne() && !sp.failed {
		var ok, also bool
		if num, ok = sp.quotient(num, g); ok {
			den, also = sp.quotient(den, g)
		}
		if !ok || !also {
			sp.failed = true
			return Function{nil, constant(1)}
		}
	}
	if den[0].c < 0 {
		num, den = num.neg(), den.neg()
	}
	return Function{num, den}
}

// mostElements is up to how many elements a network is looked at.
const mostElements = 500

// Transfer is the sum of some quantities of a network over the value of what
// drives it, all other independent sources at zero. Elements must have the
// same indices in all networks of a space. ok is false when there is no
// formula: something without a name takes part, or the budget is used up.
func (sp *Space) Transfer(n *network.Network, output []network.Probe, by Drive) (f Function, ok bool) {
	present := 0
	for i := range n.Elements {
		if n.Elements[i].Kind != network.Absent {
			present++
		}
	}
	if present > mostElements {
		return f, false
	}
	q := equationsOf(n, output, by)
	if q.impossible {
		return f, false
	}
	rows, columns, ok := q.relevant()
	if !ok || len(rows) > mostRelevant {
		return f, false
	}
	if len(rows) == 0 {
		return Function{nil, constant(1)}, true
	}
	num, den := sp.cramer(q, rows, columns)
	if sp.failed || den.isZero() {
		return f, false
	}
	f = sp.written(q, num, den)
	return f, !sp.failed
}

// cramer gives the quantity asked for as a ratio: with the matrix A, drive b
// and output c of the relevant equations, cᵀ·A⁻¹·b is the determinant of A
// bordered by −b and cᵀ over that of A.
func (sp *Space) cramer(q *equations, rows, columns []int) (num, den poly) {
	n := len(rows)
	place := map[int]int{}
	for k, c := range columns {
		place[c] = k
	}
	cells := make([][]poly, n+1)
	fill := func(k int, row []cell) {
		cells[k] = make([]poly, n+1)
		for _, c := range row {
			if at, there := place[c.column]; there {
				cells[k][at] = sp.sum(q, c.entries)
			}
		}
	}
	for k, r := range rows {
		fill(k, q.rows[r])
		cells[k][n] = sp.sum(q, q.drive[r]).neg()
	}
	fill(n, q.output)
	d := newMinors(&sp.work, cells)
	inner := uint64(1)<<n - 1
	den = d.determinant(inner, inner)
	num = d.determinant(inner|1<<n, inner|1<<n)
	return num, den
}

// sum is the sum of some entries.
func (sp *Space) sum(q *equations, entries []entry) poly {
	var p poly
	for _, e := range entries {
		t := term{c: 1}
		if e.negative {
			t.c = -1
		}
		if e.symbol != unknownSymbol {
			x := q.quantities[e.symbol]
			t.m = unit(sp.place(x.key, x.symbol), 1)
		}
		p = sp.addScaled(p, poly{t}, term{c: 1})
	}
	return p
}

// written turns determinants into element values and s: what entered as the
// inverse of a value is multiplied out, and each value brings its power of s.
func (sp *Space) written(q *equations, num, den poly) Function {
	support := num.support().or(den.support())
	type change struct{ place, power, top int }
	var changes []change
	for _, x := range q.quantities {
		at, used := sp.places[x.key]
		if !used || !support.has(at) {
			continue
		}
		c := change{place: at, power: x.power}
		if x.inverse {
			c.top = max(num.degree(at), den.degree(at))
		}
		if x.inverse || x.power != 0 {
			changes = append(changes, c)
		}
	}
	rewrite := func(p poly) poly {
		out := make(poly, len(p))
		for i, t := range p {
			m, s := t.m, 0
			for _, c := range changes {
				k := m.power(c.place)
				if c.top > 0 {
					k = c.top - k
					m = m.without(c.place)
					m[c.place>>4] |= unit(c.place, k)[c.place>>4]
				}
				s += k * c.power
			}
			if s > 7 {
				sp.failed = true
				return nil
			}
			m, _ = m.times(unit(sPlace, s))
			out[i] = term{m, t.c}
		}
		slices.SortFunc(out, func(a, b term) int { return b.m.compare(a.m) })
		return out
	}
	num, den = rewrite(num), rewrite(den)
	if sp.failed {
		return Function{nil, constant(1)}
	}
	f := sp.reduced(num, den)
	for _, at := range f.num.support().or(f.den.support()).list() {
		if sp.symbols[at].name == "" {
			sp.failed = true
		}
	}
	return f
}
