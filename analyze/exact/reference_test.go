package exact

import (
	"bufio"
	"context"
	"math/big"
	"os"
	"strconv"
	"strings"
	"testing"
)

// The references in testdata were computed by PARI/GP 2.15.2 (the PARI Group,
// Univ. Bordeaux) with the scripts beside them.

// eachLine calls visit with the words of every line of a reference file.
func eachLine(t *testing.T, name string, visit func(words []string)) {
	t.Helper()
	file, err := os.Open("testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	lines := bufio.NewScanner(file)
	lines.Buffer(nil, 1<<20)
	for lines.Scan() {
		visit(strings.Fields(lines.Text()))
	}
	if err := lines.Err(); err != nil {
		t.Fatal(err)
	}
}

func readRat(t *testing.T, s string) *big.Rat {
	t.Helper()
	r, ok := new(big.Rat).SetString(s)
	if !ok {
		t.Fatalf("not a number: %q", s)
	}
	return r
}

func readIndex(t *testing.T, s string) int {
	t.Helper()
	i, err := strconv.Atoi(s)
	if err != nil {
		t.Fatal(err)
	}
	return i
}

func readPoly(t *testing.T, words []string) Poly {
	t.Helper()
	c := make([]*big.Rat, len(words))
	for i, w := range words {
		c[i] = readRat(t, w)
	}
	return NewPoly(c...)
}

func TestReferenceDeterminants(t *testing.T) {
	counts := referencePencils(t, "determinants.txt")
	if counts["det"] < 15 || counts["adj"] < 100 || counts["solve"] < 10 {
		t.Errorf("too little was checked: %v", counts)
	}
}

// Near cancellation, numbers over 600 decades, and networks of degree 400.
func TestHardReferenceDeterminants(t *testing.T) {
	if testing.Short() {
		t.Skip("long arithmetic in one thread: run without -short")
	}
	counts := referencePencils(t, "adversarial.txt")
	if counts["det"] < 6 || counts["adj"] < 40 || counts["solve"] < 6 || counts["modulo"] < 3 {
		t.Errorf("too little was checked: %v", counts)
	}
}

func referencePencils(t *testing.T, file string) (counts map[string]int) {
	ctx := context.Background()
	var (
		name  string
		p     *Pencil
		f     *Prepared
		scale *big.Rat
	)
	counts = map[string]int{}
	eachLine(t, file, func(w []string) {
		counts[w[0]]++
		switch w[0] {
		case "pencil":
			name, p, f = w[1], NewPencil(readIndex(t, w[2])), nil
		case "build":
			name, f = w[1]+" "+w[2], nil
			for _, n := range benchmarkNetworks {
				if n.name == w[1] {
					p, _, _, _ = n.build(readIndex(t, w[2]))
				}
			}
		case "scale":
			scale = readRat(t, w[1])
		case "modulo":
			q, err := p.Prepare(ctx)
			if err != nil {
				t.Fatal(err)
			}
			d := q.Determinant().Scale(scale)
			prime := readRat(t, w[1]).Num()
			c, den := d.Ints()
			if len(c) != len(w)-2 || !den.IsInt64() || den.Int64() != 1 {
				t.Fatalf("%s: degree %d, want %d; denominator %v", name, len(c)-1, len(w)-3, den)
			}
			for i, v := range c {
				if v.Mod(v, prime); v.String() != w[i+2] {
					t.Errorf("%s: coefficient %d modulo %v is %v, want %s", name, i, prime, v, w[i+2])
				}
			}
		case "entry":
			p.Add(readIndex(t, w[1]), readIndex(t, w[2]), readRat(t, w[3]), readRat(t, w[4]))
		case "det":
			var err error
			if f, err = p.Prepare(ctx); err != nil {
				t.Fatal(err)
			}
			if got, want := f.Determinant(), readPoly(t, w[1:]); !got.Equal(want) {
				t.Errorf("%s: determinant %v, want %v", name, got, want)
			}
		case "adj":
			row, col := readIndex(t, w[1]), readIndex(t, w[2])
			n, err := f.Numerators(ctx, []Vector{Unit(col)}, []Vector{Unit(row)})
			if err != nil {
				t.Fatal(err)
			}
			if want := readPoly(t, w[3:]); !n[0][0].Equal(want) {
				t.Errorf("%s: adjugate (%d, %d) %v, want %v", name, row, col, n[0][0], want)
			}
		case "solve":
			x, y, err := p.SolveAt(ctx, readRat(t, w[1]), readRat(t, w[2]), Unit(readIndex(t, w[3])))
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			for i := range x {
				if x[i].Cmp(readRat(t, w[4+2*i])) != 0 || y[i].Cmp(readRat(t, w[5+2*i])) != 0 {
					t.Errorf("%s: solution at %s + j %s, unknown %d: %v + j %v", name, w[1], w[2], i, x[i], y[i])
				}
			}
		default:
			t.Fatalf("unknown line %q", w[0])
		}
	})
	return counts
}

func TestReferencePolynomials(t *testing.T) {
	var (
		name    string
		p       Poly
		roots   []Interval
		factors []Factor
		counts  = map[string]int{}
	)
	finish := func() {
		if len(roots) > 0 {
			t.Errorf("%s: %d roots too many", name, len(roots))
		}
		if len(factors) > 0 {
			t.Errorf("%s: %d factors too many", name, len(factors))
		}
	}
	end := func(s string) *big.Rat {
		if s == "-" {
			return nil
		}
		return readRat(t, s)
	}
	width := powerOfTen(-40)
	eachLine(t, "polynomials.txt", func(w []string) {
		counts[w[0]]++
		switch w[0] {
		case "poly":
			finish()
			name, p = w[1], readPoly(t, w[2:])
			roots, factors = IsolateRealRoots(p, nil, nil), SquareFree(p)
		case "roots":
			lo, hi, want := end(w[1]), end(w[2]), readIndex(t, w[3])
			if got := SturmCount(p, lo, hi); got != want {
				t.Errorf("%s: Sturm counts %d roots in [%s, %s], want %d", name, got, w[1], w[2], want)
			}
			if got := IsolateRealRoots(p, lo, hi); len(got) != want {
				t.Errorf("%s: %d intervals in [%s, %s], want %d", name, len(got), w[1], w[2], want)
			}
		case "real":
			if len(roots) == 0 {
				t.Fatalf("%s: a root is missing", name)
			}
			v := RefineRoot(p, roots[0], width)
			if lo, hi := readRat(t, w[1]), readRat(t, w[2]); v.Hi.Cmp(lo) < 0 || v.Lo.Cmp(hi) > 0 {
				t.Errorf("%s: root in [%v, %v], want one in [%v, %v]", name, v.Lo, v.Hi, lo, hi)
			}
			roots = roots[1:]
		case "factor":
			if len(factors) == 0 {
				t.Fatalf("%s: a factor is missing", name)
			}
			want := Factor{readPoly(t, w[2:]), readIndex(t, w[1])}
			if f := factors[0]; f.Multiplicity != want.Multiplicity || !f.Poly.Equal(want.Poly) {
				t.Errorf("%s: factor (%v)^%d, want (%v)^%d", name, f.Poly, f.Multiplicity, want.Poly, want.Multiplicity)
			}
			factors = factors[1:]
		case "gcd":
			k := 1
			for w[k] != "/" {
				k++
			}
			if got, want := GCD(p, readPoly(t, w[1:k])), readPoly(t, w[k+1:]); !got.Equal(want) {
				t.Errorf("%s: gcd %v, want %v", name, got, want)
			}
		default:
			t.Fatalf("unknown line %q", w[0])
		}
	})
	finish()
	if counts["poly"] < 8 || counts["real"] < 40 || counts["gcd"] < 8 {
		t.Errorf("too little was checked: %v", counts)
	}
}
