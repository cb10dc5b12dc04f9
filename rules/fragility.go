package rules

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"footing/rules/model"
	"footing/rules/numeric"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// Fragility asks how few rows an answer rests on.
var Fragility = &Rule{
	Name:   "fragility",
	Family: OfModel,
	Asks:   "How few rows would have to go for an answer to change?",
	Why:    "An answer that two rows of two hundred decide is theirs; but an answer near its limit always rests on few rows, so the number is set beside that of sound tables.",
	Method: "deletes the most decisive row again and again and refits (compare Broderick, Giordano and Meager 2020, arXiv 2011.14999), " +
		"against the same search in 99 sound tables with the same slope, scatter and t",
	Limit:    "never a breach, since it tests no assumption; thin when fewer rows are enough than in 95 of 100 sound tables of this t",
	Needs:    NeedsScatter,
	Remedies: []*remedy.Remedy{remedy.MoreRows},
	Run:      fragility,
}

// fragilityTables is how many sound tables the search is compared with.
const fragilityTables = 99

// searched is the search over one clear answer.
type searched struct {
	question    Question
	name        string
	found       model.Deletion
	usual       float64 // median over sound tables; NaN without a reference
	seldomBelow float64 // their 5 % point
	reach       float64 // the most rows that were deleted there
}

func (s searched) fragile() bool { return s.found.Flip > 0 && float64(s.found.Flip) < s.seldomBelow }

func fragility(p *Pass) (Outcome, error) {
	var all []searched
	for g, s := range p.Answers.Slopes {
		if q, ok := p.clearSlope(g, s); ok {
			all = append(all, p.search(q, Question{Group: s.Group}, "the slope"+ofLabel(s.Group)))
		}
	}
	if d := p.Answers.Difference; d != nil && d.P < 1-p.Settings.Confidence {
		if q, ok := p.Fit.DifferenceQuestion(); ok {
			all = append(all, p.search(q, Question{Difference: true}, "the difference"))
		}
	}
	if len(all) == 0 {
		return notAsked("no answer is clear, so none can cease to be"), nil
	}
	return p.toldOf(all), nil
}

func (p *Pass) clearSlope(g int, s model.Estimate) (model.Question, bool) {
	if p.Design.X() == nil || !s.Exists || math.IsNaN(s.Low) || !s.Clear() || s.SE == 0 {
		return model.Question{}, false
	}
	return p.Fit.SlopeQuestion(g)
}

func ofLabel(group string) string {
	if group == "" {
		return ""
	}
	return " of " + group
}

// search runs the deletion on the table and on sound ones: responses with the
// same fit, and residuals of the same length drawn at random.
func (p *Pass) search(q model.Question, asked Question, name string) searched {
	n := p.Fit.N()
	most := max(10, (n+4)/5)
	if n > LargestSimulated {
		most = 100
	}
	s := searched{question: asked, name: name, found: q.Greedy(p.Settings.Confidence, most), usual: math.NaN(), seldomBelow: math.NaN()}
	if n > LargestSimulated || s.found.Flip == 0 {
		return s
	}
	fitted, rss, basis := q.Answered()
	z, e := make([]float64, q.Len()), make([]float64, q.Len())
	var counts []float64
	reach := most
	if !q.IsLine() { // every deletion is a factorisation: look no further than tells few from usual
		reach = min(most, 2*s.found.Flip+10)
	}
	random := numeric.Stream(p.Settings.Seed, "fragility")
	for range fragilityTables {
		for i := range z {
			z[i] = random.NormFloat64()
		}
		basis.Residual(e, z)
		ss := 0.0
		for _, v := range e {
			ss += v * v
		}
		y := make([]float64, len(z))
		for i := range y {
			y[i] = fitted[i] + e[i]*math.Sqrt(rss/ss)
		}
		k := q.Of(y).Greedy(p.Settings.Confidence, reach).Flip
		if k == 0 {
			k = reach + 1
		}
		counts = append(counts, float64(k))
	}
	sorted := numeric.Sorted(counts)
	s.usual, s.seldomBelow = numeric.Quantile(sorted, 0.5), numeric.Quantile(sorted, 0.05)
	s.reach = float64(reach)
	return s
}

func (p *Pass) toldOf(all []searched) Outcome {
	var fragile, told []string
	var touched []Question
	var where []Place
	least := all[0]
	byAnswer := map[string]any{}
	for _, s := range all {
		words := p.rowsToFlip(s)
		if s.fragile() {
			fragile = append(fragile, words)
			touched = append(touched, s.question)
			for _, i := range s.found.Rows {
				where = append(where, p.row(i))
			}
		} else {
			told = append(told, words)
		}
		if s.found.Flip > 0 && (least.found.Flip == 0 || s.found.Flip < least.found.Flip) {
			least = s
		}
		byAnswer[s.key()] = s.evidence()
	}
	o := sound(strings.Join(told, "; "))
	if len(fragile) > 0 {
		o = cannotTell(strings.Join(fragile, "; ") + ", fewer than in nearly all sound tables")
		o.Touches = touched
	} else {
		for _, i := range least.found.Rows {
			where = append(where, p.row(i))
		}
	}
	o.Where = where
	o.Evidence = least.evidence()
	o.Evidence["of"], o.Evidence["by_answer"] = least.key(), byAnswer
	return o
}

// key names the answer in the evidence: its group, "slope" or "difference".
func (s searched) key() string {
	switch {
	case s.question.Difference:
		return "difference"
	case s.question.Group == "":
		return "slope"
	}
	return s.question.Group
}

func (s searched) evidence() map[string]any {
	return map[string]any{
		"rows_to_flip": countOrNil(s.found.Flip), "rows_to_reverse": countOrNil(s.found.Reverse),
		"usual": s.usual, "seldom_below": s.seldomBelow,
	}
}

// countOrNil is nil for more rows than were tried.
func countOrNil(k int) any {
	if k == 0 {
		return nil
	}
	return k
}

func (p *Pass) rowsToFlip(s searched) string {
	if s.found.Flip == 0 {
		return s.name + " would stay clear without any of its most decisive rows that were tried"
	}
	var rows []string
	for _, i := range s.found.Rows {
		rows = append(rows, strconv.Itoa(p.Table.Row(p.Design.Rows[i])))
	}
	words := fmt.Sprintf("%s would not be clear without %s (%s)", s.name, wording.Count(s.found.Flip, "row"), wording.Some(rows, 5))
	switch {
	case math.IsNaN(s.usual):
	case s.usual > s.reach:
		words += fmt.Sprintf("; sound tables like this one: usually more than %s, seldom fewer than %s", wording.Number(s.reach), wording.Number(s.seldomBelow))
	default:
		words += fmt.Sprintf("; sound tables like this one: usually %s, seldom fewer than %s", wording.Number(s.usual), wording.Number(s.seldomBelow))
	}
	return words
}
