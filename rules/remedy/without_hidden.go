package remedy

import "footing/rules/model"

// WithoutHidden answers without the rows that the file hides or strikes out.
var WithoutHidden = &Remedy{
	Name:  "without-hidden",
	Do:    "find out why these rows are hidden or struck through; delete them if they are not meant, show them if they are",
	Short: "without the hidden rows",
	Edit: func(s Start) (*model.Design, error) {
		if len(s.Target.Rows) == 0 {
			return nil, &NotApplicable{Reason: "no hidden row is in the fit"}
		}
		return s.Design.Without(s.Target.Rows, "left out for the trial, as it is hidden"), nil
	},
}
