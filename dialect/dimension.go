package dialect

// Dimension is the dimension of a quantity as exponents of the SI base units
// that occur in circuit theory, with the sorts that share a dimension but
// must not be mixed: a level in dB, and frequency in rad/s.
type Dimension struct {
	Metre, Kilogram, Second, Ampere int8 // exponents; volt = m²·kg·s⁻³·A⁻¹
	Level                           bool // dB: levels add, plain ratios become levels
	Frequency                       bool // 1/s known to be an angular frequency in rad/s
	Angle                           bool // rad or degrees: dimensionless, shown in degrees
}
