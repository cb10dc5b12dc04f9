package main

import (
	"errors"
	"fmt"
	"io"
	"runtime/debug"

	"github.com/spf13/cobra"

	"footing/audit"
	"footing/rules/wording"
)

// The exit codes.
const (
	exitClean  = 0 // nothing at or above --fail-on
	exitFound  = 1 // something is
	exitUnable = 2 // the job could not be done: usage, unreadable input
	exitFault  = 3 // a fault of footing itself
)

// errFound is returned by a command that did its job and found something at or
// above --fail-on.
var errFound = errors.New("found")

// run carries out one command line and gives the exit code. The report goes to
// stdout, everything else to stderr.
func run(args []string, stdin io.Reader, stdout, stderr io.Writer) (code int) {
	defer func() {
		if fault := recover(); fault != nil {
			fmt.Fprintf(stderr, "footing: this is a fault of footing itself, please report it: %v\n%s", fault, debug.Stack())
			code = exitFault
		}
	}()
	root := newRoot()
	root.SetArgs(args)
	root.SetIn(stdin)
	root.SetOut(stdout)
	root.SetErr(stderr)
	return exitCode(root.Execute(), stderr)
}

// exitCode maps what a command returned to an exit code and tells an error in
// one sentence.
func exitCode(err error, stderr io.Writer) int {
	var fault *audit.Fault
	switch {
	case err == nil:
		return exitClean
	case errors.Is(err, errFound):
		return exitFound
	case errors.As(err, &fault):
		fmt.Fprintf(stderr, "footing: this is a fault of footing itself, please report it: %s\n", wording.Printable(err.Error()))
		return exitFault
	}
	fmt.Fprintf(stderr, "footing: %s\n", wording.Printable(err.Error()))
	return exitUnable
}

func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "footing",
		Short: "May this slope be quoted? Audits a table before its straight lines are trusted",
		Long: "footing reads a table of measurements, screens it, fits a straight line in each group,\n" +
			"audits the assumptions and says which slopes, intervals and p-values may be quoted.\n\n" +
			"An audit does not replace a statistician or licensed practice: where a decision can\n" +
			"hurt someone (medicine, structures, dosing), have it looked at by one.",
		SilenceUsage:  true,
		SilenceErrors: true,
		Args:          cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			return cmd.Help()
		},
	}
	root.AddCommand(newAudit(), newExplain(), newVersion())
	return root
}
