package exact

import (
	"context"
	"math"
	"math/cmplx"
	"slices"
)

// start is a first approximation z = x·2^k with |x| in [½, 2). Nothing is
// proved about it.
type start struct {
	x complex128
	k int
}

// rim holds the circles of the starting points: every root is in the annulus of
// half the smallest and twice the largest radius.
type rim struct {
	points    []start
	low, high float64 // log2 of the bounds
}

// outside tells whether a point has left the annulus, with a margin.
func (r *rim) outside(z start) bool {
	size := float64(z.k) + math.Log2(cmplx.Abs(z.x))
	return !(size >= r.low-2 && size <= r.high+2)
}

// again returns a new place for a point that is lost: its first one, turned.
func (r *rim) again(i, attempt int) start {
	z := r.points[i]
	z.x *= cmplx.Rect(1, 2.4*float64(attempt+1))
	return z.normal()
}

// startingPoints spreads n points over circles whose radii are the slopes of
// the Newton polygon of the coefficients: where the upper hull of the points
// (i, log2|a_i|) has an edge from i to j, j−i roots have magnitudes near
// (|a_i|/|a_j|)^(1/(j−i)) (D. A. Bini, Numer. Algorithms 13 (1996) 179–200).
// The circles are turned against one another and against the real axis.
func (e *evaluator) startingPoints() *rim {
	height := func(i int) float64 { return float64(e.bits[i]) + math.Log2(math.Abs(e.mantissa[i])) }
	var hull []int
	for i := range e.n + 1 {
		if e.bits[i] == 0 {
			continue
		}
		for len(hull) >= 2 {
			a, b := hull[len(hull)-2], hull[len(hull)-1]
			if (height(b)-height(a))*float64(i-a) > (height(i)-height(a))*float64(b-a) {
				break
			}
			hull = hull[:len(hull)-1]
		}
		hull = append(hull, i)
	}
	all := &rim{points: make([]start, 0, e.n), low: math.Inf(1), high: math.Inf(-1)}
	for h := 1; h < len(hull); h++ {
		a, b := hull[h-1], hull[h]
		count := b - a
		log := (height(a) - height(b)) / float64(count)
		all.low, all.high = min(all.low, log-1), max(all.high, log+1)
		k := int(math.Floor(log))
		radius := math.Exp2(log - float64(k))
		for m := range count {
			angle := 2*math.Pi*(float64(m)/float64(count)+float64(h)/float64(e.n)) + 0.7
			all.points = append(all.points, start{cmplx.Rect(radius, angle), k}.normal())
		}
	}
	return all
}

// roughEvaluation runs the scheme of evaluate in complex128: it returns
// z·p'/p, and whether p is too small against the sum of the terms' magnitudes
// to mean anything.
func (e *evaluator) roughEvaluation(z start, c []float64) (ratio complex128, noise bool) {
	size := math.Log2(cmplx.Abs(z.x))
	base := math.Floor(size)
	step := phaseStep(size)
	whole := z.k + int(base)
	// c_i = a_i·2^(κ_i−M)
	top := e.top(whole, step)
	var phase, carry uint64
	kappa := -top
	for i := range e.n + 1 {
		c[i] = scaled(e.mantissa[i], e.bits[i]+kappa)
		phase, carry = addPhase(phase, step)
		kappa += whole + int(carry)
	}
	x0 := z.x * complex(math.Exp2(-base), 0)
	x1 := x0 / 2
	r0 := cmplx.Abs(x0)
	phase = uint64(e.n) * step
	b := complex(c[e.n], 0)
	var d complex128
	sum := math.Abs(c[e.n])
	x, r := x0, r0
	for i := e.n - 1; i >= 0; i-- {
		d = d*x + b
		if phase < step {
			x, r = x1, r0/2
		} else {
			x, r = x0, r0
		}
		phase -= step
		b = b*x + complex(c[i], 0)
		sum = sum*r + math.Abs(c[i])
	}
	d *= x
	if size := math.Abs(real(b)) + math.Abs(imag(b)); size <= sum*0x1p-49 {
		return 0, true
	}
	return d / b, false
}

func addPhase(phase, step uint64) (sum, carry uint64) {
	sum = phase + step
	if sum < phase {
		carry = 1
	}
	return sum, carry
}

// scaled returns m·2^e for e ≤ 0, and 0 where that is below 2^-1000.
func scaled(m float64, e int) float64 {
	if m == 0 || e < -1000 {
		return 0
	}
	return m * math.Float64frombits(uint64(1023+e)<<52)
}

// normal brings |x| into [½, 2) roughly; a zero becomes a small number.
func (z start) normal() start {
	size := math.Max(math.Abs(real(z.x)), math.Abs(imag(z.x)))
	if size == 0 || math.IsNaN(size) || math.IsInf(size, 0) {
		return start{complex(0.6, 0.6), z.k - 60}
	}
	_, e := math.Frexp(size)
	if e == 0 {
		return z
	}
	scale := math.Ldexp(1, -e)
	return start{complex(real(z.x)*scale, imag(z.x)*scale), z.k + e}
}

// repulsion returns Σ z_i/(z_i − z_j) over j ≠ i, and whether some z_j is so close
// that these numbers do not tell the difference well.
func repulsion(z []start, i int) (sum complex128, close bool) {
	x, k := z[i].x, z[i].k
	xr, xi := real(x), imag(x)
	for j := range z {
		if j == i {
			continue
		}
		shift := z[j].k - k
		switch {
		case shift > 60:
			continue
		case shift < -60:
			sum += 1
			continue
		}
		scale := math.Float64frombits(uint64(1023+shift) << 52)
		dr, di := xr-real(z[j].x)*scale, xi-imag(z[j].x)*scale
		size := dr*dr + di*di
		if size < 0x1p-50 {
			if close = true; size < 1e-280 {
				continue
			}
		}
		inverse := 1 / size
		// x·conj(d)/|d|²
		sum += complex((xr*dr+xi*di)*inverse, (xi*dr-xr*di)*inverse)
	}
	return sum, close
}

// roughRoots moves the starting points by the iteration of Aberth and Ehrlich
// (O. Aberth, Math. Comp. 27 (1973) 339–344) in complex128 until each is as
// good as that arithmetic shows, which may be good or poor. The polynomial is
// evaluated by a three-term recurrence where one is found, as its roots are far
// better conditioned there than with the coefficients.
func (e *evaluator) roughRoots(ctx context.Context) []start {
	z := slices.Clone(e.rim.points)
	evaluate := e.coefficientEvaluation()
	if r := e.threeTerm(ctx); r != nil {
		evaluate = r.evaluate
		if points := r.begin(ctx); points != nil {
			for i, p := range points {
				if !e.rim.outside(p) {
					z[i] = p
				}
			}
		}
	}
	last := make([]float64, e.n) // size of the last step, 0 when settled
	for i := range last {
		last[i] = 8
	}
	for sweep := range 60 {
		if ctx.Err() != nil {
			break // the caller sees to it
		}
		moving := 0
		for i := range z {
			if last[i] == 0 {
				continue
			}
			ratio, noise := evaluate(z[i])
			if noise {
				last[i] = 0
				continue
			}
			moving++
			push, _ := repulsion(z, i)
			step := 1 / (ratio - push)
			size := cmplx.Abs(step)
			switch {
			case size < 0x1p-40, size < 0x1p-8 && size > last[i]/2:
				size = 0
			}
			last[i] = size
			z[i].x -= z[i].x * step
			z[i] = z[i].normal()
			if e.rim.outside(z[i]) {
				z[i], last[i] = e.rim.again(i, sweep), 8
			}
		}
		if moving == 0 {
			break
		}
	}
	return z
}

func (e *evaluator) coefficientEvaluation() func(start) (complex128, bool) {
	c := make([]float64, e.n+1)
	return func(z start) (complex128, bool) { return e.roughEvaluation(z, c) }
}
