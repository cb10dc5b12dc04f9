package remedy

import "footing/rules/model"

// SerialErrors allows each row to resemble the one before it.
var SerialErrors = &Remedy{
	Name:   "serial-errors",
	Do:     "quote the answers for errors that follow their predecessors, given here",
	Short:  "with errors that follow their predecessors",
	Source: "Prais and Winsten 1954, Cowles Commission paper 383",
	Edit: func(s Start) (*model.Design, error) {
		if s.Design.Order == nil {
			return nil, &NotApplicable{Reason: "no order is given"}
		}
		return withSerialErrors(s.Fit), nil
	},
}

// OrderTerm adds the rank in the order as a covariate, and serial errors on
// top.
var OrderTerm = &Remedy{
	Name:  "order-term",
	Do:    "give the order as a covariate too and find out what drifted; quote the answers given here",
	Short: "with the order as a covariate",
	Edit: func(s Start) (*model.Design, error) {
		if s.Design.Order == nil {
			return nil, &NotApplicable{Reason: "no order is given"}
		}
		rank := s.Design.OrderRank()
		if !s.Fit.HasRoomFor(rank, leastLeft) {
			return nil, &NotApplicable{Reason: "the order is the predictor itself: a drift and a slope cannot be told apart here"}
		}
		fit, err := model.NewFit(s.Design.With("order", rank))
		if err != nil || !fit.HasScatter() {
			return nil, &NotApplicable{Reason: "too few rows for another column"}
		}
		return withSerialErrors(fit), nil
	},
}

// leastLeft is the share of the rank's length that must remain off the design.
const leastLeft = 0.3

// withSerialErrors takes the correlation of neighbours from the residuals,
// about its mean in sound tables.
func withSerialErrors(f *model.Fit) *model.Design {
	r1, mean := f.LagOne()
	rows, _ := f.Design.Sequence()
	return f.Design.WithSerialErrors(max(-0.9, min(0.9, r1-mean)), rows)
}
