package report

import (
	"fmt"

	"nightbook/schema"
	"nightbook/writer/xlsx"
)

// Exercise adds rows of the exercise table.
func (r *Report) Exercise(f *schema.Frame) error {
	r.exerciseSeen += int64(f.N)
	return r.exercise.Write(f, min(f.N, r.exercise.Room()))
}

// fillExercise completes the sheet of options to be exercised, whose rows are
// already there.
func (r *Report) fillExercise(*schema.Summary) error {
	sheet := r.book.Sheet("Exercise")
	r.exercise.Finish()
	widths := make([]float64, len(schema.ExerciseOut.Columns))
	for i := range schema.ExerciseOut.Columns {
		c := &schema.ExerciseOut.Columns[i]
		widths[i] = xlsx.WidthOf(c)
		if c.Name == "reason" {
			for _, word := range schema.ExerciseReasons {
				widths[i] = max(widths[i], float64(len(word)+2))
			}
		}
	}
	sheet.Widths(widths...)
	sheet.Print(tableHead-1, tableHead, false)
	note := "no American option is past its exercise boundary, and no call has less time value than its next dividend"
	if r.exerciseSeen > 0 {
		note = fmt.Sprintf("%s to exercise or to look at before an ex-date; of those sold, the holder decides", count(r.exerciseSeen, "American option"))
	}
	if shown := int64(r.exercise.Written()); shown < r.exerciseSeen {
		note += fmt.Sprintf("; first %s here", thousands(shown))
	}
	return r.top(sheet, "Early exercise", note+cutNote(sheet))
}
