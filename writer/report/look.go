package report

import (
	"strconv"

	"nightbook/schema"
	"nightbook/writer/xlsx"
)

// tableHead is the row of the header on a sheet that shows one table: above it
// are the title, a note, an empty row and the units.
const tableHead = 5

// styles are the looks that the sheets share.
type styles struct {
	title, note, section, text, bold int
	after, noteAfter                 int // of texts beside numbers
	head, headRight, headAfter       int
	whole, wholeBold, money, ratio   int
	tiny, total, totalWhole          int
	good, bad                        int
	indent                           [maxIndent + 1]int // of a book's name by level
}

// maxIndent is the deepest level of books that is still indented further.
const maxIndent = 12

func newStyles(b *xlsx.Book) (styles, error) {
	var s styles
	var failed error
	set := func(to *int, style xlsx.Style) {
		if failed == nil {
			*to, failed = b.Style(style)
		}
	}
	set(&s.title, xlsx.Style{Bold: true, Size: 16})
	set(&s.note, xlsx.Style{Color: xlsx.Muted})
	set(&s.section, xlsx.Style{Bold: true, Size: 12})
	set(&s.text, xlsx.Style{})
	set(&s.bold, xlsx.Style{Bold: true})
	set(&s.head, xlsx.Style{Bold: true, Head: true})
	set(&s.headAfter, xlsx.Style{Bold: true, Head: true, Indent: 1})
	set(&s.after, xlsx.Style{Indent: 1})
	set(&s.noteAfter, xlsx.Style{Color: xlsx.Muted, Indent: 1})
	set(&s.headRight, xlsx.Style{Bold: true, Head: true, Right: true})
	set(&s.whole, xlsx.Style{Format: xlsx.FormatWhole})
	set(&s.wholeBold, xlsx.Style{Format: xlsx.FormatWhole, Bold: true})
	set(&s.money, xlsx.Style{Format: xlsx.FormatMoney})
	set(&s.ratio, xlsx.Style{Format: xlsx.FormatRatio})
	set(&s.tiny, xlsx.Style{Format: xlsx.FormatTiny})
	set(&s.total, xlsx.Style{Bold: true, Total: true})
	set(&s.totalWhole, xlsx.Style{Bold: true, Total: true, Format: xlsx.FormatWhole})
	set(&s.good, xlsx.Style{Color: xlsx.Good, Bold: true})
	set(&s.bad, xlsx.Style{Color: xlsx.Bad, Bold: true})
	for level := range s.indent {
		set(&s.indent[level], xlsx.Style{Indent: level * 2})
	}
	return s, failed
}

// measureTitles head the columns of the position measures.
var measureTitles = [schema.NumMeasures]string{
	"Value", "Delta cash", "Gamma cash 1 %", "Vega cash 1 pt", "Theta cash 1 d", "Theta cash 1 bd", "Rho cash 1 bp",
}

// cells writes one row at a time.
type cells struct {
	*xlsx.Rows
	look *styles
}

// line writes a row of one text.
func (c cells) line(style int, text string) error {
	c.Begin(0, 0)
	c.Text(style, text)
	return c.End()
}

// header writes a row of column titles, the first left of which stand over texts.
func (c cells) header(left int, titles ...string) error {
	c.Begin(16, 0)
	for i, t := range titles {
		style := c.look.headRight
		if i < left {
			style = c.look.head
		}
		c.Text(style, t)
	}
	return c.End()
}

// measures writes the measures of a row of totals.
func (c cells) measures(style int, sums [schema.NumMeasures]float64) {
	for _, x := range sums {
		c.Number(style, x)
	}
}

// top writes the title and the note of a sheet, and leaves a row empty.
func (r *Report) top(sheet *xlsx.Sheet, title, note string) error {
	c := cells{sheet.Rows(1), &r.look}
	c.Begin(24, 0)
	c.Text(r.look.title, title)
	if err := c.End(); err != nil {
		return err
	}
	return c.line(r.look.note, note)
}

// count writes a number with its noun: 1 line, 2,000 lines.
func count(n int64, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return thousands(n) + " " + noun + "s"
}

// thousands writes n with separators.
func thousands(n int64) string {
	s := strconv.FormatInt(n, 10)
	start := 0
	if n < 0 {
		start = 1
	}
	for i := len(s) - 3; i > start; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return s
}
