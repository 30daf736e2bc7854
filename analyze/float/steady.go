package float

import (
	"context"
	"errors"
	"math"
	"slices"

	"portlight/analyze/exact"
)

// ErrUnsteady tells that a source does not go on for ever as it is.
var ErrUnsteady = errors.New("a source that grows, decays or rises has no steady state")

// Steady returns the values of the memories at t = 0 after what always holds of
// the sources has acted for ever: constants and sinusoids, each solved at its
// frequency in double precision. The error is ErrUnsteady for other terms,
// ErrSingular where a frequency is one of the network's own, ErrSource,
// ErrRange, ErrMemory or the context's.
func (s *Solver) Steady(ctx context.Context, sources []Source) ([]Initial, error) {
	columns := make([]exact.Vector, len(sources))
	var frequencies []float64
	for j, src := range sources {
		if src.Element < 0 || src.Element >= len(s.system.Network().Elements) {
			return nil, ErrSource
		}
		column, problem := s.system.InputColumn(src.Element)
		if problem != nil {
			return nil, ErrSource
		}
		columns[j] = column.RHS
		for _, t := range src.Wave.Always {
			if t.Rate != 0 || t.Power != 0 {
				return nil, ErrUnsteady
			}
			if !(t.Omega < largest) {
				return nil, ErrRange
			}
			frequencies = append(frequencies, t.Omega)
		}
	}
	slices.Sort(frequencies)
	values := make([]float64, len(s.memories))
	for _, omega := range slices.Compact(frequencies) {
		// For (A − jB)·e^{jωt} the value at 0 is that of the real part of the
		// solution for A and of the imaginary part of that for B.
		var cosines, sines vector
		for j, src := range sources {
			for _, t := range src.Wave.Always {
				if t.Omega != omega {
					continue
				}
				if err := errors.Join(cosines.addScaled(columns[j], t.Cosine), sines.addScaled(columns[j], t.Sine)); err != nil {
					return nil, ErrRange
				}
			}
		}
		x, err := s.phasors(ctx, omega, &cosines)
		if err != nil {
			return nil, err
		}
		y, err := s.phasors(ctx, omega, &sines)
		if err != nil {
			return nil, err
		}
		for i := range x {
			x[i] = complex(real(x[i])+imag(y[i]), 0)
		}
		for k, f := range s.memories {
			for t, i := range f.index {
				values[k] += f.value[t] * real(x[i])
			}
		}
	}
	var out []Initial
	for k, m := range s.system.Memories() {
		if values[k] != 0 {
			out = append(out, Initial{m.Element, m.Index, values[k]})
		}
	}
	return out, nil
}

// addScaled adds a multiple of a vector.
func (v *vector) addScaled(w exact.Vector, factor float64) error {
	for _, c := range w {
		d, ok := doubleOf(c.Value)
		if !ok || !(math.Abs(factor) < largest) {
			return ErrRange
		}
		v.index = append(v.index, int32(c.Index))
		v.g, v.c = append(v.g, d.scaled(factor)), append(v.c, double{})
	}
	return nil
}

// phasors solves for all unknowns at an angular frequency.
func (s *Solver) phasors(ctx context.Context, omega float64, b *vector) ([]complex128, error) {
	q := s.query(point{im: double{omega, 0}})
	defer s.release(q.workspace)
	return attempt(q, ctx, func() ([]complex128, error) {
		x, err := q.refine(ctx, b, false)
		if err != nil {
			return nil, err
		}
		return x.x, nil
	})
}
