// Package exact is the exact algebra under every answer: polynomials and
// rational functions in s over the rational numbers, determinants and
// adjugate entries of sparse pencils G + s·C, greatest common divisors,
// square-free factors and real-root isolation.
//
// Nothing here rounds. Where a method works modulo primes, the number of
// primes comes from a proved bound on the coefficients, so the result is the
// integer polynomial itself. Enclosures (EvalBall and its relatives) return
// balls that contain the exact value.
//
// The package knows nothing of networks or of the notation: it is handed a
// pencil and gives back polynomials. It does no input or output and keeps no
// state between calls besides tables of primes.
//
// From the bottom up:
//
//	poly*.go      Poly: polynomials over ℚ, arithmetic, evaluation
//	gcd.go        greatest common divisors by modular images
//	squarefree.go square-free factorisation
//	isolate*.go   real roots: counting, isolating, refining, signs
//	ratio.go      Ratio: reduced rational functions
//	mod*.go       arithmetic modulo 61-bit primes, interpolation, remaindering
//	pencil*.go    Pencil: building, block decomposition, exact solution at a point
//	prepare*.go   Prepared: one factorisation that serves every question
package exact
