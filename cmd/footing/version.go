package main

import (
	"fmt"

	"github.com/spf13/cobra"
)

// version is the program's own version.
const version = "0.1.0"

func newVersion() *cobra.Command {
	return &cobra.Command{
		Use:   "version",
		Short: "Print the version",
		Args:  cobra.NoArgs,
		RunE: func(cmd *cobra.Command, _ []string) error {
			_, err := fmt.Fprintln(cmd.OutOrStdout(), "footing "+version)
			return err
		},
	}
}
