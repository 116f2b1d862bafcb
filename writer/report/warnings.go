package report

import "nightbook/schema"

// fillWarnings makes the sheet of warnings.
func (r *Report) fillWarnings(s *schema.Summary) error {
	sheet := r.book.Sheet("Warnings")
	t, err := r.book.NewTable(sheet, schema.WarningsOut, tableHead)
	if err != nil {
		return err
	}
	f := schema.NotesFrame(s.Notes)
	if err := t.Write(f, min(f.N, t.Room())); err != nil {
		return err
	}
	t.Finish()
	sheet.Widths(20, 24, 80, 18, 8, 10)
	sheet.Print(tableHead, tableHead, false)
	note := count(int64(f.N), "warning") + "; like ones are counted together"
	if t.Written() < f.N {
		note += "; first " + thousands(int64(t.Written())) + " here, all are in warnings.csv"
	}
	return r.top(sheet, "Warnings", note)
}
