package remedy

import "footing/rules/model"

// DropCopies answers with one row kept of each set of copies.
var DropCopies = &Remedy{
	Name:  "drop-copies",
	Do:    "find out which of the rows was measured, and delete the copies",
	Short: "without the copies",
	Edit: func(s Start) (*model.Design, error) {
		if len(s.Target.Rows) == 0 {
			return nil, &NotApplicable{Reason: "no row of the fit is a copy"}
		}
		return s.Design.Without(s.Target.Rows, "taken as a copy for the trial"), nil
	},
}
