// Package number holds the two kinds of number the project computes with.
//
// An [Exact] is a rational number. It is either the very value meant, or a
// stand-in for an irrational one (π, a square root, a level in decibels)
// together with a proved bound of its distance from the true value. Stand-ins
// are functions of their arguments alone, so equal subexpressions get equal
// stand-ins and ratios between them stay exact.
//
// A [Ball] is a real interval given by a midpoint of arbitrary precision and a
// small radius that is always rounded up; a [ComplexBall] is a pair of them.
// Every operation returns a ball that holds every value the operation can take
// on the points of its operands. The digits that a ball decides are therefore
// right, and the way to more of them is to compute again at a higher precision.
//
// # Conventions of the error analysis
//
// Midpoints are rounded to nearest at a precision that is a multiple of 64
// bits. One rounding of a value v with 2^(e-1) ≤ |v| < 2^e to p bits is off by
// at most 2^(e-p-1) ("half a unit in the last place"); that amount is added to
// the radius unless the rounding was exact. Radii are 32-bit mantissas with a
// wide exponent and every operation on them rounds up (away from zero), so that
// the written inequalities stay true in finite arithmetic.
//
// The elementary functions evaluate the midpoint in fixed point: an integer T
// stands for T·2^-w. An error of one unit 2^-w is called an ulp below. The
// analysis for each function counts ulps and stands beside its code; the
// radius of the argument is carried through by a Lipschitz bound, also beside
// the code. Midpoint–radius arithmetic follows J. van der Hoeven, "Ball
// arithmetic" (2009), and F. Johansson, "Arb: efficient arbitrary-precision
// midpoint-radius interval arithmetic", IEEE Trans. Comput. 66 (2017).
package number
