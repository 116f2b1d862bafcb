package xlsx

import (
	"archive/zip"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"path"
	"strings"

	"nightbook/reader/table"
)

// Workbook is a workbook whose first sheet is being read.
type Workbook struct {
	zip      *zip.Reader
	name     string // of the sheet
	date1904 bool
	strings  []string
	shown    []table.Cell // by cell style: what its number format shows a number as

	sheet  *sheet
	header []string
}

// Limits on what is unpacked, in bytes, against workbooks made to fill the
// machine: of a part that is read as a stream, of one that is held in memory,
// and how often its packed size a part larger than ratioFrom may be.
const (
	maxPart   = 16 << 30
	maxHeld   = 1 << 30
	maxRatio  = 1000
	ratioFrom = 100 << 20
)

var errDamaged = errors.New("the workbook is damaged")

func damaged(format string, a ...any) error {
	return fmt.Errorf("%w: %s", errDamaged, fmt.Sprintf(format, a...))
}

// Open opens a workbook of that size in bytes and reads the header of its
// first sheet: the first row that is not empty.
func Open(r io.ReaderAt, size int64) (*Workbook, error) {
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
	w := &Workbook{zip: z}
	sheetPart, err := w.readWorkbook()
	if err != nil {
		return nil, err
	}
	if w.sheet, err = w.openSheet(sheetPart); err != nil {
		return nil, err
	}
	w.header, err = w.sheet.header()
	return w, err
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
		return "", err
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
	p, err := w.open(name, maxHeld)
	if err != nil {
		return err
	}
	defer p.Close()
	if err := xml.NewDecoder(p).Decode(x); err != nil {
		return damaged("%s: %v", name, err)
	}
	return nil
}

// part is a part of the package being unpacked, held to the limits.
type part struct {
	io.ReadCloser
	name         string
	read, packed int64
	size, limit  int64
}

func (w *Workbook) open(name string, limit int64) (*part, error) {
	for _, f := range w.zip.File {
		if !strings.EqualFold(f.Name, name) {
			continue
		}
		r, err := f.Open()
		if err != nil {
			return nil, damaged("%s: %v", name, err)
		}
		return &part{r, name, 0, int64(f.CompressedSize64), int64(f.UncompressedSize64), limit}, nil
	}
	return nil, damaged("it has no part %s", name)
}

func (p *part) Read(b []byte) (int, error) {
	n, err := p.ReadCloser.Read(b)
	p.read += int64(n)
	if p.read > p.limit || p.read > ratioFrom && p.read/maxRatio > p.packed {
		return 0, fmt.Errorf("%s unpacks to too much", p.name)
	}
	return n, err
}
