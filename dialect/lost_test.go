package dialect

import (
	"slices"
	"testing"
)

// TestLostNames checks that what a broken part or path names is not told of
// again: neither as missing, nor as not wired.
func TestLostNames(t *testing.T) {
	for text, want := range map[string][]Code{
		"resitor R2 = 1 kΩ\nfar -[R2]- tap -[resistor R3 = 1 Ω]- hull\ntell v[R2]":                  {"syntax"},
		"resistor R2 = 1 kΩ\nfar -[R2/C1]- hull":                                                    {"syntax"},
		"resistor R2 = 1 kΩ\nfar - R2 - tap\ntell v[tap]\nport q at tap hull":                       {"syntax"},
		"resistor R2 = 1 kΩ\nfar -R2- hull":                                                         {"syntax"},
		"resistor R2 = 1 kΩ\nresistor R3 = 1 kΩ\nfar -R2- hull":                                     {"never-wired", "syntax"},
		"resitor R2 = 1 kΩ\nfar -[resistor R3 = 1 kΩ]- tap -[resistor R4 = 1 Ω]- hull\ntell v[tip]": {"syntax", "unknown-name"},
	} {
		c := Check(Parse("case.plight", frame+text+"\n"), nil)
		same := len(c.Findings) == len(want)
		for i := range want {
			same = same && c.Findings[i].Code == want[i]
		}
		if !same || !c.Description.Faults {
			t.Errorf("%s\n\tfindings %v, want %v; faults %v", text, c.Findings, want, c.Description.Faults)
		}
	}
}

// TestUsualValuesAreNotSuspect checks small resistances and large capacitors
// that are meant.
func TestUsualValuesAreNotSuspect(t *testing.T) {
	for _, text := range []string{
		"far -[capacitor Cx = 10 µF]-[resistor Resr = 9 mΩ]- hull",
		"far -[resistor Rw = 0.8 mΩ]-[inductor Lx = 20 nH]- hull",
		"far -[resistor Rx = 47 Ω]- tap -[resistor Rshunt = 10 mΩ]- hull",
		"far -[resistor Rx = 1 MΩ]- tap -[resistor Rshunt = 1 Ω]- hull",
		"far -[resistor Rx = 2 Ω]- tap -[capacitor Cbank = 100 F]- hull",
		"far -[capacitor Cbank = 100 F]-[resistor Resr = 3 mΩ]- hull",
	} {
		c := Check(Parse("case.plight", frame+text+"\n"), nil)
		for _, f := range c.Findings {
			if f.Code == "prefix-suspect" {
				t.Errorf("%s: %s", text, f)
			}
		}
	}
	const lowpass = "ground hull\nvoltage source Vs = 1 V * u(t)\nin -[Vs]- hull\nin -[resistor R1 = 1 mΩ]- out -[capacitor C1 = 159 nF]- hull\n"
	for _, rest := range []string{"out -[resistor Rload = 470 kΩ]- hull\n", "far -[resistor Rfar = 10 kΩ]- hull\n"} {
		if codes := findingsOf(Check(Parse("case.plight", lowpass+rest), nil)); !slices.Contains(codes, "prefix-suspect") {
			t.Errorf("%s: findings %v", rest, codes)
		}
	}
}
