package report

import "nightbook/schema"

// fillColumns makes the sheet of the data dictionary: what every column of the
// tables means, and every code.
func (r *Report) fillColumns(*schema.Summary) error {
	sheet := r.book.Sheet("Columns")
	if err := r.top(sheet, "Columns", "what stands in the tables of this run, and the codes of refused rows and warnings"); err != nil {
		return err
	}
	c := cells{sheet.Rows(tableHead), &r.look}
	if err := c.header(6, "Table", "Column", "Type", "Unit", "Null", "Meaning"); err != nil {
		return err
	}
	for _, t := range schema.Outputs {
		for _, col := range t.Columns {
			null := "may be"
			if col.Required {
				null = "never"
			}
			if err := r.words(c, t.Name, col.Name, col.Type.String(), col.Unit, null, col.Doc); err != nil {
				return err
			}
		}
	}
	for _, list := range []struct {
		name  string
		codes []schema.CodeDoc
	}{{"reject code", schema.RejectCodes}, {"warning code", schema.NoteCodes}, {"exercise reason", schema.ExerciseReasonDocs}} {
		for _, code := range list.codes {
			if err := r.words(c, list.name, code.Code, "", "", "", code.Doc); err != nil {
				return err
			}
		}
	}
	sheet.Widths(14, 22, 9, 34, 9, 110)
	sheet.Freeze(tableHead, 2)
	sheet.Filter(tableHead, 6, c.Next()-1)
	sheet.Print(tableHead, tableHead, false)
	return nil
}

// words writes a row of texts, leaving empty ones out.
func (r *Report) words(c cells, texts ...string) error {
	c.Begin(0, 0)
	for i, t := range texts {
		if t == "" {
			c.Jump(i + 2)
			continue
		}
		c.Text(r.look.text, t)
	}
	return c.End()
}
