package exact

import (
	"context"
	"math/big"
)

// frontierRun executes a plan.
type frontierRun struct {
	plan  *frontierPlan
	value []*big.Int
	words int     // K in words
	g, c  big.Int // scratch
}

// run executes the plan and returns det(M) and the bordered determinant as
// integer polynomials.
func (p *frontierPlan) run(ctx context.Context) (det, bordered Poly, err error) {
	r := &frontierRun{plan: p, value: make([]*big.Int, p.slots)}
	for i := range r.value {
		r.value[i] = new(big.Int)
	}
	r.value[0].SetInt64(1)
	for k := range p.stamps {
		if err := ctx.Err(); err != nil {
			return Poly{}, Poly{}, err
		}
		if k%frontierGrowth == 0 {
			r.grow(k)
		}
		r.stamp(&p.stamps[k])
	}
	return r.result(p.det, p.detOdd), r.result(p.num, p.numOdd), nil
}

// frontierGrowth is the number of stamps between looks at the packing.
const frontierGrowth = 16

// grow makes the packing wide enough for the coming stamps.
func (r *frontierRun) grow(k int) {
	last := min(k+frontierGrowth, len(r.plan.stamps)) - 1
	need := 0.0
	for _, s := range r.plan.stamps[k : last+1] {
		need = max(need, s.bits)
	}
	words := int(need+2)/wordBits + 1
	if words <= r.words {
		return
	}
	final := int(r.plan.stamps[len(r.plan.stamps)-1].bits+2)/wordBits + 1
	words = max(words, min(words+words/2, final))
	if k > 0 {
		before := &r.plan.stamps[k-1]
		for _, slot := range before.live {
			r.value[slot] = packInts(unpackInts(r.value[slot], before.terms, r.words), words)
		}
	}
	r.words = words
}

// stamp carries out one stamp.
func (r *frontierRun) stamp(s *frontierStamp) {
	shift := uint(r.words * wordBits)
	for _, m := range s.moves {
		src, dst := r.value[m.src], r.value[m.dst]
		if m.zero {
			dst.SetInt64(0)
		}
		if s.c != nil {
			r.c.Mul(src, s.c)
			r.c.Lsh(&r.c, shift)
			addOrSub(dst, &r.c, m.sub)
		}
		if s.g != nil {
			if s.g.IsInt64() && (s.g.Int64() == 1 || s.g.Int64() == -1) {
				addOrSub(dst, src, m.sub != (s.g.Sign() < 0))
			} else {
				addOrSub(dst, r.g.Mul(src, s.g), m.sub)
			}
		}
	}
}

func addOrSub(dst, x *big.Int, sub bool) {
	if sub {
		dst.Sub(dst, x)
	} else {
		dst.Add(dst, x)
	}
}

// result unpacks a slot.
func (r *frontierRun) result(slot int, odd bool) Poly {
	if slot < 0 {
		return Poly{}
	}
	terms := 1
	if n := len(r.plan.stamps); n > 0 {
		terms = r.plan.stamps[n-1].terms
	}
	words := max(r.words, 1)
	p := makePoly(unpackInts(r.value[slot], terms, words), nil)
	if odd {
		return p.Neg()
	}
	return p
}

// solveFrontier is solveModular for a system of one block, by the frontier
// recurrence for every pair of borders; plans holds one plan per pair, or the
// single plan of the determinant.
func (y *system) solveFrontier(ctx context.Context, plans []*frontierPlan, wantDet []bool) ([]Poly, []Poly, error) {
	dets := make([]Poly, 1)
	var nums []Poly
	for k, p := range plans {
		det, bordered, err := p.run(ctx)
		if err != nil {
			return nil, nil, err
		}
		if k == 0 && wantDet[0] {
			if dets[0] = det; det.IsZero() {
				return nil, nil, errSingular
			}
		}
		if y.outs*y.rhs > 0 {
			nums = append(nums, bordered.Neg())
		}
	}
	return dets, nums, nil
}
