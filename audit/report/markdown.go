package report

import (
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"footing/audit"
	"footing/rules"
	"footing/rules/wording"
)

var markdownForm = &Form{
	Name: "markdown", Extensions: []string{".md", ".markdown"}, Marks: []string{"<!-- " + mark},
	Write: func(w io.Writer, r *audit.Result, o Options) error { return Markdown(w, r, o.Version) },
}

const (
	// mostMarkdown keeps a report within what hosts take as one comment, in
	// characters.
	mostMarkdown = 60000
	// mostCell is the longest text of a table's cell, in characters as typed.
	mostCell = 1500
	// leftOut is kept free for the line that says what was left out and for the
	// ends of what is open.
	leftOut = 400
)

// Markdown writes the result for the comments of a pull request or the summary
// of a job: less than 60,000 characters whatever the table. What does not fit is
// counted.
func Markdown(w io.Writer, r *audit.Result, version string) error {
	m := &markdown{}
	m.line("<!-- " + audit.Format + " markdown -->")
	file, read := readWords(r)
	m.line("## footing: " + grade(r))
	m.line("")
	m.line("**" + grade(r) + ": " + inert(cut(wording.Stop(r.Verdict.Summary), mostCell)) + "**")
	m.line("")
	text := inert(cut(file, 200)) + ": " + read
	if r.Model != nil {
		text += " " + inert(cut(wording.Sentence(modelWords(r)), 600)) + " " + setAsideWords(r) + scope
	}
	m.line(text)
	m.list("You may quote", r.Verdict.Quote)
	m.list("Do not quote", denied(r))
	if r.Suggested != nil && r.Suggested.Command != "" {
		m.line("")
		m.line("These columns suggest: " + inert(r.Suggested.Command))
	}
	m.open(r)
	m.folded(r)
	m.how(r, version)
	if m.omitted > 0 {
		// The room for it was kept.
		m.text.WriteString("\n" + wording.Count(m.omitted, "line") + " did not fit here; `--format json` has all.\n")
	}
	_, err := io.WriteString(w, m.text.String())
	return err
}

// markdown collects lines as long as there is room.
type markdown struct {
	text    strings.Builder
	length  int // in characters
	omitted int
}

// line writes a line, or counts it when there is no room left.
func (m *markdown) line(s string) {
	n := utf8.RuneCountInString(s) + 1
	if m.length+n > mostMarkdown-leftOut {
		if s != "" {
			m.omitted++
		}
		return
	}
	m.text.WriteString(s + "\n")
	m.length += n
}

// fold writes lines that a reader opens; its end is written whatever the room.
func (m *markdown) fold(title string, body func()) {
	if m.length > mostMarkdown-2*leftOut {
		m.omitted++
		return
	}
	m.line("")
	m.line("<details><summary>" + title + "</summary>")
	m.line("")
	body()
	m.text.WriteString("\n</details>\n")
	m.length += len("\n</details>\n")
}

func (m *markdown) list(title string, sentences []string) {
	if len(sentences) == 0 {
		return
	}
	m.line("")
	m.line("### " + title)
	m.line("")
	for _, s := range sentences {
		m.line("- " + inert(cut(s, mostCell)))
	}
}

// open is the table of what asks for a decision.
func (m *markdown) open(r *audit.Result) {
	begun := false
	for k := range r.Findings {
		f := &r.Findings[k]
		if !f.IsOpen() {
			continue
		}
		if !begun {
			m.line("")
			m.line("### To decide, worst first")
			m.line("")
			m.line("| state | rule | finding | where | what to do |")
			m.line("| --- | --- | --- | --- | --- |")
			begun = true
		}
		var todo []string
		for _, words := range remedyWords(f) {
			todo = append(todo, inert(cut(words, mostCell)))
		}
		m.line(fmt.Sprintf("| %s | `%s` | %s | %s | %s |", stateWord(f), f.Rule, inert(cut(message(f), mostCell)),
			inert(cut(fewAddresses(f.Where), 600)), strings.Join(todo, "<br>")))
	}
}

// stateWord is a finding's state with its sign, told apart without colour.
func stateWord(f *audit.Finding) string {
	sign, _ := stateSign(f.State)
	word := inert(sign) + " " + string(f.State)
	if f.Waived != nil {
		word += " (waived)"
	}
	return word
}

// folded is what asks for nothing: passes and what does not apply.
func (m *markdown) folded(r *audit.Result) {
	m.fold(strings.TrimSuffix(countWords(r), "."), func() {
		m.line("| state | rule | said |")
		m.line("| --- | --- | --- |")
		for k := range r.Findings {
			if f := &r.Findings[k]; !f.IsOpen() {
				m.line(fmt.Sprintf("| %s | `%s` | %s |", stateWord(f), f.Rule, inert(cut(message(f), mostCell))))
			}
		}
	})
}

// how says by which methods it was done.
func (m *markdown) how(r *audit.Result, version string) {
	m.fold("How it was done", func() {
		if r.Calibration != nil && len(r.Calibration.Rules) > 0 {
			m.line("- " + inert(calibrationWords(r.Calibration)))
		}
		for _, note := range r.Input.Reading.Notes {
			m.line("- Read: " + inert(cut(wording.Sentence(note), 600)))
		}
		m.line("- footing " + version + "; SHA-256 of the input " + r.Input.SHA256)
		m.line("")
		m.line("| rule | method |")
		m.line("| --- | --- |")
		for k := range r.Findings {
			if rule := rules.Named(r.Findings[k].Rule); rule != nil {
				m.line("| `" + rule.Name + "` | " + inert(cut(rule.Method, 600)) + " |")
			}
		}
	})
}

// setAsideWords tells the first rows that were set aside, ready for markdown.
func setAsideWords(r *audit.Result) string {
	if len(r.Model.RowsSetAside) == 0 {
		return ""
	}
	return "Set aside: " + inert(cut(wording.Some(setAside(r), 3), 600)) + ". "
}

// setAside names each row that was set aside, with the reason.
func setAside(r *audit.Result) []string {
	var said []string
	for _, row := range r.Model.RowsSetAside {
		said = append(said, fmt.Sprintf("row %d (%s)", row.Row, row.Reason))
	}
	return said
}

// inert writes text so that markdown shows it as it is: nothing in it is
// markup, and hosts find no one to notify and nothing to link. An empty remark
// parts what they would join.
func inert(s string) string {
	const part = "<!-- -->"
	s = wording.Printable(s)
	digits := true // so far
	var b strings.Builder
	for i, r := range s {
		rest := s[i+utf8.RuneLen(r):]
		switch {
		case r == '&':
			b.WriteString("&amp;")
		case r == '<':
			b.WriteString("&lt;")
		case r == '>':
			b.WriteString("&gt;")
		case strings.ContainsRune("|[]*_`\\~!{}", r), i == 0 && strings.ContainsRune("-+=", r), digits && i > 0 && (r == '.' || r == ')'):
			b.WriteString(`\` + string(r))
		case r == '@':
			b.WriteString("@" + part)
		case r == '#':
			b.WriteString(`\#` + part)
		case r == '$':
			b.WriteString("<span>$</span>")
		case r == ':' && strings.HasPrefix(rest, "//"), strings.HasSuffix(strings.ToLower(s[:i]), "ww") && (r == 'w' || r == 'W'):
			b.WriteString(string(r) + part)
		default:
			b.WriteRune(r)
		}
		digits = digits && r >= '0' && r <= '9'
	}
	return b.String()
}
