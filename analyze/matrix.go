package analyze

import (
	"context"
	"fmt"
	"math/big"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect"
)

// twoPort is two linear equations between the port quantities,
// E·[v1 v2 i1 i2]ᵀ = 0, currents into the + terminals. Every parameter set is
// read from them, so that a set exists exactly when its equations can be solved.
type twoPort struct {
	rows  [2][4]exact.Ratio
	exact bool
}

// Columns of a twoPort.
const (
	v1 = iota
	v2
	i1
	i2
)

// drivings are the ways to drive two ports with ideal sources, tried in order:
// open (z), shorted (y), and the two mixed ones (h, g).
var drivings = [4][2]network.Kind{
	{network.CurrentSource, network.CurrentSource},
	{network.VoltageSource, network.VoltageSource},
	{network.CurrentSource, network.VoltageSource},
	{network.VoltageSource, network.CurrentSource},
}

// twoPort finds the equations of a port pair.
func (a *Analysis) twoPort(ctx context.Context, ports [2]int, c configuration) (twoPort, error) {
	for _, p := range ports {
		port := a.description.Ports[p]
		c = c.lacking(a.sourcesAcross(port.Plus, port.Minus)...)
	}
	var last error
	for _, kinds := range drivings {
		tp, err := a.drivenTwoPort(ctx, ports, kinds, c)
		if err == nil || passOn(ctx, err) {
			return tp, err
		}
		last = err
	}
	return twoPort{}, last
}

// drivenTwoPort solves the network with one kind of source at each port: the
// quantity not forced at port k is the sum of its responses to both sources.
func (a *Analysis) drivenTwoPort(ctx context.Context, ports [2]int, kinds [2]network.Kind, c configuration) (twoPort, error) {
	base := len(a.description.Parts) + len(c.drives)
	for k, p := range ports {
		port := a.description.Ports[p]
		d := drive{kinds[k], port.Plus, port.Minus}
		if kinds[k] == network.CurrentSource {
			d.plus, d.minus = port.Minus, port.Plus
		}
		c = c.with(d)
	}
	sys, err := a.system(ctx, c)
	if err != nil {
		return twoPort{}, err
	}
	var outs []network.Output
	var cols []network.Column
	for k := range ports {
		out, problem := a.unforced(sys, base+k, kinds[k])
		if problem == nil {
			outs = append(outs, out)
			var col network.Column
			if col, problem = sys.InputColumn(base + k); problem == nil {
				cols = append(cols, col)
			}
		}
		if problem != nil {
			return twoPort{}, a.refuseProblems([]network.Problem{*problem})
		}
	}
	if a.large(ctx, c) {
		return twoPort{}, errLarge
	}
	if err := a.solvable(ctx, sys); err != nil {
		return twoPort{}, err
	}
	h, err := sys.Responses(ctx, outs, cols)
	if err != nil {
		return twoPort{}, err
	}
	return equationsOf(kinds, h, sys.Exact()), nil
}

// unforced is what a port shows when one of its quantities is forced: the
// voltage under a current source, the current into + under a voltage source.
func (a *Analysis) unforced(sys *network.System, element int, kind network.Kind) (network.Output, *network.Problem) {
	if kind == network.CurrentSource {
		out, problem := sys.ElementVoltage(element)
		return out.Scale(rational(-1, 1)), problem
	}
	out, problem := sys.ElementCurrent(element)
	return out.Scale(rational(-1, 1)), problem
}

// equationsOf writes unforced_k − Σ response_kj·forced_j = 0.
func equationsOf(kinds [2]network.Kind, h [][]exact.Ratio, isExact bool) twoPort {
	tp := twoPort{exact: isExact}
	unforced, forced := [2]int{}, [2]int{}
	for k, kind := range kinds {
		unforced[k], forced[k] = i1+k, v1+k
		if kind == network.CurrentSource {
			unforced[k], forced[k] = v1+k, i1+k
		}
	}
	for k := range kinds {
		tp.rows[k][unforced[k]] = exact.ConstantRatio(rational(1, 1))
		for j := range kinds {
			tp.rows[k][forced[j]] = h[k][j].Neg()
		}
	}
	return tp
}

// solveFor expresses the dependent pair by the independent pair. Signs turn a
// column's quantity around (abcd counts the second current outwards).
func (tp twoPort) solveFor(dependent, independent [2][4]exact.Ratio) ([2][2]exact.Ratio, bool) {
	// With x = T·q, q = [v1 v2 i1 i2], rows E·q = 0 become A·dep + B·ind = 0
	// where q = D·dep + I·ind.
	var m, b [2][2]exact.Ratio
	for r := range 2 {
		for k := range 2 {
			m[r][k] = dot(tp.rows[r], dependent[k])
			b[r][k] = dot(tp.rows[r], independent[k])
		}
	}
	det := m[0][0].Mul(m[1][1]).Sub(m[0][1].Mul(m[1][0]))
	inverse, err := det.Inv()
	if err != nil {
		return [2][2]exact.Ratio{}, false
	}
	inverse = inverse.Neg()
	var out [2][2]exact.Ratio
	for k := range 2 {
		out[0][k] = m[1][1].Mul(b[0][k]).Sub(m[0][1].Mul(b[1][k])).Mul(inverse)
		out[1][k] = m[0][0].Mul(b[1][k]).Sub(m[1][0].Mul(b[0][k])).Mul(inverse)
	}
	return out, true
}

func dot(x, y [4]exact.Ratio) exact.Ratio {
	var sum exact.Ratio
	for i := range x {
		if !x[i].IsZero() && !y[i].IsZero() {
			sum = sum.Add(x[i].Mul(y[i]))
		}
	}
	return sum
}

// parameterSet gives, for a set, how v1 v2 i1 i2 are made of its dependent and
// independent quantities: each entry lists the four coefficients of one.
func parameterSet(set string, reference *big.Rat) (dependent, independent [2][4]exact.Ratio) {
	unit := func(column int, factor int64) (q [4]exact.Ratio) {
		q[column] = exact.ConstantRatio(rational(factor, 1))
		return q
	}
	switch set {
	case "z":
		return [2][4]exact.Ratio{unit(v1, 1), unit(v2, 1)}, [2][4]exact.Ratio{unit(i1, 1), unit(i2, 1)}
	case "y":
		return [2][4]exact.Ratio{unit(i1, 1), unit(i2, 1)}, [2][4]exact.Ratio{unit(v1, 1), unit(v2, 1)}
	case "h":
		return [2][4]exact.Ratio{unit(v1, 1), unit(i2, 1)}, [2][4]exact.Ratio{unit(i1, 1), unit(v2, 1)}
	case "g":
		return [2][4]exact.Ratio{unit(i1, 1), unit(v2, 1)}, [2][4]exact.Ratio{unit(v1, 1), unit(i2, 1)}
	case "abcd":
		return [2][4]exact.Ratio{unit(v1, 1), unit(i1, 1)}, [2][4]exact.Ratio{unit(v2, 1), unit(i2, -1)}
	}
	// Power waves with one real reference R: v = √R·(a+b), i = (a−b)/√R. The
	// factor √R is common to both waves, so R·i = a − b and v = a + b serve.
	wave := func(v, i int, sign int64) (q [4]exact.Ratio) {
		q[v] = exact.ConstantRatio(rational(1, 1))
		q[i] = exact.ConstantRatio(new(big.Rat).Quo(rational(sign, 1), reference))
		return q
	}
	return [2][4]exact.Ratio{wave(v1, i1, -1), wave(v2, i2, -1)}, [2][4]exact.Ratio{wave(v1, i1, 1), wave(v2, i2, 1)}
}

// why a set does not exist, in the words of its definition.
var whyNoSet = map[string]string{
	"z":    "with both ports open the voltages do not follow from the currents (the ports' currents are tied to one another)",
	"y":    "with both ports shorted the currents do not follow from the voltages (the ports' voltages are tied to one another)",
	"h":    "the current of port 1 and the voltage of port 2 cannot be chosen freely together",
	"g":    "the voltage of port 1 and the current of port 2 cannot be chosen freely together",
	"abcd": "port 2 does not determine port 1: nothing is transmitted from port 1 to port 2",
	"s":    "the network closed by the reference resistances has no unique solution",
}

func (a *Analysis) matrixAnswer(ctx context.Context, q *dialect.Question, head Question, c configuration) (Answer, error) {
	out := &MatrixAnswer{Question: head, Set: q.Set}
	for k, p := range q.Ports {
		out.Ports[k] = a.description.Ports[p].Name
	}
	if q.Ports[0] == q.Ports[1] {
		return nil, refuse("wrong-sort", "a two-port matrix needs two different ports")
	}
	reference := big.NewRat(50, 1)
	isExact := true
	if q.Reference != nil {
		reference, isExact = q.Reference.Rat(), q.Reference.IsExact()
	} else if q.Set == "s" {
		return nil, refuse("arguments", "a scattering matrix needs its reference resistance: add “reference 50 Ω”")
	}
	tp, err := a.twoPort(ctx, q.Ports, c)
	if err != nil {
		if passOn(ctx, err) {
			return nil, err
		}
		out.Why = errText(err)
		return out, nil
	}
	dependent, independent := parameterSet(q.Set, reference)
	entries, ok := tp.solveFor(dependent, independent)
	if !ok {
		out.Why = whyNoSet[q.Set]
		return out, nil
	}
	out.Exists = true
	for r := range 2 {
		for k := range 2 {
			f := constantForm(entries[r][k], tp.exact && isExact)
			h := Question{Text: fmt.Sprintf("%s%d%d", q.Set, r+1, k+1), Origin: head.Origin}
			entry, err := a.functionAnswer(ctx, h, entryDimension(q.Set, r, k), f)
			if err != nil {
				return nil, err
			}
			out.Entries[r][k] = *entry
		}
	}
	out.Facts, err = tp.facts(ctx)
	return out, err
}

// entryDimension is the unit of one entry of a set.
func entryDimension(set string, r, k int) dialect.Dimension {
	ohm, siemens, none := dialect.DimensionResistance, dialect.DimensionConductance, dialect.Dimension{}
	switch set {
	case "z":
		return ohm
	case "y":
		return siemens
	case "h":
		return [2][2]dialect.Dimension{{ohm, none}, {none, siemens}}[r][k]
	case "g":
		return [2][2]dialect.Dimension{{siemens, none}, {none, ohm}}[r][k]
	case "abcd":
		return [2][2]dialect.Dimension{{none, ohm}, {siemens, none}}[r][k]
	}
	return none
}
