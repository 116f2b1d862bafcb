package parquet

import (
	"cmp"
	"errors"
	"fmt"
	"io"
	"sync"
	"sync/atomic"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

const (
	// pageRows is how many rows a page holds at most: 128 KiB of doubles.
	pageRows = 16 << 10

	// mostRows is how many rows a row group holds, unless Options say fewer.
	mostRows = 16 * pageRows

	// mostBytes is how many bytes of pages a row group holds, unless Options say
	// fewer: long texts end it early. It is looked at every checkRows rows.
	mostBytes = 128 << 20
	checkRows = 4 << 10
)

// Options are settings of the format; the zero value serves.
type Options struct {
	Workers     int               // goroutines that encode; 0 is one
	Version     string            // of the program
	Compression string            // zstd, snappy, gzip or none; "" is zstd
	Metadata    map[string]string // key-value pairs for the footer
	GroupRows   int               // rows in a row group, rounded up to 4,096; 0 is 262,144
	GroupBytes  int64             // of pages in a row group: see GroupBytes; 0 is 128 MiB
}

// Writer writes one table.
type Writer struct {
	out     counter
	table   schema.Table
	columns []*column
	scratch []*scratch // one a worker
	blocks  *blocks

	rows      int64  // of the row groups that are full
	group     *group // being filled; nil before its first row
	groupRows int64  // in it
	groupHeld int64  // bytes of its pages when it was last looked at
	fullRows  int64  // it is full with so many rows,
	fullBytes int64  // or where more would be more bytes

	writing *group     // nil if none is
	written chan error // of writing
	spare   *group     // to be filled next

	// of the goroutine that writes
	thrift  *serializer
	groups  []*parquet.RowGroup
	indexes []packedIndex // of every column chunk written, in order

	meta   footerInfo
	failed error
}

var errAborted = errors.New("parquet: the table was given up")

// New starts a file.
func New(w io.Writer, t schema.Table, opt Options) (*Writer, error) {
	workers := max(opt.Workers, 1)
	comp, err := newCompressor(opt.Compression, workers)
	if err != nil {
		return nil, err
	}
	p := &Writer{
		out:    counter{w: w},
		table:  t,
		thrift: newSerializer(),
		blocks: newBlocks(len(t.Columns)),
		meta:   footerInfo{version: opt.Version, pairs: opt.Metadata},

		fullRows:  int64(cmp.Or(opt.GroupRows, mostRows)),
		fullBytes: cmp.Or(opt.GroupBytes, mostBytes),
	}
	for _, c := range t.Columns {
		p.columns = append(p.columns, newColumn(c, comp, p.blocks))
	}
	for range workers {
		p.scratch = append(p.scratch, newScratch())
	}
	if _, err := p.out.Write(magic); err != nil {
		return nil, err
	}
	return p, nil
}

// Write appends the rows of the frame.
func (p *Writer) Write(f *schema.Frame) error {
	if len(f.Cols) != len(p.columns) {
		panic("parquet: the frame's columns are not the table's")
	}
	for from := 0; from < f.N && p.failed == nil; {
		if p.group == nil {
			p.group = p.newGroup()
		}
		// Slices end at the same rows whatever the frames, and all columns stand
		// at the same row when the size of the row group is looked at.
		to := min(f.N, from+checkRows-int(p.groupRows%checkRows))
		p.failed = p.add(f, from, to)
		p.groupRows += int64(to - from)
		from = to
		if p.failed == nil && p.groupRows%checkRows == 0 && p.full() {
			p.failed = p.flush()
		}
	}
	return p.failed
}

// Close writes what is held, and the footer.
func (p *Writer) Close() error {
	if p.failed == nil && p.groupRows > 0 {
		p.failed = p.flush()
	}
	if err := p.settle(); p.failed == nil {
		p.failed = err
	}
	if p.failed == nil {
		p.failed = p.writeFooter()
	}
	return p.failed
}

// Abort returns when nothing is written any more, where the table is to be given
// up. It need not be called after Close.
func (p *Writer) Abort() {
	if err := p.settle(); p.failed == nil {
		p.failed = cmp.Or(err, errAborted)
	}
}

// add hands rows [from, to) of the frame to the columns.
func (p *Writer) add(f *schema.Frame, from, to int) error {
	return p.each(func(i int, s *scratch) error {
		c := p.columns[i]
		bad, err := c.add(&f.Cols[i], from, to, s)
		if err != nil {
			row := p.rows + p.groupRows + int64(bad-from) + 1
			return fmt.Errorf("parquet: %s: column %s, row %d: %w", p.table.Name, c.Name, row, err)
		}
		return nil
	})
}

// each calls do for every column, in parallel, and returns the error of the
// first column that has one.
func (p *Writer) each(do func(i int, s *scratch) error) error {
	errs := make([]error, len(p.columns))
	var next atomic.Int64
	work := func(s *scratch) {
		for {
			i := int(next.Add(1)) - 1
			if i >= len(p.columns) {
				return
			}
			errs[i] = do(i, s)
		}
	}
	var wg sync.WaitGroup
	for _, s := range p.scratch[1:] {
		wg.Go(func() { work(s) })
	}
	work(p.scratch[0])
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}

// full is whether the row group is, where as many rows again as were last added
// are taken to be as many bytes.
func (p *Writer) full() bool {
	before := p.groupHeld
	p.groupHeld = p.held()
	return p.groupRows >= p.fullRows || 2*p.groupHeld-before > p.fullBytes
}

// held is how many bytes the pages of the row group at hand take: none where
// there is none, the last one being written.
func (p *Writer) held() int64 {
	var n int64
	if p.group == nil {
		return 0
	}
	for _, c := range p.columns {
		n += c.held()
	}
	return n
}

// counter knows where in the file the next byte goes.
type counter struct {
	w io.Writer
	n int64
}

func (c *counter) Write(b []byte) (int, error) {
	n, err := c.w.Write(b)
	c.n += int64(n)
	return n, err
}
