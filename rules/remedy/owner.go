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
		Name: "leave-out-constant",
		Do:   "leave the column out, then run again",
	}
	AddGroup = &Remedy{
		Name: "add-group",
		Do:   "give the column as --group, then run again",
	}
	LookUp = &Remedy{
		Name: "look-up",
		Do:   "look the values up where they were first written down, and enter them as numbers",
	}
	Calculate = &Remedy{
		Name: "calculate",
		Do:   "open the workbook, let it calculate, save it and run again",
	}
	ExplainGaps = &Remedy{
		Name: "explain-gaps",
		Do:   "find out why values are missing just there, and say it beside the answers; the rows that are left do not stand for those that are gone",
	}
	SayLimits = &Remedy{
		Name: "say-limits",
		Do:   "say how many values lay beyond the limit beside every answer, or use a method for censored values; do not put the limit itself in their place",
	}
	QuoteFields = &Remedy{
		Name: "quote-fields",
		Do:   "put the field that holds the delimiter in double quotes, or export the table again, then run again",
	}
	CheckStray = &Remedy{
		Name: "check-stray",
		Do:   "if the rows are measurements, bring them into the columns of the header; if not, delete them or move them to another sheet",
	}
	OneLabelEach = &Remedy{
		Name: "one-label-each",
		Do:   "find out whether the same thing was measured twice or a label was mistyped; if it was measured twice, name the column with --subject",
	}
	AskReading = &Remedy{
		Name: "ask-reading",
		Do:   "ask how the values were read and rounded; if some were read more coarsely, say so, and give the finer reading where it is on record",
	}
	AskLimit = &Remedy{
		Name: "ask-limit",
		Do:   "find out whether the instrument, the scale or the sheet stops at this value; if it does, these are limits and not measurements",
	}
	NameOrder = &Remedy{
		Name: "name-order",
		Do:   "name the column that holds the order of measuring with --order; if the rows stand in that order, add a column that counts them",
	}
	CountModel = &Remedy{
		Name: "count-model",
		Do:   "if the values are counts, scores or yes and no, use a method for such; if they were rounded, enter them as they were read",
	}
	GiveLimits = &Remedy{
		Name: "give-limits",
		Do:   "correct the named cells, or the limits if they are too narrow",
	}
	ApartAgain = &Remedy{
		Name: "apart-again",
		Do:   "lay the rows together by their labels, so that each row holds the values of one label, then run again",
	}
)
