package remedy

import "footing/rules/model"

// AsMissing answers with suspected codes taken as missing.
var AsMissing = &Remedy{
	Name:  "as-missing",
	Do:    "say with --missing CODE that the value stands for a missing one, or check that it was measured",
	Short: "taken as missing",
	Edit: func(s Start) (*model.Design, error) {
		if len(s.Target.Rows) == 0 {
			return nil, &NotApplicable{Reason: "no row of the fit holds the code"}
		}
		return s.Design.Without(s.Target.Rows, "taken as missing for the trial"), nil
	},
}
