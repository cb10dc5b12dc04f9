package remedy

import "footing/rules/model"

// MergeLabels answers with label variants read as the label they resemble.
var MergeLabels = &Remedy{
	Name:  "merge-labels",
	Do:    "write the label in one way in every cell, then run again",
	Short: "with the labels merged",
	Edit: func(s Start) (*model.Design, error) {
		if len(s.Target.Labels) == 0 {
			return nil, &NotApplicable{Reason: "the variants are not group labels"}
		}
		return s.Design.Relabelled(s.Target.Labels), nil
	},
}
