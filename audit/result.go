package audit

import (
	"encoding/json"
	"math"
)

// Format names the version of the result's JSON contract.
const Format = "footing-audit/1"

// Number is a figure at full precision; NaN and infinities, which mean that a
// figure is not defined, are null in JSON.
type Number float64

// MarshalJSON writes null for what is not finite.
func (n Number) MarshalJSON() ([]byte, error) {
	v := float64(n)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return []byte("null"), nil
	}
	return json.Marshal(v)
}

// Defined reports whether the figure is finite.
func (n Number) Defined() bool { return !math.IsNaN(float64(n)) && !math.IsInf(float64(n), 0) }

// State is what a finding comes to.
type State string

// The states of a finding.
const (
	Pass State = "pass" // nothing found
	Thin State = "thin" // nothing found, but these rows could hardly have shown it
	Warn State = "warn" // a breach, and the answers hold
	Stop State = "stop" // a breach that changes an answer, or no answer is possible
	Skip State = "skip" // does not apply
)

// Grade is the verdict of an audit.
type Grade string

// The verdicts, from worst to best.
const (
	Unsound   Grade = "unsound"
	Guarded   Grade = "guarded"
	Tentative Grade = "tentative"
	Firm      Grade = "firm"
)

// Standing is what may be done with one answer.
type Standing string

// The standings of an answer.
const (
	Quote      Standing = "quote"
	QuoteWith  Standing = "quote-with" // only beside a remedy's figure or a named caution
	DoNotQuote Standing = "do-not-quote"
)

// Result is everything an audit found, as data. Reports are written from it
// and compute nothing.
type Result struct {
	Format     string      `json:"format"`
	Input      Input       `json:"input"`
	Model      *Model      `json:"model"`
	Slopes     []Slope     `json:"slopes"`
	Means      []Mean      `json:"means,omitempty"`
	Difference *Difference `json:"difference"`
	// NotCompared says why there is no difference; nil when there is one.
	NotCompared *string      `json:"not_compared"`
	Calibration *Calibration `json:"calibration"`
	Findings    []Finding    `json:"findings"`
	Rows        []Row        `json:"rows,omitempty"`
	Suggested   *Suggestion  `json:"suggested,omitempty"`
	Verdict     Verdict      `json:"verdict"`

	// Drawing is what figures show besides; nil unless asked for.
	Drawing *Drawing `json:"-"`
}

// Input is what was read.
type Input struct {
	File      string   `json:"file"`
	Sheet     *string  `json:"sheet"`
	SHA256    string   `json:"sha256"`
	Rows      int      `json:"rows"`
	HeaderRow int      `json:"header_row"`
	Reading   Reading  `json:"reading"`
	Columns   []Column `json:"columns"`
}

// Reading is how the file was interpreted; Delimiter is null for a workbook.
type Reading struct {
	Encoding  *string  `json:"encoding"`
	Delimiter *string  `json:"delimiter"`
	Decimal   *string  `json:"decimal"`
	Notes     []string `json:"notes"`
}

// Column is one column of the table. The values are null unless it holds
// numbers.
type Column struct {
	Name     string   `json:"name"`
	Unit     *string  `json:"unit"`
	Kind     string   `json:"kind"`
	Letter   string   `json:"column"`
	Role     *string  `json:"role"`
	Present  int      `json:"present"`
	Missing  int      `json:"missing"`
	Distinct int      `json:"distinct"`
	Min      Number   `json:"min"`
	Median   Number   `json:"median"`
	Max      Number   `json:"max"`
	Doubts   []string `json:"doubts"` // names of the rules that found something in it
}

// Model is what was fitted.
type Model struct {
	Response       string          `json:"response"`
	Predictors     []string        `json:"predictors"`
	Group          *string         `json:"group"`
	Covariates     []string        `json:"covariates"`
	Subject        *string         `json:"subject"`
	Order          *string         `json:"order"`
	CommonSlope    bool            `json:"common_slope"`
	Confidence     Number          `json:"confidence"`
	RowsUsed       int             `json:"rows_used"`
	RowsSetAside   []RowSetAside   `json:"rows_set_aside"`
	Parameters     int             `json:"parameters"`
	ResidualDF     int             `json:"residual_df"`
	ResidualSD     Number          `json:"residual_sd"`
	RSquared       Number          `json:"r_squared"`
	AdjRSquared    Number          `json:"adjusted_r_squared"`
	CovariateTerms []CovariateTerm `json:"covariate_terms"`
}

// RowSetAside is a row that was not used.
type RowSetAside struct {
	Row    int     `json:"row"`
	Cell   *string `json:"cell"`
	Reason string  `json:"reason"`
}

// CovariateTerm is the coefficient of a further predictor, a covariate, a
// level of one, or under one common slope a group's offset from the first.
type CovariateTerm struct {
	Name     string `json:"name"`
	Estimate Number `json:"estimate"`
	SE       Number `json:"se"`
	HC3SE    Number `json:"hc3_se"`
}

// Slope is the first answer for one group; Group is null for a slope that all
// rows share.
type Slope struct {
	Group     *string   `json:"group"`
	Rows      int       `json:"rows"`
	Standing  Standing  `json:"standing"`
	Because   []string  `json:"because"`
	Slope     Number    `json:"slope"`
	Intercept Number    `json:"intercept"`
	SE        Number    `json:"se"`
	DF        Number    `json:"df"`
	T         Number    `json:"t"`
	P         Number    `json:"p"`
	CI        [2]Number `json:"ci"`
	RSquared  Number    `json:"r_squared"`
	PooledSE  Number    `json:"pooled_se"`
	HC3SE     Number    `json:"hc3_se"`
	Stated    *Stated   `json:"stated"`
}

// Stated compares a slope with one that was stated beforehand.
type Stated struct {
	Slope   Number `json:"slope"`
	T       Number `json:"t"`
	P       Number `json:"p"`
	Differs bool   `json:"differs"`
}

// Mean takes the place of a slope in a model without predictor.
type Mean struct {
	Group    string    `json:"group"`
	Rows     int       `json:"rows"`
	Standing Standing  `json:"standing"`
	Because  []string  `json:"because"`
	Mean     Number    `json:"mean"`
	SE       Number    `json:"se"`
	DF       Number    `json:"df"`
	CI       [2]Number `json:"ci"`
}

// Difference is the second answer.
type Difference struct {
	Standing   Standing  `json:"standing"`
	Because    []string  `json:"because"`
	F          Number    `json:"f"`
	DF         [2]Number `json:"df"`
	P          Number    `json:"p"`
	Detectable Number    `json:"detectable"`
	// Agreement is asked with a smallest difference that matters: "agree",
	// "differ", "differ-by-less" or "cannot-tell".
	Agreement *string `json:"agreement"`
	Pairs     []Pair  `json:"pairs"`
}

// Pair is the second group's slope or mean less the first's. With more than
// two groups CI is Tukey and Kramer's.
type Pair struct {
	Between    [2]string `json:"between"`
	Difference Number    `json:"difference"`
	SE         Number    `json:"se"`
	T          Number    `json:"t"`
	P          Number    `json:"p"`
	PHolm      Number    `json:"p_holm"`
	PTukey     Number    `json:"p_tukey"`
	CI         [2]Number `json:"ci"`
}

// Finding is what one rule says of the table.
type Finding struct {
	Rule          string         `json:"rule"`
	Family        string         `json:"family"`
	State         State          `json:"state"`
	Message       string         `json:"message"`
	Statistic     *string        `json:"statistic"`
	Value         Number         `json:"value"`
	DF            []Number       `json:"df"`
	P             Number         `json:"p"`
	PSimulated    Number         `json:"p_simulated"`
	PJoint        Number         `json:"p_joint"`
	Power         Number         `json:"power"` // chance to have caught the consequential breach here
	Breach        *string        `json:"consequential_breach"`
	ByPower       bool           `json:"thin_by_power"` // thin since these rows could hardly have shown a breach
	OnlyLimits    bool           `json:"only_limits"`   // never alarms: it limits what may be quoted
	Evidence      map[string]any `json:"evidence"`
	Where         []Place        `json:"where"`
	Remedies      []Remedy       `json:"remedies"`
	ConsequenceOf *string        `json:"consequence_of"`
	VanishesWith  *string        `json:"vanishes_with"` // the cure of the root that made this alarm go
	Waived        *string        `json:"waived"`
}

// Fails reports whether a finding is at or above the least state that makes an
// audit fail: "stop", "warn" or "thin"; any other word fails nothing. What is
// waived never does.
func (f *Finding) Fails(least string) bool {
	rank := map[State]int{Thin: 1, Warn: 2, Stop: 3}
	from, counts := rank[State(least)]
	return counts && f.Waived == nil && rank[f.State] >= from
}

// IsOpen tells findings that ask for a decision; a pass that is thin only for
// want of rows is told with the verdict.
func (f *Finding) IsOpen() bool {
	return f.State == Stop || f.State == Warn || (f.State == Thin && !f.ByPower)
}

// Calibration says how the rules whose alarms could be chance are held
// together.
type Calibration struct {
	Method     string   `json:"method"` // "simulated" or "formulas"
	Replicates int      `json:"replicates"`
	Seed       uint64   `json:"seed"`
	FalseAlarm Number   `json:"false_alarm"`
	Rules      []string `json:"rules"`
	// Missed says in words what the checks would have missed, nil for nothing.
	Missed *string `json:"missed"`
	// CaughtLeast and CaughtMost are the chance that any of the rules would have
	// alarmed at the consequential breach of one of them: over these, the least
	// and the greatest.
	CaughtLeast Number `json:"caught_least"`
	CaughtMost  Number `json:"caught_most"`
}

// Place is one address of a finding. Row and Cell are null for a whole column,
// Cell and Column for a whole row.
type Place struct {
	Row    *int    `json:"row"`
	Cell   *string `json:"cell"`
	Column *string `json:"column"`
	Value  *string `json:"value"`
	Label  *string `json:"label"` // of the row, where a column identifies the rows
}

// Remedy is one thing to do about a finding, with what a trial of it gave.
type Remedy struct {
	Remedy        string            `json:"remedy"`
	Text          string            `json:"text"`
	Under         string            `json:"under"` // in a sentence: "with row 30 left out"; "" when not tried
	Source        *string           `json:"source"`
	Tried         bool              `json:"tried"`
	Why           *string           `json:"why_not"` // why it was not tried
	Slopes        []TrialSlope      `json:"slopes"`
	Difference    *TrialDifference  `json:"difference"`
	AnswerChanges bool              `json:"answer_changes"`
	Judged        map[string]string `json:"judged"` // per answer: stands, weakens, strengthens or changes
}

// TrialSlope is a slope, or a mean, under a remedy.
type TrialSlope struct {
	Group *string   `json:"group"`
	Rows  int       `json:"rows"`
	Slope Number    `json:"slope"`
	SE    Number    `json:"se"`
	DF    Number    `json:"df"`
	P     Number    `json:"p"`
	CI    [2]Number `json:"ci"`
}

// TrialDifference is the second answer under a remedy.
type TrialDifference struct {
	F  Number    `json:"f"`
	DF [2]Number `json:"df"`
	P  Number    `json:"p"`
}

// Row holds the diagnostics of one used row.
type Row struct {
	Row         int     `json:"row"`
	Group       *string `json:"group"`
	Fitted      Number  `json:"fitted"`
	Residual    Number  `json:"residual"`
	Leverage    Number  `json:"leverage"`
	Internal    Number  `json:"studentized_internal"`
	External    Number  `json:"studentized_external"`
	Cook        Number  `json:"cook"`
	DFBETASlope Number  `json:"dfbetas_slope"` // of the slope of the row's own group
}

// Suggestion is the model that the columns suggest when no role is given.
type Suggestion struct {
	Command string   `json:"command"`
	Reasons []string `json:"reasons"`
}

// Verdict is what the audit comes to.
type Verdict struct {
	State      Grade    `json:"state"`
	Summary    string   `json:"summary"`
	Quote      []string `json:"quote"`
	DoNotQuote []string `json:"do_not_quote"`
}
