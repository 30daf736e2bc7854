package exact

import (
	"context"
	"errors"
	"math/big"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// drawPencil draws a pencil with a few entries per row; diagonals are likely.
func drawPencil(t *rapid.T, maxSize, bits int) *Pencil {
	n := rapid.IntRange(0, maxSize).Draw(t, "n")
	p := NewPencil(n)
	value := func(label string) *big.Rat {
		if rapid.Bool().Draw(t, label+" none") {
			return nil
		}
		return drawRat(t, bits, label)
	}
	for i := range n {
		if rapid.IntRange(0, 4).Draw(t, "diagonal") > 0 {
			p.Add(i, i, value("g"), value("c"))
		}
		for range rapid.IntRange(0, 3).Draw(t, "entries") {
			p.Add(i, rapid.IntRange(0, n-1).Draw(t, "col"), value("g"), value("c"))
		}
	}
	return p
}

func drawVector(t *rapid.T, n int, label string) Vector {
	var v Vector
	if n == 0 {
		return v
	}
	for range rapid.IntRange(0, 3).Draw(t, label+" count") {
		v = append(v, Component{rapid.IntRange(0, n-1).Draw(t, label), drawRat(t, 20, label)})
	}
	return v
}

// rationalDeterminant is plain Gaussian elimination at a rational point.
func rationalDeterminant(p *Pencil, s *big.Rat) *big.Rat {
	n := p.Size()
	a := make([][]*big.Rat, n)
	for i := range a {
		a[i] = make([]*big.Rat, n)
		for j := range a[i] {
			a[i][j] = new(big.Rat)
		}
	}
	for e := range p.Entries() {
		a[e.Row][e.Col].Mul(e.C, s)
		a[e.Row][e.Col].Add(a[e.Row][e.Col], e.G)
	}
	d := big.NewRat(1, 1)
	var t big.Rat
	for k := range a {
		piv := k
		for piv < n && a[piv][k].Sign() == 0 {
			piv++
		}
		if piv == n {
			return new(big.Rat)
		}
		if piv != k {
			a[k], a[piv] = a[piv], a[k]
			d.Neg(d)
		}
		d.Mul(d, a[k][k])
		for i := k + 1; i < n; i++ {
			f := new(big.Rat).Quo(a[i][k], a[k][k])
			for j := k; j < n; j++ {
				a[i][j].Sub(a[i][j], t.Mul(f, a[k][j]))
			}
		}
	}
	return d
}

func TestPencilAgainstElimination(t *testing.T) {
	ctx := context.Background()
	rapid.Check(t, func(t *rapid.T) {
		p := drawPencil(t, 8, 60)
		n := p.Size()
		f, err := p.Prepare(ctx)
		if err != nil {
			t.Fatal(err)
		}
		d := f.Determinant()
		if d.Degree() > n {
			t.Fatalf("degree %d of a pencil of size %d", d.Degree(), n)
		}
		rhs := []Vector{drawVector(t, n, "rhs"), drawVector(t, n, "rhs")}
		out := []Vector{drawVector(t, n, "out"), drawVector(t, n, "out"), drawVector(t, n, "out")}
		num, err := f.Numerators(ctx, rhs, out)
		if err != nil {
			t.Fatal(err)
		}
		for k := range int64(3) {
			s := drawRat(t, 30, "s")
			s.Add(s, big.NewRat(k, 7))
			if got, want := d.Eval(s), rationalDeterminant(p, s); got.Cmp(want) != 0 {
				t.Fatalf("determinant at %v: %v, want %v", s, got, want)
			}
			for i := range out {
				for j := range rhs {
					want := rationalDeterminant(p.bordered(rhs[j], out[i]), s)
					if got := num[i][j].Eval(s); got.Cmp(want.Neg(want)) != 0 {
						t.Fatalf("numerator %d %d at %v: %v, want %v", i, j, s, got, want)
					}
				}
			}
		}
		rows, cols := p.Kernel(ctx)
		if d.IsZero() != (rows != nil) || d.IsZero() != (cols != nil) {
			t.Fatalf("kernel %v, %v of a pencil with determinant %v", rows, cols, d)
		}
	})
}

func TestSolveAt(t *testing.T) {
	ctx := context.Background()
	rapid.Check(t, func(t *rapid.T) {
		p := drawPencil(t, 7, 40)
		n := p.Size()
		re, im := drawRat(t, 20, "re"), drawRat(t, 20, "im")
		if rapid.Bool().Draw(t, "real") {
			im = new(big.Rat)
		}
		b := drawVector(t, n, "b")
		x, y, err := p.SolveAt(ctx, re, im, b)
		f, _ := p.Prepare(ctx)
		dr, di := f.Determinant().EvalGaussian(re, im)
		var singular *SingularError
		if errors.As(err, &singular) {
			if dr.Sign() != 0 || di.Sign() != 0 {
				t.Fatalf("%v with determinant %v, %v", err, dr, di)
			}
			if len(singular.Rows) == 0 || len(singular.Cols) == 0 {
				t.Fatal("nothing is at fault")
			}
			return
		}
		if err != nil {
			t.Fatal(err)
		}
		if u, v, err := plainSolveAt(ctx, p, re, im, b); err != nil {
			t.Fatal(err)
		} else {
			for i := range u {
				if u[i].Cmp(x[i]) != 0 || v[i].Cmp(y[i]) != 0 {
					t.Fatalf("component %d: %v + j %v, want %v + j %v", i, x[i], y[i], u[i], v[i])
				}
			}
		}
		// The residual is zero.
		r := make([]*big.Rat, 2*n)
		for i := range r {
			r[i] = new(big.Rat)
		}
		for _, c := range b {
			r[c.Index].Add(r[c.Index], c.Value)
		}
		for e := range p.Entries() {
			v := gaussian{new(big.Rat).Add(e.G, new(big.Rat).Mul(e.C, re)), new(big.Rat).Mul(e.C, im)}
			w := gaussian{r[e.Row], r[n+e.Row]}.subMul(v, gaussian{x[e.Col], y[e.Col]})
			r[e.Row], r[n+e.Row] = w.re, w.im
		}
		for i := range r {
			if r[i].Sign() != 0 {
				t.Fatalf("residual %v in equation %d", r[i], i%max(n, 1))
			}
		}
	})
}

func TestKernelNamesTheFault(t *testing.T) {
	one, minus := big.NewRat(1, 1), big.NewRat(-1, 1)
	// Unknowns 0, 1, 2; equations 1 and 2 say the same about 1 and 2.
	p := NewPencil(3)
	p.Add(0, 0, one, one)
	p.Add(0, 1, minus, nil)
	p.Add(1, 1, one, nil)
	p.Add(1, 2, minus, nil)
	p.Add(2, 1, big.NewRat(-2, 1), nil)
	p.Add(2, 2, big.NewRat(2, 1), nil)
	rows, cols := p.Kernel(context.Background())
	if !slices.Equal(rows, []int{1, 2}) || !slices.Equal(cols, []int{0, 1, 2}) {
		t.Errorf("kernel %v, %v; want [1 2], [0 1 2]", rows, cols)
	}
	_, _, err := p.SolveAt(context.Background(), one, one, Unit(0))
	var singular *SingularError
	if !errors.As(err, &singular) || !slices.Equal(singular.Rows, []int{1, 2}) {
		t.Errorf("SolveAt: %v", err)
	}
}

func TestPencilCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	p := NewPencil(2)
	p.Add(0, 0, big.NewRat(1, 1), nil)
	p.Add(1, 1, big.NewRat(1, 1), nil)
	if _, err := p.Prepare(ctx); !errors.Is(err, context.Canceled) {
		t.Errorf("Prepare: %v", err)
	}
	if _, _, err := p.SolveAt(ctx, new(big.Rat), new(big.Rat), nil); !errors.Is(err, context.Canceled) {
		t.Errorf("SolveAt: %v", err)
	}
}
