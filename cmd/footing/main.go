// Command footing says whether the slopes, intervals and p-values of a line
// fitted to a table may be quoted.
package main

import "os"

func main() {
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}
