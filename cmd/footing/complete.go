package main

import (
	"strings"

	"github.com/spf13/cobra"

	"footing/audit/report"
	"footing/readers"
	"footing/rules"
	"footing/rules/wording"
)

// complete offers a shell what a flag can take: the table's own columns, the
// rules, the forms.
func (f *auditFlags) complete(cmd *cobra.Command) {
	for _, flag := range []string{"response", "predictor", "group", "covariate", "subject", "order", "label"} {
		offer(cmd, flag, f.columns)
	}
	offer(cmd, "rule", func(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
		var all []string
		for _, r := range rules.All {
			all = append(all, r.Name+"=off\t"+r.Asks)
		}
		return all, cobra.ShellCompDirectiveNoFileComp
	})
	offer(cmd, "format", fixed(report.FormNames()...))
	offer(cmd, "color", fixed("auto", "always", "never"))
	offer(cmd, "fail-on", fixed("stop", "warn", "thin", "never"))
	cmd.ValidArgsFunction = func(_ *cobra.Command, args []string, _ string) ([]string, cobra.ShellCompDirective) {
		if len(args) > 0 {
			return nil, cobra.ShellCompDirectiveNoFileComp
		}
		return nil, cobra.ShellCompDirectiveDefault
	}
}

func offer(cmd *cobra.Command, flag string, values cobra.CompletionFunc) {
	if err := cmd.RegisterFlagCompletionFunc(flag, values); err != nil {
		panic("offer: " + err.Error()) // the flag is not there, or has values already
	}
}

func fixed(values ...string) cobra.CompletionFunc {
	return cobra.FixedCompletions(values, cobra.ShellCompDirectiveNoFileComp)
}

// columns reads the file that the command line names and offers its columns with
// their kinds. A name that a display would not show as it is goes by its letter.
func (f *auditFlags) columns(_ *cobra.Command, args []string, _ string) ([]string, cobra.ShellCompDirective) {
	const none = cobra.ShellCompDirectiveNoFileComp
	if len(args) == 0 || args[0] == "-" {
		return nil, none
	}
	t, err := readers.Open(args[0], f.reading)
	if err != nil {
		return nil, none
	}
	var all []string
	for _, col := range t.Columns {
		name, about := col.Title(), col.Kind().String()
		if col.Unit != "" {
			about += ", " + col.Unit
		}
		if wording.Printable(name) != name {
			name, about = col.Letter(), about+", "+name
		}
		all = append(all, name+"\t"+strings.TrimSpace(wording.Printable(about)))
	}
	return all, none
}
