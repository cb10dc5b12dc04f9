package main

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
)

// auditSchema compiles the schema as the command prints it. It must itself be a
// schema of its draft.
func auditSchema(t *testing.T) *jsonschema.Schema {
	t.Helper()
	out := commandOutput(t, exitClean, "explain", "--schema", "audit")
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(out))
	if err != nil {
		t.Fatal(err)
	}
	compiler := jsonschema.NewCompiler()
	if err := compiler.AddResource("audit.json", doc); err != nil {
		t.Fatal(err)
	}
	schema, err := compiler.Compile("audit.json")
	if err != nil {
		t.Fatal(err)
	}
	if draft := schema.DraftVersion; draft != 2020 {
		t.Fatalf("the schema is of draft %d, want 2020-12", draft)
	}
	return schema
}

// commandOutput runs a command line; any exit code but those given fails. No
// code given stands for a report whatever it found.
func commandOutput(t *testing.T, want int, args ...string) []byte {
	t.Helper()
	var stdout, stderr bytes.Buffer
	code := run(args, strings.NewReader(""), &stdout, &stderr)
	if code != want && (want >= 0 || code > exitFound) {
		t.Fatalf("footing %s: exit code %d: %s", strings.Join(args, " "), code, stderr.String())
	}
	return stdout.Bytes()
}

const anyReport = -1

// refuses validates one report, and reports whether the schema refuses it.
func refuses(t *testing.T, schema *jsonschema.Schema, report []byte) error {
	t.Helper()
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(report))
	if err != nil {
		t.Fatalf("no JSON: %v", err)
	}
	return schema.Validate(doc)
}

// reports lists command lines of audits: every case of the reference data,
// the demo, tables of every degenerate kind, and tables only screened.
func reports(t *testing.T) map[string][]string {
	t.Helper()
	all := map[string][]string{}
	raw, err := os.ReadFile("../../testdata/reference/expected.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Cases map[string]struct {
			Data        string
			Response    string
			Predictor   string
			Covariates  []string
			Group       string
			Subject     string
			Order       string
			CommonSlope bool `json:"common_slope"`
		}
	}
	if err := json.Unmarshal(raw, &file); err != nil {
		t.Fatal(err)
	}
	for name, c := range file.Cases {
		path := filepath.Join("../../testdata/reference/data", c.Data)
		args := []string{path, "--per-row", "-y", c.Response}
		for flag, value := range map[string]string{"-x": c.Predictor, "-g": c.Group, "--subject": c.Subject, "--order": c.Order} {
			if value != "" {
				args = append(args, flag, value)
			}
		}
		for _, covariate := range c.Covariates {
			args = append(args, "--covariate", covariate)
		}
		if c.CommonSlope {
			args = append(args, "--common-slope")
		}
		all["reference "+name] = args
		all["screened "+name] = []string{path}
	}
	for _, demo := range []string{"kelp.csv", "kelp-clean.csv", "kelp.xlsx"} {
		path := "../../testdata/demo/" + demo
		all["screened "+demo] = []string{path}
		all["demo "+demo] = []string{path, "-y", "growth", "-x", "temperature", "-g", "site", "--per-row"}
		all["settings "+demo] = []string{
			path, "-y", "growth", "-x", "temperature", "-g", "site",
			"--stated-slope", "-0.4", "--smallest-difference", "0.2", "--predictor-error", "1", "--confidence", "0.9",
		}
	}
	for name, c := range degenerate {
		path := filepath.Join(t.TempDir(), "table.csv")
		if err := os.WriteFile(path, []byte(c.csv), 0o600); err != nil {
			t.Fatal(err)
		}
		all["degenerate "+name] = append([]string{path, "--per-row"}, strings.Fields(c.roles)...)
		all["screened "+name] = []string{path}
	}
	return all
}

// degenerate are tables from which little or nothing can be told.
var degenerate = map[string]struct{ csv, roles string }{
	"one row":            {"x,y\n1,2\n", "-y y -x x"},
	"two rows":           {"x,y\n1,2\n2,5\n", "-y y -x x"},
	"three rows":         {"x,y\n1,2\n2,5\n3,6\n", "-y y -x x"},
	"a perfect line":     {"x,y\n1,2\n2,4\n3,6\n4,8\n", "-y y -x x"},
	"constant response":  {"x,y\n1,2\n2,2\n3,2\n4,2\n", "-y y -x x"},
	"constant predictor": {"x,y\n1,2\n1,3\n1,5\n1,4\n", "-y y -x x"},
	"nothing but gaps":   {"x,y\n1,\n,3\n2,\n,5\n", "-y y -x x"},
	"a group of one":     {"g,x,y\na,1,2\na,2,3.5\na,3,4\na,4,6\na,5,6\nb,3,4\n", "-y y -x x -g g"},
	"one group":          {"g,x,y\na,1,2\na,2,3.5\na,3,4\na,4,6\na,5,6\n", "-y y -x x -g g"},
	"means of two":       {"g,y\na,1\na,2\nb,4\nb,6\n", "-y y -g g"},
	"a copied predictor": {"x,z,y\n1,2,1\n2,4,3\n3,6,2\n4,8,5\n5,10,4\n", "-y y -x x -x z"},
	"leverage one":       {"x,y\n8,6.58\n8,5.76\n8,7.71\n8,8.84\n8,8.47\n19,12.5\n", "-y y -x x"},
}

// TestReportsFollowTheSchema validates every report, and sees that the schema
// is met by no report with a field more, less or of another type.
func TestReportsFollowTheSchema(t *testing.T) {
	schema := auditSchema(t)
	all := reports(t)
	if len(all) < 60 {
		t.Fatalf("only %d reports", len(all))
	}
	for name, args := range all {
		t.Run(name, func(t *testing.T) {
			line := append([]string{"audit"}, args...)
			report := commandOutput(t, anyReport, append(line, "--format", "json", "--replicates", "39")...)
			if err := refuses(t, schema, report); err != nil {
				t.Error(err)
			}
		})
	}
}

func TestTheSchemaRefuses(t *testing.T) {
	schema := auditSchema(t)
	report := commandOutput(t, anyReport, "audit", "../../testdata/demo/kelp.csv", "-y", "growth", "-x", "temperature", "-g", "site", "--format", "json", "--replicates", "39")
	for _, c := range []struct {
		name   string
		change func(r map[string]any)
	}{
		{"a further field", func(r map[string]any) { r["mood"] = "good" }},
		{"a further field inside", func(r map[string]any) { r["verdict"].(map[string]any)["mood"] = "good" }},
		{"a field missing", func(r map[string]any) { delete(r, "difference") }},
		{"a slope without standing", func(r map[string]any) { delete(r["slopes"].([]any)[0].(map[string]any), "standing") }},
		{"a figure in words", func(r map[string]any) { r["slopes"].([]any)[0].(map[string]any)["p"] = "small" }},
		{"a p above 1", func(r map[string]any) { r["slopes"].([]any)[0].(map[string]any)["p"] = 1.5 }},
		{"an interval with one end", func(r map[string]any) { r["slopes"].([]any)[0].(map[string]any)["ci"] = []any{1.0} }},
		{"a state that there is not", func(r map[string]any) { r["findings"].([]any)[0].(map[string]any)["state"] = "fine" }},
		{"rows in halves", func(r map[string]any) { r["model"].(map[string]any)["rows_used"] = 10.5 }},
	} {
		t.Run(c.name, func(t *testing.T) {
			var r map[string]any
			if err := json.Unmarshal(report, &r); err != nil {
				t.Fatal(err)
			}
			c.change(r)
			changed, err := json.Marshal(r)
			if err != nil {
				t.Fatal(err)
			}
			if refuses(t, schema, changed) == nil {
				t.Error("the schema is met")
			}
		})
	}
}
