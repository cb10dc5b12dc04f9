package report

import (
	"crypto/sha256"
	"encoding/hex"
	"io"
	"net/url"
	"path/filepath"
	"slices"
	"strings"

	"footing/audit"
	"footing/readers"
	"footing/rules"
	"footing/rules/wording"
)

const sarifSchema = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"

var sarifForm = &Form{
	Name: "sarif", Extensions: []string{".sarif", ".sarif.json"},
	Marks: []string{"{\n  \"$schema\": \"" + sarifSchema + "\",\n  \"version\": \"2.1.0\",\n  \"runs\": [\n    {\n      \"tool\": {\n        \"driver\": {\n          \"name\": \"footing\","},
	Write: func(w io.Writer, r *audit.Result, o Options) error { return SARIF(w, r, o.Version, o.Spans) },
}

// The objects of SARIF 2.1.0 (OASIS, errata 01) that a report of footing has; section
// numbers are those of the standard.
type sarifLog struct {
	Schema  string     `json:"$schema"`
	Version string     `json:"version"`
	Runs    []sarifRun `json:"runs"`
}

type sarifRun struct {
	Tool        sarifTool         `json:"tool"`
	Invocations []sarifInvocation `json:"invocations"`
	Artifacts   []sarifArtifact   `json:"artifacts"`
	Language    string            `json:"language"`
	Newlines    []string          `json:"newlineSequences"`
	ColumnKind  string            `json:"columnKind"` // 3.14.17
	Results     []sarifResult     `json:"results"`
	Properties  sarifProperties   `json:"properties"`
}

type sarifTool struct {
	Driver sarifDriver `json:"driver"`
}

type sarifDriver struct {
	Name     string      `json:"name"`
	Version  string      `json:"version"`
	Language string      `json:"language"`
	Rules    []sarifRule `json:"rules"`
}

type sarifText struct {
	Text string `json:"text"`
}

type sarifRule struct {
	ID    string    `json:"id"`
	Short sarifText `json:"shortDescription"`
	Full  sarifText `json:"fullDescription"`
	Help  sarifText `json:"help"`
}

type sarifInvocation struct {
	Successful    bool                `json:"executionSuccessful"`
	Notifications []sarifNotification `json:"toolExecutionNotifications"`
}

type sarifNotification struct {
	Level   string         `json:"level"`
	Message sarifText      `json:"message"`
	Rule    *sarifRuleLink `json:"associatedRule,omitempty"`
}

type sarifRuleLink struct {
	ID    string `json:"id"`
	Index int    `json:"index"`
}

type sarifArtifact struct {
	Location sarifArtifactLocation `json:"location"`
	Hashes   map[string]string     `json:"hashes,omitempty"`
}

type sarifArtifactLocation struct {
	URI string `json:"uri"`
}

type sarifResult struct {
	RuleID       string             `json:"ruleId"`
	RuleIndex    int                `json:"ruleIndex"`
	Level        string             `json:"level"`
	Message      sarifText          `json:"message"`
	Locations    []sarifLocation    `json:"locations"`
	Fingerprints map[string]string  `json:"partialFingerprints"`
	Suppressions []sarifSuppression `json:"suppressions,omitempty"`
}

type sarifSuppression struct {
	Kind          string `json:"kind"`
	Justification string `json:"justification"`
}

type sarifLocation struct {
	Physical sarifPhysical  `json:"physicalLocation"`
	Logical  []sarifLogical `json:"logicalLocations,omitempty"`
}

type sarifPhysical struct {
	Artifact sarifArtifactLocation `json:"artifactLocation"`
	Region   *sarifRegion          `json:"region,omitempty"`
}

type sarifRegion struct {
	StartLine   int `json:"startLine"`
	StartColumn int `json:"startColumn,omitempty"`
	EndLine     int `json:"endLine,omitempty"`
	EndColumn   int `json:"endColumn,omitempty"`
}

type sarifLogical struct {
	Name string `json:"name"`
	Full string `json:"fullyQualifiedName"`
	Kind string `json:"kind"`
}

type sarifProperties struct {
	Verdict    string   `json:"verdict"`
	Summary    string   `json:"summary"`
	Quote      []string `json:"quote"`
	DoNotQuote []string `json:"do_not_quote"`
}

// mostLocations is how many places a result carries; its message says how many
// there are.
const mostLocations = 100

// SARIF writes the result as a log of SARIF 2.1.0: a result for each finding that
// is a stop, a warning or thin. Passes and checks that do not apply are
// notifications of the run, since many readers take every result for an alert.
// spans, which may be nil, finds the characters of a field in a text file.
func SARIF(w io.Writer, r *audit.Result, version string, spans func([]readers.Pos) map[readers.Pos]readers.Span) error {
	s := sarifWriter{r: r, uri: fileURI(r.Input.File)}
	if spans != nil {
		s.spans = spans(s.fields())
	}
	run := sarifRun{
		Tool:       sarifTool{Driver: sarifDriver{Name: "footing", Version: version, Language: "en-US", Rules: []sarifRule{}}},
		Language:   "en-US",
		Newlines:   []string{"\r\n", "\n", "\r"}, // as readers takes line ends
		ColumnKind: "unicodeCodePoints", Results: []sarifResult{},
		Artifacts:  []sarifArtifact{{Location: sarifArtifactLocation{s.uri}, Hashes: map[string]string{"sha-256": r.Input.SHA256}}},
		Properties: sarifProperties{Verdict: string(r.Verdict.State), Summary: r.Verdict.Summary, Quote: r.Verdict.Quote, DoNotQuote: denied(r)},
	}
	told := []sarifNotification{{Level: "none", Message: sarifMessage(answerLines(r)...)}}
	index := map[string]int{}
	for _, rule := range rules.All {
		if !slices.ContainsFunc(r.Findings, func(f audit.Finding) bool { return f.Rule == rule.Name }) {
			continue
		}
		index[rule.Name] = len(run.Tool.Driver.Rules)
		run.Tool.Driver.Rules = append(run.Tool.Driver.Rules, sarifRuleOf(rule))
	}
	for k := range r.Findings {
		f := &r.Findings[k]
		level := sarifLevel(f.State)
		if level == "none" {
			text := f.Rule + ": " + string(f.State) + ": " + message(f)
			told = append(told, sarifNotification{Level: level, Message: sarifMessage(text), Rule: &sarifRuleLink{ID: f.Rule, Index: index[f.Rule]}})
			continue
		}
		run.Results = append(run.Results, s.result(f, level, index[f.Rule]))
	}
	run.Invocations = []sarifInvocation{{Successful: true, Notifications: told}}
	return writeJSON(w, sarifLog{Schema: sarifSchema, Version: "2.1.0", Runs: []sarifRun{run}})
}

func sarifLevel(s audit.State) string {
	switch s {
	case audit.Stop:
		return "error"
	case audit.Warn:
		return "warning"
	case audit.Thin:
		return "note"
	}
	return "none"
}

// sarifMessage makes a message of lines in which nothing is a link or a
// placeholder (3.11.5, 3.11.6).
func sarifMessage(lines ...string) sarifText {
	for i, line := range lines {
		lines[i] = sarifEscape.Replace(wording.Printable(line))
	}
	return sarifText{strings.Join(lines, "\n")}
}

var sarifEscape = strings.NewReplacer("[", `\[`, "]", `\]`, "{", "{{", "}", "}}")

func sarifRuleOf(rule *rules.Rule) sarifRule {
	help := []string{"Method: " + wording.Sentence(rule.Method), "Breached: " + wording.Sentence(rule.Limit)}
	for _, remedy := range rule.Remedies {
		help = append(help, "To do: "+remedy.Name+": "+wording.Stop(remedy.Do))
	}
	return sarifRule{
		ID: rule.Name, Short: sarifMessage(rule.Asks), Full: sarifMessage(wording.Sentence(rule.Why)), Help: sarifMessage(help...),
	}
}

// sarifWriter holds what the results of one run share.
type sarifWriter struct {
	r     *audit.Result
	uri   string
	spans map[readers.Pos]readers.Span
}

func (s *sarifWriter) result(f *audit.Finding, level string, index int) sarifResult {
	text := []string{message(f)}
	if n := len(f.Where); n > mostLocations {
		text = append(text, "There are "+wording.Count(n, "place")+"; the first "+wording.Count(mostLocations, "place")+" are given.")
	}
	for _, words := range remedyWords(f) {
		text = append(text, "To do: "+words)
	}
	result := sarifResult{
		RuleID: f.Rule, RuleIndex: index, Level: level, Message: sarifMessage(text...),
		Locations: []sarifLocation{}, Fingerprints: map[string]string{"footing/1": fingerprint(f)},
	}
	for k, place := range f.Where {
		if k == mostLocations {
			break
		}
		result.Locations = append(result.Locations, s.location(place))
	}
	if len(f.Where) == 0 {
		result.Locations = append(result.Locations, sarifLocation{Physical: sarifPhysical{Artifact: sarifArtifactLocation{s.uri}}})
	}
	if f.Waived != nil {
		result.Suppressions = []sarifSuppression{{Kind: "external", Justification: wording.Printable(*f.Waived)}}
	}
	return result
}

// location is a place as line and characters for a text file, and as a cell for
// both kinds of file.
func (s *sarifWriter) location(place audit.Place) sarifLocation {
	l := sarifLocation{Physical: sarifPhysical{Artifact: sarifArtifactLocation{s.uri}}}
	pos := s.position(place)
	if s.r.Input.Sheet == nil && pos.Row > 0 {
		l.Physical.Region = &sarifRegion{StartLine: pos.Row}
		if span, ok := s.spans[pos]; ok {
			l.Physical.Region = &sarifRegion{StartLine: span.Line, StartColumn: span.Column, EndLine: span.EndLine, EndColumn: span.EndColumn}
		}
	}
	address := ""
	switch {
	case place.Cell != nil:
		address = *place.Cell
	case pos.Column > 0:
		address = readers.Letter(pos.Column - 1)
	default:
		return l
	}
	logical := sarifLogical{Name: address, Full: address, Kind: "cell"}
	if place.Cell == nil {
		logical.Kind = "column"
	}
	if sheet := s.r.Input.Sheet; sheet != nil {
		logical.Full = readers.LogicalName(wording.Printable(*sheet), address)
	}
	l.Logical = []sarifLogical{logical}
	return l
}

// position is where a place is in the file; a whole column is where its header
// stands.
func (s *sarifWriter) position(place audit.Place) readers.Pos {
	var p readers.Pos
	switch {
	case place.Cell != nil:
		p.Column = readers.LetterIndex(*place.Cell) + 1
	case place.Column != nil:
		for _, c := range s.r.Input.Columns {
			if c.Name == *place.Column {
				p.Column = readers.LetterIndex(c.Letter) + 1
				break
			}
		}
	}
	switch {
	case place.Row != nil:
		p.Row = *place.Row
	case place.Column != nil:
		p.Row = s.r.Input.HeaderRow
	}
	return p
}

// fields lists the positions of all places that results will have.
func (s *sarifWriter) fields() []readers.Pos {
	var all []readers.Pos
	for k := range s.r.Findings {
		f := &s.r.Findings[k]
		if sarifLevel(f.State) == "none" {
			continue
		}
		for _, place := range f.Where[:min(len(f.Where), mostLocations)] {
			if p := s.position(place); p.Row > 0 && p.Column > 0 {
				all = append(all, p)
			}
		}
	}
	return all
}

// fingerprint tells a finding again in a later state of the table: it is made of
// the rule and, for each place, of column, value and the row's label. Row numbers
// are no part of it, so that rows added above change nothing; nor is the order of
// the places.
func fingerprint(f *audit.Finding) string {
	text := func(s *string) string {
		if s == nil {
			return ""
		}
		return *s
	}
	var places []string
	for _, w := range f.Where {
		places = append(places, text(w.Column)+"\x1f"+text(w.Value)+"\x1f"+text(w.Label))
	}
	slices.Sort(places)
	sum := sha256.Sum256([]byte(f.Rule + "\x1e" + strings.Join(places, "\x1e")))
	return hex.EncodeToString(sum[:16])
}

// fileURI writes a file's name as a URI reference: relative as the file was
// named, or absolute.
func fileURI(file string) string {
	slashed := filepath.ToSlash(file)
	u := url.URL{Path: slashed}
	if filepath.IsAbs(file) {
		u.Scheme = "file"
		if !strings.HasPrefix(slashed, "/") {
			u.Path = "/" + slashed
		}
	}
	return u.String()
}
