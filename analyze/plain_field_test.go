package analyze_test

import (
	"errors"
	"math/big"
	"math/cmplx"
)

// The files plain_*_test.go are a second, plain evaluation of a network that
// shares nothing with the program: a dense tableau with one current for every
// branch, solved by elimination over the rationals or in complex128, and
// the inverse Laplace transform by a contour sum.

// field is the arithmetic that the tableau is solved in.
type field[T any] struct {
	add, sub, mul, quo func(a, b T) T
	rat                func(r *big.Rat) T
	pivot              func(a T) float64 // how good a pivot it is; 0 for zero
}

// rationals is exact; a short number makes the better pivot.
var rationals = field[*big.Rat]{
	add: func(a, b *big.Rat) *big.Rat { return new(big.Rat).Add(a, b) },
	sub: func(a, b *big.Rat) *big.Rat { return new(big.Rat).Sub(a, b) },
	mul: func(a, b *big.Rat) *big.Rat { return new(big.Rat).Mul(a, b) },
	quo: func(a, b *big.Rat) *big.Rat { return new(big.Rat).Quo(a, b) },
	rat: func(r *big.Rat) *big.Rat { return r },
	pivot: func(a *big.Rat) float64 {
		if a.Sign() == 0 {
			return 0
		}
		return 1 / float64(1+a.Num().BitLen()+a.Denom().BitLen())
	},
}

// doubles is complex double precision.
var doubles = field[complex128]{
	add: func(a, b complex128) complex128 { return a + b },
	sub: func(a, b complex128) complex128 { return a - b },
	mul: func(a, b complex128) complex128 { return a * b },
	quo: func(a, b complex128) complex128 { return a / b },
	rat: func(r *big.Rat) complex128 { f, _ := r.Float64(); return complex(f, 0) },
	pivot: func(a complex128) float64 {
		return cmplx.Abs(a)
	},
}

var errPlainSingular = errors.New("the plain equations are singular")

// eliminate solves rows·x = right for several right-hand sides by Gauss–Jordan
// elimination with column pivots, and gives the determinant too. The rows are used up.
func eliminate[T any](f field[T], rows [][]T, right [][]T) (x [][]T, det T, err error) {
	n := len(rows)
	det = f.rat(big.NewRat(1, 1))
	for col := range n {
		best, size := -1, 0.0
		for r := col; r < n; r++ {
			if p := f.pivot(rows[r][col]); p > size {
				best, size = r, p
			}
		}
		if best < 0 {
			return nil, f.rat(new(big.Rat)), errPlainSingular
		}
		if best != col {
			rows[best], rows[col] = rows[col], rows[best]
			right[best], right[col] = right[col], right[best]
			det = f.mul(det, f.rat(big.NewRat(-1, 1)))
		}
		det = f.mul(det, rows[col][col])
		for r := range n {
			if r == col || f.pivot(rows[r][col]) == 0 {
				continue
			}
			k := f.quo(rows[r][col], rows[col][col])
			subtract(f, rows[r], rows[col], k, col)
			subtract(f, right[r], right[col], k, 0)
		}
	}
	for r := range n {
		for k := range right[r] {
			right[r][k] = f.quo(right[r][k], rows[r][r])
		}
	}
	return right, det, nil
}

func subtract[T any](f field[T], row, other []T, k T, from int) {
	for c := from; c < len(row); c++ {
		if f.pivot(other[c]) != 0 {
			row[c] = f.sub(row[c], f.mul(k, other[c]))
		}
	}
}

// evaluated is the value of a polynomial, coefficients ascending.
func evaluated[T any](f field[T], p []*big.Rat, s T) T {
	sum := f.rat(new(big.Rat))
	for i := len(p) - 1; i >= 0; i-- {
		sum = f.add(f.mul(sum, s), f.rat(p[i]))
	}
	return sum
}
