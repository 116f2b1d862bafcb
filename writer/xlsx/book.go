package xlsx

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/xuri/excelize/v2"
)

// Limits of a sheet.
const (
	MaxRows    = excelize.TotalRows
	MaxColumns = excelize.MaxColumns
)

// Properties are what a workbook says of itself.
type Properties struct {
	Title   string
	Program string // that made it
	Made    string // date and time, as 2026-01-30T00:00:00Z
}

// Book is a workbook in the making.
type Book struct {
	w      io.Writer
	file   *excelize.File
	sheets []*Sheet
	styles map[Style]int
}

// NewBook starts a workbook with sheets of these names, in this order.
func NewBook(w io.Writer, names []string, p Properties) (*Book, error) {
	b := &Book{w: w, file: excelize.NewFile(), styles: map[Style]int{}}
	for i, name := range names {
		var err error
		if i == 0 {
			err = b.file.SetSheetName(b.file.GetSheetName(0), name)
		} else {
			_, err = b.file.NewSheet(name)
		}
		if err != nil {
			return nil, fmt.Errorf("workbook: sheet %q: %w", name, err)
		}
		// excelize numbers the parts of sheets in the order they are made.
		b.sheets = append(b.sheets, &Sheet{Name: name, part: fmt.Sprintf("xl/worksheets/sheet%d.xml", i+1), file: b.file})
	}
	err := b.file.SetDocProps(&excelize.DocProperties{
		Title: p.Title, Creator: p.Program, LastModifiedBy: p.Program, Created: p.Made, Modified: p.Made,
	})
	if err == nil {
		err = b.file.SetAppProps(&excelize.AppProperties{Application: p.Program})
	}
	if err == nil {
		err = b.file.SetDefaultFont(fontName)
	}
	if err != nil {
		return nil, fmt.Errorf("workbook: %w", err)
	}
	return b, nil
}

// Sheet returns the sheet of that name, which must be one of NewBook's.
func (b *Book) Sheet(name string) *Sheet {
	for _, s := range b.sheets {
		if s.Name == name {
			return s
		}
	}
	panic("xlsx: no such sheet")
}

// Close puts the workbook together and writes it.
func (b *Book) Close() error {
	for _, s := range b.sheets {
		if err := s.finish(); err != nil {
			return fmt.Errorf("workbook: sheet %s: %w", s.Name, err)
		}
	}
	var frame capture
	b.file.SetZipWriter(func(io.Writer) excelize.ZipWriter { return &frame })
	if _, err := b.file.WriteToBuffer(); err != nil {
		return fmt.Errorf("workbook: %w", err)
	}
	var parts []part
	for name, content := range frame.parts {
		p := part{name: name, pieces: []*piece{wholePiece(content.Bytes())}}
		for _, s := range b.sheets {
			if s.part == name {
				before, after, err := splitSheet(content.Bytes(), s.columns())
				if err != nil {
					return err
				}
				p.pieces = append([]*piece{wholePiece(before)}, append(s.pieces(), wholePiece(after))...)
			}
		}
		parts = append(parts, p)
	}
	return writeZip(b.w, parts)
}

// Abort lets go of what the workbook holds. After Close it does nothing.
func (b *Book) Abort() error { return b.file.Close() }

// splitSheet cuts the part of an empty sheet where its rows belong, and puts
// the columns before them.
func splitSheet(xml, columns []byte) (before, after []byte, err error) {
	const open, end = "<sheetData>", "</sheetData>"
	for _, empty := range []string{open + end, "<sheetData/>"} {
		if i := bytes.Index(xml, []byte(empty)); i >= 0 {
			before = slices.Concat(xml[:i], columns, []byte(open))
			return before, slices.Concat([]byte(end), xml[i+len(empty):]), nil
		}
	}
	return nil, nil, fmt.Errorf("workbook: a sheet made by excelize does not have the shape that is known")
}

// columnName returns the letters of a column, the first being 1.
func columnName(n int) string {
	var b []byte
	for ; n > 0; n = (n - 1) / 26 {
		b = append([]byte{byte('A' + (n-1)%26)}, b...)
	}
	return string(b)
}

// Ref returns the name of a cell, the first row and column being 1.
func Ref(column, row int) string { return fmt.Sprintf("%s%d", columnName(column), row) }

// rangeRef returns the name of a range of cells.
func rangeRef(column1, row1, column2, row2 int) string {
	return strings.Join([]string{Ref(column1, row1), Ref(column2, row2)}, ":")
}
