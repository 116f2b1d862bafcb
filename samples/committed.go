package samples

import (
	"bytes"
	"compress/gzip"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"nightbook/schema"
)

// snapshot is one of the desks that stand in this folder, as its generator
// makes it. The README beside the files is written by hand.
type snapshot struct {
	name   string
	files  []file
	broken []brokenLine
}

// brokenLine is a position line that is wrong on purpose.
type brokenLine struct {
	id   string
	code schema.RejectCode
}

func committed() []snapshot { return []snapshot{alder(), harbour()} }

// Regenerate writes the generated files of the committed snapshots into dir,
// the samples folder. A compressed file stays as it is while its content is
// the same: compressors may change their bytes from one version to the next.
func Regenerate(dir string) error {
	for _, s := range committed() {
		into := filepath.Join(dir, s.name)
		if err := os.MkdirAll(into, 0o777); err != nil {
			return err
		}
		for _, f := range s.files {
			path := filepath.Join(into, f.name)
			if strings.HasSuffix(f.name, ".gz") {
				old, err := content(path)
				if err == nil && bytes.Equal(old, f.data) {
					continue
				}
				if err != nil && !errors.Is(err, os.ErrNotExist) {
					return err
				}
				f.data = compressed(f.data)
			}
			if err := os.WriteFile(path, f.data, 0o666); err != nil {
				return err
			}
		}
	}
	return nil
}

// content returns the bytes of a file, decompressed.
func content(path string) ([]byte, error) {
	data, err := os.ReadFile(path)
	if err != nil || !strings.HasSuffix(path, ".gz") {
		return data, err
	}
	z, err := gzip.NewReader(bytes.NewReader(data))
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	return io.ReadAll(z)
}

func compressed(data []byte) []byte {
	var b bytes.Buffer
	z, err := gzip.NewWriterLevel(&b, gzip.BestCompression)
	if err != nil {
		panic("samples: no such compression level")
	}
	z.Write(data) // into memory: cannot fail
	z.Close()
	return b.Bytes()
}

// ledger collects the position lines of a committed desk in the order in which
// its file shows them. Cells are in the program's own form (ISO dates, decimal
// points); the dialect is laid over them when the file is written.
type ledger struct {
	prefix  string
	columns []string
	rows    []map[string]string
	broken  []brokenLine
	*random
}

// stray names a cell behind the last column, which makes a row a broken row.
const stray = "+"

// add writes a line from name, value pairs and gives it the next line_id.
func (l *ledger) add(pairs ...string) map[string]string {
	row := map[string]string{"line_id": fmt.Sprintf("%s%04d", l.prefix, len(l.rows)+1)}
	for i := 0; i < len(pairs); i += 2 {
		row[pairs[i]] = pairs[i+1]
	}
	l.rows = append(l.rows, row)
	return row
}

// breaks notes that row is wrong and why.
func (l *ledger) breaks(row map[string]string, code schema.RejectCode) {
	l.broken = append(l.broken, brokenLine{row["line_id"], code})
}

// file writes the ledger; headers maps our column names to the house's.
func (l *ledger) file(d dialect, headers map[string]string) file {
	t := &table{dialect: d}
	for _, c := range l.columns {
		if h, ok := headers[c]; ok {
			c = h
		}
		t.text(c)
	}
	t.end()
	for _, row := range l.rows {
		for _, c := range l.columns {
			t.text(d.cell(c, row[c]))
		}
		if x, ok := row[stray]; ok {
			t.text(x)
		}
		t.end()
	}
	return t.file("positions.csv")
}

// cell turns a cell of our own form into the house's.
func (d *dialect) cell(column, v string) string {
	c := schema.PositionsTable.Column(column)
	switch {
	case c == nil:
		return v // the house's own column
	case c.Type == schema.Float && d.point == ',':
		return strings.Replace(v, ".", ",", 1)
	case c.Type == schema.Day && d.dayFirst && len(v) >= 10 && v[4] == '-':
		return v[8:10] + "/" + v[5:7] + "/" + v[:4] + strings.Replace(v[10:], "T", " ", 1)
	}
	return v
}

// quote is an underlying of a committed desk.
type quote struct {
	name     string
	kind     schema.Choice
	currency string
	price    decimal
	rate     int64 // of its currency, ten-thousandths: for forwards in the generator only
	yield    int64 // ten-thousandths
	flat     int64 // hundredths of a volatility point; 0 is none
	curve    string
	smile    *smile // nil is no surface
	expiries []schema.Date
	clock    string // time of day of the surface's expiries, as T15:00, or ""
}

// forward returns the forward to an expiry in the units of the price.
func (q *quote) forward(days int64) int64 {
	if q.kind == schema.FuturePrice {
		return q.price.n
	}
	return forwardPrice(q.price.n, q.rate, q.yield, days)
}

// step is the distance of listed strikes.
func (q *quote) step() int64 { return niceStep(q.price.n / 50) }

// near returns the listed strike nearest to permille of the price.
func (q *quote) near(permille int64) string {
	s := q.step()
	return q.at((q.price.n*permille/1000 + s/2) / s * s)
}

// at writes n units of the price.
func (q *quote) at(n int64) string { return string(decimal{n, q.price.places}.append(nil, '.')) }

// now writes the price itself.
func (q *quote) now() string { return q.at(q.price.n) }

// surface writes the slices of q into a vols table.
func (q *quote) surface(t *table, asOf schema.Date) {
	for _, x := range q.expiries {
		days := int64(x - asOf)
		for _, d := range smileNodes {
			t.text(q.name)
			t.text(t.day(x) + strings.Replace(q.clock, "T", t.beforeClock(), 1))
			t.number(decimal{q.smile.strike(q.forward(days), days, d), q.price.places})
			t.vol(q.smile.vol(days, d))
			t.end()
		}
	}
}

// beforeClock stands between a date and a time of day.
func (d *dialect) beforeClock() string {
	if d.dayFirst {
		return " "
	}
	return "T"
}

// latin1 encodes text for Windows-1252, whose letters up to U+00FF are those
// of Unicode. The committed desks use no others.
func latin1(data []byte) []byte {
	var b []byte
	for _, r := range string(data) {
		if r > 0xff || r >= 0x80 && r < 0xa0 {
			panic("samples: letter outside Windows-1252")
		}
		b = append(b, byte(r))
	}
	return b
}
