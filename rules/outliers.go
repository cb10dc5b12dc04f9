package rules

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Outliers asks whether a row lies far off its line.
var Outliers = &Rule{
	Name:     "outliers",
	Family:   OfModel,
	Asks:     "Does a row lie further off its line than chance would put it?",
	Why:      "Such a row is often a slip of the pen, and it can move a slope and widen every interval.",
	Method:   "largest externally studentized residual, t distribution with Bonferroni's factor for the number of rows (Cook and Weisberg 1982, Residuals and Influence in Regression)",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.SetAside},
	Tests:    outlierTests,
	Run:      outliers,
}

func outlierTests(p *Pass) ([]Test, string) {
	d := p.Fit.Diagnostics()
	row, defined := d.LargestExternal()
	if row < 0 {
		return nil, "too few rows to judge one by the others"
	}
	df := float64(p.Fit.DF - 1)
	t := math.Abs(d.External[row])
	return []Test{{
		Name: "largest studentized residual", Value: t, DF: []float64{df},
		P: min(1, float64(defined)*numeric.StudentTwoSided(t, df)),
	}}, ""
}

func outliers(p *Pass) (Outcome, error) {
	d := p.Fit.Diagnostics()
	row, defined := d.LargestExternal()
	t := p.Joint.Tests[0]
	o := judged(p.Joint, "", "no row lies further off its line than chance puts one")
	o.Statistic = t.measure()
	o.Evidence = map[string]any{"largest_studentized": d.External[row], "bonferroni_p": t.P, "row": p.Table.Row(p.Design.Rows[row])}
	flagged := []int{row}
	if o.Answer == Breach {
		flagged = p.wild(d.External, defined)
		o.Message = p.wildWords(flagged, d.External)
	}
	for _, i := range flagged {
		o.Where = append(o.Where, p.row(i))
	}
	o.Target.Rows = flagged
	o.Touches = p.ofRows(flagged)
	return o, nil
}

// wild lists the rows whose own Bonferroni p is at most the rate of false
// alarms, the worst first: at least one, at most a twentieth of all.
func (p *Pass) wild(external []float64, defined int) []int {
	var rows []int
	df := float64(p.Fit.DF - 1)
	for i, t := range external {
		if !math.IsNaN(t) && float64(defined)*numeric.StudentTwoSided(t, df) <= p.Settings.FalseAlarm {
			rows = append(rows, i)
		}
	}
	slices.SortStableFunc(rows, func(a, b int) int {
		return compareDescending(math.Abs(external[a]), math.Abs(external[b]))
	})
	most := max(1, p.Fit.N()/20)
	if len(rows) > most {
		rows = rows[:most]
	}
	return rows
}

func compareDescending(a, b float64) int {
	switch {
	case a > b:
		return -1
	case a < b:
		return 1
	}
	return 0
}

func (p *Pass) wildWords(rows []int, external []float64) string {
	var said []string
	for _, i := range rows {
		side := "above"
		if p.Fit.Residual[i] < 0 {
			side = "below"
		}
		at := fmt.Sprintf("row %d lies %s %s its line", p.Table.Row(p.Design.Rows[i]), p.inUnits(math.Abs(p.Fit.Residual[i])), side)
		if math.IsInf(external[i], 0) {
			at += ", and all other rows lie on theirs"
		} else {
			at += fmt.Sprintf(", %s times the scatter of the others", wording.Figure(math.Abs(external[i]), 2))
		}
		said = append(said, at)
	}
	return strings.Join(said, "; ")
}

// inUnits writes a value of the response with its unit.
func (p *Pass) inUnits(v float64) string {
	s := wording.Figure(v, 2)
	if u := p.Columns.Response.Unit; u != "" {
		s += " " + u
	}
	return s
}
