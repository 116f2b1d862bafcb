package xlsx

import "strings"

// readStyles finds out which cell styles show their number as a date.
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
		code, own := codes[x.Format]
		w.dates = append(w.dates, own && isDateCode(code) || !own && isDateID(x.Format))
	}
	return nil
}

// isDateID reports whether a built-in number format shows dates or times.
// Source: ECMA-376 part 1, section 18.8.30, with the formats 27–36 and 50–58
// that East Asian languages show dates in.
func isDateID(id int) bool {
	return 14 <= id && id <= 22 || 27 <= id && id <= 36 || 45 <= id && id <= 47 || 50 <= id && id <= 58
}

// isDateCode reports whether a number format has a part of a date or a time in
// its first section, outside quoted and escaped text, colours and conditions.
func isDateCode(code string) bool {
	lower := strings.ToLower(code)
	for i := 0; i < len(lower); i++ {
		switch lower[i] {
		case ';':
			return false
		case '"':
			end := strings.IndexByte(lower[i+1:], '"')
			if end < 0 {
				return false
			}
			i += end + 1
		case '\\', '_', '*':
			i++ // the next character stands for itself, or for space
		case '[':
			end := strings.IndexByte(lower[i:], ']')
			if end < 0 {
				return false
			}
			switch lower[i+1 : i+end] { // elapsed time is a time, a colour is none
			case "h", "hh", "m", "mm", "s", "ss":
				return true
			}
			i += end
		case 'y', 'm', 'd', 'h', 's':
			return true
		case 'g': // General, and not the year of an emperor
			if strings.HasPrefix(lower[i:], "general") {
				return false
			}
		}
	}
	return false
}
