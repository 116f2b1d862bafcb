package samples

import (
	"bytes"
	"compress/gzip"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"nightbook/schema"
)

// snapshot is one of the desks that stand in this folder, as its generator
// makes it. The README beside the files is written by hand.
type snapshot struct {
	name   string
	files  []file
	broken []brokenLine
	// thousands has the README show its figures in thousands: as far as they
	// hold where a numerical method gives them.
	thousands bool
}

// brokenLine is a position line that is wrong on purpose.
type brokenLine struct {
	id   string
	code schema.RejectCode
}

func committed() []snapshot { return []snapshot{alder(), harbour(), linden()} }

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

// option adds an option line.
func (l *ledger) option(book string, q *quote, quantity int64, multiplier, optionType, strike, expiry, strategy string) map[string]string {
	return l.add("book", book, "underlying", q.name, "instrument", "option", "quantity", strconv.FormatInt(quantity, 10),
		"multiplier", multiplier, "option_type", optionType, "strike", strike, "expiry", expiry, "strategy", strategy)
}

// linear adds a stock, future, forward or cash line.
func (l *ledger) linear(book, underlying, instrument string, quantity int64, more ...string) map[string]string {
	return l.add(append([]string{"book", book, "underlying", underlying, "instrument", instrument,
		"quantity", strconv.FormatInt(quantity, 10), "strategy", "hedge"}, more...)...)
}

// breaks notes that row is wrong and why.
func (l *ledger) breaks(row map[string]string, code schema.RejectCode) {
	l.broken = append(l.broken, brokenLine{row["line_id"], code})
}

// scatter moves the broken lines, which are the last, among the good ones, one
// behind every so many.
func (l *ledger) scatter(every int) {
	n := len(l.rows) - len(l.broken)
	bad := l.rows[n:]
	good := l.rows[:n:n]
	l.rows = nil
	for i, row := range good {
		l.rows = append(l.rows, row)
		if i%every == every-1 && len(bad) > 0 {
			l.rows, bad = append(l.rows, bad[0]), bad[1:]
		}
	}
	l.rows = append(l.rows, bad...)
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
