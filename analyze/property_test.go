package analyze_test

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"testing"
	"time"

	"pgregory.net/rapid"

	"portlight/analyze"
	"portlight/analyze/response"
	"portlight/dialect"
)

// fewer lowers how many networks a property is checked on; the -rapid.checks
// of the command line counts when it is given.
func fewer(t *testing.T, checks, short int) {
	t.Helper()
	if testing.Short() {
		checks = short
	}
	given := false
	flag.Visit(func(f *flag.Flag) { given = given || f.Name == "rapid.checks" })
	if given {
		return
	}
	old := flag.Lookup("rapid.checks").Value.String()
	if err := flag.Set("rapid.checks", fmt.Sprint(checks)); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = flag.Set("rapid.checks", old) })
}

// asker asks one network, as text.
type networkAsker struct {
	t   *rapid.T
	g   *generator
	a   *analyze.Analysis
	ctx context.Context
}

// drawAnalysis draws a network and analyses its text.
func drawAnalysis(t *rapid.T) *networkAsker {
	g := drawNetwork(t)
	c := checkText("random.plight", g.text(), nil)
	for _, f := range c.Findings {
		if f.Severity == dialect.Error {
			t.Fatalf("%s\n%s", f, g.text())
		}
	}
	ctx, cancel := context.WithTimeout(context.Background(), time.Minute)
	t.Cleanup(cancel)
	return &networkAsker{t, g, analyze.New(c), ctx}
}

func (n *networkAsker) ask(question string) analyze.Answer {
	answer, err := n.a.Ask(n.ctx, question)
	if err != nil {
		n.t.Fatalf("%s: %v\n%s", question, err, n.g.text())
	}
	return answer
}

func (n *networkAsker) fail(format string, args ...any) {
	n.t.Helper()
	n.t.Fatalf(format+"\n%s", append(args, n.g.text())...)
}

// points are where rational functions are compared: two random rationals.
func (n *networkAsker) points() []*big.Rat {
	var out []*big.Rat
	for _, label := range []string{"s", "another s"} {
		k := rapid.IntRange(1, 5000).Draw(n.t, label)
		out = append(out, big.NewRat(int64(2*k+1), 7))
	}
	return out
}

// solvable tells whether the plain equations have a unique solution with the
// switches so and branches gone.
func (n *networkAsker) solvable(closed stand, gone map[int]bool) bool {
	for _, s := range []*big.Rat{big.NewRat(1237, 11), big.NewRat(-7919, 13)} {
		t := tabulate(&n.g.plainNetwork, rationals, s, closed, gone)
		if _, err := t.solve(t.column()); err == nil {
			return true
		}
	}
	return false
}

// plain solves the plain equations for a right-hand side.
func (n *networkAsker) plain(s *big.Rat, gone map[int]bool, fill func(t *tableau[*big.Rat], col []*big.Rat)) (*tableau[*big.Rat], []*big.Rat, error) {
	t := tabulate(&n.g.plainNetwork, rationals, s, n.g.at(nil), gone)
	col := t.column()
	fill(t, col)
	x, err := t.solve(col)
	return t, x, err
}

// sameFunction compares an answer with the plain value at a point.
func (n *networkAsker) sameFunction(question string, f *analyze.FunctionAnswer, s, want *big.Rat) {
	den := f.Ratio.Den.Eval(s)
	if den.Sign() == 0 {
		return // a pole, by accident
	}
	if got := new(big.Rat).Quo(f.Ratio.Num.Eval(s), den); got.Cmp(want) != 0 {
		n.fail("%s at s = %s is %s, the plain equations give %s", question, s, got.FloatString(12), want.FloatString(12))
	}
}

// refusedRightly fails when a network with a unique solution is refused, or
// one without is not; it tells whether there is an answer to look at.
func (n *networkAsker) refusedRightly(question string, answer analyze.Answer, sound bool) bool {
	refused, no := answer.(*analyze.RefusedAnswer)
	switch {
	case no && sound:
		n.fail("%s is refused (%s: %s), and the plain equations have one solution", question, refused.Code, refused.Why)
	case !no && !sound:
		n.fail("%s is answered, and the plain equations have no unique solution", question)
	}
	return !no
}

// TestRandomFunctions compares network functions and impedances of random networks with an
// exact dense solution of an independent tableau at random rational s.
func TestRandomFunctions(t *testing.T) {
	fewer(t, 120, 30)
	answered, refused := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		n := drawAnalysis(t)
		sound := n.solvable(n.g.at(nil), nil)
		for range 3 {
			if n.function(sound) {
				answered++
			} else {
				refused++
			}
		}
		n.impedance(sound)
		n.partImpedance()
		n.twoPort()
		if sound {
			n.naturalFrequencies()
		}
	})
	t.Logf("%d functions compared, %d rightly refused", answered, refused)
	if answered < 2*refused {
		t.Errorf("only %d of %d random functions had an answer: the generator is off", answered, answered+refused)
	}
}

// function compares one response over one source.
func (n *networkAsker) function(sound bool) bool {
	source := rapid.SampledFrom(n.g.sources()).Draw(n.t, "excitation")
	out := n.g.output("response")
	name := n.g.branches[source].name
	a := analyze.New(checkText("random.plight", n.g.text()+fmt.Sprintf("function H = %s/%s\n", out.text, name), nil))
	answer, err := a.Ask(n.ctx, "H")
	if err != nil {
		n.fail("H: %v", err)
	}
	question := out.text + "/" + name
	if !n.refusedRightly(question, answer, sound) {
		return false
	}
	for _, s := range n.points() {
		t, x, err := n.plain(s, nil, func(t *tableau[*big.Rat], col []*big.Rat) {
			col[t.current(source)] = big.NewRat(1, 1)
		})
		if err == nil {
			n.sameFunction(question, answer.(*analyze.FunctionAnswer), s, of(t, out, x))
		}
	}
	return true
}

// inject puts a current of 1 A in at a and out at b.
func inject(a, b int) func(t *tableau[*big.Rat], col []*big.Rat) {
	return func(_ *tableau[*big.Rat], col []*big.Rat) {
		if a > 0 {
			col[a-1] = big.NewRat(1, 1)
		}
		if b > 0 {
			col[b-1] = big.NewRat(-1, 1)
		}
	}
}

// impedance compares z of a random node pair.
func (n *networkAsker) impedance(sound bool) {
	a, b := n.g.pair("pair")
	question := fmt.Sprintf("z[%s,%s]", nodeText(a), nodeText(b))
	answer := n.ask(question)
	if !n.refusedRightly(question, answer, sound) {
		return
	}
	for _, s := range n.points() {
		t, x, err := n.plain(s, nil, inject(a, b))
		if err == nil {
			n.sameFunction(question, answer.(*analyze.FunctionAnswer), s, of(t, plainOutput{plus: a, minus: b, branch: -1}, x))
		}
	}
}

// partImpedance compares what the rest of the network shows to one part.
func (n *networkAsker) partImpedance() {
	part := rapid.SampledFrom(n.g.carriers()).Draw(n.t, "part")
	b := n.g.branches[part]
	for _, m := range n.g.mutuals {
		if m.a == part || m.b == part {
			return
		}
	}
	gone := map[int]bool{part: true}
	if n.followed(gone) {
		return
	}
	question := fmt.Sprintf("z[%s]", b.name)
	answer := n.ask(question)
	sound := n.solvable(n.g.at(nil), gone)
	if _, refused := answer.(*analyze.RefusedAnswer); refused && sound && n.apart(part) {
		return // what is left falls in two: the impedance is infinite
	}
	if !n.refusedRightly(question, answer, sound) {
		return
	}
	for _, s := range n.points() {
		t, x, err := n.plain(s, gone, inject(b.a, b.b))
		if err == nil {
			n.sameFunction(question, answer.(*analyze.FunctionAnswer), s, of(t, plainOutput{plus: b.a, minus: b.b, branch: -1}, x))
		}
	}
}

// twoPort compares z and abcd parameters between two random node pairs with
// what currents injected at each give.
func (n *networkAsker) twoPort() {
	var ports [2][2]int
	gone := map[int]bool{}
	text := n.g.text()
	for k := range ports {
		a, b := n.g.pair("port")
		ports[k] = [2]int{a, b}
		text += fmt.Sprintf("port port%d at %s %s\n", k+1, nodeText(a), nodeText(b))
		for i, branch := range n.g.branches {
			across := branch.a == a && branch.b == b || branch.a == b && branch.b == a
			gone[i] = gone[i] || len(branch.waves) > 0 && across // the port's own drive
		}
	}
	if n.followed(gone) || !n.solvable(n.g.at(nil), gone) {
		return // then it takes a set that shorts a port, if there is any
	}
	a := analyze.New(checkText("random.plight", text, nil))
	for _, set := range []string{"z", "abcd"} {
		question := fmt.Sprintf("matrix %s[port1,port2]", set)
		answer, err := a.Ask(n.ctx, question)
		if err != nil {
			n.fail("%s: %v", question, err)
		}
		matrix, ok := answer.(*analyze.MatrixAnswer)
		if !ok {
			n.fail("%s is refused: %v", question, analyze.Words(answer))
		}
		for _, s := range n.points() {
			if z, ok := n.openCircuit(s, ports, gone); ok {
				n.sameMatrix(question, matrix, s, set, z)
			}
		}
	}
}

// openCircuit gives the z parameters at one s.
func (n *networkAsker) openCircuit(s *big.Rat, ports [2][2]int, gone map[int]bool) (z [2][2]*big.Rat, ok bool) {
	for k, p := range ports {
		t, x, err := n.plain(s, gone, inject(p[0], p[1]))
		if err != nil {
			return z, false
		}
		for j, q := range ports {
			z[j][k] = of(t, plainOutput{plus: q[0], minus: q[1], branch: -1}, x)
		}
	}
	return z, true
}

// sameMatrix compares a set of parameters, all currents into the + terminals
// but the second of abcd, which flows out.
func (n *networkAsker) sameMatrix(question string, m *analyze.MatrixAnswer, s *big.Rat, set string, z [2][2]*big.Rat) {
	want := z
	if set == "abcd" {
		if z[1][0].Sign() == 0 {
			if m.Exists && !m.Entries[0][0].Ratio.Den.IsZero() && m.Entries[0][0].Ratio.Den.Eval(s).Sign() != 0 {
				n.fail("%s is given, and nothing gets through", question)
			}
			return
		}
		over := func(x *big.Rat) *big.Rat { return new(big.Rat).Quo(x, z[1][0]) }
		det := new(big.Rat).Sub(new(big.Rat).Mul(z[0][0], z[1][1]), new(big.Rat).Mul(z[0][1], z[1][0]))
		want = [2][2]*big.Rat{{over(z[0][0]), over(det)}, {over(big.NewRat(1, 1)), over(z[1][1])}}
	}
	if !m.Exists {
		n.fail("%s is said not to exist: %s", question, m.Why)
	}
	for j := range want {
		for k := range want[j] {
			n.sameFunction(fmt.Sprintf("%s, entry %d %d,", question, j+1, k+1), &m.Entries[j][k], s, want[j][k])
		}
	}
}

// followed tells whether a dependent source follows the current of a branch
// that is gone: taken out, it leaves nothing to follow.
func (n *networkAsker) followed(gone map[int]bool) bool {
	for _, b := range n.g.branches {
		for _, c := range b.controls {
			if c.branch >= 0 && gone[c.branch] {
				return true
			}
		}
	}
	return false
}

// apart tells whether the network without a part falls in two.
func (n *networkAsker) apart(part int) bool {
	_, _, err := n.plain(big.NewRat(311, 3), map[int]bool{part: true}, inject(n.g.branches[part].a, n.g.branches[part].b))
	return errors.Is(err, errPlainSingular)
}

// naturalFrequencies compares poles with the roots of the plain determinant,
// found as a polynomial from its values.
func (n *networkAsker) naturalFrequencies() {
	answer, ok := n.ask("poles").(*analyze.RootsAnswer)
	if !ok {
		n.fail("poles are refused")
		return
	}
	p := n.plainDeterminant()
	count := 0
	for _, r := range answer.Roots {
		count += r.Multiplicity
		if !p.EvalComplexBall(r.Ball()).ContainsZero() {
			n.fail("%v is listed as a natural frequency, and the plain determinant is not zero there", r)
		}
	}
	if count != p.Degree() {
		n.fail("%d natural frequencies are listed, the plain determinant has %d", count, p.Degree())
	}
}

// TestRandomResponses compares signals in time of random networks with the
// numerical inversion of transforms, interval by interval.
func TestRandomResponses(t *testing.T) {
	fewer(t, 90, 20)
	compared, given := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		n := drawAnalysis(t)
		out := n.g.output("quantity")
		for range 2 {
			// Off the instants at which anything begins.
			at := big.NewRat(int64(rapid.IntRange(1, 60).Draw(t, "time")*10+3), 150000)
			given++
			if n.response(out, at) {
				compared++
			}
		}
	})
	t.Logf("%d of %d values in time compared", compared, given)
	if compared < given/2 {
		t.Errorf("only %d of %d values in time could be compared: the generator is off", compared, given)
	}
}

// response compares one quantity at one time; false when there is nothing to compare.
func (n *networkAsker) response(out plainOutput, at *big.Rat) bool {
	question := fmt.Sprintf("%s at %s s", out.text, at.FloatString(30))
	exactly, _ := new(big.Rat).SetString(at.FloatString(30))
	answer := n.ask(question)
	for _, start := range n.g.instants() {
		if n.solvable(n.g.at(start), nil) {
			continue
		}
		if _, refused := answer.(*analyze.RefusedAnswer); !refused {
			n.fail("%s is answered, and the plain equations from %s s on have no unique solution", question, start.FloatString(6))
		}
		return false
	}
	if refused, ok := answer.(*analyze.RefusedAnswer); ok {
		if _, settled := n.g.initialMemory(); !settled || n.g.steady && refused.Code == "no-steady-state" {
			return false
		}
		n.fail("%s is refused: %s: %s", question, refused.Code, refused.Why)
	}
	value := answer.(*analyze.SignalValueAnswer)
	if !value.ZeroInput.Add(value.ZeroState).Overlaps(value.Total) {
		n.fail("%s: zero-input %v and zero-state %v do not add up to %v", question, value.ZeroInput, value.ZeroState, value.Total)
	}
	if n.growth()*f64(exactly) > 5 {
		return false // the contours would not go round such a pole
	}
	input, ok := n.g.respond(f64(exactly), drivePart{only: -1, state: true})
	if !ok {
		return false
	}
	state, ok := n.g.respond(f64(exactly), drivePart{sources: true, only: -1})
	if !ok {
		return false
	}
	size := 1.0
	for i := range input {
		size = math.Max(size, math.Max(math.Abs(input[i]), math.Abs(state[i])))
	}
	read := func(x []float64) float64 {
		t := &tableau[float64]{f: floats, nodes: n.g.nodes}
		return of(t, out, x)
	}
	n.close(question+", zero-input part", value.ZeroInput.MidFloat64(), read(input), size)
	n.close(question+", zero-state part", value.ZeroState.MidFloat64(), read(state), size)
	n.parts(out, question, value, exactly, size)
	for i := range input {
		input[i] += state[i]
	}
	n.power(exactly, input, size)
	return true
}

// power compares the power of a part, and its closed form added up, with
// voltage times current.
func (n *networkAsker) power(at *big.Rat, x []float64, size float64) {
	part := rapid.SampledFrom(n.g.carriers()).Draw(n.t, "power of")
	b := n.g.branches[part]
	t := &tableau[float64]{f: floats, nodes: n.g.nodes}
	want := of(t, plainOutput{plus: b.a, minus: b.b, branch: -1}, x) * of(t, plainOutput{branch: part}, x)
	question := fmt.Sprintf("p[%s]", b.name)
	value, ok := n.ask(fmt.Sprintf("%s at %s s", question, at.FloatString(30))).(*analyze.ValueAnswer)
	if !ok {
		n.fail("%s has no value", question)
	}
	n.close(question, value.Value.Re.MidFloat64(), want, size*size)
	var pieces []response.Piece
	switch answer := n.ask(question).(type) {
	case *analyze.CurveAnswer:
		var err error
		if pieces, err = answer.Curve.Pieces(n.ctx, 20); err != nil {
			n.fail("%s: %v", question, err)
		}
	default:
		n.fail("%s has no closed form", question)
	}
	sum, largest := addedUp(pieces, f64(at))
	n.close("the terms of "+question, sum, want, math.Max(size*size, 1e-7*largest))
}

// growth is the greatest real part, in 1/s, of the natural frequencies in any
// position of the switches.
func (n *networkAsker) growth() float64 {
	greatest := 0.0
	for _, start := range n.g.instants() {
		question := "poles"
		for i, closed := range n.g.at(start) {
			question += fmt.Sprintf(" with %s %s", n.g.branches[i].name, map[bool]string{true: "closed", false: "open"}[closed])
		}
		roots, ok := n.ask(question).(*analyze.RootsAnswer)
		if !ok {
			n.fail("%s is refused", question)
		}
		for _, r := range roots.Roots {
			greatest = math.Max(greatest, r.Re.MidFloat64())
		}
	}
	return greatest
}

// floats is just enough to read outputs from a solution.
var floats = field[float64]{
	add: func(a, b float64) float64 { return a + b },
	sub: func(a, b float64) float64 { return a - b },
	rat: func(r *big.Rat) float64 { return f64(r) },
}

// agreement is how far two evaluations may be apart, for the size of the
// largest voltage or current: the contour sums are good to about 1e-9 of it.
const agreement = 3e-7

func (n *networkAsker) close(what string, got, want, size float64) {
	n.t.Helper()
	if !(math.Abs(got-want) <= agreement*size) {
		n.fail("%s is %.12g, the inverted transforms give %.12g", what, got, want)
	}
}

// parts checks that shares by source add up to the zero-state part, natural
// and forced part to the whole, and one share against its own inversion.
func (n *networkAsker) parts(out plainOutput, question string, value *analyze.SignalValueAnswer, at *big.Rat, size float64) {
	when := fmt.Sprintf(" at %s s", at.FloatString(30))
	sum := 0.0
	for _, i := range n.g.sources() {
		due := fmt.Sprintf("due(%s, %s)", out.text, n.g.branches[i].name)
		share, ok := n.ask(due + when).(*analyze.SignalValueAnswer)
		if !ok {
			n.fail("%s has no value", due)
		}
		sum += share.Total.MidFloat64()
		if x, ok := n.g.respond(f64(at), drivePart{sources: true, only: i}); ok {
			t := &tableau[float64]{f: floats, nodes: n.g.nodes}
			n.close(due+when, share.Total.MidFloat64(), of(t, out, x), size)
		}
	}
	n.close("the sum of the shares of "+question, sum, value.ZeroState.MidFloat64(), size)
	natural, ok := n.ask("natural(" + out.text + ")" + when).(*analyze.SignalValueAnswer)
	forced, ok2 := n.ask("forced(" + out.text + ")" + when).(*analyze.SignalValueAnswer)
	if !ok || !ok2 {
		n.fail("natural or forced part of %s has no value", question)
	}
	n.close("natural and forced part of "+question, natural.Total.MidFloat64()+forced.Total.MidFloat64(), value.Total.MidFloat64(),
		math.Max(size, math.Abs(forced.Total.MidFloat64())))
}

// addedUp adds up the terms of a closed form at a time, and gives the size of the
// largest: where terms cancel, digits of double precision go.
func addedUp(pieces []response.Piece, t float64) (sum, largest float64) {
	for _, p := range pieces {
		tau := t - p.From.Float()
		if tau < 0 || p.Until != nil && t >= p.Until.Float() {
			continue
		}
		for _, x := range p.Terms {
			c := complex(x.Coefficient.Re.MidFloat64(), x.Coefficient.Im.MidFloat64())
			pole := complex(x.Pole.Re.MidFloat64(), x.Pole.Im.MidFloat64())
			v := c * cmplx.Exp(pole*complex(tau, 0)) * complex(math.Pow(tau, float64(x.Power)), 0)
			sum, largest = sum+real(v), math.Max(largest, cmplx.Abs(v))
		}
	}
	return sum, largest
}
