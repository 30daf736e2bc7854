package response

import (
	"context"
	"math/big"
	"sort"
	"sync"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// Side says from where an instant is approached.
type Side int

// The two sides of an instant. Right is the value at and just after it.
const (
	Right Side = iota
	Left
)

// share says which terms of a component count.
type share int

const (
	wholeShare share = iota
	naturalShare
	forcedShare
)

// component is weight times the inverse transform of a fraction, from an
// instant on, until another.
type component struct {
	from, until *big.Rat // until nil: for ever
	cause       int      // 0 the initial state, 1+j source j
	weight      weight
	fraction    *fraction
	share       share
	forced      exact.Poly // with a share: its roots count as forced
	near        bool       // a frequency was taken as one of the network's, see tuned
}

// Signal is a sum of terms c·τ^m·e^{pτ} and impulses that begin (and, where
// a switch acts, end) at instants. It is immutable and safe for concurrent use.
type Signal struct {
	solution *Solution
	comps    []component
	// before gives the value at 0−; nil is zero.
	before func(ctx context.Context) (number.Exact, error)
	// kin, when set, are the components whose poles the family has to tell
	// apart: those of this signal and of others it is multiplied with.
	kin []component

	mu         sync.Mutex
	family     *family
	expansions []*expansion // per component
	segments   []*segment
}

// newSignal merges what can be merged exactly.
func newSignal(s *Solution, comps []component, before func(context.Context) (number.Exact, error)) *Signal {
	return &Signal{solution: s, comps: mergeComponents(comps), before: before}
}

// mergeComponents adds the transforms of components that differ in nothing
// else, and drops what is identically zero. A rational weight becomes part of
// the transform.
func mergeComponents(list []component) []component {
	var out []component
next:
	for _, c := range list {
		if c.weight.at == nil && !isUnit(c.weight.rational) {
			c.fraction = c.fraction.scaled(c.weight.rational)
			c.weight = unitWeight
		}
		for i := range out {
			if out[i].joins(c) {
				out[i].fraction = out[i].fraction.plus(c.fraction)
				out[i].near = out[i].near || c.near
				continue next
			}
		}
		out = append(out, c)
	}
	kept := out[:0]
	for _, c := range out {
		if !c.fraction.ratio.IsZero() {
			kept = append(kept, c)
		}
	}
	return kept
}

func isUnit(r *big.Rat) bool { return r.IsInt() && r.Num().IsInt64() && r.Num().Int64() == 1 }

func (c *component) joins(d component) bool {
	return c.share == d.share && (c.share == wholeShare || c.forced.Equal(d.forced)) &&
		c.cause == d.cause && c.weight.id == d.weight.id &&
		(c.weight.at == nil) == (d.weight.at == nil) &&
		c.from.Cmp(d.from) == 0 && sameInstant(c.until, d.until)
}

func sameInstant(a, b *big.Rat) bool {
	if a == nil || b == nil {
		return a == nil && b == nil
	}
	return a.Cmp(b) == 0
}

func (f *fraction) scaled(r *big.Rat) *fraction {
	return newFraction(f.ratio.ScaleBy(r), f.natural, f.source, f.splits...)
}

func (f *fraction) plus(g *fraction) *fraction {
	return newFraction(f.ratio.Add(g.ratio), lcm(f.natural, g.natural), lcm(f.source, g.source),
		append(f.splits[:len(f.splits):len(f.splits)], g.splits...)...)
}

// lcm is the least common multiple of two nonzero polynomials.
func lcm(p, q exact.Poly) exact.Poly {
	if p.Equal(q) {
		return p
	}
	return p.Mul(q.Quo(exact.GCD(p, q)))
}

// IsZero tells whether the signal is zero at all times for sure.
func (s *Signal) IsZero() bool { return len(s.comps) == 0 && s.before == nil }

// filtered keeps the components with f(cause).
func (s *Signal) filtered(f func(cause int) bool) *Signal {
	var comps []component
	for _, c := range s.comps {
		if f(c.cause) {
			comps = append(comps, c)
		}
	}
	return &Signal{solution: s.solution, comps: comps}
}

// ZeroInput is the part due to the initial state alone. Its value before
// t = 0 is that of the whole signal under start rest.
func (s *Signal) ZeroInput() *Signal {
	z := s.filtered(func(c int) bool { return c == 0 })
	z.before = s.before
	return z
}

// ZeroState is the part due to the sources alone; it is zero before t = 0.
func (s *Signal) ZeroState() *Signal { return s.filtered(func(c int) bool { return c != 0 }) }

// Due is the zero-state part due to one source, by its index in Setup.Sources.
func (s *Signal) Due(source int) *Signal {
	return s.filtered(func(c int) bool { return c == 1+source })
}

// Natural is the part at the network's natural frequencies, and the impulses
// due to the initial state. Where a natural frequency coincides with one of a
// source that the signal shows (resonance), the whole coinciding part counts as
// forced; [Signal.Coincides] tells.
func (s *Signal) Natural() *Signal { return s.shared(naturalShare) }

// Forced is the part at the sources' frequencies, and the impulses due to
// sources.
func (s *Signal) Forced() *Signal { return s.shared(forcedShare) }

func (s *Signal) shared(which share) *Signal {
	out := &Signal{solution: s.solution}
	for _, c := range s.comps {
		c.forced = s.forcedIn(c)
		switch {
		case c.share == wholeShare:
			c.share = which
		case c.share != which:
			continue
		}
		out.comps = append(out.comps, c)
	}
	return out
}

// forcedIn is the polynomial whose roots are the source frequencies that the
// signal shows while component c lasts.
func (s *Signal) forcedIn(c component) exact.Poly {
	out := one
	for _, d := range s.comps {
		if d.fraction.source.Degree() > 0 && overlap(c, d) {
			out = lcm(out, exact.GCD(d.fraction.den, d.fraction.source).Radical())
		}
	}
	return out.Primitive()
}

func overlap(c, d component) bool {
	return (c.until == nil || d.from.Cmp(c.until) < 0) && (d.until == nil || c.from.Cmp(d.until) < 0)
}

// Coincides tells whether a frequency of a source is also a natural frequency
// of the network in this signal.
func (s *Signal) Coincides() bool {
	for _, c := range s.comps {
		forced := exact.GCD(c.fraction.den, s.forcedIn(c))
		if forced.Degree() > 0 && exact.GCD(forced, c.fraction.natural).Degree() > 0 {
			return true
		}
	}
	return false
}

// NearCoincidence tells whether a source's frequency was taken as equal to a
// natural frequency that it cannot be told from to within the bounds of stand-ins
// for irrational values.
func (s *Signal) NearCoincidence() bool {
	for _, c := range s.comps {
		if c.near {
			return true
		}
	}
	return false
}

// Add returns s + t. Both must come from the same Solution.
func (s *Signal) Add(t *Signal) *Signal {
	out := newSignal(s.solution, append(append([]component(nil), s.comps...), t.comps...), s.before)
	if t.before != nil {
		a, b := s.before, t.before
		out.before = func(ctx context.Context) (number.Exact, error) {
			x, err := valueBefore(ctx, a)
			if err != nil {
				return x, err
			}
			y, err := valueBefore(ctx, b)
			return x.Add(y), err
		}
	}
	return out
}

// Sub returns s − t.
func (s *Signal) Sub(t *Signal) *Signal { return s.Add(t.Scale(number.FromInt(-1))) }

// Scale returns k·s.
func (s *Signal) Scale(k number.Exact) *Signal {
	comps := make([]component, len(s.comps))
	for i, c := range s.comps {
		c.fraction = c.fraction.scaled(k.Rat())
		comps[i] = c
	}
	out := newSignal(s.solution, comps, nil)
	if s.before != nil {
		before := s.before
		out.before = func(ctx context.Context) (number.Exact, error) {
			x, err := before(ctx)
			return x.Mul(k), err
		}
	}
	return out
}

func valueBefore(ctx context.Context, f func(context.Context) (number.Exact, error)) (number.Exact, error) {
	if f == nil {
		return number.Exact{}, nil
	}
	return f(ctx)
}

// Before returns the value at 0−, or ErrBeforeUndefined.
func (s *Signal) Before(ctx context.Context) (number.Exact, error) { return valueBefore(ctx, s.before) }

// Breakpoints lists the instants where the signal may change its form, t = 0
// first: switching, delayed sources, the ends of waveform pieces.
func (s *Signal) Breakpoints() []*big.Rat {
	list := []*big.Rat{new(big.Rat)}
	for _, c := range s.comps {
		list = append(list, c.from)
		if c.until != nil {
			list = append(list, c.until)
		}
	}
	return sortedInstants(list)
}

func sortedInstants(list []*big.Rat) []*big.Rat {
	sort.Slice(list, func(i, j int) bool { return list[i].Cmp(list[j]) < 0 })
	out := list[:1]
	for _, t := range list[1:] {
		if t.Cmp(out[len(out)-1]) != 0 {
			out = append(out, t)
		}
	}
	return out
}

// Transform returns the Laplace transform when it is rational: when nothing
// switches and nothing is delayed.
func (s *Signal) Transform() (exact.Ratio, bool) {
	sum := exact.PolyRatio(exact.Poly{})
	for _, c := range s.comps {
		if c.from.Sign() != 0 || c.until != nil || c.weight.at != nil || c.share != wholeShare {
			return exact.Ratio{}, false
		}
		sum = sum.Add(c.fraction.ratio)
	}
	return sum, true
}

// IsExact tells whether no number that the network, its sources and its state
// were given is a stand-in for an irrational one.
func (s *Signal) IsExact() bool { return s.solution.exact }

// prepared builds the family of poles and the expansions.
func (s *Signal) prepared(ctx context.Context) (*family, []*expansion, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.family != nil {
		return s.family, s.expansions, nil
	}
	kin := s.kin
	if kin == nil {
		kin = s.comps
	}
	f, err := s.solution.library.family(ctx, baseOf(kin))
	if err != nil {
		return nil, nil, err
	}
	for _, c := range s.comps {
		s.expansions = append(s.expansions, f.expand(c.fraction))
	}
	s.family = f
	return f, s.expansions, nil
}

// baseOf refines the denominators of all components into coprime factors. The
// pole at the origin, the sources' frequencies and those that count as forced
// get factors of their own.
func baseOf(list []component) base {
	var b base
	for _, c := range list {
		if c.fraction.den.Order() > 0 {
			b.insert(polyS)
			break
		}
	}
	for _, c := range list {
		for _, p := range append(c.fraction.splits[:len(c.fraction.splits):len(c.fraction.splits)], c.fraction.source, c.forced) {
			if p.Degree() > 0 {
				b.insert(exact.GCD(c.fraction.den, p).Radical())
			}
		}
	}
	for _, c := range list {
		b.insertFactors(c.fraction.factors)
	}
	return b
}

// counts tells whether the poles of a member of the base count in component c.
func (c *component) counts(member exact.Poly) bool {
	if c.share == wholeShare {
		return true
	}
	return (c.share == forcedShare) == (c.forced.Degree() > 0 && divides(member, c.forced))
}

// impulsesCount tells whether the impulses of component c count.
func (c *component) impulsesCount() bool {
	return c.share == wholeShare || (c.share == forcedShare) == (c.cause > 0)
}
