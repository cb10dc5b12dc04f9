package report

import (
	"io"

	"footing/rules"
	"footing/rules/wording"
)

// explainWidth is the width of what explain prints.
const explainWidth = 80

// RuleList lists rules with their questions, by family.
func RuleList(w io.Writer, all []*rules.Rule) error {
	p := &page{width: explainWidth}
	family := rules.Family("")
	longest := 0
	for _, r := range all {
		longest = max(longest, len(r.Name))
	}
	for _, r := range all {
		if r.Family != family {
			if family != "" {
				p.blank()
			}
			family = r.Family
			p.say("", plain, "Rules of the "+string(family)+":")
		}
		lead := "  " + r.Name
		for len(lead) < longest+4 {
			lead += " "
		}
		p.say(lead, plain, r.Asks)
	}
	p.blank()
	p.say("", plain, "footing explain RULE tells all about one.")
	_, err := w.Write(p.buffer.Bytes())
	return err
}

// Rule prints all that a rule's literal says.
func Rule(w io.Writer, r *rules.Rule) error {
	p := &page{width: explainWidth}
	p.say("", plain, r.Name+" (a rule of the "+string(r.Family)+")")
	p.blank()
	for _, part := range []struct{ lead, text string }{
		{"Asks     ", r.Asks},
		{"Why      ", r.Why},
		{"How      ", wording.Sentence(r.Method)},
		{"Breached ", wording.Sentence(r.Limit)},
	} {
		p.say(part.lead, plain, part.text)
	}
	for k, remedy := range r.Remedies {
		lead := "         "
		if k == 0 {
			lead = "To do    "
		}
		text := remedy.Name + ": " + remedy.Do
		if remedy.Source != "" {
			text += " (" + remedy.Source + ")"
		}
		if remedy.CanBeTried() {
			text += " (tried on the rows at hand)"
		}
		p.say(lead, plain, wording.Stop(text))
	}
	_, err := w.Write(p.buffer.Bytes())
	return err
}
