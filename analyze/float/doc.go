// Package float solves networks that are too large for exact polynomials:
// values at given frequencies in double precision, each with a bound of its
// error.
//
// The equations are those of package network, (G + s·C)·X = B, at s = jω:
//
//	double.go     numbers of twice the length of float64
//	matrix.go     the sparse matrix; scaling.go makes its entries about 1
//	ordering.go   minimum-degree ordering; tree.go elimination trees
//	lu.go         factorisation with threshold pivoting
//	residual.go   residuals to about 100 bits
//	solver.go     Solver: values at a frequency with bounds
//	condition.go  the condition number
//	cost.go       whether exact polynomials would be too slow
//
// The package knows nothing of the notation and does no input or output.
package float
