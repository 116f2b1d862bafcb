package xlsx

import (
	"archive/zip"
	"context"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"path"
	"strings"

	"nightbook/reader/table"
	"nightbook/schema"
)

// Workbook is a workbook whose first sheet is being read.
type Workbook struct {
	zip      *zip.Reader
	limits   schema.Limits
	name     string // of the sheet
	date1904 bool
	strings  []string
	shown    []table.Cell // by cell style: what its number format shows a number as

	sheet  *sheet
	header []string
}

var errDamaged = errors.New("the workbook is damaged")

// damaged is errDamaged with what is wrong. What stopped the reading, a limit or
// the user, is no damage.
func damaged(format string, a ...any) error {
	for _, x := range a {
		err, ok := x.(error)
		if !ok {
			continue
		}
		if _, limited := errors.AsType[*schema.LimitError](err); limited || errors.Is(err, context.Canceled) {
			return err
		}
	}
	return fmt.Errorf("%w: %s", errDamaged, fmt.Sprintf(format, a...))
}

// Open opens a workbook of that size in bytes and reads the header of its
// first sheet: the first row that is not empty.
func Open(r io.ReaderAt, size int64, limits schema.Limits) (*Workbook, error) {
	var head [8]byte
	if _, err := r.ReadAt(head[:], 0); err != nil {
		return nil, fmt.Errorf("not a workbook: %w", io.ErrUnexpectedEOF)
	}
	if string(head[:]) == "\xD0\xCF\x11\xE0\xA1\xB1\x1A\xE1" {
		return nil, errors.New("the workbook is protected by a password, or an .xls renamed: save it as .xlsx without a password")
	}
	z, err := zip.NewReader(r, size)
	if err != nil {
		return nil, damaged("%v", err)
	}
	w := &Workbook{zip: z, limits: limits}
	sheetPart, err := w.readWorkbook()
	if err != nil {
		return nil, err
	}
	if w.sheet, err = w.openSheet(sheetPart); err != nil {
		return nil, err
	}
	if w.header, err = w.sheet.header(); err != nil {
		return nil, err
	}
	if int64(len(w.header)) > limits.Of(schema.Columns) {
		return nil, limits.Exceeded(schema.Columns)
	}
	return w, nil
}

// Header returns the names of the columns, in the order of the sheet.
func (w *Workbook) Header() []string { return w.header }

// Sheet returns the name of the sheet.
func (w *Workbook) Sheet() string { return w.name }

// Read returns the share of the sheet read so far, from 0 to 1.
func (w *Workbook) Read() float64 { return w.sheet.progress() }

// Next reads the next rows, up to schema.BatchRows; io.EOF is the end.
func (w *Workbook) Next(into *table.Rows) error { return w.sheet.next(into, len(w.header)) }

// relation is a link from a part of the package to another.
type relation struct {
	ID     string `xml:"Id,attr"`
	Type   string `xml:"Type,attr"`
	Target string `xml:"Target,attr"`
}

// readWorkbook reads all but the sheet, and returns the name of the sheet's part.
func (w *Workbook) readWorkbook() (string, error) {
	top, err := w.relations("")
	if err != nil {
		return "", fmt.Errorf("%w; if it is an archive of files and no workbook, unpack it and give the file within", err)
	}
	book := "xl/workbook.xml"
	for _, r := range top {
		if strings.HasSuffix(r.Type, "/officeDocument") {
			book = resolve("", r.Target)
		}
	}
	var b struct {
		Properties struct {
			Date1904 string `xml:"date1904,attr"`
		} `xml:"workbookPr"`
		Sheets []struct {
			Name string     `xml:"name,attr"`
			Attr []xml.Attr `xml:",any,attr"`
		} `xml:"sheets>sheet"`
	}
	if err := w.decode(book, &b); err != nil {
		return "", err
	}
	if len(b.Sheets) == 0 {
		return "", damaged("it has no sheet")
	}
	if int64(len(b.Sheets)) > w.limits.Of(schema.Sheets) {
		return "", w.limits.Exceeded(schema.Sheets)
	}
	w.name = b.Sheets[0].Name
	w.date1904 = b.Properties.Date1904 == "1" || b.Properties.Date1904 == "true"
	links, err := w.relations(book)
	if err != nil {
		return "", err
	}
	var id, part string
	for _, a := range b.Sheets[0].Attr {
		if a.Name.Local == "id" { // r:id, in the namespace of relationships
			id = a.Value
		}
	}
	for _, r := range links {
		target := resolve(book, r.Target)
		switch {
		case r.ID == id && strings.HasSuffix(r.Type, "/worksheet"):
			part = target
		case r.ID == id:
			return "", fmt.Errorf("the first sheet, %s, holds no cells: put the table on the first sheet", w.name)
		case strings.HasSuffix(r.Type, "/styles"):
			err = w.readStyles(target)
		case strings.HasSuffix(r.Type, "/sharedStrings"):
			err = w.readStrings(target)
		}
		if err != nil {
			return "", err
		}
	}
	if part == "" {
		return "", damaged("its first sheet, %s, is missing", w.name)
	}
	return part, nil
}

// relations returns the links of a part; "" is the package itself.
func (w *Workbook) relations(part string) ([]relation, error) {
	var x struct {
		Relations []relation `xml:"Relationship"`
	}
	name := "_rels/.rels"
	if part != "" {
		name = path.Join(path.Dir(part), "_rels", path.Base(part)+".rels")
	}
	err := w.decode(name, &x)
	return x.Relations, err
}

// resolve returns the part that a link of another part leads to.
func resolve(from, target string) string {
	if strings.HasPrefix(target, "/") {
		return path.Clean(target)[1:]
	}
	return path.Join(path.Dir(from), target)
}

// decode reads a small part into x.
func (w *Workbook) decode(name string, x any) error {
	p, err := w.open(name, true)
	if err != nil {
		return err
	}
	defer p.Close()
	if err := xml.NewDecoder(p).Decode(x); err != nil {
		return damaged("%s: %v", name, err)
	}
	return nil
}

// rowMarkup is how much longer a row may be in the markup of a sheet than as text.
const rowMarkup = 16

// part is a part of the package being unpacked, held to the limits.
type part struct {
	io.ReadCloser
	limits       *schema.Limits
	held         bool // in memory
	read, packed int64
	size         int64
	row          int64 // read since the last row began
}

func (w *Workbook) open(name string, held bool) (*part, error) {
	for _, f := range w.zip.File {
		if !strings.EqualFold(f.Name, name) {
			continue
		}
		r, err := f.Open()
		if err != nil {
			return nil, damaged("%s: %v", name, err)
		}
		return &part{ReadCloser: r, limits: &w.limits, held: held, packed: int64(f.CompressedSize64), size: int64(f.UncompressedSize64)}, nil
	}
	return nil, damaged("it has no part %s", name)
}

func (p *part) Read(b []byte) (int, error) {
	n, err := p.ReadCloser.Read(b)
	p.read += int64(n)
	if p.held && p.read > p.limits.Of(schema.HeldBytes) {
		return 0, p.limits.Exceeded(schema.HeldBytes)
	}
	if p.row += int64(n); !p.held && p.row > rowMarkup*p.limits.Of(schema.RowBytes) {
		return 0, p.limits.Exceeded(schema.RowBytes)
	}
	if err := p.limits.Unpacked(p.read, p.packed); err != nil {
		return 0, err
	}
	return n, err
}
