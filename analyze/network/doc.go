// Package network holds linear lumped networks: their elements, the questions
// about them that need no arithmetic on functions (islands, loops, cutsets,
// feedback, coupling), and the equations that every exact answer starts from.
//
// The equations are one pencil in s,
//
//	(G + s·C) X(s) = B·U(s) + M·x(0−)
//
// over the rational numbers. X holds the node voltages, each island's
// reference removed, and the currents of all branches whose voltage is
// prescribed or that carry a memory; U the independent sources; x(0−) the
// memories (capacitor voltages, inductor currents, and the inner states of op
// amps, immittances and dependent sources with coefficients in s). The roots
// of det(G + s·C) are the natural frequencies of the network, each as often as
// it occurs, hidden ones and s = 0 included. The formulation is modified nodal
// analysis (C.-W. Ho, A. E. Ruehli, P. A. Brennan, "The modified nodal
// approach to network analysis", IEEE Trans. Circuits Syst. 22 (1975)).
//
// From the bottom up:
//
//	element.go    Element, Network: what a network is made of
//	problem.go    Problem: what is wrong or worth knowing, as data
//	check.go values.go   references and values that cannot be
//	branch.go     branches, connectivity, forests, loops and cutsets of graphs
//	inspect.go    Inspect: all structural problems at once
//	island.go loops.go cutsets.go feedback.go coupling.go   one family each
//	partition.go piece.go   pieces that cannot influence one another
//	assemble.go   Assemble: the pencil; stamp.go and row.go fill it
//	output.go     quantities and drives as vectors over the unknowns
//	transfer.go   exact numerators and the determinant
//	diagnose.go   why equations have no unique solution
//	sparse.go     sparse elimination over the Gaussian rationals
//	steady.go steady_free.go   the state at 0− of a network that has run for ever
//	conflict.go   initial values that violate Kirchhoff's laws
//
// The package knows nothing of the notation and does no input or output.
package network
