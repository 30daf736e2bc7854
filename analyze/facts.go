package analyze

import (
	"context"

	"portlight/analyze/exact"
	"portlight/analyze/frequency"
)

// facts decides what kind of two-port this is.
//
// Reciprocal: with E = [M N], M·v + N·i = 0, the product M·Nᵀ is symmetric.
// Symmetric: reciprocal, and the ports can be exchanged. Passive: the
// scattering matrix for a real reference is bounded-real, that is, without
// poles in the closed right half-plane and with I − Sᴴ·S positive semidefinite on the
// whole imaginary axis, where its minors are rational in ω² and their sign is decided
// exactly (Anderson and Vongpanitlerd, Network Analysis and Synthesis, 1973,
// chapter 2; from memory). Lossless: passive with Sᴴ·S = I there.
func (tp twoPort) facts(ctx context.Context) (map[string]bool, error) {
	m, n := tp.rows[0], tp.rows[1]
	cross := m[v1].Mul(n[i1]).Add(m[v2].Mul(n[i2]))
	other := n[v1].Mul(m[i1]).Add(n[v2].Mul(m[i2]))
	reciprocal := cross.Equal(other)
	out := map[string]bool{"reciprocal": reciprocal, "symmetric": reciprocal && tp.exchangeable()}
	dependent, independent := parameterSet("s", rational(1, 1))
	s, ok := tp.solveFor(dependent, independent)
	if ok {
		out["passive"], out["lossless"] = boundedReal(s)
	} else {
		out["passive"], out["lossless"] = false, false
	}
	return out, ctx.Err()
}

// exchangeable tells whether the equations stay the same when the ports are
// exchanged: then every row of the exchanged equations is a combination of
// the rows as they are.
func (tp twoPort) exchangeable() bool {
	swapped := tp
	for r := range 2 {
		row := tp.rows[r]
		swapped.rows[r] = [4]exact.Ratio{row[v2], row[v1], row[i2], row[i1]}
	}
	for _, set := range []string{"z", "y", "h", "g"} {
		dependent, independent := parameterSet(set, nil)
		x, ok := tp.solveFor(dependent, independent)
		y, same := swapped.solveFor(dependent, independent)
		if !ok && !same {
			continue
		}
		if ok != same {
			return false
		}
		for r := range 2 {
			for k := range 2 {
				if !x[r][k].Equal(y[r][k]) {
					return false
				}
			}
		}
		return true
	}
	return false
}

// boundedReal decides passivity and losslessness of a scattering matrix.
func boundedReal(s [2][2]exact.Ratio) (passive, lossless bool) {
	one := exact.ConstantRatio(rational(1, 1))
	var size [2][2]exact.Ratio
	for r := range 2 {
		for k := range 2 {
			if frequency.Decide(s[r][k].Den) != frequency.Stable {
				return false, false
			}
			size[r][k] = frequency.MagnitudeRatio(s[r][k])
		}
	}
	det := s[0][0].Mul(s[1][1]).Sub(s[0][1].Mul(s[1][0]))
	first := one.Sub(size[0][0]).Sub(size[1][0])
	second := one.Sub(size[1][1]).Sub(size[0][1])
	minor := first.Add(second).Sub(one).Add(frequency.MagnitudeRatio(det))
	for _, m := range []exact.Ratio{first, second, minor} {
		if !frequency.NonNegativeRatio(m) {
			return false, false
		}
	}
	return true, first.IsZero() && second.IsZero() && minor.IsZero()
}
