package parquet

import (
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"slices"

	"github.com/xitongsys/parquet-go/parquet"
	"github.com/xitongsys/parquet-go/reader"

	"nightbook/reader/table"
	"nightbook/schema"
)

// File is a Parquet file being read from its first row to its last.
type File struct {
	r       io.ReaderAt
	size    int64
	limits  *schema.Limits
	meta    *parquet.FileMetaData
	columns []*column
	header  []string

	group int   // row group being read
	left  int64 // of its rows
	row   int64 // rows read so far
	total int64

	packed   []byte // memory of the page read last, as it lies in the file
	unpacked int64  // bytes of pages
	texts    int64  // bytes of text in the run being read, or more; see holdTexts
	counted  bool   // not more
	long     []int  // its rows with a field that is too long
}

const magic = "PAR1"

var errDamaged = errors.New("the Parquet file is damaged")

// damaged is errDamaged with what is wrong. A reader that was stopped is no damage.
func damaged(format string, a ...any) error {
	for _, x := range a {
		if err, ok := x.(error); ok && errors.Is(err, context.Canceled) {
			return err
		}
	}
	return fmt.Errorf("%w: %s", errDamaged, fmt.Sprintf(format, a...))
}

// Open reads the footer of a file of that size in bytes. It refuses files that
// nest or repeat columns, are encrypted, or hold a type that is not read.
func Open(r io.ReaderAt, size int64, limits schema.Limits) (f *File, err error) {
	defer recovered(&err)
	meta, err := readFooter(r, size, &limits)
	if err != nil {
		return nil, err
	}
	f = &File{r: r, size: size, limits: &limits, meta: meta}
	if int64(len(meta.Schema)-1) > limits.Of(schema.Columns) {
		return nil, limits.Exceeded(schema.Columns)
	}
	if f.columns, err = columnsOf(meta.Schema); err != nil {
		return nil, err
	}
	for _, c := range f.columns {
		c.file = f
		f.header = append(f.header, c.name)
	}
	for i, g := range meta.RowGroups {
		if g == nil || g.NumRows < 0 || len(g.Columns) != len(f.columns) {
			return nil, damaged("row group %d does not have the columns of the schema", i+1)
		}
		f.total += g.NumRows
	}
	if f.total != meta.NumRows {
		return nil, damaged("its row groups have %d rows, its footer says %d", f.total, meta.NumRows)
	}
	f.group = -1
	return f, nil
}

// recovered turns a panic of the library over bytes it did not expect into an error.
func recovered(err *error) {
	if x := recover(); x != nil {
		*err = damaged("%v", x)
	}
}

func readFooter(r io.ReaderAt, size int64, limits *schema.Limits) (*parquet.FileMetaData, error) {
	var tail [8]byte
	if size < int64(len(magic)+len(tail)) {
		return nil, fmt.Errorf("not a Parquet file: %w", io.ErrUnexpectedEOF)
	}
	if _, err := r.ReadAt(tail[:], size-8); err != nil {
		return nil, err
	}
	var head [4]byte
	if _, err := r.ReadAt(head[:], 0); err != nil {
		return nil, err
	}
	switch {
	case string(head[:]) == "PARE" || string(tail[4:]) == "PARE":
		return nil, errors.New("encrypted Parquet files are not read: write it without encryption")
	case string(head[:]) != magic:
		return nil, errors.New("not a Parquet file: it does not begin with PAR1")
	case string(tail[4:]) != magic:
		return nil, fmt.Errorf("a Parquet file without its end: %w", io.ErrUnexpectedEOF)
	}
	n := int64(binary.LittleEndian.Uint32(tail[:]))
	if n > size-12 {
		return nil, damaged("its footer of %d bytes does not fit into it", n)
	}
	if n > limits.Of(schema.MetadataBytes) {
		return nil, limits.Exceeded(schema.MetadataBytes)
	}
	footer := make([]byte, n)
	if _, err := r.ReadAt(footer, size-8-n); err != nil {
		return nil, err
	}
	if !wellFormed(footer) {
		return nil, damaged("its footer cannot be read")
	}
	pr := reader.ParquetReader{PFile: newWindow(r, 0, size)}
	if err := pr.ReadFooter(); err != nil {
		return nil, damaged("its footer cannot be read: %v", err)
	}
	return pr.Footer, nil
}

// Header returns the names of the columns, in the order of the schema.
func (f *File) Header() []string { return f.header }

// Schema returns the name and type of each column, for comparison with other files.
func (f *File) Schema() []string {
	var s []string
	for _, c := range f.columns {
		s = append(s, c.String())
	}
	return s
}

// Read returns the share of the rows read so far, from 0 to 1.
func (f *File) Read() float64 {
	if f.total == 0 {
		return 1
	}
	return float64(f.row) / float64(f.total)
}

// Next reads the next rows: up to schema.BatchRows, never across the end of a
// row group. io.EOF is the end.
func (f *File) Next(into *table.Rows) (err error) {
	defer recovered(&err)
	for f.left == 0 {
		if f.group+1 >= len(f.meta.RowGroups) {
			return io.EOF
		}
		f.group++
		if g := f.meta.RowGroups[f.group]; g.NumRows > 0 { // a group without rows has no pages
			if err := f.startGroup(g); err != nil {
				return err
			}
		}
	}
	n := int(min(f.left, schema.BatchRows))
	// Rows may take no bytes at all, as those of nulls do: their cells count instead.
	if err := f.limits.Grown(8*(f.row+int64(n))*int64(len(f.columns)), f.size); err != nil {
		return err
	}
	into.Reset(len(f.columns))
	into.N = n
	f.long, f.texts, f.counted = f.long[:0], 0, false
	for i, c := range f.columns {
		if err := c.read(into, i, n); err != nil {
			return fmt.Errorf("column %s, row group %d: %w", c.name, f.group+1, err)
		}
	}
	f.refuse(into)
	into.Line = slices.Grow(into.Line, n)[:n]
	for i := range into.Line {
		into.Line[i] = f.row + int64(i) + 1
	}
	f.row += int64(n)
	if f.left -= int64(n); f.left > 0 {
		return nil
	}
	for _, c := range f.columns {
		if c.pages.left > 0 {
			return damaged("column %s has more rows in its pages than row group %d", c.name, f.group+1)
		}
	}
	return nil
}

// refuse makes bad rows of those with a field that is too long.
func (f *File) refuse(into *table.Rows) {
	slices.Sort(f.long)
	for _, row := range slices.Compact(f.long) {
		into.Bad = append(into.Bad, table.Bad{Row: row, Reason: f.limits.Exceeded(schema.FieldBytes).Error()})
	}
}

func (f *File) startGroup(g *parquet.RowGroup) error {
	f.left = g.NumRows
	for i, c := range f.columns {
		chunk := g.Columns[i]
		if chunk == nil || chunk.MetaData == nil {
			return damaged("column %s of row group %d has no description", c.name, f.group+1)
		}
		if chunk.FilePath != nil && *chunk.FilePath != "" {
			return errors.New("a Parquet file whose columns lie in other files is not read: write it as one file")
		}
		if err := c.start(f.r, f.size, chunk.MetaData, g.NumRows); err != nil {
			return fmt.Errorf("column %s, row group %d: %w", c.name, f.group+1, err)
		}
	}
	return nil
}
