// Package audit takes one table from start to end: it reads and screens it,
// fits the line, runs the rules, tries the remedies and says what may be
// quoted. Its Result is data; package report writes it down.
package audit

import (
	"fmt"
	"slices"

	"footing/audit/calibrate"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/remedy"
)

// Request is what to audit and how.
type Request struct {
	Roles    model.Roles
	Settings rules.Settings
	Off      []string // names of rules not to be run
	PerRow   bool     // add row diagnostics to the result
	Draw     bool     // add what figures show to the result
	Command  string   // how this audit was called, for the suggestion: "footing audit kelp.csv"
}

// Fault is an error of footing itself, not of the data.
type Fault struct {
	Rule string
	Err  error
}

func (f *Fault) Error() string { return fmt.Sprintf("rule %s broke: %v", f.Rule, f.Err) }

// Unwrap gives the rule's own error.
func (f *Fault) Unwrap() error { return f.Err }

// examined is a rule with what it said of the table.
type examined struct {
	rule    *rules.Rule
	outcome rules.Outcome
	joint   *rules.Joint
	trials  []trial
	state   State
	root    string // name of the rule that explains this one, or ""
	cure    string // the remedy that made this one vanish, or ""
	byPower bool   // thin because these rows could hardly have shown a breach
}

// examination is one table with what every rule said of it, before any remedy
// is tried.
type examination struct {
	request  Request
	pass     *rules.Pass
	findings []*examined
	whole    map[*remedy.Remedy]trial // of remedies that need no target, each tried once
}

// Table audits a table that has been read. An error is a *readers.Error, when
// the roles do not fit the table, or a *Fault.
func Table(t *readers.Table, request Request) (*Result, error) {
	e, err := examine(t, request)
	if err != nil {
		return nil, err
	}
	e.tryRemedies()
	if err := e.explain(); err != nil {
		return nil, err
	}
	e.findCause()
	return e.result(), nil
}

// examine fits the model of the roles and runs every rule.
func examine(t *readers.Table, request Request) (*examination, error) {
	p := &rules.Pass{Table: t, Settings: request.Settings, Profiles: rules.Profiles{}}
	if request.Roles.Named() {
		columns, err := model.Resolve(t, request.Roles)
		if err != nil {
			return nil, err
		}
		p.Columns = columns
		p.Design = model.NewDesign(t, columns, request.Roles.CommonSlope)
		fit(p)
	}
	e := &examination{request: request, pass: p}
	for _, family := range []rules.Family{rules.OfTable, rules.OfModel} {
		if family == rules.OfModel && p.Design == nil {
			continue // without roles only the table is screened
		}
		asked, err := ask(p, family, request.Off, calibrate.Options{Power: true})
		if err != nil {
			return nil, err
		}
		e.findings = append(e.findings, asked...)
	}
	return e, nil
}

// ask runs the rules of a family, in the order of the list, but those switched
// off.
func ask(p *rules.Pass, family rules.Family, off []string, o calibrate.Options) ([]*examined, error) {
	var chosen, answerable []*rules.Rule
	for _, r := range rules.All {
		if r.Family != family || slices.Contains(off, r.Name) {
			continue
		}
		chosen = append(chosen, r)
		if lacking(r.Needs, p) == "" {
			answerable = append(answerable, r)
		}
	}
	joint := calibrate.Judge(answerable, p, o)
	var asked []*examined
	for _, r := range chosen {
		x, err := run(r, p, joint[r.Name])
		if err != nil {
			return nil, err
		}
		asked = append(asked, x)
	}
	return asked, nil
}

func fit(p *rules.Pass) {
	if p.Design.N() == 0 {
		return
	}
	f, err := model.NewFit(p.Design)
	if err != nil {
		p.NoFit = err.(*model.NoFit)
		return
	}
	p.Fit = f
	p.Answers = f.Answers(p.Settings.Confidence)
}

// lacking says what a rule needs that the pass does not have; "" for nothing.
func lacking(n rules.Needs, p *rules.Pass) string {
	switch {
	case n >= rules.NeedsDesign && p.Design == nil:
		return "no roles are given"
	case n >= rules.NeedsFit && p.Fit == nil:
		return "there is no fit"
	case n >= rules.NeedsScatter && p.Fit.DF <= 0:
		return "no row is left to judge the scatter from"
	case n >= rules.NeedsScatter && p.Fit.Perfect:
		return "the lines pass through every row: there is no scatter to judge from"
	}
	return ""
}

func run(r *rules.Rule, p *rules.Pass, joint *rules.Joint) (*examined, error) {
	x := &examined{rule: r, joint: joint}
	if reason := lacking(r.Needs, p); reason != "" {
		x.outcome = rules.Outcome{Answer: rules.NotAsked, Message: reason}
		return x, nil
	}
	if joint != nil && !joint.Asked {
		x.outcome = rules.Outcome{Answer: rules.NotAsked, Message: joint.Reason}
		return x, nil
	}
	own := *p
	own.Joint = joint
	o, err := r.Run(&own)
	if err == nil && o.Answer == rules.NoAnswer {
		err = fmt.Errorf("it gave no answer")
	}
	if err != nil {
		return nil, &Fault{Rule: r.Name, Err: err}
	}
	x.outcome = o
	return x, nil
}

// named finds what a rule said; nil when it was not run.
func (e *examination) named(name string) *examined {
	for _, x := range e.findings {
		if x.rule.Name == name {
			return x
		}
	}
	return nil
}
