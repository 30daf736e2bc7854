package exact

import (
	"context"
	"errors"
	"fmt"
	"math/big"
)

// SolveAt returns the exact solution of (G + s·C)·x = rhs at s = re + j·im as
// real and imaginary parts. Where the matrix is singular at that point the
// error is a *SingularError; otherwise it is the context's.
func (p *Pencil) SolveAt(ctx context.Context, re, im *big.Rat, rhs Vector) (xre, xim []*big.Rat, err error) {
	return p.SolveComplexAt(ctx, re, im, rhs, nil)
}

// SolveComplexAt is SolveAt with the right-hand side rhsRe + j·rhsIm.
func (p *Pencil) SolveComplexAt(ctx context.Context, re, im *big.Rat, rhsRe, rhsIm Vector) (xre, xim []*big.Rat, err error) {
	if err := ctx.Err(); err != nil {
		return nil, nil, err
	}
	// The value of p at the point, as the value of a pencil at s = j.
	v := p.movedTo(re, im)
	f := v.structure(v.toIntegers(false))
	x := newPhasors(p.Size())
	if f.form != nil {
		b := newPhasors(p.Size())
		b.add(rhsRe, func(z *phasor) *big.Rat { return &z.re })
		b.add(rhsIm, func(z *phasor) *big.Rat { return &z.im })
		err = f.solveBlocks(ctx, b, x)
	}
	if f.form == nil || errors.Is(err, errSingular) {
		rows, cols := p.kernelAt(ctx, re, im)
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		return nil, nil, &SingularError{rows, cols}
	}
	if err != nil {
		return nil, nil, err
	}
	for i := range x {
		xre, xim = append(xre, &x[i].re), append(xim, &x[i].im)
	}
	return xre, xim, nil
}

// phasor is a complex number with rational parts.
type phasor struct{ re, im big.Rat }

func (z *phasor) isZero() bool { return z.re.Sign() == 0 && z.im.Sign() == 0 }

type phasors []phasor

func newPhasors(n int) phasors { return make(phasors, n) }

func (b phasors) add(v Vector, part func(*phasor) *big.Rat) {
	for _, c := range v {
		if c.Value != nil {
			r := part(&b[c.Index])
			r.Add(r, c.Value)
		}
	}
}

// movedTo returns the pencil whose value at s = j is that of p at re + j·im.
func (p *Pencil) movedTo(re, im *big.Rat) *Pencil {
	q := NewPencil(p.Size())
	var t big.Rat
	for i, r := range p.rows {
		row := make([]Entry, 0, len(r))
		for _, e := range r {
			v := Entry{e.Row, e.Col, e.G, new(big.Rat)}
			if e.C.Sign() != 0 {
				if re.Sign() != 0 {
					v.G = new(big.Rat).Add(e.G, t.Mul(e.C, re))
				}
				v.C.Mul(e.C, im)
			}
			if v.G.Sign() != 0 || v.C.Sign() != 0 {
				row = append(row, v)
			}
		}
		q.rows[i] = row
	}
	return q
}

// solveBlocks solves piece after piece at s = j: x for the right-hand side b,
// which it changes.
func (f *Prepared) solveBlocks(ctx context.Context, b, x phasors) error {
	for k := range f.form.end {
		if err := f.solveBlock(ctx, k, b, x); err != nil {
			return err
		}
	}
	return nil
}

// solveBlock solves one piece; earlier ones have been solved.
func (f *Prepared) solveBlock(ctx context.Context, k int, b, x phasors) error {
	start := 0
	if k > 0 {
		start = f.form.end[k-1]
	}
	rows, cols := f.form.rows[start:f.form.end[k]], f.form.cols[start:f.form.end[k]]
	acting := false
	for _, r := range rows {
		for _, e := range f.pencil.rows[r] {
			if f.form.blockOfCol[e.Col] != k {
				b[r].subtract(e.G, e.C, &x[e.Col])
			}
		}
		acting = acting || !b[r].isZero()
	}
	y := f.system([]int{k}, nil, nil)
	column := y.addComplexColumn(f, rows, b)
	d, num, err := y.solveAtJ(ctx, acting)
	if err != nil || !acting {
		return err
	}
	// x = K·N/(β·d) with K the scale of the columns and β that of b.
	var dd, t big.Rat
	norm := new(big.Int).Mul(&d.re, &d.re)
	norm.Add(norm, new(big.Int).Mul(&d.im, &d.im))
	dd.SetInt(norm)
	dd.Mul(&dd, column)
	for i, c := range cols {
		n := num[i].timesConjugate(d)
		scale := f.scaled.colScale[c].rat()
		scale.Quo(scale, &dd)
		x[c].re.Mul(scale, t.SetInt(&n.re))
		x[c].im.Mul(scale, t.SetInt(&n.im))
	}
	return nil
}

// subtract sets z to z − (g + j·c)·x.
func (z *phasor) subtract(g, c *big.Rat, x *phasor) {
	var t big.Rat
	z.re.Sub(&z.re, t.Mul(g, &x.re))
	z.im.Sub(&z.im, t.Mul(g, &x.im))
	if c.Sign() != 0 {
		z.re.Add(&z.re, t.Mul(c, &x.im))
		z.im.Sub(&z.im, t.Mul(c, &x.re))
	}
}

// gaussianInt is a complex number with integer parts.
type gaussianInt struct{ re, im big.Int }

// timesConjugate returns z·conj(d).
func (z *gaussianInt) timesConjugate(d *gaussianInt) *gaussianInt {
	var n gaussianInt
	var t big.Int
	n.re.Mul(&z.re, &d.re)
	n.re.Add(&n.re, t.Mul(&z.im, &d.im))
	n.im.Mul(&z.im, &d.re)
	n.im.Sub(&n.im, t.Mul(&z.re, &d.im))
	return &n
}

// addComplexColumn gives the system of one piece the border column b, with
// s = j for the imaginary parts, and returns the number β it was multiplied
// by to become integer.
func (y *system) addComplexColumn(f *Prepared, rows []int, b phasors) *big.Rat {
	y.rhs = 1
	values := make([][2]*big.Rat, len(rows))
	den, num := big.NewInt(1), new(big.Int)
	for i, r := range rows {
		scale := f.scaled.rowScale[r].rat()
		values[i] = [2]*big.Rat{new(big.Rat).Mul(scale, &b[r].re), new(big.Rat).Mul(scale, &b[r].im)}
		lcmInto(den, values[i][0].Denom())
		lcmInto(den, values[i][1].Denom())
	}
	entries := make([]intEntry, len(rows))
	for i, v := range values {
		entries[i] = intEntry{col: y.n, g: overDenominator(v[0], den), c: overDenominator(v[1], den)}
		gcdInto(num, entries[i].g)
		gcdInto(num, entries[i].c)
	}
	if num.Sign() == 0 {
		num.SetInt64(1)
	}
	for i, e := range entries {
		if e.g == nil && e.c == nil {
			continue
		}
		for _, x := range []*big.Int{e.g, e.c} {
			if x != nil {
				x.Quo(x, num)
			}
		}
		y.rows[i] = append(y.rows[i], e)
	}
	return new(big.Rat).SetFrac(den, num)
}

// solveAtJ returns the determinant d of a system of one piece with one border
// column at s = j and, if there is anything to solve, the vector d·x, as
// Gaussian integers. It returns errSingular where d is zero.
//
// The parts of d are bounded by |d|, which Hadamard's inequality bounds, and
// those of d·x by Cramer's rule likewise; residues modulo enough primes at
// the square roots of −1 determine them.
func (y *system) solveAtJ(ctx context.Context, acting bool) (*gaussianInt, []gaussianInt, error) {
	points := 1 // all real: one point, any
	for _, r := range y.rows {
		for _, e := range r {
			if e.c != nil {
				points = 2
			}
		}
	}
	if y.n == 1 && !acting {
		return y.single()
	}
	primes := primesFor(y.solutionBound())
	prog, err := y.orderAtJ(ctx, primes)
	if err != nil {
		return nil, nil, err
	}
	v := newMachine(prog, points)
	outputs := len(prog.outputs)
	residues := make([]uint64, 0, primes*points*outputs)
	var used []*modulus
	for i := 0; len(used) < primes; i++ {
		m := takeModuli(i + 1)[i]
		v.load(m) // not a symmetric program: does not fail
		j := m.sqrtMinusOne()
		ok, err := v.run(ctx, m, []uint64{j, m.neg(j)}[:points])
		if err != nil {
			return nil, nil, err
		}
		if !ok {
			if i > 2*primes+64 {
				return nil, nil, fmt.Errorf("no usable primes for a system of size %d", y.n)
			}
			continue
		}
		used = append(used, m)
		half, halfOverJ := m.inverse(m.fromUint(2)), m.inverse(m.mul(m.fromUint(2), j))
		for _, slot := range prog.outputs {
			val := v.slot(slot, points)
			if points == 1 {
				residues = append(residues, val[0])
				continue
			}
			residues = append(residues,
				m.mul(half, m.add(val[0], val[1])),
				m.mul(halfOverJ, m.sub(val[0], val[1])))
		}
	}
	table := reconstructionFor(used)
	out := make([]gaussianInt, outputs)
	stride := points * outputs
	for k := range out {
		out[k].re.Set(table.integer(residues[k*points:], stride))
		if points == 2 {
			out[k].im.Set(table.integer(residues[k*points+1:], stride))
		}
	}
	return &out[0], out[1:], nil
}

// single is solveAtJ for one equation without right-hand side.
func (y *system) single() (*gaussianInt, []gaussianInt, error) {
	var d gaussianInt
	for _, e := range y.rows[0] {
		if e.col == 0 {
			if e.g != nil {
				d.re.Set(e.g)
			}
			if e.c != nil {
				d.im.Set(e.c)
			}
		}
	}
	if d.re.Sign() == 0 && d.im.Sign() == 0 {
		return nil, nil, errSingular
	}
	return &d, nil, nil
}

// orderAtJ returns a program for d and d·x, or errSingular. That all residues
// of d vanish proves that d is zero.
func (y *system) orderAtJ(ctx context.Context, primes int) (*program, error) {
	for _, m := range takeModuli(primes + 1) {
		j := m.sqrtMinusOne()
		for _, s := range []uint64{j, m.neg(j)} {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			if z, _ := y.eliminate(m, s); z != nil {
				return y.compileSolution(z), nil
			}
		}
	}
	return nil, errSingular
}
