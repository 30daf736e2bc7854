package exact

import (
	"context"
	"errors"
	"math/big"
	"slices"
	"sync"
	"testing"

	"pgregory.net/rapid"
)

// drawChain draws a pencil with entries near the diagonal only, in shuffled
// order of rows and columns.
func drawChain(t *rapid.T, maxSize, width, bits int) *Pencil {
	n := rapid.IntRange(1, maxSize).Draw(t, "n")
	rows := rapid.Permutation(identity(n)).Draw(t, "rows")
	cols := rapid.Permutation(identity(n)).Draw(t, "cols")
	p := NewPencil(n)
	for i := range n {
		for j := max(0, i-width); j <= min(n-1, i+width); j++ {
			if i != j && rapid.Bool().Draw(t, "none") {
				continue
			}
			p.Add(rows[i], cols[j], drawRat(t, bits, "g"), nil)
			if rapid.Bool().Draw(t, "reactive") {
				p.Add(rows[i], cols[j], nil, drawRat(t, bits, "c"))
			}
		}
	}
	return p
}

func identity(n int) []int {
	list := make([]int, n)
	for i := range list {
		list[i] = i
	}
	return list
}

// The two methods agree on every system that both can do.
func TestFrontierAgreesWithModular(t *testing.T) {
	ctx := context.Background()
	compared := 0
	rapid.Check(t, func(t *rapid.T) {
		p := drawChain(t, 9, 2, 40)
		n := p.Size()
		f, err := p.Prepare(ctx)
		if err != nil || f.form == nil {
			return
		}
		all := make([]int, len(f.form.end))
		for b := range all {
			all[b] = b
		}
		rowAt, colAt := f.positions(all)
		var rhs, out []border
		for range rapid.IntRange(0, 2).Draw(t, "borders") {
			rhs = append(rhs, f.rhsBorder(drawVector(t, n, "rhs"), rowAt))
			out = append(out, f.outBorder(drawVector(t, n, "out"), colAt))
		}
		y := f.system(all, rhs, out)
		y.end = []int{y.n} // as one block
		plans, _ := y.frontierPlans([]bool{true})
		if plans == nil {
			return
		}
		compared++
		d1, n1, err1 := y.solveFrontier(ctx, plans, []bool{true})
		d2, n2, err2 := y.solveModular(ctx, []bool{true})
		if err1 != err2 {
			t.Fatalf("%v and %v", err1, err2)
		}
		if err1 != nil {
			return
		}
		if !d1[0].Equal(d2[0]) {
			t.Fatalf("determinants %v and %v", d1[0], d2[0])
		}
		for k := range n1 {
			if !n1[k].Equal(n2[k]) {
				t.Fatalf("numerators %d: %v and %v", k, n1[k], n2[k])
			}
		}
	})
	if compared == 0 {
		t.Error("nothing was compared")
	}
}

// Responses are the numerators over the determinant in lowest terms.
func TestResponses(t *testing.T) {
	ctx := context.Background()
	rapid.Check(t, func(t *rapid.T) {
		p := drawPencil(t, 8, 30)
		n := p.Size()
		rhs := []Vector{drawVector(t, n, "rhs"), drawVector(t, n, "rhs")}
		out := []Vector{drawVector(t, n, "out"), drawVector(t, n, "out")}
		f, err := p.Prepare(ctx)
		if err != nil {
			t.Fatal(err)
		}
		h, err := f.Responses(ctx, rhs, out)
		fresh, _ := p.Prepare(ctx)
		d := fresh.Determinant()
		num, numErr := fresh.Numerators(ctx, rhs, out)
		if numErr != nil {
			t.Fatal(numErr)
		}
		if d.IsZero() {
			// Only the pieces asked about need to be regular.
			return
		}
		if err != nil {
			t.Fatal(err)
		}
		for i := range out {
			for j := range rhs {
				want, _ := NewRatio(num[i][j], d)
				if !h[i][j].Equal(want) {
					t.Fatalf("response %d %d: %v, want %v", i, j, h[i][j], want)
				}
			}
		}
		// The order of questions does not matter.
		if !f.Determinant().Equal(d) {
			t.Fatal("determinant after the responses")
		}
	})
}

// A pencil that falls into pieces is solved piece by piece, and a question
// meets only the pieces between source and output.
func TestPiecesAreSolvedApart(t *testing.T) {
	ctx := context.Background()
	const count = 40
	p := NewPencil(3 * count)
	one := big.NewRat(1, 1)
	for k := range count {
		// Three unknowns in a loop; each piece reads the one before.
		a := 3 * k
		for i := range 3 {
			p.Add(a+i, a+i, decimal(k+i, 0), decimal(k+2*i, -6))
			p.Add(a+i, a+(i+1)%3, one, nil)
		}
		if k > 0 && k != count/2 {
			p.Add(a, a-1, decimal(k, 1), nil)
		}
	}
	// One piece is singular, at the end of the first chain.
	broken := 3 * (count/2 - 1)
	for i := range 3 {
		for j := range 3 {
			e := p.entry(broken+i, broken+j)
			e.G.SetInt64(1)
			e.C.SetInt64(0)
		}
	}
	f, err := p.Prepare(ctx)
	if err != nil {
		t.Fatal(err)
	}
	if f.Blocks() != count {
		t.Fatalf("%d pieces, want %d", f.Blocks(), count)
	}
	// The second chain is not touched by the broken piece.
	start := 3 * (count / 2)
	h, err := f.Responses(ctx, []Vector{Unit(start)}, []Vector{Unit(start), Unit(start + 5), Unit(2)})
	if err != nil {
		t.Fatal(err)
	}
	if h[0][0].Den.Degree() != 3 || h[1][0].Den.Degree() != 6 || !h[2][0].IsZero() {
		t.Errorf("degrees %d, %d; want 3, 6", h[0][0].Den.Degree(), h[1][0].Den.Degree())
	}
	for b, d := range f.dets {
		if known := d != nil; known != (b == f.form.blockOfRow[start] || b == f.form.blockOfRow[start+3]) {
			t.Errorf("determinant of piece %d known: %v", b, known)
		}
	}
	var singular *SingularError
	if _, err := f.Responses(ctx, []Vector{Unit(broken)}, []Vector{Unit(broken)}); !errors.As(err, &singular) {
		t.Errorf("response of the singular piece: %v", err)
	}
	if !f.Determinant().IsZero() {
		t.Error("the determinant is not zero")
	}
}

// Values of 290 bits, as stand-ins for irrational numbers have, and values
// spread over 600 decades.
func TestLongValues(t *testing.T) {
	ctx := context.Background()
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 6).Draw(t, "n")
		p := NewPencil(n)
		for i := range n {
			for j := range n {
				if i != j && rapid.IntRange(0, 2).Draw(t, "entry") == 0 {
					continue
				}
				v := drawRat(t, 290, "g")
				v.Mul(v, powerOfTen(rapid.IntRange(-300, 300).Draw(t, "decade")))
				w := drawRat(t, 290, "c")
				w.Mul(w, powerOfTen(rapid.IntRange(-300, 300).Draw(t, "decade")))
				p.Add(i, j, v, w)
			}
		}
		f, err := p.Prepare(ctx)
		if err != nil {
			t.Fatal(err)
		}
		d := f.Determinant()
		s := drawRat(t, 30, "s")
		if got, want := d.Eval(s), rationalDeterminant(p, s); got.Cmp(want) != 0 {
			t.Fatalf("determinant at %v: %v, want %v", s, got, want)
		}
	})
}

// A ladder of degree 400 agrees with the three-term recurrence of
// tridiagonal determinants (T. Muir, A Treatise on the Theory of Determinants,
// 1882, on continuants), evaluated at rational points.
func TestLadderOfDegree400(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	const sections = 200
	p, rhs, input, _ := ladder(sections)
	f, err := p.Prepare(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	num, err := f.Numerators(context.Background(), []Vector{rhs}, []Vector{input})
	if err != nil {
		t.Fatal(err)
	}
	d := f.Determinant()
	if d.Degree() != 2*sections {
		t.Fatalf("degree %d", d.Degree())
	}
	for _, s := range []*big.Rat{big.NewRat(-3, 1), big.NewRat(400001, 3), big.NewRat(-7, 10001)} {
		n := 2 * sections
		at := func(i, j int) *big.Rat {
			for _, e := range p.rows[i] {
				if e.Col == j {
					v := new(big.Rat).Mul(e.C, s)
					return v.Add(v, e.G)
				}
			}
			return new(big.Rat)
		}
		// From the far end: with[k] is the determinant of rows and columns k….
		with := make([]*big.Rat, n+2)
		with[n], with[n+1] = big.NewRat(1, 1), new(big.Rat)
		for k := n - 1; k >= 0; k-- {
			with[k] = new(big.Rat).Mul(at(k, k), with[k+1])
			if k+1 < n {
				t := new(big.Rat).Mul(at(k, k+1), at(k+1, k))
				with[k].Sub(with[k], t.Mul(t, with[k+2]))
			}
		}
		if got := d.Eval(s); got.Cmp(with[0]) != 0 {
			t.Errorf("determinant at %v is wrong", s)
		}
		// The right-hand side is −1 in equation 0, the output unknown 0.
		if got := num[0][0].Eval(s); got.Cmp(with[1].Neg(with[1])) != 0 {
			t.Errorf("numerator at %v is wrong", s)
		}
	}
}

// Outputs along a cascade are solved in few groups, with the answers they
// would have alone.
func TestOutputsAlongCascade(t *testing.T) {
	ctx := context.Background()
	const stages = 12
	p := NewPencil(2 * stages)
	for k := range 2 * stages {
		p.Add(k, k, decimal(k, 0), decimal(k+3, -3))
		if k%2 == 0 {
			p.Add(k, k+1, big.NewRat(1, 1), nil)
			p.Add(k+1, k, big.NewRat(-2, 1), nil)
		}
		if k > 0 {
			p.Add(k, k-1, decimal(k, -1), nil)
		}
	}
	var out []Vector
	for k := range 2 * stages {
		out = append(out, Unit(k))
	}
	f, err := p.Prepare(ctx)
	if err != nil {
		t.Fatal(err)
	}
	if f.Blocks() != stages {
		t.Fatalf("%d pieces", f.Blocks())
	}
	if n := len(f.groupOuts(out, f.reachedFrom([]Vector{Unit(0)}))); n > 5 {
		t.Errorf("%d groups", n)
	}
	together, err := f.Responses(ctx, []Vector{Unit(0)}, out)
	if err != nil {
		t.Fatal(err)
	}
	for k := range out {
		g, _ := p.Prepare(ctx)
		alone, err := g.Responses(ctx, []Vector{Unit(0)}, out[k:k+1])
		if err != nil {
			t.Fatal(err)
		}
		if !alone[0][0].Equal(together[k][0]) || alone[0][0].Den.Degree() != k/2*2+2 {
			t.Errorf("output %d: %v alone, %v together", k, alone[0][0], together[k][0])
		}
	}
}

// The bounds that decide the number of points and primes hold for the true
// coefficients, and are tight enough to be worth their name.
func TestBoundsHold(t *testing.T) {
	ctx := context.Background()
	for _, n := range benchmarkNetworks {
		if n.size > 50 {
			continue
		}
		p, rhs, input, _ := n.build(n.size)
		f, err := p.Prepare(ctx)
		if err != nil {
			t.Fatal(err)
		}
		rowAt, colAt := f.positions([]int{0})
		y := f.system([]int{0}, []border{f.rhsBorder(rhs, rowAt)}, []border{f.outBorder(input, colAt)})
		dets, nums, err := y.solveModular(ctx, []bool{true})
		if err != nil {
			t.Fatal(err)
		}
		detBits, numBits := y.coefficientBounds()
		detDegree, numDegree := y.degreeBounds()
		check := func(what string, q Poly, bits float64, degree int) {
			got := float64(maxBits(q.c))
			if got-1 > bits || q.Degree() > degree {
				t.Errorf("%v: %s has %v bits and degree %d, bounds %v and %d", n, what, got, q.Degree(), bits, degree)
			}
			t.Logf("%v: %s of %v bits, bound %.0f; degree %d, bound %d", n, what, got, bits, q.Degree(), degree)
		}
		check("determinant", dets[0], detBits[0], detDegree[0])
		check("numerator", nums[0], numBits[0], numDegree)
	}
}

// drawReciprocal draws a pencil that becomes symmetric when its rows are
// multiplied by certain numbers.
func drawReciprocal(t *rapid.T, maxSize int) *Pencil {
	n := rapid.IntRange(1, maxSize).Draw(t, "n")
	p := NewPencil(n)
	factor := make([]*big.Rat, n)
	for i := range factor {
		factor[i] = drawRat(t, 8, "factor")
		if factor[i].Sign() == 0 {
			factor[i].SetInt64(-1)
		}
	}
	for i := range n {
		for j := i; j < n; j++ {
			if rapid.IntRange(0, 2).Draw(t, "entry") == 0 {
				continue
			}
			g, c := drawRat(t, 16, "g"), drawRat(t, 16, "c")
			p.Add(i, j, new(big.Rat).Mul(g, factor[i]), new(big.Rat).Mul(c, factor[i]))
			if i != j {
				p.Add(j, i, new(big.Rat).Mul(g, factor[j]), new(big.Rat).Mul(c, factor[j]))
			}
		}
	}
	return p
}

// The symmetric elimination agrees with the general one.
func TestSymmetricElimination(t *testing.T) {
	ctx := context.Background()
	compared := 0
	rapid.Check(t, func(t *rapid.T) {
		p := drawReciprocal(t, 8)
		n := p.Size()
		f, err := p.Prepare(ctx)
		if err != nil || f.form == nil {
			return
		}
		all := identity(len(f.form.end))
		rowAt, colAt := f.positions(all)
		rhs := []border{f.rhsBorder(drawVector(t, n, "rhs"), rowAt), f.rhsBorder(drawVector(t, n, "rhs"), rowAt)}
		out := []border{f.outBorder(drawVector(t, n, "out"), colAt)}
		y := f.system(all, rhs, out)
		y.end = []int{y.n} // as one block
		m := takeModuli(1)[0]
		sym := y.symmetric()
		if sym == nil {
			return
		}
		plan := y.eliminateSymmetric(m, m.fromInt64(987654321), sym)
		general, _ := y.eliminate(m, m.fromInt64(123456789))
		if plan == nil || general == nil {
			return // singular, or no pivots on the diagonal
		}
		compared++
		d1, n1, err1 := y.newModularRun(plan, []bool{true}).solve(ctx, y, []bool{true})
		d2, n2, err2 := y.newModularRun(general, []bool{true}).solve(ctx, y, []bool{true})
		if err1 != nil || err2 != nil {
			t.Fatal(err1, err2)
		}
		if !d1[0].Equal(d2[0]) {
			t.Fatalf("determinants %v and %v", d1[0], d2[0])
		}
		for k := range n1 {
			if !n1[k].Equal(n2[k]) {
				t.Fatalf("numerators %v and %v", n1[k], n2[k])
			}
		}
	})
	if compared == 0 {
		t.Error("nothing was compared")
	}
}

// A large pencil that is singular by its values, not by its pattern: one
// equation is the sum of two others.
func TestLargeSingularPencil(t *testing.T) {
	ctx := context.Background()
	p, rhs, input, output := mesh(8)
	n := p.Size()
	a, b, sum := 9, n-4, n-1
	p.rows[sum] = nil
	for _, i := range []int{a, b} {
		for _, e := range p.rows[i] {
			p.Add(sum, e.Col, e.G, e.C)
		}
	}
	f, err := p.Prepare(ctx)
	if err != nil {
		t.Fatal(err)
	}
	if f.form == nil {
		t.Fatal("the pattern alone makes it singular")
	}
	if !f.Determinant().IsZero() {
		t.Error("the determinant is not zero")
	}
	var singular *SingularError
	if _, err := f.Responses(ctx, []Vector{rhs}, []Vector{output}); !errors.As(err, &singular) {
		t.Fatalf("error %v", err)
	}
	if !slices.Equal(singular.Rows, []int{a, b, sum}) {
		t.Errorf("equations %v are named, want %v", singular.Rows, []int{a, b, sum})
	}
	if len(singular.Cols) == 0 {
		t.Error("no unknowns are named")
	}
	// The adjugate of a matrix of rank n−1 has rank one.
	num, err := f.Numerators(ctx, []Vector{Unit(a), Unit(b)}, []Vector{input, output})
	if err != nil {
		t.Fatal(err)
	}
	if num[0][0].IsZero() || !num[0][0].Mul(num[1][1]).Equal(num[0][1].Mul(num[1][0])) {
		t.Error("the adjugate does not have rank one")
	}
	if _, _, err := p.SolveAt(ctx, big.NewRat(1, 3), big.NewRat(1000, 7), rhs); !errors.As(err, &singular) {
		t.Errorf("SolveAt: %v", err)
	}
}

// One prepared pencil serves several goroutines, and large ones share their
// primes among processors.
func TestPreparedIsShared(t *testing.T) {
	ctx := context.Background()
	p, rhs, input, output := mesh(9)
	f, err := p.Prepare(ctx)
	if err != nil {
		t.Fatal(err)
	}
	results := make([]Ratio, 4)
	var wg sync.WaitGroup
	for i := range results {
		wg.Go(func() {
			out := input
			if i%2 == 1 {
				out = output
			}
			h, err := f.Responses(ctx, []Vector{rhs}, []Vector{out})
			if err != nil {
				t.Error(err)
				return
			}
			results[i] = h[0][0]
			f.Determinant()
		})
	}
	wg.Wait()
	if !results[0].Equal(results[2]) || !results[1].Equal(results[3]) || results[0].Equal(results[1]) {
		t.Error("the answers differ")
	}
	s := big.NewRat(-123, 7)
	x, _, err := p.SolveAt(ctx, s, new(big.Rat), rhs)
	if err != nil {
		t.Fatal(err)
	}
	if v, ok := results[0].Eval(s); !ok || v.Cmp(x[0]) != 0 {
		t.Error("the response is not the solution at a point")
	}
}
