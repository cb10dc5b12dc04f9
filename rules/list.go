package rules

// All is the list of rules, in the order in which they are told. A new rule is
// one file, its test and one line here.
var All = []*Rule{
	// the table
	UnevenRows,
	StrayRows,
	HiddenCells,
	UncachedFormulas,
	SpreadsheetErrors,
	NumberFormat,
	MixedContent,
	CensoredValues,
	DatesAmongNumbers,
	MissingValues,
	MissingCodes,
	MissingPattern,
	LabelVariants,
	ReusedLabels,
	CopiedRows,
	RepeatedRun,
	SwappedCells,
	UnitShift,
	FarValues,
	OutOfRange,
	PileUp,
	RoundingHeaps,
	Continuity,
	ConstantColumn,
	OrderDrift,

	// the model; what makes other rules alarm comes first
	Collinearity,
	SampleSize,
	RepeatedSubjects,
	Linearity,
	ConstantVariance,
	Outliers,
	Influence,
	Leverage,
	Independence,
	Normality,
	PredictorError,
	Reversal,
	Fragility,
	GroupBalance,
	Overlap,
	SlopeContrast,
	InterceptRange,
}

// Named finds a rule by its name; nil when there is none.
func Named(name string) *Rule {
	for _, r := range All {
		if r.Name == name {
			return r
		}
	}
	return nil
}

// Names lists the names of all rules in the order of the list.
func Names() []string {
	names := make([]string, len(All))
	for i, r := range All {
		names[i] = r.Name
	}
	return names
}
