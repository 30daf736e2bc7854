package dialect

import (
	"slices"
	"strings"
)

// This file is the one table of unit symbols and SI prefixes as they are
// spelled. What a symbol means is unit.go's business.

// unitSymbol is one symbol that may follow a number.
type unitSymbol struct {
	canonical  string
	prefixable bool
}

// unitSymbols maps every accepted spelling of a symbol without prefix.
var unitSymbols = map[string]unitSymbol{
	"V": {"V", true}, "A": {"A", true}, "S": {"S", true}, "H": {"H", true},
	"F": {"F", true}, "W": {"W", true}, "J": {"J", true}, "C": {"C", true},
	"Wb": {"Wb", true}, "s": {"s", true}, "Hz": {"Hz", true}, "rad": {"rad", true},
	"Ω": {"Ω", true}, "\u2126": {"Ω", true}, "ohm": {"Ω", true},
	"deg": {"deg", false}, "°": {"°", false}, "%": {"%", false},
	"ppm": {"ppm", false}, "dB": {"dB", false},
	"dBV": {"dBV", false}, "dBu": {"dBu", false},
	"dBuV": {"dBµV", false}, "dBµV": {"dBµV", false}, "dB\u03bcV": {"dBµV", false},
}

// unitPrefixes maps every accepted spelling of an SI prefix to its canonical
// one and its power of ten (the SI Brochure, 9th edition, table 7).
var unitPrefixes = map[string]struct {
	canonical string
	power     int
}{
	"q": {"q", -30}, "r": {"r", -27}, "y": {"y", -24}, "z": {"z", -21},
	"a": {"a", -18}, "f": {"f", -15}, "p": {"p", -12}, "n": {"n", -9},
	"u": {"µ", -6}, "µ": {"µ", -6}, "\u03bc": {"µ", -6}, "m": {"m", -3},
	"c": {"c", -2}, "d": {"d", -1}, "da": {"da", 1}, "h": {"h", 2},
	"k": {"k", 3}, "M": {"M", 6}, "G": {"G", 9}, "T": {"T", 12},
	"P": {"P", 15}, "E": {"E", 18}, "Z": {"Z", 21}, "Y": {"Y", 24},
	"R": {"R", 27}, "Q": {"Q", 30},
}

// spelledUnits maps every spelling of a symbol with or without prefix to its
// canonical prefix and symbol. A symbol without prefix wins over a prefixed
// one.
var spelledUnits = func() map[string][2]string {
	table := make(map[string][2]string, len(unitPrefixes)*len(unitSymbols))
	for spelled, s := range unitSymbols {
		if !s.prefixable {
			continue
		}
		for prefix, p := range unitPrefixes {
			table[prefix+spelled] = [2]string{p.canonical, s.canonical}
		}
	}
	for spelled, s := range unitSymbols {
		table[spelled] = [2]string{"", s.canonical}
	}
	return table
}()

// lookupUnit splits a spelled unit into canonical prefix and symbol.
func lookupUnit(text string) (prefix, base string, ok bool) {
	if len(text) > maxUnitLength {
		return "", "", false
	}
	u, ok := spelledUnits[text]
	return u[0], u[1], ok
}

// maxUnitLength is the length in bytes of the longest spelling, "dBµV" with
// U+03BC or a prefix of two bytes before "ohm".
const maxUnitLength = 5

// kindUnit is the unit of a kind's value where it is one unit, "" otherwise.
func kindUnit(k Kind) string {
	switch k {
	case Resistor, Impedance:
		return "Ω"
	case Admittance:
		return "S"
	case Inductor:
		return "H"
	case Capacitor:
		return "F"
	case VoltageSource:
		return "V"
	case CurrentSource:
		return "A"
	case OpAmp:
		return "Hz"
	case Switch:
		return "s"
	}
	return ""
}

// unitWords are ways to write a unit that are not in the notation, folded to
// lower case, with what was probably meant.
var unitWords = map[string][]string{
	"ohms": {"Ω"}, "r": {"Ω"}, "mho": {"S"}, "mhos": {"S"}, "siemens": {"S"},
	"volt": {"V"}, "volts": {"V"}, "amp": {"A"}, "amps": {"A"}, "ampere": {"A"}, "amperes": {"A"},
	"henry": {"H"}, "henries": {"H"}, "henrys": {"H"}, "farad": {"F"}, "farads": {"F"},
	"watt": {"W"}, "watts": {"W"}, "joule": {"J"}, "joules": {"J"}, "coulomb": {"C"}, "weber": {"Wb"},
	"sec": {"s"}, "secs": {"s"}, "second": {"s"}, "seconds": {"s"},
	"hertz": {"Hz"}, "cps": {"Hz"}, "radian": {"rad"}, "radians": {"rad"},
	"degree": {"deg"}, "degrees": {"deg"}, "º": {"°"}, "percent": {"%"},
	"db": {"dB"}, "dbv": {"dBV"}, "dbu": {"dBu"}, "dbuv": {"dBµV"},
	"mfd": {"µF"}, "mmf": {"pF", "mF"}, "mmfd": {"pF"}, "uuf": {"pF"}, "µµf": {"pF"}, "\u03bc\u03bcf": {"pF"},
	"msec": {"ms"}, "usec": {"µs"}, "µsec": {"µs"}, "nsec": {"ns"},
	"vs": {"V*s"}, "ws": {"W*s"}, "va": {"V*A"}, "var": {"V*A"},
	"rads": {"rad"}, "rps": {"rad/s"}, "henri": {"H"},
	"megohm": {"MΩ"}, "megohms": {"MΩ"}, "kilohm": {"kΩ"}, "kilohms": {"kΩ"},
}

// prefixWords are the usual prefixes spelled out, as in nanofarad.
var prefixWords = [][2]string{
	{"femto", "f"}, {"pico", "p"}, {"nano", "n"}, {"micro", "µ"}, {"milli", "m"},
	{"kilo", "k"}, {"mega", "M"}, {"giga", "G"}, {"tera", "T"},
}

// suggestUnits guesses what a spelling that is no unit was meant to be,
// likeliest first. bare is the unit that the place expects, "" if unknown.
func suggestUnits(text, bare string) []string {
	folded := strings.ToLower(text)
	if bare != "" && unitSymbols[bare].prefixable {
		if p, ok := unitPrefixes[text]; ok {
			return []string{p.canonical + bare}
		}
		switch text {
		case "K":
			return []string{"k" + bare}
		case "U":
			return []string{"µ" + bare}
		case "meg", "Meg", "MEG":
			return []string{"M" + bare}
		}
	}
	if s, ok := unitWords[folded]; ok {
		return s
	}
	for _, p := range prefixWords {
		if rest, ok := strings.CutPrefix(folded, p[0]); ok {
			if base := baseUnitFold(rest); base != "" && len(rest) > 2 {
				return []string{p[1] + base}
			}
		}
	}
	return suggestPrefixed(text, folded)
}

// suggestPrefixed looks for a usual prefix and a symbol or unit word that
// differ from text by case alone, and for a prefix written twice.
func suggestPrefixed(text, folded string) []string {
	var found []string
	for _, prefix := range [...]string{"", "k", "M", "m", "µ", "n", "p", "G"} {
		for _, spelled := range [...]string{prefix, "u"} {
			if spelled == "u" && prefix != "µ" {
				continue
			}
			rest, ok := strings.CutPrefix(folded, strings.ToLower(spelled))
			if !ok {
				continue
			}
			if base := baseUnitFold(rest); base != "" && !slices.Contains(found, prefix+base) {
				found = append(found, prefix+base)
			}
		}
	}
	// M is written for m and the other way round often enough that the one
	// whose case agrees with what was typed comes first.
	for i, s := range found {
		if i > 0 && s[0] == text[0] {
			found[0], found[i] = found[i], found[0]
			break
		}
	}
	return found
}

// baseUnitFold finds a symbol or a unit word in lower case.
func baseUnitFold(folded string) string {
	for _, base := range [...]string{"V", "A", "Ω", "S", "H", "F", "W", "J", "C", "Wb", "Hz", "rad"} {
		if strings.ToLower(base) == folded {
			if base == "S" {
				return "s"
			}
			return base
		}
	}
	if folded == "ohm" || folded == "ω" {
		return "Ω"
	}
	if s := unitWords[folded]; len(folded) > 1 && len(s) == 1 && unitSymbols[s[0]].prefixable {
		return s[0]
	}
	return ""
}
