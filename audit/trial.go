package audit

import (
	"errors"

	"footing/audit/calibrate"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/remedy"
)

// trial is one remedy carried out on these rows, from the original start, with
// the two questions answered anew.
type trial struct {
	remedy     *remedy.Remedy
	tried      bool
	why        string // why not tried
	answers    model.Answers
	slopes     map[string]Judgement // by group
	difference Judgement            // "" when not asked before and after
}

// changes reports whether any answer changes.
func (t trial) changes() bool {
	if t.difference == Changes {
		return true
	}
	for _, j := range t.slopes {
		if j == Changes {
			return true
		}
	}
	return false
}

// tryRemedies runs the remedies of every breach, those of the row rules also
// without one, for the fact that one row decides, and those that settle an
// answer. Then the answers of the rules become states.
func (e *examination) tryRemedies() {
	for _, x := range e.findings {
		for _, r := range x.rule.Remedies {
			if !wanted(x, r) {
				continue
			}
			for _, target := range append([]remedy.Target{x.outcome.Target}, x.outcome.Variants...) {
				x.trials = append(x.trials, e.try(r, target))
			}
		}
		if x.outcome.IfChanges != rules.NoAnswer && anyChanges(x.trials) {
			x.outcome.Answer, x.outcome.Message = x.outcome.IfChanges, x.outcome.IfChangesMessage
		}
		x.state, x.byPower = e.stateOf(x)
	}
}

// wanted decides which remedies of a finding are tried.
func wanted(x *examined, r *remedy.Remedy) bool {
	switch {
	case x.outcome.Answer == rules.Breach, x.outcome.IfChanges != rules.NoAnswer:
		return true
	case x.outcome.Answer == rules.Sound && x.rule.AlwaysTry:
		return true
	}
	return x.outcome.Answer == rules.Sound && r == remedy.SetAside && len(x.outcome.Target.Rows) > 0
}

func anyChanges(trials []trial) bool {
	for _, t := range trials {
		if t.tried && t.changes() {
			return true
		}
	}
	return false
}

// thinPower is the power below which a pass is thin, and thinDF the residual
// degrees of freedom below which it is whatever the power.
const (
	thinPower = 0.5
	thinDF    = 5
)

func (e *examination) stateOf(x *examined) (state State, byPower bool) {
	switch x.outcome.Answer {
	case rules.Sound:
		if j := x.joint; j != nil && j.Asked && !j.Detectable() && (j.Power < thinPower || e.pass.Fit.DF < thinDF) {
			return Thin, true
		}
		return Pass, false
	case rules.CannotTell:
		return Thin, false
	case rules.NotAsked:
		return Skip, false
	}
	if len(x.outcome.Denies) > 0 || anyChanges(x.trials) {
		return Stop, false
	}
	return Warn, false
}

// try carries out a remedy, or gives what it gave before where the target does
// not matter to it.
func (e *examination) try(r *remedy.Remedy, target remedy.Target) trial {
	if !r.Whole {
		return e.carryOut(r, target)
	}
	t, done := e.whole[r]
	if !done {
		t = e.carryOut(r, target)
		if e.whole == nil {
			e.whole = map[*remedy.Remedy]trial{}
		}
		e.whole[r] = t
	}
	return t
}

func (e *examination) carryOut(r *remedy.Remedy, target remedy.Target) trial {
	t := trial{remedy: r}
	if !r.CanBeTried() {
		t.why = "only the owner of the table can do this"
		return t
	}
	if r.Slow && e.pass.Design != nil && e.pass.Design.N() > rules.LargestSimulated {
		t.why = "it takes thousands of refits; in a table this large robust-errors answers"
		return t
	}
	p := e.pass
	if p.Design == nil {
		t.why = "no model is given"
		return t
	}
	answers, err := r.Try(e.start(target))
	var not *remedy.NotApplicable
	if errors.As(err, &not) {
		t.why = not.Reason
		return t
	}
	t.tried = true
	t.answers = answers
	t.slopes = map[string]Judgement{}
	for _, before := range p.Answers.Slopes {
		after, found := slopeOf(answers, before.Group)
		if !found {
			if _, merged := target.Labels[before.Group]; merged {
				continue // the group has gone into another, as the remedy intends
			}
			t.slopes[before.Group] = Changes
			continue
		}
		t.slopes[before.Group] = judgeSlope(before, after, answers.Scale == p.Answers.Scale)
	}
	if p.Answers.Difference != nil || answers.Difference != nil {
		t.difference = judgeDifference(p.Answers.Difference, answers.Difference, 1-p.Settings.Confidence, answers.Scale == p.Answers.Scale)
	}
	return t
}

func slopeOf(a model.Answers, group string) (model.Estimate, bool) {
	for _, s := range a.Slopes {
		if s.Group == group {
			return s, true
		}
	}
	return model.Estimate{}, false
}

// explain finds consequences: a finding of the model that is not there once the
// remedy of a finding of the table is carried out, or that names the same rows,
// stands under that finding. So does a later finding of the table that names
// no other cells: a code for a missing value lies far off too.
// The first that explains it, in the order of the list, is its root.
func (e *examination) explain() error {
	for k, root := range e.findings {
		if root.rule.Family != rules.OfTable || (root.state != Warn && root.state != Stop) || root.root != "" {
			continue
		}
		for _, x := range e.findings[k+1:] {
			if x.rule.Family == rules.OfTable && x.root == "" && x.outcome.Answer == rules.Breach &&
				len(x.outcome.Denies) == 0 && cellsWithin(x.outcome.Where, root.outcome.Where) {
				x.root = root.rule.Name
			}
		}
		mended, err := e.mended(root)
		if err != nil {
			return err
		}
		for _, x := range e.findings {
			after, asked := mended[x.rule.Name]
			if !asked || x.root != "" || !isOpen(x.outcome.Answer) {
				continue
			}
			if !isOpen(after.outcome.Answer) || within(x.outcome.Target.Rows, root.outcome.Target.Rows) {
				x.root = root.rule.Name
			}
		}
	}
	return nil
}

// cellsWithin reports whether a finding names cells, and only ones that its root
// names too.
func cellsWithin(cells, of []rules.Place) bool {
	if len(cells) > len(of) {
		return false
	}
	named := make(map[rules.Place]bool, len(of))
	for _, w := range of {
		named[w] = true
	}
	for _, w := range cells {
		if w.Row < 0 || w.Column == nil || !named[w] {
			return false
		}
	}
	return len(cells) > 0
}

// within reports whether a finding names rows, and only ones that its root
// names too.
func within(rows, of []int) bool {
	if len(rows) > len(of) {
		return false
	}
	named := make(map[int]bool, len(of))
	for _, i := range of {
		named[i] = true
	}
	for _, i := range rows {
		if !named[i] {
			return false
		}
	}
	return len(rows) > 0
}

// isOpen tells answers that ask for a decision.
func isOpen(a rules.Answer) bool { return a == rules.Breach || a == rules.CannotTell }

// mended asks the rules of the model again with the remedy of a finding carried
// out; nil when none of its remedies can be.
func (e *examination) mended(root *examined) (map[string]*examined, error) {
	for _, t := range root.trials {
		if !t.tried || t.remedy.Edit == nil {
			continue
		}
		d, err := t.remedy.Edit(e.start(root.outcome.Target))
		if err != nil {
			return nil, err
		}
		p := e.passOf(d)
		asked, err := ask(p, rules.OfModel, e.request.Off, calibrate.Options{Name: "cause/" + t.remedy.Name + "/"})
		if err != nil {
			return nil, err
		}
		byName := map[string]*examined{}
		for _, x := range asked {
			byName[x.rule.Name] = x
		}
		return byName, nil
	}
	return nil, nil
}

// passOf fits another design of the same table, with fewer simulated tables:
// enough to tell which alarms remain.
func (e *examination) passOf(d *model.Design) *rules.Pass {
	p := &rules.Pass{Table: e.pass.Table, Columns: e.pass.Columns, Design: d, Settings: e.pass.Settings}
	p.Settings.Replicates = causeReplicates
	fit(p)
	return p
}

// causeReplicates is how many tables tell whether an alarm remains after a cure.
const causeReplicates = 499

func (e *examination) start(target remedy.Target) remedy.Start {
	return remedy.Start{Design: e.pass.Design, Fit: e.pass.Fit, Target: target, Confidence: e.pass.Settings.Confidence, Seed: e.pass.Settings.Seed}
}
