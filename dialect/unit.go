package dialect

import (
	"math/big"
	"strings"
	"sync"

	"portlight/dialect/number"
)

// unitSort tells apart units that a dimension alone does not.
type unitSort int

const (
	unitPlain         unitSort = iota // a factor of coherent SI
	unitHertz                         // counts cycles
	unitRadian                        // counts radians
	unitDegree                        // π/180 rad
	unitLevel                         // dB
	unitAbsoluteLevel                 // dBV, dBu, dBuV: a voltage as a level
)

// UnitInfo is one unit symbol of the notation.
type UnitInfo struct {
	Symbol    string // canonical: "Ω", "°", "dBµV"
	Dimension Dimension
	Prefixes  bool   // takes SI prefixes
	Name      string // "ohm", "degree", …
	Meaning   string // one line, for hovers

	sort   unitSort
	factor *big.Rat // of coherent SI; of the reference voltage squared for absolute levels
}

// unitTable holds the units of the notation. The derived units are those of
// the SI Brochure, 9th edition (2019), tables 4 and 8; levels as in
// IEC 60027-3:2002. The reference of dBu, √0.6 V, is common practice (1 mW in
// 600 Ω).
var unitTable = []UnitInfo{
	{Symbol: "V", Dimension: DimensionVoltage, Prefixes: true, Name: "volt", Meaning: "voltage, W/A"},
	{Symbol: "A", Dimension: DimensionCurrent, Prefixes: true, Name: "ampere", Meaning: "current"},
	{Symbol: "Ω", Dimension: DimensionResistance, Prefixes: true, Name: "ohm", Meaning: "resistance, impedance, V/A; also written ohm"},
	{Symbol: "S", Dimension: DimensionConductance, Prefixes: true, Name: "siemens", Meaning: "conductance, admittance, A/V"},
	{Symbol: "H", Dimension: DimensionInductance, Prefixes: true, Name: "henry", Meaning: "inductance, V*s/A"},
	{Symbol: "F", Dimension: DimensionCapacitance, Prefixes: true, Name: "farad", Meaning: "capacitance, A*s/V"},
	{Symbol: "W", Dimension: DimensionPower, Prefixes: true, Name: "watt", Meaning: "power, V*A"},
	{Symbol: "J", Dimension: DimensionEnergy, Prefixes: true, Name: "joule", Meaning: "energy, W*s"},
	{Symbol: "C", Dimension: DimensionCharge, Prefixes: true, Name: "coulomb", Meaning: "charge, A*s"},
	{Symbol: "Wb", Dimension: DimensionFlux, Prefixes: true, Name: "weber", Meaning: "flux linkage, V*s"},
	{Symbol: "s", Dimension: DimensionTime, Prefixes: true, Name: "second", Meaning: "time"},
	{Symbol: "Hz", Dimension: DimensionRate, Prefixes: true, Name: "hertz", Meaning: "frequency in cycles per second; 1 Hz is 2π rad/s", sort: unitHertz},
	{Symbol: "rad", Dimension: DimensionNumber, Prefixes: true, Name: "radian", Meaning: "plane angle; rad/s is angular frequency", sort: unitRadian},
	{Symbol: "deg", Dimension: DimensionNumber, Name: "degree", Meaning: "plane angle, π/180 rad; also written °", sort: unitDegree},
	{Symbol: "°", Dimension: DimensionNumber, Name: "degree", Meaning: "plane angle, π/180 rad; also written deg", sort: unitDegree},
	{Symbol: "%", Dimension: DimensionNumber, Name: "per cent", Meaning: "one hundredth", factor: big.NewRat(1, 100)},
	{Symbol: "ppm", Dimension: DimensionNumber, Name: "parts per million", Meaning: "one millionth", factor: big.NewRat(1, 1000000)},
	{Symbol: "dB", Dimension: DimensionLevel, Name: "decibel", Meaning: "a level: 20·log10 of the magnitude of a ratio", sort: unitLevel},
	{Symbol: "dBV", Dimension: DimensionVoltage, Name: "decibel over 1 V", Meaning: "a voltage as a level over 1 V", sort: unitAbsoluteLevel, factor: big.NewRat(1, 1)},
	{Symbol: "dBu", Dimension: DimensionVoltage, Name: "decibel over √0.6 V", Meaning: "a voltage as a level over √0.6 V ≈ 0.7746 V", sort: unitAbsoluteLevel, factor: big.NewRat(3, 5)},
	{Symbol: "dBµV", Dimension: DimensionVoltage, Name: "decibel over 1 µV", Meaning: "a voltage as a level over 1 µV", sort: unitAbsoluteLevel, factor: big.NewRat(1, 1000000000000)},
}

// siPrefix is one prefix of the SI Brochure, 9th edition with its 2022
// addition (ronna, quetta, ronto, quecto), table 7.
type siPrefix struct {
	symbol string
	power  int
	name   string
}

var prefixTable = []siPrefix{
	{"q", -30, "quecto"}, {"r", -27, "ronto"}, {"y", -24, "yocto"}, {"z", -21, "zepto"},
	{"a", -18, "atto"}, {"f", -15, "femto"}, {"p", -12, "pico"}, {"n", -9, "nano"},
	{"µ", -6, "micro"}, {"m", -3, "milli"}, {"c", -2, "centi"}, {"d", -1, "deci"},
	{"", 0, ""}, {"da", 1, "deca"}, {"h", 2, "hecto"}, {"k", 3, "kilo"}, {"M", 6, "mega"},
	{"G", 9, "giga"}, {"T", 12, "tera"}, {"P", 15, "peta"}, {"E", 18, "exa"},
	{"Z", 21, "zetta"}, {"Y", 24, "yotta"}, {"R", 27, "ronna"}, {"Q", 30, "quetta"},
}

// Units lists the unit symbols of the notation.
func Units() []UnitInfo { return unitTable }

var unitIndex = sync.OnceValue(func() map[string]*UnitInfo {
	index := make(map[string]*UnitInfo, len(unitTable))
	for i := range unitTable {
		index[unitTable[i].Symbol] = &unitTable[i]
	}
	return index
})

var prefixIndex = sync.OnceValue(func() map[string]*siPrefix {
	index := make(map[string]*siPrefix, len(prefixTable))
	for i := range prefixTable {
		index[prefixTable[i].symbol] = &prefixTable[i]
	}
	return index
})

// powerOfTen is 10^n as a rational.
func powerOfTen(n int) *big.Rat {
	p := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(n, -n))), nil)
	if n < 0 {
		return new(big.Rat).SetFrac(big.NewInt(1), p)
	}
	return new(big.Rat).SetInt(p)
}

// unitMeaning is what a compound unit does to a number: it multiplies it by
// factor (and by (π/180)^degrees), or makes a level of it.
type unitMeaning struct {
	factor    *big.Rat
	dimension Dimension
	hertz     int // power of Hz in it
	radian    int // power of rad in it
	degrees   int
	level     *UnitInfo // dB or an absolute level, then nothing else
}

// Why a unit cannot be used.
type unitProblem int

const (
	unitFine      unitProblem = iota
	unitReported              // the parser has told about it
	unitLevelPart             // a level among other factors or with a power
	unitTooHigh               // powers out of range
)

// meaning multiplies out the factors of a unit.
func (u *UnitExpr) meaning() (unitMeaning, unitProblem) {
	m := unitMeaning{factor: big.NewRat(1, 1)}
	exponent := 0
	for _, f := range u.Factors {
		info, prefix := unitIndex()[f.Base], prefixIndex()[f.Prefix]
		if !f.Known || info == nil || prefix == nil {
			return m, unitReported
		}
		power := f.Power
		if f.Divide {
			power = -power
		}
		if power > maxExponent || power < -maxExponent {
			return m, unitTooHigh
		}
		if info.sort == unitLevel || info.sort == unitAbsoluteLevel {
			if len(u.Factors) > 1 || power != 1 || u.Reciprocal {
				return m, unitLevelPart
			}
			m.level, m.dimension = info, info.Dimension
			return m, unitFine
		}
		p, ok := info.Dimension.Power(power)
		if ok {
			m.dimension, ok = m.dimension.Times(p)
		}
		if !ok {
			return m, unitTooHigh
		}
		exponent += prefix.power * power
		m.count(info, power)
	}
	if exponent > 3000 || exponent < -3000 {
		return m, unitTooHigh
	}
	if exponent != 0 {
		m.factor.Mul(m.factor, powerOfTen(exponent))
	}
	return m, unitFine
}

func (m *unitMeaning) count(info *UnitInfo, power int) {
	switch info.sort {
	case unitHertz:
		m.hertz += power
	case unitRadian:
		m.radian += power
	case unitDegree:
		m.radian += power
		m.degrees += power
	}
	for range max(power, -power) {
		if info.factor == nil {
			break
		}
		if power > 0 {
			m.factor.Mul(m.factor, info.factor)
		} else {
			m.factor.Quo(m.factor, info.factor)
		}
	}
}

// Text is the unit in canonical spelling.
func (u *UnitExpr) Text() string {
	var b strings.Builder
	for i, f := range u.Factors {
		switch {
		case i == 0 && u.Reciprocal:
			b.WriteString("1/")
		case i > 0 && f.Divide:
			b.WriteByte('/')
		case i > 0:
			b.WriteByte('*')
		}
		symbol := f.Symbol.Text
		if f.Known {
			symbol = f.Prefix + f.Base
		}
		if f.Caret != (Span{}) {
			writeUnitPower(&b, symbol, f.Power)
		} else {
			b.WriteString(symbol)
		}
	}
	return b.String()
}

// FormatQuantity writes a value in coherent SI with four significant digits,
// an SI prefix and the unit: "4.7 kΩ", "-3 dB", "30°". The digits shown are
// those of the rational rounded to nearest.
func FormatQuantity(x number.Exact, d Dimension) string {
	unit := d.Unit()
	switch {
	case d.Level:
		return roundedDigits(x.Rat(), 4) + " dB"
	case d.Dimensionless() && d.Angle:
		return roundedDigits(x.Rat(), 4) + " rad"
	case unit == "":
		return roundedDigits(x.Rat(), 4)
	}
	if !prefixable(unit) {
		return roundedDigits(x.Rat(), 4) + " " + unit
	}
	text, exponent := engineering(x.Rat(), 4)
	for _, p := range prefixTable {
		if p.power == exponent {
			return text + " " + p.symbol + unit
		}
	}
	return roundedDigits(x.Rat(), 4) + " " + unit
}

// prefixable says whether a prefix may be set before the unit's text and then
// scales it once: no leading power, no "1/".
func prefixable(unit string) bool {
	if strings.HasPrefix(unit, "1") {
		return false
	}
	end := strings.IndexAny(unit, "*/^")
	return end < 0 || unit[end] != '^'
}

// engineering gives mantissa digits and an exponent that is a multiple of 3.
func engineering(r *big.Rat, digits int) (string, int) {
	if r.Sign() == 0 {
		return "0", 0
	}
	rounded, exponent := roundSignificant(r, digits)
	step := exponent - ((exponent%3)+3)%3
	step = min(max(step, -30), 30)
	scaled := new(big.Rat).Quo(rounded, powerOfTen(step))
	return trimDecimal(scaled.FloatString(max(0, digits-1-(exponent-step)))), step
}

// roundedDigits is a decimal text of r with so many significant digits,
// with an exponent where it would be long.
func roundedDigits(r *big.Rat, digits int) string {
	if r.Sign() == 0 {
		return "0"
	}
	rounded, exponent := roundSignificant(r, digits)
	if exponent >= -4 && exponent < 7 {
		return trimDecimal(rounded.FloatString(max(0, digits-1-exponent)))
	}
	mantissa := new(big.Rat).Quo(rounded, powerOfTen(exponent))
	return trimDecimal(mantissa.FloatString(digits-1)) + "e" + big.NewInt(int64(exponent)).String()
}

// roundSignificant rounds r ≠ 0 to so many significant digits (half away from
// zero) and gives the decimal exponent of the leading digit.
func roundSignificant(r *big.Rat, digits int) (*big.Rat, int) {
	abs := new(big.Rat).Abs(r)
	// 10^(n−1) ≤ integer with n digits: the estimate from the bit lengths is
	// off by at most one and mended below.
	exponent := int(float64(abs.Num().BitLen()-abs.Denom().BitLen()) * 0.30103)
	for powerOfTen(exponent).Cmp(abs) > 0 {
		exponent--
	}
	for powerOfTen(exponent+1).Cmp(abs) <= 0 {
		exponent++
	}
	scale := powerOfTen(digits - 1 - exponent)
	scaled := new(big.Rat).Mul(abs, scale)
	half := new(big.Rat).Add(scaled, big.NewRat(1, 2))
	n := new(big.Int).Quo(half.Num(), half.Denom())
	rounded := new(big.Rat).Quo(new(big.Rat).SetInt(n), scale)
	if powerOfTen(exponent+1).Cmp(rounded) <= 0 {
		exponent++
	}
	if r.Sign() < 0 {
		rounded.Neg(rounded)
	}
	return rounded, exponent
}

func trimDecimal(text string) string {
	if strings.Contains(text, ".") {
		text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
	}
	return text
}
