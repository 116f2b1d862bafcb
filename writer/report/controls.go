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
	if err := c.header(2, "Control", "Result", "Expected", "Found", "Difference", "Tolerance"); err != nil {
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
	sheet.Widths(44, 13, 22, 22, 16, 16)
	sheet.Freeze(4, 1)
	sheet.HideGrid()
	sheet.Print(4, 4, false)
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
		c.Text(r.look.note, "nothing to check")
		return c.End()
	}
	if x.passes() {
		c.Text(r.look.good, "pass")
	} else {
		c.Text(r.look.bad, "FAIL")
	}
	amount := r.look.money
	if x.whole {
		amount = r.look.whole
	}
	for _, n := range []struct {
		style int
		x     float64
	}{{amount, x.expected}, {amount, x.found}, {r.look.tiny, x.found - x.expected}, {r.look.tiny, x.tolerance}} {
		switch {
		case n.x == 0:
			n.style = r.look.whole
		case n.style == r.look.money && -0.01 < n.x && n.x < 0.01:
			n.style = r.look.tiny
		}
		c.Number(n.style, n.x)
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
		c.Jump(3)
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
		c.Jump(3)
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
	for i, title := range []string{"File", "Table", "Rows", "Bytes", "SHA-256", ""} {
		style := r.look.head
		switch i {
		case 2, 3:
			style = r.look.headRight
		case 4:
			style = r.look.headAfter
		}
		c.Text(style, title)
	}
	if err := c.End(); err != nil {
		return err
	}
	for _, f := range s.Inputs {
		c.Begin(0, 0)
		c.Text(r.look.text, f.Name)
		c.Text(r.look.text, f.Table)
		c.Int(r.look.whole, f.Rows)
		c.Int(r.look.whole, f.Bytes)
		c.Text(r.look.after, f.SHA256)
		if err := c.End(); err != nil {
			return err
		}
	}
	return nil
}
