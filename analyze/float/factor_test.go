package float

import (
	"context"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"portlight/analyze/exact"
)

// random matrix of complex numbers through its pencil at s = j: symmetric ones
// may have zeros on the diagonal.
func randomPencil(r *rand.Rand, n int, symmetric bool) *exact.Pencil {
	p := exact.NewPencil(n)
	number := func() *big.Rat { return big.NewRat(int64(r.IntN(2001)-1000), int64(1+r.IntN(50))) }
	for i := range n {
		for range 1 + r.IntN(3) {
			j := r.IntN(n)
			if r.IntN(2) == 0 {
				j = min(n-1, i+r.IntN(3))
			}
			if i == j {
				continue
			}
			g, c := number(), number()
			p.Add(i, j, g, c)
			if symmetric {
				p.Add(j, i, g, c)
			}
		}
		if r.IntN(3) > 0 {
			p.Add(i, i, number(), number())
		}
	}
	return p
}

// gauss solves a dense system with full pivoting; ok is false if it is singular.
func gauss(a [][]complex128, b []complex128) (x []complex128, ok bool) {
	n := len(b)
	cols := make([]int, n)
	for k := range n {
		bi, bj, best := -1, -1, 0.0
		for i := k; i < n; i++ {
			for j := range n {
				if v := norm1(a[i][j]); v > best && !contains(cols[:k], j) {
					bi, bj, best = i, j, v
				}
			}
		}
		if best < 1e-9 {
			return nil, false
		}
		a[k], a[bi] = a[bi], a[k]
		b[k], b[bi] = b[bi], b[k]
		cols[k] = bj
		for i := k + 1; i < n; i++ {
			f := a[i][bj] / a[k][bj]
			for j := range n {
				a[i][j] -= f * a[k][j]
			}
			b[i] -= f * b[k]
		}
	}
	x = make([]complex128, n)
	for k := n - 1; k >= 0; k-- {
		sum := b[k]
		for _, j := range cols[k+1:] {
			sum -= a[k][j] * x[j]
		}
		x[cols[k]] = sum / a[k][cols[k]]
	}
	return x, true
}

func contains(list []int, x int) bool {
	for _, v := range list {
		if v == x {
			return true
		}
	}
	return false
}

func dense2(m *matrix, a []complex128, transposed bool) [][]complex128 {
	out := make([][]complex128, m.n)
	for i := range out {
		out[i] = make([]complex128, m.n)
	}
	for j := range m.n {
		for k := m.start[j]; k < m.start[j+1]; k++ {
			if transposed {
				out[j][m.row[k]] = a[k]
			} else {
				out[m.row[k]][j] = a[k]
			}
		}
	}
	return out
}

// TestFactorisations solves random systems, also the transposed ones, with
// every kind of factors and compares with dense elimination.
func TestFactorisations(t *testing.T) {
	ctx := context.Background()
	solved := map[string]int{}
	for seed := range uint64(400) {
		r := rand.New(rand.NewPCG(seed, 5))
		n := 1 + r.IntN(40)
		symmetric := seed%3 != 0
		m, err := newMatrix(ctx, randomPencil(r, n, symmetric))
		if err != nil {
			t.Fatal(err)
		}
		a := make([]complex128, len(m.row))
		m.values(1i, a)
		b := make([]complex128, n)
		for i := range b {
			b[i] = complex(r.NormFloat64(), r.NormFloat64())
		}
		want, ok := gauss(dense2(m, a, false), append([]complex128(nil), b...))
		wantTransposed, _ := gauss(dense2(m, a, true), append([]complex128(nil), b...))
		for name, f := range everyFactor(t, m, a, symmetric) {
			if !ok || f == nil {
				continue
			}
			for transposed, want := range map[bool][]complex128{false: want, true: wantTransposed} {
				x, y := append([]complex128(nil), b...), make([]complex128, n)
				if transposed {
					f.solveTransposed(x, y)
				} else {
					f.solve(x, y)
				}
				index := make([]int32, n)
				for i := range index {
					index[i] = int32(i)
				}
				sparse := make([]complex128, n)
				f.solveSparse(index, b, sparse, y, transposed)
				if d := apart(sparse, x); !(d < 1e-12) {
					t.Errorf("seed %d, %s, transposed %v: sparse right-hand side off by %g", seed, name, transposed, d)
				}
				if d := apart(x, want); !(d < 1e-6) {
					t.Errorf("seed %d, %s, transposed %v: off by %g", seed, name, transposed, d)
				}
			}
			solved[name]++
		}
	}
	for _, name := range []string{"LU", "LU again", "compiled", "fronts"} {
		if solved[name] < 60 {
			t.Errorf("%s: %d systems solved, %v", name, solved[name], solved)
		}
	}
}

// everyFactor factorises in every way; nil where pivots are refused.
func everyFactor(t *testing.T, m *matrix, a []complex128, symmetric bool) map[string]factor {
	ctx := context.Background()
	out := map[string]factor{}
	scale := m.equilibrate(a, false)
	scaled := append([]complex128(nil), a...)
	scale.apply(m, scaled)
	if cols, preferred, err := m.luPreorder(ctx, scaled); err == nil {
		if f, err := m.factorise(ctx, scaled, scale, cols, preferred); err == nil {
			out["LU"] = f
			again := f.luPattern.factor()
			if err := f.refactorise(ctx, scaled, again, make([]complex128, m.n)); err != nil {
				t.Error("the same values again:", err)
			}
			out["LU again"] = again
		}
	}
	if !symmetric {
		return out
	}
	d := make([]float64, m.n)
	for i := range d {
		d[i] = 1
	}
	scaled = append(scaled[:0], a...)
	scale = m.equilibrate(scaled, true)
	scale.apply(m, scaled)
	order, err := m.symmetricOrder(ctx, scaled)
	if err != nil {
		return out
	}
	for _, name := range []string{"compiled", "fronts"} {
		p := &symmetricPlan{m: m, scale: scale}
		p.use(order, name == "fronts")
		f := p.factor()
		if err := f.factorise(ctx, 1i, 1e6); err == nil {
			out[name] = f
		}
	}
	return out
}

// apart is the largest difference, relative to the largest entry.
func apart(x, y []complex128) float64 {
	d, size := 0.0, 0.0
	for i := range x {
		d, size = max(d, norm1(x[i]-y[i])), max(size, norm1(y[i]))
	}
	if size == 0 {
		return d
	}
	return d / size
}

// TestConditionEstimate compares with the condition number from the inverse.
func TestConditionEstimate(t *testing.T) {
	ctx := context.Background()
	good, all := 0, 0
	for seed := range uint64(600) {
		r := rand.New(rand.NewPCG(seed, 6))
		n := 1 + r.IntN(25)
		m, err := newMatrix(ctx, randomPencil(r, n, false))
		if err != nil {
			t.Fatal(err)
		}
		q := (&Solver{m: m}).query(point{im: double{1, 0}})
		if q.factorise(ctx, generalAnew) != nil {
			continue
		}
		got, err := q.condition(ctx)
		if err != nil {
			t.Fatal(err)
		}
		scaled := append([]complex128(nil), q.a...)
		q.lu.scale.apply(m, scaled)
		norm, inverse := 0.0, 0.0
		for j := range n {
			column := 0.0
			for k := m.start[j]; k < m.start[j+1]; k++ {
				column += modulus(scaled[k])
			}
			b := make([]complex128, n)
			b[j] = 1
			x, ok := gauss(dense2(m, scaled, false), b)
			if !ok {
				x = make([]complex128, n)
			}
			sum := 0.0
			for _, v := range x {
				sum += modulus(v)
			}
			norm, inverse = max(norm, column), max(inverse, sum)
		}
		want := norm * inverse
		if want > 1e8 || want == 0 {
			continue
		}
		all++
		if got > want*1.001 || got < want/10 {
			t.Errorf("seed %d: %g, want %g", seed, got, want)
		}
		if got > want/3 {
			good++
		}
	}
	if all < 60 || good < all*9/10 {
		t.Errorf("%d of %d within a factor of 3", good, all)
	}
}

func TestDoubles(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	exactly := func(d double) *big.Float {
		z := new(big.Float).SetPrec(300).SetFloat64(d.hi)
		return z.Add(z, new(big.Float).SetFloat64(d.lo))
	}
	random := func() double {
		hi := math.Ldexp(r.NormFloat64(), r.IntN(40)-20)
		return double{hi, hi * unit * (r.Float64() - 0.5)}
	}
	check := func(name string, got double, want *big.Float, size float64) {
		d, _ := new(big.Float).Sub(exactly(got), want).Float64()
		if math.Abs(d) > unit2*size {
			t.Errorf("%s: off by %g of %g", name, d, size)
		}
	}
	for range 2000 {
		a, b := random(), random()
		x := r.NormFloat64()
		sum := new(big.Float).SetPrec(300).Add(exactly(a), exactly(b))
		check("sum", a.plus(b), sum, math.Abs(a.hi)+math.Abs(b.hi))
		product := new(big.Float).SetPrec(300).Mul(exactly(a), exactly(b))
		check("product", a.times(b), product, math.Abs(a.hi*b.hi))
		scaled := new(big.Float).SetPrec(300).Mul(exactly(a), new(big.Float).SetFloat64(x))
		check("scaled", a.scaled(x), scaled, math.Abs(a.hi*x))
		q := big.NewRat(r.Int64N(1<<53), 1+r.Int64N(1<<53))
		if r.IntN(2) == 0 {
			q.Mul(q, big.NewRat(r.Int64(), 1+r.Int64N(1<<60)))
		}
		d, ok := doubleOf(q)
		f, _ := q.Float64()
		if !ok {
			t.Fatal(q)
		}
		check("rational", d, new(big.Float).SetPrec(300).SetRat(q), f)
	}
}
