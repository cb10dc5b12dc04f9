package report

import (
	"bytes"
	"encoding/json"
	"encoding/xml"
	"fmt"
	"html"
	"io"
	"regexp"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"footing/audit"
	"footing/rules/wording"
)

// reader gives back what a form says: said is all of its text, and shown is how
// a sentence from the result looks in it.
type reader struct {
	said  func(t *testing.T, raw []byte) string
	shown func(sentence string) string

	// onlyNames marks a form that names passes without their sentences.
	onlyNames bool
}

// readBack has a line for each form; one without is a failure of the tests.
var readBack = map[string]reader{
	"text":      {said: plainly, shown: wording.Printable},
	"json":      {said: decodedJSON, shown: func(s string) string { return s }},
	"markdown":  {said: plainly, shown: inert},
	"sarif":     {said: decodedJSON, shown: func(s string) string { return sarifMessage(s).Text }},
	"junit":     {said: decodedXML, shown: wording.Printable},
	"statement": {said: plainly, shown: wording.Printable, onlyNames: true},
	"html":      {said: taglessHTML, shown: wording.Printable},
}

var tag = regexp.MustCompile(`(?s)<style>.*?</style>|<[^>]*>`)

// taglessHTML is what a page says between its tags.
func taglessHTML(_ *testing.T, raw []byte) string {
	return html.UnescapeString(tag.ReplaceAllString(string(raw), " "))
}

func plainly(_ *testing.T, raw []byte) string { return string(raw) }

func decodedJSON(t *testing.T, raw []byte) string {
	var v any
	if err := json.Unmarshal(raw, &v); err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	var walk func(any)
	walk = func(v any) {
		switch v := v.(type) {
		case string:
			b.WriteString(v + "\n")
		case []any:
			for _, x := range v {
				walk(x)
			}
		case map[string]any:
			for _, x := range v {
				walk(x)
			}
		}
	}
	walk(v)
	return b.String()
}

func decodedXML(t *testing.T, raw []byte) string {
	var b strings.Builder
	d := xml.NewDecoder(bytes.NewReader(raw))
	for {
		token, err := d.Token()
		if err == io.EOF {
			return b.String()
		}
		if err != nil {
			t.Fatal(err)
		}
		switch token := token.(type) {
		case xml.CharData:
			b.Write(token)
		case xml.StartElement:
			for _, a := range token.Attr {
				b.WriteString(a.Value + "\n")
			}
		}
	}
}

// decodedWorkbook is all text of all sheets.
func decodedWorkbook(t *testing.T, raw []byte) string {
	f, err := excelize.OpenReader(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var b strings.Builder
	for _, sheet := range f.GetSheetList() {
		rows, err := f.GetRows(sheet)
		if err != nil {
			t.Fatal(err)
		}
		for _, row := range rows {
			b.WriteString(strings.Join(row, "\n") + "\n")
		}
	}
	return b.String()
}

// unwrapped forgets where lines were broken.
func unwrapped(s string) string { return strings.Join(strings.Fields(s), " ") }

// TestEveryFormSaysAll finds the verdict, both answers and every finding in
// every form.
func TestEveryFormSaysAll(t *testing.T) {
	cases := map[string]audited{"demo": demo(t, "kelp.csv"), "clean": demo(t, "kelp.xlsx"), "hostile": hostileTable(t)}
	for name, a := range cases {
		for _, form := range Forms {
			back, known := readBack[form.Name]
			if !known {
				t.Errorf("form %s: say in readBack how it is read", form.Name)
				continue
			}
			t.Run(name+"/"+form.Name, func(t *testing.T) {
				saysAll(t, a.result, unwrapped(back.said(t, written(t, form, a))), back)
			})
		}
		t.Run(name+"/marked", func(t *testing.T) {
			saysAll(t, a.result, unwrapped(decodedWorkbook(t, markedOf(t, a))), reader{shown: wording.Printable})
		})
	}
}

func saysAll(t *testing.T, r *audit.Result, said string, back reader) {
	t.Helper()
	need := func(what, sentence string) {
		t.Helper()
		if sentence == "" {
			t.Fatalf("%s is empty", what)
		}
		if shown := unwrapped(back.shown(sentence)); !strings.Contains(said, shown) {
			t.Errorf("%s is missing: %s", what, shown)
		}
	}
	if !strings.Contains(strings.ToLower(said), string(r.Verdict.State)) {
		t.Errorf("the verdict %s is missing", r.Verdict.State)
	}
	need("summary", r.Verdict.Summary[1:]) // a form may begin it with a capital
	answers := append(append([]string{}, r.Verdict.Quote...), r.Verdict.DoNotQuote...)
	if len(answers) < 2 {
		t.Fatalf("the table has %d answers; this test needs both", len(answers))
	}
	for _, answer := range answers {
		need("answer", answer)
	}
	for _, f := range r.Findings {
		if !strings.Contains(said, f.Rule) {
			t.Errorf("rule %s is missing", f.Rule)
		}
		if f.IsOpen() || !back.onlyNames {
			need("finding of "+f.Rule, f.Message)
		}
	}
}

// acting are characters that act on a display.
var acting = regexp.MustCompile("[\x00-\x09\x0b-\x1f\x7f\u0080-\u009f\u200b\u200e\u200f\u202a-\u202e\u2066-\u2069]")

// TestHostileLabels finds nothing in any form that a label could have started.
func TestHostileLabels(t *testing.T) {
	a := hostileTable(t)
	for _, form := range Forms {
		t.Run(form.Name, func(t *testing.T) {
			raw := written(t, form, a)
			if at := acting.FindIndex(raw); at != nil {
				t.Errorf("holds %q", raw[max(0, at[0]-20):min(len(raw), at[1]+20)])
			}
		})
	}
}

// TestHostileMarkdown looks for what markdown and its hosts would obey.
func TestHostileMarkdown(t *testing.T) {
	raw := string(written(t, markdownForm, hostileTable(t)))
	ours := strings.NewReplacer("<!-- -->", "\x00", "<!-- "+audit.Format+" markdown -->", "", "<details>", "", "</details>", "", "<summary>", "", "</summary>", "",
		"<br>", "", "<span>$</span>", "", `\]`, "").Replace(raw)
	for _, bad := range []string{"<", "](", "@e", "#1", "://"} {
		if at := strings.Index(ours, bad); at >= 0 {
			t.Errorf("holds %q in %q", bad, ours[max(0, at-40):min(len(ours), at+40)])
		}
	}
	if !strings.Contains(ours, "script&gt;") {
		t.Error("the hostile label is not there at all")
	}
	bars, in := 0, false
	for line := range strings.Lines(raw) {
		if !strings.HasPrefix(line, "|") {
			in = false
			continue
		}
		n := strings.Count(strings.ReplaceAll(strings.ReplaceAll(line, `\\`, ""), `\|`, ""), "|")
		if in && n != bars {
			t.Errorf("a row of a table has %d bars where its header has %d: %s", n, bars, line)
		}
		bars, in = n, true
	}
}

// TestMarkdownFits holds the report to its length, whatever the table.
func TestMarkdownFits(t *testing.T) {
	long := strings.Repeat("a very long label @x <b> ", 400)
	r := *demo(t, "kelp.csv").result
	for i := range 3000 {
		r.Verdict.Quote = append(r.Verdict.Quote, fmt.Sprintf("%d %s", i, long))
	}
	for _, f := range r.Findings {
		f.Message += long
		for range 40 {
			r.Findings = append(r.Findings, f)
		}
	}
	r.Verdict.Summary += long
	r.Input.File = long
	var b bytes.Buffer
	if err := Markdown(&b, &r, "0.0.0"); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	if n := len([]rune(text)); n >= 60000 || n < 40000 {
		t.Errorf("%d characters, want less than 60,000 and most of them", n)
	}
	if !strings.Contains(text, "did not fit here") {
		t.Error("what was left out is not told")
	}
	if strings.Count(text, "<details>") != strings.Count(text, "</details>") {
		t.Error("a fold does not end")
	}
}

// TestMarks recognises what footing wrote, and nothing else.
func TestMarks(t *testing.T) {
	a := demo(t, "kelp.csv")
	seen := map[string]bool{}
	for _, form := range Forms {
		if len(form.Marks) == 0 {
			t.Errorf("form %s has no mark", form.Name)
		}
		if seen[form.Name] {
			t.Errorf("two forms are called %s", form.Name)
		}
		seen[form.Name] = true
		if raw := written(t, form, a); !WrittenHere(raw[:min(len(raw), HeadLength)]) {
			t.Errorf("form %s: its own file is not recognised: %q", form.Name, raw[:80])
		}
	}
	if !WrittenHere(Figure([]byte("<svg/>"))) {
		t.Error("a figure is not recognised")
	}
	for _, other := range []string{"", "site,growth\n", "{\"format\": \"footing-audit/1\"}", "# footing-audit/1", "<svg/>", `{"$schema": "` + sarifSchema + `"}`, xml.Header + "<testsuites name=\"footing\"/>"} {
		if WrittenHere([]byte(other)) {
			t.Errorf("%q is taken for footing's own", other)
		}
	}
}

func TestFormOf(t *testing.T) {
	cases := map[string]string{
		"a.md": "markdown", "a.JSON": "json", "a.sarif": "sarif", "a.sarif.json": "sarif", "a.xml": "junit", "a.txt": "text", "a.csv": "", "md": "",
	}
	for path, want := range cases {
		got := ""
		if f := FormOf(path); f != nil {
			got = f.Name
		}
		if got != want {
			t.Errorf("%s: %q, want %q", path, got, want)
		}
	}
}

func TestInert(t *testing.T) {
	cases := []struct{ name, in, want string }{
		{"plain words stay", "slope of growth (n = 3)", "slope of growth (n = 3)"},
		{"markup", "a|b *c* _d_ `e` [f] <g>&", "a\\|b \\*c\\* \\_d\\_ \\`e\\` \\[f\\] &lt;g&gt;&amp;"},
		{"no one is notified", "@all", "@<!-- -->all"},
		{"nothing is linked", "http://a www.b #1", `http:<!-- -->//a www<!-- -->.b \#<!-- -->1`},
		{"no list begins", "- a", `\- a`},
		{"no numbered list begins", "12. a", `12\. a`},
		{"a decimal stays", "at 1.5", "at 1.5"},
		{"a break is shown", "a\nb", `a\\u000ab`},
	}
	for _, c := range cases {
		if got := inert(c.in); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

// TestSketch holds the drawing to its width and finds every row in it.
func TestSketch(t *testing.T) {
	a := demo(t, "kelp-clean.csv")
	for _, width := range []int{40, 80, 100} {
		count := 0
		for _, line := range sketch(a.result, width) {
			if n := len([]rune(line)); n > width {
				t.Errorf("width %d: a line of %d columns: %q", width, n, line)
			}
			_, drawn, found := strings.Cut(line, "|")
			if !found {
				continue
			}
			for _, r := range drawn {
				switch {
				case r == '.':
					count++
				case r >= '2' && r <= '9':
					count += int(r - '0')
				}
			}
		}
		if count != a.result.Model.RowsUsed {
			t.Errorf("width %d: %d rows are drawn of %d", width, count, a.result.Model.RowsUsed)
		}
	}
	if !strings.Contains(strings.Join(sketch(demo(t, "kelp.csv").result, 80), "\n"), "o") {
		t.Error("the row that a finding names is not marked")
	}
}
