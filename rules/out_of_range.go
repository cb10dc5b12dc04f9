package rules

import "footing/rules/remedy"

// OutOfRange asks for values beyond limits that were declared.
var OutOfRange = &Rule{
	Name:     "out-of-range",
	Family:   OfTable,
	Asks:     "Does a value lie beyond its declared limits?",
	Why:      "A value that cannot be is a slip, however well it lies with the others.",
	Method:   "compares each value with the limits declared for its column",
	Limit:    "asked only when limits are declared; no chance is involved, so no false alarms",
	Needs:    NeedsTable,
	Remedies: []*remedy.Remedy{remedy.GiveLimits},
	Run:      outOfRange,
}

func outOfRange(*Pass) (Outcome, error) {
	return notAsked("no limits are declared for any column"), nil
}
