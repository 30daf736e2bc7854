package exact

import "context"

// machine runs a program modulo one prime after another.
type machine struct {
	prog   *program
	width  int
	slots  []uint64 // slot i is slots[i·width : (i+1)·width]
	hi, lo []uint64
	spare  []uint64
	g, c   []uint64 // residues of the sources, c negated
	factor []uint64 // of the rows of a symmetric system
	undo   uint64   // inverse of the product of the factors
}

func newMachine(prog *program, width int) *machine {
	buf := make([]uint64, (prog.slots+3)*width)
	k := prog.slots * width
	return &machine{
		prog: prog, width: width, slots: buf[:k],
		hi: buf[k : k+width], lo: buf[k+width : k+2*width], spare: buf[k+2*width:],
		g: make([]uint64, len(prog.sources)), c: make([]uint64, len(prog.sources)),
		factor: make([]uint64, prog.rowsAll),
	}
}

// load takes the residues of the sources modulo m and reports success; it
// fails where a symmetric system is not symmetric modulo m.
func (v *machine) load(m *modulus) bool {
	for i, e := range v.prog.sources {
		v.g[i], v.c[i] = 0, 0
		if e.g != nil {
			v.g[i] = m.fromBig(e.g)
		}
		if e.c != nil {
			v.c[i] = m.neg(m.fromBig(e.c))
		}
	}
	if v.prog.sym == nil {
		return true
	}
	return v.loadFactors(m)
}

// loadFactors multiplies the sources of a symmetric system by the factors of
// their rows.
func (v *machine) loadFactors(m *modulus) bool {
	if !v.prog.sym.rowFactors(m, v.factor) {
		return false
	}
	all := m.one
	for _, f := range v.factor {
		if f != m.one {
			all = m.mul(all, f)
		}
	}
	if v.undo = all; all != m.one {
		v.undo = m.inverse(all)
	}
	for i, row := range v.prog.rows {
		if row >= 0 && v.factor[row] != m.one {
			v.g[i], v.c[i] = m.mul(v.g[i], v.factor[row]), m.mul(v.c[i], v.factor[row])
		}
	}
	return true
}

func (v *machine) slot(i int32, n int) []uint64 {
	k := int(i) * v.width
	return v.slots[k : k+n : k+n]
}

// opsPerCheck is the number of operations, each on at most chunkPoints
// points, between looks at the context: well below a millisecond.
const opsPerCheck = 1 << 10

// run executes the program at up to width points and reports whether no
// pivot was zero.
func (v *machine) run(ctx context.Context, m *modulus, x []uint64) (bool, error) {
	n := len(x)
	copy(v.slot(v.prog.point, n), x)
	for k, o := range v.prog.ops {
		if k%opsPerCheck == 0 {
			if err := ctx.Err(); err != nil {
				return false, err
			}
		}
		dst := v.slot(o.dst, n)
		switch o.kind {
		case opDot:
			v.dot(m, dst, o)
		case opInverse:
			if !m.inverseInto(dst, v.slot(o.a, n)) {
				return false, nil
			}
		case opMul:
			if o.b < 0 {
				copy(dst, v.slot(o.a, n))
			} else {
				mulInto(dst, v.slot(o.a, n), v.slot(o.b, n), m.p, m.inv)
			}
		case opNeg:
			negInto(dst, v.slot(o.a, n), m.p)
		case opAdd:
			addInto(dst, v.slot(o.a, n), m.p)
		}
	}
	return true, nil
}

// dot executes one opDot.
func (v *machine) dot(m *modulus, dst []uint64, o op) {
	n := len(dst)
	p, inv := m.p, m.inv
	var g, c uint64
	if o.source >= 0 {
		g, c = v.g[o.source], v.c[o.source]
	}
	pairs := v.prog.pairs[o.a:o.b]
	if c != 0 {
		v.dotReactive(m, dst, pairs, g, c)
		return
	}
	at := func(k int) ([]uint64, []uint64) { return v.slot(pairs[k].l, n), v.slot(pairs[k].u, n) }
	switch len(pairs) {
	case 0:
		dotConstant(dst, g)
	case 1:
		a0, b0 := at(0)
		dot1(dst, a0, b0, g, p, inv)
	case 2:
		a0, b0 := at(0)
		a1, b1 := at(1)
		dot2(dst, a0, b0, a1, b1, g, p, inv)
	case 3:
		a0, b0 := at(0)
		a1, b1 := at(1)
		a2, b2 := at(2)
		dot3(dst, a0, b0, a1, b1, a2, b2, g, p, inv)
	case 4:
		a0, b0 := at(0)
		a1, b1 := at(1)
		a2, b2 := at(2)
		a3, b3 := at(3)
		dot4(dst, a0, b0, a1, b1, a2, b2, a3, b3, g, p, inv)
	default:
		clear(v.hi[:n])
		clear(v.lo[:n])
		v.accumulate(n, pairs, p)
		finish(dst, v.hi, v.lo, g, p, inv)
	}
}

// dotReactive is dot for a source with s: the term c·s is one more product.
func (v *machine) dotReactive(m *modulus, dst []uint64, pairs []product, g, c uint64) {
	n := len(dst)
	p, inv := m.p, m.inv
	s, k := v.slot(v.prog.point, n), v.spare[:n]
	dotConstant(k, c)
	at := func(k int) ([]uint64, []uint64) { return v.slot(pairs[k].l, n), v.slot(pairs[k].u, n) }
	switch len(pairs) {
	case 0:
		dot1(dst, k, s, g, p, inv)
	case 1:
		a0, b0 := at(0)
		dot2(dst, k, s, a0, b0, g, p, inv)
	case 2:
		a0, b0 := at(0)
		a1, b1 := at(1)
		dot3(dst, k, s, a0, b0, a1, b1, g, p, inv)
	case 3:
		a0, b0 := at(0)
		a1, b1 := at(1)
		a2, b2 := at(2)
		dot4(dst, k, s, a0, b0, a1, b1, a2, b2, g, p, inv)
	default:
		clear(v.hi[:n])
		clear(v.lo[:n])
		accumulate1(v.hi[:n], v.lo, k, s, p)
		v.accumulate(n, pairs, p)
		finish(dst, v.hi, v.lo, g, p, inv)
	}
}

// accumulate adds the products to the sums hi:lo.
func (v *machine) accumulate(n int, pairs []product, p uint64) {
	hi, lo := v.hi[:n], v.lo[:n]
	for ; len(pairs) >= 4; pairs = pairs[4:] {
		accumulate4(hi, lo,
			v.slot(pairs[0].l, n), v.slot(pairs[0].u, n), v.slot(pairs[1].l, n), v.slot(pairs[1].u, n),
			v.slot(pairs[2].l, n), v.slot(pairs[2].u, n), v.slot(pairs[3].l, n), v.slot(pairs[3].u, n), p)
	}
	for _, q := range pairs {
		accumulate1(hi, lo, v.slot(q.l, n), v.slot(q.u, n), p)
	}
}
