package report

import "nightbook/schema"

// fillUnderlyings makes the sheet of underlyings.
func (r *Report) fillUnderlyings(s *schema.Summary) error {
	sheet := r.book.Sheet("Underlyings")
	t, err := r.book.NewTable(sheet, schema.UnderlyingsOut, tableHead)
	if err != nil {
		return err
	}
	f := s.UnderlyingsFrame()
	if err := t.Write(f, min(f.N, t.Room())); err != nil {
		return err
	}
	t.Finish()
	sheet.Print(tableHead-1, tableHead, true)
	note := count(int64(f.N), "underlying") + " with lines, by name; measures in the price currency and, with _base, in " + r.cfg.ReportingCurrency
	if t.Written() < f.N {
		note += "; first " + thousands(int64(t.Written())) + " here, all are in the underlyings table"
	}
	return r.top(sheet, "Underlyings", note)
}
