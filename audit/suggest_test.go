package audit_test

import (
	"fmt"
	"strings"
	"testing"

	"footing/rules/model"
)

func TestSuggest(t *testing.T) {
	var b strings.Builder
	b.WriteString("no,pine,stand,soil,sensor,depth (cm),ring_north (mm),ring_south (mm)\n")
	for i := range 36 {
		fmt.Fprintf(&b, "%d,P%02d,%s,%s,7,%d,%.2f,%.2f\n", i+1, i/3, []string{"upper", "lower"}[i/3%2], []string{"sand", "loam", "clay"}[i/3%3], 10*(i%3+1),
			2+float64(i*17%37)/10, 1+float64(i*23%41)/10)
	}
	s := auditText(t, b.String(), model.Roles{}).Suggested
	if want := `-y ring_south -x depth -g stand`; !strings.HasSuffix(s.Command, want) {
		t.Errorf("suggests %q, want %q", s.Command, want)
	}
	all := strings.Join(s.Reasons, "\n")
	for _, want := range []string{
		"no only counts the rows: if it is the order in which they were taken, add --order no",
		"pine names 12 things, each in a few rows: if the rows of one share an error, add --subject pine",
		"sensor is the same in every row",
		"ring_north and ring_south look like one quantity side by side",
		"depth (cm) as predictor: 3 values, each in several rows, as if it had been set",
		"soil makes groups too (3 labels)",
	} {
		if !strings.Contains(all, want) {
			t.Errorf("the reasons lack %q:\n%s", want, all)
		}
	}
}

func TestSuggestNamesRowsAndNumberedGroups(t *testing.T) {
	var b strings.Builder
	b.WriteString("brick,kiln,heat (°C),shrinkage (mm)\n")
	for i := range 30 {
		fmt.Fprintf(&b, "B%02d,%d,%.1f,%.2f\n", i, 1+i%2, 900+float64(i*37%101), 2+float64(i*17%37)/10)
	}
	s := auditText(t, b.String(), model.Roles{}).Suggested
	all := strings.Join(s.Reasons, "\n")
	if want := "-y shrinkage -x heat -g kiln"; !strings.HasSuffix(s.Command, want) {
		t.Errorf("suggests %q, want %q", s.Command, want)
	}
	for _, want := range []string{"brick names each row by a label of its own: add --label brick", "kiln as group: 2 whole numbers in sequence"} {
		if !strings.Contains(all, want) {
			t.Errorf("the reasons lack %q:\n%s", want, all)
		}
	}
}
