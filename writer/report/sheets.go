package report

import "nightbook/schema"

// sheets are the sheets of the workbook, in order, each with what fills it when
// the run is over. To add a sheet: one file with its fill, one line here.
var sheets = []struct {
	name string
	fill func(*Report, *schema.Summary) error
}{
	{"Summary", (*Report).fillSummary},
	{"Books", (*Report).fillBooks},
	{"Underlyings", (*Report).fillUnderlyings},
	{"Lines", (*Report).fillLines},
	{"Exercise", (*Report).fillExercise},
	{"Rejects", (*Report).fillRejects},
	{"Warnings", (*Report).fillWarnings},
	{"Controls", (*Report).fillControls},
	{"Columns", (*Report).fillColumns},
}

func sheetNames() []string {
	var names []string
	for _, s := range sheets {
		names = append(names, s.name)
	}
	return names
}
