package response

import (
	"container/heap"
	"context"
	"errors"
	"math"
	"math/big"
	"sort"

	"portlight/dialect/number"
)

const (
	// tolerance, relative to the size of the signal, is how near the bound of
	// the unsearched rest must come before the place of a maximum is refined.
	tolerance = 2e-13
	// panelFloor is the size, relative to the signal, below which a term that is
	// too fast for a panel becomes a bound.
	panelFloor = 1e-17
	// narrowest is the width in x at which a panel is cut no further.
	narrowest = 1.0 / (1 << 46)
	// searchBudget is how many boxes a search may look at: about a second of work.
	searchBudget = 100_000
	// walkBudget is the same for what has to look at every stretch: integrals,
	// crossings, turning points.
	walkBudget = 2_000_000
	// softBudget and lateBudget are after how many boxes a search stops that
	// knows the value to softWidth of the curve's size, or lateWidth of its own:
	// which of many nearly equal peaks is greatest is then left open. At
	// searchBudget it makes do with hardWidth of its own.
	softBudget, lateBudget          = 3_000, 6_000
	softWidth, lateWidth, hardWidth = 1e-10, 1e-7, 1e-6
	// sharpenBudget is how many boxes that may hold the maximum, but were not
	// looked at closely, are cut in the end to rule them out or to find the place.
	sharpenBudget = 2_000
	// clusterBudget is how many places may compete for the maximum in the end.
	clusterBudget = 2_000
	// refinePrecision is the working precision of the last refinement.
	refinePrecision = 256
)

// Extreme is a greatest value, or a least one.
type Extreme struct {
	Value number.Ball
	Exact *big.Rat // the value, when it is rational for sure (of stand-ins, where there are any)
	// At is the first instant where it is taken; HasAt is false where it is only
	// approached in the limit. Left tells that it is the left limit there.
	At    number.Ball
	HasAt bool
	Left  bool
	// Attained is false where the value is approached but maybe never taken.
	Attained bool
	// Proved is false only where an error is returned. With ErrUndecided, Bounds
	// tells that the greatest value is in Value all the same.
	Proved, Bounds bool
}

// box is a stretch of time within a stage, and what is known of the curve there.
type box struct {
	stage  *stage
	index  int     // of the stage
	a, b   float64 // τ; b may be infinite
	models []model // of the leaves, once the panel is narrow enough
	m, h   float64
	u, v   float64 // part of the panel the box is
	on     enclosure
}

// exhausted tells whether cutting the panel further gains nothing.
func (b *box) exhausted() bool {
	return b.v-b.u <= narrowest || b.on.hi-b.on.lo <= 2*b.on.slack
}

// boxes is a heap, greatest upper bound first.
type boxes []*box

func (q boxes) Len() int           { return len(q) }
func (q boxes) Less(i, j int) bool { return q[i].on.hi > q[j].on.hi }
func (q boxes) Swap(i, j int)      { q[i], q[j] = q[j], q[i] }
func (q *boxes) Push(x any)        { *q = append(*q, x.(*box)) }
func (q *boxes) Pop() any {
	old := *q
	x := old[len(old)-1]
	*q = old[:len(old)-1]
	return x
}

// search is the branch and bound for the greatest value of a curve.
type search struct {
	curve  *Curve
	stages []*stage
	scale  float64
	best   float64 // the curve is at least that somewhere, or in the limit
	queue  boxes
	stuck  []*box
	steps  int
	// shift is the power of two by which all leaves were multiplied to bring
	// them into the range of float64.
	shift int
	// spread widens the value found, by what was taken as nothing.
	spread number.Ball
	// enough, when set, replaces the question whether a box is below best.
	enough func(enclosure) bool
}

func newSearch(c *Curve, stages []*stage) *search {
	s := &search{curve: c, stages: stages, best: math.Inf(-1)}
	for i, st := range stages {
		s.scale = math.Max(s.scale, st.scale)
		s.add(&box{stage: st, index: i, a: 0, b: st.length, on: s.bound(st, 0, st.length)})
	}
	return s
}

func (s *search) add(b *box) {
	if b.on.hi >= s.best {
		heap.Push(&s.queue, b)
	}
}

// run narrows the search until no box can hold more than best + tolerance. The
// boxes that may hold the maximum are then in queue and stuck.
func (s *search) run(ctx context.Context) error {
	for len(s.queue) > 0 && s.queue[0].on.hi > s.best+tolerance*s.scale {
		if s.steps++; s.steps > searchBudget || s.steps > softBudget && s.knows(softWidth*s.scale) ||
			s.steps > lateBudget && s.knows(lateWidth*math.Abs(s.best)) {
			return errTooMany
		}
		if s.steps%8 == 0 {
			if err := ctx.Err(); err != nil {
				return err
			}
		}
		s.split(heap.Pop(&s.queue).(*box))
	}
	return nil
}

// errTooMany: the greatest value is known to be between two bounds only.
var errTooMany = undecided("the curve has too many nearly equal peaks in the range")

// knows tells whether the greatest value is known to within width.
func (s *search) knows(width float64) bool {
	return len(s.queue) > 0 && s.queue[0].on.hi-s.best <= width
}

// sharpen cuts boxes that may hold the maximum and were not looked at closely,
// because their bounds came near enough to the best value seen.
func (s *search) sharpen(ctx context.Context) error {
	for steps := 0; steps < sharpenBudget; {
		var kept boxes
		var vague []*box
		for _, b := range s.queue {
			switch {
			case b.on.hi < s.best:
			case b.models == nil && !math.IsInf(b.b, 1):
				vague = append(vague, b)
			default:
				kept = append(kept, b)
			}
		}
		s.queue = kept
		heap.Init(&s.queue)
		if len(vague) == 0 {
			return nil
		}
		for i, b := range vague {
			if steps++; steps > sharpenBudget {
				for _, rest := range vague[i:] {
					heap.Push(&s.queue, rest)
				}
				return nil
			}
			if steps%8 == 0 {
				if err := ctx.Err(); err != nil {
					return err
				}
			}
			s.split(b)
		}
	}
	return nil
}

// split replaces a box by narrower ones with better bounds.
func (s *search) split(b *box) {
	switch {
	case math.IsInf(b.b, 1):
		s.cutTail(b)
	case b.models != nil:
		if b.exhausted() {
			s.stuck = append(s.stuck, b)
			return
		}
		c := (b.u + b.v) / 2
		s.addPart(b, b.u, c)
		s.addPart(b, c, b.v)
	case s.makePanel(b):
		s.addPart(b, -1, 1)
	default:
		c := b.a + (b.b-b.a)/2
		if c <= b.a || c >= b.b {
			s.stuck = append(s.stuck, b)
			return
		}
		for _, part := range [][2]float64{{b.a, c}, {c, b.b}} {
			s.add(&box{stage: b.stage, index: b.index, a: part[0], b: part[1], on: s.bound(b.stage, part[0], part[1])})
		}
	}
}

// cutTail cuts a piece off a box without end.
func (s *search) cutTail(b *box) {
	cut := math.Max(2*b.a, b.stage.unitTime())
	if math.IsInf(cut, 1) || cut <= b.a {
		s.stuck = append(s.stuck, b)
		return
	}
	s.add(&box{stage: b.stage, index: b.index, a: b.a, b: cut, on: s.bound(b.stage, b.a, cut)})
	s.add(&box{stage: b.stage, index: b.index, a: cut, b: b.b, on: s.bound(b.stage, cut, b.b)})
}

// slowest is the least |Re p| of what decays or grows, or the largest |p| when
// nothing does.
func (st *stage) slowest() float64 {
	slow, fast := math.Inf(1), 0.0
	for _, x := range st.floats {
		for i := range x.terms {
			f := &x.terms[i]
			fast = math.Max(fast, f.rate)
			if !f.zero && !f.axis {
				slow = math.Min(slow, math.Abs(f.sigma))
			}
		}
	}
	if math.IsInf(slow, 1) || slow == 0 {
		return fast
	}
	return slow
}

// unitTime is the time constant of the slowest term, 1 s when all are constants
// and powers of time.
func (st *stage) unitTime() float64 {
	if slow := st.slowest(); slow > 1e-250 {
		return 1 / slow
	}
	return 1
}

// makePanel builds the models of a box, if it is narrow enough for them. Where
// terms cancel so much that float64 does not tell what has to be told, they are
// expanded with balls, on a narrower panel.
func (s *search) makePanel(b *box) bool {
	b.m = b.a + (b.b-b.a)/2
	b.h = math.Nextafter(math.Max(b.b-b.m, b.m-b.a), math.Inf(1))
	models, ok := b.stage.models(b.m, b.h, s.scale)
	if !ok {
		return false
	}
	for i := range models {
		p := &models[i]
		if p.err < 1e-11*p.size() || p.err < tolerance*s.scale/4 || s.told(s.evaluate(models, -1, 1)) {
			continue
		}
		if b.stage.floats[i].rate*b.h > panelPhase/8 {
			return false
		}
		models[i] = b.stage.sums[i].ballModel(b.m, b.h)
	}
	b.models = models
	return true
}

// told tells whether an enclosure says all that the search wants to know.
func (s *search) told(e enclosure) bool {
	if s.enough != nil {
		return s.enough(e)
	}
	return e.hi < s.best
}

// models expands every leaf on [m−h, m+h].
func (st *stage) models(m, h, scale float64) ([]model, bool) {
	out := make([]model, len(st.floats))
	for i, x := range st.floats {
		if x.rate*h > 64*panelPhase && m-h <= 0 {
			return nil, false
		}
		var ok bool
		if out[i], ok = x.model(m, h, panelFloor*scale); !ok {
			return nil, false
		}
	}
	return out, true
}

// size is the sum of the coefficients' sizes.
func (p *model) size() float64 {
	s := 0.0
	for _, a := range p.a {
		s += math.Abs(a)
	}
	return s
}

// addPart adds the part [u, v] of a panel.
func (s *search) addPart(b *box, u, v float64) {
	part := &box{stage: b.stage, index: b.index, models: b.models, m: b.m, h: b.h, u: u, v: v}
	part.a = math.Max(b.a, down(b.m+b.h*u, b.m))
	part.b = math.Min(b.b, up(b.m+b.h*v, b.m))
	part.on = s.evaluate(b.models, u, v)
	part.on.hi = math.Min(part.on.hi, b.on.hi) // a wide panel says less than what it was cut from
	c := (u + v) / 2
	s.best = math.Max(s.best, s.evaluate(b.models, c, c).lo)
	s.add(part)
}

// down and up leave room for the rounding of m + h·x.
func down(x, m float64) float64 { return x - 4*unit*(math.Abs(x)+m) }
func up(x, m float64) float64   { return x + 4*unit*(math.Abs(x)+m) }

// evaluate encloses the curve on a part of a panel. Where it is one sum of its
// leaves there, their models are added first: added enclosures would know nothing
// of slopes that cancel.
func (s *search) evaluate(models []model, u, v float64) enclosure {
	leaves := make([]enclosure, len(models))
	for i := range models {
		leaves[i] = models[i].on(u, v)
	}
	if len(models) > 1 {
		if signs, _, _, ok := s.curve.branch(leaves, 1, 0); ok {
			return combineModels(models, signs).on(u, v)
		}
	}
	return s.curve.enclose(leaves)
}

// cluster is a connected stretch of boxes that may hold the maximum.
type cluster struct {
	stage *stage
	index int
	a, b  float64
	boxes []*box
}

// hi bounds the curve in the cluster from above.
func (c *cluster) hi() float64 {
	hi := math.Inf(-1)
	for _, b := range c.boxes {
		hi = math.Max(hi, b.on.hi)
	}
	return hi
}

// slope bounds the derivative with respect to x of the panels (its sign is that
// of df/dτ).
func (c *cluster) slope() interval {
	s := c.boxes[0].on.slope
	for _, b := range c.boxes[1:] {
		s = s.hull(b.on.slope)
	}
	return s
}

// slopeTau and bendTau bound df/dτ and d²f/dτ².
func (c *cluster) slopeTau() interval {
	return c.scaled(func(b *box) interval { return b.on.slope }, 1)
}
func (c *cluster) bendTau() interval {
	return c.scaled(func(b *box) interval { return b.on.bend }, 2)
}

func (c *cluster) scaled(of func(*box) interval, power int) interval {
	var out interval
	for i, b := range c.boxes {
		if b.models == nil {
			return everything
		}
		v := of(b)
		for range power {
			v = interval{v.lo / b.h, v.hi / b.h}.outward()
		}
		if i == 0 {
			out = v
		} else {
			out = out.hull(v)
		}
	}
	return out
}

// clusters joins the boxes that may hold the maximum, in order of time.
func (s *search) clusters() []cluster {
	var list []*box
	for _, b := range append(append([]*box(nil), s.queue...), s.stuck...) {
		if b.on.hi >= s.best {
			list = append(list, b)
		}
	}
	sort.Slice(list, func(i, j int) bool {
		if list[i].index != list[j].index {
			return list[i].index < list[j].index
		}
		return list[i].a < list[j].a
	})
	var out []cluster
	for _, b := range list {
		if n := len(out); n > 0 && out[n-1].index == b.index && b.a <= out[n-1].b {
			c := &out[n-1]
			c.b = math.Max(c.b, b.b)
			c.boxes = append(c.boxes, b)
			continue
		}
		out = append(out, cluster{b.stage, b.index, b.a, b.b, []*box{b}})
	}
	return out
}

// greatest finds the greatest value of the curve in the range.
func (c *Curve) greatest(ctx context.Context, r Range) (Extreme, error) {
	if t, yes, err := c.hasImpulse(ctx, r); err != nil {
		return Extreme{}, err
	} else if yes {
		return Extreme{}, undefined("there is an impulse at t = %s s", shortTime(t))
	}
	if x, ok := c.nonpositive(); ok {
		if e, ok, err := x.reachesZero(ctx, r); ok || err != nil {
			return e, err
		}
	}
	stages, err := c.stages(ctx, r, refinePrecision)
	if err != nil {
		return Extreme{}, err
	}
	shift, err := normalise(stages)
	if err != nil {
		return Extreme{}, err
	}
	s := newSearch(c, stages)
	s.shift = shift
	e, err := s.whole(ctx)
	return e.scaled(-shift), err
}

// whole finds the greatest value over all stages.
func (s *search) whole(ctx context.Context) (Extreme, error) {
	var floor *Extreme // the least upper limit for t → ∞
	for _, st := range s.stages {
		var err error
		if st.end == nil {
			floor, err = s.prepareTail(ctx, st)
		} else {
			err = s.prepareLong(ctx, st)
		}
		if err != nil {
			return Extreme{}, err
		}
	}
	e, err := s.find(ctx, floor)
	if s.spread.IsFinite() && !s.spread.ContainsZero() {
		e.Value, e.Exact = e.Value.WithBound(s.spread), nil
	}
	return e, err
}

// find searches and concludes; limit, where there is one, competes.
func (s *search) find(ctx context.Context, limit *Extreme) (Extreme, error) {
	err := s.run(ctx)
	if err == nil {
		err = s.sharpen(ctx)
	}
	var e Extreme
	if err == nil {
		e, err = s.conclude(ctx, limit)
	}
	if errors.Is(err, ErrUndecided) {
		return s.outer(err)
	}
	return e, err
}

// outer is what a search that was given up knows: the greatest value is between
// the best that was seen and the greatest bound. That is an answer without an
// instant when it is good for a few digits, else why it was given up.
func (s *search) outer(why error) (Extreme, error) {
	hi := s.best
	for _, b := range append(append([]*box(nil), s.queue...), s.stuck...) {
		hi = math.Max(hi, b.on.hi)
	}
	if math.IsInf(s.best, 0) || math.IsInf(hi, 0) || math.IsNaN(hi) {
		return Extreme{}, why
	}
	e := Extreme{Value: number.Hull(new(big.Float).SetFloat64(s.best), new(big.Float).SetFloat64(hi), refinePrecision), Bounds: true}
	if hi-s.best <= hardWidth*math.Abs(s.best) || hi-s.best <= softWidth*s.scale {
		e.Proved, why = true, nil
	}
	return e, why
}

// shortTime writes an instant for a message.
func shortTime(t *big.Rat) string {
	f, _ := t.Float64()
	return new(big.Float).SetFloat64(f).Text('g', 6)
}

// prepareTail looks at what remains for t → ∞: a limit, a steady oscillation,
// or growth.
func (s *search) prepareTail(ctx context.Context, st *stage) (*Extreme, error) {
	course := settles
	for _, x := range st.sums {
		course = max(course, x.course())
	}
	switch course {
	case grows:
		return nil, s.growth(st)
	case settles:
		v, exactly := s.curve.limitOf(st.sums)
		lower, _ := v.Lower().Float64()
		s.best = math.Max(s.best, math.Nextafter(lower, math.Inf(-1)))
		return &Extreme{Value: v, Exact: exactly, Proved: true}, nil
	}
	return s.steadySupremum(ctx, st)
}

// limitOf applies the curve to the limits of its leaves.
func (c *Curve) limitOf(sums []*sum) (number.Ball, *big.Rat) {
	v, r, _ := c.limitNext(sums)
	return v, r
}

func (c *Curve) limitNext(sums []*sum) (number.Ball, *big.Rat, []*sum) {
	if c.op == opLeaf {
		v, r := sums[0].limit()
		return v, r, sums[1:]
	}
	balls := make([]number.Ball, len(c.args))
	exacts := make([]*big.Rat, len(c.args))
	known := true
	for i, a := range c.args {
		balls[i], exacts[i], sums = a.limitNext(sums)
		known = known && exacts[i] != nil
	}
	if known {
		r := applyExact(c.op, exacts)
		return number.BallFromRat(r, refinePrecision), r, sums
	}
	return applyBall(c.op, balls), nil, sums
}

// growth treats a curve that grows: where it falls from some time on, the tail
// from there is nothing to the search; otherwise its greatest value is undefined,
// or not decided when rising and falling parts grow alike.
func (s *search) growth(st *stage) error {
	t := st.unitTime()
	for range 60 {
		if sums, ok := s.resolveTail(st, t); ok {
			d := sums.derivative()
			switch sign := d.dominance(number.BallFromFloat64(t, refinePrecision)); {
			case sign < 0:
				s.replaceTail(st, t)
				return nil
			case sign > 0 && sums.course() == grows, sums.swings():
				return undefined("it grows without bound")
			}
		}
		t *= 4
	}
	if inner := s.curve; inner.op == opAbs && inner.args[0].op == opLeaf {
		return undefined("it grows without bound") // |x| where x grows
	}
	return undecided("parts that grow alike decide where it goes")
}

// swings tells whether the fastest growing terms are all oscillations: their sum
// has no mean, so it goes beyond every bound on both sides.
func (x *sum) swings() bool {
	fastest := x.fastest()
	for _, t := range fastest {
		if t.pole.real {
			return false
		}
	}
	return len(fastest) > 0
}

// fastest lists the terms of greatest growth: greatest real part, then greatest
// power; all that cannot be told apart in these.
func (x *sum) fastest() []term {
	var out []term
	for _, t := range x.terms {
		if len(out) == 0 {
			out = append(out, t)
			continue
		}
		order, decided := t.pole.p.Re.Cmp(out[0].pole.p.Re)
		switch {
		case decided && order != 0 && order > 0, decided && order == 0 && len(t.c) > len(out[0].c):
			out = []term{t}
		case !decided || order == 0 && len(t.c) == len(out[0].c):
			out = append(out, t)
		}
	}
	return out
}
