package audit

import (
	"fmt"
	"math"
	"strings"

	"footing/readers"
	"footing/rules"
	"footing/rules/model"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// speaker makes the sentences that are to be quoted, or not to be.
type speaker struct {
	e *examination
	p *rules.Pass
}

func (e *examination) speaker() speaker { return speaker{e: e, p: e.pass} }

// slopeUnit is what a slope is measured in: " mm/day per °C".
func (s speaker) slopeUnit() string {
	y, x := s.p.Columns.Response, s.p.Columns.Predictors[0]
	unit := ""
	if y.Unit != "" {
		unit = " " + y.Unit
	}
	if x.Unit != "" {
		return unit + " per " + x.Unit
	}
	return unit + " per unit of " + x.Name
}

// unit is that of the answers: of slopes, or of means.
func (s speaker) unit() string {
	if s.hasSlopes() {
		return s.slopeUnit()
	}
	if u := s.p.Columns.Response.Unit; u != "" {
		return " " + u
	}
	return ""
}

func (s speaker) hasSlopes() bool { return len(s.p.Columns.Predictors) > 0 }

// what names an answer: "the slope of growth over temperature in exposed".
func (s speaker) what(group string) string {
	y := s.p.Columns.Response.Title()
	if !s.hasSlopes() {
		return fmt.Sprintf("the mean %s in %s", y, group)
	}
	w := fmt.Sprintf("the slope of %s over %s", y, s.p.Columns.Predictors[0].Title())
	if group != "" {
		w += " in " + group
	}
	return w
}

// figures writes an estimate with unit, interval and rows. Negative numbers
// and intervals are written with "to".
func (s speaker) figures(e model.Estimate) string {
	places := wording.Places(e.SE)
	value := wording.To(e.Value, places)
	if !defined(e.SE) {
		return fmt.Sprintf("%s%s (no interval, n = %d)", wording.Figure(e.Value, 3), s.unit(), e.Rows)
	}
	text := fmt.Sprintf("%s%s (%s CI %s to %s, n = %d", value, s.unit(), wording.Percent(s.p.Settings.Confidence),
		wording.To(e.Low, places), wording.To(e.High, places), e.Rows)
	if defined(e.RSquared) {
		text += ", R² " + wording.To(e.RSquared, 2)
	}
	return text + ")"
}

// short writes an estimate with its interval only.
func (s speaker) short(e model.Estimate) string {
	if !e.Exists || !defined(e.Value) {
		return "none"
	}
	places := wording.Places(e.SE)
	if !defined(e.SE) {
		return wording.Figure(e.Value, 3) + " (no interval)"
	}
	return fmt.Sprintf("%s (%s to %s)", wording.To(e.Value, places), wording.To(e.Low, places), wording.To(e.High, places))
}

// slope is the complete sentence of one slope or mean.
func (s speaker) slope(e model.Estimate) string {
	text := fmt.Sprintf("%s is %s", s.what(e.Group), s.figures(e))
	if !s.hasSlopes() {
		return wording.Sentence(text)
	}
	y, x := s.p.Columns.Response.Title(), s.p.Columns.Predictors[0].Title()
	switch {
	case e.High < 0:
		text += fmt.Sprintf(": %s falls as %s rises", y, x)
	case e.Low > 0:
		text += fmt.Sprintf(": %s rises with %s", y, x)
	default:
		text += fmt.Sprintf(": no change of %s with %s is shown", y, x)
	}
	return wording.Sentence(text + s.stated(e))
}

// stated says whether a slope differs from the one that was stated.
func (s speaker) stated(e model.Estimate) string {
	c := s.e.stated(e)
	if c == nil {
		return ""
	}
	if c.Differs {
		return fmt.Sprintf("; it differs from %s (%s)", wording.Number(float64(c.Slope)), wording.P(float64(c.P)))
	}
	return fmt.Sprintf("; it is not shown to differ from %s (%s)", wording.Number(float64(c.Slope)), wording.P(float64(c.P)))
}

// kind is "slopes" or "means".
func (s speaker) kind() string {
	if s.hasSlopes() {
		return "slopes"
	}
	return "means"
}

// difference is the complete sentence of the second answer.
func (s speaker) difference(c *model.Comparison) string {
	test := fmt.Sprintf("F(%s, %s) = %s, %s, n = %d", wording.Number(c.DF1), wording.Number(c.DF2), wording.Figure(c.F, 3), wording.P(c.P), s.p.Design.N())
	clear := c.P < 1-s.p.Settings.Confidence
	if words := s.agreementWords(c, test); words != "" {
		return words
	}
	if len(c.Pairs) == 1 {
		return s.onePair(c, test, clear)
	}
	if !clear {
		return fmt.Sprintf("The %s of the %d groups are not shown to differ (%s): a difference of %s%s would have been found four times in five.",
			s.kind(), len(s.p.Answers.Slopes), test, wording.Figure(c.Detectable, 2), s.unit())
	}
	var apart []string
	for _, pair := range c.Pairs {
		if pair.Low > 0 || pair.High < 0 {
			apart = append(apart, s.pair(pair))
		}
	}
	if len(apart) == 0 {
		return fmt.Sprintf("The %s of the groups differ (%s), though no single pair can be named.", s.kind(), test)
	}
	return fmt.Sprintf("The %s of the groups differ (%s): %s.", s.kind(), test, strings.Join(apart, "; "))
}

// agreementWords tells of the difference against the smallest that matters; ""
// when none is stated or the slopes just differ.
func (s speaker) agreementWords(c *model.Comparison, test string) string {
	d := wording.Number(s.p.Settings.SmallestDifference) + s.unit()
	var pairs []string
	for _, pair := range c.Pairs {
		pairs = append(pairs, s.pair(pair))
	}
	told := wording.Some(pairs, 3) + ", " + test
	switch s.e.agreement() {
	case Agree:
		return fmt.Sprintf("The %s agree within %s: %s.", s.kind(), d, told)
	case DifferByLess:
		return fmt.Sprintf("The %s differ, by less than the %s that matters: %s.", s.kind(), d, told)
	case CannotSay:
		return fmt.Sprintf("Whether the %s differ by %s or more cannot be told: %s.", s.kind(), d, told)
	}
	return ""
}

func (s speaker) onePair(c *model.Comparison, test string, clear bool) string {
	pair := c.Pairs[0]
	if clear {
		return fmt.Sprintf("The %s differ: %s, %s.", s.kind(), s.pair(pair), test)
	}
	return fmt.Sprintf("No difference of the %s is shown: %s, %s; one of %s would have been found four times in five.",
		s.kind(), s.pair(pair), test, wording.Figure(c.Detectable, 2))
}

// pair writes "sheltered less exposed 0.12 mm/day per °C (95 % CI ...)".
func (s speaker) pair(pair model.Pair) string {
	places := wording.Places(pair.SE)
	return fmt.Sprintf("%s less %s %s%s (%s CI %s to %s)", pair.B, pair.A, wording.To(pair.Value, places), s.unit(),
		wording.Percent(s.p.Settings.Confidence), wording.To(pair.Low, places), wording.To(pair.High, places))
}

// trialWords tells a remedy in few words: "with row 17 left out".
func (s speaker) trialWords(x *examined, t trial) string {
	if t.remedy == remedy.SetAside {
		return "without " + rowWords(s.p, x.outcome.Target.Rows)
	}
	return t.remedy.Short
}

func rowWords(p *rules.Pass, rows []int) string {
	var numbers []string
	for _, i := range rows {
		numbers = append(numbers, fmt.Sprint(p.Table.Row(p.Design.Rows[i])))
	}
	if len(numbers) == 1 {
		return "row " + numbers[0]
	}
	return "rows " + wording.Some(numbers, 5)
}

// columnUnit is the unit of a column, nil for none.
func columnUnit(col *readers.Column) *string {
	if col.Unit == "" {
		return nil
	}
	return &col.Unit
}

// differenceShort writes the second answer in few words.
func (s speaker) differenceShort(c *model.Comparison) string {
	if c == nil || math.IsNaN(c.P) {
		return "not to be had"
	}
	return wording.P(c.P)
}
