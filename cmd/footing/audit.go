package main

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"golang.org/x/term"

	"footing/audit"
	"footing/audit/figure"
	"footing/audit/report"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/wording"
)

// auditFlags are the flags of footing audit as typed.
type auditFlags struct {
	roles   model.Roles
	reading readers.Options
	rules   []string
	limits  []string

	confidence float64
	falseAlarm float64
	smallest   float64
	stated     float64
	xError     float64
	seed       uint64
	replicates int

	format  string
	outputs []string
	marked  string
	figures string
	force   bool
	sketch  bool
	perRow  bool
	color   string
	width   int
	quiet   bool
	verbose bool
	failOn  string
}

func newAudit() *cobra.Command {
	var f auditFlags
	cmd := &cobra.Command{
		Use:   "audit FILE",
		Short: "Audit one table: may its slopes be quoted?",
		Long: "audit reads a table from CSV or XLSX (- for standard input), fits a straight line in each\n" +
			"group and says what may be quoted. Without roles it screens the table, lists its columns\n" +
			"and prints the command for the model that they suggest.\n\n" +
			"Exit codes: 0 nothing at or above --fail-on; 1 something is; 2 the job could not be done;\n" +
			"3 a fault of footing itself.",
		Example: "  footing audit kelp.csv\n" +
			"  footing audit kelp.csv -y growth -x temperature -g site",
		Args: oneFile,
		RunE: func(cmd *cobra.Command, args []string) error {
			return f.run(cmd, args[0])
		},
	}
	f.add(cmd)
	f.complete(cmd)
	return cmd
}

// listedForms names the forms of a report in a sentence.
func listedForms() string {
	names := report.FormNames()
	return strings.Join(names[:len(names)-1], ", ") + " or " + names[len(names)-1]
}

// oneFile asks for exactly one file, in a sentence.
func oneFile(_ *cobra.Command, args []string) error {
	switch len(args) {
	case 1:
		return nil
	case 0:
		return fmt.Errorf("give the file to audit: footing audit FILE")
	}
	return fmt.Errorf("%d files are given and one can be audited at a time; put a name with spaces in quotes", len(args))
}

func (f *auditFlags) add(cmd *cobra.Command) {
	flags := cmd.Flags()
	flags.SortFlags = false
	flags.StringVarP(&f.roles.Response, "response", "y", "", "column of the response")
	flags.StringArrayVarP(&f.roles.Predictors, "predictor", "x", nil, "column of a predictor; the first is the one whose slopes are compared (repeatable)")
	flags.StringVarP(&f.roles.Group, "group", "g", "", "column of the groups whose slopes are compared")
	flags.StringArrayVar(&f.roles.Covariates, "covariate", nil, "column of numbers or labels that enters additively (repeatable)")
	flags.StringVar(&f.roles.Subject, "subject", "", "column that tells which rows belong to one animal, plot or person")
	flags.StringVar(&f.roles.Order, "order", "", "column with the sequence in which rows were taken")
	flags.StringVar(&f.roles.Label, "label", "", "column that identifies the rows")
	flags.BoolVar(&f.roles.CommonSlope, "common-slope", false, "one slope for all groups")

	flags.StringVar(&f.reading.Sheet, "sheet", "", "sheet of a workbook")
	flags.StringVar(&f.reading.Range, "range", "", "cells of the table, such as A1:F60")
	flags.StringVar(&f.reading.HeaderRow, "header-row", "", "row of the header, or none")
	flags.StringVar(&f.reading.Delimiter, "delimiter", "", "character between the fields of a text file")
	flags.StringVar(&f.reading.Decimal, "decimal", "", "decimal sign: . or ,")
	flags.StringVar(&f.reading.Encoding, "encoding", "", "encoding of a text file, such as windows-1252")
	flags.StringArrayVar(&f.reading.Missing, "missing", nil, "value that stands for a missing one, such as -999 (repeatable)")

	flags.StringArrayVar(&f.limits, "limit", nil, "raise a limit: NAME=N for file, unpacked, line (bytes, or 300MiB), columns or cells (repeatable)")

	flags.StringArrayVar(&f.rules, "rule", nil, "switch a rule off: NAME=off (repeatable)")
	flags.Float64Var(&f.confidence, "confidence", 0.95, "confidence of intervals")
	flags.Float64Var(&f.falseAlarm, "false-alarm", 0.05, "share of sound tables in which the model rules together may alarm")

	flags.Float64Var(&f.smallest, "smallest-difference", 0, "difference of slopes that matters")
	flags.Float64Var(&f.stated, "stated-slope", 0, "slope to compare with, such as 1")
	flags.Float64Var(&f.xError, "predictor-error", 0, "the predictor's own standard deviation of measurement")
	flags.Uint64Var(&f.seed, "seed", 1, "seed of what is simulated")
	flags.IntVar(&f.replicates, "replicates", 0, "tables simulated for the p-values (default: by the size of the table)")

	flags.StringVar(&f.format, "format", "text", "form of the report: "+listedForms())
	flags.StringArrayVar(&f.outputs, "output", nil, "write the report to FILE too, in the form that its extension names, or FORMAT=FILE (repeatable)")
	flags.StringVar(&f.figures, "figures", "", "write the figures of the HTML report to a folder, as SVG")
	flags.StringVar(&f.marked, "marked", "", "write a workbook with the named cells marked to FILE.xlsx")
	flags.BoolVar(&f.force, "force", false, "replace files that footing did not write")
	flags.BoolVar(&f.sketch, "sketch", false, "draw residuals against fitted values in the text report")
	flags.BoolVar(&f.perRow, "per-row", false, "add row diagnostics to JSON")
	flags.StringVar(&f.color, "color", "auto", "colour: auto, always or never")
	flags.IntVar(&f.width, "width", 0, "columns of the text report (default: the terminal's, or 80)")
	flags.BoolVar(&f.quiet, "quiet", false, "print nothing; only the exit code tells")
	flags.BoolVar(&f.verbose, "verbose", false, "list every rule and every place")
	flags.StringVar(&f.failOn, "fail-on", "warn", "least state that makes the exit code 1: stop, warn, thin or never")
}

func (f *auditFlags) run(cmd *cobra.Command, file string) error {
	off, err := f.check()
	if err != nil {
		return err
	}
	out, err := f.plan(cmd, file)
	if err != nil {
		return err
	}
	s := &source{file: file, keep: f.readsAgain(out)}
	t, err := s.table(cmd, f.reading)
	if err != nil {
		return err
	}
	command := "footing audit " + quotedArgs([]string{file})
	r, err := audit.Table(t, audit.Request{
		Roles: f.roles,
		Settings: rules.Settings{
			Confidence: f.confidence, FalseAlarm: f.falseAlarm, SmallestDifference: given(cmd, "smallest-difference", f.smallest),
			StatedSlope: given(cmd, "stated-slope", f.stated), PredictorError: given(cmd, "predictor-error", f.xError),
			Seed: f.seed, Replicates: f.replicates,
		},
		Off: off, PerRow: f.perRow || f.sketch, Command: command + f.readingArgs(), Draw: f.draws(out),
	})
	if err != nil {
		return err
	}
	if err := f.write(cmd, out, s, r); err != nil {
		return err
	}
	if f.fails(r) {
		return errFound
	}
	return nil
}

// given is the value of a flag, NaN when it was not given.
func given(cmd *cobra.Command, flag string, value float64) float64 {
	if !cmd.Flags().Changed(flag) {
		return math.NaN()
	}
	return value
}

// check refuses flag values that mean nothing and gives the rules that are
// switched off.
func (f *auditFlags) check() (off []string, err error) {
	if err := oneOf("--format", f.format, report.FormNames()...); err != nil {
		return nil, err
	}
	if err := oneOf("--color", f.color, "auto", "always", "never"); err != nil {
		return nil, err
	}
	if err := oneOf("--fail-on", f.failOn, "stop", "warn", "thin", "never"); err != nil {
		return nil, err
	}
	if !(f.confidence > 0 && f.confidence < 1) {
		return nil, fmt.Errorf("--confidence is %v; it must lie between 0 and 1, as in 0.95", f.confidence)
	}
	if !(f.falseAlarm > 0 && f.falseAlarm < 1) {
		return nil, fmt.Errorf("--false-alarm is %v; it must lie between 0 and 1, as in 0.05", f.falseAlarm)
	}
	if f.replicates < 0 || f.replicates > 1000000 {
		return nil, fmt.Errorf("--replicates is %d; it must lie between 1 and 1000000", f.replicates)
	}
	for _, flag := range []struct {
		name  string
		value float64
	}{{"--smallest-difference", f.smallest}, {"--predictor-error", f.xError}} {
		if !(flag.value >= 0) || math.IsInf(flag.value, 0) {
			return nil, fmt.Errorf("%s is %v; it must be a number above 0", flag.name, flag.value)
		}
	}
	if f.width != 0 && (f.width < 40 || f.width > 1000) {
		return nil, fmt.Errorf("--width is %d; it must lie between 40 and 1000", f.width)
	}
	for _, setting := range f.limits {
		name, value, found := strings.Cut(setting, "=")
		if !found {
			return nil, fmt.Errorf("--limit is %q; write it as NAME=N", setting)
		}
		if err := f.reading.Limits.Set(name, value); err != nil {
			return nil, fmt.Errorf("--limit: %w", err)
		}
	}
	for _, setting := range f.rules {
		name, value, found := strings.Cut(setting, "=")
		if !found || value != "off" {
			return nil, fmt.Errorf("--rule is %q; write it as NAME=off", setting)
		}
		if rules.Named(name) == nil {
			return nil, noSuchRule(name)
		}
		off = append(off, name)
	}
	return off, nil
}

func oneOf(flag, value string, allowed ...string) error {
	for _, a := range allowed {
		if value == a {
			return nil
		}
	}
	return fmt.Errorf("%s is %q; it can be %s or %s", flag, value, strings.Join(allowed[:len(allowed)-1], ", "), allowed[len(allowed)-1])
}

// plan checks every file that is to be written, before anything is read.
func (f *auditFlags) plan(cmd *cobra.Command, file string) (*outputs, error) {
	out := &outputs{force: f.force, input: inputOf(cmd, file)}
	var given *report.Form
	if cmd.Flags().Changed("format") {
		given = report.FormNamed(f.format)
	}
	for _, value := range f.outputs {
		form, path, err := parseOutput(value, given)
		if err != nil {
			return nil, err
		}
		if err := out.add("--output", path, form); err != nil {
			return nil, err
		}
	}
	if cmd.Flags().Changed("marked") {
		if !strings.EqualFold(filepath.Ext(f.marked), ".xlsx") {
			return nil, fmt.Errorf("--marked is %q; it is a workbook, so give a name that ends in .xlsx", f.marked)
		}
		if err := out.add("--marked", f.marked, nil); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// readsAgain reports whether the input is needed once more after the audit: to
// mark its cells, or to find the characters of a field.
func (f *auditFlags) readsAgain(out *outputs) bool {
	again := f.marked != "" || f.format == "sarif"
	for _, o := range out.taken {
		again = again || o.form != nil && o.form.Name == "sarif"
	}
	return again
}

// draws reports whether some output has figures.
func (f *auditFlags) draws(out *outputs) bool {
	draws := f.figures != "" || (!f.quiet && report.FormNamed(f.format).Draws)
	for _, o := range out.taken {
		draws = draws || o.form != nil && o.form.Draws
	}
	return draws
}

// write makes every report, puts the files in their places and then prints, so
// that a fault leaves nothing behind.
func (f *auditFlags) write(cmd *cobra.Command, out *outputs, s *source, r *audit.Result) error {
	if f.figures != "" {
		for _, drawn := range figure.All(r) {
			if err := out.addFigure(f.figures, drawn); err != nil {
				return err
			}
		}
	}
	for _, o := range out.taken {
		if o.text != nil {
			continue // a figure
		}
		var whole bytes.Buffer
		var err error
		if o.form == nil {
			err = s.mark(&whole, r)
		} else {
			err = f.report(&whole, o.form, true, s, r)
		}
		if err != nil {
			return err
		}
		o.text = whole.Bytes()
	}
	var printed bytes.Buffer
	if !f.quiet {
		if err := f.report(&printed, report.FormNamed(f.format), false, s, r); err != nil {
			return err
		}
	}
	if err := out.commit(); err != nil {
		return err
	}
	_, err := cmd.OutOrStdout().Write(printed.Bytes())
	return err
}

// report writes one form, to a file or for standard output.
func (f *auditFlags) report(w io.Writer, form *report.Form, toFile bool, s *source, r *audit.Result) error {
	text := report.TextOptions{Width: 80, Verbose: f.verbose, Sketch: f.sketch, Command: "footing " + quotedArgs(os.Args[1:])}
	if !toFile {
		text.Width, text.Height = screen()
		text.Color = f.paints()
	}
	if f.width != 0 {
		text.Width = f.width
	}
	o := report.Options{Text: text, PerRow: f.perRow, FailOn: f.failOn, Version: version, File: toFile}
	var lost error
	if s.keep {
		o.Spans = func(places []readers.Pos) map[readers.Pos]readers.Span {
			spans, err := s.spans(places)
			lost = err
			return spans
		}
	}
	if err := form.Write(w, r, o); err != nil {
		return err
	}
	return lost
}

// widest is the longest line that is still read with ease.
const widest = 100

// screen is the size of the terminal; 80 columns and no height without one.
func screen() (width, height int) {
	w, h, err := term.GetSize(int(os.Stdout.Fd()))
	if err != nil || w < 40 {
		return 80, 0
	}
	return min(w, widest), h
}

// paints decides about colour: a flag, else NO_COLOR (no-color.org), else
// whether standard output is a terminal.
func (f *auditFlags) paints() bool {
	switch f.color {
	case "always":
		return true
	case "never":
		return false
	}
	return os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb" && term.IsTerminal(int(os.Stdout.Fd()))
}

// fails reports whether a finding reaches --fail-on.
func (f *auditFlags) fails(r *audit.Result) bool {
	return slices.ContainsFunc(r.Findings, func(finding audit.Finding) bool { return finding.Fails(f.failOn) })
}

// readingArgs repeats the reading flags for the suggested command.
func (f *auditFlags) readingArgs() string {
	var args []string
	for _, flag := range []struct{ name, value string }{
		{"--sheet", f.reading.Sheet},
		{"--range", f.reading.Range},
		{"--header-row", f.reading.HeaderRow},
		{"--delimiter", f.reading.Delimiter},
		{"--decimal", f.reading.Decimal},
		{"--encoding", f.reading.Encoding},
	} {
		if flag.value != "" {
			args = append(args, flag.name, flag.value)
		}
	}
	for _, code := range f.reading.Missing {
		args = append(args, "--missing", code)
	}
	if len(args) == 0 {
		return ""
	}
	return " " + quotedArgs(args)
}

func quotedArgs(args []string) string {
	quoted := make([]string, len(args))
	for i, a := range args {
		quoted[i] = wording.Shell(a)
	}
	return strings.Join(quoted, " ")
}
