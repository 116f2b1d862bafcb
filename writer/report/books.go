package report

import (
	"nightbook/schema"
)

// fillBooks makes the sheet of books: the tree, each book with all below it.
func (r *Report) fillBooks(s *schema.Summary) error {
	sheet := r.book.Sheet("Books")
	if err := r.top(sheet, "Books", "each book with all books below it; measures in "+r.cfg.ReportingCurrency); err != nil {
		return err
	}
	c := cells{sheet.Rows(tableHead), &r.look}
	titles := append([]string{"Book", "Owner", "Lines", "Own lines", "Rejected"}, measureTitles[:]...)
	if err := c.header(2, titles...); err != nil {
		return err
	}
	for i := range s.Books {
		b := &s.Books[i]
		parent := i+1 < len(s.Books) && s.Books[i+1].Level > b.Level
		c.Begin(0, b.Level)
		c.Text(r.bookStyle(b.Level, parent), b.Book)
		if b.Owner == "" {
			c.Blank(r.look.text)
		} else {
			c.Text(r.look.text, b.Owner)
		}
		whole := r.look.whole
		if parent {
			whole = r.look.wholeBold
		}
		c.Int(whole, b.Lines)
		c.Int(whole, b.Own.Lines)
		c.Int(whole, b.Rejected)
		c.measures(whole, b.Measures)
		if err := c.End(); err != nil {
			return err
		}
	}
	c.Begin(0, 0)
	c.Text(r.look.total, "Total")
	c.Blank(r.look.total)
	c.Int(r.look.totalWhole, s.Total.Lines)
	c.Int(r.look.totalWhole, ownLines(s))
	c.Int(r.look.totalWhole, s.Total.Rejected)
	c.measures(r.look.totalWhole, s.Total.Measures)
	if err := c.End(); err != nil {
		return err
	}
	sheet.Widths(34, 18, 10, 11, 10, 17, 17, 17, 17, 17, 17, 17)
	sheet.Freeze(tableHead, 1)
	sheet.OutlineAbove()
	sheet.HideGrid()
	sheet.Print(tableHead, tableHead, false)
	return nil
}

func ownLines(s *schema.Summary) int64 {
	var n int64
	for i := range s.Books {
		n += s.Books[i].Own.Lines
	}
	return n
}

func (r *Report) bookStyle(level int, parent bool) int {
	if level == 0 && parent {
		return r.look.bold
	}
	return r.look.indent[min(level, maxIndent)]
}
