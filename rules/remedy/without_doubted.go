package remedy

import "footing/rules/model"

// WithoutDoubted answers without the rows whose value is doubted.
var WithoutDoubted = &Remedy{
	Name:  "without-doubted",
	Do:    "look the named cells up where they were first written down, and correct those that were mistyped",
	Short: "without the doubted rows",
	Edit: func(s Start) (*model.Design, error) {
		if len(s.Target.Rows) == 0 {
			return nil, &NotApplicable{Reason: "no row of the fit holds a doubted cell"}
		}
		return s.Design.Without(s.Target.Rows, "left out for the trial, as its value is doubted"), nil
	},
}
