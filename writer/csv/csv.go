package csv

import (
	"cmp"
	"fmt"
	"io"
	"slices"
	"sync"

	"nightbook/schema"
)

// Options are settings of the format; the zero value serves.
type Options struct {
	Workers  int      // goroutines that format; 0 is one. From two on, what is formatted is written beside that
	BareText bool     // put no apostrophe before any text, formula or not
	AsCame   []string // columns whose texts get no apostrophe
}

// partRows is how many rows a goroutine formats at least: below that, starting
// it costs more than it saves.
const partRows = 256

// Writer writes one table. With several workers Write returns when the frame is
// formatted, and leaves the rows to be written while the next frame is: what goes
// wrong then is told by the next Write or by Close.
type Writer struct {
	w       io.Writer
	columns []column
	parts   []*part // one a goroutine
	rows    int64
	failed  error

	writing bool       // the rows of an earlier frame
	written chan error // nil where Write itself writes
}

type column struct {
	schema.Column
	guard bool // against formulas
}

// New starts a table. The header is written at once.
func New(w io.Writer, t schema.Table, opt Options) (*Writer, error) {
	workers := max(opt.Workers, 1)
	c := &Writer{w: w}
	if workers > 1 {
		c.written = make(chan error, 1)
	}
	for _, name := range opt.AsCame {
		if t.Column(name) == nil {
			return nil, fmt.Errorf("csv: table %s has no column %s to leave as it came", t.Name, name)
		}
	}
	var header []byte
	for i, col := range t.Columns {
		if i > 0 {
			header = append(header, ',')
		}
		// The house's own column names come from outside, too.
		header = appendText(header, col.Name, !opt.BareText)
		c.columns = append(c.columns, column{col, !opt.BareText && !slices.Contains(opt.AsCame, col.Name)})
	}
	header = append(header, '\n')
	for range workers {
		c.parts = append(c.parts, newPart(c.columns))
	}
	if _, err := w.Write(header); err != nil {
		return nil, err
	}
	return c, nil
}

// Write appends the rows of the frame.
func (c *Writer) Write(f *schema.Frame) error {
	if c.failed != nil {
		return c.failed
	}
	if len(f.Cols) != len(c.columns) {
		panic("csv: the frame's columns are not the table's")
	}
	n := min(len(c.parts), 1+f.N/partRows)
	var wg sync.WaitGroup
	for p := 1; p < n; p++ {
		wg.Go(func() { c.parts[p].format(f, f.N*p/n, f.N*(p+1)/n) })
	}
	c.parts[0].format(f, 0, f.N/n)
	wg.Wait()
	if c.failed = c.settle(); c.failed != nil {
		return c.failed
	}
	for i, p := range c.parts[:n] {
		if p.out, p.ready = p.ready, p.out; c.written == nil {
			p.out = p.ready // one buffer serves
		}
		if p.bad.found {
			c.failed = cmp.Or(c.writeRows(i), c.refusal(&f.Cols[p.bad.column], p.bad.row, p.bad.column))
			return c.failed
		}
	}
	c.rows += int64(f.N)
	if c.written == nil {
		c.failed = c.writeRows(n)
		return c.failed
	}
	c.writing = true
	go func() { c.written <- c.writeRows(n) }()
	return nil
}

// writeRows writes what the first n parts have ready.
func (c *Writer) writeRows(n int) error {
	for _, p := range c.parts[:n] {
		if _, err := c.w.Write(p.ready); err != nil {
			return err
		}
	}
	return nil
}

// settle waits until no rows are being written.
func (c *Writer) settle() error {
	if !c.writing {
		return nil
	}
	c.writing = false
	return <-c.written
}

// Close ends the table.
func (c *Writer) Close() error {
	if err := c.settle(); c.failed == nil {
		c.failed = err
	}
	return c.failed
}

// Abort returns when nothing is written any more, where the table is to be given
// up. It need not be called after Close.
func (c *Writer) Abort() { c.settle() }

// refusal says what is wrong with a value that cannot be written.
func (c *Writer) refusal(v *schema.Vector, row, i int) error {
	what := "null in a column that is never null"
	if v.Kind == schema.KindFloats && v.Floats[row] == v.Floats[row] {
		what = "not a finite number"
	}
	return fmt.Errorf("csv: column %s, row %d: %s", c.columns[i].Name, c.rows+int64(row)+1, what)
}
