package rules

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"
	"time"

	"footing/readers"
	"footing/rules/model"
)

// BenchmarkTableRules asks every rule of the table of 200,000 rows, and tells
// the time of the slowest.
func BenchmarkTableRules(b *testing.B) {
	random := rand.New(rand.NewPCG(1, 1))
	var text strings.Builder
	text.WriteString("no,site,plot,temperature,growth\n")
	for i := range 200000 {
		t := 8 + 12*random.Float64()
		fmt.Fprintf(&text, "F%d,%s,P%d,%.4f,%.4f\n", i, []string{"exposed", "sheltered"}[i%2], i%37, t, 10-0.4*t+0.7*random.NormFloat64())
	}
	table, err := readers.Read("table.csv", strings.NewReader(text.String()), readers.Options{})
	if err != nil {
		b.Fatal(err)
	}
	p := &Pass{Table: table, Settings: testSettings()}
	if p.Columns, err = model.Resolve(table, model.Roles{Response: "growth", Predictors: []string{"temperature"}, Group: "site", Label: "no"}); err != nil {
		b.Fatal(err)
	}
	p.Design = model.NewDesign(table, p.Columns, false)
	if p.Fit, err = model.NewFit(p.Design); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		p.Profiles = Profiles{}
		for _, r := range All {
			if r.Family != OfTable {
				continue
			}
			start := time.Now()
			if _, err := r.Run(p); err != nil {
				b.Fatal(err)
			}
			b.ReportMetric(float64(time.Since(start).Milliseconds()), r.Name+"-ms")
		}
	}
}
