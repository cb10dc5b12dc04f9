package remedy

import "footing/rules/model"

// SetAside answers without the rows that the finding names.
var SetAside = &Remedy{
	Name: "set-aside",
	Do:   "look the named rows up in your notes; correct what was mistyped, and if a row is right, quote the answers with it and without it",
	Edit: func(s Start) (*model.Design, error) {
		if len(s.Target.Rows) == 0 {
			return nil, &NotApplicable{Reason: "no row of the fit is named"}
		}
		return s.Design.Without(s.Target.Rows, "set aside for the trial"), nil
	},
}
