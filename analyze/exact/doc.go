// Package exact is the exact algebra under every answer: polynomials and
// rational functions in s over the rational numbers, determinants and
// adjugate entries of sparse pencils G + s·C, greatest common divisors,
// square-free factors, real roots and certified complex ones.
//
// Nothing here rounds silently. Where a method works modulo primes, the
// number of primes comes from a proved bound on the coefficients, so the
// result is the integer polynomial itself; the one statement made with a
// probability, that a pencil is singular for every s, is wrong with less
// than 2^-100. Enclosures (EvalBall and its relatives, roots) are balls and
// discs that contain the exact value.
//
// The package knows nothing of networks or of the notation: it is handed a
// pencil and gives back polynomials. It does no input or output and keeps no
// state between calls besides tables of primes.
//
// From the bottom up:
//
//	poly*.go       Poly: polynomials over ℚ, arithmetic, evaluation
//	gcd.go         greatest common divisors by modular images
//	squarefree.go  square-free factorisation
//	isolate*.go    real roots: counting, isolating, refining, signs
//	roots*.go      all roots with proved radii
//	ratio.go       Ratio: reduced rational functions
//
//	mod*.go        arithmetic modulo 61-bit primes
//	kernels.go     the same on vectors of evaluation points
//	transform.go   interpolation on roots of unity
//	reconstruct.go integers from residues
//
//	pencil.go      Pencil: building
//	scale*.go      its integer form with short numbers
//	structure.go   its pieces: block triangular form
//	kernel.go      which equations and unknowns are at fault
//	prepare.go     Prepared: a pencil ready for questions
//	questions.go   the questions: numerators, responses
//	solve.go       exact solutions at a point
//	system.go      the pieces that a question meets, with proved bounds
//	choose.go      which method serves a system
//	engine.go      evaluation modulo primes, with
//	  order.go, symmetric.go   the order of elimination,
//	  program.go, machine.go   elimination as a list of operations
//	frontier*.go   the frontier recurrence for chain-like systems
package exact
