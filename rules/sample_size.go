package rules

import (
	"fmt"
	"math"

	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// SampleSize asks whether the rows can answer the questions at all.
var SampleSize = &Rule{
	Name:   "sample-size",
	Family: OfModel,
	Asks:   "Are there enough rows to answer at all?",
	Why:    "A slope needs two predictor values, and an interval needs rows beyond those that fix the line.",
	Method: "counts rows, distinct predictor values and residual degrees of freedom; detectable difference by the noncentral t distribution (80 % power)",
	Limit: "no residual degrees of freedom, a slope that cannot be estimated, or no scatter about the lines; " +
		"fewer than five degrees of freedom are thin. There is no rule of rows per parameter: exact t and F need none",
	Needs:    NeedsDesign,
	Remedies: []*remedy.Remedy{remedy.MoreRows},
	Run:      sampleSize,
}

func sampleSize(p *Pass) (Outcome, error) {
	d := p.Design
	if d.N() == 0 {
		o := breach("no row has a value in every used column: there is nothing to fit")
		o.Denies = p.everyQuestion()
		return o, nil
	}
	if p.NoFit != nil {
		if len(p.NoFit.Tangles) > 0 {
			return notAsked("there is no fit (see collinearity)"), nil
		}
		o := breach(fmt.Sprintf("%s cannot determine the %d parameters of this model", wording.Count(p.NoFit.Rows, "row"), p.NoFit.Parameters))
		o.Denies = p.everyQuestion()
		return o, nil
	}
	o := p.sizeOfFit()
	o.Evidence = map[string]any{"rows": d.N(), "residual_df": p.Fit.DF}
	if c := p.Answers.Difference; c != nil && !math.IsNaN(c.Detectable) {
		o.Evidence["detectable_difference"] = c.Detectable
	}
	return o, nil
}

func (p *Pass) sizeOfFit() Outcome {
	f := p.Fit
	if o, lacking := p.lackingSlopes(); lacking {
		if f.DF <= 0 {
			o.Denies = p.everyQuestion()
		}
		return o
	}
	switch {
	case f.DF > 0 && f.Perfect:
		o := breach("the lines pass through every row: there is no scatter to judge from; is the response computed from the predictor?")
		o.Denies = p.everyQuestion()
		o.Advice = "check whether the response was measured or computed"
		return o
	case f.DF <= 0:
		o := breach(fmt.Sprintf("%s and %d parameters leave nothing to estimate the scatter from: no interval and no test are possible", wording.Count(f.N(), "row"), f.P()))
		o.Denies = p.everyQuestion()
		return o
	}
	if o, lacking := p.lackingIntervals(); lacking {
		return o
	}
	if o, short := p.shortOfDifference(); short {
		return o
	}
	if f.DF < 5 {
		return cannotTell(fmt.Sprintf("only %s beyond the %d that fix the lines: little that is wrong could show", wording.Count(f.DF, "row"), f.P()))
	}
	return sound(fmt.Sprintf("%s used, %d beyond those that fix the lines", wording.Count(f.N(), "row"), f.DF))
}

// shortOfDifference tells when the difference that matters would be found less
// than half the time.
func (p *Pass) shortOfDifference() (Outcome, bool) {
	d, c := p.Settings.SmallestDifference, p.Answers.Difference
	if math.IsNaN(d) || c == nil {
		return Outcome{}, false
	}
	largest := 0.0
	for _, pair := range c.Pairs {
		largest = max(largest, pair.SE)
	}
	power := numeric.NoncentralTTwoSided(p.Fit.CriticalPair(p.Settings.Confidence), float64(p.Fit.DF), d/largest)
	if power >= 0.5 {
		return Outcome{}, false
	}
	o := cannotTell(fmt.Sprintf("a difference of %s, the smallest that matters, would be found in only %s of tables like this one", wording.Number(d), wording.Percent(power)))
	o.Touches = []Question{{Difference: true}}
	return o, true
}

// lackingSlopes tells of groups in which no slope can be estimated.
func (p *Pass) lackingSlopes() (Outcome, bool) {
	if p.Design.X() == nil {
		return Outcome{}, false
	}
	return p.lacking(func(g int, s model.Estimate) string {
		if s.Exists {
			return ""
		}
		return p.whyNoSlope(g, s.Group, s.Rows)
	})
}

// lackingIntervals tells of groups with a slope that has no interval, or one
// without width.
func (p *Pass) lackingIntervals() (Outcome, bool) {
	return p.lacking(func(_ int, s model.Estimate) string {
		switch {
		case math.IsNaN(s.SE):
			return fmt.Sprintf("%s has %s, which fix its line and leave nothing for an interval", inGroup(s.Group), wording.Count(s.Rows, "row"))
		case s.SE == 0:
			return fmt.Sprintf("%s has no scatter at all: all of its rows lie on one line", inGroup(s.Group))
		}
		return ""
	})
}

// lacking collects what is said of the groups, denies their slopes, and the
// difference when no two groups are left to compare.
func (p *Pass) lacking(why func(g int, s model.Estimate) string) (Outcome, bool) {
	d := p.Design
	var said []string
	o := breach("")
	for g, s := range p.Answers.Slopes {
		reason := why(g, s)
		if reason == "" {
			continue
		}
		said = append(said, reason)
		q := Question{Group: s.Group}
		o.Denies = append(o.Denies, q)
		o.Limits = append(o.Limits, Limit{Of: &q, Sentence: wording.Stop(reason)})
		if d.HasGroup() {
			for _, i := range d.Members(g) {
				o.Where = append(o.Where, Place{Row: d.Rows[i], Column: p.Columns.Group})
			}
		}
	}
	if p.Answers.Difference == nil && len(d.Groups) > 1 && !d.CommonSlope {
		o.Denies = append(o.Denies, Question{Difference: true})
	}
	o.Message = wording.List(said)
	return o, len(said) > 0
}

func (p *Pass) whyNoSlope(g int, group string, rows int) string {
	x := p.Columns.Predictors[0].Title()
	own := p.Design.X()
	if p.Design.HasGroup() && !p.Design.CommonSlope {
		own = p.Design.OfGroup(own, g)
	}
	if rows == 1 {
		return fmt.Sprintf("%s has a single row: no slope can be had from it", inGroup(group))
	}
	return fmt.Sprintf("in %s all %d rows have the same %s, %s: no slope can be had from them", inGroup(group), rows, x, wording.Number(numeric.Mean(own)))
}

// inGroup names a group in a sentence.
func inGroup(label string) string {
	if label == "" {
		return "the table"
	}
	return label
}
