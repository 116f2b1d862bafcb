package xlsx

import (
	"fmt"
	"slices"

	"github.com/xuri/excelize/v2"
)

// Sheet is a sheet of a workbook: settings, and runs of rows.
type Sheet struct {
	Name string

	part   string // its name in the file
	file   *excelize.File
	widths []float64
	runs   []*Rows
	done   error
}

// Rows starts a run of rows at a row. Runs may be written at the same time and
// in any order, but must not overlap.
func (s *Sheet) Rows(first int) *Rows {
	r := newRows(first)
	s.runs = append(s.runs, r)
	return r
}

// Cut is how many texts were too long for a cell.
func (s *Sheet) Cut() int {
	n := 0
	for _, r := range s.runs {
		n += r.cut
	}
	return n
}

// keep notes the first error of a setting, to be returned by the book's Close.
func (s *Sheet) keep(err error) {
	if s.done == nil {
		s.done = err
	}
}

// Widths sets the widths of columns, in characters, beginning with the first.
func (s *Sheet) Widths(widths ...float64) { s.widths = widths }

// columns is what the sheet says of its columns.
func (s *Sheet) columns() []byte {
	if len(s.widths) == 0 {
		return nil
	}
	b := []byte("<cols>")
	for i, w := range s.widths {
		b = fmt.Appendf(b, `<col min="%d" max="%d" width="%g" customWidth="1"/>`, i+1, i+1, w)
	}
	return append(b, "</cols>"...)
}

// Freeze keeps the first rows and columns in sight. The sheet opens at the top.
func (s *Sheet) Freeze(rows, columns int) {
	pane := "bottomRight"
	switch {
	case columns == 0:
		pane = "bottomLeft"
	case rows == 0:
		pane = "topRight"
	}
	s.keep(s.file.SetPanes(s.Name, &excelize.Panes{
		Freeze: true, XSplit: columns, YSplit: rows, TopLeftCell: Ref(columns+1, rows+1), ActivePane: pane,
	}))
}

// Filter lets the reader filter the rows below a header.
func (s *Sheet) Filter(header, columns, lastRow int) {
	s.keep(s.file.AutoFilter(s.Name, rangeRef(1, header, columns, max(header, lastRow)), nil))
}

// HideGrid turns the grid lines off.
func (s *Sheet) HideGrid() {
	off := false
	s.keep(s.file.SetSheetView(s.Name, 0, &excelize.ViewOptions{ShowGridLines: &off}))
}

// OutlineAbove says that the row which adds others up stands above them.
func (s *Sheet) OutlineAbove() {
	below := false
	s.keep(s.file.SetSheetProps(s.Name, &excelize.SheetPropsOptions{OutlineSummaryBelow: &below}))
}

// Print sets the sheet to print in landscape on A4, with its name and the page
// in the footer, repeating the header rows first to last (0 for none) and, where
// it is too wide for one page, its first column.
func (s *Sheet) Print(first, last int, wide bool) {
	yes, landscape, one, any, a4, small := true, "landscape", 1, 0, 9, uint(60)
	layout := &excelize.PageLayoutOptions{Size: &a4, Orientation: &landscape}
	titles := fmt.Sprintf("'%s'!$%d:$%d", s.Name, first, last)
	if wide {
		layout.AdjustTo = &small
		titles = fmt.Sprintf("'%s'!$A:$A,%s", s.Name, titles)
	} else {
		layout.FitToWidth, layout.FitToHeight = &one, &any
		s.keep(s.file.SetSheetProps(s.Name, &excelize.SheetPropsOptions{FitToPage: &yes}))
	}
	s.keep(s.file.SetPageLayout(s.Name, layout))
	s.keep(s.file.SetHeaderFooter(s.Name, &excelize.HeaderFooterOptions{OddFooter: "&L&A&RPage &P of &N"}))
	if last > 0 {
		s.keep(s.file.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Titles", Scope: s.Name, RefersTo: titles}))
	}
}

// finish completes the runs and tells the sheet its size.
func (s *Sheet) finish() error {
	slices.SortStableFunc(s.runs, func(a, b *Rows) int { return a.first - b.first })
	next, widest := 1, 1
	for _, r := range s.runs {
		if r.first < next {
			panic("xlsx: runs of rows overlap")
		}
		s.keep(r.finish())
		next, widest = r.next, max(widest, r.widest)
	}
	s.keep(s.file.SetSheetDimension(s.Name, rangeRef(1, 1, widest, max(1, next-1))))
	return s.done
}

func (s *Sheet) pieces() []*piece {
	var p []*piece
	for _, r := range s.runs {
		p = append(p, r.out)
	}
	return p
}
