package rules

import (
	"fmt"
	"math"
	"strconv"

	"footing/rules/model"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Leverage asks whether a slope rests on a single row.
var Leverage = &Rule{
	Name:   "leverage",
	Family: OfModel,
	Asks:   "Does a slope rest on a single row?",
	Why:    "A row that stands alone at the end of the predictor decides the slope, and no other row can check it.",
	Method: "diagonal of the hat matrix, and the share of each slope that one row carries (its squared weight)",
	Limit: "a row that the fit must pass through (leverage 1) is a breach; a share above one half is thin. " +
		"Leverage above 2p/n is told as a fact only: nearly every sound table has such rows",
	Needs:    NeedsFit,
	Remedies: []*remedy.Remedy{remedy.MoreRows},
	Run:      leverage,
}

func leverage(p *Pass) (Outcome, error) {
	f := p.Fit
	largest, high := 0, 0
	var alone []int
	for i, h := range f.Leverage {
		if h > f.Leverage[largest] {
			largest = i
		}
		if h > 2*float64(f.P())/float64(f.N()) {
			high++
		}
		if h >= 1 {
			alone = append(alone, i)
		}
	}
	carried := carriers(f)
	evidence := map[string]any{
		"largest_leverage": f.Leverage[largest], "row": p.Table.Row(p.Design.Rows[largest]),
		"rows_above_2p_over_n": high, "largest_share": p.largestShares(),
	}
	var o Outcome
	switch {
	case len(alone) > 0:
		o = p.standsAlone(alone)
	case len(carried) > 0:
		c := carried[0]
		o = cannotTell(fmt.Sprintf("row %d alone carries %s of the slope%s: no other row can check it",
			p.Table.Row(p.Design.Rows[c.row]), wording.Percent(c.share), ofGroup(p, c.group)))
		for _, c := range carried {
			o.Where = append(o.Where, p.row(c.row))
			o.Touches = append(o.Touches, p.questionOf(c.group))
		}
		o.Touches = append(o.Touches, Question{Difference: true})
	default:
		o = sound(fmt.Sprintf("the largest leverage is %s (row %d); no row carries half a slope",
			wording.Figure(f.Leverage[largest], 2), p.Table.Row(p.Design.Rows[largest])))
	}
	o.Statistic = figure("largest leverage", f.Leverage[largest])
	o.Evidence = evidence
	return o, nil
}

// largestShares is, per slope, the largest share of it that one row carries.
func (p *Pass) largestShares() map[string]any {
	all := map[string]any{}
	terms := p.Fit.AnswerTerms()
	for g, k := range terms {
		if k < 0 {
			continue
		}
		c := p.Fit.Term(k)
		largest := 0.0
		for _, v := range c.Catcher {
			largest = max(largest, v*v/(c.Length*c.Length))
		}
		name := "slope"
		if len(terms) > 1 {
			name = p.Design.Groups[g]
		}
		all[name] = largest
	}
	return all
}

// standsAlone tells of rows that the fit must pass through, and which slopes
// rest on them.
func (p *Pass) standsAlone(rows []int) Outcome {
	var shown []string
	groups := map[int]bool{}
	o := breach("")
	for _, i := range rows {
		shown = append(shown, strconv.Itoa(p.Table.Row(p.Design.Rows[i])))
		groups[p.Design.Group[i]] = true
		o.Where = append(o.Where, p.row(i))
	}
	noun := "row"
	if len(rows) > 1 {
		noun = "rows"
	}
	o.Message = fmt.Sprintf("the fit must pass through %s %s whatever the response there: what rests on it cannot be checked", noun, wording.Some(shown, 5))
	o.Touches = []Question{}
	for _, c := range carriers(p.Fit) {
		if p.Fit.Leverage[c.row] < 1 {
			continue
		}
		at := p.Table.Row(p.Design.Rows[c.row])
		q := p.questionOf(c.group)
		o.Message += fmt.Sprintf("; row %d alone decides the slope%s", at, ofGroup(p, c.group))
		o.Limits = append(o.Limits, Limit{Of: &q, Sentence: fmt.Sprintf(
			"row %d alone decides it, and no other row can check that.", at)})
		if p.Answers.Difference != nil && c.group >= 0 {
			o.Limits = append(o.Limits, Limit{Of: &Question{Difference: true}, Sentence: fmt.Sprintf("row %d alone decides the slope%s.", at, ofGroup(p, c.group))})
		}
	}
	return o
}

// carrier is a row that carries more than half of a slope.
type carrier struct {
	row, group int
	share      float64
}

func carriers(f *model.Fit) []carrier {
	var all []carrier
	for g, k := range f.SlopeTerms() {
		if k < 0 {
			continue
		}
		if f.Terms[k].Part == model.Shared {
			g = -1
		}
		c := f.Term(k)
		for i, v := range c.Catcher {
			share := v * v / (c.Length * c.Length)
			if share > 0.5+1e-12 || (f.Leverage[i] >= 1 && math.Abs(v) > 1e-6*c.Length) {
				all = append(all, carrier{row: i, group: g, share: share})
			}
		}
	}
	return all
}

// questionOf names the slope of a group, -1 for a shared one.
func (p *Pass) questionOf(g int) Question {
	if g < 0 {
		return Question{}
	}
	return Question{Group: p.Design.Groups[g]}
}
