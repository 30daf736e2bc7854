package dialect

import (
	"math/big"
	"slices"
	"strings"
	"testing"

	"portlight/dialect/number"
)

// TestSeries compares single values with IEC 60063:2015 (quoted from memory):
// the entries that are usually got wrong, and the sizes.
func TestSeries(t *testing.T) {
	for series, some := range map[string][]int{
		"E3":   {100, 220, 470},
		"E6":   {150, 330, 680},
		"E12":  {120, 180, 270, 390, 560, 820},
		"E24":  {110, 160, 240, 300, 430, 620, 750, 910},
		"E48":  {105, 178, 261, 464, 866, 953},
		"E96":  {102, 147, 237, 475, 619, 732, 909, 976},
		"E192": {101, 143, 226, 459, 642, 816, 898, 920, 988},
	} {
		values, ok := SeriesValues(series)
		if !ok || !slices.IsSorted(values) || values[0] != 100 {
			t.Fatalf("%s is %v", series, values)
		}
		if n := strings.TrimPrefix(series, "E"); n != big.NewInt(int64(len(values))).String() {
			t.Errorf("%s has %d values", series, len(values))
		}
		for _, v := range some {
			if !slices.Contains(values, v) {
				t.Errorf("%s lacks %d", series, v)
			}
		}
	}
	for _, pair := range [][2]string{{"E3", "E6"}, {"E6", "E12"}, {"E12", "E24"}, {"E48", "E96"}, {"E96", "E192"}} {
		coarse, _ := SeriesValues(pair[0])
		fine, _ := SeriesValues(pair[1])
		for _, v := range coarse {
			if !slices.Contains(fine, v) {
				t.Errorf("%d of %s is not in %s", v, pair[0], pair[1])
			}
		}
	}
	if _, ok := SeriesValues("E5"); ok {
		t.Error("there is no E5")
	}
}

func TestInSeries(t *testing.T) {
	for text, want := range map[string]bool{
		"4700": true, "0.47": true, "4.7e-12": true, "9.1e7": true, "4750": false, "1": true, "0.999999999": false, "1000": true, "4700.001": false,
	} {
		x, _ := number.Parse(text)
		if got := inSeries(seriesCache["E24"], x); got != want {
			t.Errorf("%s in E24: %v", text, got)
		}
	}
	x, _ := number.Parse("9300")
	below, above := neighboursIn(seriesCache["E24"], x)
	if below.String() != "9100" || above.String() != "10000" {
		t.Errorf("neighbours of 9300 are %v and %v", below, above)
	}
	x, _ = number.Parse("1.05e-9")
	if below, above = neighboursIn(seriesCache["E24"], x); !below.Equal(rational("1/1000000000")) || !above.Equal(rational("11/10000000000")) {
		t.Errorf("neighbours of 1.05 nF are %v and %v", below, above)
	}
}

func TestUnitNames(t *testing.T) {
	times := func(d ...Dimension) Dimension {
		p := DimensionNumber
		for _, x := range d {
			p, _ = p.Times(x)
		}
		return p
	}
	over := func(a, b Dimension) Dimension { q, _ := a.Over(b); return q }
	for want, d := range map[string]Dimension{
		"": DimensionNumber, "V": DimensionVoltage, "Ω": DimensionResistance, "F": DimensionCapacitance, "J": DimensionEnergy,
		"C": DimensionCharge, "V*s": DimensionFlux, "s": DimensionTime, "1/s": DimensionRate, "rad/s": DimensionFrequency,
		"dB": DimensionLevel, "rad": DimensionAngle, "V/s": over(DimensionVoltage, DimensionTime), "A/s": over(DimensionCurrent, DimensionTime),
		"V^2": times(DimensionVoltage, DimensionVoltage), "H*s": times(DimensionInductance, DimensionTime), "1/V": over(DimensionNumber, DimensionVoltage),
		"s^2": times(DimensionTime, DimensionTime), "V^3/A^3": over(times(DimensionResistance, DimensionResistance, DimensionResistance), DimensionNumber),
	} {
		if got := d.Unit(); got != want {
			t.Errorf("%v is written %q, want %q", d, got, want)
		}
		if want == "" || strings.HasPrefix(want, "rad") || want == "dB" {
			continue
		}
		// The notation reads its own unit back as the same dimension.
		c := Check(Parse("unit.plight", "let x = 1 "+want+"\n"), nil)
		if len(c.Findings) != 0 || c.Description.Lets[0].Value.Dim().Base() != d.Base() {
			t.Errorf("%s is read as %v (%v)", want, c.Description.Lets[0].Value, c.Findings)
		}
	}
}

func TestFormatQuantity(t *testing.T) {
	for _, x := range []struct {
		value string
		d     Dimension
		want  string
	}{
		{"4700", DimensionResistance, "4.7 kΩ"}, {"1e-7", DimensionCapacitance, "100 nF"}, {"0.00123456", DimensionVoltage, "1.235 mV"},
		{"-999.96", DimensionVoltage, "-1 kV"}, {"0", DimensionCurrent, "0 A"}, {"-3", DimensionLevel, "-3 dB"}, {"0.5", DimensionNumber, "0.5"},
		{"1e12", DimensionNumber, "1e12"}, {"2.5e-5", DimensionRate, "2.5e-5 1/s"}, {"2e3", over2(), "2 kV/s"},
	} {
		v, _ := number.Parse(x.value)
		if got := FormatQuantity(v, x.d); got != x.want {
			t.Errorf("%s %v is %q, want %q", x.value, x.d, got, x.want)
		}
	}
}

func over2() Dimension { d, _ := DimensionVoltage.Over(DimensionTime); return d }

// TestWords checks that every word of the notation is explained and that its
// example can be read.
func TestWords(t *testing.T) {
	for _, w := range slices.Concat(statementWords, kindWords, stateWords, seriesNames, questionStat, eventWords, Words()) {
		e, ok := ExplainWord(w)
		if !ok || e.Title == "" || e.Meaning == "" {
			t.Errorf("%s is not explained", w)
			continue
		}
		if e.Example == "" {
			continue
		}
		if f := Parse("word.plight", e.Example+"\n"); len(f.Findings) != 0 {
			t.Errorf("the example of %s: %v", w, f.Findings)
		}
	}
	for unit, want := range map[string]string{"kΩ": "kiloohm", "µF": "microfarad", "Hz": "hertz", "dBµV": "decibel", "°": "degree", "kohm": "kiloohm"} {
		if e, ok := ExplainWord(unit); !ok || !strings.Contains(e.Title, want) {
			t.Errorf("%s is explained as %q", unit, e.Title)
		}
	}
	if _, ok := ExplainWord("nothing"); ok {
		t.Error("nothing is explained")
	}
	for base := range unitIndex() {
		if _, _, ok := lookupUnit(base); !ok {
			t.Errorf("%s has a meaning but cannot be written", base)
		}
	}
	for spelled, s := range unitSymbols {
		if unitIndex()[s.canonical] == nil {
			t.Errorf("%s can be written but has no meaning", spelled)
		}
	}
}

func TestNearest(t *testing.T) {
	for name, want := range map[string]string{
		"rial": "rail", "RAIL": "rail", "ral": "rail", "raill": "rail", "aril": "rail", "xyz": "", "r": "r1", "r2": "r1", "c1": "", "coll": "coil",
	} {
		got, _ := Nearest(name, []string{"rail", "coil", "hull", "r1"})
		if got != want {
			t.Errorf("%s suggests %q, want %q", name, got, want)
		}
	}
}
