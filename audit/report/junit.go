package report

import (
	"encoding/xml"
	"io"
	"strings"

	"footing/audit"
	"footing/rules/wording"
)

var junitForm = &Form{
	Name: "junit", Extensions: []string{".xml"}, Marks: []string{xml.Header + "<!-- " + mark},
	Write: func(w io.Writer, r *audit.Result, o Options) error { return JUnit(w, r, o.FailOn, o.Version) },
}

// The elements as build servers read them; there is common practice and no
// standard.
type junitSuites struct {
	XMLName  xml.Name     `xml:"testsuites"`
	Name     string       `xml:"name,attr"`
	Tests    int          `xml:"tests,attr"`
	Failures int          `xml:"failures,attr"`
	Suites   []junitSuite `xml:"testsuite"`
}

type junitSuite struct {
	Name       string          `xml:"name,attr"`
	Tests      int             `xml:"tests,attr"`
	Failures   int             `xml:"failures,attr"`
	Errors     int             `xml:"errors,attr"`
	Skipped    int             `xml:"skipped,attr"`
	Properties []junitProperty `xml:"properties>property"`
	Cases      []junitCase     `xml:"testcase"`
	Out        string          `xml:"system-out"`
}

type junitProperty struct {
	Name  string `xml:"name,attr"`
	Value string `xml:"value,attr"`
}

type junitCase struct {
	Name    string        `xml:"name,attr"`
	Class   string        `xml:"classname,attr"`
	File    string        `xml:"file,attr"`
	Failure *junitFailure `xml:"failure"`
	Skipped *junitSkipped `xml:"skipped"`
	Out     string        `xml:"system-out,omitempty"`
}

type junitFailure struct {
	Type    string `xml:"type,attr"`
	Message string `xml:"message,attr"`
	Text    string `xml:",chardata"`
}

type junitSkipped struct {
	Message string `xml:"message,attr"`
}

// JUnit writes the result as tests of a build: a suite for the table, a case for
// each rule, a failure for each finding at or above failOn.
func JUnit(w io.Writer, r *audit.Result, failOn, version string) error {
	suite := junitSuite{Name: wording.Printable(tableName(r)), Out: strings.Join(answerLines(r), "\n")}
	suite.Properties = []junitProperty{
		{"verdict", grade(r)},
		{"summary", wording.Printable(wording.Stop(r.Verdict.Summary))},
		{"sha256", r.Input.SHA256},
		{"footing", version},
	}
	for k := range r.Findings {
		f := &r.Findings[k]
		suite.Tests++
		c := junitCase{Name: f.Rule, Class: "footing." + f.Family, File: wording.Printable(r.Input.File)}
		said := wording.Printable(message(f))
		switch {
		case f.Waived != nil:
			c.Out = said + " Waived: " + wording.Printable(wording.Stop(*f.Waived))
		case f.Fails(failOn):
			suite.Failures++
			c.Failure = &junitFailure{Type: string(f.State), Message: said, Text: strings.Join(junitDetails(f), "\n")}
		case f.State == audit.Skip:
			suite.Skipped++
			c.Skipped = &junitSkipped{Message: said}
		default:
			c.Out = said
		}
		suite.Cases = append(suite.Cases, c)
	}
	all := junitSuites{Name: "footing", Tests: suite.Tests, Failures: suite.Failures, Suites: []junitSuite{suite}}
	text, err := xml.MarshalIndent(all, "", "  ")
	if err != nil {
		return err
	}
	_, err = io.WriteString(w, xml.Header+"<!-- "+audit.Format+" junit -->\n"+string(text)+"\n")
	return err
}

// tableName is the file, with the sheet of a workbook.
func tableName(r *audit.Result) string {
	file, _ := readWords(r)
	return file
}

func junitDetails(f *audit.Finding) []string {
	lines := []string{message(f)}
	if len(f.Where) > 0 {
		lines = append(lines, "Where: "+fewAddresses(f.Where))
	}
	for _, words := range remedyWords(f) {
		lines = append(lines, "To do: "+words)
	}
	for i := range lines {
		lines[i] = wording.Printable(lines[i])
	}
	return lines
}
