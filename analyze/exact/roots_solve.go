package exact

import (
	"context"
	"errors"
	"math"
	"math/big"
	"math/bits"
	"math/cmplx"
)

// errUnsettled would be a defect: the iteration always settles for square-free
// polynomials.
var errUnsettled = errors.New("the iteration for the roots of a polynomial did not settle")

// rootSolver finds the roots of a square-free polynomial p with p(0) ≠ 0.
//
// # The proof
//
// Around any point z there is a root within n·|p(z)/p'(z)| (of Σ 1/(z−r_j) =
// p'(z)/p(z) one term is at least the n-th part). The evaluator bounds p from
// above and p' from below. When the n discs so found are disjoint, each holds
// exactly one root. A disc then that is symmetric to the real axis holds a real
// root, since it holds the conjugate too; one off the axis does not, and its
// mirror image holds the conjugate.
//
// The floating-point steps in the bounds (logarithms, hypotenuses, sums of a few
// terms) have relative errors below 2^-48 each; the bounds are widened by
// slack = 2^-20 in the logarithm to cover them.
type rootSolver struct {
	poly      Poly
	value     *evaluator
	roots     []approximation
	certified bool
	rational  map[int]*big.Rat // rational roots found, by index; see rationalIn
	searched  map[int]int64    // bits of the ball in which none was found
	essential []int            // after certification: the real roots and those of the upper half plane
	space     scratch
	usual     int    // W of the last evaluation that met its goal
	homes     []home // once the roots are numbered
	views     []start
}

const slack = 0x1p-20

// approximation is z = (x + j·y)·2^(k−64Z+1); the longer of x and y has 64Z−1
// bits.
type approximation struct {
	x, y      *big.Int
	words     int // Z
	k         int
	work      int     // W of the evaluations
	log       float64 // the root is within 2^log·|z|; +Inf where nothing is known
	goal      float64 // wanted: log ≤ −goal
	step      float64 // log2 of the size of the last correction, relative
	tries     int     // corrections since the last change of plan
	displaced int     // times that it was sent elsewhere
	guesses   int     // times that match took it for real or for one of a pair
	link      int     // index of the mirror image that is kept in step, own index for a real point, −1 for none
}

func newRootSolver(p Poly) *rootSolver {
	return &rootSolver{poly: p, rational: map[int]*big.Rat{}, searched: map[int]int64{}}
}

// refine brings every root to a relative radius of 2^-goal.
func (s *rootSolver) refine(ctx context.Context, goal int) error {
	if s.poly.Degree() == 1 {
		return nil // taken from the coefficients
	}
	if s.value == nil {
		if err := s.begin(ctx); err != nil {
			return err
		}
	}
	for i := range s.roots {
		s.roots[i].goal = max(s.roots[i].goal, float64(goal))
	}
	for {
		if err := s.iterate(ctx); err != nil {
			return err
		}
		switch {
		case s.homes != nil:
			return s.stayedHome()
		case s.isolated() && s.pairUp():
			s.certified = true
			return nil
		}
	}
}

// home is the disc of a root after which the roots are numbered.
type home struct {
	approximation
	view start
}

// settle keeps the discs as homes: from now on every finer disc must be the same
// root's. The caller has seen to it that no other root is within four times
// the radius.
func (s *rootSolver) settle() {
	s.homes = make([]home, len(s.roots))
	for i := range s.roots {
		s.homes[i] = s.homeOf(i)
	}
}

func (s *rootSolver) homeOf(i int) home {
	h := home{s.roots[i], s.views[i]}
	h.x, h.y = new(big.Int).Set(h.x), new(big.Int).Set(h.y)
	return h
}

// stayedHome checks that every disc lies within four times the radius of its
// home. A disc that does not goes back there and is an error; it would be a
// defect of the iteration.
func (s *rootSolver) stayedHome() error {
	for _, i := range s.essential {
		h := s.homes[i]
		if s.roots[i].log == h.log {
			continue
		}
		d, e := s.difference(i, -1)
		limit := h.log + math.Log2(cmplx.Abs(h.view.x)) + float64(h.view.k-s.views[i].k)
		// |new − home| ≤ 3 radii of the home, and the new radius at most one
		if math.Log2(cmplx.Abs(d))+float64(e)+slack > limit+math.Log2(3) || s.logRadius(i) > limit {
			s.roots[i], s.views[i] = h.approximation, h.view
			s.roots[i].x, s.roots[i].y = new(big.Int).Set(h.x), new(big.Int).Set(h.y)
			s.look(i)
			return errUnsettled
		}
	}
	return nil
}

func (s *rootSolver) begin(ctx context.Context) error {
	value := newEvaluator(s.poly)
	points := value.roughRoots(ctx)
	if err := ctx.Err(); err != nil {
		return err
	}
	s.value = value
	for _, z := range points {
		s.roots = append(s.roots, newApproximation(z))
	}
	s.views = make([]start, len(s.roots))
	for i := range s.roots {
		s.look(i)
	}
	return nil
}

func newApproximation(z start) approximation {
	a := approximation{words: 1, k: z.k, work: 2, log: math.Inf(1), step: -10, link: -1}
	a.x = scaleFloat(real(z.x), 63)
	a.y = scaleFloat(imag(z.x), 63)
	a.normalise()
	return a
}

// scaleFloat returns f·2^shift rounded to an integer.
func scaleFloat(f float64, shift int) *big.Int {
	m, e := math.Frexp(f)
	n := big.NewInt(int64(math.Ldexp(m, 53)))
	shift += e - 53
	if shift >= 0 {
		return n.Lsh(n, uint(shift))
	}
	return n.Rsh(n, uint(-shift))
}

// normalise gives the longer part 64Z−1 bits.
func (a *approximation) normalise() {
	size := max(a.x.BitLen(), a.y.BitLen())
	if size == 0 {
		a.x.SetInt64(1)
		size = 1
	}
	want := 64*a.words - 1
	switch d := want - size; {
	case d > 0:
		a.x.Lsh(a.x, uint(d))
		a.y.Lsh(a.y, uint(d))
		a.k -= d
	case d < 0:
		a.x.Rsh(a.x, uint(-d))
		a.y.Rsh(a.y, uint(-d))
		a.k -= d
	}
}

// lengthen gives the point more words.
func (a *approximation) lengthen(words int) {
	if words > a.words {
		a.x.Lsh(a.x, uint(64*(words-a.words)))
		a.y.Lsh(a.y, uint(64*(words-a.words)))
		a.words = words
	}
}

func (a *approximation) fixed() *fixedPoint {
	z := &fixedPoint{u: padded(a.x, a.words), v: padded(a.y, a.words), uneg: a.x.Sign() < 0, vneg: a.y.Sign() < 0, k: a.k}
	z.log = math.Log2(math.Hypot(topFloat(z.u), topFloat(z.v)))
	return z
}

func padded(x *big.Int, words int) []uint64 {
	out := make([]uint64, words)
	copy(out, wordsOf(x))
	return out
}

// topFloat returns the number with the point before its highest bit.
func topFloat(u []uint64) float64 {
	f := math.Ldexp(float64(u[len(u)-1]), -63)
	if len(u) > 1 {
		f += math.Ldexp(float64(u[len(u)-2]), -127)
	}
	return f
}

// look renews the complex128 view of a point, and of its mirror image.
func (s *rootSolver) look(i int) {
	a := &s.roots[i]
	re, im := signedFloat(a.x, a.words), signedFloat(a.y, a.words)
	s.views[i] = start{complex(re, im), a.k}
	if a.link >= 0 && a.link != i {
		b := &s.roots[a.link]
		b.x.Set(a.x)
		b.y.Neg(a.y)
		b.words, b.k, b.work, b.log, b.goal = a.words, a.k, a.work, a.log, a.goal
		s.views[a.link] = start{complex(re, -im), a.k}
	}
}

// signedFloat returns x·2^(1−64·words) as the float64 next to it, 0 where that is
// below its range.
func signedFloat(x *big.Int, words int) float64 {
	f, e := leading(x)
	f = math.Ldexp(f, e+1-64*words)
	if x.Sign() < 0 {
		return -f
	}
	return f
}

// logAbs returns log2 of |x|·2^(1−64·words), −Inf for 0.
func logAbs(x *big.Int, words int) float64 {
	f, e := leading(x)
	return math.Log2(f) + float64(e+1-64*words)
}

// leading returns |x| as f·2^e up to 2^-52 of it.
func leading(x *big.Int) (f float64, e int) {
	raw := x.Bits()
	for i := len(raw) - 1; i >= max(0, len(raw)-3); i-- {
		f, e = math.Ldexp(f, bits.UintSize)+float64(raw[i]), i*bits.UintSize
	}
	return f, e
}

// leads tells whether the point is moved by itself: it is not the lower one of a
// pair of mirror images.
func (s *rootSolver) leads(i int) bool {
	link := s.roots[i].link
	return link < 0 || link == i || i < link
}

// capacity is the relative precision in bits that a point of so many words can
// prove: it is off its ideal place by up to 2^(2.5−64Z) relative, which makes n
// times that as radius.
func (s *rootSolver) capacity(words int) float64 {
	return 64*float64(words) - 4 - math.Log2(float64(s.value.n))
}

// mostSweeps ends an iteration that does not settle.
const mostSweeps = 4000

// iterate moves every point until its bound meets its goal.
func (s *rootSolver) iterate(ctx context.Context) error {
	for range mostSweeps {
		if !s.certified {
			s.match()
		}
		waiting := 0
		for i := range s.roots {
			a := &s.roots[i]
			if a.log <= -a.goal || !s.leads(i) {
				continue
			}
			if err := ctx.Err(); err != nil {
				return err
			}
			if done := s.improve(i); !done {
				waiting++
			}
			s.look(i)
		}
		if waiting == 0 {
			return nil
		}
	}
	return errUnsettled
}

// improve evaluates p at a point and corrects it by the step of Aberth and
// Ehrlich unless the bound there meets the goal. A correction is only made from
// a value that stands out of its error bound; before that the evaluation gets
// more words.
func (s *rootSolver) improve(i int) (done bool) {
	a := &s.roots[i]
	n := math.Log2(float64(s.value.n))
	var ev evaluation
	if a.tries == 0 {
		a.work = max(a.work, s.usual-1)
	}
	for {
		ev = s.value.evaluate(a.fixed(), a.work, &s.space)
		a.log = bound(&ev) + n
		if a.log <= -a.goal {
			s.usual = a.work
			return true
		}
		settled := math.Min(math.Max(-a.log, 2), 40)
		wanted := math.Min(settled, math.Max(a.goal+a.log+2, 2))
		if ev.logP-ev.logEP >= wanted {
			break
		}
		near := math.Min(a.goal, math.Max(-a.log, 0)+52)
		more := 1
		if ev.logD > ev.logED+3 {
			more = max(1, int(math.Ceil((n+ev.logEP-ev.logD+near+4)/64)))
		}
		a.work += min(more, 4+a.work)
		if need := int(math.Ceil((near + 4 + n) / 64)); need > a.words && s.capacity(a.words) < near {
			a.lengthen(need)
		}
	}
	if a.goal > s.capacity(a.words) && -a.log > s.capacity(a.words)-20 {
		a.lengthen(a.words + 1)
	}
	s.correct(i, ev.ratio.add(s.repulsion(i).neg()).inverse())
	return false
}

// bound returns log2 of a bound of |p(z)/(z·p'(z))| from an evaluation.
func bound(ev *evaluation) float64 {
	if ev.logD <= ev.logED {
		return math.Inf(1)
	}
	above := ev.logEP + math.Log2(1+math.Exp2(math.Min(ev.logP-ev.logEP, 1000)))
	if ev.logP-ev.logEP > 900 {
		above = ev.logP + 1
	}
	below := ev.logD + math.Log2(-math.Expm1(math.Ln2*(ev.logED-ev.logD)))
	return above - below + slack
}

// correct replaces z by z·(1 − step).
func (s *rootSolver) correct(i int, step wide) {
	a := &s.roots[i]
	size := step.log()
	if a.link == i {
		step.x = complex(real(step.x), 0)
	}
	if size > -1 {
		z := start{s.views[i].x * (1 - step.float()), a.k}.normal()
		if s.value.rim.outside(z) {
			z = s.value.rim.again(i, a.tries)
		}
		s.place(i, z)
		return
	}
	shift := 64*a.words - 1 + step.k
	d := s.views[i].x * step.x
	a.x.Sub(a.x, scaleFloat(real(d), shift))
	a.y.Sub(a.y, scaleFloat(imag(d), shift))
	a.normalise()
	a.step = size
	a.log = math.Inf(1)
	a.tries++
	if a.tries > 40 && !s.certified {
		s.rethink(i)
	}
}

// place moves a point far, so that it begins anew.
func (s *rootSolver) place(i int, z start) {
	a := &s.roots[i]
	if a.link >= 0 {
		if a.link != i {
			s.roots[a.link].link = -1
		}
		a.link = -1
	}
	a.x, a.y, a.k = scaleFloat(real(z.x), 64*a.words-1), scaleFloat(imag(z.x), 64*a.words-1), z.k
	a.normalise()
	a.log, a.step = math.Inf(1), 0
	a.tries++
}

// rethink undoes a guess that did not work out: that a point is real, or one of
// a pair.
func (s *rootSolver) rethink(i int) {
	a := &s.roots[i]
	a.tries = 0
	if a.link >= 0 && a.link != i {
		s.roots[a.link].link = -1
	}
	a.link = -1
	if a.y.Sign() == 0 {
		s.leaveAxis(i)
	}
}

// leaveAxis moves a point off the real axis by the size of its last step: points
// on it stay there by symmetry, which does not do where a pair of complex roots
// is close to it.
func (s *rootSolver) leaveAxis(i int) {
	a := &s.roots[i]
	size := math.Floor(math.Min(a.step, -10))
	a.y.Rsh(a.x, uint(math.Min(-size-1, float64(64*a.words-2))))
	if a.y.Sign() == 0 {
		a.y.SetInt64(1)
	}
	if (a.y.Sign() < 0) != (i%2 == 0) {
		a.y.Neg(a.y)
	}
	a.normalise()
	a.log = math.Inf(1)
}

// repulsion is Σ z_i/(z_i − z_j), with exact differences where the views are
// too close to tell.
func (s *rootSolver) repulsion(i int) wide {
	rough, close := repulsion(s.views, i)
	if !close {
		return wide{rough, 0}.normal()
	}
	var sum wide
	x, k := s.views[i].x, s.views[i].k
	for j := range s.views {
		if j == i {
			continue
		}
		shift := s.views[j].k - k
		switch {
		case shift > 60:
			continue
		case shift < -60:
			sum = sum.add(wide{1, 0})
			continue
		}
		d := x - s.views[j].x*complex(math.Ldexp(1, shift), 0)
		e := 0
		if cmplx.Abs(d) < 0x1p-20 {
			d, e = s.difference(i, j)
		}
		if d == 0 {
			continue
		}
		sum = sum.add(wide{x / d, -e}.normal())
	}
	return sum
}

// difference returns (z_i − z_j)/2^k_i as a complex128 times a power of two; each
// part is within 2^-52 of the exact difference, relative. With j = −1 the other
// point is the home of i.
func (s *rootSolver) difference(i, j int) (d complex128, exponent int) {
	a := &s.roots[i]
	b := a
	if j >= 0 {
		b = &s.roots[j]
	} else {
		b = &s.homes[i].approximation
	}
	// Common unit: the finer of the two.
	ea, eb := a.k-64*a.words+1, b.k-64*b.words+1
	unit := min(ea, eb)
	part := func(p, q *big.Int) *big.Int {
		l := new(big.Int).Lsh(p, uint(ea-unit))
		return l.Sub(l, new(big.Int).Lsh(q, uint(eb-unit)))
	}
	dx, dy := part(a.x, b.x), part(a.y, b.y)
	size := max(dx.BitLen(), dy.BitLen())
	toFloat := func(v *big.Int) float64 {
		f := new(big.Float).SetInt(v)
		f.SetMantExp(f, -size)
		r, _ := f.Float64()
		return r
	}
	return complex(toFloat(dx), toFloat(dy)), unit + size - a.k
}
