package report

import (
	"cmp"
	"math"
	"slices"
	"strings"

	"nightbook/schema"
)

// topUnderlyings is how many underlyings the summary names.
const topUnderlyings = 10

// fillSummary makes the first sheet: what a manager wants to know before
// anything else.
func (r *Report) fillSummary(s *schema.Summary) error {
	sheet := r.book.Sheet("Summary")
	about := []string{"reporting currency " + r.cfg.ReportingCurrency, "nightbook " + s.Version}
	if err := r.top(sheet, "Risk of "+r.cfg.AsOf.String(), strings.Join(about, " · ")); err != nil {
		return err
	}
	c := cells{sheet.Rows(3), &r.look}
	if err := c.line(r.look.note, schema.Caution); err != nil {
		return err
	}
	for _, part := range []func(cells, *schema.Summary) error{
		r.summaryRows, r.summaryBooks, r.summaryUnderlyings, r.summaryCurrencies, r.summaryWarnings,
	} {
		c.Skip(1)
		if err := part(c, s); err != nil {
			return err
		}
	}
	sheet.Widths(30, 18, 12, 17, 17, 17, 17, 17, 17, 17)
	sheet.HideGrid()
	sheet.Print(0, 0, false)
	return nil
}

// summaryRows says what became of the rows of the position file.
func (r *Report) summaryRows(c cells, s *schema.Summary) error {
	if err := c.line(r.look.section, "Rows"); err != nil {
		return err
	}
	for _, row := range []struct {
		name string
		n    int64
		note string
	}{
		{"Rows in", s.RowsIn, ""},
		{"Priced", s.Total.Priced, ""},
		{"Expired", s.Total.Expired, "at their payoff"},
		{"Rejected", s.Rejects, "in no total: see Rejects"},
		{"Market rows rejected", s.Faults, "what needs them is rejected"},
		{"Early exercise", r.exerciseSeen, "to exercise, or to look at before an ex-date: see Exercise"},
	} {
		if row.n == 0 && (row.name == "Market rows rejected" || row.name == "Early exercise") {
			continue
		}
		c.Begin(0, 0)
		c.Text(r.look.text, row.name)
		c.Int(r.look.whole, row.n)
		if row.n > 0 && row.note != "" {
			c.Text(r.look.noteAfter, row.note)
		}
		if err := c.End(); err != nil {
			return err
		}
	}
	list := controls(s)
	if err := r.verdict(c, "Rows in = priced + expired + rejected", list[:1]); err != nil {
		return err
	}
	if err := r.verdict(c, "Controls", list); err != nil {
		return err
	}
	c.Begin(0, 0)
	c.Text(r.look.text, "Lines sheet")
	c.Text(r.look.text, r.linesNote(s))
	return c.End()
}

// verdict writes whether controls pass.
func (r *Report) verdict(c cells, name string, list []control) error {
	good := !slices.ContainsFunc(list, func(x control) bool { return !x.passes() })
	c.Begin(0, 0)
	c.Text(r.look.text, name)
	style, text := r.look.good, "pass"
	if !good {
		style, text = r.look.bad, "FAIL"
	}
	if len(list) > 1 {
		text = controlsNote(list)
	}
	c.Text(style, text)
	return c.End()
}

// rateTitle heads a column of numbers among those of texts.
const rateTitle = "Rate"

// measureHeader heads a block of totals.
func (r *Report) measureHeader(c cells, section string, titles ...string) error {
	if err := c.line(r.look.section, section); err != nil {
		return err
	}
	left := len(titles)
	if titles[left-1] == rateTitle {
		left--
	}
	return c.header(left, append(append(titles, "Lines"), measureTitles[:]...)...)
}

// totals writes a row of a block of totals. An empty second cell stays empty.
func (r *Report) totals(c cells, name string, second func(), t *schema.Totals, last bool) error {
	text, whole := r.look.text, r.look.whole
	if last {
		text, whole = r.look.total, r.look.totalWhole
	}
	c.Begin(0, 0)
	c.Text(text, name)
	if second == nil {
		c.Blank(text)
	} else {
		second()
	}
	c.Int(whole, t.Lines)
	c.measures(whole, t.Measures)
	return c.End()
}

func (r *Report) summaryBooks(c cells, s *schema.Summary) error {
	if err := r.measureHeader(c, "Books, in "+r.cfg.ReportingCurrency, "Book", "Owner"); err != nil {
		return err
	}
	for i := range s.Books {
		b := &s.Books[i]
		if b.Level > 0 {
			continue
		}
		if err := r.totals(c, b.Book, r.texts(c, b.Owner), &b.Totals, false); err != nil {
			return err
		}
	}
	return r.totals(c, "Total", nil, &s.Total, true)
}

func (r *Report) texts(c cells, text string) func() {
	if text == "" {
		return nil
	}
	return func() { c.Text(r.look.text, text) }
}

func (r *Report) summaryUnderlyings(c cells, s *schema.Summary) error {
	byDelta := make([]*schema.UnderlyingTotal, len(s.Underlyings))
	for i := range s.Underlyings {
		byDelta[i] = &s.Underlyings[i]
	}
	slices.SortStableFunc(byDelta, func(a, b *schema.UnderlyingTotal) int {
		return cmp.Compare(math.Abs(b.Measures[schema.DeltaCash]), math.Abs(a.Measures[schema.DeltaCash]))
	})
	section := "Underlyings with the largest delta cash, in " + r.cfg.ReportingCurrency
	if err := r.measureHeader(c, section, "Underlying", "Kind"); err != nil {
		return err
	}
	for _, u := range byDelta[:min(len(byDelta), topUnderlyings)] {
		if err := r.totals(c, u.Underlying, r.texts(c, schema.Kinds[u.Kind]), &u.Totals, false); err != nil {
			return err
		}
	}
	return nil
}

func (r *Report) summaryCurrencies(c cells, s *schema.Summary) error {
	if err := r.measureHeader(c, "Currencies, in "+r.cfg.ReportingCurrency, "Currency", rateTitle); err != nil {
		return err
	}
	for i := range s.Currencies {
		x := &s.Currencies[i]
		rate := func() { c.Number(r.look.ratio, x.FX) }
		if err := r.totals(c, x.Currency, rate, &x.Totals, false); err != nil {
			return err
		}
	}
	return nil
}

func (r *Report) summaryWarnings(c cells, s *schema.Summary) error {
	if len(s.Notes) == 0 {
		return c.line(r.look.section, "No warnings")
	}
	if err := c.line(r.look.section, count(int64(len(s.Notes)), "warning")+": see Warnings"); err != nil {
		return err
	}
	for _, code := range schema.NoteCodes {
		n := 0
		for i := range s.Notes {
			if string(s.Notes[i].Code) == code.Code {
				n++
			}
		}
		if n == 0 {
			continue
		}
		c.Begin(0, 0)
		c.Text(r.look.text, code.Code)
		c.Int(r.look.whole, int64(n))
		c.Text(r.look.noteAfter, code.Doc)
		if err := c.End(); err != nil {
			return err
		}
	}
	return nil
}
