package dialect

import (
	"strconv"
	"strings"
)

// Dimension is the dimension of a quantity as exponents of the SI base units
// that occur in circuit theory, with the sorts that share a dimension but
// must not be mixed: a level in dB, and frequency in rad/s.
type Dimension struct {
	Metre, Kilogram, Second, Ampere int8 // exponents; volt = m²·kg·s⁻³·A⁻¹
	Level                           bool // dB: levels add, plain ratios become levels
	Frequency                       bool // 1/s known to be an angular frequency in rad/s
	Angle                           bool // rad or degrees: dimensionless, shown in degrees
}

// The dimensions of circuit theory.
var (
	DimensionNumber      = Dimension{}
	DimensionVoltage     = Dimension{Metre: 2, Kilogram: 1, Second: -3, Ampere: -1}
	DimensionCurrent     = Dimension{Ampere: 1}
	DimensionResistance  = Dimension{Metre: 2, Kilogram: 1, Second: -3, Ampere: -2}
	DimensionConductance = Dimension{Metre: -2, Kilogram: -1, Second: 3, Ampere: 2}
	DimensionInductance  = Dimension{Metre: 2, Kilogram: 1, Second: -2, Ampere: -2}
	DimensionCapacitance = Dimension{Metre: -2, Kilogram: -1, Second: 4, Ampere: 2}
	DimensionPower       = Dimension{Metre: 2, Kilogram: 1, Second: -3}
	DimensionEnergy      = Dimension{Metre: 2, Kilogram: 1, Second: -2}
	DimensionCharge      = Dimension{Second: 1, Ampere: 1}
	DimensionFlux        = Dimension{Metre: 2, Kilogram: 1, Second: -2, Ampere: -1}
	DimensionTime        = Dimension{Second: 1}
	DimensionRate        = Dimension{Second: -1} // 1/s of which nobody said Hz or rad/s
	DimensionFrequency   = Dimension{Second: -1, Frequency: true}
	DimensionLevel       = Dimension{Level: true}
	DimensionAngle       = Dimension{Angle: true}
)

// Base strips the sorts: what is left are the exponents alone.
func (d Dimension) Base() Dimension {
	return Dimension{Metre: d.Metre, Kilogram: d.Kilogram, Second: d.Second, Ampere: d.Ampere}
}

// Dimensionless says that all exponents are zero and it is no level: a plain
// number or an angle.
func (d Dimension) Dimensionless() bool {
	return d.Base() == DimensionNumber && !d.Level
}

// maxExponent keeps the exponents of a product inside what int8 holds, with
// room for one more product.
const maxExponent = 60

// Times is the dimension of a product. ok is false when an exponent gets out
// of range. The sorts are dropped.
func (d Dimension) Times(e Dimension) (product Dimension, ok bool) {
	product = Dimension{
		Metre:    d.Metre + e.Metre,
		Kilogram: d.Kilogram + e.Kilogram,
		Second:   d.Second + e.Second,
		Ampere:   d.Ampere + e.Ampere,
	}
	return product, product.small()
}

// Over is the dimension of a quotient; see Times.
func (d Dimension) Over(e Dimension) (quotient Dimension, ok bool) {
	return d.Times(e.inverse())
}

// Power is the dimension of an integer power; see Times.
func (d Dimension) Power(n int) (power Dimension, ok bool) {
	if n < -maxExponent || n > maxExponent {
		return Dimension{}, d.Base() == DimensionNumber
	}
	m, k, s, a := int(d.Metre)*n, int(d.Kilogram)*n, int(d.Second)*n, int(d.Ampere)*n
	for _, e := range [...]int{m, k, s, a} {
		if e < -maxExponent || e > maxExponent {
			return Dimension{}, false
		}
	}
	return Dimension{Metre: int8(m), Kilogram: int8(k), Second: int8(s), Ampere: int8(a)}, true
}

// Root is the dimension of a square root; ok is false when an exponent is odd.
func (d Dimension) Root() (root Dimension, ok bool) {
	if (d.Metre|d.Kilogram|d.Second|d.Ampere)&1 != 0 {
		return Dimension{}, false
	}
	return Dimension{
		Metre:    d.Metre / 2,
		Kilogram: d.Kilogram / 2,
		Second:   d.Second / 2,
		Ampere:   d.Ampere / 2,
	}, true
}

func (d Dimension) inverse() Dimension {
	return Dimension{Metre: -d.Metre, Kilogram: -d.Kilogram, Second: -d.Second, Ampere: -d.Ampere}
}

func (d Dimension) small() bool {
	for _, e := range [...]int8{d.Metre, d.Kilogram, d.Second, d.Ampere} {
		if e < -maxExponent || e > maxExponent {
			return false
		}
	}
	return true
}

// namedDimensions are the dimensions with a unit symbol of their own, in the
// order in which they are preferred in compound units.
var namedDimensions = []struct {
	dimension Dimension
	symbol    string
}{
	{DimensionVoltage, "V"}, {DimensionCurrent, "A"}, {DimensionResistance, "Ω"},
	{DimensionConductance, "S"}, {DimensionInductance, "H"}, {DimensionCapacitance, "F"},
	{DimensionPower, "W"}, {DimensionEnergy, "J"}, {DimensionCharge, "C"},
}

// Unit is the coherent unit's symbol in the notation: "Ω", "V/s", "V*s",
// "rad/s" for a frequency, "dB" for a level, "rad" for an angle, "" for a
// plain number.
func (d Dimension) Unit() string {
	switch {
	case d.Level:
		return "dB"
	case d.Frequency:
		return "rad/s"
	case d.Base() == DimensionNumber:
		if d.Angle {
			return "rad"
		}
		return ""
	}
	base := d.Base()
	if base.Metre != 2*base.Kilogram {
		return baseUnitText(base) // no product of volt, ampere and second
	}
	if name, ok := namedUnitText(base); ok {
		return name
	}
	// Every remaining dimension of circuit theory is V^x·A^y·s^z.
	x := int(base.Kilogram)
	return unitProduct([]unitPower{{"V", x}, {"A", int(base.Ampere) + x}, {"s", int(base.Second) + 3*x}})
}

// namedUnitText finds a symbol, its small power, or such times a power of the
// second.
func namedUnitText(d Dimension) (string, bool) {
	if d.Metre == 0 && d.Ampere == 0 {
		return unitProduct([]unitPower{{"s", int(d.Second)}}), true
	}
	if exact, found := symbolOf(d); found {
		return exact, true
	}
	best, least, factors := false, 0, []unitPower(nil)
	for _, power := range [...]int{1, 2, -1, -2} {
		for _, n := range namedDimensions {
			p, _ := n.dimension.Power(power)
			if p.Metre != d.Metre || p.Kilogram != d.Kilogram || p.Ampere != d.Ampere {
				continue
			}
			seconds := int(d.Second - p.Second)
			cost := 2*max(seconds, -seconds) + max(power, 2-power)
			if !best || cost < least {
				best, least, factors = true, cost, []unitPower{{n.symbol, power}, {"s", seconds}}
			}
		}
	}
	return unitProduct(factors), best
}

func symbolOf(d Dimension) (string, bool) {
	for _, n := range namedDimensions {
		if n.dimension == d {
			return n.symbol, true
		}
	}
	return "", false
}

type unitPower struct {
	symbol string
	power  int
}

// unitProduct writes factors as the notation reads them: positive powers
// first, "1/" when there are none.
func unitProduct(factors []unitPower) string {
	var b strings.Builder
	for _, f := range factors {
		if f.power > 0 {
			if b.Len() > 0 {
				b.WriteByte('*')
			}
			writeUnitPower(&b, f.symbol, f.power)
		}
	}
	if b.Len() == 0 {
		b.WriteByte('1')
	}
	for _, f := range factors {
		if f.power < 0 {
			b.WriteByte('/')
			writeUnitPower(&b, f.symbol, -f.power)
		}
	}
	return b.String()
}

func writeUnitPower(b *strings.Builder, symbol string, power int) {
	b.WriteString(symbol)
	if power != 1 {
		b.WriteByte('^')
		b.WriteString(strconv.Itoa(power))
	}
}

func baseUnitText(d Dimension) string {
	return unitProduct([]unitPower{
		{"m", int(d.Metre)}, {"kg", int(d.Kilogram)}, {"s", int(d.Second)}, {"A", int(d.Ampere)},
	})
}

// String describes the dimension for messages: "a resistance (Ω)", "V/s",
// "a plain number".
func (d Dimension) String() string {
	switch {
	case d.Level:
		return "a level (dB)"
	case d.Frequency:
		return "a frequency (Hz or rad/s)"
	case d.Base() == DimensionNumber && d.Angle:
		return "an angle (° or rad)"
	}
	for _, w := range dimensionWords {
		if w.dimension == d.Base() {
			return w.words
		}
	}
	return "a quantity in " + d.Unit()
}

var dimensionWords = []struct {
	dimension Dimension
	words     string
}{
	{DimensionNumber, "a plain number"},
	{DimensionVoltage, "a voltage (V)"},
	{DimensionCurrent, "a current (A)"},
	{DimensionResistance, "a resistance (Ω)"},
	{DimensionConductance, "a conductance (S)"},
	{DimensionInductance, "an inductance (H)"},
	{DimensionCapacitance, "a capacitance (F)"},
	{DimensionPower, "a power (W)"},
	{DimensionEnergy, "an energy (J)"},
	{DimensionCharge, "a charge (C)"},
	{DimensionFlux, "a flux linkage (Wb, V*s)"},
	{DimensionTime, "a time (s)"},
	{DimensionRate, "a rate (1/s)"},
}
