package exact

import (
	"math"
	"math/big"
)

// intEntry is an entry g + s·c with integers; nil stands for zero.
type intEntry struct {
	col  int
	g, c *big.Int
}

// intPencil is a pencil scaled to integers: row i was multiplied by rowScale[i],
// column j by colScale[j], and s replaced by s'·10^exponent.
type intPencil struct {
	rows               [][]intEntry
	rowScale, colScale []*big.Rat
	exponent           int
}

// scaled returns the integer form of p with small numbers.
func (p *Pencil) scaled() *intPencil {
	n := p.Size()
	q := &intPencil{
		rows:     make([][]intEntry, n),
		rowScale: make([]*big.Rat, n),
		colScale: make([]*big.Rat, n),
		exponent: p.timeScale(),
	}
	t := powerOfTen(q.exponent)
	colGCD := make([]*big.Int, n)
	var scaledC big.Rat
	for i, r := range p.rows {
		// Over the common denominator of the row, without common factor.
		den, num := big.NewInt(1), new(big.Int)
		row := make([]intEntry, 0, len(r))
		cs := make([]big.Rat, len(r))
		for k, e := range r {
			if e.C.Sign() != 0 {
				cs[k].Set(scaledC.Mul(e.C, t))
			}
			lcmInto(den, e.G.Denom())
			lcmInto(den, cs[k].Denom())
		}
		for k, e := range r {
			v := intEntry{col: e.Col, g: overDenominator(e.G, den), c: overDenominator(&cs[k], den)}
			if v.g != nil || v.c != nil {
				gcdInto(num, v.g)
				gcdInto(num, v.c)
				row = append(row, v)
			}
		}
		if num.Sign() == 0 {
			num.SetInt64(1)
		}
		q.rowScale[i] = new(big.Rat).SetFrac(den, num)
		for k := range row {
			row[k].divide(num)
			if colGCD[row[k].col] == nil {
				colGCD[row[k].col] = new(big.Int)
			}
			gcdInto(colGCD[row[k].col], row[k].g)
			gcdInto(colGCD[row[k].col], row[k].c)
		}
		q.rows[i] = row
	}
	for j, g := range colGCD {
		if g == nil {
			g = big.NewInt(1)
		}
		colGCD[j] = g
		q.colScale[j] = new(big.Rat).SetFrac(bigOne, g)
	}
	for _, row := range q.rows {
		for k := range row {
			row[k].divide(colGCD[row[k].col])
		}
	}
	return q
}

// divide divides an entry by a common factor.
func (e *intEntry) divide(g *big.Int) {
	if isOne(g) {
		return
	}
	if e.g != nil {
		e.g.Quo(e.g, g)
	}
	if e.c != nil {
		e.c.Quo(e.c, g)
	}
}

// overDenominator returns r·den, nil for zero; den is a multiple of r's
// denominator.
func overDenominator(r *big.Rat, den *big.Int) *big.Int {
	if r.Sign() == 0 {
		return nil
	}
	v := new(big.Int).Set(den)
	if !isOne(r.Denom()) {
		v.Quo(v, r.Denom())
	}
	return v.Mul(v, r.Num())
}

// lcmInto sets a to the least common multiple of a and b.
func lcmInto(a, b *big.Int) {
	if isOne(b) || a.Cmp(b) == 0 {
		return
	}
	var g big.Int
	g.GCD(nil, nil, a, b)
	if g.Cmp(b) != 0 {
		a.Mul(a, g.Quo(b, &g))
	}
}

// gcdInto sets a to gcd(a, |b|); nil is zero.
func gcdInto(a, b *big.Int) {
	if b == nil || isOne(a) {
		return
	}
	if a.Sign() == 0 {
		a.Abs(b)
		return
	}
	var t big.Int
	a.GCD(nil, nil, a, t.Abs(b))
}

// powerOfTen returns 10^e.
func powerOfTen(e int) *big.Rat {
	x := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(e, -e))), nil)
	if e < 0 {
		return new(big.Rat).SetFrac(bigOne, x)
	}
	return new(big.Rat).SetInt(x)
}

// magnitude is what the choice of the time scale looks at in one number: its
// size and its powers of 2 and 5.
type magnitude struct {
	row, col  int
	log       float64 // log2|x|
	two, five int
	reactive  bool
}

// timeScale returns the exponent k for which s = s'·10^k makes the numbers of
// the scaled pencil shortest, by the estimate of scaledBits. Only speed
// depends on it.
func (p *Pencil) timeScale() int {
	var list []magnitude
	gLo, gHi, cLo, cHi := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	for e := range p.Entries() {
		if e.G.Sign() != 0 {
			m := measure(e.G)
			m.row, m.col = e.Row, e.Col
			gLo, gHi = min(gLo, m.log), max(gHi, m.log)
			list = append(list, m)
		}
		if e.C.Sign() != 0 {
			m := measure(e.C)
			m.row, m.col, m.reactive = e.Row, e.Col, true
			cLo, cHi = min(cLo, m.log), max(cHi, m.log)
			list = append(list, m)
		}
	}
	if gLo > gHi || cLo > cHi {
		return 0
	}
	const log2Of10 = 3.3219280948873623
	lo := int(math.Floor((gLo - cHi) / log2Of10))
	hi := int(math.Ceil((gHi - cLo) / log2Of10))
	work := scaleWork{
		row2: make([]int, p.Size()), row5: make([]int, p.Size()), rowMax: make([]float64, p.Size()),
		col2: make([]int, p.Size()), col5: make([]int, p.Size()),
	}
	const candidates = 12
	best, bestBits := 0, math.Inf(1)
	for {
		step := max(1, (hi-lo)/candidates)
		for k := lo; k <= hi; k += step {
			if b := work.bits(list, k); b < bestBits {
				best, bestBits = k, b
			}
		}
		if step == 1 {
			return best
		}
		lo, hi = best-step+1, best+step-1
	}
}

// measure reads size and valuations of a nonzero number.
func measure(r *big.Rat) magnitude {
	n2, n5 := valuations(r.Num())
	d2, d5 := valuations(r.Denom())
	return magnitude{log: log2Int(r.Num()) - log2Int(r.Denom()), two: n2 - d2, five: n5 - d5}
}

// valuations returns the exponents of 2 and of 5 in x ≠ 0; the second is 0
// also for long numbers, where it is not worth the division.
func valuations(x *big.Int) (two, five int) {
	two = int(x.TrailingZeroBits())
	if !x.IsUint64() && !x.IsInt64() {
		if x.BitLen() > 320 {
			return two, 0
		}
		var q, r big.Int
		q.Rsh(x, uint(two))
		for {
			quo, rem := new(big.Int).QuoRem(&q, bigFive, &r)
			if rem.Sign() != 0 {
				return two, five
			}
			q.Set(quo)
			five++
		}
	}
	var t big.Int
	v := t.Abs(x).Uint64() >> uint(two)
	for v%5 == 0 {
		v /= 5
		five++
	}
	return two, five
}

var bigFive = big.NewInt(5)

// log2Int returns log2|x| for x ≠ 0 with a relative error of the argument
// below 2^-50.
func log2Int(x *big.Int) float64 {
	k := x.BitLen()
	if k <= 63 {
		v := x.Int64()
		return math.Log2(math.Abs(float64(v)))
	}
	var t big.Int
	return math.Log2(float64(t.Rsh(t.Abs(x), uint(k-63)).Int64())) + float64(k-63)
}

// scaleWork is the memory of the estimate.
type scaleWork struct {
	row2, row5, col2, col5 []int
	rowMax                 []float64
}

// bits estimates the length of the determinant's coefficients for the time
// scale 10^k: the logarithms of the rows' largest numbers after removing
// denominators by rows and common factors by columns.
func (w *scaleWork) bits(list []magnitude, k int) float64 {
	const none = math.MaxInt / 2
	for i := range w.row2 {
		w.row2[i], w.row5[i], w.rowMax[i], w.col2[i], w.col5[i] = none, none, math.Inf(-1), none, none
	}
	for i := range list {
		m := &list[i]
		d := 0
		if m.reactive {
			d = k
		}
		w.row2[m.row] = min(w.row2[m.row], m.two+d)
		w.row5[m.row] = min(w.row5[m.row], m.five+d)
	}
	for i := range list {
		m := &list[i]
		d := 0
		if m.reactive {
			d = k
		}
		w.col2[m.col] = min(w.col2[m.col], m.two+d-w.row2[m.row])
		w.col5[m.col] = min(w.col5[m.col], m.five+d-w.row5[m.row])
	}
	const log2Of5 = 2.321928094887362
	for i := range list {
		m := &list[i]
		d := 0
		if m.reactive {
			d = k
		}
		l := m.log + float64(d)*(1+log2Of5) -
			float64(w.row2[m.row]+w.col2[m.col]) - log2Of5*float64(w.row5[m.row]+w.col5[m.col])
		w.rowMax[m.row] = max(w.rowMax[m.row], l)
	}
	sum := 0.0
	for _, l := range w.rowMax {
		if !math.IsInf(l, -1) {
			sum += l
		}
	}
	return sum
}
