package exact

import (
	"math"
	"math/big"
)

// timeScale returns the exponent k for which s = s'·10^k makes the numbers of
// the scaled pencil shortest, by the estimate of scaleWork.bits. Only speed
// depends on it.
func timeScale(list []scaleEntry, n int) int {
	gLo, gHi, cLo, cHi := math.Inf(1), math.Inf(-1), math.Inf(1), math.Inf(-1)
	for i := range list {
		if e := &list[i]; e.reactive {
			cLo, cHi = min(cLo, e.log), max(cHi, e.log)
		} else {
			gLo, gHi = min(gLo, e.log), max(gHi, e.log)
		}
	}
	if gLo > gHi || cLo > cHi {
		return 0
	}
	const log2Of10 = 3.3219280948873623
	lo := int(math.Floor((gLo - cHi) / log2Of10))
	hi := int(math.Ceil((gHi - cLo) / log2Of10))
	buf := make([]int, 4*n)
	work := scaleWork{
		row2: buf[:n], row5: buf[n : 2*n], col2: buf[2*n : 3*n], col5: buf[3*n:],
		rowMax: make([]float64, n),
	}
	const candidates = 8
	best, bestBits := 0, math.Inf(1)
	for {
		step := max(1, (hi-lo)/candidates)
		for k := lo; k <= hi; k += step {
			if b := work.bits(list, k); b < bestBits {
				best, bestBits = k, b
			}
		}
		if step == 1 {
			return best
		}
		lo, hi = best-step+1, best+step-1
	}
}

// log2Int returns log2|x| for x ≠ 0 with an absolute error below 2^-40, for
// up to 2^10 bits below 2^-42.
func log2Int(x *big.Int) float64 {
	k := x.BitLen()
	if k <= 63 {
		return math.Log2(math.Abs(float64(x.Int64())))
	}
	var t big.Int
	return math.Log2(float64(t.Rsh(t.Abs(x), uint(k-63)).Int64())) + float64(k-63)
}

// scaleWork is the memory of the estimate.
type scaleWork struct {
	row2, row5, col2, col5 []int
	rowMax                 []float64
}

// bits estimates the length of the determinant's coefficients for the time
// scale 10^k: the logarithms of the rows' largest numbers after removing
// denominators by rows and common factors by columns, powers of 2 and 5
// alone.
func (w *scaleWork) bits(list []scaleEntry, k int) float64 {
	const none = math.MaxInt / 2
	for i := range w.row2 {
		w.row2[i], w.row5[i], w.rowMax[i], w.col2[i], w.col5[i] = none, none, math.Inf(-1), none, none
	}
	delay := func(e *scaleEntry) int {
		if e.reactive {
			return k
		}
		return 0
	}
	for i := range list {
		e := &list[i]
		d := delay(e)
		w.row2[e.row] = min(w.row2[e.row], e.two+d)
		w.row5[e.row] = min(w.row5[e.row], e.five+d)
	}
	for i := range list {
		e := &list[i]
		d := delay(e)
		w.col2[e.col] = min(w.col2[e.col], e.two+d-w.row2[e.row])
		w.col5[e.col] = min(w.col5[e.col], e.five+d-w.row5[e.row])
	}
	const log2Of5 = 2.321928094887362
	for i := range list {
		e := &list[i]
		l := e.log + float64(delay(e))*(1+log2Of5) -
			float64(w.row2[e.row]+w.col2[e.col]) - log2Of5*float64(w.row5[e.row]+w.col5[e.col])
		w.rowMax[e.row] = max(w.rowMax[e.row], l)
	}
	sum := 0.0
	for _, l := range w.rowMax {
		if !math.IsInf(l, -1) {
			sum += l
		}
	}
	return sum
}
