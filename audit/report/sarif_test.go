package report

import (
	"bytes"
	"encoding/json"
	"strings"
	"testing"

	"github.com/owenrumney/go-sarif/v3/pkg/report/v210/sarif"

	"footing/audit"
)

// TestSARIFIsValid holds the log to the schema of OASIS, through a reader that
// others wrote.
func TestSARIFIsValid(t *testing.T) {
	cases := map[string]audited{
		"text file": demo(t, "kelp.csv"), "workbook": demo(t, "kelp.xlsx"), "hostile": hostileTable(t), "screened": auditOf(t, "kelp.csv", demo(t, "kelp.csv").input, nil),
	}
	for name, a := range cases {
		if err := validSARIF(written(t, sarifForm, a)); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	sound := string(written(t, sarifForm, cases["text file"]))
	for was, is := range map[string]string{`"level": "error"`: `"level": "worst"`, `"ruleId"`: `"rule"`, `"startLine": 30`: `"startLine": 0`} {
		if broken := strings.Replace(sound, was, is, 1); broken == sound || validSARIF([]byte(broken)) == nil {
			t.Errorf("%s is taken for valid", is)
		}
	}
}

// validSARIF reads a log strictly, since the reader validates what it kept of it.
func validSARIF(raw []byte) error {
	d := json.NewDecoder(bytes.NewReader(raw))
	d.DisallowUnknownFields()
	if err := d.Decode(&sarif.Report{}); err != nil {
		return err
	}
	log, err := sarif.FromBytes(raw)
	if err != nil {
		return err
	}
	return log.Validate()
}

func sarifOf(t *testing.T, a audited) *sarif.Run {
	t.Helper()
	log, err := sarif.FromBytes(written(t, sarifForm, a))
	if err != nil {
		t.Fatal(err)
	}
	if len(log.Runs) != 1 {
		t.Fatalf("%d runs", len(log.Runs))
	}
	return log.Runs[0]
}

func resultOf(t *testing.T, run *sarif.Run, rule string) *sarif.Result {
	t.Helper()
	for _, r := range run.Results {
		if *r.RuleID == rule {
			return r
		}
	}
	t.Fatalf("no result of %s", rule)
	return nil
}

// TestSARIFPlaces looks the cell with the missing code up as an editor would.
func TestSARIFPlaces(t *testing.T) {
	a := demo(t, "kelp.csv")
	result := resultOf(t, sarifOf(t, a), "missing-codes")
	if result.Level != "error" {
		t.Errorf("level %s", result.Level)
	}
	place := result.Locations[0]
	region := place.PhysicalLocation.Region
	line := strings.Split(string(a.input), "\n")[*region.StartLine-1]
	if got := string([]rune(line)[*region.StartColumn-1 : *region.EndColumn-1]); got != "-999" {
		t.Errorf("line %d, columns %d to %d hold %q", *region.StartLine, *region.StartColumn, *region.EndColumn, got)
	}
	if got := *place.LogicalLocations[0].FullyQualifiedName; got != "E30" {
		t.Errorf("logical location %s", got)
	}
}

func TestSARIFOfWorkbook(t *testing.T) {
	a := auditOf(t, "book.xlsx", bookWithTrouble(t), kelpRoles)
	place := resultOf(t, sarifOf(t, a), "missing-codes").Locations[0]
	if got := *place.LogicalLocations[0].FullyQualifiedName; got != "'my data'!E30" {
		t.Errorf("logical location %s", got)
	}
	if place.PhysicalLocation.Region != nil {
		t.Error("a cell of a workbook has lines")
	}
}

// TestSARIFFingerprints keeps a finding's fingerprint when rows are put above,
// and tells different findings apart.
func TestSARIFFingerprints(t *testing.T) {
	before := demo(t, "kelp.csv")
	header, rest, _ := strings.Cut(string(before.input), "\n")
	more := header + "\n101,S98,sheltered,12.1,6.21\n102,E98,exposed,12.2,5.34\n" + rest
	after := auditOf(t, "kelp.csv", []byte(more), kelpRoles)
	one, two := sarifOf(t, before), sarifOf(t, after)
	for _, rule := range []string{"missing-codes", "label-variants", "outliers"} {
		a, b := resultOf(t, one, rule), resultOf(t, two, rule)
		if *a.Locations[0].PhysicalLocation.Region.StartLine+2 != *b.Locations[0].PhysicalLocation.Region.StartLine {
			t.Fatalf("%s did not move by two lines", rule)
		}
		if a.PartialFingerprints["footing/1"] != b.PartialFingerprints["footing/1"] {
			t.Errorf("%s: the fingerprint changed with the rows above", rule)
		}
	}
	if len(two.Results) < 3 {
		t.Fatal("too few results to compare")
	}
	seen := map[string]string{}
	for _, r := range two.Results {
		print := r.PartialFingerprints["footing/1"]
		if other := seen[print]; other != "" {
			t.Errorf("%s and %s have one fingerprint", other, *r.RuleID)
		}
		seen[print] = *r.RuleID
	}
	value := func(v string) *audit.Finding {
		column, label := "growth", "E04"
		return &audit.Finding{Rule: "missing-codes", Where: []audit.Place{{Column: &column, Value: &v, Label: &label}}}
	}
	if fingerprint(value("-999")) == fingerprint(value("-99")) {
		t.Error("another value has the same fingerprint")
	}
}

// TestSARIFWaived tells a waived finding as suppressed, with the reason.
func TestSARIFWaived(t *testing.T) {
	a := demo(t, "kelp.csv")
	reason := "known; J. Doe, until 2027-01-31"
	r := *a.result
	r.Findings = append([]audit.Finding{}, r.Findings...)
	r.Findings[0].Waived = &reason
	a.result = &r
	run := sarifOf(t, a)
	waived := resultOf(t, run, r.Findings[0].Rule)
	if len(waived.Suppressions) != 1 || *waived.Suppressions[0].Justification != reason {
		t.Errorf("suppressions %+v", waived.Suppressions)
	}
	if others := resultOf(t, run, "label-variants").Suppressions; len(others) != 0 {
		t.Errorf("suppressions of what was not waived: %+v", others)
	}
}

// TestEscapedJSON reads the same values back from the escaped text.
func TestEscapedJSON(t *testing.T) {
	a := hostileTable(t)
	var got, want audit.Result
	if err := json.Unmarshal(written(t, jsonForm, a), &got); err != nil {
		t.Fatal(err)
	}
	plain, err := json.Marshal(a.result)
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(plain, &want); err != nil {
		t.Fatal(err)
	}
	for i, s := range want.Slopes {
		if *got.Slopes[i].Group != *s.Group {
			t.Errorf("group %q came back as %q", *s.Group, *got.Slopes[i].Group)
		}
	}
	if len(want.Slopes) != len(hostile) {
		t.Errorf("%d groups, want %d", len(want.Slopes), len(hostile))
	}
}

func TestFileURI(t *testing.T) {
	cases := map[string]string{
		"kelp.csv": "kelp.csv", "my data/50%.csv": "my%20data/50%25.csv", "/tmp/a b.csv": "file:///tmp/a%20b.csv", "a:b.csv": "./a:b.csv", "-": "-",
	}
	for file, want := range cases {
		if got := fileURI(file); got != want {
			t.Errorf("%s: %s, want %s", file, got, want)
		}
	}
}
