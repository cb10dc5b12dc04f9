package rules

import (
	"fmt"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// RepeatedSubjects asks whether rows of one subject share an error.
var RepeatedSubjects = &Rule{
	Name:     "repeated-subjects",
	Family:   OfModel,
	Asks:     "Do the rows of one subject share an error?",
	Why:      "Rows of one subject are not so many independent rows; where the predictor differs between subjects the intervals are then far too narrow.",
	Method:   "one-way analysis of variance of the residuals by subject: F, and the intraclass correlation",
	Limit:    jointLimit,
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.NameSubjects},
	Tests:    repeatedSubjectsTests,
	Run:      repeatedSubjects,
}

// bySubject gives the residuals of the rows that name a subject.
func (p *Pass) bySubject() (e []float64, subject []int) {
	for i, s := range p.Design.Subject {
		if s >= 0 {
			e = append(e, p.Fit.Residual[i])
			subject = append(subject, s)
		}
	}
	return e, subject
}

func repeatedSubjectsTests(p *Pass) ([]Test, string) {
	if p.Design.Subject == nil {
		return nil, "no subject is given; name its column with --subject if one animal, plot or person gave several rows"
	}
	e, subject := p.bySubject()
	k := len(p.Design.Subjects)
	if k < 2 || k == len(e) {
		return nil, "there are not both several subjects and several rows of one"
	}
	f, d1, d2, pValue, _ := numeric.IntraclassANOVA(e, subject, k)
	return []Test{{Name: "F between subjects", Value: f, DF: []float64{d1, d2}, P: pValue}}, ""
}

func repeatedSubjects(p *Pass) (Outcome, error) {
	e, subject := p.bySubject()
	_, _, _, _, icc := numeric.IntraclassANOVA(e, subject, len(p.Design.Subjects))
	name := p.Columns.Subject.Title()
	o := judged(p.Joint,
		fmt.Sprintf("rows of one %s share an error (intraclass correlation %s, %s): the intervals count them as independent", name, wording.Figure(icc, 2), wording.P(p.Joint.P)),
		"rows of one "+name+" were not found to share an error")
	o.Statistic = p.Joint.Tests[0].measure()
	o.Evidence = map[string]any{"icc": icc, "subjects": len(p.Design.Subjects)}
	return o, nil
}
