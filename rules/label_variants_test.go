package rules

import "testing"

func TestLabelVariants(t *testing.T) {
	cases := []struct {
		name, label string
		answer      Answer
		words       string
	}{
		{"a capital", "Sheltered", Breach, `"Sheltered" at A7 may be "sheltered"`},
		{"a space within", "shel tered", Breach, `may be "sheltered"`},
		{"an underscore", "sheltered_", Breach, `may be "sheltered"`},
		{"full-width letters", "ｓheltered", Breach, `may be "sheltered"`},
		{"a Cyrillic e", "shеltered", Breach, "U+0435, Cyrillic e"},
		{"a letter lost", "sheltred", Breach, `may be "sheltered"`},
		{"two letters swapped", "shelteerd", Breach, `may be "sheltered"`},
		{"another word", "open", Sound, "no label"},
		{"a digit sets places apart", "sheltered2", Sound, "no label"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			s := kelp(40, 4)
			s.rows[5][0] = c.label
			p := passOf(t, s, kelpRoles)
			o := ask(t, LabelVariants, p)
			if c.answer == Breach {
				expect(t, p, o, c.answer, c.words, "A7")
				if o.Target.Labels[c.label] != "sheltered" {
					t.Errorf("would merge %v", o.Target.Labels)
				}
				return
			}
			expect(t, p, o, c.answer, c.words)
		})
	}
}

func TestNumberedLabelsAreNoVariants(t *testing.T) {
	s := &sheet{header: []string{"site", "temperature", "growth"}}
	for i := range 60 {
		s.add([]string{"-1", "+1", "1", "0.5", "05", "plot1", "plot2"}[i%7], i, (i*37)%11)
	}
	p := passOf(t, s, kelpRoles)
	expect(t, p, ask(t, LabelVariants, p), Sound, "no label")
}
