package rules

import (
	"regexp"
	"testing"
)

// TestEveryRuleIsComplete refuses an empty field, a name that users could not
// type, and a name given twice.
func TestEveryRuleIsComplete(t *testing.T) {
	words := regexp.MustCompile(`^[a-z]+(-[a-z]+)*$`)
	seen := map[string]bool{}
	for _, r := range All {
		if !words.MatchString(r.Name) || seen[r.Name] {
			t.Errorf("name %q is not words joined by hyphens, or stands twice", r.Name)
		}
		seen[r.Name] = true
		for field, text := range map[string]string{"Asks": r.Asks, "Why": r.Why, "Method": r.Method, "Limit": r.Limit} {
			if text == "" {
				t.Errorf("%s: %s is empty", r.Name, field)
			}
		}
		if r.Asks[len(r.Asks)-1] != '?' {
			t.Errorf("%s: %q is no question", r.Name, r.Asks)
		}
		if r.Family != OfTable && r.Family != OfModel {
			t.Errorf("%s: family %q", r.Name, r.Family)
		}
		if r.Run == nil {
			t.Errorf("%s has no function", r.Name)
		}
		if len(r.Remedies) == 0 && !r.OnlyLimits {
			t.Errorf("%s offers no remedy", r.Name)
		}
		if r.Chance != nil && r.Needs != NeedsScatter {
			t.Errorf("%s tests residuals and must need scatter", r.Name)
		}
		for _, remedy := range r.Remedies {
			if remedy.Name == "" || remedy.Do == "" {
				t.Errorf("%s: a remedy without name or words", r.Name)
			}
		}
		if Named(r.Name) != r {
			t.Errorf("%s is not found by its name", r.Name)
		}
	}
}
