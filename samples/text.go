package samples

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strconv"

	"nightbook/schema"
)

// dialect is how a house writes its text files: the [csv] part of run.toml.
type dialect struct {
	delimiter  byte
	point      byte // decimal point or comma
	dayFirst   bool // DD/MM/YYYY rather than YYYY-MM-DD
	volPercent bool // 20 rather than 0.20
}

var plain = dialect{delimiter: ',', point: '.'}

// decimal is an exact decimal: n / 10^places. Prices, rates and volatilities
// are held so, because a float that is computed differently on another machine
// would change bytes.
type decimal struct {
	n      int64
	places int
}

// append writes the shortest form: no zeros at the end, no exponent.
func (d decimal) append(b []byte, point byte) []byte {
	n, places := d.n, d.places
	for places > 0 && n%10 == 0 {
		n, places = n/10, places-1
	}
	if places == 0 {
		return strconv.AppendInt(b, n, 10)
	}
	if n < 0 {
		b, n = append(b, '-'), -n
	}
	var digits [20]byte
	s := strconv.AppendInt(digits[:0], n, 10)
	if len(s) <= places {
		b = append(b, '0', point)
		for range places - len(s) {
			b = append(b, '0')
		}
		return append(b, s...)
	}
	b = append(b, s[:len(s)-places]...)
	b = append(b, point)
	return append(b, s[len(s)-places:]...)
}

// table builds a text table in memory, cell by cell. It is for the market
// tables and the small position files; the demo's positions are streamed.
type table struct {
	dialect
	buf   bytes.Buffer
	cells int // in the row so far
}

func newTable(d dialect, header ...string) *table {
	t := &table{dialect: d}
	for _, h := range header {
		t.text(h)
	}
	t.end()
	return t
}

func (t *table) next() {
	if t.cells > 0 {
		t.buf.WriteByte(t.delimiter)
	}
	t.cells++
}

// text writes a cell, quoted where its content would be taken for structure.
func (t *table) text(s string) {
	t.next()
	for i := range len(s) {
		if s[i] == t.delimiter || s[i] == '"' || s[i] == '\n' || s[i] == '\r' {
			t.buf.WriteByte('"')
			for j := range len(s) {
				if s[j] == '"' {
					t.buf.WriteByte('"')
				}
				t.buf.WriteByte(s[j])
			}
			t.buf.WriteByte('"')
			return
		}
	}
	t.buf.WriteString(s)
}

func (t *table) number(d decimal) {
	t.text(string(d.append(nil, t.point)))
}

// vol writes a volatility given in hundredths of a point (2050 is 20.5 %).
func (t *table) vol(bp int64) {
	if t.volPercent {
		t.number(decimal{bp, 2})
		return
	}
	t.number(decimal{bp, 4})
}

func (t *table) date(d schema.Date) { t.text(t.day(d)) }

// day returns a date as the house writes it.
func (d *dialect) day(x schema.Date) string {
	if d.dayFirst {
		return x.Time().Format("02/01/2006")
	}
	return x.String()
}

func (t *table) end() {
	t.buf.WriteByte('\n')
	t.cells = 0
}

// file is one finished file of a snapshot folder.
type file struct {
	name string
	data []byte
}

func (t *table) file(name string) file { return file{name, t.buf.Bytes()} }

func writeFiles(dir string, files []file) error {
	for _, f := range files {
		if err := os.WriteFile(filepath.Join(dir, f.name), f.data, 0o666); err != nil {
			return fmt.Errorf("writing the snapshot: %w", err)
		}
	}
	return nil
}

// emptyDir makes dir if it is missing and refuses it if it holds anything: a
// generator must never mix its files with somebody's own.
func emptyDir(dir string) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return fmt.Errorf("making the snapshot folder: %w", err)
	}
	entries, err := os.ReadDir(dir)
	if err != nil {
		return fmt.Errorf("looking into the snapshot folder: %w", err)
	}
	if len(entries) > 0 {
		return fmt.Errorf("%s is not empty (it holds %s): give a new or an empty folder", dir, entries[0].Name())
	}
	return nil
}
