package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"footing/audit/report"
	"footing/readers"
	"footing/rules"
)

func newExplain() *cobra.Command {
	var schema string
	cmd := &cobra.Command{
		Use:   "explain [RULE]",
		Short: "What a rule asks, how, from which source, and what to do about a breach",
		Long: "explain lists the rules; explain RULE tells all about one. explain --schema audit prints\n" +
			"the JSON Schema of what footing audit --format json writes.",
		Args: cobra.MaximumNArgs(1),
		ValidArgsFunction: func(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
			return rules.Names(), cobra.ShellCompDirectiveNoFileComp
		},
		RunE: func(cmd *cobra.Command, args []string) error {
			if cmd.Flags().Changed("schema") {
				return printSchema(cmd, schema, args)
			}
			if len(args) == 0 {
				return report.RuleList(cmd.OutOrStdout(), rules.All)
			}
			r := rules.Named(args[0])
			if r == nil {
				return noSuchRule(args[0])
			}
			return report.Rule(cmd.OutOrStdout(), r)
		},
	}
	cmd.Flags().StringVar(&schema, "schema", "", "print the JSON Schema of a form of output: audit")
	return cmd
}

// printSchema prints the named schema; it takes no rule beside it.
func printSchema(cmd *cobra.Command, name string, args []string) error {
	if len(args) > 0 {
		return fmt.Errorf("a rule and --schema are given; ask for one of them")
	}
	if name != "audit" {
		return fmt.Errorf("--schema is %q; it can be audit", name)
	}
	return report.AuditSchema(cmd.OutOrStdout())
}

// noSuchRule names the rules that were perhaps meant.
func noSuchRule(name string) error {
	near := readers.Nearest(name, rules.Names())
	if len(near) == 0 {
		return fmt.Errorf("there is no rule %q; footing explain lists them", name)
	}
	return fmt.Errorf("there is no rule %q; did you mean %s? (footing explain lists them)", name, strings.Join(near, " or "))
}
