package report

import (
	"fmt"

	"nightbook/schema"
)

// fillControls makes the sheet of controls: whether the run agrees with itself,
// the totals to hold other systems against, and what was read.
func (r *Report) fillControls(s *schema.Summary) error {
	sheet := r.book.Sheet("Controls")
	list := controls(s)
	if err := r.top(sheet, "Controls", controlsNote(list)); err != nil {
		return err
	}
	c := cells{sheet.Rows(4), &r.look}
	if err := c.header(1, "Control", "Expected", "Found", "Difference", "Tolerance", "Result"); err != nil {
		return err
	}
	for i := range list {
		if err := r.controlRow(c, &list[i]); err != nil {
			return err
		}
	}
	for _, part := range []func(cells, *schema.Summary) error{r.controlTotals, r.rejectCounts, r.inputFiles} {
		c.Skip(1)
		if err := part(c, s); err != nil {
			return err
		}
	}
	sheet.Widths(44, 22, 22, 16, 16, 70)
	sheet.Freeze(4, 1)
	sheet.HideGrid()
	sheet.Print(4)
	return nil
}

func controlsNote(list []control) string {
	passed := 0
	for i := range list {
		if list[i].passes() {
			passed++
		}
	}
	if passed == len(list) {
		return fmt.Sprintf("all %d controls pass", passed)
	}
	return fmt.Sprintf("%d of %d controls FAIL", len(list)-passed, len(list))
}

func (r *Report) controlRow(c cells, x *control) error {
	c.Begin(0, 0)
	c.Text(r.look.text, x.name)
	if x.absent {
		c.Jump(6)
		c.Text(r.look.note, "nothing to check")
		return c.End()
	}
	amount := r.look.money
	switch {
	case x.whole:
		amount = r.look.whole
	case x.expected == 0 && x.found != 0:
		amount = r.look.tiny
	}
	c.Number(amount, x.expected)
	c.Number(amount, x.found)
	c.Number(r.look.tiny, x.found-x.expected)
	c.Number(r.look.tiny, x.tolerance)
	if x.passes() {
		c.Text(r.look.good, "pass")
	} else {
		c.Text(r.look.bad, "FAIL")
	}
	return c.End()
}

func (r *Report) controlTotals(c cells, s *schema.Summary) error {
	if err := c.line(r.look.section, "Control totals"); err != nil {
		return err
	}
	row := func(name string, x float64) error {
		c.Begin(0, 0)
		c.Text(r.look.text, name)
		c.Number(r.look.money, x)
		return c.End()
	}
	if err := row("quantity", s.Total.Quantity); err != nil {
		return err
	}
	for m, x := range s.Total.Measures {
		if err := row(schema.MeasureNames[m]+"_base", x); err != nil {
			return err
		}
	}
	return nil
}

func (r *Report) rejectCounts(c cells, s *schema.Summary) error {
	if len(s.RejectCount) == 0 {
		return c.line(r.look.section, "No row was refused")
	}
	if err := c.line(r.look.section, "Refused rows by code"); err != nil {
		return err
	}
	for _, n := range s.RejectCount {
		c.Begin(0, 0)
		c.Text(r.look.text, n.Code)
		c.Int(r.look.whole, n.Count)
		if err := c.End(); err != nil {
			return err
		}
	}
	return nil
}

func (r *Report) inputFiles(c cells, s *schema.Summary) error {
	if err := c.line(r.look.section, "Input files"); err != nil {
		return err
	}
	c.Begin(16, 0)
	for i, title := range []string{"File", "Rows", "Bytes", "Table", "", "SHA-256"} {
		style := r.look.head
		if i == 1 || i == 2 {
			style = r.look.headRight
		}
		c.Text(style, title)
	}
	if err := c.End(); err != nil {
		return err
	}
	for _, f := range s.Inputs {
		c.Begin(0, 0)
		c.Text(r.look.text, f.Name)
		c.Int(r.look.whole, f.Rows)
		c.Int(r.look.whole, f.Bytes)
		c.Text(r.look.text, f.Table)
		c.Jump(6)
		c.Text(r.look.text, f.SHA256)
		if err := c.End(); err != nil {
			return err
		}
	}
	return nil
}
