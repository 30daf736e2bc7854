package exact

import (
	"math"
	"math/big"
	"slices"
)

// intEntry is an entry g + s·c with integers; nil stands for zero.
type intEntry struct {
	col  int
	g, c *big.Int
}

// intPencil is a pencil scaled to integers: row i was multiplied by
// rowScale[i], column j by colScale[j], and s replaced by s'·10^exponent.
type intPencil struct {
	rows               [][]intEntry
	rowScale, colScale []tenfold
	exponent           int
}

// tenfold is the rational number num/den·2^two·5^five. Numbers of networks
// are mostly short decimals; in this form scaling them is arithmetic on short
// integers. Either num and den are short, with long nil, or long holds num/den.
type tenfold struct {
	num, den  int64
	two, five int
	long      *big.Rat
}

// shortLimit bounds the short numerators and denominators, so that a product
// of two of them fits an int64.
const shortLimit = 1 << 31

// newTenfold splits a nonzero number.
func newTenfold(r *big.Rat) tenfold {
	num, den := r.Num(), r.Denom()
	if !num.IsInt64() || !den.IsInt64() || num.Int64() == math.MinInt64 {
		return longTenfold(r)
	}
	a, two, five := splitTens(num.Int64())
	b, dTwo, dFive := splitTens(den.Int64())
	return tenfold{num: a, den: b, two: two - dTwo, five: five - dFive}
}

// splitTens removes the factors 2 and 5 from v ≠ 0.
func splitTens(v int64) (rest int64, two, five int) {
	for v&1 == 0 {
		v >>= 1
		two++
	}
	for v%5 == 0 {
		v /= 5
		five++
	}
	return v, two, five
}

// longTenfold is newTenfold for long numbers. Powers of 5 are looked for only
// as far as denominators of decimals have them.
func longTenfold(r *big.Rat) tenfold {
	var t tenfold
	num, den := new(big.Int).Set(r.Num()), new(big.Int).Set(r.Denom())
	n2, d2 := num.TrailingZeroBits(), den.TrailingZeroBits()
	num.Rsh(num, n2)
	den.Rsh(den, d2)
	t.two = int(n2) - int(d2)
	t.five = removeFives(num) - removeFives(den)
	t.long = new(big.Rat).SetFrac(num, den)
	return t
}

var bigFive = big.NewInt(5)

// removeFives divides x by the powers of 5 in it and returns how many.
func removeFives(x *big.Int) int {
	count := 0
	var q, r big.Int
	for _, power := range []int{13, 1} {
		step := new(big.Int).Exp(bigFive, big.NewInt(int64(power)), nil)
		for q.QuoRem(x, step, &r); r.Sign() == 0; q.QuoRem(x, step, &r) {
			x.Set(&q)
			count += power
		}
	}
	return count
}

// rat returns the number.
func (t tenfold) rat() *big.Rat {
	r := t.long
	if r == nil {
		r = big.NewRat(t.num, t.den)
	}
	num, den := new(big.Int).Set(r.Num()), new(big.Int).Set(r.Denom())
	shiftTens(num, max(t.two, 0), max(t.five, 0))
	shiftTens(den, max(-t.two, 0), max(-t.five, 0))
	return new(big.Rat).SetFrac(num, den)
}

// shiftTens multiplies x by 2^two·5^five.
func shiftTens(x *big.Int, two, five int) {
	if five > 0 {
		x.Mul(x, new(big.Int).Exp(bigFive, big.NewInt(int64(five)), nil))
	}
	x.Lsh(x, uint(two))
}

// log returns log2 of the absolute value.
func (t tenfold) log() float64 {
	const log2Of5 = 2.321928094887362
	l := float64(t.two) + log2Of5*float64(t.five)
	if t.long != nil {
		return l + log2Int(t.long.Num()) - log2Int(t.long.Denom())
	}
	return l + math.Log2(math.Abs(float64(t.num))/float64(t.den))
}

// scaleEntry is one number of the pencil on its way to an integer.
type scaleEntry struct {
	row, col int
	reactive bool // of C
	log      float64
	tenfold
}

// scaled returns the integer form of p with small numbers, in a unit of time
// that is chosen for it.
func (p *Pencil) scaled() *intPencil { return p.toIntegers(true) }

// toIntegers is scaled with or without another unit of time.
func (p *Pencil) toIntegers(chooseTime bool) *intPencil {
	n := p.Size()
	count := 0
	for _, r := range p.rows {
		count += 2 * len(r)
	}
	list := make([]scaleEntry, 0, count)
	for i, r := range p.rows {
		for k := range r {
			e := &r[k]
			if e.G.Sign() != 0 {
				list = append(list, scaleEntry{row: i, col: e.Col, tenfold: newTenfold(e.G)})
			}
			if e.C.Sign() != 0 {
				list = append(list, scaleEntry{row: i, col: e.Col, reactive: true, tenfold: newTenfold(e.C)})
			}
		}
	}
	for i := range list {
		list[i].log = list[i].tenfold.log()
	}
	q := &intPencil{}
	if chooseTime {
		q.exponent = timeScale(list, n)
	}
	for i := range list {
		if list[i].reactive {
			list[i].two += q.exponent
			list[i].five += q.exponent
		}
	}
	row := func(e *scaleEntry) int { return e.row }
	col := func(e *scaleEntry) int { return e.col }
	q.rowScale = clearLines(list, n, row)
	q.colScale = clearLines(list, n, col)
	q.rows = integerRows(list, n)
	return q
}

// clearLines multiplies every row (or column, as line tells) by the positive
// number that makes its entries integers without common factor, and returns
// these numbers.
func clearLines(list []scaleEntry, n int, line func(*scaleEntry) int) []tenfold {
	scale := make([]tenfold, n)
	for i := range scale {
		scale[i] = tenfold{num: 0, den: 1, two: math.MaxInt, five: math.MaxInt}
	}
	// Short arithmetic first: the common denominator in den, then the common
	// factor of the numerators in num; 0 marks a line that needs long numbers.
	for i := range list {
		e, s := &list[i], &scale[line(&list[i])]
		s.two, s.five = min(s.two, e.two), min(s.five, e.five)
		if e.long != nil || s.den == 0 {
			s.den = 0
			continue
		}
		s.den = lcmShort(s.den, e.den)
	}
	for i := range list {
		e, s := &list[i], &scale[line(&list[i])]
		if s.den == 0 {
			continue
		}
		if v, ok := mulShort(e.num, s.den/e.den); ok {
			s.num = gcdShort(s.num, v)
		} else {
			s.den = 0
		}
	}
	long := map[int]bool{}
	for i := range scale {
		s := &scale[i]
		switch {
		case s.two == math.MaxInt: // empty
			*s = tenfold{num: 1, den: 1}
		case s.den == 0:
			long[i] = true
			s.two, s.five = -s.two, -s.five
		default:
			*s = tenfold{num: s.den, den: s.num, two: -s.two, five: -s.five}
		}
	}
	if len(long) > 0 {
		longLines(list, scale, long, line)
	}
	for i := range list {
		e, s := &list[i], &scale[line(&list[i])]
		e.two, e.five = e.two+s.two, e.five+s.five
		if s.long == nil {
			e.num, e.den = e.num*(s.num/e.den)/s.den, 1
		}
	}
	return scale
}

// longLines finds the scale of the marked lines with long integers and
// applies it to the numerators and denominators of their entries.
func longLines(list []scaleEntry, scale []tenfold, long map[int]bool, line func(*scaleEntry) int) {
	lcm, gcd := map[int]*big.Int{}, map[int]*big.Int{}
	for i := range long {
		lcm[i], gcd[i] = big.NewInt(1), new(big.Int)
	}
	for i := range list {
		e := &list[i]
		l := line(e)
		if !long[l] {
			continue
		}
		if e.long == nil {
			e.long = big.NewRat(e.num, e.den)
		}
		lcmInto(lcm[l], e.long.Denom())
	}
	for i := range list {
		if l := line(&list[i]); long[l] {
			e := &list[i]
			e.long = new(big.Rat).SetInt(overDenominator(e.long, lcm[l]))
			gcdInto(gcd[l], e.long.Num())
		}
	}
	for i := range list {
		if l := line(&list[i]); long[l] {
			e := &list[i]
			e.long.SetInt(new(big.Int).Quo(e.long.Num(), gcd[l]))
		}
	}
	for i := range long {
		scale[i].long = new(big.Rat).SetFrac(lcm[i], gcd[i])
	}
}

// lcmShort returns the least common multiple, 0 if it is not short.
func lcmShort(a, b int64) int64 {
	if b == 1 || a == b {
		return a
	}
	v, ok := mulShort(a/gcdShort(a, b), b)
	if !ok {
		return 0
	}
	return v
}

// gcdShort returns gcd(|a|, |b|).
func gcdShort(a, b int64) int64 {
	if a < 0 {
		a = -a
	}
	if b < 0 {
		b = -b
	}
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// mulShort returns a·b and whether it stayed short.
func mulShort(a, b int64) (int64, bool) {
	if max(a, -a) >= shortLimit || max(b, -b) >= shortLimit {
		return 0, false
	}
	v := a * b
	return v, max(v, -v) < shortLimit
}

// integerRows makes the rows of the integer pencil from numbers that have
// become integers.
func integerRows(list []scaleEntry, n int) [][]intEntry {
	rows := make([][]intEntry, n)
	ints := make([]big.Int, len(list))
	entries := make([]intEntry, 0, len(list))
	for i := 0; i < len(list); {
		row, start := list[i].row, len(entries)
		for ; i < len(list) && list[i].row == row; i++ {
			e, v := &list[i], &ints[i]
			e.setInt(v)
			if k := len(entries); k == start || entries[k-1].col != e.col {
				entries = append(entries, intEntry{col: e.col})
			}
			if e.reactive {
				entries[len(entries)-1].c = v
			} else {
				entries[len(entries)-1].g = v
			}
		}
		rows[row] = slices.Clip(entries[start:])
	}
	return rows
}

// setInt sets v to a number that is an integer.
func (t *tenfold) setInt(v *big.Int) {
	if t.long != nil {
		v.Set(t.long.Num())
		shiftTens(v, t.two, t.five)
		return
	}
	// 31 bits, times 5¹⁰ of 24 bits, times 2⁷.
	x, two, five := t.num, t.two, t.five
	if five <= 10 {
		for ; five > 0; five-- {
			x *= 5
		}
	}
	if two <= 7 {
		x, two = x<<two, 0
	}
	v.SetInt64(x)
	if two > 0 || five > 0 {
		shiftTens(v, two, five)
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
