package dialect

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"
)

// randomExpression writes an expression of the notation, well formed but
// otherwise senseless.
func randomExpression(r *rand.Rand, depth int) string {
	atoms := []string{
		"1", "0", "2.5", "3 V", "-20 dBV", "1 kHz", "5 rad/s", "30°", "3 dB", "2 mH*s", "1/s", "10 %", "4 ms", "s", "t", "pi",
		"R1", "C1", "L1", "Vs", "H", "p", "out", "x1", "x2", "W", "F1.R", "F1.K", "v[out]", "v[in,out]", "v[F1.m]", "i[F1.a]",
		"i[F1]", "v[F1]", "i[p]", "i[U1.output]", "v[U1.output]", "i[T1.secondary]", "v[T1.primary]", "z[p]", "z[out]", "y[R1]",
		"p[R1]", "v[K]", "i[K]", "z[U1]", "thevenin[p]", "norton[p]", "v[hull]", "z[hull]", "i[Vs]", "v[Vs]", "v[F1.inner.q]",
	}
	if depth <= 0 || r.IntN(4) == 0 {
		return atoms[r.IntN(len(atoms))]
	}
	sub := func() string { return randomExpression(r, depth-1) }
	switch r.IntN(9) {
	case 0, 1, 2:
		return sub() + []string{" + ", " - ", "*", "/", " * ", " / "}[r.IntN(6)] + sub()
	case 3:
		return "(" + sub() + ")^" + []string{"2", "-1", "0.5", "64", "-" + sub(), "(" + sub() + ")"}[r.IntN(6)]
	case 4:
		return "-" + sub()
	case 5:
		return "(" + sub() + ")"
	case 6:
		return "(" + sub() + " in " + []string{"Hz", "rad/s"}[r.IntN(2)] + ")"
	case 7:
		return []string{"H", "v[out]", "z[p]", "x1", "G"}[r.IntN(5)] + "(" + sub() + ")"
	}
	info := callList[r.IntN(len(callList))]
	var args []string
	for range len(info.Parameters) - r.IntN(info.Optional+1) {
		args = append(args, sub())
	}
	return info.Name + "(" + strings.Join(args, ", ") + ")"
}

// TestRandomExpressions puts random expressions in every place that takes one
// and looks whether the result is consistent.
func TestRandomExpressions(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 5))
	base := frame + `let x1 = 3 V
subnetwork Cell (a, b) with W = 2 Ω {
  let K = W*2
  a -[resistor R = W]- m -[capacitor C = 1 µF]- b
}
out -[part F1 = Cell]- hull
op amp U1 = ideal, + at out, - at o2, output at o2
o2 -[resistor R2 = 1 Ω]- hull
transformer T1 = 2 : 1, primary at out hull, secondary at far hull
far -[inductor L2 = 1 H]- hull
coupling K = 0.1, between L1 L2
`
	places := []string{
		"let x2 = %s", "tell %s", "tell %s at 1 kHz", "tell %s from 1 ms to 2 ms", "require %s <= 3", "require %s",
		"function G = %s", "out -[resistor Rx = %s]- hull", "out -[impedance Zx = %s]- hull", "out -[voltage source Vx = %s]- q -[R9]- hull",
		"out -[current source Ix = %s]- hull", "tell H at %s", "tell poles of %s", "out -[capacitor Cx = 1 F, initially %s]- hull",
		"far -[switch S9 = opens at %s]- hull", "part F2 = Cell with W = %s, a at out, b at hull", "tell matrix s[p,p2] reference %s",
		"transformer T9 = 1 : %s, primary at out hull, secondary at far hull", "op amp U9 = %s, gain %[1]s, + at out, - at o2, output at o9",
		"coupling K9 = %s, between L1 L2", "let x2 = %s\nout -[voltage source Vx = x2]- far\ntell x2\nfunction G = x2/Vs",
	}
	codes := map[Code]int{}
	sound := 0
	for range 3000 {
		line := fmt.Sprintf(places[r.IntN(len(places))], randomExpression(r, 3))
		c := examine(t, base+line+"\n")
		for _, f := range c.Findings {
			codes[f.Code]++
		}
		if len(c.Findings) == 0 {
			sound++
		}
		if q, findings := c.Question(randomExpression(r, 2)); q == nil && len(findings) == 0 {
			t.Fatalf("a question is neither answered nor refused after %s", line)
		}
	}
	if sound < 50 || len(codes) < 20 {
		t.Errorf("%d sound lines and %d codes are too few to tell: %v", sound, len(codes), codes)
	}
}
