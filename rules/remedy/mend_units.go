package remedy

import "footing/rules/model"

// MendUnits answers with the named cells brought to the unit of the others.
var MendUnits = &Remedy{
	Name:  "mend-units",
	Do:    "find out in which unit the named cells were written, and write them in that of their column",
	Short: "with the cells in the unit of the others",
	Edit:  func(s Start) (*model.Design, error) { return changed(s, "no cell of the fit would change its unit") },
}

// changed is the design with the target's values in place of the table's.
func changed(s Start, otherwise string) (*model.Design, error) {
	if len(s.Target.Values) == 0 {
		return nil, &NotApplicable{Reason: otherwise}
	}
	return s.Design.Changed(s.Target.Values), nil
}
