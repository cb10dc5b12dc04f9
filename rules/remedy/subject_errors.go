package remedy

import (
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
)

// SubjectErrors keeps the slopes and takes standard errors that allow the rows
// of one subject to share an error.
var SubjectErrors = &Remedy{
	Name:   "subject-errors",
	Do:     "quote the intervals given here, which count subjects and not rows",
	Short:  "counting subjects and not rows",
	Source: "CR2; Bell and McCaffrey 2002, Survey Methodology 28:169",
	Answer: func(s Start) (model.Answers, error) {
		if s.Design.Subject == nil {
			return model.Answers{}, &NotApplicable{Reason: "no subject is given"}
		}
		return bySubject(s, s.Design.Subject)
	},
}

// LevelErrors takes the levels of replicated predictor values for subjects: the
// readings of one level may share an error where no subject says so.
var LevelErrors = &Remedy{
	Name:   "subject-errors",
	Do:     "if the readings of one level share an error, as those of one pot or one batch do, name the level with --subject and quote the intervals given here, which count levels and not rows",
	Short:  "counting levels and not rows",
	Source: SubjectErrors.Source,
	Answer: func(s Start) (model.Answers, error) {
		if s.Target.Subjects == nil {
			return model.Answers{}, &NotApplicable{Reason: "the readings of one level were not found to share an error"}
		}
		return bySubject(s, s.Target.Subjects)
	},
}

// bySubject requotes the answers with rows of one subject sharing their errors.
func bySubject(s Start, named []int) (model.Answers, error) {
	subjects, count := alone(named)
	a := s.Fit.Answers(s.Confidence)
	terms := s.Fit.AnswerTerms()
	for g := range a.Slopes {
		e := &a.Slopes[g]
		if !e.Exists {
			continue
		}
		if len(a.Slopes) > 1 && distinctIn(subjects, s.Design.Members(g)) < 2 {
			return a, &NotApplicable{Reason: "a group has fewer than two subjects"}
		}
		v, df := numeric.CR2(s.Fit.Term(terms[g]).Catcher, s.Fit.Residual, s.Fit.Basis.Q(), subjects, count)
		if !(v > 0) || !(df > 0) {
			return a, &NotApplicable{Reason: "the subjects leave nothing to judge from"}
		}
		e.Requote(math.Sqrt(v), df, s.Confidence)
	}
	if a.Difference != nil {
		comparePairs(s, a.Difference, subjects, count)
	}
	return a, nil
}

// comparePairs compares the slopes pair by pair; with more than two the test of
// equal slopes is the smallest of Holm's p-values.
func comparePairs(s Start, c *model.Comparison, subjects []int, count int) {
	var ps []float64
	for k := range c.Pairs {
		pair := &c.Pairs[k]
		contrast := s.Fit.Difference(s.Fit.TermOf(pair.A), s.Fit.TermOf(pair.B))
		v, df := numeric.CR2(contrast.Catcher, s.Fit.Residual, s.Fit.Basis.Q(), subjects, count)
		pair.Requote(math.Sqrt(v), 2, df, s.Confidence)
		ps = append(ps, pair.P)
		if len(c.Pairs) == 1 {
			c.F, c.DF1, c.DF2 = pair.T*pair.T, 1, df
		}
	}
	if len(c.Pairs) > 1 {
		c.F = math.NaN()
	}
	c.P = math.Inf(1)
	for _, p := range numeric.Holm(ps) {
		c.P = min(c.P, p)
	}
}

// alone gives rows without a subject one of their own, and counts the subjects.
func alone(subjects []int) (all []int, count int) {
	next := 0
	for _, s := range subjects {
		next = max(next, s+1)
	}
	all = make([]int, len(subjects))
	for i, s := range subjects {
		if s < 0 {
			s = next
			next++
		}
		all[i] = s
	}
	return all, next
}

func distinctIn(codes, rows []int) int {
	seen := map[int]bool{}
	for _, i := range rows {
		seen[codes[i]] = true
	}
	return len(seen)
}
