package float_test

import (
	"context"
	"errors"
	"math"
	"math/big"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"portlight/analyze/exact"
	"portlight/analyze/float"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// crossNetwork reads a small network from bytes: the number of nodes, then five
// bytes for every element (kind, ends, a third node or earlier element,
// mantissa, exponent). Whatever the bytes, it is a network; it may have no
// solution.
func crossNetwork(data []byte) *network.Network {
	if len(data) == 0 {
		data = []byte{0}
	}
	n := &network.Network{Nodes: int(data[0])%7 + 2}
	for data = data[1:]; len(data) >= 5; data = data[5:] {
		n.Elements = append(n.Elements, crossElement(n, data))
	}
	return n
}

func crossElement(n *network.Network, d []byte) network.Element {
	from, to, third := int(d[1]>>4)%n.Nodes, int(d[1]&15)%n.Nodes, int(d[2])%n.Nodes
	value := func(centre int) number.Exact {
		r := big.NewRat(int64(d[3])+1, 16)
		e := int64(d[4])%15 - 7 + int64(centre)
		power := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(max(e, -e)), nil))
		if e < 0 {
			power.Inv(power)
		}
		return number.FromRat(r.Mul(r, power))
	}
	e := network.Element{From: from, To: to}
	voltage := network.Probe{Quantity: network.NodePair, Plus: third, Minus: int(d[2]>>4) % n.Nodes}
	controlled := func(centre int) {
		e.Controls = []network.Control{{Numerator: []number.Exact{value(centre)}, Of: []network.Probe{voltage}}}
		if d[4] >= 128 {
			e.Controls[0].Denominator = []number.Exact{number.FromInt(1), value(-6)}
		}
		if d[4]%4 == 1 && len(n.Elements) > 0 {
			e.Controls[0].Of = []network.Probe{{Quantity: network.ElementFlow, Element: int(d[2]) % len(n.Elements)}}
		}
	}
	switch d[0] % 16 {
	case 0, 1, 2:
		e.Kind, e.Value = network.Resistor, value(2)
	case 3, 4:
		e.Kind, e.Value = network.Inductor, value(-4)
	case 5, 6:
		e.Kind, e.Value = network.Capacitor, value(-8)
	case 7:
		e.Kind = network.VoltageSource
	case 8:
		e.Kind = network.CurrentSource
	case 9:
		e.Kind = network.DependentCurrent
		controlled(-3)
	case 10:
		e.Kind = network.DependentVoltage
		controlled(1)
	case 11:
		e = network.Element{Kind: network.OpAmp, Plus: from, Minus: to, Output: third}
		if d[4] >= 128 {
			g, a := value(7), value(5)
			e.GainBandwidth, e.DCGain = &g, &a
		}
	case 12:
		e = network.Element{Kind: network.Transformer, Windings: []network.Winding{
			{Plus: from, Turns: number.FromInt(int64(d[3])%9 + 1)}, {Plus: to, Minus: third, Turns: number.FromInt(int64(d[4])%9 + 1)},
		}}
	case 13:
		coils := []int{}
		for i, other := range n.Elements {
			if other.Kind == network.Inductor {
				coils = append(coils, i)
			}
		}
		if len(coils) < 2 {
			e.Kind = network.Open
			break
		}
		k := int(d[1]) % (len(coils) - 1)
		e = network.Element{Kind: network.Coupling, Coils: [2]int{coils[k], coils[k+1]}, Value: number.FromRat(big.NewRat(int64(d[3])+1, 257))}
	case 14:
		e.Kind = network.Short
	case 15:
		e.Kind, e.Admittance = network.Immittance, d[4] >= 128
		e.Numerator = []number.Exact{value(2), value(-4), value(-9)}
		e.Denominator = []number.Exact{number.FromInt(1), number.FromRat(big.NewRat(int64(d[2])+1, 1000000))}
	}
	return e
}

// crossQuantities are all node voltages and element currents there are, and the
// columns of all sources, of the memories and of a current into node 1.
func crossQuantities(sys *network.System) (outs []network.Output, cols []network.Column) {
	n := sys.Network()
	for v := 1; v < n.Nodes; v++ {
		if o, p := sys.NodeVoltage(v, 0); p == nil {
			outs = append(outs, o)
		}
	}
	for i, e := range n.Elements {
		if o, p := sys.ElementCurrent(i); p == nil {
			outs = append(outs, o)
		}
		if e.Kind == network.VoltageSource || e.Kind == network.CurrentSource {
			if c, p := sys.InputColumn(i); p == nil {
				cols = append(cols, c)
			}
		}
	}
	if c, p := sys.InjectColumn(1, 0); p == nil {
		cols = append(cols, c)
	}
	for k := range sys.Memories() {
		cols = append(cols, sys.StateColumn(k))
	}
	return outs, cols
}

// solvedValue is what an output shows at s = re + j·im when x solves the equations.
func solvedValue(re, im *big.Rat, o network.Output, c network.Column, xr, xi []*big.Rat) (vr, vi *big.Rat) {
	vr, vi = new(big.Rat), new(big.Rat)
	add := func(to, a, b *big.Rat, sign int64) {
		t := new(big.Rat).Mul(a, b)
		to.Add(to, t.Mul(t, big.NewRat(sign, 1)))
	}
	for _, g := range o.G {
		add(vr, g.Value, xr[g.Index], 1)
		add(vi, g.Value, xi[g.Index], 1)
	}
	for _, g := range o.C {
		sr, si := new(big.Rat).Mul(g.Value, re), new(big.Rat).Mul(g.Value, im)
		add(vr, sr, xr[g.Index], 1)
		add(vr, si, xi[g.Index], -1)
		add(vi, sr, xi[g.Index], 1)
		add(vi, si, xr[g.Index], 1)
	}
	for k, v := range o.Input {
		if w := c.Input[k]; w != nil {
			add(vr, v, w, 1)
		}
	}
	for k, v := range o.State {
		if w := c.State[k]; w != nil {
			add(vr, v, w, 1)
		}
	}
	return vr, vi
}

// condition estimates the condition number of the matrix at jω in the largest
// norm, rows and then columns divided by their greatest entries: its inverse is
// found by elimination with the greatest pivots. It is good to a few digits where
// it is below 1e14.
func condition(sys *network.System, omega float64) float64 {
	n := sys.Size()
	a := make([][]complex128, n) // the matrix and beside it the unit matrix
	for i := range a {
		a[i] = make([]complex128, 2*n)
	}
	for e := range sys.Pencil().Entries() {
		g, _ := e.G.Float64()
		c, _ := e.C.Float64()
		a[e.Row][e.Col] = complex(g, c*omega)
	}
	for range 3 {
		scaleRows(n, func(i, j int) *complex128 { return &a[i][j] })
		scaleRows(n, func(i, j int) *complex128 { return &a[j][i] })
	}
	norm := func(from int) (most float64) {
		for _, row := range a {
			sum := 0.0
			for _, x := range row[from : from+n] {
				sum += cmplx.Abs(x)
			}
			most = math.Max(most, sum)
		}
		return most
	}
	before := norm(0)
	for i := range n {
		a[i][n+i] = 1
	}
	used, columns := make([]bool, n), make([]bool, n)
	for range n {
		row, col := -1, -1
		for i := range n {
			for j := range n {
				if !used[i] && !columns[j] && (row < 0 || cmplx.Abs(a[i][j]) > cmplx.Abs(a[row][col])) {
					row, col = i, j
				}
			}
		}
		pivot := a[row][col]
		if pivot == 0 {
			return math.Inf(1)
		}
		used[row], columns[col] = true, true
		for k := range a[row] {
			a[row][k] /= pivot
		}
		for i := range n {
			if f := a[i][col]; i != row && f != 0 {
				for k := range a[i] {
					a[i][k] -= f * a[row][k]
				}
			}
		}
	}
	return before * norm(n) // the rows of the inverse in another order
}

// scaleRows divides every row of n by its greatest entry.
func scaleRows(n int, at func(i, j int) *complex128) {
	for i := range n {
		most := 0.0
		for j := range n {
			most = math.Max(most, cmplx.Abs(*at(i, j)))
		}
		if most == 0 {
			continue
		}
		for j := range n {
			*at(i, j) /= complex(most, 0)
		}
	}
}

// FuzzThreeWays compares, on any network, what it shows at a frequency by three
// ways that share nothing but the equations: exact network functions evaluated
// there, exact elimination at that point, and double precision. The first two
// must be equal, the third within the radius it states. At another point off the
// imaginary axis the first two must be equal, too.
func FuzzThreeWays(f *testing.F) {
	f.Add([]byte{2, 8, 0x10, 0, 0, 0, 0, 0x12, 0, 200, 7, 3, 0x23, 0, 16, 6, 5, 0x30, 0, 30, 7, 0, 0x30, 0, 99, 8}, int64(1000), int8(2), true)
	f.Add([]byte{3, 7, 0x10, 0, 0, 0, 0, 0x12, 0, 15, 7, 11, 0x02, 3, 0, 0, 5, 0x23, 0, 15, 7, 0, 0x23, 0, 9, 9, 0, 0x30, 0, 9, 7}, int64(-77), int8(4), false)
	f.Add([]byte{1, 12, 0x12, 0, 3, 4, 0, 0x10, 0, 20, 7, 0, 0x20, 0, 20, 7, 8, 0x10, 0, 0, 0}, int64(5), int8(0), false)
	f.Add([]byte{2, 3, 0x10, 0, 15, 8, 3, 0x20, 0, 15, 8, 13, 0x12, 0, 255, 0, 5, 0x10, 0, 15, 7, 5, 0x20, 0, 15, 7, 0, 0x12, 0, 50, 12}, int64(314159), int8(0), true)
	f.Add([]byte{1, 3, 0x10, 0, 15, 11, 5, 0x10, 0, 15, 15, 8, 0x10, 0, 0, 0}, int64(1), int8(0), false)
	f.Fuzz(func(t *testing.T, data []byte, w int64, exponent int8, rounded bool) {
		if len(data) > 81 {
			return
		}
		sys, _ := network.Assemble(crossNetwork(data))
		if sys == nil || sys.Size() == 0 {
			return
		}
		omega := new(big.Rat).SetInt64(w % 1000000)
		power := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(exponent%6, -(exponent%6)))), nil))
		if exponent < 0 {
			power.Inv(power)
		}
		if omega.Abs(omega).Mul(omega, power); rounded {
			x, _ := omega.Float64()
			omega.SetFloat64(x)
		}
		outs, cols := crossQuantities(sys)
		if len(outs) == 0 || len(cols) == 0 {
			return
		}
		crossCheck(t, sys, omega, rounded, outs, cols)
	})
}

// The same on networks that are joined up and so have an answer mostly.
func TestThreeWays(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 17))
	tally := map[outcome]int{}
	const networks = 120
	for range networks {
		data := []byte{byte(r.IntN(7))}
		nodes := int(data[0]) + 2
		for v := 1; v < nodes; v++ {
			data = append(data, byte(r.IntN(7)), byte(r.IntN(v)<<4|v), byte(r.IntN(256)), byte(r.IntN(256)), byte(r.IntN(256)))
		}
		for range r.IntN(10) {
			data = append(data, byte(r.IntN(16)), byte(r.IntN(nodes)<<4|r.IntN(nodes)), byte(r.IntN(256)), byte(r.IntN(256)), byte(r.IntN(256)))
		}
		sys, _ := network.Assemble(crossNetwork(data))
		if sys == nil {
			tally[refused]++
			continue
		}
		omega := new(big.Rat).SetFloat64(math.Exp(r.Float64()*25 - 3))
		outs, cols := crossQuantities(sys)
		tally[crossCheck(t, sys, omega, r.IntN(2) == 0, outs, cols)]++
		if t.Failed() {
			t.Fatalf("%v at %v", data, omega)
		}
	}
	t.Logf("%d networks: %d compared three ways, %d singular, %d refused in double precision for their condition, %d without equations", networks, tally[compared], tally[singular], tally[imprecise], tally[refused])
	if tally[compared] < networks/2 || tally[singular] == 0 {
		t.Errorf("too little was compared: %v", tally)
	}
}

// outcome is how a comparison went.
type outcome int

const (
	compared outcome = iota
	singular
	imprecise
	refused
)

func crossCheck(t *testing.T, sys *network.System, omega *big.Rat, rounded bool, outs []network.Output, cols []network.Column) outcome {
	ctx := context.Background()
	solver, err := float.New(sys)
	if err != nil {
		t.Fatal(err)
	}
	approximate, err := atFrequency(solver, omega, rounded, outs, cols)
	det, detErr := sys.Determinant(ctx)
	if detErr != nil {
		t.Fatal(detErr)
	}
	dr, di := det.EvalGaussian(new(big.Rat), omega)
	if dr.Sign() == 0 && di.Sign() == 0 {
		if err == nil {
			t.Fatalf("double precision answers %v where the determinant is 0", approximate.Values)
		}
		for _, c := range cols {
			_, _, solveErr := sys.Pencil().SolveAt(ctx, new(big.Rat), omega, c.RHS)
			if _, ok := errors.AsType[*exact.SingularError](solveErr); !ok {
				t.Fatalf("the determinant is 0, yet the equations are solved: %v", solveErr)
			}
		}
		return singular
	}
	functions, functionsErr := sys.Responses(ctx, outs, cols)
	if functionsErr != nil {
		t.Fatalf("responses: %v; determinant %v", functionsErr, det)
	}
	x, _ := omega.Float64()
	if err != nil {
		if c := condition(sys, x); !errors.Is(err, float.ErrSingular) || c < 1e9 {
			t.Fatalf("double precision: %v; the condition is %g", err, c)
		}
	}
	off := new(big.Rat).Sub(big.NewRat(17, 23), omega)
	for j, c := range cols {
		compareAt(t, sys, new(big.Rat), omega, outs, c, func(i int, re, im *big.Rat) {
			fr, fi, ok := functions[i][j].EvalGaussian(new(big.Rat), omega)
			if !ok || fr.Cmp(re) != 0 || fi.Cmp(im) != 0 {
				t.Errorf("output %d, column %d: the function %v gives %v, %v, the equations %v, %v", i, j, functions[i][j], fr, fi, re, im)
			}
			if err != nil {
				return
			}
			v, radius := approximate.Values[i][j], approximate.Radius[i][j]
			if d := distanceTo(v, re, im); !(d <= radius) || math.IsInf(radius, 0) {
				t.Errorf("output %d, column %d at %v: %v is off by %g, radius %g, condition %g", i, j, omega, v, d, radius, approximate.Condition)
			}
		})
		compareAt(t, sys, off, big.NewRat(-5, 7), outs, c, func(i int, re, im *big.Rat) {
			if fr, fi, ok := functions[i][j].EvalGaussian(off, big.NewRat(-5, 7)); !ok || fr.Cmp(re) != 0 || fi.Cmp(im) != 0 {
				t.Errorf("output %d, column %d off the axis: %v, %v instead of %v, %v", i, j, fr, fi, re, im)
			}
		})
	}
	if err != nil {
		return imprecise
	}
	return compared
}

func atFrequency(solver *float.Solver, omega *big.Rat, rounded bool, outs []network.Output, cols []network.Column) (*float.Result, error) {
	if rounded {
		x, _ := omega.Float64()
		return solver.At(context.Background(), x, outs, cols)
	}
	return solver.AtRat(context.Background(), omega, outs, cols)
}

// compareAt hands every output's exact value at s = re + j·im to check; at a
// natural frequency there is none.
func compareAt(t *testing.T, sys *network.System, re, im *big.Rat, outs []network.Output, c network.Column, check func(i int, re, im *big.Rat)) {
	xr, xi, err := sys.Pencil().SolveAt(context.Background(), re, im, c.RHS)
	if _, ok := errors.AsType[*exact.SingularError](err); ok && re.Sign() != 0 {
		return
	}
	if err != nil {
		t.Fatal(err)
	}
	for i, o := range outs {
		vr, vi := solvedValue(re, im, o, c, xr, xi)
		check(i, vr, vi)
	}
}

// distanceTo is the distance of v from re + j·im.
func distanceTo(v complex128, re, im *big.Rat) float64 {
	part := func(x float64, r *big.Rat) float64 {
		f := new(big.Rat).SetFloat64(x)
		if f == nil {
			return math.Inf(1)
		}
		d, _ := f.Sub(f, r).Float64()
		return d
	}
	return math.Hypot(part(real(v), re), part(imag(v), im))
}
