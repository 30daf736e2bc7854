package response

import (
	"context"
	"math"
	"math/big"
	"sort"

	"portlight/dialect/number"
)

// place is a candidate for the greatest value: bounds of it and where it is.
type place struct {
	value    number.Ball
	exact    *big.Rat
	at       number.Ball
	hasAt    bool
	left     bool
	attained bool
	// coarse: no more than bounds, which do not tell whether anything as great as
	// another place's value is there at all.
	coarse bool
}

// conclude refines every place where the maximum may be and takes the greatest.
// The limit for t → ∞, when there is one, competes.
func (s *search) conclude(ctx context.Context, limit *Extreme) (Extreme, error) {
	list := s.clusters()
	if len(list) > clusterBudget {
		return Extreme{}, undecided("the curve has too many nearly equal peaks in the range")
	}
	var places []place
	if limit != nil {
		places = append(places, place{value: limit.Value, exact: limit.Exact})
	}
	closely := worthRefining(list)
	for i, c := range list {
		if err := ctx.Err(); err != nil {
			return Extreme{}, err
		}
		if !closely[i] && len(places) > 0 {
			places = append(places, s.coarse(c))
			continue
		}
		p, ok, err := s.refine(ctx, c)
		if err != nil {
			return Extreme{}, err
		}
		if ok {
			places = append(places, p)
		}
	}
	if len(places) == 0 {
		return Extreme{}, undecided("no greatest value was found")
	}
	return greatestOf(places), nil
}

// firstRefined and highestRefined are how many places, the first ones in time and
// the highest ones, are looked at to many digits: an oscillation has many peaks
// that are nearly equal.
const (
	firstRefined   = 12
	highestRefined = 12
)

// worthRefining chooses the clusters to look at to many digits.
func worthRefining(list []cluster) map[int]bool {
	out := map[int]bool{}
	order := make([]int, len(list))
	for i := range order {
		order[i] = i
		if i < firstRefined {
			out[i] = true
		}
	}
	hi := make([]float64, len(list))
	for i := range list {
		hi[i] = list[i].hi()
	}
	sort.SliceStable(order, func(i, j int) bool { return hi[order[i]] > hi[order[j]] })
	for _, i := range order[:min(highestRefined, len(order))] {
		out[i] = true
	}
	return out
}

// greatestOf takes the greatest of the places; where balls overlap, the first
// one that is taken and not only approached names the instant, unless one of
// them is coarse: then none is known to be the first.
func greatestOf(places []place) Extreme {
	lower := places[0].value.Lower()
	for _, p := range places[1:] {
		if l := p.value.Lower(); l.Cmp(lower) > 0 {
			lower = l
		}
	}
	var out *place
	var upper *big.Float
	rivals, coarse := 0, false
	for i := range places {
		p := &places[i]
		u := p.value.Upper()
		if u.Cmp(lower) < 0 {
			continue
		}
		rivals++
		coarse = coarse || p.coarse
		if upper == nil || u.Cmp(upper) > 0 {
			upper = u
		}
		if out == nil || p.hasAt && !out.hasAt {
			out = p
		}
	}
	e := Extreme{At: out.at, HasAt: out.hasAt, Left: out.left, Attained: out.attained, Proved: true}
	if coarse && rivals > 1 {
		e.At, e.HasAt, e.Left = number.Ball{}, false, false
	}
	e.Value = number.Hull(lower, upper, out.value.Prec())
	if out.exact != nil && out.value.Upper().Cmp(upper) >= 0 {
		e.Exact, e.Value = out.exact, out.value
	}
	return e
}

// coarse is what the search itself knows of a cluster.
func (s *search) coarse(c cluster) place {
	lo, hi := new(big.Float).SetFloat64(s.best), new(big.Float).SetFloat64(c.hi())
	p := place{value: number.Hull(lo, hi, refinePrecision), attained: true, hasAt: true, coarse: true}
	for _, b := range c.boxes {
		p.hasAt = p.hasAt && b.models != nil // else the stretch says little
	}
	p.at = number.Hull(new(big.Float).SetFloat64(c.a), new(big.Float).SetFloat64(c.b), refinePrecision)
	p.at = p.at.Add(number.BallFromRat(c.stage.origin, refinePrecision))
	return p
}

// refine finds the greatest value within a cluster to many digits: at an end
// when the curve is monotone there, or at the one zero of the derivative. ok is
// false when the cluster turns out to hold no maximum of its own.
func (s *search) refine(ctx context.Context, c cluster) (place, bool, error) {
	if math.IsInf(c.b, 1) {
		return s.refineTail(ctx, c)
	}
	switch slope := c.slope(); {
	case slope.lo > 0:
		return s.end(ctx, c, true)
	case slope.hi < 0:
		return s.end(ctx, c, false)
	}
	sums, ok := s.resolve(c)
	if !ok {
		return s.coarse(c), true, nil
	}
	d1 := sums.derivative()
	if len(d1.terms) == 0 { // constant
		return s.end(ctx, c, false)
	}
	if s.fallsFromStart(c, sums) {
		return s.end(ctx, c, false)
	}
	bend := c.bendTau()
	if !(bend.hi < 0) {
		return s.coarse(c), true, nil
	}
	// The derivative falls: it has one zero, or none and the maximum is an end.
	if sign, decided := d1.at(number.BallFromFloat64(c.a, refinePrecision)).Sign(); decided && sign <= 0 {
		return s.end(ctx, c, false)
	}
	if c.b < c.stage.length {
		if sign, decided := d1.at(number.BallFromFloat64(c.b, refinePrecision)).Sign(); decided && sign >= 0 {
			return s.end(ctx, c, true)
		}
	} else if sign, decided := d1.at(c.stage.lengthBall()).Sign(); decided && sign >= 0 {
		return s.end(ctx, c, true)
	}
	tau := newton(d1, d1.derivative(), bend, ballBetween(c.a, c.b))
	mid := number.BallFromFloat(tau.Mid(), refinePrecision)
	// f(τ) = f(mid) + f′(ξ)(τ−mid) with ξ in the ball of τ.
	reach := d1.at(tau).Abs().Mul(number.BallFromFloat(tau.Rad(), refinePrecision))
	p := place{value: sums.at(mid).WithBound(reach), hasAt: true, attained: true}
	p.at = tau.Add(number.BallFromRat(c.stage.origin, refinePrecision))
	return p, true, nil
}

// ballBetween holds every τ from a to b.
func ballBetween(a, b float64) number.Ball {
	return number.Hull(new(big.Float).SetFloat64(a), new(big.Float).SetFloat64(b), refinePrecision)
}

// lengthBall is the length of a stage that ends.
func (st *stage) lengthBall() number.Ball {
	switch {
	case st.period != nil:
		return *st.period
	case st.end == nil:
		return number.BallFromFloat64(st.length, refinePrecision)
	}
	return number.BallFromRat(new(big.Rat).Sub(st.end, st.origin), refinePrecision)
}

// newton encloses the zero of f in box, where slope bounds its derivative df, away
// from zero. The interval Newton step N = m − f(m)/df(box) keeps every zero; where
// it gains little the box is halved by the sign in its middle.
func newton(f, df *sum, slope interval, box number.Ball) number.Ball {
	whole := ballBetween(slope.lo, slope.hi)
	for range 200 {
		mid := number.BallFromFloat(box.Mid(), refinePrecision)
		value := f.at(mid)
		by := df.at(box)
		if sign, decided := by.Sign(); !decided || sign == 0 {
			by = whole
		}
		next := box
		if n := mid.Sub(value.Quo(by)); n.IsFinite() {
			next = intersect(n, box)
		}
		gain := new(big.Float).Mul(next.Rad(), big.NewFloat(1.5))
		if gain.Cmp(box.Rad()) >= 0 {
			sign, decided := value.Sign()
			if !decided {
				return next
			}
			if (sign > 0) == (slope.lo > 0) { // the zero is on the left
				next = number.Hull(box.Lower(), mid.Upper(), refinePrecision)
			} else {
				next = number.Hull(mid.Lower(), box.Upper(), refinePrecision)
			}
		}
		if next.Rad().Sign() == 0 || next.RelativeBits() > refinePrecision-24 {
			return next
		}
		if next.Rad().Cmp(box.Rad()) >= 0 {
			return box
		}
		box = next
	}
	return box
}

// intersect holds what two balls that share a number have in common.
func intersect(a, b number.Ball) number.Ball {
	lo, hi := a.Lower(), a.Upper()
	if b.Lower().Cmp(lo) > 0 {
		lo = b.Lower()
	}
	if b.Upper().Cmp(hi) < 0 {
		hi = b.Upper()
	}
	if lo.Cmp(hi) > 0 {
		return a
	}
	return number.Hull(lo, hi, refinePrecision)
}

// end evaluates the curve at one end of a cluster. An end inside a stage borders
// on a box that was ruled out, so it is no maximum; it is kept as a bound.
func (s *search) end(ctx context.Context, c cluster, right bool) (place, bool, error) {
	st := c.stage
	if right && (st.end == nil || c.b < st.length) || !right && c.a > 0 {
		tau := c.a
		if right {
			tau = c.b
		}
		x := number.BallFromFloat64(tau, refinePrecision)
		p := place{value: s.curve.valueOfSums(st.sums, x), hasAt: true, attained: true}
		p.at = x.Add(number.BallFromRat(st.origin, refinePrecision))
		return p, true, nil
	}
	t, side := st.origin, Right
	if right {
		t, side = st.end, Left
		if t == nil || st.end.Cmp(st.origin) == 0 {
			t, side = st.origin, Right
		}
	}
	p := place{hasAt: true, attained: true, left: side == Left}
	p.at = number.BallFromRat(t, refinePrecision)
	tau := number.BallFromRat(new(big.Rat).Sub(t, st.origin), refinePrecision)
	p.value = s.curve.valueOfSums(st.sums, tau)
	if st.steady {
		return p, true, nil
	}
	r, ok, err := s.curve.ExactAt(ctx, t, side)
	if err != nil {
		return p, false, err
	}
	if ok {
		r = ratPow2(r, s.shift)
		p.exact, p.value = r, number.BallFromRat(r, refinePrecision)
	}
	return p, true, nil
}

// valueOfSums evaluates the curve from the sums of its leaves.
func (c *Curve) valueOfSums(sums []*sum, tau number.Ball) number.Ball {
	v, _ := c.valueNext(sums, tau)
	return v
}

func (c *Curve) valueNext(sums []*sum, tau number.Ball) (number.Ball, []*sum) {
	if c.op == opLeaf {
		return sums[0].at(tau), sums[1:]
	}
	v := make([]number.Ball, len(c.args))
	for i, a := range c.args {
		v[i], sums = a.valueNext(sums, tau)
	}
	return applyBall(c.op, v), sums
}

// resolve finds the one sum that the curve is within a cluster, when the signs
// and orders that abs, least and greatest depend on do not change there.
func (s *search) resolve(c cluster) (*sum, bool) {
	var signs []int
	for _, b := range c.boxes {
		more, ok := s.boxBranch(b)
		if !ok || signs != nil && !sameSigns(signs, more) {
			return nil, false
		}
		signs = more
	}
	return combineSums(c.stage.sums, signs), true
}

// resolveTail finds the one sum that the curve is from τ = t on. Besides the
// sizes of the terms, a leaf's sign is known where one term of it dominates.
func (s *search) resolveTail(st *stage, t float64) (*sum, bool) {
	leaves := make([]enclosure, len(st.floats))
	from := number.BallFromFloat64(t, refinePrecision)
	for i, f := range st.floats {
		leaves[i] = f.crude(t, math.Inf(1))
		if leaves[i].lo < 0 && leaves[i].hi > 0 {
			switch st.sums[i].dominance(from) {
			case 1:
				leaves[i].lo = 0
			case -1:
				leaves[i].hi = 0
			}
		}
	}
	signs, _, rest, ok := s.curve.branch(leaves, 1, 0)
	if !ok || len(rest) != 0 {
		return nil, false
	}
	return combineSums(st.sums, signs), true
}

// branch tells with which sign each leaf counts, given enclosures of the leaves.
// Where it does not matter by more than twice near for any operation, either
// side will do.
func (c *Curve) branch(leaves []enclosure, sign int, near float64) (signs []int, value enclosure, rest []enclosure, ok bool) {
	if c.op == opLeaf {
		return []int{sign}, leaves[0], leaves[1:], true
	}
	first := sign
	if c.op == opNegate {
		first = -sign
	}
	signs, value, rest, ok = c.args[0].branch(leaves, first, near)
	if !ok {
		return nil, value, rest, false
	}
	switch c.op {
	case opNegate:
		return signs, value.negated(), rest, true
	case opAbs:
		switch {
		case value.lo >= -near:
			return signs, value.abs(), rest, true
		case value.hi <= near:
			for i := range signs {
				signs[i] = -signs[i]
			}
			return signs, value.abs(), rest, true
		}
		return nil, value, rest, false
	}
	more, other, rest, ok := c.args[1].branch(rest, sign, near)
	if !ok {
		return nil, value, rest, false
	}
	if c.op == opAdd {
		return append(signs, more...), enclosure{interval: value.add(other.interval)}, rest, true
	}
	less, greater := value.hi <= other.lo+near, value.lo >= other.hi-near
	switch {
	case less && c.op == opLeast || greater && c.op == opGreatest:
		return append(signs, make([]int, len(more))...), value, rest, true
	case greater && c.op == opLeast || less && c.op == opGreatest:
		return append(make([]int, len(signs)), more...), other, rest, true
	}
	return nil, value, rest, false
}

// refineTail treats a cluster without end: when the curve is monotone from its
// beginning on, it either falls, and has its greatest value there, or rises
// towards its limit, which competes already.
func (s *search) refineTail(ctx context.Context, c cluster) (place, bool, error) {
	unitTime := c.stage.unitTime()
	for t := c.a; t < 1e6*math.Max(c.a, unitTime); t = 2*t + unitTime {
		sums, ok := s.resolveTail(c.stage, t)
		if !ok {
			continue
		}
		d := sums.derivative()
		if len(d.terms) == 0 { // constant from here on
			return s.cutThenRefine(ctx, c, t, -1)
		}
		if sign := d.dominance(number.BallFromFloat64(t, refinePrecision)); sign != 0 {
			return s.cutThenRefine(ctx, c, t, sign)
		}
	}
	p := s.coarse(cluster{stage: c.stage, index: c.index, a: c.a, b: c.a, boxes: c.boxes})
	p.hasAt, p.attained = false, false
	return p, true, nil
}

// cutThenRefine treats a tail that is monotone only from τ = t on: what lies
// before is searched on its own.
func (s *search) cutThenRefine(ctx context.Context, c cluster, t float64, sign int) (place, bool, error) {
	inner := &search{curve: s.curve, stages: s.stages, scale: s.scale, best: s.best, shift: s.shift}
	if t > c.a {
		inner.add(&box{stage: c.stage, index: c.index, a: c.a, b: t, on: s.bound(c.stage, c.a, t)})
	}
	if err := inner.run(ctx); err != nil {
		return place{}, false, err
	}
	var found []place
	for _, d := range inner.clusters() {
		p, ok, err := inner.refine(ctx, d)
		if err != nil {
			return place{}, false, err
		}
		if ok {
			found = append(found, p)
		}
	}
	if sign < 0 {
		p, ok, err := s.end(ctx, cluster{stage: c.stage, index: c.index, a: t, b: c.b}, false)
		if err != nil {
			return place{}, false, err
		}
		if ok {
			found = append(found, p)
		}
	}
	if len(found) == 0 {
		return place{}, false, nil
	}
	e := greatestOf(found)
	return place{value: e.Value, exact: e.Exact, at: e.At, hasAt: e.HasAt, left: e.Left, attained: e.Attained}, true, nil
}
