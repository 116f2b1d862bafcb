package xlsx

import (
	"encoding/xml"
	"io"
	"strconv"
	"strings"
)

// readStrings reads the texts that cells refer to by number.
func (w *Workbook) readStrings(name string) error {
	p, err := w.open(name, true)
	if err != nil {
		return err
	}
	defer p.Close()
	d := xml.NewDecoder(p)
	for {
		t, err := d.Token()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return damaged("%s: %v", name, err)
		}
		if e, ok := t.(xml.StartElement); ok && e.Name.Local == "si" {
			text, err := richText(d)
			if err != nil {
				return damaged("%s: %v", name, err)
			}
			w.strings = append(w.strings, text)
		}
	}
}

// richText reads a text that may be in runs of their own formats, up to the
// end of the element that has just begun. Phonetic runs are left out.
func richText(d *xml.Decoder) (string, error) {
	var b strings.Builder
	depth, phonetic, inText := 1, 0, false
	for depth > 0 {
		t, err := d.Token()
		if err != nil {
			return "", noEOF(err)
		}
		switch e := t.(type) {
		case xml.StartElement:
			depth++
			if e.Name.Local == "rPh" {
				phonetic = depth
			}
			inText = e.Name.Local == "t" && phonetic == 0
		case xml.EndElement:
			if depth == phonetic {
				phonetic = 0
			}
			depth--
			inText = false
		case xml.CharData:
			if inText {
				b.Write(e)
			}
		}
	}
	return unescape(b.String()), nil
}

// noEOF returns err, an early end as such.
func noEOF(err error) error {
	if err == io.EOF {
		return io.ErrUnexpectedEOF
	}
	return err
}

// unescape undoes _xHHHH_, by which a workbook writes characters that XML cannot.
func unescape(s string) string {
	if !strings.Contains(s, "_x") {
		return s
	}
	var b strings.Builder
	for {
		i := strings.Index(s, "_x")
		if i < 0 || i+7 > len(s) {
			b.WriteString(s)
			return b.String()
		}
		b.WriteString(s[:i])
		if c, err := strconv.ParseUint(s[i+2:i+6], 16, 16); err == nil && s[i+6] == '_' && (c < 0xD800 || c > 0xDFFF) {
			b.WriteRune(rune(c))
			s = s[i+7:]
		} else {
			b.WriteString("_x")
			s = s[i+2:]
		}
	}
}
