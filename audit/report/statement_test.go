package report

import (
	"bytes"
	"strings"
	"testing"

	"footing/audit"
)

func statementOf(t *testing.T, r *audit.Result) string {
	t.Helper()
	var b bytes.Buffer
	if err := Statement(&b, r, "0.0.0"); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	if strings.Count(text, "\n") != 1 || !strings.HasSuffix(text, "\n") {
		t.Errorf("not one paragraph: %q", text)
	}
	return text
}

// TestStatementTellsBoth looks for the figures with and without the row that a
// remedy leaves out, and for the row that could not be used.
func TestStatementTellsBoth(t *testing.T) {
	text := statementOf(t, demo(t, "kelp.csv").result)
	for _, part := range []string{
		"to 59 of the 60 rows of kelp.csv",
		"1 row was set aside", "row 17 (growth is missing)",
		"as the table stands: Sheltered none (n = 1), exposed -1.6 (95% CI -17.1 to 13.9, n = 29)",
		"without row 30, Sheltered none (n = 1), exposed -0.225 (95% CI -0.337 to -0.113, n = 28)",
		"(an answer changes)",
		"The verdict is unsound",
	} {
		if !strings.Contains(text, part) {
			t.Errorf("%q is missing from: %s", part, text)
		}
	}
}

// TestStatementClaimsNoMore finds an answer that may not be quoted only behind
// the words that say so, or beside the figures under a remedy.
func TestStatementClaimsNoMore(t *testing.T) {
	r := demo(t, "kelp.csv").result
	text := statementOf(t, r)
	may, not, found := strings.Cut(text, "Not to be quoted: ")
	if !found {
		t.Fatal("what may not be quoted is not told")
	}
	_, may, found = strings.Cut(may, "What may be quoted: ")
	if !found {
		t.Fatal("what may be quoted is not told")
	}
	denied := 0
	for _, s := range r.Slopes {
		if s.Standing != audit.DoNotQuote {
			continue
		}
		denied++
		if strings.Contains(may, "in "+*s.Group+" is") {
			t.Errorf("the slope of %s is claimed", *s.Group)
		}
		if !strings.Contains(not, "in "+*s.Group+":") {
			t.Errorf("the slope of %s is not denied", *s.Group)
		}
	}
	if denied == 0 {
		t.Fatal("every slope of this table may be quoted")
	}
	none := *r
	none.Verdict.Quote = nil
	if text := statementOf(t, &none); strings.Contains(text, "may be quoted:") {
		t.Errorf("something may be quoted where nothing may: %s", text)
	}
}

func TestStatementOfCleanTable(t *testing.T) {
	text := statementOf(t, demo(t, "kelp-clean.csv").result)
	for _, part := range []string{"to all 60 rows", "No row was set aside", "The verdict is firm"} {
		if !strings.Contains(text, part) {
			t.Errorf("%q is missing from: %s", part, text)
		}
	}
	if strings.Contains(text, "as the table stands") {
		t.Error("figures are compared though no remedy was tried")
	}
}
