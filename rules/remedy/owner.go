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
)
