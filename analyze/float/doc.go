// Package float solves networks that are too large for exact polynomials:
// values at given frequencies and responses in time, in double precision, each
// with a bound of its error.
//
// The equations are those of package network, (G + s·C)·X = B. At a frequency
// they are factorised, symmetrically where the network is reciprocal, in an
// order found once; with residuals of double length and the solution of the
// transposed equations the error of every value is bounded. In time they are
// stepped with a rational approximant of the exponential, twice, with steps of
// different lengths, and the difference tells the error.
//
// From the bottom up:
//
//	double.go     numbers of twice the length of float64
//	matrix.go     the sparse matrix; scaling.go makes its entries about 1
//	ordering.go   minimum-degree ordering; tree.go elimination trees
//	lu.go         factorisation with threshold pivoting
//	symmetric.go  symmetric orders with pairs for pivots
//	ldl.go        symmetric factorisation: compiled.go for chains,
//	              fronts.go and dense.go for meshes
//	residual.go   residuals to about 100 bits
//	refine.go     refined solutions, values with bounds
//	question.go   what is asked, Result
//	solver.go     Solver: values at a frequency
//	sweep.go      values at many frequencies
//	condition.go  the condition number
//	cost.go       whether exact polynomials would be too slow
//	wave.go setup.go
//	              what happens to a network in time
//	stepper.go    a step; its poles
//	march.go pace.go
//	              steps of lengths that keep the error small
//	launch.go     the first steps after a sudden change, and the values there
//	recall.go     a solution from the values of the memories
//	response.go   Response: values in time
//	shortest.go   a time in which nothing moves
//	steady.go     the state after sources have acted for ever
//
// The package knows nothing of the notation and does no input or output.
package float
