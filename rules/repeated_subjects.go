package rules

import (
	"fmt"
	"math"
	"math/rand/v2"

	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// RepeatedSubjects asks whether rows of one subject share an error.
var RepeatedSubjects = &Rule{
	Name:      "repeated-subjects",
	Family:    OfModel,
	Asks:      "Do the rows of one subject share an error?",
	Why:       "Rows of one subject are not so many independent rows; where the predictor differs between subjects the intervals are then far too narrow.",
	Method:    "one-way analysis of variance of the residuals by subject: F, and the intraclass correlation",
	Limit:     jointLimit,
	Needs:     NeedsScatter,
	Remedies:  []*remedy.Remedy{remedy.SubjectErrors},
	AlwaysTry: true,
	Chance:    repeatedSubjectsChance,
	Run:       repeatedSubjects,
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

func repeatedSubjectsChance(p *Pass) (*Chance, string) {
	if p.Design.Subject == nil {
		return nil, "no subject is given; name its column with --subject if one animal, plot or person gave several rows"
	}
	e, subject := p.bySubject()
	k := len(p.Design.Subjects)
	if k < 2 || k == len(e) || p.Fit.DF < 2 {
		return nil, "there are not both several subjects and several rows of one"
	}
	f, d1, d2, pValue, icc := numeric.IntraclassANOVA(e, subject, k)
	size := make([]float64, k)
	for _, s := range subject {
		size[s]++
	}
	codes := p.Design.Subject
	// The between-subject sum of squares over the whole rises with F and needs
	// one pass.
	share := func(sum []float64, s *Sample) float64 {
		clear(sum)
		for i, c := range codes {
			if c >= 0 {
				sum[c] += s.E[i]
			}
		}
		between := 0.0
		for c, v := range sum {
			between += v * v / size[c]
		}
		return between / s.RSS
	}
	return &Chance{
		Members: []Member{{
			Test: Test{Name: "F between subjects", Value: f, DF: []float64{d1, d2}, P: pValue},
			New: func() func(*Sample) float64 {
				sum := make([]float64, k)
				return func(s *Sample) float64 { return share(sum, s) }
			},
			ClosedP: func(share float64) float64 { return numeric.FUpper(share/d1/((1-share)/d2), d1, d2) },
		}},
		Breach: func() Trouble { return p.sharedBreach(k) },
		Floor:  &Floor{Effect: icc, Least: leastICC, Words: fmt.Sprintf("an intraclass correlation of %s (floor %s)", wording.Figure(icc, 2), wording.Number(leastICC))},
	}, ""
}

const (
	leastICC  = 0.05 // intraclass correlation that matters
	sharedICC = 0.3  // of the consequential breach
)

func (p *Pass) sharedBreach(subjects int) Trouble {
	codes := p.Design.Subject
	return Trouble{
		Short: "an error that rows of one subject share",
		Words: fmt.Sprintf("rows of one subject correlated by %s", wording.Number(sharedICC)),
		New: func() func(*rand.Rand, []float64) {
			shared := make([]float64, subjects)
			return func(random *rand.Rand, z []float64) {
				for s := range shared {
					shared[s] = math.Sqrt(sharedICC) * random.NormFloat64()
				}
				for i, c := range codes {
					if c < 0 {
						z[i] = random.NormFloat64()
						continue
					}
					z[i] = shared[c] + math.Sqrt(1-sharedICC)*random.NormFloat64()
				}
			}
		},
	}
}

func repeatedSubjects(p *Pass) (Outcome, error) {
	e, subject := p.bySubject()
	_, _, _, _, icc := numeric.IntraclassANOVA(e, subject, len(p.Design.Subjects))
	name := p.Columns.Subject.Title()
	o := judged(p.Joint,
		fmt.Sprintf("rows of one %s share an error (intraclass correlation %s, %s): the intervals count them as independent", name, wording.Figure(icc, 2), wording.P(p.Joint.First().P)),
		"rows of one "+name+" were not found to share an error")
	o.Statistic = p.Joint.First().measure()
	o.Evidence = map[string]any{"icc": icc, "subjects": len(p.Design.Subjects)}
	return o, nil
}
