package rules

import (
	"fmt"
	"testing"

	"github.com/xuri/excelize/v2"
)

func TestUncachedFormulas(t *testing.T) {
	p := passOf(t, kelp(40, 40), kelpRoles)
	expect(t, p, ask(t, UncachedFormulas, p), Sound, "no formula")

	formulas := func(cells ...string) func(*excelize.File, string) {
		return func(f *excelize.File, sheet string) {
			for _, cell := range cells {
				if err := f.SetCellDefault(sheet, cell, ""); err != nil {
					t.Fatal(err)
				}
				if err := f.SetCellFormula(sheet, cell, "B3/3"); err != nil {
					t.Fatal(err)
				}
			}
		}
	}
	p = bookOf(t, kelp(40, 40), kelpRoles, formulas("C8", "C32"))
	o := ask(t, UncachedFormulas, p)
	expect(t, p, o, Breach, "2 cells hold a formula without a stored value", "C8", "C32")
	if p.Design.N() != 38 || len(o.Denies) != 0 {
		t.Errorf("%d rows used, denies %v", p.Design.N(), o.Denies)
	}

	var most []string
	for row := 2; row <= 30; row++ {
		most = append(most, fmt.Sprintf("C%d", row))
	}
	p = bookOf(t, kelp(40, 40), kelpRoles, formulas(most...))
	if o = ask(t, UncachedFormulas, p); len(o.Denies) == 0 {
		t.Errorf("most of the response is not calculated, and no answer is denied: %s", o.Message)
	}
}
