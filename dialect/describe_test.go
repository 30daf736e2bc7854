package dialect

import (
	"fmt"
	"strings"
	"testing"
)

// expressionText writes a resolved expression: quantities by their parts and
// nodes, constants as coherent values.
func (c *Checked) expressionText(x Expression) string {
	switch x := x.(type) {
	case *Constant:
		return fmt.Sprintf("%.6g%s", x.Value.Float(), x.Dimension.Unit())
	case *Variable:
		return x.Name
	case *Negate:
		return "-" + c.expressionText(x.X)
	case *Binary:
		return "(" + c.expressionText(x.X) + string(x.Op) + c.expressionText(x.Y) + ")"
	case *Call:
		var args []string
		for _, a := range x.Args {
			args = append(args, c.expressionText(a))
		}
		if x.Part >= 0 {
			args = append(args, c.Description.Parts[x.Part].Name)
		}
		return x.Name + "(" + strings.Join(args, ",") + ")"
	case *Quantity:
		return c.quantityText(x.Probe)
	case *FunctionValue:
		return c.Description.Functions[x.Function].Name
	case *At:
		return c.expressionText(x.X) + "@" + c.expressionText(x.Where)
	}
	return "nothing"
}

func (c *Checked) quantityText(p Probe) string {
	switch p.Of {
	case OfPort:
		return fmt.Sprintf("%c<%s>", p.Letter, c.Description.Ports[p.Port].Name)
	case OfTerminal:
		return fmt.Sprintf("%c[%s.%s]", p.Letter, c.Description.Parts[p.Part].Name, p.Terminal)
	case OfInflow:
		var ends []string
		for _, e := range p.Inflow {
			ends = append(ends, fmt.Sprintf("%+d*%s%s", e.Sign, c.Description.Parts[e.Part].Name, e.Terminal))
		}
		return "inflow(" + strings.Join(ends, "") + ")"
	}
	return c.probeText(p)
}

const described = `ground hull
voltage source Vs = 5 V * u(t)
current source Is = 1 mA * u(t)
let f0 = 2 kHz
let drop = v[in] - v[mid]
subnetwork Cell (a, b) {
  a -[resistor Ra = 1 kΩ]- m -[capacitor Ca = 1 µF]- b
  part Deep = Deeper, x at a, y at m
}
subnetwork Deeper (x, y) {
  y -[resistor Rd = 1 kΩ]- x
}
in -[Vs]- hull
in -[resistor R1 = 1 kΩ]- mid -[part F1 = Cell]- hull
hull -[Is]- far -[resistor R2 = 2 kΩ]- mid
op amp U1 = ideal, + at mid, - at out, output at out
transformer T1 = 2 : 1, primary at out hull, secondary at s1 s2
s1 -[resistor Rs = 1 Ω]- s2
s1 -[wire W1]- hull
port in at in hull
port tail at hull far
function H = v[out]/Vs
switch S1 = closes at 1 ms, opens at 3 ms
s1 -[S1]- hull
`

// TestDescribed checks what questions and limits become.
func TestDescribed(t *testing.T) {
	for _, x := range []struct{ line, want string }{
		{"tell v[out]", "v[out]"},
		{"tell v[in,mid]", "v[in,mid]"},
		{"tell drop*2", "((v<in>-v[mid])*2)"},
		{"tell i[F1.a]", "inflow(+1*F1.Ra-1*F1.Deep.Rd)"},
		{"tell v[F1.Deep.Rd]", "v[F1.Deep.Rd]"},
		{"tell v[F1]", "v[mid]"},
		{"tell v[F1.m]", "v[F1.m]"},
		{"tell i[U1.output] + i[T1.primary]", "(i[U1.output]+i[T1.primary])"},
		{"tell v[T1.secondary]", "v[s1,s2]"},
		{"tell i[in]", "-i[Vs]"},
		{"tell i[tail]", "-i[Is]"},
		{"tell v[in]", "v<in>"},
		{"tell z[in]", "z<in>"},
		{"tell z[mid]", "z[mid]"},
		{"tell y[R1]", "y[R1]"},
		{"tell p[R1]", "p[R1]"},
		{"tell H(f0)", "H@12566.4rad/s"},
		{"tell v[out](1 ms)", "v[out]@0.001s"},
		{"tell f0", "12566.4rad/s"},
		{"tell f0*2 in rad/s", "25132.7rad/s"},
		{"tell bandwidth(H) in Hz", "bandwidth(H)"},
		{"tell (bandwidth(H) in Hz)*1 s", "((bandwidth(H)/6.28319)*1s)"},
		{"tell 1/(2*pi*R1*1 µF) in Hz", "1000rad/s"},
		{"tell settle(v[out])", "settle(v[out],0.01)"},
		{"tell due(v[out], Is)", "due(v[out],Is)"},
		{"tell energy(F1.Ra) to 1 ms", "energy(F1.Ra)"},
		{"tell gain(H) - 3 dB", "(dB(gain(H))-3dB)"},
		{"tell max(gain(H), 0.1, 2)", "max(gain(H),0.1,2)"},
		{"tell s*1 ms * H + R1/(1 kΩ)", "(((s*0.001s)*H)+1)"},
		{"function G = v[mid]/v[in]\ntell G", "G = (v[mid]/v<in>)"},
		{"function G = v[mid]/v[in,hull]\ntell G", "G = (v[mid]/v[Vs])"},
		{"function G = v[mid]/v[hull,in]\ntell G", "G = (v[mid]/-v[Vs])"},
		{"function G = v[mid]/(2*Is)\ntell G", "G = (v[mid]/(2*i[Is]))"},
		{"function G = i[R2]/i[tail]\ntell G", "G = (i[R2]/i<tail>)"},
		{"function G = drop/Vs + z[tail]/R1\ntell G", "G = (((v<in>-v[mid])/v[Vs])+(z<tail>/1000Ω))"},
	} {
		c := Check(Parse("d.plight", described+x.line+"\n"), nil)
		if len(c.Findings) > 0 {
			t.Errorf("%s: %v", x.line, c.Findings)
			continue
		}
		got := c.expressionText(c.Description.Questions[0].What)
		if f, ok := c.Description.Questions[0].What.(*FunctionValue); ok && got == "G" {
			got = "G = " + c.expressionText(c.Description.Functions[f.Function].Value)
		}
		if got != x.want {
			t.Errorf("%s is %s, want %s", x.line, got, x.want)
		}
	}
}

// TestQualified checks the qualifiers of questions.
func TestQualified(t *testing.T) {
	for _, x := range []struct{ line, want string }{
		{"tell H at f0", "at 12566.4rad/s"},
		{"tell H from 10 Hz to 1 krad/s", "from 62.8319rad/s to 1000rad/s"},
		{"tell v[out] to 3 ms", "to 0.003s"},
		{"tell v[out] before 1 ms", "before 0.001s"},
		{"tell peak(v[out]) from 1 ms", "from 0.001s"},
		{"tell H at 1 kHz with S1 closed without R2, F1", "at 6283.19rad/s S1 true R2 F1.Ra F1.Ca F1.Deep.Rd"},
		{"tell poles with S1 open", "S1 false"},
	} {
		c := Check(Parse("d.plight", described+x.line+"\n"), nil)
		if len(c.Findings) > 0 {
			t.Errorf("%s: %v", x.line, c.Findings)
			continue
		}
		q := c.Description.Questions[0].Qualifiers
		var got []string
		for _, point := range []struct {
			word string
			at   *Constant
		}{{"at", q.At}, {"before", q.Before}, {"from", q.From}, {"to", q.To}} {
			if point.at != nil {
				got = append(got, point.word+" "+c.expressionText(point.at))
			}
		}
		for _, s := range q.Switches {
			got = append(got, fmt.Sprint(c.Description.Parts[s.Part].Name, " ", s.Closed))
		}
		for _, p := range q.Without {
			got = append(got, c.Description.Parts[p].Name)
		}
		if strings.Join(got, " ") != x.want {
			t.Errorf("%s is restricted by %v, want %s", x.line, got, x.want)
		}
	}
}

// TestParts checks what part statements become.
func TestParts(t *testing.T) {
	c := Check(Parse("d.plight", described+`far -[resistor Rt = 4k7 +20 % -10 %, rated 0.25 W]- hull
far -[capacitor Ct = 10 pF ±0.5 pF, initially -300 mV, rated 16 V]- hull
far -[inductor Lt = 1 mH, initially 2 mA, rated 3 A]- hull
far -[inductor Lu = 4 mH]- hull
coupling core = 0.98 +1 % -2 %, between Lt Lu
op amp U2 = 8 MHz, gain 106 dB, + at far, - at o2, output at o2
`), nil)
	if len(c.Findings) > 0 {
		t.Fatal(c.Findings)
	}
	part := map[string]Part{}
	for _, p := range c.Description.Parts {
		part[p.Name] = p
	}
	if p := part["Rt"]; p.Tolerance.Low.String() != "4230" || p.Tolerance.High.String() != "5640" || p.RatedPower.String() != "1/4" {
		t.Errorf("Rt is %v", p)
	}
	if p := part["Ct"]; !p.Tolerance.Low.Equal(rational("95/10000000000000")) || p.Initial.String() != "-3/10" || p.RatedVoltage.String() != "16" {
		t.Errorf("Ct is %v", p)
	}
	if p := part["Lt"]; p.Initial.String() != "1/500" || p.RatedCurrent.String() != "3" {
		t.Errorf("Lt is %v", p)
	}
	if p := part["core"]; c.Description.Parts[p.Coils[0]].Name != "Lt" || c.Description.Parts[p.Coils[1]].Name != "Lu" || p.Tolerance.Low.String() != "2401/2500" {
		t.Errorf("core is %v", p)
	}
	if p := part["S1"]; p.ClosedAt0 || len(p.Events) != 2 || !p.Events[0].Closes || p.Events[1].At.String() != "3/1000" {
		t.Errorf("S1 is %v", p)
	}
	if p := part["T1"]; len(p.Windings) != 2 || p.Windings[1].Name != "secondary" || p.Windings[0].Turns.String() != "2" {
		t.Errorf("T1 is %v", p)
	}
	// 8 MHz is 2π·8e6 rad/s; 106 dB is 10^5.3 = 199 526.2315 (recomputed).
	if p := part["U2"]; fmt.Sprintf("%.10g %.10g", p.GainBandwidth.Float(), p.DCGain.Float()) != "50265482.46 199526.2315" {
		t.Errorf("U2 is %v", p)
	}
	if p := part["U1"]; p.GainBandwidth != nil || p.DCGain != nil {
		t.Errorf("U1 is %v", p)
	}
}
