// Package dialect reads the Portlight notation and says what it means.
//
// It has two halves. The syntax half turns text into a tree and back: the
// scanner (token.go, scanner.go), the recovering parser (parser*.go), the tree
// with the place of every word and mark (nodes.go), its canonical form
// (printer*.go), and what an editor asks of a tree (walk.go, expected.go,
// lines.go). Parsing never fails: what cannot be read is in the file's
// findings and as holes and broken statements in its tree, and costs one
// statement. Nothing here looks up a name.
//
// The semantic half resolves names, checks kinds and units, expands
// subnetworks and produces the Description that analysis reads, together with
// all findings; every code of a finding is defined in one table with its
// explanation and an example.
//
// The notation's numbers are exact; see package number.
package dialect
