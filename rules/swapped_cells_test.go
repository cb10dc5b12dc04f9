package rules

import (
	"fmt"
	"testing"

	"footing/rules/model"
)

func TestSwappedCells(t *testing.T) {
	warm := func() *sheet {
		s := kelp(40, 47)
		for i := range s.rows {
			s.rows[i][1] = "2" + s.rows[i][1] // far from growth
		}
		for i := range s.rows {
			s.rows[i][1] = fmt.Sprintf("%.2f", 20+float64(i*17%40)/10)
		}
		return s
	}
	p := passOf(t, warm(), kelpRoles)
	expect(t, p, ask(t, SwappedCells, p), Sound, "no two cells")

	s := warm()
	s.rows[17][1], s.rows[17][2] = s.rows[17][2], s.rows[17][1]
	p = passOf(t, s, kelpRoles)
	o := ask(t, SwappedCells, p)
	expect(t, p, o, Breach, "each fits the other's column", "B19", "C19")
	if len(o.Target.Values) != 2 || len(o.Target.Rows) != 1 {
		t.Errorf("would change %v of rows %v", o.Target.Values, o.Target.Rows)
	}
	back := p.Design.Changed(o.Target.Values)
	if x, _ := p.Columns.Response.Number(17); back.X()[17] != x {
		t.Errorf("the predictor is %g after the swap, want %g", back.X()[17], x)
	}
	if y := p.Design.X()[17]; back.Y[17] != y || p.Design.Y[17] == y {
		t.Errorf("the response is %g after the swap, want %g; before it stays %g", back.Y[17], y, p.Design.Y[17])
	}
}

func TestListsPastedSideBySide(t *testing.T) {
	s := &sheet{header: []string{"plot", "depth", "name", "growth"}}
	for i := range 12 {
		s.add(fmt.Sprintf("P%02d", i), fmt.Sprintf("%.2f", 3+float64(i*5%12)), fmt.Sprintf("P%02d", i), fmt.Sprintf("%.2f", float64(i*7%12)))
	}
	roles := model.Roles{Response: "growth", Predictors: []string{"depth"}}
	p := passOf(t, s, roles)
	expect(t, p, ask(t, SwappedCells, p), Sound, "no two cells")
	s.rows[3][2], s.rows[7][2] = s.rows[7][2], s.rows[3][2]
	p = passOf(t, s, roles)
	expect(t, p, ask(t, SwappedCells, p), Breach, "plot and name hold the same labels in different orders (2 rows)", "A5", "C5", "A9", "C9")
}
