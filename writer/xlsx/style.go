package xlsx

import (
	"fmt"

	"github.com/xuri/excelize/v2"
)

// A sober look: dark ink, one grey for headers, thin lines.
const (
	fontName   = "Calibri"
	fontSize   = 10
	inkColor   = "1E2733"
	mutedColor = "6B7480"
	headColor  = "E9EBEE"
	lineColor  = "A9B0B8"
	goodColor  = "2E6B4A"
	badColor   = "9C2B2B"
)

// Color of a text.
type Color uint8

// The colours.
const (
	Ink Color = iota
	Muted
	Good
	Bad
)

var colors = [...]string{Ink: inkColor, Muted: mutedColor, Good: goodColor, Bad: badColor}

// Style is the look of a cell; the zero value is that of an ordinary one.
type Style struct {
	Format string // number format; "" is General
	Size   float64
	Bold   bool
	Color  Color
	Head   bool // the grey of headers, a line below
	Total  bool // a line above
	Right  bool
	Center bool
	Wrap   bool
	Indent int
}

// Style returns the number of a style for the cells of the book.
func (b *Book) Style(s Style) (int, error) {
	if id, ok := b.styles[s]; ok {
		return id, nil
	}
	size := s.Size
	if size == 0 {
		size = fontSize
	}
	e := &excelize.Style{
		Font:      &excelize.Font{Family: fontName, Size: size, Bold: s.Bold, Color: colors[s.Color]},
		Alignment: &excelize.Alignment{Vertical: "center", WrapText: s.Wrap, Indent: s.Indent},
	}
	switch {
	case s.Right:
		e.Alignment.Horizontal = "right"
	case s.Center:
		e.Alignment.Horizontal = "center"
	case s.Indent > 0:
		e.Alignment.Horizontal = "left"
	}
	if s.Wrap {
		e.Alignment.Vertical = "top"
	}
	if s.Format != "" {
		e.CustomNumFmt = &s.Format
	}
	if s.Head {
		e.Fill = excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{headColor}}
		e.Border = append(e.Border, excelize.Border{Type: "bottom", Color: lineColor, Style: 1})
	}
	if s.Total {
		e.Border = append(e.Border, excelize.Border{Type: "top", Color: lineColor, Style: 1})
	}
	id, err := b.file.NewStyle(e)
	if err != nil {
		return 0, fmt.Errorf("workbook style: %w", err)
	}
	b.styles[s] = id
	return id, nil
}
