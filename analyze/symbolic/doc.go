// Package symbolic writes network functions in the names of the elements:
// 1/(1 + s·R1·C1) instead of its numbers.
//
// It sets the equations of a network up once more, with a symbol for every
// element value, keeps of them what lies on a way from the drive to the
// quantity asked for, expands the determinants of Cramer's rule, and removes
// the common factor. Every element but a transformer and a coupling enters the
// determinant at most linearly, which makes the factors of numerator and
// denominator easy to find. All of this happens within a small budget: a
// formula that takes more is not readable anyway, and there is none.
//
// A formula is only given after the exact values of the elements, put into the
// very expression that is shown, have yielded the exact rational function
// found by other means. What this package gets wrong is not shown.
//
//	monomial.go poly.go   polynomials in many symbols with integer coefficients
//	gcd.go                common factors, and factors for display
//	work.go               the budget
//	space.go              symbols and their values
//	equations.go          the equations of a network
//	relevant.go           what of them matters
//	determinant.go        minors by expansion
//	function.go           Function: transfers and arithmetic with them
//	expression.go         the expression that is shown
//	arrange.go            how it is arranged for reading
//	formula.go            Formula: arranged, proved, written
//	coupled.go            coupling coefficients instead of mutual inductances
//
// The package knows nothing of the notation and does no input or output.
package symbolic
