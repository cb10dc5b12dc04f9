package remedy

import "footing/rules/model"

// SwapBack answers with the named pairs of cells exchanged.
var SwapBack = &Remedy{
	Name:  "swap-back",
	Do:    "look the named rows up, and exchange the two cells where they were entered the wrong way round",
	Short: "with the cells swapped back",
	Edit:  func(s Start) (*model.Design, error) { return changed(s, "no swapped cell is in the fit") },
}
