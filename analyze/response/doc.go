// Package response finds how a network answers in time, in closed form, and
// decides what can be said about such answers over a range of time.
//
// The Laplace transform X(s) of the unknowns solves
//
//	(G + s·C) X(s) = B·U(s) + state columns,
//
// so each contribution to an output (an initial value, a source) is an exact
// rational function of s, taken in lowest terms, times a weight and a delay.
// Its inverse transform is a sum of terms c·τ^m·e^{pτ} and of impulses at the
// instant where it begins. Poles and coefficients are balls at a working
// precision that is raised until the digits wanted are decided; everything
// that is rational (impulses, constants, the transforms of a network that does
// not switch) stays exact.
//
// From the bottom up:
//
//	wave.go       what a source does in time, and its transform
//	base.go       coprime factors that several denominators share
//	pole.go roots.go
//	              poles to any precision
//	fraction.go   partial fractions of one transform
//	coincide.go   frequencies that cannot be told apart
//	solve.go      from interval to interval: the state at each switching
//	setup.go      networks and sources; what was before t = 0
//	signal.go     Signal: parts, sums and scaling; values at an instant
//	value.go      values at an instant, impulses
//	segment.go    a signal between two breakpoints as one sum of terms
//	floatterm.go sample.go
//	              float64 samples with a bound of their error
//	sumops.go     derivatives, limits, what dominates in the end
//	curve.go product.go
//	              signals under sums, products, absolute value, least and greatest
//	panel.go      Taylor models: what is true between samples
//	beats.go      bounds of oscillations that cancel
//	steady.go     the steady oscillation and what decays beside it
//	normalise.go  curves too small for float64
//	extreme.go conclude.go branches.go nonpositive.go
//	              peaks and troughs, proved
//	crossing.go   first and last crossings of a level, proved
//	turn.go       turning points, for tables and pictures
//	integral.go   means, mean squares, energies
//	measure.go    the measures of the notation
//	decide.go     limits on a signal over a range of time
//
// The package knows nothing of the notation and does no input or output. All
// results are safe for concurrent use.
package response
