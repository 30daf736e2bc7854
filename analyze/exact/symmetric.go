package exact

import "math"

// Networks of resistors, inductors, capacitors, couplings and transformers
// are reciprocal: up to positive or negative factors of the rows their
// matrices are symmetric, and one triangular factor gives the other.

// symmetry is what makes a system of one block symmetric: multiplied by the
// right number in every row it would equal its transpose.
type symmetry struct {
	tree  []mirrored // entries that determine the factor of one row from that of another
	pairs []mirrored // all pairs of entries off the diagonal
}

// mirrored is a pair of entries (i, j) and (j, i).
type mirrored struct {
	i, j   int
	ij, ji *intEntry
}

// symmetric returns how the core of a system of one block can be made
// symmetric, or nil if its pattern is not. Whether the values allow it is
// for rowFactors to find out.
func (y *system) symmetric() *symmetry {
	if len(y.end) != 1 {
		return nil
	}
	sym := &symmetry{}
	at := make([]*intEntry, y.n*y.n)
	for i, r := range y.rows[:y.n] {
		for k := range r {
			if e := &r[k]; e.col < y.n {
				at[i*y.n+e.col] = e
			}
		}
	}
	near := make([][]int, y.n) // indices into pairs
	for i, r := range y.rows[:y.n] {
		for k := range r {
			e := &r[k]
			if e.col >= y.n || e.col == i {
				continue
			}
			m := at[e.col*y.n+i]
			if m == nil || (m.g == nil) != (e.g == nil) || (m.c == nil) != (e.c == nil) {
				return nil
			}
			if i < e.col {
				near[i] = append(near[i], len(sym.pairs))
				near[e.col] = append(near[e.col], len(sym.pairs))
				sym.pairs = append(sym.pairs, mirrored{i, e.col, e, m})
			}
		}
	}
	seen := make([]bool, y.n)
	for root := range y.n {
		if seen[root] {
			continue
		}
		seen[root] = true
		queue := []int{root}
		for k := 0; k < len(queue); k++ {
			for _, x := range near[queue[k]] {
				p := sym.pairs[x]
				if p.j == queue[k] {
					p = mirrored{p.j, p.i, p.ji, p.ij}
				}
				if !seen[p.j] {
					seen[p.j] = true
					sym.tree = append(sym.tree, p)
					queue = append(queue, p.j)
				}
			}
		}
	}
	return sym
}

// rowFactors sets f to factors of the n rows that make the core symmetric
// modulo m and reports success: f[i]·(i, j) = f[j]·(j, i) for all pairs. It
// fails where the values do not allow it, and, rarely, where p divides an
// entry.
func (sym *symmetry) rowFactors(m *modulus, f []uint64) bool {
	for i := range f {
		f[i] = m.one // the roots of the trees keep it
	}
	for _, t := range sym.tree {
		ij, ji := t.ij.c, t.ji.c
		if t.ij.g != nil {
			ij, ji = t.ij.g, t.ji.g
		}
		if ij.Cmp(ji) == 0 {
			f[t.j] = f[t.i]
			continue
		}
		a, b := m.fromBig(ij), m.fromBig(ji)
		if a == 0 || b == 0 {
			return false
		}
		f[t.j] = m.mul(f[t.i], m.mul(a, m.inverse(b)))
	}
	for _, t := range sym.pairs {
		equal := f[t.i] == f[t.j]
		if t.ij.g != nil && !(equal && t.ij.g.Cmp(t.ji.g) == 0) &&
			m.mul(f[t.i], m.fromBig(t.ij.g)) != m.mul(f[t.j], m.fromBig(t.ji.g)) {
			return false
		}
		if t.ij.c != nil && !(equal && t.ij.c.Cmp(t.ji.c) == 0) &&
			m.mul(f[t.i], m.fromBig(t.ij.c)) != m.mul(f[t.j], m.fromBig(t.ji.c)) {
			return false
		}
	}
	return true
}

// eliminateSymmetric is eliminate for a system that sym makes symmetric, with
// pivots on the diagonal. It returns nil if that is not possible with the
// values at s modulo m.
func (y *system) eliminateSymmetric(m *modulus, s uint64, sym *symmetry) *elimination {
	factor := make([]uint64, y.n)
	if !sym.rowFactors(m, factor) {
		return nil
	}
	z := &eliminator{
		y: y, m: m, out: &elimination{symmetry: sym},
		row: make([][]cell, y.n+y.outs), col: make([][]cell, y.n+y.rhs),
		work: make([]int32, y.n+y.rhs),
	}
	// Of the core only one of (i, j) and (j, i) is an entry; both rows hold it.
	for i, r := range y.rows {
		for k := range r {
			e := &r[k]
			v := m.entryAt(e, s)
			switch {
			case i >= y.n:
				z.addCell(i, e.col, factorEntry{source: e, row: -1}, v)
			case e.col >= y.n || e.col == i:
				z.addCell(i, e.col, factorEntry{source: e, row: i}, m.mul(factor[i], v))
			case i < e.col:
				z.addMirrored(i, e.col, factorEntry{source: e, row: i}, m.mul(factor[i], v))
			}
		}
	}
	left := identityList(y.n)
	for len(left) > 0 {
		k := z.chooseDiagonal(left)
		if k < 0 {
			return nil
		}
		i := left[k]
		left[k] = left[len(left)-1]
		left = left[:len(left)-1]
		z.pivotSymmetric(i)
	}
	z.out.negative = []bool{false}
	z.collectBorder()
	return z.out
}

func identityList(n int) []int {
	list := make([]int, n)
	for i := range list {
		list[i] = i
	}
	return list
}

// addMirrored adds an entry that stands for (i, j) and (j, i).
func (z *eliminator) addMirrored(i, j int, e factorEntry, v uint64) int32 {
	id := int32(len(z.value))
	z.out.entries = append(z.out.entries, e)
	z.value = append(z.value, v)
	z.row[i] = append(z.row[i], cell{j, id})
	z.row[j] = append(z.row[j], cell{i, id})
	return id
}

// chooseDiagonal returns the place in the list of the row with the fewest
// entries among those whose diagonal value is not zero, or −1.
func (z *eliminator) chooseDiagonal(list []int) int {
	best, bestCount := -1, math.MaxInt
	for k, i := range list {
		count := len(z.row[i]) + len(z.col[i])
		if count >= bestCount {
			continue
		}
		for _, c := range z.row[i] {
			if c.index == i && z.value[c.entry] != 0 {
				best, bestCount = k, count
			}
		}
	}
	return best
}

// pivotSymmetric eliminates with the diagonal entry of row i. In z.col[i]
// there are only the diagonal and border rows.
func (z *eliminator) pivotSymmetric(i int) {
	step := pivotStep{col: i, scaleLower: true}
	var upper []cell // other cells of the row: core and border columns
	for _, c := range z.row[i] {
		switch {
		case c.index == i:
			step.pivot = c.entry
			continue
		case c.index >= z.y.n:
			z.col[c.index] = removeCell(z.col[c.index], i)
		default:
			z.row[c.index] = removeCell(z.row[c.index], i)
		}
		upper = append(upper, c)
		step.upper = append(step.upper, c.entry)
		step.upperCols = append(step.upperCols, c.index)
	}
	inv := z.m.inverse(z.value[step.pivot])
	// Border rows are scaled in place, the lower factor of the core is the
	// upper one times the inverse pivot.
	for _, c := range z.col[i] {
		if c.index >= z.y.n {
			z.row[c.index] = removeCell(z.row[c.index], i)
			step.lower = append(step.lower, c.entry)
			z.value[c.entry] = z.m.mul(z.value[c.entry], inv)
			z.update(c.index, c.entry, z.value[c.entry], upper)
		}
	}
	for k, c := range upper {
		if c.index >= z.y.n {
			continue
		}
		f := z.m.mul(z.value[c.entry], inv)
		l := int32(len(z.value))
		z.value = append(z.value, f)
		z.out.entries = append(z.out.entries, factorEntry{mirrorOf: c.entry + 1})
		step.lower = append(step.lower, l)
		// Each pair once: with itself, with later ones, and with the borders.
		list := upper[k : k+1 : k+1]
		for _, u := range upper {
			if u.index >= z.y.n {
				list = append(list, u)
			}
		}
		for _, u := range upper[k+1:] {
			if u.index < z.y.n {
				list = append(list, u)
			}
		}
		z.update(c.index, l, f, list)
	}
	z.row[i], z.col[i] = nil, nil
	z.out.pivots = append(z.out.pivots, step)
}

// update subtracts f times the upper cells from row i of a symmetric
// elimination; l is the entry with the value f.
func (z *eliminator) update(i int, l int32, f uint64, upper []cell) {
	for _, c := range z.row[i] {
		z.work[c.index] = c.entry + 1
	}
	for _, u := range upper {
		id := z.work[u.index] - 1
		switch {
		case id >= 0:
		case i < z.y.n && u.index < z.y.n && i != u.index:
			id = z.addMirrored(i, u.index, factorEntry{}, 0)
		default:
			id = z.addCell(i, u.index, factorEntry{}, 0)
		}
		z.value[id] = z.m.sub(z.value[id], z.m.mul(f, z.value[u.entry]))
		e := &z.out.entries[id]
		e.products = append(e.products, product{l, u.entry})
	}
	for _, c := range z.row[i] {
		z.work[c.index] = 0
	}
}
