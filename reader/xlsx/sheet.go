package xlsx

import (
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"

	"nightbook/reader/table"
	"nightbook/schema"
)

// sheet reads the rows of a sheet, one after the other.
type sheet struct {
	w    *Workbook
	part *part
	xml  *xml.Decoder

	row   int64 // the number of the row read last
	cells []cell
	texts int64 // bytes of text in the run being read
	past  bool  // the rows: what follows speaks of drawings, some of it also in rows
	ended bool
}

// cell is a cell of the row read last.
type cell struct {
	column int
	text   string
	kind   table.Cell
}

const (
	maxColumns = 16384 // of a sheet
	maxRows    = 1048576
)

func (w *Workbook) openSheet(name string) (*sheet, error) {
	p, err := w.open(name, false)
	if err != nil {
		return nil, err
	}
	return &sheet{w: w, part: p, xml: xml.NewDecoder(p)}, nil
}

func (s *sheet) progress() float64 {
	if s.ended || s.part.size <= 0 {
		return 1
	}
	return min(1, float64(s.xml.InputOffset())/float64(s.part.size))
}

// header reads the names of the columns from the first row that is not empty.
func (s *sheet) header() ([]string, error) {
	err := s.readRow()
	if err == io.EOF {
		return nil, &schema.CellError{Code: schema.BadRow, Err: errors.New("the sheet is empty: its first row must name the columns")}
	}
	if err != nil {
		return nil, err
	}
	var names []string
	for _, c := range s.cells {
		for len(names) <= c.column {
			names = append(names, "")
		}
		names[c.column] = strings.Trim(c.text, " \t")
	}
	return names, nil
}

// next reads rows into the columns of the header.
func (s *sheet) next(into *table.Rows, columns int) error {
	into.Reset(columns)
	for col := range columns {
		into.Cols[col].Kind = schema.KindStrings
		into.Cells[col] = make([]table.Cell, 0, schema.BatchRows)
	}
	for s.texts = 0; into.N < schema.BatchRows && s.texts < s.w.limits.Of(schema.BatchBytes); {
		err := s.readRow()
		if err == io.EOF && into.N > 0 {
			return nil
		}
		if err != nil {
			return err
		}
		s.add(into, columns)
	}
	return nil
}

// add appends the row read last.
func (s *sheet) add(into *table.Rows, columns int) {
	k, reason := 0, ""
	for col := range columns {
		var c cell
		if k < len(s.cells) && s.cells[k].column == col {
			c = s.cells[k]
			k++
		}
		if int64(len(c.text)) > s.w.limits.Of(schema.FieldBytes) {
			reason, c = s.w.limits.Exceeded(schema.FieldBytes).Error(), cell{}
		}
		s.texts += int64(len(c.text))
		into.Cols[col].Strings.AppendString(c.text)
		into.Cells[col] = append(into.Cells[col], c.kind)
	}
	if k < len(s.cells) {
		reason = fmt.Sprintf("there is a cell in column %s, which has no header: name the column or empty the cell", columnName(s.cells[k].column))
	}
	if reason != "" {
		into.Bad = append(into.Bad, table.Bad{Row: into.N, Reason: reason})
	}
	into.Line = append(into.Line, s.row)
	into.N++
}

// readRow reads the next row that is not empty; io.EOF is the end of the sheet.
func (s *sheet) readRow() error {
	for !s.ended {
		s.part.row = 0
		t, err := s.xml.Token()
		if err == io.EOF {
			s.ended = true // the part ends well: the decoder has seen every element closed
			break
		}
		if err != nil {
			return s.damaged(err)
		}
		if e, ok := t.(xml.EndElement); ok && e.Name.Local == "sheetData" {
			s.past = true
		}
		e, ok := t.(xml.StartElement)
		if !ok || e.Name.Local != "row" || s.past {
			continue
		}
		if err := s.startRow(e); err != nil {
			return err
		}
		if err := s.readCells(); err != nil {
			return err
		}
		if len(s.cells) > 0 {
			return nil
		}
	}
	return io.EOF
}

func (s *sheet) damaged(err error) error {
	return damaged("sheet %s after row %d: %v", s.w.name, s.row, err)
}

func (s *sheet) startRow(e xml.StartElement) error {
	s.cells = s.cells[:0]
	row := s.row + 1
	for _, a := range e.Attr {
		if a.Name.Local == "r" {
			n, err := strconv.ParseInt(a.Value, 10, 64)
			if err != nil {
				return s.damaged(err)
			}
			row = n
		}
	}
	if row <= s.row || row > maxRows {
		return damaged("sheet %s: row %d follows row %d", s.w.name, row, s.row)
	}
	s.row = row
	return nil
}

// readCells reads the cells of a row that hold anything, up to the row's end.
func (s *sheet) readCells() error {
	column := -1
	for {
		t, err := s.xml.Token()
		if err != nil {
			return s.damaged(noEOF(err))
		}
		switch e := t.(type) {
		case xml.EndElement:
			return nil // of the row: all others are read with their start
		case xml.StartElement:
			if e.Name.Local != "c" {
				if err := s.xml.Skip(); err != nil {
					return s.damaged(noEOF(err))
				}
				continue
			}
			next, raw, err := s.readCell(e, column+1)
			if err != nil {
				return err
			}
			if next <= column || next >= maxColumns {
				return damaged("sheet %s, row %d: cells out of order", s.w.name, s.row)
			}
			column = next
			text, kind, err := s.w.read(raw)
			if err != nil {
				return fmt.Errorf("sheet %s, row %d, column %s: %w", s.w.name, s.row, columnName(column), err)
			}
			if text != "" {
				s.cells = append(s.cells, cell{column, text, kind})
			}
		}
	}
}

// readCell reads a cell up to its end, and the number of its column: next, if
// it does not say.
func (s *sheet) readCell(e xml.StartElement, next int) (column int, c *rawCell, err error) {
	c = &rawCell{style: -1}
	column = next
	for _, a := range e.Attr {
		switch a.Name.Local {
		case "r":
			column = columnNumber(a.Value)
		case "t":
			c.kind = a.Value
		case "s":
			if c.style, err = strconv.Atoi(a.Value); err != nil {
				return 0, nil, s.damaged(err)
			}
		}
	}
	for {
		t, err := s.xml.Token()
		if err != nil {
			return 0, nil, s.damaged(noEOF(err))
		}
		switch e := t.(type) {
		case xml.EndElement:
			return column, c, nil
		case xml.StartElement:
			switch e.Name.Local {
			case "v":
				c.stored = true
				if c.value, err = s.charData(); c.kind == "str" {
					c.value = unescape(c.value)
				}
			case "is":
				c.stored = true
				c.value, err = richText(s.xml)
			case "f":
				c.formula, err = s.charData()
				if c.formula == "" {
					c.formula = "…" // shared with another cell
				}
			default:
				err = s.xml.Skip()
			}
			if err != nil {
				return 0, nil, s.damaged(noEOF(err))
			}
		}
	}
}

// charData reads the text of the element that has just begun, up to its end.
func (s *sheet) charData() (string, error) {
	text := ""
	for {
		t, err := s.xml.Token()
		if err != nil {
			return "", noEOF(err)
		}
		switch e := t.(type) {
		case xml.CharData:
			text += string(e)
		case xml.StartElement:
			if err := s.xml.Skip(); err != nil {
				return "", noEOF(err)
			}
		case xml.EndElement:
			return text, nil
		}
	}
}

// columnNumber returns the column of a cell's name such as AB12, from 0; -1
// for what is none.
func columnNumber(name string) int {
	n := 0
	for i := 0; i < len(name) && 'A' <= name[i] && name[i] <= 'Z' && n < maxColumns; i++ {
		n = 26*n + int(name[i]-'A') + 1
	}
	return n - 1
}

// columnName returns the letters of a column.
func columnName(column int) string {
	name := ""
	for column++; column > 0; column = (column - 1) / 26 {
		name = string(rune('A'+(column-1)%26)) + name
	}
	return name
}
