package dialect

import (
	"fmt"
	"strings"
	"testing"
)

// largeText is a file of about 10 000 lines and 5 000 parts: filter sections
// as a real design repeats them, with constants, ports, questions and limits.
func largeText() string {
	var b strings.Builder
	b.WriteString("## A thousand hydrophone channels\n\nground hull\nlet f0 = 12 kHz\n")
	b.WriteString("voltage source Vcal = 1 V * sin(2*pi*f0*t) * u(t)\ncal -[Vcal]- hull\n")
	for i := range 1000 {
		fmt.Fprintf(&b, `
## Channel %[1]d
resistor  R%[1]d = 4.7 kΩ ±1 %%
resistor  Q%[1]d = 10 kΩ ±1 %%, rated 0.125 W
capacitor C%[1]d = 2.2 nF ±5 %%
inductor  L%[1]d = 3.3 mH
cal -[R%[1]d]- a%[1]d -[L%[1]d]- b%[1]d -[C%[1]d]- hull
b%[1]d -[Q%[1]d || capacitor D%[1]d = 100 pF]- hull
function H%[1]d = v[b%[1]d]/Vcal
tell H%[1]d at f0
`, i)
	}
	return b.String()
}

// BenchmarkCheck: target 15 ms for 10 000 lines with 5 000 parts.
func BenchmarkCheck(b *testing.B) {
	f := Parse("large.plight", largeText())
	b.ReportMetric(float64(f.Lines.Count()), "lines")
	b.ReportAllocs()
	for b.Loop() {
		c := Check(f, nil)
		if len(c.Description.Parts) < 5000 || len(c.Findings) > 0 {
			b.Fatal(len(c.Description.Parts), c.Findings[:min(3, len(c.Findings))])
		}
	}
}

// BenchmarkExpand: 500 uses of a subnetwork; target 15 ms.
func BenchmarkExpand(b *testing.B) {
	var s strings.Builder
	s.WriteString("ground hull\nsubnetwork Cell (in, out, ref) with R = 10 kΩ, f0 = 1 kHz {\n  let C = 1/(2*pi*f0*R)\n" +
		"  in -[resistor R1 = R]- mid -[resistor R2 = R]- out\n  mid -[capacitor C1 = C]- ref\n  out -[capacitor C2 = 2*C]- ref\n}\n")
	for i := range 500 {
		fmt.Fprintf(&s, "part F%d = Cell with R = %d Ω, in at n%d, out at n%d, ref at hull\n", i, 1000+i, i, i+1)
	}
	s.WriteString("port p at n0 hull\n")
	f := Parse("cells.plight", s.String())
	b.ReportAllocs()
	for b.Loop() {
		if c := Check(f, nil); len(c.Description.Parts) != 2000 || c.Description.Faults {
			b.Fatal(c.Findings)
		}
	}
}
