package remedy

// These can only be carried out by the owner of the table.
var (
	MendCells = &Remedy{
		Name: "mend-cells",
		Do:   "correct the named cells in the sheet, or empty them, then run again",
	}
	FillGaps = &Remedy{
		Name: "fill-gaps",
		Do:   "look the missing values up and enter them, or say why they are missing when you quote the answers",
	}
	MoreRows = &Remedy{
		Name: "more-rows",
		Do:   "measure more rows, at several different values of the predictor in each group",
	}
	LeaveOut = &Remedy{
		Name: "leave-out",
		Do:   "leave out one of the columns that carry the same information, then run again",
	}
	NameSubjects = &Remedy{
		Name: "average-subjects",
		Do:   "average the rows of each subject to one row, or use a method for repeated measurements; do not quote the intervals above as they are",
	}
	WidenRange = &Remedy{
		Name: "common-range",
		Do:   "compare the groups only where their predictor values overlap, or measure each group where the other was measured",
	}
	Transform = &Remedy{
		Name: "bend-the-model",
		Do:   "add the square of the predictor as a further column, or take logarithms if the response is a quantity that grows by factors; then run again",
	}
	EvenScatter = &Remedy{
		Name: "even-scatter",
		Do:   "quote the HC3 standard errors of the JSON report in place of the classical ones, or take logarithms if the scatter grows with the response",
	}
	LongTails = &Remedy{
		Name: "look-at-residuals",
		Do:   "look at the rows with the largest residuals; with many rows the interval of the slope stands up to this, with few it does not",
	}
	ModelOrder = &Remedy{
		Name: "model-order",
		Do:   "give the order as a covariate too, find out what drifted, or quote the slope only with this caution",
	}
)
