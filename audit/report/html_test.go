package report_test

import (
	"bytes"
	"encoding/xml"
	"fmt"
	"html"
	"io"
	"math"
	"os"
	"regexp"
	"runtime"
	"strings"
	"testing"

	"footing/audit"
	"footing/audit/figure"
	"footing/audit/report"
	"footing/readers"
	"footing/rules"
)

// columns are the roles of a table that is drawn.
type columns struct{ y, x, group, order, subject string }

func drawn(t testing.TB, name string, input []byte, c columns) *audit.Result {
	t.Helper()
	table, err := readers.Read(name, bytes.NewReader(input), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	nan := math.NaN()
	q := audit.Request{Draw: true, Settings: rules.Settings{
		Confidence: 0.95, FalseAlarm: 0.05, Seed: 1, SmallestDifference: nan, StatedSlope: nan, PredictorError: nan, Replicates: 199,
	}}
	q.Roles.Response, q.Roles.Group, q.Roles.Order, q.Roles.Subject = c.y, c.group, c.order, c.subject
	if c.x != "" {
		q.Roles.Predictors = []string{c.x}
	}
	r, err := audit.Table(table, q)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func page(t testing.TB, r *audit.Result) string {
	t.Helper()
	var b bytes.Buffer
	if err := report.HTML(&b, r, report.HTMLOptions{Version: "0.0.0", Command: "footing audit"}); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// samples are tables with much, little and nothing amiss.
var samples = []struct {
	name, file string
	columns
}{
	{"a demo with much amiss", "demo/kelp.csv", columns{y: "growth", x: "temperature", group: "site", order: "order"}},
	{"the demo put right", "demo/kelp-clean.csv", columns{y: "growth", x: "temperature", group: "site", order: "order"}},
	{"one group and one wild row", "reference/data/anscombe.csv", columns{y: "y3", x: "x3"}},
	{"means without a predictor", "reference/data/iris.csv", columns{y: "Sepal.Length", group: "Species"}},
	{"scatter that differs by group", "reference/data/iris.csv", columns{y: "Sepal.Length", x: "Sepal.Width", group: "Species"}},
	{"no scatter left", "reference/data/anscombe.csv", columns{y: "x1", x: "x2"}},
	{"no roles", "demo/kelp.csv", columns{}},
}

func eachSample(t *testing.T, check func(t *testing.T, r *audit.Result)) {
	for _, s := range samples {
		t.Run(s.name, func(t *testing.T) {
			input, err := os.ReadFile("../../testdata/" + s.file)
			if err != nil {
				t.Fatal(err)
			}
			check(t, drawn(t, s.file, input, s.columns))
		})
	}
}

var tags = regexp.MustCompile(`(?s)<style>.*?</style>|<[^>]*>`)

// said is the text of a page as a reader sees it.
func said(page string) string {
	return strings.Join(strings.Fields(html.UnescapeString(tags.ReplaceAllString(page, " "))), " ")
}

// TestHTMLSaysAll holds the page to the result: the verdict, both answers, every
// finding with its state and each remedy tried.
func TestHTMLSaysAll(t *testing.T) {
	eachSample(t, func(t *testing.T, r *audit.Result) {
		text := said(page(t, r))
		want := append([]string{strings.ToUpper(string(r.Verdict.State)), r.Verdict.Summary[1:], r.Input.SHA256}, r.Verdict.Quote...)
		want = append(want, r.Verdict.DoNotQuote...)
		for _, f := range r.Findings {
			want = append(want, f.Rule, f.Message)
			for _, remedy := range f.Remedies {
				if remedy.Tried {
					want = append(want, remedy.Text)
				}
			}
		}
		for _, w := range want {
			if !strings.Contains(text, strings.Join(strings.Fields(w), " ")) {
				t.Errorf("the page does not say %q", w)
			}
		}
	})
}

// TestHTMLStandsAlone looks for anything that a browser would fetch or run.
func TestHTMLStandsAlone(t *testing.T) {
	reaches := regexp.MustCompile(`(?i)<script|<link|<img|<iframe|<object|<embed|@import|\ssrc=|url\((?:[^#]|#[^f])|\son\w+=|href="[^#]`)
	eachSample(t, func(t *testing.T, r *audit.Result) {
		if at := reaches.FindString(page(t, r)); at != "" {
			t.Errorf("the page has %q", at)
		}
	})
}

// undefined is what a figure without a value would look like.
var undefined = regexp.MustCompile(`NaN|[+-]Inf|undefined|unbounded`)

// TestFigures holds every figure to being XML with a title and a description,
// to figures that are no NaN, and to standing beside a finding that is there.
func TestFigures(t *testing.T) {
	eachSample(t, func(t *testing.T, r *audit.Result) {
		state := map[string]audit.State{}
		for _, f := range r.Findings {
			state[f.Rule] = f.State
		}
		quiet := false
		for _, f := range figure.All(r) {
			if got := textOf(t, f.SVG, "title"); got != f.Title || got == "" {
				t.Errorf("%s: title %q, want %q", f.Name, got, f.Title)
			}
			if got := textOf(t, f.SVG, "desc"); got != f.Desc || !strings.ContainsAny(got, "0123456789") {
				t.Errorf("%s: description %q, want %q", f.Name, got, f.Desc)
			}
			if undefined.Match(f.SVG) {
				t.Errorf("%s: a figure that is not defined: %s\n%s", f.Name, f.Desc, f.SVG)
			}
			if f.Beside != "" && (state[f.Beside] == "" || state[f.Beside] == audit.Pass || state[f.Beside] == audit.Skip) {
				t.Errorf("%s stands beside %s, which is %q", f.Name, f.Beside, state[f.Beside])
			}
			if f.Beside != "" && quiet {
				t.Errorf("%s, which shows a finding, comes after one that shows none", f.Name)
			}
			quiet = quiet || f.Beside == ""
		}
	})
}

// textOf reads an element of a well-formed document.
func textOf(t *testing.T, document []byte, name string) string {
	t.Helper()
	d := xml.NewDecoder(bytes.NewReader(document))
	found, inside := "", false
	for {
		token, err := d.Token()
		if err == io.EOF {
			return found
		}
		if err != nil {
			t.Fatalf("not well formed: %v\n%s", err, document)
		}
		switch token := token.(type) {
		case xml.StartElement:
			inside = token.Name.Local == name
		case xml.EndElement:
			inside = false
		case xml.CharData:
			if inside {
				found += string(token)
			}
		}
	}
}

// TestFiguresShowWhatIsAmiss looks for the wild row of the demo in the figures
// that make it visible, and for all eight figures where an order is known.
func TestFiguresShowWhatIsAmiss(t *testing.T) {
	input, err := os.ReadFile("../../testdata/demo/kelp.csv")
	if err != nil {
		t.Fatal(err)
	}
	beside := map[string]string{}
	for _, f := range figure.All(drawn(t, "kelp.csv", input, samples[0].columns)) {
		beside[f.Name] = f.Beside
		switch f.Name {
		case figure.Data, figure.Residuals, figure.Pulls:
			if !bytes.Contains(f.SVG, []byte("row 30")) || !strings.Contains(f.Desc, "30") {
				t.Errorf("%s does not mark row 30: %s", f.Name, f.Desc)
			}
		}
	}
	want := map[string]string{
		figure.Data: "missing-codes", figure.Residuals: "outliers", figure.Pulls: "influence", figure.Quantiles: "normality",
		figure.Sizes: "", figure.Order: "", figure.Remedies: "", figure.Power: "",
	}
	for name, rule := range want {
		if got, drawn := beside[name]; !drawn || got != rule {
			t.Errorf("%s is drawn: %v, beside %q, want %q", name, drawn, got, rule)
		}
	}
}

// TestHTMLIsInert writes hostile text into every place that a table has for it
// and looks for it alive in the page.
func TestHTMLIsInert(t *testing.T) {
	hostile := []string{
		`<script>alert(1)</script>`, `\"><img src=x onerror=alert(1)>`, `</title></style></svg><b>`, "a\u202egnp.exe", `javascript:alert(1)`, "\x1b[31mred", `&lt;{{.}}]]>`, "zero\u200bwidth",
	}
	for k, label := range hostile {
		t.Run(fmt.Sprint(k), func(t *testing.T) {
			quoted := `"` + strings.ReplaceAll(label, `"`, `""`) + `"`
			var b strings.Builder
			fmt.Fprintf(&b, "%s,y,%s\n", quoted, strings.Replace(quoted, `"`, `"x `, 1))
			for i := range 40 {
				group := strings.Replace(quoted, `"`, `"in `, 1) // a label that is a header would be one
				if i%2 == 0 || strings.Contains(label, "\x1b") && i > 1 {
					group = "plain"
				}
				v := fmt.Sprint(float64(i*37%40) / 3)
				if i == 17 {
					v = quoted // a cell that is no number
				}
				if i == 21 {
					v = "900"
				}
				fmt.Fprintf(&b, "%s,%s,%d\n", group, v, i)
			}
			table, err := readers.Read(label+".csv", strings.NewReader(b.String()), readers.Options{})
			if err != nil {
				t.Fatal(err)
			}
			r := drawn(t, label+".csv", []byte(b.String()), columns{y: "y", x: table.Columns[2].Title(), group: table.Columns[0].Title()})
			out := page(t, r)
			for _, bad := range []string{"<script", "<img", "<b>alert", "</title></style>", "\u202e", "\u200b", "\x1b"} {
				if strings.Contains(out, bad) {
					at := strings.Index(out, bad)
					t.Errorf("the page has %q: %q", bad, out[max(0, at-80):at+40])
				}
			}
			for _, f := range figure.All(r) {
				textOf(t, f.SVG, "title")
			}
		})
	}
}

// survey is a table of n rows in three groups with a wild row, without chance.
func survey(n int) []byte {
	var b bytes.Buffer
	b.WriteString("site,depth (m),growth (mm),turn\n")
	state := uint64(1)
	noise := func() float64 { // sum of twelve numbers of a linear congruential generator
		sum := -6.0
		for range 12 {
			state = state*6364136223846793005 + 1442695040888963407
			sum += float64(state>>11) / (1 << 53)
		}
		return sum
	}
	for i := range n {
		x := 10 + 3*noise()
		y := 2 + 0.5*x + noise()*(0.4+x/20)
		if i == n/2 {
			y += 30
		}
		site := 'a' + i%3
		if i == 1500 {
			site = 'A' // a label in two spellings, in a row that is not far from any other
		}
		fmt.Fprintf(&b, "%c,%.3f,%.3f,%d\n", site, x, y, i+1)
	}
	return b.Bytes()
}

var surveyColumns = columns{y: "growth", x: "depth", group: "site", order: "turn"}

// TestHTMLSize holds the page of 200 rows under 500 kB, and that of a table
// whose points are thinned under 2 MB; the latter says so and keeps its wild row.
func TestHTMLSize(t *testing.T) {
	small := page(t, drawn(t, "small.csv", survey(200), surveyColumns))
	if len(small) > 500_000 {
		t.Errorf("200 rows make %d bytes", len(small))
	}
	if strings.Contains(small, "are drawn: those that are named") {
		t.Error("200 rows are thinned")
	}
	if testing.Short() {
		t.Skip("a large table takes seconds")
	}
	const rows = 6000
	r := drawn(t, "large.csv", survey(rows), surveyColumns)
	large := page(t, r)
	if len(large) > 2_000_000 {
		t.Errorf("%d rows make %d bytes", rows, len(large))
	}
	if n := len(r.Drawing.Points); n < 2000 || n > 2500 {
		t.Errorf("%d of %d rows are drawn", n, rows)
	}
	if !strings.Contains(said(large), fmt.Sprintf("%d of the %d rows are drawn", len(r.Drawing.Points), rows)) {
		t.Error("the page does not say that rows are left out")
	}
	points := map[int]bool{}
	for _, p := range r.Drawing.Points {
		points[p.Row] = true
	}
	for _, f := range r.Findings {
		for _, w := range f.Where {
			if f.Rule == "label-variants" && !points[*w.Row] {
				t.Errorf("row %d, which label-variants names, is not drawn", *w.Row)
			}
		}
		if f.Rule == "label-variants" && len(f.Where) == 0 {
			t.Error("label-variants names no row")
		}
	}
	wild := fmt.Sprintf("row %d", rows/2+2)
	for _, f := range figure.All(r) {
		if f.Name == figure.Residuals && !bytes.Contains(f.SVG, []byte(wild)) {
			t.Errorf("the residuals do not mark %s: %s", wild, f.Desc)
		}
	}
}

// TestHTMLIsTheSameEveryTime writes the page on one core and on two.
func TestHTMLIsTheSameEveryTime(t *testing.T) {
	before := runtime.GOMAXPROCS(1)
	defer runtime.GOMAXPROCS(before)
	one := page(t, drawn(t, "small.csv", survey(120), surveyColumns))
	runtime.GOMAXPROCS(2)
	if two := page(t, drawn(t, "small.csv", survey(120), surveyColumns)); one != two {
		t.Error("two cores make another page")
	}
}

func BenchmarkHTML(b *testing.B) {
	r := drawn(b, "small.csv", survey(200), surveyColumns)
	b.ResetTimer()
	for range b.N {
		if err := report.HTML(io.Discard, r, report.HTMLOptions{}); err != nil {
			b.Fatal(err)
		}
	}
}
