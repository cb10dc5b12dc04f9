package remedy

import "footing/rules/model"

// MendPoint answers with the decimal sign of the named cells moved to where it
// brings them among their like.
var MendPoint = &Remedy{
	Name:  "mend-point",
	Do:    "look the named cells up, and move the decimal sign where it slipped",
	Short: "with the point moved",
	Edit: func(s Start) (*model.Design, error) {
		return changed(s, "no slipped point would bring the value among its like")
	},
}
