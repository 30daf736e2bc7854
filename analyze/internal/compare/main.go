// Command compare times this project's numerical work beside general-purpose
// mathematics libraries, on the same problems and the same machine, and checks
// that the results agree. The script .ci/compare runs the whole of it.
//
//	compare problems DIR   writes the problems as text for the other side
//	compare table DIR      solves them, reads what the others found, prints
//	                       times and ratios, and fails on a disagreement
//
// All times are processor time of one thread, the best of several batches.
package main

import (
	"fmt"
	"os"
	"runtime"
)

func main() {
	if len(os.Args) != 3 {
		fmt.Fprintln(os.Stderr, "usage: compare problems|table DIR")
		os.Exit(2)
	}
	runtime.GOMAXPROCS(1)
	var err error
	switch directory := os.Args[2]; os.Args[1] {
	case "problems":
		err = writeProblems(directory)
	case "table":
		err = table(directory, os.Stdout)
	default:
		err = fmt.Errorf("compare: %q is neither problems nor table", os.Args[1])
	}
	if err != nil {
		fmt.Fprintln(os.Stderr, "compare:", err)
		os.Exit(1)
	}
}
