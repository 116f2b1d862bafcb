package report

import (
	"fmt"

	"nightbook/schema"
)

// fillRejects completes the sheet of refused rows, whose rows are already there.
func (r *Report) fillRejects(s *schema.Summary) error {
	sheet := r.book.Sheet("Rejects")
	r.rejects.Finish()
	sheet.Widths(16, 10, 8, 16, 20, 18, 100, 80)
	sheet.Print(tableHead, tableHead, false)
	note := fmt.Sprintf("%s of the position file, as they came: they are in no total", count(s.Rejects, "row"))
	if s.Faults > 0 {
		note += fmt.Sprintf("; %s of market data", count(s.Faults, "row"))
	}
	if shown := int64(r.rejects.Written()); shown < r.rejectsSeen {
		note += fmt.Sprintf("; first %s of %s here, all are in rejects.csv", thousands(shown), thousands(r.rejectsSeen))
	}
	return r.top(sheet, "Rejects", note+cutNote(sheet))
}
