package dialect

import "testing"

func TestLookupUnit(t *testing.T) {
	for text, want := range map[string][2]string{
		"V": {"", "V"}, "kΩ": {"k", "Ω"}, "kohm": {"k", "Ω"}, "m\u2126": {"m", "Ω"}, "uF": {"µ", "F"},
		"\u03bcF": {"µ", "F"}, "daV": {"da", "V"}, "ms": {"m", "s"}, "das": {"da", "s"}, "Ts": {"T", "s"},
		"PHz": {"P", "Hz"}, "qA": {"q", "A"}, "QA": {"Q", "A"}, "dB": {"", "dB"}, "dBuV": {"", "dBµV"},
		"mrad": {"m", "rad"}, "Wb": {"", "Wb"}, "mWb": {"m", "Wb"}, "ppm": {"", "ppm"}, "%": {"", "%"}, "°": {"", "°"},
	} {
		prefix, base, ok := lookupUnit(text)
		if !ok || prefix != want[0] || base != want[1] {
			t.Errorf("%s: %q %q %v", text, prefix, base, ok)
		}
	}
	longest := 0
	for text := range spelledUnits {
		longest = max(longest, len(text))
	}
	if longest != maxUnitLength {
		t.Errorf("the longest spelling has %d bytes, not %d", longest, maxUnitLength)
	}
	for _, text := range []string{"", "k", "Kohm", "KΩ", "mmF", "kdB", "m%", "kdeg", "dam", "Ohm", "hz", "v", "f", "u"} {
		if prefix, base, ok := lookupUnit(text); ok {
			t.Errorf("%s is read as %q %q", text, prefix, base)
		}
	}
}

// TestUnitsAreCanonical wants every spelling's canonical form to be read as
// the same unit, so that tidying cannot change it.
func TestUnitsAreCanonical(t *testing.T) {
	for spelled := range unitSymbols {
		for p := range unitPrefixes {
			prefix, base, ok := lookupUnit(p + spelled)
			if !ok {
				continue
			}
			p2, b2, ok := lookupUnit(prefix + base)
			if !ok || p2 != prefix || b2 != base {
				t.Errorf("%s%s: %s%s is read as %s %s", p, spelled, prefix, base, p2, b2)
			}
		}
	}
}

// TestSuggestedUnitsExist wants every guess to be a unit.
func TestSuggestedUnitsExist(t *testing.T) {
	for word, list := range unitWords {
		if _, _, ok := lookupUnit(word); ok {
			t.Errorf("%s is a unit itself", word)
		}
		for _, s := range list {
			f := Parse("", "let x = 1 "+s)
			if len(f.Findings) > 0 {
				t.Errorf("%s: %s is no unit", word, s)
			}
		}
	}
}
