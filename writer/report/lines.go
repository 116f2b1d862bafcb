package report

import (
	"fmt"
	"strings"

	"nightbook/schema"
	"nightbook/writer/xlsx"
)

// fillLines completes the sheet of lines, whose rows are already there.
func (r *Report) fillLines(s *schema.Summary) error {
	sheet := r.book.Sheet("Lines")
	r.lines.Finish()
	sheet.Print(tableHead-1, tableHead, true)
	return r.top(sheet, "Lines", r.linesNote(s))
}

// linesNote says which lines are on the sheet, and where the others are.
func (r *Report) linesNote(s *schema.Summary) string {
	shown := int64(r.lines.Written())
	note := fmt.Sprintf("all %s", count(r.linesSeen, "line"))
	if shown < r.linesSeen {
		elsewhere := "the others are in no file: run with --formats parquet or csv"
		if len(s.LinesFiles) > 0 {
			elsewhere = "all are in " + strings.Join(s.LinesFiles, " and ")
		}
		note = fmt.Sprintf("first %s of %s; %s", thousands(shown), count(r.linesSeen, "line"), elsewhere)
	}
	if r.lines.Columns() < r.lineColumns {
		note += fmt.Sprintf("; first %s of %s", thousands(int64(r.lines.Columns())), count(int64(r.lineColumns), "column"))
	}
	return note + cutNote(r.book.Sheet("Lines"))
}

// cutNote says how many texts a sheet could not hold in full.
func cutNote(s *xlsx.Sheet) string {
	n := s.Cut()
	if n == 0 {
		return ""
	}
	return fmt.Sprintf("; %s too long for a cell and cut, marked so", count(int64(n), "text"))
}
