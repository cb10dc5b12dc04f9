package figure

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"github.com/rivo/uniseg"

	"footing/audit"
	"footing/rules/wording"
)

// answer is one answer under one remedy, or as it stands.
type answer struct {
	words            string
	value, low, high float64
	changes          bool
	log, gone        bool
}

// drawRemedies draws the two answers as they stand and under every remedy tried,
// side by side.
func drawRemedies(s *sheet) bool {
	d := s.drawing
	if d == nil || len(d.Trials) == 0 {
		return false
	}
	s.title = "Both answers under every remedy tried"
	lead := s.leadWidth()
	y := 8.0
	changed := 0
	for _, q := range s.questions() {
		y, changed = s.block(y, lead, q, changed)
	}
	s.height = y + 6
	if s.height < 40 {
		return false
	}
	distinct := map[string]bool{}
	for _, t := range d.Trials {
		distinct[t.Words] = true
	}
	s.say("%s tried", verbCount(len(distinct), "remedy was", "remedies were"))
	if changed == 0 {
		s.say("no answer changes under any")
	} else {
		s.say("hollow marks are answers that change")
	}
	for _, q := range s.questions() {
		s.sayQuestion(q)
	}
	return true
}

func verbCount(n int, one, many string) string {
	if n == 1 {
		return "one " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

// question is an answer asked as the rows stand and under each remedy.
type question struct {
	what    string
	unit    string
	p       bool // p-values of the difference
	answers []answer
}

// questions collects the answers. A remedy that several findings ask for with
// the same words stands once.
func (s *sheet) questions() []question {
	var all []question
	r := s.result
	first := func(group *string, what string, value audit.Number, ci [2]audit.Number) {
		q := question{what: what, unit: s.slopeUnit(), answers: []answer{{words: "as it stands", value: float64(value), low: float64(ci[0]), high: float64(ci[1])}}}
		name := "slope"
		if group != nil && *group != "" {
			name += " " + *group
		}
		seen := map[string]bool{}
		for _, t := range s.drawing.Trials {
			if seen[t.Words] {
				continue
			}
			seen[t.Words] = true
			q.answers = append(q.answers, trialAnswer(t, group, name))
		}
		if slices.ContainsFunc(q.answers, func(a answer) bool { return !math.IsNaN(a.value) }) {
			all = append(all, q)
		}
	}
	for k, slope := range r.Slopes {
		if k >= inks {
			break
		}
		what := "slope"
		if slope.Group != nil {
			what += " of " + s.labelled(*slope.Group)
		}
		first(slope.Group, what, slope.Slope, slope.CI)
	}
	for k, mean := range r.Means {
		if k >= inks {
			break
		}
		first(&r.Means[k].Group, "mean of "+s.labelled(mean.Group), mean.Mean, mean.CI)
	}
	if r.Difference != nil {
		all = append(all, s.differences())
	}
	return all
}

func trialAnswer(t audit.DrawnTrial, group *string, name string) answer {
	a := answer{words: t.Words, value: math.NaN(), low: math.NaN(), high: math.NaN(), changes: t.Judged[name] == "changes", log: t.Log, gone: true}
	for _, v := range t.Slopes {
		if (v.Group == nil) == (group == nil) && (group == nil || *v.Group == *group) {
			a.value, a.low, a.high, a.gone = float64(v.Slope), float64(v.CI[0]), float64(v.CI[1]), !v.Slope.Defined()
		}
	}
	return a
}

func (s *sheet) differences() question {
	d := s.result.Difference
	nan := math.NaN()
	q := question{what: "do they differ?", p: true, answers: []answer{{words: "as it stands", value: float64(d.P), low: nan, high: nan}}}
	seen := map[string]bool{}
	for _, t := range s.drawing.Trials {
		if seen[t.Words] {
			continue
		}
		seen[t.Words] = true
		a := answer{words: t.Words, value: nan, low: nan, high: nan, changes: t.Judged["difference"] == "changes", gone: true}
		if t.Difference != nil && t.Difference.P.Defined() {
			a.value, a.gone = float64(t.Difference.P), false
		}
		q.answers = append(q.answers, a)
	}
	return q
}

func (s *sheet) slopeUnit() string {
	y, x := s.drawing.Response.Unit, s.drawing.Predictor
	switch {
	case x.Name == "":
		return y
	case x.Unit != "" && y != "":
		return y + " per " + x.Unit
	case x.Unit != "":
		return "per " + x.Unit
	case y != "":
		return y + " per unit of " + x.Name
	}
	return "per unit of " + x.Name
}

const (
	leadLetters = 21
	step        = 21.0 // of an answer with one line of words
	lineHeight  = 14.5
)

// lines breaks the words of a remedy into two lines where one is too short.
func lines(text string) []string {
	if uniseg.StringWidth(wording.Printable(text)) <= leadLetters {
		return []string{text}
	}
	first, rest := "", ""
	for _, word := range strings.Fields(wording.Printable(text)) {
		if rest == "" && (first == "" || uniseg.StringWidth(first+" "+word) <= leadLetters) {
			first = strings.TrimSpace(first + " " + word)
			continue
		}
		rest = strings.TrimSpace(rest + " " + word)
	}
	if rest == "" {
		return []string{short(first, leadLetters)}
	}
	return []string{short(first, leadLetters), short(rest, leadLetters)}
}

func (s *sheet) leadWidth() float64 {
	lead := textWidth("as it stands")
	for _, t := range s.drawing.Trials {
		for _, l := range lines(t.Words) {
			lead = max(lead, textWidth(l))
		}
	}
	return 10 + lead + 10
}

// heightOf is the room for one answer.
func heightOf(a answer) float64 { return step + lineHeight*float64(len(lines(a.words))-1) }

// block draws one question: a line for each remedy, on a scale of its own.
func (s *sheet) block(top, lead float64, q question, changed int) (bottom float64, changes int) {
	heading := q.what
	if q.unit != "" {
		heading += " (" + q.unit + ")"
	}
	if q.p {
		heading += " (p of the difference)"
	}
	s.text(10, top+14, "start", "b", short(heading, wholeLine))
	y := top + 22
	f := frame{box: box{left: lead, top: y, right: width - 78, bottom: y}}
	for _, a := range q.answers {
		f.bottom += heightOf(a)
	}
	ticks, labels := s.blockScale(&f, q)
	last := math.Inf(-1)
	for k, v := range ticks {
		x := f.x.at(v)
		s.line("r", x, f.top, x, f.bottom)
		if half := textWidth(labels[k]) / 2; x-half > last {
			s.text(x, f.bottom+15, "middle", "q", labels[k])
			last = x + half + 6
		}
	}
	special := 0.0
	if q.p {
		special = math.Log10(1 - float64(s.result.Model.Confidence))
	}
	if x := f.x.at(special); x >= f.left && x <= f.right {
		s.line("h", x, f.top-2, x, f.bottom)
	}
	for k, a := range q.answers {
		s.answerLine(f, y+heightOf(a)/2, lead, a, q.p, k == 0)
		y += heightOf(a)
		if a.changes {
			changed++
		}
	}
	return f.bottom + 26, changed
}

// blockScale chooses the scale of a question. Intervals twelve times as wide as
// the narrowest, or as the answers lie apart, are cut at the edge: beside them
// nothing else could be seen.
func (s *sheet) blockScale(f *frame, q question) (ticks []float64, labels []string) {
	if q.p {
		f.x = scale{math.Log10(0.00005), 0, f.left, f.right - 6}
		return []float64{-4, -3, -2, -1, 0}, []string{"0.0001", "0.001", "0.01", "0.1", "1"}
	}
	x := newSpan()
	narrow := math.Inf(1)
	values := newSpan()
	for _, a := range q.answers {
		if a.log {
			continue
		}
		values.take(a.value)
		if w := a.high - a.low; w > 0 {
			narrow = min(narrow, w)
		}
	}
	narrow = max(narrow, (values.most-values.least)/2)
	for _, a := range q.answers {
		if a.log {
			continue
		}
		x.take(a.value)
		if a.high-a.low <= 12*narrow {
			x.take(a.low, a.high)
		}
	}
	wide := x.room()
	if wide.least > 0 && wide.least < wide.most-wide.least {
		wide.least = 0
	}
	if wide.most < 0 && -wide.most < wide.most-wide.least {
		wide.most = 0
	}
	f.x = scale{wide.least, wide.most, f.left + 4, f.right - 4}
	ticks, decimals := nice(wide, 4)
	return ticks, tickWords(ticks, decimals)
}

func (s *sheet) answerLine(f frame, y, lead float64, a answer, isP, isFirst bool) {
	class := ""
	if isFirst {
		class = "b"
	}
	if a.changes {
		class = "a b"
	}
	told := lines(a.words)
	for k, l := range told {
		s.text(lead-10, y+4.5+lineHeight*(float64(k)-float64(len(told)-1)/2), "end", class, l)
	}
	end := "holds"
	switch {
	case isFirst:
		end = ""
	case a.changes:
		end = "changes"
	}
	if math.IsNaN(a.value) {
		s.text(f.left+6, y+4.5, "start", "q", "none")
		s.text(f.right+8, y+4.5, "start", class, end)
		return
	}
	if a.log {
		s.text(f.left+6, y+4.5, "start", "q v", fmt.Sprintf("log scale: %s (%s to %s)", figure3(a.value), wording.Figure(a.low, 2), wording.Figure(a.high, 2)))
		s.text(f.right+8, y+4.5, "start", class, end)
		return
	}
	if isP {
		x := f.x.at(math.Log10(max(a.value, 0.00005)))
		s.dot(x, y, a.changes)
		s.text(f.right+8, y+4.5, "start", class, strings.TrimPrefix(strings.TrimPrefix(wording.P(a.value), "p "), "= "))
		return
	}
	if !math.IsNaN(a.low) {
		from, to := max(f.left, f.x.at(a.low)), min(f.right, f.x.at(a.high))
		ink := "k"
		if a.changes {
			ink = "m"
		}
		s.line(ink+" l", from, y, to, y)
		for _, e := range []struct {
			cut     bool
			x, back float64
		}{{f.x.at(a.low) < f.left, f.left, 6}, {f.x.at(a.high) > f.right, f.right, -6}} {
			if e.cut { // an arrow: the interval goes on
				s.path(ink+" t", fmt.Sprintf("M%s %sL%s %sL%s %s", num(e.x+e.back), num(y-5), num(e.x), num(y), num(e.x+e.back), num(y+5)))
			}
		}
	}
	s.dot(f.x.at(a.value), y, a.changes)
	s.text(f.right+8, y+4.5, "start", class, end)
}

func (s *sheet) dot(x, y float64, hollow bool) {
	class := "d"
	if hollow {
		class = "p m"
	}
	fmt.Fprintf(&s.body, `<circle class="%s" cx="%s" cy="%s" r="4.5"/>`, class, num(x), num(y))
}

func (s *sheet) sayQuestion(q question) {
	var holds, changes []string
	for _, a := range q.answers[1:] {
		switch {
		case a.changes && a.gone:
			changes = append(changes, "none "+a.words)
		case a.changes:
			changes = append(changes, s.answerWords(q, a)+" "+a.words)
		default:
			holds = append(holds, a.words)
		}
	}
	text := q.what + " is " + s.answerWords(q, q.answers[0]) + " as it stands"
	if q.p {
		text = "difference: " + s.answerWords(q, q.answers[0]) + " as it stands"
	}
	if len(holds) > 0 {
		text += "; holds " + wording.List(holds)
	}
	if len(changes) > 0 {
		text += "; changes: " + wording.List(changes)
	}
	s.say("%s", text)
}

func (s *sheet) answerWords(q question, a answer) string {
	switch {
	case math.IsNaN(a.value):
		return "not to be had"
	case q.p:
		return wording.P(a.value)
	case math.IsNaN(a.low):
		return figure3(a.value)
	}
	return fmt.Sprintf("%s (%s to %s)", figure3(a.value), figure3(a.low), figure3(a.high))
}
