package exact

import (
	"math"
	"math/big"
	"math/cmplx"
)

// match links points that look like conjugates, so that only one of the two is
// evaluated, and puts points on the real axis that look as if they belong there.
// These are guesses: the discs prove them in the end, and rethink undoes them
// where they lead nowhere.
func (s *rootSolver) match() {
	var closest []int
	for i := range s.roots {
		a := &s.roots[i]
		if a.link >= 0 || a.step > -7 {
			continue
		}
		x, k := s.views[i].x, s.views[i].k
		mirror := cmplx.Conj(x)
		nearest, twin, twinDistance, second := math.Inf(1), -1, math.Inf(1), math.Inf(1)
		closest = closest[:0]
		for j := range s.views {
			if j == i {
				continue
			}
			shift := s.views[j].k - k
			if shift > 60 || shift < -60 {
				nearest = math.Min(nearest, 0.5)
				continue
			}
			y := s.views[j].x * complex(math.Ldexp(1, shift), 0)
			to, across := cmplx.Abs(x-y), cmplx.Abs(mirror-y)
			if math.Min(to, across) < 0x1p-40 {
				closest = append(closest, j)
				continue
			}
			if across < twinDistance {
				twin, twinDistance, second = j, across, twinDistance
			} else {
				second = math.Min(second, across)
			}
			nearest = math.Min(nearest, to)
		}
		// From here on logarithms: the views do not tell small distances.
		nearest, twinDistance, second = math.Log2(nearest), math.Log2(twinDistance), math.Log2(second)
		for _, j := range closest {
			to, across := s.distances(i, j)
			if across < twinDistance {
				twin, twinDistance, second = j, across, twinDistance
			} else {
				second = math.Min(second, across)
			}
			nearest = math.Min(nearest, to)
		}
		off := logAbs(a.y, a.words)
		switch {
		case off < nearest-7 && a.step < nearest-3 && a.guesses < mostGuesses:
			a.guesses++
			a.link = i
			a.y.SetInt64(0)
			a.normalise()
			a.log, a.tries = math.Inf(1), 0
			s.look(i)
		case twin >= 0 && s.roots[twin].link < 0 && twinDistance < math.Min(nearest, second)-3 && a.step < off-3 && a.guesses < mostGuesses:
			a.guesses++
			leader, follower := min(i, twin), max(i, twin)
			s.roots[leader].link, s.roots[follower].link = follower, leader
			s.roots[leader].tries, s.roots[follower].tries = 0, 0
			s.look(leader)
		}
	}
}

// mostGuesses is how often a point is tried on the axis or as one of a pair.
const mostGuesses = 4

// distances returns log2 of |z_i − z_j| and |conj z_i − z_j| in units of 2^k_i.
func (s *rootSolver) distances(i, j int) (to, across float64) {
	d, e := s.difference(i, j)
	to = math.Log2(cmplx.Abs(d)) + float64(e)
	if s.roots[i].y.Sign() == 0 {
		return to, to
	}
	a := &s.roots[i]
	a.y.Neg(a.y)
	d, e = s.difference(i, j)
	a.y.Neg(a.y)
	return to, math.Log2(cmplx.Abs(d)) + float64(e)
}

// isolated tells whether the discs are disjoint; where they are not, it sets
// the goals of the discs concerned higher.
func (s *rootSolver) isolated() bool {
	radius := make([]float64, len(s.roots)) // in units of 2^k
	for i := range s.roots {
		radius[i] = math.Exp2(math.Max(s.roots[i].log, -1000)+slack) * cmplx.Abs(s.views[i].x)
	}
	isolated := true
	for i := range s.roots {
		for j := i + 1; j < len(s.roots); j++ {
			if s.apart(i, j, radius) {
				continue
			}
			isolated = false
			s.wantMore(i)
			s.wantMore(j)
			if s.twice(i, j) {
				s.displace(j)
			}
		}
	}
	return isolated
}

// twice tells whether two points with overlapping discs seem to have gone for the
// same roots: on a circle around the discs, wide against them, z·p'/p is about
// m over the relative radius if m roots are within. Fewer roots than points mean
// that one point is too many. A guess, which decides about the way only.
func (s *rootSolver) twice(i, j int) bool {
	a := s.roots[i]
	reach := int(math.Min(-a.log, -s.roots[j].log) / 2) // the circle's radius is 2^-reach
	if reach < 20 {
		return false
	}
	a.x, a.y = new(big.Int).Set(a.x), new(big.Int).Set(a.y)
	a.x.Add(a.x, new(big.Int).Rsh(s.roots[i].y, uint(reach)))
	a.y.Sub(a.y, new(big.Int).Rsh(s.roots[i].x, uint(reach))) // z·(1 − j·2^-reach)
	a.normalise()
	ev := s.value.evaluate(a.fixed(), a.work, &s.space)
	if ev.logP < ev.logEP+10 || ev.logD < ev.logED+10 {
		return false
	}
	within := math.Exp2(ev.logD - ev.logP - float64(reach))
	points := 1.0
	for k := range s.roots {
		if k == i {
			continue
		}
		if d, e := s.difference(i, k); math.Log2(cmplx.Abs(d))+float64(e) < -float64(reach)-4 || d == 0 {
			points++
		}
	}
	return within < points-0.6
}

// displace moves a point that may have gone for the root of another one away:
// the repulsion sends it to a root that has none.
func (s *rootSolver) displace(i int) {
	s.place(i, s.value.rim.again(i, s.roots[i].displaced))
	s.roots[i].displaced++
	s.roots[i].tries = 0
	s.look(i)
}

// wantMore sets the goal of a point beyond what it has reached.
func (s *rootSolver) wantMore(i int) {
	a := &s.roots[i]
	if a.log > -a.goal {
		return // already raised
	}
	a.goal += math.Max(30, a.goal/3)
	a.tries = 0
	if a.link >= 0 && a.link != i {
		s.roots[a.link].goal = a.goal
	}
}

// apart tells whether two discs are disjoint. The views are within 2^-52 of the
// points, relative to their magnitudes; where that does not decide, the exact
// difference does, to within 2^-50 of itself.
func (s *rootSolver) apart(i, j int, radius []float64) bool {
	if s.views[i].k < s.views[j].k {
		i, j = j, i
	}
	scale := 0.0
	if shift := s.views[j].k - s.views[i].k; shift > -1000 {
		scale = math.Ldexp(1, shift)
	} else {
		scale = 0x1p-1000
	}
	x, y := s.views[i].x, s.views[j].x*complex(scale, 0)
	both := radius[i] + radius[j]*scale
	d := math.Max(math.Abs(real(x)-real(y)), math.Abs(imag(x)-imag(y)))
	if d > (both+0x1p-48)*(1+slack) { // |x|, |y| < 2
		return true
	}
	if d = cmplx.Abs(x - y); d > (both+0x1p-48)*(1+slack) {
		return true
	}
	exact, e := s.difference(i, j)
	larger := math.Max(s.logRadius(i), s.logRadius(j)+float64(s.views[j].k-s.views[i].k))
	return math.Log2(cmplx.Abs(exact))+float64(e)-slack > larger+1
}

// logRadius is log2 of the radius of a disc in units of 2^k.
func (s *rootSolver) logRadius(i int) float64 {
	return s.roots[i].log + math.Log2(cmplx.Abs(s.views[i].x)) + slack
}

// pairUp decides of each disc whether it is on the real axis, above or below,
// and puts the mirror images of the upper ones in place of the lower ones. It
// fails, having changed the goals or points, where a disc reaches the axis
// without being centred on it.
func (s *rootSolver) pairUp() bool {
	var upper, lower, axis []int
	sure := true
	for i := range s.roots {
		a := &s.roots[i]
		off := logAbs(a.y, a.words)-slack > s.logRadius(i)
		switch {
		case a.y.Sign() == 0:
			axis = append(axis, i)
		case off && a.y.Sign() > 0:
			upper = append(upper, i)
		case off:
			lower = append(lower, i)
		case a.link >= 0 || a.guesses >= mostGuesses:
			sure = false // a pair about the axis, it seems: tell it from it
			s.wantMore(i)
		default:
			sure = false
			a.guesses++
			a.link = i
			a.y.SetInt64(0)
			a.normalise()
			a.log, a.tries = math.Inf(1), 0
			s.look(i)
		}
	}
	if !sure {
		return false
	}
	// Disjoint discs off the axis hold one root each, and roots come in
	// conjugate pairs: there are as many above as below.
	for _, i := range axis {
		s.roots[i].link = i
	}
	for m, i := range upper {
		j := lower[m]
		s.roots[i].link, s.roots[j].link = j, i
	}
	for _, i := range upper {
		s.look(i)
	}
	s.essential = append(append([]int{}, axis...), upper...)
	return true
}
