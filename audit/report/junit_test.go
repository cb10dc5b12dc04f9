package report

import (
	"bytes"
	"encoding/xml"
	"testing"

	"footing/audit"
)

// suites is what a build server reads, written down apart from what footing
// writes.
type suites struct {
	XMLName  xml.Name `xml:"testsuites"`
	Tests    int      `xml:"tests,attr"`
	Failures int      `xml:"failures,attr"`
	Suite    []struct {
		Name     string `xml:"name,attr"`
		Tests    int    `xml:"tests,attr"`
		Failures int    `xml:"failures,attr"`
		Skipped  int    `xml:"skipped,attr"`
		Case     []struct {
			Name    string `xml:"name,attr"`
			Failure *struct {
				Type string `xml:"type,attr"`
			} `xml:"failure"`
			Skipped *struct{} `xml:"skipped"`
		} `xml:"testcase"`
	} `xml:"testsuite"`
}

func TestJUnitFailures(t *testing.T) {
	r := demo(t, "kelp.csv").result
	for _, failOn := range []string{"stop", "warn", "thin", "never"} {
		var b bytes.Buffer
		if err := JUnit(&b, r, failOn, "0.0.0"); err != nil {
			t.Fatal(err)
		}
		var got suites
		if err := xml.Unmarshal(b.Bytes(), &got); err != nil {
			t.Fatal(err)
		}
		if len(got.Suite) != 1 || got.Suite[0].Name != "kelp.csv" {
			t.Fatalf("suites %+v", got.Suite)
		}
		failing := map[string]string{}
		skipped := 0
		for _, c := range got.Suite[0].Case {
			if c.Failure != nil {
				failing[c.Name] = c.Failure.Type
			}
			if c.Skipped != nil {
				skipped++
			}
		}
		want := map[audit.State]bool{
			audit.Stop: failOn != "never", audit.Warn: failOn == "warn" || failOn == "thin", audit.Thin: failOn == "thin",
		}
		n := 0
		for _, f := range r.Findings {
			if want[f.State] {
				n++
			}
			if want[f.State] != (failing[f.Rule] == string(f.State)) {
				t.Errorf("--fail-on %s: %s is %s and fails as %q", failOn, f.Rule, f.State, failing[f.Rule])
			}
		}
		s := got.Suite[0]
		if n != s.Failures || n != got.Failures || s.Tests != len(r.Findings) || len(s.Case) != s.Tests || got.Tests != s.Tests || skipped != s.Skipped || skipped == 0 {
			t.Errorf("--fail-on %s: %d failures and %d cases, told as %+v", failOn, n, len(r.Findings), s)
		}
	}
}
