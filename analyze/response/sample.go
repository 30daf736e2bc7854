package response

import (
	"context"
	"math"
	"math/big"
)

// samplePrecision is the working precision from which float64 terms are
// rounded: coefficients that cancel may lose half of it.
const samplePrecision = 256

// restart is how many samples the rotation recurrence goes before it is set
// anew. Twice as many would be as fast, but the bound of the error, which grows
// with it, is to stay below 1e-13 of a signal's size.
const restart = 16

// Sampler evaluates a signal in float64, fast: its poles and coefficients are
// found once.
type Sampler struct {
	starts []*big.Rat
	hi, lo []float64 // starts as unevaluated sums
	sums   []*floatSum
}

// Sampler prepares fast sampling. The error is the context's, one of finding
// the poles, or that a coefficient leaves the range of float64.
func (s *Signal) Sampler(ctx context.Context) (*Sampler, error) {
	out := &Sampler{}
	for i, seg := range s.pieces() {
		x, err := s.expand(ctx, i, samplePrecision)
		if err != nil {
			return nil, err
		}
		f, err := x.toFloat()
		if err != nil {
			return nil, err
		}
		hi, lo := splitRat(seg.start)
		out.starts = append(out.starts, seg.start)
		out.hi, out.lo, out.sums = append(out.hi, hi), append(out.lo, lo), append(out.sums, f)
	}
	return out, nil
}

// splitRat writes r as an unevaluated sum of two float64.
func splitRat(r *big.Rat) (hi, lo float64) {
	hi, _ = r.Float64()
	if math.IsInf(hi, 0) {
		return hi, 0
	}
	rest := new(big.Rat).Sub(r, new(big.Rat).SetFloat64(hi))
	lo, _ = rest.Float64()
	return hi, lo
}

// Sample evaluates the signal at times in any order, right limits at jumps, 0
// before t = 0. No value is off by more than the bound that is returned too.
func (p *Sampler) Sample(times []float64) (values []float64, bound float64) {
	values = make([]float64, len(times))
	for i, t := range times {
		k := p.segment(t)
		if k < 0 {
			continue
		}
		hi, lo := p.since(k, t, 0)
		v, b := p.sums[k].at(hi, lo)
		values[i], bound = v, math.Max(bound, b)
	}
	return values, bound
}

// Uniform evaluates the signal at t0 + k·dt for k = 0 … n−1, right limits at
// jumps, with dt > 0 and t0 ≥ 0. No value is off by more than the bound.
func (p *Sampler) Uniform(t0, dt float64, n int) (values []float64, bound float64) {
	values = make([]float64, n)
	for k := 0; k < n; {
		t, low := stepped(t0, dt, k)
		i := p.segment(t)
		stop := n
		if i+1 < len(p.hi) {
			// The first sample that is not before the next segment.
			next := int(math.Min(float64(n), math.Max(float64(k+1), math.Ceil((p.hi[i+1]-t0)/dt)-1)))
			for next < n && p.segment(timeAt(t0, dt, next)) <= i {
				next++
			}
			stop = next
		}
		if i < 0 {
			k = stop
			continue
		}
		hi, lo := p.since(i, t, low)
		b := p.sums[i].uniform(hi, lo, dt, values[k:stop])
		bound = math.Max(bound, b)
		k = stop
	}
	return values, bound
}

// stepped is t0 + k·dt as an unevaluated sum.
func stepped(t0, dt float64, k int) (hi, lo float64) {
	x := float64(k) * dt
	rest := math.FMA(float64(k), dt, -x)
	hi = t0 + x
	bb := hi - t0
	return hi, (t0 - (hi - bb)) + (x - bb) + rest
}

func timeAt(t0, dt float64, k int) float64 { hi, _ := stepped(t0, dt, k); return hi }

// segment finds the segment that holds t, -1 before the first.
func (p *Sampler) segment(t float64) int {
	lo, hi := 0, len(p.hi)
	for lo < hi {
		mid := (lo + hi) / 2
		if t > p.hi[mid] || t == p.hi[mid] && p.lo[mid] <= 0 {
			lo = mid + 1
		} else {
			hi = mid
		}
	}
	return lo - 1
}

// since is the time after the beginning of segment k.
func (p *Sampler) since(k int, t, low float64) (hi, lo float64) {
	hi = t - p.hi[k]
	bb := hi - t
	err := (t - (hi - bb)) - (p.hi[k] + bb)
	return hi, err + low - p.lo[k]
}

// at evaluates the sum at τ = t + low, with a bound of the error: every term is
// off by at most (exponentialUnits + 4·powers + 6) units of its size, the sum by
// one more unit for each term.
func (x *floatSum) at(t, low float64) (value, bound float64) {
	for i := range x.terms {
		f := &x.terms[i]
		er, ei := f.exponential(t, low)
		cr, ci := f.coefficient(t)
		value += cr*er - ci*ei
		units := float64(exponentialUnits+4*len(f.re)+6+len(x.terms)) + f.phaseUnits(t)
		bound += units * unit * f.bound(t, t)
	}
	return value, bound
}

// uniform evaluates the sum at τ0 + k·dt. Each term turns by e^{p·dt} from one
// sample to the next; the turning is off by exponentialUnits units and each
// complex multiplication adds √5 < 3 (R. Brent, C. Percival, P. Zimmermann,
// "Error bounds on complex floating-point multiplication", Math. Comp. 76
// (2007)), so that after k of them the error is below k·(exponentialUnits+3)
// units of the term's size, and fewer than restart of them are ever taken.
func (x *floatSum) uniform(hi, lo, dt float64, out []float64) (bound float64) {
	for i := range x.terms {
		f := &x.terms[i]
		units := float64((restart-1)*(exponentialUnits+3)+exponentialUnits+4*len(f.re)+6+len(x.terms)) + f.phaseUnits(hi+dt*float64(len(out)))
		bound += units * unit * f.bound(math.Max(hi, 0), hi+dt*float64(len(out)))
		switch {
		case f.zero:
			f.sampleConstant(hi, dt, out)
		case f.real:
			f.sampleReal(hi, lo, dt, out)
		default:
			f.sampleComplex(hi, lo, dt, out)
		}
	}
	return bound
}

func (f *floatTerm) sampleConstant(hi, dt float64, out []float64) {
	for k := range out {
		re, _ := f.coefficient(hi + float64(k)*dt)
		out[k] += re
	}
}

func (f *floatTerm) sampleReal(hi, lo, dt float64, out []float64) {
	turn, _ := f.exponential(dt, 0)
	for from := 0; from < len(out); from += restart {
		t, low := stepped(hi, dt, from)
		e, _ := f.exponential(t, low+lo)
		part := out[from:min(from+restart, len(out))]
		if len(f.re) == 1 {
			e *= f.re[0]
			for k := range part {
				part[k] += e
				e *= turn
			}
			continue
		}
		for k := range part {
			c, _ := f.coefficient(hi + float64(from+k)*dt)
			part[k] += c * e
			e *= turn
		}
	}
}

func (f *floatTerm) sampleComplex(hi, lo, dt float64, out []float64) {
	tr, ti := f.exponential(dt, 0)
	for from := 0; from < len(out); from += restart {
		t, low := stepped(hi, dt, from)
		er, ei := f.exponential(t, low+lo)
		part := out[from:min(from+restart, len(out))]
		if len(f.re) == 1 {
			er, ei = f.re[0]*er-f.im[0]*ei, f.re[0]*ei+f.im[0]*er
			for k := range part {
				part[k] += er
				er, ei = er*tr-ei*ti, er*ti+ei*tr
			}
			continue
		}
		for k := range part {
			cr, ci := f.coefficient(hi + float64(from+k)*dt)
			part[k] += cr*er - ci*ei
			er, ei = er*tr-ei*ti, er*ti+ei*tr
		}
	}
}
