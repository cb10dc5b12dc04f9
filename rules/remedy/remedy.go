// Package remedy holds what can be done about a breach: one file per remedy,
// each with the words that tell a user how to carry it out and, where it can
// be tried on the rows at hand, the trial itself. A trial starts from the
// original fit and answers the two questions anew; it never changes the fit.
package remedy

import (
	"math"

	"footing/rules/model"
)

// Remedy is one thing to do about a breach.
type Remedy struct {
	Name   string // words joined by hyphens
	Do     string // how to carry it out: a verb phrase in plain language
	Source string // of the method, "" where there is none to name
	Short  string // in a sentence: "with HC3 standard errors"

	// Edit gives the design to be fitted in place of the original one, which it
	// does not change. Answer answers anew from the original rows. A remedy has
	// one of the two, or neither when only the owner of the table can act. A
	// *NotApplicable error says why it does not apply here.
	Edit   func(Start) (*model.Design, error)
	Answer func(Start) (model.Answers, error)

	// Whole marks a remedy that looks at all rows and at no target: one trial
	// answers for every rule that asks for it.
	Whole bool

	// Slow marks a remedy of thousands of refits, left out of large tables.
	Slow bool
}

// CanBeTried reports whether the remedy can be carried out on rows at hand.
func (r *Remedy) CanBeTried() bool { return r.Edit != nil || r.Answer != nil }

// Try answers the two questions under the remedy. A *NotApplicable error says
// why it cannot be tried here.
func (r *Remedy) Try(s Start) (model.Answers, error) {
	if r.Answer != nil {
		return r.Answer(s)
	}
	d, err := r.Edit(s)
	if err != nil {
		return model.Answers{}, err
	}
	fit, err := model.NewFit(d)
	if err != nil {
		return model.Answers{}, &NotApplicable{Reason: "under it " + err.Error()}
	}
	return fit.Answers(s.Confidence), nil
}

// Start is what a trial begins from.
type Start struct {
	Design     *model.Design
	Fit        *model.Fit // nil when the original rows have no fit
	Target     Target
	Confidence float64
	Seed       uint64
}

// Target is what a finding asks a remedy to act on.
type Target struct {
	Rows   []int             // used rows, as indices of the design
	Labels map[string]string // group labels to be replaced
	Values []model.Change    // numbers to be put in place of those of the table

	Reliability map[string]float64 // of the predictor, by group
	LeaveOut    int                // position of a further predictor or covariate
	Subjects    []int              // of each used row: the levels of replicated predictor values
}

// NotApplicable says why a remedy cannot be tried on these rows.
type NotApplicable struct{ Reason string }

func (e *NotApplicable) Error() string { return e.Reason }

func rootSum(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x
	}
	return math.Sqrt(sum)
}
