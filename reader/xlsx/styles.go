package xlsx

import (
	"strings"

	"nightbook/reader/table"
)

// readStyles finds out what each cell style shows a number as.
func (w *Workbook) readStyles(name string) error {
	var s struct {
		Formats []struct {
			ID   int    `xml:"numFmtId,attr"`
			Code string `xml:"formatCode,attr"`
		} `xml:"numFmts>numFmt"`
		Styles []struct {
			Format int `xml:"numFmtId,attr"`
		} `xml:"cellXfs>xf"`
	}
	if err := w.decode(name, &s); err != nil {
		return err
	}
	codes := map[int]string{}
	for _, f := range s.Formats {
		codes[f.ID] = f.Code
	}
	for _, x := range s.Styles {
		kind := kindOfID(x.Format)
		if code, own := codes[x.Format]; own {
			kind = kindOfCode(code)
		}
		w.shown = append(w.shown, kind)
	}
	return nil
}

// kindOfID returns what a built-in number format shows: Date, for dates and
// times, Percent or Number.
// Source: ECMA-376 part 1, section 18.8.30, with the formats 27–36 and 50–58
// that East Asian languages show dates in.
func kindOfID(id int) table.Cell {
	switch {
	case id == 9 || id == 10:
		return table.Percent
	case 14 <= id && id <= 22, 27 <= id && id <= 36, 45 <= id && id <= 47, 50 <= id && id <= 58:
		return table.Date
	}
	return table.Number
}

// kindOfCode returns what a number format shows: Date or Percent, if it has a
// part of a date or a time, or a percent sign, in its first section, outside
// quoted and escaped text, colours and conditions; else Number.
func kindOfCode(code string) table.Cell {
	lower := strings.ToLower(code)
	for i := 0; i < len(lower); i++ {
		switch lower[i] {
		case ';':
			return table.Number
		case '"':
			end := strings.IndexByte(lower[i+1:], '"')
			if end < 0 {
				return table.Number
			}
			i += end + 1
		case '\\', '_', '*':
			i++ // the next character stands for itself, or for space
		case '[':
			end := strings.IndexByte(lower[i:], ']')
			if end < 0 {
				return table.Number
			}
			switch lower[i+1 : i+end] { // elapsed time is a time, a colour is none
			case "h", "hh", "m", "mm", "s", "ss":
				return table.Date
			}
			i += end
		case '%':
			return table.Percent
		case 'y', 'm', 'd', 'h', 's':
			return table.Date
		case 'g': // General, and not the year of an emperor
			if strings.HasPrefix(lower[i:], "general") {
				return table.Number
			}
		}
	}
	return table.Number
}
