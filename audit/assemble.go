package audit

import (
	"fmt"
	"math"
	"slices"

	"footing/audit/calibrate"
	"footing/readers"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/wording"
)

// result turns an examination into data.
func (e *examination) result() *Result {
	r := &Result{Format: Format, Input: e.input(), Slopes: []Slope{}, Findings: e.orderedFindings(), Verdict: e.verdict()}
	if e.pass.Design == nil {
		s := Suggest(e.pass, e.request.Command)
		r.Suggested = &s
		return r
	}
	r.Model = e.model()
	for _, s := range e.pass.Answers.Slopes {
		st := e.standingOf(rules.Question{Group: s.Group})
		if len(e.pass.Columns.Predictors) == 0 {
			r.Means = append(r.Means, Mean{
				Group: s.Group, Rows: s.Rows, Standing: st.standing, Because: st.because,
				Mean: Number(s.Value), SE: Number(s.SE), DF: Number(s.DF), CI: [2]Number{Number(s.Low), Number(s.High)},
			})
			continue
		}
		r.Slopes = append(r.Slopes, Slope{
			Group: e.label(s.Group), Rows: s.Rows, Standing: st.standing, Because: st.because,
			Slope: Number(s.Value), Intercept: Number(s.Intercept), SE: Number(s.SE), DF: Number(s.DF),
			T: Number(s.T), P: Number(s.P), CI: [2]Number{Number(s.Low), Number(s.High)},
			RSquared: Number(s.RSquared), PooledSE: Number(s.PooledSE), HC3SE: Number(s.HC3), Stated: e.stated(s),
		})
	}
	r.Difference = e.difference()
	if r.Difference == nil {
		r.NotCompared = optional(e.notCompared())
	}
	r.Calibration = e.calibration()
	if e.request.PerRow {
		r.Rows = e.rows()
	}
	if e.request.Draw {
		r.Drawing = e.drawing()
	}
	return r
}

// label is nil for the one slope of all rows.
func (e *examination) label(group string) *string {
	if e.pass.Columns.Group == nil || e.request.Roles.CommonSlope && len(e.pass.Columns.Predictors) > 0 {
		return nil
	}
	return &group
}

func (e *examination) difference() *Difference {
	c := e.pass.Answers.Difference
	if c == nil {
		return nil
	}
	st := e.standingOf(rules.Question{Difference: true})
	d := &Difference{
		Standing: st.standing, Because: st.because,
		F: Number(c.F), DF: [2]Number{Number(c.DF1), Number(c.DF2)}, P: Number(c.P), Detectable: Number(c.Detectable), Agreement: optional(string(e.agreement())), Pairs: []Pair{},
	}
	for _, p := range c.Pairs {
		d.Pairs = append(d.Pairs, Pair{
			Between: [2]string{p.A, p.B}, Difference: Number(p.Value), SE: Number(p.SE), T: Number(p.T), P: Number(p.P),
			PHolm: Number(p.HolmP), PTukey: Number(p.TukeyP), CI: [2]Number{Number(p.Low), Number(p.High)},
		})
	}
	return d
}

// notCompared says why the second question has no answer.
func (e *examination) notCompared() string {
	d := e.pass.Design
	switch {
	case !d.HasGroup() || len(d.Groups) < 2:
		return "one group: not asked"
	case d.CommonSlope && d.X() != nil:
		return "one slope for all groups was asked for"
	case e.pass.Fit == nil:
		return "there is no fit"
	}
	return "fewer than two groups have a slope"
}

// calibration names the rules that are held together.
func (e *examination) calibration() *Calibration {
	nan := Number(math.NaN())
	c := &Calibration{
		Method: "simulated", Seed: e.pass.Settings.Seed, FalseAlarm: Number(e.pass.Settings.FalseAlarm), Rules: []string{},
		Missed: optional(e.missed()), CaughtLeast: nan, CaughtMost: nan,
	}
	if e.pass.Fit == nil || e.pass.Fit.N() > rules.LargestSimulated {
		c.Method = "formulas"
	} else {
		c.Replicates = calibrate.Replicates(e.pass.Fit.N(), e.pass.Settings.Replicates, e.pass.Settings.FalseAlarm)
	}
	for _, x := range e.findings {
		if x.joint == nil || !x.joint.Asked {
			continue
		}
		c.Rules = append(c.Rules, x.rule.Name)
		if any := Number(x.joint.AnyPower); any.Defined() {
			if !(c.CaughtLeast <= any) {
				c.CaughtLeast = any
			}
			if !(c.CaughtMost >= any) {
				c.CaughtMost = any
			}
		}
	}
	return c
}

func (e *examination) input() Input {
	t := e.pass.Table
	in := Input{File: t.File, SHA256: t.SHA256, Rows: t.Len(), HeaderRow: t.HeaderRow, Columns: []Column{}}
	in.Sheet = optional(t.Sheet)
	in.Reading = Reading{
		Encoding: optional(t.Reading.Encoding), Delimiter: optional(t.Reading.Delimiter), Decimal: optional(t.Reading.Decimal),
		Notes: append([]string{}, t.Reading.Notes...),
	}
	for _, col := range t.Columns {
		in.Columns = append(in.Columns, e.column(col))
	}
	return in
}

func optional(s string) *string {
	if s == "" {
		return nil
	}
	return &s
}

func (e *examination) column(col *readers.Column) Column {
	c := Column{
		Name: col.Title(), Unit: columnUnit(col), Kind: col.Kind().String(), Letter: col.Letter(),
		Role: optional(e.pass.Columns.RoleOf(col)), Min: Number(math.NaN()), Median: Number(math.NaN()), Max: Number(math.NaN()), Doubts: []string{},
	}
	c.Missing = col.Count(readers.Blank) + col.Count(readers.Code)
	c.Present = col.Len() - c.Missing
	if col.Kind() == readers.NumberColumn {
		if numbers := e.pass.Profile(col).Sorted; len(numbers) > 0 {
			c.Min, c.Median, c.Max = Number(numbers[0]), Number(numeric.Quantile(numbers, 0.5)), Number(numbers[len(numbers)-1])
		}
	}
	c.Distinct = e.pass.Profile(col).Distinct
	for _, x := range e.findings {
		if x.rule.Family == rules.OfTable && len(x.outcome.Where) > 0 && pointsInto(x.outcome.Where, col) {
			c.Doubts = append(c.Doubts, x.rule.Name)
		}
	}
	return c
}

func pointsInto(where []rules.Place, col *readers.Column) bool {
	for _, w := range where {
		if w.Column == col {
			return true
		}
	}
	return false
}

func (e *examination) model() *Model {
	p := e.pass
	c := p.Columns
	nan := Number(math.NaN())
	m := &Model{
		Response: c.Response.Title(), Predictors: []string{}, Covariates: []string{}, CommonSlope: e.request.Roles.CommonSlope,
		Confidence: Number(p.Settings.Confidence), RowsUsed: p.Design.N(), RowsSetAside: []RowSetAside{},
		ResidualSD: nan, RSquared: nan, AdjRSquared: nan, CovariateTerms: []CovariateTerm{},
	}
	for _, col := range c.Predictors {
		m.Predictors = append(m.Predictors, col.Title())
	}
	for _, col := range c.Covariates {
		m.Covariates = append(m.Covariates, col.Title())
	}
	for _, role := range []struct {
		col *readers.Column
		to  **string
	}{{c.Group, &m.Group}, {c.Subject, &m.Subject}, {c.Order, &m.Order}} {
		if role.col != nil {
			*role.to = optional(role.col.Title())
		}
	}
	for _, s := range p.Design.SetAside {
		row := RowSetAside{Row: p.Table.Row(s.Row), Reason: s.Reason}
		if s.Column != nil {
			cell := p.Table.Address(s.Column, s.Row)
			row.Cell = &cell
		}
		m.RowsSetAside = append(m.RowsSetAside, row)
	}
	if p.NoFit != nil {
		m.Parameters = p.NoFit.Parameters
	}
	if f := p.Fit; f != nil {
		m.Parameters, m.ResidualDF = f.P(), f.DF
		m.ResidualSD, m.RSquared, m.AdjRSquared = Number(f.SD), Number(f.RSquared()), Number(f.AdjustedRSquared())
		m.CovariateTerms = covariateTerms(f)
	}
	return m
}

// covariateTerms lists every coefficient that is neither a level nor a slope;
// under one common slope the offsets of the groups from the first come first.
func covariateTerms(f *model.Fit) []CovariateTerm {
	terms := []CovariateTerm{}
	d := f.Design
	if d.CommonSlope && d.HasGroup() {
		for g := 1; g < len(d.Groups); g++ {
			weights := make([]float64, f.P())
			weights[0], weights[g] = -1, 1
			terms = append(terms, term(f, d.Columns.Group.Title()+": "+d.Groups[g], f.Contrast(weights)))
		}
	}
	for k, t := range f.Terms {
		if t.Part == model.Others {
			terms = append(terms, term(f, t.Name, f.Term(k)))
		}
	}
	return terms
}

func term(f *model.Fit, name string, c model.Contrast) CovariateTerm {
	return CovariateTerm{Name: name, Estimate: Number(c.Estimate), SE: Number(f.SD * c.Length), HC3SE: Number(f.HC3(c))}
}

// orderedFindings puts the findings worst first, within a state in the order
// of the list, and each consequence under its root; the two are placed by the
// worse.
func (e *examination) orderedFindings() []Finding {
	all := []Finding{}
	for _, head := range e.orderedHeads() {
		all = append(all, e.finding(head))
		for _, x := range e.findings {
			if x.root == head.rule.Name {
				all = append(all, e.finding(x))
			}
		}
	}
	return all
}

// orderedHeads are the findings that follow from no other, worst first.
func (e *examination) orderedHeads() []*examined {
	var heads []*examined
	for _, x := range e.findings {
		if x.root == "" {
			heads = append(heads, x)
		}
	}
	slices.SortStableFunc(heads, func(a, b *examined) int { return severity(e.comesTo(a)) - severity(e.comesTo(b)) })
	return heads
}

// comesTo is the worst state of a finding and what follows from it.
func (e *examination) comesTo(head *examined) State {
	worst := head.state
	for _, x := range e.findings {
		if x.root == head.rule.Name && severity(x.state) < severity(worst) {
			worst = x.state
		}
	}
	return worst
}

// severity orders the states, the worst first.
func severity(s State) int {
	return slices.Index([]State{Stop, Warn, Thin, Pass, Skip}, s)
}

func (e *examination) finding(x *examined) Finding {
	o := x.outcome
	f := Finding{
		Rule: x.rule.Name, Family: string(x.rule.Family), State: x.state, Message: wording.Stop(o.Message + e.rowFact(x) + powerWords(x) + e.cureWords(x)),
		Value: Number(math.NaN()), P: Number(math.NaN()), PSimulated: Number(math.NaN()), PJoint: Number(math.NaN()), Power: Number(math.NaN()), DF: []Number{},
		ByPower: x.byPower, OnlyLimits: x.rule.OnlyLimits, Evidence: map[string]any{}, Where: []Place{}, Remedies: []Remedy{}, ConsequenceOf: optional(x.root), VanishesWith: optional(x.cure),
	}
	if m := o.Statistic; m != nil {
		f.Statistic, f.Value, f.P = &m.Name, Number(m.Value), Number(m.P)
		for _, df := range m.DF {
			f.DF = append(f.DF, Number(df))
		}
	}
	if j := x.joint; j != nil && j.Asked {
		f.PJoint, f.Power = Number(j.PJoint), Number(j.Power)
		if !j.Closed {
			f.PSimulated = Number(j.P)
		}
		if j.Trouble != nil {
			f.Breach = &j.Trouble.Words
		}
	}
	for name, v := range o.Evidence {
		f.Evidence[name] = safe(v)
	}
	for _, w := range o.Where {
		f.Where = append(f.Where, e.place(w))
	}
	if x.state == Skip || (x.state == Pass && !x.rule.AlwaysTry) {
		return f
	}
	f.Remedies = e.remedies(x)
	return f
}

// rowFact tells, without an alarm, that one row decides an answer.
func (e *examination) rowFact(x *examined) string {
	if x.state != Pass || len(x.trials) == 0 {
		return ""
	}
	for _, t := range x.trials {
		if t.tried && t.changes() {
			return fmt.Sprintf("; an answer changes without %s, as it does in many sound tables with a slope near the limit", rowWords(e.pass, x.outcome.Target.Rows))
		}
	}
	return ""
}

// safe turns floats into numbers that JSON can hold.
func safe(v any) any {
	switch v := v.(type) {
	case float64:
		return Number(v)
	case map[string]any:
		out := map[string]any{}
		for k, inner := range v {
			out[k] = safe(inner)
		}
		return out
	}
	return v
}

func (e *examination) place(w rules.Place) Place {
	t := e.pass.Table
	var p Place
	if w.Stray > 0 {
		p.Row = &w.Stray
		return p
	}
	if w.Column != nil {
		p.Column = optional(w.Column.Title())
	}
	if w.Row < 0 {
		return p
	}
	row := t.Row(w.Row)
	p.Row = &row
	if by := e.pass.Columns.Label; by != nil {
		if label, ok := by.Label(w.Row); ok {
			p.Label = &label
		}
	}
	if w.Column != nil {
		cell, value := t.Address(w.Column, w.Row), w.Column.Cell(w.Row).Text
		p.Cell, p.Value = &cell, &value
	}
	return p
}

func (e *examination) remedies(x *examined) []Remedy {
	all := []Remedy{}
	if len(x.trials) == 0 {
		for _, r := range x.rule.Remedies {
			x.trials = append(x.trials, trial{remedy: r, why: "nothing is breached"})
		}
	}
	for k, t := range x.trials {
		text := t.remedy.Do
		if k == 0 && x.outcome.Advice != "" {
			text = x.outcome.Advice
		}
		r := Remedy{Remedy: t.remedy.Name, Text: wording.Sentence(text), Source: optional(t.remedy.Source), Tried: t.tried, Why: optional(t.why), Slopes: []TrialSlope{}, Judged: map[string]string{}}
		if t.tried {
			r.Under = e.speaker().trialWords(x, t)
			e.fillTrial(&r, t)
		}
		all = append(all, r)
	}
	return all
}

func (e *examination) fillTrial(r *Remedy, t trial) {
	r.AnswerChanges = t.changes()
	for _, s := range t.answers.Slopes {
		r.Slopes = append(r.Slopes, TrialSlope{
			Group: e.label(s.Group), Rows: s.Rows, Slope: Number(s.Value), SE: Number(s.SE), DF: Number(s.DF), P: Number(s.P),
			CI: [2]Number{Number(s.Low), Number(s.High)},
		})
	}
	if d := t.answers.Difference; d != nil {
		r.Difference = &TrialDifference{F: Number(d.F), DF: [2]Number{Number(d.DF1), Number(d.DF2)}, P: Number(d.P)}
	}
	for group, j := range t.slopes {
		name := "slope"
		if group != "" {
			name = "slope " + group
		}
		r.Judged[name] = string(j)
	}
	if t.difference != "" {
		r.Judged["difference"] = string(t.difference)
	}
}

func (e *examination) rows() []Row {
	f := e.pass.Fit
	if f == nil {
		return nil
	}
	d := f.Diagnostics()
	at := map[int]int{}
	for k, g := range d.SlopeOf {
		at[g] = k
	}
	var rows []Row
	for i := range f.N() {
		r := Row{
			Row: e.pass.Table.Row(e.pass.Design.Rows[i]), Fitted: Number(f.Fitted[i]), Residual: Number(f.Residual[i]), Leverage: Number(f.Leverage[i]),
			Internal: Number(d.Internal[i]), External: Number(d.External[i]), Cook: Number(d.Cook[i]), DFBETASlope: Number(math.NaN()),
		}
		g := e.pass.Design.Group[i]
		if e.pass.Design.HasGroup() {
			r.Group = &e.pass.Design.Groups[g]
		}
		k, own := at[g]
		if !own {
			k, own = at[-1]
		}
		if own {
			r.DFBETASlope = Number(d.DFBETAS[k][i])
		}
		rows = append(rows, r)
	}
	return rows
}
