package lsp

import "runtime/debug"

// collectorPercent is how much garbage, in percent of what is live, the
// collector lets gather in a server. Each edit of a file of 10 000 lines leaves
// about as much garbage as the version before was large; with less than this the
// collector works longer than the checks, with more the server outgrows the
// 80 MiB that it is meant to stay within (see the benchmarks).
const collectorPercent = 180

// TuneCollector sets the process's garbage collector for a server: for the
// program to call before Serve, if it does nothing else. An explicit GOGC wins.
func TuneCollector(getenv func(string) string) {
	if getenv("GOGC") == "" {
		debug.SetGCPercent(collectorPercent)
	}
}
