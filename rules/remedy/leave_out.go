package remedy

import "footing/rules/model"

// LeaveOutColumn leaves one further predictor or covariate out.
var LeaveOutColumn = &Remedy{
	Name:  "leave-out",
	Do:    "leave out one of the columns that carry the same information, and say which, then run again",
	Short: "with an entangled column left out",
	Edit: func(s Start) (*model.Design, error) {
		if s.Fit == nil {
			return nil, &NotApplicable{Reason: "there is no fit to compare with"}
		}
		return s.Design.LeavingOut(s.Target.LeaveOut), nil
	},
}
