package exact

import (
	"context"
	"errors"
	"math/big"
	"sync"
)

// Prepared is a pencil made ready for questions: scaled to integers and split
// into pieces that can be solved one after the other. It keeps what it has
// computed, and may be used by several goroutines at once.
type Prepared struct {
	pencil *Pencil
	scaled *intPencil
	form   *blocks // nil: singular by its pattern alone

	mu       sync.Mutex
	dets     []*Poly // determinants of the blocks in scaled time, nil: not yet
	singular bool    // some block was found singular
	whole    *Poly   // det(G + s·C), nil: not yet
}

// Prepare makes the pencil ready for questions. It finds the structure only,
// so that nothing is computed which is not asked for. The error is the
// context's.
func (p *Pencil) Prepare(ctx context.Context) (*Prepared, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	f := p.structure(p.scaled())
	return f, ctx.Err()
}

// structure splits the scaled form of p into pieces.
func (p *Pencil) structure(scaled *intPencil) *Prepared {
	f := &Prepared{pencil: p, scaled: scaled}
	count := 0
	for _, r := range scaled.rows {
		count += len(r)
	}
	pattern := make([][]int, p.Size())
	all := make([]int, 0, count)
	for i, r := range scaled.rows {
		start := len(all)
		for _, e := range r {
			all = append(all, e.col)
		}
		pattern[i] = all[start:len(all):len(all)]
	}
	f.form = blockTriangular(pattern)
	f.singular = f.form == nil
	if f.form != nil {
		f.dets = make([]*Poly, len(f.form.end))
	}
	return f
}

// Blocks returns the number of pieces that the pencil falls into: diagonal
// blocks of its block triangular form. It is 0 for a pencil whose pattern
// alone makes it singular.
func (f *Prepared) Blocks() int {
	if f.form == nil {
		return 0
	}
	return len(f.form.end)
}

// Determinant returns det(G + s·C) with its sign: the zero polynomial if the
// pencil is singular for every s.
func (f *Prepared) Determinant() Poly {
	d, err := f.DeterminantContext(context.Background())
	if err != nil {
		panic("exact: determinant: " + err.Error())
	}
	return d
}

// DeterminantContext is Determinant with a way to stop it; the error is the
// context's.
func (f *Prepared) DeterminantContext(ctx context.Context) (Poly, error) {
	f.mu.Lock()
	whole, singular := f.whole, f.singular
	f.mu.Unlock()
	if singular {
		return Poly{}, ctx.Err()
	}
	if whole != nil {
		return *whole, nil
	}
	dets, err := f.allDeterminants(ctx)
	if err != nil || dets == nil {
		return Poly{}, err
	}
	d := f.inTime(productOf(dets), f.factor())
	f.mu.Lock()
	f.whole = &d
	f.mu.Unlock()
	return d, nil
}

// BlockDeterminants returns polynomials whose product is the determinant: a
// constant with the sign, then the determinant of every piece. For a
// singular pencil it returns the zero polynomial alone.
func (f *Prepared) BlockDeterminants(ctx context.Context) ([]Poly, error) {
	dets, err := f.allDeterminants(ctx)
	if err != nil {
		return nil, err
	}
	if dets == nil {
		return []Poly{{}}, nil
	}
	out := []Poly{Constant(f.factor())}
	for _, d := range dets {
		out = append(out, f.inTime(d, big.NewRat(1, 1)))
	}
	return out, nil
}

// allDeterminants returns the determinants of all blocks in scaled time, nil
// for a singular pencil.
func (f *Prepared) allDeterminants(ctx context.Context) ([]Poly, error) {
	if f.form == nil {
		return nil, ctx.Err()
	}
	all := make([]bool, len(f.dets))
	for b := range f.dets {
		all[b] = true
	}
	dets, err := f.blockDeterminants(ctx, all)
	if errors.Is(err, errSingular) {
		return nil, nil
	}
	return dets, err
}

// factor returns det(G + s·C) / Π block determinants.
func (f *Prepared) factor() *big.Rat {
	num, den := big.NewInt(1), big.NewInt(1)
	two, five := 0, 0
	var t big.Int
	for _, side := range [][]tenfold{f.scaled.rowScale, f.scaled.colScale} {
		for i := range side {
			r := &side[i]
			two, five = two+r.two, five+r.five
			if r.long != nil {
				num.Mul(num, r.long.Num())
				den.Mul(den, r.long.Denom())
				continue
			}
			if r.num != 1 {
				num.Mul(num, t.SetInt64(r.num))
			}
			if r.den != 1 {
				den.Mul(den, t.SetInt64(r.den))
			}
		}
	}
	shiftTens(num, max(two, 0), max(five, 0))
	shiftTens(den, max(-two, 0), max(-five, 0))
	if f.form.negative {
		den.Neg(den)
	}
	return new(big.Rat).SetFrac(den, num)
}

// inTime returns scale·d(s/10^exponent): a polynomial of the scaled system in
// the pencil's own s.
func (f *Prepared) inTime(d Poly, scale *big.Rat) Poly {
	n := d.Degree()
	if n < 0 {
		return d
	}
	e := f.scaled.exponent
	ten := powerOfTen(max(e, -e)).Num()
	c := newInts(n + 1)
	power := new(big.Int).Set(scale.Num())
	// The numerators get 10^(e·(n−i)) or 10^(−e·i).
	for k := range c {
		i := k
		if e > 0 {
			i = n - k
		}
		c[i].Mul(d.c[i], power)
		if k < n && e != 0 {
			power.Mul(power, ten)
		}
	}
	den := new(big.Int).Mul(d.denominator(), scale.Denom())
	if e > 0 {
		den.Mul(den, ten.Exp(ten, big.NewInt(int64(n)), nil))
	}
	return makePoly(c, den)
}

// productOf multiplies polynomials pairwise, so that factors of like size
// meet.
func productOf(list []Poly) Poly {
	list = append([]Poly(nil), list...)
	for len(list) > 1 {
		k := 0
		for i := 0; i < len(list); i += 2 {
			if i+1 < len(list) {
				list[k] = list[i].Mul(list[i+1])
			} else {
				list[k] = list[i]
			}
			k++
		}
		list = list[:k]
	}
	if len(list) == 0 {
		return PolyFromInt64s(1)
	}
	return list[0]
}

// blockDeterminants returns the determinants of the chosen blocks in scaled
// time and zero polynomials for the others, or errSingular.
func (f *Prepared) blockDeterminants(ctx context.Context, chosen []bool) ([]Poly, error) {
	out := make([]Poly, len(chosen))
	for b, want := range chosen {
		if !want {
			continue
		}
		f.mu.Lock()
		d := f.dets[b]
		f.mu.Unlock()
		if d == nil {
			y := f.system([]int{b}, nil, nil)
			dets, _, err := y.solve(ctx, []bool{true})
			if err != nil {
				return nil, f.note(err)
			}
			d = &dets[0]
			f.keep(b, d)
		}
		out[b] = *d
	}
	return out, nil
}

// note remembers that a singular block was met.
func (f *Prepared) note(err error) error {
	if errors.Is(err, errSingular) {
		f.mu.Lock()
		f.singular = true
		f.mu.Unlock()
	}
	return err
}

func (f *Prepared) keep(b int, d *Poly) {
	f.mu.Lock()
	f.dets[b] = d
	f.mu.Unlock()
}

// border is a border row or column of a system: integers times 1/scale.
type border struct {
	at    []int // positions
	value []*big.Int
	scale *big.Rat
}

// rhsBorder scales rhs for the positions of a system: scale·R·rhs.
func (f *Prepared) rhsBorder(v Vector, position []int) border {
	return makeBorder(v, f.scaled.rowScale, position)
}

// outBorder scales out for the positions of a system: scale·K·out.
func (f *Prepared) outBorder(v Vector, position []int) border {
	return makeBorder(v, f.scaled.colScale, position)
}

func makeBorder(v Vector, scale []tenfold, position []int) border {
	sum := map[int]*big.Rat{}
	for _, c := range v {
		if c.Value == nil || position[c.Index] < 0 {
			continue
		}
		t := new(big.Rat).Mul(c.Value, scale[c.Index].rat())
		if old := sum[position[c.Index]]; old != nil {
			t.Add(t, old)
		}
		sum[position[c.Index]] = t
	}
	den, num := big.NewInt(1), new(big.Int)
	for _, r := range sum {
		lcmInto(den, r.Denom())
	}
	var b border
	for at, r := range sum {
		if x := overDenominator(r, den); x != nil {
			b.at = append(b.at, at)
			b.value = append(b.value, x)
			gcdInto(num, x)
		}
	}
	if num.Sign() == 0 {
		num.SetInt64(1)
	}
	for _, x := range b.value {
		x.Quo(x, num)
	}
	b.scale = new(big.Rat).SetFrac(den, num)
	return b
}

// system returns the blocks of the list, ascending, with the borders that
// rhs and out select on them.
func (f *Prepared) system(list []int, rhs, out []border) *system {
	y := &system{rhs: len(rhs), outs: len(out)}
	colAt := make([]int, f.pencil.Size()) // position plus one
	var rows []int
	for _, b := range list {
		start := 0
		if b > 0 {
			start = f.form.end[b-1]
		}
		for k := start; k < f.form.end[b]; k++ {
			rows = append(rows, f.form.rows[k])
			colAt[f.form.cols[k]] = len(rows)
		}
		y.end = append(y.end, len(rows))
	}
	y.n = len(rows)
	y.rows = make([][]intEntry, y.n+y.outs)
	borders := make([]int, y.n) // border entries by row
	count := 0
	for _, b := range rhs {
		for _, at := range b.at {
			borders[at]++
		}
		count += len(b.at)
	}
	for _, r := range rows {
		count += len(f.scaled.rows[r])
	}
	entries := make([]intEntry, 0, count)
	for i, r := range rows {
		start := len(entries)
		for _, e := range f.scaled.rows[r] {
			if at := colAt[e.col]; at > 0 {
				entries = append(entries, intEntry{at - 1, e.g, e.c})
			}
		}
		end := len(entries)
		entries = entries[:end+borders[i]]
		y.rows[i] = entries[start:end:len(entries)]
	}
	for j, b := range rhs {
		for k, at := range b.at {
			y.rows[at] = append(y.rows[at], intEntry{col: y.n + j, g: b.value[k]})
		}
	}
	for i, b := range out {
		for k, at := range b.at {
			y.rows[y.n+i] = append(y.rows[y.n+i], intEntry{col: at, g: b.value[k]})
		}
	}
	return y
}
