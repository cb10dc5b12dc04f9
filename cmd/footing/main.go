// Command footing says whether the slopes, intervals and p-values of a line
// fitted to a table may be quoted.
package main

import (
	"os"
	"runtime/debug"
)

// memory is what the collector keeps the program to as long as the live data
// allow it: a table of a million rows then stays below 1 GiB.
const memory = 700 << 20

func main() {
	debug.SetMemoryLimit(memory)
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
