package float

import (
	"context"
	"math"
	"math/big"
	"slices"

	"portlight/analyze/exact"
	"portlight/analyze/network"
)

// TooLarge tells whether exact polynomials of the network cost too much to
// wait for: more than about two seconds.
func TooLarge(sys *network.System) bool {
	large, _ := TooLargeContext(context.Background(), sys)
	return large
}

// TooLargeContext is TooLarge with a way to stop it; the error is the
// context's.
func TooLargeContext(ctx context.Context, sys *network.System) (bool, error) {
	n := sys.Size()
	if n == 0 {
		return false, nil
	}
	operations, err := operationsOf(ctx, sys.Pencil())
	if err != nil {
		return false, err
	}
	// The coefficients need not be looked at where two primes are too many.
	if exactTime(degreeBound(sys), 2, operations) > tooLong {
		return true, nil
	}
	e, err := newEstimate(ctx, sys.Pencil())
	if err != nil {
		return false, err
	}
	return exactTime(degreeBound(sys), e.primes(), operations) > tooLong, nil
}

// tooLong is the time in seconds that exact polynomials may take.
const tooLong = 2.0

// EstimateExact estimates how many seconds the exact determinant and a
// numerator of the network take. Both are polynomials whose coefficients are
// found from values at one point more than their degree, modulo as many primes
// of 61 bits as the coefficients need; every value is an elimination. So the
// estimate is points × primes × (operations + reconstruction); the operations
// are those of a symmetric elimination in minimum-degree order. On ladders,
// where another method is used, it comes to about the same.
//
// Measured on a 2-core machine, and estimated: RLC ladder of 100/200/400/800
// sections 10/74/700/3700 and 9/69/540/4300 ms, RC mesh of 10²/12²/14² nodes
// 3/15/30 and 3/11/33 ms.
func EstimateExact(sys *network.System) float64 {
	if sys.Size() == 0 {
		return 0
	}
	ctx := context.Background()
	operations, _ := operationsOf(ctx, sys.Pencil())
	e, _ := newEstimate(ctx, sys.Pencil())
	return exactTime(degreeBound(sys), e.primes(), operations)
}

// degreeBound bounds the degree of the determinant.
func degreeBound(sys *network.System) int { return min(len(sys.Memories()), sys.Size()) }

// exactTime is the estimate in seconds.
func exactTime(degree int, primes, operations float64) float64 {
	const perOperation, perPoint, perPair = 1.5e-9, 30e-9, 3e-9
	return float64(degree+1) * primes * (perOperation*operations + perPoint + perPair*primes)
}

// estimate holds the logarithms to base 2 of a pencil's entries.
type estimate struct {
	n        int
	row, col []int32
	log      []float64 // of |g| + ω₀|c|
	scale    []float64 // log2 of what makes each row integer, at most
}

func newEstimate(ctx context.Context, p *exact.Pencil) (*estimate, error) {
	e := &estimate{n: p.Size(), scale: make([]float64, p.Size())}
	decade := speed(p)
	power := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(decade, -decade))), nil))
	if decade < 0 {
		power.Inv(power)
	}
	least := make([]*big.Int, e.n)
	divisor := make([]*big.Int, e.n)
	var c big.Rat
	var g big.Int
	for x := range p.Entries() {
		if len(e.row)&255 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		c.Mul(x.C, power)
		e.row, e.col = append(e.row, int32(x.Row)), append(e.col, int32(x.Col))
		e.log = append(e.log, logSum(log2(x.G), log2(&c)))
		if least[x.Row] == nil {
			least[x.Row], divisor[x.Row] = big.NewInt(1), new(big.Int)
		}
		l, d := least[x.Row], divisor[x.Row]
		for _, r := range []*big.Rat{x.G, &c} {
			if r.Sign() == 0 {
				continue
			}
			g.GCD(nil, nil, l, r.Denom())
			l.Mul(l, g.Quo(r.Denom(), &g))
			if d.Sign() == 0 {
				d.Abs(r.Num())
			} else {
				d.GCD(nil, nil, d, g.Abs(r.Num()))
			}
		}
	}
	for i, l := range least {
		if l != nil {
			e.scale[i] = log2Int(l) - log2Int(divisor[i])
		}
	}
	return e, nil
}

// primes is how many primes the coefficients need, one to confirm included.
func (e *estimate) primes() float64 { return math.Ceil(e.bits()/61) + 1 }

// speed is the power of ten nearest to the middle of |g|/|c| over the rows.
func speed(p *exact.Pencil) int {
	n := p.Size()
	g, c := make([]float64, n), make([]float64, n)
	for i := range n {
		g[i], c[i] = math.Inf(-1), math.Inf(-1)
	}
	for e := range p.Entries() {
		g[e.Row], c[e.Row] = max(g[e.Row], log2(e.G)), max(c[e.Row], log2(e.C))
	}
	var ratio []float64
	for i := range n {
		if d := g[i] - c[i]; !math.IsInf(d, 0) && !math.IsNaN(d) {
			ratio = append(ratio, d)
		}
	}
	if len(ratio) == 0 {
		return 0
	}
	slices.Sort(ratio)
	return int(math.Round(ratio[len(ratio)/2] / math.Log2(10)))
}

func log2(r *big.Rat) float64 {
	if r.Sign() == 0 {
		return math.Inf(-1)
	}
	return log2Int(r.Num()) - log2Int(r.Denom())
}

// log2Int is log2|x| to three digits after the point.
func log2Int(x *big.Int) float64 {
	n := x.BitLen()
	if n <= 53 {
		return math.Log2(math.Abs(float64(x.Int64())))
	}
	top := new(big.Int).Rsh(new(big.Int).Abs(x), uint(n-53))
	return math.Log2(float64(top.Int64())) + float64(n-53)
}

// logSum is log2(2^a + 2^b).
func logSum(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	if math.IsInf(b, -1) {
		return a
	}
	return a + math.Log1p(math.Exp2(b-a))*math.Log2E
}

// bits estimates the bits of the coefficients of the determinant of the
// integer pencil: Hadamard's inequality after scaling.
func (e *estimate) bits() float64 {
	row, col := make([]float64, e.n), make([]float64, e.n)
	rowMax, colMax := make([]float64, e.n), make([]float64, e.n)
	for range 5 {
		for i := range e.n {
			rowMax[i], colMax[i] = math.Inf(-1), math.Inf(-1)
		}
		for k, v := range e.log {
			v += row[e.row[k]] + col[e.col[k]]
			rowMax[e.row[k]], colMax[e.col[k]] = max(rowMax[e.row[k]], v), max(colMax[e.col[k]], v)
		}
		for i := range e.n {
			if !math.IsInf(rowMax[i], 0) {
				row[i] -= rowMax[i] / 2
			}
			if !math.IsInf(colMax[i], 0) {
				col[i] -= colMax[i] / 2
			}
		}
	}
	sum := 0.0
	norm := make([]float64, e.n)
	for k, v := range e.log {
		norm[e.row[k]] += math.Exp2(2 * (v + row[e.row[k]] + col[e.col[k]]))
	}
	for i := range e.n {
		if norm[i] > 0 {
			sum += math.Log2(norm[i])/2 - row[i] - col[i] + e.scale[i]
		}
	}
	return max(sum, 0)
}

// operationsOf counts what eliminating the symmetric pattern takes. The error is
// the context's.
func operationsOf(ctx context.Context, p *exact.Pencil) (float64, error) {
	n := p.Size()
	start := make([]int32, n+1)
	for e := range p.Entries() {
		start[e.Row+1]++
		start[e.Col+1]++
	}
	for i := range n {
		start[i+1] += start[i]
	}
	index := make([]int32, start[n])
	fill := append([]int32(nil), start[:n]...)
	for e := range p.Entries() {
		i, j := e.Row, e.Col
		index[fill[i]] = int32(j)
		fill[i]++
		index[fill[j]] = int32(i)
		fill[j]++
	}
	start, index = unrepeated(start, index)
	order, err := minimumDegree(ctx, start, index, nil)
	if err != nil {
		return 0, err
	}
	sum := 0.0
	for _, c := range columnCounts(start, index, order) {
		sum += float64(c) * float64(c+3) / 2
	}
	return sum, nil
}
