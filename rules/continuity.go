package rules

import (
	"fmt"

	"footing/readers"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Continuity asks whether the response takes few values only.
var Continuity = &Rule{
	Name:   "continuity",
	Family: OfTable,
	Asks:   "Does the response take more than a few values?",
	Why:    "Counts, scores and coarsely rounded values scatter otherwise than the intervals assume, and hold less than as many rows of fine measurements.",
	Method: "counts the different values of the response, and tells those of each predictor",
	Limit:  "at most ten different values, in at least four times as many rows; measurements with three digits take far more. No chance is involved",
	Needs:  NeedsDesign, Remedies: []*remedy.Remedy{remedy.CountModel},
	Run: continuity,
}

func continuity(p *Pass) (Outcome, error) {
	y := p.Profile(p.Columns.Response)
	told := ""
	for _, x := range p.Columns.Predictors {
		if f := p.Profile(x); f.Set && 3*f.Distinct <= len(f.Values) {
			told += fmt.Sprintf("; %s takes %s, as if it had been set", x.Title(), wording.Count(f.Distinct, "value"))
		}
	}
	fact := fmt.Sprintf("%s takes %s in %s", p.Columns.Response.Title(), wording.Count(y.Distinct, "value"), wording.Count(len(y.Values), "row"))
	o := sound(fact + told)
	if y.Distinct <= 10 && y.Distinct > 1 && 4*y.Distinct <= len(y.Values) {
		guess := "a score, a count, or rounded coarsely"
		if y.Distinct == 2 {
			guess = "a yes or no"
		}
		o = breach(fmt.Sprintf("%s only: perhaps %s%s", fact, guess, told))
		o.Where = []Place{whole(p.Columns.Response)}
	}
	o.Evidence = map[string]any{"distinct": y.Distinct, "rows": len(y.Values)}
	return o, nil
}

// whole is a place for a column as a whole.
func whole(col *readers.Column) Place { return Place{Row: -1, Column: col} }
