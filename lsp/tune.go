package lsp

import (
	"runtime"
	"runtime/debug"
)

// collectorPercent is how much garbage, in percent of what is live, the
// collector lets gather in a server. Each edit of a file of 10 000 lines leaves
// about as much garbage as the version before was large; with less than this the
// collector works longer than the checks, with more the server outgrows the
// 80 MiB that it is meant to stay within (see the benchmarks).
const collectorPercent = 120

// spareThreads is how many threads a server may run Go code on beyond the
// number of processors. With none to spare, two long analyses hold all there
// are for ten milliseconds at a time, and an edit or a hover waits for each
// step of its way; with some, the system lets what has just woken run first.
const spareThreads = 2

// TuneProcess sets the process up for a server: for a program to call before
// Serve, if it does nothing else. GOGC and GOMAXPROCS in the environment win.
func TuneProcess(getenv func(string) string) {
	if getenv("GOGC") == "" {
		debug.SetGCPercent(collectorPercent)
	}
	if getenv("GOMAXPROCS") == "" {
		runtime.GOMAXPROCS(runtime.NumCPU() + spareThreads)
	}
}
