package audit

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"footing/rules"
	"footing/rules/model"
	"footing/rules/remedy"
	"footing/rules/wording"
)

// standing is what may be done with one answer, by which rules, and in which
// words.
type standing struct {
	standing Standing
	because  []string
	denial   string // the sentence why it may not be quoted
}

func (s *standing) worsen(to Standing, rule string) {
	if to == DoNotQuote || s.standing == Quote {
		s.standing = to
	}
	if !slices.Contains(s.because, rule) {
		s.because = append(s.because, rule)
	}
}

// standingOf judges one answer from all findings.
func (e *examination) standingOf(q rules.Question) standing {
	s := standing{standing: Quote, because: []string{}}
	for _, x := range e.findings {
		if x.root == "" {
			e.weigh(&s, x, q)
		}
	}
	for _, x := range e.findings {
		if x.root != "" { // after the roots, whose words go before
			e.weigh(&s, x, q)
		}
	}
	return s
}

func (e *examination) weigh(s *standing, x *examined, q rules.Question) {
	if e.goesWithTheTable(x) {
		return
	}
	say := e.speaker()
	for _, limit := range x.outcome.Limits {
		if limit.Of != nil && *limit.Of == q {
			s.worsen(DoNotQuote, x.rule.Name)
			s.deny(limit.Sentence)
		}
	}
	switch x.state {
	case Stop:
		if slices.Contains(x.outcome.Denies, q) {
			s.worsen(DoNotQuote, x.rule.Name)
			s.deny(wording.Stop(x.outcome.Message))
			return
		}
		for _, t := range x.trials {
			if t.tried && changed(t, q) {
				s.worsen(DoNotQuote, x.rule.Name)
				s.deny(e.changeSentence(say, x, t, q))
				return
			}
		}
		if len(x.outcome.Denies) == 0 && e.bears(x, q) {
			s.caution(e, x)
		}
	case Warn, Thin:
		if !x.byPower && e.bears(x, q) {
			s.caution(e, x)
		}
	case Pass:
		if x.rule.OnlyLimits && slices.Contains(x.outcome.Touches, q) {
			s.worsen(QuoteWith, x.rule.Name)
		}
	}
	if x.rule.AlwaysTry && (x.state == Pass || x.state == Thin) {
		e.weighAlways(s, x, q)
	}
}

// goesWithTheTable reports whether a finding of the model follows from one of the
// table and takes no answer away by itself: once the table is mended it is gone,
// and what its own remedies did to the unmended rows says nothing.
func (e *examination) goesWithTheTable(x *examined) bool {
	if x.root == "" || x.rule.Family == rules.OfTable || len(x.outcome.Denies) > 0 {
		return false
	}
	root := e.named(x.root)
	return root != nil && root.rule.Family == rules.OfTable
}

// weighAlways holds an answer against a remedy whose figures are the ones to
// quote even without a breach.
func (e *examination) weighAlways(s *standing, x *examined, q rules.Question) {
	say := e.speaker()
	for _, t := range x.trials {
		switch {
		case !t.tried:
		case changed(t, q):
			s.worsen(DoNotQuote, x.rule.Name)
			s.deny(e.changeSentence(say, x, t, q))
		default:
			s.worsen(QuoteWith, x.rule.Name)
		}
	}
}

func (s *standing) deny(sentence string) {
	if s.denial == "" {
		s.denial = sentence
	}
}

// caution asks for a finding to be named beside an answer; a consequence is
// named by its root.
func (s *standing) caution(e *examination, x *examined) {
	if x.root != "" {
		return
	}
	s.worsen(QuoteWith, x.rule.Name)
}

func changed(t trial, q rules.Question) bool {
	if q.Difference {
		return t.difference == Changes
	}
	return t.slopes[q.Group] == Changes
}

// bears reports whether a finding asks for a caution beside an answer. One whose
// remedies leave the answer's figures as they are does not.
func (e *examination) bears(x *examined, q rules.Question) bool {
	if e.untouched(x, q) {
		return false
	}
	if x.outcome.Touches != nil {
		return slices.Contains(x.outcome.Touches, q)
	}
	switch x.rule.Bears {
	case rules.OnlySlopes:
		return !q.Difference
	case rules.OnlyDifference:
		return q.Difference
	}
	return true
}

// untouched reports whether a remedy was tried and every one that was left the
// figures of an answer as they were.
func (e *examination) untouched(x *examined, q rules.Question) bool {
	tried := false
	for _, t := range x.trials {
		if !t.tried {
			continue
		}
		tried = true
		if q.Difference {
			before, after := e.pass.Answers.Difference, t.answers.Difference
			if before == nil || after == nil || before.F != after.F || before.DF2 != after.DF2 {
				return false
			}
			continue
		}
		before, _ := slopeOf(e.pass.Answers, q.Group)
		after, found := slopeOf(t.answers, q.Group)
		if !found || before.Rows != after.Rows || !same(before.Value, after.Value) || !same(before.SE, after.SE) || !same(before.DF, after.DF) {
			return false
		}
	}
	return tried
}

// same compares figures that rounding alone may set apart.
func same(a, b float64) bool {
	return a == b || math.Abs(a-b) <= 1e-9*math.Abs(a)
}

// changeSentence says how an answer changes under a trial, with both figures.
func (e *examination) changeSentence(say speaker, x *examined, t trial, q rules.Question) string {
	under := say.trialWords(x, t)
	if q.Difference {
		return fmt.Sprintf("Whether the %s differ: %s as it stands, %s %s (%s).", say.kind(),
			say.differenceShort(e.pass.Answers.Difference), say.differenceShort(t.answers.Difference), under, x.rule.Name)
	}
	before, _ := slopeOf(e.pass.Answers, q.Group)
	after, _ := slopeOf(t.answers, q.Group)
	return wording.Sentence(fmt.Sprintf("%s: %s as it stands, %s %s (%s)",
		say.what(q.Group), say.short(before), say.short(after), under, x.rule.Name))
}

// verdict says what the audit comes to, and which sentences may be quoted.
func (e *examination) verdict() Verdict {
	v := Verdict{State: e.grade(), Quote: []string{}, DoNotQuote: []string{}}
	v.Summary = e.summary(v.State)
	if e.pass.Design == nil {
		return v
	}
	say := e.speaker()
	for _, s := range e.pass.Answers.Slopes {
		st := e.standingOf(rules.Question{Group: s.Group})
		if st.standing == DoNotQuote || !s.Exists {
			v.DoNotQuote = append(v.DoNotQuote, e.denialOf(say, s, st))
			continue
		}
		v.Quote = append(v.Quote, e.withCaution(say.slope(s), st, rules.Question{Group: s.Group}))
	}
	if d := e.pass.Answers.Difference; d != nil {
		st := e.standingOf(rules.Question{Difference: true})
		if st.standing == DoNotQuote || !defined(d.P) {
			v.DoNotQuote = append(v.DoNotQuote, denialSentence(st, "Whether the "+say.kind()+" differ"))
		} else {
			v.Quote = append(v.Quote, e.withCaution(say.difference(d), st, rules.Question{Difference: true}))
		}
	}
	if e.pass.Fit == nil {
		v.DoNotQuote = append(v.DoNotQuote, "Any slope or mean from this model: it has no fit.")
	}
	for _, x := range e.findings {
		for _, limit := range x.outcome.Limits {
			if limit.Of == nil {
				v.DoNotQuote = append(v.DoNotQuote, limit.Sentence)
			}
		}
	}
	return v
}

func (e *examination) denialOf(say speaker, s model.Estimate, st standing) string {
	return denialSentence(st, wording.Sentence(say.what(s.Group)))
}

// denialSentence gives the reason, under the name of the answer where the
// reason does not name it itself.
func denialSentence(st standing, answer string) string {
	if st.denial == "" {
		return wording.Sentence(answer)
	}
	if hasPrefixFold(st.denial, answer) {
		return st.denial
	}
	return trimStop(answer) + ": " + st.denial
}

// withCaution adds to a sentence what must be said beside it: the answer under
// the remedies that were tried, and the rules behind the caution.
func (e *examination) withCaution(sentence string, st standing, q rules.Question) string {
	if st.standing != QuoteWith {
		return sentence
	}
	say := e.speaker()
	var beside []string
	for _, name := range st.because {
		beside = append(beside, name+e.besideWords(say, e.named(name), q))
	}
	return trimStop(sentence) + " (say beside it: " + strings.Join(beside, "; ") + ")."
}

// besideWords gives the figures of an answer under the remedies of a finding
// that were tried and move it.
func (e *examination) besideWords(say speaker, x *examined, q rules.Question) string {
	var figures []string
	for _, t := range x.trials {
		if !t.tried || t.remedy == remedy.LogResponse {
			continue // percent are no units
		}
		if q.Difference {
			if t.answers.Difference != nil && defined(t.answers.Difference.P) {
				figures = append(figures, say.differenceShort(t.answers.Difference)+" "+say.trialWords(x, t))
			}
			continue
		}
		if after, found := slopeOf(t.answers, q.Group); found {
			figures = append(figures, say.short(after)+" "+say.trialWords(x, t))
		}
	}
	if len(figures) == 0 {
		return ""
	}
	return ", " + figures[0] // the first remedy is the one to be quoted; the others stand with the finding
}

// grade is the worst state of any finding.
func (e *examination) grade() Grade {
	grade := Firm
	for _, x := range e.findings {
		switch x.state {
		case Stop:
			return Unsound
		case Warn:
			grade = Guarded
		case Thin:
			if grade == Firm {
				grade = Tentative
			}
		}
	}
	return grade
}

// summary is the verdict's meaning in this table's figures.
func (e *examination) summary(g Grade) string {
	named := e.namesIn(map[Grade]State{Unsound: Stop, Guarded: Warn, Tentative: Thin}[g])
	screened := e.pass.Design == nil
	switch {
	case g == Unsound && screened:
		return "this table should be mended before a line is fitted: " + named
	case g == Unsound:
		return "an answer changes or cannot be had; " + e.beginWith()
	case g == Guarded && screened:
		return "the table can be used once these are looked at: " + named
	case g == Guarded && e.denies():
		return "something is amiss, and not every answer may be quoted: " + named
	case g == Guarded:
		return "something is amiss, and the answers hold all the same: " + named
	case g == Tentative:
		return e.tentativeWords()
	case screened:
		return fmt.Sprintf("nothing found in the table's %s; no line has been checked", wording.Count(e.pass.Table.Len(), "row"))
	}
	return fmt.Sprintf("nothing found in %s that stands against quoting these answers", wording.Count(e.pass.Design.N(), "row"))
}

// beginWith says what to do first, and what then: the roots of the stops in the
// order in which they are told.
func (e *examination) beginWith() string {
	var names []string
	for _, f := range e.orderedHeads() {
		if e.comesTo(f) == Stop {
			names = append(names, f.rule.Name)
		}
	}
	if len(names) == 0 {
		return ""
	}
	text := "begin with " + names[0]
	if len(names) > 1 {
		text += ", then " + wording.List(names[1:])
	}
	return text
}

// tentativeWords says what a clean result leaves open: what the rows would have
// missed, and the findings that the owner can act on.
func (e *examination) tentativeWords() string {
	text := "nothing found"
	if missed := e.missed(); missed != "" {
		text += fmt.Sprintf("; %s would have missed %s", wording.Count(e.pass.Design.N(), "row"), missed)
	}
	var open []string
	for _, x := range e.findings {
		if x.state == Thin && !x.byPower && x.root == "" {
			open = append(open, x.rule.Name)
		}
	}
	if len(open) > 0 {
		text += "; look at " + wording.List(open)
	}
	return text
}

// namesIn names the rules whose findings are in a state, a consequence by its
// root.
func (e *examination) namesIn(state State) string {
	var names []string
	for _, x := range e.findings {
		if x.state != state || state == "" {
			continue
		}
		name := x.rule.Name
		if x.root != "" {
			name = x.root
		}
		if !slices.Contains(names, name) {
			names = append(names, name)
		}
	}
	return wording.List(names)
}

// denies reports whether some answer may not be quoted.
func (e *examination) denies() bool {
	for _, s := range e.pass.Answers.Slopes {
		if e.standingOf(rules.Question{Group: s.Group}).standing == DoNotQuote {
			return true
		}
	}
	return e.pass.Answers.Difference != nil && e.standingOf(rules.Question{Difference: true}).standing == DoNotQuote
}
