package dialect

import (
	"fmt"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"portlight/dialect/number"
)

// randomRational writes a plain expression in s (in units of 1 ms) together
// with the same function of a complex number.
func randomRational(r *rand.Rand, depth int) (string, func(complex128) complex128) {
	if depth == 0 || r.IntN(5) == 0 {
		if r.IntN(2) == 0 {
			return "(s*1 ms)", func(s complex128) complex128 { return s }
		}
		k := float64(r.IntN(9)-4) / 2
		return fmt.Sprintf("(%g)", k), func(complex128) complex128 { return complex(k, 0) }
	}
	a, f := randomRational(r, depth-1)
	b, g := randomRational(r, depth-1)
	switch r.IntN(6) {
	case 0:
		return "(" + a + " + " + b + ")", func(s complex128) complex128 { return f(s) + g(s) }
	case 1:
		return "(" + a + " - " + b + ")", func(s complex128) complex128 { return f(s) - g(s) }
	case 2:
		return "(" + a + "/(" + b + "))", func(s complex128) complex128 { return f(s) / g(s) }
	case 3:
		n := r.IntN(5) - 2
		return fmt.Sprintf("(%s)^(%d)", a, n), func(s complex128) complex128 { return cmplx.Pow(f(s), complex(float64(n), 0)) }
	case 4:
		return "(-" + a + ")", func(s complex128) complex128 { return -f(s) }
	}
	return a + "*" + b, func(s complex128) complex128 { return f(s) * g(s) }
}

// rationalAt evaluates a rational expression at s in units of 1/ms.
func rationalAt(x *RationalIn, s complex128) complex128 {
	at := func(p []number.Exact) complex128 {
		sum := complex(0, 0)
		for i := len(p) - 1; i >= 0; i-- {
			sum = sum*s*1000 + complex(p[i].Float(), 0)
		}
		return sum
	}
	return at(x.Numerator) / at(x.Denominator)
}

// TestRationalAgrees compares impedances with the same function evaluated
// directly at random points.
func TestRationalAgrees(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	compared := 0
	for range 600 {
		text, f := randomRational(r, 3)
		c := Check(Parse("z.plight", "ground hull\nimpedance Z = 1 Ω*("+text+")\na -[Z]- hull\n"), nil)
		x := c.Description.Parts[0].Rational
		if x == nil {
			for _, finding := range c.Findings {
				if finding.Code != "no-value" && finding.Code != "not-positive" {
					t.Fatalf("%s\n\t%v", text, c.Findings)
				}
			}
			continue
		}
		for range 5 {
			s := complex(r.Float64()*2-1.03, r.Float64()*2+0.01)
			got, want := rationalAt(x, s), f(s)
			if cmplx.Abs(got-want) > 1e-7*(1+cmplx.Abs(want)) {
				t.Fatalf("%s\n\tat %v is %v, want %v", text, s, got, want)
			}
		}
		compared++
	}
	if compared < 400 {
		t.Errorf("only %d impedances were compared", compared)
	}
}

// TestControls checks the law of dependent sources against values worked out
// by hand.
func TestControls(t *testing.T) {
	base := "ground hull\nvoltage source Vs = 1 V\na -[Vs]- hull\na -[resistor R1 = 1 kΩ]- b -[resistor R2 = 1 kΩ]- hull\nc -[D]- hull\nc -[resistor R3 = 1 Ω]- hull\n"
	for _, x := range []struct {
		law  string
		want string // coefficient at s = 2/ms and quantity, in order
	}{
		{"3*v[a] - v[b]/2", "3*v[a] -0.5*v[b]"},
		{"-(v[a] - 2*v[a,b])", "-1*v[a] 2*v[a,b]"},
		{"10 Ω*i[R1]*(2 - 5)", "-30*i[R1]"},
		{"v[a]/(1 + s*1 ms)", "0.333333*v[a]"},
		{"(v[a] + v[a])*s*1 ms - 5*v[a]", "-1*v[a]"},
		{"gain2*v[R1] + v[a] - v[a]", "7*v[R1]"},
		{"sum", "2*v[a] 1*v[b]"},
	} {
		c := Check(Parse("d.plight", base+"let gain2 = 7\nlet sum = v[a]*2 + v[b]\nvoltage source D = "+x.law+"\n"), nil)
		if len(c.Findings) > 0 {
			t.Errorf("%s: %v", x.law, c.Findings)
			continue
		}
		var got []string
		for _, p := range c.Description.Parts {
			for _, k := range p.Dependent {
				got = append(got, fmt.Sprintf("%.6g*%s", real(rationalAt(&k.Coefficient, 2)), c.probeText(k.Probe)))
			}
		}
		if strings.Join(got, " ") != x.want {
			t.Errorf("%s is %v, want %s", x.law, got, x.want)
		}
	}
}

// probeText writes a probe as the notation does.
func (c *Checked) probeText(p Probe) string {
	d := c.Description
	switch {
	case p.Of == OfPart:
		return fmt.Sprintf("%c[%s]", p.Letter, d.Parts[p.Part].Name)
	case p.Minus == d.Ground:
		return fmt.Sprintf("%c[%s]", p.Letter, d.Nodes[p.Plus].Name)
	}
	return fmt.Sprintf("%c[%s,%s]", p.Letter, d.Nodes[p.Plus].Name, d.Nodes[p.Minus].Name)
}
