package remedy

import (
	"footing/rules/model"
	"footing/rules/numeric"
)

// Curve lets each group bend: its slope is then the mean of the local slopes
// over its rows.
var Curve = &Remedy{
	Name:  "curve",
	Do:    "add the square of the predictor (about each group's mean) to the model; the slope is then the mean of the local slopes over the rows",
	Short: "with a curve in each group",
	Edit: func(s Start) (*model.Design, error) {
		if s.Design.X() == nil {
			return nil, &NotApplicable{Reason: "there is no predictor"}
		}
		d := s.Design.With("square", squares(s.Design)...)
		if _, err := model.NewFit(d); err != nil {
			return nil, &NotApplicable{Reason: "some group has too few predictor values for a curve"}
		}
		return d, nil
	},
}

// squares has a column for each group in which the predictor takes three
// values: its squared distance from the group's mean, 0 elsewhere.
func squares(d *model.Design) [][]float64 {
	x := d.X()
	var all [][]float64
	for g := range d.Groups {
		own := d.OfGroup(x, g)
		if numeric.Distinct(own) < 3 {
			continue
		}
		mean := numeric.Mean(own)
		v := make([]float64, d.N())
		for i, code := range d.Group {
			if code == g {
				v[i] = (x[i] - mean) * (x[i] - mean)
			}
		}
		all = append(all, v)
	}
	return all
}

// CommonCurve adds one bend over all rows: two slopes at two ends of one curve
// are then no longer two slopes.
var CommonCurve = &Remedy{
	Name:  "common-curve",
	Do:    "compare the groups only where their predictor values overlap, or measure each group where the other was measured",
	Short: "with one curve through all groups",
	Edit: func(s Start) (*model.Design, error) {
		x := s.Design.X()
		if x == nil {
			return nil, &NotApplicable{Reason: "there is no predictor"}
		}
		mean := numeric.Mean(x)
		v := make([]float64, len(x))
		for i := range x {
			v[i] = (x[i] - mean) * (x[i] - mean)
		}
		return s.Design.With("square", v), nil
	},
}
