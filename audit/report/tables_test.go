package report

import (
	"bytes"
	"crypto/sha256"
	"fmt"
	"math"
	"os"
	"strings"
	"sync"
	"testing"

	"footing/audit"
	"footing/readers"
	"footing/rules"
)

// audited is a table with its audit, and the bytes that it was read from.
type audited struct {
	result *audit.Result
	table  *readers.Table
	input  []byte
}

// done keeps audits that several tests look at; no test changes one.
var done sync.Map

// auditOf audits bytes under a name, with the roles that ask gives.
func auditOf(t *testing.T, name string, input []byte, ask func(*audit.Request)) audited {
	t.Helper()
	key := fmt.Sprint(name, ask == nil, sha256.Sum256(input))
	if a, ok := done.Load(key); ok {
		return a.(audited)
	}
	table, err := readers.Read(name, bytes.NewReader(input), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	nan := math.NaN()
	request := audit.Request{
		Settings: rules.Settings{
			Confidence: 0.95, FalseAlarm: 0.05, Seed: 1, SmallestDifference: nan, StatedSlope: nan, PredictorError: nan, Replicates: 199,
		},
		Command: "footing audit " + name,
		PerRow:  true,
	}
	if ask != nil {
		ask(&request)
	}
	r, err := audit.Table(table, request)
	if err != nil {
		t.Fatal(err)
	}
	a := audited{result: r, table: table, input: input}
	done.Store(key, a)
	return a
}

func kelpRoles(q *audit.Request) {
	q.Roles.Response, q.Roles.Predictors, q.Roles.Group, q.Roles.Label = "growth", []string{"temperature"}, "site", "plot"
}

// demo is a table of the demo, audited as README does.
func demo(t *testing.T, name string) audited {
	t.Helper()
	input, err := os.ReadFile("../../testdata/demo/" + name)
	if err != nil {
		t.Fatal(err)
	}
	return auditOf(t, name, input, kelpRoles)
}

// written is a result in one form, as a file.
func written(t *testing.T, form *Form, a audited) []byte {
	t.Helper()
	var b bytes.Buffer
	o := Options{
		Text: TextOptions{Width: 80, Verbose: true, Sketch: true}, PerRow: true, FailOn: "warn", Version: "0.0.0", File: true,
		Spans: func(places []readers.Pos) map[readers.Pos]readers.Span {
			spans, err := readers.Spans(bytes.NewReader(a.input), a.table, places)
			if err != nil {
				t.Fatal(err)
			}
			return spans
		},
	}
	if err := form.Write(&b, a.result, o); err != nil {
		t.Fatalf("%s: %v", form.Name, err)
	}
	return b.Bytes()
}

// hostile are labels that try to act on whatever shows them.
var hostile = []string{
	`<script>alert(1)</script>`,
	`=cmd|' /C calc'!A0`,
	"right\u202eto left",
	"red\x1b[31m and \x07 bell",
	`a | pipe and **bold** [link](http://example.org) @everyone #12`,
	"-2+3",
	"@SUM(A1)",
	"two\nlines",
	`</failure>]]>&amp; {0} %s`,
}

// hostileTable has them as groups, as headers and as a file's name.
func hostileTable(t *testing.T) audited {
	t.Helper()
	var b strings.Builder
	quoted := func(s string) string { return `"` + strings.ReplaceAll(s, `"`, `""`) + `"` }
	headers := []string{"=1+1<img src=x onerror=alert(1)>", "+temperature | \u2066x\u2069", "@site `code`", "note"}
	for i, h := range headers {
		headers[i] = quoted(h)
	}
	b.WriteString(strings.Join(headers, ",") + "\n")
	values := []string{"1.9", "4.1", "6.2", "7.9", "10.1", "12.2"}
	for g, label := range hostile {
		for k, v := range values {
			if g == 0 && k == 3 {
				v = "-999"
			}
			if g == 1 && k == 2 {
				v = ""
			}
			b.WriteString(strings.Join([]string{v, string(rune('1' + k)), quoted(label), quoted("=1+1")}, ",") + "\n")
		}
	}
	return auditOf(t, "=<b>evil</b>|x.csv", []byte(b.String()), func(q *audit.Request) {
		q.Roles.Response, q.Roles.Predictors, q.Roles.Group, q.Roles.Label = "A", []string{"B"}, "C", "D"
	})
}
