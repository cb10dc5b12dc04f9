// Package rules holds the checks of footing: the contract that each follows,
// the list of them, and one file per rule. A rule is data plus one function of
// its Pass; it proposes an answer, and package audit judges what follows.
package rules

import (
	"math"
	"slices"

	"footing/readers"
	"footing/rules/model"
	"footing/rules/remedy"
)

// Family tells what a rule looks at.
type Family string

// The two families.
const (
	OfTable Family = "table" // the table itself
	OfModel Family = "model" // the fitted model
)

// Needs is what must exist before a rule can be asked.
type Needs int

// What a rule needs, each including the ones before.
const (
	NeedsTable   Needs = iota // any table, with or without roles
	NeedsDesign               // roles, even if the fit fails
	NeedsFit                  // a fit
	NeedsScatter              // a fit that leaves residuals to judge from
)

// Concerns says which of the two answers a breach of a rule bears on.
type Concerns int

// Which answers a rule bears on.
const (
	Both Concerns = iota
	OnlySlopes
	OnlyDifference
)

// Rule is one check. The command explain, the table in README and the reports
// read this one literal.
type Rule struct {
	Name   string // words joined by hyphens; users type it
	Family Family
	Asks   string // the question, in one line
	Why    string // why it matters to whoever quotes the line
	Method string // how it is answered, and the source
	Limit  string // when it counts as breached, with what is known of false alarms
	Needs  Needs
	Bears  Concerns

	// OnlyLimits marks a rule that never alarms: it limits what may be quoted.
	OnlyLimits bool

	// Remedies are what can be done about a breach, in the order in which
	// they are tried.
	Remedies []*remedy.Remedy

	// AlwaysTry marks a rule whose remedies are tried without a breach too, since
	// their answers are the ones to quote.
	AlwaysTry bool

	// Chance is given by the rules whose alarms could be chance: they are held to
	// one joint rate of false alarms. It gives nil and the reason when the rule is
	// not asked of this design.
	Chance func(*Pass) (*Chance, string)

	Run func(*Pass) (Outcome, error)
}

// Settings are the choices of whoever asks, the same for every rule.
type Settings struct {
	Confidence         float64 // of every interval, in (0, 1)
	FalseAlarm         float64 // joint rate for the rules with tests, in (0, 1)
	SmallestDifference float64 // difference of slopes that matters; NaN when not stated
	StatedSlope        float64 // slope to compare with; NaN when none is stated
	PredictorError     float64 // the predictor's own SD of measurement; NaN when not declared
	Seed               uint64
	Replicates         int // of the simulated null; 0 for as many as the size of the table asks for
}

// Pass is all that a rule sees. It must not change any of it.
type Pass struct {
	Table    *readers.Table
	Columns  model.Columns
	Profiles Profiles      // kept between rules; nil works too, and is slower
	Design   *model.Design // nil when the table is only screened
	Fit      *model.Fit    // nil when there is none; then NoFit says why
	NoFit    *model.NoFit
	Answers  model.Answers // of Fit, at Settings.Confidence
	Settings Settings
	Joint    *Joint // the joint judgement of this rule's tests; nil for rules without
}

// Asked lists the columns that a table rule looks at: those with a role, or
// all when no role is given.
func (p *Pass) Asked() []*readers.Column {
	if p.Design == nil {
		return p.Table.Columns
	}
	return p.Columns.Used()
}

// Test is one test statistic in its usual scale, with its textbook p-value.
type Test struct {
	Name  string
	Value float64
	DF    []float64
	P     float64
}

// Joint is what the joint judgement says of a rule.
type Joint struct {
	Asked      bool
	Reason     string // why not asked
	Chance     *Chance
	Strong     int       // the member with the smallest p
	P          float64   // of the rule, over its members
	PJoint     float64   // held together over all rules with members
	Alarm      bool      // PJoint is at most the rate of false alarms, and the effect passes its floor
	Trouble    *Trouble  // the consequential breach whose power is told; nil when it is not
	Point      []float64 // per member the value that 5 % of sound tables reach; NaN where not simulated
	Power      float64   // chance to have caught the consequential breach here; NaN when not computed
	AnyPower   float64   // chance that any rule would have alarmed at it
	BelowFloor bool      // PJoint is small, and the effect does not matter
	Closed     bool      // p from formulas, not from simulation
}

// Detectable reports whether there would be an alarm but for the floor.
func (j *Joint) Detectable() bool { return !j.Alarm && j.BelowFloor }

// Strongest is the observed test of the member with the smallest p.
func (j *Joint) Strongest() Test { return j.Chance.Members[j.Strong].Test }

// First is the observed test that the report names.
func (j *Joint) First() Test { return j.Chance.Members[0].Test }

// Answer is what a rule says of its assumption.
type Answer int

// The four answers. The zero value is none, so that a forgotten one shows.
const (
	NoAnswer Answer = iota
	Sound
	Breach
	CannotTell
	NotAsked
)

// Outcome is what a rule returns.
type Outcome struct {
	Answer           Answer
	Message          string // one or two sentences; for NotAsked the reason
	Statistic        *Measure
	Evidence         map[string]any // figures beside the statistic, by their contract names
	Where            []Place
	Target           remedy.Target   // what the remedies act on
	Variants         []remedy.Target // further targets on which the remedies are tried too
	IfChanges        Answer          // the answer in place of Answer when a remedy changes an answer; NoAnswer for no such
	IfChangesMessage string          // and its message
	Advice           string          // what to do, where it depends on this table; else the remedies' own text
	Denies           []Question      // answers that cannot be given at all: with a breach, a stop
	Limits           []Limit         // what may not be quoted whatever the state
	Touches          []Question      // answers that need a caution; nil: all that the rule bears on
}

// Measure is a statistic with its degrees of freedom and p-value; P is NaN
// when there is none.
type Measure struct {
	Name  string
	Value float64
	DF    []float64
	P     float64
}

// Place points into the table. A negative Row means the whole column, a nil
// Column the whole row.
type Place struct {
	Row    int // index in the table
	Column *readers.Column
	Stray  int // row of the file that is no record of the table, and then all there is; else 0
}

// Question names one of the answers.
type Question struct {
	Difference bool
	Group      string // of the slope, when Difference is false
}

// Limit is a figure that may not be quoted. Of is the answer, and Sentence the
// reason, which will follow its name; Of is nil when the figure is neither a
// slope nor the difference, and Sentence then names it.
type Limit struct {
	Of       *Question
	Sentence string
}

// sound, breach and the like keep the rule files short.
func sound(message string) Outcome      { return Outcome{Answer: Sound, Message: message} }
func breach(message string) Outcome     { return Outcome{Answer: Breach, Message: message} }
func cannotTell(message string) Outcome { return Outcome{Answer: CannotTell, Message: message} }
func notAsked(reason string) Outcome    { return Outcome{Answer: NotAsked, Message: reason} }

// judged turns a joint alarm into a breach and its absence into sound; an alarm
// under the floor is sound and says so.
func judged(j *Joint, alarm, quiet string) Outcome {
	switch {
	case j.Alarm:
		return breach(alarm)
	case j.Detectable():
		return sound("detectable, but below what matters: " + j.Chance.Floor.Words)
	}
	return sound(quiet)
}

// measure makes the statistic of a test.
func (t Test) measure() *Measure {
	return &Measure{Name: t.Name, Value: t.Value, DF: t.DF, P: t.P}
}

// figure is a statistic without a p-value.
func figure(name string, value float64) *Measure {
	return &Measure{Name: name, Value: value, P: math.NaN()}
}

// row makes a place of a used row in the response column, where a reader of
// the report will look first.
func (p *Pass) row(i int) Place {
	return Place{Row: p.Design.Rows[i], Column: p.Columns.Response}
}

// ofRows lists the questions that the given used rows bear on: the slopes of
// their groups, and the difference.
func (p *Pass) ofRows(rows []int) []Question {
	if !p.Fit.QuotesOwnLines() {
		return nil
	}
	var all []Question
	for _, i := range rows {
		q := Question{Group: p.Design.Groups[p.Design.Group[i]]}
		if !slices.Contains(all, q) {
			all = append(all, q)
		}
	}
	return append(all, Question{Difference: true})
}

// slopeQuestions lists the questions of all slopes.
func (p *Pass) slopeQuestions() []Question {
	var all []Question
	for _, s := range p.Answers.Slopes {
		all = append(all, Question{Group: s.Group})
	}
	return all
}
