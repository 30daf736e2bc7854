package float

import "context"

// symmetricPlan is a factorisation S = L·D·Lᵀ without its values. S is the
// matrix with rows multiplied by d, made symmetric by that, then scaled by
// powers of two, then in the order of elimination.
type symmetricPlan struct {
	m        *matrix
	scale    scaling // of the matrix as it stands: row = d·scale, col = scale
	unknown  []int32 // position → unknown
	position []int32 // unknown → position
	ordered  scaling // the same by position
	// The entries of one triangle, already scaled: G, C and where they go.
	g, c []float64
	slot []int32

	compiled *compiled
	fronts   *fronts
}

// symmetricFactor is a factorisation with values.
type symmetricFactor struct {
	*symmetricPlan
	x       []complex128
	work    *frontWork
	scratch []complex128
	jitter  uint64
}

// Limits of the entries of L: beyond them digits are lost, and other pivots are
// tried. Those chosen for this very frequency should do better.
const (
	freshLimit = 1e3
	usedLimit  = 1e4
)

// denseWork is how many products per entry of L make fronts worth their
// bookkeeping.
const denseWork = 6

// planSymmetric chooses an order and pivots for the values at one frequency; d
// are the multipliers that make the matrix symmetric.
func (m *matrix) planSymmetric(ctx context.Context, a []complex128, d []float64) (*symmetricPlan, error) {
	scaled := make([]complex128, len(a))
	for j := range m.n {
		for k := m.start[j]; k < m.start[j+1]; k++ {
			scaled[k] = a[k] * complex(d[m.row[k]], 0)
		}
	}
	scale := m.equilibrate(scaled, true)
	scale.apply(m, scaled)
	order, err := m.symmetricOrder(ctx, scaled)
	if err != nil {
		return nil, err
	}
	p := &symmetricPlan{m: m, scale: scaling{make([]float64, m.n), scale.col}}
	for i := range m.n {
		p.scale.row[i] = d[i] * scale.row[i]
	}
	entries, work := order.cost()
	inFronts := work > denseWork*entries
	if need := entries + work; entries > maxEntries || !inFronts && need > maxEntries {
		return nil, ErrMemory
	}
	p.use(order, inFronts)
	if p.fronts != nil && p.fronts.size+p.fronts.deepest > maxEntries {
		return nil, ErrMemory
	}
	return p, nil
}

// use makes the plan follow an order, in fronts or compiled.
func (p *symmetricPlan) use(order *symmetricOrder, inFronts bool) {
	if inFronts {
		p.fronts, p.unknown = newFronts(order)
	} else {
		order = order.interleaved()
		p.compiled = newCompiled(order)
		for _, u := range order.vertices {
			p.unknown = append(p.unknown, u[0])
			if u[1] >= 0 {
				p.unknown = append(p.unknown, u[1])
			}
		}
	}
	p.ordered = scaling{make([]float64, p.m.n), make([]float64, p.m.n)}
	for k, u := range p.unknown {
		p.ordered.row[k], p.ordered.col[k] = p.scale.row[u], p.scale.col[u]
	}
	p.place()
}

// cost counts the entries of L and the products of the elimination.
func (o *symmetricOrder) cost() (entries, work float64) {
	for v := range int32(len(o.vertices)) {
		rows := 0.0
		for _, w := range o.below(v) {
			rows += float64(o.width(w))
		}
		w := float64(o.width(v))
		entries += w * (rows + 1)
		work += w * rows * (rows + 1) / 2
	}
	return entries, work
}

// place finds where the entries of the matrix go.
func (p *symmetricPlan) place() {
	m := p.m
	p.position = inverse(p.unknown)
	position := p.position
	blockOf := make([]int32, m.n)
	if p.compiled != nil {
		for k, b := range p.compiled.blocks {
			for i := range b.wide {
				blockOf[b.first+i] = int32(k)
			}
		}
	} else {
		for k, t := range p.fronts.list {
			for i := range t.wide {
				blockOf[t.first+i] = int32(k)
			}
		}
	}
	for j := range m.n {
		for k := m.start[j]; k < m.start[j+1]; k++ {
			row, column := position[m.row[k]], position[j]
			if row < column {
				continue
			}
			f := p.scale.row[m.row[k]] * p.scale.col[j]
			p.g, p.c = append(p.g, m.g[k].hi*f), append(p.c, m.c[k].hi*f)
			if p.compiled != nil {
				p.slot = append(p.slot, p.compiled.slot(blockOf, row, column))
			} else {
				p.slot = append(p.slot, p.fronts.slot(blockOf, row, column))
			}
		}
	}
}

// factor makes room for values.
func (p *symmetricPlan) factor() *symmetricFactor {
	f := &symmetricFactor{symmetricPlan: p}
	if p.compiled != nil {
		f.x = make([]complex128, p.compiled.size)
		return f
	}
	f.x = make([]complex128, p.fronts.size)
	f.work = p.fronts.work()
	f.scratch = make([]complex128, p.fronts.most)
	return f
}

// factorise computes the values at a point. It fails with errPivot where the
// entries of L are too large.
func (f *symmetricFactor) factorise(ctx context.Context, s complex128, limit float64) error {
	clear(f.x)
	g, c := f.g, f.c[:len(f.g)]
	re, im := real(s), imag(s)
	for k, to := range f.slot[:len(g)] {
		f.x[to] = complex(g[k]+re*c[k], im*c[k])
	}
	shake(f.x, f.jitter)
	if f.compiled != nil {
		return f.compiled.factorise(ctx, f.x, limit)
	}
	return f.fronts.factorise(ctx, f.x, f.work, limit)
}

func (f *symmetricFactor) scaling() scaling { return f.scale }

func (f *symmetricFactor) method() string { return "LDLᵀ" }

func (f *symmetricFactor) entries() int {
	sum := len(f.x)
	if f.work != nil {
		sum += len(f.work.stack)
	}
	return sum
}

// solve overwrites b, by rows of the matrix, with the solution by columns; y is
// scratch.
func (f *symmetricFactor) solve(b, y []complex128) {
	f.solveBetween(b, y, f.ordered.row, f.ordered.col)
}

// solveTransposed overwrites b, by columns of the matrix, with the solution of
// the transposed equations, by rows.
func (f *symmetricFactor) solveTransposed(b, y []complex128) {
	f.solveBetween(b, y, f.ordered.col, f.ordered.row)
}

func (f *symmetricFactor) solveBetween(b, y []complex128, in, out []float64) {
	for k, u := range f.unknown {
		s := in[k]
		y[k] = complex(real(b[u])*s, imag(b[u])*s)
	}
	f.solveOrdered(b, y, out)
}

// solveSparse sets x to the solution for a right-hand side with few entries, by
// rows of the matrix; transposed is for the transposed equations.
func (f *symmetricFactor) solveSparse(index []int32, value, x, y []complex128, transposed bool) {
	in, out := f.ordered.row, f.ordered.col
	if transposed {
		in, out = out, in
	}
	clear(y)
	for k, i := range index {
		at := f.position[i]
		y[at] += value[k] * complex(in[at], 0)
	}
	f.solveOrdered(x, y, out)
}

// solveOrdered solves for y, in the order of elimination, and sets b to the
// solution by unknowns.
func (f *symmetricFactor) solveOrdered(b, y []complex128, out []float64) {
	if f.compiled != nil {
		f.compiled.solve(f.x, y)
	} else {
		f.fronts.solve(f.x, y, f.scratch)
	}
	for k, u := range f.unknown {
		s := out[k]
		b[u] = complex(real(y[k])*s, imag(y[k])*s)
	}
}
