package exact

import (
	"math"
	"math/big"
)

// system is an integer pencil in block lower triangular order with borders:
//
//	[ M  B ]   n core rows and columns, then outs border rows and
//	[ Oᵀ 0 ]   rhs border columns.
//
// Block b of the core holds the positions end[b−1] … end[b]−1. What is asked
// of it are the determinants of the blocks and N = det(M)·oᵀ·M⁻¹·b for every
// pair of borders.
type system struct {
	n, rhs, outs int
	rows         [][]intEntry
	end          []int
}

// start returns the first position of block b.
func (y *system) start(b int) int {
	if b == 0 {
		return 0
	}
	return y.end[b-1]
}

// coefficientBounds returns, as logarithms to base 2, bounds on the absolute
// values of the coefficients of the block determinants and of the numerators
// (index out·rhs + column). A determinant that a zero row makes vanish has
// the bound −∞.
//
// By Cauchy's estimate a coefficient is at most the largest |det(G + s·C)| on
// the circle |s| = 1, and there, with |g + s·c| ≤ |g| + |c|, Hadamard's
// inequality bounds the determinant by the product of the 2-norms of the
// rows. Rows and columns are multiplied by powers ρ and κ of 2 first, chosen
// to make that product small; det(M) = det(ρMκ)/(Πρ·Πκ) holds for any
// choice, so rounding in the choice does no harm. The sums below consist of
// fewer than 2^24 terms of size below 2^24, each with an error below 2^-20,
// relative errors of the norms included; boundSlack per row covers it.
func (y *system) coefficientBounds() (dets, nums []float64) {
	w := y.equilibrate()
	for b := range y.end {
		sum := 0.0
		for i := y.start(b); i < y.end[b]; i++ {
			norm := 0.0
			for k, e := range y.rows[i] {
				if e.col >= y.start(b) && e.col < y.end[b] {
					norm += math.Exp2(2 * (w.log[i][k] + w.row[i] + w.col[e.col]))
				}
			}
			sum += 0.5*math.Log2(norm) - w.row[i] - w.col[i] + boundSlack
		}
		dets = append(dets, sum)
	}
	for o := range y.outs {
		for j := range y.rhs {
			nums = append(nums, y.numeratorBound(w, y.n+o, y.n+j))
		}
	}
	return dets, nums
}

// boundSlack is what the bound grows by per row to cover rounding.
const boundSlack = 1.0 / (1 << 16)

// equilibration holds log2(|g|+|c|) of the entries and the exponents of the
// multipliers of rows and columns.
type equilibration struct {
	log      [][]float64
	row, col []float64
}

// equilibrate makes the largest entries of rows and columns about 1
// (D. Ruiz, A scaling algorithm to equilibrate both rows and columns norms in
// matrices, 2001).
func (y *system) equilibrate() *equilibration {
	rows, cols := y.n+y.outs, y.n+y.rhs
	w := &equilibration{log: make([][]float64, rows), row: make([]float64, rows), col: make([]float64, cols)}
	for i, r := range y.rows {
		w.log[i] = make([]float64, len(r))
		for k, e := range r {
			w.log[i][k] = log2Sum(e.g, e.c)
		}
	}
	rowMax, colMax := make([]float64, rows), make([]float64, cols)
	const rounds = 6
	for round := range rounds {
		for i := range rowMax {
			rowMax[i] = math.Inf(-1)
		}
		for j := range colMax {
			colMax[j] = math.Inf(-1)
		}
		for i, r := range y.rows {
			for k, e := range r {
				v := w.log[i][k] + w.row[i] + w.col[e.col]
				rowMax[i] = max(rowMax[i], v)
				colMax[e.col] = max(colMax[e.col], v)
			}
		}
		share := 0.5
		if round == rounds-1 {
			share = 1 // rows last and wholly: the bound uses their norms
		}
		for i, v := range rowMax {
			if !math.IsInf(v, -1) {
				w.row[i] -= share * v
			}
		}
		for j, v := range colMax {
			if share < 1 && !math.IsInf(v, -1) {
				w.col[j] -= share * v
			}
		}
	}
	return w
}

// numeratorBound bounds the coefficients for one border row and column.
func (y *system) numeratorBound(w *equilibration, out, col int) float64 {
	sum := 0.0
	for i := range y.n + 1 {
		r := i
		if i == y.n {
			r = out
		}
		norm := 0.0
		for k, e := range y.rows[r] {
			if e.col < y.n || e.col == col {
				norm += math.Exp2(2 * (w.log[r][k] + w.row[r] + w.col[e.col]))
			}
		}
		c := col
		if i < y.n {
			c = i
		}
		sum += 0.5*math.Log2(norm) - w.row[r] - w.col[c] + boundSlack
	}
	return sum
}

// log2Sum returns log2(|g| + |c|), nil standing for zero; not both are zero.
func log2Sum(g, c *big.Int) float64 {
	switch {
	case g == nil:
		return log2Int(c)
	case c == nil:
		return log2Int(g)
	}
	a, b := log2Int(g), log2Int(c)
	if a < b {
		a, b = b, a
	}
	return a + math.Log1p(math.Exp2(b-a))*math.Log2E
}

// degreeBounds returns bounds on the degrees of the block determinants and of
// the numerators: the structural ranks of C, the largest number of entries
// with s that one term of the determinant can contain.
func (y *system) degreeBounds() (dets []int, num int) {
	for b := range y.end {
		dets = append(dets, y.reactiveRank(y.start(b), y.end[b]))
	}
	return dets, y.reactiveRank(0, y.n)
}

// reactiveRank returns the structural rank of C within a range of positions.
func (y *system) reactiveRank(start, end int) int {
	pattern := make([][]int, 0, end-start)
	for _, r := range y.rows[start:end] {
		var list []int
		for _, e := range r {
			if e.c != nil && e.col >= start && e.col < end {
				list = append(list, e.col-start)
			}
		}
		if list != nil {
			pattern = append(pattern, list)
		}
	}
	if len(pattern) == 0 {
		return 0
	}
	rank := 0
	for _, r := range maximumMatching(pattern, end-start) {
		if r >= 0 {
			rank++
		}
	}
	return rank
}

// solutionBound returns, for a system with one border column, the logarithm
// of a bound on |det| and on the components of det·x on |s| = 1, by
// Hadamard's inequality and Cramer's rule: in the matrix with one column
// replaced by the border, every row is part of the bordered row.
func (y *system) solutionBound() float64 {
	w := y.equilibrate()
	sum, least := 0.0, math.Inf(1)
	for i := range y.n {
		norm := 0.0
		for k, e := range y.rows[i] {
			norm += math.Exp2(2 * (w.log[i][k] + w.row[i] + w.col[e.col]))
		}
		sum += 0.5*math.Log2(norm) - w.row[i] - w.col[i] + boundSlack
	}
	// A replaced column k has the multiplier of the border instead.
	for k := range y.n {
		least = min(least, w.col[y.n]-w.col[k])
	}
	return max(sum, sum-least)
}
