package float

import (
	"context"
	"slices"
)

// fronts is a symmetric factorisation L·D·Lᵀ for networks with much fill-in,
// such as meshes: unknowns with nearly the same rows are eliminated together in
// a dense front (I. S. Duff, J. K. Reid, The multifrontal solution of indefinite
// sparse symmetric linear equations, ACM Trans. Math. Softw. 9 (1983)).
type fronts struct {
	list    []front
	rows    []int32 // positions of the unknowns of every front: its own, then those below
	inFront []int32 // for the rows below the front: their place in the front above
	pairs   []bool  // by position: this unknown and the next are a pair
	size    int     // of the values
	deepest int     // entries that contributions take at once, at most
	most    int32   // rows of the largest front
}

// front eliminates wide unknowns. Its values are tall·wide numbers in columns,
// from base on: L without its ones, D on and next to the diagonal. What it
// contributes to the front above is the square of the tall − wide rows below.
type front struct {
	first, wide, tall int32 // first: position of its first unknown
	rows              int32 // rows[rows : rows+tall]
	base              int32
	above             int32 // −1 for none
	children          int32 // how many
	work              int32 // steps of its elimination, about
}

// group is a front in the making.
type group struct {
	vertices   []int32
	wide, tall int32
	last       int32 // the vertex whose rows below are those of the front
	children   []int32
}

// newFronts groups the vertices of an order and renumbers their unknowns: the
// result gives the unknown at every position.
func newFronts(o *symmetricOrder) (*fronts, []int32) {
	groups, roots := grouped(o)
	f := &fronts{}
	var unknowns []int32
	position := make([]int32, len(o.vertices)) // of a vertex's first unknown
	var order []int32
	var path []int32
	next := make([]int32, len(groups))
	for _, root := range roots {
		path = append(path[:0], root)
		for len(path) > 0 {
			k := path[len(path)-1]
			if g := &groups[k]; int(next[k]) < len(g.children) {
				next[k]++
				path = append(path, g.children[next[k]-1])
				continue
			}
			path = path[:len(path)-1]
			order = append(order, k)
		}
	}
	frontOf := make([]int32, len(groups))
	for i, k := range order {
		g := &groups[k]
		frontOf[k] = int32(i)
		f.list = append(f.list, front{first: int32(len(unknowns)), wide: g.wide, tall: g.tall, above: -1, children: int32(len(g.children))})
		for _, c := range g.children {
			f.list[frontOf[c]].above = int32(i)
		}
		for _, v := range g.vertices {
			position[v] = int32(len(unknowns))
			u := o.vertices[v]
			unknowns = append(unknowns, u[0])
			f.pairs = append(f.pairs, u[1] >= 0)
			if u[1] >= 0 {
				unknowns = append(unknowns, u[1])
				f.pairs = append(f.pairs, false)
			}
		}
	}
	for i, k := range order {
		f.lay(&f.list[i], o, groups[k].last, position)
	}
	f.connect()
	return f, unknowns
}

// lay lists the rows of a front and gives it its place among the values.
func (f *fronts) lay(t *front, o *symmetricOrder, last int32, position []int32) {
	t.rows, t.base = int32(len(f.rows)), int32(f.size)
	for k := range t.wide {
		f.rows = append(f.rows, t.first+k)
	}
	for _, v := range o.below(last) {
		f.rows = append(f.rows, position[v])
		if o.width(v) == 2 {
			f.rows = append(f.rows, position[v]+1)
		}
	}
	slices.Sort(f.rows[t.rows+t.wide:])
	f.size += int(t.wide) * int(t.tall)
	below := float64(t.tall - t.wide)
	t.work = int32(min(products(t.wide, t.tall)+below*below+64, cancelInterval))
	f.most = max(f.most, t.tall)
}

// connect finds the places of the rows below every front in the one above, and
// how much the contributions take.
func (f *fronts) connect() {
	f.inFront = make([]int32, len(f.rows))
	live := make([]int, len(f.list)) // of the children of a front
	current := 0
	for i := range f.list {
		t := &f.list[i]
		below := int(t.tall - t.wide)
		f.deepest = max(f.deepest, current+below*below)
		current += below*below - live[i]
		if t.above < 0 {
			continue
		}
		live[t.above] += below * below
		up := f.list[t.above]
		rows := f.rows[up.rows:][:up.tall]
		k := int32(0)
		for p := t.rows + t.wide; p < t.rows+t.tall; p++ {
			for rows[k] != f.rows[p] {
				k++
			}
			f.inFront[p] = k
		}
	}
}

// grouped forms groups of vertices. First those whose rows are alike as they
// stand, then children with their parents where the zeros that this stores cost
// less than handing contributions on.
func grouped(o *symmetricOrder) (groups []group, roots []int32) {
	n := int32(len(o.vertices))
	of := make([]int32, n)
	for v := range n {
		w := o.width(v)
		rows := int32(0)
		for _, u := range o.below(v) {
			rows += o.width(u)
		}
		k := len(groups) - 1
		if v > 0 && o.parent[v-1] == v && len(o.below(v-1)) == len(o.below(v))+1 {
			g := &groups[k]
			g.vertices, g.wide, g.last = append(g.vertices, v), g.wide+w, v
			g.tall = g.wide + rows
		} else {
			groups = append(groups, group{vertices: []int32{v}, wide: w, tall: w + rows, last: v})
			k++
		}
		of[v] = int32(k)
	}
	for k := range groups {
		g := &groups[k]
		if p := o.parent[g.last]; p >= 0 {
			groups[of[p]].children = append(groups[of[p]].children, int32(k))
		} else {
			roots = append(roots, int32(k))
		}
	}
	for k := range groups {
		adopt(groups, int32(k))
	}
	return groups, roots
}

// adopt takes children into group k as long as that saves time.
func adopt(groups []group, k int32) {
	g := &groups[k]
	for again := true; again; {
		again = false
		best, gain := -1, 0.0
		for at, c := range g.children {
			if s := saving(g, &groups[c]); s > gain {
				best, gain = at, s
			}
		}
		if best < 0 {
			break
		}
		c := &groups[g.children[best]]
		g.children = append(slices.Delete(g.children, best, best+1), c.children...)
		g.vertices = append(slices.Clone(c.vertices), g.vertices...)
		g.wide += c.wide
		g.tall += c.wide
		c.children, c.vertices = nil, nil
		again = true
	}
}

// saving is the time, in products, that merging child c into group g saves.
func saving(g, c *group) float64 {
	const perFront, perEntry = 50, 2
	below := float64(c.tall - c.wide)
	saved := perFront + perEntry*below*(below+1)/2
	return saved + products(c.wide, c.tall) + products(g.wide, g.tall) - products(g.wide+c.wide, g.tall+c.wide)
}

// products counts those of eliminating wide of tall unknowns.
func products(wide, tall int32) float64 {
	sum := 0.0
	for k := range wide {
		below := float64(tall - k - 1)
		sum += below*(below+1)/2 + below
	}
	return sum
}

// slot is the place of the entry at positions (row, column), row ≥ column.
func (f *fronts) slot(frontOf []int32, row, column int32) int32 {
	t := &f.list[frontOf[column]]
	k, _ := slices.BinarySearch(f.rows[t.rows:][:t.tall], row)
	return t.base + (column-t.first)*t.tall + int32(k)
}

// frontWork is the memory of one factorisation in fronts.
type frontWork struct {
	stack []complex128
	panel []complex128 // four columns of L·D
}

func (f *fronts) work() *frontWork {
	return &frontWork{make([]complex128, f.deepest), make([]complex128, 4*f.most)}
}

// factorise turns the entries in x into the factors. It fails with errPivot
// where an entry of L exceeds limit.
func (f *fronts) factorise(ctx context.Context, x []complex128, w *frontWork, limit float64) error {
	top, done := 0, 0
	var waiting []int32 // fronts whose contributions are on the stack
	for i := range f.list {
		t := &f.list[i]
		below := int(t.tall - t.wide)
		values := x[t.base:][:int(t.wide)*int(t.tall)]
		rest := w.stack[top : top+below*below]
		clear(rest)
		bottom := top
		for range t.children {
			c := waiting[len(waiting)-1]
			waiting = waiting[:len(waiting)-1]
			k := int(f.list[c].tall - f.list[c].wide)
			bottom -= k * k
			f.extend(c, w.stack[bottom:bottom+k*k], values, rest)
		}
		if done += int(t.work); done > cancelInterval {
			done = 0
			if err := ctx.Err(); err != nil {
				return err
			}
		}
		d := dense{values: values, rest: rest, tall: int(t.tall), wide: int(t.wide), pairs: f.pairs[t.first:], panel: w.panel}
		if largest, err := d.factorise(ctx); err != nil {
			return err
		} else if !(largest <= limit) {
			return errPivot
		}
		if bottom < top {
			copy(w.stack[bottom:], rest)
		}
		top = bottom + below*below
		waiting = append(waiting, int32(i))
	}
	return nil
}

// extend adds the contribution of front c to the values of the front above and
// to what that contributes itself.
func (f *fronts) extend(c int32, from, values, rest []complex128) {
	t := &f.list[c]
	up := &f.list[t.above]
	place := f.inFront[t.rows+t.wide : t.rows+t.tall]
	k := len(place)
	tall, wide := int(up.tall), int(up.wide)
	below := tall - wide
	for j, q := range place {
		source := from[j*k : j*k+k][j:]
		rows := place[j:][:len(source)]
		if int(q) < wide {
			to := values[int(q)*tall:][:tall]
			for i, v := range source {
				to[rows[i]] += v
			}
			continue
		}
		to := rest[(int(q)-wide)*below:][:below]
		for i, v := range source {
			to[int(rows[i])-wide] += v
		}
	}
}

// solve overwrites y, by position, with the solution.
func (f *fronts) solve(x, y, scratch []complex128) {
	for i := range f.list {
		t := &f.list[i]
		wide, tall := int(t.wide), int(t.tall)
		rows := f.rows[t.rows+t.wide : t.rows+t.tall]
		own := y[t.first:][:wide]
		if allZero(own) {
			continue
		}
		below := scratch[:len(rows)]
		clear(below)
		for k := range wide {
			column := x[int(t.base)+k*tall:][:tall]
			v := own[k]
			l := column[k+1 : wide]
			if f.pairs[int(t.first)+k] {
				l = l[1:]
			}
			to := own[wide-len(l):]
			for a := range l {
				to[a] -= l[a] * v
			}
			l = column[wide:][:len(below)]
			for a := range l {
				below[a] += l[a] * v
			}
		}
		for a, r := range rows {
			y[r] -= below[a]
		}
	}
	for i := len(f.list) - 1; i >= 0; i-- {
		t := &f.list[i]
		wide, tall := int(t.wide), int(t.tall)
		rows := f.rows[t.rows+t.wide : t.rows+t.tall]
		own := y[t.first:][:wide]
		below := scratch[:len(rows)]
		for a, r := range rows {
			below[a] = y[r]
		}
		f.divide(t, x, own)
		for k := wide - 1; k >= 0; k-- {
			column := x[int(t.base)+k*tall:][:tall]
			v := own[k]
			l := column[k+1 : wide]
			if f.pairs[int(t.first)+k] {
				l = l[1:]
			}
			to := own[wide-len(l):]
			for a := range l {
				v -= l[a] * to[a]
			}
			l = column[wide:][:len(below)]
			for a := range l {
				v -= l[a] * below[a]
			}
			own[k] = v
		}
	}
}

// allZero spares the way through fronts that a right-hand side does not reach.
func allZero(v []complex128) bool {
	for _, z := range v {
		if z != 0 {
			return false
		}
	}
	return true
}

// divide multiplies by the inverse of D.
func (f *fronts) divide(t *front, x, own []complex128) {
	tall := int(t.tall)
	for k := 0; k < len(own); k++ {
		d := x[int(t.base)+k*tall+k:]
		if !f.pairs[int(t.first)+k] {
			own[k] *= d[0]
			continue
		}
		u, w := own[k], own[k+1]
		own[k], own[k+1] = u*d[0]+w*d[1], u*d[1]+w*d[tall+1]
		k++
	}
}
