package remedy

import "footing/rules/model"

// WithoutRun answers without the later of two runs of the same values.
var WithoutRun = &Remedy{
	Name:  "without-run",
	Do:    "find out which of the runs was measured; one of them was probably copied or filled down",
	Short: "without the repeated run",
	Edit: func(s Start) (*model.Design, error) {
		if len(s.Target.Rows) == 0 {
			return nil, &NotApplicable{Reason: "no row of a repeated run is in the fit"}
		}
		return s.Design.Without(s.Target.Rows, "left out for the trial, as it repeats a run of values"), nil
	},
}
