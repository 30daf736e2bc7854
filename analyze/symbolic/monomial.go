package symbolic

import "math/bits"

// monomial is a product of powers of symbols, four bits for each of the 32
// places: an exponent from 0 to 7 and a guard bit that is 0. The first place
// is the highest, so monomials compare lexicographically as numbers.
type monomial [2]uint64

// places is how many symbols a monomial has room for.
const places = 32

// guards has the guard bit of every place of a word set.
const guards = 0x8888888888888888

// shift tells where in its word a place is.
func shift(place int) uint { return uint(4 * (15 - place&15)) }

// unit is a symbol to a power of at most 7.
func unit(place, power int) (m monomial) {
	m[place>>4] = uint64(power) << shift(place)
	return m
}

// power is the exponent of a symbol.
func (m monomial) power(place int) int { return int(m[place>>4] >> shift(place) & 7) }

// without is the monomial with a symbol taken out.
func (m monomial) without(place int) monomial {
	m[place>>4] &^= 0xf << shift(place)
	return m
}

// times multiplies; ok is false when an exponent gets too large.
func (m monomial) times(n monomial) (product monomial, ok bool) {
	product = monomial{m[0] + n[0], m[1] + n[1]}
	return product, (product[0]|product[1])&guards == 0
}

// over divides; ok is false when n does not divide m.
func (m monomial) over(n monomial) (quotient monomial, ok bool) {
	// With the guard bits set no place borrows from the next.
	a, b := m[0]|guards, m[1]|guards
	a, b = a-n[0], b-n[1]
	return monomial{a &^ guards, b &^ guards}, a&b&guards == guards
}

// common is the greatest common divisor.
func (m monomial) common(n monomial) (out monomial) {
	for i := range out {
		larger := ((m[i] | guards) - n[i]) & guards // where m has at least n's power
		mask := larger - larger>>3
		out[i] = n[i]&mask | m[i]&^mask
	}
	return out
}

// compare orders monomials lexicographically.
func (m monomial) compare(n monomial) int {
	for i := range m {
		if m[i] != n[i] {
			if m[i] < n[i] {
				return -1
			}
			return 1
		}
	}
	return 0
}

// set is a set of places, as guard bits.
type set [2]uint64

// support is the set of the symbols with a power above 0.
func (m monomial) support() set {
	return set{(m[0] + (guards - guards>>3)) & guards, (m[1] + (guards - guards>>3)) & guards}
}

func (s set) or(t set) set       { return set{s[0] | t[0], s[1] | t[1]} }
func (s set) and(t set) set      { return set{s[0] & t[0], s[1] & t[1]} }
func (s set) minus(t set) set    { return set{s[0] &^ t[0], s[1] &^ t[1]} }
func (s set) empty() bool        { return s[0]|s[1] == 0 }
func (s set) has(place int) bool { return s[place>>4]>>shift(place)&8 != 0 }

// only is the set of one place.
func only(place int) (s set) {
	s[place>>4] = 8 << shift(place)
	return s
}

// list gives the places in ascending order.
func (s set) list() []int {
	var out []int
	for w, x := range s {
		for x != 0 {
			high := bits.LeadingZeros64(x)
			out = append(out, 16*w+high/4)
			x &^= 1 << (63 - high)
		}
	}
	return out
}

// part keeps the symbols of a set.
func (m monomial) part(s set) monomial {
	// A guard bit less its eighth fills the three bits of its place.
	return monomial{m[0] & (s[0] - s[0]>>3), m[1] & (s[1] - s[1]>>3)}
}
